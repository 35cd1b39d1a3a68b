"""Redundancies one by one: which combinations of internal coordinates vanish, in which species, and why.

In each species the symmetry coordinates of all sets give the rows S B C (C the Cartesian symmetry vectors of one
component); what is redundant are the combinations of rows that vanish.  They are sought first among the angles at
one kind of centre, then in one kind of ring, then in everything together, so that each is told with the smallest
reason: angles at a centre whose sum is constant, a ring that has to stay closed (E. B. Wilson, J. C. Decius, P. C.
Cross, Molecular Vibrations, 1955, section 6-3).
"""

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import combinations

import numpy as np

from vibsym.groups.projection import symmetry_vectors
from vibsym.structures.equivalent_bonds import symmetric_bonds
from vibsym.structures.rings import find_rings
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.bmatrix import b_matrix
from vibsym.vibrations.internal import CoordinateSet
from vibsym.vibrations.redundancy import RANK, species_frames
from vibsym.vibrations.representation import coordinate_basis

SMALL = 1e-9
ALONG = 1e-3                              # a relation nearer to known ones is one of them, told again with a rounding
CENTRED = {"bend": 1, "wag": 0}           # where the atoms of a coordinate name the centre
CONSTANT = 1e-5                           # per Å: a sum of angles that changes less is constant (files round to 1e-6 Å)
FLAT = 1e-5                               # atoms nearer to a plane through the centre (unit vectors) lie in it


@dataclass(frozen=True)
class Relation:
    """A redundant combination (first component of its species): ids with coefficients, normalised, and the reason."""

    species: str
    reason: str
    terms: tuple[tuple[str, float], ...]

    def to_dict(self) -> dict:
        """Return the relation for JSON."""
        return {"species": self.species, "reason": self.reason,
                "terms": [{"coordinate": name, "value": round(value, 12)} for name, value in self.terms]}


def relations(symmetry: Symmetry, sets: Sequence[CoordinateSet]) -> tuple[Relation, ...]:
    """Return every redundancy among the sets, as many in each species as `independence` counts."""
    if not sets:
        return ()
    rows = _Rows(symmetry, sets)
    found = []
    for reason, local in _centres(rows):
        found += rows.new_relations(reason, None, local)
    for reason, orbits in (*_rings(rows), ("all chosen coordinates together", None)):
        found += rows.new_relations(reason, orbits)
    order = {label: k for k, label in enumerate(symmetry.group.labels)}
    return tuple(sorted(found, key=lambda relation: order[relation.species]))


class _Rows:
    """The symmetry coordinates of all sets by species: vectors over the coordinates, rows S B C, the orbit of each."""

    def __init__(self, symmetry: Symmetry, sets: Sequence[CoordinateSet]):
        self.symmetry, self.sets = symmetry, sets
        self.ids = [name for each in sets for name in each.ids]
        self.b = b_matrix(symmetry.positions, sets)
        self.floor = RANK * np.linalg.norm(self.b, 2)
        self.orbits: list[tuple[CoordinateSet, np.ndarray]] = []
        self.vectors: dict[str, list] = {}
        start = 0
        for each in sets:
            self._take_in(each, start)
            start += len(each) * each.components
        self.frames = {label: (frame, norm) for label, frame, norm in species_frames(symmetry)}
        self.known: dict[str, np.ndarray] = {}

    def _take_in(self, each: CoordinateSet, start: int) -> None:
        basis = coordinate_basis(self.symmetry, each)
        for orbit in basis.orbits():
            number = len(self.orbits)
            self.orbits.append((each, orbit))
            columns = start + (each.components * orbit[:, None] + np.arange(each.components)).ravel()
            for label, vectors in symmetry_vectors(basis.restrict(orbit)).items():
                full = np.zeros((*vectors.shape[:2], len(self.ids)))
                full[..., columns] = vectors
                self.vectors.setdefault(label, []).append((number, full))

    def new_relations(self, reason: str, orbits: "set[int] | None", local: "np.ndarray | None" = None
                      ) -> list[Relation]:
        """Return the relations among the coordinates of some orbits (None: all) that are not known yet.

        `local` are orthonormal relations (n, m) that the operations carry into each other: only what they span counts.
        """
        labels, found = self.symmetry.group.image_labels, []
        for label, parts in self.vectors.items():
            used = [full for number, full in parts if orbits is None or number in orbits]
            if not used:
                continue
            stacked = np.concatenate(used)
            frame, norm = self.frames.get(label, (np.zeros((self.b.shape[1], 0)), 1))
            rows = stacked.reshape(-1, len(self.ids)) if norm == 2 else stacked[:, 0]
            if local is None:
                null = _left_null_space(rows @ self.b @ frame, self.floor) @ rows
            else:                                          # a component lies within them or across: cosines 1 or 0
                vectors, cosines, _ = np.linalg.svd(rows @ local.T, full_matrices=False)
                null = vectors[:, cosines > 0.5].T @ rows
            known = self.known.get(label, np.zeros((0, len(self.ids))))
            null = null - (null @ known.T) @ known
            new = _independent(null)
            self.known[label] = np.concatenate([known, new])
            shown = new[::2] if norm == 2 else new
            found += [Relation(labels.get(label, label), reason, self._terms(vector)) for vector in shown]
        return found

    def _terms(self, vector: np.ndarray) -> tuple[tuple[str, float], ...]:
        used = np.flatnonzero(np.abs(vector) > SMALL)
        vector = vector * np.sign(vector[used[0]])
        return tuple((self.ids[k], float(vector[k])) for k in used)


def _left_null_space(matrix: np.ndarray, floor: float) -> np.ndarray:
    """Return orthonormal rows (n, m) with rows @ matrix = 0."""
    if not matrix.shape[1]:
        return np.eye(len(matrix))
    u, sizes, _ = np.linalg.svd(matrix)
    return u[:, int((sizes > floor).sum()):].T


def _independent(vectors: np.ndarray) -> np.ndarray:
    """Return orthonormal rows that span the given ones."""
    if not len(vectors):
        return vectors
    _, sizes, rows = np.linalg.svd(vectors, full_matrices=False)
    return rows[sizes > ALONG]


def _centres(rows: _Rows):
    """Yield (reason, relations) for each kind of centre: those among its angles, those of its wags, those of both."""
    first_of = rows.symmetry.permutations.min(axis=0)          # an orbit of atoms is named by its first
    centre_of, bends, wags, first = np.full(len(rows.ids), -1), [], [], 0
    for each in rows.sets:
        if each.kind in CENTRED:
            places = np.arange(first, first + len(each))
            centre_of[places] = each.atoms[:, CENTRED[each.kind]]
            (bends if each.kind == "bend" else wags).append(places)
        first += len(each) * each.components
    bends, wags = (np.concatenate(found) if found else np.zeros(0, dtype=int) for found in (bends, wags))
    for centre in np.unique(first_of[centre_of[centre_of >= 0]]).tolist():
        atoms = np.flatnonzero(first_of == centre)
        for kind, chosen in (("angles", bends), ("wags", wags), ("both", np.concatenate([bends, wags]))):
            local = [_local_relations(rows, chosen[centre_of[chosen] == atom]) for atom in atoms.tolist()]
            if len(local[0]):
                name = _centre_name(rows, centre, len(atoms))
                own = chosen[centre_of[chosen] == centre]
                yield (_angles_at(rows, centre, own, len(local[0]), name) if kind == "angles" else
                       f"the {len(own)} {'wags' if kind == 'wags' else 'angles and wags'} at {name}: weighted sums of "
                       "them are constant"), np.concatenate(local)


def _local_relations(rows: _Rows, places: np.ndarray) -> np.ndarray:
    """Return orthonormal combinations (n, m) of the coordinates at some places that vanish."""
    null = _left_null_space(rows.b[places], rows.floor)
    full = np.zeros((len(null), len(rows.ids)))
    full[:, places] = null
    return full


def _centre_name(rows: _Rows, centre: int, count: int) -> str:
    name = f"{rows.symmetry.structure.labels[centre]}{centre + 1}"
    if count > 1:
        name += f" and at each of {count - 1} equivalent" if count > 2 else " and at its equivalent"
    return name


def _angles_at(rows: _Rows, centre: int, angles: np.ndarray, null: int, name: str) -> str:
    """Say which sums of the angles at a centre are constant; `null` of them are independent."""
    number_of = f"the {len(angles)} angles at {name}"
    if null == 1 and np.abs(rows.b[angles].sum(axis=0)).max() < CONSTANT:
        return f"{number_of}: their sum is constant"
    planes = _circles(rows, centre, angles)
    if planes:
        sizes = ", ".join(f"{planes.count(size)} of {size}" for size in sorted(set(planes)))
        also = "; weighted sums of the others are constant too" if null > len(planes) else ""
        return f"{number_of}: angles that make a full circle in a plane add up to 360° (circles: {sizes}){also}"
    return f"{number_of}: " + ("a weighted sum of them is constant" if null == 1 else
                               "weighted sums of them are constant")


def _circles(rows: _Rows, centre: int, angles: np.ndarray) -> list[int]:
    """Return how many angles each plane through a centre holds that follow each other once round it."""
    ends = [each.atoms[:, [0, 2]] if each.kind == "bend" else np.repeat(each.atoms[:, :2], each.components, axis=0)
            for each in rows.sets]
    known = {frozenset(pair) for pair in np.concatenate(ends)[angles].tolist()}
    around = sorted(frozenset().union(*known))
    units = rows.symmetry.positions[around] - rows.symmetry.positions[centre]
    units /= np.linalg.norm(units, axis=1)[:, None]
    found = {}
    for i, j in combinations(range(len(around)), 2):
        normal = np.cross(units[i], units[j])
        if np.linalg.norm(normal) < SMALL:
            continue
        normal /= np.linalg.norm(normal)
        plane = np.flatnonzero(np.abs(units @ normal) < FLAT)
        if len(plane) < 3 or tuple(plane) in found:
            continue
        turn = np.arctan2(units[plane] @ np.cross(normal, units[i]), units[plane] @ units[i])
        circle = [around[k] for k in plane[np.argsort(turn)]]
        steps = np.diff(np.sort(turn), append=turn.min() + 2 * np.pi)
        closed = all(frozenset(pair) in known for pair in zip(circle, circle[1:] + circle[:1], strict=True))
        found[tuple(plane)] = len(circle) if closed and steps.max() < np.pi - FLAT else 0
    return [size for size in found.values() if size]


def _rings(rows: _Rows):
    """Yield (reason, orbits) for each kind of ring: its stretches, bends and torsions are bound by its closure."""
    symmetry = rows.symmetry
    seen: set[frozenset] = set()
    for in_turn in find_rings(len(symmetry.positions), symmetric_bonds(symmetry)):
        ring = frozenset(in_turn)
        if ring in seen:
            continue
        images = {frozenset(row) for row in symmetry.permutations[:, sorted(ring)].tolist()}
        seen |= images
        inside = {number for number, (each, orbit) in enumerate(rows.orbits)
                  if each.kind in ("stretch", "bend", "torsion")
                  and any(image.issuperset(each.atoms[orbit[0]].tolist()) for image in images)}
        beside = {number for number, (each, orbit) in enumerate(rows.orbits)
                  if each.kind in CENTRED and any(each.atoms[orbit[0]][CENTRED[each.kind]] in image
                                                  for image in images)}
        names = "-".join(f"{symmetry.structure.labels[atom]}{atom + 1}" for atom in in_turn)
        also = f" (and {len(images) - 1} equivalent)" if len(images) > 1 else ""
        closed = f"the ring of {names}{also} stays closed"
        yield closed + ("; the sum of its angles is constant" if _constant_sum(rows, ring) else ""), inside
        yield f"{closed}, with the angles and wags at its atoms", inside | beside


def _constant_sum(rows: _Rows, ring: frozenset[int]) -> bool:
    """Tell whether the angles inside a ring are chosen and add up to a constant: it is planar."""
    total, number, first = np.zeros(rows.b.shape[1]), 0, 0
    for each in rows.sets:
        if each.kind == "bend":
            inside = np.isin(each.atoms, list(ring)).all(axis=1)
            total, number = total + rows.b[first:first + len(each)][inside].sum(axis=0), number + int(inside.sum())
        first += len(each) * each.components
    return number == len(ring) and np.abs(total).max() < CONSTANT
