"""Normal modes by the GF method, species by species.

With B the coordinates and F their force constants, H = M^-1/2 B'FB M^-1/2 has the eigenvalues λ of GF and ν =
(λ)^(1/2)/2πc (E. B. Wilson, J. Chem. Phys. 7, 1047 (1939); E. B. Wilson, J. C. Decius, P. C. Cross, Molecular
Vibrations, 1955, ch. 4 and 6). H is taken in symmetry displacements of one component of a species, with translations
and rotations taken out; redundant coordinates do no harm.  A pair of conjugate species is solved as a whole, [[A, -B],
[B, A]], each value twice.

Potential energy distribution: the share of a set is Σ_i S_i (F S)_i / Σ all, i over its coordinates (Y. Morino, K.
Kuchitsu, J. Chem. Phys. 20, 1809 (1952)); interaction constants count half for each side, so a small share can be
negative.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np

from vibsym.groups.species import Species
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.bmatrix import b_matrix, rigid_motions
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.redundancy import species_frames
from vibsym.vibrations.units import WAVENUMBER

LOOSE = 0.01  # cm-1; below, a vibration has no restoring force
RIGID = 0.5  # singular value (0 or 1 but for rounding) above which a direction of a species is a rigid motion


class SpeciesBlock(NamedTuple):
    """One species: vibrational directions U (3N, k), mass-weighted, orthonormal; rows = B M^-1/2 U."""

    species: str
    degeneracy: int
    norm: int  # 2: pair of conjugate species, both components side by side
    modes: int
    vectors: np.ndarray
    rows: np.ndarray | None


@dataclass(frozen=True, eq=False)
class Mode:
    """A normal mode; a degenerate set is one. `vector` (3N,) is one component, mass-weighted."""

    name: str  # "ν3"
    species: str
    degeneracy: int
    wavenumber: float  # cm-1; negative: imaginary
    infrared: bool
    raman: bool
    polarised: bool
    shares: tuple[tuple[str, float], ...] = ()  # (set, share), the largest first
    weight: float = 1.0  # of the species in an imported mode
    vector: np.ndarray = field(default=None, repr=False)

    @property
    def imaginary(self) -> bool:
        """Whether the structure is a maximum along the mode."""
        return self.wavenumber < 0

    def to_dict(self) -> dict:
        """Return the mode for JSON."""
        return {
            "mode": self.name,
            "species": self.species,
            "degeneracy": self.degeneracy,
            "wavenumber": round(self.wavenumber, 4),
            "imaginary": self.imaginary,
            "infrared": self.infrared,
            "raman": self.raman,
            "weight": round(float(self.weight), 6),
            "shares": [{"set": name, "share": round(share, 4)} for name, share in self.shares],
        }


def species_blocks(symmetry: Symmetry, sets: Sequence = ()) -> list[SpeciesBlock]:
    """Return the species that vibrate, in table order, with translations and rotations taken out."""
    group = symmetry.group
    gamma_vib = displacements(symmetry).gamma_vib
    roots = np.sqrt(np.repeat(symmetry.structure.masses, 3))
    B = b_matrix(symmetry.positions, sets) / roots if len(sets) else None
    rigid = rigid_frame(symmetry)
    found = {}
    for label, frame, norm in species_frames(symmetry):
        name = group.image_labels.get(label, label)
        modes = gamma_vib.get(name, 0)
        if modes and name not in found:
            left, sizes, _ = np.linalg.svd(frame.T @ rigid)
            motions = int((sizes > RIGID).sum())
            vectors = frame @ left[:, motions:]
            degeneracy = group.species_named(name).degeneracy
            found[name] = SpeciesBlock(name, degeneracy, norm, modes, vectors, None if B is None else B @ vectors)
    return [found[label] for label in gamma_vib if label in found]


def normal_modes(symmetry: Symmetry, sets: Sequence, F: np.ndarray, shares: bool = True) -> tuple[Mode, ...]:
    """Return the modes of the force constants F (m, m) over the rows of B, numbered."""
    from vibsym.vibrations.numbering import numbered

    owner = np.repeat(np.arange(len(sets)), [len(each) * each.components for each in sets])
    found = []
    for block in species_blocks(symmetry, sets):
        values, vectors = np.linalg.eigh(block.rows.T @ F @ block.rows)
        keep = np.argsort(values)[::-1][::block.norm][:block.modes]
        S = block.rows @ vectors[:, keep]
        energy = S * (F @ S)
        parts = np.zeros((len(sets), len(keep)))
        np.add.at(parts, owner, energy)
        species = symmetry.group.species_named(block.species)
        for column, number in enumerate(keep):
            wavenumber = float(wavenumbers_of(values[number]))
            if abs(wavenumber) < LOOSE:  # no restoring force: neither a sign nor a distribution
                wavenumber = 0.0
            told = _distribution(sets, parts[:, column]) if shares and wavenumber else ()
            found.append(mode_of(species, wavenumber, block.vectors @ vectors[:, number], shares=told))
    return numbered(found, symmetry)


def mode_of(species: Species, wavenumber: float, vector: np.ndarray, shares=(), weight: float = 1.0) -> Mode:
    """Return a mode of a species, not yet numbered; `wavenumber` in cm-1, `vector` (3N,) mass-weighted."""
    return Mode("", species.label, species.degeneracy, wavenumber, species.infrared, species.raman, species.polarised,
                shares, weight, vector)


def rigid_wavenumbers(symmetry: Symmetry, hessian: np.ndarray) -> np.ndarray:
    """Return the wavenumbers that a mass-weighted Hessian gives to translations and rotations."""
    motions = rigid_frame(symmetry)
    return wavenumbers_of(np.linalg.eigvalsh(motions.T @ hessian @ motions))


def rigid_frame(symmetry: Symmetry) -> np.ndarray:
    """Return (3N, 6), (3N, 5) or (3N, 3) orthonormal translations and rotations in mass-weighted displacements."""
    roots = np.sqrt(np.repeat(symmetry.structure.masses, 3))
    left, sizes, _ = np.linalg.svd(roots[:, None] * rigid_motions(symmetry.positions), full_matrices=False)
    return left[:, sizes > 1e-6 * sizes[0]]


def wavenumbers_of(squares: np.ndarray) -> np.ndarray:
    """Return cm-1 of eigenvalues in N/m/u; imaginary ones negative."""
    return np.sign(squares) * WAVENUMBER * np.sqrt(np.abs(squares))


def _distribution(sets, energies: np.ndarray) -> tuple[tuple[str, float], ...]:
    total = energies.sum()
    if not total > 0:
        return ()
    shares = energies / total
    return tuple((sets[k].name, float(shares[k])) for k in np.argsort(-np.abs(shares)) if abs(shares[k]) >= 0.005)
