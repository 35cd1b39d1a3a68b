"""The command line: formats, files, exit codes, one line for everything that cannot be done."""

import csv
import io
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
from click.testing import CliRunner

from vibsym.cli.main import cli

ROOT = Path(__file__).parent.parent
SAMPLES = ROOT / "samples"
BF3 = str(SAMPLES / "cylinder-bf3.xyz")
CLUSTER = str(SAMPLES / "cluster-mo6cl14.xyz")
WATER = "3\nwater\nO 0 0 0\nH 0.76 0 0.59\nH -0.76 0 0.59\n"


def run(*arguments, **more):
    return CliRunner().invoke(cli, [str(each) for each in arguments], prog_name="vibsym", **more)


def refused(result):
    """Check that a command said one line on stderr, printed nothing else and left with status 1; return the line."""
    assert result.exit_code == 1, result.output
    assert result.stdout == "" and "Traceback" not in result.stderr
    assert result.stderr.startswith("Error: ") and result.stderr.count("\n") == 1
    return result.stderr


def test_expect_page_has_counts_before_species_before_axes_before_cautions():
    page = run("expect", BF3).stdout
    places = [page.index(word) for word in ("6 vibrations", "species  modes", "Axes", "Beware")]
    assert places == sorted(places)
    assert "Infrared at most 3" in page and "A₁′ + 2E′ + A₂″" in page
    assert "\x1b" not in page and max(map(len, page.splitlines())) <= 81      # 81: a combining bar takes no column


@pytest.mark.parametrize("name", sorted(path.name for path in SAMPLES.iterdir() if path.suffix in (".xyz", ".mol")))
def test_every_sample_fits_eighty_columns(name):
    for command in ("expect", "group"):
        page = run(command, SAMPLES / name).stdout.replace("\u0305", "")
        assert page and max(map(len, page.splitlines())) <= 80


@pytest.mark.parametrize("symbol", ["C1", "C2v", "D6h", "S20", "D20h", "C19", "Ih", "Oh", "Cinfv", "Dinfh", "Kh"])
def test_every_table_fits_eighty_columns(symbol):
    page = run("table", symbol).stdout.replace("\u0305", "")
    assert page and max(map(len, page.splitlines())) <= 80


def test_formats_agree():
    result = json.loads(run("expect", BF3, "--format", "json").stdout)
    (row,) = csv.DictReader(io.StringIO(run("expect", BF3, "--format", "csv").stdout))
    assert result["point_group"]["symbol"] == row["point_group"] == "D3h"
    assert row["gamma_vib"] == "A1' + 2E' + A2''"
    for name, count in result["counts"].items():
        assert row[name] == str(count)
    markdown = run("expect", BF3, "--format", "markdown").stdout
    assert "| A₁′ | 1 | – | polarised |" in markdown


def test_several_structures_are_blocks_lines_or_rows():
    names = [SAMPLES / "cylinder-bf3.xyz", SAMPLES / "cylinder-argon.xyz", SAMPLES / "soot-c60.xyz"]
    lines = run("expect", *names, "--format", "json").stdout.splitlines()
    assert [json.loads(line)["structure"]["atoms"] for line in lines] == [4, 1, 60]
    assert len(run("expect", *names, "--format", "csv").stdout.splitlines()) == 4
    assert run("expect", *names).stdout.count("Point group") == 3


def test_a_failed_structure_is_told_and_the_others_are_done(tmp_path):
    missing, output = tmp_path / "none.xyz", tmp_path / "out.txt"
    result = run("expect", missing, BF3, "--format", "json")
    assert result.exit_code == 1
    assert json.loads(result.stdout)["structure"]["formula"] == "BF3"
    assert result.stderr.count("\n") == 1 and "none.xyz" in result.stderr
    result = run("expect", missing, BF3, "--output", output)
    assert result.exit_code == 1 and result.stdout == "" and not output.exists()


def test_output_receives_what_stdout_would_hold(tmp_path):
    output = tmp_path / "page.txt"
    output.write_text("old", encoding="utf-8")
    result = run("expect", BF3, "--output", output)
    assert result.exit_code == 0 and result.stdout == ""
    assert output.read_text(encoding="utf-8") == run("expect", BF3).stdout
    assert [path.name for path in tmp_path.iterdir()] == ["page.txt"]
    refused(run("expect", BF3, "--output", tmp_path / "no" / "folder.txt"))
    refused(run("expect", BF3, "--output", tmp_path))


def test_working_light_and_axes():
    page = run("expect", BF3, "--working").stdout
    assert "unmoved atoms" in page and "/12 = 3; 3 − 1 − 0 = 2" in page
    assert "working" in json.loads(run("expect", BF3, "--working", "--format", "json").stdout)
    assert "6/7 (natural light)" in run("expect", BF3, "--light", "natural").stdout.replace("\n", " ")
    assert "ρ = 0" in run("expect", SAMPLES / "soot-c60.xyz").stdout
    water = run("expect", "-", "--format", "json", input=WATER)
    other = run("expect", "-", "--format", "json", "--axes", "swap", input=WATER)
    assert json.loads(water.stdout)["gamma_vib"] == {"A1": 2, "B2": 1}
    assert json.loads(other.stdout)["gamma_vib"] == {"A1": 2, "B1": 1}


@pytest.mark.parametrize("form", ["table", "json", "csv", "markdown", "latex"])
def test_triple_chooses_the_letter_of_triply_degenerate_species(tmp_path, form):
    methane = tmp_path / "m.xyz"
    methane.write_text("5\n\nC 0 0 0\nH .63 .63 .63\nH .63 -.63 -.63\nH -.63 .63 -.63\nH -.63 -.63 .63\n")
    usual, other = (run("expect", methane, "--format", form, "--triple", letter).stdout for letter in "TF")
    assert usual == run("expect", methane, "--format", form).stdout != other
    label = {"table": "2F₂", "markdown": "2F₂", "latex": "2$\\mathrm{F}_{2}$"}.get(form, "F2")
    assert label in other and label.replace("F", "T") in usual and label.replace("F", "T") not in other
    assert "Td" in other
    methane.write_text(methane.read_text().replace("H", "T"))          # tritium keeps its letter, and so do the species
    assert "CT" in run("expect", methane, "--format", form, "--triple", "F").stdout or form == "latex"


def test_ladder_page_and_object():
    answer = json.loads(run("group", CLUSTER, "--format", "json").stdout)
    assert list(answer)[:5] == ["structure", "point_group", "axes", "rungs", "suggested"]
    assert answer["suggested"] == "D4h" and answer["rungs"][-1]["point_group"]["symbol"] == "Oh"
    deviations = [rung["deviation"] for rung in answer["rungs"]]
    assert deviations == sorted(deviations)
    atoms = answer["structure"]["atoms"]
    assert all(1 <= atom <= atoms for rung in answer["rungs"] for atom in rung["spoilers"])
    assert answer["rungs"][-1]["counts"]["infrared"] == 5
    rows = list(csv.DictReader(io.StringIO(run("group", CLUSTER, "--format", "csv").stdout)))
    assert len(rows) == len(answer["rungs"])
    assert [row["suggested"] for row in rows].count("yes") == 1


def test_expect_names_the_next_rung_in_one_line():
    lines = [line for line in run("expect", CLUSTER).stdout.splitlines() if line.startswith("Next rung")]
    assert len(lines) == 1 and "suggested: D₄h" in lines[0] and len(lines[0]) <= 80
    assert "Next rung" not in run("expect", BF3).stdout


@pytest.mark.parametrize("choice, symbol", [((), "D4h"), (("--as", "Oh"), "Oh")], ids=["suggested", "as-Oh"])
def test_write_saves_the_symmetrised_structure(tmp_path, choice, symbol):
    saved = tmp_path / "ideal.xyz"
    assert run("group", CLUSTER, "--write", saved, *choice).exit_code == 0
    answer = json.loads(run("expect", saved, "--tolerance", "0.0001", "--format", "json").stdout)
    assert answer["point_group"]["symbol"] == symbol and answer["structure"]["atoms"] == 20
    refused(run("group", CLUSTER, BF3, "--write", tmp_path / "two.xyz"))
    assert not (tmp_path / "two.xyz").exists()


def test_as_makes_the_analysis_on_a_rung():
    answer = json.loads(run("expect", CLUSTER, "--as", "Oh", "--format", "json").stdout)
    assert answer["point_group"]["symbol"] == "Oh" and answer["found"]["symbol"] == "Cs"
    assert "rungs are" in refused(run("expect", CLUSTER, "--as", "D6h"))


def test_table_object_is_exact():
    answer = json.loads(run("table", "C5v", "--format", "json").stdout)
    assert answer["classes"][1] == {"symbol": "2C5", "size": 2}
    species = answer["species"][2]
    assert species["label"] == "E1" and species["exact"] == ["2", "(-1+sqrt(5))/2", "-(1+sqrt(5))/2", "0"]
    assert species["characters"][1] == pytest.approx((5**0.5 - 1) / 2)
    assert answer["point_group"]["order"] == 10


def test_tables_of_several_groups_share_one_csv_head():
    rows = list(csv.DictReader(io.StringIO(run("table", "C2v", "C3v", "Kh", "--format", "csv").stdout)))
    assert len(rows) == 4 + 3 + 8
    assert rows[4]["point_group"] == "C3v" and rows[4]["2C3"] == "1" and rows[4]["C2"] == "" and rows[0]["2C3"] == ""


def test_table_of_an_infinite_group():
    answer = json.loads(run("table", "Cinfv", "--format", "json").stdout)
    assert answer["point_group"]["symbol"] == "C∞v" and answer["point_group"]["order"] is None
    pi = answer["species"][2]
    assert pi["exact"] == ["2", "2*cos(phi)", "0"] and pi["characters"] == [2, None, 0]


def test_samples_are_copied_once(tmp_path):
    target = tmp_path / "try-it"
    result = run("samples", target)
    assert result.exit_code == 0 and (target / "cylinder-bf3.xyz").read_bytes() == Path(BF3).read_bytes()
    assert "exists already" in refused(run("samples", target))


def written(tmp_path, name, data):
    path = tmp_path / name
    path.write_bytes(data if isinstance(data, bytes) else data.encode())
    return path


@pytest.mark.parametrize("data", [
    b"", b"3\nc\nO 0 0 0\n", b"1\nc\nQq 0 0 0\n", b"1\nc\nO a b c\n", b"1\nc\nO nan 0 0\n", b"1\nc\nO inf 0 0\n",
    b"2\nc\nO 0 0 0\nO 0 0 0\n", bytes(range(256)) * 20, WATER.encode("utf-16"),
    b"\n\n\n  3  2  0  0  0  0  0  0  0  0999 V2000\n    0.0000",
], ids=["empty", "count", "element", "word", "nan", "infinity", "one-spot", "binary", "utf16", "truncated-mol"])
def test_bad_files_are_refused_in_one_line(tmp_path, data):
    path = written(tmp_path, "bad.xyz", data)
    for command in ("expect", "group"):
        assert "bad.xyz" in refused(run(command, path))


@pytest.mark.parametrize("data", [
    WATER.replace("water", "w\xe4ter").encode("latin-1"), WATER.replace("\n", "\r\n").encode(),
    b"\xef\xbb\xbf" + WATER.encode(), WATER.replace(" ", "\t").encode(), (WATER + "\n \n\n").encode(),
    WATER.replace("O", "o").replace("H", "h").encode(),
], ids=["latin-1", "crlf", "byte-order-mark", "tabs", "trailing-lines", "lower-case"])
def test_untidy_files_are_read(tmp_path, data):
    result = run("expect", written(tmp_path, "water.xyz", data), "--format", "json")
    assert json.loads(result.stdout)["gamma_vib"] == {"A1": 2, "B2": 1}


@pytest.mark.parametrize("value", ["0", "-0.1", "nan", "inf", "0.51", "100"])
def test_impossible_tolerances_are_refused(value):
    assert "tolerance" in refused(run("expect", BF3, "--tolerance", value))


@pytest.mark.parametrize("arguments", [
    ("table", "C0v"), ("table", "C99999999999v"), ("table", "Q3"), ("table", ""), ("expect", str(ROOT)),
    ("expect", "no-such-file.xyz"), ("expect", BF3, "--frame", "0"), ("expect", BF3, "--frame", "x"),
    ("expect", BF3, "--frame", "2"), ("expect", BF3, "--bond", "1-9"), ("expect", BF3, "--no-bond", "1"),
    ("expect", BF3, "--as", "nonsense"), ("expect", BF3, "--axes", "nonsense"), ("samples", str(ROOT)),
], ids=" ".join)
def test_what_cannot_be_done_leaves_with_one_line_and_status_1(arguments):
    refused(run(*arguments))


@pytest.mark.parametrize("arguments", [
    ("expect",), ("nonsense",), ("expect", BF3, "--nonsense"), ("expect", BF3, "--format", "pdf"),
    ("expect", BF3, "--tolerance", "wide"), ("expect", BF3, "--light", "green"), ("table",),
], ids=" ".join)
def test_only_click_leaves_with_status_2(arguments):
    assert run(*arguments).exit_code == 2


def test_bonds_masses_and_frames_are_accepted(tmp_path):
    two = written(tmp_path, "two.xyz", WATER + WATER)
    assert len(run("expect", two, "--frame", "all", "--format", "json").stdout.splitlines()) == 2
    assert run("expect", two, "--frame", "2", "--bond", "2-3", "--no-bond", "1-2", "--average-masses").exit_code == 0


def started(*arguments, **environment):
    return subprocess.run([sys.executable, "-m", "vibsym.cli.main", *arguments], cwd=ROOT, capture_output=True,
                          env={**os.environ, **environment})


@pytest.mark.parametrize("encoding", ["ascii", "latin-1", "cp1252"])
def test_a_terminal_without_greek_gets_it_spelled_out(encoding):
    done = started("expect", "samples/cylinder-n2o.xyz", PYTHONIOENCODING=encoding)
    assert done.returncode == 0 and b"Traceback" not in done.stderr
    page = done.stdout.decode(encoding)
    assert "Cinfv" in page and "Sigma+" in page
    assert "-6m2" in started("expect", "samples/cylinder-bf3.xyz", PYTHONIOENCODING=encoding).stdout.decode(encoding)
    lines = started("table", "Dinfh", PYTHONIOENCODING=encoding).stdout.decode(encoding).splitlines()
    assert max(map(len, lines)) <= 80                      # columns are measured in the letters that are printed
    assert lines[2].index("infC2") + 4 == lines[4].rindex("1")
    done = started("expect", "samples/cylinder-n2o.xyz", "--format", "json", PYTHONIOENCODING=encoding)
    assert json.loads(done.stdout.decode(encoding))["point_group"]["symbol"] == "C∞v"


def test_a_closed_pipe_is_no_accident():
    command = f'"{sys.executable}" -m vibsym.cli.main table D20h C20v D19d | head -n 1'
    done = subprocess.run(["bash", "-c", command], cwd=ROOT, capture_output=True, text=True, encoding="utf-8")
    assert done.stdout.startswith("Point group") and done.stderr == ""


def test_shell_completion_as_click_gives_it():
    assert b"_vibsym_completion" in started(_VIBSYM_COMPLETE="bash_source").stdout


def test_the_package_runs_as_a_module():
    done = subprocess.run([sys.executable, "-m", "vibsym", "--version"], capture_output=True, text=True, cwd=ROOT)
    assert done.returncode == 0 and done.stdout.startswith("vibsym ")
