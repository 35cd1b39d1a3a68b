"""What descent in symmetry does to spectra: which species become active, which split, how many bands there are then.

The correlation comes from vibsym/groups/descent.py; with a structure the species are counted with its vibrations.
"""

from dataclasses import dataclass
from functools import cached_property

from vibsym.errors import VibsymError
from vibsym.groups.descent import Embedding, all_embeddings, descend_gamma, embeddings
from vibsym.groups.pointgroup import point_group
from vibsym.spectra.activity import Counts, activity_changes, count_bands
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.cartesian import displacements


@dataclass(frozen=True, eq=False)
class Descent:
    """A group with the embeddings of one subgroup (`to`), or with all classes of its subgroups (`to` None)."""

    group: object
    to: str | None
    embeddings: tuple[Embedding, ...]
    symmetry: Symmetry | None = None

    @cached_property
    def gamma(self) -> dict[str, int] | None:
        """Γvib of the structure; None for a bare group."""
        return None if self.symmetry is None else displacements(self.symmetry).gamma_vib

    @cached_property
    def counts(self) -> Counts | None:
        """Band counts before the descent."""
        return None if self.gamma is None else count_bands(self.gamma, self.group)

    def after(self, embedding: Embedding) -> tuple[dict[str, int], Counts]:
        """Return Γvib and the band counts of the structure in a subgroup."""
        below = descend_gamma(self.gamma, self.correlation(embedding), embedding.group)
        return below, count_bands(below, embedding.group)

    def correlation(self, embedding: Embedding) -> dict[str, dict[str, int]]:
        """Return the correlation; with a structure, of the species that it has."""
        table = embedding.correlation
        return table if self.gamma is None else {label: table[label] for label in table if label in self.gamma}

    def activity(self, embedding: Embedding) -> tuple[dict, ...]:
        """Return what each species becomes, with its activity before and after."""
        modes = self.gamma if self.gamma is not None else dict.fromkeys(embedding.correlation)
        return activity_changes(self.group, embedding.group, embedding.correlation, modes)

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        answer = {} if self.symmetry is None else {"structure": self.symmetry.structure.to_dict(),
                                                   "point_group": self.symmetry.to_dict()}
        answer["from"] = self.group.symbol
        if self.gamma is not None:
            answer |= {"gamma_vib": dict(self.gamma), "counts": self.counts.to_dict()}
        if self.to is None:
            return answer | {"subgroups": [self.listed(each) for each in self.embeddings]}
        return answer | {"to": self.to, "embeddings": [self._detailed(each) for each in self.embeddings]}

    def listed(self, each: Embedding) -> dict:
        """Return a class of subgroups as it stands in a list of them, with a structure also its counts."""
        entry = {"symbol": each.group.symbol, "keeps": each.keeps, "order": each.group.order,
                 "conjugates": each.conjugates}
        return entry if self.gamma is None else entry | {"counts": self.after(each)[1].to_dict()}

    def _detailed(self, each: Embedding) -> dict:
        entry = each.to_dict() | {"activity": [
            {key: value for key, value in change.items() if key != "modes" or value is not None}
            for change in self.activity(each)]}
        if self.gamma is not None:
            below, counts = self.after(each)
            entry |= {"gamma_vib": below, "counts": counts.to_dict()}
        return entry


def descend(source, to: str | None = None) -> Descent:
    """Return the descent of a point group (or its symbol), or of the symmetry of a structure, to a subgroup or to all.

    >>> [each.name for each in descend("D4h", "D2d").embeddings]
    ["D2d (S4, C2')", "D2d (S4, C2'')"]
    """
    source = point_group(source) if isinstance(source, str) else source
    symmetry = source if isinstance(source, Symmetry) else None
    group = source if symmetry is None else symmetry.group
    if to is None:
        return Descent(group, None, all_embeddings(group), symmetry)
    found = embeddings(group, to)
    if symmetry is not None and group.symbol == "Kh":
        raise VibsymError("one atom: it has no vibrations to follow")
    return Descent(group, found[0].group.symbol, found, symmetry)
