"""What to expect, held against published species: textbooks (gamma_vib.csv) and NSRDS-NBS 39 (shimanouchi/).

Labels that depend on axes are compared up to the exchange that the file's `convention` names; everything else exactly.
"""

import csv
import re
from itertools import permutations
from pathlib import Path

import numpy as np
import pytest
from molecules import MOLECULES, turned
from orbits import FAMILIES, orbit_structure

from vibsym import Structure, VibsymError, expect, find_symmetry, read
from vibsym.report import expectation, render
from vibsym.vibrations.working import working

REFERENCE = Path(__file__).parent / "reference"


def rows_of(name):
    with open(REFERENCE / name, encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def parsed(text):
    """Return {"A1": 2, "B2": 1} from `2A1+B2`; what follows in brackets is a remark."""
    gamma = {}
    for term in text.split(" (")[0].replace(" + ", " ").replace("+", " " if "Σ" not in text else "+").split():
        count, label = re.fullmatch(r"(\d*)(\S+)", term).groups()
        gamma[label] = gamma.get(label, 0) + int(count or 1)
    return gamma


def exchanged(gamma):
    """Return the representation under every exchange of B1, B2 (B3) that another choice of axes can make."""
    numbers = sorted({label[1] for label in gamma if re.match(r"B\d", label)} | {"1", "2"})
    if any(re.match(r"B\dg|B\du", label) for label in gamma) and not any(label.startswith("E") for label in gamma):
        numbers = ["1", "2", "3"]
    found = []
    for order in permutations(numbers):
        change = dict(zip(numbers, order))
        found.append({"B" + change[label[1]] + label[2:] if re.match(r"B\d", label) else label: count
                      for label, count in gamma.items()})
    return found


def built(name, seed=7):
    symbols, positions = MOLECULES[name]
    return Structure.from_atoms(symbols, turned(positions, seed))


TEXTBOOK = rows_of("gamma_vib.csv")
SHIMANOUCHI = rows_of("shimanouchi/published.csv")


@pytest.mark.parametrize("row", TEXTBOOK, ids=lambda row: f"{row['formula']}-{row['point_group']}")
def test_textbook_species(row):
    result = expect(built(row["formula"]))
    assert result.symmetry.group.symbol == row["point_group"]
    assert result.vibrations == int(row["n_vib"])
    published = row["gamma_vib_published"]
    if not published.startswith("see"):
        choices = exchanged(parsed(published)) if "as published" in published else [parsed(published)]
        if row["point_group"] != "D2h" or "as published" in published:
            assert result.gamma_vib in choices, published
    if row["own_gamma"]:
        own = parsed(row["own_gamma"])
        assert result.gamma_vib in (exchanged(own) if row["point_group"] == "D2h" else [own])
    assert (result.counts.infrared, result.counts.raman) == (int(row["n_ir"]), int(row["n_raman"]))
    if row["n_silent"]:
        assert result.counts.silent == int(row["n_silent"])


@pytest.mark.parametrize("row", SHIMANOUCHI, ids=lambda row: row["slug"])
def test_published_species_of_molecules_and_isotopologues(row):
    if row["inconsistent"]:
        pytest.skip(f"misprint in the source: {row['inconsistent']}")
    result = expect(read(REFERENCE / "shimanouchi" / f"{row['slug']}.xyz"))
    assert result.symmetry.group.symbol == row["point_group"].replace("*", "∞")
    published = parsed(row["species"])
    assert result.gamma_vib in (exchanged(published) if row["convention"] else [published])


@pytest.mark.parametrize("name", ["C2H4", "SF6", "C6H12", "HCN", "S8", "Fe(CO)5", "CH3OH"])
def test_turning_shifting_and_renumbering_change_nothing(name):
    symbols, positions = MOLECULES[name]
    first = expect(Structure.from_atoms(symbols, positions))
    order = np.random.default_rng(5).permutation(len(symbols))
    other = expect(Structure.from_atoms([symbols[k] for k in order], turned(positions, 6)[order]))
    assert other.gamma_vib == first.gamma_vib and other.counts == first.counts
    mirrored = expect(Structure.from_atoms(symbols, turned(positions, 8) * (1, 1, -1)))
    assert mirrored.gamma_vib == first.gamma_vib


@pytest.mark.parametrize("name", MOLECULES)
def test_displacements_are_translations_rotations_and_vibrations(name):
    result = expect(built(name))
    group = result.symmetry.group

    def dimension(gamma):
        return sum(count * group.species_named(label).degeneracy for label, count in gamma.items())

    linear = group.infinite
    assert dimension(result.gamma_3n) == 3 * len(result.structure)
    assert dimension(result.gamma_translation) == 3
    assert dimension(result.gamma_rotation) == (2 if linear else 3)
    assert dimension(result.gamma_vib) == result.vibrations == 3 * len(result.structure) - (5 if linear else 6)
    for label, count in result.gamma_3n.items():
        parts = (result.gamma_translation, result.gamma_rotation, result.gamma_vib)
        assert count == sum(part.get(label, 0) for part in parts)


@pytest.mark.parametrize("name", ["H2O", "S8", "C6H12", "Fe(C5H5)2 stag", "C2H2"])
def test_counting_unmoved_atoms_equals_the_trace_of_the_full_matrices(name):
    symmetry = find_symmetry(built(name))
    given = expect(symmetry).displacements
    atoms = len(symmetry.structure)
    for members, chi in zip(symmetry.group.image.classes, given.chi_3n, strict=True):
        matrix = np.zeros((3 * atoms, 3 * atoms))
        operation = members.members[-1]
        for atom, target in enumerate(symmetry.permutations[operation]):
            matrix[3 * target:3 * target + 3, 3 * atom:3 * atom + 3] = symmetry.group.image.matrices[operation]
        assert np.trace(matrix) == pytest.approx(chi, abs=1e-9)


@pytest.mark.parametrize("name", ["NH3", "N2H4", "CO2", "trans-N2F2", "SF6"])
def test_the_working_adds_up_to_the_result(name):
    result = expect(built(name))
    lines = working(result.displacements).lines
    assert {line.label: line.in_vib for line in lines if line.in_vib} == result.gamma_vib
    for line in lines:
        assert line.total / line.divisor == pytest.approx(line.in_3n, abs=1e-9)
        assert line.in_3n - line.in_translation - line.in_rotation == line.in_vib
        assert sum(size * own * chi for size, own, chi in line.terms) == pytest.approx(line.total)


def test_json_contract_of_the_design():
    answer = expect(built("SO3")).to_dict()
    assert list(answer)[:10] == ["structure", "point_group", "gamma_3n", "gamma_translation", "gamma_rotation",
                                 "gamma_vib", "species", "counts", "axes", "exchange"]
    assert list(answer["structure"]) == ["source", "formula", "atoms"]
    assert list(answer["point_group"]) == ["symbol", "order", "tolerance", "deviation", "chiral", "centrosymmetric"]
    assert answer["gamma_3n"] == {"A1'": 1, "A2'": 1, "E'": 3, "A2''": 2, "E''": 1}
    assert list(answer["gamma_vib"].items()) == [("A1'", 1), ("E'", 2), ("A2''", 1)]
    first = answer["species"][0]
    assert list(first) == ["label", "degeneracy", "modes", "infrared", "raman", "polarised", "hyper_raman", "linear",
                           "rotations", "quadratic", "cubic"]
    assert first["polarised"] and first["quadratic"] == ["x2+y2", "z2"]
    assert answer["counts"] == {"fundamentals": 4, "infrared": 3, "raman": 3, "coincident": 2, "polarised": 1,
                                "silent": 0}
    assert answer["axes"]["z"] == "perpendicular to the molecular plane"
    assert len(answer["species"]) == 6


def test_an_infinite_group_lists_the_species_that_occur_and_no_order():
    answer = expect(built("C2H2")).to_dict()
    assert answer["point_group"]["order"] is None and answer["point_group"]["symbol"] == "D∞h"
    assert [row["label"] for row in answer["species"]] == ["Σg+", "Πg", "Σu+", "Πu"]
    assert all(row["modes"] for row in answer["species"])


def test_one_atom_has_no_vibrations_and_says_so():
    result = expect(Structure.from_atoms(["Ar"], [[1, 2, 3]]))
    assert result.symmetry.group.symbol == "Kh"
    assert result.gamma_3n == result.gamma_translation == {"Pu": 1}
    assert result.gamma_rotation == result.gamma_vib == {}
    assert set(result.counts) == {0} and result.vibrations == 0
    assert "no vibrations" in result.notes[0]


def test_any_object_with_symbols_and_positions_is_accepted():
    class Thing:
        symbols = ("O", "H", "H")
        positions = ((0, 0, 0), (0.76, 0, 0.59), (-0.76, 0, 0.59))

    assert expect(Thing()).gamma_vib == {"A1": 2, "B2": 1}


def notes_of(name):
    return " ".join(expect(built(name)).notes)


def test_mutual_exclusion_is_said_from_the_species():
    assert "Mutual exclusion" in notes_of("SF6")
    assert "Mutual exclusion" in notes_of("CO2")
    assert "exclusion" not in notes_of("SO3") and "active in both" not in notes_of("SO3")
    assert "although it has no centre" in notes_of("S8")                  # D4d
    assert "although it has no centre" in notes_of("C70")                 # D5h
    assert "active in both" not in notes_of("C3H4")                       # D2d: B2 and E are active in both


def test_chirality_pairs_isotopes_and_rotors_are_said_where_they_hold():
    assert "circular dichroism" in notes_of("N2H4") and "circular dichroism" not in notes_of("H2O")
    assert "35Cl" in notes_of("CH3Cl") and "the symmetry stays" in notes_of("CH3Cl")
    assert "lower symmetry" in notes_of("CCl4") and "mixture" not in notes_of("CH4")
    assert "methyl" in notes_of("CH3OH") and "turns" not in notes_of("CH3CN").lower()
    assert "5-membered ring (2 on Fe1)" in notes_of("Fe(C5H5)2 stag")


def _boric_acid():
    """B(OH)3 with its hydrogens all turned one way: C3h."""
    angles = 2 * np.pi * np.arange(3) / 3
    oxygen = np.column_stack([1.36 * np.cos(angles), 1.36 * np.sin(angles), 0 * angles])
    hydrogen = np.column_stack([1.95 * np.cos(angles + 0.4), 1.95 * np.sin(angles + 0.4), 0 * angles])
    return ["B"] + ["O"] * 3 + ["H"] * 3, np.vstack([np.zeros((1, 3)), oxygen, hydrogen])


def test_two_conjugate_species_are_one_band():
    result = expect(Structure.from_atoms(*_boric_acid()))
    assert result.symmetry.group.symbol == "C3h"
    assert sum("conjugate" in note and "counted as one band" in note for note in result.notes) == 1
    # 7 atoms, 15 vibrations; B, 3 O and 3 H in the plane: A' 1+... by hand: in the plane 14 - 3 = 11 = 3A' + 4E',
    # out of it 7 - 3 = 4 = 2A'' + E''
    assert result.gamma_vib == {"A'": 3, "E'": 4, "A''": 2, "E''": 1}
    assert result.counts.fundamentals == 10
    assert "E′, E″: two complex-conjugate species" in render([result], expectation)      # set as in the table above it


def test_analysis_in_a_group_of_the_ladder():
    random = np.random.default_rng(2)
    symbols, positions = MOLECULES["CCl4"]
    loose = Structure.from_atoms(symbols, positions + random.normal(scale=0.03, size=positions.shape))
    found = expect(loose)
    assert found.symmetry.group.symbol != "Td"
    result = expect(loose, as_group="Td")
    assert result.gamma_vib == {"A1": 1, "E": 1, "T2": 2}
    assert result.to_dict()["found"]["symbol"] == found.symmetry.group.symbol
    with pytest.raises(VibsymError, match="D6h"):
        expect(loose, as_group="D6h")


def test_the_other_choice_of_axes_exchanges_the_labels():
    given = expect(built("H2O"))
    other = expect(built("H2O"), axes="swap")
    assert given.gamma_vib == {"A1": 2, "B2": 1} and other.gamma_vib == {"A1": 2, "B1": 1}
    assert given.axes.exchange and given.counts == other.counts


@pytest.mark.parametrize("symbol", FAMILIES)
def test_general_orbits_carry_three_regular_representations_each(symbol):
    """Atoms off every element: each species occurs 3 d times an orbit, two conjugate ones (taken as one) 3 times."""
    symbols, positions = orbit_structure(symbol, np.random.default_rng(11))
    result = expect(Structure.from_atoms(symbols, turned(positions, 12)))
    group = result.symmetry.group
    assert group.symbol == symbol
    orbits = len(symbols) // group.order
    assert result.gamma_3n == {each.label: 3 * orbits * (1 if each.pair else each.degeneracy) for each in group.species}
    assert sum(result.gamma_vib.values()) == result.counts.fundamentals
    counts = result.counts
    assert counts.infrared + counts.raman - counts.coincident + counts.silent == counts.fundamentals
