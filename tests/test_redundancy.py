"""Ranks by species, redundancies with their reasons, and the blocks of G and F, conjugate pairs included."""

from collections import Counter
from pathlib import Path

import internal_cases as cases
import numpy as np
import pytest

from vibsym.structures.finder import find_symmetry
from vibsym.structures.reading import read
from vibsym.structures.structure import Structure
from vibsym.vibrations.blocks import symmetry_blocks, symmetry_rows
from vibsym.vibrations.bmatrix import b_matrix, g_matrix
from vibsym.vibrations.internal import internal_coordinates, select
from vibsym.vibrations.redundancy import RankLadder, independence
from vibsym.vibrations.relations import relations
from vibsym.vibrations.representation import coordinate_basis

SAMPLES = Path(__file__).parent.parent / "samples"
PAIRS = ("B(OH)3, C3h", "P(OH)3, C3", "Si(OH)4, S4", "Al(OH2)6, Th")


def found(name, *wanted):
    symmetry = cases.symmetry(name)
    return independence(symmetry, select(internal_coordinates(symmetry), wanted))


@pytest.mark.parametrize("name, wanted, redundant", [
    # E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), section 6-3; F. A. Cotton, Chemical
    # Applications of Group Theory, ch. 10 (from memory): six tetrahedral angles A1, planar AB3 A1', twelve
    # octahedral angles A1g + Eg
    ("CH4", ["bend"], {"A1": 1}), ("SO3", ["bend"], {"A1'": 1}), ("SF6", ["bend"], {"A1g": 1, "Eg": 1}),
    ("XeF4", ["bend"], {"A1g": 1}), ("Fe(CO)5", ["bend"], {"A1'": 2}), ("CH3Cl", ["bend"], {"A1": 1}),
    ("PCl3", [], {}), ("H2O", [], {}), ("CO2", [], {}), ("C2H4", [], {"Ag": 1, "B1u": 1}),
    ("XeF4", [], {"A1g": 1}), ("C3H4", [], {"A1": 1, "B2": 1}), ("C2H6", [], {"A1g": 1, "A2u": 1}),
], ids=lambda value: value if isinstance(value, str) else " ".join(value) if isinstance(value, list) else "")
def test_published_redundancies(name, wanted, redundant):
    assert found(name, *wanted).redundancies == redundant


@pytest.mark.parametrize("n, redundant", [(3, {"A1'": 1, "E'": 1}), (4, {"A1g": 1, "Eu": 1}), (5, {"A1'": 1, "E1'": 1}),
                                          (6, {"A1g": 1, "E1u": 1})])
def test_planar_rings(n, redundant):
    """n stretches and n angles of a planar ring hold three redundancies: the sum of the angles and the two of closure.

    (2n coordinates, 2n - 3 vibrations in the plane; the closure transforms like x, y; WDC 1955, section 6-3.)
    """
    symbols, positions = ["S"] * n, cases.ring(n, 2.1 / (2 * np.sin(np.pi / n)))
    symmetry = find_symmetry(Structure.from_atoms(symbols, positions))
    result = independence(symmetry, select(internal_coordinates(symmetry), ["stretch", "bend"]))
    assert result.redundancies == redundant


@pytest.mark.parametrize("name", tuple(cases.SHAPES))
def test_every_redundancy_is_told(name):
    """Each relation is a unit vector with c B = 0, they are independent, and as many as the ranks leave in each
    species."""
    symmetry = cases.symmetry(name)
    sets = internal_coordinates(symmetry)
    b, ids = b_matrix(symmetry.positions, sets), [one for each in sets for one in each.ids]
    told = relations(symmetry, sets)
    assert Counter(each.species for each in told) == Counter(independence(symmetry, sets).redundancies)
    vectors = np.zeros((len(told), len(ids)))
    for row, relation in zip(vectors, told):
        for coordinate, value in relation.terms:
            row[ids.index(coordinate)] = value
    assert np.abs(vectors @ b).max(initial=0) < 1e-6
    assert np.abs(vectors @ vectors.T - np.eye(len(told))).max(initial=0) < 1e-9


def test_a_relation_that_almost_holds_in_a_smaller_set_is_told_once():
    """The torsions of a benzene ring are redundant among themselves to 4e-7, with its wags exactly: one Au, not two."""
    symmetry = find_symmetry(read(SAMPLES / "stabiliser-dimethoxybenzene.xyz"))
    sets = internal_coordinates(symmetry)
    told = relations(symmetry, sets)
    assert Counter(each.species for each in told) == Counter(independence(symmetry, sets).redundancies)
    b, ids = b_matrix(symmetry.positions, sets), [one for each in sets for one in each.ids]
    for relation in told:
        row = np.zeros(len(ids))
        for coordinate, value in relation.terms:
            row[ids.index(coordinate)] = value
        assert np.abs(row @ b).max() < 1e-5


def test_reasons():
    def reasons(name, *wanted):
        symmetry = cases.symmetry(name)
        return {each.reason for each in relations(symmetry, select(internal_coordinates(symmetry), wanted))}

    assert reasons("CH4") == {"the 6 angles at C1: their sum is constant"}
    assert reasons("SF6") == {"the 12 angles at S1: angles that make a full circle in a plane add up to 360° "
                              "(circles: 3 of 4)"}
    assert reasons("C2H4") == {"the 3 angles at C1 and at its equivalent: their sum is constant"}
    (ring,) = reasons("S8")
    assert ring.startswith("the ring of S1-S5-S2-S6-S3-S7-S4-S8 stays closed")
    # the angles in the pentagon add up to 360 degrees, those of two steps (144 degrees) only weighted with them
    assert reasons("XeF5-, D5h") == {
        "the 10 angles at Xe1: angles that make a full circle in a plane add up to 360° (circles: 1 of 5); weighted "
        "sums of the others are constant too", "the 5 wags at Xe1: weighted sums of them are constant"}
    # the three angles at an atom of P4 are independent; those of each face add up to 180 degrees
    assert reasons("P4") == {"the ring of P1-P2-P3 (and 3 equivalent) stays closed; the sum of its angles is constant"}
    assert reasons("CH3Cl") == {"the 6 angles at C1: a weighted sum of them is constant"}


@pytest.mark.parametrize("height, reason", [
    (4e-7, "the 3 angles at B1: their sum is constant"),                  # as flat as a file of six decimals tells
    (0.01, "the 4 angles and wags at B1: weighted sums of them are constant")], ids=["flat", "nearly flat"])
def test_a_flat_centre_that_no_operation_keeps_flat(height, reason):
    """A boric acid with its H atoms out of the plane, C3: three bonds have two angles and a wag, or three angles."""
    turns = np.arange(3) * 2 * np.pi / 3
    oxygens = np.stack([1.37 * np.cos(turns), 1.37 * np.sin(turns), np.full(3, height)], axis=1)
    hydrogens = np.stack([1.87 * np.cos(turns + 0.5), 1.87 * np.sin(turns + 0.5), np.full(3, 0.45)], axis=1)
    symmetry = find_symmetry(Structure.from_atoms(["B", *"OOO", *"HHH"], [[0, 0, 0], *oxygens, *hydrogens]))
    assert symmetry.group.symbol == "C3"
    told = relations(symmetry, select(internal_coordinates(symmetry), []))
    assert [each.reason for each in told] == [reason]


def test_sum_of_the_tetrahedral_angles():
    symmetry = cases.symmetry("CH4")
    (relation,) = relations(symmetry, internal_coordinates(symmetry))
    assert relation.species == "A1" and len(relation.terms) == 6
    assert np.allclose([value for _, value in relation.terms], 6**-0.5)


def test_fragments_that_are_not_bonded_are_missing():
    """CO2 and H2 far apart on one axis: all relative motions of the two are missing, by species."""
    symbols, positions = ["C", "O", "O", "H", "H"], [[0, 0, z] for z in (0, 1.16, -1.16, 6.0, 6.74)]
    symmetry = find_symmetry(Structure.from_atoms(symbols, positions))
    assert symmetry.group.symbol == "C∞v"
    result = independence(symmetry, internal_coordinates(symmetry))
    assert result.missing == {"Σ+": 1, "Π": 2}
    assert not result.complete


def test_rank_ladder_counts_as_the_singular_values_do():
    random = np.random.default_rng(2)
    for rank in (0, 1, 4, 7):
        rows = random.normal(size=(30, rank)) @ random.normal(size=(rank, 12))
        ladder = RankLadder(12, 1e-6)
        counts = [ladder.add(block) for block in (rows[:2], rows[2:3], rows[3:])]
        assert sum(counts) == ladder.rank == rank
        assert np.abs(ladder.found @ ladder.found.T - np.eye(rank)).max(initial=0) < 1e-12


def force_field(symmetry, sets, seed):
    """Return a random positive F that every operation leaves as it is, over all coordinates."""
    size = sum(len(each) * each.components for each in sets)
    root = np.random.default_rng(seed).normal(size=(size, size))
    f = root @ root.T / size + np.eye(size)
    total, start = np.zeros((size, size)), 0
    bases = [coordinate_basis(symmetry, each) for each in sets]
    for operation in range(symmetry.group.image.order):
        moved, start = np.zeros((size, size)), 0
        for basis in bases:
            block = basis.matrix(operation)
            moved[start:start + len(block), start:start + len(block)] = block
            start += len(block)
        total += moved.T @ f @ moved
    return total / symmetry.group.image.order


def frequencies(g, f):
    """Return the eigenvalues of GF (real, since both are Hermitian and F is positive)."""
    return np.sort(np.linalg.eigvals(g @ f).real)


@pytest.mark.parametrize("name", [*PAIRS, "CH4", "SF6", "C2H4", "C3H4", "Fe(CO)5", "C2H2", "MoF8 antiprism, D4d",
                                  "C6H12", "twisted neopentane, T", "Mn2(CO)10"])
def test_blocks_of_g_and_f(name):
    """The blocks give the eigenvalues of the whole GF; partners have one block, a conjugate pair [[A, -B], [B, A]]."""
    symmetry = cases.symmetry(name)
    sets, group = internal_coordinates(symmetry), symmetry.group
    g = g_matrix(b_matrix(symmetry.positions, sets), symmetry.structure.masses)
    f = force_field(symmetry, sets, 4)
    rows, values = symmetry_rows(symmetry, sets), []
    short = [symmetry_blocks(symmetry, sets, matrix) for matrix in (g, f)]
    everything = np.concatenate([vectors.reshape(-1, len(g)) for vectors in rows.values()])
    assert np.abs(everything @ everything.T - np.eye(len(g))).max() < 1e-10
    for label, vectors in rows.items():
        blocks = [np.einsum("uim,mn,vjn->iujv", vectors, matrix, vectors) for matrix in (g, f)]
        degeneracy = vectors.shape[1]
        if group.species_named(label).pair:
            for block in blocks:
                assert np.abs(block[0, :, 0] - block[1, :, 1]).max() < 1e-10
                assert np.abs(block[0, :, 1] + block[1, :, 0]).max() < 1e-10
                assert np.abs(block[0, :, 1] + block[0, :, 1].T).max() < 1e-10
            values += [*frequencies(*(found[label] for found in short))] * 2
            continue
        for block in blocks:
            for i in range(degeneracy):
                for j in range(degeneracy):
                    assert np.abs(block[i, :, j] - (block[0, :, 0] if i == j else 0)).max() < 1e-10
        values += [*frequencies(*(found[label] for found in short))] * degeneracy
    assert np.abs(np.sort(values) - frequencies(g, f)).max() < 1e-8


@pytest.mark.parametrize("name", PAIRS)
def test_the_coupling_in_a_conjugate_pair_is_not_zero(name):
    """One component alone would give other eigenvalues."""
    symmetry = cases.symmetry(name)
    sets, group = internal_coordinates(symmetry), symmetry.group
    g = g_matrix(b_matrix(symmetry.positions, sets), symmetry.structure.masses)
    f = force_field(symmetry, sets, 4)
    pairs = [each.label for each in group.species if each.pair]
    rows = {key: vectors for key, vectors in symmetry_rows(symmetry, sets).items() if key in pairs and len(vectors) > 1}
    assert rows
    coupling = 0.0
    for vectors in rows.values():
        block = np.einsum("uim,mn,vjn->iujv", vectors, f, vectors)
        coupling = max(coupling, np.abs(block[0, :, 1]).max())
        alone = frequencies(*(np.einsum("um,mn,vn->uv", vectors[:, 0], matrix, vectors[:, 0]) for matrix in (g, f)))
        both = frequencies(*(np.einsum("um,mn,vn->uv", stacked, matrix, stacked) for matrix in (g, f)
                             for stacked in [vectors.reshape(-1, len(g))]))
        assert np.abs(both[::2] - both[1::2]).max() < 1e-8
        assert np.abs(both[::2] - alone).max() > 1e-6
    assert coupling > 1e-3


@pytest.mark.parametrize("name", [*PAIRS, "twisted neopentane, T"])
def test_redundancies_of_conjugate_pairs_against_the_whole(name):
    """Twice the rank in a pair plus the ranks times degeneracies is the rank of B as a whole."""
    symmetry = cases.symmetry(name)
    sets = internal_coordinates(symmetry)
    sizes = np.linalg.svd(b_matrix(symmetry.positions, sets), compute_uv=False)
    rank = independence(symmetry, sets).rank
    total = sum(n * symmetry.group.species_named(label).degeneracy for label, n in rank.items())
    assert total == (sizes > 1e-6 * sizes[0]).sum()
