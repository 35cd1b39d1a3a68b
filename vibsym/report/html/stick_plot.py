"""The bands on the page: observed against estimated as sticks, and measured curves with the peaks that were taken."""

from html import escape

from vibsym.report.sticks import Stick, curve_svg, sticks_svg

WIDE, NARROW = 680.0, 344.0


def observed_sticks(observed) -> list[Stick]:
    """Return the lines of a band list as sticks."""
    return [Stick(line.wavenumber, line.spectrum, line.strength, _polarisation(line)) for line in observed.lines]


def assignment_sticks(assignment) -> list[Stick]:
    """Return all lines of an assignment, named where they are assigned, and the estimates of every fundamental."""
    sticks = []
    for row in assignment.assigned:
        for band in (row.infrared, row.raman):
            if band is not None:
                sticks += [Stick(line.wavenumber, line.spectrum, line.strength, _polarisation(line), row.mode.name,
                                 row.mode.species) for line in band.lines]
    sticks += [Stick(line.wavenumber, line.spectrum, line.strength, _polarisation(line), leftover=True)
               for band in assignment.leftover for line in band.lines]
    low, high = (end([stick.wavenumber for stick in sticks]) for end in (min, max)) if sticks else (0.0, 5000.0)
    room = max(0.15 * (high - low), 60.0)
    return sticks + [each for each in estimate_sticks(assignment.estimates.modes)
                     if low - room <= each.wavenumber <= high + room]


def estimate_sticks(modes) -> list[Stick]:
    """Return the estimates of modes, one for each spectrum in which the mode is active."""
    return [Stick(mode.wavenumber, spectrum, "", "", mode.name, mode.species, observed=False)
            for mode in modes if mode.wavenumber > 0
            for spectrum, active in (("IR", mode.infrared), ("Raman", mode.raman)) if active]


def plot(sticks: list[Stick], title: str, links: bool = True, prefix: str = "") -> str:
    """Return the plot twice, for wide and for narrow screens; the style of the page shows one."""
    if not sticks:
        return ""
    wide, narrow = (sticks_svg(sticks, width, title, links=links, prefix=prefix) for width in (WIDE, NARROW))
    return f'<div class="plot"><div class="wide">{wide}</div><div class="narrow">{narrow}</div></div>'


def curve(found) -> str:
    """Return a measured spectrum with its peaks, for wide and for narrow screens."""
    title = f"Measured {found.spectrum.spectrum} spectrum, {len(found.peaks)} peaks marked"
    wide, narrow = (curve_svg(found, width, title) for width in (WIDE, NARROW))
    caption = f"{found.spectrum.source}: {found.spectrum.ordinate}; {found.statement}."
    return (f'<h3>Measured {"infrared" if found.spectrum.spectrum == "IR" else "Raman"} spectrum</h3><div class="plot">'
            f'<div class="wide">{wide}</div><div class="narrow">{narrow}</div></div><p class="key">{escape(caption)} '
            "Triangles mark what was taken; vibsym peaks writes the list for correction.</p>")


KEY = ("Infrared stands up on solid sticks, Raman hangs down on broken ones; wavenumbers fall to the right. A full "
       "disc at the tip: polarised, an open one: depolarised, a question mark: left over. Small triangles: estimates "
       "of the force field. Heights follow the stated strength.")


def _polarisation(line) -> str:
    return "p" if line.polarised else "dp" if line.depolarised else ""
