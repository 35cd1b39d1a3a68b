"""Where each axis points, in words a chemist can check, and which labels another choice of axes would exchange.

Labels such as B1 and B2 mean nothing without the axes (conventions.md, "Axes"): words name the atoms and bonds that
an axis passes through, or the plane it stands on. They are computed only when asked for. Known clashes with print are
told where they apply: R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955) against T. Shimanouchi, NSRDS-NBS 39 (1972), and
common practice for porphyrins.
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
        determinants = np.round(np.linalg.det(matrices))
        proper = fixed & (determinants > 0)
        improper = turned & (determinants < 0)
        order = int(proper.sum())
        if order == 1:
            return ""
        # in D3d, D5d the axis is named by its rotation, in D2d, D4d, S4, Td by the rotation-reflection
        # (conventions.md)
        named = self.group.symbol[0] in "ST" or (self.group.symbol[-1] == "d" and order % 2 == 0)
        if named and improper.sum() == order and not self._mirror(direction):
            return f"S{2 * order} axis"
        symbol = next(self.group.operation_symbols[k] for k in np.flatnonzero(proper)[1:])
        primes = symbol[len(symbol.rstrip("'")):] if order == 2 else ""
        return f"C{order}{primes} axis"

    def _mirror(self, normal) -> bool:
        mirror = np.eye(3) - 2 * np.outer(normal, normal)
        return bool((np.abs(self.group.matrices - mirror).max(axis=(1, 2)) < 1e-6).any())

    def through(self, direction) -> str:
        """Return `through atom O1`, `through the midpoint of bond C1–C2`, or an empty text."""
        away = self.positions - np.outer(self.positions @ direction, direction)
        on = np.flatnonzero((away * away).sum(axis=1) < ON * ON)
        if len(on):
            return f"through {self.names(on)}"
        middle = 0.5 * (away[self.bonds[:, 0]] + away[self.bonds[:, 1]])
        cut = self.bonds[(middle * middle).sum(axis=1) < ON * ON]
        texts = ["–".join(f"{self.labels[atom]}{atom + 1}" for atom in bond) for bond in cut.tolist()]
        if not texts:
            return ""
        if len(texts) == 1:
            return f"through the midpoint of bond {texts[0]}"
        more = f" and {len(texts) - 2} more" if len(texts) > 2 else ""
        return f"through the midpoints of bonds {', '.join(texts[:2])}{more}"

    def plane(self, normal) -> str:
        """Return `mirror plane through atoms ...`."""
        on = np.flatnonzero(np.abs(self.positions @ normal) < ON)
        return f"mirror plane through {self.names(on)}" if len(on) else "mirror plane that holds no atom"

    def nearest(self, direction) -> str:
        away = self.positions - np.outer(self.positions @ direction, direction)
        distances = np.sqrt((away * away).sum(axis=1))
        return f"through no atom; nearest {self.names(np.flatnonzero(distances < distances.min() + ON))}"

    def describe(self, direction) -> str:
        """Return the words for one axis: the molecular plane first, then atoms and bonds on it, then mirror planes."""
        k = int(np.argmax(direction))
        if self.flat[k]:
            return "perpendicular to the molecular plane"
        element, through = self.element(direction), self.through(direction)
        words = [element] if element else []
        if any(self.flat):
            words.append("in the molecular plane")
        mirror = self._mirror(direction)
        if through:
            words.append(through)
        if mirror and not any(self.flat) and not through:
            words.append(f"perpendicular to the {self.plane(direction)}")
        elif not through and not any(self.flat):
            holding = [normal for normal in np.eye(3) if abs(normal @ direction) < 0.5 and self._mirror(normal)]
            if element:
                words.append(self.nearest(direction))
            elif holding:
                words.append(f"in the {self.plane(holding[0])}")
            else:
                words.append("not fixed by symmetry")
        return ", ".join(words)


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
