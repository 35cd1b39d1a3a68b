"""Refuse a molfile that is a drawing: marked 2D, or all z zero while atoms lack hydrogens.

A planar molecule with all of its hydrogens (BF3, benzene) has all z zero and is no drawing.  Only main-group elements
with a fixed lowest valence are asked; metals and H are not.
"""

from collections.abc import Sequence

from vibsym.errors import VibsymError
from vibsym.structures.connections import Connections
from vibsym.structures.labels import read_label

# lowest valence of the neutral atom; an ion has that of its isoelectronic neighbour (N+ as C, O- as F)
VALENCES = {"B": 3, "C": 4, "N": 3, "O": 2, "F": 1, "Si": 4, "P": 3, "S": 2, "Cl": 1, "Ge": 4, "As": 3, "Se": 2,
            "Br": 1, "I": 1}
AROMATIC = 4        # bond type; types above it (any, coordination) count as single


def refuse_drawing(table: Connections, marked_flat: bool, name: str) -> None:
    """Raise VibsymError if `table` is a drawing without depth."""
    if any(position[2] for position in table.positions):
        return
    remedy = "give three-dimensional coordinates with all hydrogens"
    if marked_flat:
        raise VibsymError(f"{name}: the molfile is marked 2D, it is drawn flat; {remedy}")
    lacking = unfilled(table)
    if lacking:
        atom = lacking[0]
        raise VibsymError(f"{name}: all z are zero and atom {atom + 1} ({table.labels[atom]}) lacks bonds: the "
                          f"molfile is drawn flat; {remedy}")


def unfilled(table) -> Sequence[int]:
    """Return the atoms, from 0, whose bond orders add up to less than their lowest valence."""
    orders = [0.0] * len(table.labels)
    for first, second, kind in table.bonds:
        order = 1.5 if kind == AROMATIC else kind if kind <= 3 else 1
        orders[first] += order
        orders[second] += order
    found = []
    for atom, label in enumerate(table.labels):
        valence = VALENCES.get(read_label(label)[0])
        if valence is None:
            continue
        charge = table.charges.get(atom, 0)
        # groups 15 to 17 gain a bond with a positive charge and lose one with a negative; C and Si lose one either way,
        # B gains one with a negative charge
        change = -charge if label == "B" else -abs(charge) if valence == 4 else charge
        radical = {1: 2, 2: 1, 3: 2}.get(table.radicals.get(atom, 0), 0)
        if orders[atom] < valence + change - radical:
            found.append(atom)
    return found
