"""The valence force field: the factors of `tables/force_field.csv` put together to the matrix F of a molecule.

A bond without an entry takes Badger's rule k = 1.86 mdyn/Å / (r - d_ij)³ (R. M. Badger, J. Chem. Phys. 2, 128 (1934);
3, 710 (1935)), d_ij by the periods of the two atoms; the result names it as fall-back.  The constants stand for
observed fundamentals, not for harmonic frequencies: anharmonicity is absorbed.

Units: stretch N/m; angles N/m Å² (1 aJ/rad² = 1 mdyn Å = 100 N/m Å²).
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from functools import cache
from typing import NamedTuple

import numpy as np

from vibsym.tables import read_table
from vibsym.vibrations.naming import bend_name, bond_name, wag_name
from vibsym.vibrations.surroundings import Surroundings, period
from vibsym.vibrations.valence import Terms, valence_terms

BADGER = 186.0  # N/m Å³
BRIDGE = 0.7  # constant of a bridging hydrogen by Badger's rule: half an electron pair a bond; 139 of 199 N/m in B2H6


class BondEntry(NamedTuple):
    """What the table says of a bond: factor, class, constant relative to that at the tabulated length."""

    name: str
    bond_class: str
    geometry: float
    listed: bool


class BondTable:
    """Tabulated stretches: class and length for every pair of elements, and d_ij (Å) for every pair of periods."""

    def __init__(self, lengths: Mapping[str, float], rows: Mapping[tuple[int, int], float]):
        self.rows = rows
        self.lengths = dict(lengths)
        self.classes: dict[str, dict[str, float]] = {}
        for name, length in lengths.items():
            _, elements, bond_class = name.split()
            self.classes.setdefault(elements, {})[bond_class] = length

    def shortest(self, i: str, j: str) -> float:
        """Return d_ij of Badger's rule for two elements, Å; periods above the fifth count as the fifth."""
        return self.rows[tuple(sorted((min(period(i), 5), min(period(j), 5))))]

    def order(self, around: Surroundings, i: int, j: int) -> str:
        """Return the class of a bond."""
        return around.bond_class(i, j, self.classes.get(around.elements(i, j), {}))

    def entry(self, around: Surroundings, i: int, j: int) -> BondEntry:
        """Return the entry of a bond; without one its constant is that of Badger's rule."""
        elements, bond_class = around.elements(i, j), self.order(around, i, j)
        name = f"stretch {elements} {bond_class}"
        r, shortest = around.distance(i, j), self.shortest(around.symbols[i], around.symbols[j])
        reach = max(r - shortest, 0.2)
        if name not in self.lengths:
            bridge = BRIDGE if bond_class == "Hbr" else 1.0
            return BondEntry(name, bond_class, bridge * BADGER / reach**3, False)
        return BondEntry(name, bond_class, (max(self.lengths[name] - shortest, 0.2) / reach) ** 3, True)

    def badger(self, name: str) -> float:
        """Return the constant of Badger's rule at the tabulated length of a stretch, N/m."""
        _, elements, _ = name.split()
        return BADGER / (self.lengths[name] - self.shortest(*elements.split("-"))) ** 3


@dataclass(frozen=True, eq=False)
class ForceField:
    """Factors and shares by name; what is not named has the factor 1, or the share 0.

    `constants` are diagonal constants given by the user for whole sets, in N/m (stretches) or N/m Å²; they replace
    d_q.  `scales` multiply the diagonal constants of sets (refinement).
    """

    values: Mapping[str, float]
    bonds: BondTable
    constants: Mapping[str, float] = field(default_factory=dict)
    scales: Mapping[str, float] = field(default_factory=dict)

    def terms(self, symbols: Sequence[str], positions, sets) -> Terms:
        """Return the terms that a molecule needs."""
        return valence_terms(symbols, positions, sets, self.bonds)

    def matrix(self, symbols: Sequence[str], positions, sets) -> np.ndarray:
        """Return F (m, m) over the rows of B, N/m for stretches, N/m Å and N/m Å² where angles take part."""
        return self.matrix_of(
            self.terms(symbols, positions, sets), self.given(symbols, sets), self.scale(symbols, sets)
        )

    def given(self, symbols, sets) -> np.ndarray:
        """Return (m,) the user's diagonal constants, NaN where there is none."""
        rows = [
            np.full(len(each) * each.components, self.constants.get(plain_name(each, symbols), np.nan))
            for each in sets
            if len(each)
        ]
        return np.concatenate(rows) if rows else np.zeros(0)

    def scale(self, symbols, sets) -> np.ndarray:
        """Return (m,) the scales of the rows."""
        rows = [
            np.full(len(each) * each.components, self.scales.get(plain_name(each, symbols), 1.0))
            for each in sets
            if len(each)
        ]
        return np.concatenate(rows) if rows else np.zeros(0)

    def product(self, names) -> float:
        """Return the product of factors with their powers."""
        value = 1.0
        for name, power in names:
            factor = self.values.get(name)
            if factor is not None:
                value *= factor**power
        return value

    def matrix_of(self, terms: Terms, given: np.ndarray | None = None, scales: np.ndarray | None = None) -> np.ndarray:
        """Return F of given terms; `given` (m,) replaces diagonal constants unless NaN, `scales` multiply."""
        diagonal = np.array([self.product(each.factors) * each.geometry for each in terms.diagonals])
        if given is not None:
            diagonal = np.where(np.isnan(given), diagonal, given)
        if scales is not None:
            diagonal = diagonal * scales
        F = np.diag(diagonal)
        for each in terms.interactions:
            share = self.values.get(each.share)
            if share:
                value = share * each.weight * np.sqrt(diagonal[each.first] * diagonal[each.second])
                F[each.first, each.second] += value
                F[each.second, each.first] += value
        for each in terms.repulsions:
            slopes, rows = np.array(each.slopes), np.array(each.rows)
            F[np.ix_(rows, rows)] += self.product(each.factors) * each.geometry * np.outer(slopes, slopes)
        return F

    def fallback(self, symbols: Sequence[str], positions, sets) -> tuple[dict, ...]:
        """Return the sets of bonds without an entry: set, rule, constant (N/m, the mean over the set)."""
        around, found = Surroundings(symbols, positions, sets), []
        for each in sets:
            if each.kind == "stretch" and plain_name(each, symbols) not in self.constants:
                entries = [self.bonds.entry(around, *atoms) for atoms in each.atoms.tolist()]
                lacking = [entry.geometry for entry in entries if not entry.listed]
                if lacking:
                    found.append({"set": each.name, "rule": "Badger", "constant": round(float(np.mean(lacking)), 1)})
        return tuple(found)

    def with_constants(self, constants: Mapping[str, float]) -> "ForceField":
        """Return the field with other diagonal constants for some sets."""
        return ForceField(self.values, self.bonds, {**self.constants, **constants}, self.scales)

    def with_scales(self, scales: Mapping[str, float]) -> "ForceField":
        """Return the field with the diagonal constants of some sets multiplied."""
        merged = {name: self.scales.get(name, 1.0) * value for name, value in scales.items()}
        return ForceField(self.values, self.bonds, self.constants, {**self.scales, **merged})


def plain_name(each, symbols: Sequence[str]) -> str:
    """Return the name of a set without isotope marks: the force field of C-D is that of C-H."""
    names = [symbols[atom] for atom in each.atoms[0].tolist()]
    if each.kind in ("stretch", "torsion"):
        return f"{each.kind} {bond_name(names)}"
    return f"{each.kind} {wag_name(names[0], names[1:]) if each.kind == 'wag' else bend_name(*names)}"


@cache
def standard_field() -> ForceField:
    """Return the field of `tables/force_field.csv`."""
    rows = read_table("force_field.csv")
    values = {row["name"]: float(row["value"]) for row in rows if not row["name"].startswith("badger ")}
    lengths = {row["name"]: float(row["length"]) for row in rows if row["length"]}
    periods = {
        tuple(map(int, row["name"].split()[1].split("-"))): float(row["value"])
        for row in rows
        if row["name"].startswith("badger ")
    }
    return ForceField(values, BondTable(lengths, periods))
