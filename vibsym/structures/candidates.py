"""Operations that nearly carry a structure into itself, each with its permutation of the atoms.

An orthogonal map about the centroid is fixed by where two atoms a, b go (not in line with the centroid) and by its
determinant. If the structure lies within t of one that has a group, each operation of the group leaves residuals |R
x_i - x_pi(i)| of at most 2t, so a goes to a like atom whose radius differs by at most 2t, and |ab| changes by at most
4t. All such pairs are tried at once; what survives is fitted by least squares (W. Kabsch, Acta Cryst. A 32, 922,
1976). Whether operations make a group is for `subsets.py` to tell.
"""

import numpy as np

from vibsym.groups.distinct import first_of_each
from vibsym.structures.matching import bijective, nearest, one_to_one, residuals
from vibsym.structures.operations import SLACK, Operations, codes_of
from vibsym.structures.placement import correlation, fitted_maps

ASSIGN_CANDIDATES = 200        # at most so many candidates are matched one to one when the nearest atoms fail
ASSIGN_ENTRIES = 3_000_000
MANY_ATOMS = 100               # above, most operations are made as products of a few


def shells(radii, kinds, reach):
    """Return (N,) how many like atoms have a radius within `reach` of each atom's, itself included."""
    keys = np.asarray(kinds) * (4.0 * float(radii.max(initial=0.0)) + 10.0) + radii
    ordered = np.sort(keys)
    return np.searchsorted(ordered, keys + reach, "right") - np.searchsorted(ordered, keys - reach, "left")


def reference_pair(points, kinds, radii, sizes, tolerance):
    """Return atoms (a, b) far out and not in line with the centroid, with few places to go to."""
    a = int(np.argmin(np.where(radii >= 0.5 * radii.max(), sizes - 0.4 * radii / radii.max(), np.inf)))
    axis = points[a] / radii[a]
    away = points - np.outer(points @ axis, axis)
    offsets = np.sqrt((away * away).sum(axis=1))
    eligible = np.flatnonzero(offsets >= 0.5 * offsets.max())
    if len(eligible) > 64:
        eligible = eligible[np.argsort(sizes[eligible], kind="stable")[:64]]
    from_a = points - points[a]
    distances = np.sqrt((from_a * from_a).sum(axis=1))
    alike = np.abs(distances[eligible, None] - distances) <= 4 * tolerance
    alike &= np.abs(radii[eligible, None] - radii) <= 2 * tolerance
    alike &= kinds[eligible, None] == kinds
    b = int(eligible[np.argmin(alike.sum(axis=1) - 0.4 * offsets[eligible] / offsets.max())])
    return a, b, offsets


def _frames(first, second):
    """Return (P, 3, 3) right-handed frames (rows) whose first axis points to `first` and whose second to the rest of
    `second`.
    """
    frames = np.empty((len(first), 3, 3))
    e1 = first / np.sqrt((first * first).sum(axis=1))[:, None]
    e2 = second - (second * e1).sum(axis=1)[:, None] * e1
    e2 /= np.sqrt((e2 * e2).sum(axis=1))[:, None]
    frames[:, 0], frames[:, 1] = e1, e2
    frames[:, 2, 0] = e1[:, 1] * e2[:, 2] - e1[:, 2] * e2[:, 1]
    frames[:, 2, 1] = e1[:, 2] * e2[:, 0] - e1[:, 0] * e2[:, 2]
    frames[:, 2, 2] = e1[:, 0] * e2[:, 1] - e1[:, 1] * e2[:, 0]
    return frames


def pair_maps(points, kinds, radii, pair, tolerance):
    """Return (C, 3, 3) maps, proper ones first, that carry the pair onto every pair like it."""
    a, b = pair
    firsts = np.flatnonzero((kinds == kinds[a]) & (np.abs(radii - radii[a]) <= 2 * tolerance) & (radii > 1e-9))
    seconds = np.flatnonzero((kinds == kinds[b]) & (np.abs(radii - radii[b]) <= 2 * tolerance) & (radii > 1e-9))
    between = points[firsts][:, None, :] - points[seconds][None, :, :]
    distances = np.sqrt((between * between).sum(axis=2))
    span = points[a] - points[b]
    row, column = np.nonzero((np.abs(distances - np.sqrt(span @ span)) <= 4 * tolerance) & (distances > 1e-9))
    first, second = points[firsts[row]], points[seconds[column]]
    cosine = (first * second).sum(axis=1) / (radii[firsts[row]] * radii[seconds[column]])
    apart = np.abs(cosine) < 1 - 1e-12
    here = _frames(points[a][None], points[b][None])[0]
    there = _frames(first[apart], second[apart])
    proper = there.transpose(0, 2, 1) @ here
    mirrored = here.copy()
    mirrored[2] *= -1
    return np.concatenate((proper, there.transpose(0, 2, 1) @ mirrored))


def bounds(radii, offsets, pair, tolerance):
    """Return (N,) how far a map made from the pair alone can carry each atom beside its true place."""
    a, b = pair
    tilt = radii / radii[a]
    twist = (1 + radii[b] / radii[a]) * offsets / offsets[b]
    return 2 * tolerance * (1 + tilt + twist) + 1e-6


def _prune(points, kinds, radii, sizes, maps, limits, tolerance):
    """Drop maps that bring one of a dozen telling atoms (small shells first) beside every like atom."""
    for atom in np.argsort(sizes, kind="stable")[:12]:
        shell = np.flatnonzero((kinds == kinds[atom]) & (np.abs(radii - radii[atom]) <= 2 * tolerance))
        images = maps @ points[atom]
        squares = ((images[:, None, :] - points[shell][None, :, :]) ** 2).sum(axis=2).min(axis=1)
        maps = maps[squares <= limits[atom] ** 2]
    return maps


def find_operations(points, kinds, tolerance, apart):
    """Return the Operations that leave residuals up to about 2 * tolerance (Å); `points` (N, 3) have their centroid
    at the origin.

    `apart` is the shortest distance between two atoms: when it is large against the tolerance, the nearest atom is
    the right one.
    """
    radii = np.sqrt((points * points).sum(axis=1))
    sizes = shells(radii, kinds, 2 * tolerance)
    a, b, offsets = reference_pair(points, kinds, radii, sizes, tolerance)
    maps = pair_maps(points, kinds, radii, (a, b), tolerance)
    limits = bounds(radii, offsets, (a, b), tolerance)
    if len(maps) * len(points) ** 2 > 200_000:
        maps = _prune(points, kinds, radii, sizes, maps, limits, tolerance)
    clear = 2 * limits.max() < apart
    if len(points) > MANY_ATOMS and clear:
        from vibsym.structures.generating import generated_operations

        return generated_operations(points, kinds, maps, (a, b), tolerance)
    targets, distances = nearest(points, kinds, maps)
    if clear:
        keep = (distances <= limits).all(axis=1) & bijective(targets)
        maps, targets = maps[keep], targets[keep]
    else:
        maps, targets = _loosely_matched(points, kinds, maps, targets, distances, limits)
    return _fitted(points, kinds, maps, targets, (a, b), tolerance, clear)


def _loosely_matched(points, kinds, maps, targets, distances, limits):
    """Match one to one where the tolerance is comparable with the distances between atoms."""
    keep = (distances <= limits).all(axis=1)
    maps, targets, distances = maps[keep], targets[keep], distances[keep]
    signs = np.linalg.det(maps)
    maps = fitted_maps(correlation(points, targets), signs)
    targets, distances = nearest(points, kinds, maps)
    whole = bijective(targets)
    broken = np.flatnonzero(~whole)
    allowed = max(1, min(ASSIGN_CANDIDATES, ASSIGN_ENTRIES // len(points) ** 2))
    if len(broken) > allowed:
        broken = broken[np.argsort((distances[broken] ** 2).sum(axis=1))[:allowed]]
    if len(broken):
        targets[broken] = one_to_one(points, kinds, maps[broken])
        whole[broken] = True
    return maps[whole], targets[whole]


def _fitted(points, kinds, maps, targets, pair, tolerance, clear):
    """Fit, and (loose tolerance) match and fit again; keep one operation for each image of the pair and determinant."""
    signs = np.where(np.linalg.det(maps) > 0, 1, -1)
    matrices = fitted_maps(correlation(points, targets), signs)
    left = residuals(points, matrices, targets).max(axis=1)
    if not clear:
        again, _ = nearest(points, kinds, matrices)
        better = bijective(again)
        targets = np.where(better[:, None], again, targets)
        matrices = fitted_maps(correlation(points, targets), signs)
        left = residuals(points, matrices, targets).max(axis=1)
    keep = np.flatnonzero(left <= 2 * tolerance * SLACK + 1e-9)
    keep = keep[np.argsort(left[keep], kind="stable")]
    codes = codes_of(targets[keep], signs[keep], pair)
    first = first_of_each(codes)
    keep = keep[np.sort(first)]
    return Operations(targets[keep], signs[keep], matrices[keep], left[keep], pair)
