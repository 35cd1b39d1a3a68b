"""Screening: which of the proposed structures the observed bands allow, and what exactly speaks against the others.

The score is the total weight of the excuses plus 1/3 for each predicted fundamental that was not seen, in the spectra
that were measured.  Verdict from the excuses alone: `fits` 0; `strained` up to the larger of 1 and 5 % of the bands;
`excluded` above.  A band counts as unseen only within the observed or stated range.  Oscillators lie in their region.
A fundamental of a whole molecule has a wavenumber only once it is seen: where the other spectrum was not observed it is
not missing there (infrared ends where Raman goes on), and one seen nowhere counts only if the stated range, or else the
lines, span an octave (less is the list of one region; our own rule).
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import ceil

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import BandList, in_region
from vibsym.evidence.coincidence import WINDOW, Coincidences, distance_of, pair_bands
from vibsym.evidence.excuses import Excuse, excuses_of
from vibsym.evidence.explanation import Explanation, explain
from vibsym.evidence.separation import separating
from vibsym.spectra.prediction import Prediction, SpeciesBands, mixture

FITS, STRAINED, EXCLUDED = "fits", "strained", "excluded"
MOST_MISSES = 4   # pairs just beyond the window that a note names
MOST_MIXED = 60   # structures; more would make thousands of pairs
CAUTION = ("Fitting is not proof: symmetry permits, it never promises. Fewer bands than predicted exclude no "
           "structure, and one that was not proposed may fit as well.")


@dataclass(frozen=True)
class Unseen:
    """A predicted fundamental that was not seen, and in which of the measured spectra it is missing."""

    species: str
    infrared: bool
    raman: bool

    def to_dict(self) -> dict:
        """Return it for JSON."""
        return {"species": self.species, "infrared": self.infrared, "raman": self.raman}


@dataclass(frozen=True)
class Candidate:
    """One structure (or two that share the lines) and how well it explains the bands."""

    prediction: Prediction
    explanation: Explanation
    excuses: tuple[Excuse, ...]
    unseen: tuple[Unseen, ...]
    verdict: str
    rank: int = 0

    @property
    def weight(self) -> float:
        """Total weight of the excuses."""
        return self.explanation.total

    @property
    def sixths(self) -> int:
        """The score in sixths, a whole number that can be compared exactly."""
        return 3 * self.explanation.halves + 2 * len(self.unseen)

    @property
    def score(self) -> float:
        """Weight of the excuses and 1/3 for each unseen band."""
        return round(self.sixths / 6, 6)

    def evidence(self) -> dict:
        """Return rank, score, verdict, excuses, explanation and unseen for JSON."""
        return {"rank": self.rank, "score": self.score, "verdict": self.verdict,
                "excuses": [excuse.to_dict() for excuse in self.excuses],
                "explanation": [{"species": place.species.label,
                                 "lines": [{"spectrum": line.spectrum, "wavenumber": line.wavenumber}
                                           for band in place.item for line in band.lines]}
                                for place in self.explanation.places],
                "unseen": [each.to_dict() for each in self.unseen]}

    def to_dict(self) -> dict:
        """Return the candidate for JSON; a mixture has `structures` and `point_groups`."""
        parts = self.prediction.parts
        if parts:
            head = {"structures": [part.structure for part in parts],
                    "point_groups": [part.point_group for part in parts]}
        else:
            head = {"structure": self.prediction.structure, "point_group": self.prediction.point_group}
        more = {"oscillators": self._oscillators()} if self.prediction.region else {}
        if self.prediction.local_group:
            more["local"] = {"point_group": self.prediction.local_group}
        return head | more | {"predicted": self.prediction.counts} | self.evidence()

    def _oscillators(self) -> dict:
        """Return the oscillators with their species and counts, as `expect` has them."""
        gamma: dict[str, int] = {}
        for species in self.prediction.bands:
            gamma[species.label] = gamma.get(species.label, 0) + species.count
        return {"set": self.prediction.region, "gamma": gamma, **self.prediction.counts}


@dataclass(frozen=True)
class Screening:
    """The candidates in the order of their rank (equal scores in the order given), and what would separate them."""

    observed: BandList
    seen: Coincidences
    candidates: tuple[Candidate, ...]
    separating: tuple[str, ...]
    limits: tuple[str, ...]         # what cannot be concluded
    notes: tuple[str, ...] = ()
    caution: str = CAUTION

    def candidate_of(self, prediction: Prediction) -> Candidate:
        """Return the candidate made of a prediction."""
        return next(each for each in self.candidates if each.prediction is prediction)

    def bands_object(self) -> dict:
        """Return the `bands` object for JSON."""
        return {"infrared": len(self.observed.of("IR")), "raman": len(self.observed.of("Raman")),
                "pairs": len(self.seen.pairs), "window": self.seen.window, "chance_mean": self.seen.chance_mean,
                "spectra": list(self.observed.spectra), "source": self.observed.source}

    def to_dict(self) -> dict:
        """Return the screening for JSON."""
        return {"bands": self.bands_object(), "candidates": [each.to_dict() for each in self.candidates],
                "separating": list(self.separating), "limits": list(self.limits), "notes": list(self.notes),
                "caution": self.caution}


@dataclass(frozen=True)
class ScreenOptions:
    """Coincidence window (cm-1), the weight still called strained (None: conventions), mixtures of two."""

    window: float = WINDOW
    allow: float | None = None
    mixture: bool = False


def screen_predictions(predictions: Sequence[Prediction], observed: BandList, options: ScreenOptions | None = None,
                       progress: Callable[[int, int], None] | None = None) -> Screening:
    """Return the candidates ranked by how much must be excused; `progress` is told (done, all).

    Works for whole molecules, oscillators, local groups and isomers alike.
    """
    options = options or ScreenOptions()
    if options.allow is not None and not 0 <= options.allow < float("inf"):
        raise VibsymError(f"--allow {options.allow:g}: give the total weight of excuses still allowed, zero or more")
    singles = list(predictions)
    if not singles:
        raise VibsymError("no structure to screen")
    spans = {each.span for each in singles}
    if len(spans) == 1 and (span := spans.pop()):
        observed = in_region(observed, *span)
    seen = pair_bands(observed.of("IR"), observed.of("Raman"), options.window)
    asked = singles + (_mixtures(singles) if options.mixture else [])
    candidates = []
    for number, prediction in enumerate(asked, 1):
        candidates.append(_candidate(prediction, observed, seen, options.allow))
        if progress:
            progress(number, len(asked))
    ranked = _ranked(candidates)
    return Screening(observed, seen, ranked, separating(ranked, observed), _limits(observed),
                     (*_notes(observed, singles), *_near_misses(seen)))


def _mixtures(singles: list[Prediction]) -> list[Prediction]:
    if len(singles) < 2:
        raise VibsymError("--mixture needs at least two structures")
    if len(singles) > MOST_MIXED:
        pairs = len(singles) * (len(singles) - 1) // 2
        raise VibsymError(f"--mixture of {len(singles)} structures would be {pairs} pairs; screen them singly and "
                          f"mix at most {MOST_MIXED}")
    return [mixture(first, second) for index, first in enumerate(singles) for second in singles[index + 1:]]


def _candidate(prediction: Prediction, observed: BandList, seen: Coincidences, allow: float | None) -> Candidate:
    one_sided = frozenset() if prediction.region else observed.one_sided
    explanation = explain(prediction, seen, observed.spectra, one_sided)
    counted = bool(prediction.region) or observed.whole_range
    unseen = _unseen(prediction, explanation, observed.spectra, one_sided) if counted else ()
    limit = allow if allow is not None else max(1.0, 0.05 * len(observed.bands))
    verdict = FITS if not explanation.halves else STRAINED if explanation.total <= limit + 1e-9 else EXCLUDED
    return Candidate(prediction, explanation, excuses_of(prediction, seen, explanation), unseen, verdict)


def _unseen(prediction: Prediction, explanation: Explanation, spectra: tuple[str, ...],
            one_sided: frozenset) -> tuple[Unseen, ...]:
    """Return one entry for each fundamental that is missing in a measured spectrum that should show it.

    A fundamental active in both spectra and seen in one of them counts once, like one seen in neither; not where the
    other spectrum was not observed.
    """
    found: dict[SpeciesBands, list[set[str]]] = {}
    for place in explanation.places:
        alone = not place.broken and len(place.item) == 1 and place.item[0] in one_sided
        found.setdefault(place.species, []).append(set(spectra) if alone else {band.spectrum for band in place.item})
    unseen = []
    for species in prediction.bands:
        due = {name for name in spectra if species.active_in(name)}
        where = found.get(species, [])
        for shown in where + [set()] * (species.count - len(where)):
            if due - shown:
                unseen.append(Unseen(species.label, "IR" in due - shown, "Raman" in due - shown))
    return tuple(unseen)


def _ranked(candidates: list[Candidate]) -> tuple[Candidate, ...]:
    """Return the candidates by score; equal scores share a rank and keep the order given."""
    ranked: list[Candidate] = []
    for place, each in enumerate(sorted(candidates, key=lambda each: each.sixths), 1):
        tied = ranked and ranked[-1].sixths == each.sixths
        ranked.append(Candidate(each.prediction, each.explanation, each.excuses, each.unseen, each.verdict,
                                ranked[-1].rank if tied else place))
    return tuple(ranked)


def _limits(observed: BandList) -> tuple[str, ...]:
    if len(observed.spectra) == 2:
        return ()
    if observed.spectra == ("IR",):
        return ("With the infrared spectrum alone nothing can be concluded about coincidences (so neither for nor "
                "against a centre of symmetry), about modes active in Raman only, or about which bands are totally "
                "symmetric.",)
    return ("With the Raman spectrum alone nothing can be concluded about coincidences (so neither for nor against a "
            "centre of symmetry) or about modes active in infrared only.",)


def _notes(observed: BandList, predictions: list[Prediction]) -> tuple[str, ...]:
    notes = list(observed.notes)
    if not observed.whole_range and any(not each.region for each in predictions):
        notes.append("The lines span less than an octave, as those of one region do, the predictions are those of the "
                     "whole molecule: none is counted as unseen, and fundamentals of other regions may hide an excess "
                     "of lines; --oscillators compares one region, --between states the range that was measured.")
    if observed.between is None and observed.whole_range and any(each.region for each in predictions):
        regions = ", ".join(dict.fromkeys(each.region for each in predictions if each.region))
        notes.append(f"The lines span more than one region, the predictions are those of {regions}: bends and other "
                     "modes in the list stay unexplained; --between takes the region of the stretches.")
    notes += [note for each in predictions for note in each.notes]
    return tuple(dict.fromkeys(notes))


def _near_misses(seen: Coincidences) -> tuple[str, ...]:
    """Tell which bands a wider window would pair, because that decides about mutual exclusion and excess bands."""
    misses = seen.near_misses
    if not misses:
        return ()
    told = ", ".join(f"IR {one} and Raman {two}" for one, two in misses[:MOST_MISSES])
    more = f" and {len(misses) - MOST_MISSES} more pairs" if len(misses) > MOST_MISSES else ""
    widest = ceil(max(distance_of(one, two) for one, two in misses))
    return (f"Taken for different fundamentals, because they lie beyond the window: {told}{more}. If the spectra are "
            f"of different phases or solvents they may be the same bands: --window {widest} pairs them.",)
