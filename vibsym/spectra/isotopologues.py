"""All distinct isotopologues of a molecule at given sites, as one result."""

from dataclasses import dataclass

from vibsym.structures.finder import DEFAULT_TOLERANCE
from vibsym.structures.isotopes import Isotopologue, isotopologues
from vibsym.structures.structure import Structure


@dataclass(frozen=True, eq=False)
class IsotopologueList:
    """The isotopologues, fewest replacements first; together their weights make all arrangements."""

    structure: Structure
    isotopologues: tuple[Isotopologue, ...]

    @property
    def arrangements(self) -> int:
        """How many ways there are to replace any of the sites, 2 to the power of their number."""
        return sum(each.weight for each in self.isotopologues)

    def to_dict(self) -> dict:
        """Return the result for JSON; sites are numbered from 1."""
        return {"structure": self.structure.to_dict(), "arrangements": self.arrangements, "isotopologues": [
            {"formula": each.structure.formula, "point_group": each.symmetry.group.symbol, "weight": each.weight,
             "sites": [site + 1 for site in each.sites]} for each in self.isotopologues]}


def list_isotopologues(structure: Structure, replacements: str,
                       tolerance: float = DEFAULT_TOLERANCE) -> IsotopologueList:
    """Return every distinct isotopologue with none, some or all of the replacements made."""
    return IsotopologueList(structure, isotopologues(structure, replacements, tolerance))
