"""The reduction formula: how often each species occurs in a representation.

n_i = (1/h) Σ_c g_c χ_i(c) χ(c), divided by the norm ⟨χ_i, χ_i⟩/h, which is 2 for a real pair of conjugate species
(E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, ch. 5).  What must be whole is checked to be
whole.
"""

from collections.abc import Mapping, Sequence

import numpy as np

from vibsym.errors import VibsymError


def reduce(characters: Sequence[float], group) -> dict[str, int]:
    """Return how often each species occurs, labels in table order, those that do not occur left out.

    `characters` holds one real character for each class of `group.image`, in the order of the table; for C∞v, D∞h and
    Kh the image tells apart everything that displacements of atoms can carry, and the labels are those of the group.

    >>> from vibsym.groups.pointgroup import point_group
    >>> write_reduction(reduce((9, -1, 1, 3), point_group("C2v")))      # water, molecule in the yz plane
    '3A1 + A2 + 2B1 + 3B2'
    """
    image = group.image
    chi = np.asarray(characters, dtype=float)
    if chi.shape != (len(image.classes),):
        raise VibsymError(f"{image.symbol} has {len(image.classes)} classes, not {chi.size} characters")
    counts = image.character_rows @ (image.class_sizes * chi) / (image.order * image.norms)
    whole = np.rint(counts)
    if np.abs(counts - whole).max() > 1e-6 * max(1.0, float(np.abs(chi).max())):
        worst = int(np.abs(counts - whole).argmax())
        raise VibsymError(f"not a representation of {group.symbol}: {image.labels[worst]} would occur "
                          f"{counts[worst]:.4f} times")
    if whole.min() < 0:
        raise VibsymError(f"not a representation of {group.symbol}: {image.labels[int(whole.argmin())]} would occur "
                          f"{int(whole.min())} times")
    found = {label: int(n) for label, n in zip(image.labels, whole.tolist(), strict=True) if n}
    if group.infinite and not found.keys() <= group.image_labels.keys():
        raise VibsymError(f"not a representation of {group.symbol} that displacements can carry: {image.symbol} would "
                          f"have {', '.join(found)}")
    return {name: found[label] for label, name in group.image_labels.items() if label in found}


def write_reduction(gamma: Mapping[str, int]) -> str:
    """Return a representation as it is written: `3A1 + A2 + 2B1 + 3B2`; an empty one is `0`."""
    return " + ".join((f"{n}" if n != 1 else "") + label for label, n in gamma.items() if n) or "0"
