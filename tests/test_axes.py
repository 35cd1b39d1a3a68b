"""Axes: the ladder of choice in the groups that leave a choice, the other settings, the words, and what is exchanged.

Expected labels: R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955) for planar C2v; Γvib of XeF4 (D4h, C2' through F) and
BrF5 (C4v, σv through F) from K. Nakamoto, Infrared and Raman Spectra of Inorganic and Coordination Compounds, from
memory.
"""

import numpy as np
import pytest
from orbits import gamma_3n, orbit_structure, random_rotation

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.groups.settings import settings
from vibsym.structures.axes import axis_words
from vibsym.structures.axis_choice import Elements, compare
from vibsym.structures.finder import find_symmetry
from vibsym.structures.structure import Structure

RING4 = np.array([[1, 0, 0], [0, 1, 0], [-1, 0, 0], [0, -1, 0.0]])
WATER = (["O", "H", "H"], [[0, 0, 0.12], [0.76, 0, -0.47], [-0.76, 0, -0.47]])
METHYLENE_CHLORIDE = (["C", "H", "H", "Cl", "Cl"],
                      [[0, 0, 0.77], [0.9, 0, 1.37], [-0.9, 0, 1.37], [0, 1.48, -0.22], [0, -1.48, -0.22]])
ETHYLENE = (["C", "C", "H", "H", "H", "H"],
            [[0.67, 0, 0], [-0.67, 0, 0], [1.24, 0.92, 0], [1.24, -0.92, 0], [-1.24, 0.92, 0], [-1.24, -0.92, 0]])
XEF4 = (["Xe"] + ["F"] * 4, np.vstack((np.zeros((1, 3)), 1.95 * RING4)))
BRF5 = (["Br"] + ["F"] * 5, np.vstack(([[0, 0, 0]], 1.77 * RING4 - [0, 0, 0.15], [[0, 0, 1.69]])))
DIBORANE = (["B", "B"] + ["H"] * 6,
            [[0, 0, 0.88], [0, 0, -0.88], [0.97, 0, 0], [-0.97, 0, 0], [0, 1.04, 1.47], [0, -1.04, 1.47],
             [0, 1.04, -1.47], [0, -1.04, -1.47]])
# a paddle of four Cl between two Re in the eclipsed form: 4 Cl on no C2' axis, but in mirror planes (Re2Cl8 2-)
DIRHENIUM = (["Re", "Re"] + ["Cl"] * 8,
             np.vstack(([[0, 0, 1.12], [0, 0, -1.12]], 2.27 * RING4 + [0, 0, 1.5], 2.27 * RING4 - [0, 0, 1.5])))
CASES = {"water": WATER, "CH2Cl2": METHYLENE_CHLORIDE, "C2H4": ETHYLENE, "XeF4": XEF4, "BrF5": BRF5, "B2H6": DIBORANE,
         "Re2Cl8": DIRHENIUM}


def symmetry_of(case, axes=None, seed=None, tolerance=0.02):
    names, places = CASES[case] if isinstance(case, str) else case
    places = np.array(places, dtype=float)
    if seed is None:
        return find_symmetry(Structure.from_atoms(names, places), tolerance, axes)
    rng = np.random.default_rng(seed)
    order = rng.permutation(len(names))
    turned = places[order] @ random_rotation(rng).T + 1.0
    return find_symmetry(Structure.from_atoms([names[k] for k in order], turned), tolerance, axes)


GAMMA = {
    "water": "3A1 + A2 + 2B1 + 3B2",                                    # molecule in yz: in-plane antisymmetric is B2
    "CH2Cl2": "5A1 + 2A2 + 4B1 + 4B2",
    "XeF4": "A1g + A2g + B1g + B2g + Eg + 2A2u + B2u + 3Eu",            # C2' through F: stretches A1g + B1g + Eu
    "BrF5": "4A1 + A2 + 2B1 + B2 + 5E",                                 # σv through F: equatorial stretches A1 + B1 + E
}


@pytest.mark.parametrize("case", GAMMA)
@pytest.mark.parametrize("seed", [None, 1, 2, 3])
def test_labels_do_not_depend_on_the_pose(case, seed):
    from vibsym.groups.reduction import write_reduction

    assert write_reduction(gamma_3n(symmetry_of(case, seed=seed))) == GAMMA[case]


@pytest.mark.parametrize("seed", [1, 2])
@pytest.mark.parametrize("case", CASES)
def test_gamma_in_any_pose(case, seed):
    assert gamma_3n(symmetry_of(case, seed=seed)) == gamma_3n(symmetry_of(case))


def test_planar_c2v_has_x_perpendicular_to_the_plane():
    symmetry = symmetry_of("water", seed=5)
    assert np.abs(symmetry.positions[:, 0]).max() < 1e-9
    choice = axis_words(symmetry)
    assert choice.words["x"] == "perpendicular to the molecular plane"
    assert "through atom O" in choice.words["z"]
    assert choice.exchange == ("B1 <-> B2",)
    assert choice.decided
    assert any("Shimanouchi" in note for note in choice.notes)


def test_other_c2v_has_more_atoms_or_heavier_ones_in_yz():
    """Both mirrors of CH2Cl2 hold three atoms and two bonds in and two cut; the sum of atomic numbers decides for
    CCl2.
    """
    symmetry = symmetry_of("CH2Cl2")
    assert np.abs(symmetry.positions[3:, 0]).max() < 1e-9
    assert axis_words(symmetry).decided


def test_ethylene_and_diborane():
    ethylene = symmetry_of("C2H4", seed=3)
    words = axis_words(ethylene).words
    assert words["x"] == "perpendicular to the molecular plane"
    assert "through atoms C" in words["z"]
    assert "midpoint of bond C" in words["y"]
    diborane = symmetry_of("B2H6")
    assert np.abs(diborane.positions[:2, :2]).max() < 1e-9          # z along B-B: two atoms, heavier than two H
    assert np.abs(diborane.positions[4:, 0]).max() < 1e-9           # x perpendicular to the plane with B2H4 (six atoms)


def test_c2_dash_goes_through_atoms():
    symmetry = symmetry_of("XeF4", seed=9)
    assert (np.abs(symmetry.positions[:, 1]) < 1e-9).sum() == 3
    assert axis_words(symmetry).words["x"].startswith("C2' axis, in the molecular plane, through atoms ")
    # no atom lies on any C2' of Re2Cl8: the mirror planes that hold them decide
    symmetry = symmetry_of("Re2Cl8", seed=9)
    assert symmetry.group.symbol == "D4h"
    assert (np.abs(symmetry.positions[:, 1]) < 1e-9).sum() == 6


def test_sigma_v_of_c4v_holds_the_atoms():
    symmetry = symmetry_of("BrF5", seed=4)
    assert (np.abs(symmetry.positions[:, 1]) < 1e-9).sum() == 4
    words = axis_words(symmetry).words
    assert words["z"].startswith("C4 axis, through atoms")


@pytest.mark.parametrize(("case", "axes"), [
    ("water", "swap"), ("water", "yxz"), ("XeF4", "swap"), ("BrF5", "swap"), ("C2H4", "xzy"), ("C2H4", "zyx"),
    ("C2H4", "yxz"), ("C2H4", "yzx"), ("C2H4", "zxy")])
def test_other_settings_exchange_what_is_said(case, axes):
    default, other = symmetry_of(case), symmetry_of(case, axes)
    assert other.group is default.group
    image = other.group.matrices
    carried = other.positions @ image.transpose(0, 2, 1)
    assert np.abs(carried - other.positions[other.permutations]).max() < 1e-9
    before, after = gamma_3n(default), gamma_3n(other)
    if axes in ("swap", "yxz", "xzy", "zyx"):
        texts = [t for t in axis_words(default).exchange if "(" not in t or axes in t]
        table = {}
        for text in texts:
            for pair in text.split(" (")[0].split(", "):
                one, two = pair.split(" <-> ")
                table |= {one: two, two: one}
        assert {table.get(label, label): count for label, count in before.items()} == after
    else:
        assert sorted(before.values()) == sorted(after.values())
    if len(axes) == 3:
        for new, old in enumerate(axes):
            assert abs(abs(other.frame[new] @ default.frame["xyz".index(old)]) - 1) < 1e-9
    assert f"axes chosen by --axes {axes}" in axis_words(other).notes


def test_asking_for_the_default_changes_nothing():
    assert np.allclose(symmetry_of("C2H4", "xyz").frame, symmetry_of("C2H4").frame)


@pytest.mark.parametrize(("case", "axes", "telling"), [
    ("water", "zyx", "swap, yxz"), ("C2H4", "swap", "xzy"), ("XeF4", "yxz", "swap"),
                                                       ((["C", "O"], [[0, 0, 0], [0, 0, 1.1]]), "swap", "no choice")])
def test_impossible_settings(case, axes, telling):
    with pytest.raises(VibsymError, match=telling) as error:
        symmetry_of(case, axes)
    assert "\n" not in str(error.value)


@pytest.mark.parametrize("symbol", ["C1", "Cs", "Ci", "C2", "C3", "C2h", "C3v", "C5v", "C4", "C4h", "D3", "D3h", "D5h",
                                    "D2d", "D3d", "D4d", "S4", "S8", "T", "Td", "Th", "O", "Oh", "I", "Ih", "C∞v",
                                    "D∞h", "Kh"])
def test_no_choice(symbol):
    assert list(settings(symbol)) == ["xyz"]


@pytest.mark.parametrize("symbol", ["C2v", "C4v", "C6v", "C8v", "D2", "D4", "D6", "D8", "D2h", "D4h", "D6h", "D8h",
                                    "D10h"])
def test_every_setting_is_a_standard_orientation_and_differs_in_labels(symbol):
    """The turn carries the group into itself, and some species changes its characters under it."""
    group = point_group(symbol)
    for name, turn in settings(symbol).items():
        assert np.linalg.det(turn) == pytest.approx(1)
        turned = turn @ group.matrices @ turn.T
        places = np.abs(turned[:, None] - group.matrices[None]).max(axis=(2, 3)).argmin(axis=1)
        assert np.abs(turned - group.matrices[places]).max() < 1e-9
        rows = [(s.label, np.array(s.characters)[group.class_of]) for s in group.species]
        changed = [label for label, row in rows if not np.allclose(row, row[places])]
        assert bool(changed) == (name != "xyz")
        assert all(label.startswith("B") for label in changed)


def test_atomic_numbers_decide_between_two_squares():
    """Ne4 and Ar4, squares of one size turned by 45 degrees: two atoms on every C2', the axes through Ar are C2'."""
    turn = np.array([[1, 1, 0], [-1, 1, 0], [0, 0, 2 ** 0.5]]) / 2 ** 0.5
    symmetry = symmetry_of((["Ne"] * 4 + ["Ar"] * 4, np.vstack((2 * RING4, 2 * RING4 @ turn))))
    assert symmetry.group.symbol == "D4h"
    assert (np.abs(symmetry.positions[4:, 1]) < 1e-9).sum() == 2
    assert axis_words(symmetry).decided


def test_undecided_is_said_and_does_not_depend_on_the_pose():
    """Six like atoms on three axes, two of the lengths 0.0005 Å apart: D2h at 1e-4 Å, and no rule tells x from y."""
    places = np.array([[2, 0, 0], [-2, 0, 0], [0, 2.0005, 0], [0, -2.0005, 0], [0, 0, 3], [0, 0, -3]])
    symmetry = symmetry_of((["Ne"] * 6, places), tolerance=1e-4)
    assert symmetry.group.symbol == "D2h"
    choice = axis_words(symmetry)
    assert not choice.decided
    assert any("not decided by rule" in note for note in choice.notes)
    rng = np.random.default_rng(53)
    for _ in range(5):
        turned = find_symmetry(Structure.from_atoms(["Ne"] * 6, places @ random_rotation(rng).T), 1e-4)
        assert axis_words(turned).words == choice.words


def test_the_ladder_of_choice_step_by_step():
    positions = np.array([[0, 0, 1], [0, 0, -1], [2, 0, 0], [-2, 0, 0.0]])
    numbers, masses = np.array([6, 6, 8, 8]), np.array([12.0, 12.0, 16.0, 16.0])
    bonds = np.array([[0, 1]])
    elements = Elements(positions, numbers, masses, bonds)
    x, y, z = np.eye(3)
    assert elements.axis(z).tolist() == [2, 1, 12, 24, 2, 2]
    assert elements.axis(x).tolist() == [2, 1, 16, 32, 1, 1]           # the bond is cut at its midpoint
    assert elements.axis(y).tolist() == [0, 1, 0, 0, 1, 1, 2, 2]
    assert elements.plane(z).tolist() == [2, 1, 16, 32, 1, 1]
    assert elements.plane(y).tolist() == [4, 1, 28, 56]
    assert compare(elements.axis(x), elements.axis(z)) == 1
    assert compare(elements.axis(y), elements.axis(z)) == -1
    assert compare(elements.axis(z), elements.axis(z)) == 0
    assert compare(np.array([0, 0, 0, 0, 2.0, 3.0]), np.array([0, 0, 0, 0, 2.0, 2.5])) == 1


@pytest.mark.parametrize("symbol", ["C1", "Ci", "Cs", "C3", "C2h", "S4", "C3v", "D3", "D3d", "D4d", "Td", "Th", "Oh",
                                    "Ih", "D6h", "C6v"])
def test_words_name_real_atoms_in_every_group(symbol):
    rng = np.random.default_rng(47)
    names, points = orbit_structure(symbol, rng, special=symbol not in ("C1", "Ci"))
    first = axis_words(find_symmetry(Structure.from_atoms(names, points)))
    assert set(first.words) == set("xyz")
    assert all(first.words.values())
    # the words do not depend on how the structure lies
    turned = points @ random_rotation(rng).T + rng.normal(size=3)
    assert axis_words(find_symmetry(Structure.from_atoms(names, turned))).words == first.words


def test_words_of_lines_and_atoms():
    line = find_symmetry(Structure.from_atoms(["C", "O"], [[0, 0, 0], [0, 0, 1.1]]))
    assert axis_words(line).words == {"z": "molecular axis"}
    assert axis_words(find_symmetry(Structure.from_atoms(["He"], [[0, 0, 0]]))).words == {}


def test_words_of_bf3():
    angles = np.arange(3) * 2 * np.pi / 3
    flat = np.column_stack((1.31 * np.cos(angles), 1.31 * np.sin(angles), np.zeros(3)))
    choice = axis_words(find_symmetry(Structure.from_atoms(["B", "F", "F", "F"], np.vstack(([[0, 0, 0]], flat)))))
    assert choice.words["z"] == "perpendicular to the molecular plane"
    assert choice.words["x"] == "C2 axis, in the molecular plane, through atoms B1 and F2"
    assert choice.exchange == ()


@pytest.mark.parametrize("symbol", ["C2v", "D2", "D2h", "C4v", "C6v", "C8v", "D4", "D6", "D4h", "D6h", "D8h"])
@pytest.mark.parametrize("special", [True, False], ids=["special", "general"])
def test_words_tell_every_setting_from_the_others(symbol, special):
    """Whoever reads the words can say which setting it is: they differ wherever the labels do."""
    names, points = orbit_structure(symbol, np.random.default_rng(5), special=special)
    if symbol[-1] != "v":
        names, points = [*names, "S"], np.vstack((points, np.zeros(3)))
    structure = Structure.from_atoms(names, points)
    told = [tuple(axis_words(find_symmetry(structure, axes=None if axes == "xyz" else axes)).words.values())
            for axes in settings(symbol)]
    assert len(set(told)) == len(settings(symbol))


@pytest.mark.parametrize(("symbol", "z", "x"), [
    ("C1", "not fixed by symmetry", "not fixed by symmetry"), ("Ci", "not fixed by symmetry", "not fixed by symmetry"),
    ("Cs", "perpendicular to the mirror plane", "in the mirror plane, direction not fixed by symmetry"),
    ("C2h", "C2 axis", "in the mirror plane, direction not fixed by symmetry"),
    ("C3", "C3 axis", "not fixed by symmetry"),
    ("S4", "S4 axis", "not fixed by symmetry")])
def test_axes_that_no_operation_fixes_are_called_so(symbol, z, x):
    names, points = orbit_structure(symbol, np.random.default_rng(8), special=symbol not in ("C1", "Ci"))
    words = axis_words(find_symmetry(Structure.from_atoms(names, points))).words
    assert words["z"].startswith(z)
    assert words["x"] == words["y"] == x


def test_planes_are_named_by_atoms_off_the_axis():
    """The four atoms on the axis of M(CO)5X lie in all planes; the carbonyls tell which plane is meant."""
    on_axis = [[0, 0, 0], [0, 0, -2.6], [0, 0, 1.85], [0, 0, 3.0]]
    names = ["Mn", "Br", "C", "O"] + ["C"] * 4 + ["O"] * 4
    points = np.vstack((on_axis, 1.85 * RING4 - [0, 0, 0.1], 3.0 * RING4 - [0, 0, 0.1]))
    words = axis_words(find_symmetry(Structure.from_atoms(names, points))).words
    assert {words["x"], words["y"]} == {
        "perpendicular to the mirror plane through atoms C5, C7, O9, O11 and 4 more",
        "perpendicular to the mirror plane through atoms C6, C8, O10, O12 and 4 more"}


def square_orbit(x, y):
    """Return the four or eight images of a point of the plane under the rotations and mirrors of a square."""
    images = {(round(float(p), 9), round(float(q), 9)) for a, b in ((x, y), (x, -y), (y, x), (y, -x))
              for p, q in ((a, b), (-a, -b))}
    return np.array([(p, q, 0.0) for p, q in sorted(images)])


def porphyrin():
    """Return a flat metalloporphin, idealised: N on x and y, meso C-H on the diagonals."""
    shells = [("Zn", 0, 0), ("N", 2.05, 0), ("C", 2.85, 1.1), ("C", 4.24, 0.68), ("H", 5.05, 1.4), ("C", 2.43, 2.43),
              ("H", 3.2, 3.2)]
    parts = [(name, square_orbit(x, y)) for name, x, y in shells]
    return [name for name, points in parts for _ in points], np.vstack([points for _, points in parts])


def naphthalene():
    """Return naphthalene with regular rings, its central bond on y."""
    side = 1.4 * 3 ** 0.5 / 2
    carbons = [(0, .7), (0, -.7)] + [(s * side, t * 1.4) for s in (1, -1) for t in (1, -1)]
    carbons += [(s * 2 * side, t * .7) for s in (1, -1) for t in (1, -1)]
    hydrogens = [(s * side, t * 2.48) for s in (1, -1) for t in (1, -1)]
    hydrogens += [(s * (side + 2.48 * 3 ** 0.5 / 2), t * 1.24) for s in (1, -1) for t in (1, -1)]
    return ["C"] * 10 + ["H"] * 8, np.array([(x, y, 0.0) for x, y in carbons + hydrogens])


@pytest.mark.parametrize(("case", "symbol", "telling"), [
    ("water", "C2v", "Shimanouchi's tables"), ("C2H4", "D2h", "x along C=C"), ("B2H6", "D2h", "x along B–B"),
    ("XeF4", "D4h", "both choices of C2'"), (porphyrin(), "D4h", "literature puts C2' through N"),
    (naphthalene(), "D2h", "several choices of axes for naphthalene")],
    ids=["water", "ethylene", "diborane", "XeF4", "porphyrin", "naphthalene"])
def test_known_clashes_with_print_are_told(case, symbol, telling):
    symmetry = symmetry_of(case, seed=4)
    assert symmetry.group.symbol == symbol
    assert any(telling in note for note in axis_words(symmetry).notes)


def test_porphyrin_and_naphthalene_by_the_ladder_of_choice():
    """More atoms decide: C2' through the meso C-H (5 atoms against 3); z of naphthalene through the central bond.

    Naphthalene: 9Ag + 3B1g + 4B2g + 8B3g + 4Au + 8B1u + 8B2u + 4B3u, x across the plane (in-plane 9 + 8 + 8 + 8 = 33).
    """
    from vibsym.vibrations.cartesian import displacements

    names, points = porphyrin()
    x = find_symmetry(Structure.from_atoms(names, points)).frame[0]
    assert abs(abs(x[0]) - abs(x[1])) < 1e-9
    assert displacements(symmetry_of(naphthalene(), seed=5)).gamma_vib == {
        "Ag": 9, "B1g": 3, "B2g": 4, "B3g": 8, "Au": 4, "B1u": 8, "B2u": 8, "B3u": 4}
