"""The isomers of a composition: published counts, names, indices; groups and bands against the finder and complexes."""

import csv
import json
from itertools import permutations
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner

from vibsym.cli.main import cli
from vibsym.errors import VibsymError
from vibsym.groups.bases import Basis
from vibsym.groups.reduction import reduce
from vibsym.spectra.isomer_bands import list_isomers
from vibsym.structures.arrangements import orbits
from vibsym.structures.configuration_index import configuration_index
from vibsym.structures.finder import find_symmetry
from vibsym.structures.handedness import MIRRORED, chirality_symbol, helicity
from vibsym.structures.isomers import isomers
from vibsym.structures.ligands import read_ligands
from vibsym.structures.polyhedra import shape, shapes
from vibsym.structures.priorities import rankings

REFERENCE = Path(__file__).parent / "reference"

# (shape, ligands, isomers with a pair counted once, pairs of enantiomers, source)
BAILAR = "J. C. Bailar, J. Chem. Educ. 34, 334 and 626 (1957), from memory"
TEXTBOOK = "F. A. Cotton, G. Wilkinson, Advanced Inorganic Chemistry, 5th ed. (1988), ch. 1, from memory"
PUBLISHED = [
    ("OC-6", "a=6", 1, 0, BAILAR), ("OC-6", "a=5 b=1", 1, 0, BAILAR), ("OC-6", "a=4 b=2", 2, 0, BAILAR),
    ("OC-6", "a=4 b c", 2, 0, BAILAR), ("OC-6", "a=3 b=3", 2, 0, BAILAR), ("OC-6", "a=3 b=2 c", 3, 0, BAILAR),
    ("OC-6", "a=3 b c d", 4, 1, BAILAR), ("OC-6", "a=2 b=2 c=2", 5, 1, BAILAR), ("OC-6", "a=2 b=2 c d", 6, 2, BAILAR),
    ("OC-6", "a=2 b c d e", 9, 6, BAILAR), ("OC-6", "a b c d e f", 15, 15, BAILAR),
    ("OC-6", "aa(n,n)=3", 1, 1, BAILAR), ("OC-6", "aa(n,n)=2 b=2", 2, 1, BAILAR),
    ("OC-6", "aa(n,n)=2 b c", 2, 1, BAILAR),
    ("OC-6", "ab(n,p)=3", 2, 2, BAILAR), ("OC-6", "aa(n,n)=1 b=2 c=2", 3, 1, BAILAR),
    ("SP-4", "a=3 b", 1, 0, TEXTBOOK), ("SP-4", "a=2 b=2", 2, 0, TEXTBOOK), ("SP-4", "a=2 b c", 2, 0, TEXTBOOK),
    ("SP-4", "a b c d", 3, 0, TEXTBOOK), ("T-4", "a b c d", 1, 1, TEXTBOOK), ("T-4", "a=2 b c", 1, 0, TEXTBOOK),
    ("TBPY-5", "a=4 b", 2, 0, TEXTBOOK), ("TBPY-5", "a=3 b=2", 3, 0, TEXTBOOK),
    ("TBPY-5", "a b c d e", 10, 10, TEXTBOOK),
    ("TPRS-9", "a b c d e f g h i", 30240, 30240, "9!/6 = 60480 that rotations tell apart, none with a mirror"),
]


@pytest.mark.parametrize(("symbol", "ligands", "count", "pairs", "source"), PUBLISHED, ids=lambda each: str(each)[:24])
def test_published_counts(symbol, ligands, count, pairs, source):
    found = orbits(shape(symbol), read_ligands(ligands.split(), sites=len(shape(symbol))))
    assert (found.count, found.stereoisomers - found.count) == (count, pairs), source


@pytest.mark.parametrize(("symbol", "rotations", "all_operations"), [
    ("CU-8", 23, 22), ("OC-6", 10, 10), ("T-4", 5, 5), ("TPR-6", 16, 13)])
def test_two_colours_of_the_corners(symbol, rotations, all_operations):
    """Cube 23 and octahedron 10 under rotations: G. Pólya, Acta Math. 68, 145 (1937).

    TPR-6 by hand from the cycles: E, 2C3, 3C2 (64 + 2·4 + 3·8)/6 = 16, with σh, 2S3, 3σv (96 + 8 + 2·2 + 3·16)/12 = 13.
    """
    n, total, pairs = len(shape(symbol)), 0, 0
    for k in range(n + 1):
        ligands = [f"{name}={count}" for name, count in (("a", k), ("b", n - k)) if count]
        found = orbits(shape(symbol), read_ligands(ligands))
        total, pairs = total + found.count, pairs + found.stereoisomers
    assert (pairs, total) == (rotations, all_operations)


def _brute_force(symbol, donors, bound):
    """Count orbits of labelled donors over sites with plain Python.

    Donors are (colour, ligand); `bound` lists the pairs of donors that must be neighbours; ligands of one sort are
    exchanged by keeping only colours and the sets of sites.
    """
    found = shape(symbol)
    seen = set()
    for sites in permutations(range(len(found))):
        if all(found.neighbours[sites[i], sites[j]] for i, j in bound):
            held = {}
            for (_, ligand), site in zip(donors, sites):
                held.setdefault(ligand, set()).add(site)
            seen.add(frozenset((site, colour, frozenset(held[ligand]))
                               for (colour, ligand), site in zip(donors, sites)))

    def moved(arrangement, targets):
        return frozenset((targets[s], colour, frozenset(targets[k] for k in held)) for s, colour, held in arrangement)

    def count(operations):
        left, number = set(seen), 0
        while left:
            start = left.pop()
            left -= {moved(start, targets) for targets in operations}
            number += 1
        return number

    operations = [tuple(map(int, row)) for row in found.permutations]
    proper = [row for row, sign in zip(operations, found.image.determinants) if sign > 0]
    return len(seen), count(operations), count(proper)


@pytest.mark.parametrize(("symbol", "ligands", "donors", "bound"), [
    ("OC-6", ["x(p,n)=3"], [("p", 1), ("n", 1), ("p", 2), ("n", 2), ("p", 3), ("n", 3)], [(0, 1), (2, 3), (4, 5)]),
    ("OC-6", ["dien=2"], [("e", 1), ("m", 1), ("e", 1), ("e", 2), ("m", 2), ("e", 2)],
     [(0, 1), (1, 2), (3, 4), (4, 5)]),
    ("OC-6", ["tacn=1", "a=2", "b"], [("t", 1), ("t", 1), ("t", 1), ("a", 2), ("a", 3), ("b", 4)],
     [(0, 1), (1, 2), (0, 2)]),
    ("OC-6", ["en=1", "x(p,n)=1", "a=2"], [("c", 1), ("c", 1), ("p", 2), ("n", 2), ("a", 3), ("a", 4)],
     [(0, 1), (2, 3)]),
    ("TPR-6", ["en=3"], [("c", 1), ("c", 1), ("c", 2), ("c", 2), ("c", 3), ("c", 3)], [(0, 1), (2, 3), (4, 5)]),
    ("TBPY-5", ["en=1", "a=2", "b"], [("c", 1), ("c", 1), ("a", 2), ("a", 3), ("b", 4)], [(0, 1)]),
    ("SS-4", ["x(p,n)=1", "a=2"], [("p", 1), ("n", 1), ("a", 2), ("a", 3)], [(0, 1)]),
    ("TPRS-7", ["en=2", "x(p,n,p)=1"], [("c", 1), ("c", 1), ("c", 2), ("c", 2), ("p", 3), ("n", 3), ("p", 3)],
     [(0, 1), (2, 3), (4, 5), (5, 6)]),
])
def test_chelates_against_every_labelled_arrangement(symbol, ligands, donors, bound):
    found = orbits(shape(symbol), read_ligands(ligands, sites=len(shape(symbol))))
    assert (found.arrangements, found.count, found.stereoisomers) == _brute_force(symbol, donors, bound)


# Names and indices. IUPAC Recommendations 2005, IR-9.3.3, and common practice.
NAMED = [
    ("OC-6", "CO=3 Cl=3", {"fac": "OC-6-22", "mer": "OC-6-21"}),
    ("OC-6", "CO=4 Cl=2", {"cis": "OC-6-22", "trans": "OC-6-12"}),              # Cl, the B of MA4B2, has priority
    ("OC-6", "Cl=4 CO=2", {"cis": "OC-6-22", "trans": "OC-6-11"}),              # A has priority
    ("OC-6", "Cl=4 CO F", {"cis": "OC-6-32", "trans": "OC-6-11"}),
    ("SP-4", "NH3=2 Cl=2", {"cis": "SP-4-2", "trans": "SP-4-1"}),
    ("TBPY-5", "CO=4 PPh3=1", {"axial": "TBPY-5-12", "equatorial": "TBPY-5-22"}),
    ("TBPY-5", "CO=3 PPh3=2", {"diaxial": "TBPY-5-11", "diequatorial": "TBPY-5-22", "axial, equatorial": "TBPY-5-12"}),
    ("SPY-5", "CO=4 Cl=1", {"apical": "SPY-5-12", "basal": "SPY-5-22"}),
    ("SPY-5", "CO=3 Cl=2", {"apical, basal": "SPY-5-12", "cis-dibasal": "SPY-5-22", "trans-dibasal": "SPY-5-21"}),
    ("TS-3", "Cl=2 CO=1", {"stem": "TS-3-2", "crosspiece": "TS-3-1"}),
    ("OC-6", "en=2 Cl=2", {"cis": "OC-6-22", "trans": "OC-6-12"}),
    ("OC-6", "gly=3", {"fac": "OC-6-22", "mer": "OC-6-21"}),
    ("OC-6", "en=3", {"only isomer": "OC-6-11"}),
    ("OC-6", "ida=2", {"mer": "OC-6-11'", "s-fac": "OC-6-1'1'", "u-fac": "OC-6-2'1'"}),
    ("PBPY-7", "F=5 O=2", {"diaxial": "PBPY-7-22-11111", "axial, equatorial": "PBPY-7-12-11112",
                           "diequatorial (1)": "PBPY-7-11-11122", "diequatorial (2)": "PBPY-7-11-11212"}),
]


@pytest.mark.parametrize(("symbol", "ligands", "expected"), NAMED, ids=lambda value: str(value)[:20])
def test_trade_names_and_configuration_indices(symbol, ligands, expected):
    found = isomers(symbol, "Re", ligands.split())
    assert {isomer.name: isomer.index for isomer in found.first()} == expected


def test_names_are_all_different():
    for symbol, ligands in [("OC-6", "a=2 b=2 c d"), ("OC-6", "a=3 b c d"), ("TBPY-5", "a=2 b c d"),
                            ("TPRS-9", "a=5 b=4"), ("SPY-5", "a=2 b=2 c"), ("DD-8", "a=4 b=4"),
                            ("OC-6", "en=1 a=2 b=2")]:
        found = isomers(symbol, "Re", ligands.split())
        assert len(set(found.names)) == found.count


def test_a2b2c2_names():
    names = set(isomers("OC-6", "W", ["CO=2", "Cl=2", "L=2"]).names)
    assert {"all-cis", "all-trans", "trans(CO), cis(Cl), cis(L)"} <= names


def test_square_pyramids_are_told_apart_by_what_is_trans_in_the_base():
    names = isomers("SPY-5", "Fe", ["CO=2", "I=2", "N"]).names
    assert {"apical CO; trans: CO–I, I–N", "apical CO; trans: CO–N, I–I"} <= set(names)
    assert not any("(1)" in name for name in names)


def test_index_that_depends_on_an_unknown_donor_is_left_open():
    cis, trans = isomers("OC-6", "Mo", ["CO=4", "L=2"]).first()
    assert (cis.index, trans.index) == ("OC-6-22", None)
    assert set(trans.indices) == {"OC-6-11", "OC-6-12"}
    assert isomers("OC-6", "Mo", ["CO=4", "L=2"], ["L=P"])[1].index == "OC-6-12"


@pytest.mark.parametrize(("ligands", "order"), [
    ("CN CO Cl", "Cl > CO > CN"),               # (O,O,O) before (N,N,N)
    ("H2O OMe OH F", "F > OMe > H2O > OH"),     # (C) before (H,H) before (H): highest first at the first difference
    ("D H CO", "CO > D > H"),
    ("PF3 PPh3 P(OMe)3", "PF3 > P(OMe)3 > PPh3"),
])
def test_priorities_by_the_cip_rule(ligands, order):
    found = isomers({3: "TP-3", 4: "SP-4"}[len(ligands.split())], "Pt", ligands.split())
    assert [found.ranking_text(each) for each in found.rankings] == [order]


def _compositions(n, most=None):
    for first in range(min(n, most or n), 0, -1):
        for rest in _compositions(n - first, first) if n > first else [()]:
            yield (first, *rest)


@pytest.mark.parametrize("symbol", ["TS-3", "SP-4", "SPY-4", "SS-4", "TBPY-5", "SPY-5", "OC-6", "PBPY-7"])
def test_index_and_handedness_name_every_isomer_of_known_monodentate_ligands(symbol):
    """The purpose of the index (IR-9.3.3.1): no two isomers share one, and each chiral one has a symbol (not SPY-4)."""
    for counts in _compositions(len(shape(symbol))):
        for given in (counts, counts[::-1]):               # the commonest ligand of highest and of lowest priority
            ligands = [f"{name}={count}" for name, count in zip(("I", "Br", "Cl", "F", "O", "N", "C"), given)]
            found = isomers(symbol, "W", ligands).first()
            assert len({isomer.index for isomer in found}) == len(found), ligands
            assert symbol == "SPY-4" or all(isomer.descriptors for isomer in found if isomer.chiral), ligands


def test_the_worked_example_of_the_octahedral_index():
    """OC-6-43: carbonyl (4) trans to triphenylarsane (1), acetonitrile (3) trans to nitrosyl (2) (IR-9.3.3.3, from
    memory)."""
    found = isomers("OC-6", "Cr", ["AsPh3", "NO", "MeCN=2", "CO=2"]).first()
    assert next(each.index for each in found if "AsPh3–CO, NO–MeCN" in each.name) == "OC-6-43"


def test_a_named_donor_makes_a_point_of_a_letter_that_is_an_element():
    """MA4B2 with B a phosphane, not boron; where B has priority trans is OC-6-12, where A has it OC-6-11."""
    for donors, index in ((["A=N", "B=P"], "OC-6-12"), (["A=P", "B=N"], "OC-6-11")):
        found = isomers("OC-6", "M", ["A=4", "B=2"], donors)
        assert [ligand.words for ligand in found.ligands] == [f"named point, donor {each[2]}" for each in donors]
        assert {each.name: each.index for each in found.first()} == {"cis": "OC-6-22", "trans": index}
    assert isomers("OC-6", "M", ["CO=4", "PPh3=2"], ["PPh3=P"])[1].index == "OC-6-12"
    assert isomers("OC-6", "M", ["CO=4", "Cl=2"], ["Cl=Cl"]).ligands[1].form == "atom"


def test_too_many_unknown_donors_give_no_ranking():
    sorts = read_ligands([f"L{k}=1" for k in range(6)])
    found = orbits(shape("OC-6"), sorts)
    assert rankings(found.colours, sorts) == []


@pytest.mark.parametrize("symbol", ["OC-6", "TBPY-5", "SPY-5", "PBPY-7", "HBPY-8", "HBPY-9", "SS-4", "T-4", "TPY-3"])
def test_rotations_keep_index_and_handedness_and_reflections_turn_it(symbol):
    found = shape(symbol)
    rng = np.random.default_rng(7)
    for _ in range(4):
        numbers = [(int(k) + 1, 0) for k in rng.permutation(len(found))]
        index, hand = configuration_index(found, numbers), chirality_symbol(found, numbers)
        assert hand in MIRRORED
        for targets, sign in zip(found.permutations, found.image.determinants):
            moved = [None] * len(found)
            for site, target in enumerate(targets):
                moved[target] = numbers[site]
            assert configuration_index(found, moved) == index
            assert chirality_symbol(found, moved) == (hand if sign > 0 else MIRRORED[hand])


def test_right_handed_propeller_is_delta():
    """Along (1 1 1) each chelate of a right-handed propeller turns clockwise on the way to the back."""
    found = shape("OC-6")
    x = np.array([1, -1, 0]) / np.sqrt(2)
    y = np.cross(np.ones(3) / np.sqrt(3), x)
    azimuth = np.degrees(np.arctan2(found.directions @ y, found.directions @ x))
    front = [site for site in range(6) if found.directions[site].sum() > 0]
    edges = []
    for site in front:
        back = [other for other in range(6) if other not in front
                and (azimuth[other] - azimuth[site] + 540) % 360 - 180 == pytest.approx(-60)]
        edges.append((site, back[0]))
    assert helicity(found, edges) == "Δ"


def test_tetrahedral_handedness_seen_from_the_side_opposite_to_the_last():
    found = shape("T-4")
    view = -found.directions[3]
    x = np.array([1, 1, 0]) / np.sqrt(2)
    y = np.cross(view, x)
    azimuth = np.arctan2(found.directions[:3] @ y, found.directions[:3] @ x)
    clockwise = np.sin(azimuth[1] - azimuth[0]) < 0
    assert chirality_symbol(found, [(1, 0), (2, 0), (3, 0), (4, 0)]) == ("R" if clockwise else "S")


def test_descriptors_of_pairs():
    assert isomers("OC-6", "Co", ["en=3"])[0].descriptors in (("Δ", "Λ"), ("Λ", "Δ"))
    assert set(isomers("T-4", "Ge", ["F", "Cl", "Br", "I"])[0].descriptors) == {"R", "S"}
    assert isomers("OC-6", "W", ["CO=4", "Cl=2"])[0].descriptors == ()


@pytest.mark.parametrize("symbol", list(shapes()))
def test_stabiliser_group_and_bands_agree_with_the_geometric_finder(symbol):
    """Monatomic ligands of two or three sorts: the finder sees the same group and the same species of stretches."""
    n = len(shape(symbol))
    for counts in {(n,), (n - 1, 1), (n - n // 2, n // 2), (n - 2, 1, 1)}:
        ligands = [f"{name}={count}" for name, count in zip(("F", "Cl", "Br"), counts) if count]
        for entry in list_isomers(symbol, "W", ligands).entries[:8]:
            isomer = entry.isomer
            seen = find_symmetry(isomer.structure, bonds=isomer.structure.bonds)
            assert seen.group.symbol == isomer.group.symbol, isomer.name
            donors = isomer.donor_atoms[[isomer.arrangement[site] == ligands[0].partition("=")[0] for site in range(n)]]
            basis = Basis.signed(seen.group.image, seen.permutations).restrict(donors)
            if seen.decided:
                assert reduce(basis.characters(), seen.group) == entry.gamma, isomer.name


def test_symmetry_of_an_isomer_moves_its_atoms():
    for symbol, ligands in [("OC-6", ["CO=3", "Cl=2", "L=1"]), ("OC-6", ["en=2", "Cl=2"]), ("L-2", ["CO=1", "Cl=1"]),
                            ("TBPY-5", ["CO=3", "L=2"]), ("OC-6", ["en=3"])]:
        for isomer in isomers(symbol, "Co", ligands).first():
            symmetry = isomer.symmetry
            moved = np.einsum("rab,jb->rja", symmetry.group.image.matrices, symmetry.positions)
            np.testing.assert_allclose(moved, symmetry.positions[symmetry.permutations], atol=1e-9)
            np.testing.assert_allclose(symmetry.symmetrised.positions, isomer.structure.positions, atol=1e-9)


def test_chelates_lower_the_group_as_the_finder_cannot_see():
    assert isomers("OC-6", "Co", ["en=3"])[0].group.symbol == "D3"
    assert {isomer.name: isomer.group.symbol for isomer in isomers("OC-6", "Co", ["en=2", "Cl=2"]).first()} == {
        "cis": "C2", "trans": "D2h"}
    assert {isomer.name: isomer.group.symbol for isomer in isomers("OC-6", "Fe", ["terpy=2"]).first()} == {
        "mer": "D2d", "s-fac": "C2h", "u-fac": "C2"}


# Rows of tests/reference/carbonyls.csv that are a composition on an ideal shape.
CARBONYLS = {
    "[Co(CO)4]-": ("Co", "CO=4", "only isomer"), "Fe(CO)5": ("Fe", "CO=5", "only isomer"),
    "W(CO)6": ("W", "CO=6", "only isomer"), "Mn(CO)5I": ("Mn", "CO=5 I", "only isomer"),
    "W(CO)5(PPh3)": ("W", "CO=5 L", "only isomer"), "Mo(CO)4(bpy)": ("Mo", "CO=4 bpy=1", "only isomer"),
    "Mo(CO)4(dppe)": ("Mo", "CO=4 L=2", "cis"), "fac-Mo(CO)3(PPh3)3": ("Mo", "CO=3 L=3", "fac"),
    "fac-W(CO)3(MeCN)3": ("W", "CO=3 MeCN=3", "fac"), "mer-Mo(CO)3[P(OMe)3]3": ("Mo", "CO=3 L=3", "mer"),
    "cis-Mo(CO)2(dppe)2": ("Mo", "CO=2 L=4", "cis"), "Fe(CO)4(PPh3)": ("Fe", "CO=4 PPh3=1", "axial"),
    "trans-Fe(CO)3(PPh3)2": ("Fe", "CO=3 PPh3=2", "diaxial"), "Fe(CO)4I2": ("Fe", "CO=4 I=2", "cis"),
    "HCo(CO)4": ("Co", "CO=4 H=1", "axial"), "Ni(CO)3(PPh3)": ("Ni", "CO=3 PPh3=1", "only isomer"),
    "cis-PtCl2(CO)2": ("Pt", "CO=2 Cl=2", "cis"), "[Fe(CN)6]4-": ("Fe", "CN=6", "only isomer"),
    "PF5": ("P", "F=5", "only isomer"), "[PtCl4]2-": ("Pt", "Cl=4", "only isomer"),
}


def _published():
    with open(REFERENCE / "carbonyls.csv", encoding="utf-8", newline="") as file:
        rows = csv.DictReader(line for line in file if not line.startswith("#"))
        return {row["formula"]: row for row in rows}


@pytest.mark.parametrize("formula", CARBONYLS)
def test_published_complexes(formula):
    row = _published()[formula]
    centre, ligands, name = CARBONYLS[formula]
    found = list_isomers(row["polyhedral_symbol"], centre, ligands.split())
    entry = next(entry for entry in found.entries if entry.isomer.name == name)
    assert entry.isomer.group.symbol == row["local_point_group"]
    terms = [(label.lstrip("23"), int(label[0]) if label[0] in "23" else 1)
             for label in row["gamma_stretch"].split("+")]
    assert entry.gamma == dict(terms)
    assert (entry.counts.infrared, entry.counts.raman) == (int(row["n_ir_predicted"]), int(row["n_raman_predicted"]))


def test_default_oscillators():
    def name(*ligands, text=None):
        return list_isomers("SP-4", "Pt", ligands, oscillators=text).oscillators.name

    assert name("Cl=2", "CN=1", "CO=1") == "stretch C-O"
    assert name("Cl=2", "NO=1", "CN=1") == "stretch C-N"
    assert name("Cl=2", "N2=2") == "stretch N-N"
    assert name("Cl=2", "L=2") == "stretch Pt-Cl"
    assert name("L=2", "Cl=2") == "stretch Pt-L"
    assert name("Cl=2", "CO=2", text="Pt-Cl") == "stretch Pt-Cl"
    assert name("Cl=2", "CO=2", text="Pt-C-O") == "stretch C-O"


@pytest.mark.parametrize(("arguments", "words"), [
    ("OC-7 --centre Mo --ligand CO=6", "no coordination shape 'OC-7'"),
    ("OC-6 --centre Mo --ligand CO=5", "the counts must add up to 6"),
    ("OC-6 --centre Mo --ligand CO=10", "more than nine ligands"),
    ("L-2 --centre Hg --ligand en(N,N)=1", "neighbouring sites"),
    ("SP-4 --centre Pd --ligand tacn=1 --ligand Cl=1", "no such triple"),
    ("TP-3 --centre Pd --ligand en=1 --ligand x=x", "the count 'x' must be a whole number"),
    ("OC-6 --centre Mo --ligand CO=4 --ligand L=2 --donor Q=P", "--donor Q=P"),
    ("OC-6 --centre Mo --ligand CO=4 --ligand L=2 --donor L=Zz", "'Zz' is not an element symbol"),
    ("OC-6 --centre Mo --ligand CO=3 --ligand CO=3", "given 2 times"),
    ("OC-6 --centre Mo --ligand CO=6 --oscillators N-O", "no such bond"),
    ("OC-6 --centre Mo --ligand CO=6 --limit 0", "--limit 0"),
    ("OC-6 --centre Mo --ligand a(N,N,N,N)=1 --ligand CO=2", "chelates have two or three"),
    ("OC-6 --centre Mo", "no ligands"),
    ("OC-6 --centre Mo --ligand CN=6 --donor CN=N", "CN is known to bind through C"),
    ("OC-6 --centre Mo --ligand CO=6 --mixture", "--mixture needs observed bands"),
    ("OC-6 --centre Mo --ligand CO=6 --between 1800 2100", "--between needs observed bands"),
])
def test_bad_input_is_one_line_and_status_1(arguments, words):
    result = CliRunner().invoke(cli, ["isomers", *arguments.split()])
    assert result.exit_code == 1
    assert words in result.output and result.output.count("\n") == 1


def test_json_of_the_command():
    words = ["--centre", "Mo", "--ligand", "CO=4", "--ligand", "L=2", "--donor", "L=P", "--format", "json"]
    result = CliRunner().invoke(cli, ["isomers", "OC-6", *words])
    answer = json.loads(result.output)
    assert {key: answer[key] for key in ("symbol", "centre", "count", "stereoisomers")} == {
        "symbol": "OC-6", "centre": "Mo", "count": 2, "stereoisomers": 2}
    cis = answer["isomers"][0]
    assert (cis["name"], cis["index"], cis["point_group"]["symbol"], cis["chiral"], cis["stereoisomers"]) == (
        "cis", "OC-6-22", "C2v", False, 1)
    assert sorted(cis["arrangement"]) == ["CO"] * 4 + ["L"] * 2
    assert cis["oscillators"] == {"set": "stretch C-O", "gamma": {"A1": 2, "B1": 1, "B2": 1}, "infrared": 4, "raman": 4,
                                  "coincident": 4, "polarised": 2}


def test_limit_keeps_the_full_count():
    found = list_isomers("OC-6", "Mo", list("abcdef"), limit=4)
    assert (found.to_dict()["count"], len(found.to_dict()["isomers"])) == (15, 4)
    assert any("4 of 15" in note for note in found.notes)


def test_page_and_rows_tell_the_same():
    words = ["isomers", "OC-6", "--centre", "Mo", "--ligand", "CO=3", "--ligand", "Cl=3"]
    page = CliRunner().invoke(cli, words).output
    rows = list(csv.DictReader(CliRunner().invoke(cli, [*words, "--format", "csv"]).output.splitlines()))
    assert [(row["name"], row["gamma"], row["infrared"]) for row in rows] == [
        ("fac", "A1 + E", "2"), ("mer", "2A1 + B2", "3")]
    for row in rows:
        assert row["name"] in page and row["index"] in page
    assert max(map(len, page.splitlines())) <= 80


def test_write_saves_structures_that_read_back(tmp_path):
    from vibsym.structures.reading import read

    target = tmp_path / "made"
    words = ["isomers", "OC-6", "--centre", "Mo", "--ligand", "CO=3", "--ligand", "Cl=3", "--write", str(target)]
    assert CliRunner().invoke(cli, words).exit_code == 0
    files = sorted(target.iterdir())
    assert [file.name for file in files] == ["001-fac.xyz", "002-mer.xyz"]
    assert [find_symmetry(read(str(file))).group.symbol for file in files] == ["C3v", "C2v"]


def test_library_errors_are_vibsym_errors():
    with pytest.raises(VibsymError, match="'XX'"):
        isomers("XX", "Mo", ["CO=6"])
