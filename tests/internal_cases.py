"""Structures for the tests of internal coordinates: ordinary molecules, rarer groups, clusters, what computers leave
nearly straight."""

import numpy as np
from molecules import MOLECULES, OCTAHEDRON, PHI, TETRAHEDRON, atoms, ligands, mirrored, on_axis, ring, turned

from vibsym.groups.pointgroup import point_group
from vibsym.structures.finder import find_symmetry
from vibsym.structures.structure import Structure


def images(symbol, point):
    """Return the distinct images of a point under a group."""
    points = point_group(symbol).matrices @ np.asarray(point, dtype=float)
    return np.unique(np.round(points, 9), axis=0)


def propeller(symbol, centre, first, second):
    """Return a centre with the orbits of two bonded atoms, (element, place) each."""
    return atoms((centre, (0, 0, 0)), (first[0], images(symbol, first[1])), (second[0], images(symbol, second[1])))


ICOSAHEDRON = images("Ih", np.array((0, 1, PHI)) / np.hypot(1, PHI))
DODECAHEDRON = images("Ih", np.ones(3) / 3**0.5)
RARE = {
    "B(OH)3, C3h": propeller("C3h", "B", ("O", (1.36, 0, 0)), ("H", (1.70, 0.90, 0))),
    "P(OH)3, C3": propeller("C3", "P", ("O", (1.45, 0, -0.70)), ("H", (1.85, 0.85, -0.45))),
    "Si(OH)4, S4": propeller("S4", "Si", ("O", (1.33, 0.10, 0.93)), ("H", (1.65, 0.85, 1.45))),
    "Al(OH2)6, Th": atoms(("Al", (0, 0, 0)), ("O", 1.9 * OCTAHEDRON), ("H", images("Th", (2.48, 0.77, 0)))),
    "twisted neopentane, T": atoms(("C", (0, 0, 0)), ("C", 1.54 * TETRAHEDRON), ("H", images("T", (1.55, 1.42, 0.20)))),
    "twisted ferrocene, D5": atoms(("Fe", (0, 0, 0)), ("C", images("D5", (1.20, 0.15, 1.66))),
                                   ("H", images("D5", (2.27, 0.28, 1.66)))),
    "B12H12, Ih": atoms(("B", 1.70 * ICOSAHEDRON), ("H", 2.90 * ICOSAHEDRON)),
    "dodecahedrane, Ih": atoms(("C", 2.15 * DODECAHEDRON), ("H", 3.24 * DODECAHEDRON)),
    "IF7, D5h": atoms(("I", (0, 0, 0)), ("F", ring(5, 1.86)), ("F", on_axis(1.79, -1.79))),
    "XeF5-, D5h": atoms(("Xe", (0, 0, 0)), ("F", ring(5, 2.0))),
    "BrF5, C4v": atoms(("Br", (0, 0, 0)), ("F", ring(4, 1.77, -0.15)), ("F", on_axis(1.69))),
    "MoF8 antiprism, D4d": atoms(("Mo", (0, 0, 0)), ("F", ring(4, 1.6, 1.1)), ("F", ring(4, 1.6, -1.1, 0.5))),
    "WF6 prism, D3h": atoms(("W", (0, 0, 0)), ("F", mirrored(ring(3, 1.45, 1.15)))),
    "Mo6Cl14, Oh": atoms(("Mo", 1.85 * OCTAHEDRON), ("Cl", images("Oh", np.ones(3) * 1.75)), ("Cl", 4.3 * OCTAHEDRON)),
    "Os3(CO)6, D3h": atoms(("Os", ring(3, 1.65)), ("C", mirrored(ring(3, 1.70, 1.93))),
                                     ("O", mirrored(ring(3, 1.74, 3.07)))),
    "B2H6, D2h": atoms(("B", on_axis(0.88, -0.88)), ("H", [(0.98, 0, 0), (-0.98, 0, 0)]),
                       ("H", [(0, a * 1.04, b * 1.46) for a in (1, -1) for b in (1, -1)])),
    "C4H2 (butadiyne), D∞h": atoms(("C", on_axis(0.69, -0.69, 1.90, -1.90)), ("H", on_axis(2.96, -2.96))),
    "HgCl2, D∞h": atoms(("Hg", (0, 0, 0)), ("Cl", on_axis(2.25, -2.25))),
    "Pt(CN)4, D4h": ligands("Pt", ring(4, 1), ("C", 1.98), ("N", 3.13)),
    "H2O2, C2": atoms(("O", [(0.72, 0, 0), (-0.72, 0, 0)]), ("H", [(0.88, 0.82, 0.46), (-0.88, -0.82, 0.46)])),
    "cumulene C4H4, D2h": atoms(("C", on_axis(0.64, -0.64, 1.95, -1.95)),
                                ("H", [(0, a * 0.93, b * 2.5) for a in (1, -1) for b in (1, -1)])),
}
SHAPES = {**MOLECULES, **RARE}


def structure(name, seed=5):
    """Return a molecule of the collection, turned."""
    symbols, positions = SHAPES[name]
    return Structure.from_atoms(symbols, turned(np.asarray(positions, dtype=float), seed), source=name)


def symmetry(name, seed=5):
    """Return a molecule of the collection with its group."""
    return find_symmetry(structure(name, seed))
