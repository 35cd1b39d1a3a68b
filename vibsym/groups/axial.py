"""The axial point groups by closed form: Cn, Cnv, Cnh, Dn, Dnh, Dnd, S2n for any n.

Each operation is written (m, p, s): the in-plane part turns by 2πm/N, after a reflection of y where p = 1, and s = ±1
is what happens to z.  Then

    p = 0, s = +1   rotation about z          p = 1, s = +1   mirror plane through z, at the angle πm/N
    p = 0, s = -1   improper rotation         p = 1, s = -1   twofold axis in the plane, at the angle πm/N

and every species is a restriction of one of O(2): A and B (signs) or E_k, the matrix R(2πkm/N) diag(1, -1)^p
(E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, appendix X).  Groups with a centre are built as
(rotations) × Ci, those with σh and odd n as (rotations) × Cs, so that g/u and '/'' come out in handbook order.
"""

from dataclasses import dataclass
from math import gcd

import numpy as np


@dataclass(frozen=True)
class SpeciesPlan:
    """A species before its characters are known: label, matrices of all operations and how to write them exactly.

    `angles` (h,) int, `flips` (h,) 0/1 and `signs` (h,) ±1 give sign × R(2π angle/turn) × diag(1, -1)^flip for two
    dimensions and the sign alone for one; both None where the exact entries must be recognised (polyhedral groups).
    """

    label: str
    matrices: np.ndarray
    pair: bool
    signs: np.ndarray | None = None
    angles: np.ndarray | None = None
    flips: np.ndarray | None = None
    turn: int = 1


@dataclass(frozen=True)
class GroupPlan:
    """Operations in class order with their symbols, the classes and the species of a finite group."""

    matrices: np.ndarray
    operation_symbols: tuple[str, ...]
    classes: tuple[tuple[str, tuple[int, ...]], ...]
    species: tuple[SpeciesPlan, ...]


@dataclass(frozen=True)
class _Elements:
    """Operations (m, p, s) with the classes as index lists; `turn` is N."""

    m: np.ndarray
    p: np.ndarray
    s: np.ndarray
    turn: int
    blocks: tuple[tuple[int, ...], ...]


def axial_group(letter: str, n: int, suffix: str) -> GroupPlan:
    """Return the plan of the axial group with the letter C, D or S, axis n and suffix '', v, h or d.

    `S` takes the order of the improper axis (`S`, 8).  Cs is (C, 1, h), Ci is (S, 2).
    """
    improper = letter == "S" or suffix == "d"
    half = n // 2 if letter == "S" else n
    if improper and half % 2 == 0:                        # S4, S8, D2d, D4d, ...: the improper axis is the backbone
        elements = _improper_backbone(half, dihedral=letter == "D")
        species = _species_of_rotations(elements, dihedral=letter == "D", names={})
        return _plan(elements, species)
    base_n = half if improper else n
    dihedral = letter == "D" or suffix == "v"
    base = _rotations(base_n, dihedral, axes_horizontal=letter == "D")
    orthorhombic = letter == "D" and base_n == 2
    if orthorhombic:
        base = _reorder(base, ((0,), (1,), (3,), (2,)))   # handbooks list C2(z), C2(y), C2(x)
    species = _species_of_rotations(base, dihedral, _D2_NAMES if orthorhombic else {})
    if suffix == "h" or improper:
        centre = improper or base_n % 2 == 0              # × Ci, else × Cs
        return _plan(*_double(base, species, centre))
    return _plan(base, species)


def _rotations(n: int, dihedral: bool, axes_horizontal: bool) -> _Elements:
    m, p, s = list(range(n)), [0] * n, [1] * n
    if dihedral:
        blocks = [(k, n - k) if k and k != n - k else (k,) for k in range(n // 2 + 1)]
        m += list(range(n))
        p += [1] * n
        s += [-1 if axes_horizontal else 1] * n
        even, odd = tuple(n + k for k in range(0, n, 2)), tuple(n + k for k in range(1, n, 2))
        blocks += [even, odd] if n % 2 == 0 else [tuple(n + k for k in range(n))]
    else:
        blocks = [(k,) for k in range(n)]
    return _reorder(_Elements(np.array(m), np.array(p), np.array(s), n, ()), tuple(blocks))


def _improper_backbone(n: int, dihedral: bool) -> _Elements:
    turn = 2 * n
    m, p, s = list(range(turn)), [0] * turn, [(-1) ** k for k in range(turn)]
    blocks = [(k,) for k in range(turn)]
    if dihedral:
        blocks = [(k, turn - k) if k and k != turn - k else (k,) for k in range(n + 1)]
        m += list(range(turn))
        p += [1] * turn
        s += [-((-1) ** k) for k in range(turn)]
        blocks += [tuple(turn + k for k in range(0, turn, 2)), tuple(turn + k for k in range(1, turn, 2))]
    return _reorder(_Elements(np.array(m), np.array(p), np.array(s), turn, ()), tuple(blocks))


def _reorder(elements: _Elements, blocks: tuple[tuple[int, ...], ...]) -> _Elements:
    order = np.array([index for block in blocks for index in block])
    ends = np.cumsum([len(block) for block in blocks])
    renumbered = tuple(tuple(range(end - len(block), end)) for end, block in zip(ends.tolist(), blocks, strict=True))
    return _Elements(elements.m[order], elements.p[order], elements.s[order], elements.turn, renumbered)


# D2 has no principal axis: its species are numbered by the axis they keep, z, y, x (Mulliken 1955).
_D2_NAMES = {"A1": "A", "A2": "B1", "B2": "B2", "B1": "B3"}


def _species_of_rotations(elements: _Elements, dihedral: bool, names: dict[str, str]) -> list[SpeciesPlan]:
    """Species of a cyclic or dihedral set: A, B by signs and E_k, k = 1 ... (N-1)/2, as rotations by k times the angle.

    `names` replaces the labels of one-dimensional species.
    """
    m, p, turn = elements.m, elements.p, elements.turn
    even = turn % 2 == 0
    one = np.ones(len(m), dtype=int)
    if dihedral:
        signs = {"A1": one, "A2": (-1) ** p}
        if even:
            signs |= {"B1": (-1) ** m, "B2": (-1) ** (m + p)}
    else:
        signs = {"A": one} | ({"B": (-1) ** m} if even else {})
    ordered = sorted(((names.get(key, key), sign) for key, sign in signs.items()), key=lambda pair: pair[0])
    species = [SpeciesPlan(label, sign.reshape(-1, 1, 1).astype(float), False, sign) for label, sign in ordered]
    highest = (turn - 1) // 2
    for k in range(1, highest + 1):
        angles = k * m % turn
        label = "E" if highest == 1 else f"E{k}"
        species.append(SpeciesPlan(label, _turns(angles, p, turn), not dihedral, one, angles, p, turn))
    return species


def _turns(angles: np.ndarray, flips: np.ndarray, turn: int) -> np.ndarray:
    phi = 2 * np.pi * angles / turn
    c, s, f = np.cos(phi), np.sin(phi), 1.0 - 2.0 * flips
    return np.stack([np.stack([c, -s * f], 1), np.stack([s, c * f], 1)], 1)


def _double(base: _Elements, species: list[SpeciesPlan], centre: bool) -> tuple[_Elements, list[SpeciesPlan]]:
    """Multiply by Ci (centre) or by Cs: the second half of the operations is i·R or σh·R, in the order of the first."""
    count, turn = len(base.m), base.turn
    scale = 2 if centre and turn % 2 else 1               # i turns by π: for odd n count in halves of the step
    shift = turn * scale // 2 if centre else 0
    m = np.concatenate([base.m * scale, (base.m * scale + shift) % (turn * scale)])
    blocks = base.blocks + tuple(tuple(k + count for k in block) for block in base.blocks)
    elements = _Elements(m, np.tile(base.p, 2), np.concatenate([base.s, -base.s]), turn * scale, blocks)
    doubled = []
    for suffix, sign in zip(("g", "u") if centre else ("'", "''"), (1, -1), strict=True):
        for plan in species:
            signs = np.concatenate([plan.signs, sign * plan.signs])
            matrices = np.concatenate([plan.matrices, sign * plan.matrices])
            angles = None if plan.angles is None else np.tile(plan.angles, 2)
            flips = None if plan.flips is None else np.tile(plan.flips, 2)
            doubled.append(SpeciesPlan(plan.label + suffix, matrices, plan.pair, signs, angles, flips, plan.turn))
    return elements, doubled


def _plan(elements: _Elements, species: list[SpeciesPlan]) -> GroupPlan:
    phi = 2 * np.pi * elements.m / elements.turn
    c, s, f, zero = np.cos(phi), np.sin(phi), 1.0 - 2.0 * elements.p, np.zeros(len(phi))
    matrices = np.stack([np.stack([c, -s * f, zero], 1), np.stack([s, c * f, zero], 1),
                         np.stack([zero, zero, elements.s.astype(float)], 1)], 1)
    matrices = np.where(np.abs(matrices) < 1e-15, 0.0, matrices)
    symbols = _operation_symbols(elements)
    classes = []
    for block in elements.blocks:
        name = min((symbols[index] for index in block), key=_power)
        classes.append((name if len(block) == 1 else f"{len(block)}{name}", tuple(block)))
    return GroupPlan(matrices, tuple(symbols), tuple(classes), tuple(species))


def _power(symbol: str) -> int:
    return int(symbol.partition("^")[2] or 1)


def _operation_symbols(elements: _Elements) -> list[str]:
    has_plane = bool(np.any((elements.p == 0) & (elements.s < 0) & (elements.m == 0)))
    axes = elements.m[(elements.p == 1) & (elements.s < 0)]
    planes = elements.m[(elements.p == 1) & (elements.s > 0)]
    orthorhombic = len(axes) <= 2 and len(planes) <= 2 and len(axes) + len(planes) > 1 and not _has_s4(elements)
    symbols = []
    for m, p, s in zip(elements.m.tolist(), elements.p.tolist(), elements.s.tolist(), strict=True):
        if p == 0:
            symbols.append(rotation_symbol(m, elements.turn, s) + ("(z)" if _d2(elements, m, s) else ""))
            if symbols[-1] == "σh" and orthorhombic and len(axes):
                symbols[-1] = "σ(xy)"
        elif orthorhombic:
            along_x = m % elements.turn == 0
            if s < 0:
                symbols.append("C2(x)" if along_x else "C2(y)")
            elif len(axes):
                symbols.append("σ(xz)" if along_x else "σ(yz)")
            else:
                symbols.append("σv(xz)" if along_x else "σv'(yz)")
        elif s < 0:
            two_sets = _two_sets(axes) or _has_s4(elements)
            symbols.append(("C2'" if not _odd(m, axes) else "C2''") if two_sets else "C2")
        else:
            symbols.append(_plane_symbol(m, planes, axes, has_plane))
    return symbols


def _d2(elements: _Elements, m: int, s: int) -> bool:
    """D2 and D2h write their axes as C2(z), C2(y), C2(x)."""
    axes = elements.m[(elements.p == 1) & (elements.s < 0)]
    return s > 0 and m > 0 and len(axes) == 2 and not _has_s4(elements)


def _has_s4(elements: _Elements) -> bool:
    """The backbone is an improper axis of order 4, 8, 12, ... (Dnd with even n)."""
    turn = elements.turn
    return turn % 4 == 0 and bool(np.any((elements.p == 0) & (elements.s < 0) & (elements.m == 1))) and not bool(
        np.any((elements.p == 0) & (elements.s > 0) & (elements.m == 1)))


def _two_sets(marks: np.ndarray) -> bool:
    """Axes or planes at every step fall into two classes, those with even and those with odd marks."""
    return len(marks) % 2 == 0 and 0 < int((marks % 2).sum()) < len(marks)


def _odd(m: int, marks: np.ndarray) -> bool:
    return _two_sets(marks) and m % 2 == 1


def _plane_symbol(m: int, planes: np.ndarray, axes: np.ndarray, has_plane: bool) -> str:
    if len(axes) and not has_plane:
        return "σd"                                       # Dnd: the planes lie between the twofold axes
    return "σd" if _odd(m, planes) else "σv"


def rotation_symbol(m: int, turn: int, s: int = 1) -> str:
    """Return the symbol of the rotation by m/turn of a full turn, improper where s = -1.

    >>> rotation_symbol(2, 6), rotation_symbol(1, 2, -1), rotation_symbol(3, 10, -1), rotation_symbol(1, 3, -1)
    ('C3', 'i', 'S10^3', 'S3')
    """
    common = gcd(m, turn)
    power, order = m // common, turn // common
    if s > 0:
        return "E" if order == 1 else f"C{order}" + (f"^{power}" if power > 1 else "")
    if order == 1:
        return "σh"
    if order == 2:
        return "i"
    if power % 2 == 0:
        power += order                                    # S_n^k with odd n: only odd powers contain the plane
    return f"S{order}" + (f"^{power}" if power > 1 else "")
