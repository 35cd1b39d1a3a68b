"""Fermi resonance: a fundamental and an overtone or combination of a common species that lie close together.

Two levels that perturb each other share intensity.  When only the fundamental has intensity of its own, the two
observed lines and the ratio of their intensities give back where both would lie undisturbed, and the perturbation W:

    R = I(upper)/I(lower),   fundamental = (R·upper + lower)/(1 + R),   other = (upper + R·lower)/(1 + R),
    W = √R (upper - lower)/(1 + R)

(G. Herzberg, Infrared and Raman Spectra, 1945, ch. II,5; A. Langseth, R. C. Lord, Kgl. Danske Videnskab. Selskab,
Mat.-fys. Medd. 16, no. 6 (1938); from memory).
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass

from vibsym.errors import VibsymError

DEFAULT_RESONANCE = 50.0           # cm-1


@dataclass(frozen=True)
class Doublet:
    """Two observed lines of one resonance (cm-1) and their intensity ratio upper/lower."""

    upper: float
    lower: float
    ratio: float

    @property
    def fundamental(self) -> float:
        """Undisturbed position of the level that carries the intensity, cm-1."""
        return (self.ratio * self.upper + self.lower) / (1 + self.ratio)

    @property
    def partner(self) -> float:
        """Undisturbed position of the overtone or combination, cm-1."""
        return (self.upper + self.ratio * self.lower) / (1 + self.ratio)

    @property
    def interaction(self) -> float:
        """W, the perturbation between the two levels, cm-1."""
        return self.ratio**0.5 * (self.upper - self.lower) / (1 + self.ratio)

    def holds(self, wavenumber: float | None, within: float = 1.0) -> bool:
        """Tell whether a line is one of the two."""
        return wavenumber is not None and min(abs(wavenumber - self.upper), abs(wavenumber - self.lower)) <= within

    def unplaced(self, reason: str) -> VibsymError:
        """Return the error of a doublet that belongs to nothing."""
        return VibsymError(f"--doublet {self.upper:g}:{self.lower:g}: {reason}; give the fundamental as observed, "
                           "at one of the two lines")

    def to_dict(self) -> dict:
        """Return the doublet for JSON."""
        return {"upper": self.upper, "lower": self.lower, "ratio": self.ratio,
                "unperturbed_fundamental": round(self.fundamental, 3),
                "unperturbed_combination": round(self.partner, 3), "interaction": round(self.interaction, 3)}


@dataclass(frozen=True)
class FermiPair:
    """A fundamental and a level above it or below it with a common species; `distance` = level - fundamental, cm-1."""

    fundamental: str
    combination: str
    species: tuple[str, ...]
    distance: float
    doublet: Doublet | None = None

    def to_dict(self) -> dict:
        """Return the pair for JSON; the estimate only where both lines were given with a ratio."""
        answer = {"fundamental": self.fundamental, "combination": self.combination, "species": list(self.species),
                  "distance": round(self.distance, 3)}
        return answer | ({"doublet": self.doublet.to_dict()} if self.doublet else {})


def parse_doublet(text: str) -> Doublet:
    """Return the doublet typed as `1388.2:1285.4=1.6`: two lines, intensity of the first over that of the second.

    >>> round(parse_doublet("1388.2:1285.4=1.6").interaction, 1)
    50.0
    """
    match = re.fullmatch(r"\s*([\d.]+)\s*:\s*([\d.]+)\s*=\s*([\d.eE+-]+)\s*", text)
    try:
        first, second, ratio = (float(part) for part in match.groups())
    except (AttributeError, ValueError):
        raise VibsymError(f"doublet '{text}' cannot be read; write line:line=ratio, as in 1388.2:1285.4=1.6") from None
    if first == second or ratio <= 0:
        raise VibsymError(f"doublet '{text}': two different lines and a ratio above zero are needed")
    return Doublet(first, second, ratio) if first > second else Doublet(second, first, 1 / ratio)


def deperturbed(wavenumber: float, doublets: Sequence[Doublet]) -> float:
    """Return a fundamental without its resonance, where it is a line of one of the doublets; else as it is."""
    for doublet in doublets:
        if doublet.holds(wavenumber):
            return doublet.fundamental
    return wavenumber
