"""Set the parts of a page (`report/document.py`) as HTML; every text is escaped, none of it is ever markup."""

from html import escape

from vibsym.report.document import Facts, Listing, Paragraph, Preformatted, Table, Title
from vibsym.report.labels import set_labels


def set_html(parts, level: int = 3) -> str:
    """Return the parts as HTML; headings begin at `level`."""
    setters = {Title: _title, Paragraph: _paragraph, Facts: _facts, Table: _table, Listing: _listing,
               Preformatted: _preformatted}
    return "".join(setters[type(part)](part, level) for part in parts)


def heading(text: str, level: int) -> str:
    """Return a heading, or nothing for an empty text."""
    return f"<h{level}>{set_labels(text, True)}</h{level}>" if text else ""


def _title(part: Title, level: int) -> str:
    aside = f'<p class="aside">{set_labels(part.aside)}</p>' if part.aside else ""
    return heading(part.text, level) + aside


def _paragraph(part: Paragraph, level: int) -> str:
    lines = "<br>".join(set_labels(line) for line in part.text.split("\n"))
    return f'<p class="lead">{lines}</p>' if part.strong else f"<p>{lines}</p>"


def _facts(part: Facts, level: int) -> str:
    pairs = "".join(f"<dt>{set_labels(name)}</dt><dd>{set_labels(value)}</dd>" for name, value in part.pairs)
    return heading(part.heading, level) + (f"<dl>{pairs}</dl>" if pairs else "")


def _listing(part: Listing, level: int) -> str:
    items = "".join(f"<li>{set_labels(item)}</li>" for item in part.items)
    return heading(part.heading, level) + (f"<ul>{items}</ul>" if items else "")


def _preformatted(part: Preformatted, level: int) -> str:
    lines = escape("\n".join(part.lines))
    return heading(part.heading, level) + f"<pre>{lines}</pre>"


def _table(part: Table, level: int) -> str:
    head = "".join(f'<th scope="col"{_flush(part, k)}>{set_labels(cell)}</th>' for k, cell in enumerate(part.head))
    rows = "".join("<tr>" + "".join(_cell(part, k, cell) for k, cell in enumerate(row)) + "</tr>" for row in part.rows)
    return (heading(part.heading, level)
            + f"<table><thead><tr>{head}</tr></thead><tbody>{rows}</tbody></table>")


def _cell(part: Table, column: int, cell: str) -> str:
    """The name of the column stands with each cell, for narrow screens where a row becomes a block."""
    tag = 'th scope="row"' if column == 0 else "td"
    whole = "whole" if column == 0 and len(cell) < 26 else ""               # not broken at the hyphen of C-C
    kind = " ".join(filter(None, ("n" if column in part.right else "", whole)))
    named = f' class="{kind}"' if kind else ""
    return f'<{tag}{named} data-head="{escape(part.head[column])}">{set_labels(cell)}</{tag[:2]}>'


def _flush(part: Table, column: int) -> str:
    return ' class="n"' if column in part.right else ""
