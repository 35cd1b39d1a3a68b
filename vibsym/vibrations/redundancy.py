"""Which internal coordinates are independent, species by species: ranks, shares, redundancies, what is missing.

The rank of B in a species is the rank of B C, C the Cartesian symmetry vectors of one component of it; singular values
above 1e-6 of the largest of B count.  In a conjugate pair both components are taken together and the rank is halved.
Sets are taken in order; the share of a set is what it adds to the rank, so the shares and what is missing add up to
Γvib:

    share_k(i) = rank_i(sets 1 ... k) - rank_i(sets 1 ... k - 1)
    redundancies_i = copies of i among the coordinates - rank_i ,     missing_i = n_i(Γvib) - rank_i

(E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, sections 6-3 and 6-6.)
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.groups.bases import Basis
from vibsym.groups.projection import invariant_seeds, site_group
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.bmatrix import b_matrix
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.internal import CoordinateSet
from vibsym.vibrations.representation import coordinate_basis

RANK = 1e-6                                # of the largest singular value


@dataclass(frozen=True, eq=False, repr=False)
class Independence:
    """Ranks of internal coordinates in each species (labels of the group, table order; zeros left out).

    `gammas` are the representations that the sets carry, `shares` what each adds to the rank in the order of the sets.
    """

    symmetry: Symmetry
    sets: tuple[CoordinateSet, ...]
    gammas: tuple[dict[str, int], ...]
    shares: tuple[dict[str, int], ...]
    gamma_vib: dict[str, int]
    blocks: tuple[np.ndarray, ...]         # rows of B, set by set
    frames: tuple[tuple, ...]              # (label, vectors, norm) of the species of the displacements
    floor: float                           # singular values above it count

    @cached_property
    def joined(self) -> tuple[tuple[str, str], ...]:
        """Pairs (set, species) where a redundancy with the sets before takes a part of the set away."""
        found = []
        for each, block, gamma, share in zip(self.sets, self.blocks, self.gammas, self.shares, strict=True):
            for label, frame, norm in self.frames:
                counted = share.get(label, 0)
                if gamma.get(label, 0) > counted and rank_of(block @ frame, self.floor) > norm * counted:
                    found.append((each.name, label))
        return tuple(found)

    @cached_property
    def rank(self) -> dict[str, int]:
        """Number of independent coordinates in each species."""
        return self._sum(self.shares)

    @cached_property
    def redundancies(self) -> dict[str, int]:
        """Number of redundant combinations in each species."""
        return self._difference(self._sum(self.gammas), self.rank)

    @cached_property
    def missing(self) -> dict[str, int]:
        """Vibrations of each species that the coordinates cannot describe; empty for a complete set."""
        return self._difference(self.gamma_vib, self.rank)

    @property
    def complete(self) -> bool:
        """The coordinates span Γvib."""
        return not self.missing

    def _sum(self, gammas) -> dict[str, int]:
        totals = {label: sum(gamma.get(label, 0) for gamma in gammas) for label in self.symmetry.group.labels}
        return {label: n for label, n in totals.items() if n}

    def _difference(self, one, other) -> dict[str, int]:
        left = {label: one.get(label, 0) - other.get(label, 0) for label in self.symmetry.group.labels}
        return {label: n for label, n in left.items() if n}


def independence(symmetry: Symmetry, sets: Sequence[CoordinateSet]) -> Independence:
    """Return how many of the coordinates are independent in each species, set by set."""
    labels = symmetry.group.image_labels
    gamma_vib = displacements(symmetry).gamma_vib
    gammas = tuple(coordinate_basis(symmetry, each).reduce() for each in sets)
    gammas = tuple({labels.get(label, label): n for label, n in gamma.items()} for gamma in gammas)
    blocks = [b_matrix(symmetry.positions, [each]) for each in sets]
    floor = RANK * _largest_singular_value(blocks)
    shares: list[dict[str, int]] = [{} for _ in sets]
    frames = tuple((labels.get(label, label), *rest) for label, *rest in species_frames(symmetry, gamma_vib))
    for name, frame, norm in frames:
        most = norm * gamma_vib.get(name, 0)
        ladder = RankLadder(frame.shape[1], floor)
        for gamma, share, block in zip(gammas, shares, blocks, strict=True):
            if ladder.rank < most and gamma.get(name):
                added = ladder.add(block @ frame)
                if added:
                    share[name] = added // norm
    ordered = tuple({label: share[label] for label in symmetry.group.labels if label in share} for share in shares)
    return Independence(symmetry, tuple(sets), gammas, ordered, gamma_vib, tuple(blocks), frames, floor)


def species_frames(symmetry: Symmetry, gamma: Mapping[str, int] | None = None):
    """Yield (image label, vectors, norm): orthonormal columns (3N, k) of one component of the species in the
    displacements.

    In a conjugate pair (norm 2) both components stand side by side.  `gamma` restricts to the species it holds.
    """
    group, labels = symmetry.group.image, symmetry.group.image_labels
    basis = Basis.displacements(group, symmetry.permutations)
    sites = [(orbit, *site_group(basis, orbit)) for orbit in basis.orbits()]
    for label, norm in zip(group.labels, group.norms.tolist(), strict=True):
        if gamma is not None and labels.get(label, label) not in gamma:
            continue
        irrep, columns = group.irrep(label), []
        for orbit, seed, transport, site in sites:
            seeds = invariant_seeds(irrep[site], basis.blocks[site, seed], norm == 2)
            if len(seeds):
                columns.append(_first_components(irrep[transport, :norm], seeds, basis.blocks[transport, seed], orbit,
                                                 basis.size, irrep.shape[1]))
        if columns:
            yield label, np.concatenate(columns, axis=1), norm


def _first_components(rows, seeds, blocks, orbit, atoms: int, degeneracy: int) -> np.ndarray:
    """Return (3N, copies × rows): rows of D(g) U R(g)' at every atom of an orbit (vibsym/groups/projection.py)."""
    values = rows[:, None] @ seeds @ blocks[:, None].swapaxes(2, 3)        # atom of the orbit, copy, row, x y z
    full = np.zeros((atoms, 3, len(seeds) * rows.shape[1]))
    full[orbit] = values.transpose(0, 3, 1, 2).reshape(len(orbit), 3, -1) * (degeneracy / len(orbit)) ** 0.5
    return full.reshape(3 * atoms, -1)


def rank_of(rows: np.ndarray, floor: float) -> int:
    """Return the number of singular values of (m, n) rows above `floor`."""
    return RankLadder(rows.shape[1], floor).add(rows)


class RankLadder:
    """The rank of rows that come block by block; each block is first freed of what came before."""

    def __init__(self, width: int, floor: float):
        self.floor = floor
        self.found = np.zeros((0, width))                  # orthonormal rows that span what has come so far

    @property
    def rank(self) -> int:
        """The rank of what has come so far."""
        return len(self.found)

    def add(self, rows: np.ndarray) -> int:
        """Take in a block of rows (m, n) and return by how much the rank grows."""
        rest = rows - (rows @ self.found.T) @ self.found
        if len(rest) > rest.shape[1]:
            sizes, vectors = np.linalg.eigh(rest.T @ rest)
            new = vectors[:, sizes > self.floor**2].T
        else:
            sizes, vectors = np.linalg.eigh(rest @ rest.T)
            large = sizes > self.floor**2
            new = (vectors[:, large] / np.sqrt(sizes[large])).T @ rest
        if len(new):
            new = new - (new @ self.found.T) @ self.found  # once more, for what rounding left
            self.found = np.concatenate([self.found, np.linalg.qr(new.T)[0].T])
        return len(new)


def _largest_singular_value(blocks: Sequence[np.ndarray]) -> float:
    """Return the largest singular value of the stacked blocks, to a few figures (power iteration)."""
    if not blocks:
        return 0.0
    stacked = np.concatenate(blocks)
    vector = np.cos(np.arange(stacked.shape[1]) ** 1.5)    # any start without symmetry
    size = 0.0
    for _ in range(12):
        vector = stacked.T @ (stacked @ vector)
        size = float(np.linalg.norm(vector))
        if size == 0:
            return 0.0
        vector /= size
    return size**0.5
