"""Screening: verdicts, proofs, ranks, mixtures, rungs, and what would separate the survivors."""

import csv
import json
from pathlib import Path

import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import lines_between, parse_bands
from vibsym.evidence.proposals import screen
from vibsym.evidence.screening import ScreenOptions, screen_predictions
from vibsym.evidence.whole_molecule import Proposal
from vibsym.groups.pointgroup import point_group
from vibsym.report import render
from vibsym.report import screening as view
from vibsym.spectra.expectation import expect
from vibsym.spectra.isomer_bands import list_isomers
from vibsym.spectra.prediction import Prediction, bands_of_gamma
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure

PUBLISHED = Path(__file__).parent / "reference" / "shimanouchi"
HEAD = "wavenumber,spectrum,strength,polarisation\n"


def centrosymmetric() -> list[dict]:
    """The published molecules with a centre of symmetry (Shimanouchi, NSRDS-NBS 39, 1972)."""
    rows = csv.DictReader((PUBLISHED / "published.csv").read_text(encoding="utf-8").splitlines())
    return [row for row in rows if row["point_group"] in ("D2h", "C2h", "D3d", "D6h", "D*h", "Dinfh", "D∞h", "Oh", "Ci")
            and (PUBLISHED / f"{row['slug']}.xyz").exists()]


def published_bands(row: dict):
    """Every infrared-active and every Raman-active wavenumber as a line; equal ones of one spectrum are one line."""
    lines: dict[tuple, None] = {}
    for part in row["wavenumbers"].split(";"):
        label, places = part.strip().split(": ")
        for place in places.split(","):
            spectrum = "IR" if label.endswith("u") or "u+" in label or "u-" in label else "Raman"
            active = label_active(row["point_group"], label, spectrum)
            if active and place.strip() not in ("", "-"):
                lines[float(place.split("/")[0]), spectrum] = None
    return parse_bands("wavenumber,spectrum\n" + "\n".join(f"{place:g},{name}" for place, name in lines), row["slug"])


def label_active(group: str, label: str, spectrum: str) -> bool:
    printed = {("D3d", "Ag"): "A1g"}        # hexabromoethane prints ag for a1g (fault of the source)
    species = point_group({"D*h": "Dinfh"}.get(group, group)).species_named(printed.get((group, label), label))
    return species.infrared if spectrum == "IR" else species.raman


@pytest.mark.parametrize("row", centrosymmetric(), ids=lambda row: row["slug"])
def test_published_molecules_with_a_centre_are_never_excluded(row):
    observed = published_bands(row)
    candidate = screen([read(str(PUBLISHED / f"{row['slug']}.xyz"))], observed).candidates[0]
    assert candidate.prediction.point_group["centrosymmetric"]
    assert candidate.verdict != "excluded", [excuse.reason for excuse in candidate.excuses]


def isomers_of(*ligands: str, symbol: str = "OC-6", centre: str = "Mo") -> dict[str, Prediction]:
    return {entry.isomer.name: entry.prediction() for entry in list_isomers(symbol, centre, list(ligands)).entries}


def screened(predictions, rows: str, **options):
    return screen_predictions(list(predictions.values()), parse_bands(HEAD + rows), ScreenOptions(**options))


def test_cis_and_trans_by_their_bands():
    found = isomers_of("CO=4", "Cl=2")
    result = screened(found, "2023,IR,m\n1935,IR,vs\n1919,IR,s\n1880,IR,s\n")
    assert [(each.prediction.name, each.rank, each.score, each.verdict) for each in result.candidates] == [
        ("cis", 1, 0.0, "fits"), ("trans", 2, 3.0, "excluded")]
    assert {excuse.reason for excuse in result.candidates[1].excuses} == {
        "4 infrared bands, 1 infrared-active fundamental (Eu)"}
    # one line: the count is an upper bound, so neither is excluded
    result = screened(found, "1890,IR,vs\n")
    assert [(each.prediction.name, each.verdict, len(each.unseen)) for each in result.candidates] == [
        ("trans", "fits", 0), ("cis", "fits", 3)]


def test_coincidences_are_weighed_against_chance():
    found = isomers_of("CO=4", "Cl=2")
    # three pairs far from each other: chance mean 0.15, three or more 0.0005
    result = screened(found, "2100,IR,s\n1990,IR,s\n1880,IR,s\n2101,Raman,s\n1991,Raman,s\n1881,Raman,s\n")
    trans = result.candidate_of(found["trans"])
    assert trans.verdict == "excluded" and result.candidates[0].prediction is found["cis"]
    one = screened(found, "1990,IR,s\n1991,Raman,s\n2100,Raman,s\n").candidate_of(found["trans"])
    assert [(excuse.kind, excuse.weight) for excuse in one.excuses] == [("accidental", 0.5)]
    assert one.excuses[0].reason == ("1 pair coincides, no species is active in both, chance explains 0.05 of them on "
                                     "average: probability of 1 or more 0.049")
    assert one.verdict == "strained"


def test_polarised_lines_must_be_totally_symmetric():
    found = isomers_of("CO=4", "Cl=2")
    result = screened(found, "2100,Raman,s,p\n2000,Raman,s,0.1\n")
    trans = result.candidate_of(found["trans"])
    assert [(excuse.kind, excuse.weight) for excuse in trans.excuses] == [("polarisation", 1.0)]
    assert trans.excuses[0].reason.startswith(
        "2 lines must be totally symmetric, the structure has 1 such fundamental (A1g)")
    assert result.candidate_of(found["cis"]).verdict == "fits"
    assert screened(found, "2100,Raman,s,p\n2000,Raman,s,0.75\n").candidate_of(found["trans"]).verdict == "fits"


def test_the_verdict_limits():
    found = {"trans": isomers_of("CO=4", "Cl=2")["trans"]}
    rows = "1990,IR,s\n1950,IR,s\n"
    assert screened(found, rows).candidates[0].verdict == "strained"
    assert screened(found, rows, allow=0.5).candidates[0].verdict == "excluded"
    assert screened(found, rows + "1900,IR,w\n").candidates[0].verdict == "excluded"
    assert screened(found, rows + "1900,IR,w\n", allow=1.5).candidates[0].verdict == "strained"


def test_ties_share_a_rank():
    gamma = {"A1": 1}
    twins = {name: Prediction(name, {}, {"symbol": "C2v"}, bands_of_gamma(gamma, point_group("C2v")), region="x")
             for name in ("a", "b")}
    more = Prediction("c", {}, {"symbol": "C2v"}, bands_of_gamma({"A1": 2}, point_group("C2v")), region="x")
    result = screened(twins | {"c": more}, "1990,IR,s\n")
    assert [(each.prediction.name, each.rank) for each in result.candidates] == [("a", 1), ("b", 1), ("c", 3)]
    assert "1=" in render([result], view)


def test_what_would_separate_is_told_cheapest_first():
    found = isomers_of("CO=4", "Cl=2")
    told = screened(found, "1990,IR,vs\n").separating
    assert told == (
        "a more sensitive or better resolved infrared spectrum: D4h allows at most 1, C2v 4; 1 seen",
        "a Raman spectrum: only C2v has all its bands in both",
        "polarisation in that Raman spectrum: C2v predicts 2 polarised, D4h 1")
    told = screened(found, "1990,IR,vs\n2100,Raman,s\n").separating
    assert told[0] == "polarisation of the Raman lines: C2v predicts 2 polarised, D4h 1"
    assert screened(found, "2100,IR,s\n1990,IR,s\n1900,IR,s\n1880,IR,s\n").separating == ()     # one survivor


def test_one_spectrum_alone_says_what_cannot_be_concluded():
    found = isomers_of("CO=4", "Cl=2")
    assert "centre of symmetry" in screened(found, "1990,IR,vs\n").limits[0]
    assert "active in infrared only" in screened(found, "1990,Raman,vs\n").limits[0]
    assert screened(found, "1990,IR,vs\n2100,Raman,s\n").limits == ()


def test_a_mixture_shares_the_lines():
    found = isomers_of("CO=3", "Cl=3")
    rows = "2040,IR,s\n1990,IR,s\n1950,IR,vs\n1930,IR,s\n1900,IR,vs\n"
    result = screened(found, rows, mixture=True)
    best = result.candidates[0]
    assert best.prediction.name == "fac + mer" and best.verdict == "fits"
    answer = best.to_dict()
    assert len(answer["structures"]) == 2 and "structure" not in answer
    assert len(answer["explanation"]) == 5
    with pytest.raises(VibsymError, match="at least two"):
        screened({"fac": found["fac"]}, rows, mixture=True)


def octahedron(shift: float = 0.0) -> Structure:
    """An MX6 stretched along z by `shift` Å on either side."""
    places = np.array([[0, 0, 0], *np.eye(3) * 1.9, *-np.eye(3) * 1.9], float)
    places[[3, 6], 2] += np.array([shift, -shift])
    return Structure.from_atoms(["S", *["F"] * 6], places, source="hexafluoride.xyz")


def test_every_rung_asks_whether_the_effective_symmetry_is_higher():
    observed = parse_bands(HEAD + "940,IR,vs\n614,IR,s\n772,Raman,vs,p\n642,Raman,w\n525,Raman,w\n300,Raman,w\n")
    result = screen([octahedron(0.1)], observed, Proposal(every_rung=True))
    groups = {each.prediction.group: each for each in result.candidates}
    assert {"D4h", "Oh"} <= set(groups) and groups["Oh"].prediction.true_group == "D4h"
    # T2u is silent in Oh; in D4h it is Eu + B2u, so it may leak into the infrared but not into the Raman spectrum
    bands = {each.label: each for each in groups["Oh"].prediction.bands}
    assert bands["T2u"].leaks_in("IR") == ("true group",) and bands["T2u"].leaks_in("Raman") == ()
    assert [(excuse.kind, excuse.weight) for excuse in groups["Oh"].excuses] == [("unexplained", 0.5)]


def test_a_leak_through_the_lower_true_group_is_named():
    observed = parse_bands(HEAD + "940,IR,vs\n614,IR,s\n350,IR,vw\n772,Raman,vs,p\n642,Raman,w\n525,Raman,w\n")
    result = screen([octahedron(0.1)], observed, Proposal(as_group="Oh"))
    assert [excuse.kind for excuse in result.candidates[0].excuses] == ["leak"]
    assert "(a) allowed in the true group D4h" in result.candidates[0].excuses[0].reason
    assert result.candidates[0].verdict == "strained"


def test_whole_molecules_miss_nothing_in_a_list_of_one_region():
    observed = parse_bands(HEAD + "940,IR,vs\n772,Raman,vs,p\n642,Raman,w\n")
    result = screen([octahedron()], observed)
    assert result.candidates[0].unseen == () and "--oscillators" in result.notes[0]
    full = parse_bands(HEAD + "940,IR,vs\n772,Raman,vs,p\n642,Raman,w\n400,Raman,w\n")
    assert [each.to_dict() for each in screen([octahedron()], full).candidates[0].unseen] == [
        {"species": "T1u", "infrared": True, "raman": False}]


def test_bands_just_beyond_the_window_are_named_with_the_window_that_pairs_them():
    """Gas (infrared) and liquid (Raman) of one substance differ by 9 and 11 cm-1; 233 has no partner."""
    found, rows = isomers_of("CO=4", "Cl=2"), "928,IR,s\n578,IR,m\n919,Raman,s\n567,Raman,vs\n233,Raman,m\n"
    note, = (each for each in screened(found, rows).notes if "--window" in each)
    assert "IR 928 and Raman 919, IR 578 and Raman 567" in note and "233" not in note and "--window 11 pairs" in note
    assert not any("--window" in each for each in screened(found, rows, window=11).notes)
    assert len(screened(found, rows, window=11).seen.pairs) == 2


def test_a_band_outside_the_range_of_the_other_spectrum_is_not_missing_there():
    """Infrared ends where Raman goes on: the low Raman lines say nothing against bands active in both."""
    bent = Structure.from_atoms(["S", "Cl", "Cl"], [[0, 0, 0], [0, 1.55, 1.3], [0, -1.55, 1.3]], source="bent.xyz")
    inside = parse_bands(HEAD + "525,IR,s\n300,IR,w\n200,IR,w\n514,Raman,s\n208,Raman,s\n")
    outside = parse_bands(HEAD + "525,IR,s\n300,IR,w\n514,Raman,s\n208,Raman,s\n")
    assert {str(band) for band in outside.one_sided} == {"525", "208"}      # 300 and 514 lie in both
    answer = screen([bent], outside).candidates[0]
    assert [each.to_dict() for each in answer.unseen] == [{"species": "A1", "infrared": True, "raman": False}]
    assert len(screen([bent], inside).candidates[0].unseen) == 2
    stated = lines_between(outside, (150, 600))
    assert stated.one_sided == frozenset() and stated.whole_range
    assert len(screen([bent], stated).candidates[0].unseen) == 3
    assert not lines_between(outside, (450, 600)).whole_range


def test_oscillators_of_one_region_are_missing_in_either_spectrum():
    trans, cis = (isomers_of("CO=4", "Cl=2")[name] for name in ("trans", "cis"))
    result = screened({"trans": trans, "cis": cis}, "1890,IR,vs\n2005,Raman,s\n1930,Raman,s\n")
    assert [len(each.unseen) for each in result.candidates] == [0, 4]


def test_carbonyls_are_compared_in_their_region():
    """A whole spectrum given with oscillators that lie apart from all others: only their lines count."""
    found = isomers_of("CO=4", "Cl=2")
    region = "2023,IR,m\n1935,IR,vs\n1919,IR,s\n1880,IR,s\n"
    result = screened(found, "2930,IR,s\n" + region + "1437,IR,s\n520,IR,m\n540,Raman,m\n310,Raman,s\n")
    assert [(each.prediction.name, each.score) for each in result.candidates] == [("cis", 0.0), ("trans", 3.0)]
    assert result.notes[0].startswith("5 lines outside 1550 to 2400 cm-1") and "--between" in result.notes[0]
    assert result.observed.spectra == ("IR",)            # the Raman spectrum ends below the region
    assert screened(found, region).notes == ()
    metal = {entry.isomer.name: entry.prediction() for entry in list_isomers("OC-6", "Pt", ["Cl=6"]).entries}
    whole = screened(metal, "343,IR,vs\n150,IR,m\n")
    assert len(whole.observed.lines) == 2 and "bends and other modes in the list stay unexplained" in whole.notes[0]


def test_json_is_the_contract():
    observed = parse_bands(HEAD + "940,IR,vs\n614,IR,s\n772,Raman,vs,p\n642,Raman,w\n525,Raman,w\n")
    answer = json.loads(render([screen([octahedron()], observed)], view, "json"))
    assert list(answer)[:3] == ["bands", "candidates", "separating"]
    # differences up to 100 cm-1: 614 with 642 and with 525
    wanted = {"infrared": 2, "raman": 3, "pairs": 0, "window": 5.0, "chance_mean": 0.1}
    assert answer["bands"] == answer["bands"] | wanted
    candidate = answer["candidates"][0]
    assert candidate["structure"] == {"source": "hexafluoride.xyz", "formula": "F6S", "atoms": 7}
    assert candidate["point_group"]["symbol"] == "Oh"
    assert (candidate["rank"], candidate["score"], candidate["verdict"]) == (1, 0.0, "fits")
    assert {"species": "A1g", "lines": [{"spectrum": "Raman", "wavenumber": 772.0}]} in candidate["explanation"]
    assert candidate["excuses"] == [] and candidate["unseen"] == []


def test_every_format_tells_the_same():
    result = screened(isomers_of("CO=4", "Cl=2"), "2023,IR,m\n1935,IR,vs\n1919,IR,s\n1880,IR,w\n")
    page, table = render([result], view), render([result], view, "csv")
    assert "Excluded: trans" in page and "Fitting is not proof" in page and max(map(len, page.splitlines())) <= 80
    assert [row["candidate"] for row in csv.DictReader(table.splitlines())] == ["cis", "trans"]
    assert "| 1 | cis | fits | C₂v" in render([result], view, "markdown")


def test_impossible_requests():
    observed = parse_bands("wavenumber,spectrum\n900,IR\n")
    for proposal, reason in ((Proposal(local=True), "--local needs"),
                             (Proposal(every_rung=True, as_group="D4h"), "leave out --as")):
        with pytest.raises(VibsymError, match=reason):
            screen([octahedron()], observed, proposal)
    with pytest.raises(VibsymError, match="no structure"):
        screen_predictions([], observed)
    for allow in (-1, float("nan"), float("inf")):
        with pytest.raises(VibsymError, match="--allow"):
            screen_predictions([Prediction("a", {}, {"symbol": "C1"}, ())], observed, ScreenOptions(allow=allow))


def test_a_single_atom_explains_nothing():
    atom = Structure.from_atoms(["Ar"], [[0.0, 0, 0]], source="atom.xyz")
    assert expect(atom).counts.fundamentals == 0
    result = screen([atom], parse_bands("wavenumber,spectrum\n900,IR\n800,Raman\n"))
    assert result.candidates[0].verdict == "excluded"
    assert {excuse.reason for excuse in result.candidates[0].excuses} == {"2 bands, no active fundamental"}
