"""The configuration index of a complex: which priority numbers stand trans to each other, or on the axis.

IUPAC, Nomenclature of Inorganic Chemistry, Recommendations 2005, IR-9.3.3 (rules from memory): SP-4 (9.3.3.2), OC-6
(9.3.3.3), SPY-4 and SPY-5 (9.3.3.4), TBPY-5, PBPY-7, HBPY-8 and HBPY-9 (9.3.3.5), TS-3 (9.3.3.6), SS-4 (9.3.3.7).
Other shapes have no index.  Priority numbers come from `priorities.py`; of two alike ligands with three donors one is
primed (IR-9.3.5.3): a primed number ranks just below the unprimed one.
"""

from collections.abc import Sequence

from vibsym.structures.polyhedra import Shape

# (number, primes): compares as the priorities do, 1 before 1' before 2.
Priority = tuple[int, int]
INDEXED = ("TS-3", "SP-4", "SPY-4", "SS-4", "TBPY-5", "SPY-5", "OC-6", "PBPY-7", "HBPY-8", "HBPY-9")


def configuration_index(shape: Shape, priorities: Sequence[Priority]) -> str | None:
    """Return the index with its polyhedral symbol, `OC-6-22`, or None where the shape has none.

    `priorities` holds the priority number of the donor on each site, 1 the highest.

    >>> from vibsym.structures.polyhedra import shape
    >>> numbers = [(1, 0), (1, 0), (1, 0), (2, 0), (2, 0), (2, 0)]            # fac: sites 1, 2, 3 share a face
    >>> configuration_index(shape("OC-6"), numbers)
    'OC-6-22'
    """
    if shape.symbol not in INDEXED:
        return None
    digits = _RULES.get(shape.symbol, _bipyramid)(shape, list(priorities))
    return f"{shape.symbol}-{digits}"


def reference_axes(shape: Shape, priorities: Sequence[Priority], sites: Sequence[int]) -> list[int]:
    """Return the sites of highest priority among `sites` whose trans ligand has the largest number."""
    highest = min(priorities[site] for site in sites)
    ends = [site for site in sites if priorities[site] == highest]
    largest = max(priorities[shape.opposite[site]] for site in ends)
    return [site for site in ends if priorities[shape.opposite[site]] == largest]


def octahedral_axis(shape: Shape, priorities: Sequence[Priority]) -> tuple[list[int], Priority]:
    """Return (upper ends of the reference axes, number trans to the highest priority in the plane across them).

    Among axes that are alike by the first digit those with the largest second digit are kept.
    """
    everywhere = range(len(shape))
    ends = reference_axes(shape, priorities, everywhere)
    second = {}
    for end in ends:
        plane = [site for site in everywhere if site not in (end, shape.opposite[end])]
        second[end] = priorities[shape.opposite[reference_axes(shape, priorities, plane)[0]]]
    largest = max(second.values())
    return [end for end in ends if second[end] == largest], largest


def ring_sequence(numbers: Sequence[Priority]) -> list[Priority]:
    """Return the numbers around a ring, begun so that the sequence is the lowest, in the direction given."""
    return min(list(numbers[start:]) + list(numbers[:start]) for start in range(len(numbers)))


def _octahedron(shape: Shape, priorities: list[Priority]) -> str:
    ends, second = octahedral_axis(shape, priorities)
    return _write(priorities[shape.opposite[ends[0]]], second)


def _square(shape: Shape, priorities: list[Priority]) -> str:
    end = reference_axes(shape, priorities, range(4))[0]
    return _write(priorities[shape.opposite[end]])


def _square_pyramid(shape: Shape, priorities: list[Priority]) -> str:
    end = reference_axes(shape, priorities, range(1, 5))[0]
    return _write(priorities[0], priorities[shape.opposite[end]])


def _bipyramid(shape: Shape, priorities: list[Priority]) -> str:
    axis, ring = sorted(priorities[:2]), priorities[2:]
    around = min(ring_sequence(ring), ring_sequence(ring[::-1]))
    return _write(*axis) + ("-" + _write(*around) if len(ring) > 3 else "")


def _write(*numbers: Priority) -> str:
    return "".join(f"{number}" + "'" * primes for number, primes in numbers)


_RULES = {
    "TS-3": lambda shape, priorities: _write(priorities[0]),
    "SP-4": _square,
    "SPY-4": _square,
    "SS-4": lambda shape, priorities: _write(*sorted(priorities[:2])),
    "SPY-5": _square_pyramid,
    "OC-6": _octahedron,
}
