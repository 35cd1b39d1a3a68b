"""The page, the rows and the object of a ladder (`vibsym group`)."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Paragraph, Table
from vibsym.report.wording import NOTHING, about_structure, found_within, group_text, within
from vibsym.spectra.cautions import sentence
from vibsym.spectra.climb import Climb

_MOST_SPOILERS = 6


def parts(result: Climb, **_) -> list:
    """Return the page: the group, the suggested rung, the ladder, the axes of the group."""
    found = result.found
    page = [about_structure(result.structure),
            Paragraph(f"Point group {group_text(found.symmetry.group.symbol)}, {found_within(found.symmetry)}"),
            Paragraph(_suggestion(result), strong=True), _rungs(result)]
    if result.chosen is None and result.ladder.stands_apart:
        page.append(Paragraph(_apart(result)))
    if found.axes.words:
        page.append(Facts(tuple(found.axes.words.items()), "Axes"))
    notes = tuple(map(sentence, (*result.structure.notes, *found.axes.notes)))
    return page + ([Listing(notes, "Beware")] if notes else [])


def rows(result: Climb, **_) -> list[dict]:
    """Return one CSV row a rung."""
    table = []
    for rung, each in zip(result.ladder.rungs, result.expectations, strict=True):
        group = each.symmetry.group
        table.append({"source": result.structure.source, "formula": result.structure.formula,
                      "atoms": len(result.structure), "point_group": group.symbol, "order": group.order,
                      "deviation": round(float(each.symmetry.deviation), 5),
                      "found": each is result.found, "suggested": each.symmetry is result.suggested,
                      "spoilers": " ".join(map(str, rung.spoilers))} | each.counts.to_dict())
    return table


def as_object(result: Climb, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def _suggestion(result: Climb) -> str:
    if result.chosen is not None:
        return f"Chosen: {group_text(result.chosen.group.symbol)}, {found_within(result.chosen)}"
    suggested = result.suggested
    name = group_text(suggested.group.symbol)
    if len(result.ladder.rungs) == 1:
        return f"{name} is the only rung: no higher group within reach."
    return f"Suggested: {name}, within {within(suggested.deviation)} Å: the largest gap of the ladder lies above it."


def _apart(result: Climb) -> str:
    last = result.ladder.rungs[-1]
    name = typeset(last.symbol)
    return (f"Above {name} ({within(last.deviation)} Å) no rung follows up to {result.ladder.reach:.2f} Å, a wider gap "
            f"still: if the ideal shape is {name}, --as {last.symbol} works in it.")


def _rungs(result: Climb) -> Table:
    head = ("group", "within Å", "bands", "IR", "Raman", "both", "polarised", "silent", "next spoiled by")
    rows = []
    for rung, each in zip(result.ladder.rungs, result.expectations, strict=True):
        counts = each.counts
        rows.append((typeset(each.symmetry.group.symbol), within(each.symmetry.deviation),
                     *(str(count) for count in (counts.fundamentals, counts.infrared, counts.raman, counts.coincident,
                                                counts.polarised, counts.silent)),
                     _spoilers(result, rung)))
    return Table(head, tuple(rows), right=frozenset(range(1, 8)), heading="Ladder", flow=True)


def _spoilers(result: Climb, rung) -> str:
    """Name the atoms by element and number; a long list is cut."""
    names = [f"{result.structure.labels[atom - 1]}{atom}" for atom in rung.spoilers]
    more = len(names) - _MOST_SPOILERS
    return " ".join(names[:_MOST_SPOILERS]) + (f" and {more} more" if more > 0 else "") or NOTHING
