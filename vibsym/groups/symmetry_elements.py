"""The elements of symmetry of a group: its axes, planes and centre, as things that can be drawn.

An axis is given by a unit vector along it and its order, a plane by its unit normal.  Elements that some operation of
the group carries into each other form one kind, in the notation of the table: `C3`, `3C2`, `σh`, `3σv`, `S4`, `i`.  The
improper axes that only repeat a proper one of the same or a higher order (S3 beside C3) are named, since books name
them.  Linear molecules have one axis of infinite order.
"""

from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True)
class ElementKind:
    """Equivalent elements; `kind`: axis, improper, plane or centre; `vectors` (n, 3) along axes or normal to planes."""

    symbol: str               # "C3", "σv", "i"
    kind: str
    order: int                # of the axis; 0 for an infinite one, 1 for planes and the centre
    vectors: tuple[tuple[float, float, float], ...]

    def to_dict(self) -> dict:
        """Return the kind for JSON."""
        return {"symbol": self.symbol, "kind": self.kind, "order": self.order,
                "vectors": [list(vector) for vector in self.vectors]}


def symmetry_elements(group) -> tuple[ElementKind, ...]:
    """Return the elements of a group in its standard frame, axes by falling order, then planes, the centre.

    >>> from vibsym.groups.pointgroup import point_group
    >>> [(each.symbol, len(each.vectors)) for each in symmetry_elements(point_group("D3h"))]
    [('C3', 1), ('C2', 3), ('S3', 1), ('σh', 1), ('σv', 3)]
    """
    if group.symbol == "Kh":
        return (ElementKind("i", "centre", 1, ()),)
    if group.infinite:
        axis = ElementKind("C∞", "axis", 0, ((0.0, 0.0, 1.0),))
        if not group.centrosymmetric:
            return (axis,)
        return (axis, ElementKind("σh", "plane", 1, ((0.0, 0.0, 1.0),)), ElementKind("i", "centre", 1, ()))
    found: dict[tuple, ElementKind] = {}
    for each in group.classes:
        kind = _kind(group.matrices[each.members[0]])
        if kind is None:
            continue
        name, order = kind
        vectors = _distinct([_direction(group.matrices[member]) for member in each.members]) if name != "centre" else ()
        key = (name, order, *sorted(tuple(round(value, 5) for value in vector) for vector in vectors))
        symbol = group.operation_symbols[each.members[0]].split("^")[0]
        found.setdefault(key, ElementKind(symbol, name, order, vectors))
    place = {"axis": 0, "improper": 1, "plane": 2, "centre": 3}
    return tuple(sorted(found.values(), key=lambda each: (place[each.kind], -each.order)))


def _kind(matrix: np.ndarray) -> tuple[str, int] | None:
    """Return what element a primitive operation belongs to and its order; None for E and for powers of another."""
    determinant, trace = np.linalg.det(matrix), np.trace(matrix)
    proper = determinant > 0
    angle = np.arccos(np.clip((trace - (1 if proper else -1)) / 2, -1, 1))
    if proper:
        return None if angle < 1e-6 else _primitive("axis", angle)
    if abs(angle) < 1e-6:
        return "plane", 1
    if abs(angle - np.pi) < 1e-6:
        return "centre", 1
    return _primitive("improper", angle)


def _primitive(name: str, angle: float) -> tuple[str, int] | None:
    turns = 2 * np.pi / angle
    return (name, round(turns)) if abs(turns - round(turns)) < 1e-6 else None


def _direction(matrix: np.ndarray) -> np.ndarray:
    """Return the unit vector of an axis or the normal of a plane: the vector that R turns into det R times itself."""
    sign = 1.0 if np.linalg.det(matrix) > 0 else -1.0
    left = np.linalg.svd(matrix - sign * np.eye(3))[2][-1]
    first = left[np.abs(left) > 1e-8][-1]
    return left * np.sign(first)


def _distinct(vectors: list[np.ndarray]) -> tuple[tuple[float, float, float], ...]:
    kept: list[np.ndarray] = []
    for vector in vectors:
        if not any(abs(vector @ other) > 1 - 1e-6 for other in kept):
            kept.append(vector)
    return tuple(tuple(float(value) + 0.0 for value in vector.round(9)) for vector in kept)
