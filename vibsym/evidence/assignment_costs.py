"""What it costs to give a line to a fundamental, to leave it over, or not to see a fundamental (our own rules).

All costs are in the units of χ² (−2 ln of a likelihood):

- estimate: h(z), z = ln(observed/estimate)/s with the spread s of the error model; h(z) = z² up to |z| = 1.5, then
  3|z| − 2.25; modes of one set share an error, which `common_errors.py` takes off ln(observed/estimate) at a price;
- characteristic range (tables/characteristic_wavenumbers.csv) of a set that makes at least 60 % of the mode:
  h(distance/RANGE_WIDTH), at most 3;
- a line measured depolarised at a totally symmetric fundamental: 3; a Raman line without polarisation there, where
  others have one: 1;
- strengths: a strong Raman line that is not totally symmetric, a weak one that is: ½;
- a fundamental active in both spectra but given a line of one, both being measured: 2; a broken pair: 12;
- a line left over: 36, a weak one 12; an active fundamental not seen: 1.

Forbidden: a species silent in the spectrum, a polarised line at a species that is not totally symmetric.
"""

from functools import cache

import numpy as np

from vibsym.evidence.lines import Band
from vibsym.tables import read_table
from vibsym.vibrations.estimates import Estimates, characteristic_name

LEFT_OVER, LEFT_OVER_WEAK, UNSEEN, BROKEN_PAIR, ONE_SPECTRUM = 36.0, 12.0, 1.0, 12.0, 2.0
DEPOLARISED, UNMARKED, STRENGTH = 3.0, 1.0, 0.5
RANGE_WIDTH, RANGE_MOST, RANGE_SHARE = 30.0, 3.0, 0.6  # cm-1, cost, share of the set in the mode
STRONG = ("vs", "vvs", "s")


def hump(z):
    """Return h(z): z² within 1.5 spreads, straight beyond (P. J. Huber, Ann. Math. Statist. 35, 73 (1964))."""
    size = np.abs(z)
    return np.where(size <= 1.5, size * size, 3 * size - 2.25)


def mean_wavenumber(band: Band) -> float:
    """Return the mean of the lines of a band, cm-1."""
    return sum(line.wavenumber for line in band.lines) / len(band.lines)


def estimate_costs(bands, estimates: Estimates, shifts=0.0, own=None) -> np.ndarray:
    """Return (n, f) the cost of the distance between band and estimate.

    `shifts` (f,) are common errors of ln(observed/estimate) and `own` (f,) the spreads that are left beside them.
    """
    seen = np.array([mean_wavenumber(band) for band in bands])
    error = np.array([max(line.uncertainty for line in band.lines) for band in bands])
    modes = estimates.modes
    expected = np.array([max(mode.wavenumber, 1.0) for mode in modes])
    spread = np.array([estimates.spread(mode) for mode in modes]) if own is None else own
    width = np.sqrt(spread**2 + (error / seen)[:, None] ** 2)
    cost = hump((np.log(seen[:, None] / expected) - shifts) / width)
    return cost


def range_costs(bands, estimates: Estimates) -> np.ndarray:
    """Return (n, f) the cost of lines outside the characteristic range of a fundamental."""
    seen = np.array([mean_wavenumber(band) for band in bands])
    cost = np.zeros((len(bands), len(estimates.modes)))
    for column, mode in enumerate(estimates.modes):
        limits = characteristic_range(mode, estimates)
        if limits:
            outside = np.maximum(np.maximum(limits[0] - seen, seen - limits[1]), 0.0)
            cost[:, column] = np.minimum(hump(outside / RANGE_WIDTH), RANGE_MOST)
    return cost


def characteristic_range(mode, estimates: Estimates) -> tuple[float, float] | None:
    """Return (low, high) in cm-1 of the set that dominates a mode, None where the table has none."""
    if not mode.shares or mode.shares[0][1] < RANGE_SHARE:
        return None
    return ranges().get(characteristic_name(mode.shares[0][0], estimates))


@cache
def ranges() -> dict[str, tuple[float, float]]:
    """Return the ranges of the factors named in the column `factor`, the widest where several rows name one."""
    found: dict[str, tuple[float, float]] = {}
    for row in read_table("characteristic_wavenumbers.csv"):
        if row["factor"]:
            low, high = float(row["low_cm1"]), float(row["high_cm1"])
            before = found.get(row["factor"], (low, high))
            found[row["factor"]] = min(low, before[0]), max(high, before[1])
    return found


def spectrum_costs(bands, estimates: Estimates, spectra) -> tuple[np.ndarray, np.ndarray]:
    """Return (n, f) what the spectrum says of a band at a fundamental, and (f,) what a band of one spectrum costs."""
    marked = any(band.polarised or band.depolarised for band in bands)
    said = np.array([[spectrum_cost(band, mode, marked) for mode in estimates.modes] for band in bands])
    both = [mode.infrared and mode.raman and len(spectra) == 2 for mode in estimates.modes]
    return said, ONE_SPECTRUM * np.array(both, dtype=float)


def spectrum_cost(band: Band, mode, marked: bool) -> float:
    """Return what activity, polarisation and strength say about a band at a fundamental."""
    if band.spectrum == "IR":
        return 0.0 if mode.infrared else np.inf
    if not mode.raman or (band.polarised and not mode.polarised):
        return np.inf
    strong = any(word in STRONG for line in band.lines for word in line.strength.split(", "))
    cost = STRENGTH * ((strong and not mode.polarised) or (band.weak and mode.polarised))
    if mode.polarised:
        cost += DEPOLARISED if band.depolarised else UNMARKED if marked and not band.polarised else 0.0
    return cost
