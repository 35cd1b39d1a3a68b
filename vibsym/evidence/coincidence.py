"""Coincidences of infrared and Raman bands, and how many of them chance would give.

A pair is an infrared and a Raman band that differ by no more than the window, widened by the uncertainties of the two
lines.  Bands are paired before any structure is considered: most pairs, then the least sum of distances, then (so that
the order of rows does not matter) the least sum of their squares, then by wavenumber.  A band of several lines lies
where each of its lines lies.

Chance: if two lines closer than 100 cm-1 had nothing to do with each other, their difference would lie within the
window with the probability window/100.  So the mean number of accidental pairs is the sum of window/100 over all
infrared-Raman differences up to 100 cm-1, and their number follows Poisson's law (our own rule).
"""

from dataclasses import dataclass
from math import exp

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.lines import Band

WINDOW = 5.0          # cm-1
NEIGHBOURHOOD = 100.0  # cm-1
EQUAL = 1e-3          # cm-1: sums of distances that differ by less are equal, and their squares decide
NEAR = 3.0            # windows: unpaired bands no farther apart may be one band, shifted by phase or solvent
LEAST_CHANCE = 0.01   # k pairs count as accidental while chance gives k or more at least that often


@dataclass(frozen=True)
class Coincidences:
    """The items to explain: pairs and single bands, in the order in which they were observed."""

    items: tuple[tuple[Band, ...], ...]   # one band, or (infrared, Raman)
    window: float                         # cm-1
    chance_mean: float                    # accidental pairs expected

    @property
    def pairs(self) -> tuple[tuple[Band, ...], ...]:
        """The coincident pairs."""
        return tuple(item for item in self.items if len(item) == 2)

    @property
    def near_misses(self) -> tuple[tuple[Band, Band], ...]:
        """Unpaired infrared and Raman bands a little farther apart than the window, each band once, the nearest first.

        The same band of a gas, a liquid and a solution may be shifted so far (common practice).
        """
        lonely = [item[0] for item in self.items if len(item) == 1]
        apart = sorted((distance_of(one, two), k, m)
                       for k, one in enumerate(lonely) if one.spectrum == "IR"
                       for m, two in enumerate(lonely) if two.spectrum == "Raman")
        found, taken = [], set()
        for distance, k, m in apart:
            if self.window < distance <= NEAR * self.window and not taken & {k, m}:
                taken |= {k, m}
                found.append((lonely[k], lonely[m]))
        return tuple(found)

    @property
    def by_chance(self) -> int:
        """How many pairs at most count as accidental: the largest k that chance reaches with 1 % probability."""
        number = 0
        while number < len(self.pairs) and chance_of(number + 1, self.chance_mean) >= LEAST_CHANCE:
            number += 1
        return number


def pair_bands(infrared: tuple[Band, ...], raman: tuple[Band, ...], window: float = WINDOW) -> Coincidences:
    """Pair the bands of the two spectra; singles and pairs come in the order infrared, Raman, as given.

    >>> from vibsym.evidence.bandlist import parse_bands
    >>> seen = parse_bands("wavenumber,spectrum\\n2023,IR\\n1935,IR\\n1936,Raman")
    >>> found = pair_bands(seen.of("IR"), seen.of("Raman"))
    >>> [" = ".join(map(str, item)) for item in found.items], found.chance_mean
    (['2023', '1935 = 1936'], 0.1)
    """
    if not 0 <= window <= NEIGHBOURHOOD:
        raise VibsymError(f"window {window:g} cm-1 is not between 0 and {NEIGHBOURHOOD:g}")
    near, distance, chance = _differences(infrared, raman, window)
    rows, columns = (sorted(range(len(bands)), key=lambda k: sorted(line.wavenumber for line in bands[k].lines))
                     for bands in (infrared, raman))
    found = _most_pairs(near[np.ix_(rows, columns)], distance[np.ix_(rows, columns)]) if near.any() else []
    partner = {rows[row]: columns[column] for row, column in found}
    taken = set(partner.values())
    items = [(band, raman[partner[index]]) if index in partner else (band,) for index, band in enumerate(infrared)]
    items += [(band,) for index, band in enumerate(raman) if index not in taken]
    return Coincidences(tuple(items), window, chance)


def distance_of(one: Band, two: Band) -> float:
    """Return how far apart two bands are, cm-1: their nearest lines."""
    return min(abs(a.wavenumber - b.wavenumber) for a in one.lines for b in two.lines)


def chance_of(number: int, mean: float) -> float:
    """Return the probability of `number` or more accidental pairs, 1 - sum_{j<k} m^j exp(-m)/j!  (Poisson).

    The upper tail is summed directly where it is small, so that no digits cancel.

    >>> round(chance_of(3, 1.2), 4)
    0.1205
    """
    if number <= 0:
        return 1.0
    if mean <= 0:
        return 0.0
    term, below = exp(-mean), 0.0
    for count in range(number):
        below += term
        term *= mean / (count + 1)
    if number <= mean:
        return max(0.0, 1.0 - below)
    tail, count = 0.0, number
    while term > tail * 1e-17:
        tail += term
        count += 1
        term *= mean / count
    return min(1.0, tail)


def _differences(infrared, raman, window: float) -> tuple[np.ndarray, np.ndarray, float]:
    """Return which bands coincide (n_IR, n_R), their distances in cm-1, and the mean number of accidental pairs."""
    shape = len(infrared), len(raman)
    near, distance, chance = np.zeros(shape, bool), np.full(shape, np.inf), 0.0
    if not all(shape):
        return near, distance, chance
    lines = [[(line, index) for index, band in enumerate(bands) for line in band.lines] for bands in (infrared, raman)]
    places = [np.array([line.wavenumber for line, _ in each]) for each in lines]
    errors = [np.array([line.uncertainty for line, _ in each]) for each in lines]
    owner = np.ix_(*(np.array([index for _, index in each]) for each in lines))
    apart = np.abs(places[0][:, None] - places[1][None, :])
    wide = window + errors[0][:, None] + errors[1][None, :]
    inside = apart <= wide + 1e-9
    np.logical_or.at(near, owner, inside)
    np.minimum.at(distance, owner, np.where(inside, apart, np.inf))
    # a band of several lines is one chance: that of its widest line near enough
    width = np.zeros(shape)
    np.maximum.at(width, owner, np.where(apart <= NEIGHBOURHOOD, wide, 0.0))
    return near, distance, round(float(width.sum()) / NEIGHBOURHOOD, 12)


def _most_pairs(near: np.ndarray, distance: np.ndarray) -> list[tuple[int, int]]:
    """Return the pairs (infrared, Raman): most of them, then the least sum of distances (an assignment problem)."""
    rows, columns = np.nonzero(near)
    if (near.sum(axis=0) <= 1).all() and (near.sum(axis=1) <= 1).all():
        return list(zip(rows.tolist(), columns.tolist()))
    from scipy.optimize import linear_sum_assignment

    close = np.where(near, distance, 0.0)
    cost = close + EQUAL / (1 + (close ** 2).max() * min(near.shape)) * close ** 2
    lonely = (cost.max() + 1) * (min(near.shape) + 1)      # dearer than all distances of a pairing together
    chosen = zip(*linear_sum_assignment(np.where(near, cost, lonely)))
    return [(int(row), int(column)) for row, column in chosen if near[row, column]]
