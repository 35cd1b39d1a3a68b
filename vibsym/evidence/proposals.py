"""From structures to predictions: whole molecules, one region, the local group of the oscillators, every rung.

A structure is screened in its group within the tolerance; `as_group` or `every_rung` work in higher groups of its
ladder, where a weak forbidden band may leak because the true group is lower.
"""

from collections.abc import Sequence

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import BandList
from vibsym.evidence.screening import Screening, ScreenOptions, screen_predictions
from vibsym.evidence.whole_molecule import Proposal, whole_molecule
from vibsym.spectra.expectation import expect
from vibsym.spectra.prediction import Prediction
from vibsym.structures.structure import Structure, structure_of


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


def _named_apart(predictions: list[Prediction]) -> list[Prediction]:
    """Return the predictions with names that tell them apart: a second `trans` becomes `trans #2`."""
    from dataclasses import replace

    seen: dict[str, int] = {}
    answer = []
    for each in predictions:
        seen[each.name] = number = seen.get(each.name, 0) + 1
        answer.append(each if number == 1 else replace(each, name=f"{each.name} #{number}"))
    return answer
