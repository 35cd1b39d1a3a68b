"""A set of internal coordinates as a representation: where every operation sends each coordinate, and with which sign.

    stretch, bend      +1
    wag                det R x parity of the permutation that R makes in the ordered reference atoms
    torsion            det R (read backwards a torsion is the same)
    linear bend        the components move as a vector across the axis: blocks[a, b] = p_a(target) . R p_b

(E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, ch. 6.)  The law behind it, which the tests prove:
B x_R = T(R) B for the matrix T(R) of these blocks and x_R the displacements moved by R.
"""

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.bases import Basis
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.internal import CoordinateSet

# Odd 64-bit numbers (digits of pi); a row of atoms is looked up by their sum of products modulo 2^64.
_MIX = np.array([0x243F6A8885A308D3, 0x13198A2E03707345, 0xA4093822299F31D1, 0x082EFA98EC4E6C89, 0x452821E638D01377],
                dtype=np.uint64)


def coordinate_basis(symmetry: Symmetry, each: CoordinateSet) -> Basis:
    """Return the representation that a set carries; a set that lacks equivalent coordinates is an error."""
    group = symmetry.group.image
    images = symmetry.permutations[:, each.atoms]
    images, parity = _ordered(images, each.kind)
    targets = _places(each, images, symmetry)
    if each.kind == "linear bend":
        turned = np.einsum("rab,jcb->rjca", group.matrices, each.directions)
        blocks = np.einsum("rjac,rjbc->rjab", each.directions[targets], turned)
        return Basis(group, targets, blocks)
    signs = np.ones(targets.shape)
    if each.kind in ("wag", "torsion"):
        signs = np.broadcast_to(group.determinants[:, None], targets.shape) * parity
    return Basis.signed(group, targets, signs)


def _ordered(images: np.ndarray, kind: str) -> tuple[np.ndarray, np.ndarray]:
    """Return the rows of atoms (..., k) in the order in which sets keep them, and the parity of the reordering
    (...)."""
    if kind == "wag":
        centre, references = images[..., :1], images[..., 1:]
        if references.shape[-1] == 3:
            a, b, c = np.moveaxis(references, -1, 0)
            return np.concatenate([centre, np.sort(references, axis=-1)], axis=-1), np.sign((b - a) * (c - a) * (c - b))
        p, q, s, t = np.moveaxis(references, -1, 0)
        sorted_pairs = np.sort(references.reshape(*references.shape[:-1], 2, 2), axis=-1).reshape(references.shape)
        return np.concatenate([centre, sorted_pairs], axis=-1), np.sign((q - p) * (t - s))
    turned = images[..., :1] > images[..., -1:]
    return np.where(turned, images[..., ::-1], images), np.ones(images.shape[:-1])


def _places(each: CoordinateSet, images: np.ndarray, symmetry: Symmetry) -> np.ndarray:
    """Return (h, n) the place of every image among the coordinates of the set."""
    if not len(each):
        return np.zeros(images.shape[:2], dtype=int)
    own, wanted = _codes(each.atoms), _codes(images)
    order = np.argsort(own)
    places = order[np.searchsorted(own[order], wanted).clip(max=len(own) - 1)]
    astray = own[places] != wanted
    if astray.any():
        operation, number = np.argwhere(astray)[0]
        rows = each.atoms[number], images[operation, number]
        given, lost = ("-".join(str(atom + 1) for atom in row) for row in rows)
        raise VibsymError(f"{each.name}: {given} is there but not its equivalent {lost} in {symmetry.group.symbol}; "
                          "choose all equivalent atoms")
    return places


def _codes(rows: np.ndarray) -> np.ndarray:
    return (rows.astype(np.uint64) * _MIX[: rows.shape[-1]]).sum(axis=-1, dtype=np.uint64)
