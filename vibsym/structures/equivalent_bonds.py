"""The bonds of a structure as its symmetry has them: equivalent pairs of atoms are bonded alike or not at all.

Bonds by distance are found at the symmetrised positions and are alike by themselves.  Bonds that a file or an option
states may break the symmetry (one of six equivalent bonds is taken away, say); a broken set is completed in the
sense of the change: it differs from what the distances say.
"""

from dataclasses import replace

import numpy as np

from vibsym.structures.bonds import find_bonds
from vibsym.structures.symmetry import Symmetry


def symmetric_bonds(symmetry: Symmetry) -> np.ndarray:
    """Return the (B, 2) bonds i < j, counted from 0, closed under the operations of the symmetry."""
    structure = symmetry.symmetrised
    bonds = find_bonds(structure)
    if structure.bonds is None or not len(bonds):
        return bonds
    atoms = len(structure)
    codes = _codes(np.sort(bonds, axis=1), atoms)
    images = _codes(np.sort(symmetry.permutations[:, bonds], axis=2), atoms)
    whole = np.isin(images, codes).all(axis=0)
    if whole.all():
        return bonds
    broken = np.unique(images[:, ~whole])
    near = _codes(find_bonds(replace(structure, bonds=None)), atoms)
    kept = np.union1d(np.setdiff1d(codes, broken), np.setdiff1d(broken, near))
    return np.stack((kept // atoms, kept % atoms), axis=1)


def _codes(pairs: np.ndarray, atoms: int) -> np.ndarray:
    return pairs[..., 0] * atoms + pairs[..., 1]
