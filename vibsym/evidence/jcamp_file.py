"""JCAMP-DX: the IUPAC standard for exchanging spectra (R. S. McDonald, P. A. Wilks, Appl. Spectrosc. 42, 151 (1988)).

The package `jcamp` (extra `spectra`) reads the labelled records, compound files and tables of pairs.  Tables
`(X++(Y..Y))` are decoded here: `jcamp` 1.3.2 cannot read a DUP that follows no difference nor `?` (a point without a
value), and prints, where a check fails, instead of raising.  The compressed forms:

    PAC   a sign instead of a blank                          SQZ   @ A..I a..i: first digit and sign in one letter
    DIF   % J..R j..r: difference to the value before        DUP   S..Z s: the last item this many times in all

A line that follows one ending in a difference repeats its last value as a check.
"""

import re

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.spectrum_axes import is_per_cent, ordinate_named, unit_named

_SQUEEZED = {c: str(k) for k, c in enumerate("@ABCDEFGHI")} | {c: f"-{k}" for k, c in enumerate("abcdefghi", 1)}
_DIFFERENCE = {c: str(k) for k, c in enumerate("%JKLMNOPQR")} | {c: f"-{k}" for k, c in enumerate("jklmnopqr", 1)}
_REPEATED = {c: str(k) for k, c in enumerate("STUVWXYZ", 1)} | {"s": "9"}
_ITEM = re.compile(r"\s*,?\s*(?:(\?)|([%J-Rj-r])(\d*)|([S-Zs])(\d*)|([@A-Ia-i])(\d*\.?\d*)|"
                   r"([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d{1,3}(?![\d.]))?))")
_STEPPED = "(X++(Y..Y))"


def read_jcamp(text: str, source: str, block: int | None = None):
    """Return x, y, unit, ordinate, whether per cent, title and notes of a block (from 1; None: the only one)."""
    blocks = [each for each in _blocks(text, source) if each["table"]]
    if not blocks:
        several = re.search(r"^##\s*NTUPLES\s*=", text, re.MULTILINE | re.IGNORECASE)
        reason = ("##NTUPLES (several tables in one block) is not read; export the spectrum as ##XYDATA or as two "
                  "columns of text" if several else "no block with ##XYDATA, ##XYPOINTS or ##PEAK TABLE")
        raise VibsymError(f"{source}: {reason}")
    if block is not None and not 1 <= block <= len(blocks):
        raise VibsymError(f"{source}: --block {block}: the file holds {len(blocks)}")
    if block is None and len(blocks) > 1:
        names = "; ".join(f"{k} {each['head'].get('title', '')}" for k, each in enumerate(blocks[:6], 1))
        raise VibsymError(f"{source}: {len(blocks)} blocks ({names}); choose one with vibsym peaks --block N")
    chosen = blocks[(block or 1) - 1]
    return _spectrum_of(chosen, source)


def decode_line(line: str, before: float | None = None, source: str = "", number: int = 0):
    """Return (x, ordinates, whether it ends in a difference) of one line `(X++(Y..Y))`.

    `before` is the last value of the line before if that ended in a difference: the first ordinate must repeat it.

    >>> decode_line("599+1000+2000-30")                                        # PAC
    (599.0, [1000.0, 2000.0, -30.0], False)
    >>> decode_line("599A000B000c0")                                           # SQZ
    (599.0, [1000.0, 2000.0, -30.0], False)
    >>> decode_line("599A000JT%")                                              # DIF and DUP: +1 twice, then 0
    (599.0, [1000.0, 1001.0, 1002.0, 1002.0], True)
    """
    where = f"{source}, line {number}: "
    match = re.match(r"\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d{1,3}(?=[\s,+]))?)", line)
    if match is None:
        raise VibsymError(f"{where}'{line[:30]}' does not begin with an abscissa")
    x, place, values = float(match[1]), match.end(), []
    step: float | None = None                                  # the difference of the last item; None: a value
    while line[place:].strip():
        item = _ITEM.match(line, place)
        if item is None:
            raise VibsymError(f"{where}'{line[place:place + 12].strip()}' is no ordinate in AFFN, PAC, SQZ, DIF or DUP")
        place = item.end()
        missing, difference, more, dup, times, squeezed, rest, plain = item.groups()
        if dup:
            if not values:
                raise VibsymError(f"{where}nothing stands before the repetition '{dup}{times}'")
            for _ in range(int(_REPEATED[dup] + times) - 1):
                values.append(values[-1] + (step or 0.0))
            continue
        if difference:
            if not values:
                raise VibsymError(f"{where}a difference '{difference}{more}' without a value before it")
            step = float(_DIFFERENCE[difference] + more)
            values.append(values[-1] + step)
            continue
        step = None
        values.append(np.nan if missing else float(_SQUEEZED[squeezed] + rest) if squeezed else float(plain))
    if before is not None and values:
        if abs(values[0] - before) > 1e-6 * max(1.0, abs(before)):
            raise VibsymError(f"{where}the check value {values[0]:g} differs from {before:g}, the last of the line "
                              "before; the file is damaged")
        values = values[1:] if len(values) > 1 or step is None else values
    return x, values, step is not None


def _blocks(text: str, source: str) -> list[dict]:
    """Return for each block its records (`head`) and its table: form and lines with their numbers."""
    blocks, current = [], None
    for number, line in enumerate(text.lstrip("\ufeff").splitlines(), 1):
        bare = line.split("$$")[0].rstrip()
        if not bare:
            continue
        if bare.startswith("##"):
            label, _, value = bare[2:].partition("=")
            name = re.sub(r"[\s\-/_]", "", label).lower()
            if name == "title":
                current = {"records": [], "table": None, "head": {}}
                blocks.append(current)
            if current is None:
                raise VibsymError(f"{source}, line {number}: ##{label} stands before ##TITLE, with which "
                                  "JCAMP-DX begins")
            if name in ("xydata", "xypoints", "peaktable"):
                form = value.split("$$")[0].replace(" ", "").upper()
                current["table"] = {"form": form, "lines": [], "name": label, "number": number}
            elif name != "end":
                current["records"].append(bare)
            current["open"] = name in ("xydata", "xypoints", "peaktable")
        elif current is not None and current.get("open"):
            current["table"]["lines"].append((number, bare.strip()))
        elif current is not None and current["records"]:
            current["records"].append(bare)
    for each in blocks:
        each["head"] = _records(each["records"], source)
    return blocks


def _records(lines: list[str], source: str) -> dict:
    """Return the labelled records of a block, read by the package `jcamp`; its messages are kept off the screen."""
    import contextlib
    import io

    try:
        import jcamp
    except ImportError:
        raise VibsymError(f"{source}: JCAMP-DX needs the package jcamp; "
                          "install it with: pip install 'vibsym[spectra]'") from None
    lines = [line for line in lines if not line.upper().replace(" ", "").startswith(("##DATATYPE=LINK", "##BLOCKS"))]
    with contextlib.redirect_stdout(io.StringIO()):
        try:
            return jcamp.read([line + "\n" for line in lines])
        except (ValueError, TypeError, KeyError) as error:
            raise VibsymError(f"{source}: the records cannot be read ({error})") from None


def _spectrum_of(block: dict, source: str):
    head, table, notes = block["head"], block["table"], []
    if table["form"] == _STEPPED:
        x, y = _stepped(head, table, source, notes)
    elif table["name"].strip().upper() == "PEAK TABLE":
        raise VibsymError(f"{source}, line {table['number']}: a table of peaks, not a curve; write its peaks as a "
                          "band list (wavenumber,strength)")
    elif table["form"].startswith("(XY..XY)"):
        x, y = _pairs(head, table, source)
    else:
        raise VibsymError(f"{source}, line {table['number']}: table form {table['form'] or '(none)'}; "
                          "(X++(Y..Y)) and (XY..XY) are read")
    units, ordinate = str(head.get("xunits", "")), str(head.get("yunits", ""))
    named = ordinate_named(ordinate)
    if ordinate and named is None:
        notes.append(f"{source}: ordinate '{ordinate}' taken as intensity")
        named = "intensity"
    unit = unit_named(units)
    if units and unit is None:
        raise VibsymError(f"{source}: ##XUNITS={units} is neither cm-1 nor nm nor µm")
    return x, y, unit, named, is_per_cent(ordinate), str(head.get("title", "")), notes


def _stepped(head: dict, table: dict, source: str, notes: list[str]):
    values: list[float] = []
    before, starts = None, []
    for number, line in table["lines"]:
        x, own, differs = decode_line(line, before, source, number)
        starts.append((x, len(values) - (before is not None), number))
        values += own
        before = values[-1] if differs and values else None
    count = head.get("npoints")
    first, last = _number(head, "firstx", source), _number(head, "lastx", source)
    if isinstance(count, (int, float)) and int(count) != len(values):
        raise VibsymError(f"{source}: {len(values)} points where ##NPOINTS={int(count)}; "
                          "the file is damaged or cut off")
    if len(values) < 2:
        raise VibsymError(f"{source}: {len(values)} points in the table")
    x = np.linspace(first, last, len(values))
    factor = float(head.get("xfactor", 1) or 1)
    for start, place, number in starts:
        if abs(start * factor - x[max(place, 0)]) > 2 * abs(x[1] - x[0]) + abs(factor):
            notes.append(f"{source}, line {number}: abscissa {start * factor:g} where {x[max(place, 0)]:g} is counted; "
                         "points may be missing")
            break
    return x, np.array(values) * float(head.get("yfactor", 1) or 1)


def _pairs(head: dict, table: dict, source: str):
    numbers: list[float] = []
    for number, line in table["lines"]:
        for cell in re.split(r"[\s,;]+", line.strip(" ,;")):
            try:
                numbers.append(np.nan if cell == "?" else float(cell))
            except ValueError:
                raise VibsymError(f"{source}, line {number}: '{cell[:20]}' is not a number") from None
    if len(numbers) % 2:
        raise VibsymError(f"{source}: an odd number of values in the table of pairs")
    table_of = np.array(numbers).reshape(-1, 2)
    return table_of[:, 0] * float(head.get("xfactor", 1) or 1), table_of[:, 1] * float(head.get("yfactor", 1) or 1)


def _number(head: dict, name: str, source: str) -> float:
    try:
        return float(head[name])
    except (KeyError, TypeError, ValueError):
        raise VibsymError(f"{source}: ##{name.upper()} is missing or not a number; (X++(Y..Y)) needs it") from None
