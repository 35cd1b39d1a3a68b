"""Oscillators and their local symmetry: published ν(CO) counts through bulky ligands, leaks, and what is refused."""

import csv
import json
from pathlib import Path

import complexes
import numpy as np
import pytest
from click.testing import CliRunner
from molecules import atoms, mirrored, on_axis, ring, turned

from vibsym.cli.main import cli
from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.report import expectation as view
from vibsym.report import render
from vibsym.spectra.expectation import expect
from vibsym.structures.placing import place
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure

ROOT = Path(__file__).parent.parent
TABLE = ROOT / "tests" / "reference" / "carbonyls.csv"
ROWS = {row["formula"]: row for row in csv.DictReader(TABLE.read_text(encoding="utf-8").splitlines())}
SAMPLE = str(complexes.SAMPLE)

# formula -> shape, centre, ligands site by site; the donor atom stands for a larger ligand
BUILT = {
    "W(CO)6": ("OC-6", "W", "CO CO CO CO CO CO"), "Fe(CO)5": ("TBPY-5", "Fe", "CO CO CO CO CO"),
    "[Co(CO)4]-": ("T-4", "Co", "CO CO CO CO"), "Mn(CO)5I": ("OC-6", "Mn", "I CO CO CO CO CO"),
    "HMn(CO)5": ("OC-6", "Mn", "H CO CO CO CO CO"), "W(CO)5(PPh3)": ("OC-6", "W", "P CO CO CO CO CO"),
    "Mo(CO)4(bpy)": ("OC-6", "Mo", "N N CO CO CO CO"), "Fe(CO)4I2": ("OC-6", "Fe", "I I CO CO CO CO"),
    "fac-Mo(CO)3(PPh3)3": ("OC-6", "Mo", "P P P CO CO CO"), "mer-Mo(CO)3[P(OMe)3]3": ("OC-6", "Mo", "P P CO CO CO P"),
    "cis-Mo(CO)2(dppe)2": ("OC-6", "Mo", "P P CO CO P P"), "Fe(CO)4(PPh3)": ("TBPY-5", "Fe", "P CO CO CO CO"),
    "trans-Fe(CO)3(PPh3)2": ("TBPY-5", "Fe", "P P CO CO CO"), "HCo(CO)4": ("TBPY-5", "Co", "H CO CO CO CO"),
    "Ni(CO)3(PPh3)": ("T-4", "Ni", "P CO CO CO"), "cis-PtCl2(CO)2": ("SP-4", "Pt", "Cl Cl CO CO"),
    "cis-PtCl2(NH3)2": ("SP-4", "Pt", "Cl Cl N N"), "[Fe(CN)6]4-": ("OC-6", "Fe", "CN CN CN CN CN CN"),
    "[PtCl4]2-": ("SP-4", "Pt", "Cl Cl Cl Cl"), "[SnCl6]2-": ("OC-6", "Sn", "Cl Cl Cl Cl Cl Cl"),
    "BF3": ("TP-3", "B", "F F F"), "IF7": ("PBPY-7", "I", "F F F F F F F"), "OsO4": ("T-4", "Os", "O O O O"),
}
NAMES = {"CO": "C-O", "CN": "C-N", "PtCl": "Pt-Cl", "SnCl": "Sn-Cl", "BF": "B-F", "IF": "I-F", "OsO": "Os-O"}


def built(symbols, positions, seed=3, shake=0.0):
    """Return atoms shaken and turned as a structure."""
    positions = complexes.shaken(np.asarray(positions, dtype=float), seed, shake)
    return Structure.from_atoms(symbols, turned(positions, seed))


def total(gamma, symbol):
    return sum(n * point_group(symbol).species_named(label).degeneracy for label, n in gamma.items())


def counts(bands):
    return bands.counts.infrared, bands.counts.raman


@pytest.mark.parametrize("shake", [0.0, 0.05], ids=["ideal", "shaken by 0.05 Å"])
@pytest.mark.parametrize("formula", BUILT)
def test_published_counts_with_local(formula, shake):
    """tests/reference/carbonyls.csv: local group and predicted counts; a shaken complex has none of that symmetry
    left."""
    row, (shape, centre, ligands) = ROWS[formula], BUILT[formula]
    ideal = place(shape, centre, ligands.split())
    structure = built(ideal.symbols, ideal.positions, shake=shake)
    result = expect(structure, oscillators=NAMES[row["oscillators"]], local=True)
    local = result.oscillators.local
    assert local.symmetry.group.symbol == row["local_point_group"]
    assert counts(local.bands) == (int(row["n_ir_predicted"]), int(row["n_raman_predicted"]))
    if shake:
        assert result.symmetry.group.order < local.symmetry.group.order
        number = total(result.oscillators.bands.gamma, result.symmetry.group.symbol)
        assert number == total(local.bands.gamma, local.symmetry.group.symbol)


def test_published_species_of_the_stretches():
    """Γ letter by letter where no choice of axes enters."""
    for formula in ("W(CO)6", "Fe(CO)5", "[Co(CO)4]-", "Ni(CO)3(PPh3)", "Fe(CO)4(PPh3)", "trans-Fe(CO)3(PPh3)2", "IF7",
                    "BF3", "fac-Mo(CO)3(PPh3)3", "[Fe(CN)6]4-", "W(CO)5(PPh3)"):
        shape, centre, ligands = BUILT[formula]
        name = NAMES[ROWS[formula]["oscillators"]]
        result = expect(place(shape, centre, ligands.split()), oscillators=name, local=True)
        published = {}
        for term in ROWS[formula]["gamma_stretch"].replace(" ", "").split("+"):
            digits = len(term) - len(term.lstrip("0123456789"))
            published[term[digits:]] = int(term[:digits] or 1)
        assert result.oscillators.local.bands.gamma == published, formula


def test_the_sample_is_its_recipe():
    assert complexes.SAMPLE.read_text(encoding="utf-8") == complexes.written(*complexes.sample_complex())


def test_bulky_ligand_leaves_the_carbonyls_their_c4v():
    """W(CO)5(PCy3), 63 atoms shaken by 0.05 Å: C1 as a whole, 2A1 + B1 + E locally, and B1 leaks (P. S. Braterman,
    1975)."""
    result = expect(read(SAMPLE), oscillators="C-O", local=True)
    local = result.oscillators.local
    assert len(result.structure) >= 60 and result.symmetry.group.symbol == "C1"
    assert result.oscillators.bands.gamma == {"A": 5}
    assert local.symmetry.group.symbol == "C4v" and local.bands.gamma == {"A1": 2, "B1": 1, "E": 1}
    assert counts(local.bands) == (3, 4)
    assert len(local.atoms) == 12 and local.reduced.names.count("P") == 1
    assert [leak.to_dict() for leak in local.leaks] == [
        {"species": "B1", "becomes": {"A": 1}, "infrared": True, "raman": False}]
    assert [rung.symmetry.group.symbol for rung in local.ladder.rungs] == ["C4v"]


HALF_SANDWICHES = {
    # common practice; tests/reference/carbonyls.csv has the first two
    "CpV(CO)4": (complexes.half_sandwich("V", 5, 1.21, 1.92, complexes.piano_stool(4, 62)), "C4v",
                 {"A1": 1, "B1": 1, "E": 1}, (2, 3), {"B1"}),
    "CpMn(CO)3": (complexes.half_sandwich("Mn", 5, 1.21, 1.77, complexes.piano_stool(3, 57)), "C3v", {"A1": 1, "E": 1},
                  (2, 2), set()),
    "(C6H6)Cr(CO)3": (complexes.half_sandwich("Cr", 6, 1.41, 1.72, complexes.piano_stool(3, 57), tilt=11.0), "C3v",
                      {"A1": 1, "E": 1}, (2, 2), set()),
    "CpMn(CO)2(PH3)": (complexes.half_sandwich("Mn", 5, 1.21, 1.77, complexes.piano_stool(3, 57)[:2],
                                               [("P", 2.2 * complexes.piano_stool(3, 57)[2])]), "Cs",
                       {"A'": 1, "A''": 1}, (2, 2), set()),
    "CpCo(CO)2": (complexes.half_sandwich("Co", 5, 1.21, 1.70, complexes.piano_stool(2, 47)), "C2v", {"A1": 1, "B2": 1},
                  (2, 2), set()),
}


@pytest.mark.parametrize("name", HALF_SANDWICHES)
def test_rings_become_points(name):
    (symbols, positions), group, gamma, bands, leaking = HALF_SANDWICHES[name]
    result = expect(built(symbols, positions, shake=0.05), oscillators="C-O", local=True)
    local = result.oscillators.local
    assert local.symmetry.group.symbol == group
    assert sorted(local.bands.gamma) == sorted(gamma) or group == "C2v"
    assert counts(local.bands) == bands
    points = [origin for origin in local.reduced.origins if len(origin) > 1]
    assert [len(point) for point in points] == [6 if "C6" in name else 5]
    assert {leak.species for leak in local.leaks if leak.infrared} == leaking


def test_an_alkene_is_one_point():
    """Fe(CO)4(η2-C2H4): the two carbon atoms are one donor; the carbonyls see a trigonal bipyramid of C2v."""
    symbols, positions = atoms(("Fe", (0, 0, 0)), *complexes.carbonyls(
        [(0, 0, 1), (0, 0, -1), (0.55, 0.835, 0), (0.55, -0.835, 0)], 1.8), ("C", [(-2.0, 0.7, 0), (-2.0, -0.7, 0)]),
        ("H", [(-2.3, a * 1.25, b * 0.92) for a in (1, -1) for b in (1, -1)]))
    local = expect(built(symbols, positions), oscillators="Fe-C-O", local=True).oscillators.local
    assert local.symmetry.group.symbol == "C2v" and counts(local.bands) == (4, 4)
    assert [len(origin) for origin in local.reduced.origins].count(2) == 1


def test_two_centres_and_bridges():
    """Fe2(CO)9: terminal A1' + E' + A2'' + E'', bridging A1' + E' (three bridges), the whole set from both."""
    terminal, bridge = ring(3, 1.65, 2.05), ring(3, 1.35, phase=0.5)
    symbols, positions = atoms(("Fe", on_axis(1.26, -1.26)), ("C", mirrored(terminal)),
                               ("O", mirrored(ring(3, 2.55, 2.75))), ("C", bridge), ("O", ring(3, 2.52, phase=0.5)))
    structure = built(symbols, positions)
    names = [f"{1 + k}-{1 + k + 6}" for k in range(2, 8)]
    found = expect(structure, oscillators=",".join(names), local=True).oscillators
    assert found.bands.gamma == {"A1'": 1, "E'": 1, "A2''": 1, "E''": 1} == found.local.bands.gamma
    assert (found.bands.counts.infrared, found.bands.counts.raman) == (2, 3)       # carbonyls.csv, Fe2(CO)9
    assert found.local.reduced.centres == (0, 1)
    assert expect(structure, oscillators="C-O").oscillators.bands.gamma == {"A1'": 2, "E'": 2, "A2''": 1, "E''": 1}


def test_leaks_are_restrictions_to_the_molecule():
    """trans-M(CO)4L2, D4h, whose ligands both lean to one carbonyl: C2v lets A1g, B1g into infrared, Eu into Raman."""
    ideal = place("OC-6", "Mo", ["P", "CO", "CO", "CO", "CO", "P"])
    symbols = [*ideal.symbols, "O", "O"]
    phosphorus = [k for k, symbol in enumerate(ideal.symbols) if symbol == "P"]
    metal = ideal.positions[list(ideal.symbols).index("Mo")]
    carbon = ideal.positions[list(ideal.symbols).index("C")] - metal
    places = [ideal.positions[k] + 1.0 * (ideal.positions[k] - metal) / np.linalg.norm(ideal.positions[k] - metal)
              + 1.1 * carbon / np.linalg.norm(carbon) for k in phosphorus]
    structure = Structure.from_atoms(symbols, np.vstack([ideal.positions, places]))
    result = expect(structure, oscillators="Mo-C-O", local=True)
    local = result.oscillators.local
    assert result.symmetry.group.symbol == "C2v" and local.symmetry.group.symbol == "D4h"
    assert local.bands.gamma == {"A1g": 1, "B1g": 1, "Eu": 1}
    leaks = {leak.species: leak for leak in local.leaks}
    assert set(leaks) == {"A1g", "B1g", "Eu"}
    assert leaks["A1g"].becomes == {"A1": 1} and leaks["A1g"].infrared and not leaks["A1g"].raman
    assert leaks["Eu"].raman and not leaks["Eu"].infrared
    assert sum(n for n in leaks["Eu"].becomes.values()) == 2


def test_distinguish_compares_the_formulas_of_ligands():
    """cis-M(CO)4 with PH3 and PF3: alike as donors (C2v), not alike by formula (Cs)."""
    ideal = place("OC-6", "Mo", ["P", "P", "CO", "CO", "CO", "CO"])
    metal = ideal.positions[0]
    symbols, positions = list(ideal.symbols), [ideal.positions]
    for number, (donor, tail) in enumerate(zip((1, 2), "HF")):
        axis = (ideal.positions[donor] - metal) / np.linalg.norm(ideal.positions[donor] - metal)
        down = abs(axis[2] + 1) < 1e-9
        frame = np.diag([1, -1, -1.0]) if down else complexes.rotation_between(np.array((0, 0, 1.0)), axis)
        positions.append(ideal.positions[donor] + ring(3, 1.25, 0.6, 0.1 * number) @ frame.T)
        symbols += [tail] * 3
    structure = Structure.from_atoms(symbols, np.vstack(positions))
    alike = expect(structure, oscillators="Mo-C-O", local=True).oscillators.local
    unlike = expect(structure, oscillators="Mo-C-O", local=True, distinguish=True).oscillators.local
    assert alike.symmetry.group.symbol == "C2v" and unlike.symmetry.group.symbol == "Cs"


def test_carbonyls_beside_ethers():
    """W(CO)5 with a phosphite P(OC)3 (hydrogens left out): C-O takes eight bonds, W-C-O those of the carbonyls."""
    symbols, positions = atoms(("W", (0, 0, 0)), *complexes.carbonyls(np.vstack([ring(4, 1), [(0, 0, -1)]])),
                               ("P", [(0, 0, 2.5)]), ("O", ring(3, 1.5, 3.0)), ("C", ring(3, 2.75, 2.35)))
    structure = built(symbols, positions)
    every, own = (expect(structure, oscillators=wanted, local=True).oscillators for wanted in ("C-O", "W-C-O"))
    assert total(every.bands.gamma, expect(structure).symmetry.group.symbol) == 8
    assert every.notes == ("stretch C-O: 5 of the 8 bonds are at a metal, the others are not; --oscillators W-C-O "
                           "takes those at the metal.",)
    assert own.notes == () and own.local.symmetry.group.symbol == "C4v" and counts(own.local.bands) == (3, 4)


@pytest.mark.parametrize("bonded, group, gamma, bands", [
    # K. Nakamoto, Infrared and Raman Spectra of Inorganic and Coordination Compounds (from memory): ν(SO) of the free
    # ion ν1 A1, ν3 T2; unidentate C3v, 2A1 + E; bidentate C2v, 2A1 + B1 + B2
    (0, "Td", {"A1": 1, "T2": 1}, (1, 2)), (1, "C3v", {"A1": 2, "E": 1}, (3, 3)),
    (2, "C2v", {"A1": 2, "B1": 1, "B2": 1}, (4, 4))], ids=["free", "unidentate", "bidentate"])
def test_sulfate_held_by_its_oxygens(bonded, group, gamma, bands):
    """Cobalt with ammines on an M-O-S angle of 125 degrees, shaken: what is left out marks the oxygen it holds."""
    corners = np.array([(1, 1, 1), (1, -1, -1), (-1, 1, -1), (-1, -1, 1)]) / 3**0.5
    oxygens = 1.48 * corners
    across = np.cross(corners[0], corners[1])
    across /= np.linalg.norm(across)
    parts = [("S", (0, 0, 0)), ("O", oxygens)]
    for oxygen in oxygens[:bonded]:
        out = oxygen / 1.48
        bond = np.cos(np.radians(55)) * out + np.sin(np.radians(55)) * np.cross(across, out)
        beside = np.cross(bond, across)
        cobalt = oxygen + 1.93 * bond
        parts += [("Co", [cobalt]), ("N", cobalt + 1.96 * np.array([bond, across, -across, beside, -beside]))]
    structure = built(*atoms(*parts), shake=0.03)
    found = expect(structure, oscillators="S-O", local=True).oscillators
    assert found.local.symmetry.group.symbol == group
    assert found.local.bands.gamma == gamma and counts(found.local.bands) == bands
    assert found.local.to_dict()["held"] == [2, 3][:bonded] and found.notes == ()


def test_bonds_at_a_metal_are_named_from_it():
    """A phenolate beside an ether: the bond at the metal is Zn-O-C, the metal taken being the one it is bonded to."""
    symbols = ["Na", "Zn", "O", "C", "C", "O", "C"]
    positions = [(-8, 0, 0), (0, 0, 0), (1.9, 0, 0), (2.6, 1.2, 0), (4.1, 1.2, 0), (4.8, 2.4, 0), (6.2, 2.4, 0)]
    note, = expect(built(symbols, positions), oscillators="C-O").oscillators.notes
    assert note == ("stretch C-O: 1 of the 3 bonds is at a metal, the others are not; --oscillators Zn-O-C takes those "
                    "at the metal.")
    assert expect(built(symbols, positions), oscillators="Zn-O-C").oscillators.bands.gamma == {"A'": 1}


def test_a_local_group_lower_than_the_molecule_tells_no_leaks():
    """Found within a smaller tolerance than the molecule: no leaks can be told, and the note says why."""
    ideal = place("OC-6", "W", ["CO"] * 6)
    found = expect(built(ideal.symbols, ideal.positions, shake=0.01), 0.1, oscillators="C-O", local=True,
                   local_tolerance=1e-4).oscillators
    assert found.bands.gamma == {"A1g": 1, "Eg": 1, "T1u": 1} and found.local.symmetry.group.symbol == "C1"
    assert found.local.leaks == () and "too small to tell leaks" in found.notes[0]


def test_local_tolerance():
    tight = expect(read(SAMPLE), oscillators="C-O", local=True, local_tolerance=0.01).oscillators.local
    assert tight.symmetry.group.symbol == "C1"
    assert "C4v" in [rung.symmetry.group.symbol for rung in tight.ladder.rungs]


def test_linear_local_group():
    """Hg(CH3)2: Hg-C stretches in D3h, locally in D∞h."""
    symbols, positions = atoms(("Hg", (0, 0, 0)), ("C", on_axis(2.08, -2.08)), ("H", mirrored(ring(3, 1.02, 2.45))))
    found = expect(built(symbols, positions), oscillators="Hg-C", local=True).oscillators
    assert found.bands.gamma == {"A1'": 1, "A2''": 1}
    assert found.local.symmetry.group.symbol == "D∞h" and found.local.bands.gamma == {"Σg+": 1, "Σu+": 1}
    assert {leak.species: leak.becomes for leak in found.local.leaks} == {}


def test_json_and_page():
    result = expect(read(SAMPLE), oscillators="W-C-O", local=True)
    answer = json.loads(render([result], view, "json"))
    assert answer["oscillators"] == {"set": "stretch C-O", "gamma": {"A": 5}, "infrared": 5, "raman": 5,
                                     "coincident": 5, "polarised": 5}
    assert set(answer["local"]) >= {"point_group", "atoms", "oscillators", "ladder", "leaks"}
    assert answer["gamma_vib"] == {"A": 183}                # top-level keys describe the whole molecule
    page = render([result], view)
    assert "in C₁ (molecule)" in page and "in C₄v (local)" in page and "51 atoms left out" in page
    assert "B₁ is silent in infrared in C₄v" in page
    for form in ("csv", "markdown"):
        assert "C4v" in render([result], view, form) or "C₄v" in render([result], view, form)


@pytest.mark.parametrize("arguments, message", [
    (("--oscillators", "C-N"), "no N in C23H33O5PW; its elements are C, H, O, P, W"),
    (("--oscillators", "O-H"), "oscillators 'O-H': no such bonds; the structure has C-C, C-H, C-O, C-P, W-C, W-P"),
    (("--oscillators", "Qq-O"), "'Qq' is not an element symbol"),
    (("--oscillators", "1-99"), "there is no atom 99"),
    (("--oscillators", "1-63"), "atoms 1 (W) and 63 (H) are not bonded; --bond 1-63 bonds them"),
    (("--oscillators", "C"), "write a bond such as C-O"),
    (("--oscillators", "C-H", "--local", "--local-tolerance", "7"), "is too large"),
    (("--local",), "--local needs --oscillators"), (("--distinguish",), "--distinguish needs --oscillators"),
    (("--local-tolerance", "0.1"), "--local-tolerance needs --oscillators"), (("--oscillators", ""), "write a bond"),
    (("--oscillators", "C-O", "--distinguish"), "--distinguish belongs to --local"),
], ids=lambda value: " ".join(value) if isinstance(value, tuple) else "")
def test_what_is_refused(arguments, message):
    result = CliRunner().invoke(cli, ["expect", SAMPLE, *arguments])
    lines = [line for line in result.output.splitlines() if line]
    assert result.exit_code == 1 and len(lines) == 1 and message in lines[0], result.output


def test_local_without_a_centre():
    molecule = Structure.from_atoms(["C", "O"], [[0, 0, 0], [0, 0, 1.13]])
    with pytest.raises(VibsymError, match="--local: the oscillators have no centre"):
        expect(molecule, oscillators="C-O", local=True)
