"""Names of sets of internal coordinates as the trade writes them: `stretch C-O`, `bend H-C-H`, `wag BF3`, `torsion C-C`.

The two ends of a bond stand as in formulas, the more electropositive element first (the element sequence of IUPAC,
Nomenclature of Inorganic Chemistry, Recommendations 2005, table VI), with two habits of the trade: hydrogen comes last
(C-H, O-H) except before a halogen (H-Cl), and the heavier halogens come before oxygen (Cl-O).  The centre of a bend
stands in the middle, a metal first, else the ends by the alphabet (Mo-C-O, C-O-H).  Isotopes are told apart (C-D).
"""

import re
from collections import Counter
from functools import cache

from vibsym.structures.elements import atomic_number
from vibsym.structures.labels import is_dummy

_NOBLE = (0, 2, 10, 18, 36, 54, 86, 118)
_METALS_OF_THE_P_BLOCK = (13, 31, 49, 50, 81, 82, 83, 84)
_HALOGENS = (9, 17, 35, 53, 85)


def bond_name(chain) -> str:
    """Return the labels of a bond, or of a straight chain of atoms, in the order of the trade.

    >>> bond_name(("O", "C")), bond_name(("H", "C")), bond_name(("F", "Xe")), bond_name(("Cl", "H"))
    ('C-O', 'C-H', 'Xe-F', 'H-Cl')
    """
    first, last = _number(chain[0]), _number(chain[-1])
    if 1 in (first, last):
        other = first if last == 1 else last
        turn = other != 1 and ((first == 1) != (other in _HALOGENS))
    else:
        turn = _place(last) < _place(first)
    if first == last:
        turn = tuple(reversed(chain)) < tuple(chain)
    return "-".join(reversed(chain) if turn else chain)


def bend_name(first: str, centre: str, last: str) -> str:
    """Return the labels of an angle, its centre in the middle.

    >>> bend_name("O", "C", "Mo"), bend_name("H", "O", "C")
    ('Mo-C-O', 'C-O-H')
    """
    ends = sorted((first, last), key=lambda label: (not is_metal(label), label))
    return f"{ends[0]}-{centre}-{ends[1]}"


def wag_name(centre: str, neighbours) -> str:
    """Return the formula of a planar centre and its neighbours, the centre first.

    >>> wag_name("B", "FFF"), wag_name("C", "HCH")
    ('BF3', 'CCH2')
    """
    counts = Counter(neighbours)
    parts = [(f"({label})" if label[0].isdigit() else label) + (str(count) if count > 1 else "")
             for label, count in sorted(counts.items())]
    return centre + "".join(parts)


def is_metal(label: str) -> bool:
    """Tell whether a label names a metal: groups 1 to 12 and the heavy elements of the p block."""
    number = _number(label)
    return number > 1 and (number in _METALS_OF_THE_P_BLOCK or 0 < _column(number) <= 12)


def same_set(name: str, wanted: str) -> bool:
    """Tell whether `wanted`, as typed, names the set: in full, by its kind, or a stretch by its elements, read either way.

    >>> same_set("stretch C-O", "O-C"), same_set("bend H-C-H", "bend"), same_set("bend H-C-H", "C-H")
    (True, True, False)
    """
    words = wanted.replace("–", "-").split()
    if " ".join(words).lower() in KINDS:
        return name.startswith(" ".join(words).lower() + " ")
    kind, elements = (" ".join(words[:-1]).lower() or "stretch", words[-1]) if words else ("", "")
    own_kind, own = name.rsplit(" ", 1)
    return kind == own_kind and elements.lower() in (own.lower(), "-".join(reversed(own.split("-"))).lower())


KINDS = ("stretch", "linear bend", "bend", "wag", "torsion")


@cache
def _number(label: str) -> int:
    if is_dummy(label):
        return 0
    symbol = re.sub(r"^\d+", "", label)
    return 1 if symbol in ("D", "T") else atomic_number(symbol)


def _column(number: int) -> int:
    """Return the group of the periodic table, lanthanoids and actinoids in 3; 0 for a dummy atom."""
    if number == 0:
        return 0
    period = next(k for k in range(1, len(_NOBLE)) if number <= _NOBLE[k])
    from_end = 18 - (_NOBLE[period] - number)
    from_start = number - _NOBLE[period - 1]
    return from_start if from_start <= 2 and number != 2 else max(from_end, 3)


def _place(number: int) -> tuple[int, int]:
    """Return the place in the sequence of elements, electropositive first."""
    return (17, -13) if number == 8 else (_column(number) % 18, -number)
