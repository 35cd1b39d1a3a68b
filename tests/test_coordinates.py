"""Symmetry coordinates with exact coefficients: exact equals float, orthonormal, as printed, as JSON and CSV."""

import csv
import io
import json
import re
from pathlib import Path

import internal_cases as cases
import numpy as np
import pytest
import sympy
from click.testing import CliRunner

from vibsym.cli.main import cli
from vibsym.report import coordinates as view
from vibsym.report import render
from vibsym.report.combination import combination_text
from vibsym.structures.finder import find_symmetry
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.vibrations.representation import coordinate_basis
from vibsym.vibrations.symmetry_coordinates import Term, symmetry_coordinates

ROOT = Path(__file__).parent.parent
SAMPLES = ROOT / "samples"
SHOWN = ("H2O", "CH4", "SO3", "SF6", "XeF4", "C2H4", "CO2", "C2H2", "C3H4", "CH3Cl", "C2H6", "P4", "Fe(CO)5", "S8",
         "C6H12", "B(OH)3, C3h", "P(OH)3, C3", "Si(OH)4, S4", "Al(OH2)6, Th", "IF7, D5h", "MoF8 antiprism, D4d",
         "B12H12, Ih", "twisted ferrocene, D5", "twisted neopentane, T", "Mn2(CO)10")


@pytest.mark.parametrize("name", SHOWN)
def test_exact_coefficients(name):
    """Every exact coefficient is its float to 1e-12; rows are orthonormal and as many as there are coordinates."""
    found = symmetry_coordinates(cases.symmetry(name))
    ids = [one for each in found.sets for one in each.ids]
    rows = np.zeros((len(found.combinations), len(ids)))
    values = {}
    for row, combination in zip(rows, found.combinations):
        for term in combination.terms:
            if term.exact not in values:
                values[term.exact] = float(sympy.N(term.exact, 20))
            assert abs(values[term.exact] - term.value) < 1e-12
            row[ids.index(term.coordinate)] = term.value
    assert rows.shape[0] == rows.shape[1]
    assert np.abs(rows @ rows.T - np.eye(len(rows))).max() < 1e-11


@pytest.mark.parametrize("name", SHOWN)
def test_partners_transform_as_the_species_say(name):
    """R S_i = Σ_j D_ji(R) S_j for the irreducible matrices of the group: alike in every set."""
    found = symmetry_coordinates(cases.symmetry(name))
    group = found.symmetry.group.image
    shown = {text: label for label, text in found.symmetry.group.image_labels.items()}
    for each in found.sets:
        basis, ids = coordinate_basis(found.symmetry, each), each.ids
        copies = {}
        for combination in found.combinations:
            if combination.set == each.name:
                row = np.zeros(len(ids))
                for term in combination.terms:
                    row[ids.index(term.coordinate)] = term.value
                copies.setdefault((combination.species, combination.copy), []).append(row)
        for operation in range(0, group.order, max(1, group.order // 12)):
            moved = basis.matrix(operation)
            for (species, _), vectors in copies.items():
                stacked = np.array(vectors)
                irrep = group.irrep(shown.get(species, species))[operation]
                assert np.abs(stacked @ moved.T - irrep.T @ stacked).max() < 1e-10


def test_json_is_the_contract():
    """The example of the contract: XeF4, stretch Xe-F, Eu component 1; redundancies A1g, nothing missing."""
    answer = json.loads(render([symmetry_coordinates(cases.symmetry("XeF4"))], view, "json"))
    assert list(answer)[:4] == ["structure", "point_group", "sets", "symmetry_coordinates"]
    stretch = answer["sets"][0]
    assert stretch["name"] == "stretch Xe-F" and stretch["kind"] == "stretch"
    assert stretch["coordinates"][0] == {"id": "r1", "atoms": [1, 2]}
    assert stretch["orbits"] == [["r1", "r2", "r3", "r4"]] and stretch["gamma"] == {"A1g": 1, "B1g": 1, "Eu": 1}
    assert answer["redundancies"] == {"A1g": 1} and answer["missing"] == {}
    eu = [each for each in answer["symmetry_coordinates"] if each["species"] == "Eu" and each["set"] == "stretch Xe-F"]
    assert [each["component"] for each in eu] == [1, 2]
    assert [term["exact"] for term in eu[0]["terms"]] in (["sqrt(2)/2", "-sqrt(2)/2"], ["-sqrt(2)/2", "sqrt(2)/2"])
    for each in answer["symmetry_coordinates"]:
        for term in each["terms"]:
            assert abs(float(sympy.sympify(term["exact"])) - term["value"]) < 1e-12


def test_linear_bends_have_two_components_with_directions():
    answer = symmetry_coordinates(cases.symmetry("CO2")).to_dict()
    bend = next(each for each in answer["sets"] if each["kind"] == "linear bend")
    assert [one["id"] for one in bend["coordinates"]] == ["l1a", "l1b"]
    assert [one["direction"] for one in bend["coordinates"]] in ([[1, 0, 0], [0, 1, 0]], [[1, 0, 0], [0, -1, 0]])
    assert bend["gamma"] == {"Πu": 1}


@pytest.mark.parametrize("group, gamma", [("C3", {"A": 12, "E": 12}), ("S4", {"A": 18, "B": 18, "E": 15})])
def test_many_copies_of_a_conjugate_pair_in_one_set(group, gamma):
    """UF9 (C3) and UF12 (S4) of general shape: 36 and 66 angles; orthonormal against both components of earlier
    copies."""
    places = [(2.0, 0.1, 0.3), (-1.0, 1.1, 1.5), (0.6, 1.2, -1.6)]
    symbols, positions = cases.atoms(("U", (0, 0, 0)), *(("F", cases.images(group, place)) for place in places))
    symmetry = find_symmetry(Structure.from_atoms(symbols, positions))
    assert symmetry.group.symbol == group
    found = symmetry_coordinates(symmetry, ["bend F-U-F"])
    assert found.independence.gammas == (gamma,)
    (each,) = found.sets
    rows = np.zeros((len(found.combinations), len(each)))
    for row, combination in zip(rows, found.combinations):
        for term in combination.terms:
            row[each.ids.index(term.coordinate)] = term.value
            assert abs(float(term.exact) - term.value) < 1e-12
    assert np.abs(rows @ rows.T - np.eye(len(each))).max() < 1e-11


def test_sixty_atoms_exactly():
    """The 90 stretches of C60 (2Ag + T1g + T2g + 3Gg + 5Hg + 3T1u + 3T2u + 3Gu + 3Hu), golden ratios in exact form."""
    found = symmetry_coordinates(find_symmetry(read(SAMPLES / "soot-c60.xyz")), ["stretch C-C"])
    assert found.independence.gammas[0] == {"Ag": 2, "T1g": 1, "T2g": 1, "Gg": 3, "Hg": 5, "T1u": 3, "T2u": 3, "Gu": 3,
                                            "Hu": 3}
    assert len(found.combinations) == 90
    distinct = {term.exact: term.value for each in found.combinations for term in each.terms}
    assert all(abs(float(sympy.N(exact, 20)) - value) < 1e-12 for exact, value in distinct.items())
    assert any(exact.has(sympy.sqrt(5)) for exact in distinct)


@pytest.mark.parametrize("values, text", [
    ([2, -1, -1, 2, -1, -1], "1/(2√3) (2 r1 − r2 − r3 + 2 r4 − r5 − r6)"), ([1, 1], "1/√2 (r1 + r2)"),
    ([1, -1, 1, -1], "1/2 (r1 − r2 + r3 − r4)"), ([1], "r1"), ([-1], "−r1"), ([-1, 1, 1], "1/√3 (−r1 + r2 + r3)"),
    ([3, -1, -1, -1], "1/(2√3) (3 r1 − r2 − r3 − r4)"),
], ids=lambda value: value if isinstance(value, str) else "")
def test_combinations_as_printed(values, text):
    length = sum(value * value for value in values) ** 0.5
    terms = [Term(f"r{k}", sympy.Integer(value) / sympy.sqrt(sum(v * v for v in values)), value / length)
             for k, value in enumerate(values, 1)]
    assert combination_text(terms) == text


def value_of(text, ids, chosen):
    """Return what a printed combination is when the coordinate `chosen` is 1 and the others are 0."""
    text = text.replace("−", "-").replace("·", "*").replace("π", "pi")
    text = re.sub(r"(?<=\d)(?=√|pi)", "*", re.sub(r"(?<=[\w)]) (?=[\w(])", "*", text))
    text = re.sub(r"√(\d+)", r"sqrt(\1)", text).replace("√", "sqrt")
    names = {name: float(name == chosen) for name in ids}
    return eval(text, {"sqrt": np.sqrt, "cos": np.cos, "pi": np.pi, "__builtins__": {}}, names)


@pytest.mark.parametrize("name", SHOWN)
def test_printed_combinations_are_the_coefficients(name):
    """What stands on the page, read back as arithmetic, gives every coefficient; no decimals stand there."""
    for combination in symmetry_coordinates(cases.symmetry(name)).combinations:
        text, ids = combination_text(combination.terms), [term.coordinate for term in combination.terms]
        assert "." not in text
        for term in combination.terms[:12]:
            assert abs(value_of(text, ids, term.coordinate) - term.value) < 1e-11, text


def test_fivefold_axes_are_printed_with_cosines():
    found = symmetry_coordinates(cases.symmetry("IF7, D5h"), ["stretch"])
    assert "√2/√5 (r1 + cos(2π/5) (r2 + r5) − cos(π/5) (r3 + r4))" in render([found], view)


def run(*arguments):
    return CliRunner().invoke(cli, ["coordinates", *map(str, arguments)])


def test_command_page_and_csv():
    result = run(SAMPLES / "cylinder-bf3.xyz")
    assert result.exit_code == 0
    for line in ("7 internal coordinates: redundant A₁′; complete", "1/√6 (2 r1 − r2 − r3)",
                 "· A₁′: the 3 angles at B1: their sum is constant"):
        assert line in result.output
    result = run(SAMPLES / "cylinder-bf3.xyz", "--select", "stretch B-F", "--format", "csv")
    rows = list(csv.DictReader(io.StringIO(result.output)))
    assert len(rows) == 3 + 3 + 2 and {row["set"] for row in rows} == {"stretch B-F"}
    assert rows[0]["exact"] == "sqrt(3)/3" and abs(float(rows[0]["value"]) - 3**-0.5) < 1e-15
    assert run(SAMPLES / "cylinder-bf3.xyz", "--format", "markdown").output.startswith("## BF₃")


def test_command_restricts_to_atoms():
    result = run(SAMPLES / "stabiliser-dimethoxybenzene.xyz", "--select", "stretch C-O", "--format", "json")
    every = json.loads(result.output)["sets"][0]["coordinates"]
    atoms = ",".join(str(atom) for one in every[:1] for atom in one["atoms"])
    alone = run(SAMPLES / "stabiliser-dimethoxybenzene.xyz", "--select", "stretch C-O", "--atoms", atoms)
    assert alone.exit_code == 1 and "choose all equivalent atoms" in alone.output
    atoms = ",".join(str(atom) for one in every for atom in one["atoms"])
    assert run(SAMPLES / "stabiliser-dimethoxybenzene.xyz", "--select", "stretch C-O", "--atoms", atoms).exit_code == 0


@pytest.mark.parametrize("arguments, message", [
    (("--select", "stretch C-Q"), "no coordinates 'stretch C-Q'; the sets are stretch B-F, bend F-B-F, wag BF3"),
    (("--select", "torsion"), "no coordinates 'torsion'"),
    (("--select", ""), "no coordinates ''"),
    (("--atoms", "9"), "atoms '9': there is no atom 9; there are atoms 1 to 4"),
    (("--atoms", "1,x"), "atoms '1,x': 'x' is not an atom number"),
    (("--atoms", "2,3"), "no internal coordinates among the atoms 2,3"),
], ids=lambda value: " ".join(value) if isinstance(value, tuple) else "")
def test_what_is_refused(arguments, message):
    result = run(SAMPLES / "cylinder-bf3.xyz", *arguments)
    lines = [line for line in result.output.splitlines() if line]
    assert result.exit_code == 1 and len(lines) == 1 and message in lines[0], result.output


def test_no_bonds_and_one_atom():
    result = run(SAMPLES / "cylinder-argon.xyz")
    assert result.exit_code == 0 and "No bonds, so there are no internal coordinates" in result.output
    assert json.loads(run(SAMPLES / "cylinder-argon.xyz", "--format", "json").output)["sets"] == []
    assert run(SAMPLES / "cylinder-argon.xyz", "--format", "csv").exit_code == 0


@pytest.mark.parametrize("group", ["C3", "C5", "C7h", "S4", "S8", "D3", "D5d", "D4d", "T", "Th", "O", "I"])
def test_exact_in_every_kind_of_group(group):
    """Stretches and linear bends of M-C-O along z, along a diagonal and in general: exact and orthonormal."""
    directions = [(0.0, 0.0, 1.0), (1.0, 1.0, 1.0), (0.31, 0.78, 0.52)]
    symbols, positions, bonds = ["U"], [np.zeros(3)], []
    for shell, direction in enumerate(directions):
        for point in cases.images(group, (2.5 + 1.6 * shell) * np.array(direction) / np.linalg.norm(direction)):
            carbon = len(symbols)
            symbols += ["C", "O"]
            positions += [point, point * (1 + 1.15 / np.linalg.norm(point))]
            bonds += [(0, carbon), (carbon, carbon + 1)]
    symmetry = find_symmetry(Structure.from_atoms(symbols, np.array(positions)))
    assert symmetry.group.order % len(cases.point_group(group).matrices) == 0
    found = symmetry_coordinates(symmetry, ["stretch", "linear bend"], bonds=bonds)
    values = {}
    for each in found.sets:
        rows = []
        for combination in found.combinations:
            if combination.set == each.name:
                rows.append(np.zeros(len(each.ids)))
                for term in combination.terms:
                    rows[-1][each.ids.index(term.coordinate)] = term.value
                    if term.exact not in values:
                        values[term.exact] = float(sympy.N(term.exact, 20))
                    assert abs(values[term.exact] - term.value) < 1e-12
        rows = np.array(rows)
        assert np.abs(rows @ rows.T - np.eye(len(each.ids))).max() < 1e-11
