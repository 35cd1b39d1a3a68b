"""The parts of a page that show Γvib by region, and one set of oscillators with its local symmetry."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Paragraph, Table
from vibsym.report.wording import NOTHING, count_text, gamma_text, group_text, within
from vibsym.spectra.activity import SetBands
from vibsym.spectra.oscillators import LocalSymmetry, Oscillators
from vibsym.spectra.regions import Regions

_HEAD = ("infrared", "Raman", "both", "polarised", "Γ")
_COUNTS = frozenset(range(1, 5))


def region_parts(regions: Regions) -> list:
    """Return the table of regions with what is missing, which sets share a species, and the notes."""
    rows = [_row(region.name, region) for region in regions.rows if region.gamma]
    if regions.missing:
        rows.append(("not described", *([NOTHING] * 4), gamma_text(regions.missing)))
    page = []
    if rows:
        page.append(Table(("region", *_HEAD), tuple(rows), right=_COUNTS, heading="By region", flow=True))
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


def oscillator_parts(found: Oscillators, symbol: str) -> list:
    """Return the oscillators in the group of the molecule (`symbol`) and, beside it, in their own."""
    local = found.local
    columns = [(f"in {typeset(symbol)} (molecule)", found.bands)]
    if local is not None:
        columns.append((f"in {typeset(local.symmetry.group.symbol)} (local)", local.bands))
    rows = tuple(_row(name, bands) for name, bands in columns)
    page = [Table((found.bands.name, *_HEAD), rows, right=_COUNTS, heading="Oscillators", flow=True)]
    page += _local_parts(local) if local is not None else []
    return page + ([Paragraph("\n".join(found.notes))] if found.notes else [])


def _row(name: str, bands: SetBands) -> tuple[str, ...]:
    counts = bands.counts
    numbers = (counts.infrared, counts.raman, counts.coincident, counts.polarised)
    return (name, *map(str, numbers), gamma_text(bands.gamma))


def _local_parts(local: LocalSymmetry) -> list:
    symmetry, reduced = local.symmetry, local.reduced
    labels = local.whole.structure.labels
    kept = " ".join(f"{labels[origin[0]]}{origin[0] + 1}" for origin in reduced.origins if len(origin) == 1)
    points = ["+".join(f"{labels[atom]}{atom + 1}" for atom in origin) for origin in reduced.origins if len(origin) > 1]
    if points:
        kept += "; as one point: " + ", ".join(points)
    if reduced.held:
        kept += "; told apart, bonded to a metal left out: " + " ".join(f"{labels[atom]}{atom + 1}"
                                                                        for atom in reduced.held)
    left = len(labels) - len(reduced.atoms)
    rungs = ", ".join(f"{typeset(rung.symbol)} within {within(rung.deviation)} Å"
                      for rung in local.ladder.rungs)
    facts = (("group", f"{group_text(symmetry.group.symbol)}, deviation {within(symmetry.deviation)} Å, "
                       f"tolerance {symmetry.tolerance:g} Å"),
             ("kept", f"{kept} ({count_text(left, 'atom')} left out)"), ("ladder", rungs))
    leaks = []
    for leak in local.leaks:
        spectra = " and ".join(name for name, lets in (("infrared", leak.infrared), ("Raman", leak.raman)) if lets)
        own, whole = typeset(symmetry.group.symbol), typeset(local.whole.group.symbol)
        leaks.append(f"{typeset(leak.species)} is silent in {spectra} in {own}; the molecule ({whole}) makes it "
                     f"{gamma_text(leak.becomes)} and lets it through, weakly")
    return [Facts(facts, "Local symmetry")] + ([Listing(tuple(leaks), "Leaks")] if leaks else [])
