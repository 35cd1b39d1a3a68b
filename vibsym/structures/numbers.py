"""Numbers in structure files: finite decimals, also with Fortran exponents (`1.0D-3`); `nan` and `inf` are refused."""

from math import isfinite

from vibsym.errors import VibsymError
from vibsym.structures.structure import LARGEST_COORDINATE


def read_number(text: str) -> float | None:
    """Return the number, or None where the text is none (`nan` and `inf` are read; see `read_coordinate`).

    >>> read_number("1.5D-1"), read_number("abc"), read_number("1_0")
    (0.15, None, None)
    """
    try:
        return float(text) if "_" not in text else None
    except ValueError:
        pass
    try:
        return float(text.upper().replace("D", "E")) if text[:1] in "+-.0123456789" and "_" not in text else None
    except ValueError:
        return None


def read_coordinate(text: str, where: str) -> float:
    """Return a coordinate in Å, or raise with `where` (file and line) in front."""
    value = read_number(text)
    if value is None:
        raise VibsymError(f"{where}: '{text[:20]}' is not a number; an atom needs x, y and z in Å")
    if not isfinite(value):
        raise VibsymError(f"{where}: the coordinate '{text[:20]}' is not finite; an atom needs x, y and z in Å")
    if abs(value) > LARGEST_COORDINATE:
        raise VibsymError(f"{where}: the coordinate {text[:20]} is larger than {LARGEST_COORDINATE:g} Å; shift the "
                          "molecule to the origin or mend the number")
    return value
