"""What a force field asks of the surroundings of a bond or a centre: neighbours, planarity, bond class, periods.

Bond classes say how strong a bond of two elements is: for bonds to hydrogen how many neighbours the heavier atom has
(`H4`, `H3`, `H2`), with `Hald` for the C-H of an aldehyde or formyl group and `Hbr` for a bridging hydrogen; for
others the bond order (`1`, `1.5`, `2`, `3`), from the length: the class whose tabulated length comes nearest.
"""

from itertools import combinations

import numpy as np

from vibsym.structures.elements import atomic_number, covalent_radius

NOBLE = (2, 10, 18, 36, 54, 86)
LONGEST_SMALL_RING = 3
# van der Waals radii in Å: A. Bondi, J. Phys. Chem. 68, 441 (1964), from memory; elsewhere covalent radius + 0.9 (our
# own rule).
VAN_DER_WAALS = {
    "H": 1.2,
    "C": 1.7,
    "N": 1.55,
    "O": 1.52,
    "F": 1.47,
    "Si": 2.1,
    "P": 1.8,
    "S": 1.8,
    "Cl": 1.75,
    "Se": 1.9,
    "Br": 1.85,
    "I": 1.98,
}


def period(element: str) -> int:
    """Return the period of an element."""
    return 1 + sum(atomic_number(element) > last for last in NOBLE)


def contact(element: str) -> float:
    """Return the van der Waals radius in Å."""
    return VAN_DER_WAALS.get(element) or covalent_radius(element) + 0.9


class Surroundings:
    """Neighbours, distances and the kind of every centre, read off a set of internal coordinates."""

    def __init__(self, symbols, positions, sets):
        self.symbols, self.positions = symbols, np.asarray(positions)
        self.beside: list[list[int]] = [[] for _ in symbols]
        self.planar, self.straight = set(), set()
        for each in sets:
            if each.kind == "stretch":
                for i, j in each.atoms.tolist():
                    self.beside[i].append(j)
                    self.beside[j].append(i)
            elif each.kind == "wag":
                self.planar.update(each.atoms[:, 0].tolist())
            elif each.kind == "linear bend":
                self.straight.update(each.atoms[:, 1].tolist())
        self.small_ring = {
            centre
            for centre, around in enumerate(self.beside)
            for i, k in combinations(around, 2)
            if k in self.beside[i]
        }

    def distance(self, i: int, j: int) -> float:
        """Return the distance of two atoms, Å."""
        return float(np.linalg.norm(self.positions[i] - self.positions[j]))

    def cosine(self, i: int, centre: int, k: int) -> float:
        """Return the cosine of the angle i-centre-k."""
        u, v = self.positions[i] - self.positions[centre], self.positions[k] - self.positions[centre]
        return float(np.clip(u @ v / np.sqrt((u @ u) * (v @ v)), -1, 1))

    def shape(self, centre: int) -> str:
        """Return the number of neighbours, `3p` where three lie in one plane with the centre; from six on `6`."""
        number = len(self.beside[centre])
        if number == 3 and centre in self.planar:
            return "3p"
        return str(min(number, 6))

    def end(self, atom: int) -> str:
        """Return the element of an end of a bend: `l` a straight centre itself (M-C-O), `b` a bridging hydrogen."""
        if self.symbols[atom] == "H" and len(self.beside[atom]) > 1:
            return "Hb"
        return self.symbols[atom] + ("l" if atom in self.straight else "")

    def elements(self, i: int, j: int) -> str:
        """Return the elements of a bond by the alphabet."""
        return "-".join(sorted((self.symbols[i], self.symbols[j])))

    def hydrogen_class(self, i: int, j: int) -> str:
        """Return the class of a bond to hydrogen."""
        hydrogen, other = (i, j) if self.symbols[i] == "H" else (j, i)
        if len(self.beside[hydrogen]) > 1:
            return "Hbr"
        around = self.beside[other]
        if self.symbols[other] not in ("C", "N", "O"):
            return "H"
        carbonyl = any(self.symbols[atom] == "O" and len(self.beside[atom]) == 1 for atom in around)
        if self.symbols[other] == "C" and len(around) == 3 and carbonyl:
            return "Hald"
        return f"H{min(len(around), 4)}"

    def bond_class(self, i: int, j: int, known: dict[str, float]) -> str:
        """Return the class of a bond among the known ones of its elements (class: length); without any `1`."""
        if "H" in (self.symbols[i], self.symbols[j]):
            wanted = self.hydrogen_class(i, j)
            if wanted in known or not known or wanted == "Hbr":  # a bridge is no terminal bond of another length
                return wanted
        length = self.distance(i, j)
        return min(known, key=lambda name: abs(known[name] - length)) if known else "1"
