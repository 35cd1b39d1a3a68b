"""Assign observed lines to fundamentals: the optimum of the cost of `assignment_costs.py`, and how firm each line is.

Activity and a measured polarisation are constraints; a coincident pair, the estimates of the force field, strengths
and characteristic ranges are costs.  For every line the whole spectrum is assigned again with the line in each other
species that could hold it: the extra cost tells how nearly another assignment is as good.  A line is firm when every
other species costs at least FIRM more (measured: of such lines at least 98 % have the published species,
tests/benchmarks/assignment.py).
"""

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.assignment_costs import (
    BROKEN_PAIR,
    LEFT_OVER,
    LEFT_OVER_WEAK,
    UNSEEN,
    estimate_costs,
    mean_wavenumber,
    range_costs,
    spectrum_costs,
)
from vibsym.evidence.bandlist import BandList
from vibsym.evidence.coincidence import WINDOW, pair_bands
from vibsym.evidence.common_errors import CommonErrors
from vibsym.evidence.lines import Band
from vibsym.evidence.matching import Costs, Matching
from vibsym.evidence.pins import Pin, parse_pins, pinned
from vibsym.structures.finder import find_symmetry
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.estimates import Estimates, describe, estimate
from vibsym.vibrations.normal_modes import Mode

FIRM = 5.0  # extra cost from which a line is firm
TOLD = 30.0  # alternatives dearer than this are not told


@dataclass(frozen=True, eq=False)
class Assigned:
    """A fundamental with its bands, and the extra cost of every other species."""

    mode: Mode
    infrared: Band | None
    raman: Band | None
    description: str
    alternatives: tuple[tuple[str, float], ...]
    pinned: bool = False

    @property
    def firm(self) -> bool:
        """Whether every other species costs at least FIRM more."""
        return self.pinned or all(cost >= FIRM for _, cost in self.alternatives)

    @property
    def wavenumber(self) -> float:
        """Mean of the two lines, cm-1."""
        seen = [mean_wavenumber(band) for band in (self.infrared, self.raman) if band is not None]
        return sum(seen) / len(seen)

    def to_dict(self) -> dict:
        """Return the row for JSON."""
        return {
            "mode": self.mode.name,
            "species": self.mode.species,
            "infrared_line": _value(self.infrared),
            "raman_line": _value(self.raman),
            "estimate": round(self.mode.wavenumber, 1),
            "description": self.description,
            "firm": bool(self.firm),
            "alternatives": [{"species": label, "extra_cost": cost} for label, cost in self.alternatives],
        }


@dataclass(frozen=True, eq=False)
class Assignment:
    """The assignment of a band list to a structure."""

    symmetry: Symmetry
    observed: BandList
    estimates: Estimates
    assigned: tuple[Assigned, ...]
    leftover: tuple[Band, ...]
    unseen: tuple[Mode, ...]
    cost: float
    notes: tuple[str, ...] = field(default=())

    def to_dict(self) -> dict:
        """Return the JSON object."""
        unseen = [
            {"mode": mode.name, "species": mode.species, "estimate": round(mode.wavenumber, 1)} for mode in self.unseen
        ]
        leftover = [
            {"spectrum": band.spectrum, "wavenumber": line.wavenumber} for band in self.leftover for line in band.lines
        ]
        return {
            "structure": self.symmetry.structure.to_dict(),
            "point_group": self.symmetry.to_dict(),
            "assignments": [row.to_dict() for row in self.assigned],
            "leftover": leftover,
            "unseen": unseen,
            "cost": round(self.cost, 3),
        }


def assign(
    structure: "Symmetry | object",
    observed: BandList,
    *,
    window: float = WINDOW,
    pins: Sequence[str] = (),
    estimates: Estimates | None = None,
) -> Assignment:
    """Return the assignment of least cost to a structure, or to a structure in the group and axes of its `Symmetry`.

    `pins` fix lines (`ν4=1306`, `T2=1306`); `estimates` are those of the standard force field when not given.
    """
    symmetry = structure if isinstance(structure, Symmetry) else find_symmetry(structure)
    estimates = estimate(symmetry) if estimates is None else estimates
    if not estimates.modes:
        raise VibsymError(f"{symmetry.structure.formula}: no vibrations, so there is nothing to assign")
    bands = observed.bands
    held = parse_pins(pins, symmetry.group, estimates.modes)
    allowed = pinned(held, bands, estimates.modes)
    model = cost_model(observed, estimates, window)
    best = model.optimum(allowed)
    if best is None:
        raise VibsymError("the pinned lines cannot all be assigned together; take one --pin away")
    return _result(symmetry, observed, estimates, model, allowed, best, held)


def cost_model(observed: BandList, estimates: Estimates, window: float = WINDOW) -> CommonErrors:
    """Return the costs of `assignment_costs.py` for a band list and its estimates, with their common errors."""
    bands = observed.bands
    place = {id(band): row for row, band in enumerate(bands)}
    found = pair_bands(*(tuple(band for band in bands if band.spectrum == name) for name in ("IR", "Raman")), window)
    said, alone = spectrum_costs(bands, estimates, observed.spectra)
    ranges = range_costs(bands, estimates)
    candidates = [(place[id(item[0])], place[id(item[1])]) for item in found.pairs]
    pairs = tuple((i, r) for i, r in candidates if np.isfinite(said[i] + said[r]).any())
    first, second = np.array(pairs, dtype=int).reshape(-1, 2).T
    leftover = np.array([LEFT_OVER_WEAK if band.weak else LEFT_OVER for band in bands])
    unseen = np.array([_unseen_cost(mode, observed) for mode in estimates.modes])

    def costs(shifts: np.ndarray) -> Costs:
        far = estimate_costs(bands, estimates, shifts, model.own) + ranges
        together = (far[first] + far[second]) / 2 + said[first] + said[second]
        return Costs(far + said + alone, together, pairs, leftover, unseen, BROKEN_PAIR)

    model = CommonErrors(np.array([mean_wavenumber(band) for band in bands]), estimates, costs)
    return model


def _unseen_cost(mode: Mode, observed: BandList) -> float:
    active = (mode.infrared and "IR" in observed.spectra) or (mode.raman and "Raman" in observed.spectra)
    inside = observed.between is None or observed.between[0] <= mode.wavenumber <= observed.between[1]
    return UNSEEN if active and inside else 0.0


def _in_order(best: Matching, bands, modes: Sequence[Mode], held: Sequence[Pin]) -> Matching:
    """Let the lines of one species follow the order of its estimates, as the numbers do."""
    places = best.places.copy()
    fixed = {pin.mode for pin in held if pin.mode is not None}
    for species in {mode.species for mode in modes}:
        groups: dict[int, list[int]] = {}
        for row in range(len(bands)):
            if places[row] >= 0 and modes[places[row]].species == species and places[row] not in fixed:
                groups.setdefault(int(places[row]), []).append(row)
        columns = sorted(groups, key=lambda column: -modes[column].wavenumber)
        ordered = sorted(groups.values(), key=lambda rows: -np.mean([mean_wavenumber(bands[row]) for row in rows]))
        for column, rows in zip(columns, ordered):
            places[rows] = column
    return Matching(places, best.whole, best.cost)


def _result(symmetry, observed, estimates, model, allowed, found, held) -> Assignment:
    bands, modes = observed.bands, estimates.modes
    best = _in_order(found[0], bands, modes, held)
    rows: dict[int, dict[str, int]] = {}
    for row, column in enumerate(best.places.tolist()):
        if column >= 0:
            rows.setdefault(column, {})[bands[row].spectrum] = row
    assigned = []
    for column in sorted(rows):
        seen = rows[column]
        others = alternatives(model, allowed, found, list(seen.values()), modes[column].species, modes)
        assigned.append(
            Assigned(
                modes[column],
                *(bands[seen[name]] if name in seen else None for name in ("IR", "Raman")),
                describe(modes[column]),
                others,
                any(_holds(pin, bands, seen, column, modes[column].species) for pin in held),
            )
        )
    leftover = tuple(bands[row] for row, column in enumerate(best.places.tolist()) if column < 0)
    unseen = tuple(mode for column, mode in enumerate(modes) if column not in rows)
    return Assignment(
        symmetry, observed, estimates, tuple(assigned), leftover, unseen, best.cost, _notes(estimates, observed)
    )


def alternatives(
    model: CommonErrors, allowed, best: tuple[Matching, np.ndarray], rows: Sequence[int], species: str, modes
) -> tuple[tuple[str, float], ...]:
    """Return (species, extra cost) of the best assignment with these lines in each other species."""
    found, single = [], model.costs(model.shifts(best[1])).single
    for label in dict.fromkeys(mode.species for mode in modes):
        if label == species:
            continue
        inside = np.array([mode.species == label for mode in modes])
        tried = np.ones(single.shape, bool) if allowed is None else allowed.copy()
        tried[list(rows)] &= inside
        if all(np.isfinite(single[row][tried[row]]).any() for row in rows):
            other = model.cheapest(tried, best[1])
            if other is not None and other[0].cost - best[0].cost < TOLD:
                found.append((label, round(max(other[0].cost - best[0].cost, 0.0), 2)))
    return tuple(sorted(found, key=lambda pair: pair[1]))


def _holds(pin: Pin, bands, seen: dict[str, int], column: int, species: str) -> bool:
    """Whether a pin put one of the bands where it is; a line of the other spectrum at the same place is not pinned."""
    meant = pin.species == species and pin.mode in (None, column)
    return meant and any(pin.matches(bands[row]) for row in seen.values())


def _notes(estimates: Estimates, observed: BandList) -> tuple[str, ...]:
    notes = list(observed.notes)
    for each in estimates.fallback:
        notes.append(
            f"{each['set']}: no tabulated force constant, estimated by Badger's rule ({each['constant']:.0f} N/m)"
        )
    return tuple(notes)


def _value(band: Band | None) -> float | None:
    return None if band is None else round(mean_wavenumber(band), 6)
