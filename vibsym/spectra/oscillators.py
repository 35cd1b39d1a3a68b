"""Oscillators: the stretches of one kind of bond as a region of their own, in the group of the molecule and in their
own.

ν(CO) of a complex follows the symmetry of its carbonyls, not that of the whole molecule with its bulky ligands (P. S.
Braterman, Metal Carbonyl Spectra, 1975).  The local group is the group of a reduced object
(vibsym/structures/reduced.py), found with its own tolerance and ladder.  A band that the local group forbids and the
group of the molecule allows is a *leak*: it can be seen, weakly.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.errors import VibsymError
from vibsym.spectra.activity import SetBands, count_bands
from vibsym.structures.bonds import neighbours
from vibsym.structures.equivalent_bonds import symmetric_bonds
from vibsym.structures.periodic import is_metal
from vibsym.structures.reduced import ReducedObject, reduced_object
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import LOCAL_TOLERANCE, Symmetry
from vibsym.vibrations.internal import CoordinateSet
from vibsym.vibrations.naming import bond_name
from vibsym.vibrations.representation import coordinate_basis


@dataclass(frozen=True)
class Leak:
    """A species that is silent in a spectrum in the local group and what the group of the molecule makes of it."""

    species: str
    becomes: dict[str, int]
    infrared: bool              # forbidden locally, allowed in the molecule
    raman: bool

    def to_dict(self) -> dict:
        """Return the object for JSON."""
        return {"species": self.species, "becomes": dict(self.becomes), "infrared": self.infrared, "raman": self.raman}


@dataclass(frozen=True, eq=False)
class LocalSymmetry:
    """The oscillators in the group of their reduced object."""

    reduced: ReducedObject
    symmetry: Symmetry
    whole: Symmetry
    bands: SetBands

    @cached_property
    def ladder(self):
        """The rungs of the reduced object, from the local group upwards (`Ladder`)."""
        from vibsym.structures.ladder import ladder

        return ladder(self.reduced.structure, self.symmetry.tolerance)

    @cached_property
    def leaks(self) -> tuple[Leak, ...]:
        """Species of the oscillators that the local group keeps silent and the group of the molecule lets through."""
        return tuple(_leaks(self))

    @property
    def atoms(self) -> tuple[int, ...]:
        """The atoms of the molecule that were kept, from 1."""
        return tuple(atom + 1 for atom in self.reduced.atoms)

    def to_dict(self) -> dict:
        """Return the `local` object for JSON; `points` are the groups of atoms that stand as one point,
        `held` the oscillating atoms bonded to a metal that is left out."""
        points = [[atom + 1 for atom in origin] for origin in self.reduced.origins if len(origin) > 1]
        rungs = [{"point_group": rung.symmetry.to_dict(), "deviation": round(float(rung.deviation), 6)}
                 for rung in self.ladder.rungs]
        return {"point_group": self.symmetry.to_dict(), "atoms": list(self.atoms), "points": points,
                "centres": [atom + 1 for atom in self.reduced.centres],
                "held": [atom + 1 for atom in self.reduced.held], "oscillators": self.bands.to_dict(),
                "ladder": rungs, "leaks": [leak.to_dict() for leak in self.leaks]}


@dataclass(frozen=True, eq=False)
class Oscillators:
    """A set of stretches beside the whole molecule: their bands in its group and, if asked for, in their own."""

    bands: SetBands
    local: LocalSymmetry | None
    notes: tuple[str, ...] = ()

    def to_dict(self) -> dict:
        """Return the keys that oscillators add to JSON."""
        answer = {"oscillators": self.bands.to_dict()}
        return answer | {"local": self.local.to_dict()} if self.local else answer


def oscillators(symmetry: Symmetry, wanted: str, local: bool = False, tolerance: float = LOCAL_TOLERANCE,
                distinguish: bool = False, bonds=None) -> Oscillators:
    """Return the bands of the oscillators `wanted` (`C-O`, `Mo-C-O` from the centre, or pairs of atoms `2-3,4-5`).

    With `local` also in the group of the reduced object, found within `tolerance` (Å); with `distinguish` donors are
    alike only if their ligands have one formula.
    """
    structure = symmetry.structure
    bonds = symmetric_bonds(symmetry) if bonds is None else np.asarray(bonds, dtype=int).reshape(-1, 2)
    name, pairs, centre = find_oscillators(structure, bonds, wanted)
    bands = stretch_bands(symmetry, name, pairs)
    notes = () if centre else _mixture(structure, bonds, name, pairs)
    if not local:
        return Oscillators(bands, None, notes)
    from vibsym.structures.finder import find_symmetry

    reduced = reduced_object(structure, pairs, bonds, centre, distinguish)
    own = find_symmetry(reduced.structure, tolerance)
    found = LocalSymmetry(reduced, own, symmetry, stretch_bands(own, name, reduced.pairs))
    if _same_operations(found) is None:
        notes += (f"The local group {own.group.symbol} lacks operations of the molecule ({symmetry.group.symbol}); its "
                  "tolerance is too small to tell leaks.",)
    return Oscillators(bands, found, notes)


def stretch_bands(symmetry: Symmetry, name: str, pairs: np.ndarray) -> SetBands:
    """Return the species and the bands of the stretches of bonded pairs (n, 2)."""
    ordered = np.unique(np.sort(np.asarray(pairs, dtype=int), axis=1), axis=0)
    found = coordinate_basis(symmetry, CoordinateSet(name, "stretch", ordered)).reduce()
    gamma = {symmetry.group.image_labels.get(label, label): n for label, n in found.items()}
    return SetBands(name, gamma, count_bands(gamma, symmetry.group))


def find_oscillators(structure: Structure, bonds: np.ndarray, wanted: str) -> tuple[str, np.ndarray, str | None]:
    """Return the name of the set, its pairs of bonded atoms (n, 2) from 0, and the element of the centre if one is
    named."""
    text = " ".join(wanted.replace("–", "-").split()).removeprefix("stretch ")
    if text and not text.strip("0123456789-, "):
        return (*_numbered(structure, bonds, text, wanted), None)
    words = text.split("-")
    if len(words) not in (2, 3) or not all(words):
        raise VibsymError(f"oscillators '{wanted}': write a bond such as C-O, from the centre Mo-C-O, or pairs 2-3,4-5")
    elements = [_element(structure, word) for word in words]
    centre, first, second = elements if len(words) == 3 else (None, *elements)
    names = np.array([{symbol, label} for symbol, label in zip(structure.symbols, structure.labels)], dtype=object)
    pairs = []
    for i, j in bonds.tolist():
        for a, b in ((i, j), (j, i)):
            if first in names[a] and second in names[b] and (centre is None or _binds(a, b, centre, bonds, names)):
                pairs.append((i, j))
                break
    if not pairs:
        present = sorted({bond_name((structure.symbols[i], structure.symbols[j])) for i, j in bonds.tolist()})
        has = ", ".join(present) or "no bonds"
        raise VibsymError(f"oscillators '{wanted}': no such bonds; the structure has {has}")
    return f"stretch {bond_name((first, second))}", np.array(pairs, dtype=int), centre


def _numbered(structure: Structure, bonds, text: str, wanted: str) -> tuple[str, np.ndarray]:
    from vibsym.structures.bonds import parse_bond

    try:
        pairs = [parse_bond(part.strip(), len(structure)) for part in text.split(",") if part.strip()]
    except VibsymError as error:
        raise VibsymError(f"oscillators '{wanted}': {error}") from None
    known = {tuple(bond) for bond in np.sort(bonds, axis=1).tolist()}
    for i, j in pairs:
        if (i, j) not in known:
            raise VibsymError(f"oscillators '{wanted}': atoms {i + 1} ({structure.symbols[i]}) and {j + 1} "
                              f"({structure.symbols[j]}) are not bonded; --bond {i + 1}-{j + 1} bonds them")
    names = dict.fromkeys(bond_name((structure.symbols[i], structure.symbols[j])) for i, j in pairs)
    return f"stretch {', '.join(names)}", np.array(pairs, dtype=int)


def _element(structure: Structure, word: str) -> str:
    """Return the symbol or label as the structure writes it; one that it lacks is an error."""
    for name in dict.fromkeys((*structure.symbols, *structure.labels)):
        if name.lower() == word.lower():
            return name
    from vibsym.structures.labels import read_label

    read_label(word)                # no element at all: says so
    raise VibsymError(f"no {word} in {structure.formula}; its elements are {', '.join(sorted(set(structure.symbols)))}")


def _binds(a: int, b: int, centre: str, bonds: np.ndarray, names) -> bool:
    """Tell whether atom `a` is bonded to a centre other than `b`."""
    around = bonds[(bonds == a).any(axis=1)].sum(axis=1) - a
    return any(centre in names[atom] for atom in around.tolist() if atom != b)


def _mixture(structure: Structure, bonds: np.ndarray, name: str, pairs: np.ndarray) -> tuple[str, ...]:
    """Tell when some of the oscillators are bonded to a metal and others are not (CO beside the C-O of an ether).

    Oscillators that share an atom (the S-O of a sulfate held by one oxygen) belong together.
    """
    metal = [is_metal(number) for number in structure.numbers.tolist()]
    beside = neighbours(len(structure), bonds)
    held: dict[tuple[int, int], tuple[int, int, int]] = {}               # oscillator -> metal, atom bonded to it, other
    for i, j in pairs.tolist():
        if metal[i] or metal[j]:
            return ()
        for a, b in ((i, j), (j, i)):
            metals = [atom for atom in beside[a] if metal[atom]]
            if metals:
                held.setdefault((i, j), (metals[0], a, b))
    inside = {atom for pair in held for atom in pair}
    apart = [pair for pair in map(tuple, pairs.tolist()) if pair not in held and not inside.intersection(pair)]
    if not held or not apart:
        return ()
    chain = "-".join(structure.symbols[atom] for atom in next(iter(held.values())))
    number = len(pairs) - len(apart)
    return (f"{name}: {number} of the {len(pairs)} bonds {'is' if number == 1 else 'are'} at a metal, the others are "
            f"not; --oscillators {chain} takes those at the metal.",)


def _leaks(local: LocalSymmetry):
    whole, own = local.whole.group, local.symmetry.group
    places = _same_operations(local)
    if places is None:
        return
    restrict = _restriction(local, places)
    for label in local.bands.gamma:
        species = own.species_named(label)
        becomes = restrict(label)
        parts = [whole.species_named(part) for part in becomes]
        infrared = not species.infrared and any(part.infrared for part in parts)
        raman = not species.raman and any(part.raman for part in parts)
        if infrared or raman:
            yield Leak(label, becomes, infrared, raman)


def _restriction(local: LocalSymmetry, places: np.ndarray):
    """Return the function from a local species to the species of the molecule's group that it becomes.

    Every operation of the molecule moves the reduced object like one local operation; the characters of that one are
    reduced in the group of the molecule.
    """
    from vibsym.groups.reduction import reduce

    whole, own = local.whole.group, local.symmetry.group
    first = [each.members[0] for each in whole.image.classes]
    image_label = {shown: label for label, shown in own.image_labels.items()}

    def restrict(label: str) -> dict[str, int]:
        row = own.image.labels.index(image_label.get(label, label))
        chi = own.image.character_rows[row][own.image.class_of]
        return reduce(chi[places[first]], whole)

    return restrict


def _same_operations(local: LocalSymmetry) -> np.ndarray | None:
    """Return (h,) for each operation of the molecule the local one that moves the reduced object alike.

    They agree in how they permute atoms and points, and, of several that do, in being nearest as matrices.  None: the
    local group lacks operations of the molecule (its tolerance was the smaller one).
    """
    whole, own, reduced = local.whole, local.symmetry, local.reduced
    moved = _moved_points(whole.permutations, reduced.origins)
    turned = whole.frame.T @ whole.group.image.matrices @ whole.frame
    turned = own.frame @ turned @ own.frame.T
    distance = np.abs(turned[:, None] - own.group.image.matrices[None]).max(axis=(2, 3))
    alike = (moved[:, None] == own.permutations[None]).all(axis=2)
    if not alike.any(axis=1).all():
        return None
    return np.where(alike, distance, np.inf).argmin(axis=1)


def _moved_points(permutations: np.ndarray, origins: Sequence[Sequence[int]]) -> np.ndarray:
    """Return (h, n) how permutations (h, N) of atoms permute the points that stand for groups of atoms."""
    place = np.full(permutations.shape[1], -1)
    for number, origin in enumerate(origins):
        place[list(origin)] = number
    return place[permutations[:, [origin[0] for origin in origins]]]
