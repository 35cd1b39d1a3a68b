"""One drawing by itself, for a paper: `structure`, `sticks`, a normal mode (`ν4`, `v4`) or a coordinate `Eu:1`.

What the command has computed already is handed in; the rest is computed when it is asked for, so that every command
draws everything.
"""

from vibsym.errors import VibsymError
from vibsym.groups.symbols import plain_label, typeset_formula
from vibsym.report.drawing import structure_svg
from vibsym.report.scene import coordinate_motions, mode_motions, scene_of
from vibsym.report.sticks import sticks_svg

SIZE = (560.0, 440.0)


def picture(show: str, symmetry, *, modes=None, coordinates=None, assignment=None) -> str:
    """Return an SVG of what `show` names.

    `modes` (normal modes), `coordinates` (SymmetryCoordinates) and `assignment` are used where given.
    """
    scene = scene_of(symmetry)
    formula = typeset_formula(symmetry.structure.formula)
    if show == "structure":
        return structure_svg(scene, None, True, *SIZE, title=f"{formula}, structure", alone=True) + "\n"
    if show == "sticks":
        from vibsym.report.html.stick_plot import assignment_sticks, estimate_sticks

        sticks = assignment_sticks(assignment) if assignment else estimate_sticks(_modes(symmetry, modes))
        if not sticks:
            raise VibsymError(f"--show sticks: {symmetry.structure.formula} has no bands to draw")
        return sticks_svg(sticks, 760, f"{formula}, bands", alone=True) + "\n"
    motion = _motion(show, symmetry, modes, coordinates)
    return structure_svg(scene, motion, False, *SIZE, title=f"{formula}, {motion.label}", alone=True) + "\n"


def _motion(show: str, symmetry, modes, coordinates):
    from vibsym.spectra.modes import mode_name

    species, colon, number = show.partition(":")
    if colon and number.isdigit():
        wanted = f"{symmetry.group.species_named(plain_label(species)).label}:{int(number)}"
        if coordinates is None:
            from vibsym.vibrations.symmetry_coordinates import symmetry_coordinates

            coordinates = symmetry_coordinates(symmetry)
        motions = coordinate_motions(coordinates)
    else:
        wanted = mode_name(show)
        if not wanted.startswith("ν"):
            raise VibsymError(f"--show {show}: name structure, sticks, a mode such as ν4 (or v4), or a symmetry "
                              "coordinate such as A1:1")
        motions = mode_motions(symmetry, _modes(symmetry, modes))
    for motion in motions:
        if motion.key == wanted:
            return motion
    names = ", ".join(motion.key for motion in motions[:12]) + (" ..." if len(motions) > 12 else "")
    raise VibsymError(f"--show {show}: there is none; there are {names}" if names else
                      f"--show {show}: {symmetry.structure.formula} has none")


def _modes(symmetry, modes):
    if modes is not None:
        return modes
    from vibsym.vibrations.estimates import estimate

    return estimate(symmetry).modes
