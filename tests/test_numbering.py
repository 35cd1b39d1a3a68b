"""Herzberg's numbering: order of the species, and the modes of published molecules."""

import itertools
from pathlib import Path

import pytest

from vibsym.structures.finder import find_symmetry
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.vibrations.estimates import estimate
from vibsym.vibrations.numbering import herzberg_key

REFERENCE = Path(__file__).parent / "reference"

ORDERS = {  # G. Herzberg, Infrared and Raman Spectra (1945), tables 12 to 36 and p. 272; conventions of this project
    "Dinfh": ["Σg+", "Σu+", "Πg", "Πu"],
    "C2h": ["Ag", "Au", "Bg", "Bu"],
    "D2h": ["Ag", "Au", "B1g", "B1u", "B2g", "B2u", "B3g", "B3u"],
    "D3h": ["A1'", "A1''", "A2'", "A2''", "E'", "E''"],
    "D6h": ["A1g", "A1u", "A2g", "A2u", "B1g", "B1u", "B2g", "B2u", "E1g", "E1u", "E2g", "E2u"],
    "Oh": ["A1g", "A1u", "A2g", "A2u", "Eg", "Eu", "T1g", "T1u", "T2g", "T2u"],
    "Ih": ["Ag", "Au", "T1g", "T1u", "T2g", "T2u", "Gg", "Gu", "Hg", "Hu"],
}


@pytest.mark.parametrize("group", ORDERS)
def test_order_of_species(group):
    assert sorted(sorted(ORDERS[group]), key=herzberg_key) == ORDERS[group]


# name: {mode: species} as in Herzberg (1945) and NSRDS-NBS 39
NUMBERS = {
    "shimanouchi/acetylene": {"ν1": "Σg+", "ν2": "Σg+", "ν3": "Σu+", "ν4": "Πg", "ν5": "Πu"},
    "shimanouchi/carbon-dioxide-12c": {"ν1": "Σg+", "ν2": "Πu", "ν3": "Σu+"},
    "shimanouchi/hydrogen-cyanide": {"ν1": "Σ+", "ν2": "Π", "ν3": "Σ+"},
    "shimanouchi/tungsten-hexafluoride": {"ν1": "A1g", "ν2": "Eg", "ν3": "T1u", "ν4": "T1u", "ν5": "T2g", "ν6": "T2u"},
    "shimanouchi/methane": {"ν1": "A1", "ν2": "E", "ν3": "T2", "ν4": "T2"},
    "shimanouchi/ethane": {"ν1": "A1g", "ν3": "A1g", "ν4": "A1u", "ν5": "A2u", "ν7": "Eg", "ν10": "Eu", "ν12": "Eu"},
    "shimanouchi/formaldehyde": {"ν1": "A1", "ν3": "A1", "ν4": "B1", "ν5": "B2", "ν6": "B2"},
    "shimanouchi/benzene": {
        "ν1": "A1g",
        "ν3": "A2g",
        "ν4": "A2u",
        "ν5": "B1u",
        "ν7": "B2g",
        "ν9": "B2u",
        "ν11": "E1g",
        "ν12": "E1u",
        "ν15": "E2g",
        "ν19": "E2u",
        "ν20": "E2u",
    },
    "fundamentals/BF3": {"ν1": "A1'", "ν2": "A2''", "ν3": "E'", "ν4": "E'"},
    "fundamentals/SF6": {"ν1": "A1g", "ν2": "Eg", "ν3": "T1u", "ν4": "T1u", "ν5": "T2g", "ν6": "T2u"},
}


@pytest.mark.parametrize("name", NUMBERS)
def test_numbers_of_published_molecules(name):
    modes = estimate(find_symmetry(read(str(REFERENCE / f"{name}.xyz")))).modes
    species = {mode.name: mode.species for mode in modes}
    assert {number: species[number] for number in NUMBERS[name]} == NUMBERS[name]
    assert [mode.name for mode in modes] == [f"ν{k}" for k in range(1, len(modes) + 1)]


def test_within_a_species_by_falling_wavenumber():
    modes = estimate(find_symmetry(read(str(REFERENCE / "shimanouchi" / "propane.xyz")))).modes
    for one, two in itertools.pairwise(modes):
        assert one.species != two.species or one.wavenumber >= two.wavenumber


def test_bend_of_a_linear_triatomic_is_second():
    ocs = Structure.from_atoms(["O", "C", "S"], [[0, 0, 0], [0, 0, 1.16], [0, 0, 2.72]])
    assert [mode.species for mode in estimate(find_symmetry(ocs)).modes] == ["Σ+", "Π", "Σ+"]
