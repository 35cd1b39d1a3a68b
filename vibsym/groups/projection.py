"""Projection of a basis onto species components: symmetry-adapted combinations with partners oriented alike.

A combination of an orbit is fixed by what stands at its seed s: with U (species component × component of s)
invariant under the site group of s, D(h) U B(h)^T = U, the coefficient of object c = g_c s is

    v_i(c) = (d / |orbit|)^(1/2)  [D(g_c) U B(g_c)^T]_i ,        R v_i = Σ_j D_ji(R) v_j .

By Schur's lemma different U of an orthonormal set give orthonormal combinations, so every copy of a species in an
orbit is found without orthogonalising long vectors (projection operators: E. P. Wigner, Group Theory, 1959, ch. 12;
E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, ch. 6).  A seed whose projection vanishes gives
no U. For a conjugate pair U and J U (J the rotation by 90° between the partners) are one copy.
"""

import numpy as np

from vibsym.groups.bases import Basis

QUARTER_TURN = np.array([[0.0, -1.0], [1.0, 0.0]])


def symmetry_vectors(basis: Basis) -> dict[str, np.ndarray]:
    """Return for each species that occurs the orthonormal combinations, (copies, degeneracy, n d).

    Row i of each copy transforms as row i of `group.irrep(label)`; a symmetric matrix that commutes with the operations
    is then the same block in every component, and [[A, -B], [B, A]] in a conjugate pair.
    """
    group = basis.group
    n, d = basis.size, basis.components
    parts: dict[str, list[np.ndarray]] = {label: [] for label in group.labels}
    for orbit in basis.orbits():
        seed, transport, site = site_group(basis, orbit)
        blocks_site = basis.blocks[site, seed]
        blocks_out = basis.blocks[transport, seed]
        for label, norm in zip(group.labels, group.norms.tolist(), strict=True):
            irrep = group.irrep(label)
            seeds = invariant_seeds(irrep[site], blocks_site, norm == 2)
            if not len(seeds):
                continue
            size = irrep.shape[1]
            values = (irrep[transport][:, None] @ seeds @ blocks_out[:, None].swapaxes(2, 3)).transpose(1, 2, 0, 3)
            full = np.zeros((len(seeds), size, n, d))
            full[:, :, orbit] = values * (size / len(orbit)) ** 0.5
            parts[label].append(full.reshape(len(seeds), size, n * d))
    return {label: np.concatenate(found) for label, found in parts.items() if found}


def site_group(basis: Basis, orbit: np.ndarray) -> tuple[int, np.ndarray, np.ndarray]:
    """Return for an orbit its seed, one operation that takes the seed to each member, and the site group of the seed.

    The seed is the member whose site group lies most along x, y and z (its matrices most nearly diagonal), so that the
    combinations come out with the simplest coefficients.
    """
    sizes = np.abs(basis.group.matrices)
    slant = sizes.sum(axis=(1, 2)) - np.einsum("gii->g", sizes)
    unmoved = basis.targets[:, orbit] == orbit
    lean = slant @ unmoved
    seed = int(orbit[np.argmax(lean < lean.min() + 1e-6)])
    images = basis.targets[:, seed]
    transport = np.argmax(images[None, :] == orbit[:, None], axis=1)
    return seed, transport, np.flatnonzero(images == seed)


def invariant_seeds(irrep: np.ndarray, blocks: np.ndarray, pair: bool) -> np.ndarray:
    """Return orthonormal U (copies, i, b) with D(h) U B(h)^T = U for all h of a site group.

    `irrep` (|H|, d, d), `blocks` (|H|, b, b).  The columns of the projector are orthogonalised (Gram-Schmidt), the
    longest first; in a conjugate pair against J U of the earlier ones too.
    """
    size, width = irrep.shape[1], blocks.shape[1]
    projector = np.tensordot(irrep, blocks, axes=(0, 0)).swapaxes(1, 2).reshape(size * width, size * width) / len(irrep)
    if abs(np.trace(projector)) < 0.5:
        return np.zeros((0, size, width))
    remaining = projector.copy()
    seeds = []
    while True:
        lengths = np.einsum("ab,ab->b", remaining, remaining)
        best = int(np.argmax(lengths > lengths.max() - 1e-9))
        if lengths[best] < 1e-6:
            return np.array(seeds).reshape(len(seeds), size, width)
        vector = remaining[:, best] / lengths[best] ** 0.5
        seeds.append(vector)
        remaining = remaining - np.outer(vector, vector @ remaining)
        if pair:
            partner = (QUARTER_TURN @ vector.reshape(2, width)).ravel()
            remaining = remaining - np.outer(partner, partner @ remaining)
