"""The integer program behind an explanation, solved exactly.

Unknowns are whole numbers: w[k, a] items of kind k taken as a whole by fundamentals of activity a; l[k, a] and r[k, a]
infrared and Raman halves of broken pairs; u[k] unexplained; b[k] broken; z = 1 if the allowance for chance is used; v
pairs broken beyond it.

    sum_a w[k, a] + b[k] + u[k] = n[k]        sum_a l[k, a] = b[k] = sum_a r[k, a]
    sum_k (w + l + r)[k, a] <= capacity[a]    sum_k b[k] <= chance * z + v

Scores that come one after another (total, unexplained, ...) are minimised one after another.  All coefficients of a
score are whole numbers, so a lower bound above value - 1 proves the value to be the least; it is checked each time.
"""

from functools import lru_cache
from math import ceil
from typing import NamedTuple

import numpy as np

from vibsym.evidence.weights import Kind, cost_of, unexplained_cost


class Solution(NamedTuple):
    """How many items of each kind take which activity: whole, or as the halves of broken pairs; twice the total."""

    whole: dict
    broken: dict
    halves: int


class _Unknown(NamedTuple):
    """One unknown: its role, its kind and activity, its largest value, and what it adds to the four scores."""

    role: str           # whole, infrared half, raman half, unexplained, broken, chance, beyond
    kind: int
    activity: int
    upper: int
    halves: int = 0
    polarised: int = 0  # polarised lines on totally symmetric fundamentals
    covered: int = 0    # predicted fundamentals seen wherever they should be
    odd: int = 0        # lines found depolarised on totally symmetric fundamentals: allowed, but taken last


@lru_cache(maxsize=512)
def least(kinds: tuple, capacities: tuple, by_chance: int, spectra: tuple, order: tuple) -> Solution:
    """Return the least explanation as numbers.

    `kinds` and `capacities` are sorted (kind, number) and (activity, number); `order` lists the kinds, as positions in
    `kinds`, in the order of their first items.  Equal questions (isomers of equal prediction) are answered once.
    """
    unknowns = _unknowns(kinds, capacities, by_chance, spectra)
    if not unknowns:
        return Solution({}, {}, 0)
    programme = _Programme(unknowns, kinds, capacities, by_chance)
    column = {name: np.array([getattr(each, name) for each in unknowns], float)
              for name in ("halves", "polarised", "covered", "odd")}
    left = np.array([each.role == "unexplained" for each in unknowns], float)
    late = left * [len(kinds) - order.index(each.kind) if each.role == "unexplained" else 0 for each in unknowns]
    size = sum(number for _, number in kinds) + sum(number for _, number in capacities) + 1
    programme.minimise((column["halves"] * size + left) * size - column["polarised"])
    programme.keep(column["halves"], left, column["polarised"])
    programme.minimise((column["odd"] - column["covered"] * size) * size * len(kinds) + late)
    programme.keep(column["odd"], column["covered"], late)
    programme.minimise(np.array([(each.kind + 1) * (each.activity + 1) for each in unknowns], float))  # for one answer
    return _solution(unknowns, programme.answer, kinds, capacities, round(float(column["halves"] @ programme.answer)))


def _unknowns(kinds, capacities, by_chance: int, spectra) -> list[_Unknown]:
    unknowns, pairs = [], 0
    for k, (kind, number) in enumerate(kinds):
        unknowns.append(_Unknown("unexplained", k, -1, number, unexplained_cost(kind)))
        sides = [("whole", kind)]
        if kind.infrared and kind.raman:
            pairs += number
            unknowns.append(_Unknown("broken", k, -1, number))
            sides += [("infrared half", Kind(True, False, kind.weak_infrared, False, False, False)),
                      ("raman half", kind._replace(infrared=False, weak_infrared=False))]
        for role, side in sides:
            for a, (activity, capacity) in enumerate(capacities):
                halves = cost_of(side, activity)
                if halves is not None:
                    unknowns.append(_Unknown(
                        role, k, a, min(number, capacity), halves,
                        int(side.polarised and activity.totally_symmetric and activity.raman),
                        _covered(side, activity, spectra), int(side.depolarised and activity.totally_symmetric)))
    if pairs:
        unknowns += [_Unknown("chance", -1, -1, int(by_chance > 0), 1), _Unknown("beyond", -1, -1, pairs, 2)]
    return unknowns


def _covered(side, activity, spectra) -> int:
    """Whether an item shows all that its fundamental should show in the spectra that were observed at its place."""
    infrared, raman = activity.infrared and "IR" in spectra, activity.raman and "Raman" in spectra
    if not (infrared or raman):
        return 0
    return int(side.one_sided or (side.infrared >= infrared and side.raman >= raman))


class _Programme:
    """The constraints, and the scores fixed so far."""

    def __init__(self, unknowns, kinds, capacities, by_chance: int):
        size = len(unknowns)
        rows = [np.zeros(size) for _ in range(3 * len(kinds) + len(capacities) + 1)]
        lower, upper = np.zeros(len(rows)), np.zeros(len(rows))
        for k, (_, number) in enumerate(kinds):
            lower[3 * k] = upper[3 * k] = number
        first = 3 * len(kinds)
        for a, (_, capacity) in enumerate(capacities):
            upper[first + a] = capacity
        lower[-1] = -np.inf
        for j, each in enumerate(unknowns):
            if each.role in ("whole", "unexplained", "broken"):
                rows[3 * each.kind][j] = 1
            if each.role == "broken":
                rows[3 * each.kind + 1][j] = rows[3 * each.kind + 2][j] = -1
                rows[-1][j] = 1
            if each.role.endswith("half"):
                rows[3 * each.kind + (1 if each.role == "infrared half" else 2)][j] = 1
            if each.activity >= 0:
                rows[first + each.activity][j] = 1
            if each.role == "chance":
                rows[-1][j] = -by_chance
            if each.role == "beyond":
                rows[-1][j] = -1
        self.rows, self.lower, self.upper = rows, list(lower), list(upper)
        self.most = np.array([each.upper for each in unknowns], float)
        self.answer = np.zeros(size)

    def minimise(self, score: np.ndarray) -> None:
        """Find whole numbers with the least score, and prove by a lower bound that there is no smaller one.

        Without the demand for whole numbers the program is quicker and nearly always gives them; if not, branch and
        bound follows.
        """
        from scipy.optimize import Bounds, LinearConstraint, milp

        rules = LinearConstraint(np.array(self.rows), self.lower, self.upper)
        for whole in (False, True):
            found = milp(score, integrality=np.full(len(score), int(whole)), bounds=Bounds(0, self.most),
                         constraints=rules, options={"mip_rel_gap": 0.0} if whole else None)
            if found.x is None:
                raise ArithmeticError(f"the integer program was not solved: {found.message}")
            if whole or np.abs(found.x - np.round(found.x)).max() < 1e-6:
                break
        self.answer = np.round(found.x)
        totals = rules.A @ self.answer
        if np.any(totals < rules.lb - 1e-6) or np.any(totals > rules.ub + 1e-6):
            raise ArithmeticError("the integer program returned numbers that break its own rules")
        bound, value = found.mip_dual_bound if whole else found.fun, round(float(score @ self.answer))
        if ceil(bound - 1e-3) < value:
            raise ArithmeticError(f"the bound {bound} does not prove the value {value}")

    def keep(self, *scores: np.ndarray) -> None:
        """Hold these scores at the values they have reached."""
        for score in scores:
            value = float(score @ self.answer)
            self.rows.append(score)
            self.lower.append(value)
            self.upper.append(value)


def _solution(unknowns, answer, kinds, capacities, halves: int) -> Solution:
    whole: dict = {}
    broken: dict = {}
    for each, number in zip(unknowns, answer):
        if not number or each.activity < 0:
            continue
        kind, activity = kinds[each.kind][0], capacities[each.activity][0]
        if each.role == "whole":
            whole.setdefault(kind, {})[activity] = int(number)
        else:
            sides = broken.setdefault(kind, ({}, {}))
            sides[each.role == "raman half"][activity] = int(number)
    return Solution(whole, broken, halves)
