"""The page, the row and the object of what to expect (`vibsym expect`).

Counts first, then the species with their activity, then how the axes lie and what to beware of.
"""

import re

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Paragraph, Table
from vibsym.report.wording import (
    NOTHING,
    about_structure,
    axes_facts,
    count_text,
    found_within,
    functions_text,
    gamma_plain,
    gamma_text,
    group_text,
    within,
)
from vibsym.spectra.expectation import Expectation

# Depolarisation ratio of a Raman line that is not totally symmetric, by the light used.
RATIO = {"plane": ("3/4", "plane-polarised light"), "natural": ("6/7", "natural light")}
CUBIC = ("T", "Td", "Th", "O", "Oh", "I", "Ih")


def parts(result: Expectation, working: bool = False, light: str = "plane", strip: bool = False, **_) -> list:
    """Return the page."""
    page = [about_structure(result.structure), Paragraph(_group_line(result))]
    if len(result.structure) == 1:
        page += [Paragraph(result.notes[0], strong=True), *_representations(result)]
        return [*page, *_working(result, working), *_beware(result.notes[1:])]
    page.append(Paragraph(_counts(result), strong=True))
    page += [_species_table(result), Paragraph(_ratio_line(result, light))]
    if strip:
        from vibsym.report.strip import region_strip

        page += region_strip(result)
    page += [*_oscillators(result), *_regions(result), *_representations(result)]
    if result.gas is not None:
        from vibsym.report.contours import gas_parts

        page += gas_parts(result.gas)
    page += _working(result, working)
    return [*page, *axes_facts(result.axes), *_beware(result.notes), *_next_rung(result)]


def rows(result: Expectation, **_) -> list[dict]:
    """Return the CSV row: Γ as text, counts as columns."""
    symmetry, group = result.symmetry, result.symmetry.group
    row = {"source": result.structure.source, "formula": result.structure.formula,
           "atoms": len(result.structure), "point_group": group.symbol, "order": group.order,
           "tolerance": symmetry.tolerance, "deviation": round(float(symmetry.deviation), 5), "chiral": group.chiral,
           "centrosymmetric": group.centrosymmetric}
    if result.found is not None:
        row["found"] = result.found.group.symbol
    gammas = {"gamma_3n": result.gamma_3n, "gamma_translation": result.gamma_translation,
              "gamma_rotation": result.gamma_rotation, "gamma_vib": result.gamma_vib}
    row |= {name: gamma_plain(gamma) for name, gamma in gammas.items()}
    row |= result.counts.to_dict()
    row |= _oscillator_columns(result)
    if result.gas is not None:
        from vibsym.report.contours import gas_columns

        row |= gas_columns(result.gas)
    row |= {f"axis_{name}": result.axes.words.get(name, "") for name in "xyz"}
    return [row | {"exchange": "; ".join(result.axes.exchange)}]


def as_object(result: Expectation, working: bool = False, **_) -> dict:
    """Return the JSON object; `--working` adds the table of the count."""
    answer = result.to_dict()
    if working:
        from vibsym.vibrations.working import working as written_out

        answer["working"] = written_out(result.displacements).to_dict()
    return answer


def _oscillator_columns(result: Expectation) -> dict:
    found = result.oscillators
    if found is None:
        return {}
    columns = {"oscillators": found.bands.name, "oscillator_gamma": gamma_plain(found.bands.gamma),
               "oscillator_infrared": found.bands.counts.infrared, "oscillator_raman": found.bands.counts.raman}
    if found.local is not None:
        bands = found.local.bands
        columns |= {"local_group": found.local.symmetry.group.symbol, "local_gamma": gamma_plain(bands.gamma),
                    "local_infrared": bands.counts.infrared, "local_raman": bands.counts.raman}
    return columns


def _group_line(result: Expectation) -> str:
    group = result.symmetry.group
    order = "infinite order" if group.infinite else f"order {group.order}"
    line = f"Point group {group_text(group.symbol)}, {order}, {found_within(result.symmetry)}"
    if result.found is not None:
        line += (f"\nAnalysed in this group of the ladder; the structure itself has "
                 f"{group_text(result.found.group.symbol)}, {found_within(result.found)}")
    return line


def _counts(result: Expectation) -> str:
    counts = result.counts
    return (f"{count_text(result.vibrations, 'vibration')} in {count_text(counts.fundamentals, 'fundamental')}\n"
            f"Infrared at most {counts.infrared}, Raman at most {counts.raman} ({counts.polarised} polarised), "
            f"in both {counts.coincident}, silent {counts.silent}")


def _species_table(result: Expectation) -> Table:
    table = []
    for species, modes in result.species:
        if modes:
            polarised = "polarised" if species.totally_symmetric else "depolarised"
            functions = [functions_text(each, species.degeneracy) for each in (species.linear, species.quadratic)]
            table.append((typeset(species.label), str(modes), "active" if species.infrared else NOTHING,
                          polarised if species.raman else NOTHING, "active" if species.hyper_raman else NOTHING,
                          "; ".join(filter(None, functions))))
    head = ("species", "modes", "infrared", "Raman", "hyper-Raman", "transforms like")
    return Table(head, tuple(table), right=frozenset({1}), flow=True)


def _ratio_line(result: Expectation, light: str) -> str:
    limit, name = RATIO[light]
    polarised = "ρ = 0" if result.symmetry.group.symbol in CUBIC else f"ρ below {limit}"
    others = [typeset(species.label) for species, modes in result.species if not modes]
    line = f"A degenerate set is one band. Polarised: {polarised}, depolarised: ρ = {limit} ({name})."
    return line + (f"\nNo vibrations in {', '.join(others)}." if others else "")


def _representations(result: Expectation) -> list:
    return [Facts((("Γ3N", gamma_text(result.gamma_3n)), ("Γtranslation", gamma_text(result.gamma_translation)),
                   ("Γrotation", gamma_text(result.gamma_rotation)), ("Γvib", gamma_text(result.gamma_vib))),
                  "Representations")]


def _working(result: Expectation, wanted: bool) -> list:
    if not wanted:
        return []
    from vibsym.report.working import working_parts

    return working_parts(result.displacements)


def _regions(result: Expectation) -> list:
    from vibsym.report.regions import region_parts

    return region_parts(result.regions)


def _oscillators(result: Expectation) -> list:
    if result.oscillators is None:
        return []
    from vibsym.report.oscillators import oscillator_parts

    return oscillator_parts(result.oscillators, result.symmetry.group.symbol)


def _beware(notes) -> list:
    """The notes, with primed species set as on the rest of the page; B1 and the like could be atoms and stay."""
    primed = re.compile(r"(?<![A-Za-z])[AE]\d?'{1,2}(?![A-Za-z])")
    notes = tuple(primed.sub(lambda label: typeset(label[0]), note) for note in notes)
    return [Listing(notes, "Beware")] if notes else []


def _next_rung(result: Expectation) -> list:
    """One line on the ladder: the rung above, and the suggested one where it is another."""
    ladder = result.ladder
    if result.found is not None or ladder.next is None:
        return []
    line = f"Next rung: {_reached(ladder.next)}"
    if ladder.suggested > 1:
        line += f"; suggested: {_reached(ladder.rungs[ladder.suggested])}"
    return [Paragraph(line + " (vibsym group)")]


def _reached(rung) -> str:
    return f"{typeset(rung.symbol)} within {within(rung.deviation)} Å"
