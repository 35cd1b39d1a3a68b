"""Linear molecules and single atoms: C∞v, D∞h and Kh as what they are, not as large n.

A structure is linear when every atom lies within the tolerance of the least-squares axis. It is D∞h when the atoms
also map onto themselves end for end; the deviation is the largest distance of an atom from its place on the averaged
line.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.groups.identify import completed
from vibsym.groups.pointgroup import point_group


@dataclass(frozen=True)
class LinearPlacement:
    """C∞v, D∞h or Kh placed in a structure: averaged positions (N, 3), axis, permutation that turns the line around
    or None.
    """

    symbol: str
    points: np.ndarray
    averaged: np.ndarray
    axis: np.ndarray
    turn: np.ndarray | None
    order = np.inf

    @cached_property
    def shifts(self) -> np.ndarray:
        """Distance of each atom from its averaged place, (N,), Å."""
        difference = self.points - self.averaged
        return np.sqrt((difference * difference).sum(axis=1))

    @property
    def deviation(self) -> float:
        """The largest shift, Å."""
        return float(self.shifts.max())


def principal_line(points):
    """Return the unit vector of the line through the origin with the least sum of squared distances from (N, 3)
    points.
    """
    return np.linalg.svd(points, full_matrices=False)[2][0]


def on_a_line(points, axis):
    """Return the (N, 3) feet of the points on the line."""
    return np.outer(points @ axis, axis)


def end_for_end(points, kinds, axis):
    """Return the (N,) permutation that turns the line around, None when the kinds do not allow it."""
    order = np.argsort(points @ axis, kind="stable")
    if not np.array_equal(kinds[order], kinds[order[::-1]]):
        return None
    permutation = np.empty(len(points), dtype=np.intp)
    permutation[order] = order[::-1]
    return permutation


def linear_placements(points, kinds) -> list[LinearPlacement]:
    """Return the placements of D∞h, where the kinds allow it, and of C∞v; of Kh for a single atom."""
    if len(points) == 1:
        return [LinearPlacement("Kh", points, np.zeros((1, 3)), np.array([0.0, 0.0, 1.0]), None)]
    axis = principal_line(points)
    found = [LinearPlacement("C∞v", points, on_a_line(points, axis), axis, None)]
    turn = end_for_end(points, kinds, axis)
    if turn is not None:
        halves = 0.5 * (points - points[turn])
        axis_h = principal_line(halves)
        found.insert(0, LinearPlacement("D∞h", points, on_a_line(halves, axis_h), axis_h, turn))
    return found


def line_frame(axis):
    """Return a frame whose z is the molecular axis."""
    return completed(axis)


def image_permutations(symbol, turn, atoms):
    """Return (h, N) permutations for the finite image of C∞v, D∞h or Kh: only operations that reverse z move atoms."""
    image = point_group(symbol).image
    stay = np.arange(atoms)
    if turn is None:
        return np.broadcast_to(stay, (image.order, atoms)).copy()
    return np.where((image.matrices[:, 2, 2] < 0)[:, None], turn, stay)
