"""Labels as books print them: the letters of a group or a species belong to its subscript (D₃h, T₁u, Σg⁺, Γvib).

Unicode has no such letters for every case, so the page sets them with `sub` and `sup` and drawings with shifted pieces;
copied from the page they are plain labels (D3h, T1u) again, which every command reads.  Symbols of elements stay as
they are: `Ag`, `Au`, `Hg`, `Cs` and `Th` are taken for labels only where the whole text is one.
"""

import re
from html import escape

from vibsym.groups.symbols import typeset

_DIGITS = str.maketrans("₀₁₂₃₄₅₆₇₈₉", "0123456789")
_UPPER = str.maketrans("⁺⁻", "+−")
_NUMBERED = re.compile(r"(?<=[A-Za-zν∞)])([₀-₉]+)([guvdh]{1,2}(?![A-Za-z]))?")
_ENDLESS = re.compile(r"([CD])∞([vh]?)(?![A-Za-z])")
_GREEK = re.compile(r"([ΣΠΔΦ])([gu]?)([⁺⁻]?)(?![A-Za-z])")
_GAMMA = re.compile(r"Γ(3N|vib|translation|rotation)(?![A-Za-z])")
_SIGMA = re.compile(r"σ([vdh])(?![A-Za-z])")
_SPECIES = re.compile(r"(\d*)([ABETGHSPD])([gu])")
_GROUP = re.compile(r"([CTOIK])([sidh])")
_TERM = r"\d*[ABETGHISPDFΣΠΔΦ][₀-₉]*[gu]?[⁺⁻]?[′″]*"
_PLAIN = re.compile(r"(?<![\w-])(?:[CD]\d{1,2}[vdh]|S\d{1,2}(?= )|\d*[ABETF][123][gu])(?![\w-])|"
                    r"(?<=\()\d*[ABETGH][12]?'*(?: \+ \d*[ABETGH][12]?'*)+(?=\))")      # ASCII labels in sentences
_NAMED_GROUP = re.compile(r"(?<=oint group )([CTOIK])([sidh])(?![A-Za-z])")
_REDUCTION = re.compile(rf"(?:(?:\d+(?:\.\d+)? )?ν[₀-₉]+ )?{_TERM}(?: \+ {_TERM})*")
# "Ag, Hu: stretch C-C", "No vibrations in Ag, Au"
LISTED = re.compile(rf"^{_TERM}(?:, {_TERM})*(?=: (?:stretch|bend|linear|wag|torsion))|"
                     rf"(?<=No vibrations in ){_TERM}(?:, {_TERM})*")


def set_labels(text: str, formula: bool = False) -> str:
    """Return a text as HTML: escaped, its labels with subscripts and superscripts; in a `formula` Ag is silver.

    >>> set_labels("2A₁g + T₁u in D₃h"), set_labels("3Ag + Hg"), set_labels("Ag and C<sub>")
    ('2A<sub>1g</sub> + T<sub>1u</sub> in D<sub>3h</sub>', '3A<sub>g</sub> + H<sub>g</sub>', 'Ag and C&lt;sub&gt;')
    >>> set_labels("Ag, T₁u: stretch C-C"), set_labels("Ag", formula=True)
    ('A<sub>g</sub>, T<sub>1u</sub>: stretch C-C', 'Ag')
    """
    whole = is_reduction(text) and not formula
    text = _PLAIN.sub(lambda found: typeset(found[0]), text)
    text = escape(text).replace("cm-1", "cm⁻¹")
    if whole:
        text = _SPECIES.sub(r"\1\2<sub>\3</sub>", text)
    elif not formula:
        text = LISTED.sub(lambda found: _SPECIES.sub(r"\1\2<sub>\3</sub>", found[0]), text)
    text = _NAMED_GROUP.sub(r"\1<sub>\2</sub>", text)
    text = _GREEK.sub(_greek, text)
    text = _NUMBERED.sub(lambda found: f"<sub>{found[1].translate(_DIGITS)}{found[2] or ''}</sub>", text)
    text = _ENDLESS.sub(r"\1<sub>∞\2</sub>", text)
    text = _GAMMA.sub(r"Γ<sub>\1</sub>", text)
    return _SIGMA.sub(r"σ<sub>\1</sub>", text)


def is_reduction(text: str) -> bool:
    """Tell whether a text is nothing but species (of a mode at a place), so that `Ag` in it is no silver.

    >>> is_reduction("2Ag + B₁u"), is_reduction("1799 ν₂ Ag"), is_reduction("Ag and Hg")
    (True, True, False)
    """
    return _REDUCTION.fullmatch(text) is not None


def set_group(symbol: str) -> str:
    """Return the symbol of a point group, typeset already, as HTML.

    >>> set_group("Td"), set_group("C₂v")
    ('T<sub>d</sub>', 'C<sub>2v</sub>')
    """
    found = _GROUP.fullmatch(symbol)
    return f"{found[1]}<sub>{found[2]}</sub>" if found else set_labels(symbol)


def _greek(found: re.Match) -> str:
    letter, lower, upper = found.groups()
    return (letter + (f"<sub>{lower}</sub>" if lower else "")
            + (f"<sup>{upper.translate(_UPPER)}</sup>" if upper else ""))


def set_svg(text: str, size: float) -> str:
    """Return a text of a drawing, `size` px high: labels with subscripts and superscripts as shifted pieces.

    >>> set_svg("T₂", 10)
    'T<tspan dy="2.2" font-size="7.2">2</tspan>'
    """
    out, shift = [], 0.0
    for piece in re.split(r"(<su[bp]>.*?</su[bp]>)", set_labels(text)):
        if not piece:
            continue
        scripted = piece.startswith(("<sub>", "<sup>"))
        wanted = (0.22 if piece.startswith("<sub>") else -0.35) * size if scripted else 0.0
        inner = piece[5:-6] if scripted else piece
        move = f' dy="{wanted - shift:.1f}"' if abs(wanted - shift) > 1e-9 else ""
        small = f' font-size="{0.72 * size:.1f}"' if scripted else ""
        out.append(f"<tspan{move}{small}>{inner}</tspan>" if move or small else inner)
        shift = wanted
    return "".join(out)
