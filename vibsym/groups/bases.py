"""A basis: objects that every operation of a group moves onto each other, carrying one or a few components each.

Displacements of atoms carry three components, stretches one with a sign, linear bends two.  Operation r takes the
object j to `targets[r, j]` and its components by the matrix `blocks[r, j]`.  Reduction and projection (reduction.py,
projection.py) are written once, for any basis.
"""

from dataclasses import dataclass

import numpy as np

from vibsym.groups.pointgroup import PointGroup
from vibsym.groups.reduction import reduce


@dataclass(frozen=True)
class Basis:
    """A representation given by what each operation does to n objects with d components each.

    `targets` (h, n): place to which operation r takes object j.  `blocks` (h, n, d, d): component β of object j becomes
    Σ_α blocks[r, j, α, β] of component α at the target.  `group` is finite (the image, for linear molecules).
    """

    group: PointGroup
    targets: np.ndarray
    blocks: np.ndarray

    @classmethod
    def signed(cls, group: PointGroup, targets: np.ndarray, signs: np.ndarray | None = None) -> "Basis":
        """Return the basis of a signed permutation; without signs (h, n) all are +1."""
        if signs is None:
            signs = np.ones(targets.shape)
        return cls(group, targets, np.asarray(signs, dtype=float)[:, :, None, None])

    @classmethod
    def displacements(cls, group: PointGroup, permutations: np.ndarray) -> "Basis":
        """Return the 3N Cartesian displacements of atoms permuted as (h, N) under the matrices of the group."""
        blocks = np.broadcast_to(group.matrices[:, None], (*permutations.shape, 3, 3))
        return cls(group, permutations, blocks)

    @property
    def size(self) -> int:
        """Number of objects."""
        return self.targets.shape[1]

    @property
    def components(self) -> int:
        """Number of components of each object."""
        return self.blocks.shape[2]

    def characters(self) -> np.ndarray:
        """Return the character of each class: the sum of the traces of the blocks of unmoved objects, (c,)."""
        first = np.array([c.members[0] for c in self.group.classes])
        unmoved = self.targets[first] == np.arange(self.size)
        return np.einsum("cn,cnii->c", unmoved, self.blocks[first])

    def reduce(self) -> dict[str, int]:
        """Return how often each species of the (finite) group occurs."""
        return reduce(self.characters(), self.group)

    def orbits(self) -> list[np.ndarray]:
        """Return the sets of objects that the operations take into each other, each sorted, by their first object."""
        first = self.targets.min(axis=0)                  # every orbit is named by its smallest member
        order = np.argsort(first, kind="stable")
        cuts = np.flatnonzero(np.diff(first[order])) + 1
        return np.split(order, cuts) if self.size else []

    def restrict(self, objects: np.ndarray) -> "Basis":
        """Return the basis of a union of orbits (objects renumbered in the order given)."""
        place = np.full(self.size, -1)
        place[objects] = np.arange(len(objects))
        return Basis(self.group, place[self.targets[:, objects]], self.blocks[:, objects])

    def matrix(self, operation: int) -> np.ndarray:
        """Return the full matrix (n d, n d) of one operation; component α of object j has the place d·j + α."""
        n, d = self.size, self.components
        result = np.zeros((n, d, n, d))
        objects = np.arange(n)
        result[self.targets[operation], :, objects, :] = self.blocks[operation]
        return result.reshape(n * d, n * d)
