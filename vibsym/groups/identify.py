"""The Schoenflies symbol of a set of orthogonal matrices that is a group, and a frame in which it stands as in
`point_group(symbol)`.

The rotations alone are C_n (one of order n = their number), D_n (largest order n = half their number), T, O or I; the
rest follows from the inversion and the number of mirror planes (the table in any textbook, e.g. F. A. Cotton,
Chemical Applications of Group Theory, ch. 3). The frame follows the standard orientation of vibsym.groups: z
principal axis; sigma_v holds xz; C2' along x; cubic: C4, S4 or C2 along x, y, z; icosahedral: C2 along x, y, z and C5
through (0, 1, phi). No atoms and no tolerance are involved: the matrices multiply exactly.
"""

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group

_POLYHEDRAL = {12: "T", 24: "O", 60: "I"}
_ROUND = 1e-4      # matrices come as exact representations, so cosines are exact to many figures


def schoenflies(matrices, signs) -> str:
    """Return the symbol of a finite group of (h, 3, 3) orthogonal matrices with determinants `signs`."""
    traces = matrices.trace(axis1=1, axis2=2)
    rotations = traces[signs > 0]
    count = len(rotations)
    turned = rotations[rotations < 3 - 1e-9]
    largest = round(2 * np.pi / np.arccos(np.clip((turned.max() - 1) / 2, -1, 1))) if len(turned) else 1
    improper = count < len(matrices)
    mirrors = int((np.abs(traces[signs < 0] - 1) < _ROUND).sum())
    inversion = bool((traces[signs < 0] < -3 + _ROUND).any())
    if largest == count:
        return _cyclic(count, improper, mirrors, inversion)
    if 2 * largest == count:
        if not improper:
            return f"D{largest}"
        return f"D{largest}h" if mirrors == largest + 1 else f"D{largest}d"
    letter = _POLYHEDRAL.get(count)
    if letter is None:
        raise VibsymError(f"{count} rotations, the largest of order {largest}, do not close into a point group; "
                          "this is an error of vibsym")
    if not improper:
        return letter
    if letter == "T":
        return "Th" if inversion else "Td"
    return letter + "h"


def _cyclic(n, improper, mirrors, inversion):
    if not improper:
        return f"C{n}"
    if n == 1:
        return "Ci" if inversion else "Cs"
    if mirrors == n and n > 1:
        return f"C{n}v"
    return f"C{n}h" if mirrors == 1 else f"S{2 * n}"


def axes_of(matrices, signs):
    """Return (h, 3) unit vectors along the axis of each operation (of R for det R = 1, of -R for det R = -1; a
    mirror's normal).

    Half-turns give R + 1 = 2 n n^T, other angles the antisymmetric part; the identity and the inversion give zero.
    """
    proper = matrices * signs[:, None, None]
    symmetric = proper + proper.transpose(0, 2, 1)
    traces = proper.trace(axis1=1, axis2=2)
    # R + R^T = 2 cos + 2 (1 - cos) n n^T, so what is left without its isotropic part is a multiple of n n^T
    dyads = symmetric - (traces - 1)[:, None, None] * np.eye(3)
    column = (dyads * dyads).sum(axis=1).argmax(axis=1)
    axes = np.take_along_axis(dyads, column[:, None, None], axis=2)[:, :, 0]
    length = np.sqrt((axes * axes).sum(axis=1))
    length[traces > 3 - 1e-9] = np.inf
    return axes / length[:, None]


def standard_frame(symbol, matrices, signs):
    """Return (3, 3) rows x, y, z in which the group stands in its standard orientation (one of several equally good
    ones).
    """
    axes = axes_of(matrices, signs)
    cosines = (matrices.trace(axis1=1, axis2=2) * signs - 1) / 2
    half_turns = axes[(signs > 0) & (np.abs(cosines + 1) < _ROUND)]
    if symbol in ("C1", "Ci"):
        return np.eye(3)
    if symbol[0] in "TOI":
        return _polyhedral_frame(symbol, axes, cosines, signs, half_turns)
    if symbol == "Cs":
        z = axes[signs < 0][0]
    elif symbol == "D2d":
        z = axes[(signs < 0) & (np.abs(cosines) < _ROUND)][0]
    else:
        turning = np.where((signs > 0) & (cosines < 1 - 1e-9), cosines, -2.0)
        z = axes[int(turning.argmax())]
    x = None
    if symbol[0] == "D":
        x = half_turns[np.argmin(np.abs(half_turns @ z))]
    elif symbol[-1] == "v":
        normals = axes[(signs < 0) & (np.abs(cosines + 1) < _ROUND)]
        x = np.cross(normals[0], z)
    return completed(z, x)


def completed(z, x=None):
    """Return a right-handed frame with z and, if given, x (made perpendicular)."""
    z = z / np.sqrt(z @ z)
    if x is None:
        x = np.eye(3)[np.argmin(np.abs(z))]
    x = x - (x @ z) * z
    x = x / np.sqrt(x @ x)
    return np.array([x, [z[1] * x[2] - z[2] * x[1], z[2] * x[0] - z[0] * x[2], z[0] * x[1] - z[1] * x[0]], z])


def _polyhedral_frame(symbol, axes, cosines, signs, half_turns):
    if symbol[0] == "O":
        along = axes[(signs > 0) & (np.abs(cosines) < _ROUND)]
    else:
        along = half_turns
    z = along[0]
    x = along[np.argmin(np.abs(along @ z))]
    return completed(z, x)


def matched(group, frame, matrices):
    """Return (h,) which of `matrices` stands for each of group.matrices in the frame, or None when the frame does not
    fit.
    """
    turned = frame @ matrices @ frame.T
    likeness = group.matrices.reshape(-1, 9) @ turned.reshape(-1, 9).T
    best = likeness.argmax(axis=1)
    if likeness[np.arange(len(best)), best].min() < 3 - 1e-3 or len(set(best.tolist())) < len(best):
        return None
    return best


def identified(matrices, signs):
    """Return (group, frame, order): frame @ matrices[order[k]] @ frame.T = group.matrices[k].

    >>> import numpy as np
    >>> identified(np.array([np.eye(3), -np.eye(3)]), np.array([1, -1]))[0].symbol
    'Ci'
    """
    symbol = schoenflies(matrices, signs)
    group = point_group(symbol)
    frame = standard_frame(symbol, matrices, signs)
    order = matched(group, frame, matrices)
    if order is None:          # icosahedral groups: two ways to stand on three C2 axes
        x, y, z = frame
        frame = np.array([y, -x, z])
        order = matched(group, frame, matrices)
    if order is None:
        raise VibsymError(f"the operations of {symbol} do not fit its standard orientation; this is an error of vibsym")
    return group, frame, order
