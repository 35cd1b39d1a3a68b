"""What to expect: the species of the vibrations of a structure and the bands they allow.

`expect` is the main job of vibsym in one call.  The counts come at once; the words for the axes, the next rung of the
ladder and the cautions are computed when they are asked for.
"""

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from vibsym.errors import VibsymError
from vibsym.spectra.activity import Counts, SpeciesRow, count_bands, species_rows
from vibsym.structures.structure import Structure, structure_of
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, LOCAL_TOLERANCE, Symmetry
from vibsym.vibrations.cartesian import Displacements, displacements

if TYPE_CHECKING:
    from vibsym.spectra.contours import GasPhase
    from vibsym.spectra.oscillators import Oscillators


@dataclass(frozen=True)
class Expectation:
    """Γ3N, Γvib and the number of bands of a structure in its group.

    `found` is the symmetry within the tolerance when the analysis was made in another group of the ladder
    (`as_group`); `oscillators` one set of stretches, `gas` the band contours, where they were asked for.
    """

    symmetry: Symmetry
    displacements: Displacements
    found: Symmetry | None = None
    oscillators: "Oscillators | None" = None
    gas: "GasPhase | None" = None

    @property
    def structure(self) -> Structure:
        """The structure as read."""
        return self.symmetry.structure

    @property
    def gamma_3n(self) -> dict[str, int]:
        """Species of all displacements."""
        return self.displacements.gamma_3n

    @property
    def gamma_translation(self) -> dict[str, int]:
        """Species of the translations."""
        return self.displacements.gamma_translation

    @property
    def gamma_rotation(self) -> dict[str, int]:
        """Species of the rotations."""
        return self.displacements.gamma_rotation

    @property
    def gamma_vib(self) -> dict[str, int]:
        """Species of the vibrations."""
        return self.displacements.gamma_vib

    @cached_property
    def species(self) -> tuple[SpeciesRow, ...]:
        """Every species of a finite group, of an infinite one those that occur."""
        return species_rows(self.gamma_vib, self.symmetry.group)

    @cached_property
    def counts(self) -> Counts:
        """How many fundamentals there are, and how many each spectrum can show at most."""
        return count_bands(self.gamma_vib, self.symmetry.group)

    @property
    def vibrations(self) -> int:
        """3N less translations and rotations; a doubly degenerate set counts two here."""
        return round(float(self.displacements.chi_vib[0]))

    @cached_property
    def axes(self):
        """Where the axes point, in words, and what the other choice would exchange (`AxisChoice`)."""
        from vibsym.structures.axes import axis_words

        return axis_words(self.symmetry)

    @cached_property
    def regions(self):
        """Γvib by region: which vibrations are stretches of which bonds, which are bends (`Regions`)."""
        from vibsym.spectra.regions import regions

        return regions(self.symmetry)

    @cached_property
    def ladder(self):
        """The group within the tolerance and the higher ones that the structure approaches (`Ladder`)."""
        from vibsym.structures.ladder import ladder

        found = self.found or self.symmetry
        return ladder(self.structure, found.tolerance, known=found)

    @cached_property
    def notes(self) -> tuple[str, ...]:
        """What to beware of: one sentence each."""
        from vibsym.spectra.cautions import cautions

        return cautions(self)

    def to_dict(self) -> dict:
        """Return the result for JSON (keys in table order)."""
        answer = {"structure": self.structure.to_dict(), "point_group": self.symmetry.to_dict()}
        if self.found is not None:
            answer["found"] = self.found.to_dict()
        return answer | {
            "gamma_3n": dict(self.gamma_3n), "gamma_translation": dict(self.gamma_translation),
            "gamma_rotation": dict(self.gamma_rotation), "gamma_vib": dict(self.gamma_vib),
            "species": [row.to_dict() for row in self.species], "counts": self.counts.to_dict(),
            "axes": dict(self.axes.words), "exchange": list(self.axes.exchange), **self.regions.to_dict(),
            **(self.oscillators.to_dict() if self.oscillators else {}), "next_rung": self._next_rung(),
            "notes": list(self.notes), **({"gas": self.gas.to_dict()} if self.gas else {})}

    def _next_rung(self) -> dict | None:
        rung = self.ladder.next if self.found is None else None
        return rung and {"symbol": rung.symbol, "deviation": rung.deviation}


def expect(source, tolerance: float = DEFAULT_TOLERANCE, *, as_group: str | None = None, axes: str | None = None,
           oscillators: str | None = None, local: bool = False, local_tolerance: float = LOCAL_TOLERANCE,
           distinguish: bool = False, gas: bool = False, temperature: float | None = None,
           zeta=None) -> Expectation:
    """Return what infrared and Raman spectra of a structure can show.

    `source` is a `Structure`, a `Symmetry`, or any object that offers chemical symbols and positions; `tolerance` in
    Å. With `as_group` the analysis is made in that group of the ladder, with `axes` in another choice of axes
    (`swap`, or an order such as `yxz`).  `oscillators` (`C-O`, `Mo-C-O`, `2-3,4-5`) looks at one set of stretches,
    with `local` also in the group of what they see (vibsym/spectra/oscillators.py).  `gas` adds the contours of a gas
    at `temperature` (K; 296 by default) with the Coriolis constant `zeta` (vibsym/spectra/contours.py).
    """
    if oscillators is None and (local or distinguish or local_tolerance != LOCAL_TOLERANCE):
        option = "--local" if local else "--distinguish" if distinguish else "--local-tolerance"
        raise VibsymError(f"{option} needs --oscillators: name the stretches, as in --oscillators C-O")
    if not local and (distinguish or local_tolerance != LOCAL_TOLERANCE):
        option = "--distinguish" if distinguish else "--local-tolerance"
        raise VibsymError(f"{option} belongs to --local: it shapes the local group of the oscillators")
    symmetry, found = _symmetry(source, tolerance, as_group, axes)
    chosen = None
    if oscillators is not None:
        from vibsym.spectra.oscillators import oscillators as look_at

        chosen = look_at(symmetry, oscillators, local, local_tolerance, distinguish)
    counted = displacements(symmetry)
    contours = None
    if gas:
        from vibsym.spectra.contours import DEFAULT_TEMPERATURE, gas_phase

        kelvin = DEFAULT_TEMPERATURE if temperature is None else temperature
        contours = gas_phase(symmetry, counted.gamma_vib, kelvin, zeta)
    elif temperature is not None or zeta is not None:
        raise VibsymError("--temperature and --zeta belong to --gas: they shape the bands of a gas")
    return Expectation(symmetry, counted, found, chosen, contours)


def _symmetry(source, tolerance: float, as_group: str | None, axes: str | None) -> tuple[Symmetry, Symmetry | None]:
    """Return the symmetry for the analysis and, where that is another rung, the one found."""
    if isinstance(source, Symmetry):
        return source, None
    from vibsym.structures.finder import find_symmetry

    structure = structure_of(source)
    found = find_symmetry(structure, tolerance, axes=None if as_group else axes)
    if as_group is None:
        return found, None
    from vibsym.structures.ladder import as_group as in_group

    return in_group(structure, as_group, tolerance, axes), found
