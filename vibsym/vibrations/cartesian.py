"""The representation of the 3N Cartesian displacements, and what is left of it for vibrations.

Only atoms that an operation leaves in place contribute to its character, each with the trace of the operation:

    chi_3N(R) = unmoved(R) * (±1 + 2 cos theta)          + for a rotation, − for a rotation-reflection

E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), ch. 5 and 6.  Taking away the translations (which
transform like x, y, z) and the rotations (like Rx, Ry, Rz; a linear molecule has no Rz, a single atom none) leaves the
vibrations.  Linear molecules and single atoms are reduced in the finite image of their group (`group.image`), which
tells apart every species that a displacement can carry, so nothing is rounded.
"""

from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING

import numpy as np

from vibsym.groups.pointgroup import PointGroup, point_group
from vibsym.groups.reduction import reduce
from vibsym.structures.symmetry import Symmetry

if TYPE_CHECKING:
    from vibsym.groups.infinite import InfiniteGroup


@dataclass(frozen=True)
class Displacements:
    """Γ3N of a structure and its parts; every array holds one number a class of `group.image`."""

    group: "PointGroup | InfiniteGroup"
    unmoved: np.ndarray
    contributions: np.ndarray
    chi_translation: np.ndarray
    chi_rotation: np.ndarray
    gamma_3n: dict[str, int]
    gamma_translation: dict[str, int]
    gamma_rotation: dict[str, int]
    gamma_vib: dict[str, int]

    @property
    def chi_3n(self) -> np.ndarray:
        """Character of the 3N displacements, one a class."""
        return self.unmoved * self.contributions

    @property
    def chi_vib(self) -> np.ndarray:
        """Character of the vibrations, one a class."""
        return self.chi_3n - self.chi_translation - self.chi_rotation


def displacements(symmetry: Symmetry) -> Displacements:
    """Reduce the displacements of all atoms: Γ3N = Γtranslation + Γrotation + Γvib.

    One atom gives Γ3N = Γtranslation and no vibrations.

    >>> from vibsym import Structure, find_symmetry
    >>> water = Structure.from_atoms("OHH", [[0, 0, 0], [0.76, 0, 0.59], [-0.76, 0, 0.59]])
    >>> displacements(find_symmetry(water)).gamma_vib
    {'A1': 2, 'B2': 1}
    """
    group = symmetry.group
    first, traces, rotation = _class_characters(group.symbol)
    atoms = np.arange(symmetry.permutations.shape[1])
    unmoved = (symmetry.permutations[first] == atoms).sum(axis=1)
    if len(atoms) == 1:
        rotation = np.zeros_like(rotation)
    gamma_3n = reduce(unmoved * traces, group)
    gamma_vib = reduce(unmoved * traces - traces - rotation, group)
    gamma_translation, gamma_rotation = _rigid_motions(group.symbol)
    return Displacements(group, unmoved, traces, traces, rotation, gamma_3n, gamma_translation,
                         gamma_rotation if len(atoms) > 1 else {}, gamma_vib)


@cache
def _class_characters(symbol: str) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return for each class its first operation, the trace ±1 + 2 cos θ, and the character of the rotations.

    Rx, Ry, Rz is an axial vector: det(R) * trace(R); of a linear molecule only Rx and Ry are rotations.
    """
    group = point_group(symbol)
    image = group.image
    first = np.array([members.members[0] for members in image.classes])
    R = image.matrices[first]
    traces = np.trace(R, axis1=1, axis2=2)
    determinants = np.round(np.linalg.det(R))
    rotation = determinants * traces
    if group.infinite and symbol != "Kh":
        rotation = rotation - determinants * R[:, 2, 2]
    return first, traces, rotation


@cache
def _rigid_motions(symbol: str) -> tuple[dict[str, int], dict[str, int]]:
    group = point_group(symbol)
    _, translation, rotation = _class_characters(symbol)
    return reduce(translation, group), reduce(rotation, group)
