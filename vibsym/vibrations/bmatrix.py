"""The B matrix: how internal coordinates change with Cartesian displacements, S = B x; and G = B M^-1 B'.

With unit vectors u from the centre to the ends and bond lengths r (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular
Vibrations, 1955, ch. 4):

    stretch      |x_j - x_i|
    bend         angle between u_i and u_k
    linear bend  p . (u_i + u_k) for two directions p across the axis
    wag          u_a . (u_b x u_c), the sine of the angle between bond a and the plane of b and c, times sin(b, c)
    torsion      sum of the dihedral angles i-a-b-k

Rows run over the coordinates set by set (two for a linear bend), columns over x, y, z of atom 1, 2, ...; lengths in
Å, angles in radian.  A linear bend at an angle that is not quite straight would notice a rotation of the whole; it
is taken in the frame in which the displacements hold no translation or rotation.
"""

from collections.abc import Sequence

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.structure import Structure
from vibsym.vibrations.internal import CoordinateSet

STRAIGHT_ENOUGH = 1e-9


def b_matrix(positions: np.ndarray, sets: Sequence[CoordinateSet]) -> np.ndarray:
    """Return B (m, 3N) of the sets at (N, 3) positions in the frame in which the directions of linear bends are
    given."""
    positions = np.asarray(positions, dtype=float)
    blocks = [_ROWS[each.kind](positions, each) for each in sets if len(each)]
    return np.concatenate(blocks) if blocks else np.zeros((0, positions.size))


def g_matrix(b: np.ndarray, masses: np.ndarray, structure: Structure | None = None) -> np.ndarray:
    """Return G = B M^-1 B' (m, m), masses (N,) in u; a dummy atom, which has no mass, is an error."""
    if np.isnan(masses).any():
        atom = int(np.flatnonzero(np.isnan(masses))[0])
        name = f" ({structure.symbols[atom]})" if structure is not None else ""
        raise VibsymError(f"atom {atom + 1}{name} is a dummy atom without mass; replace it by atoms to get G")
    return (b / np.repeat(masses, 3)) @ b.T


def rigid_motions(positions: np.ndarray) -> np.ndarray:
    """Return (3N, 6) the infinitesimal translations and rotations, not normalised; of a linear molecule one is zero."""
    translations = np.tile(np.eye(3), (len(positions), 1))
    centred = positions - positions.mean(axis=0)
    rotations = np.cross(np.eye(3)[:, None], centred).transpose(1, 2, 0).reshape(-1, 3)
    return np.hstack([translations, rotations])


def _stretches(positions, each: CoordinateSet) -> np.ndarray:
    (i, j) = each.atoms.T
    u, _ = _unit(positions[j] - positions[i])
    return _scatter(positions, len(each), (i, j), (-u, u))


def _bends(positions, each: CoordinateSet) -> np.ndarray:
    i, j, k = each.atoms.T
    u, r = _unit(positions[i] - positions[j])
    v, s = _unit(positions[k] - positions[j])
    cosine = (u * v).sum(axis=1)[:, None]
    sine = np.sqrt((1 - cosine) * (1 + cosine))
    first, last = (cosine * u - v) / (r * sine), (cosine * v - u) / (s * sine)
    return _scatter(positions, len(each), (i, j, k), (first, -first - last, last))


def _linear_bends(positions, each: CoordinateSet) -> np.ndarray:
    i, j, k = each.atoms.T
    u, r = _unit(positions[i] - positions[j])
    v, s = _unit(positions[k] - positions[j])
    rows = np.zeros((len(each), 2, positions.size))
    for component in (0, 1):
        p = each.directions[:, component]
        first = (p - (p * u).sum(axis=1)[:, None] * u) / r
        last = (p - (p * v).sum(axis=1)[:, None] * v) / s
        rows[:, component] = _scatter(positions, len(each), (i, j, k), (first, -first - last, last))
    rows = rows.reshape(-1, positions.size)
    if np.abs(u + v).max() > STRAIGHT_ENOUGH:
        rigid = rigid_motions(positions)
        rows = rows - (rows @ rigid) @ np.linalg.pinv(rigid)
    return rows


def _wags(positions, each: CoordinateSet) -> np.ndarray:
    centre, *ends = each.parts.T
    units, lengths = zip(*(_unit(positions[end] - positions[centre]) for end in ends), strict=True)
    values = []
    for k in range(3):
        normal = np.cross(units[(k + 1) % 3], units[(k + 2) % 3])
        along = (normal * units[k]).sum(axis=1)[:, None]
        values.append((normal - along * units[k]) / lengths[k])
    weights = each.weights[:, None]
    return _gather(positions, each, (centre, *ends), [-weights * sum(values), *(weights * value for value in values)])


def _torsions(positions, each: CoordinateSet) -> np.ndarray:
    i, a, b, k = each.parts.T
    f, g, h = positions[i] - positions[a], positions[a] - positions[b], positions[k] - positions[b]
    normal, other = np.cross(f, g), np.cross(h, g)
    g_length = np.sqrt((g * g).sum(axis=1))[:, None]
    one = normal / (normal * normal).sum(axis=1)[:, None]
    two = other / (other * other).sum(axis=1)[:, None]
    fg, hg = (f * g).sum(axis=1)[:, None] / g_length, (h * g).sum(axis=1)[:, None] / g_length
    first, last = -g_length * one, g_length * two
    middle = fg * one - hg * two
    return _gather(positions, each, (i, a, b, k), [first, -first + middle, -middle - last, last])


_ROWS = {"stretch": _stretches, "linear bend": _linear_bends, "bend": _bends, "wag": _wags, "torsion": _torsions}


def _unit(vectors: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    lengths = np.sqrt((vectors * vectors).sum(axis=1))[:, None]
    return vectors / lengths, lengths


def _scatter(positions, rows: int, atoms, values) -> np.ndarray:
    """Return (rows, 3N) with the (rows, 3) values at the atoms, which differ within a row."""
    result = np.zeros((rows, len(positions), 3))
    for atom, value in zip(atoms, values, strict=True):
        result[np.arange(rows), atom] = value
    return result.reshape(rows, -1)


def _gather(positions, each: CoordinateSet, atoms, values) -> np.ndarray:
    """Return (n, 3N) with the values of all parts of a coordinate added up."""
    result = np.zeros((len(each), len(positions), 3))
    for atom, value in zip(atoms, values, strict=True):
        np.add.at(result, (each.owners, atom), value)
    return result.reshape(len(each), -1)
