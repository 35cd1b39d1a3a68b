"""Band contours of gases: published band types, separations, limits of the formulas, spins of linear molecules."""

import csv
import json
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner
from molecules import atoms, on_axis, ring

from vibsym.cli.main import cli
from vibsym.errors import VibsymError
from vibsym.groups.symbols import plain_label
from vibsym.report.contours import gas_parts
from vibsym.spectra.contours import gas_phase, parse_zeta, separation_parallel, separation_spherical
from vibsym.spectra.expectation import expect
from vibsym.structures.structure import Structure
from vibsym.vibrations.coriolis import coriolis_constant, partners
from vibsym.vibrations.envelope import branch_separation, direction_cosines
from vibsym.vibrations.estimates import estimate
from vibsym.vibrations.rotor import rotor, spin_weights

REFERENCE = Path(__file__).parent / "reference"


def table(name):
    with (REFERENCE / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


GEOMETRIES = {row["slug"]: row["atoms"] for row in table("isotopologues.csv")}
NAMES = {
    "H2O": "water",
    "H2CO": "formaldehyde",
    "C2H4": "ethylene",
    "CHCl3": "trichloromethane",
    "C6H6": "benzene",
    "C2H6": "ethane",
    "cyclopropane": "cyclopropane",
    "HCN": "hydrogen-cyanide",
    "C2H2": "acetylene",
    "CO2": "carbon-dioxide-12c",
}


def triangle(centre, ligand, length):
    return atoms((centre, np.zeros((1, 3))), (ligand, ring(3, length)))


def bent(centre, ligand, length, angle):
    half = np.deg2rad(angle) / 2
    arms = [[0, s * length * np.sin(half), length * np.cos(half)] for s in (1, -1)]
    return atoms((centre, np.zeros((1, 3))), (ligand, arms))


# Bond lengths (Å) and angles from common tables, from memory; only their rough size matters here.
BUILT = {
    "SO2": bent("S", "O", 1.43, 119.3),
    "NO2": bent("N", "O", 1.19, 134.1),
    "BF3": triangle("B", "F", 1.31),
    "SO3": triangle("S", "O", 1.42),
    "XeF4": atoms(("Xe", np.zeros((1, 3))), ("F", ring(4, 1.94))),
    "PF5": atoms(("P", np.zeros((1, 3))), ("F", ring(3, 1.53)), ("F", on_axis(1.58, -1.58))),
    "N2O": atoms(("N", on_axis(0, 1.13)), ("O", on_axis(2.32))),
    "HCOOH": (
        ["C", "O", "O", "H", "H"],
        [[0, 0, 0], [1.17, 0.26, 0], [-0.86, 1.04, 0], [-0.39, -1.02, 0], [-0.34, 1.86, 0]],
    ),
}


def structure(molecule):
    if molecule in BUILT:
        return Structure.from_atoms(*BUILT[molecule])
    rows = [line.split() for line in GEOMETRIES[NAMES.get(molecule, molecule)].split("; ")]
    masses = [float(row[4]) for row in rows] if len(rows[0]) > 4 else None
    return Structure.from_atoms([row[0] for row in rows], [[float(x) for x in row[1:4]] for row in rows], masses)


def gas_of(molecule, **options):
    found = expect(structure(molecule) if isinstance(molecule, str) else molecule)
    return gas_phase(found.symmetry, found.gamma_vib, **options), found


ROWS = [row for row in table("contours.csv") if row["molecule"] in {*NAMES, *BUILT}]


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['molecule']}-{row['species']}")
def test_published_band_types(row):
    gas, found = gas_of(row["molecule"])
    published = row["contour"]
    kind = row["rotor"]
    assert gas.rotor.kind in kind or (kind == "symmetric" and gas.rotor.kind in ("prolate", "oblate"))
    assert found.symmetry.group.symbol == row["point_group"]
    if row["species"].startswith("species along"):  # of a C2v or D2h molecule: one species has each axis
        (contour,) = [each for each in gas.contours if each.type == published]
    else:
        label = plain_label(row["species"].split(" ")[0])
        (contour,) = [each for each in gas.contours if each.species == label]
    if "only" in published or "PQR" in published or "strong Q" in published:
        assert contour.branches == ("PR" if "only" in published else "PQR")
    if published not in ("PR only", "PQR"):
        assert contour.type == published.split(",")[0].split(" (")[0].replace(" with strong Q", "")


def test_hybrids_are_decided_by_the_tensor():
    """HCOOH: the axis across the plane is c, so A'' is C and A' an A/B hybrid; another shape gives others."""
    gas, _ = gas_of("HCOOH")
    assert {each.species: each.type for each in gas.contours} == {"A'": "A/B hybrid", "A''": "C"}
    # a mirror plane that holds the short axis: HClC(Br) arranged so that the heavy atoms lie across the plane
    across = Structure.from_atoms(
        ["C", "Br", "Br", "H", "Cl"], [[0, 0, 0], [0.6, 0.9, 1.6], [0.6, 0.9, -1.6], [-1.0, 0.4, 0], [0.3, -1.7, 0]]
    )
    found = expect(across)
    gas = gas_phase(found.symmetry, found.gamma_vib)
    assert found.symmetry.group.symbol == "Cs"
    assert {each.species: each.type for each in gas.contours} == {"A'": "B/C hybrid", "A''": "A"}


def test_moments_of_water():
    """Re-derived by hand: O at the apex, planar, so that I_c = I_a + I_b; A > B > C."""
    top = gas_of("H2O")[0].rotor
    a, b, c = top.moments
    assert c == pytest.approx(a + b) and a < b < c
    assert np.allclose(top.axes @ top.axes.T, np.eye(3))
    # rotational constants 27.9, 14.5, 9.3 cm-1 (Herzberg 1945, from memory); the geometry is idealised
    assert top.constants == pytest.approx((27.9, 14.5, 9.3), rel=0.03)


def test_separation_formulas_meet():
    """S(0) = √2 makes a parallel band of a spherical top; β → ∞ a linear molecule; Herzberg's 2.358 √(BT) for that."""
    assert separation_parallel(0.2, 0.2, 300) == pytest.approx(separation_spherical(0.2, 300), rel=2e-3)
    assert separation_parallel(2000.0, 0.2, 300) == pytest.approx(separation_parallel(None, 0.2, 300), rel=1e-3)
    assert separation_parallel(None, 0.39, 300) == pytest.approx(2.358 * (0.39 * 300) ** 0.5, rel=1e-3)
    assert separation_parallel(0.1, 0.2, 300) == pytest.approx(1.5 * separation_parallel(None, 0.2, 300), rel=3e-3)


def test_separation_is_that_of_the_strongest_lines():
    """Linear molecule, summed J by J: strongest lines of P and R lie as far apart as the formula, up to one spacing."""
    b, thermal = 0.39, 300 / 1.438776877
    j = np.arange(200)
    lower = (2 * j + 1) * np.exp(-b * j * (j + 1) / thermal)
    r = (j + 1) / (2 * j + 1) * lower
    p = j / (2 * j + 1) * lower
    distance = 2 * b * (j[r.argmax()] + 1) + 2 * b * j[p.argmax()]
    assert separation_parallel(None, b, 300) == pytest.approx(distance, abs=2 * b)


def test_coriolis_constant_narrows_a_spherical_top():
    plain, _ = gas_of("methane")
    narrow, _ = gas_of("methane", zeta={"T2": 0.5})
    assert plain.contours[0].zeta == 0
    assert narrow.contours[0].separation == pytest.approx(plain.contours[0].separation / 2)
    assert parse_zeta("T2=0.05,E=0.1") == {"T2": 0.05, "E": 0.1} and parse_zeta("0.3") == 0.3
    with pytest.raises(VibsymError, match="between -1 and 1"):
        gas_of("methane", zeta=2.0)
    with pytest.raises(VibsymError, match="only degenerate"):
        gas_of("methane", zeta={"A1": 0.2})
    with pytest.raises(VibsymError, match="cannot be read"):
        parse_zeta("much")


OCTAHEDRON_F = atoms(("S", np.zeros((1, 3))), ("F", 1.56 * np.vstack([np.eye(3), -np.eye(3)])))


@pytest.mark.parametrize("molecule", ["methane", "silane", OCTAHEDRON_F], ids=["CH4", "SiH4", "SF6"])
def test_coriolis_constants_add_up_to_one_half(molecule):
    """Two T2 sets of XY4, two T1u sets of XY6: Σζ = 1/2 in any force field (Johnston & Dennison 1935, from memory)."""
    molecule = molecule if isinstance(molecule, str) else Structure.from_atoms(*molecule)
    gas, _ = gas_of(molecule, zeta="normal")
    assert len(gas.contours) == 2 and all(each.mode for each in gas.contours)
    assert sum(each.zeta for each in gas.contours) == pytest.approx(0.5, abs=2e-4)
    plain, _ = gas_of(molecule)
    for each in gas.contours:
        assert each.separation == pytest.approx((1 - each.zeta) * plain.contours[0].separation)


def test_a_coriolis_constant_belongs_to_the_set():
    """The in-plane Eu sets of XeF4: ζ lies between -1 and 1 and does not depend on the component it is taken from."""
    found = expect(Structure.from_atoms(*BUILT["XeF4"]))
    modes = [each for each in estimate(found.symmetry).modes if each.species == "Eu"]
    assert len(modes) == 2
    for mode in modes:
        value = coriolis_constant(found.symmetry, "Eu", mode.vector)
        x, y = partners(found.symmetry, 2, mode.vector)
        assert -1 <= value <= 1
        for turn in (0.3, 1.1):
            assert coriolis_constant(found.symmetry, "Eu", np.cos(turn) * x + np.sin(turn) * y) == pytest.approx(value)
    assert coriolis_constant(found.symmetry, "A2u", modes[0].vector) is None


def test_q_spacing_of_a_perpendicular_band():
    gas, _ = gas_of("ethane")
    a, b, _c = gas.rotor.constants
    (contour,) = [each for each in gas.contours if each.type == "perpendicular"]
    assert contour.spacing == pytest.approx(2 * (a - b))


def test_temperature():
    cold, hot = (gas_of("acetylene", temperature=t)[0].contours[0].separation for t in (100, 400))
    assert hot == pytest.approx(2 * cold)
    with pytest.raises(VibsymError, match="below zero"):
        gas_of("acetylene", temperature=-1)


@pytest.mark.parametrize(
    ("labels", "positions", "weights"),
    [
        ("O C O", (-1.16, 0, 1.16), {"even": 1, "odd": 0}),
        ("H C C H", (-1.66, -0.6, 0.6, 1.66), {"even": 1, "odd": 3}),
        ("D C C D", (-1.66, -0.6, 0.6, 1.66), {"even": 6, "odd": 3}),
        ("N N", (0, 1.1), {"even": 6, "odd": 3}),
        ("H H", (0, 0.74), {"even": 1, "odd": 3}),
        ("D D", (0, 0.74), {"even": 6, "odd": 3}),
        ("O O", (0, 1.2), {"even": 1, "odd": 0}),
        ("15N 15N", (0, 1.1), {"even": 1, "odd": 3}),
        ("H 13C 13C H", (-1.66, -0.6, 0.6, 1.66), {"even": 10, "odd": 6}),
        ("H C N", (-1.07, 0, 1.16), {"even": 6, "odd": 6}),
        ("18O C O", (-1.16, 0, 1.16), {"even": 1, "odd": 1}),
        ("Cl Cl", (0, 1.99), {"even": 6, "odd": 10}),
    ],
)
def test_spin_weights_of_linear_molecules(labels, positions, weights):
    """Herzberg 1945, ch. I,1: for Σ+ ground states; O2 is one by its nuclei only."""
    found = expect(Structure.from_atoms(labels.split(), on_axis(*positions)))
    assert spin_weights(found.symmetry) == weights


def test_rotors():
    assert rotor(expect(structure("methane")).symmetry).kind == "spherical"
    assert rotor(expect(structure("ethane")).symmetry).kind == "prolate"
    assert rotor(expect(Structure.from_atoms(["Ar"], [[0, 0, 0]])).symmetry).kind == "atom"
    top = rotor(expect(structure("H2CO")).symmetry)
    assert top.kind == "asymmetric" and -1 < top.ray < -0.9
    with pytest.raises(VibsymError, match="dummy atom X"):
        rotor(expect(Structure.from_atoms(["B", "X", "H"], [[0, 0, 0], [0, 0, 1.5], [0, 0.4, -1.2]])).symmetry)


def run(*arguments):
    return CliRunner().invoke(cli, ["expect", *arguments])


def test_command():
    answer = json.loads(run("samples/cylinder-bf3.xyz", "--gas", "--format", "json").output)["gas"]
    assert answer["rotor"] == "oblate" and answer["temperature"] == 296
    assert {each["species"]: each["type"] for each in answer["contours"]} == {"E'": "perpendicular", "A2''": "parallel"}
    assert "A₂″      parallel       P Q R" in run("samples/cylinder-bf3.xyz", "--gas").output
    assert "oblate" in run("samples/cylinder-bf3.xyz", "--gas", "--format", "csv").output
    assert "### Gas phase" in run("samples/cylinder-n2o.xyz", "--gas", "--format", "markdown").output
    atom = json.loads(run("samples/cylinder-argon.xyz", "--gas", "--format", "json").output)["gas"]
    assert atom["rotor"] == "atom" and atom["contours"] == []


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["--gas", "--temperature", "-5"], "below zero"),
        (["--temperature", "5"], "belong to --gas"),
        (["--gas", "--zeta", "E'=7"], "between -1 and 1"),
        (["--gas", "--zeta", "B1=0.1"], "no species 'B1'"),
    ],
)
def test_command_errors_are_one_line(arguments, words):
    done = run("samples/cylinder-bf3.xyz", *arguments)
    assert done.exit_code == 1 and words in done.output and done.output.count("\n") == 1


def across_of(constants, axis):
    return (sum(constants) - constants[axis]) / 2


@pytest.mark.parametrize(
    ("constants", "axis"),
    [((3.0, 0.301, 0.3), 0), ((1.0, 0.301, 0.3), 0), ((0.301, 0.3, 0.15), 2), ((0.3002, 0.3001, 0.3), 1)],
    ids=["prolate", "nearly-spherical-prolate", "planar-oblate", "spherical"],
)
def test_summed_lines_meet_the_formula_of_symmetric_tops(constants, axis):
    """Near the symmetric limits the rigid rotor is the parallel band of Gerhard and Dennison."""
    across = across_of(constants, axis)
    formula = separation_parallel(constants[axis], across, 300.0)
    assert branch_separation(constants, axis, 300.0 / 1.438776877) == pytest.approx(formula, rel=0.05)


def test_direction_cosines_are_complete():
    """Strengths from a level to all others add up to 2J + 1 for a moment along any axis, thrice that for all three."""
    for j in range(6):
        for axis in range(3):
            cosines = [direction_cosines(j, upper, axis) for upper in range(max(j - 1, 0), j + 2)]
            total = sum((m**2).sum(axis=0) for m in cosines)
            assert total.sum() == pytest.approx(2 * j + 1)
        one = [
            sum((direction_cosines(j, u, a) ** 2).sum(axis=0) for a in range(3)) for u in range(max(j - 1, 0), j + 2)
        ]
        assert sum(one) == pytest.approx(np.full(2 * j + 1, 3.0))


# A, B, C in cm-1 of SO2, ethylene, pyridine, naphthalene (from memory), separations in √(B kT/hc), B the mean across
# the moment, from a sum of lines without symmetrising, written apart (resolution 0.18, kT = 300 of the mean constant).
SUMMED = [
    ((2.027, 0.344, 0.2935), "A", 3.27),
    ((2.027, 0.344, 0.2935), "B", 1.79),
    ((4.828, 1.0012, 0.8282), "B", 1.88),
    ((0.2014, 0.1936, 0.0987), "A", 3.19),
    ((0.2014, 0.1936, 0.0987), "C", 4.26),
    ((0.104, 0.0411, 0.0295), "A", 3.50),
    ((0.104, 0.0411, 0.0295), "B", 2.00),
    ((0.104, 0.0411, 0.0295), "C", 2.66),
]


@pytest.mark.parametrize(("constants", "letter", "expected"), SUMMED)
def test_asymmetric_tops_against_another_sum_of_lines(constants, letter, expected):
    axis = "ABC".index(letter)
    assert branch_separation(constants, axis, 1 / across_of(constants, axis)) == pytest.approx(expected, rel=0.03)


def test_separations_of_asymmetric_tops_name_their_source():
    """The formula where it holds (A of H2O), the rigid rotor where it does not, none for K structure and hybrids."""
    water = {each.species: each for each in gas_of("H2O")[0].contours}
    assert water["B2"].source == "Seth-Paul 1969" and water["A1"].source == "rigid rotor, summed"
    a, b, c = gas_of("H2O")[0].rotor.constants
    assert water["B2"].separation == pytest.approx(separation_parallel(a, (b + c) / 2, 296))
    assert 0.4 * water["B2"].separation < water["A1"].separation < 0.7 * water["B2"].separation
    sulfide = {each.type: each for each in gas_of("hydrogen-sulfide")[0].contours}
    assert sulfide["A"].source == "rigid rotor, summed"  # nearly oblate, the moment in the plane
    assert branch_separation((9.4, 0.3433, 0.3306), 2, 206.0) is None


def test_near_prolate_tops_have_q_branches_and_hybrids_a_reason():
    """HOOH, C2: one species is type C, 2A - B - C apart by K structure; the other A/B, of unknown shares."""
    places = [[0.7375, 0, 0], [-0.7375, 0, 0], [0.817, 0.5303, 0.7822], [-0.817, 0.5303, -0.7822]]
    symmetry = expect(Structure.from_atoms(["O", "O", "H", "H"], places)).symmetry
    gas = gas_phase(symmetry, {"A": 4, "B": 2})
    a, b, c = gas.rotor.constants
    whole, hybrid = gas.contours
    assert whole.type == "C" and whole.separation is None and whole.spacing == pytest.approx(2 * a - b - c)
    assert hybrid.type == "A/B hybrid" and any("hybrid bands" in note for note in gas.notes)
    assert "0.000" in render_axes(gas) and "−0.000" not in render_axes(gas)


def render_axes(gas):
    return str([part.pairs for part in gas_parts(gas)[:1]])
