"""Structures made from orbits of a point group, in any pose: what the tests of the finder, the ladder and the axes
start from.
"""

import numpy as np

from vibsym.groups.pointgroup import point_group
from vibsym.structures.structure import Structure

ELEMENTS = ("C", "N", "O", "F", "Cl", "Br")
FAMILIES = (["C1", "Ci", "Cs", "T", "Td", "Th", "O", "Oh", "I", "Ih"] + [f"C{n}" for n in range(2, 13)]
            + [f"C{n}v" for n in range(2, 13)] + [f"C{n}h" for n in range(2, 13)] + [f"D{n}" for n in range(2, 13)]
            + [f"D{n}h" for n in range(2, 13)] + [f"D{n}d" for n in range(2, 11)] + [f"S{n}" for n in range(4, 21, 2)])


def random_rotation(rng):
    q = np.linalg.qr(rng.normal(size=(3, 3)))[0]
    return q * np.sign(np.linalg.det(q))


def noise(rng, atoms, length):
    """Return (N, 3) displacements, each at most `length` long."""
    step = rng.normal(size=(atoms, 3))
    step *= rng.uniform(0, 1, size=(atoms, 1)) ** (1 / 3) / np.linalg.norm(step, axis=1)[:, None]
    return length * step


def distinct(points):
    """Return the points without repetitions (images of a point on an element coincide)."""
    kept = []
    for point in points:
        if all(np.linalg.norm(point - other) > 1e-6 for other in kept):
            kept.append(point)
    return np.array(kept)


def shortest(points):
    gaps = np.linalg.norm(points[:, None] - points[None], axis=2) + 99 * np.eye(len(points))
    return gaps.min()


def orbit_structure(symbol, rng, orbits=3, special=False, apart=0.9):
    """Return (symbols, positions) of orbits of general points, one element each; `special` adds orbits on the elements.

    Three general orbits of unlike atoms leave no accidental symmetry (for few operations more orbits are taken).
    """
    group = point_group(symbol)
    orbits = orbits if group.order > 4 else 4
    names, points = [], np.zeros((0, 3))
    radius = 1.5 + 0.9 * group.order ** 0.5
    # rotations (but the identity) fix a line, mirrors a plane
    traces, determinants = group.matrices.trace(axis1=1, axis2=2), np.linalg.det(group.matrices)
    mirrors = np.abs(traces - 1) + np.abs(determinants + 1) < 1e-9
    fixing = np.flatnonzero(((determinants > 0) & (traces < 3 - 1e-9)) | mirrors)
    stabilisers = rng.permutation(fixing)[:2] if special else []
    wanted = [None] * orbits + list(stabilisers)
    while wanted:
        point = rng.normal(size=3)
        point *= radius * rng.uniform(0.8, 1.6) / np.linalg.norm(point)
        if wanted[0] is not None:
            matrix, average, power = group.matrices[wanted[0]], np.zeros((3, 3)), np.eye(3)
            for _ in range(2 * group.order):
                average, power = average + power, power @ matrix
            point = average @ point / (2 * group.order)          # on the element of that operation
            if np.linalg.norm(point) > 1e-9:
                point *= radius * rng.uniform(0.8, 1.6) / np.linalg.norm(point)
        images = distinct(group.matrices @ point)
        together = np.vstack((points, images))
        if len(together) > 1 and shortest(together) < apart:
            radius *= 1.01
            continue
        names += [ELEMENTS[len(set(names)) % len(ELEMENTS)]] * len(images)
        points = together
        wanted.pop(0)
    return names, points


def posed(names, points, rng, shake=0.0):
    """Return a Structure turned, shifted, renumbered and shaken, and the new order of the atoms."""
    order = rng.permutation(len(points))
    moved = (points + noise(rng, len(points), shake))[order] @ random_rotation(rng).T + rng.normal(size=3) * 4
    return Structure.from_atoms([names[k] for k in order], moved), order


def gamma_3n(symmetry):
    """Return Γ3N as a dict, by unmoved atoms and traces class by class."""
    from vibsym.groups.reduction import reduce

    image = symmetry.group.image
    unmoved = (symmetry.permutations == np.arange(symmetry.permutations.shape[1])).sum(axis=1)
    chi = unmoved * image.matrices.trace(axis1=1, axis2=2)
    return reduce([chi[list(c.members)].mean() for c in image.classes], symmetry.group)
