"""`vibsym expect`: the bands that infrared and Raman spectra of a structure can show."""

import click

from vibsym.cli import options
from vibsym.cli.pictures import picture_options, save_picture, strip_option
from vibsym.cli.reading import finish, results_of


@click.command("expect")
@options.structures_argument
@options.output_options
@options.symmetry_options
@options.working_option
@options.light_option
@options.oscillator_options
@strip_option
@picture_options("structure")
@click.option("--gas", is_flag=True, help="Add rotor, rotational constants and band contours of the gas.")
@click.option("--temperature", type=float, metavar="K", help="Temperature of the gas [296].")
@click.option("--zeta", metavar="T2=0.05",
              help="Coriolis constant of degenerate species: a number, one a species, or normal (estimated).")
def command(structures, form, output, tolerance, as_group, axes, working, light, oscillators, local, local_tolerance,
            distinguish, gas, temperature, zeta, strip, picture, show, **reading):
    """Tell which infrared and Raman bands each STRUCTURE can show.

    A STRUCTURE is an XYZ or MDL mol file, or - for standard input.

    \b
    Examples:
      vibsym samples try-it
      vibsym expect try-it/cylinder-bf3.xyz
      vibsym expect try-it/cylinder-bf3.xyz --working
      vibsym expect try-it/*.xyz --format csv --output bands.csv
    """
    from vibsym.report import expectation as view
    from vibsym.spectra.expectation import expect

    if zeta is not None:
        from vibsym.spectra.contours import parse_zeta

        zeta = parse_zeta(zeta)
    chosen = {"as_group": as_group, "axes": axes, "oscillators": oscillators, "local": local,
              "local_tolerance": local_tolerance, "distinguish": distinguish, "gas": gas, "temperature": temperature,
              "zeta": zeta}
    results, failures = results_of(structures, lambda structure: expect(structure, tolerance, **chosen), **reading)
    save_picture(picture, show, (result.symmetry for result in results))
    finish(results, failures, view, form, output, working=working, light=light, strip=strip)
