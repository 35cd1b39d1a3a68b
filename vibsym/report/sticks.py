"""Bands as sticks on one wavenumber axis, infrared upwards and Raman downwards.

What a stick says does not hang on colour: infrared sticks are solid and stand on the axis, Raman sticks are broken and
hang from it; a polarised line ends in a full disc, one measured depolarised in an open one, a line left over in a
question mark.  Estimates are triangles that point to their spectrum.
"""

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from vibsym.groups.symbols import typeset
from vibsym.report.drawing import STYLE, svg
from vibsym.report.labels import set_svg

HEIGHTS = {"vvs": 1.0, "vs": 1.0, "s": 0.82, "ms": 0.7, "m": 0.6, "mw": 0.5, "w": 0.38, "vw": 0.24, "vvw": 0.18}
UNKNOWN = 0.6
LABEL = 14.5                   # px between labels
STICKS_STYLE = (STYLE + ".ir{stroke:#a33b12;fill:#a33b12}.raman{stroke:#1f5f8b;fill:#1f5f8b}.axis{stroke:#1c2430}"
                ".faint{stroke:#8a8f98}.curve{fill:none;stroke:#5b6470}.open{fill:#fff}")


class Stick(NamedTuple):
    """One line of a spectrum, or an estimate (`observed` false)."""

    wavenumber: float
    spectrum: str              # "IR" or "Raman"
    strength: str = ""
    polarisation: str = ""     # "p", "dp" or ""
    mode: str = ""
    species: str = ""
    observed: bool = True
    leftover: bool = False


class Scale:
    """Wavenumbers on paper, falling to the right."""

    def __init__(self, values: Sequence[float], left: float, right: float):
        low, high = min(values), max(values)
        margin = max(0.06 * (high - low), 15.0)
        self.low, self.high = max(0.0, low - margin), high + margin
        self.left, self.right = left, right

    def x(self, wavenumber: float) -> float:
        """Return the place of a wavenumber in px."""
        return self.left + (self.high - wavenumber) / (self.high - self.low) * (self.right - self.left)

    def ticks(self, width: float) -> list[float]:
        """Return round wavenumbers, so many that their labels fit."""
        wanted = (self.high - self.low) / max(2.0, width / 75)
        step = next(step for step in (1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000) if step >= wanted)
        first = int(np.ceil(self.low / step))
        return [step * k for k in range(first, int(self.high // step) + 1)]


def sticks_svg(sticks: Sequence[Stick], width: float = 760, title: str = "", alone: bool = False,
               links: bool = False, prefix: str = "") -> str:
    """Return the stick plot; `links` makes each label lead to its mode on the page (`prefix` of its
    structure)."""
    if not sticks:
        return ""
    arm, room = 92.0 if any(each.observed for each in sticks) else 22.0, 84.0
    far = arm + (14 if any(each.leftover for each in sticks) else 0)       # where labels begin, beyond question marks
    above, below = (far + room if any(each.spectrum == name for each in sticks) else 24.0 for name in ("IR", "Raman"))
    middle, height = above + 23, above + below + 46
    scale = Scale([each.wavenumber for each in sticks], 62, width - 12)
    body = _axis(scale, middle, width)
    for spectrum, sign in (("IR", -1), ("Raman", 1)):
        own = [each for each in sticks if each.spectrum == spectrum]
        base = middle + sign * 15
        word = "infrared" if spectrum == "IR" else "Raman"
        body.append(f'<text class="ink" x="56" y="{base + sign * 12 + 4:.1f}" font-size="12.5" font-style="italic" '
                    f'text-anchor="end">{word}</text>')
        body += [_estimate(scale, each, base, sign) for each in own if not each.observed]
        observed = [each for each in own if each.observed]
        body += [_stick(scale, each, base, sign, arm) for each in observed]
        body += _labels(scale, observed or own, base, sign, (arm, far), prefix if links else None)
    return svg(width, height, body, title, alone, STICKS_STYLE)


def _axis(scale: Scale, middle: float, width: float) -> list[str]:
    rails = [f'<line class="axis" stroke-width="1" x1="{scale.left}" x2="{scale.right}" y1="{y:.1f}" y2="{y:.1f}"/>'
             for y in (middle - 15, middle + 15)]
    ticks = []
    for value in scale.ticks(width):
        x = scale.x(value)
        ticks.append(f'<path class="axis" stroke-width="1" d="M{x:.1f} {middle - 15:.1f}v4M{x:.1f} '
                     f'{middle + 15:.1f}v-4"/>'
                     f'<text class="ink" x="{min(x, width - 20):.1f}" y="{middle + 4:.1f}" font-size="11.5" '
                     f'text-anchor="middle">{value:g}</text>')
    return rails + ticks


def _class(each: Stick) -> str:
    return "ir" if each.spectrum == "IR" else "raman"


def _stick(scale: Scale, each: Stick, base: float, sign: int, arm: float) -> str:
    x, y = scale.x(each.wavenumber), base + sign * arm * height_of(each.strength)
    broken = ' stroke-dasharray="6 2.5"' if each.spectrum == "Raman" else ""
    parts = [f'<line class="{_class(each)}" stroke-width="{1.4 if each.leftover else 2.2}"{broken} x1="{x:.1f}" '
             f'x2="{x:.1f}" y1="{base:.1f}" y2="{y:.1f}"/>']
    if each.leftover:
        parts.append(f'<text class="ink" font-size="12" x="{x:.1f}" y="{y + (4 if sign > 0 else 0) + sign * 6:.1f}" '
                     f'text-anchor="middle">?</text>')
    elif each.polarisation:
        empty = "" if each.polarisation == "p" else " open"
        parts.append(f'<circle class="{_class(each)}{empty}" stroke-width="1.6" cx="{x:.1f}" cy="{y:.1f}" r="3.6"/>')
    return "".join(parts)


def height_of(strength: str) -> float:
    """Return the height of a stick from its strength: `m-s, sh` is between m and s."""
    words = strength.split(", ")[0].split("-") if strength else []
    heights = [HEIGHTS[word] for word in words if word in HEIGHTS]
    if heights:
        return sum(heights) / len(heights)
    return 0.3 if "sh" in strength else UNKNOWN


def _estimate(scale: Scale, each: Stick, base: float, sign: int) -> str:
    x = scale.x(each.wavenumber)
    return (f'<path class="{_class(each)}" style="fill:none" stroke-width="1.3" d="M{x - 4:.1f} {base:.1f}L{x:.1f} '
            f'{base + sign * 8:.1f}L{x + 4:.1f} {base:.1f}Z"/>')


def _labels(scale: Scale, sticks: Sequence[Stick], base: float, sign: int, ends: tuple[float, float],
            prefix: str | None) -> list[str]:
    """Labels stand upright beyond the tips, moved apart where they would touch; without room weaker ones go."""
    arm, far = ends
    y = base + sign * (far + 4)
    most = int((scale.right - scale.left) // LABEL)
    kept = sorted(sorted(sticks, key=lambda each: -height_of(each.strength))[:most], key=lambda each: -each.wavenumber)
    places = spread([scale.x(each.wavenumber) for each in kept], LABEL, scale.left + 4, scale.right - 4)
    texts = []
    for each, x in zip(kept, places):
        own = scale.x(each.wavenumber)
        tip = base + sign * (arm * height_of(each.strength) + (20 if each.leftover else 5) if each.observed else 10)
        words = f"{each.wavenumber:.0f}" + (f" {typeset(each.mode)} {typeset(each.species)}" if each.mode else "")
        text = (f'<text class="ink" font-size="11" transform="translate({x + 4:.1f} {y + sign * 4:.1f}) rotate(-90)" '
                f'text-anchor="{"start" if sign < 0 else "end"}">{set_svg(words, 11)}</text>')
        if prefix is not None and each.mode:
            text = f'<a href="#{prefix}{anchor(each.mode)}">{text}</a>'
        texts.append(f'<path class="faint" style="fill:none" stroke-width="0.7" d="M{own:.1f} {tip:.1f}L{own:.1f} '
                     f'{y - sign * 9:.1f}L{x:.1f} {y + sign * 1:.1f}"/>' + text)
    return texts


def anchor(mode: str) -> str:
    """Return the name of the place of a mode on the page: `ν4` is `mode-nu4`."""
    return "mode-" + "".join(c if c.isascii() and c.isalnum() else {"ν": "nu", "'": "p"}.get(c, "_") for c in mode)


def spread(places: Sequence[float], gap: float, low: float, high: float) -> list[float]:
    """Return places at least `gap` apart and within the limits, near the given rising ones.

    >>> spread([10, 11, 50], 10, 0, 60)
    [5.5, 15.5, 50.0]
    """
    groups = [[float(place), 1] for place in places]          # mean place and number of labels that touch
    merged: list[list[float]] = []
    for middle, count in groups:
        merged.append([middle, count])
        while True:
            last = merged[-1]
            half = (last[1] - 1) * gap / 2
            last[0] = min(max(last[0], low + half), high - half)
            if len(merged) < 2 or last[0] - half - (merged[-2][0] + (merged[-2][1] - 1) * gap / 2) >= gap - 1e-9:
                break
            before = merged[-2]
            total = before[1] + last[1]
            merged[-2:] = [[(before[0] * before[1] + last[0] * last[1]) / total, total]]
    return [middle + gap * (k - (count - 1) / 2) for middle, count in merged for k in range(int(count))]


def curve_svg(found, width: float = 760, title: str = "") -> str:
    """Return a measured spectrum (`Peaks`) as a curve with the peaks taken, wavenumbers falling to the right."""
    x, y = found.spectrum.wavenumbers, found.spectrum.signal()
    height, top, bottom = 230.0, 62.0, 196.0
    scale = Scale([float(x[0]), float(x[-1])], 14, width - 14)
    low, high = float(y.min()), float(y.max())
    span = (high - low) or 1.0

    def level(value: float) -> float:
        return bottom - (value - low) / span * (bottom - top)

    points = " ".join(f"{scale.x(a):.1f},{level(b):.1f}" for a, b in _thinned(x, y, int(width)))
    kind = "ir" if found.spectrum.spectrum == "IR" else "raman"
    body = [f'<polyline class="curve" stroke-width="1.1" points="{points}"/>',
            f'<line class="axis" stroke-width="1" x1="14" x2="{width - 14}" y1="{bottom + 6}" y2="{bottom + 6}"/>']
    for value in scale.ticks(width):
        at = scale.x(value)
        body.append(f'<path class="axis" stroke-width="1" d="M{at:.1f} {bottom + 6}v5"/>'
                    f'<text class="ink" font-size="11.5" x="{min(max(at, 26), width - 26):.1f}" y="{bottom + 24}" '
                    f'text-anchor="middle">{value:g}</text>')
    peaks = sorted(found.peaks, key=lambda peak: -peak.wavenumber)
    most = int((width - 36) // LABEL)
    strong = sorted(sorted(peaks, key=lambda peak: -peak.height)[:most], key=lambda peak: -peak.wavenumber)
    for peak in peaks:
        at, up = scale.x(peak.wavenumber), level(float(np.interp(peak.wavenumber, x, y))) - 4
        body.append(f'<path class="{kind}" style="stroke:none" d="M{at - 3.5:.1f} {up - 6:.1f}h7L{at:.1f} {up:.1f}Z"/>')
    for peak, place in zip(strong, spread([scale.x(peak.wavenumber) for peak in strong], LABEL, 18, width - 18)):
        at, up = scale.x(peak.wavenumber), level(float(np.interp(peak.wavenumber, x, y))) - 11
        body.append(f'<path class="faint" style="fill:none" stroke-width="0.7" d="M{at:.1f} {up:.1f}L{at:.1f} '
                    f'{min(up, top - 12):.1f}L{place:.1f} {top - 20:.1f}"/><text class="ink" font-size="11" '
                    f'transform="translate({place + 4:.1f} {top - 23:.1f}) rotate(-90)">{peak.wavenumber:.0f}</text>')
    return svg(width, height, body, title, False)


def _thinned(x, y, most: int):
    """Keep the lowest and the highest point of each column of pixels, in order."""
    if len(x) <= 2 * most:
        return list(zip(x, y))
    kept = set()
    for part in np.array_split(np.arange(len(x)), most):
        kept.update((int(part[y[part].argmin()]), int(part[y[part].argmax()])))
    return [(x[k], y[k]) for k in sorted(kept)]
