"""`vibsym assign`: which observed band is which fundamental."""

import click

from vibsym.cli import options
from vibsym.cli.bands import lines_options
from vibsym.cli.pictures import picture_options, save_picture, strip_option
from vibsym.cli.reading import finish


@click.command("assign")
@options.structure_argument
@lines_options
@click.option("--pin", "pins", multiple=True, metavar="ν4=1306",
              help="Fix a line at a fundamental or a species (T2=1306); the rest adapts. Repeatable.")
@click.option("--force-constants", "constants", metavar="FILE", help="TOML file of force constants for the estimates.")
@strip_option
@picture_options("sticks")
@options.light_option
@options.output_options
@options.symmetry_options
def command(structure, bands, infrared, raman, between, window, pins, constants, strip, picture, show, light, form,
            output, tolerance, as_group, axes, **reading):
    """Tell which observed line is which fundamental of STRUCTURE, and how firm each is.

    \b
    Example:
      vibsym assign try-it/tube-clf3-t.xyz --bands try-it/tube-clf3-bands.csv
    """
    from vibsym.cli.assigned import symmetry_of_file
    from vibsym.evidence.assignment import assign
    from vibsym.evidence.bandlist import read_bands
    from vibsym.report import assignment as view
    from vibsym.vibrations.analysis import estimates_with

    observed = read_bands(bands, infrared, raman, between=between, light=light)
    symmetry = symmetry_of_file(structure, tolerance, as_group, axes, reading)
    result = assign(symmetry, observed, window=window, pins=pins, estimates=estimates_with(symmetry, constants))
    save_picture(picture, show, [symmetry], modes=result.estimates.modes, assignment=result)
    finish([result], 0, view, form, output, strip=strip)
