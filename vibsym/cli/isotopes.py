"""`vibsym isotopes`: isotopic substitution, the product rule, isotopologues and carbonyl satellites."""

import click

from vibsym.cli import options
from vibsym.cli.assigned import check_group, one_structure


@click.command("isotopes")
@options.structure_argument
@click.option("--replace", metavar="1=D,2=D", help="Isotopes: 1=D for an atom (from 1), H=D for all of a kind.")
@click.option("--enumerate", "every", is_flag=True,
              help="List every distinct isotopologue with none, some or all of the replacements made.")
@click.option("--at-most", type=int, metavar="N", help="With --enumerate: replace no more than N atoms.")
@click.option("--satellites", is_flag=True, help="Carbon-13 satellites of the carbonyls at natural abundance.")
@click.option("--local", is_flag=True, help="With --satellites: in the local group of the carbonyls.")
@click.option("--local-tolerance", type=float, default=0.3, show_default=True, metavar="Å",
              help="Tolerance of the local group.")
@options.modes_option
@options.assignment_option
@options.doublet_option
@options.output_options
@options.tolerance_option
@options.axes_option
@options.reading_options
def command(structure, replace, every, at_most, satellites, local, local_tolerance, modes, assignment, doublets, form,
            output, tolerance, axes, **reading):
    """Compare a STRUCTURE with its isotopologue: group, activity, and the product rule.

    With two --assignment files, first that of STRUCTURE, then that of the isotopologue, observed products stand
    beside theory. With --satellites, --mode A1g=2117 once for each C-O stretch gives the positions.

    \b
    Examples:
      vibsym isotopes try-it/cylinder-bf3.xyz --replace 1=10B
      vibsym isotopes try-it/rinse-dichloromethane.mol --replace H=D
      vibsym isotopes try-it/rinse-dichloromethane.mol --replace H=D --enumerate
    """
    from vibsym.cli.delivery import deliver
    from vibsym.report import isotopes as view

    molecule = one_structure(structure, reading)
    _check(replace, every, at_most, satellites, local, modes, assignment, doublets)
    if satellites:
        deliver([_satellites(molecule, modes, local_tolerance if local else tolerance, local)], view, form, output)
        return
    if every:
        from vibsym.spectra.isotopologues import list_isotopologues

        deliver([list_isotopologues(molecule, replace, tolerance, at_most)], view, form, output)
        return
    deliver([_effect(molecule, replace, tolerance, axes, assignment, doublets)], view, form, output)


def _check(replace, every, at_most, satellites, local, modes, assignment, doublets):
    """Refuse options that would do nothing."""
    from vibsym.errors import VibsymError

    if satellites and (replace or assignment or every or doublets):
        raise VibsymError("--satellites goes with --mode only; leave the other options out")
    if local and not satellites:
        raise VibsymError("--local belongs to --satellites")
    if not (satellites or replace):
        raise VibsymError("nothing to replace; write --replace 1=D,2=D, --replace H=D, or --satellites")
    if modes and not satellites:
        raise VibsymError("--mode belongs to --satellites; observed products need two --assignment files")
    if at_most is not None and not every:
        raise VibsymError("--at-most belongs to --enumerate")
    if every and (assignment or doublets):
        raise VibsymError("--enumerate lists isotopologues; leave --assignment and --doublet out")
    if doublets and not assignment:
        raise VibsymError("--doublet belongs to observed products; give two --assignment files")


def _effect(molecule, replace, tolerance, axes, assignment, doublets):
    from vibsym.errors import VibsymError
    from vibsym.evidence.assignment_file import read_assignment
    from vibsym.spectra.fermi import parse_doublet
    from vibsym.spectra.isotopes import isotope_effect
    from vibsym.structures.isotopes import substitution

    if len(assignment) not in (0, 2):
        raise VibsymError("give --assignment twice: that of the structure first, then that of the isotopologue")
    pair = substitution(molecule, replace, tolerance, axes)
    lines = []
    for path, symmetry in zip(assignment, (pair.original, pair.substituted)):
        file = read_assignment(path)
        check_group(file, symmetry.group)
        lines.append(file.modes(symmetry.group))
    return isotope_effect(pair, *(lines or ((), ())), [parse_doublet(text) for text in doublets])


def _satellites(molecule, modes, tolerance, local):
    from vibsym.spectra.modes import parse_modes
    from vibsym.spectra.satellites import local_satellites, satellites

    make = local_satellites if local else satellites
    found = make(molecule, None, tolerance)
    if not modes:
        return found
    group = found.molecules[0].symmetry.group
    return make(molecule, {mode.species: mode.wavenumber for mode in parse_modes(modes, group)}, tolerance)
