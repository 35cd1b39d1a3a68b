"""The terms of the valence force field: which constants a molecule needs, and with what geometric factor.

    2 V = Σ d_q S_q²  +  Σ k_AB (δ r_AB)²  +  2 Σ_{q<p} w_qp s_qp (d_q d_p)^(1/2) S_q S_p

- Diagonal constants d_q: stretches d = k [(r0 - d_ij)/(r - d_ij)]³, with k at the tabulated length r0 and d_ij of
  Badger's rule; bends and linear bends d = H r1 r2; wags d; torsions d = t/n for the sum over n dihedral angles.
- 1,3-repulsion between the ends A, B of every bend (T. Simanouti, J. Chem. Phys. 17, 245 (1949); second derivative
  only): δr_AB = (r1 - r2 cos a)/r_AB δr1 + (r2 - r1 cos a)/r_AB δr2 + r1 r2 sin a/r_AB δa, k_AB falls as exp(-6
  r_AB/(R_A + R_B)).
- Interactions, as shares s of the geometric mean of two diagonal constants: two bonds at one centre, two bends at one
  centre or at the two ends of a bond (w = cosine of the dihedral angle), adjacent linear bends, wags and torsions.

Every constant is a product of factors named in `tables/force_field.csv`: a general one (kind), one for the centre, one
for each end, and one for the case itself, so that a molecule with unusual elements still gets a sensible field.
"""

from itertools import combinations
from typing import NamedTuple

import numpy as np

from vibsym.vibrations.surroundings import Surroundings, contact, period

STRAIGHT = -0.996  # cosine below which two bonds at a centre are trans
HYDROGEN = ("H", "Hb")  # ends of bends: terminal, bridging
SMALL_ANGLE = 0.259  # cosine of 75 degrees: angles inside three-membered rings


class Diagonal(NamedTuple):
    """A diagonal constant: product of factor^power times a geometric factor."""

    factors: tuple[tuple[str, float], ...]
    geometry: float


class Repulsion(NamedTuple):
    """A 1,3-repulsion: its constant, and the slopes of the distance along rows of S."""

    factors: tuple[tuple[str, float], ...]
    geometry: float
    rows: tuple[int, ...]
    slopes: tuple[float, ...]


class Interaction(NamedTuple):
    """A share of the geometric mean of two diagonal constants, times a weight."""

    share: str
    first: int
    second: int
    weight: float


class Terms(NamedTuple):
    """All terms of a molecule; diagonals in the order of the rows of B."""

    diagonals: tuple[Diagonal, ...]
    repulsions: tuple[Repulsion, ...]
    interactions: tuple[Interaction, ...]


def factors(*names: str) -> tuple[tuple[str, float], ...]:
    """Return names with their powers; a name that stands twice has the power 2."""
    found: dict[str, float] = {}
    for name in names:
        found[name] = found.get(name, 0.0) + 1.0
    return tuple(found.items())


def valence_terms(symbols, positions, sets, bonds) -> Terms:
    """Return the terms of a molecule; `bonds` is the `BondTable` of the tabulated stretches."""
    return _Builder(Surroundings(symbols, positions, sets), sets, bonds).build()


class _Builder:
    """Collects the terms; rows of S are numbered as the sets list them."""

    def __init__(self, around: Surroundings, sets, bonds):
        self.around, self.sets, self.bonds = around, sets, bonds
        self.diagonals: list[Diagonal] = []
        self.stretch_row: dict[frozenset, int] = {}
        self.class_of: dict[frozenset, str] = {}
        self.bend_row: dict[tuple[int, int, int], int] = {}
        self.wags: list[tuple[int, tuple]] = []
        self.torsions: list[tuple[int, tuple]] = []
        self.straight_bends: list[tuple[int, tuple, np.ndarray]] = []

    def build(self) -> Terms:
        for each in self.sets:
            make = getattr(self, "_" + each.kind.replace(" ", "_"))
            for number, atoms in enumerate(each.atoms.tolist()):
                make(each, number, atoms)
        repulsions, pairs = self._at_centres()
        pairs += self._bends_across_bonds() + self._out_of_plane() + self._straight_chains()
        return Terms(tuple(self.diagonals), tuple(repulsions), tuple(pairs))

    def _stretch(self, each, number, atoms):
        bond = frozenset(atoms)
        entry = self.bonds.entry(self.around, *atoms)
        self.stretch_row[bond], self.class_of[bond] = len(self.diagonals), entry.bond_class
        self.diagonals.append(Diagonal(factors(entry.name, *self._beside_hydrogen(*atoms)), entry.geometry))

    def _beside_hydrogen(self, i, j):
        """Return a factor for each heavy atom beside the hydrogen of a bond X-H: CH3F, CH2F2 and CHF3 differ."""
        symbols, beside = self.around.symbols, self.around.beside
        if (symbols[i] == "H") == (symbols[j] == "H"):
            return []
        hydrogen, other = (i, j) if symbols[i] == "H" else (j, i)
        bridge = "bridge " if len(beside[hydrogen]) > 1 else ""
        shape = self.around.shape(other)
        return [f"hydrogen {bridge}beside {symbols[atom]} {shape}" for atom in beside[other] if symbols[atom] != "H"]

    def _angle_factors(self, i, centre, k):
        around, shape = self.around, self.around.shape(centre)
        if around.cosine(i, centre, k) > SMALL_ANGLE:
            shape += "r3"
        elif centre in around.small_ring:
            shape += "x3"
        one, two = sorted((around.end(i), around.end(k)))
        element = around.symbols[centre]
        ends = {0: "XX", 1: "HX", 2: "HH"}[(one in HYDROGEN) + (two in HYDROGEN)]
        return factors(
            "bend",
            f"bend shape {shape}",
            f"bend centre {element}",
            f"bend centre {element}{around.shape(centre)}",
            f"bend end {one}",
            f"bend end {two}",
            f"bend ends {ends}",
            f"bend {one}-{element}-{two} {shape}",
        )

    def _bend(self, each, number, atoms):
        i, centre, k = atoms
        self.bend_row[tuple(atoms)] = len(self.diagonals)
        size = self.around.distance(i, centre) * self.around.distance(centre, k)
        self.diagonals.append(Diagonal(self._angle_factors(i, centre, k), size))

    def _linear_bend(self, each, number, atoms):
        i, centre, k = atoms
        one, two = sorted((self.around.symbols[i], self.around.symbols[k]))
        element = self.around.symbols[centre]
        names = factors(
            "linear bend",
            f"linear bend centre {element}",
            f"linear bend end {one}",
            f"linear bend end {two}",
            f"linear bend {one}-{element}-{two}",
        )
        size = self.around.distance(i, centre) * self.around.distance(centre, k)
        for direction in each.directions[number]:
            self.straight_bends.append((len(self.diagonals), tuple(atoms), direction))
            self.diagonals.append(Diagonal(names, size))

    def _wag(self, each, number, atoms):
        centre, *ends = atoms
        kind = "wag" if len(self.around.beside[centre]) == 3 else "square wag"
        if kind == "wag":
            self.wags.append((len(self.diagonals), tuple(atoms)))
        else:
            ends = ends[:2]
        element, names = self.around.symbols[centre], sorted(self.around.symbols[atom] for atom in ends)
        own = f"{kind} {element} {'-'.join(names)}"
        self.diagonals.append(
            Diagonal(factors(kind, f"{kind} centre {element}", *(f"{kind} end {name}" for name in names), own), 1.0)
        )

    def _torsion(self, each, number, atoms):
        around, (a, b) = self.around, (atoms[0], atoms[-1])
        bond = frozenset((a, b))
        order = self.bonds.order(around, a, b) if len(atoms) == 2 else "straight"
        shapes = sorted((around.shape(a), around.shape(b)))
        flat = shapes.count("3p")
        ends = [i for i in around.beside[a] if i != atoms[1]] + [i for i in around.beside[b] if i != atoms[-2]]
        heavy = sum(around.symbols[i] != "H" for i in ends) / len(ends)
        large = sum(period(around.symbols[i]) > 2 for i in ends) / len(ends)
        own = f"torsion {around.elements(a, b)} {order} {'-'.join(shapes)}"
        names = (*factors(f"torsion {order} {flat}", own), ("torsion heavy ends", heavy), ("torsion large ends", large))
        if len(atoms) == 2 and bond in self.stretch_row:
            self.torsions.append((len(self.diagonals), (a, b)))
        self.diagonals.append(Diagonal(names, 1.0 / int((each.owners == number).sum())))

    def _at_centres(self):
        repulsions, pairs = [], []
        around = self.around
        for centre, neighbours in enumerate(around.beside):
            for i, k in combinations(sorted(neighbours), 2):
                row = self.bend_row.get((i, centre, k))
                cosine = around.cosine(i, centre, k)
                if row is not None and k not in around.beside[i]:
                    repulsions.append(self._repulsion(i, centre, k, cosine, row))
                pairs += self._two_bonds(i, centre, k, cosine)
            pairs += self._two_bends(centre)
        return repulsions, pairs

    def _repulsion(self, i, centre, k, cosine, row) -> Repulsion:
        around = self.around
        r1, r2, apart = around.distance(i, centre), around.distance(centre, k), around.distance(i, k)
        one, two = sorted((around.symbols[i], around.symbols[k]))
        hydrogens = (one == "H") + (two == "H")
        near = np.exp(-6.0 * (apart / (contact(one) + contact(two)) - 0.8))
        rows = self.stretch_row[frozenset((i, centre))], self.stretch_row[frozenset((k, centre))], row
        slopes = (r1 - r2 * cosine) / apart, (r2 - r1 * cosine) / apart, r1 * r2 * np.sqrt(1 - cosine * cosine) / apart
        return Repulsion(
            factors(f"repulsion {hydrogens} H", f"repulsion {one}-{two}"), float(near), rows, tuple(map(float, slopes))
        )

    def _two_bonds(self, i, centre, k, cosine) -> list[Interaction]:
        bonds = [frozenset((i, centre)), frozenset((k, centre))]
        hydrogens = sum(self.around.symbols[atom] == "H" or self.around.symbols[centre] == "H" for atom in (i, k))
        number = len(self.around.beside[centre])
        if cosine < STRAIGHT:
            name = f"bonds {'straight' if number == 2 else 'trans'} {hydrogens} H"
        else:
            multiple = sum(self.class_of[bond] in ("1.5", "2", "3") for bond in bonds) if hydrogens == 0 else 0
            name = f"bonds {hydrogens} H {multiple} multiple {6 if number >= 5 else max(3, number)}"
        symbols = self.around.symbols
        ends = sorted(f"{symbols[atom]}({self.class_of[bond]})" for atom, bond in zip((i, k), bonds))
        opposite = " trans" if cosine < STRAIGHT else ""
        own = f"bonds at {symbols[centre]} {self.around.shape(centre)}{opposite} {' '.join(ends)}"
        return [Interaction(each, self.stretch_row[bonds[0]], self.stretch_row[bonds[1]], 1.0) for each in (name, own)]

    def _two_bends(self, centre) -> list[Interaction]:
        around, found = self.around, []
        shape = around.shape(centre)
        ends = [
            pair
            for pair in combinations(sorted(around.beside[centre]), 2)
            if (pair[0], centre, pair[1]) in self.bend_row
        ]
        light = [around.symbols[atom] == "H" for atom in range(len(around.symbols))]
        for one, two in combinations(ends, 2):
            common = set(one) & set(two)
            if common:
                (shared,) = common
                free = sum(light[atom] for atom in (*one, *two) if atom != shared)
                name = f"bends common {'H' if light[shared] else 'X'}, {free} H {shape}"
            else:
                name = f"bends opposite {sum(light[atom] for atom in (*one, *two))} H {shape}"
            rows = self.bend_row[one[0], centre, one[1]], self.bend_row[two[0], centre, two[1]]
            angles = sorted("-".join(sorted(around.symbols[atom] for atom in pair)) for pair in (one, two))
            kind = around.symbols[min(common)] if common else "opposite"
            own = f"bends at {around.symbols[centre]} {shape} {kind} {' '.join(angles)}"
            found += [Interaction(each, *rows, 1.0) for each in (name, own)]
        return found

    def _bends_across_bonds(self) -> list[Interaction]:
        around, found = self.around, []
        x = around.positions
        for bond in self.stretch_row:
            c, e = sorted(bond)
            axis = (x[e] - x[c]) / around.distance(c, e)
            flat = "p" if c in around.planar and e in around.planar else "s"
            for i in around.beside[c]:
                for k in around.beside[e]:
                    one = self.bend_row.get((min(i, e), c, max(i, e)))
                    two = self.bend_row.get((min(c, k), e, max(c, k)))
                    if one is None or two is None or i == k:
                        continue
                    u, v = x[i] - x[c], x[k] - x[e]
                    u, v = u - axis * (u @ axis), v - axis * (v @ axis)
                    dihedral = float(u @ v / np.sqrt((u @ u) * (v @ v)))
                    light = (around.symbols[i] == "H") + (around.symbols[k] == "H")
                    name = f"bends across a bond {light} H {flat}"
                    sides = sorted(
                        (
                            f"{around.symbols[i]}-{around.symbols[c]}{around.shape(c)}",
                            f"{around.symbols[k]}-{around.symbols[e]}{around.shape(e)}",
                        )
                    )
                    found += [
                        Interaction(each, one, two, dihedral) for each in (name, f"bends across {' '.join(sides)}")
                    ]
        return found

    def _out_of_plane(self) -> list[Interaction]:
        around, found = self.around, []
        x = around.positions

        def normal(atoms):
            n = np.cross(x[atoms[2]] - x[atoms[1]], x[atoms[3]] - x[atoms[1]])
            return n / np.linalg.norm(n)

        for (row, one), (other, two) in combinations(self.wags, 2):
            if two[0] in around.beside[one[0]]:
                order = self.bonds.order(around, one[0], two[0])
                found.append(Interaction(f"wags {order}", row, other, float(normal(one) @ normal(two))))
        for (row, one), (other, two) in combinations(self.torsions, 2):
            common = set(one) & set(two)
            if len(common) == 1:
                (middle,) = common
                if middle in around.planar or len(around.beside[middle]) == 2:
                    orders = sorted(self.bonds.order(around, *pair) for pair in (one, two))
                    kind = "2" if len(around.beside[middle]) == 2 else "3p"
                    found.append(Interaction(f"torsions {'-'.join(orders)} {kind}", row, other, 1.0))
        return found

    def _straight_chains(self) -> list[Interaction]:
        found = []
        for (row, one, along), (other, two, across) in combinations(self.straight_bends, 2):
            weight = float(along @ across)
            if two[1] in self.around.beside[one[1]] and abs(weight) > 1e-9:
                found.append(Interaction(f"linear bends {self.around.elements(one[1], two[1])}", row, other, weight))
        return found
