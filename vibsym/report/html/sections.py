"""The sections of the report page, one function each: what is in it is decided here, how it is set elsewhere."""

from html import escape

from vibsym.groups.symbols import typeset
from vibsym.report import expectation as expectation_view
from vibsym.report import screening as screening_view
from vibsym.report.collection import Report, Sheet
from vibsym.report.combination import combination_text
from vibsym.report.document import Facts, Listing, Paragraph, Table
from vibsym.report.html.setting import set_html
from vibsym.report.html.stick_plot import KEY, assignment_sticks, curve, estimate_sticks, observed_sticks, plot
from vibsym.report.html.structure_view import cards
from vibsym.report.html.verdict import verdicts
from vibsym.report.scene import coordinate_motions, mode_motions
from vibsym.report.wording import NOTHING, count_text

MOST_MODES, MOST_COORDINATES = 120, 60     # drawn on a page; the commands show them all


def shared_sections(report: Report) -> list[tuple[str, str, str]]:
    """Return the sections that concern all structures: the bands as measured, and the screening."""
    sections = []
    observed = report.observed
    if observed is not None and (len(report.sheets) > 1 or observed.measured):
        text = "".join(curve(found) for found in observed.measured)
        if len(report.sheets) > 1:
            text += plot(observed_sticks(observed), "Observed bands", links=False) + f'<p class="key">{escape(KEY)}</p>'
        sections.append(("observed", "The bands as observed", text))
    if report.screening is not None:
        sections.append(("screen", "What the bands allow", verdicts(report.screening)
                         + set_html(_after_verdicts(report.screening))))
    return sections


def motions_of(sheet: Sheet) -> list:
    """Return every motion that can be shown: normal modes, then symmetry coordinates."""
    return [*_modes(sheet)[:MOST_MODES], *_coordinates(sheet)[:MOST_COORDINATES]]


def _after_verdicts(screening) -> list:
    parts = screening_view.parts(screening)
    kept = [part for part in parts if isinstance(part, Table)]
    kept += [part for part in parts if isinstance(part, Listing)
             and (part.heading.startswith("What would separate") or part.heading == "Beware")]
    return [*kept, Paragraph(screening.caution)]


def _expect(report: Report, sheet: Sheet, prefix: str) -> str:
    """What to expect: the counts as a tally, the species, the representations."""
    before, _, after = _divided(sheet)
    counts = sheet.expectation.counts.to_dict()
    words = (("fundamentals", "fundamentals", ""), ("infrared", "infrared at most", "▲"),
             ("raman", "Raman at most", "▼"),
             ("coincident", "in both", "◆"), ("polarised", "polarised", "●"), ("silent", "silent", "·"))
    tally = "".join(f'<li><span class="count" data-count="{key}">{counts[key]}</span> <span>{mark} {word}</span></li>'
                    for key, word, mark in words)
    if len(sheet.expectation.structure) == 1:
        return set_html(before) + set_html(after)
    before = [part for part in before if not getattr(part, "strong", False)]      # the tally says it
    vibrations = count_text(sheet.expectation.vibrations, "vibration")
    degenerate = counts["fundamentals"] < sheet.expectation.vibrations
    sets = "; those of a degenerate set make one fundamental" if degenerate else ""
    return (f'<ul class="tally">{tally}</ul><p class="key">{vibrations} in all{sets}.</p>'
            + set_html(before) + set_html(after))


def _regions(report: Report, sheet: Sheet, prefix: str) -> str:
    """Γvib by region; the heading is that of the section."""
    headed = [getattr(part, "heading", "") == "By region" for part in _divided(sheet)[1]]
    return set_html([part._replace(heading="") if own else part for part, own in zip(_divided(sheet)[1], headed)])


def _bands(report: Report, sheet: Sheet, prefix: str) -> str:
    """The stick plot: observed lines with what they are assigned to; without bands the estimates alone."""
    if sheet.assignment is not None:
        sticks, title = assignment_sticks(sheet.assignment), "Observed lines with their fundamentals, and estimates"
    elif report.observed is not None:
        sticks, title = observed_sticks(report.observed), "Observed lines"
    elif sheet.estimates is not None and len(sheet.estimates.modes) <= 90:
        sticks, title = estimate_sticks(sheet.estimates.modes), "Estimated places of the bands"
    else:
        return ""
    estimated = "" if report.observed is not None else (
        "<p>No bands were given: these are rough estimates of a valence force field, not a spectrum; how strong a band "
        "is cannot be told from symmetry.</p>")
    return estimated + plot(sticks, title, prefix=prefix) + f'<p class="key">{escape(KEY)}</p>'


def _assignment(report: Report, sheet: Sheet, prefix: str) -> str:
    """Which band is which mode, and how firm."""
    found = sheet.assignment
    if found is None:
        return ""
    answer = found.to_dict()
    rows = tuple((typeset(row["mode"]), typeset(row["species"]), _place(row["infrared_line"]),
                  _place(row["raman_line"]), f"{row['estimate']:.0f}", row["description"],
                  "firm" if row["firm"] else _doubt(row["alternatives"]))
                 for row in answer["assignments"])
    head = ("mode", "species", "infrared", "Raman", "estimate", "description", "firmness")
    page: list = [Paragraph(f"{count_text(len(rows), 'fundamental')} assigned, {len(answer['leftover'])} left over, "
                            f"{len(answer['unseen'])} not seen.", strong=True), Table(head, rows, frozenset({2, 3, 4}))]
    if any(not row["firm"] for row in answer["assignments"]):
        page.append(Paragraph("Firm: every other species costs much more. Otherwise the species that cost nearly as "
                              "little stand there with what they cost more; decide by a further measurement."))
    return set_html([*page, *_local_note(sheet), *_unseen(answer["unseen"], report.observed)])


def _local_note(sheet: Sheet) -> list:
    """Tell that modes are named in the group of the whole molecule, also where the bands were judged in a local one."""
    local = sheet.expectation.oscillators.local if sheet.expectation.oscillators is not None else None
    if local is None or local.symmetry.group.symbol == sheet.symmetry.group.symbol:
        return []
    whole, own = typeset(sheet.symmetry.group.symbol), typeset(local.symmetry.group.symbol)
    return [Paragraph(f"Modes are named in the group of the whole molecule, point group {whole}; what the bands allow "
                      f"was judged in the local group of the oscillators, point group {own}.")]


def _unseen(unseen: list[dict], observed) -> list:
    """Return the fundamentals not seen, by species; those far outside the lines that were given are only counted."""
    lines = [line.wavenumber for line in observed.lines]
    room = max(0.15 * (max(lines) - min(lines)), 100.0)
    inside: dict[str, list[str]] = {}
    outside = 0
    for row in unseen:
        if not min(lines) - room <= row["estimate"] <= max(lines) + room:
            outside += 1
            continue
        inside.setdefault(typeset(row["species"]), []).append(f"{typeset(row['mode'])} {row['estimate']:.0f}")
    told = []
    if inside:
        told.append(Facts(tuple((label, ", ".join(modes)) for label, modes in inside.items()),
                          "Fundamentals not seen, with their estimates in cm⁻¹"))
    if outside:
        told.append(Paragraph(f"{count_text(outside, 'fundamental')} not seen {'have' if outside > 1 else 'has'} "
                              "estimates outside the range of the lines given."))
    return told


def _leftovers(report: Report, sheet: Sheet, prefix: str) -> str:
    """Lines left over, each with its ranked candidates."""
    if sheet.assignment is None or not sheet.assignment.leftover:
        return ""
    if sheet.combined is None:
        lines = tuple(f"{band.spectrum} {band}" for band in sheet.assignment.leftover)
        return set_html([Listing(lines)])
    rows = tuple((f"{each.line.wavenumber:g}", each.line.spectrum, each.line.strength or NOTHING, _candidates(each))
                 for each in sheet.combined.explanations)
    return set_html([Table(("cm-1", "spectrum", "strength", "candidates, the likeliest first"), rows, frozenset({0}))])


def _motion_cards(report: Report, sheet: Sheet, prefix: str) -> str:
    """How it moves: normal modes of the force field, then symmetry coordinates, each as a card."""
    skeleton = f"skeleton-{prefix[1:-1]}"
    text = ""
    modes = _modes(sheet)
    if modes:
        shown = modes[:MOST_MODES]
        text += ("<p>Normal modes of the valence force field, numbered as fundamentals; wavenumbers are its rough "
                 "harmonic estimates. Of a degenerate set one component is drawn. Arrows show where the atoms move; a "
                 "dot in a ring comes towards you, a cross in a ring goes away.</p>")
        text += cards(sheet.scene, shown, skeleton, prefix) + _more(len(modes) - len(shown), "vibsym normal")
        text += _fallback(sheet)
    coordinates = _coordinates(sheet)
    if coordinates:
        shown = coordinates[:MOST_COORDINATES]
        text += ("<details><summary>Symmetry coordinates, set by set</summary><p>The first component of each "
                 "combination; the atoms are drawn as a force along the coordinate moves them.</p>"
                 + cards(sheet.scene, shown, skeleton, prefix, _formulas(sheet))
                 + _more(len(coordinates) - len(shown), "vibsym coordinates") + "</details>")
    return text


def _conventions(report: Report, sheet: Sheet, prefix: str) -> str:
    """What to beware of, and the rules of labels, counts and numbers."""
    notes = [*sheet.expectation.notes, *sheet.omitted]
    if sheet.assignment is not None:
        notes += sheet.assignment.notes
    if report.observed is not None and report.screening is None:
        notes += report.observed.notes
    rules = ("Species: Mulliken's labels in the axes stated beside the structure; another choice of axes exchanges "
             "labels where that is said there (IUPAC, Pure Appl. Chem. 69, 1641 (1997)).",
             "A degenerate set is one band; counts are of fundamentals and upper bounds. Symmetry permits, it never "
             "promises.",
             "Fundamentals are numbered by species in Herzberg's order and by falling wavenumber within a species.")
    return set_html([Listing(tuple(dict.fromkeys(notes)), "Beware"), Listing(rules, "Conventions")])


# Anchor, heading, function of (report, sheet, prefix of ids on the page); an empty text leaves the section out.
SECTIONS = (("expect", "What to expect", _expect), ("regions", "By region", _regions), ("bands", "Bands", _bands),
            ("assignment", "Which band is which mode", _assignment), ("leftover", "Lines left over", _leftovers),
            ("motions", "How it moves", _motion_cards), ("conventions", "Conventions and cautions", _conventions))


def _divided(sheet: Sheet) -> tuple[list, list, list]:
    """Return the page of `expect` in three: up to the regions, the regions, the rest without axes and cautions."""
    parts = [part for part in expectation_view.parts(sheet.expectation)[1:]
             if getattr(part, "heading", "") not in ("Axes", "Beware")]
    first = next((k for k, part in enumerate(parts) if getattr(part, "heading", "") == "By region"), None)
    last = next((k for k, part in enumerate(parts) if getattr(part, "heading", "") == "Representations"), len(parts))
    if first is None:
        return parts, [], []
    return parts[:first], parts[first:last], parts[last:]


def _candidates(explanation) -> str:
    if explanation.fundamental:
        return f"close to {typeset(explanation.fundamental)}"
    names = [f"{typeset(each.combination.label).replace(' - ', ' − ')} at {each.combination.wavenumber:.1f}"
             for each in explanation.candidates[:4]]
    if not names and (each := explanation.nearest):
        return (f"the nearest is {typeset(each.combination.label).replace(' - ', ' − ')} at "
                f"{each.combination.wavenumber:.1f}, {abs(each.shift):.1f} away")
    return "; ".join(names) or "no overtone, sum or difference of two quanta of the assigned fundamentals is near"


def _place(line: float | None) -> str:
    return NOTHING if line is None else f"{line:g}"


def _doubt(alternatives: list[dict]) -> str:
    return "or " + ", ".join(f"{typeset(each['species'])} (+{each['extra_cost']:.1f})" for each in alternatives[:3])


def _modes(sheet: Sheet) -> list:
    return list(mode_motions(sheet.symmetry, sheet.estimates.modes)) if sheet.estimates is not None else []


def _coordinates(sheet: Sheet) -> list:
    return list(coordinate_motions(sheet.coordinates)) if sheet.coordinates is not None else []


def _formulas(sheet: Sheet) -> dict[str, str]:
    """Return for each drawn coordinate its combination, where it is short enough to read."""
    counts: dict[str, int] = {}
    texts = {}
    for each in sheet.coordinates.combinations:
        if each.component != 1:
            continue
        counts[each.species] = number = counts.get(each.species, 0) + 1
        texts[f"{each.species}:{number}"] = combination_text(each.terms) if len(each.terms) <= 8 else ""
    return texts


def _fallback(sheet: Sheet) -> str:
    names = dict.fromkeys(each["set"] for each in sheet.estimates.fallback)
    return set_html([Paragraph(f"Constants not tabulated, taken from a rule: {', '.join(names)}.")]) if names else ""


def _more(number: int, command: str) -> str:
    return f"<p>{number} more are not drawn here; {command} shows them all.</p>" if number > 0 else ""
