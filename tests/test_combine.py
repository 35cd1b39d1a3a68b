"""Overtones, combinations, Fermi pairs, hot bands and lines left over."""

import json
from math import exp

import pytest
from click.testing import CliRunner

from vibsym.cli.main import cli
from vibsym.errors import VibsymError
from vibsym.evidence.assignment_file import parse_assignment, write_assignment
from vibsym.evidence.leftovers import explain_lines
from vibsym.evidence.lines import Line
from vibsym.groups.pointgroup import point_group
from vibsym.groups.products import product_of
from vibsym.spectra.combinations import combine
from vibsym.spectra.fermi import Doublet, parse_doublet
from vibsym.spectra.modes import Mode, parse_modes
from vibsym.spectra.populations import HC_OVER_K, partition_function, states

# CH4: wavenumbers of T. Shimanouchi, NSRDS-NBS 39 (1972)
METHANE = ["v1:A1=2917", "v2:E=1534", "v3:T2=3019", "v4:T2=1306"]
# CO2: G. Herzberg, Infrared and Raman Spectra (1945), from memory
DIOXIDE = ["v1:Σg+=1388.2", "v2:Πu=667.4", "v3:Σu+=2349"]


def made(group, modes, quanta=2, **options):
    group = point_group(group)
    return combine(group, parse_modes(modes, group), quanta, **options)


def by_label(result):
    return {each.label: each for each in result.combinations}


def test_methane_overtones():
    found = by_label(made("Td", METHANE))
    assert found["2ν4"].species == {"A1": 1, "E": 1, "T2": 1}
    assert found["2ν4"].wavenumber == 2612 and found["2ν4"].infrared and found["2ν4"].raman
    assert found["2ν2"].species == {"A1": 1, "E": 1} and not found["2ν2"].infrared
    assert found["ν2 + ν4"].species == {"T1": 1, "T2": 1} and found["ν2 + ν4"].wavenumber == 2840
    assert found["ν3 - ν4"].quanta == {"ν3": 1, "ν4": -1} and found["ν3 - ν4"].wavenumber == 1713


@pytest.mark.parametrize("quanta", [2, 3, 4])
def test_everything_up_to_the_quanta_occurs_once(quanta):
    result = made("Td", METHANE, quanta)
    keys = {tuple(sorted(each.quanta.items())) for each in result.combinations}
    assert len(keys) == len(result.combinations)
    energies = {"ν1": 2917, "ν2": 1534, "ν3": 3019, "ν4": 1306}
    expected = 0
    span = range(-quanta, quanta + 1)
    for a in span:
        for b in span:
            for c in span:
                for d in span:
                    order = abs(a) + abs(b) + abs(c) + abs(d)
                    height = sum(n * e for n, e in zip((a, b, c, d), energies.values()))
                    expected += 2 <= order <= quanta and (min(a, b, c, d) >= 0 or (max(a, b, c, d) > 0 and height > 0))
    assert len(keys) == expected
    assert all(each.wavenumber > 0 for each in result.combinations)


def test_benzene_summation_bands():
    """Pairs of silent modes give infrared bands: 975 (E2u) + 995 (B2g) near 1960 (Herzberg 1945, from memory)."""
    result = made("D6h", ["ν19:E2u=975", "ν7:B2g=995", "ν11:E1g=849"])
    found = by_label(result)
    assert found["ν7 + ν19"].species == {"E1u": 1} and found["ν7 + ν19"].infrared and not found["ν7 + ν19"].raman
    assert found["ν11 + ν19"].species == {"B1u": 1, "B2u": 1, "E1u": 1}


def test_a_difference_has_the_species_of_its_sum():
    result = made("Oh", ["ν3:T1u=939", "ν5:T2g=522", "ν2:Eg=641"], 3)
    found = by_label(result)
    assert found["ν3 - ν5"].species == found["ν3 + ν5"].species
    group = point_group("Oh")
    assert found["ν2 + ν5 - ν3"].species == product_of(group, ["Eg", "T2g", "T1u"])


def test_carbon_dioxide_fermi_doublet():
    """2ν2 (Σg+ + Δg) and ν1 (Σg+): the textbook resonance; Δg takes no part."""
    result = made("Dinfh", DIOXIDE, resonance=60)
    (pair,) = result.fermi
    assert (pair.fundamental, pair.combination, pair.species) == ("ν1", "2ν2", ("Σg+",))
    assert pair.distance == pytest.approx(2 * 667.4 - 1388.2)
    assert by_label(result)["2ν2"].species == {"Σg+": 1, "Δg": 1}
    assert made("Dinfh", DIOXIDE, resonance=50).fermi == ()
    (pair,) = made("Dinfh", DIOXIDE, doublets=[parse_doublet("1388.2:1285.4=1.6")]).fermi
    assert pair.doublet.interaction == pytest.approx(50.0, abs=0.1)


def test_a_doublet_belongs_to_the_nearest_combination():
    """Of two combinations in reach only the one near the undisturbed position gets the estimate."""
    modes = ["ν1:A1=1388", "ν2:A1=667", "ν3:A1=705"]  # 2ν2 = 1334, ν2 + ν3 = 1372, 2ν3 = 1410
    pairs = made("C2v", modes, doublets=[parse_doublet("1388:1285=1.6")]).fermi
    assert {pair.combination for pair in pairs} == {"ν2 + ν3", "2ν3"} | {"2ν2"}
    (marked,) = [pair for pair in pairs if pair.doublet]
    assert marked.combination == "2ν2"  # undisturbed at 1324.6
    with pytest.raises(VibsymError, match="--doublet 1500:1285"):
        made("C2v", modes, doublets=[parse_doublet("1500:1285=1.6")])


def test_pairs_need_a_common_species():
    """2ν4 of methane (A1 + E + T2) lies near a fundamental A1, not near one of species T1."""
    assert made("Td", ["ν4:T2=1306", "ν1:A1=2620"]).fermi
    assert not made("Td", ["ν4:T2=1306", "ν1:A2=2620"]).fermi


@pytest.mark.parametrize("ratio", [0.2, 1.0, 3.0])
def test_two_levels_give_back_their_matrix(ratio):
    """The matrix of undisturbed levels and W has the lines as eigenvalues and their intensities as squares."""
    import numpy as np

    doublet = Doublet(1410.0, 1330.0, ratio)
    matrix = np.array([[doublet.fundamental, doublet.interaction], [doublet.interaction, doublet.partner]])
    values, vectors = np.linalg.eigh(matrix)
    assert values == pytest.approx([1330.0, 1410.0])
    assert vectors[0, 1] ** 2 / vectors[0, 0] ** 2 == pytest.approx(ratio)


def test_populations_by_summing_levels():
    """The partition function of one twofold vibration: Σ (n + 1) exp(-hcνn/kT), level by level."""
    x = exp(-HC_OVER_K * 667.4 / 350)
    assert partition_function([(667.4, 2)], 350) == pytest.approx(sum((n + 1) * x**n for n in range(200)))
    assert [states({"a": n}, {"a": 3}) for n in range(4)] == [1, 3, 6, 10]
    found = by_label(made("Dinfh", ["v2:Πu=667.4", "v3:Σu+=2349"], temperature=350))
    y = exp(-HC_OVER_K * 2349 / 350)
    assert found["ν3 - ν2"].fraction == pytest.approx(2 * x * (1 - x) ** 2 * (1 - y))
    assert made("Dinfh", DIOXIDE, temperature=0).hot_bands[0].fraction == 0


def test_hot_bands():
    result = made("Dinfh", DIOXIDE)
    first = result.hot_bands[0]
    assert first.lower == "ν2" and {band.label for band in result.hot_bands} >= {"ν3 + ν2 - ν2", "2ν2 - ν2"}
    doubled = next(band for band in result.hot_bands if band.label == "2ν2 - ν2")
    assert doubled.species == {"Πu": 2, "Φu": 1} and doubled.infrared
    assert first.fraction == pytest.approx(0.0720, abs=2e-4)


def test_lines_are_matched_and_ranked():
    """Methane again: 2600 is 2ν4 (infrared, T2); 1306 is ν4 itself; nothing reaches 3500."""
    result = made("Td", METHANE)
    lines = [Line(2600.0, "IR"), Line(1306.5, "IR"), Line(3500.0, "Raman"), Line(2835.0, "IR"), Line(4446.0, "IR")]
    first, second, third, fourth, fifth = explain_lines(lines, result, 15)
    assert first.candidates[0].combination.label == "2ν4" and first.candidates[0].usual
    assert second.fundamental == "ν4" and second.candidates == ()
    assert third.fundamental is None and third.candidates == ()
    assert fourth.candidates[0].combination.label == "ν2 + ν4"
    assert fifth.candidates == ()  # ν1 + ν2 (E) is not infrared active


def test_the_usual_shift_comes_first():
    group = point_group("C1")
    modes = parse_modes(["ν1:A=1000", "ν2:A=996", "ν3:A=500"], group)
    (found,) = explain_lines([Line(1998.0, "IR")], combine(group, modes), 5)
    assert [each.combination.label for each in found.candidates] == ["2ν1", "ν1 + ν2"]


def test_the_nearest_combination_beyond_the_match_is_named():
    """SO2: ν1 + ν3 is seen 13.6 cm-1 below the sum (Herzberg 1945, from memory); at 3000 nothing is near."""
    group = point_group("C2v")
    modes = parse_modes(["v1:A1=1151.4", "v2:A1=517.7", "v3:B2=1361.8"], group)
    near, far = explain_lines([Line(2499.6, "IR"), Line(3000.0, "IR")], combine(group, modes))
    assert not near.candidates and near.nearest.combination.label == "ν1 + ν3"
    assert near.to_dict()["nearest"]["shift"] == pytest.approx(-13.6)
    assert not far.candidates and far.nearest is None and far.to_dict()["nearest"] is None


def test_hot_bands_explain_lines_too():
    """A line below ν2 of CO2 can be 2ν2 - ν2 (7 % of the molecules in ν2); from thinly filled levels nothing is."""
    result = made("Dinfh", DIOXIDE)
    (below,) = explain_lines([Line(660.5, "IR")], result)
    hot = {each.combination.label: each for each in below.candidates}
    assert list(hot) == ["2ν2 - ν2"] and hot["2ν2 - ν2"].usual
    (above,) = explain_lines([Line(674.5, "IR")], result)
    assert not above.candidates[0].usual and above.candidates[0].score > below.candidates[0].score


def test_modes_without_numbers_follow_the_table():
    modes = parse_modes(["T2=1306", "E=1534", "T2=3019", "A1=2917"], point_group("Td"))
    assert [m.name for m in combine(point_group("Td"), modes).modes] == ["A1(1)", "E(1)", "T2(1)", "T2(2)"]


@pytest.mark.parametrize(
    ("group", "text", "words"),
    [
        ("Dinfh", "Σg-=100", "fundamentals of D∞h are Σg\\+, Πg, Σu\\+, Πu"),
        ("Cinfv", "Δ=100", "fundamentals of C∞v are Σ\\+, Π$"),
        ("Kh", "Pu=100", "single atom, which has no vibrations"),
    ],
)
def test_no_vibration_of_a_linear_molecule(group, text, words):
    with pytest.raises(VibsymError, match=words):
        parse_modes([text], point_group(group))


def test_names_of_modes():
    group = point_group("Td")
    assert [m.name for m in parse_modes(["T2=1306", "T2=3019", "nu1:A1=2917", "V2:E"], group)] == [
        "T2(2)",
        "T2(1)",
        "ν1",
        "ν2",
    ]
    result = combine(group, parse_modes(["F2=1306", "ν2:E"], group))
    found = by_label(result)
    assert found["2T2(1)"].wavenumber == 2612 and found["ν2 + T2(1)"].wavenumber is None
    with pytest.raises(VibsymError, match="given twice"):
        parse_modes(["v1:A1=1", "ν1:A1=2"], group)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("ν1:B1=100", "no species 'B1' in Td"),
        ("ν1:A1=x", "not a wavenumber"),
        ("ν1:A1=-5", "between 0 and"),
        ("=5", "cannot be read"),
        ("ν1:A1=nan", "between 0 and"),
    ],
)
def test_modes_that_cannot_be(text, words):
    with pytest.raises(VibsymError, match=words):
        parse_modes([text], point_group("Td"))


ASSIGNMENT = """# structure: methane
# group: Td
# axes: z S4
status,mode,species,infrared_line,raman_line,strength_infrared,strength_raman,polarisation,estimate,description,firm,alternatives,site
assigned,ν1,A1,,2917,,vs,p,2900,stretch C-H,yes,,
assigned,ν4,T2,1306,1308,s,w,dp,1300,bend,no,E:1.7;A1:2,a
unseen,ν2,E,,,,,,1500,bend,no,,
leftover,,,2600,,w,,,,,no,,b
"""


def test_assignment_file_is_read_and_written():
    file = parse_assignment(ASSIGNMENT, "a.csv")
    assert file.modes() == (Mode("ν1", "A1", 2917.0), Mode("ν4", "T2", 1307.0))
    assert [(line.wavenumber, line.spectrum, line.strength) for line in file.leftovers] == [(2600.0, "IR", "w")]
    assert (
        file.rows[1].alternatives == (("E", 1.7), ("A1", 2.0))
        and file.rows[0].firm
        and file.rows[3].extra == {"site": "b"}
    )
    again = parse_assignment(write_assignment(file), "a.csv")
    assert again.rows == file.rows and (again.structure, again.group, again.axes) == ("methane", "Td", "z S4")
    assert write_assignment(file) == ASSIGNMENT


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("unseen,ν2", "seen,ν2", "line 7: status 'seen' is none of"),
        ("2917", "29x7", "line 5: raman_line '29x7' is not a number"),
        ("ν4,T2", "ν4,B1", "line 6: no species 'B1' in Td"),
        ("status,mode", "state,mode", "no column status"),
        ("E:1.7", "E:much", "line 6: alternatives"),
        ("2600", "", "line 8: no line"),
        ("# group: Td", "# group: Q9", "a.csv, head '# group:': unknown point group"),
    ],
)
def test_broken_assignment_files(old, new, words):
    with pytest.raises(VibsymError, match=words):
        parse_assignment(ASSIGNMENT.replace(old, new), "a.csv").modes()


def run(*arguments):
    return CliRunner().invoke(cli, ["combine", *arguments])


def options(modes):
    return [word for mode in modes for word in ("--mode", mode)]


def test_command_json(tmp_path):
    answer = json.loads(run("Td", *options(METHANE), "--format", "json").output)
    (overtone,) = [each for each in answer["combinations"] if each["label"] == "2ν4"]
    assert {key: overtone[key] for key in ("quanta", "species", "infrared", "raman", "wavenumber", "fermi")} == {
        "quanta": {"ν4": 2},
        "species": {"A1": 1, "E": 1, "T2": 1},
        "infrared": True,
        "raman": True,
        "wavenumber": 2612.0,
        "fermi": [],
    }
    bands = tmp_path / "bands.csv"
    bands.write_text("wavenumber,spectrum\n2600,IR\n1306,IR\n")
    answer = json.loads(run("Td", *options(METHANE), "--format", "json", "--bands", str(bands), "--match", "20").output)
    assert [each["fundamental"] for each in answer["lines"]] == [None, "ν4"]
    assert answer["lines"][0]["candidates"][0]["label"] == "2ν4"


def test_command_with_an_assignment(tmp_path):
    path = tmp_path / "assigned.csv"
    path.write_text(ASSIGNMENT, encoding="utf-8")
    answer = json.loads(run("Td", "--assignment", str(path), "--format", "json", "--match", "20").output)
    assert [each["line"] for each in answer["lines"]] == [2600.0]
    done = run("Oh", "--assignment", str(path))
    assert done.exit_code == 1 and "made in Td, not in Oh" in done.output


def test_command_formats():
    table = run("Dinfh", *options(DIOXIDE), "--resonance", "60").output
    assert "ν₁ and 2ν₂, 53 cm-1 apart, common species Σg⁺" in table and "Hot bands at 296 K" in table
    rows = run("Td", *options(METHANE), "--format", "csv").output.splitlines()
    assert rows[0].startswith("label,species,infrared,raman,wavenumber") and len(rows) == 17
    assert "| 2ν₄ | 2612 |" in run("Td", *options(METHANE), "--format", "markdown").output


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["Td", "--mode", "ν1:B1=5"], "no species 'B1' in Td"),
        (["Td", *options(METHANE), "--temperature", "-4"], "below zero"),
        (["Td"], "no fundamentals"),
        (["Td", *options(METHANE), "--quanta", "1"], "at least 2"),
        (["missing.xyz", "--mode", "A=5"], "missing"),
        (["samples/cylinder-bf3.xyz", "--mode", "A1''=500"], "no vibration of species A1''"),
        (["samples/cylinder-bf3.xyz", *options(["E'=1", "E'=2", "E'=3"])], "3 fundamentals of species E' are given"),
        (["Td", *options(METHANE), "--window", "-1"], "--window -1: give a distance"),
    ],
)
def test_command_errors_are_one_line(arguments, words):
    done = run(*arguments)
    assert done.exit_code == 1 and words in done.output and done.output.count("\n") == 1


def test_many_hot_bands_are_counted():
    modes = [f"ν{k}:A={300 * k}" for k in range(1, 9)]
    page = run("C1", *options(modes)).output
    assert "of the molecules): near each of 8 fundamentals" in page and "ν₂ + ν₁ − ν₁" not in page


def test_a_doublet_that_belongs_to_nothing_is_an_error():
    with pytest.raises(VibsymError, match="--doublet 1500:1200: no fundamental is one of the lines") as error:
        made("Dinfh", DIOXIDE, doublets=[parse_doublet("1500:1200=1.6")])
    assert "\n" not in str(error.value)
    assert made("Dinfh", DIOXIDE, doublets=[parse_doublet("1388.2:1285.4=1.6")]).combinations
