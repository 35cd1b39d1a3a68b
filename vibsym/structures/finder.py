"""Finding the point group of a structure at a tolerance.

A structure has group G at tolerance t when its deviation from G, the largest distance of an atom from its
group-averaged position with the elements placed by least squares, is at most t (Å). The largest such group is sought:
candidate operations (`candidates.py`), the closed sets among them (`subsets.py`), their best placement
(`placement.py`), symbol and standard frame (`groups/identify.py`), axes by the ladder of choice (`axis_choice.py`).
Single atoms and linear molecules are exact cases (`linear.py`).
"""

from dataclasses import dataclass

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.identify import identified, schoenflies
from vibsym.groups.pointgroup import point_group
from vibsym.structures.axis_choice import chosen_setting, free_frame, settled
from vibsym.structures.candidates import find_operations
from vibsym.structures.distances import closest_pair
from vibsym.structures.linear import LinearPlacement, image_permutations, line_frame, linear_placements
from vibsym.structures.operations import Operations
from vibsym.structures.placement import Placement, place
from vibsym.structures.structure import structure_of
from vibsym.structures.subsets import closed_subsets, consistent, product_table
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, Symmetry

LARGEST_TOLERANCE = 0.5        # Å
SAME = 1e-6                    # Å; deviations that differ by less are equal


@dataclass(frozen=True)
class Centred:
    """A structure about its centroid: points (N, 3), kinds (N,), centroid (3,), shortest distance between atoms (Å)."""

    structure: object
    points: np.ndarray
    kinds: np.ndarray
    centroid: np.ndarray
    shortest: float

    @property
    def most(self) -> float:
        """The largest legal tolerance, Å."""
        return min(LARGEST_TOLERANCE, 0.5 * self.shortest)

    @property
    def rounding(self) -> float:
        """What rounding alone moves the atoms by, Å; no tolerance can be smaller."""
        return 1e-13 * (1.0 + float(np.abs(self.structure.positions).max()))


def find_symmetry(structure, tolerance: float = DEFAULT_TOLERANCE, axes: str | None = None, bonds=None) -> Symmetry:
    """Return the largest point group within `tolerance` (Å) of a structure, with its standard frame.

    `axes` makes another choice of axes where there is one ("swap", or for C2v, D2, D2h an order such as "yxz");
    `bonds` (B, 2) are used by the ladder of choice, by default those of `find_bonds`.
    """
    centred = centre(structure_of(structure))
    tolerance = legal_tolerance(tolerance, centred)
    found = line_within(centred, tolerance)
    if found is None:
        found = largest_group(centred, tolerance)
    return symmetry_of(centred, found, tolerance, axes, bonds)


def centre(structure) -> Centred:
    """Return the structure about its centroid, where least squares puts the point common to all elements."""
    positions = np.asarray(structure.positions, dtype=float)
    centroid = positions.mean(axis=0)
    return Centred(structure, positions - centroid, np.asarray(structure.kinds), centroid, closest_pair(positions)[2])


def legal_tolerance(tolerance, centred: Centred) -> float:
    """Return the tolerance as a number, or raise: it must lie between zero and the smaller of 0.5 Å and half the
    shortest distance.
    """
    try:
        value = float(tolerance)
    except (TypeError, ValueError):
        raise VibsymError(f"the tolerance '{tolerance}' is not a number; give a length in Å such as 0.02") from None
    most = centred.most
    if not value > 0:
        raise VibsymError(f"the tolerance {value:g} Å is not above zero; give a length in Å such as 0.02")
    if value > most + 1e-12:
        why = "0.5 Å" if most == LARGEST_TOLERANCE else f"{most:.3f} Å, half the shortest distance between atoms"
        raise VibsymError(f"the tolerance {value:g} Å is too large; here it can be at most {why}")
    return max(value, centred.rounding)


def line_within(centred: Centred, tolerance: float) -> LinearPlacement | None:
    """Return the linear placement (or the single atom) within the tolerance, the highest first, else None."""
    for placement in linear_placements(centred.points, centred.kinds):
        if placement.deviation <= tolerance:
            return placement
    return None


def largest_group(centred: Centred, tolerance: float) -> Placement:
    """Return the placement of the group of highest order (then smallest deviation) within the tolerance."""
    operations = find_operations(centred.points, centred.kinds, tolerance, centred.shortest)
    table = product_table(operations)
    if table.min() >= 0:
        whole = placed(centred, operations, table)
        if whole is not None and whole.deviation <= tolerance:
            return whole
    return _largest_subset(centred, operations, table, tolerance)


def placed(centred: Centred, operations: Operations, table) -> Placement | None:
    """Return the placement of a closed set of operations, None when the permutations of all atoms do not multiply
    alike.
    """
    if not consistent(operations, table):
        return None
    return place(centred.points, operations.permutations, operations.signs, operations.matrices, table)


def place_subset(centred: Centred, operations: Operations, table, members) -> Placement | None:
    """Return the placement of the closed subset `members` (indices)."""
    members = np.sort(np.asarray(members))
    inside = np.full(len(table), -1)
    inside[members] = np.arange(len(members))
    return placed(centred, operations.chosen(members), inside[table[np.ix_(members, members)]])


def _largest_subset(centred, operations, table, tolerance):
    """Try the closed subsets; the sum of squared shifts never falls from a group to a larger one, so it prunes
    safely.
    """
    known = {}

    def accept(members):
        placement = place_subset(centred, operations, table, members)
        if placement is None:
            return False
        known[frozenset(members)] = placement
        return float(np.sqrt((placement.shifts ** 2).mean())) <= tolerance

    largest = []
    for members in closed_subsets(table, accept=accept):
        placement = known.get(frozenset(members)) or place_subset(centred, operations, table, members)
        if placement is None or placement.deviation > tolerance:
            continue
        if not largest or placement.order >= largest[0].order:
            same = largest and placement.order == largest[0].order
            largest = [*largest, placement] if same else [placement]
    return least_deviating(largest)


def least_deviating(placements):
    """Return the placement of the smallest deviation.

    Two groups often share theirs, when one atom that both move alike decides. The sum of squared shifts, the symbol
    and the permutations break the tie, so that the pose never does.
    """
    least = min(placement.deviation for placement in placements)
    tied = [placement for placement in placements if placement.deviation < least + SAME]
    if len(tied) == 1:
        return tied[0]
    return min(tied, key=lambda placement: (round(float((placement.shifts ** 2).sum()), 6), symbol_of(placement),
                                            _codes(placement)))


def symbol_of(placement) -> str:
    """Return the group symbol of a placement."""
    if isinstance(placement, LinearPlacement):
        return placement.symbol
    return schoenflies(placement.matrices, placement.signs)


def _codes(placement) -> list:
    if isinstance(placement, LinearPlacement):
        return []
    return sorted((row.tolist(), int(sign)) for row, sign in zip(placement.permutations, placement.signs))


def symmetry_of(centred: Centred, found, tolerance: float, axes: str | None = None, bonds=None) -> Symmetry:
    """Return the Symmetry of a placement: symbol, standard frame with the chosen axes, origin at the centre of mass."""
    structure = centred.structure
    averaged, shifts = found.averaged, found.shifts
    if isinstance(found, LinearPlacement):
        group, frame = point_group(found.symbol), line_frame(found.axis)
        permutations = image_permutations(found.symbol, found.turn, len(structure))
    else:
        group, frame, order = identified(found.matrices, found.signs)
        permutations = found.permutations[order]
    frame = free_frame(group.symbol, frame, averaged, structure)
    frame, order = settled(group, frame, averaged)
    permutations = permutations if order is None else permutations[order]
    frame, order, decided = chosen_setting(group, frame, averaged, structure, axes, bonds)
    permutations = permutations if order is None else permutations[order]
    local = averaged @ frame.T
    centre_of_mass = mass_centre(local, structure.masses, group.image.matrices if len(structure) > 1 else None)
    return Symmetry(structure, group, tolerance, float(shifts.max()), centred.centroid + centre_of_mass @ frame, frame,
                    local - centre_of_mass, permutations, shifts, axes, decided, found)


def mass_centre(positions, masses, matrices):
    """Return the centre of mass (dummy atoms have none) of (N, 3) positions, put exactly on every element of the
    group.
    """
    weights = np.where(masses > 0, masses, 0.0)
    total = weights.sum()
    centre = weights @ positions / total if total > 0 else np.zeros(3)
    return centre if matrices is None else matrices.mean(axis=0) @ centre
