"""The connection table of a V3000 molfile: lines `M  V30 ...`, a trailing `-` goes on in the next line.

Layout: BIOVIA, CTfile Formats (2020), The extended connection table.  Atoms carry numbers of their own.
"""

import re
from collections.abc import Iterator, Sequence

from vibsym.errors import VibsymError
from vibsym.structures.connections import Connections, atom_label, checked_bond
from vibsym.structures.numbers import read_coordinate

PREFIX = "M  V30 "


def read_v3000(lines: Sequence[str], counts: int, name: str) -> Connections:
    """Return the connection table below the counts line `lines[counts]`."""
    table = Connections([], [], [], {}, {}, {})
    places: dict[str, int] = {}             # the file's number of an atom -> from 0
    announced, block, blocks = None, "", set()
    for index, text in _statements(lines, counts + 1, name):
        where = f"{name}, line {index + 1}"
        word = text.split(None, 2)
        head = word[0].upper() if word else ""
        if head in ("BEGIN", "END"):
            block = word[1].upper() if head == "BEGIN" and len(word) > 1 else ""
            blocks.add(" ".join(word[:2]).upper())
        elif head == "COUNTS":
            announced = _counts(text, where)
        elif block == "ATOM":
            _read_atom(text, table, places, where)
        elif block == "BOND":
            _read_bond(text, table, places, where)
    last = f"{name}, line {len(lines)}"
    if announced is None:
        raise VibsymError(f"{last}: no line 'M  V30 COUNTS'; the file is truncated, complete it")
    for what, count, found in (("atoms", announced[0], len(table.labels)), ("bonds", announced[1], len(table.bonds))):
        if count != found:
            raise VibsymError(f"{last}: {count} {what} are announced, {found} are found; the file is truncated or the "
                              "count wrong")
    if "END CTAB" not in blocks:
        raise VibsymError(f"{last}: the file ends without 'M  V30 END CTAB'; it is truncated, complete it")
    if not table.labels:
        raise VibsymError(f"{last}: 0 atoms; at least one is needed")
    return table


def _statements(lines: Sequence[str], start: int, name: str) -> Iterator[tuple[int, str]]:
    """Yield (line index, statement) with continued lines joined."""
    joined, first = "", None
    for index in range(start, len(lines)):
        line = lines[index].rstrip()
        if line.startswith("M  END"):
            return
        if not line.startswith(PREFIX.rstrip()):
            continue
        first = index if first is None else first
        joined += line[len(PREFIX):]
        if joined.endswith("-"):
            joined = joined[:-1]
            continue
        yield first, joined
        joined, first = "", None
    raise VibsymError(f"{name}, line {len(lines)}: the file ends without 'M  END'; it is truncated, complete it")


def _counts(text: str, where: str) -> tuple[int, int]:
    fields = text.split()[1:3]
    if len(fields) != 2 or not all(re.fullmatch(r"\d{1,8}", field) for field in fields):
        raise VibsymError(f"{where}: '{text[:40]}' does not give the numbers of atoms and bonds; mend the counts")
    return int(fields[0]), int(fields[1])


def _read_atom(text: str, table: Connections, places: dict[str, int], where: str) -> None:
    fields = text.split()
    if len(fields) < 5:
        raise VibsymError(f"{where}: '{text[:40]}' is not an atom (number, symbol, x, y, z); mend the atom block")
    number, symbol, *coordinates = fields[:5]
    if number in places:
        raise VibsymError(f"{where}: atom {number} occurs twice; number the atoms differently")
    table.labels.append(atom_label(symbol.strip('"'), where))
    table.positions.append([read_coordinate(value, where) for value in coordinates])
    atom = places[number] = len(table.labels) - 1
    for field in fields[6:]:
        key, _, value = field.partition("=")
        target = {"MASS": table.isotopes, "CHG": table.charges, "RAD": table.radicals}.get(key.upper())
        if target is not None:
            if not re.fullmatch(r"[+-]?\d{1,3}", value):
                raise VibsymError(f"{where}: '{field[:30]}' is not a whole number; mend it")
            target[atom] = int(value)


def _read_bond(text: str, table: Connections, places: dict[str, int], where: str) -> None:
    fields = text.split()
    if len(fields) < 4 or not all(re.fullmatch(r"\d{1,9}", field) for field in fields[:4]):
        raise VibsymError(f"{where}: '{text[:40]}' is not a bond (number, type, two atoms); mend the bond block")
    ends = []
    for number in fields[2:4]:
        if number not in places:
            raise VibsymError(f"{where}: the bond names atom {number}, which the atom block lacks; mend the bond block")
        ends.append(places[number] + 1)
    table.bonds.append(checked_bond(ends[0], ends[1], int(fields[1]), len(places), where))
