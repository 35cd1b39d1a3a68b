"""`vibsym peaks`: the bands of a measured spectrum, as a band list."""

import click

from vibsym.cli.delivery import deliver
from vibsym.report import FORMATS


@click.command("peaks")
@click.argument("spectrum", metavar="SPECTRUM")
@click.option("--spectrum", "kind", type=click.Choice(("IR", "Raman")), required=True, help="What was measured.")
@click.option("--prominence", type=float, metavar="HEIGHT",
              help="Least rise above the higher saddle, in absorbance or intensity [the larger of 8 times the noise "
                   "and 1 % of the span].")
@click.option("--distance", type=float, default=4.0, show_default=True, metavar="CM-1",
              help="Least distance from a stronger band.")
@click.option("--baseline", type=click.Choice(("rubber", "none")), default="rubber", show_default=True,
              help="What heights are measured from: the lower convex hull, or zero.")
@click.option("--unit", type=click.Choice(("cm-1", "nm", "um")), help="Unit of the abscissa, where the file is silent.")
@click.option("--ordinate", type=click.Choice(("absorbance", "transmittance", "intensity")),
              help="What the second column is, where the file is silent.")
@click.option("--laser", type=float, metavar="NM", help="Laser line, for Raman spectra over wavelengths.")
@click.option("--block", type=int, metavar="N", help="Which spectrum of a JCAMP-DX file that holds several.")
@click.option("--between", type=float, nargs=2, metavar="LOW HIGH", help="Use only this region, in cm-1.")
@click.option("--format", "form", type=click.Choice(FORMATS), default="csv", show_default=True,
              help="How the result is set; csv is a band list.")
@click.option("--output", metavar="FILE", help="Write to this file what stdout would hold.")
def command(spectrum, kind, prominence, distance, baseline, unit, ordinate, laser, block, between, form, output):
    """Pick the bands of a measured SPECTRUM and write them as a band list.

    A SPECTRUM is two columns of text or JCAMP-DX; - is standard input. Correct the list, then give it to --bands.

    \b
    Example:
      vibsym peaks try-it/flask-infrared.csv --spectrum IR --output bands.csv
    """
    from vibsym.evidence.peaks import pick_peaks
    from vibsym.evidence.spectrum import read_spectrum
    from vibsym.report import peaks as view

    measured = read_spectrum(spectrum, kind, unit=unit, ordinate=ordinate, laser=laser, block=block)
    deliver([pick_peaks(measured, prominence, distance, baseline, between)], view, form, output)
