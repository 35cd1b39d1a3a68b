"""The page, the rows and the object of symmetry coordinates (`vibsym coordinates`).

Each set with its coordinates, its reduction and its combinations; then what is redundant and why, and what is missing.
"""

from vibsym.groups.symbols import typeset
from vibsym.report.combination import combination_text
from vibsym.report.document import Facts, Listing, Paragraph
from vibsym.report.wording import about_structure, count_text, found_within, gamma_text, group_text
from vibsym.vibrations.symmetry_coordinates import SymmetryCoordinates

LISTED = 24                   # coordinates of a set that are listed atom by atom


def parts(result: SymmetryCoordinates, **_) -> list:
    """Return the page."""
    symmetry = result.symmetry
    page = [about_structure(symmetry.structure),
            Paragraph(f"Point group {group_text(symmetry.group.symbol)}, {found_within(symmetry)}")]
    if not result.sets:
        return [*page, Paragraph("No bonds, so there are no internal coordinates (--bond makes bonds).", strong=True)]
    page.append(Paragraph(_summary(result), strong=True))
    for each, gamma, orbits in zip(result.sets, result.independence.gammas, result.orbits, strict=True):
        page += _set(result, each, gamma, orbits)
    return [*page, *_redundancies(result), *_remarks(result)]


def rows(result: SymmetryCoordinates, **_) -> list[dict]:
    """Return one CSV row a term."""
    structure, symbol = result.symmetry.structure, result.symmetry.group.symbol
    atoms = {one.id: "-".join(str(atom + 1) for atom in one.atoms) for each in result.sets for one in each.coordinates}
    return [{"source": structure.source, "formula": structure.formula, "point_group": symbol, "set": each.set,
             "species": each.species, "component": each.component, "copy": each.copy, "coordinate": term.coordinate,
             "atoms": atoms[term.coordinate], "exact": str(term.exact), "value": repr(term.value)}
            for each in result.combinations for term in each.terms]


def as_object(result: SymmetryCoordinates, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def _summary(result: SymmetryCoordinates) -> str:
    found = result.independence
    number = sum(len(each) * each.components for each in result.sets)
    text = f"{count_text(number, 'internal coordinate')}: "
    text += f"redundant {gamma_text(found.redundancies)}; " if found.redundancies else "none redundant; "
    if found.complete:
        return text + f"complete, they span Γvib = {gamma_text(found.gamma_vib)}"
    return text + f"they lack {gamma_text(found.missing)} of Γvib = {gamma_text(found.gamma_vib)}"


def _set(result: SymmetryCoordinates, each, gamma, orbits) -> list:
    labels = result.symmetry.structure.labels
    shown = each.coordinates[:LISTED]
    names = ", ".join(f"{one.id} {'-'.join(f'{labels[atom]}{atom + 1}' for atom in one.atoms)}" for one in shown)
    more = len(each.coordinates) - len(shown)
    facts = [("Γ", gamma_text(gamma)), ("coordinates", names + (f" and {more} more" if more else ""))]
    if len(orbits) > 1:
        facts.append(("orbits", "; ".join(_span(orbit) for orbit in orbits)))
    lines = []
    for one in result.combinations:
        if one.set == each.name:
            lines.append((_label(result, one), combination_text(one.terms)))
    return [Facts(tuple(facts), each.name), Facts(tuple(lines))]


def _span(orbit) -> str:
    return " ".join(orbit) if len(orbit) <= 12 else f"{orbit[0]} ... {orbit[-1]} ({len(orbit)})"


def _label(result: SymmetryCoordinates, one) -> str:
    species = result.symmetry.group.species_named(one.species)
    component = f" {'abcdefghi'[one.component - 1]}" if species.degeneracy > 1 else ""
    copies = result.independence.gammas[[each.name for each in result.sets].index(one.set)].get(one.species, 1)
    return typeset(one.species) + component + (f" ({one.copy})" if copies > 1 else "")


def _redundancies(result: SymmetryCoordinates) -> list:
    if not result.relations:
        return []
    reasons: dict[str, dict[str, int]] = {}
    for relation in result.relations:
        counts = reasons.setdefault(relation.reason, {})
        counts[relation.species] = counts.get(relation.species, 0) + 1
    lines = tuple(f"{gamma_text(counts)}: {reason}" for reason, counts in reasons.items())
    return [Listing(lines, "Redundant combinations, and why")]


def _remarks(result: SymmetryCoordinates) -> list:
    remarks = []
    pairs = [species.label for species in result.symmetry.group.species if species.pair
             and any(gamma.get(species.label) for gamma in result.independence.gammas)]
    if pairs:
        names = ", ".join(map(typeset, pairs))
        remarks.append(f"{names}: two complex-conjugate species taken as one; its components a and b are coupled "
                       "in G and F ([[A, −B], [B, A]]) and count as one band.")
    if any(each.kind == "linear bend" for each in result.sets):
        remarks.append("A linear bend has two components (a, b) across its axis; JSON gives their directions.")
    return [Listing(tuple(remarks), "Beware")] if remarks else []
