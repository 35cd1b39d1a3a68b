"""B against finite differences of the coordinates themselves, written here a second time, and its invariance."""

import internal_cases as cases
import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.structures.structure import Structure
from vibsym.vibrations.bmatrix import b_matrix, g_matrix, rigid_motions
from vibsym.vibrations.internal import internal_coordinates, without_symmetry

STEP = 1e-4


def unit(vector):
    return vector / np.linalg.norm(vector)


def dihedral(x, i, a, b, k):
    """Return the dihedral angle i-a-b-k by the usual arctangent (IUPAC sign)."""
    one, axis, two = x[a] - x[i], x[b] - x[a], x[k] - x[b]
    return np.arctan2(np.linalg.norm(axis) * one @ np.cross(axis, two), np.cross(one, axis) @ np.cross(axis, two))


def values(each, x):
    """Return the coordinates of a set at positions x, straight from their definitions."""
    if each.kind == "stretch":
        return [np.linalg.norm(x[j] - x[i]) for i, j in each.atoms]
    if each.kind == "bend":
        return [np.arccos(unit(x[i] - x[j]) @ unit(x[k] - x[j])) for i, j, k in each.atoms]
    if each.kind == "linear bend":
        return [p @ (unit(x[i] - x[j]) + unit(x[k] - x[j]))
                for (i, j, k), pair in zip(each.atoms, each.directions) for p in pair]
    result = np.zeros(len(each))
    for (i, a, b, k), weight, owner in zip(each.parts, each.weights, each.owners):
        if each.kind == "torsion":
            result[owner] += dihedral(x, i, a, b, k)
        else:
            result[owner] += weight * np.linalg.det([unit(x[end] - x[i]) for end in (a, b, k)])
    return result


def differences(each, x):
    """Return dS/dx by central differences of fourth order; angles modulo a full turn."""
    columns = []
    for k in range(x.size):
        step = np.zeros(x.size)
        step[k] = STEP
        step = step.reshape(x.shape)

        def change(n, step=step):
            new, old = np.array(values(each, x + n * step)), np.array(values(each, x - n * step))
            return (new - old + np.pi) % (2 * np.pi) - np.pi if each.kind == "torsion" else new - old

        columns.append((8 * change(1) - change(2)) / (12 * STEP))
    return np.array(columns).T


@pytest.mark.parametrize("name", ["H2O2, C2", "C3H4", "XeF4", "XeF5-, D5h", "C2H4", "C3O2", "CH3CCH", "Pt(CN)4, D4h",
                                  "ClF3", "B(OH)3, C3h", "C4H6 (2-butyne)"])
def test_analytic_derivatives_are_those_of_the_coordinates(name):
    symmetry = cases.symmetry(name)
    for each in internal_coordinates(symmetry):
        found, expected = b_matrix(symmetry.positions, [each]), differences(each, symmetry.positions)
        assert np.abs(found - expected).max() < 1e-8, each.name


def test_all_kinds_were_compared():
    names = ("H2O2, C2", "C3H4", "XeF4", "XeF5-, D5h", "Pt(CN)4, D4h")
    kinds = {each.kind for name in names for each in internal_coordinates(cases.symmetry(name))}
    assert kinds == {"stretch", "linear bend", "bend", "wag", "torsion"}


@pytest.mark.parametrize("seed", range(4))
def test_distorted_molecules_without_symmetry(seed):
    """The formulas hold away from the symmetric geometry too (bends, wags and torsions at general angles)."""
    random = np.random.default_rng(seed)
    structure = cases.structure("C2H4")
    structure = structure.moved(structure.positions + random.normal(scale=0.05, size=structure.positions.shape))
    symmetry = without_symmetry(structure)
    for each in internal_coordinates(symmetry):
        assert np.abs(b_matrix(symmetry.positions, [each]) - differences(each, symmetry.positions)).max() < 1e-8


@pytest.mark.parametrize("name", tuple(cases.SHAPES))
def test_translations_and_rotations_change_no_coordinate(name):
    symmetry = cases.symmetry(name)
    b = b_matrix(symmetry.positions, internal_coordinates(symmetry))
    assert np.abs(b @ rigid_motions(symmetry.positions)).max() < 1e-9


def test_bent_chains_notice_no_rotation():
    symbols, positions = ["H", "C", "N"], np.array([[0, 0, -1.07], [0, 0, 0], [0.10, 0, 1.15]])
    symmetry = without_symmetry(Structure.from_atoms(symbols, positions))
    b = b_matrix(symmetry.positions, internal_coordinates(symmetry))
    assert np.abs(b @ rigid_motions(symmetry.positions)).max() < 1e-12
    assert np.linalg.matrix_rank(b, tol=1e-6) == 3


def test_g_of_water():
    """G of a bent XY2: G_rr = 1/m_Y + 1/m_X, G_rr' = cos(a)/m_X, G_ra = -sin(a)/(m_X r), G_aa = 2/r² (1/m_Y + (1 -
    cos a)/m_X).

    E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), appendix VI.
    """
    half, r = np.radians(104.5) / 2, 0.9572
    positions = [[0, 0, 0], [r * np.sin(half), 0, r * np.cos(half)], [-r * np.sin(half), 0, r * np.cos(half)]]
    structure = Structure.from_atoms(["O", "H", "H"], positions)
    g = g_matrix(b_matrix(structure.positions, internal_coordinates(structure)), structure.masses)
    m_x, m_y = 1 / structure.masses[0], 1 / structure.masses[1]
    angle = 2 * half
    cross = -np.sin(angle) * m_x / r
    expected = [[m_y + m_x, m_x * np.cos(angle), cross], [m_x * np.cos(angle), m_y + m_x, cross],
                [cross, cross, 2 * (m_y + m_x * (1 - np.cos(angle))) / r**2]]
    assert np.abs(g - expected).max() < 1e-12


def test_g_needs_masses():
    structure = Structure.from_atoms(["C", "X"], [[0, 0, 0], [0, 0, 1.5]])
    with pytest.raises(VibsymError, match=r"atom 2 \(X\) is a dummy atom without mass"):
        g_matrix(np.zeros((1, 6)), structure.masses, structure)
