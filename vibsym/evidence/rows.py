"""One row of a band list: what each cell may say, and why a row is doubtful.

A line measured polarised is totally symmetric: ρ + 2u < 3/4 (6/7 in natural light), u the standard uncertainty, 0.03
when it is not given.  ρ near 3/4 proves nothing, ρ above it is anomalous (near resonance) and only reported.
"""

import re

from vibsym.evidence.lines import Line

LOWEST, HIGHEST = 10.0, 4500.0   # cm-1; no fundamental lies higher than that of H2 (4161 cm-1)
USUAL_ERROR = 0.03               # of a depolarisation ratio
LARGEST_RATIO = 20.0
_BASES = ("vvs", "vs", "s", "ms", "sm", "m", "mw", "wm", "w", "vw", "vvw")
_SHAPES = {"sh": "sh", "shoulder": "sh", "br": "br", "b": "br", "broad": "br", "v": "v", "var": "v", "vbr": "br",
           "sp": "sp", "sharp": "sp"}
_WORDS = {"very strong": "vs", "strong": "s", "medium": "m", "weak": "w", "very weak": "vw"}
_RATIO = re.compile(r"([0-9]*[.,]?[0-9]+)\s*(?:\(([0-9]+)\)|(?:±|\+-|\+/-)\s*([0-9]*[.,]?[0-9]+))?")


class Doubt(ValueError):
    """Why a row cannot be taken as it stands."""


def parse_row(columns: list[str], cells: list[str], source: str, number: int, spectrum: str | None, separator: str,
              ceiling: float) -> Line:
    """Return the line that a row describes; `ceiling` is the ratio of lines that are not totally symmetric."""
    while len(cells) > len(columns) and not cells[-1]:
        cells = cells[:-1]
    if len(cells) > len(columns):
        comma = "; a decimal comma needs quotes or semicolons between the columns" if separator == "," else ""
        raise Doubt(f"{len(cells)} cells where the head has {len(columns)}{comma}")
    row = dict(zip(columns, [*cells, *[""] * (len(columns) - len(cells))]))
    kind = _spectrum(row.pop("spectrum", ""), spectrum)
    strength = parse_strength(row.pop("strength", ""))
    polarisation = row.pop("polarisation", "")
    polarised, depolarised, anomalous = parse_polarisation(polarisation, ceiling)
    if polarisation and kind == "IR":
        raise Doubt(f"polarisation '{polarisation}' on an infrared line; it belongs to Raman lines")
    return Line(_wavenumber(row.pop("wavenumber")), kind, strength, polarisation, polarised, depolarised, anomalous,
                _uncertainty(row.pop("uncertainty", "")), row.pop("together", ""), row.pop("note", ""),
                {name: value for name, value in row.items() if name}, source, number)


def parse_strength(text: str) -> str:
    """Return a strength in one spelling: `vs`, `m, sh`, `s, br`; empty stays empty.

    >>> parse_strength("w(sh)"), parse_strength("Very strong"), parse_strength("m-s br")
    ('w, sh', 'vs', 'm-s, br')
    """
    lowered = " ".join(text.lower().split())
    if lowered in _WORDS:
        return _WORDS[lowered]
    found = []
    for word in re.split(r"[\s,;()/.]+", lowered):
        if not word:
            continue
        if word in _SHAPES:
            found.append(_SHAPES[word])
        elif all(part in _BASES for part in re.split("[-–]", word)):
            found.append(word.replace("–", "-"))
        else:
            raise Doubt(f"strength '{text}' is not vs, s, m, w or vw, with sh, br or v")
    return ", ".join(found)


def parse_polarisation(text: str, ceiling: float) -> tuple[bool, bool, bool]:
    """Return whether a Raman line is polarised, measured but not proved polarised, or anomalous.

    >>> parse_polarisation("0.04(2)", 0.75), parse_polarisation("0.70", 0.75), parse_polarisation("1.2", 0.75)
    ((True, False, False), (False, True, False), (False, True, True))
    """
    word = text.strip().lower().rstrip(".")
    if not word:
        return False, False, False
    if word in ("p", "pol"):
        return True, False, False
    if word in ("dp", "depol"):
        return False, True, False
    if word in ("ap", "anomalous"):
        return False, True, True
    match = _RATIO.fullmatch(word)
    if not match:
        raise Doubt(f"polarisation '{text}' cannot be read; write p, dp, or a ratio such as 0.04 or 0.04(2)")
    digits, last, spread = match.group(1).replace(",", "."), match.group(2), match.group(3)
    ratio = float(digits)
    if ratio > LARGEST_RATIO:
        raise Doubt(f"polarisation '{text}' is no depolarisation ratio (0 to 3/4, or somewhat above); per cent?")
    error = USUAL_ERROR
    if last:
        decimals = len(digits.split(".")[1]) if "." in digits else 0
        error = int(last) * 10.0 ** -decimals
    elif spread:
        error = float(spread.replace(",", "."))
    polarised = ratio + 2 * error < ceiling - 1e-12
    return polarised, not polarised, ratio - 2 * error > ceiling + 1e-12


def _spectrum(text: str, default: str | None) -> str:
    words = {"ir": "IR", "infrared": "IR", "ftir": "IR", "ft-ir": "IR", "raman": "Raman", "ft-raman": "Raman"}
    if not text:
        if default is None:
            raise Doubt("no spectrum; write IR or Raman")
        return default
    kind = words.get(text.lower())
    if kind is None:
        comma = "; a decimal comma needs quotes, or semicolons between the columns" if text.isdigit() else ""
        raise Doubt(f"spectrum '{text}' is neither IR nor Raman{comma}")
    if default is not None and kind != default:
        raise Doubt(f"spectrum '{text}' in a file given as {default}; give it to the other option, or to --bands")
    return kind


def _wavenumber(text: str) -> float:
    if not text:
        raise Doubt("no wavenumber")
    value = parse_number(re.sub(r"\s*cm\^?[-−]1$", "", text), "wavenumber")
    if value <= 0:
        raise Doubt(f"wavenumber {text} is not above zero")
    if value < LOWEST:
        raise Doubt(f"{text} cannot be a wavenumber in cm-1 (lowest taken: {LOWEST:g}); "
                    f"{value:g} µm would be {1e4 / value:.0f} cm-1")
    if value > HIGHEST:
        raise Doubt(f"{text} cannot be a fundamental in cm-1 (highest taken: {HIGHEST:g}); "
                    f"{value:g} nm would be {1e7 / value:.0f} cm-1")
    return value


def _uncertainty(text: str) -> float:
    if not text:
        return 0.0
    value = parse_number(text.lstrip("±"), "uncertainty")
    if not 0 <= value <= 50:
        raise Doubt(f"uncertainty {text} is not between 0 and 50 cm-1")
    return value


def parse_number(text: str, name: str) -> float:
    """Return a finite number; one comma is a decimal comma unless three digits follow it (2,023 could be 2023)."""
    bare = text.strip().replace("−", "-")
    if re.fullmatch(r"[+-]?\d+,\d+", bare):
        if len(bare.split(",")[1]) == 3:
            raise Doubt(f"{name} '{text}' can be read in two ways; write a decimal point, and no comma for thousands")
        bare = bare.replace(",", ".")
    if re.fullmatch(r"\d+(\.\d+)?\s*[-–]\s*\d+(\.\d+)?", bare):
        raise Doubt(f"{name} '{text}' is a range; write its lines in rows of their own with one mark in together")
    if not re.fullmatch(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?", bare):
        raise Doubt(f"{name} '{text}' is not a number")
    value = float(bare)
    if value in (float("inf"), float("-inf")):
        raise Doubt(f"{name} '{text}' is not finite")
    return value
