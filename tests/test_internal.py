"""Internal coordinates: which there are, how they are named, what every operation does to them, and that they
suffice."""

from dataclasses import replace

import internal_cases as cases
import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.groups.bases import Basis
from vibsym.spectra.regions import regions
from vibsym.structures.bonds import find_bonds
from vibsym.structures.equivalent_bonds import symmetric_bonds
from vibsym.structures.finder import find_symmetry
from vibsym.structures.structure import Structure
from vibsym.vibrations.bmatrix import b_matrix
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.internal import internal_coordinates, select
from vibsym.vibrations.naming import KINDS
from vibsym.vibrations.representation import coordinate_basis

EVERY = tuple(cases.SHAPES)


def gammas(symmetry):
    """Return the reduction of every set, with the labels of the group."""
    labels = symmetry.group.image_labels
    return {each.name: {labels[label]: n for label, n in coordinate_basis(symmetry, each).reduce().items()}
            for each in internal_coordinates(symmetry)}


@pytest.mark.parametrize("name", EVERY)
def test_coordinates_move_as_the_representation_says(name):
    """Law: B R = T(R) B for every operation, R on displacements, T on coordinates: it proves every sign and
    direction."""
    symmetry = cases.symmetry(name)
    group = symmetry.group.image
    displaced = Basis.displacements(group, symmetry.permutations)
    for each in internal_coordinates(symmetry):
        b, basis = b_matrix(symmetry.positions, [each]), coordinate_basis(symmetry, each)
        for operation in range(group.order):
            assert np.abs(b @ displaced.matrix(operation) - basis.matrix(operation) @ b).max() < 1e-9, each.name


@pytest.mark.parametrize("name", EVERY)
def test_bonded_molecules_are_described_completely(name):
    """The rank of B is 3N - 6 (3N - 5): counted here on B as a whole, without any species."""
    symmetry = cases.symmetry(name)
    b = b_matrix(symmetry.positions, internal_coordinates(symmetry))
    sizes = np.linalg.svd(b, compute_uv=False)
    assert (sizes > 1e-6 * sizes[0]).sum() == round(displacements(symmetry).chi_vib[0])


@pytest.mark.parametrize("name, expected", [
    # textbook stretches and bends; conventions of the signs: BF3 wag A2'', H2CO wag B1, C2H4 wags B3u + B2g, torsion Au
    # (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955; K. Nakamoto, 1997; from memory)
    ("SO3", {"stretch S-O": {"A1'": 1, "E'": 1}, "bend O-S-O": {"A1'": 1, "E'": 1}, "wag SO3": {"A2''": 1}}),
    ("PCl3", {"stretch P-Cl": {"A1": 1, "E": 1}, "bend Cl-P-Cl": {"A1": 1, "E": 1}}),
    ("H2CO", {"stretch C-H": {"A1": 1, "B2": 1}, "stretch C-O": {"A1": 1}, "bend H-C-H": {"A1": 1},
              "bend H-C-O": {"A1": 1, "B2": 1}, "wag CH2O": {"B1": 1}}),
    ("C2H4", {"stretch C-C": {"Ag": 1}, "stretch C-H": {"Ag": 1, "B3g": 1, "B1u": 1, "B2u": 1},
              "bend C-C-H": {"Ag": 1, "B3g": 1, "B1u": 1, "B2u": 1}, "bend H-C-H": {"Ag": 1, "B1u": 1},
              "wag CCH2": {"B2g": 1, "B3u": 1}, "torsion C-C": {"Au": 1}}),
    ("CH4", {"stretch C-H": {"A1": 1, "T2": 1}, "bend H-C-H": {"A1": 1, "E": 1, "T2": 1}}),
    ("SF6", {"stretch S-F": {"A1g": 1, "Eg": 1, "T1u": 1},
             "bend F-S-F": {"A1g": 1, "Eg": 1, "T2g": 1, "T1u": 1, "T2u": 1}}),
    ("XeF4", {"stretch Xe-F": {"A1g": 1, "B1g": 1, "Eu": 1}, "bend F-Xe-F": {"A1g": 1, "B2g": 1, "Eu": 1},
              "wag XeF4": {"A2u": 1, "B2u": 1}}),
    ("IF7, D5h", {"stretch I-F": {"A1'": 2, "E1'": 1, "E2'": 1, "A2''": 1}}),
    ("BrF5, C4v", {"stretch Br-F": {"A1": 2, "B1": 1, "E": 1}}),
    ("CO2", {"stretch C-O": {"Σg+": 1, "Σu+": 1}, "linear bend O-C-O": {"Πu": 1}}),
    ("C2H2", {"stretch C-C": {"Σg+": 1}, "stretch C-H": {"Σg+": 1, "Σu+": 1},
              "linear bend C-C-H": {"Πg": 1, "Πu": 1}}),
    ("HCN", {"stretch C-H": {"Σ+": 1}, "stretch C-N": {"Σ+": 1}, "linear bend H-C-N": {"Π": 1}}),
    ("C3H4", {"stretch C-C": {"A1": 1, "B2": 1}, "stretch C-H": {"A1": 1, "B2": 1, "E": 1},
              "linear bend C-C-C": {"E": 1}, "bend C-C-H": {"A1": 1, "B2": 1, "E": 1}, "bend H-C-H": {"A1": 1, "B2": 1},
              "wag CCH2": {"E": 1}, "torsion C-C-C": {"B1": 1}}),
    ("C2H6", {"stretch C-C": {"A1g": 1}, "stretch C-H": {"A1g": 1, "Eg": 1, "A2u": 1, "Eu": 1},
              "bend C-C-H": {"A1g": 1, "Eg": 1, "A2u": 1, "Eu": 1},
              "bend H-C-H": {"A1g": 1, "Eg": 1, "A2u": 1, "Eu": 1},
              "torsion C-C": {"A1u": 1}}),
    ("H2O2, C2", {"stretch O-H": {"A": 1, "B": 1}, "stretch O-O": {"A": 1}, "bend H-O-O": {"A": 1, "B": 1},
                  "torsion O-O": {"A": 1}}),
], ids=lambda value: value if isinstance(value, str) else "")
def test_sets_carry_the_published_species(name, expected):
    found = gammas(cases.symmetry(name))
    assert {key: found[key] for key in expected} == expected
    if name not in ("IF7, D5h", "BrF5, C4v"):
        assert set(found) == set(expected)


def test_fivefold_bipyramid_and_fluxional_trans_angles():
    """A trans pair at an octahedral centre is no coordinate; in the pentagon the angle of 144 degrees is one."""
    (bends,) = [each for each in internal_coordinates(cases.symmetry("SF6")) if each.kind == "bend"]
    assert len(bends) == 12
    (bends,) = [each for each in internal_coordinates(cases.symmetry("IF7, D5h")) if each.kind == "bend"]
    assert len(bends) == 20


def test_benzene_stretches():
    """Benzene: nu(CH) A1g + B1u + E2g + E1u, nu(CC) A1g + B2u + E2g + E1u with C2' through the atoms (E. B. Wilson,
    1934)."""
    symbols, positions = cases.atoms(("C", cases.ring(6, 1.39)), ("H", cases.ring(6, 2.48)))
    found = gammas(find_symmetry(Structure.from_atoms(symbols, positions)))
    assert found["stretch C-H"] == {"A1g": 1, "E2g": 1, "B1u": 1, "E1u": 1}
    assert found["stretch C-C"] == {"A1g": 1, "E2g": 1, "B2u": 1, "E1u": 1}
    assert found["wag CC2H"] == {"B2g": 1, "E1g": 1, "A2u": 1, "E2u": 1}
    assert found["torsion C-C"] == {"B2g": 1, "E1g": 1, "A1u": 1, "E2u": 1}


def test_torsion_of_2_butyne_joins_the_two_tops_across_the_chain():
    sets = {each.name: each for each in internal_coordinates(cases.symmetry("C4H6 (2-butyne)"))}
    torsion = sets["torsion C-C-C-C"]
    assert len(torsion) == 1 and len(torsion.parts) == 9
    assert not [name for name in sets if name.startswith("torsion") and name != torsion.name]


@pytest.mark.parametrize("angle", [180.0, 179.6, 178.0, 170.0])
def test_a_chain_that_is_not_quite_straight_changes_nothing(angle):
    """CH3CN as a force field leaves it, C-C-N bent by 0.4 to 10 degrees: the same sets, complete, free of rotation."""
    symbols, positions = cases.MOLECULES["CH3CN"]
    positions = np.array(positions)
    carbon = positions[symbols.index("C", 1)]
    bend = np.radians(180 - angle)
    length = np.linalg.norm(positions[-1] - carbon)
    positions[-1] = carbon + length * np.array((np.sin(bend), 0, -np.cos(bend)))
    symmetry = find_symmetry(Structure.from_atoms(symbols, positions), 0.001)
    assert symmetry.group.symbol == ("C3v" if angle == 180 else "Cs")
    sets = internal_coordinates(symmetry)
    assert [each.name for each in sets] == ["stretch C-C", "stretch C-H", "stretch C-N", "linear bend C-C-N",
                                            "bend C-C-H", "bend H-C-H"]
    assert regions(symmetry).missing == {}
    assert sum(regions(symmetry).independence.rank.values()) == (8 if angle == 180 else 12)


@pytest.mark.parametrize("shift, planar", [(0.0, True), (0.05, True), (0.4, False)])
def test_nearly_planar_centres_have_a_wag(shift, planar):
    symbols, positions = cases.SHAPES["SO3"]
    positions = np.array(positions) + np.array([[0, 0, shift], *[[0, 0, 0]] * 3])
    names = [each.name for each in internal_coordinates(find_symmetry(Structure.from_atoms(symbols, positions)))]
    assert ("wag SO3" in names) == planar


@pytest.mark.parametrize("name", ["C2H4", "SF6", "C3H4", "Mn2(CO)10"])
def test_numbering_and_orientation_change_nothing(name):
    symbols, positions = cases.SHAPES[name]
    order = np.random.default_rng(3).permutation(len(symbols))
    positions = cases.turned(np.asarray(positions), 8)[order]
    other = find_symmetry(Structure.from_atoms([symbols[k] for k in order], positions))
    assert regions(other).to_dict() == regions(cases.symmetry(name)).to_dict()


@pytest.mark.parametrize("group, ligand", [("C4h", (0.08, 0.03, 3.2)), ("D4h", (3.0, 0.08, 0.9))])
def test_neighbours_in_nearly_one_direction_have_no_order_round_the_centre(group, ligand):
    """A planar centre with neighbours a few degrees apart: no wag, since no order of them suits every operation."""
    inner = cases.images(group, (0, 0, 2.0) if group == "C4h" else (2.0, 0, 0))
    outer = cases.images(group, ligand)
    nearest = np.linalg.norm(outer[:, None] - inner[None], axis=2).argmin(axis=1)
    bonds = [*((0, 1 + k) for k in range(len(inner))), *((1 + k, 1 + len(inner) + j) for j, k in enumerate(nearest))]
    structure = Structure.from_atoms(["U"] + ["O"] * len(inner) + ["F"] * len(outer),
                                     np.vstack([np.zeros((1, 3)), inner, outer]), bonds=bonds)
    symmetry = find_symmetry(structure, 0.001)
    for each in internal_coordinates(symmetry):
        assert coordinate_basis(symmetry, each).size == len(each) and each.name != "wag OF4U"


@pytest.mark.parametrize("gap", [4.0, 10.0, 44.0])
def test_a_crowded_plane_has_its_wags(gap):
    """Eight neighbours in a plane, in pairs a few degrees apart (D4h): the order round the centre is clear, and the set
    complete."""
    angles = np.radians([90 * k + side * gap / 2 for k in range(4) for side in (1, -1)])
    ring = 8.0 * np.stack([np.cos(angles), np.sin(angles), 0 * angles], axis=1)
    structure = Structure.from_atoms(["U"] + ["F"] * 8, np.vstack([np.zeros((1, 3)), ring]),
                                     bonds=[(0, k) for k in range(1, 9)])
    symmetry = find_symmetry(structure, 0.001)
    assert symmetry.group.symbol == "D4h" and regions(symmetry).missing == {}


def test_order_of_kinds_and_ids():
    sets = internal_coordinates(cases.symmetry("C3H4"))
    assert [each.kind for each in sets] == sorted((each.kind for each in sets), key=KINDS.index)
    names = [one.id for each in sets for one in each.coordinates]
    assert len(set(names)) == len(names)
    assert names[:7] == ["r1", "r2", "r3", "r4", "r5", "r6", "l1a"]


def test_isotopes_make_sets_of_their_own():
    structure = cases.structure("CH4").with_isotopes({1: 2})
    names = [each.name for each in internal_coordinates(find_symmetry(structure))]
    assert names == ["stretch C-D", "stretch C-H", "bend D-C-H", "bend H-C-H"]


def test_select_by_name_kind_and_atoms():
    sets = internal_coordinates(cases.symmetry("C2H4"))
    assert [each.name for each in select(sets, ["c-h"])] == ["stretch C-H"]
    assert [each.name for each in select(sets, ["bend", "torsion C-C"])] == ["bend C-C-H", "bend H-C-H", "torsion C-C"]
    (stretch,) = select(sets, ["stretch"], (0, 1))
    assert stretch.name == "stretch C-C" and stretch.ids == ("r1",)
    with pytest.raises(VibsymError, match=r"no coordinates 'stretch C-Q'; the sets are stretch C-C, stretch C-H"):
        select(sets, ["stretch C-Q"])
    with pytest.raises(VibsymError, match=r"no coordinates 'bend'; the structure has no bonds"):
        select((), ["bend"])
    with pytest.raises(VibsymError, match="no internal coordinates among the atoms 3,4"):
        select(sets, (), (2, 3))


def test_a_set_without_its_equivalents_is_refused():
    symmetry = cases.symmetry("CH4")
    chosen = select(internal_coordinates(symmetry), ["stretch"], (0, 1, 2))
    with pytest.raises(VibsymError, match=r"stretch C-H: 1-\d is there but not its equivalent 1-\d in Td; choose all"):
        coordinate_basis(symmetry, chosen[0])


def test_bonds_follow_the_symmetry():
    """One of six equivalent bonds taken away: all go; one added: all come."""
    structure = cases.structure("SF6")
    less = replace(structure, bonds=find_bonds(structure, remove=[(0, 3)]))
    assert len(symmetric_bonds(find_symmetry(less))) == 0
    bonds = find_bonds(structure)
    edge = next((i, j) for i in range(1, 7) for j in range(i + 1, 7)
                if np.linalg.norm(structure.positions[i] - structure.positions[j]) < 2.5)
    more = replace(structure, bonds=find_bonds(structure, add=[edge]))
    assert len(symmetric_bonds(find_symmetry(more))) == len(bonds) + 12


def test_one_atom_and_two_atoms():
    assert internal_coordinates(find_symmetry(Structure.from_atoms(["Ar"], [[0, 0, 0]]))) == ()
    (stretch,) = internal_coordinates(find_symmetry(Structure.from_atoms(["H", "Cl"], [[0, 0, 0], [0, 0, 1.27]])))
    assert stretch.name == "stretch H-Cl"
