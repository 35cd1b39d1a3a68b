"""Where each axis points, in words a chemist can check, and which labels another choice of axes would exchange.

Labels such as B1 and B2 mean nothing without the axes: words name the atoms and bonds that an axis passes through, or
the plane it stands on. They are computed only when asked for. Known clashes with print are told where they apply:
R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955) against T. Shimanouchi, NSRDS-NBS 39 (1972), and common practice for
porphyrins.
"""

from collections import Counter
from dataclasses import dataclass

import numpy as np

from vibsym.groups.settings import settings
from vibsym.structures.axis_choice import ON
from vibsym.structures.symmetry import Symmetry

MOST_NAMES = 4     # atoms named before "and n more"


@dataclass(frozen=True)
class AxisChoice:
    """`words` by axis; `exchange`: labels that the other choice swaps; `decided`: whether a rule made the choice;
    `notes`.
    """

    words: dict
    exchange: tuple[str, ...]
    decided: bool
    notes: tuple[str, ...]

    def to_dict(self) -> dict:
        """Return the choice for JSON."""
        return {"axes": dict(self.words), "exchange": list(self.exchange), "decided": self.decided,
                "notes": list(self.notes)}


def axis_words(symmetry: Symmetry, bonds=None) -> AxisChoice:
    """Return the words for the axes of a symmetry; `bonds` (B, 2) default to those of `find_bonds`."""
    symbol = symmetry.group.symbol
    if symbol == "Kh":
        return AxisChoice({}, (), True, ())
    if symmetry.group.infinite:
        return AxisChoice({"z": "molecular axis"}, (), True, ())
    if bonds is None:
        from vibsym.structures.bonds import find_bonds

        bonds = find_bonds(symmetry.structure)
    view = _View(symmetry, np.asarray(bonds, dtype=np.intp).reshape(-1, 2))
    words = {name: view.describe(direction) for name, direction in zip("xyz", np.eye(3))}
    return AxisChoice(words, exchange(symmetry.group), symmetry.decided, _notes(symmetry, view))


def exchange(group) -> tuple[str, ...]:
    """Return what other settings swap, `("B1 <-> B2",)`; empty where labels depend on no choice.

    In D2 and D2h B1, B2, B3 belong to z, y, x, so exchanging two axes exchanges two labels.
    """
    possible = settings(group.symbol)
    if len(possible) == 1:
        return ()
    if len(possible) == 2:
        return tuple(f"{label} <-> B2{label[2:]}" for label in group.labels if label.startswith("B1"))
    endings = [label[2:] for label in group.labels if label.startswith("B1")]
    swaps = (("xzy", "B1", "B2"), ("zyx", "B1", "B3"), ("yxz", "B2", "B3"))
    return tuple(f"{', '.join(f'{one}{end} <-> {two}{end}' for end in endings)} ({axes})" for axes, one, two in swaps)


class _View:
    """The symmetrised atoms in the standard frame, and what lies on an axis or in a plane."""

    def __init__(self, symmetry: Symmetry, bonds):
        self.group, self.positions, self.bonds = symmetry.group, symmetry.positions, bonds
        self.labels = symmetry.structure.labels
        spread = np.abs(self.positions).max(axis=0)
        self.flat = [bool(value < ON) for value in spread]         # flat[k]: planar, perpendicular to axis k

    def describe(self, direction) -> str:
        """Return the words for one axis: the molecular plane first, then atoms and bonds on it, then mirror planes."""
        symbol = self.group.symbol
        if self.flat[int(np.argmax(direction))]:
            return "perpendicular to the molecular plane"
        if symbol in ("C1", "Ci") or (symbol[0] in "CS" and symbol[-1] != "v" and direction[2] == 0):
            return self._free()
        element, through = self.element(direction), self.through(direction)
        unique = (direction[2] == 1 and symbol not in ("D2", "D2h")) or symbol[0] in "TOI"
        if not (any(self.flat) or self._pinned(direction) or (unique and through)):
            through = self._mark(direction, bool(element), unique)
        plane = "in the molecular plane" if any(self.flat) else ""
        return ", ".join(filter(None, (element, plane, through)))

    def _free(self) -> str:
        """Return the words for an axis whose direction no operation fixes."""
        if any(self.flat):
            return "in the molecular plane, direction not fixed by symmetry"
        if self._mirror(np.eye(3)[2]):
            return "in the mirror plane, direction not fixed by symmetry"
        return "not fixed by symmetry"

    def names(self, atoms) -> str:
        """Return `atom O1`, `atoms C1 and C2`, `atoms C1, C2, C3, C4 and 8 more`."""
        named = [f"{self.labels[atom]}{atom + 1}" for atom in atoms[:MOST_NAMES]]
        if len(atoms) > MOST_NAMES:
            return f"atoms {', '.join(named)} and {len(atoms) - MOST_NAMES} more"
        if len(named) == 1:
            return f"atom {named[0]}"
        return f"atoms {', '.join(named[:-1])} and {named[-1]}"

    def element(self, direction) -> str:
        """Return `C3 axis`, `S4 axis`, `C2' axis`, or an empty text when no operation turns about the direction."""
        matrices = self.group.matrices
        fixed = np.abs(matrices @ direction - direction).max(axis=1) < 1e-6
        turned = np.abs(matrices @ direction + direction).max(axis=1) < 1e-6
        proper = fixed & (self.group.determinants > 0)
        improper = turned & (self.group.determinants < 0)
        order = int(proper.sum())
        if order == 1:
            return ""
        # in D3d, D5d the axis is named by its rotation, in D2d, D4d, S4, Td by the rotation-reflection
        named = self.group.symbol[0] in "ST" or (self.group.symbol[-1] == "d" and order % 2 == 0)
        if named and improper.sum() == order and not self._mirror(direction):
            return f"S{2 * order} axis"
        symbol = next(self.group.operation_symbols[k] for k in np.flatnonzero(proper)[1:])
        primes = symbol[len(symbol.rstrip("'")):] if order == 2 else ""
        return f"C{order}{primes} axis"

    def _mirror(self, normal) -> bool:
        mirror = np.eye(3) - 2 * np.outer(normal, normal)
        return bool((np.abs(self.group.matrices - mirror).max(axis=(1, 2)) < 1e-6).any())

    def _distances(self, direction):
        away = self.positions - np.outer(self.positions @ direction, direction)
        return np.sqrt((away * away).sum(axis=1))

    def _on(self, direction):
        """Return the atoms on an axis, and the bonds (k, 2) that it meets in the middle."""
        middle = 0.5 * (self.positions[self.bonds[:, 0]] + self.positions[self.bonds[:, 1]])
        middle = middle - np.outer(middle @ direction, direction)
        return np.flatnonzero(self._distances(direction) < ON), self.bonds[(middle * middle).sum(axis=1) < ON * ON]

    def _pinned(self, direction) -> bool:
        """Tell whether an atom or the middle of a bond off the centre lies on the axis, so that it can be found."""
        on, cut = self._on(direction)
        points = [self.positions[on], 0.5 * (self.positions[cut[:, 0]] + self.positions[cut[:, 1]])]
        return bool((np.abs(np.concatenate(points) @ direction) > ON).any())

    def through(self, direction) -> str:
        """Return `through atom O1`, `through the midpoint of bond C1–C2`, or an empty text."""
        on, cut = self._on(direction)
        if len(on):
            return f"through {self.names(on)}"
        texts = ["–".join(f"{self.labels[atom]}{atom + 1}" for atom in bond) for bond in cut.tolist()]
        if not texts:
            return ""
        if len(texts) == 1:
            return f"through the midpoint of bond {texts[0]}"
        more = f" and {len(texts) - 2} more" if len(texts) > 2 else ""
        return f"through the midpoints of bonds {', '.join(texts[:2])}{more}"

    def _in_plane(self, normal):
        """Return the atoms of a plane, those off the z axis first where not all can be named: they tell it apart."""
        on = np.flatnonzero(np.abs(self.positions @ normal) < ON)
        if len(on) <= MOST_NAMES:
            return on
        off = self._distances(np.eye(3)[2])[on] > ON
        return np.concatenate((on[off], on[~off]))

    def plane(self, normal) -> str:
        """Return `mirror plane through atoms ...`; one that holds no atom off z is told by the atoms nearest to it."""
        if self._telling(normal):
            return f"mirror plane through {self.names(self._in_plane(normal))}"
        heights = np.abs(self.positions @ normal)
        near = np.where(heights > ON, heights, np.inf)
        if not np.isfinite(near.min()):
            return "mirror plane"
        return f"mirror plane nearest to {self.names(np.flatnonzero(near < near.min() + ON))} ({near.min():.2f} Å)"

    def _telling(self, normal) -> bool:
        """Tell whether a plane is told from all others of the frame by its atoms: they do not lie on one axis."""
        on = self.positions[np.abs(self.positions @ normal) < ON]
        return all((np.abs(on @ across) > ON).any() for across in np.eye(3) if across @ normal < 0.5)

    def _mark(self, direction, is_axis: bool, unique: bool) -> str:
        """Return by what an axis is told from others of its kind: a mirror plane with atoms off z, or the nearest atom.

        Rotation axes across z lie in the plane (D4h, D6h: C2' in sigma_v); other directions stand on one or lie in it.
        """
        normals = [normal for normal in np.eye(3) if self._mirror(normal)]
        across = [("perpendicular to", normal) for normal in normals if normal @ direction > 0.5]
        holding = [("in", normal) for normal in normals if normal @ direction < 0.5 and not unique]
        if self.group.symbol == "D2h":              # its three axes are alike: each by the plane across it alone
            holding = []
        upright = [each for each in holding if is_axis and each[1][2] == 0]
        order = upright + across + holding
        for word, normal in order:
            if self._telling(normal):
                return f"{word} the {self.plane(normal)}"
        if not is_axis:
            return f"{order[0][0]} the {self.plane(order[0][1])}" if order else "perpendicular to the other two axes"
        return self.nearest(direction, unique)

    def nearest(self, direction, unique: bool) -> str:
        """Return `nearest atoms C1 and C2 at 1.25 Å`; those on it, or on z for an axis across z, tell nothing."""
        distances = self._distances(direction)
        on_z = self._distances(np.eye(3)[2]) < ON
        off = np.where((distances > ON) & (unique | ~on_z), distances, np.inf)
        if not np.isfinite(off.min()):
            return "through no atom"
        return f"nearest {self.names(np.flatnonzero(off < off.min() + ON))} at {off.min():.2f} Å"


def _notes(symmetry: Symmetry, view: _View) -> tuple[str, ...]:
    """Return how the choice was made and the known clashes with print that apply."""
    symbol = symmetry.group.symbol
    if len(settings(symbol)) == 1:
        return ()
    notes = []
    if symmetry.axes is not None:
        notes.append(f"axes chosen by --axes {symmetry.axes}")
    elif not symmetry.decided:
        notes.append("the choice between these axes is not decided by rule: atoms, bonds, masses and distances agree")
    if symmetry.axes is None:
        notes.extend(_clashes(symmetry, view))
    return tuple(notes)


def _clashes(symmetry: Symmetry, view: _View) -> list[str]:
    """Return where print is known to use other axes (Shimanouchi: from his tables; the others: common practice)."""
    symbol, counts = symmetry.group.symbol, Counter(symmetry.structure.symbols)
    carbon, total = counts["C"], len(symmetry.structure)
    if symbol == "C2v" and any(view.flat):
        return ["in-plane antisymmetric species are B2 here (Mulliken 1955); "
                "Shimanouchi's tables (NSRDS-NBS 39) call them B1"]
    if symbol == "D2h" and any(view.flat) and carbon == 2 and total == 6:
        return ["Shimanouchi's tables (NSRDS-NBS 39) put z perpendicular to the plane and x along C=C for ethylenes"]
    if symbol == "D2h" and counts["B"] == 2 and total == 8:
        return ["Shimanouchi's tables (NSRDS-NBS 39) put x along B–B for diborane"]
    if symbol == "D2h" and any(view.flat) and carbon == 10 and total == 18:
        return ["print uses several choices of axes for naphthalene; compare them before comparing B labels"]
    if symbol == "D4h" and carbon >= 20 and counts["N"] >= 4:
        return ["for metalloporphyrins the literature puts C2' through N; "
                "here it passes through the greater number of atoms"]
    if symbol == "D4h" and total == 5 and any(view.flat):
        return ["for square-planar MX4 print has both choices of C2'; here it passes through the X atoms"]
    return []
