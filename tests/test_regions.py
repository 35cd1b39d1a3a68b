"""Γvib by region: shares and what is missing add up, published divisions, which sets share a species, and the notes."""

import csv
import json
from pathlib import Path

import internal_cases as cases
import numpy as np
import pytest

from vibsym.groups.bases import Basis
from vibsym.groups.projection import symmetry_vectors
from vibsym.groups.symbols import typeset
from vibsym.report import expectation as view
from vibsym.report import render
from vibsym.spectra.activity import count_bands
from vibsym.spectra.expectation import expect
from vibsym.spectra.regions import MOST_DISPLACEMENTS, Regions, regions
from vibsym.structures.finder import find_symmetry
from vibsym.structures.placing import place
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.vibrations.bmatrix import b_matrix

ROOT = Path(__file__).parent.parent
SHIMANOUCHI = sorted((Path(__file__).parent / "reference" / "shimanouchi").glob("*.xyz"))


def total(gammas, group):
    """Return the sum of representations in table order."""
    sums = {label: sum(gamma.get(label, 0) for gamma in gammas) for label in group.labels}
    return {label: n for label, n in sums.items() if n}


@pytest.mark.parametrize("name", tuple(cases.SHAPES))
def test_regions_and_what_is_missing_add_up(name):
    symmetry = cases.symmetry(name)
    found = regions(symmetry)
    gamma_vib = expect(symmetry).gamma_vib
    assert total([*(row.gamma for row in found.rows), found.missing], symmetry.group) == gamma_vib
    assert found.missing == {}
    for row in found.rows:
        assert row.counts == count_bands(row.gamma, symmetry.group)


@pytest.mark.parametrize("path", SHIMANOUCHI, ids=lambda path: path.stem)
def test_molecules_of_the_tables_are_described_completely(path):
    """T. Shimanouchi, NSRDS-NBS 39 (1972): geometries in tests/reference/shimanouchi."""
    found = expect(read(path))
    assert found.regions.missing == {}
    assert total([row.gamma for row in found.regions.rows], found.symmetry.group) == found.gamma_vib


@pytest.mark.parametrize("name", ["C2H4", "CH4", "P4", "C3H4", "B(OH)3, C3h", "Al(OH2)6, Th", "Fe(CO)5", "CO2"])
def test_shares_are_differences_of_ranks(name):
    """The definition, done the long way: the rank in each species of the first k sets less that of the first k - 1."""
    symmetry = cases.symmetry(name)
    found, group = regions(symmetry).independence, symmetry.group
    b = [b_matrix(symmetry.positions, found.sets[:k]) for k in range(len(found.sets) + 1)]
    largest = np.linalg.svd(b[-1], compute_uv=False)[0]
    cartesian = symmetry_vectors(Basis.displacements(group.image, symmetry.permutations))
    for k, share in enumerate(found.shares):
        expected = {}
        for label, vectors in cartesian.items():
            every = vectors.reshape(-1, vectors.shape[2]).T
            ranks = [int((np.linalg.svd(rows @ every, compute_uv=False) > 1e-6 * largest).sum()) if len(rows) else 0
                     for rows in b[k:k + 2]]
            expected[group.image_labels.get(label, label)] = (ranks[1] - ranks[0]) // vectors.shape[1]
        assert share == {label: n for label, n in expected.items() if n}


@pytest.mark.parametrize("shape, centre, ligands, expected", [
    # AB3 planar, AB4, AB5, AB6, AB7: K. Nakamoto, Infrared and Raman Spectra of Inorganic and Coordination
    # Compounds, 5th ed. (1997), part II (from memory): stretches, then deformations
    ("TP-3", "B", "F", [{"A1'": 1, "E'": 1}, {"E'": 1}, {"A2''": 1}]),
    ("TPY-3", "P", "F", [{"A1": 1, "E": 1}, {"A1": 1, "E": 1}]),
    ("T-4", "C", "F", [{"A1": 1, "T2": 1}, {"E": 1, "T2": 1}]),
    ("SP-4", "Pt", "Cl", [{"A1g": 1, "B1g": 1, "Eu": 1}, {"B2g": 1, "Eu": 1}, {"A2u": 1, "B2u": 1}]),
    ("TBPY-5", "P", "F", [{"A1'": 2, "E'": 1, "A2''": 1}, {"E'": 2, "A2''": 1, "E''": 1}]),
    ("SPY-5", "Br", "F", [{"A1": 2, "B1": 1, "E": 1}, {"A1": 1, "B1": 1, "B2": 1, "E": 2}]),
    ("OC-6", "S", "F", [{"A1g": 1, "Eg": 1, "T1u": 1}, {"T2g": 1, "T1u": 1, "T2u": 1}]),
    ("PBPY-7", "I", "F", [{"A1'": 2, "E1'": 1, "E2'": 1, "A2''": 1},
                           {"E1'": 2, "E2'": 1, "A2''": 1, "E1''": 1, "E2''": 1}]),
], ids=lambda value: value if isinstance(value, str) else "")
def test_divisions_of_the_textbook_shapes(shape, centre, ligands, expected):
    structure = place(shape, centre, [ligands] * int(shape.split("-")[1]))
    found = regions(find_symmetry(structure))
    assert [row.gamma for row in found.rows] == expected


def test_pentagonal_bipyramid_sums_to_its_vibrations():
    """IF7: 2A1' + 3E1' + 2E2' + 2A2'' + E1'' + E2'' (H. H. Claassen, E. L. Gasner, H. Selig, J. Chem. Phys. 49, 1803
    (1968))."""
    found = expect(place("PBPY-7", "I", ["F"] * 7))
    assert found.gamma_vib == {"A1'": 2, "E1'": 3, "E2'": 2, "A2''": 2, "E1''": 1, "E2''": 1}


CARBONYLS = {"[PtCl4]2-": ("SP-4", "Pt", "Cl"), "[SiF6]2-": ("OC-6", "Si", "F"), "PF5": ("TBPY-5", "P", "F"),
             "GeCl4": ("T-4", "Ge", "Cl"), "IF7": ("PBPY-7", "I", "F"), "BF3": ("TP-3", "B", "F"),
             "W(CO)6": ("OC-6", "W", "CO"), "Fe(CO)5": ("TBPY-5", "Fe", "CO"), "[Co(CO)4]-": ("T-4", "Co", "CO"),
             "[Fe(CN)6]4-": ("OC-6", "Fe", "CN")}


@pytest.mark.parametrize("formula", CARBONYLS)
def test_stretches_of_the_published_complexes(formula):
    """tests/reference/carbonyls.csv: Γ and band counts of the stretches (sources row by row)."""
    table = (ROOT / "tests" / "reference" / "carbonyls.csv").read_text(encoding="utf-8").splitlines()
    row = next(row for row in csv.DictReader(table) if row["formula"] == formula)
    shape, centre, ligand = CARBONYLS[formula]
    found = regions(find_symmetry(place(shape, centre, [ligand] * int(shape.split("-")[1]))))
    name = {"CO": "stretch C-O", "CN": "stretch C-N"}.get(row["oscillators"], f"stretch {centre}-{ligand}")
    (region,) = [each for each in found.rows if each.name == name]
    assert sum(region.gamma.values()) == sum(int(term[0]) if term[0].isdigit() else 1
                                             for term in row["gamma_stretch"].replace(" ", "").split("+"))
    assert (region.counts.infrared, region.counts.raman) == (int(row["n_ir_predicted"]), int(row["n_raman_predicted"]))


def test_sets_that_share_a_species_are_named():
    found = regions(cases.symmetry("CH4"))
    assert found.shared == {"T2": ("stretch C-H", "bend H-C-H")}
    assert found.notes == ()


def test_cages_have_more_stretches_than_vibrations():
    """The 12 edges of the octahedron of six atoms: 12 stretches, 12 vibrations; B12: 30 edges, 30 vibrations; with
    caps more."""
    symbols, positions = cases.atoms(("Mo", 1.85 * cases.OCTAHEDRON), ("Mo", [(0, 0, 0)]))
    found = regions(find_symmetry(Structure.from_atoms(symbols, positions)))
    assert found.crowded and "more stretches than vibrations" in found.notes[0]


def test_a_redundancy_that_joins_sets_is_told():
    found = regions(cases.symmetry("C2H4"))
    assert found.independence.joined == (("bend H-C-H", "Ag"), ("bend H-C-H", "B1u"))
    assert "conventional" in found.notes[0]


def test_parts_that_are_not_bonded():
    symbols, positions = ["C", "O", "O", "H", "H"], [[0, 0, z] for z in (0, 1.16, -1.16, 6.0, 6.74)]
    result = expect(Structure.from_atoms(symbols, positions))
    assert result.to_dict()["missing"] == {"Σ+": 1, "Π": 2}
    assert "not bonded to each other" in result.regions.notes[-1]
    assert "not described" in render([result], view)


def test_large_structures_are_left_out_with_a_note():
    found = Regions(None, cases.symmetry("CH4"))
    assert found.rows == () and found.to_dict() == {"regions": [], "missing": {}, "shared": {},
                                                    "region_notes": list(found.notes)}
    assert "left out" in found.notes[0]
    random = np.random.default_rng(0)
    positions = 2.0 * np.stack(np.meshgrid(*[np.arange(8)] * 3), axis=-1).reshape(-1, 3)
    cloud = Structure.from_atoms(["Ar"] * len(positions), positions + random.normal(scale=0.1, size=positions.shape))
    from vibsym.vibrations.internal import without_symmetry

    assert 3 * len(cloud) > MOST_DISPLACEMENTS
    assert regions(without_symmetry(cloud)).independence is None


def test_json_of_regions():
    answer = expect(read(ROOT / "samples" / "cylinder-bf3.xyz")).to_dict()
    assert answer["regions"] == [
        {"set": "stretch B-F", "gamma": {"A1'": 1, "E'": 1}, "infrared": 1, "raman": 2, "coincident": 1,
         "polarised": 1},
        {"set": "bend F-B-F", "gamma": {"E'": 1}, "infrared": 1, "raman": 1, "coincident": 1, "polarised": 0},
        {"set": "wag BF3", "gamma": {"A2''": 1}, "infrared": 1, "raman": 0, "coincident": 0, "polarised": 0}]
    assert answer["missing"] == {} and answer["shared"] == {"E'": ["stretch B-F", "bend F-B-F"]}
    json.dumps(answer)


def test_notes_set_labels_as_the_page_does():
    """Na+ beside BF4-, C3v: what the ion pair lacks is A1 + E, with subscripts on the page and without in JSON."""
    corners = 1.4 * cases.TETRAHEDRON
    symbols, positions = cases.atoms(("B", (0, 0, 0)), ("F", corners), ("Na", [corners[0] * -2.5]))
    found = regions(find_symmetry(Structure.from_atoms(symbols, positions)))
    assert found.missing == {"A1": 1, "E": 1}
    assert found.to_dict()["region_notes"][-1].startswith("The internal coordinates lack A1 + E: motions of parts")
    assert found.remarks(typeset)[-1].startswith("The internal coordinates lack A₁ + E: motions of parts")
