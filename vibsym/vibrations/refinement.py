"""Refine the diagonal constants of a force field to assigned wavenumbers: damped least squares.

    minimise  Σ (ln(calculated/observed)/0.01)²  +  Σ (ln(scale)/0.5)²

over one scale for each set of coordinates; interactions, shares of diagonal constants, follow.  The second term damps
what the wavenumbers do not determine.  Isotopologues share the scales and are refined together.  K. Levenberg (1944),
D. W. Marquardt (1963).
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.forcefield import ForceField, plain_name
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.normal_modes import normal_modes

ERROR, SPREAD = 0.01, 0.5       # standard deviations of ln(wavenumber) and of ln(scale)
STEP = 1e-4                     # of ln(scale), for the derivatives by differences
MOST_ROUNDS = 30


@dataclass(frozen=True)
class Residual:
    """An assigned fundamental with its wavenumber before and after the refinement, cm-1."""

    structure: str
    mode: str
    species: str
    observed: float
    before: float
    after: float

    def to_dict(self) -> dict:
        """Return the row for JSON."""
        return {"structure": self.structure, "mode": self.mode, "species": self.species, "observed": self.observed,
                "before": round(self.before, 2), "after": round(self.after, 2)}


@dataclass(frozen=True, eq=False)
class Refinement:
    """The refined field, the scale of every set, and the residuals."""

    field: ForceField
    scales: dict[str, float]
    residuals: tuple[Residual, ...]

    def to_dict(self) -> dict:
        """Return what JSON holds."""
        return {"scales": {name: round(value, 5) for name, value in self.scales.items()},
                "residuals": [row.to_dict() for row in self.residuals]}


class _Molecule:
    """A molecule prepared for the loop: its sets and terms, and which modes were observed."""

    def __init__(self, symmetry: Symmetry, observed, field: ForceField):
        self.symmetry = symmetry
        self.name = symmetry.structure.formula
        self.sets = internal_coordinates(symmetry)
        self.names = [plain_name(each, symmetry.structure.symbols) for each in self.sets]
        self.terms = field.terms(symmetry.structure.symbols, symmetry.positions, self.sets)
        self.given = field.given(symmetry.structure.symbols, self.sets)
        modes = self.modes(field, {})
        self.seen = _matched(modes, observed, self.name)

    def modes(self, field: ForceField, scales: dict[str, float]):
        """Return the modes with the constants scaled set by set."""
        rows = np.concatenate([np.full(len(each) * each.components, scales.get(name, 1.0))
                               for each, name in zip(self.sets, self.names)])
        F = field.matrix_of(self.terms, self.given, rows)
        return normal_modes(self.symmetry, self.sets, F, shares=False)

    def values(self, field: ForceField, scales: dict[str, float]) -> np.ndarray:
        """Return the calculated wavenumbers (cm-1) of the modes that were observed, in their order."""
        by_species: dict[str, list[float]] = {}
        for mode in self.modes(field, scales):
            by_species.setdefault(mode.species, []).append(mode.wavenumber)
        return np.array([sorted(by_species[species], reverse=True)[place] for _, species, place, _ in self.seen])


def refine(field: ForceField, molecules: Sequence[tuple[Symmetry, Sequence]]) -> Refinement:
    """Return the field refined to pairs of a symmetry and its assigned modes."""
    prepared = [_Molecule(symmetry, observed, field) for symmetry, observed in molecules]
    names = list(dict.fromkeys(name for each in prepared for name in each.names))
    observed = np.log(np.concatenate([[value for *_, value in each.seen] for each in prepared]))
    if not len(observed):
        raise VibsymError("the assignment has no assigned fundamental to refine to")

    def calculated(p: np.ndarray) -> np.ndarray:
        scales = dict(zip(names, np.exp(p).tolist()))
        return np.concatenate([each.values(field, scales) for each in prepared])

    before = calculated(np.zeros(len(names)))
    p, values = _least_squares(calculated, before, observed, len(names))
    rows, start = [], 0
    for each in prepared:
        for mode, species, _, value in each.seen:
            rows.append(Residual(each.name, mode, species, value, float(before[start]), float(values[start])))
            start += 1
    scales = dict(zip(names, np.exp(p).tolist()))
    return Refinement(field.with_scales(scales), scales, tuple(rows))


def _least_squares(calculated: Callable, values: np.ndarray, observed: np.ndarray, size: int,
                   ) -> tuple[np.ndarray, np.ndarray]:
    """Return ln(scales) (size,) and the wavenumbers they give; `values` are those of scales 1, `observed` logarithms.

    The damping falls after each round that lowers the sum and rises until one does.
    """
    def logarithm(values: np.ndarray) -> np.ndarray:
        return np.log(np.maximum(values, 1e-3))

    def cost(p: np.ndarray, values: np.ndarray) -> tuple[float, np.ndarray]:
        r = (logarithm(values) - observed) / ERROR
        return float(r @ r + (p @ p) / SPREAD**2), r

    p, damping = np.zeros(size), 1e-3
    total, r = cost(p, values)
    for _ in range(MOST_ROUNDS):
        slopes = [(logarithm(calculated(p + STEP * unit)) - logarithm(values)) / STEP for unit in np.eye(size)]
        J = np.array(slopes).T / ERROR
        normal = J.T @ J + np.eye(size) / SPREAD**2
        slope = J.T @ r + p / SPREAD**2
        while damping < 1e8:
            step = np.linalg.solve(normal + damping * np.diag(np.diag(normal)), -slope).clip(-0.5, 0.5)
            tried = calculated(p + step)
            lower, residual = cost(p + step, tried)
            if lower < total:
                break
            damping *= 5
        else:
            break
        gain, p, values, total, r = total - lower, p + step, tried, lower, residual
        damping = max(damping / 5, 1e-9)
        if gain < 1e-6 * total + 1e-9:
            break
    return p, values


def _matched(modes, observed, name: str) -> list[tuple[str, str, int, float]]:
    """Return (mode, species, place, wavenumber): by the number of the mode, else by falling wavenumber."""
    places = {}
    counts: dict[str, int] = {}
    for mode in sorted(modes, key=lambda mode: -mode.wavenumber):
        places[mode.name] = mode.species, counts.get(mode.species, 0)
        counts[mode.species] = counts.get(mode.species, 0) + 1
    found = []
    for species in dict.fromkeys(each.species for each in observed):
        own = sorted((each for each in observed if each.species == species), key=lambda each: -each.wavenumber)
        if species not in counts or len(own) > counts[species]:
            raise VibsymError(f"{name}: {len(own)} assigned fundamentals of species {species}; "
                              f"the structure has {counts.get(species, 0)}")
        known = [places.get(each.name) for each in own]
        distinct = {place[1] for place in known if place}
        numbered = all(place and place[0] == species for place in known) and len(distinct) == len(own)
        for rank, (each, place) in enumerate(zip(own, known)):
            found.append((each.name, species, place[1] if numbered else rank, float(each.wavenumber)))
    return found
