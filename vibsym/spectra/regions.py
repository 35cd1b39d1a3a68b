"""Γvib by region: which vibrations are stretches of which bonds, which are bends, and how many bands each region can
show.

The sets stand in the order stretch, linear bend, bend, wag, torsion, those of a kind by name; the share of a set in
a species is what it adds to the rank of B (vibsym/vibrations/redundancy.py).  Shares and what is missing add up to
Γvib.  Within a species the division is a way of speaking: the normal modes mix all sets of one species.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from vibsym.spectra.activity import SetBands, count_bands
from vibsym.structures.equivalent_bonds import symmetric_bonds
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.redundancy import Independence, independence

# Beyond these the regions are left out for time: displacements of one species, atoms, entries of B.
MOST_DISPLACEMENTS, MOST_ATOMS, MOST_ENTRIES = 900, 1200, 6_000_000


@dataclass(frozen=True, eq=False, repr=False)
class Regions:
    """The division of Γvib among sets of internal coordinates; empty with a note where the structure is too large."""

    independence: Independence | None
    symmetry: Symmetry

    @cached_property
    def rows(self) -> tuple[SetBands, ...]:
        """One region for each set, also those whose coordinates are all redundant."""
        if self.independence is None:
            return ()
        found = self.independence
        return tuple(SetBands(each.name, dict(share), count_bands(share, self.symmetry.group))
                     for each, share in zip(found.sets, found.shares, strict=True))

    @property
    def missing(self) -> dict[str, int]:
        """Vibrations that no set describes: motions of parts that are not bonded to each other."""
        return {} if self.independence is None else self.independence.missing

    @cached_property
    def shared(self) -> dict[str, tuple[str, ...]]:
        """For each species the sets whose modes can only be mixtures, where there is more than one."""
        if self.independence is None:
            return {}
        found = {label: tuple(row.name for row in self.rows if row.gamma.get(label))
                 for label in self.independence.gamma_vib}
        return {label: names for label, names in found.items() if len(names) > 1}

    @cached_property
    def crowded(self) -> tuple[str, ...]:
        """Species in which the stretches alone are more than the vibrations (cages)."""
        found = self.independence
        if found is None:
            return ()
        stretches = [gamma for each, gamma in zip(found.sets, found.gammas, strict=True) if each.kind == "stretch"]
        return tuple(label for label in self.symmetry.group.labels
                     if sum(gamma.get(label, 0) for gamma in stretches) > found.gamma_vib.get(label, 0))

    @cached_property
    def notes(self) -> tuple[str, ...]:
        """The remarks with labels as in JSON."""
        return self.remarks(str)

    def remarks(self, written: Callable[[str], str]) -> tuple[str, ...]:
        """Say what to know before the division is taken for more than a way of speaking; `written` sets labels."""
        if self.independence is None:
            return ("Too many internal coordinates: the division by region is left out.",)
        notes = []
        if self.crowded:
            notes.append(f"There are more stretches than vibrations in {', '.join(map(written, self.crowded))}: the "
                         "division into regions is conventional.")
        elif self.independence.joined:
            names = list(dict.fromkeys(name for name, _ in self.independence.joined))
            several = len(names) > 3
            names = ", ".join(names[:3]) + (f" and {len(names) - 3} more" if several else "")
            notes.append(f"Redundancies join {names} with the sets above: the division into regions is conventional.")
        if self.missing:
            lacking = " + ".join((str(n) if n > 1 else "") + written(label) for label, n in self.missing.items())
            notes.append(f"The internal coordinates lack {lacking}: motions of parts that are not bonded to each other "
                         "(--bond joins them).")
        return tuple(notes)

    def to_dict(self) -> dict:
        """Return the keys that regions add to JSON."""
        return {"regions": [row.to_dict() for row in self.rows], "missing": dict(self.missing),
                "shared": {label: list(names) for label, names in self.shared.items()},
                "region_notes": list(self.notes)}


def regions(symmetry: Symmetry, bonds=None) -> Regions:
    """Return the division of Γvib by region; `bonds` (B, 2) default to those of the structure."""
    atoms = len(symmetry.positions)
    if atoms > MOST_ATOMS or 3 * atoms / symmetry.group.image.order > MOST_DISPLACEMENTS:
        return Regions(None, symmetry)
    bonds = symmetric_bonds(symmetry) if bonds is None else bonds
    ends = np.bincount(np.asarray(bonds, dtype=int).ravel(), minlength=atoms)
    angles = int((ends * (ends - 1) // 2).sum())
    if angles * 3 * atoms > MOST_ENTRIES:
        return Regions(None, symmetry)
    return Regions(independence(symmetry, internal_coordinates(symmetry, bonds)), symmetry)
