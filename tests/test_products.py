"""Direct products and powers of species: published results, and laws in every group."""

import csv
import re
from itertools import product
from math import comb
from pathlib import Path

import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.groups.products import (
    antisymmetric_square,
    dimension,
    direct_product,
    power_classes,
    product_of,
    symmetric_power,
)

REFERENCE = Path(__file__).parent / "reference" / "overtones_products.csv"
GROUPS = [
    "C1",
    "Cs",
    "Ci",
    "C2v",
    "C3",
    "C4",
    "C5",
    "S4",
    "S6",
    "C3h",
    "C6h",
    "C3v",
    "C4v",
    "C5v",
    "C6v",
    "D2h",
    "D2d",
    "D3d",
    "D3h",
    "D4d",
    "D4h",
    "D5d",
    "D5h",
    "D6h",
    "D7h",
    "T",
    "Td",
    "Th",
    "O",
    "Oh",
    "I",
    "Ih",
]
INFINITE = ["C∞v", "D∞h", "Kh"]


def published():
    with REFERENCE.open(encoding="utf-8") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


def gamma_of(text):
    """Read `A1+2E` into a dictionary."""
    gamma = {}
    for part in re.split(r"\s*\+\s*(?=[\dA-ZΑ-Ω])", text):
        count, label = re.fullmatch(r"(\d*)(\D.*)", part.strip()).groups()
        gamma[label] = int(count or 1)
    return gamma


@pytest.mark.parametrize("row", published(), ids=lambda row: f"{row['point_group']}-{row['kind']}-{row['expression']}")
def test_published_products_and_powers(row):
    group = point_group(row["point_group"])
    if row["kind"] == "product":
        left, right = re.split(r"\s*x\s*", row["expression"])
        found = direct_product(group, left, right)
    else:
        label, power = row["expression"].split("^")
        found = (
            antisymmetric_square(group, label)
            if row["kind"] == "antisym"
            else symmetric_power(group, label, int(power))
        )
    assert found == gamma_of(row["result_published"])
    species = [group.species_named(label) for label in found]
    assert any(s.infrared for s in species) == bool(int(row["has_ir_active"]))
    assert any(s.raman for s in species) == bool(int(row["has_raman_active"]))
    assert any(s.totally_symmetric for s in species) == bool(int(row["has_totally_symmetric"]))


@pytest.mark.parametrize("symbol", GROUPS + INFINITE)
def test_powers_have_the_dimension_of_alike_quanta(symbol):
    """n quanta in d states: C(n + d - 1, n); the antisymmetric square: d(d - 1)/2; both make up the square."""
    group = point_group(symbol)
    for species in group.species:
        d = species.degeneracy
        for n in (0, 1, 2, 3, 4, 7):
            assert dimension(group, symmetric_power(group, species.label, n)) == comb(n + d - 1, n)
        skew = antisymmetric_square(group, species.label)
        assert dimension(group, skew) == d * (d - 1) // 2
        both = symmetric_power(group, species.label, 2)
        for label, count in skew.items():
            both[label] = both.get(label, 0) + count
        assert both == direct_product(group, species.label, species.label)


@pytest.mark.parametrize("symbol", GROUPS + INFINITE)
def test_products_are_commutative_and_associative(symbol):
    group = point_group(symbol)
    labels = list(group.labels)[:7]
    for a, b in product(labels, labels):
        assert direct_product(group, a, b) == direct_product(group, b, a)
    for a, b, c in product(labels[:4], labels[-4:], labels[1:4]):
        assert (
            direct_product(group, direct_product(group, a, b), c)
            == direct_product(group, a, direct_product(group, b, c))
            == product_of(group, [a, b, c])
        )


@pytest.mark.parametrize("symbol", GROUPS)
def test_a_product_with_itself_holds_the_totally_symmetric_species_norm_times(symbol):
    group = point_group(symbol)
    for species in group.species:
        found = direct_product(group, species.label, species.label)
        assert found[group.labels[0]] == species.norm


@pytest.mark.parametrize("symbol", ["C3v", "C5", "D5h", "Td", "Ih"])
def test_powers_agree_with_the_trace_on_polynomials(symbol):
    """The trace of R on the monomials of degree n in the d coordinates, from the eigenvalues of R."""
    group = point_group(symbol)
    for label in group.labels:
        matrices = group.irrep(label)
        eigenvalues = np.linalg.eigvals(matrices[[c.members[0] for c in group.classes]])
        for n in (2, 3, 5):
            series = np.zeros((len(eigenvalues), n + 1), dtype=complex)
            series[:, 0] = 1
            for value in eigenvalues.T:  # multiply by 1/(1 - value t)
                for power in range(1, n + 1):
                    series[:, power] += value * series[:, power - 1]
            rows = dict(zip(group.labels, group.character_rows))
            found = sum(count * rows[name] for name, count in symmetric_power(group, label, n).items())
            np.testing.assert_allclose(found, series[:, n], atol=1e-9)


def test_infinite_groups_agree_with_large_finite_ones():
    """Π of C∞v to the n-th power, followed into C40v: Λ = k becomes E_k as long as k < 20."""
    linear, finite = point_group("Cinfv"), point_group("C40v")
    for n in range(1, 12):
        expected = {
            ("A1" if q == 0 else f"E{q}"): 1 for q in (linear.quantum(x)[0] for x in symmetric_power(linear, "Π", n))
        }
        assert symmetric_power(finite, "E1", n) == dict(
            sorted(expected.items(), key=lambda e: finite.labels.index(e[0]))
        )


def test_spherical_powers_are_the_terms_of_bosons():
    """Two and three quadrupole phonons: 0 2 4 and 0 2 3 4 6 (Bohr & Mottelson, Nuclear Structure II; from memory)."""
    sphere = point_group("Kh")
    assert symmetric_power(sphere, "Dg", 2) == {"Sg": 1, "Dg": 1, "Gg": 1}
    assert symmetric_power(sphere, "Dg", 3) == {"Sg": 1, "Dg": 1, "Fg": 1, "Gg": 1, "Ig": 1}


def test_large_powers_stay_whole():
    assert dimension(point_group("Ih"), symmetric_power(point_group("Ih"), "Hu", 90)) == comb(94, 4)


def test_powers_of_operations():
    group = point_group("D6h")
    assert [group.classes[k].symbol for k in power_classes(group, 2)][:2] == ["E", "2C3"]
    assert np.all(power_classes(group, 6) == 0)


def test_what_cannot_be_multiplied_is_one_line():
    with pytest.raises(VibsymError, match=r"no species 'B1' in Td; it has A1, A2, E, T1, T2"):
        direct_product(point_group("Td"), "B1", "E")
    with pytest.raises(VibsymError, match="-1 quanta"):
        symmetric_power(point_group("Td"), "E", -1)
