"""Triply degenerate species are T (Mulliken's notation) or, on request, F (Herzberg; Wilson, Decius, Cross): T2g, F2g.

Results and files keep T; the letter is exchanged in the text that leaves the program. Reading takes either
(`groups.symbols.plain_label`).
"""

import re

LETTERS = ("T", "F")
# T1, T2g, T₁u, \mathrm{T}_{2}, with a count before it or not; never the group Td or an atom number of two figures
_LABEL = re.compile(r"(?<![A-Za-z])T(?=\}?_?\{?[12₁₂]\}?[gu]?(?![A-Za-z0-9₀-₉]))")


def with_letter(text: str, letter: str) -> str:
    """Return a text with its triply degenerate species called T or F.

    >>> with_letter("A₁ + 2T₂, Td; T2g", "F")
    'A₁ + 2F₂, Td; F2g'
    """
    return text if letter == "T" else _LABEL.sub(letter, text)


def holds_tritium(result) -> bool:
    """Tell whether T stands for an atom in a result, which then keeps T for species too."""
    return "T" in getattr(getattr(result, "structure", None), "labels", ())
