"""The isomers of a composition on a coordination shape: every one, with its name, index, handedness, group and structure.

Which arrangements are one isomer is counted in `arrangements.py`.  The group of an isomer is the stabiliser of its
arrangement: the operations of the shape that leave it unchanged.  It is exact and never the work of the geometric finder,
so chelates drawn as two points lower it as they should.  The axes follow the ladder of choice on the placed structure.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.structures.arrangements import Orbits, orbits
from vibsym.structures.configuration_index import INDEXED, Priority, configuration_index
from vibsym.structures.handedness import MIRRORED, chirality_symbol, helicity
from vibsym.structures.identify import identified
from vibsym.structures.isomer_names import label, trade_names
from vibsym.structures.ligands import Ligand, read_ligands
from vibsym.structures.placing import centre_atom, placed
from vibsym.structures.polyhedra import Shape, shape
from vibsym.structures.priorities import rankings
from vibsym.structures.settings import chosen_setting, free_frame
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
        """The configuration index for every order of priority that is possible (one entry: it does not depend on it)."""
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
    def symmetry(self) -> Symmetry:
        """The symmetry by the stabiliser of the arrangement, axes by the ladder of choice."""
        among, structure = self.among, self.structure
        kept = np.flatnonzero(among.orbits.keeps[self.number])
        image = among.shape.image
        matrices, signs = image.matrices[kept], image.determinants[kept]
        group, frame, order = identified(matrices, signs)
        if among.shape.group.infinite:
            group = point_group(_LINE[group.symbol])
        permutations = self._atom_permutations(among.shape.permutations[kept[order]])
        frame = free_frame(group.symbol, frame, structure.positions, structure)
        local = structure.positions @ frame.T
        frame, turned, decided = chosen_setting(group, frame, structure.positions, structure, None, structure.bonds)
        local = structure.positions @ frame.T
        if turned is not None:
            permutations = permutations[turned]
        weights = np.nan_to_num(structure.masses)
        centre = weights @ local / weights.sum() if weights.sum() else np.zeros(3)
        centre = group.image.matrices.mean(axis=0) @ centre
        return Symmetry(structure, group, 0.0, 0.0, centre @ frame, frame, local - centre, permutations,
                        np.zeros(len(structure)), None, decided)

    def _atom_permutations(self, sites: np.ndarray) -> np.ndarray:
        """(h, N) permutations of the atoms from (h, n) permutations of the sites."""
        atoms = np.zeros((len(sites), len(self.structure)), dtype=int)
        atoms[:, self.donor_atoms] = self.donor_atoms[sites]
        two = np.flatnonzero(self.outer_atoms >= 0)
        atoms[:, self.outer_atoms[two]] = self.outer_atoms[sites[:, two]]
        if np.any(atoms < 0):
            raise VibsymError("an operation carries a diatomic ligand onto another; this is an error of vibsym")
        return atoms
