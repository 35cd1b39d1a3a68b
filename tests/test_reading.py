"""Reading structures: what is accepted, and that bad input ends in one clear line."""

import io
import sys
import time

import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.files import write_text_atomically
from vibsym.structures.reading import read, read_all
from vibsym.structures.writing import write_xyz

WATER = "3\nwater, bent\nO 0 0 0.12\nH 0 0.76 -0.47\nH 0 -0.76 -0.47\n"
# boron trifluoride: planar, three-dimensional and complete, although all z are zero
BF3 = """boron trifluoride

a planar molecule
  4  3  0  0  0  0            999 V2000
    0.0000    0.0000    0.0000 B   0  0
    1.3100    0.0000    0.0000 F   0  0
   -0.6550    1.1345    0.0000 F   0  0
   -0.6550   -1.1345    0.0000 F   0  0
  1  2  1  0
  1  3  1  0
  1  4  1  0
M  END
"""
# chloromethane in the V3000 form, one deuterium and 13C
CHLOROMETHANE = """chloromethane
  by hand           3D

  0  0  0     0  0            999 V3000
M  V30 BEGIN CTAB
M  V30 COUNTS 5 4 0 0 0
M  V30 BEGIN ATOM
M  V30 10 C 0 0 0 0 MASS=13
M  V30 20 Cl 0 0 1.78 0
M  V30 3 H 1.03 0 -0.36 0
M  V30 4 H -0.515 0.892 -0.36 0
M  V30 5 D -0.515 -0.892 -
M  V30 -0.36 0
M  V30 END ATOM
M  V30 BEGIN BOND
M  V30 1 1 10 20
M  V30 2 1 10 3
M  V30 3 1 10 4
M  V30 4 1 5 10
M  V30 END BOND
M  V30 END CTAB
M  END
"""


@pytest.fixture
def file(tmp_path):
    """Return a function that writes text or bytes to a file and returns its path."""
    def write(content, name="structure.dat"):
        path = tmp_path / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode("utf-8"))
        return str(path)
    return write


# --- what is read

@pytest.mark.parametrize("content", [
    WATER, WATER.replace("\n", "\r\n"), WATER.replace("\n", "\r"), WATER.replace(" ", "\t"), WATER + "\n\n   \n\n",
    "\n\n" + WATER, WATER.rstrip("\n"), WATER.replace("O ", "o ").replace("H ", "h "),
    WATER.replace("O ", "8 ").replace("H ", "1 "), b"\xef\xbb\xbf" + WATER.encode(),
    WATER.replace("water, bent", "Wässer").encode("latin-1"), WATER.replace("water, bent", ""),
    WATER.replace("0.12", "1.2D-1"), WATER.replace("0.12", ".12e0"), "  3  \n" + WATER[2:],
], ids=["plain", "crlf", "cr", "tabs", "blank-tail", "blank-head", "no-last-newline", "lower", "numbers", "bom",
        "latin-1", "no-comment", "fortran", "exponent", "spaces"])
def test_water_in_many_dresses(file, content):
    water = read(file(content))
    assert water.symbols == ("O", "H", "H") and water.formula == "H2O" and water.kinds.tolist() == [0, 1, 1]
    np.testing.assert_allclose(water.positions, [[0, 0, 0.12], [0, 0.76, -0.47], [0, -0.76, -0.47]], atol=1e-12)
    assert water.notes == ()


def test_the_ending_of_the_name_does_not_matter(file):
    assert read(file(WATER, "water.mol")).formula == "H2O"
    assert read(file(BF3, "bf3.xyz")).formula == "BF3"


def test_control_characters_do_not_reach_the_terminal(file):
    assert "\x1b" not in read(file(WATER.replace("bent", "\x1b[31mred"))).comment


def test_upper_case_symbols_isotopes_and_dummies(file):
    text = "6\n\nCL 0 0 0\nD 0 0 2\n13C 0 2 0\nXL 2 0 0\nXE 0 0 -4\nx 0 -3 0\n"
    structure = read(file(text))
    assert structure.symbols == ("Cl", "H", "C", "XL", "Xe", "x")
    assert structure.mass_numbers == (None, 2, 13, None, None, None)
    assert structure.is_dummy.tolist() == [False, False, False, True, False, True]
    assert structure.numbers.tolist() == [17, 1, 6, 0, 54, 0]
    assert np.isnan(structure.masses).tolist() == structure.is_dummy.tolist()
    assert structure.formula == "(13C)DClXe·(XL)x"


def test_standard_input(monkeypatch):
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(WATER.encode())))
    assert read("-").source == "standard input"


@pytest.mark.parametrize("masses, kinds, numbers", [
    ((15.994915, 1.008, 1.007825), [0, 1, 1], (None, None, None)),         # mean and isotopic mass differ by 0.0002 u
    ((17.999160, 2.014102, 1.007825), [0, 1, 2], (18, 2, None)),
    ((15.999, 1.008, 1.008), [0, 1, 1], (None, None, None)),
])
def test_fifth_column_is_the_mass(file, masses, kinds, numbers):
    lines = WATER.splitlines()
    water = read(file("\n".join(lines[:2] + [f"{line} {value}" for line, value in zip(lines[2:], masses)])))
    assert water.masses.tolist() == list(masses) and water.kinds.tolist() == kinds and water.mass_numbers == numbers
    assert any("masses" in note for note in water.notes)


@pytest.mark.parametrize("extra", [(-0.8, 0.4, 0.4), ("a", "b", "c"), ("1 2", "3 4", "5 6"), (16, "", 1), (1, 16, 1)])
def test_other_columns_are_ignored_with_a_note(file, extra):
    lines = WATER.splitlines()
    water = read(file("\n".join(lines[:2] + [f"{line} {value}" for line, value in zip(lines[2:], extra)])))
    assert water.kinds.tolist() == [0, 1, 1] and any("ignored" in note for note in water.notes)


def test_extended_xyz_with_columns_elsewhere(file):
    text = ('3\nLattice="9 0 0 0 9 0 0 0 9" Properties=id:I:1:pos:R:3:species:S:1:masses:R:1:forces:R:3 pbc="T T T"\n'
            "1 0 0 0.12 O 15.9949 1 2 3\n2 0 0.76 -0.47 H 2.0141 0 0 0\n3 0 -0.76 -0.47 H 1.00783 0 0 0\n")
    water = read(file(text))
    assert water.formula == "HDO" and water.positions[1].tolist() == [0, 0.76, -0.47]
    assert any("lattice" in note for note in water.notes)


def test_frames(file):
    path = file(WATER + WATER.replace("0.76", "0.80") + "\n" + WATER.replace("0.76", "0.90"))
    assert read(path).positions[1, 1] == 0.76 and "frame 1 of 3" in read(path).notes[0]
    assert read(path, 3).positions[1, 1] == 0.90
    assert [each.positions[1, 1] for each in read_all(path)] == [0.76, 0.80, 0.90]
    assert read_all(path)[1].source == path + ", frame 2"
    for frame in (0, -1, 4):
        with pytest.raises(VibsymError, match="frame"):
            read(path, frame)


def test_a_broken_later_frame_does_not_harm_the_first(file):
    path = file(WATER + WATER[:30])
    assert "or more" in read(path).notes[0]
    with pytest.raises(VibsymError, match="line 6"):
        read(path, 2)
    with pytest.raises(VibsymError, match="line 6"):
        read_all(path)


def test_molfile_v2000_planar_but_complete(file):
    structure = read(file(BF3))
    assert structure.formula == "BF3" and structure.bonds.tolist() == [[0, 1], [0, 2], [0, 3]] and structure.charge == 0
    assert structure.comment == "boron trifluoride"


def test_molfile_crlf_and_blank_title(file):
    assert read(file(BF3.replace("boron trifluoride", "").replace("\n", "\r\n"))).formula == "BF3"


def test_molfile_isotopes_and_charges(file):
    lines = ["M  ISO  2   1  10   2  18", "M  CHG  1   1   1", "M  END"]
    structure = read(file(BF3.replace("M  END", "\n".join(lines))))
    assert structure.formula == "(10B)F2(18F)" and structure.charge == 1
    old = read(file(BF3.replace(" B   0  0", " B  -1  0")))     # the mass-difference field: 11 - 1
    assert old.mass_numbers[0] == 10


def test_molfile_v3000(file):
    structure = read(file(CHLOROMETHANE))
    assert structure.formula == "(13C)H2DCl" and structure.bonds.tolist() == [[0, 1], [0, 2], [0, 3], [0, 4]]
    assert structure.positions[4].tolist() == [-0.515, -0.892, -0.36]


def test_sd_file(file):
    path = file(BF3 + "> <name>\nfirst\n\n$$$$\n" + CHLOROMETHANE + "$$$$\n\n")
    assert [each.formula for each in read_all(path)] == ["BF3", "(13C)H2DCl"]
    assert read(path, 2).formula == "(13C)H2DCl" and "frame 1 of 2" in read(path).notes[0]


def test_molfile_with_touching_columns(file):
    """More than 99 bonds touch in the counts line, wide coordinates in the atom lines."""
    atoms = [f"{-1000.0 - 2 * i:10.4f}{-1000.0:10.4f}{-1000.0 - (i % 2):10.4f} Ne  0  0" for i in range(120)]
    bonds = [f"{i + 1:3d}{i + 2:3d}  1  0" for i in range(119)]
    text = "\n".join(["neon", "", "", "120119  0  0  0  0            999 V2000", *atoms, *bonds, "M  END"])
    structure = read(file(text))
    assert len(structure) == 120 and structure.bonds[118].tolist() == [118, 119]
    assert structure.positions[119].tolist() == [-1238, -1000, -1001]


def test_marked_2d_but_with_depth_is_read(file):
    text = CHLOROMETHANE.replace("  by hand           3D", "  by hand           2D")
    assert read(file(text)).formula == "(13C)H2DCl"


# --- what is refused

DRAWN = """ethanol

drawn
  3  2  0  0  0  0            999 V2000
    0.0000    0.0000    0.0000 C   0  0
    1.2990    0.7500    0.0000 C   0  0
    2.5981    0.0000    0.0000 O   0  0
  1  2  1  0
  2  3  1  0
M  END
"""
BAD = {
    "empty": ("", "empty"), "blank": (" \n\t\n\r\n", "empty"), "bom-only": (b"\xef\xbb\xbf", "empty"),
    "fewer-atoms": ("4" + WATER[1:], "line 1: 4 atoms are announced, but only 3"),
    "more-atoms": ("2" + WATER[1:], "line 5: more atoms follow than the 2"),
    "gap": (WATER.replace("H 0 0.76", "\nH 0 0.76").replace("3\n", "4\n", 1), "line 4: the line is empty"),
    "tail": (WATER + "the end\n", "line 6: 'the end' is neither"),
    "zero": ("0\n\n", "line 1: 0 atoms"), "negative": ("-3\n\nO 0 0 0\n", "line 1: -3 atoms"),
    "absurd": ("1000000000000\n\nO 0 0 0\n", "line 1: 1000000000000 atoms"),
    "absurd-digits": ("9" * 6000 + "\n\nO 0 0 0\n", "line 1: 99999"),
    "count-only": ("3", "line 1: 3 atoms are announced, but only 0"),
    "unknown": (WATER.replace("O 0", "Q 0"), "line 3: 'Q' is not an element"),
    "ambiguous": (WATER.replace("O 0", "O18 0"), "line 3: 'O18' could be .* write 18O or O"),
    "no-isotope": (WATER.replace("O 0", "99O 0"), "line 3: no isotope 99O"),
    "text": (WATER.replace("0.76", "zero"), "line 4: 'zero' is not a number"),
    "comma": (WATER.replace("0.76", "0,76"), "line 4: '0,76' is not a number"),
    "underscore": (WATER.replace("0.76", "0_76"), "line 4: '0_76' is not a number"),
    "nan": (WATER.replace("0.76", "nan"), "line 4: the coordinate 'nan'"),
    "inf": (WATER.replace("0.76", "-Infinity"), "line 4: the coordinate '-Infinity'"),
    "overflow": (WATER.replace("0.76", "1e999"), "line 4: the coordinate '1e999'"),
    "far": (WATER.replace("0.76", "1e9"), "line 4: the coordinate 1e9 is larger"),
    "columns": (WATER.replace("H 0 0.76 -0.47", "H 0 0.76"), "line 4: 'H 0 0.76' has 3 columns"),
    "one-spot": (WATER.replace("-0.76", "0.76"), r"lines 4 and 5: atoms 2 \(H\) and 3 \(H\) lie on one spot"),
    "nearly-one-spot": (WATER.replace("-0.76", "0.71"), "lie on one spot"),
    "binary": (b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR" + bytes(range(256)), "binary"),
    "utf-16": (WATER.encode("utf-16"), "UTF-16"), "utf-16-be": (b"\xfe\xff" + WATER.encode("utf-16-be"), "UTF-16"),
    "utf-16-bare": (WATER.encode("utf-16-le"), "UTF-16"),
    "prose": ("Dear colleague,\nplease find the structure attached.\n", "line 1: 'Dear colleague,' begins no"),
    "no-count": ("O 0 0 0.12\nH 0 0.76 -0.47\n", "line 1: an atom where the number .* put '2'"),
    "properties": (WATER.replace("water, bent", "Properties=species:S:1:pos:R"), "line 2: Properties="),
    "properties-pos": (WATER.replace("water, bent", "Properties=species:S:1:pos:R:2"), "line 2: .*'pos' 2 columns"),
    "properties-number": (WATER.replace("water, bent", "Properties=species:S:1:pos:R:x"), "line 2: .*must be a number"),
    "properties-none": (WATER.replace("water, bent", "Properties=species:S:1"), "line 2: .* needs"),
    "properties-wide": (WATER.replace("water, bent", "Properties=species:S:1:pos:R:3:f:R:3"),
                        "line 3: .* 7 are needed"),
    "mass": (WATER.replace("water, bent", "Properties=species:S:1:pos:R:2:q:R:1").replace(":2:q:R", ":3:mass:R")
             .replace("0.12", "0.12 heavy").replace("-0.47", "-0.47 1"), "line 3: the mass 'heavy'"),
    "mass-sign": (WATER.replace("water, bent", "Properties=species:S:1:pos:R:3:mass:R:1")
                  .replace("0.12", "0.12 -16").replace("-0.47", "-0.47 1"), "mass -16"),
    "mass-of-another": (WATER.replace("water, bent", "Properties=species:S:1:pos:R:3:mass:R:1")
                        .replace("0.12", "0.12 160").replace("-0.47", "-0.47 1"), "mass 160"),
    "drawn": (DRAWN, "drawn flat"),
    "marked-2d": (BF3.replace("\n\na pl", "\n  by hand           2D\na pl"), "marked 2D"),
    "mol-atoms": ("\n".join(BF3.split("\n")[:6]), "line 6: the block ends too early"),
    "mol-bonds": ("\n".join(BF3.split("\n")[:9]), "line 9: the block ends too early"),
    "mol-no-bonds": (BF3.replace("  1  3  1  0\n", ""), "line 11: the block ends too early"),
    "mol-no-end": (BF3.replace("M  END\n", ""), "ends without 'M  END'"),
    "mol-few-atoms": (BF3.replace("   -0.6550    1.1345    0.0000 F   0  0\n", ""), "line 8: .* not an atom"),
    "mol-count": (BF3.replace("  4  3  0", "  0  0  0"), "line 4: 0 atoms"),
    "mol-many": (BF3.replace("  4  3  0", "999  3  0"), "line 9: .* not an atom"),
    "mol-negative": (BF3.replace("  4  3  0", " -4  3  0"), "begins no structure|counts line"),
    "mol-head": (BF3.split("\n", 3)[3].split("\n", 1)[1], "counts line"),
    "mol-unknown": (BF3.replace(" B ", " Q "), "line 5: 'Q' is not"),
    "mol-nan": (BF3.replace("1.3100", "   nan"), "line 6: .*nan"),
    "mol-bond-atom": (BF3.replace("  1  4  1", "  1  9  1"), "line 11: the bond names atom 9"),
    "mol-bond-self": (BF3.replace("  1  4  1", "  4  4  1"), "line 11: atom 4 is bonded to itself"),
    "mol-iso": (BF3.replace("M  END", "M  ISO  1   9  10\nM  END"), "line 12: there is no atom 9"),
    "mol-iso-short": (BF3.replace("M  END", "M  ISO  2   1  10\nM  END"), "line 12: .*pairs"),
    "mol-iso-none": (BF3.replace("M  END", "M  ISO  1   1  99\nM  END"), "no isotope 99B"),
    "mol-spot": (BF3.replace("1.3100", "0.0000"), "lines 5 and 6: .* one spot"),
    "v3000-cut": (CHLOROMETHANE[:CHLOROMETHANE.index("M  V30 2 1")], "ends without 'M  END'"),
    "v3000-count": (CHLOROMETHANE.replace("COUNTS 5", "COUNTS 6"), "6 atoms are announced, 5 are found"),
    "v3000-no-counts": (CHLOROMETHANE.replace("M  V30 COUNTS 5 4 0 0 0\n", ""), "COUNTS"),
    "v3000-bond": (CHLOROMETHANE.replace("1 1 10 20", "1 1 10 21"), "line 16: the bond names atom 21"),
    "v3000-twice": (CHLOROMETHANE.replace("M  V30 20 ", "M  V30 10 "), "line 9: atom 10 occurs twice"),
    "v3000-mass": (CHLOROMETHANE.replace("MASS=13", "MASS=x"), "line 8: 'MASS=x'"),
}


@pytest.mark.parametrize("case", BAD)
def test_bad_input_is_one_clear_line(file, case):
    content, told = BAD[case]
    path = file(content)
    with pytest.raises(VibsymError, match=told) as error:
        read(path)
    message = str(error.value)
    assert message.startswith(path) and "\n" not in message and message.isprintable() and len(message) < len(path) + 200


def test_directory_missing_and_locked(tmp_path):
    for path, told in ((tmp_path, "directory"), (tmp_path / "none.xyz", "no such file"), ("a\0b", "not a file name"),
                       (tmp_path / ("n" * 300), "cannot be read")):
        with pytest.raises(VibsymError, match=told):
            read(path)


def test_a_file_without_permission(file, monkeypatch):
    path = file(WATER)

    def refuse(*args, **kwargs):
        raise PermissionError(13, "Permission denied")
    monkeypatch.setattr("builtins.open", refuse)        # chmod does not stop the superuser, under whom tests may run
    with pytest.raises(VibsymError, match="cannot be read \\(permission denied\\)"):
        read(path)


@pytest.mark.parametrize("line", [b"C 0.0 0.0 0.0\n", b"lorem ipsum dolor\n"], ids=["atoms", "prose"])
def test_a_hundred_megabytes_end_at_once(tmp_path, line):
    path = tmp_path / "large.xyz"
    with open(path, "wb") as file:
        for _ in range(100):
            file.write(line * (1_000_000 // len(line)))
    start = time.process_time()
    with pytest.raises(VibsymError, match="MB"):
        read(path)
    path.unlink()
    assert time.process_time() - start < 2      # refused by its size; no line is looked at


def test_no_half_file_is_left(tmp_path):
    path = tmp_path / "out.xyz"
    write_text_atomically(path, WATER)
    assert path.read_text() == WATER
    write_text_atomically(path, "new")
    assert path.read_text() == "new" and [each.name for each in tmp_path.iterdir()] == ["out.xyz"]
    for bad in (tmp_path, tmp_path / "none" / "out.xyz", ""):
        with pytest.raises(VibsymError):
            write_text_atomically(bad, "x")
    assert [each.name for each in tmp_path.iterdir()] == ["out.xyz"]


def test_written_structures_read_back(file):
    first = read(file("5\na made list\nCl 0 0 0\nD 0 0 -2.5\n13C 0 2 0.123456789\nXL 2 0 0\n10B 0 0 7\n"))
    again = read(file(write_xyz(first)))
    assert again.labels == first.labels and again.formula == first.formula and again.comment == "a made list"
    np.testing.assert_allclose(again.positions, first.positions, atol=1e-8)
    np.testing.assert_allclose(again.masses, first.masses)
    assert write_xyz(again) == write_xyz(first)
