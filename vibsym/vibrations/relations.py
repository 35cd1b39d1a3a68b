"""Redundancies one by one: which combinations of internal coordinates vanish, in which species, and why.

In each species the symmetry coordinates of all sets give the rows S B C (C the Cartesian symmetry vectors of one
component); what is redundant are the combinations of rows that vanish.  They are sought first among the angles at
one kind of centre, then in one kind of ring, then in everything together, so that each is told with the smallest
reason: angles at a centre whose sum is constant, a ring that has to stay closed (E. B. Wilson, J. C. Decius, P. C.
Cross, Molecular Vibrations, 1955, section 6-3).
"""

from collections.abc import Sequence
from dataclasses import dataclass

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
    for reason, orbits in (*_centres(rows), *_rings(rows), ("all chosen coordinates together", None)):
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

    def new_relations(self, reason: str, orbits: "set[int] | None") -> list[Relation]:
        """Return the relations among the coordinates of some orbits (None: all) that are not known yet."""
        labels, found = self.symmetry.group.image_labels, []
        for label, parts in self.vectors.items():
            used = [full for number, full in parts if orbits is None or number in orbits]
            if not used:
                continue
            stacked = np.concatenate(used)
            frame, norm = self.frames.get(label, (np.zeros((self.b.shape[1], 0)), 1))
            rows = stacked.reshape(-1, len(self.ids)) if norm == 2 else stacked[:, 0]
            null = _left_null_space(rows @ self.b @ frame, self.floor) @ rows
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
    return rows[sizes > 1e-6]


def _centres(rows: _Rows):
    """Yield (reason, orbits) for each kind of centre whose angles can be redundant by themselves."""
    first_of = rows.symmetry.permutations.min(axis=0)          # an orbit of atoms is named by its first
    at: dict[int, set[int]] = {}
    for number, (each, orbit) in enumerate(rows.orbits):
        if each.kind in ("bend", "wag"):
            centre = each.atoms[orbit[0]][1 if each.kind == "bend" else 0]
            at.setdefault(int(first_of[centre]), set()).add(number)
    for centre, orbits in sorted(at.items()):
        count = int((first_of == centre).sum())
        yield _angles_at(rows, centre, count, orbits), orbits


def _angles_at(rows: _Rows, centre: int, count: int, orbits: set[int]) -> str:
    """Say which sums of the angles at one centre, of `count` equivalent ones, are constant."""
    name = f"{rows.symmetry.structure.labels[centre]}{centre + 1}"
    if count > 1:
        name += f" and at each of {count - 1} equivalent" if count > 2 else " and at its equivalent"
    groups, start = [], {}
    place = 0
    for each in rows.sets:
        start[each.name] = place
        place += len(each) * each.components
    for number in sorted(orbits):
        each, orbit = rows.orbits[number]
        if each.kind == "bend":
            groups.append(start[each.name] + orbit[each.atoms[orbit][:, 1] == centre])
    angles = np.concatenate(groups) if groups else np.zeros(0, dtype=int)
    if not len(angles):
        return f"wags at {name}"
    number_of = f"the {len(angles)} angles at {name}"
    if np.abs(rows.b[angles].sum(axis=0)).max() < 1e-6 and len(_left_null_space(rows.b[angles], rows.floor)) == 1:
        return f"{number_of}: their sum is constant"
    constant = [len(group) for group in groups if np.abs(rows.b[group].sum(axis=0)).max() < 1e-6]
    planes = _circles(rows, centre, angles)
    if planes:
        sizes = ", ".join(f"{planes.count(size)} of {size}" for size in sorted(set(planes)))
        return f"{number_of}: angles that make a full circle in a plane add up to 360° (circles: {sizes})"
    if constant:
        return f"{number_of}: constant sums of {' and of '.join(map(str, constant))} equivalent angles"
    return f"{number_of}: weighted sums of them are constant"


def _circles(rows: _Rows, centre: int, angles: np.ndarray) -> list[int]:
    """Return the sizes of the sets of angles in one plane that go round a centre."""
    positions = rows.symmetry.positions
    ends = [each.atoms[:, [0, 2]] if each.kind == "bend" else np.repeat(each.atoms[:, :2], each.components, axis=0)
            for each in rows.sets]
    atoms = np.concatenate(ends)[angles]
    first, last = (positions[atoms[:, k]] - positions[centre] for k in (0, 1))
    normals = np.cross(first, last)
    normals /= np.linalg.norm(normals, axis=1)[:, None]
    alike = np.abs(normals @ normals.T) > 1 - 1e-6
    sizes, seen = [], np.zeros(len(angles), dtype=bool)
    for k in range(len(angles)):
        plane = np.flatnonzero(alike[k])
        if not seen[k] and len(plane) >= 3 and np.abs(rows.b[angles[plane]].sum(axis=0)).max() < 1e-6:
            sizes.append(len(plane))
        seen[plane] = True
    return sizes


def _rings(rows: _Rows):
    """Yield (reason, orbits) for each kind of ring: its stretches, bends and torsions are bound by its closure."""
    symmetry = rows.symmetry
    rings = [frozenset(ring) for ring in find_rings(len(symmetry.positions), symmetric_bonds(symmetry))]
    seen: set[frozenset] = set()
    for ring in rings:
        if ring in seen:
            continue
        images = {frozenset(row) for row in symmetry.permutations[:, sorted(ring)].tolist()}
        seen |= images
        inside = {number for number, (each, orbit) in enumerate(rows.orbits)
                  if each.kind in ("stretch", "bend", "torsion")
                  and any(image.issuperset(each.atoms[orbit[0]].tolist()) for image in images)}
        beside = {number for number, (each, orbit) in enumerate(rows.orbits)
                  if each.kind == "bend" and any(each.atoms[orbit[0]][1] in image for image in images)}
        names = "-".join(f"{symmetry.structure.labels[atom]}{atom + 1}" for atom in sorted(ring))
        also = f" (and {len(images) - 1} equivalent)" if len(images) > 1 else ""
        yield f"the ring of {names}{also} stays closed", inside
        yield f"the ring of {names}{also} stays closed, with the angles at its atoms", inside | beside
