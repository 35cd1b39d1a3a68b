"""A molecule with its assigned fundamentals, from the command line: structure or group, --mode and --assignment."""

from collections import Counter
from dataclasses import dataclass

from vibsym.errors import VibsymError


@dataclass(frozen=True, eq=False)
class Molecule:
    """A group, the symmetry where a structure was given, the fundamentals, and the lines left over."""

    group: object
    symmetry: object
    modes: tuple
    leftovers: tuple

    def lines(self, bands, infrared, raman) -> tuple:
        """Return the lines to explain: those of the files and those the assignment left over."""
        if not (bands or infrared or raman):
            return self.leftovers
        from vibsym.evidence.bandlist import read_bands

        return self.leftovers + read_bands(bands, infrared, raman).lines


def molecule_of(target: str, modes, assignment, tolerance, as_group, axes, reading) -> Molecule:
    """Return the molecule that a command is about."""
    from vibsym.spectra.modes import named_modes, parse_modes

    group, symmetry = group_of(target, tolerance, as_group, axes, reading)
    found, leftovers = list(parse_modes(modes, group)), ()
    for path in assignment:
        from vibsym.evidence.assignment_file import read_assignment

        file = read_assignment(path)
        check_group(file, group)
        found += file.modes(group)
        leftovers += file.leftovers
    found = named_modes(found)
    if symmetry is not None:
        _check_species(symmetry, found)
    return Molecule(group, symmetry, found, leftovers)


def group_of(target: str, tolerance, as_group, axes, reading) -> tuple:
    """Return (group, symmetry) of a group symbol (symmetry None) or of a structure file."""
    from vibsym.groups.symbols import is_group_symbol

    if is_group_symbol(target):
        from vibsym.groups.pointgroup import point_group

        return point_group(target), None
    symmetry = symmetry_of_file(target, tolerance, as_group, axes, reading)
    return symmetry.group, symmetry


def symmetry_of_file(path: str, tolerance, as_group, axes, reading):
    """Return the symmetry of the one structure in a file."""
    from vibsym.spectra.expectation import expect

    return expect(one_structure(path, reading), tolerance, as_group=as_group, axes=axes).symmetry


def one_structure(path: str, reading):
    """Return the one structure in a file."""
    from vibsym.cli.reading import read_structures

    structures = read_structures(path, **reading)
    if len(structures) != 1:
        raise VibsymError(f"{path}: {len(structures)} structures; choose one with --frame")
    return structures[0]


def check_group(file, group) -> None:
    """Refuse an assignment that was made in another group."""
    if file.group and file.group != group.symbol:
        raise VibsymError(f"{file.source}: the assignment was made in {file.group}, not in {group.symbol}; "
                          f"use --as {file.group} or assign anew")


def _check_species(symmetry, modes) -> None:
    """Refuse fundamentals of a species that has none, or fewer, in the structure."""
    from vibsym.groups.reduction import write_reduction
    from vibsym.vibrations.cartesian import displacements

    gamma = displacements(symmetry).gamma_vib
    given = Counter(mode.species for mode in modes)
    for species, count in given.items():
        have = gamma.get(species, 0)
        if count > have:
            name = symmetry.structure.source or symmetry.structure.formula
            what = f"no vibration of species {species}" if not have else (
                f"{count} fundamentals of species {species} are given, and it has {have}")
            raise VibsymError(f"{name}: {what}; Γvib = {write_reduction(gamma)}")
