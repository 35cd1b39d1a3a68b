"""Published fundamentals as band lists without labels, and how many lines an assignment gives the published species."""

from collections import Counter
from dataclasses import replace

from vibsym.evidence.assignment import assign
from vibsym.evidence.bandlist import BandList
from vibsym.evidence.lines import Line
from vibsym.vibrations.calibration import relabellings


def lines_of(sample, observed, polarisation: bool):
    """Return the band list of a molecule and the published species of every line: {(spectrum, cm-1): labels}.

    Each fundamental is an infrared and a Raman line as its activity allows.  Fundamentals of one wavenumber are as many
    lines, and their labels a multiset: nobody can tell which line is which.
    """
    group, lines = sample.symmetry.group, []
    truth: dict[tuple[str, float], Counter] = {}
    for label, values in observed.items():
        species = group.species_named(label)
        for value in values:
            for name, active in (("IR", species.infrared), ("Raman", species.raman)):
                if active and value == value:
                    polarised = polarisation and name == "Raman" and species.polarised
                    truth.setdefault((name, value), Counter())[label] += 1
                    lines.append(Line(value, name, polarisation="p" if polarised else "", polarised=polarised))
    return BandList(tuple(lines), ("IR", "Raman")), truth


def judged(sample, estimates, polarisation: bool) -> list[tuple[bool, bool, float]]:
    """Return (right, firm, least extra cost) of every line, with the labels of the axes that fit best."""
    counts: dict[str, int] = {}
    for mode in estimates.modes:
        counts[mode.species] = counts.get(mode.species, 0) + 1
    best: list = []
    for renamed in relabellings(sample.symmetry.group.symbol):
        observed = {renamed.get(label, label): values for label, values in sample.observed.items()}
        if any(len(values) != counts.get(label) for label, values in observed.items()):
            continue
        bands, truth = lines_of(replace(sample, observed=observed), observed, polarisation)
        if not bands.lines:
            continue
        found, lines = assign(sample.symmetry, bands, estimates=estimates), []
        for row in found.assigned:
            for band in (row.infrared, row.raman):
                if band is not None:
                    left = truth[band.spectrum, band.lines[0].wavenumber]
                    right = left[row.mode.species] > 0
                    left[row.mode.species] -= right
                    least = min((cost for _, cost in row.alternatives), default=99.0)
                    lines.append((right, row.firm, least))
        lines += [(False, False, 0.0)] * len(found.leftover)
        if not best or sum(line[0] for line in lines) > sum(line[0] for line in best):
            best = lines
    return best


def score(lines) -> tuple[int, float, float, float]:
    """Return the number of lines, the parts that are right, firm, and of the firm ones right."""
    firm = [line for line in lines if line[1]]
    return (
        len(lines),
        sum(line[0] for line in lines) / len(lines),
        len(firm) / len(lines),
        sum(line[0] for line in firm) / max(len(firm), 1),
    )
