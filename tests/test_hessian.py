"""Imported Hessians: species and wavenumbers come back, turned and with noise; bad ones are refused in one line."""

from pathlib import Path

import numpy as np
import pytest

from vibsym.errors import VibsymError
from vibsym.structures.finder import find_symmetry
from vibsym.structures.reading import read
from vibsym.vibrations.bmatrix import b_matrix
from vibsym.vibrations.estimates import estimate
from vibsym.vibrations.forcefield import standard_field
from vibsym.vibrations.hessian import hessian_modes, read_hessian
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.units import HESSIAN_UNITS

PUBLISHED = Path(__file__).parent / "reference" / "shimanouchi"
MOLECULES = [
    "methane",
    "benzene",
    "allene",
    "ethane",
    "acetylene",
    "uranium-hexafluoride",
    "hexachloroethane",
    "diborane-11b",
    "bromochloromethane-d1",
    "propyne-3,3,3-d3",
]


def own_hessian(symmetry):
    """Return H in N/m, in the orientation of the structure as read."""
    sets = internal_coordinates(symmetry)
    B = b_matrix(symmetry.positions, sets)
    H = B.T @ standard_field().matrix(symmetry.structure.symbols, symmetry.positions, sets) @ B
    turn = np.kron(np.eye(len(symmetry.structure)), symmetry.frame)
    return turn.T @ H @ turn


@pytest.mark.parametrize("name", MOLECULES)
def test_own_hessian_comes_back(name):
    symmetry = find_symmetry(read(str(PUBLISHED / f"{name}.xyz")))
    found = hessian_modes(symmetry, own_hessian(symmetry))
    expected = estimate(symmetry).modes
    assert [(mode.name, mode.species) for mode in found.modes] == [(mode.name, mode.species) for mode in expected]
    assert [mode.wavenumber for mode in found.modes] == pytest.approx([mode.wavenumber for mode in expected], abs=0.01)
    assert min(mode.weight for mode in found.modes) > 0.999
    assert np.abs(found.rigid).max() < 1


@pytest.mark.parametrize("name", MOLECULES)
def test_turned_and_noisy(name):
    """Noise of 0.1 % on the elements and of 0.003 Å on the geometry: the same labels, wavenumbers within a few cm-1."""
    rng = np.random.default_rng(11)
    structure = read(str(PUBLISHED / f"{name}.xyz"))
    exact = find_symmetry(structure)
    H = own_hessian(exact)
    turn, _ = np.linalg.qr(rng.normal(size=(3, 3)))
    whole = np.kron(np.eye(len(structure)), turn)
    noise = rng.normal(size=H.shape) * 2e-4 * np.abs(H).max()
    noisy = whole @ H @ whole.T + (noise + noise.T) / 2
    moved = structure.moved(structure.positions @ turn.T + rng.normal(size=(len(structure), 3)) * 0.003)
    symmetry = find_symmetry(moved)
    assert symmetry.group.symbol == exact.group.symbol
    found, expected = hessian_modes(symmetry, noisy).modes, estimate(exact).modes
    for label in {mode.species for mode in expected}:
        own, theirs = ([mode.wavenumber for mode in modes if mode.species == label] for modes in (found, expected))
        assert own == pytest.approx(theirs, rel=0.03, abs=15), label


@pytest.mark.parametrize("unit", HESSIAN_UNITS)
def test_units_and_mass_weighting(unit):
    symmetry = find_symmetry(read(str(PUBLISHED / "methane.xyz")))
    H = own_hessian(symmetry) / HESSIAN_UNITS[unit]
    roots = np.sqrt(np.repeat(symmetry.structure.masses, 3))
    plain = hessian_modes(symmetry, H, unit).modes
    weighted = hessian_modes(symmetry, H / np.outer(roots, roots), unit, mass_weighted=True).modes
    expected = [mode.wavenumber for mode in estimate(symmetry).modes]
    assert [mode.wavenumber for mode in plain] == pytest.approx(expected, abs=0.01)
    assert [mode.wavenumber for mode in weighted] == pytest.approx(expected, abs=0.01)


def test_imaginary_modes_are_negative():
    symmetry = find_symmetry(read(str(PUBLISHED / "formaldehyde.xyz")))
    sets = internal_coordinates(symmetry)
    B = b_matrix(symmetry.positions, sets)
    F = standard_field().matrix(symmetry.structure.symbols, symmetry.positions, sets)
    wag = next(k for k, each in enumerate(sets) if each.kind == "wag")
    row = sum(len(each) * each.components for each in sets[:wag])
    F[row, row] *= -1
    turn = np.kron(np.eye(4), symmetry.frame)
    modes = hessian_modes(symmetry, turn.T @ (B.T @ F @ B) @ turn).modes
    assert [mode.imaginary for mode in modes] == [mode.species == "B1" for mode in modes]


def test_formats_are_told_by_content(tmp_path):
    matrix = np.arange(81.0).reshape(9, 9)
    np.savetxt(tmp_path / "one.dat", matrix)
    (tmp_path / "two.txt").write_text("# comment\n" + ", ".join(map(str, matrix.ravel())))
    with (tmp_path / "three.txt").open("wb") as file:
        np.save(file, matrix)
    for name in ("one.dat", "two.txt", "three.txt"):
        assert (read_hessian(str(tmp_path / name), 3) == matrix).all()


BAD = {
    "wrong-size": (np.eye(8), "9 × 9"),
    "text": ("1 2 x", "line 1: 'x' is not a number"),
    "infinite": (np.full((9, 9), np.inf), "not finite"),
}


@pytest.mark.parametrize("name", BAD)
def test_bad_files(tmp_path, name):
    content, words = BAD[name]
    path = tmp_path / "h.txt"
    if isinstance(content, str):
        path.write_text(content)
    else:
        np.savetxt(path, content)
    with pytest.raises(VibsymError, match=words):
        read_hessian(str(path), 3)


def test_asymmetric_and_wrong_unit():
    symmetry = find_symmetry(read(str(PUBLISHED / "water.xyz")))
    H = own_hessian(symmetry)
    askew = H.copy()
    askew[0, 4] += 50
    with pytest.raises(VibsymError, match="not symmetric: element 1,5"):
        hessian_modes(symmetry, askew)
    with pytest.raises(VibsymError, match="highest wavenumber would be"):
        hessian_modes(symmetry, H, "hartree/bohr2")
    with pytest.raises(VibsymError, match="no Hessian unit 'furlong'"):
        hessian_modes(symmetry, H, "furlong")
