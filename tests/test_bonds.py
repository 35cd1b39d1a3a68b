"""Bonds: by radii, from the file, by hand; parts of a molecule; the tree and the plain way agree."""

import numpy as np
import pytest
from ase.build import molecule
from ase.collections import g2

from vibsym.errors import VibsymError
from vibsym.structures import bonds as bonds_module
from vibsym.structures.bonds import find_bonds, fragments, neighbours, parse_bond
from vibsym.structures.distances import closest_pair, pairs_within
from vibsym.structures.structure import Structure, structure_of

# number of bonds by the structural formula; a double bond counts once
BONDS = {"H2O": 2, "CH4": 4, "C2H6": 7, "C2H4": 5, "C2H2": 3, "C6H6": 12, "C3H6_D3h": 9, "C4H4O": 9,
         "bicyclobutane": 11, "SiH4": 4, "PF3": 3, "SF6": 6, "CH3CN": 5, "NaCl": 1, "LiF": 1, "P2": 1,
         "cyclobutane": 12, "C5H5N": 11, "CCl4": 4, "C2F6": 7, "HOCl": 2, "N2H4": 5, "Si2H6": 7, "AlCl3": 3, "O3": 2,
         "butadiene": 9}


@pytest.mark.parametrize("name", [name for name in BONDS if name in g2.names])
def test_number_of_bonds_of_the_structural_formula(name):
    structure = structure_of(molecule(name))
    found = find_bonds(structure)
    assert len(found) == BONDS[name]
    assert (found[:, 0] < found[:, 1]).all()
    assert found.tolist() == sorted(found.tolist())


def test_most_of_the_names_exist_in_g2():
    assert sum(name in g2.names for name in BONDS) >= 20


def test_every_g2_molecule_is_one_piece():
    for name in g2.names:
        structure = structure_of(molecule(name))
        assert len(fragments(len(structure), find_bonds(structure))) == 1, name


def test_parts_that_nearly_touch_are_joined_at_their_nearest_contacts():
    """Bond lengths beyond 1.2 x the radii, rounded from Herzberg 1966 (F2, N2O4) and common tables, from memory."""
    fluorine = Structure.from_atoms("FF", [[0, 0, 0], [0, 0, 1.412]])
    assert find_bonds(fluorine).tolist() == [[0, 1]]
    bifluoride = Structure.from_atoms("FHF", [[0, 0, -1.14], [0, 0, 0], [0, 0, 1.14]])
    assert find_bonds(bifluoride).tolist() == [[0, 1], [1, 2]]
    oxygens = [[y, 0.0, s * z] for s in (1, -1) for y, z in ((1.10, 1.35), (-1.10, 1.35))]
    tetroxide = Structure.from_atoms("NNOOOO", [[0, 0, 0.89], [0, 0, -0.89], *oxygens])
    assert find_bonds(tetroxide).tolist() == [[0, 1], [0, 2], [0, 3], [1, 4], [1, 5]]


def test_hydrogen_bonded_molecules_stay_apart():
    first = molecule("H2O").positions - molecule("H2O").positions[0]
    second = first + 2.9 * first[1] / np.linalg.norm(first[1])      # O-H...O straight, 2.9 Å
    dimer = Structure.from_atoms("OHHOHH", np.vstack([first, second]))
    assert fragments(6, find_bonds(dimer)) == [[0, 1, 2], [3, 4, 5]]


def test_long_metal_ligand_bonds_and_no_1_3_bonds():
    """W(CO)6: W-C 2.058 Å, C-O 1.145 Å (rounded, from memory): 12 bonds, six ligands."""
    axes = np.vstack([np.eye(3), -np.eye(3)])
    positions = np.vstack([[[0, 0, 0]], 2.058 * axes, 3.203 * axes])
    structure = Structure.from_atoms(["W", *"CCCCCCOOOOOO"], positions)
    found = find_bonds(structure)
    assert len(found) == 12
    assert fragments(13, found, without=[0]) == [[k, k + 6] for k in range(1, 7)]


def test_dummy_atoms_bond_only_when_told():
    structure = Structure.from_atoms(["Mo", "XL", "C"], [[0, 0, 0], [0, 0, 1.5], [0, 2.0, 0]])
    assert find_bonds(structure).tolist() == [[0, 2]]
    assert find_bonds(structure, add=[(1, 0)]).tolist() == [[0, 1], [0, 2]]


def test_the_bonds_of_the_file_win():
    structure = Structure.from_atoms("OHH", [[0, 0, 0.12], [0, 0.76, -0.47], [0, -0.76, -0.47]], bonds=[(1, 2)])
    assert find_bonds(structure).tolist() == [[1, 2]]
    assert find_bonds(structure, add=[(0, 1)], remove=[(2, 1)]).tolist() == [[0, 1]]


def test_adding_twice_is_adding_once_and_removing_nothing_is_an_error():
    structure = structure_of(molecule("H2O"))
    assert find_bonds(structure, add=[(0, 1), (1, 0)]).tolist() == [[0, 1], [0, 2]]
    with pytest.raises(VibsymError, match="no bond 2-3 to remove; H2 is bonded to O1"):
        find_bonds(structure, remove=[(1, 2)])
    with pytest.raises(VibsymError, match="1 to 3"):
        find_bonds(structure, add=[(0, 3)])


def test_single_atom_and_far_atoms_have_no_bonds():
    assert find_bonds(Structure.from_atoms(["Ne"], [[0, 0, 0]])).shape == (0, 2)
    assert find_bonds(Structure.from_atoms(["X", "X"], [[0, 0, 0], [1, 0, 0]])).shape == (0, 2)


@pytest.mark.parametrize("text, pair", [("1-5", (0, 4)), ("5-1", (0, 4)), (" 2 - 3 ", (1, 2)), ("2–3", (1, 2))])
def test_parse_bond(text, pair):
    assert parse_bond(text, 6) == pair


@pytest.mark.parametrize("text, told", [
    ("1-7", "no atom 7"), ("0-1", "no atom 0"), ("1", "two atom numbers"), ("a-b", "two atom"), ("1-2-3", "two atom"),
    ("3-3", "itself"), ("-1-2", "two atom"), ("", "two atom"), ("1-" + "9" * 5000, "no atom"), ("1-²", "two atom"),
], ids=["beyond", "zero", "one", "letters", "three", "itself", "minus", "nothing", "digits", "square"])
def test_parse_bond_refuses(text, told):
    with pytest.raises(VibsymError, match=told) as error:
        parse_bond(text, 6)
    assert len(str(error.value)) < 200


def test_neighbours_and_fragments():
    assert neighbours(4, [(0, 1), (1, 2)]) == [[1], [0, 2], [1], []]
    assert neighbours(2, np.zeros((0, 2), int)) == [[], []]
    assert fragments(4, [(0, 1), (1, 2)]) == [[0, 1, 2], [3]]
    assert fragments(3, [(0, 1), (1, 2)], without=[1]) == [[0], [2]]


def crystal(cells: int, seed: int = 3) -> Structure:
    """Return a shaken simple cubic lattice of 8 cells³ atoms, 1.5 Å apart."""
    grid = np.stack(np.meshgrid(*[np.arange(2 * cells)] * 3, indexing="ij"), axis=-1).reshape(-1, 3)
    labels = np.where(grid.sum(axis=1) % 2, "C", "N")
    shaken = 1.5 * grid + np.random.default_rng(seed).normal(scale=0.03, size=grid.shape)
    return Structure.from_atoms(labels.tolist(), shaken)


def test_tree_and_all_distances_agree(monkeypatch):
    structure = crystal(4)
    plain = find_bonds(structure), pairs_within(structure.positions, 3.0), closest_pair(structure.positions)
    for module in (bonds_module, __import__("vibsym.structures.distances", fromlist=["SMALL"])):
        monkeypatch.setattr(module, "SMALL", 10)
    tree = find_bonds(structure), pairs_within(structure.positions, 3.0), closest_pair(structure.positions)
    assert plain[0].tolist() == tree[0].tolist() and len(plain[0]) > 1000
    assert plain[1].tolist() == tree[1].tolist()
    assert plain[2] == pytest.approx(tree[2])


def test_large_structures_are_cheap_in_memory():
    structure = crystal(14)         # 21952 atoms; all distances at once would take gigabytes
    found = find_bonds(structure)
    assert (np.bincount(found.ravel(), minlength=len(structure)) <= 6).all() and len(found) > 2 * len(structure)


def test_bonds_do_not_depend_on_place_or_order():
    rng = np.random.default_rng(5)
    structure = structure_of(molecule("C6H6"))
    order = rng.permutation(12)
    q, _ = np.linalg.qr(rng.normal(size=(3, 3)))
    turned = Structure.from_atoms([structure.symbols[k] for k in order], structure.positions[order] @ q + 1000.0)
    expected = {frozenset(pair) for pair in find_bonds(structure).tolist()}
    assert {frozenset(order[pair].tolist()) for pair in find_bonds(turned)} == expected
