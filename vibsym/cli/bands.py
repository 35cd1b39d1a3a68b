"""Options of the commands that compare with observed bands."""

import click

from vibsym.cli.options import light_option
from vibsym.errors import VibsymError

LONG_WORK = 200  # candidates; from here on a terminal shows a progress bar


def lines_options(command):
    """Add what tells which lines were observed: --bands, --ir, --raman, --between, --window."""
    for option in (
        click.option("--window", type=float, default=5.0, show_default=True, metavar="CM-1",
                     help="Largest difference of an infrared and a Raman line that coincide."),
        click.option("--between", type=float, nargs=2, metavar="LOW HIGH", help="Use only the lines of this region."),
        click.option("--raman", metavar="FILE",
                     help="Raman lines without a spectrum column, or a measured Raman spectrum (two "
                          "columns, or JCAMP-DX) whose peaks are taken."),
        click.option("--ir", "infrared", metavar="FILE",
                     help="Infrared lines without a spectrum column, or a measured infrared spectrum."),
        click.option("--bands", metavar="FILE", help="Observed lines: CSV with wavenumber, spectrum, strength, "
                                                    "polarisation, uncertainty, together, note."),
    ):
        command = option(command)
    return command


def bands_options(command):
    """Add the observed lines and how structures are weighed against them: `lines_options`, --allow and --light."""
    for option in (
        light_option,
        click.option("--allow", type=float, metavar="WEIGHT",
                     help="Total weight of excuses still called strained, not excluded [the larger of 1 and 5 % of the "
                          "bands]."),
        lines_options,
    ):
        command = option(command)
    return command


def refuse_without_bands(**given) -> None:
    """Refuse options that shape a comparison where nothing was observed."""
    for name, value in given.items():
        if value:
            raise VibsymError(f"--{name} needs observed bands: --bands FILE, or --ir FILE and --raman FILE")
