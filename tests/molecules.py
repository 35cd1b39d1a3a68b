"""Molecules built from ideal geometry for the tests: exact symmetry, ordinary bond lengths, any orientation.

Only shape and atom count matter to the counts that are compared with print; lengths are ordinary values in Å, from
memory, and carry no claim.
"""

from itertools import product

import numpy as np

PHI = (1 + 5**0.5) / 2
TETRAHEDRON = np.array([(1, 1, 1), (1, -1, -1), (-1, 1, -1), (-1, -1, 1)]) / 3**0.5
OCTAHEDRON = np.vstack([np.eye(3), -np.eye(3)])
CUBE = np.array(list(product((1, -1), repeat=3))) / 3**0.5
Z = np.array((0.0, 0.0, 1.0))


def atoms(*parts):
    """Return (symbols, positions) from (symbol, positions) parts."""
    symbols, positions = [], []
    for symbol, places in parts:
        places = np.atleast_2d(np.asarray(places, dtype=float))
        symbols += [symbol] * len(places)
        positions.append(places)
    return symbols, np.vstack(positions)


def ring(n, radius, height=0.0, phase=0.0):
    """Return n points on a circle about z; the phase is in units of the step between them."""
    angles = 2 * np.pi * (np.arange(n) + phase) / n
    return np.column_stack([radius * np.cos(angles), radius * np.sin(angles), np.full(n, height)])


def on_axis(*heights):
    """Return points on z."""
    return np.outer(heights, Z)


def mirrored(points):
    """Return the points with their images in the xy plane."""
    points = np.asarray(points, dtype=float)
    return np.vstack([points, points * (1, 1, -1)])


def rotoreflected(points, n):
    """Return the points with their images under S2n about z (turn by π/n, then reflect)."""
    cosine, sine = np.cos(np.pi / n), np.sin(np.pi / n)
    return np.vstack([points, np.asarray(points) @ np.array([[cosine, sine, 0], [-sine, cosine, 0], [0, 0, -1]])])


def in_plane(*points, plane="yz"):
    """Return planar points (across, along z) in a plane that holds z."""
    across, along = np.asarray(points, dtype=float).T
    zero = np.zeros_like(across)
    return np.column_stack([zero, across, along] if plane == "yz" else [across, zero, along])


def both_sides(*points, plane="yz"):
    """Return planar points with their images on the other side of z."""
    points = np.asarray(points, dtype=float)
    return in_plane(*np.vstack([points, points * (-1, 1)]), plane=plane)


def twofold(points):
    """Return the points with their images under C2 about z."""
    points = np.asarray(points, dtype=float)
    return np.vstack([points, points * (-1, -1, 1)])


def inverted(points):
    """Return the points with their images through the origin."""
    points = np.asarray(points, dtype=float)
    return np.vstack([points, -points])


def ligands(centre, directions, *shells):
    """Return a centre with (symbol, distance) shells along each direction."""
    return atoms((centre, (0, 0, 0)), *((symbol, distance * np.asarray(directions)) for symbol, distance in shells))


def pyramid(centre, symbol, radius, height):
    return atoms((centre, (0, 0, 0)), (symbol, ring(3, radius, height)))


def bent(centre, symbol, across, along):
    return atoms((centre, (0, 0, 0)), (symbol, both_sides((across, along))))


def ethane_like(symbol, half, radius, height, staggered=True):
    caps = ring(3, radius, height)
    return atoms((symbol, on_axis(half, -half)), ("H", rotoreflected(caps, 3) if staggered else mirrored(caps)))


def top_on_chain(top, *chain, radius=1.03, height=0.36):
    """Return an XH3 top whose axis carries a straight chain of (symbol, distance from X)."""
    return atoms((top, (0, 0, 0)), ("H", ring(3, radius, height)), *((symbol, -z * Z) for symbol, z in chain))


def sandwich(metal, n, radius, height, staggered):
    parts = [(metal, (0, 0, 0))]
    for symbol, r in (("C", radius), ("H", radius + 1.08)):
        half = ring(n, r, height)
        parts.append((symbol, rotoreflected(half, n) if staggered else mirrored(half)))
    return atoms(*parts)


def cyclohexane():
    # chair: ring atoms alternate in height, S6 about z
    carbon, equatorial, axial = (rotoreflected(ring(3, r, z), 3)
                                for r, z in ((1.47, 0.25), (2.48, -0.10), (1.50, 1.35)))
    return atoms(("C", carbon), ("H", equatorial), ("H", axial))


def four_fold_cage(apex, edge, terminal=None):
    """Return P4O6 or P4O10: P on the corners of a tetrahedron, O over its edges, perhaps O on the corners."""
    parts = [(apex, 1.8 * TETRAHEDRON), (edge, 2.05 * OCTAHEDRON)]
    return atoms(*parts, *([(terminal, 3.25 * TETRAHEDRON)] if terminal else []))


def hexamethylenetetramine():
    hydrogen = []
    for axis in range(3):
        for sign in (1, -1):
            across = np.zeros(3)
            across[(axis + 1) % 3], across[(axis + 2) % 3] = 1, -sign
            centre = np.zeros(3)
            centre[axis] = sign * 2.3
            hydrogen += [centre + 0.62 * across, centre - 0.62 * across]
    return atoms(("N", 1.5 * TETRAHEDRON), ("C", 1.68 * OCTAHEDRON), ("H", hydrogen))


def tetramethylsilane():
    hydrogen = []
    for corner in TETRAHEDRON:
        for axis in range(3):
            aside = corner.copy()
            aside[axis] *= -2
            hydrogen.append(1.87 * corner + 0.36 * corner + 1.03 * aside / np.linalg.norm(aside))
    return atoms(("Si", (0, 0, 0)), ("C", 1.87 * TETRAHEDRON), ("H", hydrogen))


def c60():
    """Return the truncated icosahedron with equal bonds of 1.44 Å."""
    points = []
    for base in ((0, 1, 3 * PHI), (1, 2 + PHI, 2 * PHI), (PHI, 2, 2 * PHI + 1)):
        for signs in product((1, -1), repeat=3):
            x, y, z = np.array(base) * signs
            points += [(x, y, z), (y, z, x), (z, x, y)]
    return atoms(("C", 0.72 * np.unique(np.round(points, 9), axis=0)))


def fivefold_up(points):
    """Turn points of an icosahedral body so that a fivefold axis is z and a mirror plane xz."""
    z = np.array((0, 1, PHI)) / np.hypot(1, PHI)
    y = np.array((1.0, 0, 0))
    return points @ np.array([np.cross(y, z), y, z]).T


def c70():
    """Return C70 (D5h): the caps of C60 as mirror images, ten atoms in the plane between them."""
    half = fivefold_up(c60()[1])
    cap = half[half[:, 2] > 0] + 1.2 * Z
    lowest = cap[cap[:, 2] < cap[:, 2].min() + 0.01]
    angles = np.sort(np.arctan2(lowest[:, 1], lowest[:, 0]))
    gaps = np.diff(np.append(angles, angles[0] + 2 * np.pi))
    middle = angles[gaps > np.median(gaps) - 1e-6][:5] + gaps[gaps > np.median(gaps) - 1e-6][:5] / 2
    belt = [(3.5 * np.cos(a + d), 3.5 * np.sin(a + d), 0) for a in middle for d in (0.2, -0.2)]
    return atoms(("C", mirrored(cap)), ("C", belt))


def pyrrole():
    pentagon = ring(5, 1.14)[:, [1, 2, 0]][:, [2, 0, 1]]
    return atoms(("N", pentagon[0]), ("C", pentagon[1:]), ("H", 1.95 * pentagon))


def planar_chain(half):
    """Return a planar molecule of C2h from one half: (symbol, x, y) and its image through the centre."""
    return atoms(*((symbol, inverted([(x, y, 0)])) for symbol, x, y in half))


def alternating_ring(first, second, hydrogens):
    parts = [(first, ring(3, 1.35)), (second, ring(3, 1.38, phase=0.5)), ("H", ring(3, 2.45))]
    return atoms(*parts, *([("H", ring(3, 2.5, phase=0.5))] if hydrogens == 6 else []))


CARBONYL_STEM = (("C", 1.9), ("O", 3.05))
TRIGONAL_BIPYRAMID = np.vstack([ring(3, 1), on_axis(1, -1)])
SQUARE = ring(4, 1)
OFF_PLANE = np.array((0.31, 0.78, 0.52))

# Named as in tests/reference/gamma_vib.csv (column `formula`).
MOLECULES = {
    "H2O": bent("O", "H", 0.76, 0.59),
    "O3": bent("O", "O", 1.08, 0.66),
    "NH3": pyramid("N", "H", 0.94, 0.38),
    "PCl3": pyramid("P", "Cl", 1.81, 0.94),
    "NF3": pyramid("N", "F", 1.24, 0.60),
    "SO3": ligands("S", ring(3, 1), ("O", 1.42)),
    "CH4": ligands("C", TETRAHEDRON, ("H", 1.09)),
    "CCl4": ligands("C", TETRAHEDRON, ("Cl", 1.77)),
    "SO4 2-": ligands("S", TETRAHEDRON, ("O", 1.49)),
    "OsO4": ligands("Os", TETRAHEDRON, ("O", 1.71)),
    "P4": atoms(("P", 1.35 * TETRAHEDRON)),
    "CH3Cl": top_on_chain("C", ("Cl", 1.78)),
    "CH3F": top_on_chain("C", ("F", 1.38)),
    "POCl3": atoms(("P", (0, 0, 0)), ("O", -1.45 * Z), ("Cl", ring(3, 1.85, 0.75))),
    "SO2Cl2": atoms(("S", (0, 0, 0)), ("O", both_sides((1.24, 0.7), plane="xz")), ("Cl", both_sides((1.55, -1.25)))),
    "CO2": atoms(("C", (0, 0, 0)), ("O", on_axis(1.16, -1.16))),
    "CS2": atoms(("C", (0, 0, 0)), ("S", on_axis(1.55, -1.55))),
    "HCN": atoms(("C", (0, 0, 0)), ("N", 1.15 * Z), ("H", -1.07 * Z)),
    "C2H2": atoms(("C", on_axis(0.6, -0.6)), ("H", on_axis(1.66, -1.66))),
    "C3O2": atoms(("C", on_axis(0, 1.28, -1.28)), ("O", on_axis(2.44, -2.44))),
    "H2CO": atoms(("C", (0, 0, 0)), ("O", 1.21 * Z), ("H", both_sides((0.94, -0.58)))),
    "C2H4": atoms(("C", on_axis(0.67, -0.67)), ("H", mirrored(both_sides((0.92, 1.24))))),
    "C2F4": atoms(("C", on_axis(0.66, -0.66)), ("F", mirrored(both_sides((1.10, 1.38))))),
    "Al2Cl6": atoms(("Al", on_axis(1.6, -1.6)), ("Cl", mirrored(both_sides((1.8, 2.7)))),
                    ("Cl", both_sides((1.6, 0), plane="xz"))),
    "C2H6": ethane_like("C", 0.77, 1.02, 1.16),
    "C2H6 eclipsed": ethane_like("C", 0.77, 1.02, 1.16, staggered=False),
    "Si2H6": ethane_like("Si", 1.17, 1.40, 1.68),
    "C3H4": atoms(("C", on_axis(0, 1.31, -1.31)), ("H", rotoreflected(in_plane((0.93, 1.86), (-0.93, 1.86)), 2))),
    "C6H12": cyclohexane(),
    "SF6": ligands("S", OCTAHEDRON, ("F", 1.56)),
    "UF6": ligands("U", OCTAHEDRON, ("F", 2.0)),
    "XeF4": ligands("Xe", SQUARE, ("F", 1.95)),
    "ClF3": atoms(("Cl", (0, 0, 0)), ("F", 1.6 * Z), ("F", both_sides((1.70, 0.08)))),
    "SF4": atoms(("S", (0, 0, 0)), ("F", both_sides((1.64, -0.1), plane="xz")), ("F", both_sides((1.2, 0.97)))),
    "S8": atoms(("S", rotoreflected(ring(4, 2.35, 0.5), 4))),
    "P4O6": four_fold_cage("P", "O"),
    "P4O10": four_fold_cage("P", "O", "O"),
    "C70": c70(),
    "C8H8": atoms(("C", 1.36 * CUBE), ("H", 2.45 * CUBE)),
    "C6H12N4": hexamethylenetetramine(),
    "Si(CH3)4": tetramethylsilane(),
    "Fe(C5H5)2 stag": sandwich("Fe", 5, 1.21, 1.66, staggered=True),
    "Cr(C6H6)2": sandwich("Cr", 6, 1.42, 1.61, staggered=False),
    "U(C8H8)2": sandwich("U", 8, 1.83, 1.92, staggered=False),
    "Fe(CO)5": ligands("Fe", TRIGONAL_BIPYRAMID, ("C", 1.82), ("O", 2.97)),
    "Cr(CO)6": ligands("Cr", OCTAHEDRON, *CARBONYL_STEM),
    "Ni(CN)4 2-": ligands("Ni", SQUARE, ("C", 1.87), ("N", 3.03)),
    "Mn2(CO)10": atoms(("Mn", on_axis(1.45, -1.45)), *((symbol, on_axis(1.45 + d, -1.45 - d)) for symbol, d in
                       (("C", 1.81), ("O", 2.96))), ("C", rotoreflected(ring(4, 1.85, 1.6), 4)),
                       ("O", rotoreflected(ring(4, 2.99, 1.7), 4))),
    "Re2Cl8 2-": atoms(("Re", on_axis(1.12, -1.12)), ("Cl", mirrored(ring(4, 2.2, 1.65)))),
    "C3H3N3": alternating_ring("C", "N", 3),
    "B3N3H6": alternating_ring("B", "N", 6),
    "N2H4": atoms(("N", twofold([(0.72, 0, 0)])), ("H", twofold([(1.02, 0.9, 0.33), (1.05, -0.35, 0.9)]))),
    "trans-N2F2": planar_chain([("N", 0.6, 0), ("F", 1.0, 1.33)]),
    "trans-C2H2Cl2": planar_chain([("C", 0.66, 0), ("Cl", 1.55, 1.45), ("H", 1.2, -0.94)]),
    "cis-C2H2Cl2": atoms(("C", both_sides((0.66, 0))), ("Cl", both_sides((1.65, 1.40))),
                         ("H", both_sides((1.2, -0.94)))),
    "C4H6": planar_chain([("C", 0.6, 0.42), ("C", 1.85, -0.1), ("H", 0.5, 1.5), ("H", 2.75, 0.5), ("H", 1.98, -1.18)]),
    "C4H5N": pyrrole(),
    "CH3CN": top_on_chain("C", ("C", 1.46), ("N", 2.62)),
    "CH3CCH": top_on_chain("C", ("C", 1.46), ("C", 2.66), ("H", 3.72)),
    "CH3OH": atoms(("C", (0, 0, 0)), ("H", ring(3, 1.03, 0.36)), ("O", -1.42 * Z), ("H", (-0.9, 0, -1.74))),
    "CH3NH2": atoms(("C", (0, 0, 0)), ("H", ring(3, 1.03, 0.36)), ("N", -1.47 * Z),
                      ("H", [(-0.5, 0.82, -1.8), (-0.5, -0.82, -1.8)])),
    "C4H6 (2-butyne)": atoms(("C", on_axis(0.6, -0.6, 2.06, -2.06)), ("H", mirrored(ring(3, 1.03, 2.42)))),
}


def turned(positions, seed):
    """Return positions in a random orientation about a random origin."""
    random = np.random.default_rng(seed)
    rotation, _ = np.linalg.qr(random.normal(size=(3, 3)))
    rotation *= np.sign(np.linalg.det(rotation))
    return positions @ rotation.T + random.normal(size=3)
