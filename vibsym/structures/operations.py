"""Operations found in a structure, before it is known which group they make.

An operation is known by where it sends a reference pair of atoms (not in line with the centroid) and by its
determinant.  `candidates.py` and `generating.py` find operations, `subsets.py` tells which of them close.
"""

from dataclasses import dataclass

import numpy as np

SLACK = 1.5                    # least squares does not minimise the largest residual, so it may exceed 2t somewhat


@dataclass(frozen=True)
class Operations:
    """Candidates (C): permutations (C, N), determinants (C,), fitted matrices (C, 3, 3), largest residuals (C,) in Å,
    the pair of atoms.
    """

    permutations: np.ndarray
    signs: np.ndarray
    matrices: np.ndarray
    residuals: np.ndarray
    pair: tuple

    def chosen(self, indices):
        """Return some of the operations."""
        return Operations(self.permutations[indices], self.signs[indices], self.matrices[indices],
                          self.residuals[indices], self.pair)


def codes_of(permutations, signs, pair):
    """Return (C,) whole numbers that tell operations apart: where the pair goes, and the determinant."""
    a, b = pair
    atoms = permutations.shape[1]
    return (permutations[:, a] * atoms + permutations[:, b]) * 2 + (signs > 0)
