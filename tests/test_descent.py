"""Correlation tables: handbooks, typed independently, and laws for every pair of group and subgroup.

Source of the tables: E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), appendix X;
G. Herzberg, Infrared and Raman Spectra (1945), tables 59 and 61 for linear molecules (both from memory).
"""

import json

import numpy as np
import pytest
from click.testing import CliRunner

from vibsym.cli.main import cli
from vibsym.errors import VibsymError
from vibsym.groups.descent import all_embeddings, characters_at, correlation_in_frame, descend_gamma, embeddings
from vibsym.groups.pointgroup import point_group

# group, subgroup, what is kept: species = species of the subgroup, in table order of the group
HANDBOOK = {
    ("C2v", "C2", "C2"): "A A B B",
    ("C2v", "Cs", "σv(xz)"): "A' A'' A' A''",
    ("C2v", "Cs", "σv'(yz)"): "A' A'' A'' A'",
    ("C3v", "C3", "C3"): "A A E",
    ("C3v", "Cs", "σv"): "A' A'' A'+A''",
    ("C4v", "C2v", "C2, σv"): "A1 A2 A1 A2 B1+B2",
    ("C4v", "C2v", "C2, σd"): "A1 A2 A2 A1 B1+B2",
    ("C4v", "C4", "C4"): "A A B B E",
    ("C6v", "C3v", "C3, σv"): "A1 A2 A1 A2 E E",
    ("C6v", "C3v", "C3, σd"): "A1 A2 A2 A1 E E",
    ("C6v", "C2v", "C2, σv"): "A1 A2 B1 B2 B1+B2 A1+A2",
    ("C6v", "C6", "C6"): "A A B B E1 E2",
    ("D3", "C3", "C3"): "A A E",
    ("D3", "C2", "C2"): "A B A+B",
    ("D2d", "D2", "C2, C2'"): "A B1 A B1 B2+B3",
    ("D2d", "C2v", "C2, σd"): "A1 A2 A2 A1 B1+B2",
    ("D2d", "S4", "S4"): "A A B B E",
    ("D3h", "C3v", "C3, σv"): "A1 A2 E A2 A1 E",
    ("D3h", "D3", "C3, C2"): "A1 A2 E A1 A2 E",
    ("D3h", "C3h", "C3, σh"): "A' A' E' A'' A'' E''",
    ("D3h", "C2v", "C2, σh"): "A1 B2 A1+B2 A2 B1 A2+B1",
    ("D3h", "Cs", "σh"): "A' A' 2A' A'' A'' 2A''",
    ("D3h", "Cs", "σv"): "A' A'' A'+A'' A'' A' A'+A''",
    ("D3d", "C3v", "C3, σd"): "A1 A2 E A2 A1 E",
    ("D3d", "D3", "C3, C2"): "A1 A2 E A1 A2 E",
    ("D3d", "S6", "S6"): "Ag Ag Eg Au Au Eu",
    ("D3d", "C2h", "C2, σd"): "Ag Bg Ag+Bg Au Bu Au+Bu",
    ("D4h", "C4v", "C4, σv"): "A1 A2 B1 B2 E A2 A1 B2 B1 E",
    ("D4h", "D2h", "C2, C2'"): "Ag B1g Ag B1g B2g+B3g Au B1u Au B1u B2u+B3u",
    ("D4h", "D2h", "C2, C2''"): "Ag B1g B1g Ag B2g+B3g Au B1u B1u Au B2u+B3u",
    ("D4h", "D2d", "S4, C2'"): "A1 A2 B1 B2 E B1 B2 A1 A2 E",
    ("D4h", "D2d", "S4, C2''"): "A1 A2 B2 B1 E B1 B2 A2 A1 E",
    ("D4h", "C4h", "C4, σh"): "Ag Ag Bg Bg Eg Au Au Bu Bu Eu",
    ("D4h", "D4", "C4, C2'"): "A1 A2 B1 B2 E A1 A2 B1 B2 E",
    ("D4h", "C2v", "C2, σv"): "A1 A2 A1 A2 B1+B2 A2 A1 A2 A1 B1+B2",
    ("D4h", "C2v", "C2', σh"): "A1 B1 A1 B1 A2+B2 A2 B2 A2 B2 A1+B1",
    ("D4h", "C2v", "C2'', σh"): "A1 B1 B1 A1 A2+B2 A2 B2 B2 A2 A1+B1",
    ("D6h", "D3h", "C3, C2'"): "A1' A2' A1'' A2'' E'' E' A1'' A2'' A1' A2' E' E''",
    ("D6h", "D3h", "C3, C2''"): "A1' A2' A2'' A1'' E'' E' A1'' A2'' A2' A1' E' E''",
    ("D6h", "D3d", "S6, C2'"): "A1g A2g A1g A2g Eg Eg A1u A2u A1u A2u Eu Eu",
    ("D6h", "D3d", "S6, C2''"): "A1g A2g A2g A1g Eg Eg A1u A2u A2u A1u Eu Eu",
    ("D6h", "C6v", "C6, σv"): "A1 A2 B2 B1 E1 E2 A2 A1 B1 B2 E1 E2",
    ("D6h", "D2h", "C2, C2'"): "Ag B1g B2g B3g B2g+B3g Ag+B1g Au B1u B2u B3u B2u+B3u Au+B1u",
    ("D6h", "C2v", "C2', σh"): "A1 B1 A2 B2 A2+B2 A1+B1 A2 B2 A1 B1 A1+B1 A2+B2",
    ("D2h", "C2v", "C2(z), σ(xz)"): "A1 A2 B1 B2 A2 A1 B2 B1",
    ("D2h", "C2v", "C2(y), σ(xy)"): "A1 B2 A2 B1 A2 B1 A1 B2",
    ("D2h", "C2v", "C2(x), σ(xy)"): "A1 B1 B2 A2 A2 B2 B1 A1",
    ("D2h", "C2h", "C2(z), σ(xy)"): "Ag Ag Bg Bg Au Au Bu Bu",
    ("Td", "D2d", "S4, C2"): "A1 B1 A1+B1 A2+E B2+E",
    ("Td", "C3v", "C3, σd"): "A1 A2 E A2+E A1+E",
    ("Td", "C2v", "C2, σd"): "A1 A2 A1+A2 A2+B1+B2 A1+B1+B2",
    ("Td", "D2", "C2"): "A A 2A B1+B2+B3 B1+B2+B3",
    ("Td", "Cs", "σd"): "A' A'' A'+A'' A'+2A'' 2A'+A''",
    ("Td", "S4", "S4"): "A B A+B A+E B+E",
    ("Td", "T", "C3, C2"): "A A E T T",
    ("Oh", "O", "C3, C4"): "A1 A2 E T1 T2 A1 A2 E T1 T2",
    ("Oh", "Td", "C3, S4"): "A1 A2 E T1 T2 A2 A1 E T2 T1",
    ("Oh", "Th", "C3, σh"): "Ag Ag Eg Tg Tg Au Au Eu Tu Tu",
    ("Oh", "D4h", "C4, C2"): "A1g B1g A1g+B1g A2g+Eg B2g+Eg A1u B1u A1u+B1u A2u+Eu B2u+Eu",
    ("Oh", "C4v", "C4, σh"): "A1 B1 A1+B1 A2+E B2+E A2 B2 A2+B2 A1+E B1+E",
    ("Oh", "D3d", "S6, C2'"): "A1g A2g Eg A2g+Eg A1g+Eg A1u A2u Eu A2u+Eu A1u+Eu",
    ("Oh", "C2v", "C2, σh"): "A1 A1 2A1 A2+B1+B2 A2+B1+B2 A2 A2 2A2 A1+B1+B2 A1+B1+B2",
    ("Oh", "C3v", "C3, σd"): "A1 A2 E A2+E A1+E A2 A1 E A1+E A2+E",
    ("O", "D4", "C4, C2"): "A1 B1 A1+B1 A2+E B2+E",
    ("O", "D3", "C3, C2'"): "A1 A2 E A2+E A1+E",
    ("Ih", "Th", "C3, σ"): "Ag Tg Tg Ag+Tg Eg+Tg Au Tu Tu Au+Tu Eu+Tu",
    ("Ih", "D5d", "S10, C2"): "A1g A2g+E1g A2g+E2g E1g+E2g A1g+E1g+E2g A1u A2u+E1u A2u+E2u E1u+E2u A1u+E1u+E2u",
    ("Ih", "D3d", "S6, C2"): "A1g A2g+Eg A2g+Eg A1g+A2g+Eg A1g+2Eg A1u A2u+Eu A2u+Eu A1u+A2u+Eu A1u+2Eu",
    ("C∞v", "C2v", "C2, σv"): "A1 A2 B1+B2 A1+A2 B1+B2",
    ("C∞v", "C3v", "C3, σv"): "A1 A2 E E A1+A2",
    ("D∞h", "D4h", "C4, C2'"): "A1g A2g Eg B1g+B2g Eg A2u A1u Eu B1u+B2u Eu",
    ("D∞h", "D3h", "C3, C2'"): "A1' A2' E'' E' A1''+A2'' A2'' A1'' E' E'' A1'+A2'",
    ("D∞h", "C∞v", "C∞, σv"): "Σ+ Σ- Π Δ Φ Σ+ Σ- Π Δ Φ",
    ("D∞h", "D2h", "C2, C2'"): "Ag B1g B2g+B3g Ag+B1g B2g+B3g B1u Au B2u+B3u Au+B1u B2u+B3u",
}


def gamma_of(text):
    gamma = {}
    for part in text.split("+") if "Σ+" not in text else [text]:
        count = part[0] if part[0].isdigit() else "1"
        gamma[part.lstrip("0123456789")] = int(count)
    return gamma


@pytest.mark.parametrize("key", HANDBOOK, ids=lambda key: f"{key[0]}-{key[1]}-{key[2]}")
def test_handbook_tables(key):
    group = point_group(key[0])
    found = {each.keeps: each for each in embeddings(group, key[1])}[key[2]]
    assert found.correlation == dict(zip(group.labels, map(gamma_of, HANDBOOK[key].split()), strict=True))


ALL = [
    "C2v",
    "C3v",
    "C4v",
    "C6v",
    "C4h",
    "C6h",
    "D2",
    "D3",
    "D4",
    "D6",
    "D2h",
    "D3h",
    "D4h",
    "D5h",
    "D6h",
    "D8h",
    "D2d",
    "D3d",
    "D4d",
    "D5d",
    "D6d",
    "S8",
    "S12",
    "C7h",
    "T",
    "Td",
    "Th",
    "O",
    "Oh",
    "I",
    "Ih",
]


@pytest.mark.parametrize("symbol", ALL)
def test_laws_of_every_embedding(symbol):
    """Dimensions are kept; Frobenius: ⟨χ restricted, ψ⟩ in the subgroup = ⟨χ, ψ induced⟩ in the group.

    Both inner products are multiplicity × ⟨χ, χ⟩ (2 for a conjugate pair); ψ induced (R) = (1/h) Σ_g ψ(g R g⁻¹) over
    those g R g⁻¹ that lie in the subgroup, h its order.
    """
    group = point_group(symbol)
    for each in all_embeddings(group):
        below = each.group
        rows = dict(zip(below.labels, below.character_rows))
        places = _places(each)
        psi = np.zeros((len(below.labels), group.order))
        psi[:, places] = below.character_rows[:, below.class_of]
        conjugate = group.product[group.product[:, [c.members[0] for c in group.classes]].T, group.inverse[None, :]]
        induced = psi[:, conjugate].sum(axis=2) / below.order  # (species below, classes)
        inner = group.character_rows @ (group.class_sizes[:, None] * induced.T) / group.order
        for row, label in zip(inner, group.labels):
            gamma = each.correlation[label]
            degeneracy = group.species_named(label).degeneracy
            assert sum(n * below.species_named(name).degeneracy for name, n in gamma.items()) == degeneracy
            assert row == pytest.approx([gamma.get(name, 0) * norm for name, norm in zip(below.labels, below.norms)])
        assert each.correlation[group.labels[0]] == {below.labels[0]: 1}
        assert all(len(row) == len(below.classes) for row in rows.values())


def _places(each):
    turned = np.einsum("ba,cbd,de->cae", each.frame, each.group.matrices, each.frame).reshape(-1, 1, 9)
    return np.abs(turned - each.parent.matrices.reshape(1, -1, 9)).max(axis=2).argmin(axis=1)


@pytest.mark.parametrize(
    ("upper", "middle", "lower"),
    [
        ("Oh", "D4h", "D2h"),
        ("Ih", "Th", "C3"),
        ("D∞h", "D6h", "C6"),
        ("D6h", "C6v", "C2"),
        ("Kh", "Ih", "C5"),
        ("Td", "D2d", "S4"),
    ],
)
def test_descent_in_two_steps_is_descent_in_one(upper, middle, lower):
    """Where the lowest group keeps one axis only, any two ways down give the same species."""
    first, second = embeddings(point_group(upper), middle)[0], embeddings(point_group(middle), lower)[0]
    whole = [each.correlation for each in embeddings(point_group(upper), lower)]
    chain = {
        label: descend_gamma(gamma, second.correlation, second.group) for label, gamma in first.correlation.items()
    }
    assert chain in whole or lower == "D2h"


def test_characters_of_linear_molecules_are_homomorphic_traces():
    """The matrices of Π are those of x, y; of Δ those of x² - y², xy: the traces agree."""
    group, finite = point_group("Dinfh"), point_group("D7h")
    x = finite.matrices
    np.testing.assert_allclose(characters_at(group, "Πu", x), x[:, 0, 0] + x[:, 1, 1], atol=1e-12)
    np.testing.assert_allclose(characters_at(group, "Σu+", x), x[:, 2, 2], atol=1e-12)
    plane = x[:, :2, :2]
    square = np.trace(plane, axis1=1, axis2=2) ** 2 - np.linalg.det(plane) - np.linalg.det(plane) ** 2
    np.testing.assert_allclose(characters_at(group, "Δg", x), square, atol=1e-12)


def test_number_and_names_of_embeddings():
    def names(group, to):
        return [each.name for each in embeddings(point_group(group), to)]

    assert names("D4h", "C2v") == ["C2v (C2, σv)", "C2v (C2, σd)", "C2v (C2', σh)", "C2v (C2'', σh)"]
    assert names("D3h", "Cs") == ["Cs (σh)", "Cs (σv)"]
    assert len(names("Oh", "C2v")) == 3 and len(names("Oh", "D2h")) == 2 and len(names("D∞h", "C2v")) == 2
    for group in ("Oh", "Ih", "D6h", "D12h", "D∞h"):
        every = [each.name for each in all_embeddings(point_group(group))]
        assert len(set(every)) == len(every)


def test_other_axes_exchange_labels():
    each = embeddings(point_group("D4h"), "C2v")[2]
    assert each.exchange == ("B1 <-> B2",)
    assert embeddings(point_group("D4h"), "C2v")[0].exchange == ()  # B1 + B2 stay together


@pytest.mark.parametrize(
    ("group", "to"), [("C3v", "D3h"), ("Td", "C4v"), ("Dinfh", "Td"), ("Cinfv", "Ci"), ("D4h", "C3")]
)
def test_a_subgroup_that_is_none_is_one_line(group, to):
    with pytest.raises(VibsymError, match="is not a subgroup of"):
        embeddings(point_group(group), to)
    with pytest.raises(VibsymError, match="not"):
        correlation_in_frame(point_group("C3v"), point_group("C4"), np.eye(3))


def run(*arguments):
    return CliRunner().invoke(cli, ["descend", *arguments])


def test_command_json():
    answer = json.loads(run("Td", "C3v", "--format", "json").output)
    assert answer["from"] == "Td" and answer["to"] == "C3v"
    assert answer["embeddings"][0]["correlation"]["T2"] == {"A1": 1, "E": 1}
    listed = json.loads(run("Oh", "--format", "json").output)["subgroups"]
    assert len(listed) == 33
    assert {"symbol": "D4h", "keeps": "C4, C2", "order": 16, "conjugates": 3} in listed


def test_command_formats_and_errors():
    assert "C₂v (C₂′, σh), 2 of them equivalent" in run("D4h", "C2v").output
    assert "| A₁g | A₁ |" in run("D4h", "C2v", "--format", "markdown").output
    rows = run("D4h", "C2v", "--format", "csv").output.splitlines()
    assert len(rows) == 1 + 4 * 10 and rows[0].startswith("from,to,keeps,species")
    done = run("Td", "C5v")
    assert done.exit_code == 1 and done.output.count("\n") == 1 and "not a subgroup" in done.output
    assert run("Td", "Q7").exit_code == 1


def test_other_axes_in_a_subgroup_of_a_linear_molecule():
    """C2v whose axis lies across the line: which plane is σ(xz) exchanges B1 and B2."""
    upright, across = embeddings(point_group("Dinfh"), "C2v")
    assert upright.exchange == () and across.exchange == ("B1 <-> B2",)


def test_normal_subgroups_of_the_sphere():
    """No rotation moves {E} and {E, i}; every other class of finite subgroups of Kh has members without end."""
    counts = {each.group.symbol: each.conjugates for each in all_embeddings(point_group("Kh"))}
    assert counts["C1"] == counts["Ci"] == 1 and counts["Cs"] is None and counts["Oh"] is None
