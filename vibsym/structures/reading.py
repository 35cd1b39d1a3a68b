"""Read structures from files; the format is told by the content, never by the ending of the name.

Read are XYZ and extended XYZ (`xyz.py`), molfiles V2000 and V3000 and SD files (`molfile.py`).  A file may hold several
frames; one is read, and a note says how many were not.
"""

from collections.abc import Callable, Iterable

from vibsym.errors import VibsymError
from vibsym.files import display_name, read_text
from vibsym.structures import xyz
from vibsym.structures.structure import Structure


def read(path, frame: int = 1) -> Structure:
    """Return the structure of one frame, counted from 1; `-` is standard input."""
    name, lines, starts, parse = _opened(path)
    if frame < 1:
        raise VibsymError(f"{name}: frame {frame}; frames are counted from 1")
    found, structure, broken = 0, None, False
    try:
        for start in starts:
            found += 1
            if found == frame:
                structure = parse(lines, start, name)
    except VibsymError:
        if structure is None or found == frame:     # what follows the wanted frame tells whether its count is right
            raise
        broken = True
    if structure is None:
        raise VibsymError(f"{name}: there is no frame {frame}; the file has {found}")
    if found == 1:
        return structure
    note = f"frame {frame} of {found}{' or more' if broken else ''} is used, the others are ignored"
    return structure.with_notes(note)


def read_all(path) -> list[Structure]:
    """Return the structures of all frames; where there are several, each source names its frame."""
    from dataclasses import replace

    name, lines, starts, parse = _opened(path)
    found = [parse(lines, start, name) for start in starts]
    if len(found) == 1:
        return found
    return [replace(structure, source=f"{name}, frame {number}") for number, structure in enumerate(found, 1)]


def _opened(path) -> tuple[str, list[str], Iterable[int], Callable]:
    """Return (name, lines, first lines of the frames, parser) of a file."""
    name = display_name(path)
    text = read_text(path)
    # only \n parts lines: str.splitlines would also part at form feeds and at U+0085, which Latin-1 comments may hold
    lines = text.rstrip().split("\n")
    if _counts_itself(lines):
        return name, lines, xyz.frames(lines, name), xyz.parse
    from vibsym.structures import molfile  # not needed for XYZ, and loading it takes time

    if molfile.counts_line(lines[:8]) is not None:
        return name, lines, molfile.records(lines), molfile.parse
    filled = next((line for line in lines if line.strip()), "")
    number = lines.index(filled) + 1
    remedy = "an XYZ file begins with the number of atoms, a molfile has its counts in line 4"
    if any(line.startswith(("M  END", "M  V30", "$$$$")) for line in lines[:100_000]):
        raise VibsymError(f"{name}, line {min(4, len(lines))}: no counts line where a molfile has it (fourth "
                          "line, ending in V2000 or V3000); complete the head")
    if len(filled.split()) == 4 and xyz.looks_like_atom(filled):
        count = sum(xyz.looks_like_atom(line) for line in lines)
        raise VibsymError(f"{name}, line {number}: an atom where the number of atoms is needed; put '{count}' and a "
                          "comment line before it")
    raise VibsymError(f"{name}, line {number}: '{filled.strip()[:30]}' begins no structure that can be "
                      f"read; {remedy}")


def _counts_itself(lines: list[str]) -> bool:
    """Tell whether the first filled line is a lone whole number, as in an XYZ file."""
    filled = next((line for line in lines if line.strip()), "")
    return xyz.is_integer(filled) and not any(line.rstrip().endswith(("V2000", "V3000")) for line in lines[2:6])
