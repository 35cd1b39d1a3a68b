"""Elements and isotopes: symbols, atomic numbers, covalent radii and masses.

The numbers stand in `tables/elements.csv` and `tables/isotopes.csv` with their sources.  An unlabelled element has the
mass of its most abundant isotope; that mass stands in `elements.csv`, so that the long list of isotopes is read only
when an atom carries a label (`D`, `13C`).  How an atom may be written in a file is told in `labels.py`.
"""

from functools import cache
from typing import NamedTuple

from vibsym.errors import VibsymError
from vibsym.tables import table_text


class Element(NamedTuple):
    """A row of `tables/elements.csv`."""

    number: int
    symbol: str
    name: str
    covalent_radius: float       # Å
    atomic_weight: float | None  # u, standard atomic weight; None where IUPAC gives none
    isotope: int                 # mass number of the most abundant isotope
    isotope_mass: float          # u
    abundance: float             # of that isotope, as a fraction; 0 where the element does not occur in nature


class Isotope(NamedTuple):
    """A row of `tables/isotopes.csv`."""

    mass_number: int
    mass: float                  # u
    abundance: float             # fraction


def _rows(filename: str, fields: int):
    """Yield (line number, fields) of a table without quoted commas; much cheaper than a general CSV reader."""
    head_seen = False
    for number, line in enumerate(table_text(filename).splitlines(), 1):
        if not line or line[0] == "#":
            continue
        row = line.split(",")
        if len(row) != fields:
            raise VibsymError(f"tables/{filename}, line {number}: {len(row)} fields where {fields} are needed")
        if head_seen:
            yield number, row
        head_seen = True


@cache
def elements() -> dict[str, Element]:
    """Return all elements by symbol, in the order of their atomic numbers."""
    found = {}
    for line, (number, symbol, name, radius, weight, isotope, isotope_mass, abundance) in _rows("elements.csv", 8):
        try:
            found[symbol] = Element(int(number), symbol, name, float(radius), float(weight) if weight else None,
                                    int(isotope), float(isotope_mass), float(abundance))
        except ValueError as error:
            raise VibsymError(f"tables/elements.csv, line {line}: {error}") from None
    return found


@cache
def _isotope_table() -> dict[str, dict[int, Isotope]]:
    found: dict[str, dict[int, Isotope]] = {}
    for line, (mass_number, symbol, isotope_mass, abundance) in _rows("isotopes.csv", 4):
        try:
            isotope = Isotope(int(mass_number), float(isotope_mass), float(abundance))
        except ValueError as error:
            raise VibsymError(f"tables/isotopes.csv, line {line}: {error}") from None
        found.setdefault(symbol, {})[isotope.mass_number] = isotope
    return found


def element(symbol: str) -> Element:
    """Return the element with this symbol, written as usual ("Cl").

    >>> element("Cl").number, element("Cl").isotope
    (17, 35)
    """
    try:
        return elements()[symbol]
    except KeyError:
        raise VibsymError(f"'{symbol}' is not an element symbol") from None


def atomic_number(symbol: str) -> int:
    """Return the atomic number.

    >>> atomic_number("Fe")
    26
    """
    return element(symbol).number


@cache
def _symbols() -> tuple[str, ...]:
    return tuple(elements())


def symbol(number: int) -> str:
    """Return the symbol of the element with this atomic number.

    >>> symbol(26)
    'Fe'
    """
    if not 1 <= number <= len(_symbols()):
        raise VibsymError(f"there is no element with atomic number {number}; they run from 1 to {len(_symbols())}")
    return _symbols()[number - 1]


def covalent_radius(symbol: str) -> float:
    """Return the covalent radius in Å (Cordero et al. 2008; C as sp3, Mn, Fe, Co as low spin).

    >>> covalent_radius("C")
    0.76
    """
    return element(symbol).covalent_radius


def mass(symbol: str, mass_number: int | None = None) -> float:
    """Return the mass in u of an isotope, or of the most abundant one.

    >>> mass("C"), mass("H", 2)
    (12.0, 2.01410177784)
    """
    found = element(symbol)
    if mass_number is None or mass_number == found.isotope:
        return found.isotope_mass
    isotope = isotopes(symbol).get(mass_number)
    if isotope is None:
        known = ", ".join(str(number) for number in isotopes(symbol))
        raise VibsymError(f"no isotope {mass_number}{symbol} in tables/isotopes.csv; for {symbol} it has {known}")
    return isotope.mass


def average_mass(symbol: str) -> float:
    """Return the standard atomic weight in u (of the isotope used by default where IUPAC gives none).

    >>> average_mass("Cl")
    35.45
    """
    found = element(symbol)
    return found.isotope_mass if found.atomic_weight is None else found.atomic_weight


def isotopes(symbol: str) -> dict[int, Isotope]:
    """Return the known isotopes of an element by mass number, lightest first.

    >>> list(isotopes("H"))
    [1, 2, 3]
    """
    element(symbol)
    return _isotope_table()[symbol]
