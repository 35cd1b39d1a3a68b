"""Errors that the modes of one set share, and the assignment that costs least together with them.

If the constant of a set (`stretch C-F`) is too large, all modes that the set dominates are estimated too high, and
their order stays right.  So ln(observed/estimate) of such a mode is d + e: d is common to the modes of the set in this
molecule, e is its own; the variances are c s² and (1 - c) s², with the spread s of the mode and the part c of
tables/estimate_errors.csv, both measured on molecules left out of the calibration.  The total cost is

    Σ_lines h((ln(observed/estimate) - d)/(s (1 - c)^(1/2))) + Σ_sets d²/(c s²) + what else `assignment_costs.py` names,

least over the assignment and over d.  Two steps are taken in turn until the cost stands: the matching for given d
(exact, `matching.py`), then d for a given matching (P. J. Huber's weights).  Each finds a local optimum, so they start
at d = 0 and again with each set one standard error up and down; `tests/test_assign.py` compares with every assignment.
A set with one mode shares nothing: its whole error is the mode's own.
"""

from collections.abc import Callable

import numpy as np

from vibsym.evidence.matching import Costs, Matching, cheapest
from vibsym.vibrations.estimates import Estimates

ROUNDS = 8
BEND = 1.5  # spreads beyond which the hump is straight


class CommonErrors:
    """The sets whose modes share an error, the spreads, and how the costs follow the common errors."""

    def __init__(self, bands_seen: np.ndarray, estimates: Estimates, costs: Callable[[np.ndarray], Costs]):
        """`bands_seen` (n,) holds the mean wavenumber of each band, `costs` returns the costs for shifts (f,)."""
        self.member = sharing(estimates)
        parts = np.array([estimates.common(mode) for mode in estimates.modes])
        spread = np.array([estimates.spread(mode) for mode in estimates.modes])
        self.own = spread * np.sqrt(np.where(self.member >= 0, 1 - parts, 1.0))
        self.groups = [np.flatnonzero(self.member == group) for group in range(self.member.max(initial=-1) + 1)]
        self.wide = np.array([np.mean(parts[group] * spread[group] ** 2) for group in self.groups])
        expected = np.array([max(mode.wavenumber, 1.0) for mode in estimates.modes])
        self.distance = np.log(bands_seen[:, None] / expected)
        self.costs = costs

    def shifts(self, common: np.ndarray) -> np.ndarray:
        """Return the common error of every mode (f,), 0 for modes that share none."""
        return np.append(common, 0.0)[self.member]

    def fitted(self, places: np.ndarray, common: np.ndarray) -> np.ndarray:
        """Return the common errors of least cost for an assignment."""
        rows = np.flatnonzero(places >= 0)
        columns = places[rows]
        number = np.bincount(columns, minlength=len(self.member))[columns]
        found = common.copy()
        for group in range(len(self.groups)):
            inside = self.member[columns] == group
            away = self.distance[rows[inside], columns[inside]]
            own = self.own[columns[inside]]
            for _ in range(ROUNDS):
                z = np.abs(away - found[group]) / own
                weight = np.where(z <= BEND, 1.0, BEND / np.maximum(z, BEND)) / (own**2 * number[inside])
                found[group] = (weight @ away) / (weight.sum() + 1 / self.wide[group])
        return found

    def cheapest(self, allowed: np.ndarray | None = None, start: np.ndarray | None = None):
        """Return (matching with its total cost, common errors), or None where nothing is allowed."""
        common = np.zeros(len(self.groups)) if start is None else start
        best = None
        for _ in range(ROUNDS):
            matching = cheapest(self.costs(self.shifts(common)), allowed)
            if matching is None:
                return best
            total = matching.cost + float((common**2 / self.wide).sum())
            if best is not None and total > best[0].cost - 1e-6:
                break
            best = Matching(matching.places, matching.whole, total), common
            common = self.fitted(matching.places, common)
        return best

    def optimum(self, allowed: np.ndarray | None = None):
        """Return the best of the starts: no common error, and one spread up or down in one set at a time."""
        found = [self.cheapest(allowed)]
        if found[0] is None:
            return None
        for group, wide in enumerate(self.wide):
            for sign in (-1.0, 1.0):
                start = found[0][1].copy()
                start[group] += sign * np.sqrt(wide)
                found.append(self.cheapest(allowed, start))
        return min((each for each in found if each is not None), key=lambda each: each[0].cost)


def sharing(estimates: Estimates) -> np.ndarray:
    """Return (f,) the number of the set that dominates a mode together with others, -1 for modes that share none."""
    names = [
        mode.shares[0][0] if mode.shares and estimates.common(mode) > 0 else "" for mode in estimates.modes
    ]
    shared = [name for name in dict.fromkeys(names) if name and names.count(name) > 1]
    return np.array([shared.index(name) if name in shared else -1 for name in names], dtype=int)
