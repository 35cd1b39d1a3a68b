"""Read a list of observed bands: a CSV file with one row for each line of one spectrum.

Required columns: `wavenumber` (cm-1) and `spectrum` (`IR` or `Raman`; left out where the caller names the spectrum).
Optional: `strength`, `polarisation`, `uncertainty` (cm-1), `together`, `note`.  Unknown columns are kept.  `#` opens a
comment line.  Columns are parted by tabs if the head line holds one, else by semicolons if it holds one, else by
commas.  A decimal comma is read where it cannot be mistaken: within quotes, or between semicolons or tabs.

Every doubtful row is named: the error tells file, line and value of the first ones and the lines of the others.
"""

from dataclasses import dataclass, field, replace

from vibsym.errors import VibsymError
from vibsym.evidence.lines import SPECTRA, Band, Line, bands_of
from vibsym.evidence.rows import Doubt, parse_row

ALIASES = {"polarization": "polarisation"}
KNOWN = ("wavenumber", "spectrum", "strength", "polarisation", "uncertainty", "together", "note")
LARGEST_FILE = 2_000_000  # bytes; a list of bands has a hundred lines, a measured spectrum is another kind of file
OCTAVE = 2.0
NATURAL, PLANE = 6 / 7, 3 / 4  # depolarisation ratio of a line that is not totally symmetric


@dataclass(frozen=True)
class BandList:
    """The observed lines, in the order of the files, and what to know about how they were read."""

    lines: tuple[Line, ...]
    spectra: tuple[str, ...]                      # the spectra that were measured
    source: str = ""
    notes: tuple[str, ...] = ()
    between: tuple[float, float] | None = None    # stated range, cm-1
    measured: tuple = field(default=(), compare=False)   # `Peaks` of each measured spectrum given instead of a list

    @property
    def bands(self) -> tuple[Band, ...]:
        """The bands: lines marked together are one."""
        return bands_of(self.lines)

    @property
    def whole_range(self) -> bool:
        """Whether a whole spectrum was observed, not one region: the stated range, else the lines, span an octave."""
        low, high = self.between or _span(self.lines)
        return high >= OCTAVE * low

    @property
    def one_sided(self) -> frozenset[Band]:
        """The bands that lie where the other spectrum was not observed: outside the stated range or its own lines."""
        spans = self.spans
        found = []
        for band in self.bands:
            low, high = _span(band.lines)
            ranges = (self.between or span for name, span in spans.items() if name != band.spectrum)
            if any(high < start or low > end for start, end in ranges):
                found.append(band)
        return frozenset(found)

    @property
    def spans(self) -> dict[str, tuple[float, float]]:
        """The lowest and the highest wavenumber of each spectrum, cm-1."""
        return {name: _span([line for line in self.lines if line.spectrum == name]) for name in self.spectra}

    def of(self, spectrum: str) -> tuple[Band, ...]:
        """Return the bands of one spectrum."""
        return tuple(band for band in self.bands if band.spectrum == spectrum)

    def to_dict(self) -> dict:
        """Return the list for JSON."""
        return {"source": self.source, "lines": [line.to_dict() for line in self.lines]}


def read_bands(bands: str | None = None, infrared: str | None = None, raman: str | None = None, *,
               between: tuple[float, float] | None = None, light: str = "plane") -> BandList:
    """Return the lines of a band list, or of one list for each spectrum.

    `between` (cm-1) keeps the lines of one region; `light` is `plane` or `natural` (ratio 3/4 or 6/7 for lines that are
    not totally symmetric).
    """
    files = [(bands, None), (infrared, "IR"), (raman, "Raman")]
    given = [(path, spectrum) for path, spectrum in files if path]
    if not given:
        raise VibsymError("no observed bands: give --bands FILE, or --ir FILE and --raman FILE")
    if bands and len(given) > 1:
        raise VibsymError("--bands names both spectra: give it alone, or --ir and --raman without it")
    lists = [_list_of(path, spectrum, between, light) for path, spectrum in given]
    together = BandList(tuple(line for each in lists for line in each.lines),
                        tuple(name for name in SPECTRA if any(name in each.spectra for each in lists)),
                        ", ".join(str(path) for path, _ in given), tuple(note for each in lists for note in each.notes),
                        measured=tuple(found for each in lists for found in each.measured))
    return lines_between(together, between)


def _list_of(path: str, spectrum: str | None, between, light: str) -> BandList:
    """Return the lines of a file; where the spectrum is named it may be a measured one, whose peaks are the lines."""
    text = _load(path, spectrum is not None)
    if spectrum is not None:
        from vibsym.evidence.spectrum import is_spectrum

        if is_spectrum(text):
            return _peaks_of(text.lstrip("\ufffe"), path, spectrum, between)
    if len(text) > LARGEST_FILE:
        raise VibsymError(_TOO_LARGE.format(path=path))
    if text.startswith("##"):
        raise VibsymError(f"{path}: a measured spectrum (JCAMP-DX); give it to --ir or --raman")
    return parse_bands(text, path, spectrum, light=light)


def _peaks_of(text: str, path: str, spectrum: str, between) -> BandList:
    """Return the peaks of a measured spectrum as lines, and a note that tells how they were picked."""
    from vibsym.evidence.peaks import pick_peaks
    from vibsym.evidence.spectrum import parse_spectrum

    found = pick_peaks(parse_spectrum(text, str(path), spectrum), between=between)
    if not found.peaks:
        raise VibsymError(f"{path}: no peak of {found.statement}; see vibsym peaks --prominence")
    lines = tuple(Line(peak.wavenumber, spectrum, peak.strength, uncertainty=peak.uncertainty, source=str(path))
                  for peak in found.peaks)
    note = (f"{path}: {len(lines)} {'peak' if len(lines) == 1 else 'peaks'} picked from the measured spectrum, "
            f"{found.statement}; vibsym peaks writes them as a list to correct")
    return BandList(lines, (spectrum,), str(path), (*found.notes, note), measured=(found,))


def lines_between(observed: BandList, between: tuple[float, float] | None) -> BandList:
    """Return the lines of a region; the spectra that were measured stay the same, even without a line in it.

    A band of which only some lines lie inside stays whole.
    """
    if between is None:
        return observed
    low, high = between
    if not 0 <= low < high < float("inf"):
        raise VibsymError(f"--between {low:g} {high:g}: give the lower wavenumber first, both in cm-1")
    kept = {line for band in observed.bands if any(low <= line.wavenumber <= high for line in band.lines)
            for line in band.lines}
    lines = tuple(line for line in observed.lines if line in kept)
    if not lines:
        seen = [line.wavenumber for line in observed.lines]
        raise VibsymError(f"{observed.source}: no line between {low:g} and {high:g} cm-1; "
                          f"the list runs from {min(seen):g} to {max(seen):g}")
    return replace(observed, lines=lines, between=(low, high))


def in_region(observed: BandList, low: float, high: float) -> BandList:
    """Return the lines of the region where all bands of a set of oscillators lie; the list itself if none is there.

    A spectrum whose lines all lie on one side of the region was not observed in it.
    """
    kept = tuple(line for line in observed.lines if low <= line.wavenumber <= high)
    if observed.between or not kept or len(kept) == len(observed.lines):
        return observed
    left = len(observed.lines) - len(kept)
    note = (f"{left} {'line' if left == 1 else 'lines'} outside {low:g} to {high:g} cm-1, where these oscillators lie, "
            f"{'is' if left == 1 else 'are'} left out; --between takes another region")
    return replace(observed, lines=kept, notes=(*observed.notes, note),
                   spectra=tuple(name for name, (start, end) in observed.spans.items()
                                 if end >= low and start <= high))


def parse_bands(text: str, source: str = "band list", spectrum: str | None = None, *,
                light: str = "plane") -> BandList:
    """Return the lines written in a text; `spectrum` is the one of every row without a spectrum column.

    >>> parse_bands("wavenumber,strength\\n2023,w\\n1935,vs", spectrum="IR").lines[0].weak
    True
    """
    if light not in ("plane", "natural"):
        raise VibsymError(f"no light '{light}'; it is plane (ratio 3/4) or natural (6/7)")
    ceiling = PLANE if light == "plane" else NATURAL
    head, rows, separator = _split(text, source)
    columns = _columns(head, source, spectrum)
    doubts, lines, notes = [], [], []
    for number, cells in rows:
        try:
            lines.append(parse_row(columns, cells, source, number, spectrum, separator, ceiling))
        except Doubt as doubt:
            doubts.append((number, str(doubt)))
    doubts += _duplicates(lines)
    _refuse(doubts, source)
    _refuse_units(lines, source)
    if not lines:
        raise VibsymError(f"{source}: no bands under the head line; write one row a line of the spectrum")
    if text.startswith("\ufffe"):
        notes.append(f"{source}: not UTF-8, read as Latin-1")
    odd = [line for line in lines if line.anomalous]
    if odd:
        notes.append(f"{source}: depolarisation ratio above {'3/4' if light == 'plane' else '6/7'} at "
                     f"{', '.join(map(str, odd))} (anomalous, near resonance): reported, not used as evidence")
    spectra = tuple(name for name in SPECTRA if spectrum == name or any(line.spectrum == name for line in lines))
    return BandList(tuple(lines), spectra, source, tuple(notes))


_TOO_LARGE = (f"{{path}}: more than {LARGEST_FILE // 1_000_000} MB; a band list has one row a line: "
              "is it a measured spectrum?")


def _load(path: str, measured: bool = False) -> str:
    """Return the text of a file; `-` is standard input.  A text that is not UTF-8 opens with U+FFFE.

    A measured spectrum may be larger than a band list.
    """
    import sys
    from pathlib import Path

    from vibsym.files import LARGEST_FILE as LARGEST_SPECTRUM

    most = LARGEST_SPECTRUM if measured else LARGEST_FILE
    try:
        if str(path) == "-":
            raw = sys.stdin.buffer.read(most + 1)
        else:
            with Path(path).open("rb") as file:
                raw = file.read(most + 1)
    except IsADirectoryError:
        raise VibsymError(f"{path}: is a folder; name a band list (CSV)") from None
    except (OSError, ValueError) as error:
        raise VibsymError(f"{path}: cannot be read ({getattr(error, 'strerror', None) or error})") from None
    if len(raw) > most:
        raise VibsymError(_TOO_LARGE.format(path=path))
    if raw[:2] in (b"\xff\xfe", b"\xfe\xff"):
        return raw.decode("utf-16", errors="replace")
    if b"\0" in raw:
        raise VibsymError(f"{path}: a binary file; save the band list as CSV text")
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError:
        return "\ufffe" + raw.decode("latin-1")


def _split(text: str, source: str) -> tuple[list[str], list[tuple[int, list[str]]], str]:
    """Return head, rows with their line numbers, and the separator."""
    import csv

    text = text.lstrip("\ufeff\ufffe").replace("\r\n", "\n").replace("\r", "\n")
    numbered = [(number, line) for number, line in enumerate(text.split("\n"), 1)
                if line.strip(" \t,;\x0c") and not line.lstrip().startswith("#")]
    if not numbered:
        raise VibsymError(f"{source}: empty; write a head line such as wavenumber,spectrum and one row a line")
    head = numbered[0][1]
    separator = "\t" if "\t" in head else ";" if ";" in head else ","
    try:
        cells = [[cell.strip() for cell in next(csv.reader([line], delimiter=separator, skipinitialspace=True))]
                 for _, line in numbered]
    except (csv.Error, StopIteration) as error:
        raise VibsymError(f"{source}: not a CSV text ({error})") from None
    return cells[0], [(number, row) for (number, _), row in zip(numbered[1:], cells[1:])], separator


def _columns(head: list[str], source: str, spectrum: str | None) -> list[str]:
    """Return the names of the columns, lower case where vibsym knows them; the unit may stand behind the wavenumber."""
    names = []
    for cell in head:
        plain = cell.strip("\"' ").lower()
        word = plain.split("(")[0].split("/")[0].split("[")[0].strip()
        unit = plain[len(word):].strip(" /()[]").replace("−", "-").replace("⁻¹", "-1").replace("^", "")
        if word == "wavenumber" and unit not in ("", "cm-1", "1/cm", "cm -1"):
            raise VibsymError(f"{source}: column '{cell}' is not in cm-1; convert it and name it wavenumber")
        word = ALIASES.get(word, word)
        names.append(word if word in KNOWN else cell)
    if "wavenumber" not in names:
        hint = " (the first row must name the columns)" if any(_is_number(cell) for cell in head) else ""
        found = ", ".join(name or "(empty)" for name in names)
        raise VibsymError(f"{source}: no column wavenumber{hint}; found {found[:200]}")
    if "spectrum" not in names and spectrum is None:
        raise VibsymError(f"{source}: no column spectrum (IR or Raman); add it, or give the file to --ir or --raman")
    for name in names:
        if name and names.count(name) > 1:
            raise VibsymError(f"{source}: column '{name}' occurs {names.count(name)} times; keep one")
    return names


def _is_number(text: str) -> bool:
    try:
        float(text.replace(",", "."))
    except ValueError:
        return False
    return True


def _duplicates(lines: list[Line]) -> list[tuple[int, str]]:
    """Name every line that repeats an earlier one of the same spectrum."""
    first: dict[tuple, int] = {}
    doubts = []
    for line in lines:
        earlier = first.setdefault((line.spectrum, line.wavenumber), line.row)
        if earlier != line.row:
            doubts.append((line.row, f"{line.spectrum} {line} stands in line {earlier} already; remove one"))
    return doubts


def _refuse(doubts: list[tuple[int, str]], source: str) -> None:
    """Stop at doubtful rows: three in full, the numbers of the others."""
    if not doubts:
        return
    doubts.sort()
    told = [f"line {number}: {reason}" for number, reason in doubts[:3]]
    if len(doubts) > 3:
        told.append("also doubtful: line " + ", ".join(str(number) for number, _ in doubts[3:23])
                    + (f" and {len(doubts) - 23} more" if len(doubts) > 23 else ""))
    raise VibsymError(f"{source}, " + "; ".join(told))


def _refuse_units(lines: list[Line], source: str) -> None:
    """Stop at a list whose every value would be a length in micrometres (5.0 µm is 2000 cm-1)."""
    if lines and max(line.wavenumber for line in lines) < 50:
        worst = max(lines, key=lambda line: line.wavenumber)
        raise VibsymError(f"{source}, line {worst.row}: no value is above {worst.wavenumber:g}: micrometres? "
                          f"{worst.wavenumber:g} µm is {1e4 / worst.wavenumber:.0f} cm-1")


def _span(lines) -> tuple[float, float]:
    """Return the lowest and the highest wavenumber, (0, inf) where there are no lines."""
    places = [line.wavenumber for line in lines]
    return (min(places), max(places)) if places else (0.0, float("inf"))
