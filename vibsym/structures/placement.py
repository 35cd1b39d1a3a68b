"""Placing a group's elements in a structure by least squares, and averaging the atoms over the group.

The operations arrive as fits to one permutation each; they are first made an exact representation by averaging over
the group, R_k <- orthogonal part of (1/h) sum_j R_j^T R_jk, which converges fast (K. Grove, H. Karcher, E. Ruh, Math.
Ann. 211, 7, 1974, from memory). A common turn of all elements then minimises the sum of squared shifts; with A_k =
sum_i x_pi_k(i) x_i^T it maximises sum_k tr(R_k^T A_k), by Newton steps whose cost does not depend on the number of
atoms.
"""

from dataclasses import dataclass

import numpy as np

EXACT = 1e-7
_TURNS = np.array([[[0.0, 0, 0], [0, 0, -1], [0, 1, 0]], [[0, 0, 1], [0, 0, 0], [-1, 0, 0]],
                   [[0, -1, 0], [1, 0, 0], [0, 0, 0]]])


@dataclass(frozen=True)
class Placement:
    """A group placed in a structure: matrices (h, 3, 3), permutations (h, N), averaged positions and shifts (Å)."""

    matrices: np.ndarray
    permutations: np.ndarray
    signs: np.ndarray
    averaged: np.ndarray
    shifts: np.ndarray

    @property
    def deviation(self) -> float:
        """The largest shift, Å."""
        return float(self.shifts.max())

    @property
    def order(self) -> int:
        """How many operations the group has."""
        return len(self.matrices)


def fitted_maps(sums, signs):
    """Return (k, 3, 3) orthogonal maps R of determinant `signs` that maximise tr(R^T A_k): the least-squares fits to
    permutations.

    A = U D V^T gives R = U diag(1, 1, +-1) V^T (W. Kabsch, Acta Cryst. A 32, 922, 1976; A 34, 827, 1978).
    """
    u, _, vt = np.linalg.svd(sums)
    flip = signs * np.linalg.det(u) * np.linalg.det(vt)
    u[:, :, 2] *= np.where(flip < 0, -1.0, 1.0)[:, None]
    return u @ vt


def orthogonal_part(matrices):
    """Return the orthogonal matrices nearest to (k, 3, 3) matrices."""
    u, _, vt = np.linalg.svd(matrices)
    return u @ vt


def exact_representation(matrices, table):
    """Return (h, 3, 3) matrices that multiply exactly as the table says, near the given ones; None when there are
    none near.
    """
    order = len(matrices)
    for _ in range(30):
        # one product of (3, 3h) with (3h, 3h): for every k the sum over j of R_j^T R_jk
        stacked = matrices[table].transpose(0, 2, 1, 3).reshape(3 * order, 3 * order)
        mean = (matrices.reshape(3 * order, 3).T @ stacked).reshape(3, order, 3).transpose(1, 0, 2) / order
        change = np.abs(mean - matrices).max()
        if change < EXACT:
            return 0.5 * mean @ (3 * np.eye(3) - mean.transpose(0, 2, 1) @ mean)
        matrices = orthogonal_part(mean)
    return None


def best_turn(matrices, sums):
    """Return the rotation Q that maximises sum_k tr((Q R_k Q^T)^T A_k); directions that do not matter stay as they are.

    sum_k R_k (x) A_k, a 9 x 9 table, is all that is needed: f(Q) = sum T[ab, cd] Q[c, a] Q[d, b].
    """
    weights = matrices.reshape(-1, 9).T @ sums.reshape(-1, 9)
    turn = np.eye(3)
    scale = np.abs(weights).max() + 1e-300
    for _ in range(12):
        # B[a, b] = A turned back, seen through each generator: first and second derivatives of f at the present turn
        kernel = np.kron(turn, turn).T
        t = (weights @ kernel.T).reshape(3, 3, 3, 3)
        gradient, hessian = _derivatives(t)
        if np.abs(gradient).max() <= 1e-13 * scale:
            break
        values, vectors = np.linalg.eigh(hessian)
        along = vectors.T @ gradient
        firm = np.abs(values) > 1e-9 * max(np.abs(values).max(), 1e-12 * scale)
        step = vectors @ np.where(firm, along / np.where(firm, np.abs(values), 1.0), 0.0)
        size = float(np.sqrt(step @ step))
        if size > 0.5:
            step *= 0.5 / size
        turn = turn @ rotation(step)
        if size < 1e-12:
            break
    return turn


def _derivatives(t):
    """Return gradient (3,) and Hessian (3, 3) at w = 0 of f(w) = sum T[ab, cd] W[c, a] W[d, b], W = exp(w . L)."""
    # f = sum T[a,b,c,d] W[c,a] W[d,b]; W = 1 + wL + (wL)^2/2
    left = np.einsum("abcb->ca", t)          # second index at the identity
    right = np.einsum("abad->db", t)
    gradient = np.tensordot(_TURNS, left + right, axes=([1, 2], [0, 1]))
    both = _TURNS @ _TURNS[:, None]          # [v, u] -> L_u L_v
    second = np.tensordot(both, left + right, axes=([2, 3], [0, 1]))
    mixed = np.tensordot(_TURNS, np.tensordot(t, _TURNS, axes=([3, 1], [1, 2])), axes=([1, 2], [1, 0]))
    return gradient, 0.5 * (second + second.T) + mixed + mixed.T


def rotation(vector):
    """Return the rotation by |vector| radians about `vector` (formula of Rodrigues)."""
    angle = float(np.sqrt(vector @ vector))
    if angle < 1e-300:
        return np.eye(3)
    cross = np.tensordot(vector / angle, _TURNS, axes=1)
    return np.eye(3) + np.sin(angle) * cross + (1 - np.cos(angle)) * (cross @ cross)


def correlation(points, permutations):
    """Return (h, 3, 3) A_k = sum_i x_pi_k(i) x_i^T."""
    if permutations.size > 200_000:
        return np.array([points[row].T @ points for row in permutations])
    return points[permutations].transpose(0, 2, 1) @ points


def averaged_positions(points, permutations, matrices):
    """Return (N, 3) (1/h) sum_k R_k^T x_pi_k(i)."""
    if permutations.size > 200_000:
        total = np.zeros_like(points)
        for row, matrix in zip(permutations, matrices):
            total += points[row] @ matrix
        return total / len(matrices)
    return (points[permutations] @ matrices).sum(axis=0) / len(matrices)


def place(points, permutations, signs, matrices, table) -> Placement | None:
    """Return the best placement of the group with this table, None when its matrices are not near a representation."""
    exact = exact_representation(matrices, table)
    if exact is None:
        return None
    turn = best_turn(exact, correlation(points, permutations))
    exact = turn @ exact @ turn.T
    averaged = averaged_positions(points, permutations, exact)
    difference = points - averaged
    return Placement(exact, permutations, signs, averaged, np.sqrt((difference * difference).sum(axis=1)))
