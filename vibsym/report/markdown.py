"""Set a page as Markdown: the same parts as on the terminal, for notebooks, tickets and supporting information."""

import re

from vibsym.report.document import Facts, Listing, Paragraph, Preformatted, Table, Title


def set_markdown(parts) -> str:
    """Return the parts as Markdown (tables with pipes, headings of the second and third level)."""
    setters = {Title: _title, Paragraph: _paragraph, Facts: _facts, Table: _table, Listing: _listing,
               Preformatted: _preformatted}
    return "\n\n".join("\n".join(setters[type(part)](part)) for part in parts) + "\n"


def _heading(text: str) -> list[str]:
    return [f"### {_safe(text)}", ""] if text else []


def _title(part: Title) -> list[str]:
    return [f"## {_safe(part.text)}", *(["", _safe(part.aside)] if part.aside else [])]


def _paragraph(part: Paragraph) -> list[str]:
    lines = [_safe(line) for line in part.text.split("\n")]
    if part.strong:
        lines = [f"**{line}**" for line in lines]
    return ["  \n".join(lines)]


def _facts(part: Facts) -> list[str]:
    return _heading(part.heading) + [f"- {_safe(name)}: {_safe(value)}" for name, value in part.pairs]


def _listing(part: Listing) -> list[str]:
    return _heading(part.heading) + [f"- {_safe(item)}" for item in part.items]


def _preformatted(part: Preformatted) -> list[str]:
    return [*_heading(part.heading), *("    " + line for line in part.lines)]


def _table(part: Table) -> list[str]:
    rule = ["---:" if column in part.right else "---" for column in range(len(part.head))]
    return _heading(part.heading) + ["| " + " | ".join(cells) + " |" for cells in (
        [_safe(cell) for cell in part.head], rule, *([_safe(cell) for cell in row] for row in part.rows))]


def _safe(text: str) -> str:
    """Keep characters that Markdown would take for markup: also a link, an entity, a mark that opens a line.

    >>> _safe("# [a](b) & &lt; ~~c~~")
    '\\\\# \\\\[a](b) & \\\\&lt; \\\\~\\\\~c\\\\~\\\\~'
    """
    for mark in "\\|*_<>`~[":
        text = text.replace(mark, "\\" + mark)
    text = re.sub(r"&(?=#?\w+;)", r"\\&", text)
    return re.sub(r"^([#+-])(?=\s|$)", r"\\\1", text)
