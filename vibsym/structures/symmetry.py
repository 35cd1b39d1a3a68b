"""The symmetry of a structure: its group, how far it is from it, how the axes lie, and where every operation sends
every atom.

Convention: operations are active; R_r, a matrix of `group.image` in the standard frame, moves atom i onto the place
of atom permutations[r, i]: R_r x_i = x_permutations[r, i] for the symmetrised positions.
"""

from dataclasses import dataclass
from functools import cached_property
from math import ceil

import numpy as np

from vibsym.structures.structure import Structure

DEFAULT_TOLERANCE = 0.02       # Å
LOCAL_TOLERANCE = 0.3          # Å; for the group of oscillators, wide enough for the angles of real complexes


def within(deviation: float) -> str:
    """Return a deviation (Å) as it is printed everywhere: rounded up to 0.001 Å, so that "within" stays true.

    >>> within(0.0151), within(1e-12)
    ('0.016', '0.000')
    """
    return f"{ceil(deviation * 1000 - 0.01) / 1000:.3f}"


@dataclass(frozen=True, eq=False)
class Symmetry:
    """A structure with the group found in it; `find_symmetry` makes one.

    `frame` (3, 3) has the axes x, y, z as rows: standard coordinates are (positions - origin) @ frame.T, Å.
    """

    structure: Structure            # as read
    group: object                   # PointGroup or InfiniteGroup
    tolerance: float                # Å
    deviation: float                # Å, the largest of `shifts`
    origin: np.ndarray              # (3,) centre of mass of the symmetrised structure, on every element
    frame: np.ndarray               # (3, 3)
    positions: np.ndarray           # (N, 3) symmetrised, in the standard frame
    permutations: np.ndarray        # (h, N) int
    shifts: np.ndarray              # (N,) Å, from each atom to its averaged place
    axes: str | None = None         # the setting asked for; None: the one the rules choose
    decided: bool = True            # False: no rule tells the settings apart
    placement: object = None        # what the finder placed; the ladder climbs from it

    @cached_property
    def symmetrised(self) -> Structure:
        """The structure with averaged positions, where it stood."""
        return self.structure.moved(self.positions @ self.frame + self.origin)

    def to_dict(self) -> dict:
        """Return the `point_group` object of every JSON result."""
        group = self.group
        return {"symbol": group.symbol, "order": group.order, "tolerance": self.tolerance, "deviation": self.deviation,
                "chiral": bool(group.chiral), "centrosymmetric": bool(group.centrosymmetric)}


def operations_become(lower: Symmetry, higher: Symmetry) -> np.ndarray:
    """Return (h,) for each operation of a group which one it is in a higher group of the same structure.

    Both are compared as they stand in space.  The elements were placed by least squares, each for its own group, so
    they lie a little askew: the nearest operation of the same determinant is meant.
    """
    above, below = (np.einsum("ba,rbc,cd->rad", each.frame, each.group.image.matrices, each.frame)
                    for each in (higher, lower))
    distance = np.linalg.norm(above[None] - below[:, None], axis=(2, 3))
    distance += 10 * (np.linalg.det(above)[None] * np.linalg.det(below)[:, None] < 0)
    return distance.argmin(axis=1)
