"""The excuses of an explanation, each with its weight, its lines and its proof in words and numbers."""

from dataclasses import dataclass

from vibsym.evidence.coincidence import Coincidences, chance_of
from vibsym.evidence.demands import Demand, demands_of, unmet
from vibsym.evidence.explanation import Explanation, Place
from vibsym.evidence.lines import Band, Line
from vibsym.evidence.weights import accidental_cost, kind_of, unexplained_cost
from vibsym.spectra.prediction import SURROUNDINGS, TRUE_GROUP, Prediction


@dataclass(frozen=True)
class Excuse:
    """One thing that must be excused: `unexplained`, `accidental`, `polarisation` or `leak`."""

    kind: str
    weight: float
    lines: tuple[Line, ...]
    reason: str

    def to_dict(self) -> dict:
        """Return the excuse for JSON."""
        return {"kind": self.kind, "weight": self.weight,
                "lines": [{"spectrum": line.spectrum, "wavenumber": line.wavenumber} for line in self.lines],
                "reason": self.reason}


def excuses_of(prediction: Prediction, seen: Coincidences, explanation: Explanation) -> tuple[Excuse, ...]:
    """Return the excuses, the heaviest kinds first; their weights add up to the total of the explanation."""
    demands = demands_of(prediction.bands, seen.items)
    excuses = [_unexplained(item, demands) for item in explanation.unexplained]
    for place in explanation.places:
        excuses += _polarisation(place, seen, demands)
    if explanation.broken:
        excuses.append(_accidental(explanation.broken, seen, demands))
    for place in explanation.places:
        excuses += _leaks(place, prediction)
    return tuple(excuses)


def _lines(item: tuple[Band, ...]) -> tuple[Line, ...]:
    return tuple(line for band in item for line in band.lines)


def _unexplained(item: tuple[Band, ...], demands: tuple[Demand, ...]) -> Excuse:
    kind = kind_of(item)
    halves = unexplained_cost(kind)
    demand = unmet(demands, item)
    reason = demand.words if demand else "its fundamental is taken by another band"
    if halves == 1:
        reason += "; weak or a shoulder, so it may be an overtone, a combination, a hot band or an isotope"
    return Excuse("unexplained", halves / 2, _lines(item), reason)


def _polarisation(place: Place, seen: Coincidences, demands: tuple[Demand, ...]) -> list[Excuse]:
    polarised = tuple(line for line in _lines(place.item) if line.polarised)
    if not polarised or place.species.totally_symmetric:
        return []
    item = next(item for item in seen.items if any(place.item[-1] is band for band in item))
    demand = unmet(demands, item, ("polarised", "polarised pairs", "pairs or polarised"))
    reason = demand.words if demand else "the totally symmetric fundamentals are taken"
    return [Excuse("polarisation", 1.0, polarised, f"{reason}; {place.species.label} is not totally symmetric")]


def _accidental(broken: tuple[tuple[Band, ...], ...], seen: Coincidences, demands: tuple[Demand, ...]) -> Excuse:
    number = len(broken)
    demand = unmet(demands, broken[0], ("pairs", "polarised pairs", "pairs or polarised"))
    reason = demand.words if demand else f"{len(seen.pairs)} pairs coincide"
    if number < len(seen.pairs):
        reason += f", {number} taken as accidental"
    reason += (f", chance explains {_two_digits(seen.chance_mean)} of them on average: probability of {number} or more "
               f"{_two_digits(chance_of(number, seen.chance_mean))}")
    if number > seen.by_chance:
        reason += f"; chance covers {seen.by_chance or 'none'} of them (1 % level)"
    return Excuse("accidental", accidental_cost(number, seen.by_chance) / 2,
                  tuple(line for item in broken for line in _lines(item)), reason)


def _leaks(place: Place, prediction: Prediction) -> list[Excuse]:
    excuses = []
    for band in place.item:
        species = place.species
        if species.active_in(band.spectrum):
            continue
        word = "infrared" if band.spectrum == "IR" else "Raman"
        why = species.leaks_in(band.spectrum)
        ways = []
        if TRUE_GROUP in why:
            ways.append(f"(a) allowed in the true group {prediction.true_group}".rstrip())
        if SURROUNDINGS in why:
            ways.append("(b) let through by the surroundings"
                        + (f" ({prediction.surroundings})" if prediction.surroundings else ""))
        excuses.append(Excuse("leak", 0.5, band.lines,
                              f"{species.label} is silent in the {word} spectrum in {prediction.group}: a weak band "
                              + ", ".join(ways)))
    return excuses


def _two_digits(value: float) -> str:
    """Return a number with two significant digits, without an exponent where it can be read.

    >>> _two_digits(1.2), _two_digits(0.1205), _two_digits(0.00004), _two_digits(12.34)
    ('1.2', '0.12', '4.0e-05', '12')
    """
    if value == 0:
        return "0"
    if value < 0.001:
        return f"{value:.1e}"
    return f"{value:.2g}" if value < 100 else f"{value:.0f}"
