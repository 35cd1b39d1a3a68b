"""The page, the rows and the object of the peaks of a measured spectrum (`vibsym peaks`); as CSV a band list."""

from vibsym.evidence.peaks import STRENGTHS, Peaks, band_rows
from vibsym.report.document import Listing, Paragraph, Table, Title
from vibsym.report.wording import count_text


def parts(result: Peaks, **_) -> list:
    """Return the page: how the peaks were picked, the peaks, what to beware of."""
    spectrum = result.spectrum
    title = Title(f"Peaks of {spectrum.title or spectrum.source or 'a spectrum'}",
                  f"{spectrum.spectrum}, {count_text(len(spectrum.values), 'point')}, "
                  f"{spectrum.wavenumbers[0]:g} to {spectrum.wavenumbers[-1]:g} cm-1")
    rows = tuple((f"{peak.wavenumber:.2f}", peak.strength, f"{peak.height:.4g}", f"{peak.prominence:.4g}")
                 for peak in result.peaks)
    table = Table(("cm-1", "strength", "height", "prominence"), rows, frozenset({0, 2, 3}))
    picked = Paragraph(f"{count_text(len(result.peaks), 'peak')}: {result.statement}.", strong=True)
    scale = ", ".join(f"{name} from {least:g}" for least, name in STRENGTHS[:-1])
    beware = (f"Strengths are heights above the baseline over the highest: {scale}, {STRENGTHS[-1][1]} below.",
              "Shoulders without a maximum of their own are not picked: look at the curve and add them.", *result.notes)
    return [title, picked, *([table] if rows else []), Listing(beware, "Beware")]


def rows(result: Peaks, **_) -> list[dict]:
    """Return the rows of the band list."""
    return band_rows(result)


def head(result: Peaks, **_) -> list[str]:
    """Return the comment lines above the band list: how it was made."""
    return [f"peaks of {result.spectrum.source}", result.statement, *result.notes]


def as_object(result: Peaks, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()
