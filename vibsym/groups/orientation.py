"""How the axes of a subgroup are chosen inside a group, and what the subgroup keeps of it.

The subgroup stands in its own standard orientation.  Where that leaves a choice on which labels depend (C2v, D2, D2h,
C4v, ...), z stays along z if it can, and elements keep their names (σv stays σv, C2' stays C2').  A C2v whose axis was
a horizontal one takes its y along z of the group (σh becomes σ(xz)), D2h gives its axes in turn, and σh of D3h becomes
σ(yz): the columns of E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), appendix X (from memory),
which print follows.  The other choices are told by `exchanges`.
"""

import re

import numpy as np

from vibsym.groups.pointgroup import PointGroup, point_group
from vibsym.groups.subgroups import operation_places, standard_frames

_ORDER = ("E", "i", "σh", "σ", "σv", "σd")


def frame_in_parent(parent: PointGroup, operations: np.ndarray) -> tuple[str, np.ndarray]:
    """Return the symbol of a subgroup, given by its operations, and its axes as rows in the axes of the parent."""
    matrices = parent.matrices[operations]
    symbol, frames = standard_frames(matrices)
    if len(frames) == 1:
        return symbol, frames[0]
    group = point_group(symbol)
    names = [_bare(parent.operation_symbols[k]) for k in operations]
    return symbol, max(frames, key=lambda frame: _fitness(parent.symbol, group, matrices, names, frame))


def other_frames(group: PointGroup, frame: np.ndarray) -> list[np.ndarray]:
    """Return the frames of the other choices of x and y of a subgroup that stands in `frame`, z left where it is."""
    matrices = np.einsum("ba,cbd,de->cae", frame, group.matrices, frame)
    frames = standard_frames(matrices)[1]
    own = _classes_of(group, operation_places(group, matrices, frame))
    return [other for other in frames if abs(other[2] @ frame[2]) > 0.999
            and not np.array_equal(_classes_of(group, operation_places(group, matrices, other)), own)]


def exchanges(group: PointGroup, frame: np.ndarray, other: np.ndarray) -> str:
    """Return in words which labels of a subgroup another choice of axes exchanges: `B1 <-> B2`, `B1 -> B3 -> B2`."""
    matrices = np.einsum("ba,cbd,de->cae", frame, group.matrices, frame)
    classes = _classes_of(group, operation_places(group, matrices, other))
    first = [c.members[0] for c in group.classes]
    rows = group.character_rows
    turned = rows[:, classes[first]]                      # of the other labels, in the class order of the chosen axes
    same = np.abs(rows[:, None, :] - turned[None, :, :]).max(axis=2) < 1e-6
    becomes = {label: group.labels[int(row.argmax())] for label, row in zip(group.labels, same)}
    words, done = [], set()
    for label in group.labels:
        cycle = [label]
        while becomes[cycle[-1]] != label:
            cycle.append(becomes[cycle[-1]])
        if len(cycle) > 1 and label not in done:
            words.append(f"{cycle[0]} <-> {cycle[1]}" if len(cycle) == 2 else " -> ".join([*cycle, label]))
        done.update(cycle)
    return ", ".join(words)


def kept_elements(parent: PointGroup, group: PointGroup, places: np.ndarray, whole: bool = False) -> str:
    """Return what a subgroup keeps, in the parent's names: the axis, then the kind of axis across it or of plane.

    `places` (h,): the operation of the parent that each operation of the subgroup is; `whole`: every kind kept.

    >>> C2h = point_group("C2h")
    >>> kept_elements(C2h, C2h, range(4))
    'C2, σh'
    """
    own = group.operation_symbols
    names = [re.sub(r"\^\d+", "", parent.operation_symbols[k]) for k in places]
    kinds = [name for name in sorted(set(names), key=_rank) if name != "E"]
    if whole or len(kinds) < 2:
        return ", ".join(kinds) or "E"
    if group.symbol[0] in "TOI":
        return ", ".join(dict.fromkeys(names[own.index(k)] for k in _GENERATORS[group.symbol]))
    proper, upright = group.determinants > 0, group.matrices[:, 2, 2] > 0
    about_z = np.flatnonzero((proper == upright) & (np.arange(group.order) > 0))      # Cn, and Sn, i, σh
    axis = max(about_z, key=lambda k: (_fold(own[k]), proper[k], -k))
    if group.symbol[0] == "D":
        second = [names[k] for k in np.flatnonzero(proper & ~upright)]
    else:
        second = [names[k] for k in range(group.order) if own[k].startswith("σ")]
    return ", ".join(dict.fromkeys([names[axis], *sorted(set(second), key=_rank)[:1]]))


_GENERATORS = {"T": ("C3", "C2"), "Th": ("C3", "σh"), "Td": ("C3", "S4"), "O": ("C3", "C4"), "Oh": ("C4", "i"),
               "I": ("C5", "C3"), "Ih": ("C5", "i")}


def _fold(symbol: str) -> int:
    """The order of an axis, from the symbol of one of its operations; a primitive turn counts before its powers."""
    match = re.match(r"[CS](\d+)(\^)?", symbol)
    return 0 if match is None or match[2] else int(match[1])


def _rank(name: str) -> tuple:
    """Rotations by falling order, unprimed first, then improper axes, the centre, σh, σv, σd."""
    match = re.match(r"([CS])(\d+)(.*)", name)
    if match:
        place = {"(z)": 0, "(y)": 1, "(x)": 2}.get(match[3], len(match[3]))
        return 0 if match[1] == "C" else 1, -int(match[2]), place
    bare = _bare(name)
    return (2, _ORDER.index(bare) if bare in _ORDER else 9, name.count("'"), name)


def _bare(symbol: str) -> str:
    """A symbol without the power, the primes of planes and what stands in brackets: `σv'(yz)` is σv."""
    bare = re.sub(r"\(.*\)|\^\d+", "", symbol)
    return bare.rstrip("'") if bare.startswith("σ") else bare


def _classes_of(group: PointGroup, places: np.ndarray) -> np.ndarray:
    classes = np.empty(group.order, dtype=int)
    classes[places] = group.class_of
    return classes


def _fitness(parent: str, group: PointGroup, matrices: np.ndarray, names: list[str], frame: np.ndarray) -> tuple:
    """What makes a choice of axes the better one; compared from left to right."""
    places = operation_places(group, matrices, frame)
    kept = sum(_bare(own) == names[place] for own, place in zip(group.operation_symbols, places))
    x, y, z = np.abs(frame).round(6)
    along = z[2]
    if group.symbol == "C2v" and along < 0.9:
        if parent == "D2h":                               # x y z becomes y z x or z x y
            turns = (frame[[1, 2, 0]], frame[[2, 0, 1]])
            return along, any(np.abs(np.diag(turn)).sum() > 2.9 for turn in turns)
        return along, x[2] if parent == "D3h" else y[2]
    if parent in ("D6", "D6h") and group.symbol in ("D2", "D2h"):
        return along, y[0]                                # C2' along y, as the columns of D6h are printed
    if parent[0] in "TOI":                                # axes along those of the cube
        return along, x[0], y[1]
    return along, kept, x[0], y[1]
