"""From structures to predictions: whole molecules, one region, the local group of the oscillators, every rung.

A structure is screened in its group within the tolerance; `as_group` or `every_rung` work in higher groups of its
ladder, where a weak forbidden band may leak because the true group is lower.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import BandList
from vibsym.evidence.screening import Screening, ScreenOptions, screen_predictions
from vibsym.spectra.expectation import expect
from vibsym.spectra.prediction import Prediction, bands_of_gamma
from vibsym.structures.structure import Structure, structure_of
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, LOCAL_TOLERANCE, Symmetry, within


@dataclass(frozen=True)
class Proposal:
    """How structures are turned into predictions."""

    tolerance: float = DEFAULT_TOLERANCE  # Å
    as_group: str | None = None
    axes: str | None = None               # the other choice of axes, where labels depend on it
    every_rung: bool = False
    oscillators: str | None = None        # "C-O", "Mo-C-O" or atom pairs
    local: bool = False
    local_tolerance: float = LOCAL_TOLERANCE  # Å
    distinguish: bool = False             # donors are alike only if their ligands have one formula


def screen(structures: Sequence, observed: BandList, proposal: Proposal | None = None,
           options: ScreenOptions | None = None, progress=None) -> Screening:
    """Return which of the structures the observed bands allow.

    A structure is a `Structure` or any object that offers chemical symbols and positions.
    """
    proposal = proposal or Proposal()
    predictions = [each for structure in structures for each in predictions_of(structure_of(structure), proposal)]
    return screen_predictions(_named_apart(predictions), observed, options, progress)


def predictions_of(structure: Structure, proposal: Proposal) -> list[Prediction]:
    """Return the predictions of one structure: one, or with `every_rung` one for each group of its ladder."""
    if proposal.every_rung and (proposal.as_group or proposal.local):
        raise VibsymError("--every-rung screens every group of the ladder: leave out --as and --local")
    if proposal.local and not proposal.oscillators:
        raise VibsymError("--local needs the oscillators whose surroundings count, for example --oscillators C-O")
    if proposal.oscillators:
        from vibsym.evidence.regional import regional_predictions

        return regional_predictions(structure, proposal)
    if proposal.every_rung:
        from vibsym.structures.ladder import ladder

        rungs = [rung.symmetry for rung in ladder(structure, proposal.tolerance, proposal.axes).rungs]
        return [whole_molecule(structure, each, rungs[0] if number else None) for number, each in enumerate(rungs)]
    found = expect(structure, proposal.tolerance, as_group=proposal.as_group, axes=proposal.axes)
    return [whole_molecule(structure, found.symmetry, found.found)]


def whole_molecule(structure: Structure, symmetry: Symmetry, true: Symmetry | None = None) -> Prediction:
    """Return all fundamentals of a molecule; `true` is its symmetry if `symmetry` is a higher rung."""
    gamma = expect(symmetry).gamma_vib
    if true is not None and true.group.symbol == symmetry.group.symbol:
        true = None
    rung = f" as {symmetry.group.symbol} ({within(symmetry.deviation)} Å)" if true is not None else ""
    return Prediction(name_of(structure) + rung, structure.to_dict(), symmetry.to_dict(),
                      bands_within(gamma, symmetry, true), true_group=true.group.symbol if true is not None else "")


def bands_within(gamma: dict[str, int], symmetry: Symmetry, true: Symmetry | None, point_like: bool = False):
    """Return the bands of a representation, with what the lower true group and ligands taken as points let through."""
    if true is None:
        return bands_of_gamma(gamma, symmetry.group, point_like=point_like)
    return bands_of_gamma(gamma, symmetry.group, true.group, embedding(symmetry, true), point_like)


def embedding(higher: Symmetry, lower: Symmetry) -> np.ndarray:
    """Return (h,) for each operation of the lower group the one of the higher group that it has become.

    Both are compared as they stand in space: the nearest one of the same determinant, since the axes of an approached
    group lie a little askew.
    """
    def in_space(symmetry: Symmetry) -> np.ndarray:
        return np.einsum("ba,rbc,cd->rad", symmetry.frame, symmetry.group.image.matrices, symmetry.frame)
    above, below = in_space(higher), in_space(lower)
    distance = np.linalg.norm(above[None] - below[:, None], axis=(2, 3))
    distance += 10 * (np.linalg.det(above)[None] * np.linalg.det(below)[:, None] < 0)
    return distance.argmin(axis=1)


def name_of(structure: Structure) -> str:
    """Return the file's name without folder and ending, else the formula."""
    from pathlib import PurePath

    return PurePath(structure.source).stem or structure.formula


def _named_apart(predictions: list[Prediction]) -> list[Prediction]:
    """Return the predictions with names that tell them apart: a second `trans` becomes `trans #2`."""
    from dataclasses import replace

    seen: dict[str, int] = {}
    answer = []
    for each in predictions:
        seen[each.name] = number = seen.get(each.name, 0) + 1
        answer.append(each if number == 1 else replace(each, name=f"{each.name} #{number}"))
    return answer
