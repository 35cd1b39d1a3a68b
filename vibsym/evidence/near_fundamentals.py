"""Lines left over in an assignment that lie just beyond the window from a fundamental seen in the other spectrum only.

The same band of a gas, a liquid and a solution may be shifted so far (common practice); a wider window lets the line
be the other half of the fundamental.
"""

from math import ceil

from vibsym.evidence.coincidence import NEAR, WINDOW, distance_of


def near_fundamentals(result) -> tuple[str, ...]:
    """Return a sentence for each line left over (of an `Assignment`) that a wider window would take in.

    The fundamental is active where the line was seen, has no line there, and is totally symmetric if the line is
    polarised; of several the nearest is named.
    """
    told, group = [], result.symmetry.group
    for band in result.leftover:
        near = []
        for row in result.assigned:
            active, own, other = ((row.mode.infrared, row.infrared, row.raman) if band.spectrum == "IR" else
                                  (row.mode.raman, row.raman, row.infrared))
            if not active or own is not None or other is None:
                continue
            if band.polarised and not group.species_named(row.mode.species).totally_symmetric:
                continue
            if (apart := distance_of(band, other)) <= NEAR * WINDOW:
                near.append((apart, row.mode.name, other))
        if near:
            apart, name, other = min(near, key=lambda each: each[0])
            told.append(f"{band.spectrum} {band} lies {apart:g} cm-1 from {other.spectrum} {other} ({name}), which is "
                        f"active there too: one band, if the spectra are of different phases or solvents "
                        f"(--window {ceil(apart)})")
    return tuple(told)
