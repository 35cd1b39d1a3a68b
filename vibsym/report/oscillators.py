"""The parts of a page that show one set of oscillators, and its local symmetry with what leaks."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Paragraph, Table
from vibsym.report.regions import BAND_COUNTS, BAND_HEAD, band_row
from vibsym.report.wording import count_text, gamma_text, group_text, within
from vibsym.spectra.oscillators import LocalSymmetry, Oscillators


def oscillator_parts(found: Oscillators, symbol: str) -> list:
    """Return the oscillators in the group of the molecule (`symbol`) and, beside it, in their own."""
    local = found.local
    columns = [(f"in {typeset(symbol)} (molecule)", found.bands)]
    if local is not None:
        columns.append((f"in {typeset(local.symmetry.group.symbol)} (local)", local.bands))
    rows = tuple(band_row(name, bands) for name, bands in columns)
    page = [Table((found.bands.name, *BAND_HEAD), rows, right=BAND_COUNTS, heading="Oscillators", flow=True)]
    page += _local_parts(local) if local is not None else []
    return page + ([Paragraph("\n".join(found.notes))] if found.notes else [])


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
