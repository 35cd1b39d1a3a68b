"""Descent in symmetry: what each species of a group becomes in a subgroup.

A subgroup is given by its operations; restricting the characters to them and reducing gives the correlation table
(E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, appendix X).  A subgroup can lie in a group in
several inequivalent ways, *embeddings*, one for each class of conjugate subgroups, named by what is kept: `C2v (C2',
σh)` of D4h.  How the axes of the subgroup are chosen where its labels depend on it: vibsym/groups/orientation.py.
"""

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.conjugacy import subgroup_classes
from vibsym.groups.orientation import (
    exchanges,
    frame_in_parent,
    kept_elements,
    other_frames,
)
from vibsym.groups.pointgroup import PointGroup, point_group
from vibsym.groups.products import ordered

Correlation = dict[str, dict[str, int]]
LOW = ("C1", "Ci", "Cs", "C2", "C2h", "C2v", "D2", "D2h")     # their axis need not be the axis of a linear parent
HIGHEST_LISTED = 6                                            # axes listed where a group has subgroups without end


@dataclass(frozen=True, eq=False)
class Embedding:
    """One way in which a subgroup lies in a group.

    `frame` (3, 3): the axes of the subgroup as rows, in the standard axes of the group; `conjugates`: how many
    subgroups are equivalent to this one (None: infinitely many).
    """

    parent: object
    group: object
    keeps: str
    frame: np.ndarray
    conjugates: int | None

    @property
    def name(self) -> str:
        """The subgroup and what it keeps: `C2v (C2', σh)`."""
        return f"{self.group.symbol} ({self.keeps})"

    @cached_property
    def correlation(self) -> Correlation:
        """Species of the group in species of the subgroup."""
        return correlation_in_frame(self.parent, self.group, self.frame)

    @cached_property
    def exchange(self) -> tuple[str, ...]:
        """What other choices of axes of the subgroup would exchange in the correlation: `B1 <-> B2`."""
        if self.group.infinite:
            return ()
        choices = other_frames(self.group, self.frame)
        tables = ((frame, correlation_in_frame(self.parent, self.group, frame)) for frame in choices)
        return tuple(exchanges(self.group, self.frame, frame) for frame, table in tables if table != self.correlation)

    def to_dict(self) -> dict:
        """Return the embedding for JSON."""
        return {"keeps": self.keeps, "conjugates": self.conjugates, "axes": np.round(self.frame, 9).tolist(),
                "exchange": list(self.exchange), "correlation": {a: dict(b) for a, b in self.correlation.items()}}


def restrict(parent: PointGroup, group: PointGroup, places: np.ndarray) -> Correlation:
    """Return what each species of a finite group becomes in a subgroup.

    `places` (h,): the operation of `parent` that each operation of `group` is.

    >>> Td, C2v = point_group("Td"), point_group("C2v")
    >>> embeddings(Td, "C2v")[0].correlation["T2"]
    {'A1': 1, 'B1': 1, 'B2': 1}
    """
    first = [c.members[0] for c in group.classes]
    chi = parent.character_rows[:, parent.class_of[np.asarray(places)[first]]]
    return _reduced(parent.labels, chi, parent, group)


def correlation_in_frame(parent, group, frame: np.ndarray | None = None) -> Correlation:
    """Return the correlation of a group with a subgroup whose axes are the rows of `frame` in the axes of the group.

    Either may be infinite; the species of an infinite parent are those with functions up to the third degree.
    """
    if group.infinite:
        return {label: _infinite_to_infinite(parent, group, label) for label in parent.labels}
    frame = np.eye(3) if frame is None else frame
    if parent.infinite:
        first = [c.members[0] for c in group.classes]
        turned = np.einsum("ba,cbd,de->cae", frame, group.matrices[first], frame)
        chi = np.array([characters_at(parent, label, turned) for label in parent.labels])
        return _reduced(parent.labels, chi, parent, group)
    return restrict(parent, group, places_in_frame(parent, group, frame))


def places_in_frame(parent: PointGroup, group: PointGroup, frame: np.ndarray) -> np.ndarray:
    """Return (h,) which operation of `parent` each operation of `group` is, its axes being the rows of `frame`."""
    turned = np.einsum("ba,cbd,de->cae", frame, group.matrices, frame).reshape(group.order, 1, 9)
    distance = np.abs(turned - parent.matrices.reshape(1, -1, 9)).max(axis=2)
    if distance.min(axis=1).max() > 1e-6:
        raise VibsymError(f"{group.symbol} is not a subgroup of {parent.symbol} with these axes")
    return distance.argmin(axis=1)


def embeddings(parent, symbol: str) -> tuple[Embedding, ...]:
    """Return every inequivalent embedding of a subgroup; a group that is none is an error.

    >>> [each.name for each in embeddings(point_group("D3h"), "Cs")]
    ['Cs (σh)', 'Cs (σv)']
    """
    group = point_group(symbol)
    found = _embeddings(parent, group)
    if not found:
        raise VibsymError(f"{group.symbol} is not a subgroup of {parent.symbol}; "
                          f"vibsym descend {parent.symbol} lists those that are")
    return found


def all_embeddings(parent) -> tuple[Embedding, ...]:
    """Return every class of subgroups, the largest first; of an infinite group those with axes up to C6 (and S12)."""
    if not parent.infinite:
        named = _named(parent, [(point_group(symbol), *rest) for symbol, *rest in (
            _identified(parent, each) for each in subgroup_classes(parent))])
        return tuple(sorted(named, key=lambda each: -each.group.order))
    groups = [point_group(symbol) for symbol in _listed_symbols(parent.symbol)]
    return tuple(each for group in groups for each in _embeddings(parent, group))


def descend_gamma(gamma: Mapping[str, int], correlation: Correlation, group) -> dict[str, int]:
    """Return a representation of the group as one of the subgroup (`group`)."""
    total: dict[str, int] = {}
    for label, count in gamma.items():
        for below, times in correlation[label].items():
            total[below] = total.get(below, 0) + count * times
    return ordered(group, total)


def characters_at(group, label: str, matrices: np.ndarray) -> np.ndarray:
    """Return the characters of a species of C∞v, D∞h or Kh at operations given by matrices (c, 3, 3), axis z.

    About the axis 2 cos kφ, and ±1 or 0 for planes through it; of the sphere sin((l + ½)φ)/sin(φ/2); with the centre
    the operation iR has the character of R times ±1 (g, u).
    """
    quantum, parity, sign = group.quantum(label)
    if group.symbol == "Kh":
        flipped = np.linalg.det(matrices) < 0
    else:
        flipped = matrices[:, 2, 2] < 0
    factor = np.where(flipped, -1.0 if parity == "u" else 1.0, 1.0)
    R = np.where(flipped[:, None, None], -matrices, matrices)
    if group.symbol == "Kh":
        angle = np.arccos(np.clip((np.einsum("cii->c", R) - 1) / 2, -1, 1))
        return factor * (1 + 2 * sum(np.cos(m * angle) for m in range(1, quantum + 1)))
    mirror = R[:, 0, 0] * R[:, 1, 1] - R[:, 0, 1] * R[:, 1, 0] < 0
    if quantum == 0:
        return factor * np.where(mirror, -1.0 if sign == "-" else 1.0, 1.0)
    angle = np.arctan2(R[:, 1, 0], R[:, 0, 0])
    return factor * np.where(mirror, 0.0, 2 * np.cos(quantum * angle))


def _reduced(labels, chi: np.ndarray, parent, group: PointGroup) -> Correlation:
    counts = chi @ (group.class_sizes[:, None] * group.character_rows.T) / (group.order * group.norms)
    whole = np.rint(counts)
    if np.abs(counts - whole).max() > 1e-6:
        raise VibsymError(f"the operations of {group.symbol} do not lie in {parent.symbol} as given: a species would "
                          f"occur {counts.flat[np.abs(counts - whole).argmax()]:.4f} times")
    return {label: {below: int(n) for below, n in zip(group.labels, row) if n} for label, row in zip(labels, whole)}


def _embeddings(parent, group) -> tuple[Embedding, ...]:
    if group.infinite or parent.infinite:
        return _infinite_embeddings(parent, group)
    if parent.order % group.order:
        return ()
    classes = [each for each in subgroup_classes(parent) if each.order == group.order]
    found = [_identified(parent, each) for each in classes]
    return _named(parent, [(group, *rest) for symbol, *rest in found if symbol == group.symbol])


def _identified(parent: PointGroup, each) -> tuple[str, np.ndarray, int]:
    symbol, frame = frame_in_parent(parent, np.array(each.operations))
    return symbol, frame, each.conjugates


def _named(parent: PointGroup, found: list) -> tuple[Embedding, ...]:
    """Embeddings with names; two that would share one are told apart by all that they keep."""
    places = [places_in_frame(parent, group, frame) for group, frame, _ in found]
    brief = [kept_elements(parent, group, place) for (group, *_), place in zip(found, places)]
    names = [(group.symbol, name) for (group, *_), name in zip(found, brief)]
    result = []
    for (group, frame, conjugates), place, name in zip(found, places, names):
        keeps = name[1] if names.count(name) == 1 else kept_elements(parent, group, place, whole=True)
        result.append(Embedding(parent, group, keeps, frame, conjugates))
    return tuple(result)


def _infinite_embeddings(parent, group) -> tuple[Embedding, ...]:
    if group.infinite:
        rank = {"C∞v": 0, "D∞h": 1, "Kh": 2}
        below = parent.infinite and rank[group.symbol] <= rank[parent.symbol]
        keeps = {"C∞v": "C∞, σv", "D∞h": "C∞, C2'", "Kh": "all"}[group.symbol]
        return (Embedding(parent, group, keeps, np.eye(3), 1 if group is parent or parent.symbol == "D∞h" else None),
                ) if below else ()
    if parent.symbol == "Kh":
        keeps = kept_elements(group, group, np.arange(group.order))
        return (Embedding(parent, group, keeps, np.eye(3), 1 if group.symbol in ("C1", "Ci") else None),)
    if group.symbol in LOW:                               # in D4h, whose C2', C2'' and σv, σd become alike
        merged: dict[str, Embedding] = {}
        for each in _embeddings(point_group("C4v" if parent.symbol == "C∞v" else "D4h"), group):
            keeps = each.keeps.replace("C2''", "C2'").replace("σd", "σv")
            on_axis = keeps in ("E", "i", "σh", "C2", "C2, σh")
            merged.setdefault(keeps, Embedding(parent, group, keeps, each.frame, 1 if on_axis else None))
        return tuple(merged.values())
    axial = group.symbol[0] not in "TOI"
    upright = bool(np.all(group.matrices[:, 2, 2] > 0))
    if not axial or (parent.symbol == "C∞v" and not upright):
        return ()
    keeps = re.sub(", C2'*", ", C2'", kept_elements(group, group, np.arange(group.order))).replace("σd", "σv")
    turning = group.symbol[0] in "CS" and group.symbol[-1] != "v"
    return (Embedding(parent, group, keeps, np.eye(3), 1 if turning else None),)


def _infinite_to_infinite(parent, group, label: str) -> dict[str, int]:
    """D∞h to C∞v loses g and u; a level L of the sphere becomes Σ, Π, Δ ... up to its L, Σ with its sign."""
    quantum, parity, sign = parent.quantum(label)
    if parent is group:
        return {parent.label(quantum, parity, sign): 1}
    if parent.symbol == "D∞h":
        return {group.label(quantum, "", sign): 1}
    even = (-1) ** quantum * (1 if parity == "g" else -1) > 0
    below = parity if group.symbol == "D∞h" else ""
    return {group.label(k, below, "+" if even else "-"): 1 for k in range(quantum + 1)}


def _listed_symbols(symbol: str) -> list[str]:
    n = range(HIGHEST_LISTED, 1, -1)
    if symbol == "C∞v":
        return ["C∞v", *(f"C{k}{s}" for k in n for s in ("v", "")), "Cs", "C1"]
    axial = ["D∞h", "C∞v", *(name for k in n for name in (
        f"D{k}h", f"D{k}d", f"D{k}", f"C{k}v", f"C{k}h", f"S{2 * k}", f"C{k}")), "Cs", "Ci", "C1"]
    return axial if symbol == "D∞h" else ["Kh", "Ih", "I", "Oh", "O", "Td", "Th", "T", *axial]
