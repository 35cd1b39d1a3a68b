"""Classes of conjugate subgroups: all of them, with the right names, in the groups that handbooks list."""

from collections import Counter

import numpy as np
import pytest

from vibsym.groups.conjugacy import subgroup_classes
from vibsym.groups.descent import all_embeddings
from vibsym.groups.pointgroup import point_group
from vibsym.groups.subgroups import identify

# The 33 classes of subgroups of Oh: International Tables for Crystallography, vol. A, fig. 3.2.1.3 lists the 25 groups
# that are subgroups of m-3m; those with two or three places counted here (from memory). Of Ih there are 22.
OH = Counter(
    {
        "Oh": 1,
        "O": 1,
        "Td": 1,
        "Th": 1,
        "T": 1,
        "D4h": 1,
        "D4": 1,
        "D2d": 2,
        "C4v": 1,
        "C4h": 1,
        "C4": 1,
        "S4": 1,
        "D3d": 1,
        "D3": 1,
        "C3v": 1,
        "S6": 1,
        "C3": 1,
        "D2h": 2,
        "D2": 2,
        "C2v": 3,
        "C2h": 2,
        "C2": 2,
        "Cs": 2,
        "Ci": 1,
        "C1": 1,
    }
)
IH = Counter(
    [
        "Ih",
        "I",
        "Th",
        "T",
        "D5d",
        "D5",
        "C5v",
        "S10",
        "C5",
        "D3d",
        "D3",
        "C3v",
        "S6",
        "C3",
        "D2h",
        "D2",
        "C2v",
        "C2h",
        "C2",
        "Cs",
        "Ci",
        "C1",
    ]
)


@pytest.mark.parametrize(("symbol", "expected"), [("Oh", OH), ("Ih", IH)])
def test_all_classes_of_the_highest_groups(symbol, expected):
    assert Counter(each.group.symbol for each in all_embeddings(point_group(symbol))) == expected
    assert sum(expected.values()) == {"Oh": 33, "Ih": 22}[symbol]


@pytest.mark.parametrize(
    ("symbol", "classes"),
    [
        ("C1", 1),
        ("Cs", 2),
        ("C2v", 5),
        ("C3v", 4),
        ("D2", 5),
        ("Td", 11),
        ("O", 11),
        ("T", 5),
        ("I", 9),
        ("D3h", 10),
        ("D2h", 16),
    ],
)
def test_number_of_classes(symbol, classes):
    """Abstract groups of the textbooks: C3v is S3 (4 classes), Td and O are S4 (11), T is A4 (5), I is A5 (9)."""
    assert len(subgroup_classes(point_group(symbol))) == classes


@pytest.mark.parametrize("symbol", ["Oh", "Ih", "D4h", "D6h", "D12h", "D5d", "S12", "C6h", "Th"])
def test_subgroups_are_groups_and_classes_do_not_overlap(symbol):
    group = point_group(symbol)
    seen = set()
    for each in subgroup_classes(group):
        inside = np.array(each.operations)
        assert set(group.product[np.ix_(inside, inside)].ravel().tolist()) == set(each.operations)
        assert group.order % each.order == 0
        conjugates = {
            frozenset(group.product[group.product[g, inside], group.inverse[g]].tolist()) for g in range(group.order)
        }
        assert len(conjugates) == each.conjugates
        assert not conjugates & seen
        seen |= conjugates


def test_dihedral_groups_have_as_many_subgroups_as_theory_says():
    """D_n has d(n) cyclic and σ(n) dihedral subgroups (number and sum of the divisors of n)."""
    for n in range(3, 31):
        divisors = [k for k in range(1, n + 1) if n % k == 0]
        assert sum(each.conjugates for each in subgroup_classes(point_group(f"D{n}"))) == len(divisors) + sum(divisors)


@pytest.mark.parametrize("symbol", ["Oh", "D6h", "D4d"])
def test_every_cyclic_group_of_an_operation_is_there(symbol):
    group = point_group(symbol)
    names = {each.group.symbol for each in all_embeddings(group)}
    for k in range(group.order):
        powers, current = [k], group.product[k, k]
        while current != k:
            powers.append(int(current))
            current = group.product[current, k]
        assert identify(group.matrices[sorted(set(powers))])[0] in names


def test_conjugates_that_print_tells():
    """Oh holds 3 D4h, 4 D3d; Td 4 C3v, 3 D2d (one for each axis)."""
    found = {each.name: each.conjugates for each in all_embeddings(point_group("Oh"))}
    assert found["D4h (C4, C2)"] == 3 and found["D3d (S6, C2')"] == 4
    found = {each.group.symbol: each.conjugates for each in all_embeddings(point_group("Td"))}
    assert found["C3v"] == 4 and found["D2d"] == 3


@pytest.mark.parametrize(("symbol", "count"), [("C60v", 32), ("C120v", 44), ("D7", 4)])
def test_subgroups_of_dihedral_groups_by_number_theory(symbol, count):
    """Cnv and Dn: a cyclic class for each divisor d of n, and dihedral ones: two where n/d is even, else one."""
    order = point_group(symbol).order // 2
    divisors = [d for d in range(1, order + 1) if order % d == 0]
    assert count == len(divisors) + sum(1 if order // d % 2 else 2 for d in divisors)
    assert len(subgroup_classes(point_group(symbol))) == count
