"""Parts of a molecule that turn easily about one bond or axis, so that the group of the rigid shape may mislead.

Looked for are XH3 tops (methyl, silyl, germyl, coordinated NH3) and rings that one atom holds face on (the rings of
ferrocene).  A top turns against something only if the frame does not end on its own axis: CH3F and CH3CN have no
internal rotation, CH3-C≡C-CH3 has.  Barriers are not estimated; ethane (about 12 kJ/mol) is counted as well as
2-butyne (next to nothing).  Common practice; see P. R. Bunker, P. Jensen, Molecular Symmetry and Spectroscopy, 2nd
ed. (1998), ch. 15, for the groups of non-rigid molecules.
"""

from typing import NamedTuple

import numpy as np

from vibsym.structures.bonds import find_bonds, neighbours
from vibsym.structures.structure import Structure

TOPS = {"C": "methyl", "Si": "silyl", "Ge": "germyl", "N": "NH3"}
STRAIGHT = np.cos(np.radians(170))
SMALLEST_RING = 4


class Rotor(NamedTuple):
    """What turns: its name and the atom it is named after (from 0): the X of XH3, the atom that holds the ring."""

    name: str
    atom: int


def find_rotors(structure: Structure) -> tuple[Rotor, ...]:
    """Return the parts that turn easily, in the order of their atoms."""
    around = neighbours(len(structure), find_bonds(structure))
    tops = [Rotor(TOPS[structure.symbols[atom]], atom) for atom, bonded in enumerate(around)
            if structure.symbols[atom] in TOPS and _is_top(atom, bonded, around, structure)]
    rings = [Rotor(f"{size}-membered ring", atom) for atom, bonded in enumerate(around) if len(bonded) > SMALLEST_RING
             for size in _rings_held(bonded, around)]
    return tuple(sorted(tops + rings, key=lambda rotor: (rotor.atom, rotor.name)))


def _is_top(atom: int, bonded: list[int], around: list[list[int]], structure: Structure) -> bool:
    others = [each for each in bonded if structure.symbols[each] != "H" or len(around[each]) > 1]
    return len(bonded) == 4 and len(others) == 1 and _frame_leaves_axis(atom, others[0], around, structure)


def _frame_leaves_axis(before: int, atom: int, around: list[list[int]], structure: Structure) -> bool:
    """Follow a straight chain away from the top; tell whether it ends in more than a point of the axis."""
    for _ in range(len(structure)):
        further = [each for each in around[atom] if each != before]
        if len(further) != 1:
            return bool(further)
        back, ahead = (structure.positions[each] - structure.positions[atom] for each in (before, further[0]))
        if back @ ahead > STRAIGHT * np.linalg.norm(back) * np.linalg.norm(ahead):
            return True
        before, atom = atom, further[0]
    return False


def _rings_held(bonded: list[int], around: list[list[int]]) -> list[int]:
    """Return the sizes of the rings among the atoms bonded to one atom that hold all of their members face on.

    If there is nothing but one ring on the atom, it turns against nothing.
    """
    inside = set(bonded)
    left, sizes = set(bonded), []
    while left:
        part, front = set(), [left.pop()]
        while front:
            atom = front.pop()
            part.add(atom)
            new = [each for each in around[atom] if each in left]
            left.difference_update(new)
            front += new
        if len(part) >= SMALLEST_RING and all(sum(each in inside for each in around[atom]) == 2 for atom in part):
            sizes.append(len(part))
    return sizes if len(inside) > sum(sizes[:1]) else []
