"""What to measure next: the measurements for which the surviving structures predict different results, cheapest first.

Cheapest is what the sample at hand and the same instrument give: the polarisation of Raman lines already seen, then a
better resolved spectrum of a kind already taken, then the other spectrum, then its polarisation (common practice).
"""

from vibsym.evidence.bandlist import BandList
from vibsym.spectra.prediction import Prediction

MOST_NAMED = 6


def separating(candidates, observed: BandList) -> tuple[str, ...]:
    """Return sentences, the cheapest measurement first; nothing if fewer than two structures survive.

    `candidates` are ranked; mixtures are left out, since any two structures can be mixed.
    """
    survivors = [each.prediction for each in candidates if each.verdict != "excluded" and not each.prediction.parts]
    if len(survivors) < 2:
        return ()
    if not observed.whole_range and not all(each.region for each in survivors):
        return ("no measurement yet: the lines span less than an octave, as those of one region do; compare that "
                "region (--oscillators), or state the range that was measured (--between)",)
    have, sentences, survivors = observed.spectra, [], named(survivors)
    measured = any(line.polarisation for line in observed.lines)
    if "Raman" in have and not measured:
        sentences += _polarisation(survivors, "polarisation of the Raman lines")
    for spectrum in have:
        sentences += _more_bands(survivors, observed, spectrum)
    if "Raman" not in have:
        sentences += _other_spectrum(survivors, "a Raman spectrum", "raman", "Raman")
        sentences += _polarisation(survivors, "polarisation in that Raman spectrum")
    if "IR" not in have:
        sentences += _other_spectrum(survivors, "an infrared spectrum", "infrared", "infrared")
    if not sentences:
        return (_nothing(survivors),)
    return tuple(sentences)


def named(survivors: list[Prediction]) -> list[tuple[str, Prediction]]:
    """Return each with a short name: the group where it tells the survivors apart, else the name with the group."""
    groups = [each.group for each in survivors]
    apart = len(set(groups)) == len(groups)
    return [(group if apart else f"{each.name} ({group})", each) for group, each in zip(groups, survivors)]


def _by_value(survivors: list[tuple[str, Prediction]], value) -> list[tuple[object, list[str]]]:
    """Return the values from the largest down, each with the names of the structures that predict it."""
    found: dict = {}
    for name, each in survivors:
        found.setdefault(value(each), []).append(name)
    return sorted(found.items(), key=lambda pair: pair[0], reverse=True)


def _names(names: list[str]) -> str:
    names = list(dict.fromkeys(names))
    if len(names) > MOST_NAMED:
        return ", ".join(names[:MOST_NAMED]) + f" and {len(names) - MOST_NAMED} more"
    return names[0] if len(names) == 1 else ", ".join(names[:-1]) + " and " + names[-1]


def _predict(names: list[str], what: str) -> str:
    return f"{_names(names)} predict{'s' if len(set(names)) == 1 else ''} {what}"


def _polarisation(survivors: list[tuple[str, Prediction]], title: str) -> list[str]:
    values = _by_value(survivors, lambda each: each.counts["polarised"])
    if len(values) < 2:
        return []
    first = _predict(values[0][1], f"{values[0][0]} polarised")
    return [f"{title}: " + ", ".join([first, *(f"{_names(names)} {number or 'none'}" for number, names in values[1:])])]


def _more_bands(survivors: list[tuple[str, Prediction]], observed: BandList, spectrum: str) -> list[str]:
    """A better spectrum of the same kind: a band more than one structure allows would exclude it."""
    key, word = ("infrared", "infrared") if spectrum == "IR" else ("raman", "Raman")
    values = _by_value(survivors, lambda each: each.counts[key])
    number, names = values[-1]
    if len(values) < 2 or max(number, len(observed.of(spectrum))) >= values[0][0]:
        return []
    larger = ", ".join(f"{_names(who)} {many}" for many, who in values[:-1])
    allow = "allows" if len(names) == 1 else "allow"
    return [f"a more sensitive or better resolved {word} spectrum: {_names(names)} {allow} at most {number}, {larger}; "
            f"{len(observed.of(spectrum))} seen"]


def _other_spectrum(survivors: list[tuple[str, Prediction]], title: str, key: str, word: str) -> list[str]:
    def value(each: Prediction) -> tuple[int, int]:
        return each.counts[key], each.counts["coincident"]
    values = _by_value(survivors, value)
    if len(values) < 2:
        return []
    full = [name for name, each in survivors
            if each.counts["infrared"] == each.counts["raman"] == each.counts["coincident"] > 0]
    if len(full) == 1:
        return [f"{title}: only {full[0]} has all its bands in both"]
    told = [f"{_names(names)} at most {number} {word} band{'s' if number != 1 else ''}, "
            f"{both or 'none'} of them in both spectra" for (number, both), names in values]
    return [f"{title}: " + "; ".join(told)]


def _nothing(survivors: list[tuple[str, Prediction]]) -> str:
    names = _names([name for name, _ in survivors])
    return (f"infrared, Raman and polarisation cannot separate {names}: the numbers they predict are equal, or as many "
            "bands have been seen as any allows; isotopic substitution, intensities or diffraction can")
