"""The connection table of a molfile, of either version: what its lines fill in, and what each line must hold.

`molfile.py` reads V2000, `molfile_v3000.py` V3000, `flatness.py` refuses a table that is a drawing.
"""

from typing import NamedTuple

from vibsym.errors import VibsymError
from vibsym.structures.labels import read_label


class Connections(NamedTuple):
    """What a connection table holds; positions in Å. Its lists grow while it is read."""

    labels: list[str]
    positions: list[list[float]]
    bonds: list[tuple[int, int, int]]       # atoms from 0, type (4: aromatic)
    isotopes: dict[int, int]
    charges: dict[int, int]
    radicals: dict[int, int]


def atom_label(text: str, where: str) -> str:
    """Return the label of an atom if it can be read; `where` (file and line) stands in the message if not."""
    try:
        read_label(text)
    except VibsymError as error:
        raise VibsymError(f"{where}: {error}") from None
    if text.isdigit():
        raise VibsymError(f"{where}: '{text[:20]}' is not an element symbol")
    return text


def checked_bond(first: int, second: int, kind: int, atoms: int, where: str) -> tuple[int, int, int]:
    """Return a bond with atoms from 0, or raise where its atoms do not exist."""
    for number in (first, second):
        if not 1 <= number <= atoms:
            raise VibsymError(f"{where}: the bond names atom {number}, but there are {atoms} atoms")
    if first == second:
        raise VibsymError(f"{where}: atom {first} is bonded to itself; mend the bond block")
    return first - 1, second - 1, kind
