"""What the observed bands demand of a structure, and where it falls short: the proof behind every excuse.

Hall's theorem: items can be given fundamentals of their own if and only if no set of items is larger than the set of
fundamentals they can take together (P. Hall, J. London Math. Soc. 10, 26 (1935)).  Without excuses a band can take four
sets of fundamentals: an infrared band the infrared-active ones, a Raman band the Raman-active ones, a pair those active
in both, a polarised one the totally symmetric ones.  So the sets to look at are these and their unions: eight.
"""

from typing import NamedTuple

from vibsym.evidence.lines import Band
from vibsym.spectra.prediction import SpeciesBands


class Demand(NamedTuple):
    """A set of items and the fundamentals that they must share."""

    name: str
    items: tuple[tuple[Band, ...], ...]
    species: tuple[SpeciesBands, ...]     # those with at least one fundamental

    @property
    def capacity(self) -> int:
        """How many fundamentals there are for the items."""
        return sum(each.count for each in self.species)

    @property
    def lacking(self) -> int:
        """How many items too many there are; zero or less: the demand can be met."""
        return len(self.items) - self.capacity

    @property
    def words(self) -> str:
        """The demand and what the structure offers, in words and numbers."""
        return _WORDS[self.name](len(self.items), self.capacity, gamma_words(self.species))


def demands_of(bands: tuple[SpeciesBands, ...], items: tuple[tuple[Band, ...], ...]) -> tuple[Demand, ...]:
    """Return the eight demands, the most special first.

    >>> from vibsym.evidence.lines import Line
    >>> seen = tuple((Band((Line(place, "IR"),)),) for place in (1900.0, 1950.0))
    >>> unmet(demands_of((SpeciesBands("T1u", 1, True, False, False),), seen), seen[0]).words
    '2 infrared bands, 1 infrared-active fundamental (T1u)'
    """
    demands = []
    for name, wants, offers in _FAMILIES:
        demands.append(Demand(name, tuple(item for item in items if wants(_traits(item))),
                              tuple(species for species in bands if species.count and offers(species))))
    return tuple(demands)


def unmet(demands: tuple[Demand, ...], item: tuple[Band, ...], preferred: tuple[str, ...] = ()) -> Demand | None:
    """Return the unmet demand that says most about an item: a preferred one, else the one that lacks most.

    An item that stands in none is crowded out by others: then the demand that lacks most of all.
    """
    short = [demand for demand in demands if demand.lacking > 0]
    mine = [demand for demand in short if any(item is each for each in demand.items)]
    for name in preferred:
        for demand in mine:
            if demand.name == name:
                return demand
    return max(mine or short, key=lambda demand: demand.lacking, default=None)


def gamma_words(species: tuple[SpeciesBands, ...]) -> str:
    """Return fundamentals as a representation: `2A1 + E`.

    >>> gamma_words((SpeciesBands("A1", 2, True, True, True), SpeciesBands("E", 1, True, True, False)))
    '2A1 + E'
    """
    return " + ".join((str(each.count) if each.count > 1 else "") + each.label for each in species if each.count)


class _Traits(NamedTuple):
    infrared: bool
    raman: bool
    pair: bool
    polarised: bool


def _traits(item: tuple[Band, ...]) -> _Traits:
    spectra = {band.spectrum for band in item}
    return _Traits("IR" in spectra, "Raman" in spectra, len(item) == 2, any(band.polarised for band in item))


def _both(species: SpeciesBands) -> bool:
    return species.infrared and species.raman


def _polarised(species: SpeciesBands) -> bool:
    return species.raman and species.totally_symmetric


_FAMILIES = (
    ("polarised pairs", lambda item: item.pair and item.polarised, lambda s: _both(s) and _polarised(s)),
    ("polarised", lambda item: item.polarised, _polarised),
    ("pairs", lambda item: item.pair, _both),
    ("pairs or polarised", lambda item: item.pair or item.polarised, lambda s: _both(s) or _polarised(s)),
    ("infrared", lambda item: item.infrared, lambda s: s.infrared),
    ("Raman", lambda item: item.raman, lambda s: s.raman),
    ("infrared or polarised", lambda item: item.infrared or item.polarised, lambda s: s.infrared or _polarised(s)),
    ("all", lambda item: True, lambda s: s.infrared or s.raman),
)


def _count(number: int, singular: str, plural: str = "") -> str:
    return f"{number} {singular if number == 1 else plural or singular + 's'}"


def _named(number: int, noun: str, gamma: str) -> str:
    return f"{number or 'no'} {noun}{'s' if number > 1 else ''}" + (f" ({gamma})" if number else "")


def _must(what: str):
    """Words for lines that must be totally symmetric."""
    def words(items: int, capacity: int, gamma: str) -> str:
        such = f"{capacity} such {'fundamental' if capacity == 1 else 'fundamentals'} ({gamma})" if capacity else \
            "no such fundamental"
        return f"{_count(items, what)} must be totally symmetric, the structure has {such}"
    return words


def _pairs(items: int, capacity: int, gamma: str) -> str:
    together = f"{_count(items, 'pair coincides', 'pairs coincide')}, "
    if not capacity:
        return together + "no species is active in both"
    return together + f"{_count(capacity, 'fundamental is', 'fundamentals are')} active in both ({gamma})"


_WORDS = {
    "polarised pairs": lambda items, capacity, gamma: _must("pair")(items, capacity, gamma)
    + " active in both",
    "polarised": _must("line"),
    "pairs": _pairs,
    "pairs or polarised": lambda items, capacity, gamma: f"{_count(items, 'band')} must be active in both "
    f"spectra or totally symmetric, the structure has {_named(capacity, 'such fundamental', gamma)}",
    "infrared": lambda items, capacity, gamma: f"{_count(items, 'infrared band')}, "
    + _named(capacity, "infrared-active fundamental", gamma),
    "Raman": lambda items, capacity, gamma: f"{_count(items, 'Raman band')}, "
    + _named(capacity, "Raman-active fundamental", gamma),
    "infrared or polarised": lambda items, capacity, gamma: f"{_count(items, 'band is', 'bands are')} infrared or "
    "polarised, infrared-active or totally symmetric: " + _named(capacity, "fundamental", gamma),
    "all": lambda items, capacity, gamma: f"{_count(items, 'band')}, " + _named(capacity, "active fundamental", gamma),
}
