"""Symbols of point groups and species: reading what people type, writing what they print.

Schoenflies symbols are the names of the groups (`C2v`, `D5h`, `C∞v`); in ASCII the infinite ones are `Cinfv`, `Dinfh`.
Species carry Mulliken labels (R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955)) with `'` and `''` for the primes.
"""

import re

from vibsym.errors import VibsymError

HIGHEST_AXIS = 360
POLYHEDRAL = ("T", "Td", "Th", "O", "Oh", "I", "Ih")
INFINITE = {"Cinfv": "C∞v", "C∞v": "C∞v", "Dinfh": "D∞h", "D∞h": "D∞h", "Kh": "Kh", "K∞h": "Kh"}
# One group, two names: the left one is read, the right one is printed.
SAME_GROUP = {"C1h": "Cs", "C1v": "Cs", "S1": "Cs", "S2": "Ci", "C1i": "Ci", "D1": "C2", "D1h": "C2v", "D1d": "C2h",
              "V": "D2", "Vh": "D2h", "Vd": "D2d"}
# International symbols of the 32 crystallographic groups (International Tables for Crystallography, vol. A, table
# 3.2.1.2).
HERMANN_MAUGUIN = {
    "C1": "1", "Ci": "-1", "C2": "2", "Cs": "m", "C2h": "2/m", "D2": "222", "C2v": "mm2", "D2h": "mmm", "C4": "4",
    "S4": "-4", "C4h": "4/m", "D4": "422", "C4v": "4mm", "D2d": "-42m", "D4h": "4/mmm", "C3": "3", "S6": "-3",
    "D3": "32", "C3v": "3m", "D3d": "-3m", "C6": "6", "C3h": "-6", "C6h": "6/m", "D6": "622", "C6v": "6mm",
    "D3h": "-6m2", "D6h": "6/mmm", "T": "23", "Th": "m-3", "O": "432", "Td": "-43m", "Oh": "m-3m",
}
_AXIAL = re.compile(r"([CDS])(\d+)(v|h|d|i)?")
_SUBSCRIPT = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_SUPERSCRIPT = str.maketrans("0123456789+-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻")


def group_symbol(text: str) -> str:
    """Return the canonical symbol of a point group from what was typed (`C3i` gives `S6`, `Cinfv` gives `C∞v`).

    >>> group_symbol("C1h"), group_symbol("S3"), group_symbol("dinfh")
    ('Cs', 'C3h', 'D∞h')
    """
    word = text.strip()
    word = word[:1].upper() + word[1:].lower()
    word = {"Cinfv": "C∞v", "Dinfh": "D∞h"}.get(word, word)
    if word in INFINITE:
        return INFINITE[word]
    word = SAME_GROUP.get(word, word)
    if word in POLYHEDRAL or word in ("Cs", "Ci"):
        return word
    match = _AXIAL.fullmatch(word)
    if not match or not word.isascii():
        raise VibsymError(f"unknown point group '{text}'; write Cn, Cnv, Cnh, Dn, Dnh, Dnd or S2n with n = 1, 2, 3, "
                          "..., Ci, Cs, T, Td, Th, O, Oh, I, Ih, Cinfv, Dinfh or Kh")
    return _axial_symbol(text, match[1], match[2], match[3] or "")


def _axial_symbol(text: str, letter: str, digits: str, suffix: str) -> str:
    if len(digits) > 4 or not 1 <= int(digits) <= HIGHEST_AXIS:
        raise VibsymError(f"point group '{text}': the order of the axis must lie between 1 and {HIGHEST_AXIS}")
    n = int(digits)
    if suffix == "i" and letter == "C" and n % 2:         # C3i, C5i, ...: the group of an improper axis
        return f"S{2 * n}"
    if letter == "S" and not suffix:
        return f"S{n}" if n % 2 == 0 else f"C{n}h"        # an odd improper axis brings the plane with it
    if (letter == "C" and suffix in ("", "v", "h")) or (letter == "D" and suffix in ("", "h", "d")):
        return f"{letter}{n}{suffix}"
    raise VibsymError(f"unknown point group '{text}'; with {letter} go "
                      + {"C": "Cn, Cnv, Cnh and, for odd n, Cni", "D": "Dn, Dnh, Dnd", "S": "S2n"}[letter])


def is_group_symbol(text: str) -> bool:
    """Tell whether a word names a point group (`./C2v` does not: it is a file)."""
    try:
        group_symbol(text)
    except VibsymError:
        return False
    return True


def hermann_mauguin(symbol: str) -> str | None:
    """Return the international symbol beside the Schoenflies one, for the 32 crystallographic groups."""
    return HERMANN_MAUGUIN.get(symbol)


def plain_label(text: str) -> str:
    """Return a species label in its plain form: ASCII primes, T for F, Greek letters as they stand.

    >>> plain_label("F1u"), plain_label("A2″"), plain_label("Sigmag+"), plain_label("Pi_u")
    ('T1u', "A2''", 'Σg+', 'Πu')
    """
    label = text.strip().replace("″", "''").replace("′", "'").replace("’", "'").replace('"', "''").replace("−", "-")
    label = label.replace("⁺", "+").replace("⁻", "-").replace("_", "")
    label = "".join(chr(ord(c) - 0x2050) if "₀" <= c <= "₉" else c for c in label)
    for word, letter in (("sigma", "Σ"), ("pi", "Π"), ("delta", "Δ"), ("phi", "Φ"), ("gamma", "Γ")):
        if label.lower().startswith(word):
            label = letter + label[len(word):]
    label = label[:1].upper() + label[1:]
    return "T" + label[1:] if label.startswith("F") else label


def typeset(text: str) -> str:
    """Return a label or an operation symbol as it is printed: primes, subscripts and superscripts as Unicode
    characters.

    >>> typeset("A2''"), typeset("Σg+"), typeset("2C5^2"), typeset("D3h")
    ('A₂″', 'Σg⁺', '2C₅²', 'D₃h')
    """
    text = text.replace("''", "″").replace("'", "′")
    text = re.sub(r"\^(\d+)", lambda m: m[1].translate(_SUPERSCRIPT), text)
    text = re.sub(r"(?<=[A-Za-zΑ-ω∞])(\d+)", lambda m: m[1].translate(_SUBSCRIPT), text)
    return re.sub(r"(?<=[ΣSPDFgu])([+-])(?=$|\W)", lambda m: m[1].translate(_SUPERSCRIPT), text)


def typeset_formula(text: str) -> str:
    """Return a chemical formula as it is printed: mass numbers raised before their element.

    >>> typeset_formula("CH2(37Cl)2"), typeset_formula("(13C)O2"), typeset_formula("CD2Cl2")
    ('CH₂(³⁷Cl)₂', '(¹³C)O₂', 'CD₂Cl₂')
    """
    text = re.sub(r"\((\d+)(?=[A-Z])", lambda m: "(" + m[1].translate(_SUPERSCRIPT), text)
    return re.sub(r"(?<=[A-Za-z)])(\d+)", lambda m: m[1].translate(_SUBSCRIPT), text)


def typeset_function(text: str) -> str:
    """Return a function of x, y, z as it is printed: `2z2-x2-y2` as `2z²−x²−y²`."""
    text = re.sub(r"([xyz)])(\d)", lambda m: m[1] + m[2].translate(_SUPERSCRIPT), text)
    return re.sub(r"R([xyz])", r"R\1", text).replace("-", "−")
