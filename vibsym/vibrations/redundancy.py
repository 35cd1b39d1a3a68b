"""Which internal coordinates are independent, species by species: ranks, shares, redundancies, what is missing.

The rank of B in a species is the rank of B C, C the Cartesian symmetry vectors of one component of it; singular values
above 1e-6 of the largest of B count.  In a conjugate pair both components are taken together and the rank is halved.
Sets are taken in order; the share of a set is what it adds to the rank, so the shares and what is missing add up to Γvib:

    share_k(i) = rank_i(sets 1 ... k) - rank_i(sets 1 ... k - 1)
    redundancies_i = copies of i among the coordinates - rank_i ,     missing_i = n_i(Γvib) - rank_i

(E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, sections 6-3 and 6-6.)
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.groups.bases import Basis
from vibsym.groups.projection import symmetry_vectors
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.bmatrix import b_matrix
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.internal import CoordinateSet
from vibsym.vibrations.representation import coordinate_basis

RANK = 1e-6                                # of the largest singular value


@dataclass(frozen=True, eq=False)
class Independence:
    """Ranks of internal coordinates in each species (labels of the group, table order; zeros left out).

    `gammas` are the representations that the sets carry, `shares` what each adds to the rank in the order of the sets.
    """

    symmetry: Symmetry
    sets: tuple[CoordinateSet, ...]
    gammas: tuple[dict[str, int], ...]
    shares: tuple[dict[str, int], ...]
    gamma_vib: dict[str, int]

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
    for label, frame, norm in species_frames(symmetry):
        name = labels.get(label, label)
        most = norm * gamma_vib.get(name, 0)
        ladder = RankLadder(frame.shape[1], floor)
        for gamma, share, block in zip(gammas, shares, blocks, strict=True):
            if ladder.rank < most and gamma.get(name):
                added = ladder.add(block @ frame)
                if added:
                    share[name] = added // norm
    ordered = tuple({label: share[label] for label in symmetry.group.labels if label in share} for share in shares)
    return Independence(symmetry, tuple(sets), gammas, ordered, gamma_vib)


def species_frames(symmetry: Symmetry):
    """Yield (image label, vectors, norm): orthonormal columns (3N, k) of one component of the species in the displacements.

    In a conjugate pair (norm 2) both components stand side by side.
    """
    group = symmetry.group.image
    norms = dict(zip(group.labels, group.norms.tolist(), strict=True))
    for label, vectors in symmetry_vectors(Basis.displacements(group, symmetry.permutations)).items():
        rows = vectors.reshape(-1, vectors.shape[-1]) if norms[label] == 2 else vectors[:, 0]
        yield label, rows.T, norms[label]


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
    vector = np.random.default_rng(1).normal(size=stacked.shape[1])
    size = 0.0
    for _ in range(12):
        vector = stacked.T @ (stacked @ vector)
        size = float(np.linalg.norm(vector))
        if size == 0:
            return 0.0
        vector /= size
    return size**0.5
