"""How an atom may be written: `C`, `cl`, `CL`, `D`, `T`, `13C`, an atomic number, or a dummy atom `X`, `XL`.

X, alone or before a capital or a digit (xenon excepted), names a dummy atom: a point with a kind (the symbol, as
written) and no mass; `Xx` is a slip of the pen.  A number after the symbol (`C13`) could be a mass or a running number
and is refused with the two ways out.
"""

from functools import cache

from vibsym.errors import VibsymError
from vibsym.structures.elements import elements, mass, symbol

HYDROGEN_ISOTOPES = {"D": 2, "T": 3}
ISOTOPE_NAMES = {2: "D", 3: "T"}


@cache
def read_label(text: str) -> tuple[str, int | None]:
    """Return (symbol, mass number or None) of an atom as written in a file.

    The most abundant isotope, named outright, is the plain element: `1H` = `H`, `12C` = `C`.

    >>> read_label("cl"), read_label("D"), read_label("13C"), read_label("12C"), read_label("6"), read_label("XL")
    (('Cl', None), ('H', 2), ('C', 13), ('C', None), ('C', None), ('XL', None))
    """
    if text.isascii() and text.isdigit():
        return symbol(int(text[:9])), None
    if is_dummy(text):
        return text, None
    letters = text.lstrip("0123456789")
    number, name = text[:len(text) - len(letters)], letters.capitalize()
    if name in HYDROGEN_ISOTOPES and not number:
        return "H", HYDROGEN_ISOTOPES[name]
    found = elements().get(name)
    if found is None or len(number) > 3:
        return _refuse(text)
    if not number or int(number) == found.isotope:
        return name, None
    mass(name, int(number))  # refuses an isotope that is not known
    return name, int(number)


def is_dummy(text: str) -> bool:
    """Tell whether a symbol names a dummy atom: X alone, or X before a capital or a digit, and not xenon.

    >>> is_dummy("X"), is_dummy("XL"), is_dummy("Xe"), is_dummy("Xx")
    (True, True, False, False)
    """
    return (text[:1] in ("X", "x") and not text[1:2].islower() and text.upper() != "XE"
            and text.isascii() and text.isalnum())


def write_label(symbol: str, mass_number: int | None) -> str:
    """Return the label that `read_label` reads back.

    >>> write_label("H", 2), write_label("C", 13), write_label("C", None)
    ('D', '13C', 'C')
    """
    if mass_number is None:
        return symbol
    if symbol == "H" and mass_number in ISOTOPE_NAMES:
        return ISOTOPE_NAMES[mass_number]
    return f"{mass_number}{symbol}"


def _refuse(text: str):
    import re

    match = re.fullmatch(r"([A-Za-z]{1,2})[-_]?(\d{1,3})", text) if text.isascii() else None
    if match and (match[1].capitalize() in elements() or match[1].upper() in HYDROGEN_ISOTOPES):
        name = match[1].capitalize()
        raise VibsymError(f"{text!r} could be an isotope or a numbered atom; write {match[2]}{name} or {name}")
    raise VibsymError(f"{text[:20]!r} is not an element symbol (a dummy atom is X, or a name such as XL)")
