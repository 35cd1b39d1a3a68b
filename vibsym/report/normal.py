"""The page, the rows and the object of normal modes (`vibsym normal`)."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Listing, Paragraph, Table
from vibsym.report.wording import NOTHING, about_structure, found_within, group_text
from vibsym.vibrations.estimates import describe
from vibsym.vibrations.hessian import DOUBTFUL


def parts(result, **_) -> list:
    """Return the page."""
    symmetry = result.symmetry
    imported = result.field is None
    origin = "imported Hessian" if imported else "valence force field, fitted to observed fundamentals"
    page = [about_structure(symmetry.structure),
            Paragraph(f"Point group {group_text(symmetry.group.symbol)}, {found_within(symmetry)}\n"
                      f"Normal modes: {origin}")]
    rows = tuple(_row(mode, imported) for mode in result.modes)
    if rows:
        head = ("mode", "species", "cm-1", "infrared", "Raman", "weight" if imported else "energy distribution")
        page.append(Table(head, rows, right=frozenset({2}), flow=True))
    else:
        page.append(Paragraph("One atom: it has no vibrations.", strong=True))
    if result.refinement is not None:
        page += _refinement(result.refinement)
    if result.notes:
        page.append(Listing(result.notes, "Beware"))
    return page


def _row(mode, imported: bool) -> tuple[str, ...]:
    told = f"{mode.weight:.3f}{' doubtful' if mode.weight < DOUBTFUL else ''}" if imported else describe(mode)
    return (typeset(mode.name), typeset(mode.species), f"{mode.wavenumber:.1f}", "active" if mode.infrared else NOTHING,
            ("polarised" if mode.polarised else "depolarised") if mode.raman else NOTHING,
            f"{told} {'imaginary' if mode.imaginary else ''}".strip())


def _refinement(found) -> list:
    scales = tuple((name.replace("-", "–"), f"{value:.3f}") for name, value in found.scales.items())
    lines = tuple((row.structure, row.mode, typeset(row.species), f"{row.observed:.1f}", f"{row.before:.1f}",
                   f"{row.after:.1f}", f"{round(row.observed - row.after, 1) + 0.0:+.1f}".replace("-", "−"))
                  for row in found.residuals)
    head = ("structure", "mode", "species", "observed", "before", "refined", "left")
    return [Table(("set", "scale of the constant"), scales, right=frozenset({1}), heading="Refined constants"),
            Table(head, lines, right=frozenset({3, 4, 5, 6}), heading="Residuals (cm-1)")]


def rows(result, **_) -> list[dict]:
    """Return the CSV rows, one a mode."""
    return [{"source": result.symmetry.structure.source, "mode": mode.name, "species": mode.species,
             "degeneracy": mode.degeneracy, "wavenumber": round(mode.wavenumber, 3), "imaginary": mode.imaginary,
             "infrared": mode.infrared, "raman": mode.raman, "weight": round(float(mode.weight), 4),
             "description": describe(mode)} for mode in result.modes]


def as_object(result, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()
