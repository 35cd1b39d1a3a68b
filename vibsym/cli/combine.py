"""`vibsym combine`: overtones, combinations and differences of assigned fundamentals."""

import click

from vibsym.cli import options
from vibsym.cli.assigned import molecule_of


@click.command("combine")
@click.argument("target", metavar="STRUCTURE|GROUP")
@options.modes_option
@options.assignment_option
@click.option("--quanta", type=int, default=2, show_default=True, help="Up to this number of quanta.")
@options.temperature_option
@click.option("--resonance", type=float, default=50.0, show_default=True, metavar="CM-1",
              help="How near a fundamental and a combination of a common species count as a Fermi pair.")
@options.doublet_option
@click.option("--bands", metavar="FILE", help="Lines to explain: a band list with a spectrum column.")
@click.option("--ir", "infrared", metavar="FILE", help="Infrared lines to explain.")
@click.option("--raman", metavar="FILE", help="Raman lines to explain.")
@click.option("--match", type=float, default=10.0, show_default=True, metavar="CM-1",
              help="How far a line may be from a combination that explains it.")
@click.option("--window", type=float, default=5.0, show_default=True, metavar="CM-1",
              help="How far a line may be from the fundamental that it is.")
@options.output_options
@options.symmetry_options
def command(target, modes, assignment, quanta, temperature, resonance, doublets, bands, infrared, raman, match, window,
            form, output, tolerance, as_group, axes, **reading):
    """Show overtones, sums and differences of the fundamentals of a STRUCTURE or of a GROUP.

    Species, activity and harmonic position of each, what may be in Fermi resonance, hot bands with the share of
    molecules in the lower level; lines left over are matched.

    \b
    Examples:
      vibsym combine Td --mode v1:A1=2917 --mode v2:E=1534 --mode v3:T2=3019 --mode v4:T2=1306
      vibsym combine try-it/cylinder-n2o.xyz --mode v1:Sigma+=2224 --mode v2:Pi=589 --mode v3:Sigma+=1285
    """
    from vibsym.cli.delivery import deliver
    from vibsym.evidence.leftovers import Combined, explain_lines
    from vibsym.report import overtones as view
    from vibsym.spectra.combinations import combine
    from vibsym.spectra.fermi import parse_doublet

    molecule = molecule_of(target, modes, assignment, tolerance, as_group, axes, reading)
    result = combine(molecule.group, molecule.modes, quanta, temperature=temperature, resonance=resonance,
                     doublets=[parse_doublet(text) for text in doublets])
    lines = molecule.lines(bands, infrared, raman)
    deliver([Combined(result, explain_lines(lines, result, match, window), molecule.symmetry)], view, form, output)
