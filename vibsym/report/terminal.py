"""Set a page for the eye: plain text of a given width that reads the same on a terminal, on paper and in a file.

Colour only weighs what the words already say: headings are bold where `colour` is asked for, nothing depends on it.
"""

from vibsym.report.document import Facts, Listing, Paragraph, Preformatted, Table, Title

_BOLD, _PLAIN = "\x1b[1m", "\x1b[0m"


def set_page(parts, width: int = 80, colour: bool = False) -> str:
    """Return the parts as text of lines no longer than `width` (a single longer word excepted)."""
    setters = {Title: _title, Paragraph: _paragraph, Facts: _facts, Table: _table, Listing: _listing,
               Preformatted: _preformatted}
    return "\n\n".join("\n".join(setters[type(part)](part, width, colour)) for part in parts) + "\n"


def text_width(text: str) -> int:
    """Return how many columns a text takes; combining marks (the bar of 6̄) take none."""
    return sum(not "\u0300" <= character <= "\u036f" for character in text)


def wrap(text: str, width: int, first: str = "", later: str = "") -> list[str]:
    """Break a text between words; `first` and `later` begin the first line and the others."""
    lines, line = [], first
    blank = True
    for word in text.split():
        if not blank and text_width(line) + 1 + text_width(word) > width:
            lines.append(line.rstrip())
            line, blank = later, True
        line += word if blank else " " + word
        blank = False
    return [*lines, line.rstrip()]


def _heading(text: str, colour: bool) -> list[str]:
    if not text:
        return []
    return [f"{_BOLD}{text}{_PLAIN}" if colour else text]


def _title(part: Title, width: int, colour: bool) -> list[str]:
    gap = width - text_width(part.text) - text_width(part.aside)
    if part.aside and gap < 2:
        return [*_heading(part.text, colour), *wrap(part.aside, width, "  ", "  ")]
    line = f"{_BOLD}{part.text}{_PLAIN}" if colour else part.text
    return [(line + "  " + part.aside).rstrip()]


def _paragraph(part: Paragraph, width: int, colour: bool) -> list[str]:
    lines = [line for text in part.text.split("\n") for line in wrap(text, width)]
    return [f"{_BOLD}{line}{_PLAIN}" for line in lines] if colour and part.strong else lines


def _facts(part: Facts, width: int, colour: bool) -> list[str]:
    column = max((text_width(name) for name, _ in part.pairs), default=0)
    lines = _heading(part.heading, colour)
    for name, value in part.pairs:
        first = "  " + _pad(name, column, False) + "  "
        lines += wrap(value, width, first, " " * (column + 4))
    return lines


def _listing(part: Listing, width: int, colour: bool) -> list[str]:
    lines = _heading(part.heading, colour)
    for item in part.items:
        lines += wrap(item, width, "  · ", "    ")
    return lines


def _preformatted(part: Preformatted, width: int, colour: bool) -> list[str]:
    return [*_heading(part.heading, colour), *(("  " + line).rstrip() for line in part.lines)]


def _table(part: Table, width: int, colour: bool) -> list[str]:
    lines = _heading(part.heading, colour)
    grid = (part.head, *part.rows)
    widths = [max(text_width(row[column]) for row in grid) for column in range(len(part.head))]
    if part.flow:
        blocks = [list(range(len(widths)))]
        widths[-1] = max(12, min(widths[-1], width - 2 - sum(size + 2 for size in widths[:-1])))
    else:
        blocks = _column_blocks(widths, width)
    for number, columns in enumerate(blocks):
        if number:
            lines.append("")
        ruled = False
        for row in grid:
            lines += _row([row[column] for column in columns], [widths[column] for column in columns],
                          [column in part.right for column in columns])
            if not ruled:
                lines.append("  " + "─" * (sum(widths[column] + 2 for column in columns) - 2))
                ruled = True
    return lines


def _column_blocks(widths: list[int], width: int) -> list[list[int]]:
    """Divide the columns into blocks that fit, each beginning with the first column."""
    blocks, room = [[0]], width - 2 - widths[0]
    for column, size in enumerate(widths[1:], 1):
        if size + 2 > room and len(blocks[-1]) > 1:
            blocks.append([0])
            room = width - 2 - widths[0]
        blocks[-1].append(column)
        room -= size + 2
    return blocks


def _row(cells: list[str], widths: list[int], right: list[bool]) -> list[str]:
    """Set one row; a last cell too wide for its column runs on in lines of its own."""
    last = wrap(cells[-1], widths[-1]) if text_width(cells[-1]) > widths[-1] else [cells[-1]]
    front = "".join(_pad(cell, size, flush) + "  " for cell, size, flush in zip(cells[:-1], widths, right))
    lines = [("  " + front + _pad(last[0], widths[-1], right[-1])).rstrip()]
    return lines + ["  " + " " * text_width(front) + line for line in last[1:]]


def _pad(text: str, width: int, flush_right: bool) -> str:
    blanks = " " * (width - text_width(text))
    return blanks + text if flush_right else text + blanks
