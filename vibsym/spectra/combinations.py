"""Overtones, sums and differences of assigned fundamentals: species, activity, harmonic position.

The upper level of ν_i + 2ν_j has the species Γ_i × [Γ_j²] (symmetric power: quanta of one vibration are alike); a
difference starts from an excited level, and its transition is allowed where (upper level) × (lower level) holds an
active species (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, ch. 7; G. Herzberg, Infrared and
Raman Spectra, 1945, ch. III,2). Positions are sums of the observed fundamentals; anharmonicity puts overtones and
sums a little lower, as a rule.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import combinations_with_replacement
from math import comb

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.groups.products import product_of, symmetric_power
from vibsym.spectra.fermi import DEFAULT_RESONANCE, Doublet, FermiPair
from vibsym.spectra.modes import Mode, mode_number, named_modes, parse_modes
from vibsym.spectra.populations import (
    DEFAULT_TEMPERATURE,
    boltzmann,
    checked_temperature,
    partition_function,
    states,
)

MOST = 400_000                     # combinations; beyond, ask for fewer quanta
Quanta = dict[str, int]


@dataclass(frozen=True)
class Combination:
    """An overtone, a sum or a difference (quanta below zero: the lower level) and what it can show.

    `fraction`: of a difference the share of the molecules that are in its lower level; else None.
    """

    label: str
    quanta: Quanta
    species: dict[str, int]
    infrared: bool
    raman: bool
    wavenumber: float | None
    fermi: tuple[FermiPair, ...] = ()
    fraction: float | None = None

    @property
    def order(self) -> int:
        """How many quanta change."""
        return sum(abs(n) for n in self.quanta.values())

    @property
    def is_difference(self) -> bool:
        """Whether it starts from an excited level."""
        return any(n < 0 for n in self.quanta.values())

    def to_dict(self) -> dict:
        """Return the combination for JSON; a difference tells its lower level and the fraction of molecules in it."""
        answer = {"label": self.label, "quanta": dict(self.quanta), "species": dict(self.species),
                  "infrared": self.infrared, "raman": self.raman,
                  "wavenumber": None if self.wavenumber is None else round(self.wavenumber, 4),
                  "fermi": [pair.to_dict() for pair in self.fermi]}
        if self.is_difference:
            answer |= {"lower": _label({m: -n for m, n in self.quanta.items() if n < 0}), "fraction": self.fraction}
        return answer


@dataclass(frozen=True)
class HotBand:
    """A fundamental that starts from an excited level: ν_i + ν_j - ν_j lies close to ν_i."""

    label: str
    fundamental: str
    lower: str
    species: dict[str, int]
    infrared: bool
    raman: bool
    wavenumber: float | None
    fraction: float
    order = 3                      # two quanta above, one below
    is_difference = True

    def to_dict(self) -> dict:
        """Return the hot band for JSON."""
        return {"label": self.label, "fundamental": self.fundamental, "lower": self.lower,
                "species": dict(self.species), "infrared": self.infrared, "raman": self.raman,
                "wavenumber": self.wavenumber, "fraction": self.fraction}


@dataclass(frozen=True)
class Combinations:
    """All combinations of some fundamentals of a group up to a number of quanta."""

    group: object
    modes: tuple[Mode, ...]
    quanta: int
    temperature: float
    combinations: tuple[Combination, ...]
    resonance: float = DEFAULT_RESONANCE

    @cached_property
    def fermi(self) -> tuple[FermiPair, ...]:
        """All Fermi pairs, the closest first."""
        pairs = (pair for each in self.combinations for pair in each.fermi)
        return tuple(sorted(pairs, key=lambda pair: abs(pair.distance)))

    @cached_property
    def hot_bands(self) -> tuple[HotBand, ...]:
        """Every fundamental from every level with one quantum, the most populated level first."""
        return _hot_bands(self)

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        return {"group": self.group.symbol, "modes": [mode.to_dict() for mode in self.modes],
                "temperature": self.temperature, "combinations": [each.to_dict() for each in self.combinations],
                "hot_bands": [each.to_dict() for each in self.hot_bands]}


def combine(group, modes: Sequence[Mode | str], quanta: int = 2, *, temperature: float = DEFAULT_TEMPERATURE,
            resonance: float = DEFAULT_RESONANCE, doublets: Sequence[Doublet] = ()) -> Combinations:
    """Return every overtone, sum and difference with 2 to `quanta` quanta.

    `group` is a point group or its symbol, `modes` are fundamentals, or texts such as "ν4:T2=1306".  `resonance` (cm-1)
    is how near a fundamental and a combination of a common species count as a Fermi pair; `doublets` are observed pairs
    of lines with their intensity ratio.  A combination without a known wavenumber has none.

    >>> result = combine("Td", ["ν4:T2=1306"])
    >>> result.combinations[0].label, result.combinations[0].species
    ('2ν4', {'A1': 1, 'E': 1, 'T2': 1})
    """
    group = point_group(group) if isinstance(group, str) else group
    if any(isinstance(mode, str) for mode in modes):
        modes = parse_modes([mode for mode in modes if isinstance(mode, str)], group) + tuple(
            mode for mode in modes if not isinstance(mode, str))
    modes = tuple(sorted(named_modes(modes), key=lambda mode: _place(group, mode)))
    temperature = checked_temperature(temperature)
    if not modes:
        raise VibsymError("no fundamentals: give --mode ν4:T2=1306 (once for each) or --assignment FILE")
    if quanta < 2:
        raise VibsymError(f"--quanta {quanta}: at least 2, for overtones and combinations")
    if not 0 <= resonance < float("inf"):
        raise VibsymError(f"--resonance {resonance:g}: give a distance in cm-1, zero or more")
    expected = _how_many(len(modes), quanta)
    if expected > MOST:
        raise VibsymError(f"{len(modes)} fundamentals to {quanta} quanta make {expected} combinations; "
                          "ask for fewer quanta")
    builder = _Builder(group, modes, temperature)
    found = [builder.combination(vector) for vector in _vectors(modes, quanta)]
    found = _with_fermi(found, modes, resonance, doublets)
    placed = [pair.doublet for each in found for pair in each.fermi if pair.doublet]
    for doublet in doublets:
        if doublet not in placed:
            raise doublet.unplaced("no fundamental is one of the lines and has a combination of its species near")
    found.sort(key=lambda each: (each.is_difference, -(each.wavenumber or 0.0)))
    return Combinations(group, modes, quanta, temperature, tuple(found), resonance)


class _Builder:
    """Species and positions of combinations; one with the same species and quanta is worked out once."""

    def __init__(self, group, modes: tuple[Mode, ...], temperature: float):
        self.group, self.modes, self.temperature = group, modes, temperature
        self.degeneracy = {mode.name: group.species_named(mode.species).degeneracy for mode in modes}
        self.energy = {mode.name: mode.wavenumber for mode in modes}
        known = [(mode.wavenumber, self.degeneracy[mode.name]) for mode in modes if mode.wavenumber is not None]
        self.partition = partition_function(known, temperature)
        self.seen: dict[tuple, tuple[dict[str, int], bool, bool]] = {}

    def combination(self, vector: tuple[tuple[int, int], ...]) -> Combination:
        """Return the combination of (place of the mode, quanta) pairs."""
        quanta = {self.modes[k].name: n for k, n in vector}
        key = tuple(sorted((self.modes[k].species, abs(n)) for k, n in vector))
        species, infrared, raman = self.seen.get(key) or self.species(key)
        positions = [self.modes[k].wavenumber for k, _ in vector]
        wavenumber = None if None in positions else sum(n * p for (_, n), p in zip(vector, positions))
        fraction = self.fraction({name: -n for name, n in quanta.items() if n < 0}) if vector[-1][1] < 0 else None
        return Combination(_label(quanta), quanta, species, infrared, raman, wavenumber, (), fraction)

    def species(self, key: tuple[tuple[str, int], ...]) -> tuple[dict[str, int], bool, bool]:
        """Return the species of a product of powers, and whether infrared and Raman active ones are among them."""
        gamma = product_of(self.group, [symmetric_power(self.group, label, n) for label, n in key])
        members = [self.group.species_named(label) for label in gamma]
        self.seen[key] = gamma, any(s.infrared for s in members), any(s.raman for s in members)
        return self.seen[key]

    def fraction(self, lower: Quanta) -> float | None:
        """Return the share of the molecules that are in a level."""
        energies = [self.energy[name] for name in lower]
        if None in energies:
            return None
        energy = sum(n * self.energy[name] for name, n in lower.items())
        return states(lower, self.degeneracy) * boltzmann(energy, self.temperature) / self.partition


def _place(group, mode: Mode) -> tuple:
    """Order of the modes: by number; those without one by species, then by falling wavenumber."""
    label = group.species_named(mode.species).label
    own = group.labels.index(label) if label in group.labels else len(group.labels)
    return mode_number(mode), own, -(mode.wavenumber or 0.0)


def _vectors(modes: tuple[Mode, ...], quanta: int) -> Iterator[tuple[tuple[int, int], ...]]:
    """Yield sums, then differences with a position above zero, as (place, quanta) with the lower level last."""
    levels = [[_counted(choice) for choice in combinations_with_replacement(range(len(modes)), n)]
              for n in range(quanta + 1)]
    for n in range(2, quanta + 1):
        yield from levels[n]
    known = [mode.wavenumber if mode.wavenumber is not None else float("nan") for mode in modes]
    energy = [np.array([sum(n * known[k] for k, n in level) for level in row]) for row in levels]
    members = [[{k for k, _ in level} for level in row] for row in levels]
    for up in range(1, quanta):
        for down in range(1, quanta - up + 1):
            for place, lower in enumerate(levels[down]):
                own, below = members[down][place], tuple((k, -n) for k, n in lower)
                first = lower[0][0]
                height = energy[up] - energy[down][place]
                # without a position either direction may be the upper one: the mode that was given first
                for k in np.flatnonzero((height > 0) | np.isnan(height)):
                    if own.isdisjoint(members[up][k]) and (height[k] > 0 or levels[up][k][0][0] < first):
                        yield levels[up][k] + below


def _counted(choice: tuple[int, ...]) -> tuple[tuple[int, int], ...]:
    counts: dict[int, int] = {}
    for k in choice:
        counts[k] = counts.get(k, 0) + 1
    return tuple(counts.items())


def _how_many(modes: int, quanta: int) -> int:
    """About how many combinations there are: sums, and half of the pairs of levels for differences."""
    levels = [comb(modes + n - 1, n) for n in range(quanta + 1)]
    pairs = sum(levels[up] * levels[down] for up in range(1, quanta) for down in range(1, quanta - up + 1))
    return sum(levels[2:]) + pairs // 2


def _label(quanta: Quanta) -> str:
    """Write a combination: `2ν4`, `ν1 + ν3`, `ν3 - 2ν4`."""
    text = ""
    for name, n in quanta.items():
        sign = (" - " if n < 0 else " + ") if text else ("-" if n < 0 else "")
        text += sign + (str(abs(n)) if abs(n) > 1 else "") + name
    return text


def _with_fermi(found: list[Combination], modes, resonance: float, doublets) -> list[Combination]:
    """Give each overtone and sum the fundamentals that it can perturb.

    A doublet of lines belongs to a fundamental that is one of them and to the combination of a common species that
    lies nearest to where the doublet has it undisturbed.
    """
    positions = np.array([np.nan if each.is_difference or each.wavenumber is None else each.wavenumber
                          for each in found])
    pairs: dict[int, list[FermiPair]] = {}
    for mode in modes:
        if mode.wavenumber is None:
            continue
        doublet = next((each for each in doublets if each.holds(mode.wavenumber)), None)
        reach = max(resonance, doublet.upper - doublet.lower) if doublet else resonance
        near = [int(k) for k in np.flatnonzero(np.abs(positions - mode.wavenumber) <= reach)
                if mode.species in found[k].species and set(found[k].quanta) != {mode.name}]
        own = min(near, key=lambda k: abs(positions[k] - doublet.partner)) if doublet and near else None
        for k in near:
            distance = found[k].wavenumber - mode.wavenumber
            if k == own or abs(distance) <= resonance:
                pairs.setdefault(k, []).append(FermiPair(mode.name, found[k].label, (mode.species,), distance,
                                                         doublet if k == own else None))
    result = list(found)
    for k, own_pairs in pairs.items():
        result[k] = replace(found[k], fermi=tuple(sorted(own_pairs, key=lambda pair: abs(pair.distance))))
    return result


def _hot_bands(result: Combinations) -> tuple[HotBand, ...]:
    builder = _Builder(result.group, result.modes, result.temperature)
    bands = []
    for lower in result.modes:
        fraction = builder.fraction({lower.name: 1})
        if fraction is None:
            continue
        for mode in result.modes:
            upper = [(mode.species, 2)] if mode is lower else sorted([(mode.species, 1), (lower.species, 1)])
            species, infrared, raman = builder.seen.get(key := (*upper, (lower.species, 1))) or builder.species(key)
            label = f"2{mode.name} - {mode.name}" if mode is lower else f"{mode.name} + {lower.name} - {lower.name}"
            bands.append(HotBand(label, mode.name, lower.name, species, infrared, raman, mode.wavenumber, fraction))
    return tuple(sorted(bands, key=lambda band: -band.fraction))
