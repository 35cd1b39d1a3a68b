"""Exact characters as text: equal to the characters in floating point for every group, and written as handbooks do."""

import re
from math import cos, pi, sqrt

import pytest
import sympy

from vibsym import character_table

GROUPS = (["C1", "Ci", "Cs", "T", "Td", "Th", "O", "Oh", "I", "Ih", "S4", "S8", "S12", "S14", "S18"]
          + ["C7h", "D9", "D13h", "C16"]          + [f"C{n}v" for n in range(2, 21)] + [f"D{n}d" for n in range(2, 11)])


def value(text):
    """Evaluate whole numbers, square roots and 2cos(kπ/n)."""
    assert re.fullmatch(r"-?\d+|-?2?cos\(\d*π/\d+\)|-?\(?-?\d*(?:[+-]?\d*√\d+)?\)?(/\d+)?", text), text
    code = re.sub(r"(\d*)√(\d+)", lambda m: f"{m[1] or 1}*sqrt({m[2]})", text)
    code = re.sub(r"2cos\((\d*)π/(\d+)\)", lambda m: f"2*cos({m[1] or 1}*pi/{m[2]})", code)
    return eval(code, {"cos": cos, "pi": pi, "sqrt": sqrt, "__builtins__": {}})


@pytest.mark.parametrize("symbol", GROUPS)
def test_exact_text_is_the_number(symbol):
    table = character_table(symbol)
    for species in table.group.species:
        for text, number in zip(table.exact[species.label], species.characters, strict=True):
            assert value(text) == pytest.approx(number, abs=1e-11), (species.label, text)


@pytest.mark.parametrize("symbol, label, texts", [
    ("C5v", "E1", ("2", "(-1+√5)/2", "-(1+√5)/2", "0")),
    ("C7v", "E2", ("2", "2cos(4π/7)", "2cos(6π/7)", "2cos(2π/7)", "0")),
    ("D4d", "E1", ("2", "√2", "0", "-√2", "-2", "0", "0")),
    ("C12v", "E1", ("2", "√3", "1", "0", "-1", "-√3", "-2", "0", "0")),
    ("I", "T1", ("3", "(1+√5)/2", "(1-√5)/2", "0", "-1")),
], ids=lambda value: value if isinstance(value, str) else "")
def test_exact_characters_as_in_handbooks(symbol, label, texts):
    """F. A. Cotton, Chemical Applications of Group Theory, appendix (from memory: 2cos 72° = (√5 - 1)/2 and so on)."""
    assert character_table(symbol).exact[label] == texts


def test_infinite_groups_depend_on_the_angle():
    answer = character_table("Dinfh").to_dict()
    assert [each["size"] for each in answer["classes"]] == [1, None, None, 1, None, None]
    (pi_u,) = (row for row in answer["species"] if row["label"] == "Πu")
    assert pi_u["exact"] == ["2", "2*cos(phi)", "0", "-2", "2*cos(phi)", "0"]
    assert pi_u["characters"] == [2, None, 0, -2, None, 0]


@pytest.mark.parametrize("symbol", ["D7h", "D4d", "Ih", "C5v", "S14", "D9d"])
def test_exact_characters_of_the_json_parse_and_equal_the_floats(symbol):
    for row in character_table(symbol).to_dict()["species"]:
        for text, number in zip(row["exact"], row["characters"], strict=True):
            assert float(sympy.sympify(text)) == pytest.approx(number, abs=1e-11)


def test_improper_rotations_carry_the_entries_of_the_proper_ones_with_a_sign():
    exact = character_table("D7h").exact
    assert exact["E1''"][1:4] == ("2cos(2π/7)", "2cos(4π/7)", "2cos(6π/7)")
    assert exact["E1''"][6:9] == ("-2cos(2π/7)", "-2cos(4π/7)", "-2cos(6π/7)")
