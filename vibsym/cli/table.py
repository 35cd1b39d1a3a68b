"""`vibsym table`: the character table of a point group."""

import click

from vibsym.cli import options
from vibsym.cli.delivery import deliver


@click.command("table")
@click.argument("groups", nargs=-1, required=True, metavar="GROUP...")
@options.output_options
def command(groups, form, output):
    """Show the character table of each GROUP with exact characters.

    Cn, Cnv, Cnh, Dn, Dnh, Dnd, S2n for any n, and Cs, Ci, T, Td, Th, O, Oh, I, Ih, Cinfv, Dinfh, Kh.

    \b
    Examples:
      vibsym table C2v
      vibsym table D5h --format markdown
    """
    from vibsym.groups.character_table import character_table
    from vibsym.report import character_table as view

    deliver([character_table(symbol) for symbol in groups], view, form, output)
