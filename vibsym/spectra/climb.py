"""The ladder of groups that a structure approaches, with the bands to expect on each rung (`vibsym group`)."""

from dataclasses import dataclass
from functools import cached_property

from vibsym.spectra.expectation import Expectation
from vibsym.structures.structure import Structure, structure_of
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, Symmetry
from vibsym.vibrations.cartesian import displacements


@dataclass(frozen=True)
class Climb:
    """A structure on its ladder: rungs from the group within the tolerance upwards, and the one asked for."""

    structure: Structure
    ladder: object
    chosen: Symmetry | None = None

    @cached_property
    def expectations(self) -> tuple[Expectation, ...]:
        """What to expect on each rung."""
        return tuple(Expectation(rung.symmetry, displacements(rung.symmetry)) for rung in self.ladder.rungs)

    @cached_property
    def found(self) -> Expectation:
        """The lowest rung: the group within the tolerance."""
        return self.expectations[0]

    @property
    def suggested(self) -> Symmetry:
        """The rung before the largest ratio of successive deviations."""
        return self.ladder.rungs[self.ladder.suggested].symmetry

    def to_dict(self) -> dict:
        """Return the ladder for JSON; `spoilers` are the atoms farthest from the next rung, numbered from 1."""
        rungs = [{"point_group": each.symmetry.to_dict(),
                  "deviation": each.symmetry.deviation,
                  "spoilers": list(rung.spoilers), "counts": each.counts.to_dict()}
                 for rung, each in zip(self.ladder.rungs, self.expectations, strict=True)]
        answer = {"structure": self.structure.to_dict(), "point_group": self.found.symmetry.to_dict(),
                  "axes": dict(self.found.axes.words), "rungs": rungs, "suggested": self.suggested.group.symbol,
                  "reach": self.ladder.reach}
        return answer | ({"chosen": self.chosen.to_dict()} if self.chosen is not None else {})


def climb(source, tolerance: float = DEFAULT_TOLERANCE, *, axes: str | None = None,
          as_group: str | None = None) -> Climb:
    """Return the ladder of a structure with the counts of every rung.

    `as_group` names the rung that the user means, an error if it is none; `axes` are chosen in it, else in the group
    found.
    """
    from vibsym.structures.ladder import as_group as in_group
    from vibsym.structures.ladder import ladder

    structure = structure_of(source)
    if not as_group:
        return Climb(structure, ladder(structure, tolerance, axes))
    return Climb(structure, ladder(structure, tolerance), in_group(structure, as_group, tolerance, axes))
