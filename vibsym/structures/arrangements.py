"""All arrangements of ligands on the sites of a shape, and which of them are one isomer.

Arrangements that an operation of the shape's group G carries into one another are one isomer (or its mirror image):
the isomers are the orbits of G, the stereoisomers those of its rotations.  Both numbers are proved by Burnside's
lemma,

    number of orbits = (1/h) Σ_R (arrangements that R leaves unchanged),

where without chelates the numbers of unchanged arrangements come from the cycles of the site permutations (G. Pólya,
Acta Math. 68, 145 (1937)), independently of the list.  An arrangement is kept as two rows: the colour of each site
(which donor of which sort of ligand) and the set of sites that its ligand holds; so ligands of one sort need no names
of their own.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise, permutations

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.ligands import Ligand
from vibsym.structures.polyhedra import Shape

FREE = 255                      # a site that no ligand holds yet


@dataclass(frozen=True)
class Colour:
    """What can stand on a site: a donor of a sort of ligand; alike donors of one sort share a colour."""

    ligand: int                 # place in the list of ligands
    donor: int                  # place of the (first such) donor in the ligand


def colours_of(ligands: Sequence[Ligand]) -> tuple[Colour, ...]:
    """Return the colours in the order of the ligands and their donors."""
    return tuple(Colour(number, kind) for number, ligand in enumerate(ligands) for kind in sorted(set(ligand.kinds)))


@dataclass(frozen=True, eq=False)
class Orbits:
    """The isomers of a composition on a shape: one representative of each orbit, with the operations that keep it."""

    shape: Shape
    ligands: tuple[Ligand, ...]
    colours: tuple[Colour, ...]
    sites: np.ndarray           # (k, n) colour of each site of each isomer
    holders: np.ndarray         # (k, n) the sites of the ligand on each site, one bit each; 0 for ligands of one donor
    keeps: np.ndarray           # (k, h) bool: operation r leaves isomer k unchanged
    arrangements: int           # number of arrangements before any are taken as one

    @cached_property
    def chiral(self) -> np.ndarray:
        """(k,) bool: no improper operation keeps the isomer; then it is a pair of enantiomers."""
        return ~np.any(self.keeps & (self.shape.image.determinants < 0), axis=1)

    @property
    def count(self) -> int:
        """Number of isomers, a pair of enantiomers counted once."""
        return len(self.sites)

    @property
    def stereoisomers(self) -> int:
        """Number of isomers, enantiomers counted each."""
        return self.count + int(self.chiral.sum())


def orbits(shape: Shape, ligands: Sequence[Ligand]) -> Orbits:
    """Return all isomers of a composition on a shape, first the one whose colours come first site by site.

    >>> from vibsym.structures.ligands import read_ligands
    >>> from vibsym.structures.polyhedra import shape
    >>> found = orbits(shape("OC-6"), read_ligands(["A=2", "X=2", "Z=2"]))
    >>> found.count, found.stereoisomers, found.arrangements
    (5, 6, 90)
    """
    ligands = tuple(ligands)
    sites, holders = list_arrangements(shape, ligands)
    n, chelated = len(shape), bool(holders.any())
    own = _keys(sites, holders, np.arange(n), chelated)
    least = own.copy()
    fixed = np.empty(len(shape.permutations), dtype=np.int64)
    for r, targets in enumerate(shape.permutations):
        moved = _keys(sites, holders, targets, chelated)
        np.minimum(least, moved, out=least)
        fixed[r] = np.count_nonzero(moved == own)
    first = np.flatnonzero(own == least)
    first = first[np.argsort(own[first])]
    sites, holders, own = sites[first], holders[first], own[first]
    keeps = np.stack([_keys(sites, holders, targets, chelated) == own for targets in shape.permutations], axis=1)
    found = Orbits(shape, ligands, colours_of(ligands), sites, holders, keeps, int(fixed[0]))
    _prove(found, fixed, chelated)
    return found


def _prove(found: Orbits, fixed: np.ndarray, chelated: bool) -> None:
    """Compare the list with Burnside's lemma, for the whole group and for its rotations; a difference is our error."""
    proper = found.shape.image.determinants > 0
    if not chelated:
        counts = [ligand.count for ligand in found.ligands]
        fixed = np.array([unchanged_colourings(targets, counts) for targets in found.shape.permutations])
    for chosen, listed in ((np.ones(len(fixed), dtype=bool), found.count), (proper, found.stereoisomers)):
        if not proper.all() or chosen is not proper:
            total, order = int(fixed[chosen].sum()), int(chosen.sum())
            if total != listed * order:
                raise VibsymError(f"{found.shape.symbol}: {listed} isomers listed, {total}/{order} by Burnside's "
                                  "lemma; this is an error of vibsym")


def unchanged_colourings(targets: np.ndarray, counts: Sequence[int]) -> int:
    """Return how many ways of giving counts[k] sites the colour k a permutation leaves unchanged.

    Each cycle has one colour: the coefficient of Π x_k^counts[k] in the product of (Σ_k x_k^length) over the cycles.

    >>> unchanged_colourings(np.array([1, 0, 3, 2]), (2, 2)), unchanged_colourings(np.arange(4), (2, 2))
    (2, 6)
    """
    ways = {tuple(counts): 1}
    for length in cycle_lengths(targets):
        after: dict[tuple[int, ...], int] = {}
        for left, number in ways.items():
            for k, room in enumerate(left):
                if room >= length:
                    key = (*left[:k], room - length, *left[k + 1:])
                    after[key] = after.get(key, 0) + number
        ways = after
    return sum(ways.values())


def cycle_lengths(targets: np.ndarray) -> list[int]:
    """Return the lengths of the cycles of a permutation.

    >>> cycle_lengths(np.array([1, 2, 0, 3]))
    [3, 1]
    """
    left, lengths = set(range(len(targets))), []
    while left:
        start = site = min(left)
        length = 0
        while True:
            left.discard(site)
            site, length = int(targets[site]), length + 1
            if site == start:
                break
        lengths.append(length)
    return lengths


def list_arrangements(shape: Shape, ligands: Sequence[Ligand]) -> tuple[np.ndarray, np.ndarray]:
    """Return all arrangements once: (M, n) colours of the sites and (M, n) bit sets of the sites that a ligand holds.

    Ligand after ligand is put on every placement that is still free; those of one sort in rising order of placements.
    """
    colours = {(colour.ligand, colour.donor): k for k, colour in enumerate(colours_of(ligands))}
    sites, holders = np.full((1, len(shape)), FREE, dtype=np.uint8), np.zeros((1, len(shape)), dtype=np.int16)
    for number, ligand in enumerate(ligands):
        places = placements(shape, ligand)
        hues = [colours[number, kind] for kind in ligand.kinds]
        last = np.full(len(sites), -1)
        for _ in range(ligand.count):
            grown = []
            for index, place in enumerate(places):
                rows = np.flatnonzero((last < index) & np.all(sites[:, place] == FREE, axis=1))
                new_sites, new_holders = sites[rows], holders[rows]
                new_sites[:, place] = hues
                if len(place) > 1:
                    new_holders[:, place] = sum(1 << site for site in place)
                grown.append((new_sites, new_holders, np.full(len(rows), index)))
            sites, holders, last = (np.concatenate(parts) for parts in zip(*grown, strict=True))
            if not len(sites):
                raise VibsymError(f"{ligand.count} {ligand.name} cannot be placed on {shape.symbol}: the donors of a "
                                  "chelate must stand on neighbouring sites; try another shape or fewer chelates")
    return sites, holders


def placements(shape: Shape, ligand: Ligand) -> list[list[int]]:
    """Return the ways of putting one ligand on an empty shape, as lists of sites in the order of its donors.

    Consecutive donors of a chain stand on neighbouring sites, of a ring every two; ways that differ only in the order
    of alike donors are one.
    """
    size = len(ligand.donors)
    if size > len(shape):
        raise VibsymError(f"{ligand.name} has {size} donors, {shape.symbol} {len(shape)} sites")
    found: dict[frozenset, list[int]] = {}
    for way in permutations(range(len(shape)), size):
        pairs = list(pairwise(way))
        if ligand.span == "ring":
            pairs.append((way[0], way[-1]))
        if all(shape.neighbours[i, j] for i, j in pairs):
            found.setdefault(frozenset(zip(way, ligand.kinds)), list(way))
    if not found:
        raise VibsymError(f"the donors of {ligand.name} must stand on neighbouring sites; {shape.symbol} has no such "
                          f"{'pair' if size == 2 else 'triple'}")
    return list(found.values())


def _keys(sites: np.ndarray, holders: np.ndarray, targets: np.ndarray, chelated: bool) -> np.ndarray:
    """Return one whole number for each arrangement after an operation.

    Its decimal digits are the colours of the sites, then the first site of each site's ligand; with at most nine sites
    and nine colours everything fits into 64 bits.
    """
    n = len(targets)
    power = 10 ** (n - 1 - targets.astype(np.int64))
    keys = sites.astype(np.int64) @ power
    if not chelated:
        return keys
    moved_sets = np.zeros(1 << n, dtype=np.int64)          # first site, from 1, of each set of sites once moved
    for bits in range(1, 1 << n):
        moved_sets[bits] = min(int(targets[site]) for site in range(n) if bits >> site & 1) + 1
    return keys * 10 ** n + moved_sets[holders] @ power
