"""The ladder: the group found, then the higher groups that the structure approaches, each with its deviation.

Only sets of operations that close are groups, so the rungs are closed sets among the operations found at the largest
legal tolerance: the smaller of 0.5 Å and half the shortest distance between atoms (less above 300 atoms). A rung has a
higher order than the one below it, a larger deviation, and holds it. The suggested rung is the one before the largest
ratio of successive deviations, a deviation below 0.005 Å counting as 0.005 (vibsym's own rule).
"""

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property, partial
from itertools import pairwise

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.distinct import first_of_each
from vibsym.groups.pointgroup import point_group
from vibsym.structures.candidates import find_operations
from vibsym.structures.finder import (
    Centred,
    centre,
    largest_group,
    least_deviating,
    legal_tolerance,
    line_within,
    place_subset,
    symbol_of,
    symmetry_of,
)
from vibsym.structures.linear import LinearPlacement, linear_placements
from vibsym.structures.operations import Operations, codes_of
from vibsym.structures.placement import Placement
from vibsym.structures.structure import structure_of
from vibsym.structures.subsets import closed_subsets, product_table
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, Symmetry, within

SMALLEST_DEVIATION = 0.005     # Å; smaller deviations count as this much in the ratio that suggests a rung
SAME_DEVIATION = 0.0005        # Å; of two rungs whose deviations agree so far, the higher is shown
HIGHEST = ("Oh", "Ih")         # no finite point group holds these
MOST_ATOMS = 300               # larger structures are searched up to a smaller distance


@dataclass(frozen=True, eq=False)
class Rung:
    """A group the structure has or approaches; `spoilers` are the atoms (from 1) that keep it from the next rung.

    Symbol and deviation (Å) are known at once; the symmetry, with its axes, is worked out when asked for.
    """

    symbol: str
    deviation: float
    spoilers: tuple[int, ...]
    work_out: Callable[[], Symmetry]

    @cached_property
    def symmetry(self) -> Symmetry:
        """The structure placed in this group, with its axes."""
        return self.work_out()


@dataclass(frozen=True)
class Ladder:
    """Rungs from the group found upwards, the place of the suggested one, and how far (Å) rungs were sought."""

    rungs: tuple[Rung, ...]
    suggested: int
    reach: float

    @property
    def next(self) -> Rung | None:
        """The rung above the group found, None when there is none."""
        return self.rungs[1] if len(self.rungs) > 1 else None

    @property
    def stands_apart(self) -> bool:
        """Whether the last rung is not the suggested one although nothing follows it for a wider gap still.

        The rule takes ratios between rungs, so it never suggests the last; how far none follows is only known up to
        `reach`.
        """
        last = max(self.rungs[-1].deviation, SMALLEST_DEVIATION)
        return len(self.rungs) > 1 and self.reach / last > max(_ratios([rung.deviation for rung in self.rungs]))


def ladder(structure, tolerance: float = DEFAULT_TOLERANCE, axes: str | None = None, bonds=None,
           known: Symmetry | None = None) -> Ladder:
    """Return the ladder of a structure; `axes` and `bonds` choose the axes of the group found as in `find_symmetry`.

    `known`: the symmetry already found at this tolerance, which spares the search for it.
    """
    centred = centre(structure_of(structure))
    tolerance = legal_tolerance(tolerance, centred)
    rungs = _nested(*_climb(centred, tolerance, known and known.placement))
    deviations = [float(placement.deviation) for placement in rungs]
    spoilers = [_spoilers(above.shifts, tolerance) for above in rungs[1:]] + [()]

    def worked_out(placement) -> Symmetry:
        if placement is rungs[0]:
            return symmetry_of(centred, placement, tolerance, axes, bonds)
        symmetry = symmetry_of(centred, placement, tolerance, None, bonds)
        return replace(symmetry, tolerance=_tolerance_of(symmetry.deviation, tolerance, centred.most))

    return Ladder(tuple(Rung(symbol_of(placement), deviation, atoms, partial(worked_out, placement))
                        for placement, deviation, atoms in zip(rungs, deviations, spoilers)), _suggested(deviations),
                  max(tolerance, largest_tolerance(centred)))


def as_group(structure, symbol: str, tolerance: float = DEFAULT_TOLERANCE, axes: str | None = None,
             bonds=None) -> Symmetry:
    """Return the symmetry of a structure in the group `symbol`, one it has or approaches; another is an error with
    the rungs.
    """
    wanted = point_group(symbol).symbol
    centred = centre(structure_of(structure))
    tolerance = legal_tolerance(tolerance, centred)
    found, higher = _climb(centred, tolerance)
    fitting = [p for p in (found, *higher) if symbol_of(p) == wanted]
    if fitting:
        best = least_deviating(fitting)
        symmetry = symmetry_of(centred, best, tolerance, axes, bonds)
        return replace(symmetry, tolerance=_tolerance_of(symmetry.deviation, tolerance, centred.most))
    rungs = ", ".join(f"{symbol_of(p)} ({within(p.deviation)} Å)" for p in _nested(found, higher))
    name = f"{centred.structure.source}: " if centred.structure.source else ""
    raise VibsymError(f"{name}the structure does not approach {wanted}; its rungs are {rungs}")


def _tolerance_of(deviation: float, tolerance: float, most: float) -> float:
    """Return the tolerance at which a rung is reached: the one given, or its deviation rounded up to the next 0.01 Å.
    """
    return max(tolerance, min(most, float(np.ceil(deviation * 100 - 1e-9) / 100)), deviation)


def largest_tolerance(centred: Centred) -> float:
    """Return the largest legal tolerance; structures of many atoms are searched less far, for time."""
    atoms = len(centred.points)
    return centred.most if atoms <= MOST_ATOMS else centred.most * (MOST_ATOMS / atoms) ** (2 / 3)


def _climb(centred: Centred, tolerance: float, known=None):
    """Return the placement found at the tolerance, and those of all higher groups up to the largest tolerance that
    hold it.
    """
    found = known if isinstance(known, LinearPlacement) else None if known else line_within(centred, tolerance)
    limit = max(tolerance, largest_tolerance(centred))
    if len(centred.points) == 1:
        return found, []
    lines = [line for line in linear_placements(centred.points, centred.kinds) if line.deviation <= limit]
    if found is not None:
        return found, [line for line in lines if line.deviation > tolerance]
    found = known or largest_group(centred, tolerance)
    if symbol_of(found) in HIGHEST:
        return found, lines
    operations, start = _with_found(find_operations(centred.points, centred.kinds, limit, centred.shortest), found)
    return found, _higher(centred, operations, start, found, limit) + lines


def _with_found(operations: Operations, found: Placement):
    """Return the operations with those of the group found among them, and the places of the latter."""
    permutations = np.concatenate((found.permutations, operations.permutations))
    signs = np.concatenate((found.signs, operations.signs))
    first = np.sort(first_of_each(codes_of(permutations, signs, operations.pair)))
    matrices = np.concatenate((found.matrices, operations.matrices))[first]
    left = np.concatenate((np.zeros(found.order), operations.residuals))[first]
    # the operations found stand first and no two of them send the pair alike
    return Operations(permutations[first], signs[first], matrices, left, operations.pair), list(range(found.order))


def _higher(centred, operations, start, found, limit) -> list[Placement]:
    """Return the placements of the closed sets larger than the group found whose deviation is at most `limit`."""
    if len(operations.signs) == found.order:
        return []
    table = product_table(operations)
    known = {}

    def accept(members):
        if len(members) == 1:
            return True
        key = frozenset(members)
        if key not in known:
            known[key] = place_subset(centred, operations, table, members)
        # the sum of squared shifts never falls from a group to a larger one, so this refuses nothing that could grow
        return known[key] is not None and float(np.sqrt((known[key].shifts ** 2).mean())) <= limit

    placements = []
    for members in closed_subsets(table, start, accept):
        placement = known.get(frozenset(members))
        if len(members) > found.order and placement is not None and placement.deviation <= limit:
            placements.append(placement)
    return placements


def _holds(larger, smaller) -> bool:
    """Tell whether the larger group has all operations of the smaller; on a line atoms stay, or all turn end for end.
    """
    if isinstance(smaller, LinearPlacement):
        return isinstance(larger, LinearPlacement)
    if isinstance(larger, LinearPlacement):
        moves = {row.tobytes() for row in smaller.permutations}
        stay = np.arange(len(larger.points))
        return moves <= {stay.tobytes(), stay.tobytes() if larger.turn is None else larger.turn.tobytes()}
    return _operation_keys(smaller) <= _operation_keys(larger)


def _operation_keys(placement) -> set:
    return {(row.tobytes(), int(sign)) for row, sign in zip(placement.permutations, placement.signs)}


def _nested(found, higher) -> list:
    """Return the rungs: the group found, then higher groups of growing order and deviation, each holding the one
    before.

    From the top down: the best group of the highest order, then the best of each lower order that the rung above
    holds and whose deviation is smaller.
    """
    higher = [p for p in higher if _holds(p, found)]
    rungs, above, ceiling = [], None, np.inf
    for order, symbol in sorted({_height(p) for p in higher}, reverse=True):
        level = [p for p in higher if _height(p) == (order, symbol) and p.deviation < ceiling - SAME_DEVIATION]
        if above is not None:
            level = [p for p in level if _holds(above, p)]
        if level:
            above = least_deviating(level)
            ceiling = above.deviation
            rungs.append(above)
    return [found, *reversed(rungs)]


def _height(placement) -> tuple:
    """Return what sorts groups by order; D∞h comes above C∞v."""
    return placement.order, placement.symbol if isinstance(placement, LinearPlacement) else ""


def _spoilers(shifts, tolerance: float) -> tuple[int, ...]:
    """Return the atoms (from 1) that must move most to reach the next rung: more than half its deviation and than the
    tolerance.
    """
    least = max(0.5 * shifts.max() + 1e-6, min(tolerance, shifts.max()))
    return tuple((np.flatnonzero(shifts >= least) + 1).tolist())


def _suggested(deviations) -> int:
    """Return the place of the rung before the largest ratio of successive deviations; 0 where there is one rung."""
    ratios = _ratios(deviations)
    return int(np.argmax(ratios)) if ratios else 0


def _ratios(deviations) -> list[float]:
    """Return each deviation over the one before; below SMALLEST_DEVIATION a deviation counts as that."""
    counted = [max(value, SMALLEST_DEVIATION) for value in deviations]
    return [upper / lower for lower, upper in pairwise(counted)]
