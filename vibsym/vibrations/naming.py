"""Names of sets of internal coordinates as the trade writes them: `stretch C-O`, `bend H-C-H`, `wag BF3`, `torsion
C-C`.

The two ends of a bond stand as in formulas, the more electropositive element first (the element sequence of IUPAC,
Nomenclature of Inorganic Chemistry, Recommendations 2005, table VI), with two habits of the trade: hydrogen comes last
(C-H, O-H) except before a halogen (H-Cl), and the heavier halogens come before oxygen (Cl-O).  The centre of a bend
stands in the middle, a metal first, else the ends by the alphabet (Mo-C-O, C-O-H).  Isotopes are told apart (C-D).
"""

from collections import Counter
from functools import cache

from vibsym.structures.elements import atomic_number
from vibsym.structures.labels import is_dummy, read_label
from vibsym.structures.periodic import HALOGENS, formula_place, is_metal

KINDS = ("stretch", "linear bend", "bend", "wag", "torsion")


def bond_name(chain) -> str:
    """Return the labels of a bond, or of a straight chain of atoms, in the order of the trade.

    >>> bond_name(("O", "C")), bond_name(("H", "C")), bond_name(("F", "Xe")), bond_name(("Cl", "H"))
    ('C-O', 'C-H', 'Xe-F', 'H-Cl')
    """
    first, last = _number(chain[0]), _number(chain[-1])
    if 1 in (first, last):
        other = first if last == 1 else last
        turn = other != 1 and ((first == 1) != (other in HALOGENS))
    else:
        turn = formula_place(last) < formula_place(first)
    if first == last:
        turn = tuple(reversed(chain)) < tuple(chain)
    return "-".join(reversed(chain) if turn else chain)


def bend_name(first: str, centre: str, last: str) -> str:
    """Return the labels of an angle, its centre in the middle.

    >>> bend_name("O", "C", "Mo"), bend_name("H", "O", "C")
    ('Mo-C-O', 'C-O-H')
    """
    ends = sorted((first, last), key=lambda label: (not is_metal(_number(label)), label))
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


def same_set(name: str, wanted: str) -> bool:
    """Tell whether `wanted`, as typed, names the set: in full, by its kind, or a stretch by its elements, read
    either way.

    >>> same_set("stretch C-O", "O-C"), same_set("bend H-C-H", "bend"), same_set("bend H-C-H", "C-H")
    (True, True, False)
    """
    words = wanted.replace("–", "-").split()
    if " ".join(words).lower() in KINDS:
        return name.startswith(" ".join(words).lower() + " ")
    kind, elements = (" ".join(words[:-1]).lower() or "stretch", words[-1]) if words else ("", "")
    own_kind, own = name.rsplit(" ", 1)
    return kind == own_kind and elements.lower() in (own.lower(), "-".join(reversed(own.split("-"))).lower())


@cache
def _number(label: str) -> int:
    """Return the atomic number of a label as a structure writes it (`D`, `13C`); 0 for a dummy atom."""
    name = read_label(label)[0]
    return 0 if is_dummy(name) else atomic_number(name)
