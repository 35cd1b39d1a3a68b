"""First-order Coriolis constants ζ of degenerate infrared-active vibrations.

For partners w_x, w_y of a set that transform as x and y (mass-weighted, each of length 1)

    ζ = Σ over atoms (w_x × w_y)_z

(J. H. Meal, S. R. Polo, J. Chem. Phys. 24, 1119 (1956)).  In spherical tops every axis gives the same.  Sum rules:
the two T2 sets of XY4 in Td and the two T1u sets of XY6 in Oh add up to 1/2 (M. Johnston, D. M. Dennison, Phys. Rev.
48, 868 (1935), for the first; from memory).
"""

import numpy as np

from vibsym.structures.symmetry import Symmetry


def coriolis_constant(symmetry: Symmetry, species: str, vector: np.ndarray) -> float | None:
    """Return ζ of a degenerate set from one of its components; None where the species does not hold x and y.

    `vector` (3N,): mass-weighted displacements in the standard frame, of any component.
    """
    found = symmetry.group.species_named(species)
    if found.degeneracy == 1 or not {"x", "y"} <= set(found.linear):
        return None
    x, y = partners(symmetry, found.degeneracy, np.asarray(vector, dtype=float))
    return float(np.cross(x, y)[:, 2].sum())


def partners(symmetry: Symmetry, degeneracy: int, vector: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the components (N, 3) of a set that transform as x and y, each of length 1.

    w_i = Σ_R D_ic(R) R v transforms as the i-th partner for any c (Wigner's shift operators); D is the matrix of x, y
    (, z), and c the column that leaves the longest vector.
    """
    matrices = symmetry.group.image.matrices
    v = vector.reshape(-1, 3)
    moved = np.empty((len(matrices), *v.shape))
    places = np.arange(len(matrices))[:, None]
    moved[places, symmetry.permutations] = np.einsum("rab,nb->rna", matrices, v)
    shifted = np.einsum("ric,rna->icna", matrices[:, :degeneracy, :degeneracy], moved)
    lengths = np.sqrt((shifted[0] ** 2).sum(axis=(1, 2)))
    column = int(np.argmax(lengths))
    return shifted[0, column] / lengths[column], shifted[1, column] / lengths[column]
