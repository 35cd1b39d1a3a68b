"""Coincidences: most pairs, then the least sum of distances, against every pairing; chance against Poisson's series."""

import random
from itertools import permutations
from math import exp, factorial

import pytest

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import parse_bands
from vibsym.evidence.coincidence import chance_of, pair_bands
from vibsym.evidence.lines import Band, Line


def bands(spectrum: str, *places: float, uncertainty: float = 0.0) -> tuple[Band, ...]:
    return tuple(Band((Line(place, spectrum, uncertainty=uncertainty),)) for place in places)


def pairs(found) -> list[tuple[float, float]]:
    return [tuple(band.lines[0].wavenumber for band in pair) for pair in found.pairs]


@pytest.mark.parametrize("seed", range(60))
def test_most_pairs_then_least_distance(seed):
    draw = random.Random(seed)
    infrared = bands("IR", *(draw.randint(0, 25) + 1000.0 for _ in range(draw.randint(0, 5))))
    raman = bands("Raman", *(draw.randint(0, 25) + 1000.0 for _ in range(draw.randint(0, 5))))
    best = (0, 0.0)
    padded = [*raman, *[None] * len(infrared)]
    for order in permutations(padded, len(infrared)):
        apart = [abs(a.lines[0].wavenumber - b.lines[0].wavenumber) for a, b in zip(infrared, order) if b is not None]
        close = [each for each in apart if each <= 5]
        best = min(best, (-len(close), sum(close)))
    found = pair_bands(infrared, raman)
    assert (-len(found.pairs), sum(abs(a - b) for a, b in pairs(found))) == best
    assert len(found.items) == len(infrared) + len(raman) - len(found.pairs)


def test_the_window_is_widened_by_the_uncertainties():
    assert not pair_bands(bands("IR", 900), bands("Raman", 905.1)).pairs
    assert pair_bands(bands("IR", 900), bands("Raman", 905)).pairs
    assert pair_bands(bands("IR", 900, uncertainty=2), bands("Raman", 908, uncertainty=1)).pairs
    assert not pair_bands(bands("IR", 900), bands("Raman", 901), window=0.5).pairs


def test_a_band_of_several_lines_is_one_partner():
    seen = parse_bands("wavenumber,spectrum,together\n1888,IR,a\n1899,IR,a\n1889,Raman,\n1898,Raman,\n")
    found = pair_bands(seen.of("IR"), seen.of("Raman"))
    assert len(found.pairs) == 1 and len(found.items) == 2
    assert found.chance_mean == pytest.approx(2 * 0.05)       # one infrared band, two Raman bands


def test_mean_number_of_accidental_pairs():
    # differences 10, 100 and 101 cm-1: two count, 5/100 each
    found = pair_bands(bands("IR", 1000), bands("Raman", 1010, 900, 1101))
    assert found.chance_mean == pytest.approx(0.10)
    assert pair_bands(bands("IR", 1000, uncertainty=2), bands("Raman", 1010, uncertainty=1)).chance_mean \
        == pytest.approx(0.08)
    assert pair_bands((), bands("Raman", 900)).chance_mean == 0


@pytest.mark.parametrize("number, mean", [(1, 0.1), (3, 1.2), (5, 0.3), (2, 7.0), (12, 3.0)])
def test_poisson(number, mean):
    direct = sum(mean ** k * exp(-mean) / factorial(k) for k in range(number, number + 60))
    assert chance_of(number, mean) == pytest.approx(direct, rel=1e-12)
    assert chance_of(0, mean) == 1 and chance_of(1, 0.0) == 0


def test_how_many_pairs_chance_explains():
    # mean 0.15: one or more 0.139, two or more 0.0102, three or more 0.0005
    found = pair_bands(bands("IR", 1000, 1200, 1400), bands("Raman", 1000, 1200, 1400))
    assert (found.chance_mean, found.by_chance) == (pytest.approx(0.15), 2)
    # mean 0.05: one or more 0.049, two or more 0.0012
    assert pair_bands(bands("IR", 1000), bands("Raman", 1000)).by_chance == 1
    assert pair_bands(bands("IR", 1000), bands("Raman", 1000), window=0.9).by_chance == 0


@pytest.mark.parametrize("window", [-1, 101, float("nan")])
def test_impossible_windows(window):
    with pytest.raises(VibsymError, match="window"):
        pair_bands((), (), window)


def test_equal_sums_are_decided_whatever_the_order_of_rows():
    """528 and 530 with 523 and 528: both ways of pairing sum up to 7; squares prefer neither crossing nor rows."""
    infrared, raman = bands("IR", 528.0, 530.0, uncertainty=2.5), bands("Raman", 523.0, 528.0, uncertainty=2.5)
    for first in (infrared, infrared[::-1]):
        for second in (raman, raman[::-1]):
            assert set(pairs(pair_bands(first, second))) == {(528.0, 523.0), (530.0, 528.0)}
    tied = {frozenset(pairs(pair_bands(first, bands("Raman", 900.0))))
            for first in (bands("IR", 898.0, 902.0), bands("IR", 902.0, 898.0))}
    assert tied == {frozenset({(898.0, 900.0)})}
