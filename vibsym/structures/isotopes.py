"""Isotopic substitution: `1=D,2=D` for atoms from 1, `H=D` for all atoms of a kind, and what both molecules share.

The common group of a molecule and its isotopologue holds the operations that exchange atoms only where they are alike
in both; in it the species of the two can be compared, and the product rule holds.
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import combinations
from math import comb

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.descent import Correlation, correlation_in_frame, restrict
from vibsym.structures.finder import find_symmetry
from vibsym.structures.labels import is_dummy, read_label
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, Symmetry, operations_become

MOST_ARRANGEMENTS = 2**16          # beyond, a listing helps nobody


@dataclass(frozen=True, eq=False)
class Substitution:
    """A molecule, its isotopologue and the group that both have."""

    original: Symmetry
    substituted: Symmetry
    common: Symmetry

    @cached_property
    def changed(self) -> np.ndarray:
        """Atoms (from 0) whose mass changes."""
        before, after = self.original.structure.masses, self.substituted.structure.masses
        return np.flatnonzero(np.abs(before - after) > 1e-9)

    @cached_property
    def correlation(self) -> Correlation:
        """Species of the original molecule in species of the common group."""
        return correlation_between(self.original, self.common)

    @cached_property
    def correlation_substituted(self) -> Correlation:
        """Species of the isotopologue in species of the common group."""
        return correlation_between(self.substituted, self.common)


@dataclass(frozen=True, eq=False)
class Isotopologue:
    """One way to substitute some of the sites, up to symmetry.

    `sites` (from 0) are substituted; `weight` equivalent arrangements exist; `symmetry` is that of the molecule.
    """

    sites: tuple[int, ...]
    weight: int
    structure: Structure
    symmetry: Symmetry


def substitute(structure: Structure, replacements: str) -> Structure:
    """Return the structure with other isotopes: `1=D,2=D`, `H=D`, `3=13C`.

    >>> water = Structure.from_atoms(["O", "H", "H"], [[0, 0, 0], [0.76, 0, 0.59], [-0.76, 0, 0.59]])
    >>> substitute(water, "2=D").formula, substitute(water, "H=D,O=18O").formula
    ('HDO', 'D2(18O)')
    """
    return structure.with_isotopes(parse_replacements(structure, replacements))


def parse_replacements(structure: Structure, text: str) -> dict[int, int | None]:
    """Return {atom from 0: mass number} of a list of replacements; the element of an atom never changes."""
    wanted: dict[int, int | None] = {}
    for part in filter(None, (part.strip() for part in text.split(","))):
        where, equals, label = (piece.strip() for piece in part.partition("="))
        if not equals or not where or not label:
            raise VibsymError(f"replacement '{part}' cannot be read; write atom=isotope or isotope=isotope, "
                              "as in 1=D or H=D")
        symbol, number = read_label(label)
        for atom in _atoms(structure, where, part):
            if structure.symbols[atom] != symbol:
                raise VibsymError(f"replacement '{part}': atom {atom + 1} is {structure.symbols[atom]}, and {label} is "
                                  "another element; only isotopes are exchanged")
            if wanted.get(atom, number) != number:
                raise VibsymError(f"replacement '{part}': atom {atom + 1} is given two isotopes")
            wanted[atom] = number
    if not wanted:
        raise VibsymError("nothing to replace; write --replace 1=D,2=D or --replace H=D")
    return wanted


def substitution(structure: Structure, replacements: str, tolerance: float = DEFAULT_TOLERANCE,
                 axes: str | None = None) -> Substitution:
    """Return a molecule and its isotopologue with their groups and the group they share."""
    return compare(structure, substitute(structure, replacements), tolerance, axes)


def compare(one: Structure, other: Structure, tolerance: float = DEFAULT_TOLERANCE,
            axes: str | None = None) -> Substitution:
    """Return two isotopologues, the same atoms in the same places, with their groups and the group they share.

    `axes` makes another choice of axes (see `find_symmetry`), in both where they have one group.
    """
    if len(one) == 1:
        raise VibsymError(f"{one.source or one.formula}: one atom has no vibrations; isotopes change nothing")
    for each in (one, other):
        if any(is_dummy(symbol) for symbol in each.symbols):
            dummy = next(symbol for symbol in each.symbols if is_dummy(symbol))
            raise VibsymError(f"{each.source or each.formula}: the dummy atom {dummy} has no mass; "
                              "put the real atom there")
    original = find_symmetry(one, tolerance, axes=axes)
    substituted = find_symmetry(other, tolerance)
    if axes and substituted.group is original.group:
        substituted = find_symmetry(other, tolerance, axes=axes)
    pairs = list(zip(one.kinds.tolist(), other.kinds.tolist()))
    rank = {pair: k for k, pair in enumerate(dict.fromkeys(pairs))}
    if len(rank) == len(set(other.kinds.tolist())):       # nothing told apart that the isotopologue does not
        return Substitution(original, substituted, substituted)
    if len(rank) == len(set(one.kinds.tolist())):
        return Substitution(original, substituted, original)
    joint = replace(other, kinds=np.array([rank[pair] for pair in pairs]))
    return Substitution(original, substituted, find_symmetry(joint, tolerance))


def correlation_between(symmetry: Symmetry, common: Symmetry) -> Correlation:
    """Return what the species of a symmetry become in a lower one of the same atoms, each in its own axes."""
    parent, group = symmetry.group, common.group
    if group.infinite:                                    # linear, or one atom: the axis is the same
        return correlation_in_frame(parent, group)
    if parent.infinite:
        return correlation_in_frame(parent, group, common.frame @ symmetry.frame.T)
    return restrict(parent, group, operations_become(common, symmetry))


def isotopologues(structure: Structure, replacements: str, tolerance: float = DEFAULT_TOLERANCE,
                  substituted: Sequence[int] | None = None) -> tuple[Isotopologue, ...]:
    """Return every distinct isotopologue with none, some or all of the replacements made, fewest first.

    Arrangements that an operation of the molecule takes into each other are one; their number is its statistical
    weight. `substituted` keeps those with these numbers of replaced atoms.  Mirror images count as one.
    """
    wanted = parse_replacements(structure, replacements)
    sites = sorted(wanted)
    counts = range(len(sites) + 1) if substituted is None else [n for n in substituted if n <= len(sites)]
    arrangements = sum(comb(len(sites), count) for count in counts)
    if arrangements > MOST_ARRANGEMENTS:
        raise VibsymError(f"{len(sites)} sites make {arrangements} arrangements, more than {MOST_ARRANGEMENTS}; "
                          "name fewer atoms, or replace --at-most a few of them")
    symmetry = find_symmetry(structure, tolerance)
    found = []
    for count in counts:
        for chosen, weight in _distinct(symmetry.permutations, wanted, count):
            molecule = structure.with_isotopes({atom: wanted[atom] for atom in chosen}) if chosen else structure
            found.append(Isotopologue(chosen, weight, molecule, find_symmetry(molecule, tolerance)))
    return tuple(found)


def site_permutations(symmetry: Symmetry, sites: Sequence[int]) -> np.ndarray:
    """Return the different permutations (p, n) that the operations make of sites; a site must not leave the sites."""
    sites = np.asarray(sites)
    place = np.full(len(symmetry.structure), -1)
    place[sites] = np.arange(len(sites))
    moved = place[symmetry.permutations[:, sites]]
    if moved.min() < 0:
        outside = symmetry.permutations[:, sites][moved < 0]
        raise VibsymError(f"the sites are not closed: atom {int(outside[0]) + 1} is equivalent to one of them")
    return np.unique(moved, axis=0)


def burnside(moves: np.ndarray) -> int:
    """Return how many distinct ways there are to substitute any of the sites: (1/p) Σ 2^(cycles of each permutation).

    Burnside's lemma (the Cauchy-Frobenius count; G. Pólya, Acta Math. 68, 145 (1937) for isomers).

    >>> burnside(np.array([[0, 1, 2], [1, 2, 0], [2, 0, 1]]))
    4
    """
    return sum(2 ** _cycles(permutation) for permutation in moves.tolist()) // len(moves)


def _cycles(permutation: list[int]) -> int:
    seen, count = set(), 0
    for start in range(len(permutation)):
        if start not in seen:
            count += 1
            while start not in seen:
                seen.add(start)
                start = permutation[start]
    return count


def _distinct(permutations: np.ndarray, wanted: dict[int, int | None], count: int) -> list[tuple[tuple[int, ...], int]]:
    """Return one arrangement of each kind with `count` sites replaced, and how many arrangements are equivalent to it.

    An arrangement is written as a number, one digit for each atom that the sites can be taken to (0: not replaced,
    else the isotope); the smallest number among its images names the kind.
    """
    sites = np.array(sorted(wanted))
    if count == 0:
        return [((), 1)]
    isotopes = {number: digit for digit, number in enumerate(dict.fromkeys(wanted.values()), 1)}
    digits = np.array([isotopes[wanted[site]] for site in sites.tolist()], dtype=object)
    images = np.unique(permutations[:, sites], axis=0)                        # (p, n)
    atoms = np.unique(images)
    place = np.zeros(atoms.max() + 1, dtype=int)
    place[atoms] = np.arange(len(atoms))
    values = np.array([(len(isotopes) + 1) ** k for k in range(len(atoms))], dtype=object)
    if (len(isotopes) + 1) ** len(atoms) < 2**62:
        values, digits = values.astype(np.int64), digits.astype(np.int64)
    arrangements = np.array(list(combinations(range(len(sites)), count)), dtype=int)
    names = None
    for image in images:
        written = (values[place[image]] * digits)[arrangements].sum(axis=1)
        names = written if names is None else np.minimum(names, written)
    _, first, weights = np.unique(names, return_index=True, return_counts=True)
    order = np.argsort(first)
    return [(tuple(sites[arrangements[first[k]]].tolist()), int(weights[k])) for k in order]


def _atoms(structure: Structure, where: str, part: str) -> list[int]:
    if re.fullmatch(r"[+-]?\d+(\.\d*)?", where, re.ASCII):
        atom = int(where) if where.isdigit() else 0
        if not 1 <= atom <= len(structure):
            raise VibsymError(f"replacement '{part}': there is no atom {where}; "
                              f"the structure has atoms 1 to {len(structure)}")
        return [atom - 1]
    symbol, number = read_label(where)
    found = [k for k, (name, own) in enumerate(zip(structure.symbols, structure.mass_numbers))
             if name == symbol and own == number]
    if not found:
        raise VibsymError(f"replacement '{part}': there is no atom {where} in {structure.formula}")
    return found
