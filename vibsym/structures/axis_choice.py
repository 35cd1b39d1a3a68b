"""Which of the equally good frames of a group labels its species: the ladder of choice.

Only C2v, D2, D2h, C(2k)v, D(2k), D(2k)h (k >= 2) leave a choice that labels depend on (vibsym/groups/settings.py).
Between elements of one kind the ladder asks for (1) more atoms on it; (2) more bonds cut by it or lying in it; (3) the
larger sum of atomic numbers on it; (4) the larger sum of masses on it; (5) the farther nearest atom off it, then the
next nearest.
Sources: R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955); IUPAC, Pure Appl. Chem. 69, 1641 (1997); the rest is vibsym's
own rule.
"""

import re

import numpy as np

from vibsym.groups.identify import completed, matched
from vibsym.groups.settings import equal_turns, requested, settings

ON = 1e-4          # Å; symmetrised atoms lie on an element to rounding or not at all
TIED = 1e-3        # Å; nearest distances that differ by less do not decide
X, Y, Z = np.eye(3)


class Elements:
    """Measures axes and planes through the origin against the atoms and bonds of a structure (positions in one
    frame).
    """

    def __init__(self, positions, numbers, masses, bonds):
        self.positions, self.numbers, self.bonds = positions, numbers, bonds
        self.masses = np.where(masses > 0, masses, 0.0)

    def axis(self, direction):
        """Return the ladder's values for an axis: atoms, bonds, atomic numbers, mass, then distances of the atoms off
        it.
        """
        along = self.positions @ direction
        away = self.positions - np.outer(along, direction)
        distances = np.sqrt((away * away).sum(axis=1))
        on = distances < ON
        return self._values(distances, on, self._bonds_of_axis(away, on))

    def plane(self, normal):
        """Return the ladder's values for a plane."""
        heights = self.positions @ normal
        on = np.abs(heights) < ON
        i, j = self.bonds[:, 0], self.bonds[:, 1]
        bonds = (on[i] & on[j]) | (~on[i] & ~on[j] & (heights[i] * heights[j] < 0))
        return self._values(np.abs(heights), on, int(bonds.sum()))

    def _bonds_of_axis(self, away, on):
        i, j = self.bonds[:, 0], self.bonds[:, 1]
        lying = on[i] & on[j]
        # seen along the axis a bond is a segment; the axis cuts it where the segment passes through the origin
        step = away[j] - away[i]
        lengths = (step * step).sum(axis=1)
        part = -(away[i] * step).sum(axis=1) / np.where(lengths > ON * ON, lengths, np.inf)
        foot = away[i] + part[:, None] * step
        cut = (~on[i] & ~on[j]) & (part > 0) & (part < 1) & ((foot * foot).sum(axis=1) < ON * ON)
        return int((lying | cut).sum())

    def _values(self, distances, on, bonds):
        off = np.sort(distances[~on])
        return np.concatenate(([on.sum(), bonds, self.numbers[on].sum(), self.masses[on].sum()], off))


def compare(first, second) -> int:
    """Return 1 where `first` comes first on the ladder, -1 where `second` does, 0 where no rule decides."""
    if len(first) != len(second):
        return 1 if first[0] > second[0] else -1
    difference = first - second
    limit = np.full(len(difference), TIED)
    limit[3:4] = 0.05          # u; alike atoms agree within 0.01 u
    telling = np.flatnonzero(np.abs(difference) > limit)
    return 0 if not len(telling) else (1 if difference[telling[0]] > 0 else -1)


def criteria(symbol: str, elements: Elements, frame) -> list:
    """Return the list of ladder values, most important first, that a frame offers for the elements its group leaves
    to choose.
    """
    x, y, z = frame
    if symbol == "C2v":
        return [elements.plane(x)]
    if symbol == "D2":
        return [elements.axis(z), elements.axis(y)]
    if symbol == "D2h":
        flat = np.abs(elements.positions @ x).max() < ON       # planar: x stands on the molecular plane, z lies in it
        return [np.array([float(flat)]), elements.axis(z), elements.plane(x)]
    if symbol[-1] == "v":
        return [elements.plane(y)]
    on_axis = elements.axis(x)
    if symbol[-1] == "h":
        return [on_axis[:1], elements.plane(y)[:1], on_axis]
    return [on_axis]


def _compare_lists(first, second) -> int:
    for one, other in zip(first, second):
        verdict = compare(one, other)
        if verdict:
            return verdict
    return 0


def chosen_setting(group, frame, positions, structure, axes=None, bonds=None):
    """Return (frame, order of operations or None, decided) of the setting asked for, or first on the ladder of choice.

    `order` (h,): operation k of the group in the new frame is operation order[k] of the old one. `positions` (N, 3)
    are symmetrised.
    """
    possible = settings(group.symbol)
    name = requested(group.symbol, axes)
    if len(possible) == 1:
        return frame, None, True
    if bonds is None:
        from vibsym.structures.bonds import find_bonds

        bonds = find_bonds(structure)
    elements = Elements(positions, structure.numbers, structure.masses, np.asarray(bonds, dtype=np.intp).reshape(-1, 2))
    values = {key: criteria(group.symbol, elements, turn @ frame) for key, turn in possible.items()}
    tied = ["xyz"]
    for key in list(possible)[1:]:
        verdict = _compare_lists(values[key], values[tied[0]])
        tied = [key] if verdict > 0 else tied + [key] * (verdict == 0)
    decided = len(tied) == 1
    best = tied[0]
    if not decided:
        best = max(tied, key=lambda key: _by_number(group.symbol, positions @ (possible[key] @ frame).T))
    turn = possible[best]
    if name is not None:
        turn = possible[name] @ turn
    return turn @ frame, matched(group, turn, group.matrices), decided


def _by_number(symbol: str, positions) -> float:
    """Return what breaks a tie that no rule decides alike in every orientation: a sum over atoms weighted by their
    numbers.

    Its terms, squares of coordinates or r^n cos(n phi), keep their value under the group and change it from setting
    to setting.
    """
    weights = 1.0 / np.arange(1.0, len(positions) + 1)
    x, y, z = positions.T
    if symbol in ("C2v", "D2", "D2h"):
        return float(weights @ (z * z + 0.37 * x * x))
    n = int(re.search(r"\d+", symbol)[0])
    return float(weights @ (((x + 1j * y) / np.abs(positions).max()) ** n).real)


def free_frame(symbol: str, frame, positions, structure):
    """Turn a frame whose x the group does not fix towards an atom, so that it does not depend on how the structure lay.

    C1, Ci: principal axes of the atoms; Cs, Cn, Cnh, S2n and lines: x towards the heaviest, then farthest, atom off
    z.
    """
    if symbol in ("C1", "Ci"):
        x, _, z = np.linalg.eigh(positions.T @ positions)[1].T[::-1]
        return completed(z, x)
    if symbol[0] in "DTOIK" or symbol[-1] == "v":
        return frame
    z = frame[2]
    away = positions - np.outer(positions @ z, z)
    distances = np.sqrt((away * away).sum(axis=1))
    off = np.where(distances > ON, structure.numbers + 1 + distances / (distances.max() + 1), -1.0)
    atom = int(off.argmax())
    return frame if off[atom] < 0 else completed(z, away[atom])


def settled(group, frame, positions):
    """Return (frame, order of operations or None): of frames that no label tells apart the one the numbering of the
    atoms prefers.

    So the words for the axes do not depend on how the structure lay. Two sums of positions, weighted by the atoms'
    numbers, are turned towards z and x as far as the group's own rotations allow. `order` as in `chosen_setting`.
    """
    turns = equal_turns(group.symbol)
    if len(turns) == 1:
        return frame, None
    local = positions @ frame.T
    weights = 1.0 / np.arange(1.0, len(local) + 1)
    first, second = weights @ local, (weights * weights) @ local
    score = turns @ first @ np.array([0.31, 0.17, 1.0]) + turns @ second @ np.array([1.0, 0.23, 0.41])
    # the first among equals within rounding, so that a tie is broken alike in every orientation
    best = int(np.flatnonzero(score > score.max() - 1e-6)[0])
    if best == 0:
        return frame, None
    turn = turns[best]
    return turn @ frame, matched(group.image, turn, group.image.matrices)
