"""XYZ and extended XYZ: a count, a comment, then one line for each atom; frames follow each other.

Plain: `symbol x y z`, in Å.  A fifth column whose every value is the mass of an isotope (or the standard atomic weight)
of its element is the mass in u; other further columns are left out with a note.  Extended: the comment holds
`Properties=species:S:1:pos:R:3:masses:R:1...`, which says where the columns are; `Lattice=` is left out with a note.
"""

from collections.abc import Iterator, Sequence
from typing import NamedTuple

from vibsym.errors import VibsymError
from vibsym.structures.elements import average_mass, element, isotopes
from vibsym.structures.labels import is_dummy, read_label
from vibsym.structures.numbers import read_coordinate, read_number
from vibsym.structures.structure import Structure

MASS_WINDOW = 0.05      # u; how near a fifth column must come to an isotope or a mean mass to be taken for masses


class Columns(NamedTuple):
    """Where the columns of an atom line begin, from 0; `mass` is None where there is none."""

    species: int
    position: int
    mass: int | None
    width: int              # how many columns are described


def frames(lines: Sequence[str], name: str) -> Iterator[int]:
    """Yield the index of the count line of each frame; VibsymError where a count does not fit what follows."""
    start = _next_filled(lines, 0)
    while start < len(lines):
        yield start                     # before its count is looked at: a broken frame harms only those who want it
        count = _count(lines, start, name)
        following = _next_filled(lines, start + 2 + count)
        if following < len(lines) and not is_integer(lines[following]):
            line = lines[following]
            if looks_like_atom(line):
                raise VibsymError(f"{name}, line {following + 1}: more atoms follow than the {count} that line "
                                  f"{start + 1} announces; correct the count")
            raise VibsymError(f"{name}, line {following + 1}: '{line.strip()[:30]}' is neither an atom nor the count "
                              "of a new frame; delete what follows the atoms")
        start = following


def parse(lines: Sequence[str], start: int, name: str) -> Structure:
    """Return the structure of the frame whose count stands in `lines[start]`."""
    count = _count(lines, start, name)
    comment = lines[start + 1].strip() if start + 1 < len(lines) else ""
    columns, notes = _columns(comment, f"{name}, line {start + 2}")
    labels, positions, rows = [], [], []
    for index in range(start + 2, start + 2 + count):
        fields = lines[index].split()
        where = f"{name}, line {index + 1}"
        if not fields:
            raise VibsymError(f"{where}: the line is empty, but line {start + 1} announces {count} atoms and only "
                              f"{len(labels)} stand above; correct the count")
        if len(fields) < columns.width:
            raise VibsymError(f"{where}: '{lines[index].strip()[:40]}' has {len(fields)} columns where {columns.width} "
                              f"are needed (line {start + 1} announces {count} atoms)")
        labels.append(_label(fields[columns.species], where))
        at = columns.position
        positions.append([read_coordinate(text, where) for text in fields[at:at + 3]])
        rows.append(fields)
    masses = None
    if columns.mass is not None:
        masses = [_mass(fields[columns.mass], f"{name}, line {start + 3 + index}") for index, fields in enumerate(rows)]
    elif _properties(comment) is None:
        masses, more = _further_columns(labels, rows)
        notes += more
    return Structure.from_atoms(labels, positions, masses, name, comment=comment, notes=notes,
                                first_line=start + 3)


def _next_filled(lines, index: int) -> int:
    while index < len(lines) and not lines[index].strip():
        index += 1
    return index


def is_integer(line: str) -> bool:
    """Tell whether a line holds one whole number and nothing else."""
    text = line.strip()
    return text.isascii() and text[text[:1] in ("+", "-"):].isdigit()


def looks_like_atom(line: str) -> bool:
    """Tell whether a line holds a word and three numbers."""
    fields = line.split()
    return len(fields) >= 4 and all(read_number(text) is not None for text in fields[1:4])


def _count(lines, start: int, name: str) -> int:
    text = lines[start].strip()
    where = f"{name}, line {start + 1}"
    if not is_integer(text):
        raise VibsymError(f"{where}: '{text[:30]}' is not a count of atoms; an XYZ file begins with one")
    count = int(text) if len(text) <= 15 else 10**15    # a longer number is too large for any file, whatever it is
    if count <= 0:
        raise VibsymError(f"{where}: {count} atoms; at least one is needed")
    left = len(lines) - start - 2
    while left > 0 and not lines[start + 1 + left].strip():
        left -= 1
    if count > left:
        raise VibsymError(f"{where}: {text[:20]} atoms are announced, but only {max(left, 0)} lines follow the "
                          "comment; correct the count or complete the file")
    return count


def _columns(comment: str, where: str) -> tuple[Columns, tuple[str, ...]]:
    notes = ("the lattice is ignored: the atoms are taken as one molecule",) if "lattice=" in comment.lower() else ()
    properties = _properties(comment)
    if properties is None:
        return Columns(0, 1, None, 4), notes
    parts = properties.split(":")
    if len(parts) % 3:
        raise VibsymError(f"{where}: Properties={properties[:40]} is not made of name:type:columns; mend or remove it")
    places: dict[str, int] = {}
    width = 0
    for prop, kind, columns in zip(parts[::3], parts[1::3], parts[2::3]):
        if not (columns.isascii() and columns.isdigit() and 0 < int(columns[:6]) < 1000):
            raise VibsymError(f"{where}: Properties gives '{prop}:{kind}:{columns}'; the third must be a number")
        needed = {"pos": 3, "species": 1, "z": 1, "numbers": 1, "masses": 1, "mass": 1}.get(prop.lower())
        if needed is not None and needed != int(columns):
            raise VibsymError(f"{where}: Properties gives '{prop}' {columns} columns where {needed} are needed")
        places.setdefault(prop.lower(), width)
        width += int(columns)
    species = next((places[key] for key in ("species", "numbers", "z") if key in places), None)
    if species is None or "pos" not in places:
        raise VibsymError(f"{where}: Properties={properties[:40]} needs species:S:1 and pos:R:3")
    return Columns(species, places["pos"], places.get("masses", places.get("mass")), width), notes


def _properties(comment: str) -> str | None:
    """Return what `Properties=` says in an extended comment, with or without quotes; None in a plain one."""
    place = comment.lower().find("properties=")     # without a pattern: compiling one takes as long as reading the file
    if place < 0:
        return None
    words = comment[place + len("properties="):].lstrip('"').split(None, 1)
    return words[0].split('"')[0] if words else ""


def _label(text: str, where: str) -> str:
    try:
        read_label(text)
    except VibsymError as error:
        raise VibsymError(f"{where}: {error}") from None
    return text


def _mass(text: str, where: str) -> float:
    value = read_number(text)
    if value is None:
        raise VibsymError(f"{where}: the mass '{text[:20]}' is not a number; give it in u")
    return value


def _further_columns(labels, rows) -> tuple[list[float] | None, tuple[str, ...]]:
    """Return (masses, notes) from what stands behind x, y, z in a plain XYZ file."""
    widths = {len(fields) for fields in rows}
    if widths == {4}:
        return None, ()
    if widths == {5}:
        masses = [read_number(fields[4]) for fields in rows]
        if all(_is_mass(label, value) for label, value in zip(labels, masses)):
            return masses, ("the fifth column is taken as masses in u",)
    return None, ("columns after x, y, z are ignored: they are not masses on every line",)


def _is_mass(label: str, value: float | None) -> bool:
    if is_dummy(label):
        return value is not None
    if value is None:
        return False
    name, number = read_label(label)
    if number is not None:
        return abs(value - isotopes(name)[number].mass) <= MASS_WINDOW
    if min(abs(value - element(name).isotope_mass), abs(value - average_mass(name))) <= MASS_WINDOW:
        return True
    return any(abs(value - isotope.mass) <= MASS_WINDOW for isotope in isotopes(name).values())
