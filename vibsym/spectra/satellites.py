"""Satellites of metal carbonyls: the molecules with one carbon-13 in a carbonyl group, at natural abundance.

One carbon in 93 is carbon-13, so that a molecule with n equivalent carbonyls shows satellites of the relative weight
n a/(1 - a), a the abundance.  Positions need a force field for the stretches: in the energy-factored one (F. A.
Cotton, C. S. Kraihanzel, J. Am. Chem. Soc. 84, 4432 (1962); G. Bor, Inorg. Chim. Acta 1, 81 (1967)) each C-O is an
oscillator of its reduced mass, F = Σ k_γ P_γ with k = 4π²c²μν² for every species γ that occurs once, and GF is solved
again with carbon-13.
"""

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.bases import Basis
from vibsym.groups.projection import symmetry_vectors
from vibsym.structures.bonds import find_bonds
from vibsym.structures.elements import isotopes
from vibsym.structures.finder import find_symmetry
from vibsym.structures.isotopes import isotopologues
from vibsym.structures.reduced import reduced_object
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, LOCAL_TOLERANCE, Symmetry

FORCE = 5.8917936e-5               # 4π²c² u in N/m for μ in u, ν in cm-1 (CODATA 2018)


@dataclass(frozen=True, eq=False)
class Satellite:
    """A molecule with one carbonyl carbon-13 (`atom`, from 0), or the main one (None).

    `gamma`: species of the C-O stretches in the group of this molecule; `positions`: (species, cm-1) where known.
    """

    atom: int | None
    symmetry: Symmetry
    sites: int
    weight: float
    gamma: dict[str, int]
    positions: tuple[tuple[str, float], ...]

    def to_dict(self) -> dict:
        """Return the satellite for JSON."""
        group = self.symmetry.group
        bands = [{"species": label, "wavenumber": round(value, 2), "infrared": group.species_named(label).infrared,
                  "raman": group.species_named(label).raman} for label, value in self.positions]
        return {"atom": None if self.atom is None else self.atom + 1, "point_group": group.symbol, "sites": self.sites,
                "weight": round(self.weight, 6), "gamma": dict(self.gamma), "positions": bands}


@dataclass(frozen=True, eq=False)
class Satellites:
    """The main molecule and its satellites."""

    structure: Structure
    molecules: tuple[Satellite, ...]

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        return {"structure": self.structure.to_dict(), "abundance": isotopes("C")[13].abundance,
                "satellites": [each.to_dict() for each in self.molecules]}


def local_satellites(structure: Structure, observed: Mapping[str, float] | None = None,
                     tolerance: float = LOCAL_TOLERANCE) -> Satellites:
    """Return the satellites in the local group of the carbonyls: the metal, its donor atoms and the C-O groups alone.

    The reduced object is that of vibsym/structures/reduced.py; atoms keep the numbers of the whole structure.
    """
    reduced = reduced_object(structure, carbonyls(structure), find_bonds(structure))
    found = satellites(reduced.structure, observed, tolerance, reduced.pairs)
    molecules = tuple(each if each.atom is None else replace(each, atom=reduced.origins[each.atom][0])
                      for each in found.molecules)
    return Satellites(structure, molecules)


def satellites(structure: Structure, observed: Mapping[str, float] | None = None,
               tolerance: float = DEFAULT_TOLERANCE, pairs: np.ndarray | None = None) -> Satellites:
    """Return the carbon-13 satellites of the carbonyls of a structure.

    `observed`: the C-O stretch of each species of the main molecule, cm-1; each must occur once, or a force field
    does not follow.  Without it no positions are given.
    """
    pairs = carbonyls(structure) if pairs is None else _carbon_first(structure, pairs)
    force = None
    main = find_symmetry(structure, tolerance)
    if observed:
        force = _force_constants(main, pairs, {main.group.species_named(k).label: v for k, v in observed.items()})
    abundance = isotopes("C")[13].abundance
    found = [_satellite(None, main, pairs, len(pairs), 1.0, force)]
    sites = ",".join(f"{carbon + 1}=13C" for carbon, _ in pairs)
    for each in isotopologues(structure, sites, tolerance, substituted=(1,)):
        weight = each.weight * abundance / (1 - abundance)
        found.append(_satellite(each.sites[0], each.symmetry, pairs, each.weight, weight, force))
    return Satellites(structure, tuple(found))


def carbonyls(structure: Structure) -> np.ndarray:
    """Return (n, 2) carbon and oxygen of terminal carbonyls: oxygen with one neighbour, carbon with one such oxygen.

    A carbon with two (a carboxylate, carbon dioxide) is none.
    """
    bonds = find_bonds(structure)
    neighbours = np.bincount(bonds.ravel(), minlength=len(structure)) if len(bonds) else np.zeros(len(structure), int)
    pairs = [(i, j) if structure.symbols[i] == "C" else (j, i) for i, j in bonds.tolist()
             if {structure.symbols[i], structure.symbols[j]} == {"C", "O"}]
    ends = [(carbon, oxygen) for carbon, oxygen in pairs if neighbours[oxygen] == 1]
    carbons = [carbon for carbon, _ in ends]
    found = [pair for pair in ends if carbons.count(pair[0]) == 1]
    if not found:
        raise VibsymError(f"{structure.source or structure.formula}: no terminal carbonyl group C-O; "
                          "check the bonds with --bond and --no-bond")
    return np.array(found)


def _carbon_first(structure: Structure, pairs: np.ndarray) -> np.ndarray:
    return np.array([(i, j) if structure.symbols[i] == "C" else (j, i) for i, j in np.asarray(pairs).tolist()])


def _stretches(symmetry: Symmetry, pairs: np.ndarray) -> Basis:
    place = np.full(len(symmetry.structure), -1)
    place[pairs[:, 0]] = np.arange(len(pairs))
    return Basis.signed(symmetry.group.image, place[symmetry.permutations[:, pairs[:, 0]]])


def _force_constants(symmetry: Symmetry, pairs: np.ndarray, observed: Mapping[str, float]) -> np.ndarray:
    """F (n, n) in N/m from one observed stretch a species."""
    names = symmetry.group.image_labels
    masses = symmetry.structure.masses[pairs]
    reduced = masses.prod(axis=1) / masses.sum(axis=1)
    F = np.zeros((len(pairs), len(pairs)))
    for label, vectors in symmetry_vectors(_stretches(symmetry, pairs)).items():
        name = names[label]
        if len(vectors) > 1:
            raise VibsymError(f"{len(vectors)} C-O stretches are {name}: observed positions do not fix a force field")
        if name not in observed:
            raise VibsymError(f"positions of satellites need a C-O stretch of every species; none is given for {name}")
        flat = vectors.reshape(-1, len(pairs))
        scaled = flat * np.sqrt(FORCE * reduced) * observed[name]
        F += scaled.T @ scaled
    return F


def _satellite(atom, symmetry: Symmetry, pairs: np.ndarray, sites: int, weight: float, force) -> Satellite:
    basis = _stretches(symmetry, pairs)
    names = symmetry.group.image_labels
    gamma = {names[label]: n for label, n in basis.reduce().items()}
    positions: list[tuple[str, float]] = []
    if force is not None:
        masses = symmetry.structure.masses[pairs]
        root = np.sqrt(masses.sum(axis=1) / masses.prod(axis=1))
        whole = root[:, None] * force * root[None, :]
        for label, vectors in symmetry_vectors(basis).items():
            first = vectors[:, 0, :]
            values = np.linalg.eigvalsh(first @ whole @ first.T)
            positions += [(names[label], float((value / FORCE) ** 0.5)) for value in values]
    return Satellite(atom, symmetry, sites, weight, gamma, tuple(sorted(positions, key=lambda each: -each[1])))
