"""The finder: every family of groups, in any pose, with noise; published molecules; ase's g2; spglib's operations."""

import csv
import re
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from orbits import FAMILIES, gamma_3n, noise, orbit_structure, posed, random_rotation

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.structures.candidates import find_operations
from vibsym.structures.finder import centre, find_symmetry
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.structures.subsets import closed_subsets, product_table

SHIMANOUCHI = Path(__file__).parent / "reference" / "shimanouchi"


def published():
    with open(SHIMANOUCHI / "published.csv", encoding="utf-8", newline="") as file:
        rows = csv.DictReader(line for line in file if not line.startswith("#"))
        return [(row["slug"], row["point_group"].replace("*", "∞")) for row in rows]


def check_laws(symmetry):
    """Operations carry the symmetrised atoms onto like atoms, multiply as the group does, and leave the origin where
    it is.
    """
    structure, image = symmetry.structure, symmetry.group.image
    positions, permutations = symmetry.positions, symmetry.permutations
    carried = positions @ image.matrices.transpose(0, 2, 1)
    assert np.abs(carried - positions[permutations]).max() < 1e-8
    assert (structure.kinds[permutations] == structure.kinds).all()
    assert (np.sort(permutations, axis=1) == np.arange(len(structure))).all()
    assert (permutations[0] == np.arange(len(structure))).all()
    for generator in range(min(image.order, 12)):
        assert (permutations[generator][permutations] == permutations[image.product[generator]]).all()
    assert np.abs(symmetry.frame @ symmetry.frame.T - np.eye(3)).max() < 1e-9
    assert np.linalg.det(symmetry.frame) > 0
    masses = np.nan_to_num(structure.masses)
    assert np.abs(masses @ positions).max() <= 1e-6 * masses.sum() + 0.01 * np.abs(positions).max()
    back = (structure.positions - symmetry.origin) @ symmetry.frame.T
    assert np.allclose(np.linalg.norm(back - positions, axis=1), symmetry.shifts, atol=1e-9)
    assert symmetry.deviation == symmetry.shifts.max()
    assert symmetry.deviation <= symmetry.tolerance
    moved = symmetry.symmetrised.positions - structure.positions
    assert np.allclose(np.linalg.norm(moved, axis=1), symmetry.shifts, atol=1e-9)


@pytest.mark.parametrize("shake", [0.0, 0.004, 0.01], ids=["exact", "noise 1-5", "noise 1-2"])
@pytest.mark.parametrize("symbol", FAMILIES)
def test_every_family_in_any_pose(symbol, shake):
    rng = np.random.default_rng([FAMILIES.index(symbol), 7])
    names, points = orbit_structure(symbol, rng)
    structure, _ = posed(names, points, rng, shake)
    symmetry = find_symmetry(structure)
    assert symmetry.group.symbol == symbol
    assert symmetry.deviation <= 2 * shake + 1e-9
    check_laws(symmetry)


@pytest.mark.parametrize("symbol", FAMILIES)
def test_atoms_on_elements(symbol):
    rng = np.random.default_rng([FAMILIES.index(symbol), 11])
    names, points = orbit_structure(symbol, rng, special=True)
    structure, _ = posed(names, points, rng)
    symmetry = find_symmetry(structure)
    assert symmetry.group.symbol == symbol
    check_laws(symmetry)


@pytest.mark.parametrize("symbol", ["C2v", "D3", "C5h", "D2d", "Td", "S8", "Ih"])
def test_noise_of_a_loose_geometry(symbol):
    rng = np.random.default_rng(17)
    names, points = orbit_structure(symbol, rng, apart=1.5)
    for tolerance in (0.1, 0.2):
        structure, _ = posed(names, points, rng, tolerance / 2.5)
        symmetry = find_symmetry(structure, tolerance)
        assert symmetry.group.symbol == symbol
        check_laws(symmetry)


@pytest.mark.parametrize(("slug", "symbol"), published(), ids=[slug for slug, _ in published()])
def test_published_molecules(slug, symbol):
    structure = read(SHIMANOUCHI / f"{slug}.xyz")
    symmetry = find_symmetry(structure)
    assert symmetry.group.symbol == symbol
    assert symmetry.deviation < 1e-6
    check_laws(symmetry)


def test_pose_changes_nothing():
    rng = np.random.default_rng(23)
    for symbol in ("C2v", "D2h", "D4", "C4v", "D6h", "Td", "C3h", "D2d"):
        names, points = orbit_structure(symbol, rng, orbits=2)
        first = find_symmetry(posed(names, points, rng)[0])
        for _ in range(3):
            again = find_symmetry(posed(names, points, rng)[0])
            assert again.group.symbol == first.group.symbol
            assert gamma_3n(again) == gamma_3n(first)


@settings(max_examples=60, deadline=None, derandomize=True)
@given(st.sampled_from(FAMILIES), st.integers(0, 10**6), st.floats(0, 0.01))
def test_deviation_does_not_depend_on_the_pose(symbol, seed, shake):
    rng = np.random.default_rng(seed)
    names, points = orbit_structure(symbol, rng, orbits=2)
    structure, _ = posed(names, points, rng, shake)
    first = find_symmetry(structure)
    order = rng.permutation(len(points))
    turned = Structure.from_atoms([structure.symbols[k] for k in order],
                                  structure.positions[order] @ random_rotation(rng).T + rng.normal(size=3))
    again = find_symmetry(turned)
    assert again.group.symbol == first.group.symbol
    assert again.deviation == pytest.approx(first.deviation, abs=1e-7)
    assert again.shifts == pytest.approx(first.shifts[order], abs=1e-6)
    check_laws(again)


@pytest.mark.parametrize("seed", [81, 283, 387, 493, 585])
def test_groups_that_share_their_deviation_are_chosen_alike_in_every_pose(seed):
    """A shaken square of XeF4 between the deviations of its D2h and D2d (equal to rounding) and of D4h."""
    rng = np.random.default_rng(seed)
    square = np.array([[0, 0, 0], [1.95, 0, 0], [0, 1.95, 0], [-1.95, 0, 0], [0, -1.95, 0]])
    shaken = square + noise(rng, 5, float(rng.uniform(0.01, 0.2)))
    limit = find_symmetry(Structure.from_atoms(["Xe"] + ["F"] * 4, shaken), 0.5).deviation
    found = set()
    for _ in range(6):
        turned = Structure.from_atoms(["Xe"] + ["F"] * 4, shaken @ random_rotation(rng).T + rng.normal(size=3))
        symmetry = find_symmetry(turned, limit - 1e-4)
        found.add((symmetry.group.symbol, symmetry.shifts.round(6).tobytes()))
    assert len(found) == 1


def test_the_placement_is_least_squares():
    """No turn or shift of the elements gives a smaller sum of squared shifts."""
    rng = np.random.default_rng(29)
    names, points = orbit_structure("D3", rng, orbits=2)
    structure, _ = posed(names, points, rng, 0.01)
    symmetry = find_symmetry(structure)
    matrices = symmetry.group.matrices
    best = (symmetry.shifts ** 2).sum()
    for _ in range(20):
        small = np.linalg.qr(np.eye(3) + 1e-3 * rng.normal(size=(3, 3)))[0]
        small = small * np.sign(np.diag(small))
        local = (structure.positions - symmetry.origin + 1e-3 * rng.normal(size=3)) @ (small @ symmetry.frame).T
        averaged = (local[symmetry.permutations] @ matrices).mean(axis=0)
        assert ((local - averaged) ** 2).sum() > best


def test_masses_decide():
    places = np.array([[0, 0, 0], [1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]]) * 0.63
    for labels, symbol in ((["C", "H", "H", "H", "H"], "Td"), (["C", "D", "H", "H", "H"], "C3v"),
                           (["C", "D", "D", "H", "H"], "C2v"), (["C", "D", "T", "H", "H"], "Cs"),
                           (["Si", "H", "D", "T", "F"], "C1")):
        symmetry = find_symmetry(Structure.from_atoms(labels, places))
        assert symmetry.group.symbol == symbol
        check_laws(symmetry)


@pytest.mark.parametrize(("labels", "places", "symbol"), [
    (["He"], [[1, 2, 3]], "Kh"), (["X"], [[0, 0, 0]], "Kh"),
    (["H", "H"], [[0, 0, 0], [0.5, 0.5, 0.2]], "D∞h"), (["H", "D"], [[0, 0, 0], [0.5, 0.5, 0.2]], "C∞v"),
    (["O", "C", "O"], [[0, 0, -1.16], [0, 0, 0], [0, 0, 1.16]], "D∞h"),
    (["N", "N", "O"], [[0, 0, -1.13], [0, 0, 0], [0, 0, 1.19]], "C∞v"),
    (["O", "13C", "18O"], [[0, 0, -1.16], [0, 0, 0], [0, 0, 1.16]], "C∞v"),
    (["O", "C", "O"], [[0, 0.02, -1.16], [0, 0, 0], [0, 0.02, 1.16]], "D∞h"),
    (["O", "C", "O"], [[0, 0.05, -1.16], [0, 0, 0], [0, 0.05, 1.16]], "C2v"),
], ids=["He", "dummy", "H2", "HD", "CO2", "N2O", "CO2 isotopes", "CO2 bent within", "CO2 bent beyond"])
def test_atoms_and_lines(labels, places, symbol):
    symmetry = find_symmetry(Structure.from_atoms(labels, np.array(places, dtype=float)))
    assert symmetry.group.symbol == symbol
    check_laws(symmetry)


@pytest.mark.parametrize("tolerance", [0, -0.1, float("nan"), 0.6, float("inf"), "wide"])
def test_impossible_tolerances(tolerance):
    structure = Structure.from_atoms(["O", "H", "H"], [[0, 0, 0], [0.96, 0, 0], [-0.24, 0.93, 0]])
    with pytest.raises(VibsymError) as error:
        find_symmetry(structure, tolerance)
    assert "tolerance" in str(error.value)
    assert "\n" not in str(error.value)


def test_a_tolerance_below_rounding():
    for labels, places in ((["H", "F"], [[0.1, 0.2, 0.3], [0.7, 0.3, 0.9]]),
                           (["O", "H", "H"], [[9, 0, 0], [9.76, 0.59, 0], [8.24, 0.59, 0]])):
        symmetry = find_symmetry(Structure.from_atoms(labels, places), 1e-200)
        assert symmetry.group.symbol in ("C∞v", "C2v", "Cs")
        assert symmetry.deviation < 1e-11


def test_half_the_shortest_distance_is_the_largest_tolerance():
    structure = Structure.from_atoms(["H", "H"], [[0, 0, 0], [0, 0, 0.74]])
    assert find_symmetry(structure, 0.37).group.symbol == "D∞h"
    with pytest.raises(VibsymError, match="half the shortest"):
        find_symmetry(structure, 0.38)


def test_dummy_atoms_are_alike_by_kind_and_weigh_nothing():
    places = [[0, 0, 0], [1.5, 0, 0], [-1.5, 0, 0], [0, 1.5, 0], [0, -1.5, 0]]
    symmetry = find_symmetry(Structure.from_atoms(["Pt", "X", "X", "X", "X"], places))
    assert symmetry.group.symbol == "D4h"
    symmetry = find_symmetry(Structure.from_atoms(["Pt", "XL", "X", "X", "X"], places))
    assert symmetry.group.symbol == "C2v"
    assert np.abs(symmetry.positions[0]).max() < 1e-12


def test_operations_that_do_not_close_are_no_group():
    """Four atoms near a square: at a loose tolerance C4 is found, but its residual and its square's do not make one
    group.
    """
    structure = Structure.from_atoms(["F"] * 4, [[1, 0.03, 0], [0.01, 1.06, 0], [-1, 0, 0], [0, -1, 0.05]])
    centred = centre(structure)
    operations = find_operations(centred.points, centred.kinds, 0.04, centred.shortest)
    table = product_table(operations)
    for members in closed_subsets(table):
        inside = table[np.ix_(members, members)]
        assert set(inside.ravel().tolist()) == set(members)
    symmetry = find_symmetry(structure, 0.04)
    check_laws(symmetry)


@pytest.mark.parametrize(("symbol", "count"), [("C1", 1300), ("D3d", 1200), ("Ih", 1200)])
def test_large_structures(symbol, count):
    """Above a hundred atoms operations are products of a few generators, above a thousand the neighbours come from a
    tree.
    """
    rng = np.random.default_rng(31)
    group = point_group(symbol)
    points, radius = np.zeros((0, 3)), (4 * count) ** (1 / 3) + 2
    while len(points) < count:
        point = rng.normal(size=3)
        point *= radius * rng.uniform(0.05, 1) ** (1 / 3) / np.linalg.norm(point)
        images = group.matrices @ point
        if len(images) > 1 and shortest_between(images[1:], images[:1]) < 0.9:
            continue
        if len(points) and shortest_between(points, images) < 0.9:
            continue
        points = np.vstack((points, images))
    structure, _ = posed(["C"] * len(points), points, rng, 0.005)
    symmetry = find_symmetry(structure)
    assert symmetry.group.symbol == symbol
    check_laws(symmetry)


def shortest_between(first, second):
    return np.sqrt(((first[:, None] - second[None]) ** 2).sum(axis=2)).min()


def g2_names():
    from ase.collections import g2

    return g2.names


# Point groups of well-known molecules in ase's g2 set, from memory (G. Herzberg, Electronic Spectra of Polyatomic
# Molecules, 1966).
G2_KNOWN = {"CH4": "Td", "C6H6": "D6h", "C2H4": "D2h", "C2H6": "D3d", "H2O": "C2v", "CO2": "D∞h", "HCN": "C∞v",
            "NH3": "C3v",
            "BF3": "D3h", "CH3OH": "Cs", "SiH4": "Td", "C2H2": "D∞h", "H2O2": "C2", "CF4": "Td", "PF3": "C3v",
            "C3H4_D2d": "D2d", "cyclobutane": "D2d", "bicyclobutane": "C2v", "O3": "C2v", "N2H4": "C2",
            "C3H6_D3h": "D3h", "LiH": "C∞v", "Si2H6": "D3d", "C4H4O": "C2v", "C5H5N": "C2v", "C5H8": "D2d"}


@pytest.mark.parametrize("name", g2_names())
def test_ase_g2(name):
    from ase.collections import g2

    atoms = g2[name]
    symmetry = find_symmetry(Structure.from_atoms(atoms.get_chemical_symbols(), atoms.positions))
    check_laws(symmetry)
    if G2_KNOWN.get(name):
        assert symmetry.group.symbol == G2_KNOWN[name]
    if not symmetry.group.infinite:
        assert_spglib_agrees(symmetry)


def assert_spglib_agrees(symmetry):
    """The symmetrised molecule in a large box: spglib finds the operations of the group, no more and no fewer.

    The box is a hexagonal lattice with a along x for axes of order 3 and 6, a cubic one otherwise; it has the group's
    operations.
    """
    import spglib

    matrices = symmetry.group.matrices
    symbols = (re.match(r"[CS](\d+)", symbol) for symbol in symmetry.group.operation_symbols)
    orders = {int(match[1]) for match in symbols if match}
    if orders - {1, 2, 3, 4, 6}:
        pytest.skip(f"{symmetry.group.symbol} is not crystallographic")
    length = 4 * np.abs(symmetry.positions).max() + 8
    hexagonal = np.array([[1, 0, 0], [-0.5, 3 ** 0.5 / 2, 0], [0, 0, 1.3]])
    cubic_group = symmetry.group.symbol[0] in "TO"
    lattice = length * (hexagonal if orders & {3, 6} and not cubic_group else np.eye(3))
    # spglib takes any lattice symmetry, so a box higher than the group must not add any: the atoms see to that
    cell = (lattice, symmetry.positions @ np.linalg.inv(lattice), symmetry.structure.kinds + 1)
    found = spglib.get_symmetry(cell, symprec=1e-4)
    assert len(found["rotations"]) == symmetry.group.order
    cartesian = lattice.T @ found["rotations"] @ np.linalg.inv(lattice.T)
    gaps = np.abs(cartesian[:, None] - matrices[None]).max(axis=(2, 3))
    assert gaps.min(axis=1).max() < 1e-6


@pytest.mark.parametrize("symbol", ["C2h", "C4", "S4", "C4h", "D4", "C3", "S6", "C3h", "C6h", "D6", "D3h", "T", "Th",
                                    "O", "Td", "Oh"])
def test_spglib_finds_the_operations_of_crystallographic_groups(symbol):
    rng = np.random.default_rng(37)
    names, points = orbit_structure(symbol, rng)
    symmetry = find_symmetry(posed(names, points, rng)[0])
    assert symmetry.group.symbol == symbol
    assert_spglib_agrees(symmetry)
