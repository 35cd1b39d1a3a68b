"""Pick the bands of a measured spectrum, so that the user can see and correct what was taken.

A band is a maximum of the signal (absorbance -log10 T, or Raman intensity) that rises by at least `prominence` above
the higher of the two saddles that part it from higher ones, and lies at least `distance` from a stronger one
(`scipy.signal.find_peaks`).  Before, the curve is set on even steps if need be and smoothed by a quadratic over the
minimum distance (A. Savitzky, M. J. E. Golay, Anal. Chem. 36, 1627 (1964)).  Places are those of the parabola
through the upper part of the band.  Heights stand on the baseline: the lower convex hull (`rubber`, common practice),
or zero.

Default prominence: the larger of 8 standard deviations of the noise (estimated from second differences) and 1 % of the
span of the signal.  Shoulders without a maximum of their own are not picked.  Strengths are by height above the
baseline, of the highest band (our own rule): vs from 0.75, s from 0.4, m from 0.15, w from 0.04, vw below.
"""

from dataclasses import dataclass
from math import ceil

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.spectrum import Spectrum

BASELINES = ("rubber", "none")
DISTANCE = 4.0                # cm-1
NOISE_TIMES = 8.0             # between the highest and the lowest of some thousand points of noise
SPAN_PART = 0.01
STRENGTHS = ((0.75, "vs"), (0.4, "s"), (0.15, "m"), (0.04, "w"), (0.0, "vw"))
TOP = 0.2                     # part of the rise of a band, from its top, through which the parabola is laid
FEWEST_ON_TOP = 5             # points
EVEN = 0.02                   # largest relative difference of steps still called even


@dataclass(frozen=True)
class Peak:
    """A band that was picked: place (cm-1), height above the baseline and prominence in units of the signal."""

    wavenumber: float
    height: float
    prominence: float
    strength: str
    uncertainty: float        # cm-1, from the steps of the curve and its noise

    def to_dict(self) -> dict:
        """Return the peak for JSON."""
        return {"wavenumber": self.wavenumber, "height": self.height, "prominence": self.prominence,
                "strength": self.strength, "uncertainty": self.uncertainty}


@dataclass(frozen=True, eq=False)
class Peaks:
    """The peaks of a spectrum in falling wavenumber, with what was asked: prominence, distance (cm-1), baseline."""

    spectrum: Spectrum
    peaks: tuple[Peak, ...]
    prominence: float
    distance: float
    baseline: str
    noise: float
    notes: tuple[str, ...] = ()

    @property
    def statement(self) -> str:
        """How the peaks were picked, in one line."""
        unit = "absorbance" if self.spectrum.ordinate != "intensity" else "intensity"
        return (f"prominence at least {self.prominence:.3g} ({unit}; noise {self.noise:.2g}), distance at least "
                f"{self.distance:g} cm-1, baseline {self.baseline}")

    def to_dict(self) -> dict:
        """Return the peaks for JSON."""
        return {"measured": self.spectrum.to_dict(), "prominence": self.prominence, "distance": self.distance,
                "baseline": self.baseline, "noise": self.noise, "peaks": [each.to_dict() for each in self.peaks],
                "notes": list(self.notes)}


def pick_peaks(spectrum: Spectrum, prominence: float | None = None, distance: float = DISTANCE,
               baseline: str = "rubber", between: tuple[float, float] | None = None) -> Peaks:
    """Return the bands of a spectrum; `prominence` in units of the signal, `distance` and `between` in cm-1."""
    from scipy.signal import find_peaks, savgol_filter

    _check(prominence, distance, baseline)
    notes = list(spectrum.notes)
    x, y = _cut(spectrum.wavenumbers, spectrum.signal(), between, spectrum.source)
    x, y = _even(x, y, notes)
    step = float(x[1] - x[0])
    window = max(3, round(distance / step) | 1)
    smooth, gain = y, 1.0
    if 5 <= window < len(y) / 2:
        smooth = savgol_filter(y, window, 2)
        gain = float(np.linalg.norm(savgol_filter(np.eye(1, 2 * window + 1, window)[0], window, 2)))
    noise = _noise(y) * gain
    if prominence is None:
        prominence = max(NOISE_TIMES * noise, SPAN_PART * float(np.ptp(smooth)))
    found, about = find_peaks(smooth, prominence=max(prominence, np.finfo(float).tiny),
                              distance=max(1, ceil(distance / step - 1e-9)))
    above = smooth - (lower_hull(x, smooth) if baseline == "rubber" else 0.0)
    highest = max((above[k] for k in found), default=1.0) or 1.0
    rises = about["prominences"]
    peaks = [Peak(round(place, 2), float(above[k]), float(rise), _strength(above[k] / highest),
                  _rounded_up(float(np.hypot(step / 2, spread))))
             for k, rise, (place, spread) in zip(found, rises, _places(x, y, smooth, found, rises))]
    return Peaks(spectrum, tuple(sorted(peaks, key=lambda peak: -peak.wavenumber)), float(prominence), distance,
                 baseline, noise, tuple(notes))


def lower_hull(x: np.ndarray, y: np.ndarray) -> np.ndarray:
    """Return (n,) the lower convex hull of a curve: a rubber band spanned under it.

    >>> lower_hull(np.arange(5.0), np.array([0, 5, 1, 5, 2.0])).tolist()
    [0.0, 0.5, 1.0, 1.5, 2.0]
    """
    corners: list[int] = []
    for k in range(len(x)):
        while len(corners) > 1:
            a, b = corners[-2], corners[-1]
            if (y[b] - y[a]) * (x[k] - x[a]) < (y[k] - y[a]) * (x[b] - x[a]):
                break
            corners.pop()
        corners.append(k)
    return np.interp(x, x[corners], y[corners])


def band_rows(result: Peaks) -> list[dict]:
    """Return one row of a band list for each peak, in the columns that `--bands` reads."""
    return [{"wavenumber": f"{peak.wavenumber:.2f}".rstrip("0").rstrip("."), "spectrum": result.spectrum.spectrum,
             "strength": peak.strength, "polarisation": "", "uncertainty": f"{peak.uncertainty:g}", "together": "",
             "note": f"prominence {peak.prominence:.3g}"} for peak in result.peaks]


def _check(prominence, distance: float, baseline: str) -> None:
    if prominence is not None and not 0 < prominence < float("inf"):
        raise VibsymError(f"--prominence {prominence:g}: give a height above zero, in absorbance or counts")
    if not 0 < distance < float("inf"):
        raise VibsymError(f"--distance {distance:g}: give a distance above zero in cm-1")
    if baseline not in BASELINES:
        raise VibsymError(f"--baseline {baseline}: it is {' or '.join(BASELINES)}")


def _cut(x, y, between, source: str):
    if between is None:
        return x, y
    low, high = between
    inside = (x >= low) & (x <= high)
    if inside.sum() < 5:
        raise VibsymError(f"{source}: fewer than 5 points between {low:g} and {high:g} cm-1; the spectrum runs from "
                          f"{x[0]:g} to {x[-1]:g}")
    return x[inside], y[inside]


def _even(x, y, notes: list[str]):
    steps = np.diff(x)
    middle = float(np.median(steps))
    if np.abs(steps - middle).max() <= EVEN * middle:
        return np.linspace(x[0], x[-1], len(x)), y
    gap = float(steps.max())
    number = round(float(x[-1] - x[0]) / middle) + 1
    if number > 2_000_000:
        raise VibsymError(f"steps from {steps.min():g} to {gap:g} cm-1: too uneven; cut the spectrum with --between")
    told = f"steps from {steps.min():.3g} to {gap:.3g} cm-1: set on even steps of {middle:.3g} cm-1"
    if gap > 10 * middle:
        told += f"; nothing is known inside the widest gap, from {x[steps.argmax()]:g} to {x[steps.argmax() + 1]:g}"
    notes.append(told)
    even = np.linspace(x[0], x[-1], number)
    return even, np.interp(even, x, y)


def _noise(y: np.ndarray) -> float:
    """Return the standard deviation of the noise: second differences have the variance 1 + 4 + 1 of it."""
    second = np.abs(np.diff(y, 2))
    return float(np.median(second)) * 1.4826 / 6 ** 0.5


def _top(x: np.ndarray, y: np.ndarray, k: int) -> float:
    left, middle, right = y[k - 1:k + 2]
    bend = left - 2 * middle + right
    shift = 0.5 * (left - right) / bend if bend < 0 else 0.0
    return float(x[k] + np.clip(shift, -0.5, 0.5) * (x[1] - x[0]))


def _strength(part: float) -> str:
    return next(name for least, name in STRENGTHS if part >= least or name == "vw")


def _places(x: np.ndarray, y: np.ndarray, smooth: np.ndarray, found: np.ndarray, rises: np.ndarray):
    """Yield for each maximum its place and the standard deviation of the place (cm-1).

    A parabola is laid through the points round the maximum that lie in the upper TOP of its rise; its vertex is the
    place.  Noise s moves the vertex by the standard deviation of the slope, s / (sum of t^2)^1/2, over the curvature.
    Too few points above: the parabola through the highest three of the smoothed curve, and no more is known.
    """
    step, noise = float(x[1] - x[0]), _noise(y)
    for k, rise in zip(found, rises):
        below = smooth < smooth[k] - TOP * rise
        left = k - int(np.argmax(below[k::-1])) + 1 if below[:k].any() else 0
        right = k + int(np.argmax(below[k:])) if below[k:].any() else len(x)
        t = (np.arange(left, right) - (left + right - 1) / 2) * step
        bend, slope, _ = np.polyfit(t, y[left:right], 2) if len(t) >= FEWEST_ON_TOP else (0.0, 0.0, 0.0)
        place = -slope / (2 * bend) if bend < 0 else np.inf
        if abs(place) > t[-1]:
            yield _top(x, smooth, k), 0.0
            continue
        spread = noise / float(t @ t) ** 0.5 / (2 * abs(bend))
        yield float(x[left:right].mean() + place), float(min(spread, t[-1]))


def _rounded_up(value: float) -> float:
    return ceil(round(value * 100, 6)) / 100
