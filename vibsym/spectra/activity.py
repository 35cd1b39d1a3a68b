"""How many bands infrared and Raman spectra can show: the activity of each species times its multiplicity.

A species is infrared active if it occurs in Γ(x, y, z), Raman active if it occurs in Γ(x², y², z², xy, xz, yz), and its
Raman line can be polarised if it is totally symmetric (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations,
1955, ch. 3 and 7).  A degenerate set is one band.  Counts are of fundamentals and upper bounds: symmetry permits, it
never promises.
"""

from collections.abc import Mapping
from typing import TYPE_CHECKING, NamedTuple

from vibsym.groups.pointgroup import PointGroup
from vibsym.groups.species import Species

if TYPE_CHECKING:
    from vibsym.groups.infinite import InfiniteGroup


class Counts(NamedTuple):
    """Numbers of fundamentals: all, infrared active, Raman active, both, polarised in Raman, neither."""

    fundamentals: int
    infrared: int
    raman: int
    coincident: int
    polarised: int
    silent: int

    def to_dict(self) -> dict[str, int]:
        """Return the counts for JSON."""
        return self._asdict()


class SetBands(NamedTuple):
    """A set of coordinates, the species that it has, or its share of them, and the bands that they can show."""

    name: str
    gamma: dict[str, int]
    counts: Counts

    def to_dict(self) -> dict:
        """Return the set for JSON."""
        counts = self.counts
        return {"set": self.name, "gamma": dict(self.gamma), "infrared": counts.infrared, "raman": counts.raman,
                "coincident": counts.coincident, "polarised": counts.polarised}


class SpeciesRow(NamedTuple):
    """A species and how many fundamentals it has (a degenerate set counts once)."""

    species: Species
    modes: int

    def to_dict(self) -> dict:
        """Return the row for JSON; `linear` to `cubic` are the functions of the species in the stated axes."""
        species = self.species
        return {"label": species.label, "degeneracy": species.degeneracy, "modes": self.modes,
                "infrared": species.infrared, "raman": species.raman,
                "polarised": species.polarised, "hyper_raman": species.hyper_raman,
                "linear": list(species.linear), "rotations": list(species.rotations),
                "quadratic": list(species.quadratic), "cubic": list(species.cubic)}


def count_bands(gamma: dict[str, int], group: "PointGroup | InfiniteGroup") -> Counts:
    """Count the bands of a representation by their activity.

    >>> from vibsym.groups.pointgroup import point_group
    >>> count_bands({"A1'": 1, "E'": 2, "A2''": 1}, point_group("D3h"))
    Counts(fundamentals=4, infrared=3, raman=3, coincident=2, polarised=1, silent=0)
    """
    fundamentals = infrared = raman = coincident = polarised = silent = 0
    for label, modes in gamma.items():
        species = group.species_named(label)
        fundamentals += modes
        infrared += modes * species.infrared
        raman += modes * species.raman
        coincident += modes * (species.infrared and species.raman)
        polarised += modes * species.polarised
        silent += modes * species.silent
    return Counts(fundamentals, infrared, raman, coincident, polarised, silent)


def species_rows(gamma: dict[str, int], group: "PointGroup | InfiniteGroup") -> tuple[SpeciesRow, ...]:
    """Return every species of a finite group, of an infinite one those that occur, each with its multiplicity."""
    return tuple(SpeciesRow(species, gamma.get(species.label, 0)) for species in group.species
                 if gamma.get(species.label, 0) or not group.infinite)


def activity_changes(group, lower, correlation: Mapping[str, Mapping[str, int]],
                     gamma: Mapping[str, int]) -> tuple[dict, ...]:
    """Return for each species of `gamma` its parts in the lower group, and what becomes infrared or Raman active."""
    changes = []
    for label, modes in gamma.items():
        species = group.species_named(label)
        parts = [lower.species_named(below) for below in correlation[label]]
        changes.append({"species": label, "modes": modes, "becomes": dict(correlation[label]),
                        "splits": sum(correlation[label].values()) > 1,
                        "infrared": [species.infrared, any(part.infrared for part in parts)],
                        "raman": [species.raman, any(part.raman for part in parts)]})
    return tuple(changes)
