"""Drawings by themselves, strips in the terminal, LaTeX of every page."""

import re
import shutil
import subprocess
from xml.etree import ElementTree

import numpy as np
import pytest
from click.testing import CliRunner

import vibsym
from vibsym.cli.main import COMMANDS, cli
from vibsym.groups.symmetry_elements import symmetry_elements
from vibsym.report.drawing import structure_svg
from vibsym.report.latex import latex, set_latex
from vibsym.report.scene import coordinate_motions, mode_motions, scene_of
from vibsym.report.sticks import Stick, spread, sticks_svg
from vibsym.tables import folder
from vibsym.vibrations.estimates import estimate
from vibsym.vibrations.symmetry_coordinates import symmetry_coordinates

SAMPLES = folder("samples")
SPACE = "{http://www.w3.org/2000/svg}"
BF3 = str(SAMPLES / "cylinder-bf3.xyz")


def run(*arguments):
    return CliRunner().invoke(cli, list(arguments))


@pytest.fixture(scope="module")
def bf3():
    return vibsym.find_symmetry(vibsym.read(BF3))


@pytest.mark.parametrize("show", ["structure", "sticks", "ν3", "v3", "E':1", "A2″:1"])
@pytest.mark.parametrize("command", ["expect", "coordinates"])
def test_pictures_are_svg_that_stands_alone(tmp_path, command, show):
    target = tmp_path / "picture.svg"
    done = run(command, BF3, "--picture", str(target), "--show", show)
    assert done.exit_code == 0, done.output
    root = ElementTree.fromstring(target.read_text(encoding="utf-8"))
    assert root.tag == SPACE + "svg" and root.find(SPACE + "style") is not None
    assert root.find(SPACE + "title").text.startswith("BF₃")
    assert not re.search(r"var\(|href=|<script", target.read_text(encoding="utf-8"))


def _marks(root):
    """Places (k, 2) of everything drawn: ends of lines, rims of discs, corners of paths that are stated absolutely."""
    for each in root.iter(SPACE + "line"):
        yield from ((float(each.get(x)), float(each.get(y))) for x, y in (("x1", "y1"), ("x2", "y2")))
    for each in root.iter(SPACE + "circle"):
        x, y, r = (float(each.get(name)) for name in ("cx", "cy", "r"))
        yield from ((x - r, y - r), (x + r, y + r))
    for each in root.iter(SPACE + "path"):
        yield from ((float(x), float(y)) for x, y in re.findall(r"[ML]([-\d.]+) ([-\d.]+)", each.get("d")))


@pytest.mark.parametrize("name", ["cylinder-bf3.xyz", "carbonyl-mn-br.xyz", "soot-c60.xyz", "cylinder-n2o.xyz"])
def test_pictures_hold_all_that_is_drawn_and_little_else(name):
    symmetry = vibsym.find_symmetry(vibsym.read(SAMPLES / name))
    scene = scene_of(symmetry)
    for motion in (None, *mode_motions(symmetry, estimate(symmetry).modes)[:12]):
        root = ElementTree.fromstring(structure_svg(scene, motion, motion is None, 560, 440, "x", alone=True))
        width, height = (float(each) for each in root.get("viewBox").split()[2:])
        places = np.array(list(_marks(root)))
        assert (places >= 0).all() and (places <= (width, height)).all(), motion and motion.key
        assert motion is None or (np.ptp(places, axis=0) > (width - 90, height - 90)).all(), "no wide margins"


@pytest.mark.parametrize("arguments, reason", [
    (["--show", "ν9"], "there is none; there are ν1, ν2, ν3, ν4"),
    (["--show", "cat"], "name structure, sticks, a mode"),
    (["--show", "T1:1"], "T1"), (["--show", "E':9"], "there is none; there are A1':1")])
def test_what_cannot_be_drawn(tmp_path, arguments, reason):
    done = run("expect", BF3, "--picture", str(tmp_path / "picture.svg"), *arguments)
    assert done.exit_code == 1 and reason in done.output and "Traceback" not in done.output


def test_pictures_need_a_name_and_one_structure(tmp_path):
    assert "name a file that ends in .svg" in run("expect", BF3, "--picture", str(tmp_path / "picture.png")).output
    assert "one structure at a time; 2" in run("expect", BF3, BF3, "--picture", str(tmp_path / "picture.svg")).output


def test_a_totally_symmetric_mode_keeps_the_shape(bf3):
    """ν1 of BF3: each F moves along its bond, all alike, B stays."""
    motion = next(each for each in mode_motions(bf3, estimate(bf3).modes) if each.species == "A1'")
    along = [float(motion.vectors[k] @ bf3.positions[k]) / np.linalg.norm(bf3.positions[k]) for k in (1, 2, 3)]
    assert np.abs(motion.vectors[0]).max() < 1e-9
    assert np.abs(along) == pytest.approx([1, 1, 1]) and len({np.sign(each) for each in along}) == 1


@pytest.mark.parametrize("name", ["cylinder-bf3.xyz", "carbonyl-mn-br.xyz", "soot-c60.xyz", "cylinder-n2o.xyz"])
def test_motions_do_not_move_the_whole(name):
    symmetry = vibsym.find_symmetry(vibsym.read(SAMPLES / name))
    masses = symmetry.structure.masses
    for motion in (*mode_motions(symmetry, estimate(symmetry).modes),
                   *coordinate_motions(symmetry_coordinates(symmetry))):
        momentum = masses @ motion.vectors
        spin = (masses[:, None] * np.cross(symmetry.positions, motion.vectors)).sum(axis=0)
        assert np.abs(momentum).max() < 1e-6 * masses.sum() and np.abs(spin).max() < 1e-6 * masses.sum(), motion.key
        assert np.linalg.norm(motion.vectors, axis=1).max() == pytest.approx(1)


@pytest.mark.parametrize("symbol, expected", [
    ("C2v", {"C2": 1, "σv(xz)": 1, "σv'(yz)": 1}),
    ("Oh", {"C4": 3, "C3": 4, "C2'": 6, "S6": 4, "σh": 3, "σd": 6, "i": 0}),
    ("Ih", {"C5": 6, "C3": 10, "C2": 15, "σ": 15}), ("D3d", {"C3": 1, "C2'": 3, "S6": 1, "σd": 3, "i": 0}), ("C1", {}),
    ("Dinfh", {"C∞": 1, "σh": 1, "i": 0})])
def test_elements_of_symmetry_are_counted_as_in_books(symbol, expected):
    found = {each.symbol: len(each.vectors) for each in symmetry_elements(vibsym.point_group(symbol))}
    for name, number in expected.items():
        own = found.get(name, found.get(name.replace("'", "")))
        assert own == number, (name, found)


def test_each_element_leaves_the_structure_as_it_is():
    symmetry = vibsym.find_symmetry(vibsym.read(SAMPLES / "soot-c60.xyz"))
    places = symmetry.positions
    for each in symmetry_elements(symmetry.group):
        if each.kind == "plane":
            for normal in map(np.array, each.vectors):
                mirrored = places - 2 * np.outer(places @ normal, normal)
                assert np.linalg.norm(mirrored[:, None] - places, axis=2).min(axis=1).max() < 1e-6


def test_an_atom_towards_the_eye_has_a_ring(bf3):
    scene = scene_of(bf3)
    motion = next(each for each in mode_motions(bf3, estimate(bf3).modes) if each.species == "A2''")
    straight = type(scene)(scene.labels, scene.positions, scene.radii, scene.bonds, scene.elements, np.eye(3))
    drawn = structure_svg(straight, motion)
    assert "a" in re.findall(r'class="move" style="fill:none"[^>]* d="([^"]*)"', drawn)[0]


def test_sticks_stand_in_falling_wavenumbers_and_tell_apart_without_colour():
    sticks = [Stick(3000, "IR", "vs"), Stick(1000, "IR", "w", leftover=True), Stick(1001, "Raman", "s", "p"),
              Stick(500, "Raman", "m", "dp"), Stick(990, "Raman", observed=False, mode="ν2", species="E")]
    drawn = ElementTree.fromstring(sticks_svg(sticks, title="bands", alone=True))
    lines = [each for each in drawn.iter(SPACE + "line") if each.get("class") in ("ir", "raman")]
    places = {each.get("class"): float(each.get("x1")) for each in lines}
    assert float(lines[0].get("x1")) < float(lines[1].get("x1")) and set(places) == {"ir", "raman"}
    assert all((each.get("stroke-dasharray") is not None) == (each.get("class") == "raman") for each in lines)
    assert "?" in [text.text for text in drawn.iter(SPACE + "text")]
    assert len(list(drawn.iter(SPACE + "circle"))) == 2


def test_labels_do_not_touch():
    rng = np.random.default_rng(4)
    for _ in range(50):
        places = np.sort(rng.uniform(0, 600, 40))
        found = np.array(spread(places.tolist(), 14, 0, 600))
        assert (np.diff(found) >= 14 - 1e-6).all() and found.min() >= -1e-6 and found.max() <= 600 + 1e-6


def test_the_strip_has_a_mark_for_every_band():
    done = run("expect", BF3, "--strip")
    strip = done.output.split("Strip of bands")[1].split("▲ infrared")[0]
    assert strip.split("\n")[1].split() == ["stretch", "B-F", "A₁′", "▼p", "E′", "◆"]
    assert len(re.findall("[▲▼◆○]", strip)) == 4
    for form in ("markdown", "latex"):
        assert run("expect", BF3, "--strip", "--format", form).exit_code == 0


# --- LaTeX ----------------------------------------------------------------------------------------------------------
PAGES = {
    "expect": ["expect", BF3, "--working", "--strip"], "table": ["table", "Oh"], "group": ["group", BF3],
    "coordinates": ["coordinates", BF3],
    "screen": ["screen", str(SAMPLES / "tube-clf3-t.xyz"), "--bands", str(SAMPLES / "tube-clf3-bands.csv")],
    "isomers": ["isomers", "OC-6", "--centre", "Mo", "--ligand", "CO=4", "--ligand", "L=2", "--donor", "L=P"],
    "combine": ["combine", "Td", "--mode", "v1:A1=2917", "--mode", "v4:T2=1306"],
    "descend": ["descend", "Oh", "D4h"], "isotopes": ["isotopes", BF3, "--replace", "1=10B"],
    "normal": ["normal", BF3], "peaks": ["peaks", str(SAMPLES / "flask-infrared.csv"), "--spectrum", "IR"],
    "assign": ["assign", str(SAMPLES / "tube-clf3-t.xyz"), "--bands", str(SAMPLES / "tube-clf3-bands.csv"), "--strip"],
}


def latex_of(name):
    done = run(*PAGES[name], "--format", "latex")
    if done.exit_code == 2:
        pytest.skip(f"{name} takes other arguments: {done.output.splitlines()[-1]}")
    assert done.exit_code == 0, done.output
    return done.output


@pytest.mark.parametrize("name", PAGES)
def test_every_page_is_latex_with_booktabs(name):
    assert name in COMMANDS
    text = latex_of(name)
    assert text.isascii(), sorted({c for c in text if not c.isascii()})
    assert text.count(r"\begin{") == text.count(r"\end{") and (r"\toprule" in text or name == "coordinates")
    assert text.count("$") % 2 == 0


def test_markup_of_latex_is_escaped():
    assert latex("50 % & _x_ #1 {a} ~ ^ \\ $") == (r"50 \% \& \_x\_ \#1 \{a\} \textasciitilde{} \textasciicircum{} "
                                                   r"\textbackslash{} \$")
    assert latex("Σg⁺") == r"$\Sigma_{\mathrm{g}}^{+}$" and latex("Hg") == r"$\mathrm{H}_{\mathrm{g}}$"
    assert latex("3φz² in C∞v") == r"3$\varphi z^{2}$ in $\mathrm{C}_{\infty\mathrm{v}}$"
    assert latex("[a] <b>") == r"{[}a{]} \textless{}b\textgreater{}"
    assert set_latex([]).startswith("% needs")


@pytest.mark.skipif(shutil.which("pdflatex") is None, reason="pdflatex is not installed")
def test_latex_typesets_every_page(tmp_path):
    body = "\n\\clearpage\n".join(latex_of(name) for name in PAGES if run(*PAGES[name]).exit_code == 0)
    source = ("\\documentclass{article}\\usepackage[T1]{fontenc}\\usepackage{booktabs,longtable,array,amssymb}"
              "\\begin{document}\n" + body + "\\end{document}\n")
    (tmp_path / "pages.tex").write_text(source, encoding="utf-8")
    done = subprocess.run(["pdflatex", "-interaction=nonstopmode", "-halt-on-error", "pages.tex"], cwd=tmp_path,
                          capture_output=True, text=True, errors="replace")
    assert done.returncode == 0, done.stdout[-1500:]


def test_show_without_a_picture_is_told():
    done = run("expect", str(SAMPLES / "cylinder-bf3.xyz"), "--show", "v1")
    assert done.exit_code == 1 and "--picture FILE.svg" in done.output
