"""Pairs of points that lie close to each other: by all distances for small structures, by a tree for large ones."""

import numpy as np

SMALL = 1000    # up to here the (N, N) array of all distances is cheaper than loading scipy


def squared_distances(positions) -> np.ndarray:
    """Return the (N, N) array of squared distances of (N, 3) positions.

    By differences, not by |a|² + |b|² − 2ab, which loses all figures far from the origin.
    """
    total = 0.0
    for column in positions.T:
        difference = column[:, None] - column
        total = total + difference * difference
    return total


def pairs_within(positions, radius: float) -> np.ndarray:
    """Return the (P, 2) pairs i < j of points at most `radius` apart, in order.

    >>> pairs_within(np.array([[0.0, 0, 0], [1, 0, 0], [5, 0, 0]]), 1.5)
    array([[0, 1]])
    """
    if len(positions) <= SMALL:
        near = squared_distances(positions) <= radius * radius
        first, second = np.nonzero(near)
        upper = first < second
        return np.stack((first[upper], second[upper]), axis=1)
    from scipy.spatial import cKDTree

    pairs = cKDTree(positions).query_pairs(radius, output_type="ndarray")
    pairs = np.sort(pairs.reshape(-1, 2), axis=1)
    return pairs[np.lexsort((pairs[:, 1], pairs[:, 0]))].astype(np.intp)


def closest_pair(positions) -> tuple[int, int, float]:
    """Return (i, j, distance) of the two points nearest to each other; (0, 0, inf) for a single point.

    >>> closest_pair(np.array([[0.0, 0, 0], [1, 0, 0], [5, 0, 0]]))
    (0, 1, 1.0)
    """
    n = len(positions)
    if n < 2:
        return 0, 0, float("inf")
    if n <= SMALL:
        squared = squared_distances(positions)
        squared.ravel()[:: n + 1] = np.inf
        i, j = divmod(int(squared.argmin()), n)
        return i, j, float(squared[i, j]) ** 0.5
    from scipy.spatial import cKDTree

    distances, neighbours = cKDTree(positions).query(positions, k=2)
    i = int(distances[:, 1].argmin())
    # two points on one spot may be listed in either order, and the point itself may come second
    j = int(neighbours[i, 1]) if neighbours[i, 1] != i else int(neighbours[i, 0])
    return min(i, j), max(i, j), float(distances[i, 1])
