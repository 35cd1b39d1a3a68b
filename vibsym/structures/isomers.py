"""The isomers of a composition on a shape: every one, with its name, index, handedness, group and structure.

Which arrangements are one isomer is counted in `arrangements.py`.  The group of an isomer is the stabiliser of its
arrangement: the operations of the shape that leave it unchanged.  It is exact and never the work of the geometric
finder, so chelates drawn as two points lower it as they should.  The axes follow the ladder of choice on the placed
structure.
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import combinations

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.identify import identified
from vibsym.groups.pointgroup import point_group
from vibsym.groups.settings import settings
from vibsym.structures.arrangements import Orbits, orbits
from vibsym.structures.axis_choice import chosen_setting, free_frame
from vibsym.structures.configuration_index import INDEXED, Priority, configuration_index
from vibsym.structures.handedness import MIRRORED, chirality_symbol, helicity
from vibsym.structures.isomer_names import label, trade_names
from vibsym.structures.ligands import Ligand, read_ligands
from vibsym.structures.placing import centre_atom, placed
from vibsym.structures.polyhedra import Shape, shape
from vibsym.structures.priorities import rankings
from vibsym.structures.symmetry import Symmetry

_LINE = {"D4h": "D∞h", "C4v": "C∞v"}        # finite image of the group of a linear shape


@dataclass(frozen=True, eq=False)
class Isomers:
    """All isomers of a composition, in a fixed order; a pair of enantiomers is one of them."""

    shape: Shape
    centre: str
    ligands: tuple[Ligand, ...]
    orbits: Orbits
    names: tuple[str, ...]
    rankings: tuple[tuple[int, ...], ...]   # orders of priority of the colours that the CIP rule leaves possible

    @property
    def count(self) -> int:
        """Number of isomers, a pair of enantiomers counted once."""
        return self.orbits.count

    @property
    def stereoisomers(self) -> int:
        """Number of isomers, enantiomers counted each."""
        return self.orbits.stereoisomers

    def __len__(self) -> int:
        return self.count

    def __getitem__(self, number: int) -> "Isomer":
        if not 0 <= number < self.count:
            raise IndexError(number)
        return Isomer(self, number)

    def first(self, limit: int | None = None) -> list["Isomer"]:
        """Return the first `limit` isomers, all of them without a limit."""
        return [Isomer(self, number) for number in range(self.count if limit is None else min(limit, self.count))]

    @cached_property
    def _stabilisers(self) -> dict:
        return {}

    def stabiliser_of(self, kept: np.ndarray) -> tuple[object, np.ndarray, np.ndarray]:
        """Return (group, frame, operations) of the subgroup of the shape's group made of these operations; kept."""
        key = kept.tobytes()
        if key not in self._stabilisers:
            image = self.shape.image
            group, frame, order = identified(image.matrices[kept], image.determinants[kept])
            if self.shape.group.infinite:
                group = point_group(_LINE[group.symbol])
            self._stabilisers[key] = group, frame, kept[order]
        return self._stabilisers[key]

    def ranking_text(self, order: Sequence[int]) -> str:
        """Return an order of priority as it is written: `L > CO`."""
        return " > ".join(label(self.orbits, colour) for colour in order)


def isomers(symbol: str | Shape, centre: str, ligands: Sequence[str], donors: Sequence[str] = ()) -> Isomers:
    """Return all isomers of a centre with ligands (`CO=4`, `L=2`, `en(N,N)=3`) on a shape (`OC-6`).

    `donors` names the donor atom of a named point for the priorities (`L=P`).

    >>> found = isomers("OC-6", "Mo", ["CO=4", "L=2"], ["L=P"])
    >>> [(isomer.name, isomer.index, isomer.symmetry.group.symbol) for isomer in found.first()]
    [('cis', 'OC-6-22', 'C2v'), ('trans', 'OC-6-12', 'D4h')]
    """
    where = symbol if isinstance(symbol, Shape) else shape(symbol)
    centre_atom(centre)
    sorts = read_ligands(ligands, donors, sites=len(where))
    found = orbits(where, sorts)
    return Isomers(where, centre, sorts, found, tuple(trade_names(found)), tuple(rankings(found.colours, sorts)))


@dataclass(frozen=True, eq=False)
class Isomer:
    """One isomer of a list; what it is made of is worked out when it is asked for."""

    among: Isomers
    number: int

    @property
    def name(self) -> str:
        """Trade name where there is one (`cis`, `fac`), else what tells it apart."""
        return self.among.names[self.number]

    @property
    def numbered(self) -> bool:
        """Whether the name ends in a running number, since no trade name tells the isomer apart."""
        return re.search(r" \(\d+\)$|^isomer \d+$", self.name) is not None

    @property
    def colours(self) -> list[int]:
        """The colour of each site."""
        return self.among.orbits.sites[self.number].tolist()

    @property
    def chiral(self) -> bool:
        """Whether it is a pair of enantiomers."""
        return bool(self.among.orbits.chiral[self.number])

    @property
    def stereoisomers(self) -> int:
        """2 for a pair of enantiomers, else 1."""
        return 2 if self.chiral else 1

    @cached_property
    def chelates(self) -> list[tuple[int, ...]]:
        """The sites that each ligand of several donors holds."""
        held = dict.fromkeys(bits for bits in self.among.orbits.holders[self.number].tolist() if bits)
        return [tuple(site for site in range(len(self.among.shape)) if bits >> site & 1) for bits in held]

    @property
    def arrangement(self) -> list[str]:
        """What stands on each site: `CO`; a donor of a chelate with the number of its ligand, `en1:N`."""
        texts = [label(self.among.orbits, colour) for colour in self.colours]
        seen: dict[str, int] = {}
        for sites in self.chelates:
            name = texts[sites[0]].partition(":")[0]
            seen[name] = seen.get(name, 0) + 1
            for site in sites:
                texts[site] = f"{name}{seen[name]}:{texts[site].partition(':')[2]}"
        return texts

    @cached_property
    def indices(self) -> dict[str, tuple[tuple[int, ...], ...]]:
        """The configuration index for every possible order of priority (one entry: it does not depend on it)."""
        among = self.among
        found: dict[str, tuple] = {}
        if among.shape.symbol in INDEXED:
            for order in among.rankings:
                index = min(configuration_index(among.shape, numbers) for numbers in self._priorities(order))
                found[index] = (*found.get(index, ()), order)
        return found

    @property
    def index(self) -> str | None:
        """The configuration index, None where the shape has none or it depends on an unknown donor."""
        return next(iter(self.indices)) if len(self.indices) == 1 else None

    @cached_property
    def descriptors(self) -> tuple[str, ...]:
        """The chirality symbols of the pair, the one of the arrangement shown first; empty if there are none."""
        if not self.chiral:
            return ()
        edges = [sites for sites in self.chelates if len(sites) == 2]
        symbol = helicity(self.among.shape, edges) if self.among.shape.symbol == "OC-6" and len(edges) > 1 else None
        if symbol is None:
            told = {chirality_symbol(self.among.shape, self._priorities(order)[0]) for order in self.among.rankings}
            symbol = told.pop() if len(told) == 1 else None
        return (symbol, MIRRORED[symbol]) if symbol else ()

    def _priorities(self, order: Sequence[int]) -> list[list[Priority]]:
        """Priority numbers of the sites; with two alike ligands of three donors each way of priming one of them."""
        rank = {colour: place for place, colour in enumerate(order, 1)}
        numbers = [rank[colour] for colour in self.colours]
        triples = [sites for sites in self.chelates if len(sites) == 3]
        if len(triples) == 2 and len(self.among.ligands) == 1:
            return [[(number, int(site in primed)) for site, number in enumerate(numbers)] for primed in triples]
        return [[(number, 0) for number in numbers]]

    @cached_property
    def _placed(self):
        among = self.among
        whats = [among.orbits.colours[colour] for colour in self.colours]
        return placed(among.shape, among.centre, [(among.ligands[what.ligand], what.donor) for what in whats])

    @property
    def structure(self):
        """The idealised structure: centre first, then the ligands site by site."""
        return self._placed[0]

    @property
    def donor_atoms(self) -> np.ndarray:
        """(n,) atom on each site."""
        return self._placed[1]

    @property
    def outer_atoms(self) -> np.ndarray:
        """(n,) second atom of the linear diatomic on each site, -1 where there is none."""
        return self._placed[2]

    @cached_property
    def stabiliser(self) -> tuple[object, np.ndarray, np.ndarray]:
        """(group, frame, operations): the group, its frame, and which operation of the shape each of its own is."""
        return self.among.stabiliser_of(np.flatnonzero(self.among.orbits.keeps[self.number]))

    @property
    def group(self):
        """The point group by the stabiliser of the arrangement (`PointGroup`, for linear shapes `InfiniteGroup`)."""
        return self.stabiliser[0]

    @property
    def point_group(self) -> dict:
        """The `point_group` object of JSON; the shape is exact, so tolerance and deviation are zero."""
        group = self.group
        return {"symbol": group.symbol, "order": group.order, "tolerance": 0.0, "deviation": 0.0,
                "chiral": bool(group.chiral), "centrosymmetric": bool(group.centrosymmetric)}

    @cached_property
    def site_permutations(self) -> np.ndarray:
        """(h, n) what each operation of `group.image` does to the sites, the axes chosen by the ladder."""
        group, _, operations = self.stabiliser
        if len(settings(group.symbol)) > 1:
            operations = operations[self._setting[1]]
        return self.among.shape.permutations[operations]

    @cached_property
    def _setting(self) -> tuple[np.ndarray, np.ndarray, bool]:
        """(frame, order of the stabiliser's operations in it, decided by rule), axes by the ladder of choice."""
        group, frame, operations = self.stabiliser
        positions = self.structure.positions
        frame = free_frame(group.symbol, frame, positions, self.structure)
        frame, order, decided = chosen_setting(group, frame, positions, self.structure, None, self._links())
        return frame, np.arange(len(operations)) if order is None else order, decided

    def _links(self) -> np.ndarray:
        """The bonds and, for chelates, the backbone from donor to donor, which the ladder of choice must see."""
        backbone = [(self.donor_atoms[i], self.donor_atoms[j]) for sites in self.chelates
                    for i, j in combinations(sites, 2) if self.among.shape.neighbours[i, j]]
        return np.concatenate([self.structure.bonds, np.array(backbone, dtype=int).reshape(-1, 2)])

    @cached_property
    def symmetry(self) -> Symmetry:
        """The symmetry of the placed structure by the stabiliser of the arrangement, axes by the ladder of choice."""
        structure, group = self.structure, self.group
        frame, order, decided = self._setting
        sites = self.among.shape.permutations[self.stabiliser[2][order]]
        local = structure.positions @ frame.T
        weights = np.nan_to_num(structure.masses)
        centre = weights @ local / weights.sum() if weights.sum() else np.zeros(3)
        centre = group.image.matrices.mean(axis=0) @ centre          # exactly on every element
        return Symmetry(structure, group, 0.0, 0.0, centre @ frame, frame, local - centre,
                        self._atom_permutations(sites), np.zeros(len(structure)), None, decided)

    def _atom_permutations(self, sites: np.ndarray) -> np.ndarray:
        """(h, N) permutations of the atoms from (h, n) permutations of the sites."""
        atoms = np.zeros((len(sites), len(self.structure)), dtype=int)
        atoms[:, self.donor_atoms] = self.donor_atoms[sites]
        two = np.flatnonzero(self.outer_atoms >= 0)
        atoms[:, self.outer_atoms[two]] = self.outer_atoms[sites[:, two]]
        if np.any(atoms < 0):
            raise VibsymError("an operation carries a diatomic ligand onto another; this is an error of vibsym")
        return atoms
