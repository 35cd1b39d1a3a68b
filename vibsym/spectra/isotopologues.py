"""All distinct isotopologues of a molecule at given sites, as one result."""

from dataclasses import dataclass

from vibsym.errors import VibsymError
from vibsym.structures.isotopes import Isotopologue, isotopologues
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import DEFAULT_TOLERANCE


@dataclass(frozen=True, eq=False)
class IsotopologueList:
    """The isotopologues, fewest replacements first; together their weights make all arrangements listed."""

    structure: Structure
    isotopologues: tuple[Isotopologue, ...]

    @property
    def arrangements(self) -> int:
        """How many ways there are to replace the sites: 2 to the power of their number, where all are listed."""
        return sum(each.weight for each in self.isotopologues)

    def to_dict(self) -> dict:
        """Return the result for JSON; sites are numbered from 1."""
        return {"structure": self.structure.to_dict(), "arrangements": self.arrangements, "isotopologues": [
            {"formula": each.structure.formula, "point_group": each.symmetry.group.symbol, "weight": each.weight,
             "sites": [site + 1 for site in each.sites]} for each in self.isotopologues]}


def list_isotopologues(structure: Structure, replacements: str,
                       tolerance: float = DEFAULT_TOLERANCE, at_most: int | None = None) -> IsotopologueList:
    """Return every distinct isotopologue with none, some or all of the replacements made, or `at_most` so many."""
    if at_most is not None and at_most < 0:
        raise VibsymError(f"--at-most {at_most}: give how many atoms may be replaced, zero or more")
    counts = None if at_most is None else range(at_most + 1)
    return IsotopologueList(structure, isotopologues(structure, replacements, tolerance, counts))
