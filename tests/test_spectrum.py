"""Measured spectra: peak picking on synthetic curves with known peaks, two-column text, JCAMP-DX in all its forms."""

import sys

import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import parse_bands, read_bands
from vibsym.evidence.jcamp_file import decode_line
from vibsym.evidence.peaks import pick_peaks
from vibsym.evidence.spectrum import is_spectrum, parse_spectrum

BANDS = ((2130.0, 6.0, 0.25), (2050.0, 5.0, 1.0), (2003.0, 5.0, 0.7), (1710.0, 8.0, 0.08))
GRID = np.arange(1600.0, 2300.0, 1.0)


def curve(x, bands=BANDS, noise=0.0, seed=3, background=0.0):
    """Lorentzian bands (centre, half width, height) on a sloping background with Gaussian noise."""
    y = sum(height / (1 + ((x - centre) / width) ** 2) for centre, width, height in bands)
    return y + background * (1 + (x - x[0]) / np.ptp(x)) + np.random.default_rng(seed).normal(0, noise, len(x))


def two_columns(x, y, head="wavenumber,absorbance", separator=","):
    rows = [f"{a:.4f}{separator}{b:.6f}" for a, b in zip(x, y)]
    return "\n".join([head] * bool(head) + rows) + "\n"


def places(text, **options):
    return [peak.wavenumber for peak in pick_peaks(parse_spectrum(text, "curve.csv", "IR", **options)).peaks]


def test_peaks_are_found_where_they_are():
    found = pick_peaks(parse_spectrum(two_columns(GRID, curve(GRID)), "curve.csv", "IR"))
    assert [peak.wavenumber for peak in found.peaks] == pytest.approx([2130, 2050, 2003, 1710], abs=0.3)
    assert [peak.strength for peak in found.peaks] == ["m", "vs", "s", "w"]
    assert "prominence at least" in found.statement and "distance at least 4 cm-1" in found.statement


@pytest.mark.parametrize("weakest_over_noise, recall, precision", [(5, 0.90, 0.95), (10, 0.99, 0.99), (50, 0.99, 0.99)])
def test_recall_and_precision_with_noise(weakest_over_noise, recall, precision):
    """25 bands, 3 to 8 cm-1 wide, at least 25 cm-1 apart, heights over one and a half decades; forty spectra."""
    rng = np.random.default_rng(11)
    x = np.arange(400.0, 4000.0, 1.0)
    true = seen = told = 0
    for trial in range(40):
        centres: list[float] = []
        while len(centres) < 25:
            place = rng.uniform(450, 3950)
            if all(abs(place - other) > 25 for other in centres):
                centres.append(place)
        heights = 10 ** rng.uniform(-1.5, 0, 25)
        noise = heights.min() / weakest_over_noise
        y = curve(x, zip(centres, rng.uniform(3, 8, 25), heights), noise, seed=trial, background=0.1)
        found = places(two_columns(x, y))
        near = [any(abs(place - centre) < 3 for place in found) for centre in centres]
        true, seen, told = true + 25, seen + sum(near), told + len(found)
    print(f"weakest band {weakest_over_noise} times the noise: recall {seen / true:.3f}, precision {seen / told:.3f}")
    assert seen / true >= recall and seen / told >= precision


@pytest.mark.parametrize("step", (0.25, 1.0, 4.0))
@pytest.mark.parametrize("noise", (0.001, 0.005))
def test_places_are_as_certain_as_they_say(step, noise):
    """Bands of mixed width and height: nearly all lie within twice their stated uncertainty of the true place."""
    random = np.random.default_rng(11)
    off = []
    for _ in range(6):
        x = np.arange(400, 4000, step)
        bands = [(float(place), random.uniform(5, 20), 10 ** random.uniform(-1, 0))
                 for place in np.arange(500, 3900, 150) + random.uniform(-20, 20, 23)]
        y = sum(height * np.exp(-np.log(2) * ((x - place) / width) ** 2) for place, width, height in bands)
        found = pick_peaks(parse_spectrum(two_columns(x, y + random.normal(0, noise, len(x))), "made.csv", "IR")).peaks
        assert len(found) == len(bands)
        off += [min(abs(peak.wavenumber - place) for place, _, _ in bands) / peak.uncertainty for peak in found]
    assert np.mean(np.array(off) < 2) >= 0.97


def test_noise_alone_has_no_peaks():
    for seed in range(20):
        y = np.random.default_rng(seed).normal(0, 1, 4000)
        found = places(two_columns(np.arange(4000.0) * 0.9 + 400, y))
        assert len(found) <= 1


def test_the_order_of_the_points_does_not_matter():
    y = curve(GRID)
    assert places(two_columns(GRID[::-1], y[::-1])) == places(two_columns(GRID, y))
    order = np.random.default_rng(5).permutation(len(GRID))
    assert places(two_columns(GRID[order], y[order])) == places(two_columns(GRID, y))


def test_unequal_steps_are_set_even():
    x = np.unique(np.concatenate([np.arange(1600, 1900, 2.0), np.arange(1900, 2300, 0.7)]))
    found = pick_peaks(parse_spectrum(two_columns(x, curve(x)), "curve.csv", "IR"))
    assert [peak.wavenumber for peak in found.peaks] == pytest.approx([2130, 2050, 2003, 1710], abs=1.0)
    assert any("even steps" in note for note in found.notes)


def test_transmittance_points_down_and_counts_the_same():
    y = curve(GRID)
    for head, values in (("wavenumber,transmittance", 10 ** -y), ("cm-1,%T", 100 * 10 ** -y)):
        assert places(two_columns(GRID, values, head)) == pytest.approx(places(two_columns(GRID, y)), abs=0.2)
    unnamed = parse_spectrum(two_columns(GRID, 10 ** -y, ""), "curve.csv", "IR")
    assert unnamed.ordinate == "transmittance" and any("not stated whether" in note for note in unnamed.notes)


def test_wavelengths_are_converted_only_where_stated():
    micrometres, nanometres = 1e4 / GRID, 1e7 / GRID
    y = curve(GRID)
    assert places(two_columns(micrometres, y, "wavelength (µm),absorbance")) == pytest.approx(
        [2130, 2050, 2003, 1710], abs=1)
    assert places(two_columns(nanometres, y, ""), unit="nm") == pytest.approx([2130, 2050, 2003, 1710], abs=1)
    with pytest.raises(VibsymError, match=r"no unit stated and the values end at 6\.25: give --unit"):
        parse_spectrum(two_columns(micrometres, y, ""), "curve.csv", "IR")
    with pytest.raises(VibsymError, match=r"curve\.csv states nm"):
        parse_spectrum(two_columns(nanometres, y, "nm,absorbance"), "curve.csv", "IR", unit="cm-1")


def test_raman_over_wavelengths_needs_the_laser_line():
    shift = np.arange(200.0, 900.0, 1.0)
    absolute = 1e7 / (1e7 / 532.0 - shift)
    text = two_columns(absolute, curve(shift, [(459, 4, 1)]), "nm intensity", " ")
    with pytest.raises(VibsymError, match="give the laser line, --laser NM"):
        parse_spectrum(text, "ccl4.txt", "Raman")
    found = pick_peaks(parse_spectrum(text, "ccl4.txt", "Raman", laser=532.0))
    assert [peak.wavenumber for peak in found.peaks] == pytest.approx([459], abs=0.3)


@pytest.mark.parametrize("separator", [",", "\t", ";", "  "])
def test_separators(separator):
    assert places(two_columns(GRID, curve(GRID), "", separator)) == pytest.approx([2130, 2050, 2003, 1710], abs=0.3)


def test_a_decimal_comma_between_semicolons():
    text = two_columns(GRID, curve(GRID), "Wavenumber;Absorbance", ";").replace(".", ",")
    assert places(text) == pytest.approx([2130, 2050, 2003, 1710], abs=0.3)


def test_cells_in_quotation_marks():
    quoted = "\n".join(",".join(f'"{cell}"' for cell in line.split(","))
                       for line in two_columns(GRID, curve(GRID)).strip().split("\n"))
    found = parse_spectrum(quoted, "curve.csv", "IR")
    assert found.ordinate == "absorbance" and len(found.values) == len(GRID)


def test_lines_before_the_numbers_are_passed_over():
    text = "Instrument A\nOperator, none\n\nwavenumber absorbance\n" + two_columns(GRID, curve(GRID), "", "  ")
    assert is_spectrum(text) and places(text) == pytest.approx([2130, 2050, 2003, 1710], abs=0.3)


def test_points_without_a_value_are_left_out_and_told():
    y = curve(GRID)
    y[[3, 400]] = np.nan
    found = parse_spectrum(two_columns(GRID, y), "curve.csv", "IR")
    assert len(found.values) == len(GRID) - 2 and any("2 points without a finite value" in note for note in found.notes)
    y[::3] = np.nan
    with pytest.raises(VibsymError, match="are not numbers; export the spectrum again"):
        parse_spectrum(two_columns(GRID, y), "curve.csv", "IR")


@pytest.mark.parametrize("text, reason", [
    ("wavenumber,absorbance\n" + "1,2\n" * 5, "5 points; a measured spectrum has"),
    ("wavenumber,absorbance\n" + "".join(f"{k},0.{k}\n" for k in range(400, 430)) + "430,high\n",
     "line 32: '430 high'"),
    (two_columns(GRID, np.full(len(GRID), 4e4), "cm-1,transmittance"), "are no transmittance"),
    (two_columns(GRID * 20, curve(GRID), ""), "values end at 45980: give --unit"),
    (two_columns(GRID, curve(GRID), "").replace(".", ","), "commas both between the columns and in the numbers"),
], ids=["short", "word", "counts", "nm", "commas"])
def test_bad_text(text, reason):
    with pytest.raises(VibsymError, match=reason):
        parse_spectrum(text, "curve.csv", "IR")


# --- JCAMP-DX -------------------------------------------------------------------------------------------------------
# The worked example of the protocol (Appl. Spectrosc. 42, 151 (1988), table of the forms; from memory).
WORKED = "400@VKT%TLkj%J%KLJ%njKjL%kL%jJULJ%kLK1%lLMNPNPRLJ0QTOJ1P"
WORKED_VALUES = [0, 0, 0, 0, 2, 4, 4, 4, 7, 5, 4, 4, 5, 5, 7, 10, 11, 11, 6, 5, 7, 6, 9, 9, 7, 10, 10, 9, 10, 11, 12,
                 15, 16, 16, 14, 17, 38, 38, 35, 38, 42, 47, 54, 59, 66, 75, 78, 88, 96, 104, 110, 121, 128]


def test_the_worked_example_of_the_protocol():
    x, values, differs = decode_line(WORKED)
    assert x == 400 and values == WORKED_VALUES and differs


SQZ = "@ABCDEFGHI", " abcdefghi"
DIF = "%JKLMNOPQR", " jklmnopqr"
DUP = " STUVWXYZs"


def coded(value, alphabet):
    digits = str(abs(value))
    return alphabet[value < 0][int(digits[0])] + digits[1:]


def encoded(values, form, x, step, row=12):
    """Write whole ordinates as lines (X++(Y..Y)) in a form of the standard; an encoder of its own, for the tests."""
    lines = []
    for start in range(0, len(values), row):
        part = list(values[start:start + row])
        at = f"{x + start * step:g}"
        if form == "AFFN":
            lines.append(" ".join([at, *map(str, part)]))
        elif form == "PAC":
            lines.append(at + "".join(f"{value:+d}" for value in part))
        elif form == "SQZ":
            lines.append(at + "".join(coded(value, SQZ) for value in part))
        else:
            part = list(values[start:start + row + 1])         # the first value of the next line closes this one
            items = [coded(part[0], SQZ)] + [coded(int(b), DIF) for b in np.diff(part)]
            lines.append(at + (repeated(items) if form == "DIFDUP" else "".join(items)))
    return lines


def repeated(items):
    text, k = items[0], 1
    while k < len(items):
        run = 1
        while k + run < len(items) and items[k + run] == items[k]:
            run += 1
        text += items[k] + (DUP[run] if 1 < run < 10 else "")
        if run >= 10:
            text += DUP[int(str(run)[0])] + str(run)[1:]
        k += run
    return text


def jcamp(form, y, x0=1600.0, step=1.0, factor=1e-4, **records):
    whole = np.round(np.asarray(y) / factor).astype(int).tolist()
    head = {"TITLE": "made in a test", "JCAMP-DX": "4.24", "DATA TYPE": "INFRARED SPECTRUM", "XUNITS": "1/CM",
            "YUNITS": "ABSORBANCE", "FIRSTX": x0, "LASTX": x0 + step * (len(whole) - 1), "NPOINTS": len(whole),
            "XFACTOR": 1, "YFACTOR": factor} | records
    lines = [f"##{name}={value}" for name, value in head.items() if value is not None]
    return "\n".join([*lines, "##XYDATA=(X++(Y..Y))", *encoded(whole, form, x0, step), "##END=", ""])


@pytest.mark.parametrize("form", ["AFFN", "PAC", "SQZ", "DIF", "DIFDUP"])
def test_every_form_gives_back_the_ordinates(form):
    y = np.round(curve(GRID, noise=0.002) - 0.01, 4)
    y[100:130] = 0.0
    found = parse_spectrum(jcamp(form, y), "made.jdx", "IR")
    assert found.wavenumbers == pytest.approx(GRID) and found.values == pytest.approx(y, abs=1e-9)
    assert found.ordinate == "absorbance" and found.title == "made in a test" and not found.notes


def test_falling_wavenumbers_and_pairs():
    y = curve(GRID)
    assert places(jcamp("DIFDUP", y[::-1], 2299.0, -1.0)) == pytest.approx([2130, 2050, 2003, 1710], abs=0.3)
    points = [f"{a:.1f}, {b:.6f}" for a, b in zip(GRID, y)]
    pairs = "\n".join(f"{one}; {two}" for one, two in zip(points[::2], points[1::2]))
    text = f"##TITLE=pairs\n##JCAMP-DX=4.24\n##XUNITS=1/CM\n##YUNITS=ABSORBANCE\n##XYPOINTS=(XY..XY)\n{pairs}\n##END=\n"
    assert places(text) == pytest.approx([2130, 2050, 2003, 1710], abs=0.3)


def test_several_blocks_are_named_and_chosen():
    link = ("##TITLE=both\n##JCAMP-DX=4.24\n##DATA TYPE=LINK\n##BLOCKS=2\n" + jcamp("DIF", curve(GRID), TITLE="first")
            + jcamp("SQZ", curve(GRID, [(1800, 5, 1)]), TITLE="second") + "##END=\n")
    with pytest.raises(VibsymError, match=r"2 blocks \(1 first; 2 second\); choose one with vibsym peaks --block N"):
        parse_spectrum(link, "both.jdx", "IR")
    assert places(link, block=2) == pytest.approx([1800], abs=0.2)
    with pytest.raises(VibsymError, match="--block 3: the file holds 2"):
        parse_spectrum(link, "both.jdx", "IR", block=3)


def test_missing_units_are_told_and_other_units_converted():
    found = parse_spectrum(jcamp("PAC", curve(GRID), XUNITS=None, YUNITS=None), "made.jdx", "IR")
    assert any("no unit stated, taken as cm-1" in note for note in found.notes)
    assert any("not stated whether absorbance or transmittance" in note for note in found.notes)
    assert found.ordinate == "absorbance"
    x = 1e4 / GRID[::-1]
    even = np.linspace(x[0], x[-1], len(x))
    text = jcamp("SQZ", curve(1e4 / even), x[0], even[1] - even[0], XUNITS="MICROMETERS")
    assert places(text) == pytest.approx([2130, 2050, 2003, 1710], abs=1)
    with pytest.raises(VibsymError, match="##XUNITS=SECONDS is neither cm-1 nor nm nor µm"):
        parse_spectrum(jcamp("PAC", curve(GRID), XUNITS="SECONDS"), "made.jdx", "IR")


def test_damage_is_found():
    good = jcamp("DIF", curve(GRID))
    lines = good.split("\n")
    with pytest.raises(VibsymError, match="points where ##NPOINTS=700"):
        parse_spectrum("\n".join(lines[:30] + lines[-2:]), "cut.jdx", "IR")
    first = next(k for k, line in enumerate(lines) if line.startswith("##XYDATA")) + 2
    lines[first] = lines[first] + "J"
    with pytest.raises(VibsymError, match=r"made.jdx, line \d+: the check value .* the file is damaged"):
        parse_spectrum("\n".join(lines), "made.jdx", "IR")
    with pytest.raises(VibsymError, match="a table of peaks, not a curve"):
        parse_spectrum("##TITLE=x\n##XUNITS=1/CM\n##PEAK TABLE=(XY..XY)\n2050,1\n##END=\n", "made.jdx", "IR")
    with pytest.raises(VibsymError, match="is no ordinate in AFFN, PAC, SQZ, DIF or DUP"):
        parse_spectrum(good.replace("##XYDATA=(X++(Y..Y))\n1600", "##XYDATA=(X++(Y..Y))\n1600 &&"), "made.jdx", "IR")


def test_tables_of_several_pages_and_a_missing_reader_are_told(monkeypatch):
    with pytest.raises(VibsymError, match=r"##NTUPLES .* is not read; export the spectrum as ##XYDATA"):
        parse_spectrum("##TITLE=x\n##JCAMP-DX=5.00\n##NTUPLES=INFRARED SPECTRUM\n##PAGE=N=1\n##END=\n", "n.jdx", "IR")
    monkeypatch.setitem(sys.modules, "jcamp", None)
    with pytest.raises(VibsymError, match=r"JCAMP-DX needs the package jcamp; install it with: pip install 'vibsym\["):
        parse_spectrum("##TITLE=x\n##XUNITS=1/CM\n##END=\n", "made.jdx", "IR")


def test_a_point_without_value_is_a_question_mark():
    assert np.isnan(decode_line("400 1 ? 3")[1][1])


# --- wherever a band list stands --------------------------------------------------------------------------------------
def test_a_measured_spectrum_stands_where_a_band_list_does(tmp_path):
    infrared, raman = tmp_path / "infrared.csv", tmp_path / "raman.jdx"
    infrared.write_text(two_columns(GRID, curve(GRID)), encoding="utf-8")
    raman.write_text(jcamp("DIFDUP", curve(GRID), YUNITS="ARBITRARY UNITS"), encoding="utf-8")
    observed = read_bands(None, str(infrared), str(raman), between=(1900, 2200))
    assert [line.wavenumber for line in observed.lines] == pytest.approx([2130, 2050, 2003] * 2, abs=0.3)
    assert observed.spectra == ("IR", "Raman") and len(observed.measured) == 2
    assert any("3 peaks picked from the measured spectrum" in note for note in observed.notes)
    with pytest.raises(VibsymError, match=r"a measured spectrum \(JCAMP-DX\); give it to --ir or --raman"):
        read_bands(str(raman))


@pytest.mark.parametrize("text", ["wavenumber,strength\n2023,w\n1935,vs\n",
                                  "wavenumber,uncertainty\n" + "".join(f"{k},1\n" for k in range(500, 600)),
                                  "wavenumber\n2023\n1935\n"])
def test_a_band_list_is_not_taken_for_a_curve(text):
    assert not is_spectrum(text)
    assert parse_bands(text, "list.csv", "IR").lines
