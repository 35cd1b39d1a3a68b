"""A prediction: the fundamentals by species that a comparison with observed bands needs, and nothing else.

Whole molecules, sets of oscillators, local groups and isomers all reduce to it.  A *leak* is a weak band at a
fundamental that the group used forbids in that spectrum, let through (a) because the molecule's true group is lower and
allows it, or (b) by the surroundings, such as a ligand that was treated as a point.
"""

from collections.abc import Callable
from dataclasses import dataclass, field

TRUE_GROUP, SURROUNDINGS = "true group", "surroundings"


@dataclass(frozen=True)
class SpeciesBands:
    """The fundamentals of one species: how many, where they are active, and what may leak (`TRUE_GROUP`, ...)."""

    label: str
    count: int
    infrared: bool
    raman: bool
    totally_symmetric: bool
    leak_infrared: tuple[str, ...] = ()
    leak_raman: tuple[str, ...] = ()

    def active_in(self, spectrum: str) -> bool:
        """Whether the species is active in `IR` or `Raman`."""
        return self.infrared if spectrum == "IR" else self.raman

    def leaks_in(self, spectrum: str) -> tuple[str, ...]:
        """Why a weak band may be seen although the species is silent in that spectrum; empty where it may not."""
        if self.active_in(spectrum):
            return ()
        return self.leak_infrared if spectrum == "IR" else self.leak_raman


@dataclass(frozen=True)
class Prediction:
    """What one structure (or two that share the lines) can show.

    `structure` and `point_group` are the objects of the JSON contract; `region` names the set of oscillators, empty for
    all fundamentals; `true_group` is the lower group of the molecule where the one used is an ideal; `local_group` is
    the group of the oscillators where that one is used.
    """

    name: str
    structure: dict = field(hash=False)
    point_group: dict = field(hash=False)
    bands: tuple[SpeciesBands, ...]
    region: str = ""
    true_group: str = ""
    surroundings: str = ""
    notes: tuple[str, ...] = ()
    parts: "tuple[Prediction, ...]" = ()
    local_group: dict | None = field(default=None, hash=False)
    span: tuple[float, float] | None = None      # cm-1: where all bands of the region lie, if that is known

    @property
    def group(self) -> str:
        """Symbol of the group used; of a mixture both."""
        if self.parts:
            return " + ".join(part.group for part in self.parts)
        return (self.local_group or self.point_group)["symbol"]

    def count(self, infrared: bool | None = None, raman: bool | None = None,
              totally_symmetric: bool | None = None) -> int:
        """Return the number of fundamentals of the stated activity; None asks for nothing."""
        return sum(each.count for each in self.bands
                   if (infrared is None or each.infrared == infrared) and (raman is None or each.raman == raman)
                   and (totally_symmetric is None or each.totally_symmetric == totally_symmetric))

    @property
    def counts(self) -> dict[str, int]:
        """Numbers of infrared, Raman, coincident and polarised bands."""
        return {"infrared": self.count(infrared=True), "raman": self.count(raman=True),
                "coincident": self.count(infrared=True, raman=True),
                "polarised": self.count(raman=True, totally_symmetric=True)}


def bands_of_gamma(gamma: dict[str, int], group, true_group=None, embedding=None, point_like: bool = False,
                   ) -> tuple[SpeciesBands, ...]:
    """Return the bands of a representation of `group`, with the leaks that symmetry and surroundings allow.

    `true_group` with `embedding` (index of the operation of `group` for each of its operations) opens what the lower
    group allows; `point_like` says that something polyatomic was taken for a point.

    >>> from vibsym.groups.pointgroup import point_group
    >>> [each.label for each in bands_of_gamma({"A1": 2, "B1": 1, "E": 1}, point_group("C4v")) if not each.infrared]
    ['B1']
    """
    allowed = _opened(group, true_group, embedding) if true_group is not None else lambda label: (False, False)
    bands = []
    for label, number in gamma.items():
        species = group.species_named(label)
        leaks = [(TRUE_GROUP,) * opened + (SURROUNDINGS,) * point_like for opened in allowed(label)]
        bands.append(SpeciesBands(label, number, species.infrared, species.raman, species.totally_symmetric,
                                  () if species.infrared else leaks[0], () if species.raman else leaks[1]))
    return tuple(bands)


def _opened(group, true_group, embedding) -> Callable[[str], tuple[bool, bool]]:
    """Return a function that tells whether the lower group makes a species infrared or Raman active.

    n = 1/h sum_R chi(R) chi_t(R) over the operations R of the lower group, chi_t the character of (x, y, z), tr R, or
    of the quadratic functions, ((tr R)^2 + tr R^2)/2.  Both groups may be infinite: their finite images decide.
    """
    import numpy as np

    matrices = true_group.image.matrices
    trace = np.trace(matrices, axis1=1, axis2=2)
    square = np.einsum("rij,rji->r", matrices, matrices)
    names = {name: label for label, name in group.image_labels.items()}

    def allowed(label: str) -> tuple[bool, bool]:
        species = group.image.species_named(names.get(label, label))
        chi = np.array(species.characters)[np.asarray(group.image.class_of)[embedding]]
        return bool(chi @ trace > 0.5), bool(chi @ (trace ** 2 + square) / 2 > 0.5)
    return allowed


def mixture(first: Prediction, second: Prediction) -> Prediction:
    """Return the prediction of two structures that share the lines: all fundamentals of both."""
    names = (first.name, second.name) if first.name != second.name else (first.name + " 1", second.name + " 2")
    bands = tuple(SpeciesBands(f"{each.label} ({name})", each.count, each.infrared, each.raman,
                               each.totally_symmetric, each.leak_infrared, each.leak_raman)
                  for name, part in zip(names, (first, second)) for each in part.bands)
    return Prediction(" + ".join(names), first.structure, first.point_group, bands, first.region,
                      true_group=" + ".join(filter(None, (first.true_group, second.true_group))),
                      surroundings=first.surroundings or second.surroundings,
                      notes=(*first.notes, *second.notes), parts=(first, second))
