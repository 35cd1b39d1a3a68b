"""The reduced object that gives oscillators their local symmetry: what a carbonyl stretch in a complex really sees.

Kept are the atoms of the oscillators, their centres, and the atoms bound to a centre, no further.  A centre is an atom
that oscillators share or, where they share none, a metal in them, else an atom bound to them.  Donor atoms of one
ligand that are bonded to each other (an η2-alkene, η5-Cp, η6-arene) become one point at their centroid.  Donors
compare by element, or also by the formula of their ligand.  An oscillating atom that is bonded to a metal which is not
kept differs from one that is not: a sulfate held by one oxygen has C3v, by two C2v (K. Nakamoto, Infrared and Raman
Spectra of Inorganic and Coordination Compounds, on unidentate and bidentate ligands).  (Local symmetry of oscillators:
P. S. Braterman, Metal Carbonyl Spectra, 1975; the rule for the points is common practice.)
"""

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.bonds import fragments, neighbours
from vibsym.structures.periodic import is_metal
from vibsym.structures.structure import Structure


@dataclass(frozen=True, eq=False)
class ReducedObject:
    """A structure of few atoms and points; `origins` tells for each the atoms (from 0) of the whole that it stands
    for."""

    structure: Structure
    origins: tuple[tuple[int, ...], ...]
    centres: tuple[int, ...]
    pairs: np.ndarray                     # (n, 2) the oscillators, numbered in the reduced object
    names: tuple[str, ...]                # "P", "point of C5" for each
    held: tuple[int, ...] = ()            # oscillating atoms of the whole, from 0, bonded to a metal that is left out

    @property
    def atoms(self) -> tuple[int, ...]:
        """The atoms of the whole that were kept, those merged into points too, from 0."""
        return tuple(sorted(atom for origin in self.origins for atom in origin))


def reduced_object(structure: Structure, pairs: np.ndarray, bonds: np.ndarray, centre: str | None = None,
                   distinguish: bool = False) -> ReducedObject:
    """Return what is kept of a structure around the oscillators `pairs` (n, 2); `centre` restricts centres to an
    element."""
    beside = neighbours(len(structure), bonds)
    oscillating = set(np.asarray(pairs).ravel().tolist())
    centres = find_centres(structure, pairs, beside, centre)
    if not centres:
        raise VibsymError("--local: the oscillators have no centre (an atom bound to them or shared by them that binds "
                          "others too); name one, as in Mo-C-O, or leave --local out")
    kept = sorted(oscillating | set(centres))
    donors: list[list[int]] = []
    for atom in centres:
        around = [other for other in beside[atom] if other not in kept]
        donors += [part for part in _joined(around, beside, structure) if part not in donors]
    marks = _ligand_marks(structure, bonds, centres, donors) if distinguish else [""] * len(donors)
    held = _held_by(structure, beside, kept, {*kept, *(atom for part in donors for atom in part)})
    symbols = [f"X{structure.symbols[atom]}at{held[atom]}" if atom in held else structure.labels[atom] for atom in kept]
    symbols += [_donor_symbol(structure, part, mark) for part, mark in zip(donors, marks, strict=True)]
    origins = [(atom,) for atom in kept] + [tuple(part) for part in donors]
    positions = np.array([structure.positions[list(origin)].mean(axis=0) for origin in origins])
    place = {origin[0]: k for k, origin in enumerate(origins[:len(kept)])}
    small = Structure.from_atoms(symbols, positions, source=structure.source)
    renumbered = np.array([[place[i], place[j]] for i, j in np.asarray(pairs).tolist()], dtype=int).reshape(-1, 2)
    names = tuple(structure.symbols[origin[0]] if len(origin) == 1 else f"point of {_formula(structure, origin)}"
                  for origin in origins)
    return ReducedObject(small, tuple(origins), tuple(centres), renumbered, names, tuple(held))


def find_centres(structure: Structure, pairs: np.ndarray, beside, element: str | None = None) -> list[int]:
    """Return the centres of oscillators, from 0 and in order."""
    pairs = np.asarray(pairs).tolist()
    times = Counter(atom for pair in pairs for atom in pair)
    centres = set()
    for pair in pairs:
        near = [atom for atom in pair if times[atom] > 1]
        if not near:
            near = [atom for atom in pair if is_metal(structure.numbers[atom])]
        if not near:
            near = [other for atom in pair for other in beside[atom] if other not in times and len(beside[other]) > 1]
        centres.update(near)
    if element is not None:
        centres = {atom for atom in centres if structure.symbols[atom] == element}
    return sorted(centres)


def _held_by(structure: Structure, beside, oscillating: Sequence[int], present: set[int]) -> dict[int, str]:
    """Return the atoms bonded to metals that are not present, each with the symbols of these metals."""
    found = {}
    for atom in oscillating:
        metals = [structure.symbols[other] for other in beside[atom]
                  if other not in present and is_metal(structure.numbers[other])]
        if metals:
            found[atom] = "".join(sorted(metals))
    return found


def _joined(around: Sequence[int], beside, structure: Structure) -> list[list[int]]:
    """Return the donors of one centre, those bonded to each other together; metals stay by themselves."""
    parts: list[list[int]] = []
    left = list(around)
    while left:
        part = [left.pop(0)]
        for atom in part:                 # grows while it is walked through
            if is_metal(structure.numbers[atom]):
                continue
            joined = [other for other in left if other in beside[atom] and not is_metal(structure.numbers[other])]
            part += joined
            left = [other for other in left if other not in joined]
        parts.append(sorted(part))
    return parts


def _ligand_marks(structure: Structure, bonds, centres, donors) -> list[str]:
    """Return for each donor a letter and number that tell ligands of different formula apart."""
    parts = fragments(len(structure), bonds, without=list(centres))
    formula_of = {atom: _formula(structure, part) for part in parts for atom in part}
    formulas = [formula_of.get(part[0], "") for part in donors]
    order = sorted(set(formulas))
    return [f"L{order.index(formula) + 1}" for formula in formulas]


def _donor_symbol(structure: Structure, part: Sequence[int], mark: str) -> str:
    """Return the symbol in the reduced object: the element, or a named point for merged or distinguished donors."""
    if len(part) == 1 and not mark:
        return structure.symbols[part[0]]
    return "X" + "".join(c for c in _formula(structure, part) if c.isalnum()) + mark


def _formula(structure: Structure, part: Sequence[int]) -> str:
    counts = Counter(structure.symbols[atom] for atom in part)
    return "".join(symbol + (str(counts[symbol]) if counts[symbol] > 1 else "") for symbol in sorted(counts))
