"""Band lists: every spelling that is read, and every doubtful row that is named with file, line and value."""

import pytest

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import parse_bands, read_bands

HEAD = "wavenumber,spectrum,strength,polarisation,uncertainty,together,note\n"


def one(row: str, **options):
    return parse_bands(HEAD + row, **options).lines[0]


def test_a_full_list_keeps_order_notes_and_unknown_columns():
    text = ("# leaf of the notebook\nwavenumber,spectrum,strength,cell,note\n2023.5,IR,m,KBr,shifts\n\n"
            "# Raman\n1935,Raman,vs,,\n")
    found = parse_bands(text, "leaf.csv")
    assert [(line.wavenumber, line.spectrum, line.row) for line in found.lines] == [(2023.5, "IR", 3),
                                                                                    (1935, "Raman", 6)]
    assert found.lines[0].extra == {"cell": "KBr"} and found.lines[0].note == "shifts"
    assert found.spectra == ("IR", "Raman")


@pytest.mark.parametrize("text, polarised, depolarised, anomalous", [
    ("", False, False, False), ("p", True, False, False), ("P", True, False, False), ("dp", False, True, False),
    ("0.04", True, False, False), ("0.04(2)", True, False, False), ("0", True, False, False),
    ("0.68", True, False, False),      # 0.68 + 2 * 0.03 = 0.74 < 3/4
    ("0.69", False, True, False),      # 0.69 + 2 * 0.03 = 3/4: proves nothing
    ("0.70(2)", True, False, False), ("0.70(3)", False, True, False), ("0.75", False, True, False),
    ("0.80", False, True, False), ("0.82", False, True, True), ("1.5(1)", False, True, True),
    ("0,04", True, False, False), ("0.04±0.02", True, False, False)])
def test_polarised_only_below_three_quarters_by_twice_the_error(text, polarised, depolarised, anomalous):
    line = parse_bands(f"wavenumber\tpolarisation\n900\t{text}\n", spectrum="Raman").lines[0]
    assert (line.polarised, line.depolarised, line.anomalous) == (polarised, depolarised, anomalous)


def test_natural_light_has_its_own_ceiling():
    assert not one("900,Raman,,0.75").polarised
    assert one("900,Raman,,0.75", light="natural").polarised          # 0.75 + 0.06 < 6/7
    assert not one("900,Raman,,0.80", light="natural").polarised
    assert parse_bands(HEAD + "900,Raman,,1.2").notes[0].startswith("band list: depolarisation ratio above 3/4 at 900")


@pytest.mark.parametrize("text, strength, weak", [
    ("vs", "vs", False), ("VW", "vw", True), ("w", "w", True), ("m sh", "m, sh", True), ("s(br)", "s, br", False),
    ("m-s", "m-s", False), ("w br", "w, br", True), ("sh", "sh", True), ("very weak", "vw", True), ("v", "v", False),
    ("", "", False), ("mw", "mw", False)])
def test_strengths_of_the_trade(text, strength, weak):
    line = one(f"900,IR,{text}")
    assert (line.strength, line.weak) == (strength, weak)


@pytest.mark.parametrize("text", [
    "wavenumber;spectrum\r\n2023,5;IR\r\n", "wavenumber\tspectrum\n2023,5\tIR\n", 'wavenumber,spectrum\n"2023,5",IR\n',
    "Wavenumber (cm-1),Spectrum\n2023.5,infrared\n", "wavenumber / cm⁻¹,spectrum\n2023.5 cm-1,ir\n",
    "wavenumber,spectrum\r2023.5,IR\r"], ids=["semicolons", "tabs", "quotes", "unit", "unit in cell", "old line ends"])
def test_separators_decimal_commas_and_units(text):
    line = parse_bands(text).lines[0]
    assert (line.wavenumber, line.spectrum) == (2023.5, "IR")


def test_encodings(tmp_path):
    path = tmp_path / "leaf.csv"
    for encoding in ("utf-8", "utf-8-sig", "utf-16", "latin-1"):
        path.write_bytes("wavenumber,spectrum,note\n900,IR,für μ\n".replace("μ", "é").encode(encoding))
        found = read_bands(str(path))
        assert found.lines[0].note == "für é", encoding
        assert bool(found.notes) == (encoding == "latin-1")


def test_lines_marked_together_are_one_band_of_their_spectrum():
    found = parse_bands(HEAD + "1899,IR,w,,,a,\n1888,IR,vs,,,a,\n1889,Raman,w,,,a,\n2002,Raman,s,p,,,")
    assert [str(band) for band in found.bands] == ["1899/1888", "1889", "2002"]
    assert [band.weak for band in found.bands] == [False, True, False]


def test_one_file_for_each_spectrum(tmp_path):
    for name, text in (("ir", "wavenumber\n1888\n"), ("raman", "wavenumber,strength\n2002,s\n")):
        (tmp_path / name).write_text(text)
    found = read_bands(infrared=str(tmp_path / "ir"), raman=str(tmp_path / "raman"))
    assert [(line.wavenumber, line.spectrum) for line in found.lines] == [(1888, "IR"), (2002, "Raman")]


def test_a_region_keeps_what_was_measured(tmp_path):
    path = tmp_path / "leaf.csv"
    path.write_text("wavenumber,spectrum\n1888,IR\n400,Raman\n")
    found = read_bands(str(path), between=(1800, 2100))
    assert [line.wavenumber for line in found.lines] == [1888] and found.spectra == ("IR", "Raman")
    with pytest.raises(VibsymError, match=r"no line between 2500 and 2600 cm-1; the list runs from 400 to 1888"):
        read_bands(str(path), between=(2500, 2600))
    for wrong in ((2100, 1800), (float("nan"), 5), (-1, 5), (1, float("inf"))):
        with pytest.raises(VibsymError, match="lower wavenumber first"):
            read_bands(str(path), between=wrong)


@pytest.mark.parametrize("row, reason", [
    ("4.94,IR", r"line 2: 4.94 cannot be a wavenumber in cm-1 .*µm would be 2024 cm-1"),
    ("4940,IR", r"line 2: 4940 cannot be a fundamental .*nm would be 2024 cm-1"),
    ("-900,IR", "line 2: wavenumber -900 is not above zero"), ("0,IR", "not above zero"),
    ("nan,IR", "wavenumber 'nan' is not a number"), ("inf,IR", "'inf' is not a number"),
    ("1e999,IR", "'1e999' is not finite"), ("9oo,IR", "'9oo' is not a number"), (",IR,s", "no wavenumber"),
    ("1032-1044,IR", r"is a range; write its lines in rows of their own with one mark in together"),
    ('"2,023",IR', "can be read in two ways"), ("900,UV", "spectrum 'UV' is neither IR nor Raman"),
    ("900,", "no spectrum; write IR or Raman"), ("900,IR,loud", "strength 'loud' is not vs, s, m, w or vw"),
    ("900,Raman,s,pol?", r"polarisation 'pol\?' cannot be read"), ("900,Raman,s,-0.1", "polarisation '-0.1' cannot be"),
    ("900,Raman,s,75", "per cent"), ("900,IR,s,p", "polarisation 'p' on an infrared line"),
    ("900,IR,,,-1", "uncertainty -1 is not between"), ("900,IR,,,x", "uncertainty 'x' is not a number"),
    ("2023,5,IR,s,p,,,,,", "decimal comma needs quotes")])
def test_doubtful_rows_are_named(row, reason):
    with pytest.raises(VibsymError, match=reason) as caught:
        parse_bands(HEAD + row + "\n1000,IR\n", "leaf.csv")
    assert str(caught.value).startswith("leaf.csv, line 2") and "\n" not in str(caught.value)


def test_every_doubtful_row_is_named():
    with pytest.raises(VibsymError) as caught:
        parse_bands(HEAD + "\n".join(f"{900 + row},UV" for row in range(6)), "leaf.csv")
    assert "line 2:" in str(caught.value) and str(caught.value).endswith("also doubtful: line 5, 6, 7")


def test_duplicates_name_both_lines():
    with pytest.raises(VibsymError, match=r"leaf.csv, line 4: IR 900 stands in line 2 already"):
        parse_bands(HEAD + "900,IR\n900,Raman\n900.0,IR\n", "leaf.csv")


def test_a_list_in_micrometres_is_told_by_its_range():
    with pytest.raises(VibsymError, match=r"micrometres\? 15 µm is 667 cm-1"):
        parse_bands(HEAD + "15.0,IR\n11.5,IR\n")


@pytest.mark.parametrize("text, reason", [
    ("", "empty"), ("# only a comment\n", "empty"), ("wavenumber,spectrum\n", "no bands under the head line"),
    ("2023,IR\n1935,IR\n", "no column wavenumber .the first row must name the columns"),
    ("wavenumber\n900\n", "no column spectrum"), ("wavenumber (nm),spectrum\n900,IR\n", "is not in cm-1"),
    ("wavenumber,wavenumber,spectrum\n900,900,IR\n", "occurs 2 times")])
def test_lists_that_cannot_be_used(text, reason):
    with pytest.raises(VibsymError, match=reason):
        parse_bands(text, "leaf.csv")


def test_files_that_are_no_lists(tmp_path):
    (tmp_path / "binary").write_bytes(b"\x00\x01\x02" * 50)
    (tmp_path / "huge").write_bytes(b"900,IR\n" * 400_000)
    for name, reason in (("binary", "a binary file"), ("huge", "more than 2 MB"), (".", "is a folder"),
                         ("missing", "cannot be read")):
        with pytest.raises(VibsymError, match=reason):
            read_bands(str(tmp_path / name))
    with pytest.raises(VibsymError, match="no observed bands"):
        read_bands()
    with pytest.raises(VibsymError, match="--bands names both spectra"):
        read_bands("a", infrared="b")


def test_the_american_spelling_of_polarisation_is_no_unknown_column():
    line = parse_bands("wavenumber,spectrum,Polarization\n900,Raman,p\n").lines[0]
    assert line.polarised and line.extra == {}
