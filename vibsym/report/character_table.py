"""The page, the rows and the object of a character table (`vibsym table`)."""

from vibsym.groups.character_table import CharacterTable
from vibsym.groups.symbols import typeset, typeset_function
from vibsym.report.document import Paragraph, Table, Title
from vibsym.report.wording import NOTHING, functions_text, group_text


def parts(result: CharacterTable, **_) -> list:
    """Return the page: characters with the functions of first and second degree, then activity and cubic functions."""
    group = result.group
    order = "infinite order" if group.infinite else f"order {group.order}"
    title = Title(f"Point group {group_text(group.symbol)}, {order}")
    head = ("", *(typeset(each.symbol).replace("^φ", "ᵠ") for each in group.classes), "linear, rotations", "quadratic")
    rows = tuple((typeset(species.label), *(_minus(text) for text in result.exact[species.label]),
                  functions_text(species.linear + species.rotations, species.degeneracy),
                  functions_text(species.quadratic, species.degeneracy)) for species in group.species)
    right = frozenset(range(1, len(group.classes) + 1))
    page = [title, Table(head, rows, right), _activity(result)]
    return page + [Paragraph(text) for text in _remarks(result)]


def rows(result: CharacterTable, **_) -> list[dict]:
    """Return one CSV row a species; the exact characters stand in columns named by their classes."""
    table = []
    for species in result.group.species:
        row = {"point_group": result.group.symbol, "label": species.label, "degeneracy": species.degeneracy}
        row |= {each.symbol: text for each, text in zip(result.group.classes, result.exact[species.label], strict=True)}
        row |= {name: " ".join(getattr(species, name)) for name in ("linear", "rotations", "quadratic", "cubic")}
        table.append(row | {"infrared": species.infrared, "raman": species.raman, "polarised": species.polarised,
                            "hyper_raman": species.hyper_raman})
    return table


def as_object(result: CharacterTable, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def _activity(result: CharacterTable) -> Table:
    head = ("", "infrared", "Raman", "hyper-Raman", "cubic")
    rows = []
    for species in result.group.species:
        raman = ("polarised" if species.polarised else "depolarised") if species.raman else NOTHING
        rows.append((typeset(species.label), "active" if species.infrared else NOTHING, raman,
                     "active" if species.hyper_raman else NOTHING,
                     ", ".join(typeset_function(each) for each in species.cubic)))
    return Table(head, tuple(rows), heading="Activity of fundamentals, and cubic functions", flow=True)


def _remarks(result: CharacterTable) -> list[str]:
    group = result.group
    remarks = []
    if result.has_pairs:
        pairs = ", ".join(typeset(species.label) for species in group.species if species.pair)
        remarks.append(f"{pairs}: two complex-conjugate species written as one real one (the sum of the pair); Σ g·χ² "
                       "is 2h, and it is one band.")
    if group.infinite:
        remarks.append("φ is any angle of rotation; the species go on without end.")
    if group.centrosymmetric:
        remarks.append("Centre of symmetry: no species is active in both infrared and Raman (mutual exclusion).")
    return remarks


def _minus(text: str) -> str:
    return text.replace("-", "−")
