"""G and F in symmetry coordinates: one block for each species.

With the symmetry coordinates S of all sets a matrix M over the internal coordinates becomes S M S', which is nothing
but one and the same block in every component of a species (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular
Vibrations, 1955, sections 6-4 and 6-7).  In a conjugate pair the components are coupled, [[A, -B], [B, A]]; the
Hermitian A + iB holds the same and has each eigenvalue once.
"""

from collections.abc import Sequence

import numpy as np

from vibsym.groups.projection import symmetry_vectors
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.internal import CoordinateSet
from vibsym.vibrations.representation import coordinate_basis


def symmetry_rows(symmetry: Symmetry, sets: Sequence[CoordinateSet]) -> dict[str, np.ndarray]:
    """Return for each species (labels of the group) its symmetry coordinates over all sets, (copies, degeneracy, m)."""
    size = sum(len(each) * each.components for each in sets)
    labels = symmetry.group.image_labels
    rows: dict[str, list[np.ndarray]] = {label: [] for label in symmetry.group.image.labels}
    start = 0
    for each in sets:
        width = len(each) * each.components
        for label, vectors in symmetry_vectors(coordinate_basis(symmetry, each)).items():
            full = np.zeros((*vectors.shape[:2], size))
            full[..., start:start + width] = vectors
            rows[label].append(full)
        start += width
    return {labels.get(label, label): np.concatenate(parts) for label, parts in rows.items() if parts}


def symmetry_blocks(symmetry: Symmetry, sets: Sequence[CoordinateSet], matrix: np.ndarray) -> dict[str, np.ndarray]:
    """Return the block (copies, copies) of a matrix (m, m) in each species; in a conjugate pair it is A + iB.

    The matrix is that of an operator which every operation leaves as it is: G, F, a Hessian over the coordinates.
    """
    blocks = {}
    for label, rows in symmetry_rows(symmetry, sets).items():
        block = rows[:, 0] @ matrix @ rows[:, 0].T
        if symmetry.group.species_named(label).pair:
            block = block + 1j * (rows[:, 1] @ matrix @ rows[:, 0].T)
        blocks[label] = block
    return blocks
