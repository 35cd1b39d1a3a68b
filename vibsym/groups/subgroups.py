"""Which point group a subset of the operations of a group is, and every frame in which it has standard orientation.

Where the orientation leaves a choice that labels depend on (which plane is σv, which twofold axis is z),
`standard_frames` returns one frame for each setting and leaves the choice to the caller (vibsym/groups/orientation.py).
"""

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.identify import identified, matched
from vibsym.groups.pointgroup import PointGroup
from vibsym.groups.settings import equal_turns, settings


def identify(matrices: np.ndarray) -> tuple[str, np.ndarray]:
    """Return (symbol, frame) of a finite group given by all its (h, 3, 3) matrices.

    `frame` (3, 3) has the standard axes x, y, z as rows (a proper rotation): frame @ R @ frame.T runs over the matrices
    of `point_group(symbol)`.

    >>> symbol, frame = identify(np.array([np.eye(3), np.diag([-1, 1, -1]), np.diag([-1, 1, 1]), np.diag([1, 1, -1])]))
    >>> symbol, np.abs(frame[2]).tolist()
    ('C2v', [0.0, 1.0, 0.0])
    """
    matrices = np.asarray(matrices, dtype=float)
    group, frame, _ = identified(matrices, np.round(np.linalg.det(matrices)))
    if len(matrices) != group.order:
        raise VibsymError(f"{len(matrices)} matrices do not close into the point group {group.symbol}")
    return group.symbol, frame


def standard_frames(matrices: np.ndarray) -> tuple[str, list[np.ndarray]]:
    """Return the symbol and one frame for each setting, so for each choice of axes that changes labels.

    Of frames that no label tells apart it is the one least turned against the axes of the matrices.
    """
    symbol, frame = identify(matrices)
    turns = equal_turns(symbol)
    alike = [turns @ turn @ frame for turn in settings(symbol).values()]
    return symbol, [frames[frames.trace(axis1=1, axis2=2).round(9).argmax()] for frames in alike]


def operation_places(group: PointGroup, matrices: np.ndarray, frame: np.ndarray) -> np.ndarray | None:
    """Return (h,) where each operation of `group` stands among `matrices` turned into `frame`; None: no fit."""
    return matched(group, frame, matrices) if len(matrices) == group.order else None
