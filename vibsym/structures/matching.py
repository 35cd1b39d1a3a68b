"""Which atom an operation brings onto which: images of atoms matched to like atoms.

An operation M moves atom i to M x_i; the atom of the same kind nearest to that place is where it goes. Below a
thousand atoms the distances are laid out in full, above it a k-d tree (scipy) finds the neighbours. The kind of an
atom is a fourth coordinate, so far apart for unlike atoms that they never match.
"""

import numpy as np

DENSE_ATOMS = 1000             # above this many atoms a tree is faster than the full table of distances
BLOCK_ENTRIES = 4_000_000      # entries of the table of distances held at one time


def embedded(points, kinds):
    """Return (N, 4) points whose last coordinate keeps atoms of different kinds apart."""
    spread = 4.0 * float(np.abs(points).max(initial=0.0)) + 10.0
    return np.column_stack((points, spread * np.asarray(kinds, dtype=float)))


def nearest(points, kinds, matrices):
    """Return (C, N) indices of the like atom nearest to M x_i, and (C, N) distances to it, for C matrices (C, 3, 3)."""
    if len(points) > DENSE_ATOMS:
        return _nearest_by_tree(points, kinds, matrices)
    count, atoms = len(matrices), len(points)
    places = embedded(points, kinds)
    images = np.empty((count, atoms, 4))
    images[:, :, :3] = points @ matrices.transpose(0, 2, 1)
    images[:, :, 3] = places[:, 3]
    targets = np.empty((count, atoms), dtype=np.intp)
    minus_two_places, squares = -2.0 * places.T, (places * places).sum(axis=1)
    step = max(1, BLOCK_ENTRIES // max(1, atoms * atoms))
    for start in range(0, count, step):
        cost = images[start:start + step].reshape(-1, 4) @ minus_two_places
        cost += squares
        targets[start:start + step] = cost.argmin(axis=1).reshape(-1, atoms)
    difference = images[:, :, :3] - points[targets]
    return targets, np.sqrt((difference * difference).sum(axis=2))


def _nearest_by_tree(points, kinds, matrices):
    from scipy.spatial import cKDTree

    places = embedded(points, kinds)
    tree = cKDTree(places)
    targets = np.empty((len(matrices), len(points)), dtype=np.intp)
    distances = np.empty((len(matrices), len(points)))
    images = places.copy()
    for index, matrix in enumerate(matrices):
        images[:, :3] = points @ matrix.T
        distances[index], targets[index] = tree.query(images)
    return targets, distances


def bijective(targets):
    """Return (C,) True where a row of targets (C, N) hits every atom once."""
    hit = np.zeros(targets.shape, dtype=bool)
    np.put_along_axis(hit, targets, True, axis=1)
    return hit.all(axis=1)


def one_to_one(points, kinds, matrices):
    """Return (C, N) one-to-one matchings of images to like atoms, shortest distances first (greedy).

    Used where the nearest atoms do not make a bijection: with a loose tolerance an atom can be nearest to two images.
    """
    count, atoms = len(matrices), len(points)
    images = points @ matrices.transpose(0, 2, 1)
    difference = images[:, :, None, :] - points[None, None, :, :]
    cost = (difference * difference).sum(axis=3)
    cost[:, np.asarray(kinds)[:, None] != np.asarray(kinds)[None, :]] = 1e12
    targets = np.empty((count, atoms), dtype=np.intp)
    rows = np.arange(count)
    for _ in range(atoms):
        flat = cost.reshape(count, -1).argmin(axis=1)
        source, target = flat // atoms, flat % atoms
        targets[rows, source] = target
        cost[rows, source, :] = np.inf
        cost[rows, :, target] = np.inf
    return targets


def residuals(points, matrices, targets):
    """Return (C, N) distances |M x_i - x_target(i)|."""
    difference = points @ matrices.transpose(0, 2, 1) - points[targets]
    return np.sqrt((difference * difference).sum(axis=2))
