"""The assignment CSV: which line is which fundamental, written by `assign`, read by every command with --assignment.

`#` head lines tell structure, group and axes (`# group: C2v`).  One row is a fundamental that was `assigned` or is
`unseen`, or a line that is left over (`leftover`).  Columns: status, mode, species, infrared_line, raman_line,
strength_infrared, strength_raman, polarisation, estimate, description, firm, alternatives (`E:1.7;T2:2.0`); others are
kept as they are. A fundamental is the mean of its two lines.
"""

import csv
import io
from dataclasses import dataclass, field
from pathlib import Path

from vibsym.errors import VibsymError
from vibsym.evidence.lines import Line
from vibsym.groups.pointgroup import point_group
from vibsym.groups.symbols import plain_label
from vibsym.spectra.modes import HIGHEST, Mode, mode_name, named_modes

COLUMNS = ("status", "mode", "species", "infrared_line", "raman_line", "strength_infrared", "strength_raman",
           "polarisation", "estimate", "description", "firm", "alternatives")
STATUSES = ("assigned", "unseen", "leftover")
_YES, _NO = ("yes", "true", "1", "y"), ("no", "false", "0", "n", "")


@dataclass(frozen=True)
class AssignmentRow:
    """One row: a fundamental with its lines (cm-1), or a line left over; `alternatives` are (species, extra cost)."""

    status: str
    mode: str = ""
    species: str = ""
    infrared_line: float | None = None
    raman_line: float | None = None
    strength_infrared: str = ""
    strength_raman: str = ""
    polarisation: str = ""
    estimate: float | None = None
    description: str = ""
    firm: bool = False
    alternatives: tuple[tuple[str, float], ...] = ()
    extra: dict = field(default_factory=dict, hash=False, compare=False)
    row: int = 0

    @property
    def wavenumber(self) -> float | None:
        """Mean of the infrared and the Raman line, cm-1; None for an unseen fundamental."""
        lines = [line for line in (self.infrared_line, self.raman_line) if line is not None]
        return sum(lines) / len(lines) if lines else None


@dataclass(frozen=True)
class AssignmentFile:
    """All rows with the head of the file."""

    rows: tuple[AssignmentRow, ...]
    structure: str = ""
    group: str = ""
    axes: str = ""
    source: str = ""

    def modes(self, group=None) -> tuple[Mode, ...]:
        """Return the fundamentals that were seen; `group` (by default that of the head) must have their species."""
        group = group or (point_group(self.group) if self.group else None)
        found = []
        for row in self.rows:
            if row.status == "assigned":
                found.append(Mode(mode_name(row.mode), self._species(row, group), row.wavenumber))
        return named_modes(found)

    @property
    def leftovers(self) -> tuple[Line, ...]:
        """The lines left over."""
        lines = []
        for row in self.rows:
            if row.status == "leftover":
                for spectrum, value, strength in (("IR", row.infrared_line, row.strength_infrared),
                                                  ("Raman", row.raman_line, row.strength_raman)):
                    if value is not None:
                        lines.append(Line(value, spectrum, strength, row.polarisation if spectrum == "Raman" else "",
                                          source=self.source, row=row.row))
        return tuple(lines)

    def _species(self, row: AssignmentRow, group) -> str:
        if group is None:
            return plain_label(row.species)
        try:
            return group.species_named(row.species).label
        except VibsymError as error:
            raise VibsymError(f"{self.source}, line {row.row}: {error}") from None


def read_assignment(path: str) -> AssignmentFile:
    """Return an assignment file; the first row that cannot be read is an error with its line."""
    try:
        text = Path(path).read_text(encoding="utf-8-sig")
    except IsADirectoryError:
        raise VibsymError(f"{path}: is a folder; name an assignment CSV") from None
    except UnicodeDecodeError:
        raise VibsymError(f"{path}: not UTF-8 text; save the assignment as CSV in UTF-8") from None
    except (OSError, ValueError) as error:
        raise VibsymError(f"{path}: cannot be read ({getattr(error, 'strerror', None) or error})") from None
    return parse_assignment(text, str(path))


def parse_assignment(text: str, source: str = "assignment") -> AssignmentFile:
    """Return the assignment written in a text.

    >>> found = parse_assignment("status,mode,species,infrared_line,raman_line\\nassigned,ν4,T2,1306,1308")
    >>> found.modes()
    (Mode(name='ν4', species='T2', wavenumber=1307.0),)
    """
    head = {"structure": "", "group": "", "axes": ""}
    numbered = []
    for number, line in enumerate(text.splitlines(), 1):
        if line.startswith("#"):
            key, colon, value = line.lstrip("# ").partition(":")
            if colon and key.strip().lower() in head:
                head[key.strip().lower()] = value.strip()
        elif line.strip():
            numbered.append((number, next(csv.reader([line]))))
    if not numbered:
        raise VibsymError(f"{source}: no rows; an assignment CSV begins with the columns {', '.join(COLUMNS[:5])}, ...")
    columns = [cell.strip().lower() for cell in numbered[0][1]]
    missing = [name for name in ("status", "species") if name not in columns]
    if missing:
        raise VibsymError(f"{source}: no column {missing[0]}; an assignment CSV has {', '.join(COLUMNS)}")
    if head["group"]:
        try:
            head["group"] = point_group(head["group"]).symbol
        except VibsymError as error:
            raise VibsymError(f"{source}, head '# group:': {error}") from None
    rows = tuple(_row(source, number, columns, cells) for number, cells in numbered[1:])
    return AssignmentFile(rows, head["structure"], head["group"], head["axes"], source)


def write_assignment(assignment: AssignmentFile) -> str:
    """Return the CSV text of an assignment; `parse_assignment` reads it back."""
    stream = io.StringIO()
    for key, value in (("structure", assignment.structure), ("group", assignment.group), ("axes", assignment.axes)):
        stream.write(f"# {key}: {value}\n")
    extra = list(dict.fromkeys(name for row in assignment.rows for name in row.extra))
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow([*COLUMNS, *extra])
    for row in assignment.rows:
        cells = [_cell(getattr(row, name)) for name in COLUMNS]
        writer.writerow(cells + [row.extra.get(name, "") for name in extra])
    return stream.getvalue()


def _cell(value) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float):
        return f"{value:.10g}"
    if isinstance(value, tuple):
        return ";".join(f"{label}:{cost:g}" for label, cost in value)
    return str(value)


def _row(source: str, number: int, columns: list[str], cells: list[str]) -> AssignmentRow:
    where = f"{source}, line {number}"
    if len(cells) > len(columns):
        raise VibsymError(f"{where}: {len(cells)} fields where the head names {len(columns)} columns")
    values = dict(zip(columns, [cell.strip() for cell in cells] + [""] * (len(columns) - len(cells))))
    status = values["status"].lower()
    if status not in STATUSES:
        raise VibsymError(f"{where}: status '{values['status']}' is none of {', '.join(STATUSES)}")
    numbers = {name: _number(where, name, values.get(name, "")) for name in ("infrared_line", "raman_line", "estimate")}
    if status == "unseen" and (numbers["infrared_line"] or numbers["raman_line"]):
        raise VibsymError(f"{where}: an unseen fundamental has no line; write assigned, or leave the lines empty")
    if status != "unseen" and numbers["infrared_line"] is None and numbers["raman_line"] is None:
        raise VibsymError(f"{where}: no line; give infrared_line or raman_line (cm-1)")
    if status != "leftover" and not values["species"]:
        raise VibsymError(f"{where}: no species for mode '{values.get('mode', '')}'")
    firm = values.get("firm", "").lower()
    if firm not in _YES + _NO:
        raise VibsymError(f"{where}: firm '{values['firm']}' is neither yes nor no")
    words = {name: values.get(name, "")
             for name in ("strength_infrared", "strength_raman", "polarisation", "description")}
    extra = {name: value for name, value in values.items() if name not in COLUMNS and name}
    return AssignmentRow(status, values.get("mode", ""), values["species"], **numbers, **words, firm=firm in _YES,
                         alternatives=_alternatives(where, values.get("alternatives", "")), extra=extra, row=number)


def _number(where: str, name: str, text: str) -> float | None:
    if not text:
        return None
    try:
        value = float(text)
    except ValueError:
        raise VibsymError(f"{where}: {name} '{text}' is not a number in cm-1") from None
    if not 0 < value <= 3 * HIGHEST:                      # overtones are left over far above the fundamentals
        raise VibsymError(f"{where}: {name} {text} is no wavenumber between 0 and {3 * HIGHEST:g} cm-1")
    return value


def _alternatives(where: str, text: str) -> tuple[tuple[str, float], ...]:
    pairs = []
    for part in filter(None, (part.strip() for part in text.split(";"))):
        label, _, cost = part.partition(":")
        try:
            pairs.append((label.strip(), float(cost or 0)))
        except ValueError:
            raise VibsymError(f"{where}: alternatives '{part}' is not written species:cost, as in E:1.7") from None
    return tuple(pairs)
