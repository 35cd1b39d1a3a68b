"""The ladder of groups that a structure approaches, with the bands to expect on each rung (`vibsym group`)."""

from dataclasses import dataclass
from functools import cached_property

from vibsym.groups.pointgroup import point_group
from vibsym.spectra.expectation import DEFAULT_TOLERANCE, Expectation, point_group_object, rung_named
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.cartesian import displacements


@dataclass(frozen=True)
class Climb:
    """A structure on its ladder: rungs from the group within the tolerance upwards, and the one suggested."""

    structure: Structure
    ladder: object

    @cached_property
    def expectations(self) -> tuple[Expectation, ...]:
        """What to expect on each rung."""
        return tuple(Expectation(rung.symmetry, displacements(rung.symmetry)) for rung in self.ladder.rungs)

    @cached_property
    def found(self) -> Expectation:
        """The highest rung within the tolerance: the group of the structure."""
        inside = [each for each in self.expectations if each.symmetry.deviation <= each.symmetry.tolerance]
        return inside[-1] if inside else self.expectations[0]

    @property
    def suggested(self) -> Symmetry:
        """The rung before the largest ratio of successive deviations."""
        return self.ladder.rungs[self.ladder.suggested].symmetry

    def rung_of(self, symbol: str) -> Symmetry:
        """Return the rung of a group named as people type it."""
        return rung_named(self.ladder, point_group(symbol).symbol, self.structure)

    def to_dict(self) -> dict:
        """Return the ladder for JSON; `spoilers` are the atoms farthest from the next rung, numbered from 1."""
        rungs = [{"point_group": point_group_object(each.symmetry),
                  "deviation": round(float(each.symmetry.deviation), 6),
                  "spoilers": [int(atom) + 1 for atom in rung.spoilers], "counts": each.counts.to_dict()}
                 for rung, each in zip(self.ladder.rungs, self.expectations, strict=True)]
        return {"structure": self.structure.to_dict(), "point_group": point_group_object(self.found.symmetry),
                "axes": dict(self.found.axes.words), "rungs": rungs, "suggested": self.suggested.group.symbol}


def climb(structure: Structure, tolerance: float = DEFAULT_TOLERANCE) -> Climb:
    """Return the ladder of a structure with the counts of every rung."""
    from vibsym.structures.ladder import ladder

    return Climb(structure, ladder(structure, tolerance))
