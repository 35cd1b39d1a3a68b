"""The polyhedral point groups T, Td, Th, O, Oh, I, Ih: closed from the representatives in
`tables/polyhedral_groups.csv`.

Species are built from the 3×3 matrices themselves: T1 is the matrix of a rotation (of -R for the improper half of Td
counted as in O), E the permutation of x², y², z²; in I, T2 is the conjugate of T1 under √5 → -√5, H the five traceless
quadratic functions and G the permutation of the five triads of mutually perpendicular twofold axes, less its sum.
Groups with a centre are products with Ci.  All components are adapted to the twofold axes along x, y and z.
"""

import numpy as np

from vibsym.groups.axial import GroupPlan, SpeciesPlan
from vibsym.groups.distinct import first_of_each
from vibsym.tables import read_table

PHI = (1 + 5**0.5) / 2


def polyhedral_group(symbol: str) -> GroupPlan:
    """Return the plan of T, Td, Th, O, Oh, I or Ih with its operations grouped by class in handbook order."""
    rows = [row for row in read_table("polyhedral_groups.csv") if row["group"] == symbol]
    representatives = np.array([_operation(row["kind"], row["axis"], row["turn"]) for row in rows])
    elements = _closure(representatives)
    members = _classes(elements, representatives)
    order = np.concatenate(members)
    matrices = elements[order]
    classes, start, symbols = [], 0, []
    for row, member in zip(rows, members, strict=True):
        count = len(member)
        classes.append((row["class"] if count == 1 else f"{count}{row['class']}", tuple(range(start, start + count))))
        symbols += [row["class"]] * count
        start += count
    return GroupPlan(matrices, tuple(symbols), tuple(classes), tuple(_species(symbol, matrices)))


def _operation(kind: str, axis: str, turn: str) -> np.ndarray:
    """Rodrigues' formula; improper: the component along the axis changes its sign."""
    a = np.array([PHI if word == "phi" else float(word) for word in axis.split()])
    a /= np.linalg.norm(a)
    angle = 2 * np.pi * _number(turn)
    cross = np.array([[0, -a[2], a[1]], [a[2], 0, -a[0]], [-a[1], a[0], 0]])
    along = np.outer(a, a)
    sign = 1.0 if kind == "proper" else -1.0
    return np.cos(angle) * (np.eye(3) - along) + np.sin(angle) * cross + sign * along


def _number(text: str) -> float:
    """A number as the table writes it, `0` or `2/5`."""
    above, _, below = text.partition("/")
    return int(above) / int(below or 1)


def _closure(generators: np.ndarray) -> np.ndarray:
    """Multiply until nothing new appears; entries are snapped so that no rounding piles up."""
    elements = frontier = _distinct(generators)
    while len(frontier):
        grown = np.einsum("aij,bjk->abik", generators, frontier).reshape(-1, 3, 3)
        products = _distinct(np.concatenate([elements, grown]))
        known = (_keys(products)[:, None] == _keys(elements)).any(axis=1)
        elements, frontier = products, products[~known]
    return elements


_EXACT = np.array([0.0] + [sign * value for value in (0.5, 1, PHI / 2, (PHI - 1) / 2) for sign in (-1, 1)])
_EXACT.sort()
_BETWEEN = (_EXACT[1:] + _EXACT[:-1]) / 2
_POWERS = len(_EXACT) ** np.arange(9)


def _keys(matrices: np.ndarray) -> np.ndarray:
    """A whole number for each matrix, the same for matrices that differ by rounding."""
    return np.searchsorted(_BETWEEN, matrices.reshape(-1, 9)) @ _POWERS


def _distinct(matrices: np.ndarray) -> np.ndarray:
    """Entries of these groups are 0, ±1, ±1/2, ±φ/2, ±1/(2φ): snap to them, then keep one of each matrix."""
    return _EXACT[np.searchsorted(_BETWEEN, matrices[first_of_each(_keys(matrices))])]


def _classes(elements: np.ndarray, representatives: np.ndarray) -> list[np.ndarray]:
    """Indices of the elements conjugate to each representative."""
    keys = _keys(elements)
    members = []
    for representative in representatives:
        conjugates = _keys(np.einsum("aij,jk,alk->ail", elements, representative, elements))
        member = np.flatnonzero((keys[:, None] == conjugates).any(axis=1))
        first = np.flatnonzero(keys == _keys(representative[None]))
        members.append(np.concatenate([first, member[member != first[0]]]))
    return members


def _species(symbol: str, matrices: np.ndarray) -> list[SpeciesPlan]:
    determinant = np.round(np.linalg.det(matrices))
    rotations = matrices * determinant[:, None, None]     # the proper part: R for rotations, -R for the others
    if symbol in ("I", "Ih"):
        plain = _icosahedral(rotations)
    elif symbol in ("T", "Th"):
        plain = [("A", np.ones((len(matrices), 1, 1)), False), ("E", _squares(rotations), True),
                 ("T", rotations, False)]
    else:
        plain = _octahedral(rotations)
    if symbol not in ("Th", "Oh", "Ih"):
        return [SpeciesPlan(label, matrices_, pair) for label, matrices_, pair in plain]
    return [SpeciesPlan(label + suffix, m if suffix == "g" else m * determinant[:, None, None], pair)
            for suffix in ("g", "u") for label, m, pair in plain]


def _octahedral(rotations: np.ndarray) -> list[tuple[str, np.ndarray, bool]]:
    """A2 is -1 for what exchanges two of the axes (C4, C2', S4, σd): the sign of the permutation of x², y², z²."""
    swap = np.round(np.linalg.det(np.abs(rotations)))[:, None, None]
    return [("A1", np.ones_like(swap), False), ("A2", swap, False), ("E", _squares(rotations), False),
            ("T1", rotations, False), ("T2", rotations * swap, False)]


def _squares(rotations: np.ndarray) -> np.ndarray:
    """The species E on (2z² - x² - y², √3(x² - y²)): (h, 2, 2)."""
    basis = np.array([[-1, -1, 2], [3**0.5, -(3**0.5), 0]]) / 6**0.5
    return np.einsum("ia,gab,jb->gij", basis, np.abs(rotations), basis)


def _icosahedral(rotations: np.ndarray) -> list[tuple[str, np.ndarray, bool]]:
    conjugate = {0.0: 0.0, 1.0: 1.0, 0.5: 0.5, PHI / 2: (1 - PHI) / 2, (PHI - 1) / 2: -PHI / 2}
    keys = np.array(list(conjugate))
    values = np.array(list(conjugate.values()))
    index = np.abs(np.abs(rotations)[..., None] - keys).argmin(axis=-1)
    t2 = np.sign(rotations) * values[index]
    return [("A", np.ones((len(rotations), 1, 1)), False), ("T1", rotations, False), ("T2", t2, False),
            ("G", _triads(rotations), False), ("H", _quadratics(rotations), False)]


def _quadratics(rotations: np.ndarray) -> np.ndarray:
    """The five traceless quadratic functions: 2z²-x²-y², √3(x²-y²), then yz, xz, xy: (h, 5, 5)."""
    tensors = np.zeros((5, 3, 3))
    tensors[0] = np.diag([-1, -1, 2]) / 6**0.5
    tensors[1] = np.diag([1, -1, 0]) / 2**0.5
    for k, (a, b) in enumerate(((1, 2), (0, 2), (0, 1)), start=2):
        tensors[k, a, b] = tensors[k, b, a] = 0.5**0.5
    return np.einsum("iab,gac,gbd,jcd->gij", tensors, rotations, rotations, tensors)


def _triads(rotations: np.ndarray) -> np.ndarray:
    """G from the five triads of perpendicular twofold axes; the triad x, y, z is the last of the five: (h, 4, 4)."""
    five = next(R for R in rotations if abs(np.trace(R) - PHI) < 1e-9)
    frames = [np.eye(3)]
    for _ in range(4):
        frames.append(five @ frames[-1])
    frames = np.array(frames)                             # each of the five triads as the columns of a matrix

    def place(images: np.ndarray) -> np.ndarray:
        """Which triad a triad becomes: its axes are parallel to those of the other."""
        overlap = np.abs(np.einsum("gai,kaj->gkij", images, frames)).max(axis=(2, 3))
        return overlap.argmax(axis=1)

    goes = np.stack([place(np.einsum("gij,jk->gik", rotations, frame)) for frame in frames], axis=1)
    halves = [np.diag(d) for d in ([1.0, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1])]
    first_four = [int(place((half @ frames[1])[None])[0]) for half in halves]
    permutation = np.zeros((len(rotations), 5, 5))
    permutation[np.arange(len(rotations))[:, None], goes, np.arange(5)] = 1.0
    basis = np.zeros((4, 5))
    order = [*first_four, 0]
    for row, signs in enumerate(([1, 1, 1, 1], [1, 1, -1, -1], [1, -1, 1, -1], [1, -1, -1, 1])):
        basis[row, order[:4]] = np.array(signs) / 2
    basis[0] = 1 / 20**0.5
    basis[0, 0] = -4 / 20**0.5
    return np.einsum("ia,gab,jb->gij", basis, permutation, basis)
