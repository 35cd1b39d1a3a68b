"""A normal-mode analysis as asked for: force field with own constants, imported Hessian, refinement."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from vibsym.errors import VibsymError
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.estimates import Estimates, estimate
from vibsym.vibrations.forcefield import ForceField, standard_field
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.normal_modes import Mode
from vibsym.vibrations.refinement import Refinement, refine


@dataclass(frozen=True, eq=False)
class NormalModes:
    """The modes of a structure and where they come from."""

    symmetry: Symmetry
    modes: tuple[Mode, ...]
    fallback: tuple[dict, ...] = ()
    notes: tuple[str, ...] = ()
    field: ForceField | None = None  # None: an imported Hessian
    refinement: Refinement | None = None

    def to_dict(self) -> dict:
        """Return the JSON object."""
        answer = {"structure": self.symmetry.structure.to_dict(), "point_group": self.symmetry.to_dict(),
                  "modes": [mode.to_dict() for mode in self.modes], "fallback": list(self.fallback)}
        if self.notes:
            answer["notes"] = list(self.notes)
        if self.refinement is not None:
            answer["refinement"] = self.refinement.to_dict()
        return answer


def analyse(symmetry: Symmetry, *, constants: str | None = None, hessian: str | None = None,
            unit: str = "hartree/bohr2", mass_weighted: bool = False) -> NormalModes:
    """Return the modes of the tabulated force field, with `constants` (a TOML file) put in, or of a Hessian file."""
    if hessian is None:
        if mass_weighted:
            raise VibsymError("--mass-weighted belongs to --hessian FILE; give the Hessian too")
        field = _field(symmetry, constants)
        return _by_field(symmetry, field)
    if constants is not None:
        raise VibsymError("--hessian and --force-constants are two sources of one thing; give one of them")
    from vibsym.vibrations.hessian import hessian_modes, read_hessian

    found = hessian_modes(symmetry, read_hessian(hessian, len(symmetry.structure)), unit, mass_weighted)
    return NormalModes(symmetry, found.modes, (), found.notes)


def with_refinement(result: NormalModes, molecules: Sequence) -> NormalModes:
    """Return the analysis refined to assigned fundamentals: (symmetry, modes) of each isotopologue."""
    if result.field is None:
        raise VibsymError("--refine adjusts a force field; leave --hessian out")
    found = refine(result.field, molecules)
    return replace(_by_field(result.symmetry, found.field), refinement=found)


def estimates_with(symmetry: Symmetry, constants: str | None) -> Estimates:
    """Return the estimates of the tabulated field, or with the constants of a file."""
    return estimate(symmetry, _field(symmetry, constants))


def _field(symmetry: Symmetry, constants: str | None) -> ForceField:
    """Return the tabulated field, with the constants of a TOML file put in."""
    _need_masses(symmetry)
    if constants is None:
        return standard_field()
    from vibsym.vibrations.constants import read_constants

    own = read_constants(constants, symmetry.structure.symbols, internal_coordinates(symmetry))
    return standard_field().with_constants(own)


def _need_masses(symmetry: Symmetry) -> None:
    structure = symmetry.structure
    if structure.is_dummy.any():
        atom = int(structure.is_dummy.argmax())
        raise VibsymError(f"{structure.source or structure.formula}: atom {atom + 1} ({structure.symbols[atom]}) is a "
                          "dummy atom without mass; normal modes need real atoms")


def _by_field(symmetry: Symmetry, field: ForceField) -> NormalModes:
    found = estimate(symmetry, field)
    notes = [f"{each['set']}: no tabulated constant; Badger's rule gives {each['constant']:.0f} N/m"
             for each in found.fallback]
    loose = sum(abs(mode.wavenumber) < 1 for mode in found.modes)
    if loose:
        notes.append(f"{loose} vibrations have no restoring force in this field: no coordinate along bonds describes "
                     "them")
    return NormalModes(symmetry, found.modes, found.fallback, tuple(notes), field)
