"""Priority numbers of the donors by the rule of Cahn, Ingold and Prelog, as far as the ligands are known.

The donor of higher atomic number has the higher priority (the lower number); equal elements are told apart by the
atoms next to them, highest first, where these are known (R. S. Cahn, C. Ingold, V. Prelog, Angew. Chem. Int. Ed. 5,
385 (1966); IUPAC, Nomenclature of Inorganic Chemistry, Recommendations 2005, IR-9.3.5).  Deuterium comes before
hydrogen.  What stays open (a named point without a donor, two phosphanes alike in their next atoms) gives every
ranking that is still possible.
"""

from collections.abc import Sequence

from vibsym.structures.arrangements import Colour
from vibsym.structures.elements import atomic_number
from vibsym.structures.labels import HYDROGEN_ISOTOPES
from vibsym.structures.ligands import Ligand

MOST_RANKINGS = 24              # beyond, no index is worked out: too many donors are unknown


def compare(one: Colour, other: Colour, ligands: Sequence[Ligand]) -> int | None:
    """Return 1 where the first donor has priority, -1 where the second, None where it is not known.

    >>> from vibsym.structures.ligands import read_ligands
    >>> sorts = read_ligands(["CO=1", "CN=1", "Cl=1", "L=1"])
    >>> compare(Colour(2, 0), Colour(0, 0), sorts), compare(Colour(0, 0), Colour(1, 0), sorts)
    (1, 1)
    >>> compare(Colour(0, 0), Colour(3, 0), sorts) is None
    True
    """
    first, second = (ligands[colour.ligand].donors[colour.donor] for colour in (one, other))
    if first.element is None or second.element is None:
        return None
    a, b = ((atomic_number(donor.element), HYDROGEN_ISOTOPES.get(donor.name, 0) if donor.element == "H" else 0)
            for donor in (first, second))
    if a == b:
        if first.next_atoms is None or second.next_atoms is None:
            return None
        a, b = (tuple(sorted(map(atomic_number, donor.next_atoms), reverse=True)) for donor in (first, second))
    return None if a == b else 1 if a > b else -1


def rankings(colours: Sequence[Colour], ligands: Sequence[Ligand]) -> list[tuple[int, ...]]:
    """Return all orders of the colours, highest priority first, that the rule allows; none if they are too many.

    >>> from vibsym.structures.arrangements import colours_of
    >>> from vibsym.structures.ligands import read_ligands
    >>> sorts = read_ligands(["CO=4", "L=2"])
    >>> rankings(colours_of(sorts), sorts)
    [(0, 1), (1, 0)]
    """
    size = len(colours)
    above = [[compare(colours[j], colours[k], ligands) == 1 for j in range(size)] for k in range(size)]
    found: list[tuple[int, ...]] = []

    def extend(order: tuple[int, ...]) -> None:
        if len(order) == size:
            found.append(order)
            return
        for k in range(size):
            if len(found) > MOST_RANKINGS:
                return
            if k not in order and not any(above[k][j] and j not in order for j in range(size)):
                extend((*order, k))

    extend(())
    return found if len(found) <= MOST_RANKINGS else []
