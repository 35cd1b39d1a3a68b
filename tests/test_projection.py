"""Projection: combinations transform as their species in every group and basis; exact coefficients equal floats."""

import numpy as np
import pytest
import sympy

from vibsym.groups.bases import Basis
from vibsym.groups.exact_vectors import exact_symmetry_vectors
from vibsym.groups.pointgroup import point_group
from vibsym.groups.projection import symmetry_vectors

PHI = (1 + 5**0.5) / 2
GROUPS = ["C1", "Ci", "Cs", "C2", "C3", "C5", "C2v", "C3v", "C4v", "C6v", "C2h", "C3h", "C4h", "C7h", "D2",
          "D3", "D6", "D2h", "D3h", "D4h", "D5h", "D6h", "D7h", "D2d", "D3d", "D4d", "D5d", "S4", "S6", "S8", "T",
          "Td", "Th", "O", "Oh", "I", "Ih"]


def permuted_points(group, seeds):
    """Points that are the orbits of the seeds, and where each operation takes them: (n, 3), (h, n)."""
    images = np.concatenate([group.matrices @ seed for seed in seeds])
    points = images[np.sort(np.unique(np.round(images, 6), axis=0, return_index=True)[1])]
    moved = np.einsum("gij,nj->gni", group.matrices, points)
    return points, np.linalg.norm(moved[:, :, None] - points, axis=-1).argmin(axis=-1)


def special_and_general_sites(seed=3):
    rng = np.random.default_rng(seed)
    return [rng.normal(size=3), np.array([0, 0, 1.3]), np.array([1.1, 0, 0]), np.array([0.7, 0.7, 0.7]),
            np.array([0.9, 0.9, 0]), np.array([0, 0.9, 0.9 * PHI]), np.array([0.4, 0, 1.2])]


@pytest.mark.parametrize("symbol", GROUPS)
def test_displacements_split_into_partners_of_species(symbol):
    """Completeness, orthonormality, counts of the reduction formula, R v_i = Σ_j D_ji(R) v_j for every operation."""
    group = point_group(symbol)
    points, permutations = permuted_points(group, special_and_general_sites())
    basis = Basis.displacements(group, permutations)
    vectors = symmetry_vectors(basis)
    assert {label: len(v) for label, v in vectors.items()} == basis.reduce()
    rows = np.concatenate([v.reshape(-1, v.shape[-1]) for v in vectors.values()])
    assert rows.shape == (3 * len(points), 3 * len(points)) and np.allclose(rows @ rows.T, np.eye(len(rows)))
    for operation in range(0, group.order, max(1, group.order // 12)):
        R = basis.matrix(operation)
        for label, v in vectors.items():
            D = group.irrep(label)[operation]
            assert np.allclose(v @ R.T, np.einsum("ji,uja->uia", D, v))


@pytest.mark.parametrize("symbol", GROUPS)
def test_an_invariant_matrix_has_equal_blocks_in_every_component(symbol):
    """Ordinary species: the same block for each partner, none between them; a conjugate pair: [[A, -B], [B, A]]."""
    group = point_group(symbol)
    _, permutations = permuted_points(group, special_and_general_sites(7)[:4])
    basis = Basis.displacements(group, permutations)
    n = basis.size * basis.components
    rng = np.random.default_rng(11)
    raw = rng.normal(size=(n, n))
    raw = raw + raw.T
    invariant = sum(basis.matrix(r) @ raw @ basis.matrix(r).T for r in range(group.order)) / group.order
    for label, v in symmetry_vectors(basis).items():
        blocks = np.einsum("uia,ab,wjb->ijuw", v, invariant, v, optimize=True)
        for i in range(v.shape[1]):
            assert np.allclose(blocks[i, i], blocks[0, 0])
            for j in range(i):
                if group.species_named(label).pair:
                    assert np.allclose(blocks[i, j], -blocks[j, i])
                else:
                    assert np.allclose(blocks[i, j], 0)


def test_the_coupling_of_a_conjugate_pair_is_not_zero():
    group = point_group("C3")
    _, permutations = permuted_points(group, special_and_general_sites(2)[:1])
    basis = Basis.displacements(group, permutations)
    raw = np.random.default_rng(1).normal(size=(9, 9))
    invariant = sum(basis.matrix(r) @ (raw + raw.T) @ basis.matrix(r).T for r in range(3))
    v = symmetry_vectors(basis)["E"]
    assert np.abs(np.einsum("ua,ab,wb->uw", v[:, 0], invariant, v[:, 1])).max() > 0.1


@pytest.mark.parametrize("symbol", GROUPS)
def test_exact_coefficients_equal_the_floats(symbol):
    group = point_group(symbol)
    _, permutations = permuted_points(group, special_and_general_sites())
    basis = Basis.signed(group, permutations)
    numeric = symmetry_vectors(basis)
    exact = exact_symmetry_vectors(basis)
    assert {label: len(copies) for label, copies in exact.items()} == {label: len(v) for label, v in numeric.items()}
    values = {}
    for label, copies in exact.items():
        for u, copy in enumerate(copies):
            for i, terms in enumerate(copy):
                row = np.zeros(basis.size)
                for place, number, value in terms:
                    row[place] = value
                    values[str(number)] = value
                assert np.abs(row - numeric[label][u, i]).max() < 1e-12
    for text, value in values.items():                    # the printed form parses and is the number
        assert abs(float(sympy.sympify(text)) - value) < 1e-12


@pytest.mark.parametrize("symbol", ["D3h", "D5h", "Td", "Oh", "C4v", "D7"])
def test_exact_rows_are_orthonormal_in_exact_arithmetic(symbol):
    group = point_group(symbol)
    _, permutations = permuted_points(group, special_and_general_sites()[1:4])
    exact = exact_symmetry_vectors(Basis.signed(group, permutations))
    for copies in exact.values():
        rows = [{place: number for place, number, _ in terms} for copy in copies for terms in copy]
        for k, left in enumerate(rows):
            for right in rows[: k + 1]:
                total = sympy.nsimplify(0) + sum(left[p] * right[p] for p in left.keys() & right.keys())
                expected = 1 if left is right else 0
                assert abs(sympy.N(total - expected, 40)) < 1e-35


def test_signed_permutation_with_vanishing_projection():
    """A σ-antisymmetric coordinate at a mirror has no totally symmetric combination: the seed projects to nothing."""
    group = point_group("Cs")
    basis = Basis.signed(group, np.array([[0], [0]]), np.array([[1.0], [-1.0]]))
    assert list(symmetry_vectors(basis)) == ["A''"]
