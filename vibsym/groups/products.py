"""Direct products and powers of species: what overtones and combination levels are made of.

The direct product has the product of the characters.  A level with n quanta in a degenerate vibration spans only the
*symmetric* n-th power (the quanta are alike), whose characters h_n follow from those of the powers of an operation,
p_k(R) = χ(R^k), by the generating function Σ h_n t^n = 1/det(1 - tR) and det(1 - tR) = 1 - e_1 t + e_2 t² - ... :

    k e_k = Σ_{i=1..k} (-1)^(i-1) e_{k-i} p_i            h_n = Σ_{k=1..d} (-1)^(k-1) e_k h_{n-k}

For a twofold species this is χ_n(R) = ½[χ(R) χ_{n-1}(R) + χ(R^n)] of the textbooks (L. Tisza, Z. Phys. 82, 48 (1933);
E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, ch. 7).  e_2 is the antisymmetric square.  A
conjugate pair is its real two-dimensional species throughout.  C∞v, D∞h and Kh go by quantum numbers, without rounding.
"""

from collections import Counter
from collections.abc import Iterable, Mapping
from functools import cache

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import PointGroup, point_group
from vibsym.groups.reduction import reduce

Gamma = dict[str, int]


def direct_product(group, left: "str | Mapping[str, int]", right: "str | Mapping[str, int]") -> Gamma:
    """Return the direct product of two species (or representations), reduced, labels in table order.

    >>> direct_product(point_group("Td"), "E", "T2"), direct_product(point_group("Cinfv"), "Π", "Π")
    ({'T1': 1, 'T2': 1}, {'Σ+': 1, 'Σ-': 1, 'Δ': 1})
    """
    total: Counter = Counter()
    for a, m in _gamma(group, left).items():
        for b, n in _gamma(group, right).items():
            for label, count in _product(group.symbol, a, b):
                total[label] += m * n * count
    return ordered(group, total)


def product_of(group, factors: Iterable["str | Mapping[str, int]"]) -> Gamma:
    """Return the direct product of any number of species or representations; of none, the totally symmetric species."""
    result = {totally_symmetric(group): 1}
    for factor in factors:
        result = direct_product(group, result, factor)
    return result


def symmetric_power(group, label: str, quanta: int) -> Gamma:
    """Return the species of a level with `quanta` quanta in one vibration of a species: [Γ^n].

    >>> symmetric_power(point_group("Td"), "T2", 2), symmetric_power(point_group("Dinfh"), "Πu", 3)
    ({'A1': 1, 'E': 1, 'T2': 1}, {'Πu': 1, 'Φu': 1})
    """
    if quanta < 0:
        raise VibsymError(f"{quanta} quanta: a vibration holds none or more")
    return dict(_symmetric_power(group.symbol, group.species_named(label).label, quanta))


def antisymmetric_square(group, label: str) -> Gamma:
    """Return the antisymmetric square {Γ²} of a species; of a one-dimensional one it is empty.

    >>> antisymmetric_square(point_group("Td"), "T2"), antisymmetric_square(point_group("C3"), "E")
    ({'T1': 1}, {'A': 1})
    """
    return dict(_antisymmetric_square(group.symbol, group.species_named(label).label))


def totally_symmetric(group) -> str:
    """Return the label of the totally symmetric species."""
    return group.species[0].label


def dimension(group, gamma: Mapping[str, int]) -> int:
    """Return the dimension of a representation."""
    return sum(n * group.species_named(label).degeneracy for label, n in gamma.items())


def ordered(group, gamma: Mapping[str, int]) -> Gamma:
    """Return a representation in table order without the species that do not occur."""
    if not group.infinite:
        return {label: int(gamma[label]) for label in group.labels if gamma.get(label)}
    return {label: int(gamma[label]) for label in sorted(gamma, key=lambda label: _place(group, label)) if gamma[label]}


def power_classes(group: PointGroup, power: int) -> np.ndarray:
    """Return the class of R^power for a member R of each class, (c,)."""
    first = np.array([c.members[0] for c in group.classes])
    current = np.zeros_like(first)
    for _ in range(power):
        current = group.product[current, first]
    return group.class_of[current]


def _gamma(group, factor) -> Mapping[str, int]:
    if isinstance(factor, str):
        return {group.species_named(factor).label: 1}
    return {group.species_named(label).label: n for label, n in factor.items()}


@cache
def _product(symbol: str, a: str, b: str) -> tuple[tuple[str, int], ...]:
    group = point_group(symbol)
    if not group.infinite:
        rows = group.character_rows
        product = rows[group.labels.index(a)] * rows[group.labels.index(b)]
        return tuple(reduce(product, group).items())
    (k, parity_a, sign_a), (m, parity_b, sign_b) = group.quantum(a), group.quantum(b)
    parity = _parity(parity_a, parity_b)
    if symbol == "Kh":
        return tuple((group.label(n, parity), 1) for n in range(abs(k - m), k + m + 1))
    if k == 0 or m == 0:
        sign = "+" if sign_a == sign_b else "-"
        return ((group.label(k + m, parity, sign), 1),)
    low = [group.label(0, parity, "+"), group.label(0, parity, "-")] if k == m else [group.label(abs(k - m), parity)]
    return tuple((label, 1) for label in [*low, group.label(k + m, parity)])


@cache
def _symmetric_power(symbol: str, label: str, quanta: int) -> tuple[tuple[str, int], ...]:
    group = point_group(symbol)
    if not group.infinite:
        return tuple(reduce(_power_characters(group, label, quanta), group).items())
    k, parity, sign = group.quantum(label)
    parity = "u" if parity == "u" and quanta % 2 else parity and "g"
    if symbol == "Kh":
        return _from_projections(group, _ways(2 * k + 1, quanta), k * quanta, parity)
    if k == 0:
        return ((group.label(0, parity, "-" if sign == "-" and quanta % 2 else "+"), 1),)
    # n quanta in a twofold vibration: l = n, n - 2, ..., 0 or 1 (Herzberg 1945, II,6); l = 0 is Σ+
    return tuple((group.label(k * l, parity, "+"), 1) for l in range(quanta % 2, quanta + 1, 2))


@cache
def _antisymmetric_square(symbol: str, label: str) -> tuple[tuple[str, int], ...]:
    group = point_group(symbol)
    if not group.infinite:
        return tuple(reduce(_elementary(group, label)[2], group).items())
    k, parity, _ = group.quantum(label)
    if symbol == "Kh":                                    # the odd half of L = 0 ... 2l
        return tuple((group.label(n, "g"), 1) for n in range(1, 2 * k, 2))
    return ((group.label(0, parity and "g", "-"), 1),) if k else ()


def _elementary(group: PointGroup, label: str) -> list[np.ndarray]:
    """Characters e_0, e_1, ... e_d of the antisymmetric powers (always up to e_2), by Newton's identities."""
    chi = group.character_rows[group.labels.index(label)]
    degree = max(2, round(chi[0]))
    powers = [chi[power_classes(group, k)] for k in range(degree + 1)]
    elementary = [np.ones_like(chi)]
    for k in range(1, degree + 1):
        elementary.append(sum((-1) ** (i - 1) * elementary[k - i] * powers[i] for i in range(1, k + 1)) / k)
    return elementary


def _power_characters(group: PointGroup, label: str, quanta: int) -> np.ndarray:
    elementary = _elementary(group, label)
    levels = [elementary[0]]
    for n in range(1, quanta + 1):
        terms = range(1, min(n, len(elementary) - 1) + 1)
        levels.append(sum((-1) ** (k - 1) * elementary[k] * levels[n - k] for k in terms))
    return levels[quanta]


def _ways(states: int, quanta: int) -> list[int]:
    """In how many ways alike quanta in states of heights 0, 1, ... add up to each height (Gaussian binomial)."""
    table = [[1]] + [[] for _ in range(quanta)]
    for height in range(states):
        for n in range(1, quanta + 1):                    # one more quantum in this state, in place
            below = table[n - 1]
            row = table[n] + [0] * max(0, len(below) + height - len(table[n]))
            for place, count in enumerate(below):
                row[place + height] += count
            table[n] = row
    return table[quanta]


def _from_projections(group, ways: list[int], highest: int, parity: str) -> tuple[tuple[str, int], ...]:
    """Multiplicity of L: states with M = L less those with M = L + 1."""
    by_m = [*ways[highest:], 0]
    counts = [(group.label(l, parity), by_m[l] - by_m[l + 1]) for l in range(highest + 1)]
    return tuple((label, count) for label, count in counts if count)


def _parity(a: str, b: str) -> str:
    return "" if not a else "g" if a == b else "u"


def _place(group, label: str) -> tuple:
    """Table order of an infinite group: g before u, then by quantum number, Σ+ before Σ-."""
    quantum, parity, sign = group.quantum(label)
    return parity, quantum, sign
