"""Bands as a strip of text, one line a region: ▲ infrared only, ▼ Raman only, ◆ both, ○ neither (or not seen).

The marks point as the sticks of the plot do; where standard output carries no such marks they become ^ v X o.
"""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Preformatted

MOST_MARKS = 12
COLUMNS = 54                # of the wavenumber axis
KEY = "▲ infrared  ▼ Raman  ◆ both"


def mark_of(infrared: bool, raman: bool) -> str:
    """Return the mark of a band.

    >>> mark_of(True, True), mark_of(False, True)
    ('◆', '▼')
    """
    return {(True, True): "◆", (True, False): "▲", (False, True): "▼", (False, False): "○"}[infrared, raman]


def region_strip(expectation) -> list:
    """Return what to expect as a strip: for each region a mark for every band, polarised ones with a p."""
    group = expectation.symmetry.group
    shares = [(region.name, region.gamma) for region in expectation.regions.rows if region.gamma]
    if expectation.regions.missing:
        shares.append(("not described", expectation.regions.missing))
    if not shares:
        shares = [("all", expectation.gamma_vib)] if expectation.gamma_vib else []
    wide = max((len(name) for name, _ in shares), default=0)
    lines = []
    for name, gamma in shares:
        words = []
        for label, count in gamma.items():
            species = group.species_named(label)
            mark = mark_of(species.infrared, species.raman) + ("p" if species.polarised else "")
            marks = " ".join([mark] * count) if count <= MOST_MARKS else f"{count} {mark}"
            words.append(f"{typeset(label)} {marks}")
        lines += _folded(name.ljust(wide), words, wide)
    return [Preformatted((*lines, "", f"{KEY}  ○ silent  p polarised"), "Strip of bands")] if lines else []


def assignment_strip(found) -> list:
    """Return an assignment as a strip: lines on a falling wavenumber axis, one line for each kind of motion."""
    rows: dict[str, list[tuple[float, str]]] = {}
    for row in found.assigned:
        rows.setdefault(_kind(row.mode), []).append((row.wavenumber, mark_of(row.infrared is not None,
                                                                             row.raman is not None)))
    left = [(line.wavenumber, "?") for band in found.leftover for line in band.lines]
    if left:
        rows["left over"] = left
    places = [place for marks in rows.values() for place, _ in marks]
    if not places:
        return []
    low, high = min(places), max(places)
    margin = max(10.0, 0.04 * (high - low))
    low, high = max(0.0, low - margin), high + margin
    for mode in found.unseen:
        if low <= mode.wavenumber <= high:
            rows.setdefault(_kind(mode), []).append((mode.wavenumber, "○"))
    wide = max(len(name) for name in rows)
    lines = [f"{name.ljust(wide)} │{_placed(marks, low, high)}" for name, marks in rows.items()]
    scale = _placed_words([low + (high - low) * k / 4 for k in range(4, -1, -1)], low, high)
    return [Preformatted((*lines, " " * (wide + 1) + scale, "", f"{KEY}  ○ not seen (estimate)  ? left over"),
                         "Strip of bands")]


def _kind(mode) -> str:
    return mode.shares[0][0] if mode.shares else "other"


def _column(place: float, low: float, high: float) -> int:
    return round((high - place) / (high - low) * (COLUMNS - 1))


def _placed(marks, low: float, high: float) -> str:
    """Put each mark in its column; two in one column, of which one is seen, show the seen one."""
    line = [" "] * COLUMNS
    for place, mark in sorted(marks, key=lambda each: each[1] != "○"):
        column = _column(place, low, high)
        line[column] = mark
    return "".join(line).rstrip()


def _placed_words(places, low: float, high: float) -> str:
    line = [" "] * (COLUMNS + 4)
    for place in places:
        word = f"{place:.0f}"
        start = max(0, _column(place, low, high) - len(word) // 2)
        line[start:start + len(word)] = word
    return "".join(line).rstrip()


def _folded(name: str, words: list[str], wide: int) -> list[str]:
    lines, line = [], name + "  "
    for word in words:
        if len(line) + len(word) > 74 and line.strip():
            lines.append(line.rstrip())
            line = " " * (wide + 2)
        line += word + "   "
    return [*lines, line.rstrip()]
