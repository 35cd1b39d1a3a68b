"""A measured spectrum: wavenumbers, ordinates, what they are, and what was done while reading.

Read from two columns of text (blanks, tabs, commas or semicolons between them; a head line may name them) or from
JCAMP-DX (`vibsym/evidence/jcamp_file.py`).  Wavenumbers rise in the result, whatever the order in the file.
Wavelengths are converted only where the file or the caller states the unit:

    wavenumber / cm-1 = 10^7 / (wavelength / nm) = 10^4 / (wavelength / µm)
    Raman shift / cm-1 = 10^7 / (laser / nm) - 10^7 / (wavelength / nm)

What is not stated (unit, transmittance or absorbance) is taken for the usual and told in a note.
"""

import re
from dataclasses import dataclass

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.spectrum_axes import ORDINATES, UNITS, is_per_cent, ordinate_named, unit_named

FEWEST = 20                   # points; less is a list, not a curve
FEWEST_UNNAMED = 40           # points without a head line; a band list of numbers alone could be shorter
HIGHEST, LOWEST_TOP = 15000.0, 50.0   # cm-1; a spectrum whose end lies outside is no spectrum in cm-1
OPAQUE = 1e-4                 # transmittance; below, absorbance is noise (it is taken as 4)
_LIST_COLUMNS = ("spectrum", "strength", "polarisation", "uncertainty", "together", "note")    # of a band list


@dataclass(frozen=True, eq=False)
class Spectrum:
    """A curve: (n,) rising `wavenumbers` in cm-1 and (n,) `values` of what `ordinate` names (transmittance: 0 to 1)."""

    wavenumbers: np.ndarray
    values: np.ndarray
    ordinate: str
    spectrum: str             # "IR" or "Raman"
    source: str = ""
    title: str = ""
    notes: tuple[str, ...] = ()

    def signal(self) -> np.ndarray:
        """Return (n,) what rises at a band: absorbance A = -log10 T, or the intensity as it is."""
        if self.ordinate != "transmittance":
            return self.values
        return -np.log10(np.clip(self.values, OPAQUE, None))

    def to_dict(self) -> dict:
        """Return what is known about the curve for JSON, without its points."""
        return {"source": self.source, "title": self.title, "spectrum": self.spectrum, "ordinate": self.ordinate,
                "points": len(self.values), "from": float(self.wavenumbers[0]), "to": float(self.wavenumbers[-1]),
                "notes": list(self.notes)}


def read_spectrum(path: str, spectrum: str, *, unit: str | None = None, ordinate: str | None = None,
                  laser: float | None = None, block: int | None = None) -> Spectrum:
    """Return the measured spectrum in a file; `-` is standard input."""
    from vibsym.files import display_name, read_text

    return parse_spectrum(read_text(path), display_name(path), spectrum, unit=unit, ordinate=ordinate, laser=laser,
                          block=block)


def parse_spectrum(text: str, source: str, spectrum: str, *, unit: str | None = None, ordinate: str | None = None,
                   laser: float | None = None, block: int | None = None) -> Spectrum:
    """Return the spectrum written in a text; `unit` and `ordinate` overrule what the text says of itself.

    >>> rows = "\\n".join(f"{x},{0.1 + (x == 1700)}" for x in range(1600, 1800, 2))
    >>> parse_spectrum("wavenumber,absorbance\\n" + rows, "ketone.csv", "IR").ordinate
    'absorbance'
    """
    if is_jcamp(text):
        from vibsym.evidence.jcamp_file import read_jcamp

        x, y, own_unit, own_ordinate, percent, title, notes = read_jcamp(text, source, block)
    else:
        if block not in (None, 1):
            raise VibsymError(f"{source}: --block {block}: a file of two columns holds one spectrum")
        x, y, own_unit, own_ordinate, percent, notes = _two_columns(text, source)
        title = ""
    notes = list(notes)
    x, y = _finite(x, y, source, notes)
    unit = _chosen("unit", unit, own_unit, UNITS, source)
    x = _in_wavenumbers(x, unit, spectrum, laser, source, notes)
    x, y = _ascending(x, y, source, notes)
    ordinate = _chosen("ordinate", ordinate, own_ordinate, ORDINATES, source)
    ordinate = ordinate or _likely(y, spectrum, source, notes)
    if ordinate == "transmittance":
        y = _fraction(y, percent, source, notes)
    return Spectrum(x, y, ordinate, spectrum, source, title, tuple(notes))


def is_jcamp(text: str) -> bool:
    """Tell whether a text is JCAMP-DX: its first line that is not empty or a comment begins with `##`."""
    for line in text.lstrip("\ufeff").splitlines():
        if line.strip() and not line.startswith("$$"):
            return line.startswith("##")
    return False


def is_spectrum(text: str) -> bool:
    """Tell a measured spectrum from a band list: JCAMP-DX, a head line that names an ordinate, or many bare points."""
    if is_jcamp(text):
        return True
    head, rows = _rows(text, FEWEST_UNNAMED)
    if head is not None and len(head) >= 2 and ordinate_named(" ".join(head)) is not None:
        return True
    listed = head is not None and any(cell.lower() in _LIST_COLUMNS for cell in head[1:])
    return len(rows) >= FEWEST_UNNAMED and not listed


def _rows(text: str, most: int | None = None) -> tuple[list[str] | None, list[tuple[int, list[str]]]]:
    """Return the head line (the last one before the numbers begin) and the rows with their line numbers."""
    head, rows = None, []
    for number, line in enumerate(text.lstrip("\ufeff").splitlines(), 1):
        bare = line.strip().replace('"', "")             # some instruments quote every cell
        if not bare or bare.startswith(("#", "%", "//")):
            continue
        cells = _cells(bare)
        if not rows and not _numeric(cells[0]):
            head = [cell.strip() for cell in re.split(r"[\t;,]" if re.search(r"[\t;,]", bare) else r"\s{1,}", bare)]
            continue
        rows.append((number, cells))
        if most is not None and len(rows) >= most:
            break
    if most is not None and any(len(cells) < 2 or not _numeric(cells[1]) for _, cells in rows):
        return head, []
    return head, rows


def _cells(line: str) -> list[str]:
    """Return the cells of a row; a decimal comma is read between blanks, tabs or semicolons."""
    if ";" in line or "\t" in line or ("," in line and re.fullmatch(r"\s*[-+\d,.eE]+\s+[-+\d,.eE]+\s*", line)
                                       and line.count(",") == 2 and not re.search(r",\s", line)):
        return [cell.replace(",", ".") for cell in re.split(r"\s*;\s*|\s+", line.strip()) if cell]
    return [cell for cell in re.split(r"\s*,\s*|\s+", line.strip()) if cell] or [""]


def _numeric(text: str) -> bool:
    try:
        float(text)
    except ValueError:
        return False
    return True


def _two_columns(text: str, source: str):
    head, rows = _rows(text)
    if len(rows) < FEWEST:
        raise VibsymError(f"{source}: {len(rows)} points; a measured spectrum has two columns and at least {FEWEST} "
                          "rows")
    wrong = [(number, cells) for number, cells in rows
             if len(cells) < 2 or not _numeric(cells[0]) or not (_numeric(cells[1]) or cells[1] == "?")]
    if wrong:
        number, cells = wrong[0]
        more = f" (and {len(wrong) - 1} more such lines)" if len(wrong) > 1 else ""
        raise VibsymError(f"{source}, line {number}: '{' '.join(cells)[:40]}' is not a wavenumber and an "
                          f"ordinate{more}; keep two columns of numbers")
    widths = {len(cells) for _, cells in rows}
    if widths == {4} and not any("." in cell for _, cells in rows for cell in cells):
        raise VibsymError(f"{source}, line {rows[0][0]}: commas both between the columns and in the numbers; write "
                          "decimal points, or semicolons between the columns")
    notes = []
    if max(widths) > 2:
        notes.append(f"{source}: {max(widths)} columns; the first two were taken")
    x = np.array([float(cells[0]) for _, cells in rows])
    y = np.array([float(cells[1]) if cells[1] != "?" else np.nan for _, cells in rows])
    first, second = ((head[0], " ".join(head[1:2])) if head else ("", ""))
    return x, y, unit_named(first), ordinate_named(second), is_per_cent(second), notes


def _chosen(name: str, given: str | None, own: str | None, known: tuple[str, ...], source: str) -> str | None:
    given = {"um": "µm", "μm": "µm"}.get(given or "", given)
    if given is not None and given not in known:
        raise VibsymError(f"--{name} {given}: it is {', '.join(known[:-1])} or {known[-1]}")
    if given and own and given != own and name == "unit":
        raise VibsymError(f"--unit {given}: {source} states {own}; leave the option out or correct the file")
    return given or own


def _finite(x: np.ndarray, y: np.ndarray, source: str, notes: list[str]) -> tuple[np.ndarray, np.ndarray]:
    good = np.isfinite(x) & np.isfinite(y)
    bad = int((~good).sum())
    if bad > 0.2 * len(x):
        raise VibsymError(f"{source}: {bad} of {len(x)} points are not numbers; export the spectrum again")
    if bad:
        where = ", ".join(f"{value:g}" for value in x[~good][:4]) + (" ..." if bad > 4 else "")
        notes.append(f"{source}: {bad} point{'s' if bad > 1 else ''} without a finite value left out (at {where})")
    return x[good], y[good]


def _in_wavenumbers(x, unit: str | None, spectrum: str, laser: float | None, source: str, notes: list[str]):
    if laser is not None and (spectrum != "Raman" or unit not in ("nm", "µm")):
        raise VibsymError("--laser is for Raman spectra whose abscissa is a wavelength (--unit nm)")
    if unit in ("nm", "µm"):
        if (x <= 0).any():
            raise VibsymError(f"{source}: a wavelength is not above zero; correct the file")
        scale = 1e7 if unit == "nm" else 1e4
        if spectrum == "Raman":
            if laser is None:
                raise VibsymError(f"{source}: Raman over wavelengths in {unit}: give the laser line, --laser NM")
            notes.append(f"{source}: {unit} converted to shifts from the laser line at {laser:g} nm")
            return 1e7 / laser - scale / x
        notes.append(f"{source}: wavelengths in {unit} converted to cm-1")
        return scale / x
    if unit is None:
        top = float(x.max())
        if not LOWEST_TOP < top <= HIGHEST:
            raise VibsymError(f"{source}: no unit stated and the values end at {top:g}: give --unit nm or --unit um, "
                              "or name the columns in a head line")
        notes.append(f"{source}: no unit stated, taken as cm-1")
    return x


def _ascending(x: np.ndarray, y: np.ndarray, source: str, notes: list[str]) -> tuple[np.ndarray, np.ndarray]:
    order = np.argsort(x, kind="stable")
    falling = bool((np.diff(x) < 0).any())
    if falling and (np.diff(x) > 0).any():
        notes.append(f"{source}: the points were not in order and were sorted")
    x, y = x[order], y[order]
    twice = np.flatnonzero(np.diff(x) == 0)
    if len(twice):
        notes.append(f"{source}: {len(twice)} points stand twice (first at {x[twice[0]]:g} cm-1); their mean was taken")
        places, where = np.unique(x, return_inverse=True)
        x, y = places, np.bincount(where, y) / np.bincount(where)
    if len(x) < FEWEST:
        raise VibsymError(f"{source}: {len(x)} points; a measured spectrum has at least {FEWEST}")
    return x, y


def _likely(y: np.ndarray, spectrum: str, source: str, notes: list[str]) -> str:
    """Return what the ordinate is likely to be: bands point away from where most points lie."""
    if spectrum == "Raman":
        return "intensity"
    low, middle, high = np.min(y), np.median(y), np.max(y)
    kind = "absorbance" if high - middle >= middle - low else "transmittance"
    notes.append(f"{source}: not stated whether absorbance or transmittance; its bands point "
                 f"{'up' if kind == 'absorbance' else 'down'}, so {kind} was taken (--ordinate)")
    return kind


def _fraction(y: np.ndarray, percent: bool, source: str, notes: list[str]) -> np.ndarray:
    top = float(np.quantile(y, 0.9))
    if percent or top > 3:
        y = y / 100
        notes.append(f"{source}: transmittance in per cent")
    if float(np.quantile(y, 0.9)) > 3 or float(np.quantile(y, 0.1)) < -0.5:
        raise VibsymError(f"{source}: ordinates from {y.min():g} to {y.max():g} are no transmittance; "
                          "state it with --ordinate")
    return y
