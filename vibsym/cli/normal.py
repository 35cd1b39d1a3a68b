"""`vibsym normal`: harmonic wavenumbers and normal modes, from a force field or a Hessian computed elsewhere."""

import click

from vibsym.cli import options
from vibsym.cli.pictures import picture_options, save_picture
from vibsym.cli.reading import finish


@click.command("normal")
@options.structure_argument
@click.option("--force-constants", "constants", metavar="FILE",
              help="TOML file of force constants that replace or add to the tabulated ones; units stated in it.")
@click.option("--hessian", metavar="FILE", help="Cartesian Hessian computed elsewhere, 3N × 3N, as text or .npy.")
@click.option("--hessian-unit", "unit", default="hartree/bohr2", show_default=True, metavar="UNIT",
              help="hartree/bohr2, N/m, mdyn/A, eV/A2, kcal/mol/A2 or kJ/mol/A2.")
@click.option("--mass-weighted", is_flag=True, help="The Hessian is already divided by √(mi mj), masses in u.")
@click.option("--refine", multiple=True, metavar="ASSIGNMENT",
              help="Adjust the constants to an assignment CSV; of an isotopologue too, whose head names its structure "
                   "file.")
@picture_options("ν1")
@options.output_options
@options.symmetry_options
def command(structure, constants, hessian, unit, mass_weighted, refine, picture, show, form, output, tolerance,
            as_group, axes, **reading):
    """Tell the normal modes of STRUCTURE: species, wavenumber, energy distribution, activity.

    Without further options the constants are those of the tabulated valence force field.

    \b
    Examples:
      vibsym normal try-it/cylinder-bf3.xyz
      vibsym normal try-it/cylinder-bf3.xyz --format json
    """
    from vibsym.cli.assigned import symmetry_of_file
    from vibsym.report import normal as view
    from vibsym.vibrations.analysis import analyse, with_refinement

    symmetry = symmetry_of_file(structure, tolerance, as_group, axes, reading)
    result = analyse(symmetry, constants=constants, hessian=hessian, unit=unit, mass_weighted=mass_weighted)
    if refine:
        molecules = _molecules(structure, symmetry, refine, tolerance, as_group, axes, reading)
        result = with_refinement(result, molecules)
    save_picture(picture, show, [symmetry], modes=result.modes)
    finish([result], 0, view, form, output)


def _molecules(path, symmetry, assignments, tolerance, as_group, axes, reading):
    """Return (symmetry, assigned modes) of every assignment; its head may name the file of an isotopologue."""
    from vibsym.cli.assigned import check_group, symmetry_of_file
    from vibsym.evidence.assignment_file import read_assignment

    found = []
    for name in assignments:
        file = read_assignment(name)
        other = _isotopologue(path, name, file.structure)
        own = symmetry if other is None else symmetry_of_file(other, tolerance, as_group, axes, reading)
        check_group(file, own.group)
        found.append((own, file.modes(own.group)))
    return found


def _isotopologue(path: str, assignment: str, named: str) -> str | None:
    """Return the structure file that an assignment names, None where it is the one analysed (or no name is given)."""
    from pathlib import Path

    from vibsym.errors import VibsymError

    if named in ("", "-", path) or path == "-":
        return None
    for other in (Path(named), Path(assignment).parent / named):
        if other.is_file():
            return None if Path(path).is_file() and other.samefile(path) else str(other)
    if Path(named).name == Path(path).name:
        return None
    raise VibsymError(f"{assignment}: its head names the structure {named}, which is not there; correct '# structure:'")
