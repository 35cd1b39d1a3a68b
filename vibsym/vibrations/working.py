"""The count of vibrations written out as one checks it by hand.

Class by class: how many atoms stay in place, what each of them contributes, the character of Γ3N; then each species
with the reduction formula in numbers,

    n_i = (1/h) * sum over classes of g_c * chi_i(c) * chi_3N(c)        (1/2h for two conjugate species counted as one)

and what translations and rotations take away (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955,
ch. 5).  A linear molecule or a single atom is counted in the finite image of its group.
"""

from dataclasses import dataclass

import numpy as np

from vibsym.groups.pointgroup import PointGroup
from vibsym.vibrations.cartesian import Displacements


@dataclass(frozen=True)
class WorkingLine:
    """One species: g * chi_i * chi_3N for every class, their sum, what divides it, and the multiplicities."""

    label: str
    terms: tuple[tuple[int, float, float], ...]
    total: float
    divisor: int
    in_3n: int
    in_translation: int
    in_rotation: int
    in_vib: int

    def to_dict(self) -> dict:
        """Return the line for JSON."""
        return {"label": self.label, "sum": round(self.total, 6) + 0.0, "divisor": self.divisor, "gamma_3n": self.in_3n,
                "gamma_translation": self.in_translation, "gamma_rotation": self.in_rotation, "gamma_vib": self.in_vib}


@dataclass(frozen=True)
class Working:
    """The table of a `Displacements`: one entry a class, one line a species."""

    displacements: Displacements
    image: PointGroup

    @property
    def lines(self) -> tuple[WorkingLine, ...]:
        """Return every species in the order of the table, of an infinite group those that displacements can carry."""
        group, chi = self.displacements.group, self.displacements.chi_3n
        lines = [self._line(species, chi) for species in self.image.species if species.label in group.image_labels]
        return tuple(sorted(lines, key=lambda line: group.labels.index(line.label)))

    def _line(self, species, chi: np.ndarray) -> WorkingLine:
        terms = tuple((int(size), float(own), float(other))
                      for size, own, other in zip(self.image.class_sizes, species.characters, chi, strict=True))
        total = sum(size * own * other for size, own, other in terms)
        divisor = self.image.order * (2 if species.pair else 1)
        given = self.displacements
        label = given.group.image_labels[species.label]
        return WorkingLine(label, terms, total, divisor, given.gamma_3n.get(label, 0),
                           given.gamma_translation.get(label, 0), given.gamma_rotation.get(label, 0),
                           given.gamma_vib.get(label, 0))

    def to_dict(self) -> dict:
        """Return the working for JSON: `group` is the finite group in which the count was made."""
        given = self.displacements
        columns = zip(self.image.classes, given.unmoved, given.contributions, given.chi_3n, strict=True)
        return {"group": self.image.symbol,
                "classes": [{"symbol": each.symbol, "size": int(each.size), "unmoved": int(unmoved),
                             "contribution": round(float(contribution), 6) + 0.0,
                             "gamma_3n": round(float(chi), 6) + 0.0}
                            for each, unmoved, contribution, chi in columns],
                "species": [line.to_dict() for line in self.lines]}


def working(given: Displacements) -> Working:
    """Return the table by which a chemist checks the count."""
    return Working(given, given.group.image)
