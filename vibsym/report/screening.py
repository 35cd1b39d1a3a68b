"""The page, the rows and the object of a screening (`vibsym screen`): the verdict at a glance, then the proofs."""

from vibsym.evidence.excuses import Excuse
from vibsym.evidence.screening import Candidate, Screening
from vibsym.groups.symbols import typeset
from vibsym.report.document import Listing, Paragraph, Table, Title
from vibsym.report.wording import NOTHING, count_text

BY_SYMMETRY = ("An explanation is one of those that symmetry allows: positions do not count here. Which band is which "
               "mode: vibsym assign.")
MOST_DETAILED = 8    # candidates with all their excuses on the page; JSON and CSV hold them all


def parts(result: Screening, most: int | None = None, **_) -> list:
    """Return the page; at most `most` candidates are ranked on it, and the first few told in detail."""
    page = [Title("Observed bands against structures", result.observed.source), Paragraph(_seen(result)),
            Paragraph(_verdict(result), strong=True), _ranking(result, most)]
    detailed = result.candidates[:min(MOST_DETAILED, len(result.candidates) if most is None else most)]
    for candidate in detailed:
        page += _details(candidate)
    if len(detailed) < len(result.candidates):
        page.append(Paragraph(f"Proofs of the other {len(result.candidates) - len(detailed)}: --format json or csv"))
    if detailed:
        page.append(Paragraph(BY_SYMMETRY))
    if result.separating:
        page.append(Listing(result.separating, "What would separate those that survive, cheapest first"))
    beware = (*result.limits, *result.notes)
    if beware:
        page.append(Listing(beware, "Beware"))
    page.append(Paragraph(result.caution))
    return page


def rows(result: Screening, **_) -> list[dict]:
    """Return one row a candidate."""
    return [{"rank": each.rank, "candidate": each.prediction.name, "point_group": each.prediction.group,
             "verdict": each.verdict, "score": each.score, "excuses": each.weight,
             "unexplained": _weight(each, "unexplained"), "accidental": _weight(each, "accidental"),
             "polarisation": _weight(each, "polarisation"), "leak": _weight(each, "leak"),
             "unseen": len(each.unseen), "oscillators": each.prediction.region,
             **{f"predicted_{name}": number for name, number in each.prediction.counts.items()},
             "proofs": "; ".join(f"{excuse.kind} {lines_text(excuse)}: {excuse.reason}" for excuse in each.excuses)}
            for each in result.candidates]


def as_object(result: Screening, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def lines_text(excuse: Excuse) -> str:
    """Return the lines of an excuse: `IR 2023`, a pair `IR 2023 = Raman 2024`."""
    names = [f"{line.spectrum} {line}" for line in excuse.lines]
    text = names[0]
    for before, line, name in zip(excuse.lines, excuse.lines[1:], names[1:]):
        text += (" = " if (before.spectrum, line.spectrum) == ("IR", "Raman") else ", ") + name
    return text


def _weight(candidate: Candidate, kind: str) -> float:
    return sum(excuse.weight for excuse in candidate.excuses if excuse.kind == kind)


def _seen(result: Screening) -> str:
    numbers = result.bands_object()
    told = [count_text(numbers[key], f"{word} band") for key, word in (("infrared", "infrared"), ("raman", "Raman"))
            if word_spectrum(word) in result.observed.spectra]
    line = ", ".join(told)
    if len(result.observed.spectra) == 2:
        line += (f"; {count_text(numbers['pairs'], 'pair')} within {result.seen.window:g} cm-1 "
                 f"(chance gives {result.seen.chance_mean:.2g} on average)")
    regions = {each.prediction.region for each in result.candidates} - {""}
    if regions:
        line += f"; compared with {', '.join(sorted(regions))}"
    if result.observed.between:
        line += "; between {:g} and {:g} cm-1".format(*result.observed.between)
    return line


def word_spectrum(word: str) -> str:
    """Return the name of a spectrum in band lists."""
    return "IR" if word == "infrared" else word


def _verdict(result: Screening) -> str:
    """Say at a glance what survives."""
    told = []
    for verdict, title in (("fits", "Fits without excuses"), ("strained", "Strained"), ("excluded", "Excluded")):
        names = [each.prediction.name for each in result.candidates if each.verdict == verdict]
        if names:
            more = f" and {len(names) - 8} more" if len(names) > 8 else ""
            told.append(f"{title}: {('; ' if any(',' in each for each in names) else ', ').join(names[:8])}{more}")
    return "\n".join(told)


def _ranking(result: Screening, most: int | None) -> Table:
    ranks = [each.rank for each in result.candidates]
    table = []
    for each in result.candidates[:most]:
        counts = each.prediction.counts
        table.append((f"{each.rank}{'=' if ranks.count(each.rank) > 1 else ''}", each.prediction.name, each.verdict,
                      _groups(each), f"{each.score:.2f}", f"{each.weight:g}", str(len(each.unseen)),
                      f"{counts['infrared']}/{counts['raman']}/{counts['coincident']}"))
    head = ("rank", "structure", "verdict", "group", "score", "excuses", "unseen", "predicted")
    return Table(head, tuple(table), right=frozenset({0, 4, 5, 6, 7}), heading=(
        "Ranked by score (excuses + 1/3 for each unseen band); predicted IR/Raman/both"))


def _groups(candidate: Candidate) -> str:
    parts = candidate.prediction.parts or (candidate.prediction,)
    return " + ".join(typeset(part.group) for part in parts)


def _details(candidate: Candidate) -> list:
    """The excuses with their proofs, the explanation and what was not seen."""
    head = f"{candidate.prediction.name} ({_groups(candidate)}): {candidate.verdict}"
    items = _excuses(candidate)
    items.append("explained: " + (_explained(candidate) or NOTHING))
    if candidate.unseen:
        items.append("predicted and not seen: " + _not_seen(candidate))
    return [Listing(tuple(items), head)]


def _excuses(candidate: Candidate) -> list[str]:
    """Return the excuses, those of one kind and one reason told together: weight, lines, reason."""
    told: dict[tuple[str, str], list[Excuse]] = {}
    for excuse in candidate.excuses:
        told.setdefault((excuse.kind, excuse.reason), []).append(excuse)
    return [f"{kind} {sum(each.weight for each in same):g}: {', '.join(map(lines_text, same))}: {reason}"
            for (kind, reason), same in told.items()]


def _explained(candidate: Candidate) -> str:
    told: dict[str, list[str]] = {}
    for place in candidate.explanation.places:
        lines = " = ".join(f"{band.spectrum} {band}" for band in place.item)
        told.setdefault(place.species.label, []).append(lines)
    return "; ".join(f"{_label(label)} {', '.join(lines)}" for label, lines in told.items())


def _not_seen(candidate: Candidate) -> str:
    told: dict[tuple, int] = {}
    for each in candidate.unseen:
        where = " and ".join(name for name, due in (("IR", each.infrared), ("Raman", each.raman)) if due)
        told[each.species, where] = told.get((each.species, where), 0) + 1
    return ", ".join(f"{number if number > 1 else ''}{_label(species)} ({where})"
                     for (species, where), number in told.items())


def _label(label: str) -> str:
    """Set a species label; in a mixture the structure stands behind it in brackets."""
    species, space, rest = label.partition(" ")
    return typeset(species) + space + rest
