"""Lines that the user fixes: `ν4=1306` (a numbered fundamental) or `T2=1306` (a species)."""

import re
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.assignment_costs import mean_wavenumber
from vibsym.evidence.lines import Band

NEAR = 0.51  # cm-1; a pin names a line to the last whole wavenumber


@dataclass(frozen=True)
class Pin:
    """A line held at a species, or at one fundamental of it (`mode`: its place among the estimates)."""

    text: str
    species: str
    mode: int | None
    wavenumber: float

    def matches(self, band: Band) -> bool:
        """Whether the pin means this band."""
        places = (mean_wavenumber(band), *(line.wavenumber for line in band.lines))
        return any(abs(place - self.wavenumber) <= NEAR for place in places)


def parse_pins(texts: Sequence[str], group, modes) -> list[Pin]:
    """Return the pins typed; what cannot be read, or names no fundamental, is an error."""
    names = {mode.name: number for number, mode in enumerate(modes)}
    pins = []
    for text in texts:
        left, equals, right = (part.strip() for part in text.partition("="))
        try:
            value = float(right.replace(",", "."))
        except ValueError:
            value = float("nan")
        if not equals or not value > 0 or value == float("inf"):
            raise VibsymError(f"--pin {text}: write a fundamental or a species and a line in cm-1, as in ν4=1306 or "
                              "T2=1306")
        number = re.fullmatch(r"(?:ν|v|nu)_?(\d+)(?::(.+))?", left, re.IGNORECASE)
        if number:
            name = f"ν{int(number[1])}"
            if name not in names:
                raise VibsymError(f"--pin {text}: no fundamental {name}; the structure has ν1 to ν{len(modes)}")
            place = names[name]
            if number[2] and group.species_named(number[2]).label != modes[place].species:
                raise VibsymError(f"--pin {text}: {name} is {modes[place].species}, not {number[2]}")
            pins.append(Pin(text, modes[place].species, place, value))
            continue
        species = group.species_named(left).label
        if not any(mode.species == species for mode in modes):
            raise VibsymError(f"--pin {text}: the structure has no vibration of species {species}")
        pins.append(Pin(text, species, None, value))
    return pins


def pinned(pins: Sequence[Pin], bands: Sequence[Band], modes) -> np.ndarray | None:
    """Return (n, f) bool what the pins leave; a pin without a line, or against the selection rules, is an error."""
    if not pins:
        return None
    allowed = np.ones((len(bands), len(modes)), bool)
    for pin in pins:
        rows = [row for row, band in enumerate(bands) if pin.matches(band)]
        if not rows:
            nearest = min(bands, key=lambda band: abs(mean_wavenumber(band) - pin.wavenumber))
            raise VibsymError(f"--pin {pin.text}: no line at {pin.wavenumber:g} cm-1; the nearest is {nearest}")
        mode = modes[pin.mode] if pin.mode is not None else next(mode for mode in modes if mode.species == pin.species)
        reasons = {row: _forbidden(bands[row], mode) for row in rows}
        possible = [row for row in rows if reasons[row] is None]
        if not possible:
            raise VibsymError(f"--pin {pin.text}: against the selection rules: {reasons[rows[0]]}")
        wanted = np.array([number == pin.mode if pin.mode is not None else each.species == pin.species
                           for number, each in enumerate(modes)])
        for row in possible:
            allowed[row] &= wanted
            if not allowed[row].any():
                raise VibsymError(f"--pin {pin.text}: the line {bands[row]} is pinned elsewhere too; take one --pin "
                                  "away")
    return allowed


def _forbidden(band: Band, mode) -> str | None:
    """Return why a band cannot be a mode, None if it can."""
    if band.spectrum == "IR":
        return None if mode.infrared else f"{mode.species} is silent in the infrared, where {band} was seen"
    if not mode.raman:
        return f"{mode.species} is silent in the Raman spectrum, where {band} was seen"
    if band.polarised and not mode.polarised:
        return f"the Raman line {band} is polarised, so it is totally symmetric, and {mode.species} is not"
    return None
