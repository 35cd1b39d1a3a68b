"""`vibsym screen` as it is typed: samples, options, one line and exit code 1 for what cannot be used."""

import json
from pathlib import Path

import pytest
from click.testing import CliRunner

from vibsym.cli.main import cli

SAMPLES = Path(__file__).parent.parent / "samples"
TUBE = [str(SAMPLES / f"tube-clf3-{name}.xyz") for name in ("triangle", "pyramid", "t")]
BANDS = ["--bands", str(SAMPLES / "tube-clf3-bands.csv")]


def run(*arguments: str):
    return CliRunner().invoke(cli, ["screen", *arguments])


def test_is_the_proposed_geometry_tenable():
    answer = json.loads(run(*TUBE, *BANDS, "--format", "json").stdout)
    verdicts = {each["point_group"]["symbol"]: each["verdict"] for each in answer["candidates"]}
    assert verdicts == {"C2v": "fits", "C3v": "strained", "D3h": "excluded"}
    assert [each["rank"] for each in answer["candidates"]] == [1, 2, 3]
    for each in answer["candidates"]:
        weight = sum(excuse["weight"] for excuse in each["excuses"])
        assert each["score"] == pytest.approx(weight + len(each["unseen"]) / 3, abs=1e-5)


def test_the_page_begins_with_the_verdict_and_ends_with_the_caution():
    page = run(*TUBE, *BANDS).stdout
    assert page.index("Fits without excuses: tube-clf3-t") < page.index("Ranked by score")
    assert page.rstrip().endswith("one that was not proposed may fit as well.")
    assert max(map(len, page.splitlines())) <= 80


def test_two_lists_and_a_region(tmp_path):
    (tmp_path / "ir").write_text("wavenumber,strength\n756,s\n701,vs\n531,w\n443,m\n326,m\n")
    (tmp_path / "raman").write_text("wavenumber;polarisation\n755;0,12(2)\n529;p\n440;dp\n")
    both = ("--ir", str(tmp_path / "ir"), "--raman", str(tmp_path / "raman"), "--format", "json")
    one = json.loads(run(*TUBE, *both).stdout)
    other = json.loads(run(*TUBE, *BANDS, "--format", "json").stdout)
    assert [each["excuses"] for each in one["candidates"]] == [each["excuses"] for each in other["candidates"]]
    part = json.loads(run(*TUBE, *both, "--between", "600", "800").stdout)
    assert (part["bands"]["infrared"], part["bands"]["raman"], part["bands"]["pairs"]) == (2, 1, 1)
    wide = json.loads(run(*TUBE, *both, "--window", "0.5").stdout)
    assert wide["bands"]["pairs"] == 0 and wide["bands"]["window"] == 0.5


def test_an_output_file_receives_the_page(tmp_path):
    target = tmp_path / "page.txt"
    answer = run(*TUBE, *BANDS, "--output", str(target))
    assert answer.exit_code == 0 and answer.stdout == "" and "Excluded: tube-clf3-triangle" in target.read_text()


@pytest.mark.parametrize("arguments, reason", [
    ((*TUBE,), "no observed bands"),
    ((*TUBE, "--bands", "missing.csv"), "missing.csv: cannot be read"),
    (("missing.xyz", *BANDS), "missing.xyz"),
    ((*TUBE, *BANDS, "--window", "-1"), "window -1"),
    ((*TUBE, *BANDS, "--allow", "-1"), "--allow -1"),
    ((*TUBE, *BANDS, "--between", "800", "600"), "--between 800 600"),
    ((*TUBE, *BANDS, "--local"), "--local needs"),
    ((TUBE[0], *BANDS, "--mixture"), "--mixture needs at least two"),
    ((*TUBE, *BANDS, "--tolerance", "7"), "tolerance"),
    ((*TUBE, "--bands", TUBE[0]), "no column wavenumber")])
def test_what_cannot_be_done_is_one_line(arguments, reason):
    answer = run(*arguments)
    assert answer.exit_code == 1 and reason in answer.stderr and answer.stderr.count("\n") == 1 and not answer.stdout


def test_an_unreadable_structure_stops_before_computing():
    answer = run(TUBE[0], "missing.xyz", *BANDS)
    assert answer.exit_code == 1 and answer.stdout == ""


FLASK = [str(SAMPLES / f"flask-{name}.xyz") for name in ("cis", "trans")]
REGION = ["--bands", str(SAMPLES / "flask-bands.csv"), "--oscillators", "C-O", "--format", "json"]


def test_which_isomer_is_in_the_flask():
    """Turned phosphines make both molecules C1; the local group of the carbonyls still tells cis from trans."""
    answer = json.loads(run(*FLASK, *REGION, "--local").stdout)
    cis, trans = answer["candidates"]
    assert [each["point_group"]["symbol"] for each in (cis, trans)] == ["C1", "C1"]
    assert [each["local"]["point_group"]["symbol"] for each in (cis, trans)] == ["C2v", "D4h"]
    assert [each["verdict"] for each in (cis, trans)] == ["fits", "excluded"]
    assert trans["oscillators"] == {"set": "stretch C-O, local group", "gamma": {"A1g": 1, "B1g": 1, "Eu": 1},
                                    "infrared": 1, "raman": 2, "coincident": 0, "polarised": 1}
    leak = next(excuse for excuse in trans["excuses"] if excuse["kind"] == "leak")
    assert "(a) allowed in the true group C1, (b) let through by the surroundings (2 ligands at P)" in leak["reason"]
    whole = json.loads(run(*FLASK, *REGION).stdout)
    assert [each["rank"] for each in whole["candidates"]] == [1, 1] and "--local compares" in whole["notes"][0]


def test_a_whole_spectrum_is_cut_to_the_carbonyls_of_a_metal_only(tmp_path):
    lines = Path(REGION[1]).read_text() + "2930,IR,s,,,\n1437,IR,s,,,\n420,IR,m,,,\n"
    (tmp_path / "whole.csv").write_text(lines)
    for more in (("--local",), ()):
        cut, whole = (json.loads(run(*FLASK, "--bands", bands, *REGION[2:], *more).stdout)
                      for bands in (REGION[1], str(tmp_path / "whole.csv")))
        assert cut["candidates"] == whole["candidates"] and "3 lines outside" in whole["notes"][0]
    (tmp_path / "ether.xyz").write_text("9\n\nC 1.17 -.19 0\nO 0 .59 0\nC -1.17 -.19 0\nH 2.02 .48 0\nH -2.02 .48 0\n"
                                        "H 1.23 -.83 .89\nH 1.23 -.83 -.89\nH -1.23 -.83 .89\nH -1.23 -.83 -.89\n")
    (tmp_path / "ether.csv").write_text("wavenumber,spectrum\n1102,IR\n928,IR\n1900,IR\n")
    answer = json.loads(run(str(tmp_path / "ether.xyz"), "--bands", str(tmp_path / "ether.csv"), *REGION[2:]).stdout)
    assert answer["bands"]["infrared"] == 3


def test_a_named_point_lets_weak_bands_through(tmp_path):
    for name, axis in (("cis", "1 0 0"), ("trans", "0 0 -1")):
        x, y, z = (float(each) for each in axis.split())
        atoms = ["Mo 0 0 0", "XL 0 0 2.4", f"XL {2.4 * x} {2.4 * y} {2.4 * z}"]
        for site in ((1, 0, 0), (-1, 0, 0), (0, 1, 0), (0, -1, 0), (0, 0, -1)):
            if site != (x, y, z):
                for what, far in (("C", 2.0), ("O", 3.15)):
                    atoms.append(" ".join([what, *(str(far * each) for each in site)]))
        (tmp_path / f"{name}.xyz").write_text("\n".join([str(len(atoms)), name, *atoms]) + "\n")
    paths = [str(tmp_path / f"{name}.xyz") for name in ("cis", "trans")]
    for more in ((), ("--local",)):
        answer = json.loads(run(*paths, *REGION, *more).stdout)
        assert [each["verdict"] for each in answer["candidates"]] == ["fits", "excluded"]
        leak = next(excuse for excuse in answer["candidates"][1]["excuses"] if excuse["kind"] == "leak")
        assert "(b)" in leak["reason"] and "(a)" not in leak["reason"]


def test_bonds_that_are_not_there_name_the_structure():
    answer = run(TUBE[0], *REGION)
    assert answer.exit_code == 1 and "tube-clf3-triangle.xyz" in answer.stderr and answer.stderr.count("\n") == 1


def test_isomers_with_bands_in_one_command():
    """Which isomer of ML2(CO)4 is in the flask."""
    arguments = ["isomers", "OC-6", "--centre", "Mo", "--ligand", "CO=4", "--ligand", "L=2", *REGION[:2]]
    answer = json.loads(CliRunner().invoke(cli, [*arguments, "--format", "json"]).stdout)
    assert [(each["name"], each["rank"], each["verdict"]) for each in answer["isomers"]] == [
        ("cis", 1, "fits"), ("trans", 2, "excluded")]
    assert {"score", "excuses", "explanation", "unseen", "oscillators", "arrangement"} <= set(answer["isomers"][0])
    assert answer["separating"] == [] and answer["bands"]["pairs"] == 3
    page = CliRunner().invoke(cli, arguments).stdout
    assert page.index("Fits without excuses: cis") < page.index("Burnside")
    assert page.rstrip().endswith("one that was not proposed may fit as well.")
    table = CliRunner().invoke(cli, [*arguments, "--format", "csv"]).stdout.splitlines()
    assert table[0].endswith("rank,score,verdict,excuses,unseen") and len(table) == 3
    mixed = json.loads(CliRunner().invoke(cli, [*arguments, "--mixture", "--format", "json"]).stdout)
    assert [each["isomers"] for each in mixed["mixtures"]] == [["cis", "trans"]] and len(mixed["isomers"]) == 2
    assert len(mixed["mixtures"][0]["structures"]) == 2 and "mixtures" not in answer
    short = CliRunner().invoke(cli, [*arguments, "--limit", "1"]).stdout
    assert "2 isomers" in short and "Proofs of the other 1" in short


def test_a_nitro_group_is_no_diatomic_ligand(tmp_path):
    (tmp_path / "nitro.xyz").write_text("4\n\nCu 0 0 0\nN 0 0 1.95\nO 0 1.07 2.55\nO 0 -1.07 2.55\n")
    (tmp_path / "nitro.csv").write_text("wavenumber,spectrum\n1450,IR\n1325,IR\n")
    answer = json.loads(run(str(tmp_path / "nitro.xyz"), "--bands", str(tmp_path / "nitro.csv"), "--oscillators", "N-O",
                            "--format", "json").stdout)
    assert answer["bands"]["infrared"] == 2 and answer["notes"] == []
