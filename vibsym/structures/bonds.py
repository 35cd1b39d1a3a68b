"""Which atoms are bonded: the file's own bonds where it states them, else atoms nearer than 1.2 × the sum of radii.

Covalent radii: B. Cordero et al., Dalton Trans. 2008, 2832 (`tables/elements.csv`).  The factor is common practice: it
takes in long metal-ligand bonds and leaves out 1,3-distances.  Where it leaves a molecule in parts that come nearer
than 1.35 × the sum, they are joined at their nearest contacts: F2 (1.25), the N-N bond of N2O4 (1.25), FHF- (1.30),
O2F2 (1.28); ordinary hydrogen bonds and van der Waals contacts begin beyond 1.6.  Dummy atoms bond with nothing unless
told.
"""

from collections.abc import Iterable, Sequence

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.distances import SMALL, pairs_within, squared_distances
from vibsym.structures.elements import covalent_radius
from vibsym.structures.labels import is_dummy
from vibsym.structures.structure import Structure

FACTOR = 1.2
JOINING_FACTOR = 1.35
ALIKE = 1.02            # contacts between two parts that differ by less are taken as equivalent


def find_bonds(structure: Structure, add: Iterable = (), remove: Iterable = ()) -> np.ndarray:
    """Return the (B, 2) bonds i < j, counted from 0 and in order.

    `add` and `remove` are pairs of atoms counted from 0 (`parse_bond` makes them from "1-5").

    >>> water = Structure.from_atoms("OHH", [[0, 0, 0], [0.76, 0, 0.59], [-0.76, 0, 0.59]])
    >>> find_bonds(water).tolist(), find_bonds(water, add=[(1, 2)], remove=[(0, 1)]).tolist()
    ([[0, 1], [0, 2]], [[0, 2], [1, 2]])
    """
    bonds = structure.bonds if structure.bonds is not None else _by_radii(structure)
    add, remove = list(add), list(remove)
    if not add and not remove and structure.bonds is None:
        return bonds
    pairs = {(min(i, j), max(i, j)) for i, j in [*bonds.tolist(), *_checked(structure, add)]}
    for i, j in _checked(structure, remove):
        if (min(i, j), max(i, j)) not in pairs:
            raise VibsymError(f"there is no bond {i + 1}-{j + 1} to remove; {_bonds_of(structure, i, pairs)}")
        pairs.discard((min(i, j), max(i, j)))
    return np.array(sorted(pairs), dtype=np.intp).reshape(-1, 2)


def parse_bond(text: str, atoms: int) -> tuple[int, int]:
    """Return the pair of atoms, counted from 0, that `text` names from 1.

    >>> parse_bond("1-5", 6)
    (0, 4)
    """
    fields = text.replace("–", "-").split("-")
    text = text[:20]
    if len(fields) != 2 or not all(field.strip().isascii() and field.strip().isdigit() for field in fields):
        raise VibsymError(f"bond '{text}': write two atom numbers, as in 1-5")
    pair = []
    for field in fields:
        if not 1 <= int(field[:18]) <= atoms:
            raise VibsymError(f"bond '{text}': there is no atom {field.strip()[:20]}; there are atoms 1 to {atoms}")
        pair.append(int(field) - 1)
    if pair[0] == pair[1]:
        raise VibsymError(f"bond '{text}': an atom is not bonded to itself; write two different numbers")
    return min(pair), max(pair)


def neighbours(n: int, bonds) -> list[list[int]]:
    """Return for each of `n` atoms the atoms bonded to it, in rising order.

    >>> neighbours(3, [(0, 1), (0, 2)])
    [[1, 2], [0], [0]]
    """
    lists: list[list[int]] = [[] for _ in range(n)]
    for i, j in np.asarray(bonds, dtype=int).reshape(-1, 2).tolist():
        lists[i].append(j)
        lists[j].append(i)
    return [sorted(atoms) for atoms in lists]


def fragments(n: int, bonds, without: Sequence[int] = ()) -> list[list[int]]:
    """Return the connected parts of `n` atoms, each in rising order; `without` leaves atoms out.

    Without the metal of a complex the parts are its ligands.

    >>> fragments(5, [(0, 1), (0, 3), (3, 4)], without=[0])
    [[1], [2], [3, 4]]
    """
    beside = neighbours(n, bonds)
    seen = [False] * n
    for atom in without:
        seen[atom] = True
    parts = []
    for start in range(n):
        if seen[start]:
            continue
        seen[start] = True
        part = [start]
        for atom in part:               # grows while it is walked through
            for other in beside[atom]:
                if not seen[other]:
                    seen[other] = True
                    part.append(other)
        parts.append(sorted(part))
    return parts


def _by_radii(structure: Structure) -> np.ndarray:
    radii = {name: -np.inf if is_dummy(name) else covalent_radius(name) for name in set(structure.symbols)}
    r = np.array([radii[name] for name in structure.symbols])
    positions = structure.positions
    if len(r) <= SMALL:
        sums = r[:, None] + r
        near = squared_distances(positions) <= (JOINING_FACTOR * sums) ** 2
        first, second = np.nonzero(near & (sums > 0))
        upper = first < second
        pairs = np.stack((first[upper], second[upper]), axis=1)
    else:
        pairs = pairs_within(positions, 2 * JOINING_FACTOR * max(0.0, *radii.values()))
    first, second = pairs.T
    separation = positions[first] - positions[second]
    # rounding must not make one of two equivalent contacts a bond and the other none
    ratio = (np.sqrt((separation * separation).sum(axis=1)) / (r[first] + r[second])).round(9)
    bonded = (ratio <= FACTOR) & np.isfinite(r[first] + r[second])      # a dummy atom has no radius
    apart = (ratio > FACTOR) & (ratio <= JOINING_FACTOR)
    return _joined(len(r), pairs, ratio, bonded, apart) if apart.any() else pairs[bonded]


def _joined(n: int, pairs: np.ndarray, ratio: np.ndarray, bonded: np.ndarray, apart: np.ndarray) -> np.ndarray:
    """Return the bonds and those that join parts left apart: the contacts that are as near as the nearest."""
    part = np.empty(n, dtype=int)
    for number, atoms in enumerate(fragments(n, pairs[bonded])):
        part[atoms] = number
    ends = np.sort(part[pairs], axis=1)
    between = apart & (ends[:, 0] != ends[:, 1])
    if between.any():
        _, which = np.unique(ends[between], axis=0, return_inverse=True)
        which = which.reshape(-1)
        nearest = np.full(which.max() + 1, np.inf)
        np.minimum.at(nearest, which, ratio[between])
        bonded = bonded.copy()
        bonded[np.flatnonzero(between)[ratio[between] <= ALIKE * nearest[which]]] = True
    return pairs[bonded]


def _checked(structure: Structure, pairs) -> list[tuple[int, int]]:
    n = len(structure)
    for i, j in pairs:
        if not (0 <= i < n and 0 <= j < n) or i == j:
            raise VibsymError(f"bond {i + 1}-{j + 1}: two different atoms of 1 to {n} are needed")
    return list(pairs)


def _bonds_of(structure: Structure, atom: int, pairs) -> str:
    label = f"{structure.symbols[atom]}{atom + 1}"
    beside = sorted({i + j - atom for i, j in pairs if atom in (i, j)})
    return f"{label} is bonded to " + (", ".join(f"{structure.symbols[k]}{k + 1}" for k in beside) or "nothing")
