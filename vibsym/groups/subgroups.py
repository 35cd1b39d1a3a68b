"""Which point group a set of matrices is: its Schoenflies symbol and the frame that turns it into standard orientation.

The matrices form a group exactly (a subset of the operations of a known group, say); no atoms and no tolerance are
involved.  The highest axis gives the family, twofold axes across it the D groups, planes the suffix (the flow chart
of every textbook: F. A. Cotton, Chemical Applications of Group Theory, ch. 3).  Where the orientation leaves a choice
(which plane is σv, which twofold axis is z), `standard_frames` returns one frame for each and leaves the choice to
the caller.
"""

from itertools import permutations

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import PointGroup, point_group

CLOSE = 1e-6


def identify(matrices: np.ndarray) -> tuple[str, np.ndarray]:
    """Return (symbol, frame) of a finite group given by all its (h, 3, 3) matrices.

    `frame` (3, 3) has the standard axes x, y, z as rows (a proper rotation): frame @ R @ frame.T runs over the matrices
    of `point_group(symbol)`.

    >>> symbol, frame = identify(np.array([np.eye(3), np.diag([-1, 1, -1]), np.diag([-1, 1, 1]), np.diag([1, 1, -1])]))
    >>> symbol, np.abs(frame[2]).tolist()
    ('C2v', [0.0, 1.0, 0.0])
    """
    symbol, frames = standard_frames(matrices)
    return symbol, frames[0]


def standard_frames(matrices: np.ndarray) -> tuple[str, list[np.ndarray]]:
    """Return the symbol and one frame for each choice of axes that may change labels.

    C2v, Cnv with even n: two (σv and σv' exchanged); D2, D2h: six; Dn, Dnh with even n: two; every other group: one.
    """
    matrices = np.asarray(matrices, dtype=float)
    elements = _Elements(matrices)
    symbol = elements.symbol()
    group = point_group(symbol)
    frames: list[np.ndarray] = []
    for frame in elements.candidate_frames(symbol):
        if operation_places(group, matrices, frame) is None:
            continue
        if not any(_same_labels(group, matrices, frame, other) for other in frames):
            frames.append(frame)
    if not frames:
        raise VibsymError(f"{len(matrices)} matrices do not close into the point group {symbol}")
    return symbol, frames


def operation_places(group: PointGroup, matrices: np.ndarray, frame: np.ndarray) -> np.ndarray | None:
    """Return (h,) where each operation of `group` stands among `matrices` turned into `frame`; None: no fit."""
    turned = np.einsum("ab,hbc,dc->had", frame, matrices, frame).reshape(len(matrices), 9)
    if len(turned) != group.order:
        return None
    distance = np.abs(group.matrices.reshape(-1, 1, 9) - turned).max(axis=2)
    places = distance.argmin(axis=1)
    if distance.min(axis=1).max() > CLOSE or len(np.unique(places)) != group.order:
        return None
    return places


def _same_labels(group: PointGroup, matrices: np.ndarray, one: np.ndarray, other: np.ndarray) -> bool:
    """Tell whether two frames put every operation of `matrices` into the same class (so that all labels agree)."""
    first, second = (operation_places(group, matrices, frame) for frame in (one, other))
    classes = np.empty((2, group.order), dtype=int)
    classes[0, first] = group.class_of
    classes[1, second] = group.class_of
    return bool(np.array_equal(classes[0], classes[1]))


class _Elements:
    """Axes and planes of a set of matrices: for each operation its kind, order and axis."""

    def __init__(self, matrices: np.ndarray):
        proper = np.linalg.det(matrices) > 0
        rotations = np.where(proper[:, None, None], matrices, -matrices)
        cosine = np.clip((np.trace(rotations, axis1=1, axis2=2) - 1) / 2, -1, 1)
        self.matrices, self.proper = matrices, proper
        self.axes = np.array([_axis(r, c) for r, c in zip(rotations, cosine)])
        fraction = np.arccos(cosine) / (2 * np.pi)
        self.turn_order = np.array([_order(f) for f in fraction])
        self.centre = bool(np.any(~proper & (cosine > 1 - CLOSE)))
        self.planes = self.axes[~proper & (cosine < -1 + CLOSE)]
        self.lines, self.orders = self._lines()

    def _lines(self) -> tuple[np.ndarray, np.ndarray]:
        """Different axes of proper rotation and the number of rotations about each (its order)."""
        axes = self.axes[self.proper & (self.turn_order > 1)]
        lines, orders = [], []
        for axis in axes:
            for index, line in enumerate(lines):
                if abs(axis @ line) > 1 - CLOSE:
                    orders[index] += 1
                    break
            else:
                lines.append(axis)
                orders.append(2)
        return np.array(lines).reshape(-1, 3), np.array(orders, dtype=int)

    def symbol(self) -> str:
        h, n = len(self.matrices), int(self.orders.max(initial=1))
        if n == 1:
            return "C1" if h == 1 else "Ci" if self.centre else "Cs"
        if n > 2 and np.sum(self.orders > 2) > 1:
            rotations = int(self.proper.sum())
            base = {12: "T", 24: "O", 60: "I"}[rotations]
            if h == rotations:
                return base
            return base + "h" if self.centre else "Td"
        axis = self.principal()
        across = int(np.sum((self.orders == 2) & (np.abs(self.lines @ axis) < CLOSE)))
        horizontal = bool(np.any(np.abs(self.planes @ axis) > 1 - CLOSE)) if len(self.planes) else False
        vertical = bool(np.any(np.abs(self.planes @ axis) < CLOSE)) if len(self.planes) else False
        if across:
            return f"D{n}" + ("h" if horizontal else "d" if vertical else "")
        if horizontal or vertical:
            return f"C{n}" + ("h" if horizontal else "v")
        return f"C{n}" if bool(self.proper.all()) else f"S{2 * n}"

    def principal(self) -> np.ndarray:
        """The axis of highest order; among three twofold ones the S4 axis, if there is one."""
        best = self.lines[self.orders == self.orders.max()]
        improper = self.axes[~self.proper & (self.turn_order > 2)]
        for line in best:
            if len(improper) and np.any(np.abs(improper @ line) > 1 - CLOSE):
                return line
        return best[0]

    def candidate_frames(self, symbol: str) -> list[np.ndarray]:
        """Frames among which those in standard orientation are found: z first, x along what the family asks for."""
        if symbol in ("C1", "Ci"):
            return [np.eye(3)]
        if symbol == "Cs":
            return [_frame(self.planes[0], _across(self.planes[0]))]
        if symbol[0] in "TOI":
            four = self.lines[self.orders == (4 if symbol[0] == "O" else 2)]
            triple = next(np.array([a, b, np.cross(a, b)]) for a, b in permutations(four, 2) if abs(a @ b) < CLOSE)
            return [triple, np.array([triple[1], -triple[0], triple[2]])]
        z_axes = [self.principal()] if symbol not in ("D2", "D2h") else list(self.lines)
        frames = []
        for z in z_axes:
            if symbol[0] == "D":
                xs = [line for line, order in zip(self.lines, self.orders) if order == 2 and abs(line @ z) < CLOSE]
            elif symbol[-1] == "v":
                xs = [np.cross(normal, z) for normal in self.planes if abs(normal @ z) < CLOSE]
            else:
                xs = [_across(z)]
            frames += [_frame(z, x) for x in xs]
        return frames


def _axis(rotation: np.ndarray, cosine: float) -> np.ndarray:
    """Unit vector along the axis of a rotation, its last component that is not zero positive; zero for the identity."""
    if cosine > 1 - CLOSE:
        return np.zeros(3)
    if cosine < -1 + CLOSE:                                # half turn: R = 2 nn' - 1
        square = (rotation + np.eye(3)) / 2
        axis = square[:, int(np.argmax(np.diag(square)))]
    else:
        turned = rotation - rotation.T
        axis = np.array([turned[2, 1], turned[0, 2], turned[1, 0]])
    axis = axis / np.linalg.norm(axis)
    lead = axis[np.abs(axis) > CLOSE][-1]
    return axis if lead > 0 else -axis


def _order(fraction: float) -> int:
    """The order of a turn by this fraction of 2π: the smallest n with n × fraction whole."""
    return next((n for n in range(1, 400) if abs(n * fraction - round(n * fraction)) < 1e-4 * n), 400)


def _across(axis: np.ndarray) -> np.ndarray:
    """A unit vector across an axis: the coordinate axis least along it, made perpendicular."""
    least = np.eye(3)[int(np.argmin(np.abs(axis)))]
    vector = least - (least @ axis) * axis
    return vector / np.linalg.norm(vector)


def _frame(z: np.ndarray, x: np.ndarray) -> np.ndarray:
    return np.array([x, np.cross(z, x), z])
