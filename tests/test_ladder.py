"""The ladder: distortions whose deviations are known exactly, near-linear molecules, noise, and what spoils a rung."""

from itertools import pairwise, permutations

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from orbits import noise, orbit_structure, posed, random_rotation

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.structures.finder import centre, find_symmetry
from vibsym.structures.ladder import as_group, ladder
from vibsym.structures.matching import residuals
from vibsym.structures.placement import correlation, fitted_maps, place
from vibsym.structures.structure import Structure
from vibsym.structures.subsets import closed_subsets

SQUARE = np.array([[0, 0, 0], [1.95, 0, 0], [0, 1.95, 0], [-1.95, 0, 0], [0, -1.95, 0.0]])


def xef4(shift):
    return Structure.from_atoms(["Xe", "F", "F", "F", "F"], SQUARE + np.asarray(shift))


def rungs_of(result):
    return [rung.symmetry.group.symbol for rung in result.rungs]


def check_ladder(result):
    """Orders and deviations rise, each rung holds the one below, and every rung is the group it says within its
    deviation.
    """
    orders = [np.inf if rung.symmetry.group.infinite else rung.symmetry.group.order for rung in result.rungs]
    deviations = [rung.deviation for rung in result.rungs]
    assert all(a < b or (a == b == np.inf) for a, b in pairwise(orders))
    assert all(a < b for a, b in pairwise(deviations))
    assert result.rungs[-1].spoilers == ()
    assert all(rung.spoilers for rung in result.rungs[:-1])
    for lower, upper in pairwise(result.rungs):
        below = {row.tobytes() for row in lower.symmetry.permutations}
        assert below <= {row.tobytes() for row in upper.symmetry.permutations}
        assert upper.deviation <= min(0.5, upper.symmetry.tolerance)
        image = upper.symmetry.group.image
        carried = upper.symmetry.positions @ image.matrices.transpose(0, 2, 1)
        assert np.abs(carried - upper.symmetry.positions[upper.symmetry.permutations]).max() < 1e-8
    counted = [max(value, 0.005) for value in deviations]
    ratios = [b / a for a, b in pairwise(counted)]
    assert result.suggested == (int(np.argmax(ratios)) if ratios else 0)


def test_puckered_square():
    """F atoms up and down by 0.12 Å in turn: D2d exactly, and 0.12 Å from D4h."""
    result = ladder(xef4([[0, 0, 0], [0, 0, 0.12], [0, 0, -0.12], [0, 0, 0.12], [0, 0, -0.12]]))
    assert rungs_of(result) == ["D2d", "D4h"]
    assert result.rungs[1].deviation == pytest.approx(0.12, abs=1e-9)
    assert result.rungs[0].spoilers == (2, 3, 4, 5)
    assert result.suggested == 0
    check_ladder(result)


def test_two_distortions_of_unlike_size():
    """Long and short axes (D2h, 0.3 Å from D4h), and on top a wedge of 0.05 Å that leaves C2v."""
    rectangle = np.array([[0, 0, 0], [0.3, 0, 0], [0, -0.3, 0], [-0.3, 0, 0], [0, 0.3, 0]])
    wedge = np.array([[0, 0, -0.05], [0, 0, 0.05], [0, 0, 0.05], [0, 0, 0.05], [0, 0, 0.05]])
    result = ladder(xef4(rectangle + wedge), tolerance=0.01)
    check_ladder(result)
    assert rungs_of(result) == ["C2v", "D2h", "D4h"]
    # centring puts the wedge at 4/5 and 1/5 of its height: Xe 0.08 Å below, F 0.02 Å above the plane
    assert result.rungs[1].deviation == pytest.approx(0.08, abs=1e-9)
    assert result.rungs[2].deviation == pytest.approx(np.hypot(0.3, 0.02), abs=1e-9)
    assert result.rungs[0].spoilers == (1,)
    assert result.rungs[1].spoilers == (2, 3, 4, 5)


def test_loose_geometry_from_c1_upwards():
    """A loose rectangle: C1 or a little more at 0.02 Å, D2h higher up."""
    rng = np.random.default_rng(41)
    rectangle = np.array([[0, 0, 0], [0.3, 0, 0], [0, -0.3, 0], [-0.3, 0, 0], [0, 0.3, 0]])
    result = ladder(xef4(rectangle + noise(rng, 5, 0.06)), tolerance=0.02)
    check_ladder(result)
    assert rungs_of(result)[0] in ("C1", "Cs", "C2")
    assert "D2h" in rungs_of(result)
    assert rungs_of(result)[-1] == "D4h"
    within = dict(zip(rungs_of(result), (rung.deviation for rung in result.rungs)))
    assert within["D2h"] < 0.07
    assert 0.25 < within["D4h"] < 0.37


def test_one_atom_spoils():
    angles = np.arange(6) * np.pi / 3
    ring = np.column_stack((np.cos(angles), np.sin(angles), np.zeros(6)))
    benzene = np.vstack((1.39 * ring, 2.48 * ring))
    benzene[11, 2] += 0.15
    result = ladder(Structure.from_atoms(["C"] * 6 + ["H"] * 6, benzene))
    check_ladder(result)
    assert rungs_of(result)[0] == "Cs"
    assert rungs_of(result)[-1] == "D6h"
    assert all(12 in rung.spoilers for rung in result.rungs[:-1])
    assert result.rungs[-2].spoilers == (12,)
    assert ladder(Structure.from_atoms(["C"] * 6 + ["H"] * 6, np.vstack((1.39 * ring, 2.48 * ring)))).next is None


@pytest.mark.parametrize(("labels", "places", "expected"), [
    (["O", "H", "H"], [[0, 0, 0.3], [0.95, 0, 0], [-0.95, 0, 0]], ["C2v", "D∞h"]),
    (["H", "C", "N"], [[-1.06, 0.1, 0], [0, 0, 0], [1.15, 0.1, 0]], ["Cs", "C∞v"]),
    (["O", "C", "O"], [[-1.16, 0.3, 0], [0, 0, 0], [1.16, 0.3, 0]], ["C2v", "D∞h"]),
    (["O", "C", "S"], [[-1.16, 0, 0], [0, 0, 0], [1.56, 0, 0]], ["C∞v"]),
    (["O", "C", "O"], [[-1.16, 0, 0], [0, 0, 0], [1.26, 0, 0]], ["C∞v", "D∞h"]),
    (["He"], [[0, 0, 0]], ["Kh"]),
], ids=["bent water", "HCN", "CO2", "OCS", "CO2 unlike bonds", "He"])
def test_near_lines(labels, places, expected):
    result = ladder(Structure.from_atoms(labels, np.array(places, dtype=float)))
    assert rungs_of(result) == expected
    check_ladder(result)


def test_rungs_go_up_to_half_the_shortest_distance():
    """A bend of 0.4 Å is beyond half of 0.74 Å but within 0.5 Å."""
    places = np.array([[0, 0, 0], [0.74, 0.8, 0], [-0.74, 0.8, 0]])
    for scale, expected in ((1.0, ["C2v"]), (0.5, ["C2v", "D∞h"])):
        bent = places * [1, scale, 1]
        assert rungs_of(ladder(Structure.from_atoms(["O", "H", "H"], bent))) == expected


@pytest.mark.parametrize("symbol", ["D3h", "D4d", "Td", "C5v", "D6", "Oh"])
def test_noise_beyond_the_tolerance_leaves_the_group_on_the_ladder(symbol):
    rng = np.random.default_rng(43)
    names, points = orbit_structure(symbol, rng, orbits=2, apart=1.6)
    structure, _ = posed(names, points, rng, 0.12)
    result = ladder(structure)
    check_ladder(result)
    assert symbol in rungs_of(result)
    assert find_symmetry(structure).group.symbol == rungs_of(result)[0]
    rung = result.rungs[rungs_of(result).index(symbol)]
    # the averaged structure is exactly what the rung says
    assert find_symmetry(rung.symmetry.symmetrised, 0.001).group.symbol == symbol


@settings(max_examples=40, deadline=None, derandomize=True)
@given(st.integers(0, 10**6), st.floats(0.01, 0.2))
@example(1662, 0.09375)            # two D2h share their deviation: D4h moves the deciding atom as they do
@example(387, 0.07747126429317966)      # D2d and D2h share it
def test_the_ladder_does_not_depend_on_the_pose(seed, length):
    rng = np.random.default_rng(seed)
    shaken = xef4(noise(rng, 5, length))
    first = ladder(shaken)
    check_ladder(first)
    turned = ladder(shaken.moved(shaken.positions @ random_rotation(rng).T + rng.normal(size=3)))
    assert rungs_of(turned) == rungs_of(first)
    assert [r.deviation for r in turned.rungs] == pytest.approx([r.deviation for r in first.rungs], abs=1e-6)
    assert [r.spoilers for r in turned.rungs] == [r.spoilers for r in first.rungs]


def test_the_last_rung_stands_apart_when_nothing_follows_for_long():
    """The rule takes ratios between rungs and never suggests the last one: that it ends a wider gap is told beside."""
    octahedron = 1.56 * np.concatenate((np.zeros((1, 3)), np.eye(3), -np.eye(3)))
    rough = octahedron + np.random.default_rng(6).normal(size=(7, 3)) * 0.012
    result = ladder(Structure.from_atoms(["S"] + ["F"] * 6, rough))
    assert rungs_of(result)[-1] == "Oh" and result.suggested < len(result.rungs) - 1
    assert result.stands_apart and result.reach == 0.5
    assert not ladder(Structure.from_atoms(["S"] + ["F"] * 6, octahedron)).stands_apart
    assert not ladder(xef4([[0, 0, 0], [0.4, 0, 0], [0, 0, 0], [0, 0, 0], [0, 0, 0]])).stands_apart


def test_as_group():
    structure = xef4([[0, 0, 0], [0, 0, 0.12], [0, 0, -0.12], [0, 0, 0.12], [0, 0, -0.12]])
    symmetry = as_group(structure, "D4h")
    assert symmetry.group is point_group("D4h")
    assert symmetry.deviation == pytest.approx(0.12, abs=1e-9)
    assert symmetry.deviation <= symmetry.tolerance
    assert as_group(structure, "D2d").deviation < 1e-9
    with pytest.raises(VibsymError, match=r"does not approach Td; its rungs are D2d \(0\.000 Å\), D4h \(0\.120 Å\)"):
        as_group(structure, "Td")
    with pytest.raises(VibsymError):
        as_group(structure, "Q9")


def test_linear_rung_by_name():
    bent = Structure.from_atoms(["O", "H", "H"], [[0, 0, 0.3], [0.95, 0, 0], [-0.95, 0, 0]])
    symmetry = as_group(bent, "Dinfh")
    assert symmetry.group.symbol == "D∞h"
    assert symmetry.deviation == pytest.approx(0.2, abs=1e-9)        # O 0.2 Å and H 0.1 Å from the line between them


# Numbers of subgroups of the abstract groups A4 10, S4 30, S4 x C2 98, A5 59, A5 x C2 164: from memory, any text on
# finite groups; of D_n: sum of the divisors of n + number of divisors of n.
@pytest.mark.parametrize(("symbol", "count"), [("T", 10), ("Td", 30), ("O", 30), ("Oh", 98), ("I", 59), ("Ih", 164),
                                               ("D6", 16), ("C5v", 8), ("D9", 16), ("C12", 6)])
def test_all_subgroups_are_found(symbol, count):
    assert len(closed_subsets(point_group(symbol).product)) == count


def exhaustive_groups(structure, limit):
    """Return {order: smallest deviation}, trying every permutation of like atoms with either determinant."""
    points, kinds = structure.positions - structure.positions.mean(axis=0), structure.kinds
    moves = np.array([p for p in permutations(range(len(points))) if (kinds[list(p)] == kinds).all()])
    moves, signs = np.concatenate((moves, moves)), np.repeat([1, -1], len(moves))
    maps = fitted_maps(correlation(points, moves), signs)
    near = residuals(points, maps, moves).max(axis=1) <= 3 * limit
    moves, signs, maps = moves[near], signs[near], maps[near]
    place_of = {(row.tobytes(), sign): k for k, (row, sign) in enumerate(zip(moves, signs.tolist()))}
    table = np.array([[place_of.get((a[b].tobytes(), s * t), -1) for b, t in zip(moves, signs.tolist())]
                      for a, s in zip(moves, signs.tolist())])
    best = {}
    for members in closed_subsets(table):
        inside = np.full(len(table), -1)
        inside[members] = np.arange(len(members))
        products = inside[table[np.ix_(members, members)]]
        placement = place(points, moves[members], signs[members], maps[members], products)
        if placement is not None and placement.deviation <= limit:
            best[placement.order] = min(placement.deviation, best.get(placement.order, np.inf))
    return best


@pytest.mark.parametrize("seed", range(12))
def test_against_every_permutation(seed):
    """The search through pairs of atoms finds what trying all permutations finds, up to a quarter of the shortest
    distance.
    """
    rng = np.random.default_rng(seed)
    shapes = [SQUARE, np.array([[0, 0, 0], [1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1.0]]),
              1.7 * np.array([[0, 0, 0], [1, 0, 0], [-0.5, 0.866, 0], [-0.5, -0.866, 0], [0, 0, 1]])]
    structure = Structure.from_atoms(["C", "F", "F", "F", "F"], shapes[seed % 3] + noise(rng, 5, 0.25))
    centred = centre(structure)
    limit = 0.25 * centred.shortest
    expected = exhaustive_groups(structure, limit)
    for order, deviation in expected.items():
        symmetry = find_symmetry(structure, max(deviation + 1e-9, 1e-6))
        assert symmetry.group.infinite or symmetry.group.order >= order
    highest = find_symmetry(structure, limit)
    assert highest.group.order == max(expected)
    assert highest.deviation == pytest.approx(expected[max(expected)], abs=1e-7)
