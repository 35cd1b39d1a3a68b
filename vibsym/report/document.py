"""The parts a page is made of, before it is known whether it will be read on a terminal or as Markdown.

A view turns a result into a list of these parts; `terminal` and `markdown` set them.  So formats cannot disagree.
"""

from typing import NamedTuple


def spelled(part, spell):
    """Return a part with `spell` applied to every text in it, before columns are measured."""
    if isinstance(part, str):
        return spell(part)
    if not isinstance(part, tuple):
        return part
    texts = [spelled(each, spell) for each in part]
    return type(part)(*texts) if hasattr(part, "_fields") else tuple(texts)


class Title(NamedTuple):
    """The head of a page: what it is about, and on the same line whatever belongs to it."""

    text: str
    aside: str = ""


class Paragraph(NamedTuple):
    """Running text; `strong` for the one statement the eye should meet first."""

    text: str
    strong: bool = False


class Facts(NamedTuple):
    """Name and value, one pair a line, under an optional heading."""

    pairs: tuple[tuple[str, str], ...]
    heading: str = ""


class Table(NamedTuple):
    """Columns under their heads; `right` names the columns set flush right.

    Too wide a table is broken between columns and the first one repeated; with `flow` the last column is broken inside
    instead (it holds a list of words).
    """

    head: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    right: frozenset[int] = frozenset()
    heading: str = ""
    flow: bool = False


class Preformatted(NamedTuple):
    """Lines in which every column counts, such as a strip of bands, under an optional heading."""

    lines: tuple[str, ...]
    heading: str = ""


class Listing(NamedTuple):
    """A list of sentences under a heading."""

    items: tuple[str, ...]
    heading: str = ""
