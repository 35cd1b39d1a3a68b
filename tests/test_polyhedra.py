"""The ideal coordination shapes: groups follow from the sites, edges from the hull, names from IUPAC."""

import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.structures.finder import find_symmetry
from vibsym.structures.placing import place
from vibsym.structures.polyhedra import exact_number, shape, shapes

# Polyhedral symbols and shapes: IUPAC, Nomenclature of Inorganic Chemistry, Recommendations 2005, tables IR-9.2 and
# IR-9.3 (from memory); groups of the shapes drawn there (typed independently of tables/polyhedra.csv).
IUPAC = {
    "L-2": "D∞h", "A-2": "C2v", "TP-3": "D3h", "TPY-3": "C3v", "TS-3": "C2v", "T-4": "Td", "SP-4": "D4h",
    "SPY-4": "C4v",
    "SS-4": "C2v", "TBPY-5": "D3h", "SPY-5": "C4v", "OC-6": "Oh", "TPR-6": "D3h", "PBPY-7": "D5h", "OCF-7": "C3v",
    "TPRS-7": "C2v", "CU-8": "Oh", "SAPR-8": "D4d", "DD-8": "D2d", "HBPY-8": "D6h", "OCT-8": "D3d", "TPRT-8": "D3h",
    "TPRS-8": "C2v", "TPRS-9": "D3h", "HBPY-9": "D7h",
}
# Edges of the convex polyhedra, counted on models: octahedron 12, cube 12, trigonal prism 9, square antiprism 16,
# dodecahedron (triangular faces) 18, bipyramids 3n; each square-face cap adds 4 edges, each triangular-face cap 3.
EDGES = {"T-4": 6, "TBPY-5": 9, "SPY-5": 8, "OC-6": 12, "TPR-6": 9, "PBPY-7": 15, "OCF-7": 15, "TPRS-7": 13, "CU-8": 12,
         "SAPR-8": 16, "DD-8": 18, "HBPY-8": 18, "OCT-8": 18, "TPRT-8": 15, "TPRS-8": 17, "TPRS-9": 21, "HBPY-9": 21}
FLAT = {"TP-3": 3, "SP-4": 4}                   # polygons: as many edges as corners


def test_the_symbols_are_those_of_iupac():
    assert {symbol: found.group.symbol for symbol, found in shapes().items()} == IUPAC
    assert all(int(symbol.rpartition("-")[2]) == len(found) for symbol, found in shapes().items())


@pytest.mark.parametrize("symbol", IUPAC)
def test_every_operation_of_the_group_permutes_the_sites(symbol):
    found = shape(symbol)
    moved = np.einsum("rab,jb->rja", found.image.matrices, found.directions)
    np.testing.assert_allclose(moved, found.directions[found.permutations], atol=1e-9)
    product = found.image.product
    for a in range(found.image.order):
        assert np.array_equal(found.permutations[product[a]], found.permutations[a][found.permutations])


@pytest.mark.parametrize("symbol", IUPAC)
def test_the_group_is_the_whole_group(symbol):
    """The finder, which knows nothing of the table, sees in centre and equal ligands the group of the shape."""
    complex_ = place(symbol, "W", ["F"] * len(shape(symbol)))
    assert find_symmetry(complex_).group.symbol == IUPAC[symbol]


@pytest.mark.parametrize("symbol", EDGES)
def test_neighbours_are_the_edges_of_the_hull(symbol):
    from scipy.spatial import ConvexHull

    found = shape(symbol)
    hull = ConvexHull(found.directions)
    faces: dict[tuple, set] = {}
    for equation, corners in zip(hull.equations, hull.simplices):
        faces.setdefault(tuple(np.round(equation, 6) + 0.0), set()).update(corners.tolist())
    kept = list(faces.values())
    edges = {frozenset(one & other) for k, one in enumerate(kept) for other in kept[:k] if len(one & other) == 2}
    listed = {frozenset(map(int, pair)) for pair in np.argwhere(found.neighbours)}
    assert listed == edges
    assert len(edges) == EDGES[symbol]


@pytest.mark.parametrize("symbol", FLAT)
def test_neighbours_in_polygons_are_the_sides(symbol):
    assert shape(symbol).neighbours.sum() == 2 * FLAT[symbol]


@pytest.mark.parametrize("symbol", IUPAC)
def test_neighbours_and_places_have_the_symmetry_of_the_shape(symbol):
    found = shape(symbol)
    for targets in found.permutations:
        assert np.array_equal(found.neighbours[np.ix_(targets, targets)], found.neighbours)
        assert all(found.places[j] == found.places[k] for j, k in enumerate(targets))


def test_ligands_do_not_crowd():
    """The nearest sites (HBPY-9) are 0.87 bond lengths apart, so that 1.2 × radii does not bond ligand to ligand."""
    for found in shapes().values():
        distance = np.linalg.norm(found.directions[:, None] - found.directions, axis=2) + 9 * np.eye(len(found))
        assert distance.min() > 0.86, found.symbol


def test_trans_sites():
    assert shape("OC-6").opposite == (5, 3, 4, 1, 2, 0)
    assert shape("TBPY-5").opposite == (1, 0, None, None, None)
    assert shape("T-4").opposite == (None,) * 4
    assert shape("HBPY-9").opposite[2:] == (None,) * 7


def test_placing_puts_donors_first_and_keeps_the_lengths():
    complex_ = place("OC-6", "Mo", ["CO"] * 5 + ["L"])
    assert complex_.symbols == ("Mo", *("C", "O") * 5, "XL")
    distance = np.linalg.norm(complex_.positions, axis=1)
    np.testing.assert_allclose(distance[1:11:2], 1.54 + 0.76)              # covalent radii of Cordero et al. (2008)
    np.testing.assert_allclose(distance[2:11:2] - distance[1:11:2], 1.14)
    assert len(complex_.bonds) == 11


def test_placed_structures_are_found_again():
    assert find_symmetry(place("OC-6", "W", ["CO"] * 6)).group.symbol == "Oh"
    assert find_symmetry(place("T-4", "Ni", ["CO"] * 3 + ["L"])).group.symbol == "C3v"
    assert find_symmetry(place("L-2", "Hg", ["Cl", "CN"])).group.symbol == "C∞v"


@pytest.mark.parametrize(("arguments", "words"), [
    (("OC-7", "Mo", ["CO"] * 7), "no coordination shape 'OC-7'"),
    (("OC-6", "Mo", ["CO"] * 5), "5 ligands for OC-6, which has 6 sites"),
    (("OC-6", "M!", ["CO"] * 6), "centre 'M!'"),
    (("OC-6", "Co", ["en"] * 6), "en is a chelate"),
])
def test_what_cannot_be_placed_is_told_in_one_line(arguments, words):
    with pytest.raises(VibsymError) as error:
        place(*arguments)
    assert words in str(error.value) and "\n" not in str(error.value)


def test_numbers_of_the_table_are_read_exactly():
    assert exact_number("1/2/sqrt(sqrt(2))") == pytest.approx(2 ** -1.25, abs=1e-15)
    assert exact_number("-sin(36.9)*cos(45)") == pytest.approx(-np.sin(np.radians(36.9)) / np.sqrt(2), abs=1e-15)
    assert exact_number("cos(720/7)") == pytest.approx(np.cos(4 * np.pi / 7), abs=1e-15)
    with pytest.raises(VibsymError, match="not a number"):
        exact_number("__import__")


def test_groups_of_the_table_are_known():
    assert all(point_group(found.group.symbol) is found.group for found in shapes().values())
