"""Point groups in their standard orientation: operations, classes, species; and the way from symbol to group.

A finite group is a `PointGroup`; C∞v, D∞h and Kh are `InfiniteGroup` (vibsym/groups/infinite.py), with the same
attributes where they make sense.  Species and classes themselves stand in vibsym/groups/species.py.
Source of labels and order: E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), appendix X;
R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955).
"""

from functools import cache, cached_property

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.axial import GroupPlan, SpeciesPlan, axial_group
from vibsym.groups.functions import functions_of_species
from vibsym.groups.species import OperationClass, Species
from vibsym.groups.symbols import POLYHEDRAL, group_symbol, plain_label


class PointGroup:
    """A finite point group; get one with `point_group(symbol)`, which keeps it.

    `matrices` (h, 3, 3), class by class, the identity first; `operation_symbols`, `classes`, `class_of` (h,),
    `class_sizes` (c,), `species` in table order.
    """

    infinite = False

    def __init__(self, symbol: str, plan: GroupPlan):
        self.symbol = symbol
        self.order = len(plan.matrices)
        self.matrices = plan.matrices
        self.matrices.setflags(write=False)
        self.operation_symbols = plan.operation_symbols
        self.classes = tuple(OperationClass(name, len(members), members) for name, members in plan.classes)
        self.class_sizes = np.array([c.size for c in self.classes])
        self.class_of = np.repeat(np.arange(len(self.classes)), self.class_sizes)
        self.determinants = np.round(np.linalg.det(plan.matrices))
        self._plans = {species.label: species for species in plan.species}
        self.image_labels = {label: label for label in self._plans}

    @property
    def image(self) -> "PointGroup":
        """The finite group in which representations are reduced: the group itself."""
        return self

    @property
    def chiral(self) -> bool:
        """No improper operation."""
        return bool(np.all(self.determinants > 0))

    @property
    def centrosymmetric(self) -> bool:
        """The inversion is among the operations."""
        return "i" in self.operation_symbols

    @cached_property
    def character_rows(self) -> np.ndarray:
        """Characters of every species, (species, classes)."""
        first = [c.members[0] for c in self.classes]
        return np.array([np.einsum("gii->g", plan.matrices[first]) for plan in self._plans.values()])

    @cached_property
    def species(self) -> tuple[Species, ...]:
        """The species in table order, the totally symmetric one first."""
        rows = self.character_rows
        plans = list(self._plans.values())
        scales = [plan.matrices.shape[1] / (2 if plan.pair else 1) for plan in plans]
        found = functions_of_species(self.symbol, self.matrices, [
            (row[self.class_of], scale) for row, scale in zip(rows, scales, strict=True)])
        return tuple(Species(plan.label, plan.matrices.shape[1], tuple(row.tolist()), plan.pair,
                             totally_symmetric=k == 0, **functions)
                     for k, (plan, row, functions) in enumerate(zip(plans, rows, found, strict=True)))

    @cached_property
    def norms(self) -> np.ndarray:
        """Norm of every species: 2 for conjugate pairs, else 1."""
        return np.array([2 if plan.pair else 1 for plan in self._plans.values()])

    @property
    def labels(self) -> tuple[str, ...]:
        """Labels of the species in table order."""
        return tuple(self._plans)

    def species_named(self, label: str) -> Species:
        """Return the species with a label as typed (`F2` for T2, `A2″`); an unknown one is an error with the list."""
        plain = plain_label(label)
        for species in self.species:
            if species.label == plain:
                return species
        raise VibsymError(f"no species '{label}' in {self.symbol}; it has {', '.join(self._plans)}")

    def irrep(self, label: str) -> np.ndarray:
        """Return the real orthogonal matrices (h, d, d) of a species; a conjugate pair is one of two dimensions."""
        return self._plans[label].matrices

    @cached_property
    def product(self) -> np.ndarray:
        """Multiplication table (h, h): matrices[product[a, b]] = matrices[a] @ matrices[b]."""
        if self.order == 1:
            return np.zeros((1, 1), dtype=int)
        weights = np.random.default_rng(1997).normal(size=(3, 3))    # a generic number for each matrix
        keys = np.einsum("aij,ij->a", self.matrices, weights)
        order = np.argsort(keys)
        keys = keys[order]
        products = np.einsum("aij,bjk,ik->ab", self.matrices, self.matrices, weights, optimize=True)
        after = np.searchsorted(keys, products).clip(1, self.order - 1)
        return order[after - (products - keys[after - 1] < keys[after] - products)]

    @cached_property
    def inverse(self) -> np.ndarray:
        """Place of the inverse of every operation, (h,)."""
        return np.argmax(self.product == 0, axis=1)

    def plan(self, label: str) -> SpeciesPlan:
        """Return how the matrices of a species are built, from which they are written exactly."""
        return self._plans[label]

    def exact_irrep(self, label: str) -> list:
        """Return the matrices of a species with exact sympy entries (nested lists, one for each operation)."""
        from vibsym.groups.exact import exact_matrices

        return exact_matrices(self._plans[label])

    def exact_characters(self, label: str) -> list:
        """Return the characters of a species as exact sympy numbers, one for each class."""
        from vibsym.groups.exact import exact_trace

        return [exact_trace(self._plans[label], c.members[0]) for c in self.classes]

    def __repr__(self) -> str:
        return f"<PointGroup {self.symbol}, order {self.order}>"


def point_group(symbol: str):
    """Return the point group with a Schoenflies symbol, made once and kept.

    >>> point_group("C3i").symbol, point_group("D3h").order
    ('S6', 12)
    """
    return _group(group_symbol(symbol))


@cache
def _group(symbol: str):
    if symbol in ("C∞v", "D∞h", "Kh"):
        from vibsym.groups.infinite import IMAGES, InfiniteGroup

        return InfiniteGroup(symbol, _group(IMAGES[symbol]))
    if symbol in POLYHEDRAL:
        from vibsym.groups.polyhedral import polyhedral_group

        return PointGroup(symbol, polyhedral_group(symbol))
    if symbol in ("Cs", "Ci"):
        return PointGroup(symbol, axial_group("C", 1, "h") if symbol == "Cs" else axial_group("S", 2, ""))
    letter, suffix = symbol[0], symbol[-1] if symbol[-1].isalpha() else ""
    return PointGroup(symbol, axial_group(letter, int(symbol[1:].rstrip("vhd")), suffix))
