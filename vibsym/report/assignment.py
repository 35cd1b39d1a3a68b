"""The page, the rows, the object and the CSV of an assignment (`vibsym assign`)."""

import csv

from vibsym.evidence.assignment import FIRM
from vibsym.evidence.assignment_file import AssignmentFile, AssignmentRow, write_assignment
from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Paragraph, Table, Title
from vibsym.report.wording import NOTHING, about_structure, count_text, found_within, group_text


def parts(result, strip: bool = False, **_) -> list:
    """Return the page."""
    symmetry = result.symmetry
    firm = sum(row.firm for row in result.assigned)
    page = [
        Title(*about_structure(symmetry.structure)),
        Paragraph(f"Point group {group_text(symmetry.group.symbol)}, {found_within(symmetry)}"),
        Paragraph(
            f"{count_text(len(result.assigned), 'fundamental')} assigned, {firm} of them firm; "
            f"{count_text(len(result.leftover), 'band')} left over, "
            f"{count_text(len(result.unseen), 'fundamental')} not seen",
            strong=True,
        ),
    ]
    head = ("mode", "species", "infrared", "Raman", "pol.", "estimate", "firmness", "description")
    page.append(Table(head, tuple(_row(row) for row in result.assigned), right=frozenset({2, 3, 5}), flow=True))
    page.append(
        Paragraph(
            f"Firm: every other species costs at least {FIRM:g} more; else the nearest other species with its "
            "extra cost. "
            f"Total cost {result.cost:.1f} in units of χ²."
        )
    )
    if strip:
        from vibsym.report.strip import assignment_strip

        page += assignment_strip(result)
    if result.leftover:
        page.append(
            Listing(
                tuple(
                    f"{band.spectrum} {band} {', '.join(filter(None, {line.strength for line in band.lines}))}".strip()
                    for band in result.leftover
                ),
                "Lines left over",
            )
        )
    if result.unseen:
        page.append(
            Table(
                ("mode", "species", "estimate", "active in"),
                tuple(
                    (mode.name, typeset(mode.species), f"{mode.wavenumber:.0f}", _active(mode))
                    for mode in result.unseen
                ),
                right=frozenset({2}),
                heading="Fundamentals not seen",
            )
        )
    page += _axes(symmetry)
    if result.notes:
        page.append(Listing(result.notes, "Beware"))
    return page


def _row(row) -> tuple[str, ...]:
    infrared, raman = (NOTHING if band is None else str(band) for band in (row.infrared, row.raman))
    polarised = (
        NOTHING if row.raman is None else "p" if row.raman.polarised else "dp" if row.raman.depolarised else NOTHING
    )
    if row.pinned:
        firmness = "pinned"
    elif row.firm:
        firmness = "firm"
    else:
        firmness = ", ".join(f"{typeset(label)} +{cost:.1f}" for label, cost in row.alternatives[:2])
    return (
        row.mode.name,
        typeset(row.mode.species),
        infrared,
        raman,
        polarised,
        f"{row.mode.wavenumber:.0f}",
        firmness,
        row.description,
    )


def _active(mode) -> str:
    return (
        " and ".join(name for name, active in (("infrared", mode.infrared), ("Raman", mode.raman)) if active)
        or "neither"
    )


def _axes(symmetry) -> list:
    from vibsym.structures.axes import axis_words

    choice = axis_words(symmetry)
    pairs = tuple(choice.words.items())
    if choice.exchange:
        swaps = ", ".join(typeset(each).replace("<->", "↔") for each in choice.exchange)
        pairs += (("other", f"the other choice of axes (--axes) exchanges {swaps}"),)
    return [Facts(pairs, "Axes")] if pairs else []


def assignment_file(result) -> AssignmentFile:
    """Return the assignment as the file of design: assigned, unseen and leftover rows."""
    from vibsym.structures.axes import axis_words

    rows = []
    for row in result.assigned:
        rows.append(
            AssignmentRow(
                "assigned",
                row.mode.name,
                row.mode.species,
                _mean(row.infrared),
                _mean(row.raman),
                _strength(row.infrared),
                _strength(row.raman),
                _polarisation(row.raman),
                round(row.mode.wavenumber, 1),
                row.description,
                bool(row.firm),
                row.alternatives,
                _extra(row.infrared, row.raman),
            )
        )
    for mode in result.unseen:
        rows.append(AssignmentRow("unseen", mode.name, mode.species, estimate=round(mode.wavenumber, 1)))
    for band in result.leftover:
        lines = (
            {"infrared_line": _mean(band), "strength_infrared": _strength(band)}
            if band.spectrum == "IR"
            else {"raman_line": _mean(band), "strength_raman": _strength(band), "polarisation": _polarisation(band)}
        )
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
    return None if band is None else sum(line.wavenumber for line in band.lines) / len(band.lines)


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
