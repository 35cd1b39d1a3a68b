"""The report page without a browser: what it says equals the JSON, text stays text, nothing is loaded, sizes."""

import json
import re
from html.parser import HTMLParser
from itertools import pairwise

import numpy as np
import pytest
from click.testing import CliRunner

import vibsym
from vibsym.cli.main import cli
from vibsym.evidence.bandlist import parse_bands, read_bands
from vibsym.evidence.whole_molecule import Proposal
from vibsym.report.collection import collect
from vibsym.report.html.page import report_page
from vibsym.structures.structure import Structure
from vibsym.tables import folder

SAMPLES = folder("samples")
TUBE = [SAMPLES / f"tube-clf3-{shape}.xyz" for shape in ("t", "pyramid", "triangle")]


class Reader(HTMLParser):
    """Text by element id, element by id, and every tag with its attributes."""

    VOID = frozenset({"meta", "link", "br", "input", "circle", "line", "path", "polygon", "polyline", "use"})

    def __init__(self, page):
        super().__init__(convert_charrefs=True)
        self.open, self.texts, self.tags, self.data = [], {}, [], {}
        self.feed(page)
        assert not self.open, f"never closed: {self.open}"

    INLINE = frozenset({"sub", "sup", "tspan"})

    def _between(self, tag):
        if tag not in self.INLINE:
            for _, name in self.open:
                self.texts.setdefault(name, []).append(" ")

    def handle_starttag(self, tag, attributes):
        attributes = dict(attributes)
        self._between(tag)
        self.tags.append((tag, attributes))
        if tag not in self.VOID:
            self.open.append((tag, attributes.get("id")))

    def handle_startendtag(self, tag, attributes):
        self.tags.append((tag, dict(attributes)))

    def handle_endtag(self, tag):
        self._between(tag)
        assert self.open and self.open[-1][0] == tag, f"</{tag}> closes {self.open[-3:]}"
        self.open.pop()

    def handle_data(self, data):
        if self.open and self.open[-1][0] == "script":
            self.data.setdefault(self.open[-1][1], []).append(data)
            return
        for _, name in self.open:
            if name:
                self.texts.setdefault(name, []).append(data)

    def text(self, name):
        return " ".join("".join(self.texts[name]).split())

    def result(self, name):
        return json.loads("".join(self.data[f"result-{name}"]))


@pytest.fixture(scope="module")
def tube():
    observed = read_bands(str(SAMPLES / "tube-clf3-bands.csv"))
    report = collect([vibsym.read(path) for path in TUBE], observed, command="vibsym report tube")
    page = report_page(report)
    return report, page, Reader(page)


def test_numbers_of_the_page_are_those_of_the_json(tube):
    report, _, reader = tube
    for number, sheet in enumerate(report.sheets):
        expected = sheet.expectation.to_dict()
        assert reader.result(f"expect-{number}") == json.loads(json.dumps(expected))
        shown = reader.text(f"s{number}-expect")
        for key, words in (("infrared", "infrared at most"), ("raman", "Raman at most"), ("silent", "silent")):
            assert re.search(rf"\b{expected['counts'][key]} . {words}", shown), key
        for row in expected["regions"]:
            assert row["set"] in reader.text(f"s{number}-regions")
    answer = report.screening.to_dict()
    assert reader.result("screen") == json.loads(json.dumps(answer))
    shown = reader.text("all-screen")
    for candidate in answer["candidates"]:
        assert f"score {candidate['score']:.2f}" in shown and candidate["verdict"] in shown
        for excuse in candidate["excuses"]:
            assert excuse["reason"] in shown


def test_the_assignment_of_the_page_is_that_of_the_json(tube):
    report, _, reader = tube
    for number, sheet in enumerate(report.sheets):
        answer = sheet.assignment.to_dict()
        assert reader.result(f"assign-{number}") == json.loads(json.dumps(answer))
        shown = reader.text(f"s{number}-assignment")
        assert f"{len(answer['assignments'])} fundamental" in shown
        for row in answer["assignments"]:
            assert row["description"] in shown and f"{row['estimate']:.0f}" in shown
            for line in (row["infrared_line"], row["raman_line"]):
                assert line is None or f"{line:g}" in shown
    modes = reader.result("normal-0")["modes"]
    cards = reader.text("s0-motions")
    assert modes and all(f"{mode['wavenumber']:.0f} cm⁻¹" in cards for mode in modes)


def test_leftover_lines_stand_with_their_candidates():
    water = Structure.from_atoms(["O", "H", "H"], [[0, 0, 0.117], [0, 0.757, -0.469], [0, -0.757, -0.469]])
    bands = parse_bands("wavenumber,spectrum,strength\n3657,IR,s\n1595,IR,vs\n3756,IR,vs\n3183,IR,vw\n", "gas.csv")
    reader = Reader(report_page(collect([water], bands)))
    assert "3183" in reader.text("s0-leftover") and "2ν2 at 3190.0" in reader.text("s0-leftover")


WATER = Structure.from_atoms(["O", "H", "H"], [[0, 0, 0.117], [0, 0.757, -0.469], [0, -0.757, -0.469]])
ODD = {
    "several": lambda: [vibsym.read(path) for path in TUBE],
    "atom": lambda: [vibsym.read(SAMPLES / "cylinder-argon.xyz")],
    "linear": lambda: [vibsym.read(SAMPLES / "cylinder-n2o.xyz")],
    "dummy": lambda: [Structure.from_atoms(["X", "O", "H", "H"],
                                           [[0, 0, 2.117], *np.add(WATER.positions, (0, 0, 1)).tolist()])],
    "no bonds": lambda: [Structure.from_atoms(["Ar"] * 3, [[0, 0, 0], [4, 0, 0], [2, 12 ** 0.5, 0]])],
}


@pytest.mark.parametrize("name", ODD)
def test_the_page_is_sound_html_whatever_the_structure(name):
    page = report_page(collect(ODD[name]()))
    reader = Reader(page)
    ids = [given["id"] for _, given in reader.tags if "id" in given]
    assert len(ids) == len(set(ids))
    levels = [int(tag[1]) for tag, _ in reader.tags if re.fullmatch("h[1-6]", tag)]
    assert levels[0] == 1 and levels.count(1) == 1
    assert all(after <= before + 1 for before, after in pairwise(levels)), "no level is skipped"
    assert ("html", {"lang": "en"}) in reader.tags and re.search("<title>[^<]+</title>", page)


@pytest.mark.parametrize("name, reason", [("dummy", "the dummy atom X has no mass"), ("no bonds", "no bonds, so")])
def test_what_is_left_out_is_told(name, reason):
    reader = Reader(report_page(collect(ODD[name]())))
    assert f"Normal modes left out: {'H2O·X' if name == 'dummy' else 'Ar3'}: {reason}" in reader.text("s0-conventions")


def test_silver_is_no_species():
    page = report_page(collect([Structure.from_atoms(["Ag"], [[0, 0, 0]])]))
    assert "<h1>Ag</h1>" in page


def test_labels_have_their_subscripts():
    page = report_page(collect([vibsym.read(SAMPLES / "soot-c60.xyz")]))
    assert 'title="point group">I<sub>h</sub></span>' in page
    assert "<th scope=\"row\" class=\"whole\" data-head=\"species\">T<sub>1u</sub></th>" in page
    assert "2A<sub>g</sub> + 3T<sub>1g</sub>" in page
    assert "T₁" not in page.split("<script")[0] and "F<sub>1u</sub>" in report_page(
        collect([vibsym.read(SAMPLES / "soot-c60.xyz")]), "F")


def test_the_region_asked_for_is_what_is_screened():
    observed = read_bands(str(SAMPLES / "flask-bands.csv"))
    flask = [vibsym.read(SAMPLES / f"flask-{name}.xyz") for name in ("cis", "trans")]
    reader = Reader(report_page(collect(flask, observed, Proposal(oscillators="C-O", local=True))))
    shown = reader.text("all-screen")
    assert "flask-cis, C2v: fits stretch C-O, local group: predicted infrared 4" in shown
    assert "flask-trans, D4h: excluded" in shown
    assigned = reader.text("s0-assignment")
    assert "named in the group of the whole molecule, point group C1; what the bands allow was judged" in assigned
    unseen = reader.result("assign-0")["unseen"]
    assert f"{len(unseen)} not seen." in assigned and "fundamentals not seen have estimates outside" in assigned
    assert not any(f"{row['mode']} {row['estimate']:.0f}" in assigned for row in unseen if row["estimate"] < 1500)


def test_options_that_need_bands_say_so(tmp_path):
    target = tmp_path / "page.html"
    done = CliRunner().invoke(cli, ["report", str(TUBE[0]), "--between", "100", "900", "--output", str(target)])
    assert done.exit_code == 1 and "--between needs observed bands" in done.output and not target.exists()


def test_everything_has_its_section(tube):
    _, page, reader = tube
    assert {f"s0-{key}" for key in ("expect", "regions", "bands", "assignment", "motions", "conventions")} <= set(
        reader.texts)
    assert "vibsym report tube" in reader.text("made")
    assert "perpendicular to the molecular plane" in reader.text("sheet-0")
    assert page.count("<h1") == 1


def test_nothing_is_loaded_from_anywhere(tube):
    _, page, reader = tube
    for tag, attributes in reader.tags:
        for name in ("src", "href", "xlink:href", "action", "data"):
            value = attributes.get(name) or ""
            assert not value or value.startswith(("#", "data:")), (tag, name, value)
        assert not any(name.startswith("on") for name in attributes), (tag, attributes)
    assert "@import" not in page and not re.search(r"url\((?!data:)", page)


def test_ids_are_unique_and_links_lead_somewhere(tube):
    _, _, reader = tube
    ids = [attributes["id"] for _, attributes in reader.tags if "id" in attributes]
    assert len(ids) == len(set(ids))
    for tag, attributes in reader.tags:
        target = attributes.get("href") or ""
        if target.startswith("#") and tag in ("a", "use"):
            assert target[1:] in ids, target


NASTY = "</script><script>alert(1)</script><img src=x onerror=alert(2)> & \"quotes\" 'single' <!-- ]]>"


def test_markup_in_files_stays_text(tmp_path):
    folder = tmp_path / "<b>bold"
    folder.mkdir()
    path, bands, target = folder / "a&b<i>.xyz", tmp_path / "<u>bands.csv", tmp_path / "page.html"
    path.write_text(f"3\n{NASTY}\nO 0 0 0.117\nH 0 0.757 -0.469\nH 0 -0.757 -0.469\n", encoding="utf-8")
    bands.write_text(f"wavenumber,spectrum,strength,note\n3657,IR,s,{NASTY.replace(',', '').replace(chr(34), '')}\n"
                     "1595,IR,vs,\n", encoding="utf-8")
    done = CliRunner().invoke(cli, ["report", str(path), "--bands", str(bands), "--output", str(target)])
    assert done.exit_code == 0 and done.output == ""
    page = target.read_text(encoding="utf-8")
    reader = Reader(page)
    assert NASTY in " ".join(reader.texts["sheet-0"])
    assert [tag for tag, _ in reader.tags if tag in ("img", "b", "i", "u")] == []
    assert sum(tag == "script" and attributes.get("type") is None for tag, attributes in reader.tags) == 1
    assert reader.result("expect-0")["structure"]["source"] == str(path)


def test_sixty_atoms_stay_below_two_megabytes():
    page = report_page(collect([vibsym.read(SAMPLES / "soot-c60.xyz")]))
    print(f"C60: {len(page.encode()) / 1e6:.2f} MB")
    assert len(page.encode()) < 2_000_000


def test_sixty_atoms_without_symmetry_and_with_bands():
    rng = np.random.default_rng(2)
    cage = vibsym.read(SAMPLES / "soot-c60.xyz")
    bent = cage.moved(cage.positions + rng.normal(0, 0.08, cage.positions.shape))
    bands = "wavenumber,spectrum\n" + "".join(f"{place:.1f},{'IR' if k % 2 else 'Raman'}\n"
                                               for k, place in enumerate(np.linspace(200, 1600, 60)))
    page = report_page(collect([bent], parse_bands(bands, "bands.csv")))
    print(f"C60 without symmetry: {len(page.encode()) / 1e6:.2f} MB")
    assert len(page.encode()) < 2_000_000


@pytest.mark.parametrize("name", ["cylinder-argon.xyz", "cylinder-n2o.xyz", "rinse-dichloromethane.mol",
                                  "cluster-mo6cl14.xyz"])
def test_every_kind_of_structure_has_a_page(name):
    reader = Reader(report_page(collect([vibsym.read(SAMPLES / name)])))
    assert "What to expect" in reader.text("sheet-0")


def test_dummy_atoms_have_a_page_and_the_reason_for_what_lacks():
    structure = Structure.from_atoms(["Pt", "Cl", "Cl", "XL", "XL"],
                                     [[0, 0, 0], [2.3, 0, 0], [-2.3, 0, 0], [0, 2.3, 0], [0, -2.3, 0]])
    reader = Reader(report_page(collect([structure])))
    assert "Normal modes left out" in reader.text("s0-conventions")


def test_the_letter_of_triply_degenerate_species(tmp_path):
    target = tmp_path / "page.html"
    done = CliRunner().invoke(cli, ["report", str(SAMPLES / "soot-c60.xyz"), "--triple", "F", "--output", str(target)])
    reader = Reader(target.read_text(encoding="utf-8"))
    assert done.exit_code == 0 and "F1u" in reader.text("s0-expect") and "T1u" not in reader.text("s0-motions")
    moved = {attributes["data-motion"] for _, attributes in reader.tags if "data-motion" in attributes}
    assert moved <= set(json.loads("".join(reader.data[None][:1]))["motions"])


def test_a_bad_structure_writes_nothing(tmp_path):
    target = tmp_path / "page.html"
    done = CliRunner().invoke(cli, ["report", str(tmp_path / "absent.xyz"), "--output", str(target)])
    assert done.exit_code == 1 and "no such file" in done.output and not target.exists()
