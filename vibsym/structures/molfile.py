"""MDL molfiles, V2000 and V3000, and SD files: records of one molfile each, parted by `$$$$`.

Layout: BIOVIA, CTfile Formats (2020): three lines of head, the counts, atoms, bonds, properties, `M  END`.  Fields are
of fixed width; what free spacing can still tell is read too.  Isotopes come from `M  ISO` (V3000: `MASS=`), from the
symbols D and T, or from the old mass-difference field.  V3000 is read in `molfile_v3000.py`, drawings are refused in
`flatness.py`.
"""

import re
from collections.abc import Sequence

from vibsym.errors import VibsymError
from vibsym.structures.connections import Connections, atom_label, checked_bond
from vibsym.structures.elements import average_mass
from vibsym.structures.flatness import refuse_drawing
from vibsym.structures.labels import is_dummy, read_label, write_label
from vibsym.structures.numbers import read_coordinate, read_number
from vibsym.structures.structure import Structure

OLD_CHARGES = {1: 3, 2: 2, 3: 1, 5: -1, 6: -2, 7: -3}       # charge field of an atom line; 4 is a doublet radical
HYDROGEN_BOND = 10                                          # a bond type that holds no oscillator


def counts_line(lines: Sequence[str], start: int = 0) -> int | None:
    """Return the index of the counts line if the lines from `start` on are a molfile; its place is the fourth line."""
    for index in range(start, min(start + 8, len(lines))):
        if re.search(r"V[23]000\s*$", lines[index]) and re.match(r"\s*\d", lines[index]):
            return index
    if len(lines) > start + 3 and re.fullmatch(r"[ \d]{6}(\s+-?\d+){1,12}\s*", lines[start + 3]):
        return start + 3        # before 1992 the version was not stated
    return None


def records(lines: Sequence[str]) -> list[int]:
    """Return the index of the first line of each record of an SD file (one, 0, for a molfile)."""
    starts = [0] + [index + 1 for index, line in enumerate(lines) if line.startswith("$$$$")]
    while len(starts) > 1 and not any(line.strip() for line in lines[starts[-1]:]):
        starts.pop()
    return starts


def parse(lines: Sequence[str], start: int, name: str) -> Structure:
    """Return the structure of the record that begins at `lines[start]`."""
    stop = next((i for i in range(start, len(lines)) if lines[i].startswith("$$$$")), len(lines))
    lines = lines[:stop]
    counts = counts_line(lines, start)
    if counts is None:
        raise VibsymError(f"{name}, line {min(start + 4, max(stop, 1))}: no counts line where a molfile has it (fourth "
                          "line, ending in V2000 or V3000); complete the head")
    first_line = None
    if lines[counts].rstrip().endswith("V3000"):
        from vibsym.structures.molfile_v3000 import read_v3000

        table = read_v3000(lines, counts, name)
    else:
        table = _read_v2000(lines, counts, name)
        first_line = counts + 2
    head = [line.strip() for line in lines[start:counts]]
    marked_flat = counts - start >= 2 and lines[counts - 2][20:22] == "2D"
    refuse_drawing(table, marked_flat, name)
    return _structure(table, head[0] if head else "", name, first_line)


def _structure(table: Connections, title: str, name: str, first_line: int | None) -> Structure:
    labels = list(table.labels)
    for atom, number in table.isotopes.items():
        symbol = read_label(labels[atom])[0]
        if is_dummy(symbol):
            raise VibsymError(f"{name}: atom {atom + 1} is the dummy atom {symbol}, which has no isotopes")
        labels[atom] = write_label(symbol, number)
    bonds = [(min(i, j), max(i, j)) for i, j, kind in table.bonds if kind != HYDROGEN_BOND]
    # no bond stated between several atoms: a list left out rather than atoms apart, so distances decide
    bonds = sorted(set(bonds)) if bonds else None
    return Structure.from_atoms(labels, table.positions, None, name, comment=title, bonds=bonds,
                                charge=sum(table.charges.values()), first_line=first_line)


def _read_v2000(lines: Sequence[str], counts: int, name: str) -> Connections:
    where = f"{name}, line {counts + 1}"
    numbers = _integers(lines[counts], 2)
    if numbers is None:
        raise VibsymError(f"{where}: '{lines[counts][:20].strip()}' is not a counts line; it begins with the numbers "
                          "of atoms and bonds")
    atoms, bonds = numbers
    if atoms < 1:
        raise VibsymError(f"{where}: {atoms} atoms; at least one is needed")
    table = Connections([], [], [], {}, {}, {})
    first_bond, end = counts + 1 + atoms, counts + 1 + atoms + bonds
    for index in range(counts + 1, first_bond):
        _read_atom(_line(lines, index, name, f"{atoms} atoms"), table, f"{name}, line {index + 1}")
    for index in range(first_bond, end):
        line = _line(lines, index, name, f"{bonds} bonds")
        fields = _integers(line, 3)
        if fields is None:
            raise VibsymError(f"{name}, line {index + 1}: '{line[:20].strip()}' is not a bond (two atoms and "
                              f"a type), but {bonds} are announced; the bond block is truncated or the count wrong")
        table.bonds.append(checked_bond(*fields, atoms, f"{name}, line {index + 1}"))
    _read_properties(lines, end, table, name, must_end="V2000" in lines[counts])
    return table


def _line(lines: Sequence[str], index: int, name: str, announced: str) -> str:
    if index >= len(lines) or lines[index].startswith("M  "):
        raise VibsymError(f"{name}, line {min(index, len(lines) - 1) + 1}: the block ends too early, {announced} are "
                          "announced; the file is truncated or the count wrong")
    return lines[index]


def _integers(line: str, n: int) -> list[int] | None:
    """Return the first `n` integers of fields of three characters; of free fields where those cannot be read."""
    fixed = [line[3 * k:3 * k + 3].strip() for k in range(n)]
    for fields in (fixed, line.split()[:n]):
        if len(fields) == n and all(field.isascii() and field.isdigit() and len(field) < 10 for field in fields):
            return [int(field) for field in fields]
    return None


def _read_atom(line: str, table: Connections, where: str) -> None:
    fields = line.split()
    free = len(fields) >= 4 and not fields[3].isdigit() and all(read_number(text) is not None for text in fields[:3])
    if not free:
        fields = [line[0:10].strip(), line[10:20].strip(), line[20:30].strip(), line[31:34].strip(),
                  line[34:36].strip(), line[36:39].strip()]
        if not all(fields[:4]):
            raise VibsymError(f"{where}: '{line.strip()[:40]}' is not an atom (x, y, z, symbol); the atom block "
                              "is truncated or the count wrong")
    table.positions.append([read_coordinate(text, where) for text in fields[:3]])
    table.labels.append(atom_label(fields[3], where))
    atom = len(table.labels) - 1
    old = [*fields[4:6], "", ""][:2]
    difference, charge = (int(text) if re.fullmatch(r"[+-]?\d{1,2}", text) else 0 for text in old)
    symbol, number = read_label(fields[3])
    if difference and number is None and not is_dummy(symbol):
        table.isotopes[atom] = round(average_mass(symbol)) + difference
    if charge in OLD_CHARGES:
        table.charges[atom] = OLD_CHARGES[charge]
    elif charge == 4:
        table.radicals[atom] = 2


def _read_properties(lines: Sequence[str], start: int, table: Connections, name: str, must_end: bool) -> None:
    """Read `M  ISO`, `M  CHG`, `M  RAD`.

    The first charge or radical line outdates the charge fields of the atom block, the first `M  ISO` the mass
    differences.
    """
    places = {"M  ISO": table.isotopes, "M  CHG": table.charges, "M  RAD": table.radicals}
    fresh = set()
    for index in range(start, len(lines)):
        line = lines[index]
        if line.startswith("M  END"):
            return
        where = f"{name}, line {index + 1}"
        target = places.get(line[:6])
        if target is None:
            continue
        if line[:6] == "M  ISO" and "ISO" not in fresh:
            fresh.add("ISO")
            table.isotopes.clear()
        elif line[:6] != "M  ISO" and "CHG" not in fresh:
            fresh.add("CHG")
            table.charges.clear()
            table.radicals.clear()
        fields = line[6:].split()
        if not all(re.fullmatch(r"[+-]?\d{1,6}", text) for text in fields) or len(fields) % 2 == 0 or (
                int(fields[0]) != len(fields) // 2):
            raise VibsymError(f"{where}: '{line.strip()[:40]}' is not a count with as many pairs of atom and value")
        for atom, value in zip(map(int, fields[1::2]), map(int, fields[2::2])):
            if not 1 <= atom <= len(table.labels):
                raise VibsymError(f"{where}: there is no atom {atom}; the file has {len(table.labels)} atoms")
            target[atom - 1] = value
    if must_end:
        raise VibsymError(f"{name}, line {len(lines)}: the file ends without 'M  END'; it is truncated, complete it")
