"""Rings of bonds: for every bond the shortest ring that holds it."""

from collections.abc import Sequence

import numpy as np

from vibsym.structures.bonds import neighbours

LARGEST = 12


def find_rings(atoms: int, bonds: np.ndarray) -> list[tuple[int, ...]]:
    """Return the shortest ring through each bond, atoms in turn from the lowest, each ring once, the small ones first.

    Where several rings through a bond are equally short all are returned; rings of more than twelve atoms are left out.

    >>> find_rings(5, np.array([(0, 1), (1, 2), (0, 2), (2, 3), (3, 4)]))
    [(0, 1, 2)]
    """
    beside = neighbours(atoms, bonds)
    found: dict[frozenset, tuple[int, ...]] = {}
    for i, j in np.asarray(bonds, dtype=int).tolist():
        for path in _shortest_paths(beside, i, j):
            found.setdefault(frozenset(path), _from_lowest(path))
    return sorted(found.values(), key=lambda ring: (len(ring), ring))


def _shortest_paths(beside: Sequence[Sequence[int]], start: int, goal: int) -> list[list[int]]:
    """Return all shortest paths from start to goal that do not use the bond between them."""
    paths = [[start]]
    seen = {start}
    for _ in range(LARGEST - 1):
        longer = [[*path, atom] for path in paths for atom in beside[path[-1]]
                  if atom not in seen and not (path[-1] == start and atom == goal)]
        whole = [path for path in longer if path[-1] == goal]
        if whole or not longer:
            return whole
        seen.update(path[-1] for path in longer)
        paths = longer
    return []


def _from_lowest(ring: Sequence[int]) -> tuple[int, ...]:
    """Return the ring from its lowest atom towards the lower of the two beside it."""
    k = ring.index(min(ring))
    turned = [*ring[k:], *ring[:k]]
    return tuple(turned if turned[1] < turned[-1] else [turned[0], *turned[:0:-1]])
