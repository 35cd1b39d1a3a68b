"""Laws of the whole way from atoms to species, counted a second time by means that share no code with the program.

The 3N × 3N matrices are written out from where each operation sends each atom (found anew by distances), and the
species are counted by sums over all operations; and, for atoms on elements, by Frobenius' reciprocity: an orbit with
site group H carries the species i

    n_i = 1/|H| * sum over H of chi_i(R) * tr R          (1/2|H| for two conjugate species counted as one)

times, because the displacements of one atom are a vector (G. Frobenius, 1898; any textbook on induced representations).
"""

import numpy as np
import pytest
from ase.collections import g2
from hypothesis import given, settings
from hypothesis import strategies as st
from orbits import FAMILIES, orbit_structure, posed

from vibsym import expect
from vibsym.report import expectation, render

RARE = ["S4", "S6", "S8", "S10", "S12", "S14", "S16", "C3h", "C5h", "C7h", "D7h", "D8h", "D9h", "D5d", "D6d", "D7d",
        "D5", "D7", "T", "Th", "O", "I", "Ih", "C1", "Ci", "Cs", "C9v", "C4h"]


def counted_by_matrices(symmetry):
    """Return {label: multiplicity} of the 3N displacements by traces of the written-out matrices."""
    image = symmetry.group.image
    atoms = symmetry.symmetrised.positions - symmetry.origin
    chi = []
    for R in image.matrices:
        turned = symmetry.frame.T @ R @ symmetry.frame
        places = np.linalg.norm((atoms @ turned.T)[:, None] - atoms, axis=2)
        assert places.min(axis=1).max() < 1e-6
        blocks = np.zeros((len(atoms), 3, len(atoms), 3))
        blocks[places.argmin(axis=1), :, np.arange(len(atoms)), :] = turned
        chi.append(np.trace(blocks.reshape(3 * len(atoms), -1)))
    return summed(symmetry.group, np.array(chi))


def summed(group, chi):
    """Return what (1/h) sum chi_i chi says for a character at every operation, whole numbers only, in table order."""
    image = group.image
    found = {}
    for species in image.species:
        own = np.array(species.characters)[image.class_of]
        number = own @ chi / (own @ own)
        assert number == pytest.approx(round(number), abs=1e-6)
        if round(number):
            found[group.image_labels[species.label]] = round(number)
    return {label: found[label] for label in group.labels if label in found}


def counted_by_sites(group, positions):
    """Return the same for positions in the standard frame, from one atom of each orbit and the operations that keep it.
    """
    found, left = dict.fromkeys(group.labels, 0), np.ones(len(positions), dtype=bool)
    while left.any():
        atom = positions[left][0]
        images = group.matrices @ atom
        site = np.linalg.norm(images - atom, axis=1) < 1e-6
        for species in group.species:
            traces = np.array(species.characters)[group.class_of] * group.matrices.trace(axis1=1, axis2=2)
            found[species.label] += round(traces[site].mean() / species.norm)
        left &= np.linalg.norm(positions[:, None] - images, axis=2).min(axis=1) > 1e-6
    return {label: number for label, number in found.items() if number}


def check_expectation(result):
    """Everything that must hold for any structure."""
    symmetry, group, atoms = result.symmetry, result.symmetry.group, len(result.structure)
    assert result.gamma_3n == counted_by_matrices(symmetry)
    if not group.infinite:
        assert result.gamma_3n == counted_by_sites(group, symmetry.positions)
    for gamma in (result.gamma_3n, result.gamma_translation, result.gamma_rotation, result.gamma_vib):
        assert list(gamma) == [label for label in group.labels if label in gamma]                # table order
        assert all(type(number) is int and number > 0 for number in gamma.values())
    rest = {label: result.gamma_3n[label] - result.gamma_translation.get(label, 0) - result.gamma_rotation.get(label, 0)
            for label in result.gamma_3n}
    assert result.gamma_vib == {label: number for label, number in rest.items() if number}
    degrees = {species.label: species.degeneracy for species in group.species}
    assert sum(degrees[label] * number for label, number in result.gamma_3n.items()) == 3 * atoms
    answer = result.to_dict()
    order = [row["label"] for row in answer["species"]]
    assert order == [label for label in group.labels if label in order]
    assert {row["label"]: row["modes"] for row in answer["species"] if row["modes"]} == result.gamma_vib
    active = [(row["infrared"], row["raman"], row["polarised"], row["modes"]) for row in answer["species"]]
    counts = answer["counts"]
    assert counts == {"fundamentals": sum(modes for *_, modes in active),
                      "infrared": sum(modes for infrared, _, _, modes in active if infrared),
                      "raman": sum(modes for _, raman, _, modes in active if raman),
                      "coincident": sum(modes for infrared, raman, _, modes in active if infrared and raman),
                      "polarised": sum(modes for _, _, polarised, modes in active if polarised),
                      "silent": sum(modes for infrared, raman, _, modes in active if not (infrared or raman))}


@settings(max_examples=60, deadline=None, derandomize=True)
@given(st.sampled_from(FAMILIES), st.integers(0, 10**6), st.floats(0, 0.008))
def test_random_structures_in_any_pose_with_noise(symbol, seed, shake):
    rng = np.random.default_rng(seed)
    names, points = orbit_structure(symbol, rng, orbits=2, special=True)
    still = expect(posed(names, points, rng)[0])
    check_expectation(still)
    shaken = expect(posed(names, points, rng, shake)[0])
    check_expectation(shaken)
    assert shaken.symmetry.group.symbol == still.symmetry.group.symbol
    assert shaken.counts == still.counts
    assert sorted(shaken.gamma_vib.values()) == sorted(still.gamma_vib.values())


@pytest.mark.parametrize("symbol", RARE)
def test_clusters_of_the_rarer_groups(symbol):
    """A shell of metal atoms on elements, one of ligands off them, in any pose; with an atom at the centre too."""
    rng = np.random.default_rng([RARE.index(symbol), 3])
    names, points = orbit_structure(symbol, rng, special=symbol not in ("C1", "Ci"))
    for centred in (False, True):
        if centred:
            names, points = [*names, "Mo"], np.vstack((points, np.zeros(3)))
        result = expect(posed(names, points, rng)[0])
        assert result.symmetry.group.symbol == symbol
        check_expectation(result)


@pytest.mark.parametrize("name", g2.names)
def test_all_molecules_of_the_g2_set(name):
    atoms = g2[name]
    result = expect(atoms)
    assert result.structure.symbols == tuple(atoms.get_chemical_symbols())
    check_expectation(result)
    page = render([result], expectation)
    assert max(map(len, page.splitlines())) <= 80 + page.count("\u0305")


def test_a_ring_of_straight_angles_at_the_limit():
    """The angles of a regular ring of 24 are 165 degrees, where chains begin to count as straight: all or none."""
    angles = np.radians(15 * np.arange(24))
    ring = 1.4 / (2 * np.sin(np.radians(7.5))) * np.column_stack((np.cos(angles), np.sin(angles), 0 * angles))
    result = expect(posed(["C"] * 24, ring, np.random.default_rng(1))[0])
    assert result.symmetry.group.symbol == "D24h"
    check_expectation(result)
