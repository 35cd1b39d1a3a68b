"""Symmetry coordinates: for each set the normalised, orthogonal combinations that belong to one component of one
species.

S = Σ_k c_k s_k with exact c_k (radicals, or cosines of 2πk/n where there is no simple radical); partners are
oriented alike in every set, so that G and F fall into one block for each component (E. B. Wilson, J. C. Decius, P.
C. Cross, Molecular Vibrations, 1955, ch. 6).  In a conjugate pair the two components are coupled, [[A, -B], [B, A]],
and count as one.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

from vibsym.groups.exact_vectors import exact_symmetry_vectors
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.internal import CoordinateSet, internal_coordinates, select
from vibsym.vibrations.redundancy import Independence, independence
from vibsym.vibrations.relations import Relation, relations
from vibsym.vibrations.representation import coordinate_basis


@dataclass(frozen=True)
class Term:
    """A coordinate with its exact coefficient (a sympy number) and the value of it."""

    coordinate: str
    exact: object
    value: float


@dataclass(frozen=True)
class SymmetryCoordinate:
    """One combination: copy `copy` of the species in the set, component `component`, both counted from 1."""

    species: str
    component: int
    copy: int
    set: str
    terms: tuple[Term, ...]

    def to_dict(self) -> dict:
        """Return the combination for JSON; `exact` is written so that sympy reads it."""
        return {"species": self.species, "component": self.component, "copy": self.copy, "set": self.set,
                "terms": [{"coordinate": term.coordinate, "exact": str(term.exact), "value": term.value}
                          for term in self.terms]}


@dataclass(frozen=True, eq=False)
class SymmetryCoordinates:
    """The chosen sets of a structure with their reductions, symmetry coordinates and redundancies."""

    symmetry: Symmetry
    sets: tuple[CoordinateSet, ...]

    @cached_property
    def independence(self) -> Independence:
        """Ranks, redundancies and what is missing, by species."""
        return independence(self.symmetry, self.sets)

    @cached_property
    def orbits(self) -> tuple[tuple[tuple[str, ...], ...], ...]:
        """For each set the ids of its symmetry-equivalent parts."""
        found = []
        for each in self.sets:
            d, ids = each.components, each.ids
            found.append(tuple(tuple(ids[d * place + k] for place in orbit.tolist() for k in range(d))
                               for orbit in coordinate_basis(self.symmetry, each).orbits()))
        return tuple(found)

    @cached_property
    def combinations(self) -> tuple[SymmetryCoordinate, ...]:
        """All symmetry coordinates: by set, species, copy, component."""
        labels = self.symmetry.group.image_labels
        found = []
        for each in self.sets:
            exact = exact_symmetry_vectors(coordinate_basis(self.symmetry, each))
            ids = each.ids
            for label, copies in exact.items():
                for number, components in enumerate(copies, 1):
                    for component, terms in enumerate(components, 1):
                        found.append(SymmetryCoordinate(labels.get(label, label), component, number, each.name, tuple(
                            Term(ids[place], number_, value) for place, number_, value in terms)))
        return tuple(found)

    @cached_property
    def relations(self) -> tuple[Relation, ...]:
        """The redundant combinations with their reasons."""
        return relations(self.symmetry, self.sets)

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        found = self.independence
        sets = [{"name": each.name, "kind": each.kind, "coordinates": _coordinates(each),
                 "orbits": [list(orbit) for orbit in orbits], "gamma": dict(gamma)}
                for each, orbits, gamma in zip(self.sets, self.orbits, found.gammas, strict=True)]
        return {"structure": self.symmetry.structure.to_dict(), "point_group": self.symmetry.to_dict(), "sets": sets,
                "symmetry_coordinates": [each.to_dict() for each in self.combinations],
                "redundancies": dict(found.redundancies), "relations": [each.to_dict() for each in self.relations],
                "missing": dict(found.missing)}


def symmetry_coordinates(symmetry: Symmetry, wanted: Sequence[str] = (), atoms: Sequence[int] = (),
                         bonds=None) -> SymmetryCoordinates:
    """Return the symmetry coordinates of a structure.

    `wanted` chooses sets by name or kind, `atoms` (from 0) restricts them to coordinates among these atoms, which
    must be all of the atoms that symmetry makes equivalent.
    """
    return SymmetryCoordinates(symmetry, select(internal_coordinates(symmetry, bonds), wanted, atoms))


def _coordinates(each: CoordinateSet) -> list[dict]:
    rows = [{"id": one.id, "atoms": [atom + 1 for atom in one.atoms]} for one in each.coordinates]
    if each.directions is not None:
        for row, direction in zip(rows, each.directions.reshape(-1, 3).round(12).tolist(), strict=True):
            row["direction"] = direction
    return rows
