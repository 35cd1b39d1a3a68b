"""Internal coordinates from the bonds: stretches, linear bends, valence bends, out-of-plane wags and torsions.

- stretch: every bond;
- linear bend: a centre with two neighbours at a nearly straight angle (above 165 degrees), with two components;
- bend: every other angle between two bonds; a straight one (above 175 degrees) at a centre with more neighbours (trans
  ligands) is left out, since the angles beside it say the same;
- wag: a planar centre with three neighbours, out of the plane; with four (square planar), one for each pair of opposite
  neighbours; with five and more, one for each three that follow each other round the centre;
- torsion: one a bond, or one a straight chain of bonds (allene, 2-butyne): the sum over its dihedral angles, those
  with a straight angle left out.

E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), ch. 4.  What is straight or planar is decided
at the symmetrised positions, so that equivalent coordinates are treated alike.  A set is kind and elements.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import combinations
from typing import NamedTuple

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.structures.bonds import neighbours
from vibsym.structures.equivalent_bonds import symmetric_bonds
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.naming import KINDS, bend_name, bond_name, same_set, wag_name

ROUNDING = 1e-9                # exactly 165 degrees (a regular ring of 24) must not be straight here and bent there
STRAIGHT = np.cos(np.radians(175.0)) - ROUNDING      # cosine; a smaller one is a straight angle
NEARLY_STRAIGHT = np.cos(np.radians(165.0)) - ROUNDING     # ... of a chain: M-C-O, C-C-N as crystals have them
PLANAR = 0.15                             # smallest singular value of the unit bond vectors (5 degrees for three)
NARROW = 1e-3                             # radian; neighbours of a planar centre that are nearer have no order round it
LETTERS = dict(zip(KINDS, "rlawt", strict=True))


class Coordinate(NamedTuple):
    """One internal coordinate: its id (`r1`), its kind and its atoms, counted from 0."""

    id: str
    kind: str
    atoms: tuple[int, ...]


@dataclass(frozen=True, eq=False, repr=False)
class CoordinateSet:
    """All coordinates of one kind and one set of elements.

    `atoms` (n, k): stretch (i, j); bends (i, centre, k); wag (centre, reference atoms in order); torsion the chain
    from end to end.  `directions` (n, 2, 3) are the components of linear bends in the standard frame.  Wags and
    torsions are sums of `parts` (p, 4) with `weights` (p,), each belonging to the coordinate `owners` (p,): triples
    (centre, a, b, c), dihedral angles (i, a, b, k).  `first` is the number of the first id.
    """

    name: str
    kind: str
    atoms: np.ndarray
    directions: np.ndarray | None = None
    parts: np.ndarray | None = None
    weights: np.ndarray | None = None
    owners: np.ndarray | None = None
    first: int = 1

    def __len__(self) -> int:
        return len(self.atoms)

    @property
    def components(self) -> int:
        """Rows of B for each coordinate: two for a linear bend."""
        return 2 if self.kind == "linear bend" else 1

    @property
    def ids(self) -> tuple[str, ...]:
        """One id for each component: `r1`, `r2`, ...; linear bends `l1a`, `l1b`, ..."""
        letter = LETTERS[self.kind]
        endings = ("a", "b") if self.components == 2 else ("",)
        return tuple(f"{letter}{self.first + k}{ending}" for k in range(len(self)) for ending in endings)

    @property
    def coordinates(self) -> tuple[Coordinate, ...]:
        """The coordinates one by one, the components of linear bends too."""
        rows = np.repeat(self.atoms, self.components, axis=0).tolist()
        return tuple(Coordinate(name, self.kind, tuple(row)) for name, row in zip(self.ids, rows, strict=True))

    def chosen(self, places: np.ndarray) -> "CoordinateSet":
        """Return the set of some of the coordinates, in the order given; their ids are numbered anew."""
        places = np.asarray(places, dtype=int)
        rename = np.full(len(self), -1)
        rename[places] = np.arange(len(places))
        parts = {}
        if self.parts is not None:
            kept = rename[self.owners] >= 0
            parts = {"parts": self.parts[kept], "weights": self.weights[kept], "owners": rename[self.owners[kept]]}
        directions = None if self.directions is None else self.directions[places]
        return CoordinateSet(self.name, self.kind, self.atoms[places], directions, **parts, first=self.first)


def without_symmetry(structure: Structure) -> Symmetry:
    """Return a structure as one of C1, where it stands."""
    atoms = len(structure)
    return Symmetry(structure, point_group("C1"), 0.0, 0.0, np.zeros(3), np.eye(3), structure.positions,
                    np.arange(atoms)[None], np.zeros(atoms))


def internal_coordinates(given: "Symmetry | Structure", bonds=None) -> tuple[CoordinateSet, ...]:
    """Return the sets in the order stretch, linear bend, bend, wag, torsion, those of a kind by name.

    `bonds` (B, 2), counted from 0, default to the bonds of the structure, made alike for equivalent pairs of atoms.
    """
    symmetry = without_symmetry(given) if isinstance(given, Structure) else given
    bonds = symmetric_bonds(symmetry) if bonds is None else np.asarray(bonds, dtype=int).reshape(-1, 2)
    frame = _Frame(symmetry, bonds)
    numbers = dict.fromkeys(KINDS, 1)
    sets = []
    kinds = (("stretch", frame.stretches()), *frame.bends(), ("wag", frame.wags()), ("torsion", frame.torsions()))
    for kind, found in kinds:
        named: dict[str, list] = {}
        for name, *entry in found:
            named.setdefault(name, []).append(entry)
        for name in sorted(named):
            made = _set(symmetry, f"{kind} {name}", kind, named[name], numbers[kind])
            numbers[kind] += len(made)
            sets.append(made)
    return tuple(sets)


def select(sets: Sequence[CoordinateSet], wanted: Sequence[str] = (),
           atoms: Sequence[int] = ()) -> tuple[CoordinateSet, ...]:
    """Return the sets named in `wanted`, and of them the coordinates whose atoms are all among `atoms` (from 0).

    A name is a set (`stretch C-O`, or `C-O` for short) or a kind (`bend`).  What matches nothing is an error.
    """
    chosen = list(sets)
    if wanted:
        for text in wanted:
            if not any(same_set(each.name, text) for each in sets):
                names = ", ".join(each.name for each in sets)
                has = f"the sets are {names}" if names else "the structure has no bonds (--bond I-J makes one)"
                raise VibsymError(f"no coordinates '{text}'; {has}")
        chosen = [each for each in sets if any(same_set(each.name, text) for text in wanted)]
    if len(atoms):
        chosen = [each.chosen(np.flatnonzero(np.isin(each.atoms, atoms).all(axis=1))) for each in chosen]
        chosen = [each for each in chosen if len(each)]
        if not chosen:
            numbers = ",".join(str(atom + 1) for atom in atoms)
            raise VibsymError(f"no internal coordinates among the atoms {numbers}; name atoms that are bonded")
    return renumbered(chosen)


def renumbered(sets: Sequence[CoordinateSet]) -> tuple[CoordinateSet, ...]:
    """Return the sets with their ids counted from 1 in each kind."""
    numbers = dict.fromkeys(KINDS, 1)
    result = []
    for each in sets:
        result.append(replace(each, first=numbers[each.kind]))
        numbers[each.kind] += len(each)
    return tuple(result)


def _set(symmetry: Symmetry, name: str, kind: str, entries: list, first: int) -> CoordinateSet:
    entries = sorted(entries, key=lambda entry: entry[0])
    atoms = np.array([entry[0] for entry in entries], dtype=int)
    if kind == "linear bend":
        from vibsym.vibrations.perpendicular import perpendicular_directions

        return CoordinateSet(name, kind, atoms, perpendicular_directions(symmetry, atoms), first=first)
    if kind in ("wag", "torsion"):
        parts = np.array([part for entry in entries for part, _ in entry[1]], dtype=int)
        weights = np.array([weight for entry in entries for _, weight in entry[1]])
        owners = np.repeat(np.arange(len(entries)), [len(entry[1]) for entry in entries])
        return CoordinateSet(name, kind, atoms, None, parts, weights, owners, first)
    return CoordinateSet(name, kind, atoms, first=first)


class _Frame:
    """Bonds and directions of a structure; each method yields (elements, atoms, ...) of the coordinates of a kind."""

    def __init__(self, symmetry: Symmetry, bonds: np.ndarray):
        self.labels = symmetry.structure.labels
        self.positions = symmetry.positions
        self.bonds = [tuple(sorted(bond)) for bond in bonds.tolist()]
        self.beside = neighbours(len(self.labels), bonds)
        triples = np.array([(i, j, k) for j, around in enumerate(self.beside) for i, k in combinations(around, 2)],
                           dtype=int).reshape(-1, 3)
        chain = np.array([len(around) == 2 for around in self.beside])[triples[:, 1]]
        straight = _cosines(self.positions, triples) < np.where(chain, NEARLY_STRAIGHT, STRAIGHT)
        self.triples = list(zip(map(tuple, triples.tolist()), straight.tolist(), strict=True))
        self.passed = {triple[1] for triple, flat in self.triples if flat and len(self.beside[triple[1]]) == 2}

    def stretches(self):
        """Yield (name, atoms) of the bonds."""
        for i, j in self.bonds:
            yield bond_name((self.labels[i], self.labels[j])), (i, j)

    def bends(self):
        """Return the linear bends and the bends as (kind, entries)."""
        linear = [triple for triple, flat in self.triples if flat and triple[1] in self.passed]
        bent = [triple for triple, flat in self.triples if not flat]
        return [(kind, [(bend_name(*(self.labels[atom] for atom in triple)), triple) for triple in found])
                for kind, found in (("linear bend", linear), ("bend", bent))]

    def wags(self):
        """Yield (name, atoms, parts) of planar centres with three or more neighbours."""
        for centre, around in enumerate(self.beside):
            if len(around) < 3:
                continue
            vectors = self.positions[around] - self.positions[centre]
            vectors = vectors / np.linalg.norm(vectors, axis=1)[:, None]
            _, sizes, axes = np.linalg.svd(vectors)
            if sizes[2] > min(PLANAR, sizes[1] / 2):         # no plane; a narrow cone round a line is none either
                continue
            name = wag_name(self.labels[centre], [self.labels[atom] for atom in around])
            angles = np.arctan2(vectors @ axes[1], vectors @ axes[0])
            order = np.argsort(angles)
            if len(around) > 3 and np.diff(angles[order], append=angles[order[0]] + 2 * np.pi).min() < NARROW:
                continue                              # no order round the centre that every operation keeps
            circle = [around[k] for k in order]
            for atoms, parts in _wags_round(centre, circle):
                yield name, atoms, parts

    def torsions(self):
        """Yield (name, atoms, parts) of every bond, or straight chain, with neighbours at both ends."""
        for chain in self._chains():
            a, b = chain[0], chain[-1]
            left = [i for i in self.beside[a] if i != chain[1]]
            right = [k for k in self.beside[b] if k != chain[-2]]
            left, right = self._not_straight(left, a, b), self._not_straight(right, b, a)
            parts = [((i, a, b, k), 1.0) for i in left for k in right if i != k]
            if parts:
                yield bond_name([self.labels[atom] for atom in chain]), chain, parts

    def _chains(self):
        """Yield the bonds, those through straight atoms joined to chains, each from its lower end."""
        for start in range(len(self.labels)):
            if start in self.passed or len(self.beside[start]) < 2:
                continue
            for step in self.beside[start]:
                chain = [start, step]
                while chain[-1] in self.passed and len(chain) <= len(self.labels):
                    one, other = self.beside[chain[-1]]
                    chain.append(other if one == chain[-2] else one)
                if start < chain[-1] and len(self.beside[chain[-1]]) > 1:
                    yield tuple(chain)

    def _not_straight(self, ends: list[int], centre: int, far: int) -> list[int]:
        if not ends:
            return ends
        cosines = _cosines(self.positions, np.array([(end, centre, far) for end in ends]))
        return [end for end, cosine in zip(ends, np.abs(cosines).tolist(), strict=True) if cosine < -STRAIGHT]


def _wags_round(centre: int, circle: list[int]):
    """Yield (atoms, [(triple, weight), ...]) of the wags of a planar centre whose neighbours follow each other as
    given."""
    if len(circle) == 3:
        a, b, c = sorted(circle)
        yield (centre, a, b, c), [((centre, a, b, c), 1.0)]
    elif len(circle) == 4:
        for pair, sides in ((circle[::2], circle[1::2]), (circle[1::2], circle[::2])):
            (p, q), (s, t) = sorted(pair), sorted(sides)
            yield (centre, p, q, s, t), [((centre, p, s, q), 0.5), ((centre, p, t, q), -0.5)]
    else:
        for k in range(len(circle)):
            a, b, c = sorted(circle[(k + shift) % len(circle)] for shift in range(3))
            yield (centre, a, b, c), [((centre, a, b, c), 1.0)]


def _cosines(positions: np.ndarray, triples: np.ndarray) -> np.ndarray:
    """Return the cosines of the angles i-j-k, (t,)."""
    u = positions[triples[:, 0]] - positions[triples[:, 1]]
    v = positions[triples[:, 2]] - positions[triples[:, 1]]
    return (u * v).sum(axis=1) / np.sqrt((u * u).sum(axis=1) * (v * v).sum(axis=1))
