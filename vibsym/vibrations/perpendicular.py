"""The two perpendicular components of a linear bend, chosen once for each orbit and carried to the others by symmetry.

The pair (p, q) across the axis of a straight angle is free up to a turn about the axis.  Taken along a mirror plane
or a twofold axis of the site, and carried from one member of the orbit to the next by the operations themselves, it
makes the blocks of the representation those of the site group, and the symmetry coordinates come out with simple
coefficients.
"""

import numpy as np

from vibsym.structures.symmetry import Symmetry

CLOSE = 1e-6


def perpendicular_directions(symmetry: Symmetry, atoms: np.ndarray) -> np.ndarray:
    """Return (n, 2, 3) orthonormal directions across the axes of the straight angles `atoms` (n, 3), in the standard
    frame."""
    matrices = symmetry.group.image.matrices
    images = symmetry.permutations[:, atoms]
    images = np.where((images[:, :, :1] > images[:, :, 2:]), images[:, :, ::-1], images)
    place = {tuple(row): k for k, row in enumerate(atoms.tolist())}
    directions = np.full((len(atoms), 2, 3), np.nan)
    for seed, row in enumerate(atoms.tolist()):
        if not np.isnan(directions[seed, 0, 0]):
            continue
        targets = [place[tuple(image)] for image in images[:, seed].tolist()]
        site = matrices[[target == seed for target in targets]]
        axis = symmetry.positions[row[2]] - symmetry.positions[row[0]]
        own = _across(axis / np.linalg.norm(axis), site)
        for target, matrix in zip(targets, matrices):
            if np.isnan(directions[target, 0, 0]):
                directions[target] = own @ matrix.T
    return directions


def _across(axis: np.ndarray, site: np.ndarray) -> np.ndarray:
    """Return (2, 3) unit vectors across the axis, the first along an element of the site group where one lies
    across."""
    candidates = []
    for matrix in site:
        trace, sign = np.trace(matrix), np.linalg.det(matrix)
        if abs(trace + sign) > CLOSE:                     # neither a twofold rotation (trace -1) nor a mirror (trace 1)
            continue
        square = (np.eye(3) + sign * matrix) / 2          # n n' of the axis, or of the normal of the mirror
        direction = square[int(np.argmax(np.diag(square)))]
        if abs(direction @ axis) < CLOSE:
            direction = direction / np.linalg.norm(direction)
            candidates += [direction, np.cross(axis, direction)]
    if not candidates:
        candidates = [np.eye(3)[int(np.argmin(np.abs(axis) - np.arange(3) * CLOSE))]]
    slant = [np.abs(vector).sum() for vector in candidates]
    first = candidates[int(np.argmin(np.array(slant) > min(slant) + CLOSE))]
    first = first - (first @ axis) * axis
    first = first / np.linalg.norm(first)
    lead = first[np.abs(first) > CLOSE][0]
    first = first if lead > 0 else -first
    return np.array([first, np.cross(axis, first)])
