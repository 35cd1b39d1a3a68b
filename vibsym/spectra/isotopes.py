"""A molecule and its isotopologue: groups, correlation, activity, and the product rule against observed lines.

Observed products normally exceed theory, because anharmonicity lowers the lighter molecule more: for hydrogen and
deuterium by 0 to 2 % for each vibration of the exchanged atoms.  A product is `doubtful` below -1.5 %, or above 2 %
for each hydrogenic vibration by more than 2 %, or above 5.5 % in any case (vibsym's own limits: in print about 5 % is
reached where two or more such vibrations share a species); where no hydrogen is exchanged, outside ±0.5 %.  A
fundamental in Fermi resonance must be deperturbed first.  Source: G. Herzberg, Infrared and Raman Spectra (1945), ch.
II,6.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from math import prod

from vibsym.spectra.activity import Counts, activity_changes, count_bands
from vibsym.spectra.fermi import Doublet, deperturbed
from vibsym.spectra.modes import Mode
from vibsym.structures.isotopes import Substitution, substitution
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import DEFAULT_TOLERANCE
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.productrule import ProductLine, product_rule

LOW, EACH, SPARE, HIGHEST = -1.5, 2.0, 2.0, 5.5     # %, see above
HEAVY = 0.5                                         # %, no hydrogen exchanged


@dataclass(frozen=True)
class ObservedProduct:
    """The observed product of a species of the common group; `product` is None unless both show all its modes."""

    species: str
    seen: tuple[int, int]
    modes: int
    product: float | None
    deviation: float | None
    limits: tuple[float, float]
    deperturbed: tuple[str, ...] = ()

    @property
    def doubtful(self) -> bool | None:
        """Whether the deviation (%) is more than anharmonicity explains; None where there is no product."""
        return None if self.deviation is None else not self.limits[0] <= self.deviation <= self.limits[1]

    def to_dict(self) -> dict:
        """Return the product for JSON; deviation and limits in per cent."""
        return {"species": self.species, "modes": self.modes, "seen": list(self.seen), "product": self.product,
                "deviation": None if self.deviation is None else round(self.deviation, 3), "limits": list(self.limits),
                "doubtful": self.doubtful, "deperturbed": list(self.deperturbed)}


@dataclass(frozen=True, eq=False)
class IsotopeEffect:
    """What a substitution changes, and the product rule; `observed` where two assignments were given."""

    pair: Substitution
    rule: tuple[ProductLine, ...]
    observed: tuple[ObservedProduct, ...] = ()

    @cached_property
    def gammas(self) -> tuple[dict[str, int], dict[str, int]]:
        """Γvib of the molecule and of the isotopologue, each in its own group."""
        return displacements(self.pair.original).gamma_vib, displacements(self.pair.substituted).gamma_vib

    @cached_property
    def counts(self) -> tuple[Counts, Counts]:
        """Band counts of both."""
        return tuple(count_bands(gamma, each.group) for gamma, each in zip(
            self.gammas, (self.pair.original, self.pair.substituted)))

    @cached_property
    def activity(self) -> tuple[dict, ...]:
        """For each species with vibrations what it becomes in the common group, and which activity is new there."""
        return activity_changes(self.pair.original.group, self.pair.common.group, self.pair.correlation, self.gammas[0])

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        pair = self.pair
        answer = {"structure": pair.original.structure.to_dict(), "substituted": pair.substituted.structure.to_dict(),
                  "from": pair.original.to_dict(), "to": pair.substituted.to_dict(), "common": pair.common.group.symbol,
                  "correlation": {a: dict(b) for a, b in pair.correlation.items()},
                  "correlation_to": {a: dict(b) for a, b in pair.correlation_substituted.items()},
                  "gamma_vib": {"from": dict(self.gammas[0]), "to": dict(self.gammas[1])},
                  "counts": {"from": self.counts[0].to_dict(), "to": self.counts[1].to_dict()},
                  "activity": list(self.activity), "product_rule": {line.species: line.theory for line in self.rule},
                  "product_factors": {line.species: dict(line.factors) for line in self.rule}}
        return answer | ({"observed": [each.to_dict() for each in self.observed]} if self.observed else {})


def isotopes(structure: Structure, replacements: str, lines: Sequence[Mode] = (),
             lines_substituted: Sequence[Mode] = (), *, doublets: Sequence[Doublet] = (),
             tolerance: float = DEFAULT_TOLERANCE, axes: str | None = None) -> IsotopeEffect:
    """Return what replacing isotopes (`1=D,2=D`, `H=D`) does to a structure; other arguments as in `isotope_effect`.

    >>> methane = Structure.from_atoms("CHHHH", [[0, 0, 0], [1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]])
    >>> [(line.species, round(line.theory, 3)) for line in isotopes(methane, "H=D").rule]
    [('A1', 0.707), ('E', 0.707), ('T2', 0.56)]
    """
    return isotope_effect(substitution(structure, replacements, tolerance, axes), lines, lines_substituted, doublets)


def isotope_effect(pair: Substitution, lines: Sequence[Mode] = (), lines_substituted: Sequence[Mode] = (),
                   doublets: Sequence[Doublet] = ()) -> IsotopeEffect:
    """Return the groups, the correlation and the product rule of a pair, with observed products where lines are given.

    `lines`, `lines_substituted`: fundamentals with species of the molecule and of the isotopologue, each in its own
    group; `doublets`: Fermi resonances, by which the fundamentals that belong to them are deperturbed.
    """
    rule = product_rule(pair)
    for doublet in doublets:
        if not any(doublet.holds(mode.wavenumber) for mode in (*lines, *lines_substituted)):
            raise doublet.unplaced("no fundamental of either molecule is one of the lines")
    observed = observed_products(pair, rule, lines, lines_substituted, doublets) if lines and lines_substituted else ()
    return IsotopeEffect(pair, rule, observed)


def observed_products(pair: Substitution, rule: Sequence[ProductLine], lines: Sequence[Mode],
                      lines_substituted: Sequence[Mode],
                      doublets: Sequence[Doublet] = ()) -> tuple[ObservedProduct, ...]:
    """Return the observed product of every species of the common group beside the theory of `rule`."""
    before = _by_species(lines, pair.correlation, pair.original.group)
    after = _by_species(lines_substituted, pair.correlation_substituted, pair.substituted.group)
    found = []
    for line in rule:
        light, heavy = before.get(line.species, []), after.get(line.species, [])
        whole = len(light) == len(heavy) == line.modes
        product = deviation = None
        if whole:
            product = prod(deperturbed(m.wavenumber, doublets) for m in heavy) / prod(
                deperturbed(m.wavenumber, doublets) for m in light)
            deviation = 100 * (product / line.theory - 1)
        moved = tuple(m.name for m in light + heavy if any(d.holds(m.wavenumber) for d in doublets))
        found.append(ObservedProduct(line.species, (len(light), len(heavy)), line.modes, product, deviation,
                                     limits(line, pair), moved))
    return tuple(found)


def limits(line: ProductLine, pair: Substitution) -> tuple[float, float]:
    """Return the deviations (%) between which an observed product is as it should be.

    Where the isotopologue is the lighter molecule the ratio is turned over, and the limits with it.
    """
    if not line.hydrogenic:
        return -HEAVY, HEAVY
    high = min(EACH * line.hydrogenic + SPARE, HIGHEST)
    lighter = pair.substituted.structure.masses.sum() < pair.original.structure.masses.sum()
    return (-high, -LOW) if lighter else (LOW, high)


def _by_species(lines: Sequence[Mode], correlation, group) -> dict[str, list[Mode]]:
    """Fundamentals by species of the common group: one of a degenerate species stands under each of its parts."""
    found: dict[str, list[Mode]] = {}
    for mode in lines:
        if mode.wavenumber is not None:
            for below, times in correlation[group.species_named(mode.species).label].items():
                found.setdefault(below, []).extend([mode] * times)
    return found
