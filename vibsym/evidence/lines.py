"""Observed lines and bands: what one row of a band list says, and which rows are one band.

A line is one maximum (or shoulder) of one spectrum.  Lines of one spectrum that carry the same mark in `together` are
one band, split by the site, the matrix, an isotope or Fermi resonance.
"""

from dataclasses import dataclass, field
from functools import cached_property

SPECTRA = ("IR", "Raman")
WEAK = frozenset({"w", "vw", "vvw", "sh"})  # may be an overtone or a leak: half an excuse


@dataclass(frozen=True)
class Line:
    """One row of a band list.

    `strength` is normalised (`"m, sh"`); `polarisation` stays as written; `polarised` is true only where the line must
    be totally symmetric, `anomalous` where the ratio lies above 3/4 (6/7) by more than twice its uncertainty.
    """

    wavenumber: float                  # cm-1
    spectrum: str                      # "IR" or "Raman"
    strength: str = ""
    polarisation: str = ""
    polarised: bool = False
    depolarised: bool = False          # says nothing about the species
    anomalous: bool = False
    uncertainty: float = 0.0           # cm-1
    together: str = ""
    note: str = ""
    extra: dict = field(default_factory=dict, hash=False, compare=False)  # columns vibsym does not know
    source: str = ""
    row: int = 0                       # line number in the file

    @cached_property
    def weak(self) -> bool:
        """Whether the line is w, vw or a shoulder."""
        return not WEAK.isdisjoint(self.strength.split(", "))

    def __str__(self) -> str:
        return f"{self.wavenumber:g}"

    def to_dict(self) -> dict:
        """Return the line for JSON."""
        answer = {"spectrum": self.spectrum, "wavenumber": self.wavenumber}
        if self.strength:
            answer["strength"] = self.strength
        if self.polarisation:
            answer["polarisation"] = self.polarisation
        return answer


@dataclass(frozen=True)
class Band:
    """One band of one spectrum: a line, or the lines marked together.

    It is weak if all its lines are, and polarised if one of them is.
    """

    lines: tuple[Line, ...]

    @property
    def spectrum(self) -> str:
        """`"IR"` or `"Raman"`."""
        return self.lines[0].spectrum

    @cached_property
    def weak(self) -> bool:
        """Whether every line of the band is weak or a shoulder."""
        return all(line.weak for line in self.lines)

    @cached_property
    def polarised(self) -> bool:
        """Whether a line of the band must be totally symmetric."""
        return any(line.polarised for line in self.lines)

    @cached_property
    def depolarised(self) -> bool:
        """Whether the band was measured and no line found polarised."""
        return not self.polarised and any(line.depolarised for line in self.lines)

    def __str__(self) -> str:
        return "/".join(str(line) for line in self.lines)


def bands_of(lines: tuple[Line, ...]) -> tuple[Band, ...]:
    """Return the bands in the order of their first lines; lines of one spectrum with one mark are one band."""
    groups: dict[tuple, list[Line]] = {}
    for index, line in enumerate(lines):
        key = (line.spectrum, line.together) if line.together else (index,)
        groups.setdefault(key, []).append(line)
    return tuple(Band(tuple(group)) for group in groups.values())
