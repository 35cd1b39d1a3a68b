"""`vibsym screen`: which of the proposed structures the observed bands allow."""

import click

from vibsym.cli import options
from vibsym.cli.bands import LONG_WORK, bands_options
from vibsym.cli.progress import progress
from vibsym.cli.reading import finish, read_all_structures


@click.command("screen")
@options.structures_argument
@bands_options
@options.oscillator_options
@click.option("--mixture", is_flag=True, help="Also let every two structures share the lines.")
@click.option("--every-rung", is_flag=True, help="Screen each structure in every group of its ladder.")
@options.output_options
@options.symmetry_options
def command(structures, bands, infrared, raman, between, window, allow, light, mixture, form, output, frame, bonds,
            no_bonds, average_masses, **proposal):
    """Tell which STRUCTURE the observed infrared and Raman bands allow, and what speaks against the others.

    With --oscillators the comparison is made in that region, with --local in the group of what the oscillators see.
    Fewer bands than predicted never exclude a structure; forbidden bands that are seen do.

    \b
    Examples:
      vibsym screen try-it/tube-clf3-*.xyz --bands try-it/tube-clf3-bands.csv
      vibsym screen try-it/flask-cis.xyz try-it/flask-trans.xyz --bands try-it/flask-bands.csv --oscillators C-O --local
    """
    from vibsym.evidence.bandlist import read_bands
    from vibsym.evidence.proposals import screen
    from vibsym.evidence.screening import ScreenOptions
    from vibsym.evidence.whole_molecule import Proposal
    from vibsym.report import screening as view

    observed = read_bands(bands, infrared, raman, between=between, light=light)
    read = read_all_structures(structures, frame, bonds, no_bonds, average_masses)
    with progress("candidates", LONG_WORK) as callback:
        result = screen(read, observed, Proposal(**proposal), ScreenOptions(window, allow, mixture), callback)
    finish([result], 0, view, form, output)
