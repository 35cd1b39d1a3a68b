"""`vibsym report`: structures, bands and what follows from them on one page for a browser."""

import click

from vibsym.cli import options
from vibsym.cli.bands import bands_options, refuse_without_bands
from vibsym.cli.reading import read_all_structures


@click.command("report")
@options.structures_argument
@bands_options
@options.oscillator_options
@options.symmetry_options
@click.option("--triple", type=click.Choice(("T", "F")), default="T", show_default=True,
              help="Letter of triply degenerate species in what is written.")
@click.option("--output", required=True, metavar="FILE", help="The HTML file to write.")
def command(structures, bands, infrared, raman, between, window, allow, light, triple, output, frame, bonds,
            no_bonds, average_masses, **proposal):
    """Make one self-contained HTML page of each STRUCTURE and, if given, the observed bands.

    The structure turns with its elements of symmetry, modes move, and the bands stand against what they are assigned
    to. The page needs no network.

    \b
    Examples:
      vibsym report try-it/soot-c60.xyz --output c60.html
      vibsym report try-it/tube-clf3-*.xyz --bands try-it/tube-clf3-bands.csv --output tube.html
    """
    import shlex
    import sys

    from vibsym.evidence.bandlist import read_bands
    from vibsym.evidence.screening import ScreenOptions
    from vibsym.evidence.whole_molecule import Proposal
    from vibsym.files import write_text_atomically
    from vibsym.report.collection import collect
    from vibsym.report.html.page import report_page

    measured = bands or infrared or raman
    if not measured:
        refuse_without_bands(between=between, allow=allow)
    observed = read_bands(bands, infrared, raman, between=between, light=light) if measured else None
    read = read_all_structures(structures, frame, bonds, no_bonds, average_masses)
    told = "vibsym " + shlex.join(sys.argv[1:]) if sys.argv[1:2] == ["report"] else "vibsym report"
    page = report_page(collect(read, observed, Proposal(**proposal), ScreenOptions(window, allow), told), triple)
    write_text_atomically(output, page)
