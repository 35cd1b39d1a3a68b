"""Chirality symbols of a complex: R and S, A and C, Δ and Λ.

IUPAC, Nomenclature of Inorganic Chemistry, Recommendations 2005, IR-9.3.4 (rules from memory).  T-4 and TPY-3: R and
S as in organic chemistry, the lone pair of TPY-3 last.  OC-6, SPY-5, TBPY-5 and the other bipyramids, SS-4: seen with
the end of higher priority of the reference axis towards the viewer, the numbers in the plane across it run to the
lower sequence clockwise (C) or anticlockwise (A).  Chelates of two donors in OC-6: skew lines, Δ for the right-handed
helix, Λ for the left-handed one.  SPY-4 and the shapes that have no index get no symbol.
"""

from collections.abc import Sequence
from itertools import combinations

import numpy as np

from vibsym.structures.configuration_index import Priority, octahedral_axis, ring_sequence
from vibsym.structures.polyhedra import Shape

MIRRORED = {"R": "S", "S": "R", "A": "C", "C": "A", "Δ": "Λ", "Λ": "Δ"}


def chirality_symbol(shape: Shape, priorities: Sequence[Priority]) -> str | None:
    """Return R, S, A or C for a chiral arrangement, None where the rules name none.

    >>> from vibsym.structures.polyhedra import shape
    >>> chirality_symbol(shape("T-4"), [(1, 0), (2, 0), (3, 0), (4, 0)])
    'R'
    """
    kind = shape.symbol
    if kind in ("T-4", "TPY-3"):
        return _tetrahedral(shape, priorities)
    if kind == "OC-6":
        found = {_around(priorities, _ring(shape, end)) for end in octahedral_axis(shape, priorities)[0]}
        return found.pop() if len(found) == 1 else None
    if kind == "SPY-5":
        return _around(priorities, _ring(shape, 0))
    if kind.endswith(("BPY-5", "BPY-7", "BPY-8", "BPY-9")):
        if priorities[0] == priorities[1]:
            return None
        end = int(priorities[1] < priorities[0])
        return _around(priorities, _ring(shape, end))
    return _see_saw(shape, priorities) if kind == "SS-4" else None


def helicity(shape: Shape, edges: Sequence[tuple[int, int]]) -> str | None:
    """Return Δ or Λ from the edges that chelates span, None where the pairs of skew lines do not agree on one.

    Two lines with directions a, b and n from the first to the second: ((a × b)·n)(a·b) is negative where b is tangent
    to a right-handed helix about a (the tests check the sign by a right-handed propeller of three chelates).

    >>> from vibsym.structures.polyhedra import shape
    >>> helicity(shape("OC-6"), [(1, 4), (2, 5), (0, 3)])         # x to -y, y to -z, z to -x
    'Δ'
    """
    points = shape.directions
    signs = set()
    for (i, j), (k, m) in combinations(edges, 2):
        a, b = points[j] - points[i], points[m] - points[k]
        n = (points[k] + points[m] - points[i] - points[j]) / 2
        value = float(np.cross(a, b) @ n * (a @ b))
        if abs(value) > 1e-6:
            signs.add(value < 0)
    return None if len(signs) != 1 else "Δ" if signs.pop() else "Λ"


def _tetrahedral(shape: Shape, priorities: Sequence[Priority]) -> str | None:
    if len(set(priorities)) < len(priorities):
        return None
    first, second, third = sorted(range(len(shape)), key=lambda site: priorities[site])[:3]
    turn = np.linalg.det(shape.directions[[first, second, third]])
    return "R" if turn < 0 else "S"                        # seen with the last one behind, clockwise is R


def _ring(shape: Shape, end: int) -> list[int]:
    """The sites around the axis that ends at a site, anticlockwise for a viewer beyond that site."""
    view = shape.directions[end]
    others = [site for site in range(len(shape)) if abs(shape.directions[site] @ view) < 0.5]
    x = shape.directions[others[0]] - (shape.directions[others[0]] @ view) * view
    y = np.cross(view, x)
    angle = np.arctan2(shape.directions[others] @ y, shape.directions[others] @ x)
    return [others[k] for k in np.argsort(angle % (2 * np.pi), kind="stable")]


def _around(priorities: Sequence[Priority], ring: list[int]) -> str | None:
    anticlockwise = [priorities[site] for site in ring]
    first, second = ring_sequence(anticlockwise[::-1]), ring_sequence(anticlockwise)
    return None if first == second else "C" if first < second else "A"


def _see_saw(shape: Shape, priorities: Sequence[Priority]) -> str | None:
    if priorities[0] == priorities[1] or priorities[2] == priorities[3]:
        return None
    end = int(priorities[1] < priorities[0])
    higher, lower = (2, 3) if priorities[2] < priorities[3] else (3, 2)
    turn = np.cross(shape.directions[higher], shape.directions[lower]) @ shape.directions[end]
    return "A" if turn > 0 else "C"                        # anticlockwise is a positive turn about the line of sight
