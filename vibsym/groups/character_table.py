"""The character table of a point group as a result: classes, species, exact characters, functions and activity.

Exact characters are written with simple radicals, `(1+√5)/2`, or as `2cos(2π/7)` where there is no simple one.
"""

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from math import cos, gcd, isclose, lcm, pi

from vibsym.groups.pointgroup import PointGroup, point_group


@dataclass(frozen=True)
class CharacterTable:
    """A group with its characters as exact text, species by species."""

    group: PointGroup

    @cached_property
    def exact(self) -> dict[str, tuple[str, ...]]:
        """Exact characters of each species, one a class; of an infinite group some depend on the angle φ."""
        return {species.label: tuple(self._text(value) for value in self.group.exact_characters(species.label))
                for species in self.group.species}

    @property
    def has_pairs(self) -> bool:
        """Whether a species is two complex-conjugate ones counted as one."""
        return any(species.pair for species in self.group.species)

    def to_dict(self) -> dict:
        """Return the table for JSON; what depends on an angle or is infinite is null."""
        group = self.group
        return {"point_group": {"symbol": group.symbol, "order": group.order, "tolerance": None,
                                "deviation": None, "chiral": group.chiral,
                                "centrosymmetric": group.centrosymmetric},
                "classes": [{"symbol": each.symbol, "size": each.size or None} for each in group.classes],
                "species": [self._species(species) for species in group.species]}

    def _species(self, species) -> dict:
        exact = self.exact[species.label]
        characters = list(species.characters) or [_number(text) for text in exact]
        return {"label": species.label, "degeneracy": species.degeneracy, "pair": species.pair,
                "characters": [_tidy(value) for value in characters], "exact": [plain_number(text) for text in exact],
                "linear": list(species.linear), "rotations": list(species.rotations),
                "quadratic": list(species.quadratic), "cubic": list(species.cubic), "infrared": species.infrared,
                "raman": species.raman, "polarised": species.polarised, "hyper_raman": species.hyper_raman}

    def _text(self, value) -> str:
        return value if isinstance(value, str) else character_text(value, 2 * self.group.order)


def character_table(symbol: str) -> CharacterTable:
    """Return the character table of a group named as people type it.

    >>> character_table("C5v").exact["E1"]
    ('2', '(-1+√5)/2', '-(1+√5)/2', '0')
    """
    return CharacterTable(point_group(symbol))


def character_text(value, turn: int) -> str:
    """Return an exact character (sympy) as text: whole, with one square root, or 2cos(2πk/n), n a divisor of `turn`.

    >>> import sympy
    >>> character_text(2 * sympy.cos(2 * sympy.pi / 7), 14), character_text(sympy.sqrt(3), 24)
    ('2cos(2π/7)', '√3')
    """
    terms = value.expand().as_coefficients_dict()
    roots = [term for term in terms if term != 1]
    if len(roots) > 1 or not all(_is_square_root(root) for root in roots):
        return _cosine_text(float(value), turn)
    whole = Fraction(str(terms.get(1, 0)))
    factor = Fraction(str(terms[roots[0]])) if roots else Fraction(0)
    below = lcm(whole.denominator, factor.denominator)
    return _radical_text(int(whole * below), int(factor * below), int(roots[0].base) if roots else 1, below)


def _is_square_root(term) -> bool:
    return bool(term.is_Pow and 2 * term.exp == 1 and term.base.is_Integer)


def _radical_text(whole: int, factor: int, base: int, below: int) -> str:
    """Write (whole + factor √base) / below."""
    if not factor:
        return str(whole)
    sign = "-" if factor < 0 and whole <= 0 else ""
    if sign:
        whole, factor = -whole, -factor
    root = ("-" if factor < 0 else "+" if whole else "") + (str(abs(factor)) if abs(factor) > 1 else "") + f"√{base}"
    text = (str(whole) if whole else "") + root
    if below == 1:
        return f"-({text})" if sign and whole else sign + text
    return f"{sign}({text})/{below}" if whole else f"{sign}{text}/{below}"


def _cosine_text(value: float, turn: int) -> str:
    """Write a character as ±2cos(2πk/n); it is one of these by the closed form of the axial groups.

    n is odd where it can be, so that the entries of an improper rotation are those of the proper one with a sign.
    """
    for k in range(turn):
        if isclose(2 * cos(2 * pi * k / turn), value, abs_tol=1e-11):
            common = gcd(2 * k, turn)
            k, n = 2 * k // common, turn // common        # the angle is πk/n
            sign = ""
            if n % 2 and k % 2:
                sign, k = "-", n - k
            return f"{sign}2cos({k if k != 1 else ''}π/{n})"
    raise ArithmeticError(f"{value!r} is not 2cos(2πk/{turn})")


def plain_number(text: str) -> str:
    """Return an exact character in the form that computer algebra reads.

    >>> plain_number("(-1+√5)/2"), plain_number("-2cos(2π/7)"), plain_number("2cos(2φ)")
    ('(-1+sqrt(5))/2', '-2*cos(2*pi/7)', '2*cos(2*phi)')
    """
    text = re.sub(r"√(\d+)", r"sqrt(\1)", text).replace("π", "pi").replace("φ", "phi")
    return re.sub(r"(\d)(?=sqrt|cos|sin|pi|phi)", r"\1*", text)


def _number(text: str) -> float | None:
    """Return a character of an infinite group as a number; None where it depends on the angle."""
    return None if "φ" in text else float(text)


def _tidy(value: float | None) -> float | None:
    """Return a float without the noise of the last digits and without a negative zero."""
    return None if value is None else round(value, 12) + 0.0
