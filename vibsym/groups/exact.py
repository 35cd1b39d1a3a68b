"""Exact numbers: matrices and characters of species with sympy entries.

Axial groups are exact by construction: sign × R(2πa/N) diag(1, -1)^flip with whole a and N.  In the polyhedral groups
every entry is (p + q√5)/16 or √3 (p + q√5)/16 with small whole p, q; it is recognised among these, which lie far apart
compared with the rounding of a double, and the tests prove the matrices to be a representation in exact arithmetic.
"""

from functools import cache

import numpy as np

from vibsym.groups.axial import SpeciesPlan


def exact_matrices(plan: SpeciesPlan) -> list:
    """Return the matrices of a species as nested lists of sympy numbers, one for each operation."""
    return [exact_matrix(plan, operation) for operation in range(len(plan.matrices))]


def exact_matrix(plan: SpeciesPlan, operation: int) -> list:
    """Return the matrix of one operation as nested lists of sympy numbers."""
    import sympy

    if plan.signs is None:
        return [[recognise(float(value)) for value in row] for row in plan.matrices[operation]]
    sign = int(plan.signs[operation])
    if plan.angles is None:
        return [[sympy.Integer(sign)]]
    cosine, sine = cosine_sine(int(plan.angles[operation]), plan.turn)
    flip = -1 if plan.flips[operation] else 1
    return [[sign * cosine, -sign * flip * sine], [sign * sine, sign * flip * cosine]]


def exact_trace(plan: SpeciesPlan, operation: int):
    """Return the character of one operation: 2cos(2πa/N) in a degenerate species, a radical if simple."""
    matrix = exact_matrix(plan, operation)
    return sum((matrix[k][k] for k in range(1, len(matrix))), matrix[0][0])


@cache
def cosine_sine(numerator: int, turn: int) -> tuple:
    """Return cos and sin of 2π numerator/turn: radicals where sympy has simple ones, else cos(2πk/n) as it stands."""
    import sympy

    angle = 2 * sympy.pi * sympy.Rational(numerator, turn)
    return sympy.cos(angle), sympy.sin(angle)


@cache
def _candidates() -> tuple[np.ndarray, list[tuple[int, int, int]]]:
    whole = np.arange(-48, 49)
    values, keys = [], []
    for radical in (1, 3):
        p, q = np.meshgrid(whole, whole, indexing="ij")
        size = radical**0.5 * (p + q * 5**0.5) / 16
        inside = np.abs(size) < 2.01
        values.append(size[inside])
        keys += [(radical, int(a), int(b)) for a, b in zip(p[inside], q[inside], strict=True)]
    flat = np.concatenate(values)
    order = np.argsort(flat, kind="stable")
    return flat[order], [keys[k] for k in order]


@cache
def recognise(value: float):
    """Return the number (p + q√5)/16 or √3(p + q√5)/16 that a matrix entry of a polyhedral group is."""
    import sympy

    values, keys = _candidates()
    place = int(np.searchsorted(values, value - 1e-11))
    if place == len(values) or abs(values[place] - value) > 1e-11:
        raise ArithmeticError(f"{value!r} is no entry of a polyhedral group")
    radical, p, q = keys[place]
    return sympy.sqrt(radical) * (sympy.Rational(p, 16) + sympy.sqrt(5) * sympy.Rational(q, 16))
