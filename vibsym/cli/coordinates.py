"""`vibsym coordinates`: internal coordinates and their symmetry coordinates with exact coefficients."""

import click

from vibsym.cli import options
from vibsym.cli.pictures import picture_options, save_picture
from vibsym.cli.reading import finish, results_of


@click.command("coordinates")
@options.structures_argument
@options.output_options
@options.symmetry_options
@options.select_option
@options.atoms_option
@picture_options("structure")
def command(structures, form, output, tolerance, as_group, axes, select, atoms, picture, show, **reading):
    """Show the symmetry coordinates of each STRUCTURE.

    Stretches, bends, wags and torsions from the bonds, set by set: the species they carry, the combinations with exact
    coefficients, which of them are redundant and why, and whether they describe all vibrations.

    \b
    Examples:
      vibsym samples try-it
      vibsym coordinates try-it/cylinder-bf3.xyz
      vibsym coordinates try-it/soot-c60.xyz --select "stretch C-C" --format csv
    """
    from vibsym.report import coordinates as view
    from vibsym.spectra.expectation import expect
    from vibsym.structures.atom_list import parse_atoms
    from vibsym.vibrations.symmetry_coordinates import symmetry_coordinates

    def make(structure):
        symmetry = expect(structure, tolerance, as_group=as_group, axes=axes).symmetry
        return symmetry_coordinates(symmetry, select, parse_atoms(atoms, len(structure)))

    results, failures = results_of(structures, make, **reading)
    save_picture(picture, show, (result.symmetry for result in results), coordinates=results[0] if results else None)
    finish(results, failures, view, form, output)
