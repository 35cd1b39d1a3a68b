"""Everything the report page shows, computed once: one `Sheet` a structure, and what the observed bands say.

What cannot be had (normal modes of a structure with dummy atoms, coordinates of a very large one) is left out and its
reason told; the rest of the page is made all the same.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from vibsym.errors import VibsymError
from vibsym.evidence.bandlist import BandList
from vibsym.evidence.proposals import screen
from vibsym.evidence.screening import Screening, ScreenOptions
from vibsym.evidence.whole_molecule import Proposal
from vibsym.report.scene import Scene, scene_of
from vibsym.spectra.expectation import Expectation, expect

MOST_ATOMS = 250               # beyond, modes and coordinates are left to their own commands
MOST_COMBINED = 40             # fundamentals whose overtones and sums are matched with lines left over


@dataclass(frozen=True, eq=False)
class Sheet:
    """One structure on the page; what could not be had is None and told in `omitted`."""

    expectation: Expectation
    scene: Scene
    coordinates: object = None         # SymmetryCoordinates
    estimates: object = None           # Estimates: modes of the valence force field
    assignment: object = None          # Assignment
    combined: object = None            # Combined: lines left over with their candidates
    omitted: tuple[str, ...] = ()

    @property
    def symmetry(self):
        """The symmetry in which the structure was analysed."""
        return self.expectation.symmetry


@dataclass(frozen=True, eq=False)
class Report:
    """All sheets with the bands, the screening and the command that made it."""

    sheets: tuple[Sheet, ...]
    observed: BandList | None = None
    screening: Screening | None = None
    command: str = ""
    notes: tuple[str, ...] = ()


def collect(structures: Sequence, observed: BandList | None = None, proposal: Proposal | None = None,
            options: ScreenOptions | None = None, command: str = "") -> Report:
    """Return the report on structures and, where there are any, the observed bands."""
    proposal, options = proposal or Proposal(), options or ScreenOptions()
    sheets = tuple(_sheet(structure, observed, proposal, options) for structure in structures)
    screening = screen(structures, observed, proposal, options) if observed is not None else None
    return Report(sheets, observed, screening, command)


def _sheet(structure, observed, proposal: Proposal, options: ScreenOptions) -> Sheet:
    found = expect(structure, proposal.tolerance, as_group=proposal.as_group, axes=proposal.axes,
                   oscillators=proposal.oscillators, local=proposal.local, local_tolerance=proposal.local_tolerance,
                   distinguish=proposal.distinguish)
    sheet = Sheet(found, scene_of(found.symmetry))
    if len(found.structure) == 1:
        return sheet
    if len(found.structure) > MOST_ATOMS:
        return replace(sheet, omitted=(f"{len(found.structure)} atoms: symmetry coordinates and normal modes are left "
                                       "out of the page; vibsym coordinates and vibsym normal have them",))
    omitted: list[str] = []
    coordinates = _tried(omitted, "Symmetry coordinates", _coordinates, found.symmetry)
    estimates = _tried(omitted, "Normal modes", _estimates, found.symmetry)
    assignment = combined = None
    if observed is not None and estimates is not None:
        assignment = _tried(omitted, "The assignment", _assignment, found.symmetry, observed, options.window, estimates)
        if assignment is not None and assignment.leftover:
            combined = _tried(omitted, "Candidates for the lines left over", _leftovers, assignment)
    return replace(sheet, coordinates=coordinates, estimates=estimates, assignment=assignment, combined=combined,
                   omitted=tuple(omitted))


def _tried(omitted: list[str], what: str, make, *given):
    try:
        return make(*given)
    except VibsymError as error:
        omitted.append(f"{what} left out: {error}")
        return None


def _coordinates(symmetry):
    from vibsym.vibrations.symmetry_coordinates import symmetry_coordinates

    return symmetry_coordinates(symmetry)


def _estimates(symmetry):
    from vibsym.vibrations.estimates import estimate

    return estimate(symmetry)


def _assignment(symmetry, observed: BandList, window: float, estimates):
    from vibsym.evidence.assignment import assign

    return assign(symmetry, observed, window=window, estimates=estimates)


def _leftovers(assignment):
    """Match the lines left over with overtones, sums and differences of the assigned fundamentals."""
    from vibsym.evidence.leftovers import Combined, explain_lines
    from vibsym.spectra.combinations import combine
    from vibsym.spectra.modes import Mode

    known = [Mode(row.mode.name, row.mode.species, row.wavenumber) for row in assignment.assigned]
    if not known:
        raise VibsymError("no fundamental was assigned, so there is nothing to combine")
    if len(known) > MOST_COMBINED:
        raise VibsymError(f"{len(known)} fundamentals have too many combinations; vibsym combine shows them")
    result = combine(assignment.symmetry.group, known)
    lines = [line for band in assignment.leftover for line in band.lines]
    return Combined(result, explain_lines(lines, result), assignment.symmetry)
