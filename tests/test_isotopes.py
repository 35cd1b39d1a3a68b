"""Isotopic substitution: groups, isotopologues; the product rule against force fields, print and observed lines."""

import csv
import json
import re
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner
from molecules import OCTAHEDRON

from vibsym.cli.main import cli
from vibsym.errors import VibsymError
from vibsym.groups.bases import Basis
from vibsym.groups.projection import symmetry_vectors
from vibsym.spectra.fermi import parse_doublet
from vibsym.spectra.isotopes import isotope_effect
from vibsym.spectra.isotopologues import list_isotopologues
from vibsym.spectra.modes import Mode, named_modes
from vibsym.spectra.satellites import local_satellites, satellites
from vibsym.structures.finder import find_symmetry
from vibsym.structures.isotopes import burnside, isotopologues, site_permutations, substitute, substitution
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.vibrations.productrule import product_rule

REFERENCE = Path(__file__).parent / "reference"


def table(name):
    with (REFERENCE / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


PUBLISHED = {row["slug"]: row for row in table("isotopologues.csv")}
# Isotopologue: molecule, replacement; atoms in the order of the geometry.
PAIRS = {
    "methane-d1": ("methane", "2=D"),
    "methane-d2": ("methane", "2=D,3=D"),
    "methane-d3": ("methane", "2=D,3=D,4=D"),
    "silane-d2": ("silane", "2=D,3=D"),
    "silane-d3": ("silane", "2=D,3=D,4=D"),
    "dichloromethane-d1": None,
    "ethane-1,1,1-d3": None,
    "acetylene-d1": None,
    "carbon-dioxide-13c": ("carbon-dioxide-12c", "C=13C"),
    "diborane-10b-d6": ("diborane-10b", "H=D"),
}
# Shimanouchi's axes in words of ours, where they differ (column `convention` of the table).
SWAP = {"B1": "B2", "B2": "B1"}
TURN = {"B1g": "B3g", "B3g": "B1g", "B1u": "B3u", "B3u": "B1u"}
AXES = {
    "water": SWAP,
    "hydrogen-sulfide": SWAP,
    "formaldehyde": SWAP,
    "acetone": SWAP,
    "propane": SWAP,
    "ethylene": TURN,
}
# What the rule puts in doubt: D2S ν3 = 1999 (a known fault of the source), two species of cyclohexane (6 % above
# theory), three of propane (the README of the collection names them), one each of acetone (5.8 %) and CH3NC (6.1 %).
DOUBTFUL = {
    ("hydrogen-sulfide-d2", "B2"),
    ("cyclohexane-d12", "A2u"),
    ("cyclohexane-d12", "Eu"),
    ("propane-d8", "A2"),
    ("propane-d8", "B1"),
    ("propane-d8", "B2"),
    ("acetone-d6", "B2"),
    ("methyl-isocyanide-d3", "A1"),
}


def structure_of(slug):
    rows = [line.split() for line in PUBLISHED[slug]["atoms"].split("; ")]
    masses = [float(row[4]) for row in rows] if len(rows[0]) > 4 else None
    return Structure.from_atoms([row[0] for row in rows], [[float(x) for x in row[1:4]] for row in rows], masses, slug)


def pair_of(slug):
    base, replacement = PAIRS.get(slug) or (re.sub(r"-(1,1,1-)?d\d+$", "", slug), None)
    molecule = structure_of(base)
    if replacement is None:
        count = int(re.search(r"d(\d+)$", slug)[1])
        wanted = PUBLISHED[slug]["point_group"].replace("*", "∞")
        hydrogens = ",".join(f"{k + 1}=D" for k, name in enumerate(molecule.symbols) if name == "H")
        chosen = next(
            each
            for each in isotopologues(molecule, hydrogens, substituted=[count])
            if each.symmetry.group.symbol == wanted
        )
        replacement = ",".join(f"{site + 1}=D" for site in chosen.sites)
    return base, substitution(molecule, replacement)


def modes_of(slug, base, group):
    found = []
    for part in PUBLISHED[slug]["wavenumbers"].split(";"):
        label, _, values = part.partition(":")
        label = (
            AXES.get(base, {}).get(label.strip(), label.strip()) if group.symbol in ("C2v", "D2h") else label.strip()
        )
        found += [Mode("", group.species_named(label).label, float(v)) for v in re.findall(r"[\d.]+", values)]
    return named_modes(found)


def effect_of(slug):
    base, pair = pair_of(slug)
    return isotope_effect(pair, modes_of(base, base, pair.original.group), modes_of(slug, base, pair.substituted.group))


@pytest.mark.parametrize(
    "slug", [slug for slug in PUBLISHED if not PUBLISHED[slug]["atoms"] and slug != "diborane-10b-d6"]
)
def test_observed_products_lie_within_the_allowance(slug):
    effect = effect_of(slug)
    assert effect.pair.substituted.group.symbol == PUBLISHED[slug]["point_group"].replace("*", "∞")
    doubtful = {(slug, each.species) for each in effect.observed if each.doubtful}
    assert all(each.product is not None for each in effect.observed)
    assert doubtful == {each for each in DOUBTFUL if each[0] == slug}


def test_diborane_is_compared_species_by_species():
    """Its published axes: x along B-B, y along the bridge; ours are found by the counts of both molecules."""
    base, pair = pair_of("diborane-10b-d6")
    counts = {line.species: line.modes for line in product_rule(pair)}
    published = {
        label: len(values.split(","))
        for label, _, values in (part.strip().partition(":") for part in PUBLISHED[base]["wavenumbers"].split(";"))
    }
    assert sorted(counts.values()) == sorted(published.values()) and counts["Ag"] == published["Ag"]


SLUGS = {
    "CH4/CD4": "methane-d4",
    "SiH4/SiD4": "silane-d4",
    "C2H6/C2D6": "ethane-d6",
    "C6H12/C6D12": "cyclohexane-d12",
    "CHCl3/CDCl3": "trichloromethane-d1",
    "HCN/DCN": "hydrogen-cyanide-d1",
    "12CO2/13CO2": "carbon-dioxide-13c",
}


@pytest.mark.parametrize(
    "row",
    [row for row in table("product_rule.csv") if row["pair"] in SLUGS],
    ids=lambda row: f"{row['pair']}-{row['species_here']}",
)
def test_theory_in_print(row):
    """Ratios from textbook bond lengths; other lengths change them in the third decimal."""
    line = next(each for each in product_rule(pair_of(SLUGS[row["pair"]])[1]) if each.species == row["species_here"])
    assert line.modes == int(row["n_modes"])
    assert line.theory == pytest.approx(float(row["ratio_theory"]), abs=2e-3)


def invariant_force_field(symmetry, seed):
    """A random force field (3N, 3N) that has the symmetry and no force on translations and rotations."""
    rng = np.random.default_rng(seed)
    n = len(symmetry.positions)
    A = rng.normal(size=(3 * n, 3 * n))
    F = A @ A.T
    basis = Basis.displacements(symmetry.group.image, symmetry.permutations)
    F = sum(D.T @ F @ D for D in map(basis.matrix, range(basis.group.order))) / basis.group.order
    shifts = np.tile(np.eye(3), n)
    turns = np.array([np.cross(axis, symmetry.positions).ravel() for axis in np.eye(3)])
    rigid = np.linalg.svd(np.vstack([shifts, turns]), full_matrices=False)
    rigid = rigid[2][rigid[1] > 1e-6 * rigid[1][0]]
    project = np.eye(3 * n) - rigid.T @ rigid
    return project @ F @ project, basis


def products_of(F, basis, masses, labels):
    """Product of the wavenumbers (arbitrary unit) of each species, each degenerate set once."""
    weights = np.repeat(masses, 3) ** -0.5
    dynamic = weights[:, None] * F * weights
    found = {}
    for label, vectors in symmetry_vectors(basis).items():
        pair = basis.group.species_named(label).pair
        chosen = vectors.reshape(-1, vectors.shape[-1]) if pair else vectors[:, 0]
        values = np.linalg.eigvalsh(chosen @ dynamic @ chosen.T)
        values = values[values > 1e-9 * values.max()]
        found[labels[label]] = np.exp(np.log(values).sum() / (4 if pair else 2))
    return found


def boric_acid():
    """B(OH)3 turned like a propeller wheel, C3h: its E' and E'' are conjugate pairs."""
    turn = np.array([[-0.5, -(3**0.5) / 2, 0], [3**0.5 / 2, -0.5, 0], [0, 0, 1]])
    arm = np.array([[1.36, 0, 0], [1.7, 0.9, 0]])
    positions = [np.zeros(3)] + [point for k in range(3) for point in arm @ np.linalg.matrix_power(turn, k).T]
    return Structure.from_atoms(["B", *["O", "H"] * 3], positions)


CASES = [
    ("methane", "H=D"),
    ("methane", "2=D"),
    ("methane", "2=D,3=T"),
    ("benzene", "H=D,C=13C"),
    ("benzene", "7=D"),
    ("hydrogen-cyanide", "H=D,N=15N"),
    ("acetylene", "H=D"),
    ("acetylene", "1=D"),
    ("water", "2=D"),
    ("ethylene", "H=D"),
    ("ethane", "H=D"),
    ("formaldehyde", "O=18O"),
    ("cyclopropane", "H=D"),
    (boric_acid, "H=D,O=18O"),
    (boric_acid, "H=D"),
]


@pytest.mark.parametrize(("molecule", "replacement"), CASES, ids=lambda value: getattr(value, "__name__", str(value)))
def test_the_rule_holds_in_any_force_field(molecule, replacement):
    pair = substitution(molecule() if callable(molecule) else structure_of(molecule), replacement)
    F, basis = invariant_force_field(pair.common, 7)
    labels = pair.common.group.image_labels
    before, after = (products_of(F, basis, each.structure.masses, labels) for each in (pair.original, pair.substituted))
    rule = product_rule(pair)
    assert sum(line.modes for line in rule) > 0
    for line in rule:
        assert line.theory == pytest.approx(after[line.species] / before[line.species], rel=1e-10)
        assert np.prod([factor for _, factor in line.factors]) == pytest.approx(line.theory)


def test_axes_are_exchanged_in_both_molecules():
    """Formaldehyde with Shimanouchi's axes: its in-plane modes are B1 before and after."""
    molecule = structure_of("formaldehyde")
    plain, swapped = (substitution(molecule, "H=D", axes=axes) for axes in (None, "swap"))
    assert swapped.correlation["B1"] == {"B1": 1} and swapped.correlation_substituted["B1"] == {"B1": 1}
    usual, other = ({line.species: line.theory for line in product_rule(pair)} for pair in (plain, swapped))
    assert other["B1"] == pytest.approx(usual["B2"]) and other["B2"] == pytest.approx(usual["B1"])
    assert substitution(molecule, "3=D", axes="swap").common.group.symbol == "Cs"


def test_the_way_back_is_the_inverse():
    there = product_rule(substitution(structure_of("methane"), "2=D,3=D"))
    heavy = substitute(structure_of("methane"), "2=D,3=D")
    back = product_rule(substitution(heavy, "2=H,3=H"))
    assert [a.theory * b.theory for a, b in zip(there, back)] == pytest.approx([1] * len(there), rel=1e-12)


def test_groups_and_correlation():
    pair = substitution(structure_of("methane"), "2=D")
    assert [each.group.symbol for each in (pair.original, pair.substituted, pair.common)] == ["Td", "C3v", "C3v"]
    assert pair.correlation["T2"] == {"A1": 1, "E": 1}
    other = substitution(substitute(structure_of("methane"), "2=D"), "3=T")
    assert [each.group.symbol for each in (other.original, other.substituted, other.common)] == ["C3v", "Cs", "Cs"]
    swapped = substitution(substitute(structure_of("methane"), "2=D"), "2=H,3=D")  # D moves to another corner
    assert [each.group.symbol for each in (swapped.original, swapped.substituted, swapped.common)] == [
        "C3v",
        "C3v",
        "Cs",
    ]
    assert swapped.correlation["E"] == swapped.correlation_substituted["E"] == {"A'": 1, "A''": 1}
    linear = substitution(structure_of("acetylene"), "1=D")
    assert linear.correlation["Πg"] == {"Π": 1} and linear.common.group.symbol == "C∞v"


@pytest.mark.parametrize(
    ("slug", "replacement", "count", "groups"),
    [
        ("benzene", "H=D", 13, {"D6h": 2, "C2v": 7, "D2h": 2, "Cs": 1, "D3h": 1}),
        ("methane", "H=D", 5, {"Td": 2, "C3v": 2, "C2v": 1}),
        ("ethylene", "H=D", 7, None),
        ("acetylene", "C=13C", 3, None),
        ("benzene", "C=13C,H=D", 430, None),
    ],
)
def test_isotopologues_are_counted_by_burnside(slug, replacement, count, groups):
    molecule = structure_of(slug)
    sites = [k for k, name in enumerate(molecule.symbols) if f"{name}=" in replacement]
    moves = site_permutations(find_symmetry(molecule), sites)
    assert burnside(moves) == count
    if count > 100:
        return
    found = list_isotopologues(molecule, replacement)
    assert len(found.isotopologues) == count and found.arrangements == 2 ** len(sites)
    if groups:
        symbols = [each.symmetry.group.symbol for each in found.isotopologues]
        assert {symbol: symbols.count(symbol) for symbol in symbols} == groups


def test_benzene_weights():
    """Three D in benzene: 1,2,3- (6 ways), 1,2,4- (12), 1,3,5- (2): the arrangements of Körner, 1874."""
    three = isotopologues(structure_of("benzene"), "H=D", substituted=[3])
    assert sorted((each.weight, each.symmetry.group.symbol) for each in three) == [(2, "D3h"), (6, "C2v"), (12, "Cs")]


def test_buckminsterfullerene():
    """Two of sixty: 23 molecules, the number of the isomers of C60H2 (from memory), mirror images counted as one."""
    ball = read("samples/soot-c60.xyz")
    found = list_isotopologues(ball, "C=13C", at_most=2).isotopologues
    assert [each.weight for each in found[:2]] == [1, 60]
    assert sum(each.weight for each in found[2:]) == 1770 and len(found) == 2 + 23


def test_equivalent_sites_outside_the_list_still_count_as_alike():
    """Of three neighbouring sites of benzene the two outer pairs make one molecule, 1,2-d2."""
    two = isotopologues(structure_of("benzene"), "7=D,8=D,9=D", substituted=[2])
    assert sorted(each.weight for each in two) == [1, 2]


def carbonyl(symbols=("Mo",)):
    positions = np.vstack([np.zeros(3), *[point for a in OCTAHEDRON for point in (2.06 * a, 3.2 * a)]])
    return Structure.from_atoms([*symbols, *["C", "O"] * 6], positions)


def test_carbonyl_satellites():
    """Mo(CO)6, ν(CO) 2116.7, 2018.8, 1990 (L. H. Jones 1969, from memory); one carbon-13 makes it C4v."""
    found = satellites(carbonyl(), {"A1g": 2116.7, "Eg": 2018.8, "T1u": 1990.0})
    main, heavy = found.molecules
    assert dict(main.positions) == pytest.approx({"A1g": 2116.7, "Eg": 2018.8, "T1u": 1990.0})
    assert heavy.symmetry.group.symbol == "C4v" and heavy.gamma == {"A1": 3, "B1": 1, "E": 1} and heavy.sites == 6
    assert heavy.weight == pytest.approx(6 * 0.0107 / 0.9893, rel=0.02)
    values = dict(heavy.positions[1:]), heavy.positions
    assert values[0]["E"] == pytest.approx(1990) and values[0]["B1"] == pytest.approx(2018.8)
    product = np.prod([value for _, value in heavy.positions]) * 1990  # E counts twice
    m12, m13, o = 12.0, 13.00335483507, 15.99491461957
    reduced = (m12 / (m12 + o)) / (m13 / (m13 + o))
    assert product / (2116.7 * 2018.8**2 * 1990**3) == pytest.approx(reduced**0.5, rel=1e-9)
    assert satellites(carbonyl()).molecules[1].positions == ()


def test_satellites_in_the_local_group():
    """trans-Mo(CO)4L2 with ligands that leave no symmetry: its four carbonyls are alike in D4h (A1g + B1g + Eu)."""
    flask = read("samples/flask-trans.xyz")
    main, heavy = local_satellites(flask, {"A1g": 2020.0, "B1g": 1950.0, "Eu": 1905.0}).molecules
    assert main.symmetry.group.symbol == "D4h" and main.gamma == {"A1g": 1, "B1g": 1, "Eu": 1}
    assert heavy.symmetry.group.symbol == "C2v" and heavy.sites == 4
    assert flask.symbols[heavy.atom] == "C" and sum(heavy.gamma.values()) == 4
    values = sorted(value for _, value in heavy.positions)
    assert values[0] < 1905 and values[1] == pytest.approx(1905) and values[-1] < 2020
    done = run(
        "samples/flask-trans.xyz",
        "--satellites",
        "--local",
        "--mode",
        "A1g=2020",
        "--mode",
        "B1g=1950",
        "--mode",
        "Eu=1905",
    )
    assert done.exit_code == 0 and "D₄h" in done.output and "4.33 %" in done.output


def test_satellites_that_cannot_be():
    with pytest.raises(VibsymError, match="none is given for Eg"):
        satellites(carbonyl(), {"A1g": 2100, "T1u": 2000})
    with pytest.raises(VibsymError, match="no terminal carbonyl"):
        satellites(structure_of("methane"))


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("9=D", "no atom 9; the structure has atoms 1 to 5"),
        ("0=D", "no atom 0"),
        ("-1=D", "no atom -1; the structure has atoms 1 to 5"),
        ("1.5=D", "no atom 1.5"),
        ("1=D", "atom 1 is C, and D is another element"),
        ("Cl=37Cl", "no atom Cl in CH4"),
        ("2", "cannot be read"),
        ("", "nothing to replace"),
        ("2=D,2=T", "two isotopes"),
        ("2=9H", "9H"),
    ],
)
def test_replacements_that_cannot_be(text, words):
    with pytest.raises(VibsymError, match=words):
        substitute(structure_of("methane"), text)


def test_dummies_have_no_mass():
    molecule = Structure.from_atoms(["B", "X", "H"], [[0, 0, 0], [0, 0, 1.5], [0, 0, -1.2]])
    with pytest.raises(VibsymError, match="dummy atom X has no mass"):
        substitution(molecule, "3=D")


def write_xyz(path, slug):
    molecule = structure_of(slug)
    rows = [f"{name} {x:.9f} {y:.9f} {z:.9f}" for name, (x, y, z) in zip(molecule.symbols, molecule.positions)]
    path.write_text(f"{len(rows)}\n{slug}\n" + "\n".join(rows) + "\n", encoding="utf-8")
    return str(path)


def run(*arguments):
    return CliRunner().invoke(cli, ["isotopes", *arguments])


def test_command_with_two_assignments(tmp_path):
    """12CO2/13CO2 (G. Herzberg 1945, from memory): ν1 is doubtful until it is deperturbed."""
    path = write_xyz(tmp_path / "co2.xyz", "carbon-dioxide-12c")
    head = "# group: Dinfh\nstatus,mode,species,infrared_line,raman_line\n"
    light, heavy = tmp_path / "light.csv", tmp_path / "heavy.csv"
    light.write_text(head + "assigned,ν1,Σg+,,1388.2\nassigned,ν2,Πu,667.4,\nassigned,ν3,Σu+,2349,\n", encoding="utf-8")
    heavy.write_text(head + "assigned,ν1,Σg+,,1370.1\nassigned,ν2,Πu,648.5,\nassigned,ν3,Σu+,2283,\n", encoding="utf-8")
    files = ["--assignment", str(light), "--assignment", str(heavy)]
    answer = json.loads(run(path, "--replace", "C=13C", *files, "--format", "json").output)
    assert answer["common"] == "D∞h" and answer["product_rule"]["Σg+"] == pytest.approx(1)
    assert answer["product_rule"]["Πu"] == pytest.approx(0.9715, abs=1e-4)
    observed = {each["species"]: each for each in answer["observed"]}
    assert observed["Σg+"]["doubtful"] and observed["Σg+"]["deviation"] == pytest.approx(-1.3, abs=0.05)
    assert not observed["Πu"]["doubtful"] and not observed["Σu+"]["doubtful"]
    doublets = ["--doublet", "1388.2:1285.4=1.6", "--doublet", "1370.1:1265.8=1.1"]
    table_page = run(path, "--replace", "C=13C", *files, *doublets).output
    assert "deperturbed ν1, ν1" in table_page
    one = run(path, "--replace", "C=13C", "--assignment", str(light))
    assert one.exit_code == 1 and "give --assignment twice" in one.output


def test_deperturbation_changes_the_product():
    _base, pair = pair_of("carbon-dioxide-13c")
    light, heavy = [Mode("ν1", "Σg+", 1388.2)], [Mode("ν1", "Σg+", 1370.1)]
    first = isotope_effect(pair, light, heavy).observed[0]
    second = isotope_effect(pair, light, heavy, [parse_doublet("1388.2:1285.4=1")]).observed[0]
    assert first.product == pytest.approx(1370.1 / 1388.2) and second.product == pytest.approx(1370.1 / 1336.8)


def test_missing_lines_make_no_product():
    _base, pair = pair_of("methane-d4")
    (a1, e, t2) = isotope_effect(pair, [Mode("ν3", "T2", 3019.0)], [Mode("ν3", "T2", 2259.0)]).observed
    assert a1.product is None and e.seen == (0, 0) and t2.seen == (1, 1) and t2.doubtful is None


def test_command_json_and_formats(tmp_path):
    path = write_xyz(tmp_path / "methane.xyz", "methane")
    answer = json.loads(run(path, "--replace", "H=D", "--format", "json").output)
    assert answer["from"]["symbol"] == answer["to"]["symbol"] == answer["common"] == "Td"
    assert answer["correlation"]["T2"] == {"T2": 1}
    assert answer["product_rule"]["A1"] == pytest.approx(0.7074, abs=1e-4)
    assert "infrared active" in run(path, "--replace", "2=D").output
    rows = run(path, "--replace", "2=D", "--format", "csv").output.splitlines()
    assert rows[0] == "from,to,common,species,modes,product_rule" and len(rows) == 3
    assert len(run(path, "--replace", "H=D", "--enumerate", "--format", "csv").output.splitlines()) == 6
    assert "| CH₃D | C₃v | 4 | 2 |" in run(path, "--replace", "H=D", "--enumerate", "--format", "markdown").output


@pytest.mark.parametrize(
    "arguments",
    [
        ["--replace", "9=D"],
        ["--replace", "Q=D"],
        [],
        ["--satellites", "--replace", "2=D"],
        ["--satellites"],
        ["--replace", "2=D", "--mode", "A1=2917"],
        ["--replace", "2=D", "--doublet", "1388.2:1285.4=1.6"],
        ["--replace", "2=D", "--at-most", "1"],
        ["--replace", "2=D", "--local"],
        ["--replace", "2=D", "--enumerate", "--assignment", "a.csv"],
    ],
)
def test_command_errors_are_one_line(tmp_path, arguments):
    done = run(write_xyz(tmp_path / "methane.xyz", "methane"), *arguments)
    assert done.exit_code == 1 and done.output.startswith("Error: ") and done.output.count("\n") == 1


def test_the_mass_number_stands_raised_in_the_head_of_every_page(tmp_path):
    path = tmp_path / "dioxide.xyz"
    path.write_text("3\n\nO 0 0 -1.16\n13C 0 0 0\nO 0 0 1.16\n", encoding="utf-8")
    for command in ("expect", "group", "normal"):
        assert CliRunner().invoke(cli, [command, str(path)]).output.startswith("(¹³C)O₂")
