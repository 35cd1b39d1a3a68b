"""`vibsym descend`: what the species of a group become in a subgroup."""

import click

from vibsym.cli import options
from vibsym.cli.assigned import group_of


@click.command("descend")
@click.argument("source", metavar="FROM")
@click.argument("to", required=False, metavar="[TO]")
@options.output_options
@options.symmetry_options
def command(source, to, form, output, tolerance, as_group, axes, **reading):
    """Show what the species of FROM, a group or a structure, become in its subgroup TO.

    Every inequivalent embedding has its own table, named by what is kept. Without TO all classes of subgroups are
    listed.

    \b
    Examples:
      vibsym descend D4h C2v
      vibsym descend Oh
      vibsym descend try-it/cylinder-bf3.xyz C2v
    """
    from vibsym.cli.delivery import deliver
    from vibsym.report import descent as view
    from vibsym.spectra.descent import descend

    group, symmetry = group_of(source, tolerance, as_group, axes, reading)
    deliver([descend(group if symmetry is None else symmetry, to)], view, form, output)
