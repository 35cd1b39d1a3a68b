"""The bands of the isomers of a composition: the stretches of one set of oscillators in each of them.

The oscillators are permuted by the operations that keep the arrangement; their representation is reduced in the
isomer's group.  By default they are the C–O stretches if there are any, else C–N, N–O, N–N, else the bonds from the
centre to the donor named first (common practice: the region that is read first).  Counts are upper bounds.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.bases import Basis
from vibsym.groups.reduction import reduce
from vibsym.spectra.activity import Counts, SetBands, count_bands
from vibsym.spectra.bond_ranges import range_of
from vibsym.spectra.prediction import Prediction, bands_of_gamma
from vibsym.structures.isomers import Isomer, Isomers, isomers

USUAL = (("C", "O"), ("C", "N"), ("N", "O"), ("N", "N"))
DEFAULT_LIMIT = 200


@dataclass(frozen=True)
class SiteStretches:
    """The oscillators: a set of stretches (`stretch C-O`) and the colours of the sites that carry one."""

    name: str
    colours: frozenset[int]


@dataclass(frozen=True, eq=False)
class IsomerBands:
    """An isomer with the representation and the band counts of its oscillators."""

    isomer: Isomer
    oscillators: SiteStretches

    @cached_property
    def gamma(self) -> dict[str, int]:
        """Species of the oscillators in the group of the isomer."""
        sites = np.flatnonzero(np.isin(self.isomer.colours, list(self.oscillators.colours)))
        group = self.isomer.group
        basis = Basis.signed(group.image, self.isomer.site_permutations).restrict(sites)
        return reduce(basis.characters(), group)

    @cached_property
    def counts(self) -> Counts:
        """How many bands each spectrum can show at most."""
        return count_bands(self.gamma, self.isomer.group)

    @property
    def point_like(self) -> bool:
        """Whether a polyatomic ligand was taken for a point: its shape may let forbidden bands through."""
        return any(ligand.form == "point" for ligand in self.isomer.among.ligands)

    def prediction(self) -> Prediction:
        """Return what a comparison with observed bands needs."""
        isomer = self.isomer
        points = ", ".join(ligand.name for ligand in isomer.among.ligands if ligand.form == "point")
        return Prediction(isomer.name, isomer.structure.to_dict(), isomer.point_group,
                          bands_of_gamma(self.gamma, isomer.group, point_like=self.point_like),
                          region=self.oscillators.name, surroundings=points, span=self._span)

    @property
    def _span(self) -> tuple[float, float] | None:
        """The range of the oscillators if they are those of linear ligands."""
        among = self.isomer.among
        carriers = [among.ligands[among.orbits.colours[colour].ligand] for colour in self.oscillators.colours]
        bond = self.oscillators.name.removeprefix("stretch ").split("-")
        return range_of(*bond) if all(each.outer and each.outer in bond for each in carriers) else None

    def to_dict(self) -> dict:
        """Return the entry of the JSON list `isomers`."""
        isomer = self.isomer
        answer = {"name": isomer.name, "index": isomer.index, "arrangement": isomer.arrangement,
                  "point_group": isomer.point_group, "chiral": isomer.chiral, "stereoisomers": isomer.stereoisomers,
                  "descriptors": list(isomer.descriptors),
                  "oscillators": SetBands(self.oscillators.name, self.gamma, self.counts).to_dict()}
        if len(isomer.indices) > 1:
            answer["index_by_priority"] = {index: [isomer.among.ranking_text(order) for order in orders]
                                           for index, orders in isomer.indices.items()}
        return answer


@dataclass(frozen=True, eq=False)
class IsomerList:
    """The isomers of a composition: how many there are, and the bands of the first `limit` of them."""

    isomers: Isomers
    oscillators: SiteStretches
    limit: int | None = DEFAULT_LIMIT

    @property
    def count(self) -> int:
        """Number of isomers, a pair of enantiomers counted once."""
        return self.isomers.count

    @cached_property
    def entries(self) -> tuple[IsomerBands, ...]:
        """The isomers that are shown, with their bands."""
        return tuple(IsomerBands(isomer, self.oscillators) for isomer in self.isomers.first(self.limit))

    @property
    def notes(self) -> tuple[str, ...]:
        """What the reader must know to trust the list."""
        among, notes = self.isomers, []
        points = [ligand.name for ligand in among.ligands if ligand.form == "point" and ligand.span == "single"]
        rings = [ligand.name for ligand in among.ligands if ligand.span != "single"]
        if points:
            notes.append(f"{', '.join(points)}: only the place counts; the ligand's own shape can lower the group and "
                         "let weak bands through")
        if rings:
            notes.append(f"{', '.join(rings)}: only the donors and what they span count; puckered rings can lower the "
                         "group")
        if self.indices_open:
            unknown = [ligand.name for ligand in among.ligands if any(donor.element is None for donor in ligand.donors)]
            way = f"; name the donor, as --donor {unknown[0]}=P" if unknown else ""
            notes.append("some indices depend on the order of priority of the donors, which is not known" + way)
        if self.count > len(self.entries):
            notes.append(f"{len(self.entries)} of {self.count} isomers are listed (--limit)")
        return tuple(notes)

    @property
    def indices_open(self) -> bool:
        """Whether the index of an isomer that is shown depends on an unknown donor."""
        from vibsym.structures.configuration_index import INDEXED

        indexed = self.isomers.shape.symbol in INDEXED
        return indexed and any(entry.isomer.index is None for entry in self.entries)

    def to_dict(self) -> dict:
        """Return the JSON object of `vibsym isomers`."""
        among = self.isomers
        ligands = [{"name": ligand.name, "count": ligand.count, "taken_as": ligand.words} for ligand in among.ligands]
        return {"symbol": among.shape.symbol, "centre": among.centre, "count": among.count,
                "stereoisomers": among.stereoisomers, "isomers": [entry.to_dict() for entry in self.entries],
                "ligands": ligands, "arrangements": among.orbits.arrangements, "oscillators": self.oscillators.name,
                "notes": list(self.notes)}


def list_isomers(symbol: str, centre: str, ligands: Sequence[str], donors: Sequence[str] = (),
                 oscillators: str | None = None, limit: int | None = DEFAULT_LIMIT) -> IsomerList:
    """Return every isomer of a composition on a shape with the bands of its oscillators.

    >>> found = list_isomers("OC-6", "Mo", ["CO=3", "L=3"])
    >>> [(entry.isomer.name, entry.gamma, entry.counts.infrared) for entry in found.entries]
    [('fac', {'A1': 1, 'E': 1}, 2), ('mer', {'A1': 2, 'B2': 1}, 3)]
    """
    if limit is not None and limit < 1:
        raise VibsymError(f"--limit {limit}: give the number of isomers to list, at least 1")
    found = isomers(symbol, centre, ligands, donors)
    return IsomerList(found, find_stretches(found, oscillators), limit)


def find_stretches(found: Isomers, text: str | None = None) -> SiteStretches:
    """Return the set of stretches that `C-O`, `Mo-C-O` or `Mo-Cl` names, or the usual one of the composition.

    A bond from the centre names the donor by its element or by its ligand.
    """
    if text is not None:
        return _named(found, text)
    for pair in USUAL:
        colours = _diatomic(found, pair)
        if colours:
            return SiteStretches(f"stretch {'-'.join(pair)}", colours)
    donor = found.ligands[0].donors[0]
    return _named(found, f"{found.centre}-{donor.element or found.ligands[0].name}")


def _named(found: Isomers, text: str) -> SiteStretches:
    parts = [part.strip() for part in text.strip().replace("–", "-").split("-")]
    if len(parts) == 3 and found.centre in (parts[0], parts[2]):
        parts = parts[1:] if parts[0] == found.centre else parts[:2]
    colours: frozenset[int] = frozenset()
    if len(parts) == 2:
        colours = _diatomic(found, tuple(parts)) or _diatomic(found, tuple(parts[::-1]))
        if not colours and found.centre in parts:
            colours = _from_centre(found, parts[1] if parts[0] == found.centre else parts[0])
    if not colours:
        possible = [f"{ligand.donors[0].element}-{ligand.outer}" for ligand in found.ligands if ligand.outer]
        possible += [f"{found.centre}-{donor.element or ligand.name}"
                     for ligand in found.ligands for donor in ligand.donors]
        raise VibsymError(f"--oscillators '{text}': no such bond; here are {', '.join(dict.fromkeys(possible))}")
    return SiteStretches("stretch " + "-".join(parts), colours)


def _diatomic(found: Isomers, pair: tuple[str, ...]) -> frozenset[int]:
    ligands = found.ligands
    return frozenset(k for k, colour in enumerate(found.orbits.colours) if ligands[colour.ligand].outer and
                     {ligands[colour.ligand].donors[0].element, ligands[colour.ligand].outer} == set(pair))


def _from_centre(found: Isomers, name: str) -> frozenset[int]:
    chosen = set()
    for k, colour in enumerate(found.orbits.colours):
        ligand = found.ligands[colour.ligand]
        donor = ligand.donors[colour.donor]
        if name in (donor.element, ligand.name, donor.name):
            chosen.add(k)
    return frozenset(chosen)
