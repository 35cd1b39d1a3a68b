"""The parts of a page that show Γvib by region."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Listing, Paragraph, Table
from vibsym.report.wording import NOTHING, gamma_text
from vibsym.spectra.activity import SetBands
from vibsym.spectra.regions import Regions

BAND_HEAD = ("infrared", "Raman", "both", "polarised", "Γ")
BAND_COUNTS = frozenset(range(1, 5))


def region_parts(regions: Regions) -> list:
    """Return the table of regions with what is missing, which sets share a species, and the notes."""
    rows = [band_row(region.name, region) for region in regions.rows if region.gamma]
    if regions.missing:
        rows.append(("not described", *([NOTHING] * 4), gamma_text(regions.missing)))
    page = []
    if rows:
        page.append(Table(("region", *BAND_HEAD), tuple(rows), right=BAND_COUNTS, heading="By region", flow=True))
    empty = [region.name for region in regions.rows if not region.gamma]
    sharing: dict[tuple, list] = {}
    for label, names in regions.shared.items() if regions.symmetry.group.order != 1 else ():
        sharing.setdefault(names, []).append(typeset(label))
    lines = [f"{', '.join(labels)}: {', '.join(names)}" for names, labels in sharing.items()]
    if lines:
        page.append(Listing(tuple(lines), "Modes of one species mix the sets that share it"))
    notes = list(regions.remarks(typeset))
    if empty:
        notes.insert(0, f"Redundant with the sets above: {', '.join(empty)}.")
    return page + ([Paragraph("\n".join(notes))] if notes else [])


def band_row(name: str, bands: SetBands) -> tuple[str, ...]:
    """Return the row of one set: its counts and its representation, under `BAND_HEAD`."""
    counts = bands.counts
    numbers = (counts.infrared, counts.raman, counts.coincident, counts.polarised)
    return (name, *map(str, numbers), gamma_text(bands.gamma))
