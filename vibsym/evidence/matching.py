"""The cheapest way to give lines to fundamentals: an assignment problem with pairs, solved exactly.

Items are single lines and coincident pairs.  A line takes one fundamental or stays over; a fundamental takes one line,
or a pair. A pair can be broken, at a price.  Without broken pairs this is the linear assignment problem (H. W. Kuhn,
Naval Res. Logist. Quart. 2, 83 (1955)); with them, branch and bound: in the relaxed problem an undecided pair may
break at its price while its Raman line costs nothing, which is never dearer than the truth; where the relaxed answer
breaks a pair, both decisions are tried.
"""

from dataclasses import dataclass

import numpy as np

FORBIDDEN = 1e7
WHOLE, BROKEN = "whole", "broken"


@dataclass(frozen=True, eq=False)
class Costs:
    """Costs of single lines (n, f) and pairs (p, f) at fundamentals; np.inf where forbidden.

    `pairs` lists (row of the infrared line, row of the Raman line), `leftover` (n,) the price of each line left over,
    `unseen` (f,) that of a fundamental without a line, `broken` that of a broken pair.  Pairs for which every
    fundamental is forbidden are no pairs.
    """

    single: np.ndarray
    together: np.ndarray
    pairs: tuple[tuple[int, int], ...]
    leftover: np.ndarray
    unseen: np.ndarray
    broken: float


@dataclass(frozen=True, eq=False)
class Matching:
    """Fundamental of each line (-1: left over), the pairs kept whole, and the total cost."""

    places: np.ndarray
    whole: frozenset
    cost: float


def cheapest(costs: Costs, allowed: np.ndarray | None = None) -> Matching | None:
    """Return the matching of least cost; `allowed` (n, f) bool restricts lines that are pinned or tried elsewhere.

    A row of `allowed` with a False in it may not stay left over.  None: nothing satisfies the restriction.
    """
    single = costs.single - costs.unseen
    together = costs.together - costs.unseen
    leftover = costs.leftover.copy()
    if allowed is not None:
        single = np.where(allowed, single, np.inf)
        bound = ~allowed.all(axis=1)
        leftover[bound] = np.inf
        for number, (i, r) in enumerate(costs.pairs):
            together[number] = np.where(allowed[i] & allowed[r], together[number], np.inf)
    search = _Search(costs, single, together, leftover)
    search.branch({})
    if search.best is None:
        return None
    places, whole, cost = search.best
    return Matching(places, frozenset(whole), cost + float(costs.unseen.sum()))


class _Search:
    """Branch and bound over the pairs."""

    def __init__(self, costs: Costs, single, together, leftover):
        from scipy.optimize import linear_sum_assignment

        self.solve = linear_sum_assignment
        self.costs, self.single, self.together, self.leftover = costs, single, together, leftover
        self.best, self.bound = None, np.inf

    def branch(self, decided: dict[int, str]) -> None:
        """Explore the decisions that continue `decided` {pair: whole or broken}."""
        total, places, riders = self._relaxed(decided)
        if total >= min(self.bound, FORBIDDEN / 2) - 1e-9:
            return
        doubtful = self._doubtful(decided, places, riders)
        if doubtful is None:
            self.bound = total
            whole = {number for number in range(len(self.costs.pairs)) if number in riders}
            places = places.copy()
            for number in whole:
                i, r = self.costs.pairs[number]
                places[r] = places[i]
            self.best = places, whole, total
            return
        for decision in (WHOLE, BROKEN):
            self.branch({**decided, doubtful: decision})

    def _relaxed(self, decided):
        n, f = self.single.shape
        pairs = self.costs.pairs
        table = np.full((n, f + n + len(pairs)), np.inf)
        table[:, :f] = self.single
        table[np.arange(n), f + np.arange(n)] = self.leftover
        for number, (i, r) in enumerate(pairs):
            state, price = decided.get(number), self.costs.broken
            if state == WHOLE:
                table[i, :f] = self.together[number]
                table[i, f + i] = self.leftover[i] + self.leftover[r]
                table[r, : f + n] = np.inf
                table[r, f + n + number] = 0.0
            elif state == BROKEN:
                table[i, :f] += price
                table[i, f + i] += price
            else:
                table[i, :f] = np.minimum(self.together[number], self.single[i] + price)
                table[i, f + i] = min(self.leftover[i] + self.leftover[r], self.leftover[i] + price)
                table[r, f + n + number] = 0.0
        rows, columns = self.solve(np.minimum(table, FORBIDDEN))
        total = float(np.minimum(table, FORBIDDEN)[rows, columns].sum())
        places = np.where(columns < f, columns, -1)
        riders = {int(column) - f - n for column in columns if column >= f + n}
        return total, places, riders

    def _doubtful(self, decided, places, riders):
        """Return a pair whose relaxed answer is not a true one, None if all are."""
        for number, (i, r) in enumerate(self.costs.pairs):
            if number in decided:
                continue
            if number not in riders:
                return number
            place = places[i]
            true = self.together[number, place] if place >= 0 else self.leftover[i] + self.leftover[r]
            relaxed = (
                min(self.together[number, place], self.single[i, place] + self.costs.broken)
                if place >= 0
                else min(true, self.leftover[i] + self.costs.broken)
            )
            if true > relaxed + 1e-12:
                return number
        return None
