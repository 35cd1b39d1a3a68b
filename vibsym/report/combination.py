"""A combination of coordinates as it is printed: `1/(2√3) (2 r1 − r2 − r3 + 2 r4 − r5 − r6)`.

The common factor is the one that leaves small whole numbers; where there is none (golden ratio, cosines) each
coordinate keeps its own exact coefficient.  Nothing is rounded.
"""

from collections.abc import Sequence
from fractions import Fraction
from math import gcd, isqrt, lcm

CLOSE = 1e-11
LARGEST = 60                # of the whole numbers in the bracket


def combination_text(terms: Sequence) -> str:
    """Return terms (each with `coordinate`, `exact`, `value`) as a factor and a bracket, or one by one.

    >>> from vibsym.vibrations.symmetry_coordinates import Term
    >>> combination_text([Term("r1", None, 2 / 6**0.5), Term("r2", None, -1 / 6**0.5), Term("r3", None, -1 / 6**0.5)])
    '1/√6 (2 r1 − r2 − r3)'
    """
    if len(terms) == 1 and abs(abs(terms[0].value) - 1) < CLOSE:
        return ("−" if terms[0].value < 0 else "") + terms[0].coordinate
    found = _whole_numbers([term.value for term in terms])
    if found is None:
        return _joined([(exact_text(term.exact), term.coordinate) for term in terms])
    factor, numbers = found
    bracket = _joined([(_signed_number(number), term.coordinate) for number, term in zip(numbers, terms, strict=True)])
    return f"{factor} ({bracket})"


def exact_text(exact) -> str:
    """Return an exact number as printed: `√5/4 − 1/4`.

    >>> import sympy
    >>> exact_text(sympy.sqrt(5) / 4 - sympy.Rational(1, 4)), exact_text(sympy.cos(sympy.pi / 7))
    ('−1/4 + √5/4', 'cos(π/7)')
    """
    import re

    text = re.sub(r"sqrt\((\d+)\)", r"√\1", str(exact)).replace("sqrt", "√").replace("pi", "π")
    return text.replace("*", "·").replace("-", "−")


def _whole_numbers(values: Sequence[float]) -> tuple[str, list[int]] | None:
    """Return (factor, whole numbers) with value = factor × number, the factor the root of a fraction; None: there is
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
    if numbers[0] < 0 and all(number < 0 for number in numbers):
        return "−" + _root(square), [-number for number in numbers]
    return _root(square), numbers


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


def _signed_number(number: int) -> str:
    return {1: "", -1: "−"}.get(number, str(number).replace("-", "−"))


def _joined(pairs) -> str:
    """Join (coefficient, coordinate) with signs between them; a coefficient that is itself a sum goes into brackets."""
    text = ""
    for coefficient, coordinate in pairs:
        negative = coefficient.startswith("−")
        body = coefficient[1:] if negative else coefficient
        if " " in body:
            negative, body = False, f"({coefficient})"
        term = f"{body} {coordinate}" if body else coordinate
        text += (" − " if negative else " + ") + term if text else ("−" if negative else "") + term
    return text
