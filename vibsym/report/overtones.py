"""The page, the rows and the object of overtones and combinations (`vibsym combine`)."""

from vibsym.evidence.leftovers import Candidate, Combined
from vibsym.groups.symbols import typeset
from vibsym.report.document import Listing, Paragraph, Table, Title
from vibsym.report.wording import NOTHING, about_structure, gamma_plain, gamma_text, group_text

POPULATED = 0.001                  # hot bands from levels with fewer molecules are left to JSON
NAMED = 6                          # more hot bands of one lower level are only counted


def parts(result: Combined, **_) -> list:
    """Return the page: the modes, what can be seen, Fermi pairs, hot bands, and the lines that were to be explained."""
    found = result.result
    head = Title(f"Point group {group_text(found.group.symbol)}") if result.symmetry is None else about_structure(
        result.symmetry.structure)
    page = [head]
    if result.symmetry is not None:
        page.append(Paragraph(f"Point group {group_text(found.group.symbol)}"))
    page.append(_modes(result))
    silent = [each for each in found.combinations if not (each.infrared or each.raman)]
    number = len(found.combinations)
    kinds = "overtone, sum or difference" if number == 1 else "overtones, sums and differences"
    page.append(Paragraph(f"{number} {kinds} up to {found.quanta} quanta", strong=True))
    for title, differences in (("Overtones and sums", False), ("Differences", True)):
        rows = [each for each in found.combinations
                if each.is_difference == differences and (each.infrared or each.raman)]
        if rows:
            page.append(_combinations(rows, f"{title} (harmonic positions, cm-1)", differences, found.temperature))
    if silent:
        more = f" and {len(silent) - 40} more" if len(silent) > 40 else ""
        page.append(Paragraph("Neither infrared nor Raman active: "
                              + ", ".join(_text(each.label) for each in silent[:40]) + more))
    return [*page, *_fermi(result), *_hot(result), *_lines(result)]


def rows(result: Combined, **_) -> list[dict]:
    """Return one CSV row a combination."""
    return [{"label": each.label, "species": gamma_plain(each.species), "infrared": each.infrared, "raman": each.raman,
             "wavenumber": None if each.wavenumber is None else round(each.wavenumber, 4), "quanta": each.order,
             "difference": each.is_difference, "fraction": each.fraction,
             "fermi": "; ".join(f"{pair.fundamental} {pair.distance:+.1f}" for pair in each.fermi)}
            for each in result.result.combinations]


def as_object(result: Combined, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def _modes(result: Combined) -> Table:
    rows = []
    for mode in result.result.modes:
        species = result.result.group.species_named(mode.species)
        rows.append((typeset(mode.name), typeset(mode.species), _number(mode.wavenumber), _active(species)))
    return Table(("mode", "species", "cm-1", "active"), tuple(rows), right=frozenset({2}), heading="Fundamentals")


def _combinations(found, heading: str, differences: bool, temperature: float) -> Table:
    head = ("", "cm-1", "species", "active", f"lower level at {temperature:g} K" if differences else "Fermi partner")
    rows = []
    for each in found:
        last = _share(each.fraction) if differences else ", ".join(_text(pair.fundamental) for pair in each.fermi)
        rows.append((_text(each.label), _number(each.wavenumber), gamma_text(each.species), _active(each), last))
    return Table(head, tuple(rows), right=frozenset({1}), heading=heading)


def _fermi(result: Combined) -> list:
    items = []
    for pair in result.result.fermi:
        line = (f"{_text(pair.fundamental)} and {_text(pair.combination)}, {abs(pair.distance):.0f} cm-1 apart, "
                f"common species {', '.join(typeset(each) for each in pair.species)}")
        if pair.doublet:
            line += (f": lines {pair.doublet.upper:g} and {pair.doublet.lower:g}, undisturbed fundamental "
                     f"{pair.doublet.fundamental:.1f}, undisturbed {_text(pair.combination)} "
                     f"{pair.doublet.partner:.1f}, W = {pair.doublet.interaction:.1f} cm-1 "
                     "(two levels, all intensity from the fundamental; Langseth & Lord 1938, Herzberg 1945)")
        items.append(line)
    heading = f"Possible Fermi resonance (within {result.result.resonance:g} cm-1)"
    return [Listing(tuple(items), heading)] if items else []


def _hot(result: Combined) -> list:
    levels: dict[str, list] = {}
    for band in result.result.hot_bands:
        if band.fraction >= POPULATED and (band.infrared or band.raman):
            levels.setdefault(band.lower, []).append(band)
    items = tuple(f"from {_text(lower)} ({_share(bands[0].fraction)} of the molecules): {_near(bands)}"
                  for lower, bands in levels.items())
    return [Listing(items, f"Hot bands at {result.result.temperature:g} K")] if items else []


def _near(bands) -> str:
    """Hot bands of one lower level; where there are many, in one sentence (JSON has them all)."""
    if len(bands) > NAMED:
        return f"near each of {len(bands)} fundamentals"
    return ", ".join(f"{_text(band.label)} near {_number(band.wavenumber)}" for band in bands)


def _lines(result: Combined) -> list:
    rows = []
    for each in result.explanations:
        first = f"{each.line.spectrum} {each.line}"
        if each.fundamental:
            rows.append((first, f"fundamental {_text(each.fundamental)}", "", ""))
        elif not each.candidates and each.nearest is None:
            rows.append((first, "nothing within reach", "", ""))
        elif not each.candidates:
            rows.append((first, *_explained(each.nearest, "beyond --match: ")))
        for candidate in each.candidates:
            rows.append((first, *_explained(candidate)))
            first = ""
    head = ("line", "explained by", "shift", "species")
    return [Table(head, tuple(rows), right=frozenset({2}), heading="Lines to explain")] if rows else []


def _explained(candidate: Candidate, before: str = "") -> tuple[str, str, str]:
    """Return the combination, how far the line lies from it, and its species."""
    return (before + _text(candidate.combination.label), f"{candidate.shift:+.1f}".replace("-", "−"),
            gamma_text(candidate.combination.species))


def _active(species) -> str:
    names = [name for name, yes in (("infrared", species.infrared), ("Raman", species.raman)) if yes]
    return ", ".join(names) or NOTHING


def _text(label: str) -> str:
    """A label as printed; modes named by species (`T2(1)`) get their subscripts."""
    return typeset(label).replace(" - ", " − ")


def _number(value: float | None) -> str:
    return NOTHING if value is None else f"{value:.1f}".removesuffix(".0")


def _share(fraction: float | None) -> str:
    return NOTHING if fraction is None else f"{100 * fraction:.3g} %" if fraction >= 1e-4 else f"{100 * fraction:.1e} %"
