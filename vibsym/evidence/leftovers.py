"""Lines that no fundamental explains, matched with overtones, combinations, differences and hot bands.

A candidate must be active in the spectrum of the line and lie within the match (cm-1).  Candidates are ranked by

    distance/match × (2 against the usual direction of the anharmonic shift, else 1) + ½ (quanta - 2)
    and, for a difference, + ½ - ½ √fraction

(vibsym's own rule): observed overtones and sums lie below the sum of the fundamentals, as a rule; more quanta are
weaker; a difference is weakened by the few molecules in its lower level.  A hot band counts as a difference of three
quanta that lies below its fundamental, as a rule; those from levels with less than 1 % of the molecules are left out.
"""

from bisect import bisect_left
from collections.abc import Sequence
from dataclasses import dataclass

from vibsym.errors import VibsymError
from vibsym.evidence.lines import Line
from vibsym.spectra.combinations import Combination, Combinations, HotBand

DEFAULT_MATCH = 10.0               # cm-1
DEFAULT_WINDOW = 5.0               # cm-1, between a line and the fundamental that it is
POPULATED = 0.01                   # share of the molecules in the lower level of a hot band
BEYOND = 5.0                       # matches: the nearest combination is still named where nothing lies within one
SLACK = 1.0                        # cm-1; a shift that small has no direction


@dataclass(frozen=True)
class Candidate:
    """A combination that may be a line; `shift` = observed - sum of the fundamentals, cm-1; lowest score first."""

    combination: Combination | HotBand
    shift: float
    usual: bool
    score: float

    def to_dict(self) -> dict:
        """Return the candidate for JSON."""
        return {"label": self.combination.label, "species": dict(self.combination.species),
                "wavenumber": self.combination.wavenumber, "shift": round(self.shift, 3), "usual_shift": self.usual,
                "fraction": self.combination.fraction, "score": round(self.score, 3)}


@dataclass(frozen=True)
class Explanation:
    """A line with its candidates, or with the fundamental that it is; without either the `nearest` beyond the match."""

    line: Line
    fundamental: str | None
    candidates: tuple[Candidate, ...]
    nearest: Candidate | None = None

    def to_dict(self) -> dict:
        """Return the explanation for JSON."""
        return {"line": self.line.wavenumber, "spectrum": self.line.spectrum, "fundamental": self.fundamental,
                "candidates": [each.to_dict() for each in self.candidates],
                "nearest": None if self.nearest is None else self.nearest.to_dict()}


def explain_lines(lines: Sequence[Line], result: Combinations, match: float = DEFAULT_MATCH,
                  window: float = DEFAULT_WINDOW) -> tuple[Explanation, ...]:
    """Return for every line the fundamental within `window` that is active there, or else the ranked candidates."""
    if not 0 <= match < float("inf"):
        raise VibsymError(f"--match {match:g}: give a distance in cm-1, zero or more")
    if not 0 <= window < float("inf"):
        raise VibsymError(f"--window {window:g}: give a distance in cm-1, zero or more")
    populated = [band for band in result.hot_bands if band.fraction >= POPULATED]
    known = [each for each in (*result.combinations, *populated) if each.wavenumber is not None]
    known.sort(key=lambda each: each.wavenumber)
    positions = [each.wavenumber for each in known]
    found = []
    for line in lines:
        fundamental = _fundamental(line, result, window)
        reach = BEYOND * match + 1e-9
        low, high = (bisect_left(positions, line.wavenumber + step) for step in (-reach, reach))
        active = [each for each in known[low:high] if (each.infrared if line.spectrum == "IR" else each.raman)
                  and (not line.polarised or result.group.species[0].label in each.species)]
        ranked = () if fundamental else tuple(sorted((_candidate(line, each, match) for each in active),
                                                     key=lambda each: (each.score, each.combination.label)))
        candidates = tuple(each for each in ranked if abs(each.shift) <= match + 1e-9)
        found.append(Explanation(line, fundamental, candidates, None if candidates or not ranked else ranked[0]))
    return tuple(found)


def _fundamental(line: Line, result: Combinations, window: float) -> str | None:
    near = []
    for mode in result.modes:
        species = result.group.species_named(mode.species)
        if mode.wavenumber is not None and (species.infrared if line.spectrum == "IR" else species.raman):
            distance = abs(mode.wavenumber - line.wavenumber)
            if distance <= window + line.uncertainty:
                near.append((distance, mode.name))
    return min(near)[1] if near else None


def _candidate(line: Line, combination: Combination | HotBand, match: float) -> Candidate:
    shift = line.wavenumber - combination.wavenumber
    either_way = combination.is_difference and not isinstance(combination, HotBand)
    usual = either_way or shift <= SLACK
    score = abs(shift) / (match or 1.0) * (1 if usual else 2) + 0.5 * (combination.order - 2)
    if combination.is_difference:
        score += 0.5 - 0.5 * (combination.fraction or 0.0) ** 0.5
    return Candidate(combination, shift, usual, score)


@dataclass(frozen=True, eq=False)
class Combined:
    """Combinations of a group or a structure (`symmetry`), with the lines explained by them."""

    result: Combinations
    explanations: tuple[Explanation, ...] = ()
    symmetry: object = None

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        group = self.result.group
        bare = {"symbol": group.symbol, "order": group.order, "tolerance": None, "deviation": None,
                "chiral": group.chiral, "centrosymmetric": group.centrosymmetric}
        answer = {} if self.symmetry is None else {"structure": self.symmetry.structure.to_dict()}
        answer["point_group"] = bare if self.symmetry is None else self.symmetry.to_dict()
        answer |= {key: value for key, value in self.result.to_dict().items() if key != "group"}
        return answer | {"lines": [each.to_dict() for each in self.explanations]}
