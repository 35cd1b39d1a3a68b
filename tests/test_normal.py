"""Normal modes: closed forms of small molecules, blocks against the whole problem, rigid motions, product rule."""

from pathlib import Path

import numpy as np
import pytest

from vibsym.structures.finder import find_symmetry
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.vibrations.bmatrix import b_matrix
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.estimates import estimate
from vibsym.vibrations.forcefield import standard_field
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.normal_modes import normal_modes, rigid_wavenumbers, wavenumbers_of

PUBLISHED = Path(__file__).parent / "reference" / "shimanouchi"
TETRAHEDRON = np.array([[1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]]) / 3**0.5


def solved(symbols, positions, constants):
    """Return symmetry and {species: eigenvalues, N/m/u} for {kind: (diagonal, off-diagonal)} constants."""
    symmetry = find_symmetry(Structure.from_atoms(symbols, positions))
    sets = internal_coordinates(symmetry)
    size = sum(len(each) * each.components for each in sets)
    F, start = np.zeros((size, size)), 0
    for each in sets:
        n = len(each) * each.components
        diagonal, off = constants.get(each.kind, (0.0, 0.0))
        block = np.full((n, n), off) if each.kind != "linear bend" else np.zeros((n, n))
        np.fill_diagonal(block, diagonal)
        F[start : start + n, start : start + n] = block
        start += n
    scale = wavenumbers_of(np.array(1.0))
    found: dict[str, list] = {}
    for mode in normal_modes(symmetry, sets, F):
        found.setdefault(mode.species, []).append((mode.wavenumber / scale) ** 2)
    return symmetry, found


def eigenvalues(F, G):
    return sorted(np.linalg.eigvals(np.array(F) @ np.array(G)).real.tolist(), reverse=True)


def masses_of(symmetry):
    structure = symmetry.structure
    return [1 / structure.masses[0], 1 / structure.masses[1]]


def test_bent_xy2_against_the_closed_form():
    """E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), ch. 4: G of bent XY2 (from memory)."""
    r, angle, f, ff, h = 0.9584, np.radians(104.45), 845.0, -10.0, 70.0
    positions = [
        [0, 0, 0],
        [r * np.sin(angle / 2), 0, r * np.cos(angle / 2)],
        [-r * np.sin(angle / 2), 0, r * np.cos(angle / 2)],
    ]
    symmetry, found = solved(["O", "H", "H"], positions, {"stretch": (f, ff), "bend": (h, 0)})
    mx, my = masses_of(symmetry)
    c, s = np.cos(angle), np.sin(angle)
    G = [[my + mx * (1 + c), -np.sqrt(2) * mx * s / r], [-np.sqrt(2) * mx * s / r, 2 * (my + mx * (1 - c)) / r**2]]
    assert found["A1"] == pytest.approx(eigenvalues(np.diag([f + ff, h]), G), rel=1e-8)
    assert found["B2"] == pytest.approx([(f - ff) * (my + mx * (1 - c))], rel=1e-8)


def test_linear_xy2_against_the_closed_form():
    """G. Herzberg, Infrared and Raman Spectra (1945), p. 172: linear symmetric XY2 (from memory)."""
    r, f, ff, h = 1.16, 1550.0, 130.0, 78.0
    symmetry, found = solved(
        ["C", "O", "O"], [[0, 0, 0], [0, 0, r], [0, 0, -r]], {"stretch": (f, ff), "linear bend": (h, 0)}
    )
    mx, my = masses_of(symmetry)
    assert found["Σg+"] == pytest.approx([(f + ff) * my], rel=1e-8)
    assert found["Σu+"] == pytest.approx([(f - ff) * (my + 2 * mx)], rel=1e-8)
    assert found["Πu"] == pytest.approx([2 * h / r**2 * (my + 2 * mx)], rel=1e-8)


def test_pyramidal_xy3_against_the_closed_form():
    """Wilson, Decius, Cross (1955), ch. 6, pyramidal XY3 (from memory)."""
    r, angle, f, ff, h, hh = 1.42, np.radians(93.3), 311.0, 5.0, 70.0, -4.0
    slope = 2 / np.sqrt(3) * np.sin(angle / 2)
    turns = np.radians([0, 120, 240])
    ends = r * np.stack([slope * np.cos(turns), slope * np.sin(turns), np.full(3, np.sqrt(1 - slope**2))], axis=1)
    symmetry, found = solved(["P", "H", "H", "H"], np.vstack([[0, 0, 0], ends]), {"stretch": (f, ff), "bend": (h, hh)})
    mx, my = masses_of(symmetry)
    c, s = np.cos(angle), np.sin(angle)
    mixed = -2 * (1 + 2 * c) * (1 - c) / s * mx / r
    A1 = [[my + mx * (1 + 2 * c), mixed], [mixed, 2 / r**2 * (1 + 2 * c) / (1 + c) * (my + 2 * mx * (1 - c))]]
    mixed = (1 - c) ** 2 / s * mx / r
    E = [[my + mx * (1 - c), mixed], [mixed, ((2 + c) * my + (1 - c) ** 2 * mx) / (r**2 * (1 + c))]]
    assert found["A1"] == pytest.approx(eigenvalues(np.diag([f + 2 * ff, h + 2 * hh]), A1), rel=1e-8)
    assert found["E"] == pytest.approx(eigenvalues(np.diag([f - ff, h - hh]), E), rel=1e-8)


def test_tetrahedral_xy4_against_the_closed_form():
    """Wilson, Decius, Cross (1955), ch. 7 and Herzberg (1945), p. 181, tetrahedral XY4 (from memory)."""
    r, f, ff, h = 1.09, 495.0, 4.0, 54.0
    symmetry, found = solved(
        ["C", "H", "H", "H", "H"], np.vstack([[0, 0, 0], r * TETRAHEDRON]), {"stretch": (f, ff), "bend": (h, 0)}
    )
    mx, my = masses_of(symmetry)
    T2 = [[my + 4 / 3 * mx, -8 / 3 * mx / r], [-8 / 3 * mx / r, (16 / 3 * mx + 2 * my) / r**2]]
    assert found["A1"] == pytest.approx([(f + 3 * ff) * my], rel=1e-8)
    assert found["E"] == pytest.approx([3 * my * h / r**2], rel=1e-8)
    assert found["T2"] == pytest.approx(eigenvalues(np.diag([f - ff, h]), T2), rel=1e-8)


def boric_acid() -> Structure:
    """A planar B(OH)3 propeller: C3h, whose E species are conjugate pairs."""
    turns = [
        np.array([[np.cos(t), -np.sin(t), 0], [np.sin(t), np.cos(t), 0], [0, 0, 1]]) for t in np.radians([0, 120, 240])
    ]
    oxygen, hydrogen = np.array([1.36, 0, 0]), np.array([1.68, 0.9, 0])
    return Structure.from_atoms(
        ["B"] + ["O"] * 3 + ["H"] * 3, [np.zeros(3), *(R @ oxygen for R in turns), *(R @ hydrogen for R in turns)]
    )


def twisted_ethane() -> Structure:
    """Ethane turned to neither end, one side fluorinated: C3."""
    up = [[1.02 * np.cos(t), 1.02 * np.sin(t), 1.14] for t in np.radians([0, 120, 240])]
    down = [[1.24 * np.cos(t), 1.24 * np.sin(t), -1.22] for t in np.radians([40, 160, 280])]
    return Structure.from_atoms(["C", "C", *"HHH", *"FFF"], [[0, 0, 0.75], [0, 0, -0.75], *up, *down])


CASES = {
    "boric-acid-C3h": boric_acid,
    "turned-C3": twisted_ethane,
    **{
        name: (lambda name=name: read(str(PUBLISHED / f"{name}.xyz")))
        for name in (
            "methane",
            "benzene",
            "allene",
            "carbon-dioxide-12c",
            "acetylene",
            "bromochloromethane-d1",
            "diborane-11b",
            "hexachloroethane",
            "uranium-hexafluoride",
            "cyclopropane",
        )
    },
}


@pytest.mark.parametrize("name", CASES)
def test_blocks_are_the_whole_problem(name):
    """Every species gives what the unsymmetrised 3N problem gives, as often as its dimension."""
    symmetry = find_symmetry(CASES[name]())
    structure, sets = symmetry.structure, internal_coordinates(symmetry)
    F = standard_field().matrix(structure.symbols, symmetry.positions, sets)
    B = b_matrix(symmetry.positions, sets) / np.sqrt(np.repeat(structure.masses, 3))
    H = B.T @ F @ B
    whole = wavenumbers_of(np.linalg.eigvalsh(H))
    modes = normal_modes(symmetry, sets, F)
    by_blocks = np.sort(np.concatenate([[mode.wavenumber] * mode.degeneracy for mode in modes]))
    assert by_blocks == pytest.approx(whole[len(whole) - len(by_blocks) :], rel=1e-8)
    assert np.abs(rigid_wavenumbers(symmetry, H)).max() < 0.01
    gamma = displacements(symmetry).gamma_vib
    assert {label: sum(mode.species == label for mode in modes) for label in gamma} == gamma


@pytest.mark.parametrize("name", ["boric-acid-C3h", "turned-C3"])
def test_conjugate_pairs_are_coupled(name):
    """A conjugate pair solved as a whole has every value twice."""
    from vibsym.vibrations.normal_modes import species_blocks

    symmetry = find_symmetry(CASES[name]())
    sets = internal_coordinates(symmetry)
    F = standard_field().matrix(symmetry.structure.symbols, symmetry.positions, sets)
    pairs = [block for block in species_blocks(symmetry, sets) if block.norm == 2]
    assert pairs
    for block in pairs:
        values = np.linalg.eigvalsh(block.rows.T @ F @ block.rows)
        assert values[::2] == pytest.approx(values[1::2], rel=1e-8)


@pytest.mark.parametrize("name", ["methane", "benzene", "turned-C3", "bromochloromethane-d1"])
def test_energy_shares_add_up(name):
    modes = estimate(find_symmetry(CASES[name]())).modes
    for mode in modes:
        assert sum(share for _, share in mode.shares) == pytest.approx(1, abs=0.05)


def test_product_rule_of_methane():
    """O. Redlich, Z. phys. Chem. B 28, 371 (1935): A1, E √(m/m'), T2 √((m/m')² M'/M), exact."""
    light, heavy = (find_symmetry(read(str(PUBLISHED / f"methane{mark}.xyz"))) for mark in ("", "-d4"))
    light = find_symmetry(heavy.structure.with_isotopes(dict.fromkeys(range(len(heavy.structure)))))
    ratios = {}
    for label in ("A1", "E", "T2"):
        products = [
            np.prod([mode.wavenumber for mode in estimate(each).modes if mode.species == label])
            for each in (light, heavy)
        ]
        ratios[label] = products[1] / products[0]
    hydrogen = light.structure.masses[light.structure.numbers == 1][0]
    deuterium = heavy.structure.masses[heavy.structure.numbers == 1][0]
    total = heavy.structure.masses.sum() / light.structure.masses.sum()
    root = np.sqrt(hydrogen / deuterium)
    assert ratios["A1"] == pytest.approx(root, rel=1e-10)
    assert ratios["E"] == pytest.approx(root, rel=1e-10)
    assert ratios["T2"] == pytest.approx(root**2 * np.sqrt(total), rel=1e-10)


def test_wavenumbers_do_not_depend_on_orientation():
    structure = read(str(PUBLISHED / "propyne.xyz"))
    turn, _ = np.linalg.qr(np.random.default_rng(3).normal(size=(3, 3)))
    modes, turned = (
        estimate(find_symmetry(each)).modes for each in (structure, structure.moved(structure.positions @ turn + 1.0))
    )
    assert [mode.wavenumber for mode in turned] == pytest.approx([mode.wavenumber for mode in modes], rel=1e-6)
    assert [(mode.name, mode.species) for mode in turned] == [(mode.name, mode.species) for mode in modes]


def test_one_atom_has_no_modes():
    assert estimate(find_symmetry(Structure.from_atoms(["Ar"], [[0, 0, 0]]))).modes == ()
