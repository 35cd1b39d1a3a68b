"""A combination of coordinates as it is printed: `1/(2√3) (2 r1 − r2 − r3 + 2 r4 − r5 − r6)`.

The common factor is the one that leaves small whole numbers; where there is none (golden ratio, cosines) each
coordinate keeps its own exact coefficient, like ones together.  Nothing is rounded.
"""

import re
from collections.abc import Sequence
from fractions import Fraction
from math import acos, cos, gcd, isqrt, lcm, pi

CLOSE = 1e-11
LARGEST = 60                # of the whole numbers in the bracket
FINEST = 120                # denominator of the fraction of π in a cosine


def combination_text(terms: Sequence) -> str:
    """Return terms (each with `coordinate`, `exact`, `value`) as a factor and a bracket, or one by one.

    >>> from vibsym.vibrations.symmetry_coordinates import Term
    >>> combination_text([Term("r1", None, 2 / 6**0.5), Term("r2", None, -1 / 6**0.5), Term("r3", None, -1 / 6**0.5)])
    '1/√6 (2 r1 − r2 − r3)'
    """
    if len(terms) == 1 and abs(abs(terms[0].value) - 1) < CLOSE:
        return ("−" if terms[0].value < 0 else "") + terms[0].coordinate
    values = [term.value for term in terms]
    found = _whole_numbers(values) or _cosines(values)
    if found is None:
        return _joined(_grouped(values, [_exact_size(term) for term in terms], terms))
    factor, sizes = found
    return f"{factor} ({_joined(_grouped(values, sizes, terms))})"


def _grouped(values: Sequence[float], sizes: Sequence[str], terms: Sequence) -> list[tuple[str, str]]:
    """Return (signed coefficient, coordinates), coordinates of one size together: `cos(2π/5)`, `(r2 + r5)`.

    Whole numbers stay with each coordinate, as is usual.
    """
    together: dict[tuple, list[tuple[float, str]]] = {}
    for number, (value, size, term) in enumerate(zip(values, sizes, terms, strict=True)):
        whole = size == "" or size.isdigit()
        together.setdefault((size, number if whole else None), []).append((value, term.coordinate))
    pairs = []
    for (size, _), members in together.items():
        sign = "−" if members[0][0] < 0 else ""
        names = _joined([("−" if value * members[0][0] < 0 else "", name) for value, name in members])
        pairs.append((sign + _bracketed(size), f"({names})" if len(members) > 1 else names))
    return pairs


def _exact_size(term) -> str:
    return exact_text(-term.exact if term.value < 0 else term.exact)


def _cosines(values: Sequence[float]) -> tuple[str, list[str]] | None:
    """Return (factor, sizes) where every value is √(2/n) times the cosine of a fraction of π, n near their number."""
    for n in range(len(values), len(values) + 5):
        ratios = [abs(value) * (n / 2) ** 0.5 for value in values]
        if max(ratios) > 1 + CLOSE:
            continue
        parts = [Fraction(acos(min(ratio, 1.0)) / pi).limit_denominator(FINEST) for ratio in ratios]
        if all(abs(cos(float(part) * pi) - ratio) < CLOSE for part, ratio in zip(parts, ratios, strict=True)):
            return _root(Fraction(2, n)), [_cosine(part) for part in parts]
    return None


def _cosine(part: Fraction) -> str:
    if part in (0, Fraction(1, 3)):
        return "" if part == 0 else "1/2"
    top = "π" if part.numerator == 1 else f"{part.numerator}π"
    return f"cos({top}/{part.denominator})"


def exact_text(exact) -> str:
    """Return an exact number as printed: `√5/4 − 1/4`.

    >>> import sympy
    >>> exact_text(sympy.sqrt(5) / 4 - sympy.Rational(1, 4)), exact_text(sympy.cos(sympy.pi / 7))
    ('√5/4 − 1/4', 'cos(π/7)')
    """
    text = re.sub(r"sqrt\((\d+)\)", r"√\1", str(exact)).replace("sqrt", "√").replace("pi", "π")
    text = re.sub(r"(?<=\d)\*(?=√)", "", text).replace("*", "·").replace("-", "−")
    return re.sub(r"^(\(?)−([^ ()]+) \+ ([^ ()]+)", r"\1\3 − \2", text)       # what is positive stands first


def _whole_numbers(values: Sequence[float]) -> tuple[str, list[str]] | None:
    """Return (factor, sizes) with value = ± factor × whole number, the factor the root of a fraction; None: there is
    none."""
    smallest = min(abs(value) for value in values)
    ratios = [Fraction(value / smallest).limit_denominator(LARGEST) for value in values]
    if any(abs(float(ratio) * smallest / value - 1) > 10 * CLOSE for ratio, value in zip(ratios, values, strict=True)):
        return None
    common = lcm(*(ratio.denominator for ratio in ratios))
    numbers = [int(ratio * common) for ratio in ratios]
    shared = gcd(*numbers)
    numbers = [number // shared for number in numbers]
    factor = smallest * shared / common
    square = Fraction(factor * factor).limit_denominator(100_000)
    if max(map(abs, numbers)) > LARGEST or abs(float(square) - factor * factor) > CLOSE:
        return None
    return _root(square), [str(abs(number)) if abs(number) > 1 else "" for number in numbers]


def _root(square: Fraction) -> str:
    """Return the root of a fraction: `1/(2√3)`, `√3/2`, `1/2`."""
    top, bottom = _taken_out(square.numerator), _taken_out(square.denominator)
    above, below = _product(*top), _product(*bottom)
    if below == "1":
        return above
    return f"{above}/({below})" if bottom[0] > 1 and bottom[1] > 1 else f"{above}/{below}"


def _taken_out(number: int) -> tuple[int, int]:
    """Return (a, b) with number = a² b and b as small as possible."""
    for a in range(isqrt(number), 0, -1):
        if number % (a * a) == 0:
            return a, number // (a * a)
    return 1, number


def _product(a: int, b: int) -> str:
    return str(a) if b == 1 else (str(a) if a > 1 else "") + f"√{b}"


def _bracketed(coefficient: str) -> str:
    whole = re.fullmatch(r"\([^()]*\)/\d+", coefficient) or not re.search(" [+−] ", coefficient)
    return coefficient if whole else f"({coefficient})"


def _joined(pairs) -> str:
    """Join (coefficient, coordinate) with signs between them."""
    text = ""
    for coefficient, coordinate in pairs:
        negative = coefficient.startswith("−")
        body = coefficient[1:] if negative else coefficient
        term = f"{body} {coordinate}" if body else coordinate
        text += (" − " if negative else " + ") + term if text else ("−" if negative else "") + term
    return text
