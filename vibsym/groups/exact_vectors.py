"""Symmetry-adapted combinations with exact coefficients: radicals, or cosines of 2πk/n where no simple radical exists.

The coefficients of vibsym/groups/projection.py lie in known sets of numbers, because the seeds are invariants of site
groups: in an axial group the two partners at one object are ρ (cos β, sin β) with ρ² rational and β a whole multiple of
a fraction of the step of the axis; in a polyhedral group the square of a coefficient is (p + q√5)/r.  The member of the
set is found from the double and must agree with it to 1e-12; neighbours in the set lie many orders of magnitude farther
apart, and the tests check orthonormality in exact arithmetic.  sympy is imported only here.
"""

from fractions import Fraction
from functools import cache

import numpy as np

from vibsym.groups.bases import Basis
from vibsym.groups.projection import symmetry_vectors

SMALL = 1e-12
Terms = tuple[tuple[int, object, float], ...]             # (place in the basis, exact number, its value)


def exact_symmetry_vectors(basis: Basis) -> dict[str, list[list[Terms]]]:
    """Return for each species its copies, for each copy its components, each as terms (place, exact, value).

    The vectors are those of `symmetry_vectors`, in the same order; terms that vanish are left out.
    """
    group = basis.group
    result = {}
    for label, vectors in symmetry_vectors(basis).items():
        plan = group.plan(label)
        if plan.signs is not None and vectors.shape[1] == 2:
            exact = _polar(vectors, plan.turn)
        else:
            exact = _radicals(vectors, golden=group.symbol in ("I", "Ih"))
        result[label] = [[tuple((int(place), exact[u, i, place], float(vectors[u, i, place]))
                                for place in np.flatnonzero(np.abs(vectors[u, i]) > SMALL))
                          for i in range(vectors.shape[1])] for u in range(len(vectors))]
    return result


def _radicals(vectors: np.ndarray, golden: bool) -> np.ndarray:
    """Every coefficient as the square root of a rational number, or of one of Q(√5), with its sign."""
    result = np.empty(vectors.shape, dtype=object)
    used = np.abs(vectors) > SMALL
    rounded, places = np.unique(np.round(np.abs(vectors[used]), 11), return_inverse=True)
    typical = [float(np.abs(vectors[used])[places == k][0]) for k in range(len(rounded))]
    exact = [_root(value * value, golden) for value in typical]
    signs = np.sign(vectors[used])
    result[used] = [exact[k] if sign > 0 else -exact[k]
                    for k, sign in zip(places.tolist(), signs.tolist(), strict=True)]
    _confirm(result[used], vectors[used])
    return result


def _polar(vectors: np.ndarray, turn: int) -> np.ndarray:
    """Partners as ρ (cos β, sin β): the pair of coefficients of one object in an axial group."""
    result = np.empty(vectors.shape, dtype=object)
    length = np.hypot(vectors[:, 0], vectors[:, 1])
    used = length > SMALL
    angle = np.arctan2(vectors[:, 1][used], vectors[:, 0][used]) / (2 * np.pi)
    pairs = [_pair(round(a, 13), round(r, 13), turn)
             for a, r in zip(angle.tolist(), length[used].tolist(), strict=True)]
    for component in (0, 1):
        result[:, component][used] = [pair[component] for pair in pairs]
        _confirm(result[:, component][used], vectors[:, component][used])
    return result


@cache
def _pair(angle: float, length: float, turn: int) -> tuple:
    from vibsym.groups.exact import cosine_sine

    fraction = _fraction(angle, 16 * turn)
    root = _root(length * length, golden=False)
    cosine, sine = cosine_sine(fraction.numerator, fraction.denominator)
    return root * cosine, root * sine


def _fraction(value: float, largest: int) -> Fraction:
    fraction = Fraction(value).limit_denominator(largest)
    if abs(float(fraction) - value) > SMALL:
        raise ArithmeticError(f"{value!r} is no fraction with a denominator up to {largest}")
    return fraction


@cache
def _root(square: float, golden: bool):
    """Return the square root of the number in Q (or Q(√5)) that `square` is, as a sympy number."""
    import sympy

    if not golden:
        fraction = _fraction(square, 100_000)
        return sympy.sqrt(sympy.Rational(fraction.numerator, fraction.denominator))
    scale = 30_720                                        # squares of sixteenths, shared among 120 operations
    q = np.arange(-int(scale / 20**0.5), int(scale / 20**0.5) + 1)
    remainder = square * scale - q * 5**0.5               # p and its conjugate p - q√5 are sums of squares, at most 1
    fits = q[np.abs(remainder - np.rint(remainder)) < 1e-9]
    if not len(fits):
        raise ArithmeticError(f"{square!r} is no number of Q(√5) with a denominator that divides {scale}")
    best = int(fits[np.argmin(np.abs(fits))])
    p = round(square * scale - best * 5**0.5)
    number = sympy.Rational(p, scale) + sympy.Rational(best, scale) * sympy.sqrt(5)
    return _denest(p, best, scale) or sympy.sqrt(number)


def _denest(p: int, q: int, scale: int):
    """√(p/s + q√5/s) = √r (a + b√5) with whole a, b where there is such a form: (a + b√5)² r = a²r + 5b²r + 2abr √5."""
    import sympy

    norm = Fraction(p * p - 5 * q * q, scale * scale)     # must be a rational square
    if norm < 0:
        return None
    root = sympy.sqrt(sympy.Rational(norm.numerator, norm.denominator))
    if not root.is_Rational:
        return None
    first = (sympy.Rational(p, scale) + root) / 2
    second = (sympy.Rational(p, scale) - root) / 2
    sign = 1 if q >= 0 else -1
    value = sympy.sqrt(first) + sign * sympy.sqrt(second)
    return sympy.factor_terms(value)


def _confirm(exact: np.ndarray, values: np.ndarray) -> None:
    distinct = {}
    for number, value in zip(exact.tolist(), values.tolist(), strict=True):
        if number not in distinct:
            distinct[number] = float(number)
        if abs(distinct[number] - value) > SMALL:
            raise ArithmeticError(f"{number} is not {value!r}")
