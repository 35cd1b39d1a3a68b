"""The page, the rows, the object and the CSV of an assignment (`vibsym assign`)."""

import csv

from vibsym.evidence.assignment import FIRM
from vibsym.evidence.assignment_costs import mean_wavenumber
from vibsym.evidence.assignment_file import AssignmentFile, AssignmentRow, write_assignment
from vibsym.evidence.near_fundamentals import near_fundamentals
from vibsym.groups.symbols import typeset
from vibsym.report.document import Listing, Paragraph, Table
from vibsym.report.wording import NOTHING, about_structure, axes_facts, count_text, found_within, group_text
from vibsym.structures.axes import axis_words

EXPLAIN = (
    "vibsym combine STRUCTURE --assignment FILE looks for overtones, combinations and hot bands among them; "
    "FILE is this assignment with --format csv."
)


def parts(result, strip: bool = False, **_) -> list:
    """Return the page."""
    symmetry = result.symmetry
    firm = sum(row.firm for row in result.assigned)
    told = (f"{count_text(len(result.assigned), 'fundamental')} assigned, {firm} of them firm; "
            f"{count_text(len(result.leftover), 'band')} left over, "
            f"{count_text(len(result.unseen), 'fundamental')} not seen")
    head = ("mode", "species", "infrared", "Raman", "pol.", "estimate", "firmness", "description")
    page = [about_structure(symmetry.structure),
            Paragraph(f"Point group {group_text(symmetry.group.symbol)}, {found_within(symmetry)}"),
            Paragraph(told, strong=True),
            Table(head, tuple(map(_row, result.assigned)), right=frozenset({2, 3, 5}), flow=True),
            Paragraph(f"Firm: every other species costs at least {FIRM:g} more; else the nearest other species with "
                      f"its extra cost. Total cost {result.cost:.1f} in units of χ².")]
    if strip:
        from vibsym.report.strip import assignment_strip

        page += assignment_strip(result)
    if result.leftover:
        page += [Listing(tuple(map(_left_over, result.leftover)), "Lines left over"), Paragraph(EXPLAIN)]
    if result.unseen:
        unseen = tuple((typeset(mode.name), typeset(mode.species), f"{mode.wavenumber:.0f}", _active(mode))
                       for mode in result.unseen)
        page.append(Table(("mode", "species", "estimate", "active in"), unseen, right=frozenset({2}),
                          heading="Fundamentals not seen"))
    page += axes_facts(axis_words(symmetry))
    if notes := (*result.notes, *near_fundamentals(result)):
        page.append(Listing(notes, "Beware"))
    return page


def _row(row) -> tuple[str, ...]:
    infrared, raman = (NOTHING if band is None else str(band) for band in (row.infrared, row.raman))
    polarised = "p" if row.raman and row.raman.polarised else "dp" if row.raman and row.raman.depolarised else NOTHING
    if row.pinned:
        firmness = "pinned"
    elif row.firm:
        firmness = "firm"
    else:
        firmness = ", ".join(f"{typeset(label)} +{cost:.1f}" for label, cost in row.alternatives[:2])
    return (typeset(row.mode.name), typeset(row.mode.species), infrared, raman, polarised, f"{row.mode.wavenumber:.0f}",
            firmness, row.description)


def _left_over(band) -> str:
    told = dict.fromkeys(each for line in band.lines for each in (line.strength, line.polarisation) if each)
    return f"{band.spectrum} {band} {', '.join(told)}".strip()


def _active(mode) -> str:
    spectra = [name for name, active in (("infrared", mode.infrared), ("Raman", mode.raman)) if active]
    return " and ".join(spectra) or "neither"


def assignment_file(result) -> AssignmentFile:
    """Return the assignment as a file holds it: assigned, unseen and leftover rows."""
    rows = [AssignmentRow("assigned", row.mode.name, row.mode.species, _mean(row.infrared), _mean(row.raman),
                          _strength(row.infrared), _strength(row.raman), _polarisation(row.raman),
                          round(row.mode.wavenumber, 1), row.description, bool(row.firm), row.alternatives,
                          _extra(row.infrared, row.raman)) for row in result.assigned]
    for mode in result.unseen:
        rows.append(AssignmentRow("unseen", mode.name, mode.species, estimate=round(mode.wavenumber, 1)))
    for band in result.leftover:
        if band.spectrum == "IR":
            lines = {"infrared_line": _mean(band), "strength_infrared": _strength(band)}
        else:
            lines = {"raman_line": _mean(band), "strength_raman": _strength(band), "polarisation": _polarisation(band)}
        rows.append(AssignmentRow("leftover", **lines, extra=_extra(band)))
    words = "; ".join(f"{name}: {text}" for name, text in axis_words(result.symmetry).words.items())
    return AssignmentFile(tuple(rows), result.symmetry.structure.source, result.symmetry.group.symbol, words)


def head(result, **_) -> list[str]:
    """Return the head lines of the CSV."""
    file = assignment_file(result)
    return [f"structure: {file.structure}", f"group: {file.group}", f"axes: {file.axes}"]


def rows(result, **_) -> list[dict]:
    """Return the rows of the assignment CSV."""
    lines = write_assignment(assignment_file(result)).splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def as_object(result, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def _mean(band) -> float | None:
    return None if band is None else mean_wavenumber(band)


def _strength(band) -> str:
    return "" if band is None else "; ".join(line.strength for line in band.lines if line.strength)


def _polarisation(band) -> str:
    return "" if band is None else "; ".join(line.polarisation for line in band.lines if line.polarisation)


def _extra(*bands) -> dict:
    """Return the columns of the band list that vibsym does not know; lines that differ are joined."""
    found: dict[str, list[str]] = {}
    for band in bands:
        for line in band.lines if band is not None else ():
            for name, value in line.extra.items():
                if value and value not in found.setdefault(name, []):
                    found[name].append(value)
    return {name: "; ".join(values) for name, values in found.items()}
