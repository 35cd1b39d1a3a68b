"""Elements and isotopes: values against the sources, means re-derived from isotopes, labels read and written."""

import ase.data
import pytest

from vibsym.errors import VibsymError
from vibsym.structures.elements import (
    atomic_number,
    average_mass,
    covalent_radius,
    element,
    elements,
    isotopes,
    mass,
    symbol,
)
from vibsym.structures.labels import is_dummy, read_label, write_label

NATURAL = [name for name, each in elements().items() if each.abundance > 0]
# IUPAC gives lead as an interval (206.14 to 207.94) because its composition differs from ore to ore; the abridged
# weight 207.2 and the representative composition need not agree to more than 0.05.  The rest agree
# to some units of the last figure of the abridged weights.
ALLOWED = {"Pb": 0.05}


def test_symbols_are_those_of_the_periodic_table():
    assert list(elements()) == ase.data.chemical_symbols[1:119]
    assert all(symbol(atomic_number(name)) == name for name in elements())


@pytest.mark.parametrize("name", list(elements())[:96])
def test_radius_is_that_of_cordero_2008_as_ase_has_it(name):
    assert covalent_radius(name) == pytest.approx(ase.data.covalent_radii[atomic_number(name)], abs=1e-9)


def test_every_element_has_a_sensible_radius_and_mass():
    for name in elements():
        assert 0.2 < covalent_radius(name) < 2.7
        assert abs(mass(name) - element(name).isotope) < 0.25
        assert abs(average_mass(name) - mass(name)) < 3.5


# T. Prohaska et al., Pure Appl. Chem. 94, 573 (2022), abridged or full standard atomic weights (typed from memory)
WEIGHTS = {"H": 1.008, "Li": 6.94, "B": 10.81, "C": 12.011, "N": 14.007, "O": 15.999, "F": 18.998403162, "Si": 28.085,
           "P": 30.973761998, "S": 32.06, "Cl": 35.45, "Ar": 39.95, "Fe": 55.845, "Br": 79.904, "Mo": 95.95,
           "I": 126.90447, "W": 183.84, "Pt": 195.084, "Au": 196.966570, "Pb": 207.2, "U": 238.02891}


@pytest.mark.parametrize("name", WEIGHTS)
def test_standard_atomic_weight(name):
    assert average_mass(name) == pytest.approx(WEIGHTS[name], abs=1e-5)


# AME2020, M. Wang et al., Chin. Phys. C 45, 030003 (2021), in u (typed from memory)
MASSES = {("H", 1): 1.00782503190, ("H", 2): 2.01410177784, ("H", 3): 3.01604928132, ("B", 10): 10.012936862,
          ("C", 13): 13.00335483534, ("N", 15): 15.00010889827, ("O", 16): 15.99491461926, ("O", 18): 17.99915961214,
          ("F", 19): 18.99840316207, ("Cl", 35): 34.968852694, ("Cl", 37): 36.965902573}


@pytest.mark.parametrize("name, number", MASSES)
def test_isotope_mass(name, number):
    assert mass(name, number) == pytest.approx(MASSES[name, number], abs=5e-9)


@pytest.mark.parametrize("name", NATURAL)
def test_mean_of_the_isotopes_is_the_standard_atomic_weight(name):
    natural = [isotope for isotope in isotopes(name).values() if isotope.abundance]
    assert sum(isotope.abundance for isotope in natural) == pytest.approx(1, abs=2e-4)
    mean = sum(isotope.mass * isotope.abundance for isotope in natural)
    assert mean == pytest.approx(average_mass(name), abs=ALLOWED.get(name, 6e-3))


@pytest.mark.parametrize("name", list(elements()))
def test_unlabelled_means_the_most_abundant_isotope(name):
    each, table = element(name), isotopes(name)
    assert table[each.isotope].mass == each.isotope_mass == mass(name) == mass(name, each.isotope)
    assert each.abundance == pytest.approx(max(isotope.abundance for isotope in table.values()), abs=1e-6)
    assert list(table) == sorted(table)
    assert all(abs(isotope.mass - number) < 0.3 for number, isotope in table.items())


@pytest.mark.parametrize("text, label", [
    ("C", ("C", None)), ("cl", ("Cl", None)), ("CL", ("Cl", None)), ("6", ("C", None)), ("D", ("H", 2)),
    ("d", ("H", 2)), ("T", ("H", 3)), ("2H", ("H", 2)), ("13C", ("C", 13)), ("13c", ("C", 13)),
    ("12C", ("C", None)),
    ("1H", ("H", None)), ("37Cl", ("Cl", 37)), ("35Cl", ("Cl", None)),
    ("X", ("X", None)), ("XL", ("XL", None)), ("XX", ("XX", None)),
    ("X1", ("X1", None)), ("Xe", ("Xe", None)), ("XE", ("Xe", None)), ("xe", ("Xe", None)), ("118", ("Og", None)),
])
def test_label_is_read(text, label):
    assert read_label(text) == label
    assert read_label(write_label(*label)) == label


@pytest.mark.parametrize("text, told", [
    ("Q", "not an element"), ("Xx", "'Xx' is not an element symbol"), ("Xyz", "not an element"), ("", "not an element"),
    ("C13", "write 13C or C"), ("99C", "no isotope 99C"),
    ("0", "atomic number 0"), ("119", "atomic number 119"), ("Cc", "not an element"), ("É", "not an element"),
    ("²H", "not an element"), ("2D", "not an element"), ("C\n", "not an element"), ("9" * 5000, "atomic number"),
])
def test_label_is_refused_in_one_line(text, told):
    with pytest.raises(VibsymError, match=told) as error:
        read_label(text)
    assert "\n" not in str(error.value) and len(str(error.value)) < 250


def test_xenon_is_no_dummy():
    assert is_dummy("XL") and is_dummy("x") and not is_dummy("Xe") and not is_dummy("C")


def test_lookups_of_nonsense_are_refused():
    for call in (lambda: element("Zz"), lambda: symbol(0), lambda: symbol(-1), lambda: mass("C", 99),
                 lambda: isotopes("X")):
        with pytest.raises(VibsymError):
            call()
