"""The group of a set of matrices: every group is recognised in every orientation, and its frame is the standard one."""

import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.groups.subgroups import identify, operation_places, standard_frames

GROUPS = ["C1", "Ci", "Cs", *(f"C{n}" for n in range(2, 9)), *(f"C{n}v" for n in range(2, 8)),
          *(f"C{n}h" for n in range(2, 7)), *(f"D{n}" for n in range(2, 8)), *(f"D{n}h" for n in range(2, 9)),
          *(f"D{n}d" for n in range(2, 7)), "S4", "S6", "S8", "S10", "T", "Td", "Th", "O", "Oh", "I", "Ih"]


@pytest.mark.parametrize("symbol", GROUPS)
def test_a_turned_group_is_recognised_and_turned_back(symbol):
    turn = Rotation.random(rng=np.random.default_rng(len(symbol) + ord(symbol[-1]))).as_matrix()
    group = point_group(symbol)
    matrices = np.einsum("ab,hbc,dc->had", turn, group.matrices, turn)
    matrices = matrices[np.random.default_rng(1).permutation(len(matrices))]
    found, frame = identify(matrices)
    assert found == symbol
    assert np.linalg.det(frame) == pytest.approx(1)
    places = operation_places(group, matrices, frame)
    np.testing.assert_allclose(np.einsum("ab,hbc,dc->had", frame, matrices[places], frame), group.matrices, atol=1e-9)


@pytest.mark.parametrize(("symbol", "choices"), [
    ("C2v", 2), ("D2", 6), ("D2h", 6), ("C4v", 2), ("C6v", 2), ("D4h", 2), ("D6", 2), ("D2d", 1), ("D3h", 1), ("Td", 1),
    ("Oh", 1), ("C3v", 1)])
def test_choices_of_axes_are_those_of_the_conventions(symbol, choices):
    """Labels can be exchanged only in C2v, D2, D2h, C(2k)v, D(2k), D(2k)h."""
    assert len(standard_frames(point_group(symbol).matrices)[1]) == choices


def test_matrices_that_are_no_group_are_refused():
    with pytest.raises(VibsymError, match="do not close"):
        identify(point_group("C3").matrices[[0, 1]])
