"""Where an element stands in the periodic table: its group, whether it is a metal, which of two comes first in a
formula."""

NOBLE_GASES = (0, 2, 10, 18, 36, 54, 86, 118)
METALS_OF_THE_P_BLOCK = (13, 31, 49, 50, 81, 82, 83, 84)
HALOGENS = (9, 17, 35, 53, 85)


def column(number: int) -> int:
    """Return the group, 1 to 18, of an atomic number, lanthanoids and actinoids in 3; 0 for a dummy atom.

    >>> [column(number) for number in (1, 2, 5, 26, 57, 64, 72, 17)]
    [1, 18, 13, 8, 3, 3, 4, 17]
    """
    if number == 0:
        return 0
    period = next(k for k in range(1, len(NOBLE_GASES)) if number <= NOBLE_GASES[k])
    from_start = number - NOBLE_GASES[period - 1]
    from_end = 18 - (NOBLE_GASES[period] - number)
    return from_start if from_start <= 2 and number != 2 else max(from_end, 3)


def is_metal(number: int) -> bool:
    """Tell whether an atomic number is a metal's: groups 1 to 12 without hydrogen, and the heavy elements of the p
    block."""
    return number > 1 and (number in METALS_OF_THE_P_BLOCK or column(number) <= 12)


def formula_place(number: int) -> tuple[int, int]:
    """Return the place in formulas, electropositive elements first.

    The element sequence of IUPAC (Nomenclature of Inorganic Chemistry, Recommendations 2005, table VI): the groups
    18, 1, 2, ... 17, each from the heaviest down; but chlorine, bromine and iodine before oxygen, as the trade
    writes Cl-O.
    """
    return (17, -13) if number == 8 else (column(number) % 18, -number)
