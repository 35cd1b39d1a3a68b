"""How linear, quadratic and cubic functions of x, y, z and the rotations transform: which species each belongs to.

Infrared activity follows the linear functions, Raman the quadratic, hyper-Raman the ten cubic ones (R. S. Mulliken,
J. Chem. Phys. 23, 1997 (1955); S. J. Cyvin, J. E. Rauch, J. C. Decius, J. Chem. Phys. 43, 4083 (1965) for the cubic).
The sets are chosen so that every function lies in one species; a function is listed under the species whose projector
leaves it as it is.  φ is the golden ratio (1 + √5)/2.
"""

from functools import cache
from itertools import combinations_with_replacement

import numpy as np

PHI = (1 + 5**0.5) / 2
LINEAR = ("x", "y", "z")
ROTATIONS = ("Rx", "Ry", "Rz")
# No axis higher than twofold: monomials, as handbooks print them.
_LOW = {2: ("x2", "y2", "z2", "xy", "xz", "yz"),
        3: ("x3", "y3", "z3", "x2y", "x2z", "xy2", "y2z", "xz2", "yz2", "xyz")}
_AXIAL = {2: ("x2+y2", "z2", "x2-y2", "xy", "xz", "yz"),
          3: ("z3", "z(x2+y2)", "xz2", "yz2", "x(x2+y2)", "y(x2+y2)", "xyz", "z(x2-y2)", "x(x2-3y2)", "y(3x2-y2)")}
_CUBIC = {2: ("x2+y2+z2", "2z2-x2-y2", "x2-y2", "yz", "xz", "xy"),
          3: ("xyz", "x3", "y3", "z3", "x(y2+z2)", "y(z2+x2)", "z(x2+y2)", "x(y2-z2)", "y(z2-x2)", "z(x2-y2)")}
_ICOSAHEDRAL = {2: _CUBIC[2],
                3: ("x(x2+y2+z2)", "y(x2+y2+z2)", "z(x2+y2+z2)",
                    "x(x2-3φy2+3(φ-1)z2)", "y(y2-3φz2+3(φ-1)x2)", "z(z2-3φx2+3(φ-1)y2)", "xyz",
                    "x(x2-(2-φ)y2-(1+φ)z2)", "y(y2-(2-φ)z2-(1+φ)x2)", "z(z2-(2-φ)x2-(1+φ)y2)")}


def function_names(symbol: str, degree: int) -> tuple[str, ...]:
    """Return the names of the quadratic (degree 2) or cubic (degree 3) functions used for a group.

    >>> function_names("C2v", 2)
    ('x2', 'y2', 'z2', 'xy', 'xz', 'yz')
    """
    if symbol in ("C1", "Ci", "Cs", "C2", "C2h", "C2v", "D2", "D2h"):
        return _LOW[degree]
    if symbol in ("I", "Ih"):
        return _ICOSAHEDRAL[degree]
    return (_CUBIC if symbol[0] in "TO" else _AXIAL)[degree]


def functions_of_species(symbol: str, matrices: np.ndarray, species: list[tuple[np.ndarray, float]],
                         ) -> list[dict[str, tuple[str, ...]]]:
    """Return for every species its linear, rotations, quadratic and cubic functions.

    `matrices` (h, 3, 3); `species`: (characters of every operation (h,), d/norm with norm 2 for a conjugate pair).
    """
    determinant = np.linalg.det(matrices)[:, None, None]
    spaces = [("linear", LINEAR, matrices, np.eye(3)), ("rotations", ROTATIONS, matrices * determinant, np.eye(3))]
    for kind, degree in (("quadratic", 2), ("cubic", 3)):
        names = function_names(symbol, degree)
        spaces.append((kind, names, _polynomial_matrices(matrices, degree), _coefficients(names, degree)))
    characters = np.array([chi for chi, _ in species])
    scales = np.array([scale for _, scale in species]) / len(matrices)
    found: list[dict[str, tuple[str, ...]]] = [{} for _ in species]
    for kind, names, images, coefficients in spaces:
        projectors = np.einsum("sg,gab->sab", characters * scales[:, None], images)
        kept = np.einsum("sab,fb->sfa", projectors, coefficients)
        inside = np.abs(kept - coefficients).max(axis=2) < 1e-8
        if not np.all(inside.sum(axis=0) == 1):
            raise ArithmeticError(f"{symbol}: a {kind} function lies in no species or in several")
        for index, entry in enumerate(found):
            entry[kind] = tuple(name for name, yes in zip(names, inside[index], strict=True) if yes)
    return found


def _polynomial_matrices(matrices: np.ndarray, degree: int) -> np.ndarray:
    """Matrices (h, m, m) of the operations on the coefficients of homogeneous polynomials.

    A monomial x_a x_b ... becomes the product of the rows of R^-1: the active image f(R^-1 r).
    """
    inverse = np.swapaxes(matrices, 1, 2)
    exponents = monomials(degree)
    index = {exponent: k for k, exponent in enumerate(exponents)}
    result = np.zeros((len(matrices), len(exponents), len(exponents)))
    for column, exponent in enumerate(exponents):
        factors = [k for k in range(3) for _ in range(exponent[k])]
        # product over the factors of sum_j inverse[k, j] x_j, expanded term by term
        terms = {(0, 0, 0): np.ones(len(matrices))}
        for k in factors:
            grown: dict[tuple[int, int, int], np.ndarray] = {}
            for powers, value in terms.items():
                for j in range(3):
                    key = tuple(p + (j == axis) for axis, p in enumerate(powers))
                    grown[key] = grown.get(key, 0.0) + value * inverse[:, k, j]
            terms = grown
        for powers, value in terms.items():
            result[:, index[powers], column] = value
    return result


@cache
def monomials(degree: int) -> tuple[tuple[int, int, int], ...]:
    """Exponents (of x, y, z) of the monomials of a degree."""
    return tuple(tuple(choice.count(k) for k in range(3)) for choice in combinations_with_replacement(range(3), degree))


@cache
def _coefficients(names: tuple[str, ...], degree: int) -> np.ndarray:
    order = monomials(degree)
    return np.array([[polynomial(name).get(exponent, 0.0) for exponent in order] for name in names])


Polynomial = dict[tuple[int, int, int], float]


def polynomial(text: str) -> Polynomial:
    """Read a function as handbooks print it: exponents follow the letters, factors stand side by side.

    >>> polynomial("x(x2-3y2)") == {(3, 0, 0): 1.0, (1, 2, 0): -3.0}
    True
    """
    result, rest = _sum(text)
    if rest:
        raise ValueError(f"cannot read the function '{text}' at '{rest}'")
    return result


def _sum(text: str) -> tuple[Polynomial, str]:
    total: Polynomial = {}
    while text and text[0] != ")":
        sign = -1.0 if text[0] == "-" else 1.0
        product, text = _product(text.lstrip("+-"))
        for exponent, value in product.items():
            total[exponent] = total.get(exponent, 0.0) + sign * value
    return total, text


def _product(text: str) -> tuple[Polynomial, str]:
    product: Polynomial = {(0, 0, 0): 1.0}
    while text and text[0] not in "+-)":
        head, text = text[0], text[1:]
        if head == "(":
            factor, text = _sum(text)
            text = text[1:]
        elif head in "xyz":
            power = 1
            if text[:1].isdigit():
                power, text = int(text[0]), text[1:]
            factor = {tuple(power * (head == letter) for letter in "xyz"): 1.0}
        else:
            factor = {(0, 0, 0): PHI if head == "φ" else float(head)}
        product = _times(product, factor)
    return product, text


def _times(left: Polynomial, right: Polynomial) -> Polynomial:
    result: Polynomial = {}
    for a, p in left.items():
        for b, q in right.items():
            key = tuple(m + n for m, n in zip(a, b, strict=True))
            result[key] = result.get(key, 0.0) + p * q
    return result
