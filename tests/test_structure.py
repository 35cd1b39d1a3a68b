"""The structure itself: kinds, formula, isotopes, what is accepted from other programs' objects, what is refused."""

from types import SimpleNamespace

import numpy as np
import pytest
from ase import Atoms
from ase.build import molecule

from vibsym.errors import VibsymError
from vibsym.structures.elements import average_mass, mass
from vibsym.structures.structure import Structure, structure_of

LINE = np.arange(30.0).reshape(10, 3) * 2


def made(labels, masses=None) -> Structure:
    return Structure.from_atoms(labels, LINE[:len(labels)], masses)


@pytest.mark.parametrize("labels, formula", [
    (["O", "H", "H"], "H2O"), (["C", "H", "D", "D", "D"], "CHD3"), (["N", "H", "H", "H"], "H3N"),
    (["Br", "H", "C", "Al"], "CHAlBr"),
    (["H", "13C", "N"], "(13C)HN"), (["13C", "C", "O"], "C(13C)O"), (["Cl", "37Cl"], "Cl(37Cl)"),
    (["D", "T", "H"], "HDT"),
    (["Mo", "C", "O", "XL"], "CMoO·(XL)"), (["X", "X"], "X2"), (["12C", "1H"], "CH"), (["O", "18O", "18O"], "O(18O)2"),
    (["Xe", "F", "F"], "F2Xe"), ([1, 8, 1], "H2O"),
])
def test_formula_in_the_order_of_hill(labels, formula):
    assert made(labels).formula == formula


def test_kinds_follow_element_and_mass():
    structure = made(["H", "C", "H", "D", "1H", "13C", "12C", "X", "XL", "X"])
    assert structure.kinds.tolist() == [0, 1, 0, 2, 0, 3, 1, 4, 5, 4]


@pytest.mark.parametrize("masses, kinds", [
    ((1.008, 1.00783, 1.008), [0, 0, 0]), ((12.0, 12.011, 12.0), [0, 1, 0]),
    ((12.0, 12.009, 12.005), [0, 0, 0]),
    ((12.011, 12.011, 12.011), [0, 0, 0]), ((13.003, 12.0, 13.0034), [0, 1, 0]),
])
def test_masses_within_a_hundredth_are_alike(masses, kinds):
    assert made(["H" if masses[0] < 2 else "C"] * 3, masses).kinds.tolist() == kinds


def test_default_masses_are_of_the_most_abundant_isotope():
    structure = made(["Cl", "Br", "D", "13C"])
    assert structure.masses.tolist() == [mass("Cl", 35), mass("Br", 79), mass("H", 2), mass("C", 13)]
    assert structure.mass_numbers == (None, None, 2, 13)


def test_average_masses_never_change_what_is_alike():
    structure = made(["Cl", "37Cl", "D", "C", "X"])
    mean = structure.with_average_masses()
    assert mean.masses[[0, 1, 2, 3]].tolist() == [average_mass("Cl"), mass("Cl", 37), mass("H", 2), average_mass("C")]
    assert mean.kinds.tolist() == structure.kinds.tolist() and mean.formula == structure.formula
    assert np.isnan(mean.masses[4])


def test_with_isotopes():
    water = made(["O", "H", "H"])
    heavy = water.with_isotopes({1: 2, 2: 2, 0: 18})
    assert heavy.formula == "D2(18O)" and heavy.kinds.tolist() == [0, 1, 1] and water.formula == "H2O"
    assert heavy.with_isotopes({1: None, 2: 1, 0: 16}).formula == "H2O"
    assert water.with_isotopes({1: 2}).kinds.tolist() == [0, 1, 2]
    for bad in ({3: 2}, {-1: 2}, {0: 99}):
        with pytest.raises(VibsymError):
            water.with_isotopes(bad)
    with pytest.raises(VibsymError, match="dummy"):
        made(["X", "H"]).with_isotopes({0: 2})


def test_a_structure_cannot_be_changed():
    water = made(["O", "H", "H"])
    for name in ("positions", "masses", "kinds", "numbers", "is_dummy"):
        with pytest.raises(ValueError, match="read-only"):
            getattr(water, name)[0] = 0
    with pytest.raises(AttributeError):
        water.symbols = ()
    own = np.array(LINE[:3])
    structure = Structure.from_atoms("OHH", own)
    own[0] = 99
    assert structure.positions[0].tolist() == [0, 2, 4]


def test_moved_keeps_the_rest():
    water = made(["O", "H", "D"])
    moved = water.moved(water.positions + 1)
    assert moved.formula == "HDO" and moved.positions[0].tolist() == [1, 3, 5] and moved.kinds is water.kinds
    assert water.with_notes("a", "b").notes == ("a", "b") and water.notes == ()


def test_json_object():
    assert made(["O", "H", "D"]).to_dict() == {"source": "", "formula": "HDO", "atoms": 3}


def test_objects_of_ase():
    water = molecule("H2O")
    assert structure_of(water).masses[0] == mass("O"), "ase's default masses are means; they are not taken"
    water.set_masses([18, 2.014, 1.008])
    assert structure_of(water).formula == "HD(18O)"
    boxed = Atoms("H2O", LINE[:3], cell=[9, 9, 9], pbc=True)
    assert structure_of(boxed).notes == ("the lattice is ignored: the atoms are taken as one molecule",)
    assert structure_of(Atoms("XNe", LINE[:2])).is_dummy.tolist() == [True, False]


def test_objects_with_symbols_and_positions():
    thing = SimpleNamespace(symbols=["O", "H", "D"], positions=LINE[:3].tolist())
    assert structure_of(thing).formula == "HDO"
    thing.masses = [15.99, 1.008, 2.014]
    assert structure_of(thing).masses.tolist() == thing.masses
    structure = structure_of(thing)
    assert structure_of(structure) is structure
    for other in (None, 7, "water.xyz", SimpleNamespace(symbols=["O"])):
        with pytest.raises(VibsymError, match="symbols and positions"):
            structure_of(other)


@pytest.mark.parametrize("labels, positions, masses, told", [
    ([], np.zeros((0, 3)), None, "no atoms"), (["H"], [[0, 0]], None, "shape"),
    (["H", "H"], [[0, 0, 0]], None, "shape"),
    (["H"], [["a", 0, 0]], None, "not numbers"), (["H"], [[np.nan, 0, 0]], None, "coordinate nan"),

    (["H", "O"], [[0, 0, 0], [0, np.inf, 0]], None, r"atom 2 \(O\) has the coordinate inf"),
    (["H"], [[2e6, 0, 0]], None, "at most"),
    (["Q"], [[0, 0, 0]], None, "not an element"),
    (["H", "O"], [[0, 0, 0], [0, 0, 0.05]], None, r"atoms 1 \(H\) and 2 \(O\)"),
    (["H"], [[0, 0, 0]], [1, 2], "2 masses for 1"), (["H"], [[0, 0, 0]], ["x"], "masses are not numbers"),
    (["H"], [[0, 0, 0]], [0], "mass 0"), (["H"], [[0, 0, 0]], [float("nan")], "mass nan"),
    (["C"], [[0, 0, 0]], [200], "mass 200"),
    (["H"], [[0, 0, 0], [0]], None, "not numbers"),
])
def test_nonsense_is_refused_in_one_line(labels, positions, masses, told):
    with pytest.raises(VibsymError, match=told) as error:
        Structure.from_atoms(labels, positions, masses, source="thing")
    assert str(error.value).startswith("thing: ") and "\n" not in str(error.value)


def test_atoms_close_to_each_other_are_questioned():
    """Coordinates in nanometres bring atoms to 0.1 Å of each other."""
    water = molecule("H2O")
    notes = structure_of(SimpleNamespace(symbols=water.get_chemical_symbols(), positions=water.positions * 0.2)).notes
    assert len(notes) == 1 and "in Å?" in notes[0]
    assert structure_of(molecule("H2")).notes == ()


def test_a_big_structure_is_checked_for_twins_too():
    rng = np.random.default_rng(1)
    positions = rng.permutation(np.stack(np.meshgrid(*[np.arange(13.0)] * 3), axis=-1).reshape(-1, 3))
    positions[777] = positions[1234]
    with pytest.raises(VibsymError, match=r"atoms 778 \(C\) and 1235 \(C\) lie on one spot"):
        Structure.from_atoms(["C"] * len(positions), positions)
