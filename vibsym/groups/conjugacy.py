"""All subgroups of a finite point group, one from each class of conjugate subgroups.

Starting from {E}, every subgroup found is enlarged by one more operation of prime power order (these generate every
larger subgroup) and closed, until nothing new appears.  Two subgroups are conjugate where an operation g of the group
takes one into the other, g H g⁻¹ = H′; each class is kept once.  The group itself and C1 are among them.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np

from vibsym.groups.pointgroup import PointGroup, point_group


@dataclass(frozen=True)
class SubgroupClass:
    """A class of conjugate subgroups: the operations of one of them (places in the group) and how many there are."""

    operations: tuple[int, ...]
    conjugates: int

    @property
    def order(self) -> int:
        """Number of operations of each subgroup."""
        return len(self.operations)


def subgroup_classes(group: PointGroup) -> tuple[SubgroupClass, ...]:
    """Return the classes of subgroups of a finite group, the largest first.

    >>> len(subgroup_classes(point_group("Oh"))), len(subgroup_classes(point_group("Ih")))
    (33, 22)
    """
    return _classes(group.symbol)


@cache
def _classes(symbol: str) -> tuple[SubgroupClass, ...]:
    group = point_group(symbol)
    product, conjugation = group.product, _conjugation(group)
    cyclic = _cyclic_subgroups(group)
    trivial = np.zeros(group.order, dtype=bool)
    trivial[0] = True
    known: set[bytes] = {trivial.tobytes()}               # every subgroup met, all conjugates of each class
    found = [SubgroupClass((0,), 1)]
    frontier = [trivial]
    while frontier:
        fresh = []
        for mask in frontier:
            for generator in _new_generators(group, conjugation, cyclic, mask):
                grown = _closure(product, mask, generator)
                if grown.tobytes() in known:
                    continue
                conjugates = _conjugates(conjugation, grown)
                known.update(row.tobytes() for row in conjugates)
                chosen = _plainest(group, conjugates)
                found.append(SubgroupClass(tuple(np.flatnonzero(chosen).tolist()), len(conjugates)))
                fresh.append(chosen)
        frontier = fresh
    return tuple(sorted(found, key=lambda each: (-each.order, each.operations)))


def _conjugation(group: PointGroup) -> np.ndarray:
    """Row g of (h, h): where R stands, g⁻¹ R g; a mask indexed by it is the mask of g H g⁻¹."""
    h = np.arange(group.order)
    left = group.product[group.inverse[:, None], h[None, :]]
    return group.product[left, h[:, None]]


def _conjugates(conjugation: np.ndarray, mask: np.ndarray) -> np.ndarray:
    """Rows (n, h): the different masks that conjugation makes of one, sorted (as packed bits, which sort fast)."""
    packed = {row.tobytes() for row in np.packbits(mask[conjugation], axis=1)}
    bits = np.frombuffer(b"".join(sorted(packed)), dtype=np.uint8).reshape(len(packed), -1)
    return np.unpackbits(bits, axis=1, count=len(mask)).astype(bool)


def _closure(product: np.ndarray, mask: np.ndarray, generator: int) -> np.ndarray:
    """The subgroup that H and one more operation make: right cosets H x, until x s lies inside for each step s."""
    inside = np.flatnonzero(mask)
    steps = np.append(inside, generator)
    mask = mask.copy()
    waiting = [generator]
    while waiting:
        x = waiting.pop()
        if mask[x]:
            continue
        mask[product[inside, x]] = True
        if 2 * np.count_nonzero(mask) > len(mask):         # more than half of a group is all of it
            return np.ones_like(mask)
        reached = product[x, steps]
        waiting += reached[~mask[reached]].tolist()
    return mask


def _cyclic_subgroups(group: PointGroup) -> np.ndarray:
    """(h,) the first generator of the cyclic subgroup of each operation of prime power order; others 0."""
    found = np.zeros(group.order, dtype=int)
    first: dict[frozenset, int] = {}
    for index in range(1, group.order):
        powers, current = [0], index
        while current != 0:
            powers.append(current)
            current = int(group.product[current, index])
        order = len(powers)
        prime = next(p for p in range(2, order + 1) if order % p == 0)
        while order % prime == 0:
            order //= prime
        if order == 1:
            found[index] = first.setdefault(frozenset(powers), index)
    return found


def _new_generators(group: PointGroup, conjugation: np.ndarray, cyclic: np.ndarray, mask: np.ndarray) -> list[int]:
    """Operations outside a subgroup, one from each set that its normaliser makes alike (conjugate results)."""
    outside = np.unique(cyclic[~mask])
    outside = outside[outside > 0]
    normaliser = np.flatnonzero((mask[conjugation] == mask).all(axis=1))
    images = group.product[group.product[normaliser][:, outside], group.inverse[normaliser][:, None]]
    return np.unique(cyclic[images].min(axis=0)).tolist() if len(outside) else []


def _plainest(group: PointGroup, conjugates: np.ndarray) -> np.ndarray:
    """The member of a class that lies most along x, y, z: largest sum of |diagonal entries|, then along z, then x."""
    diagonal = np.abs(np.einsum("gii->gi", group.matrices)).sum(axis=1)
    fixed = np.einsum("gii->gi", group.matrices)
    scores = np.stack([conjugates @ diagonal, conjugates @ fixed[:, 2], conjugates @ fixed[:, 0]], axis=1).round(6)
    return conjugates[np.lexsort(scores.T[::-1])[-1]]
