"""Drawings of a structure as SVG: discs and lines as in a book, displacement arrows, elements of symmetry.

What comes nearer is drawn later, each line with a halo of paper round it, so that crossings read.  A displacement
towards the eye is a dot in a ring, one away from it a cross in a ring (the sign used in physics), others are arrows.
Alone (for a paper) a drawing carries its own style; on a page it takes the colours of the page.
"""

from html import escape

import numpy as np

from vibsym.report.labels import set_svg
from vibsym.report.scene import Motion, Scene, tint_of

ARROW = 0.65                   # Å, of the largest displacement in a drawing; shorter than the bond to a hydrogen
MOST_PLANES = 3
CROWDED = 20                   # atoms; in a larger structure the far side is drawn faintly
LETTERED = 9.0                 # px; smaller discs carry no letter
TINTS = {"hydrogen": "#ffffff", "carbon": "#c9c5bb", "nitrogen": "#b9c8ee", "oxygen": "#f3b9a8", "halogen": "#bfe0bd",
         "third": "#f2d992", "noble": "#cfe4ea", "metal": "#d9c2e6", "dummy": "#ffffff"}
STYLE = ("text{font-family:'Helvetica Neue',Arial,'DejaVu Sans',sans-serif}.ink{fill:#1c2430}.rim,.bond{stroke:#1c2430}"
         ".halo{stroke:#fff}.move{stroke:#a33b12;fill:#a33b12}.sheet{fill:#2b6f77;stroke:#2b6f77}"
         + "".join(f".{name}{{fill:{colour}}}" for name, colour in TINTS.items()))


def structure_svg(scene: Scene, motion: Motion | None = None, elements: bool = False, width: float = 420,
                  height: float = 330, title: str = "", alone: bool = False) -> str:
    """Return a drawing; with `motion` its displacements, with `elements` axes, planes and centre.

    On a page it fills width and height; alone it is no larger than what is drawn and a margin.
    """
    flat = scene.positions @ scene.view.T
    box = _Frame(scene, flat, motion, elements, width, height)
    if alone:
        width, height = box.trimmed()
    body = []
    if elements:
        body += [_plane(box, scene, vector) for vector in _planes(scene)]
        body += _axes(box, scene)
    body += _skeleton(scene, flat, box)
    if motion is not None:
        body += _arrows(scene, flat, motion, box)
    return svg(width, height, body, title, alone)


def skeleton_symbol(scene: Scene, name: str, width: float, height: float) -> str:
    """Return the structure as a symbol of the page, to be used under many motions."""
    flat = scene.positions @ scene.view.T
    box = _Frame(scene, flat, None, False, width, height, room=True)
    return f'<symbol id="{name}" viewBox="0 0 {width:g} {height:g}">{"".join(_skeleton(scene, flat, box))}</symbol>'


def motion_svg(scene: Scene, motion: Motion, name: str, width: float, height: float, title: str) -> str:
    """Return a motion drawn over the symbol `name` of the page."""
    flat = scene.positions @ scene.view.T
    box = _Frame(scene, flat, motion, False, width, height, room=True)
    use = f'<use href="#{name}" width="{width:g}" height="{height:g}"/>'
    return svg(width, height, [use, *_arrows(scene, flat, motion, box)], title)


def svg(width: float, height: float, body, title: str = "", alone: bool = False, style: str = STYLE) -> str:
    """Return an SVG element; alone it names its name space and carries its style."""
    own = f'<style>{style}</style>' if alone else ""
    space = ' xmlns="http://www.w3.org/2000/svg"' if alone else ""
    size = f' width="{width:g}" height="{height:g}"' if alone else ""
    name = f' role="img" aria-label="{escape(title)}"' if title else ' aria-hidden="true"'
    head = f"<title>{escape(title)}</title>" if title and alone else ""
    return f'<svg{space}{size} viewBox="0 0 {width:g} {height:g}"{name}>{head}{own}{"".join(body)}</svg>'


class _Frame:
    """Where the drawing lies on the paper: `at` gives the place in px of a point of the flat picture."""

    def __init__(self, scene: Scene, flat: np.ndarray, motion, elements: bool, width: float, height: float,
                 room: bool = False):
        ends = [flat[:, :2] - scene.radii[:, None], flat[:, :2] + scene.radii[:, None]]
        self.arrow = ARROW * min(1.0, 0.6 * scene.reach)
        if room:                                              # for any motion, so that all drawings have one scale
            ends += [ends[0] - 0.9 * self.arrow, ends[1] + 0.9 * self.arrow]
        elif motion is not None:
            moves = (motion.vectors @ scene.view.T)[:, :2]
            sizes = np.maximum(np.linalg.norm(moves, axis=1, keepdims=True), 1e-9)
            ends.append(flat[:, :2] + (self.arrow + scene.radii[:, None] / sizes) * moves)
        if elements:
            ends.append(1.15 * scene.reach * np.array([[1, 1], [-1, -1]]))
        points = np.concatenate(ends)
        low, high = points.min(axis=0), points.max(axis=0)
        span = np.maximum(high - low, 1.0)
        margin = 22 if elements else 8                         # the symbol of an axis stands beyond its end
        most = (0.3 if room else 0.21) * width                 # px for 1 Å: small molecules do not fill the paper
        self.scale = float(min((width - 2 * margin) / span[0], (height - 2 * margin) / span[1], most))
        self.size = span * self.scale + 2 * margin
        self.middle = (low + high) / 2
        self.centre = np.array([width / 2, height / 2])

    def trimmed(self) -> tuple[float, float]:
        """Cut the paper to what is drawn; return its width and height in whole px."""
        width, height = (float(np.ceil(each)) for each in self.size)
        self.centre = np.array([width / 2, height / 2])
        return width, height

    def at(self, point) -> tuple[float, float]:
        """Return the place of a point (Å, in the view) on the page, px."""
        x, y = (np.asarray(point)[:2] - self.middle) * self.scale
        return float(self.centre[0] + x), float(self.centre[1] - y)

    def beyond(self, point, gap: float = 12.0) -> tuple[float, float]:
        """Return the place `gap` px farther out than a point, for its label; beside it where it points at the eye."""
        x, y = self.at(point)
        out = np.asarray(point)[:2] * self.scale
        size = float(np.linalg.norm(out))
        u, v = out / size if size > 6 else (0.8, 0.6)
        return x + gap * float(u), y - gap * float(v)


def _skeleton(scene: Scene, flat: np.ndarray, box: _Frame) -> list[str]:
    """Return bonds and discs from the farthest to the nearest."""
    items = []
    for i, j in scene.bonds:
        away = flat[j] - flat[i]
        length = max(float(np.linalg.norm(away)), 1e-9)
        start, end = flat[i] + away / length * scene.radii[i] * 0.97, flat[j] - away / length * scene.radii[j] * 0.97
        (x, y), (u, v) = box.at(start), box.at(end)
        place = f'x1="{x:.1f}" y1="{y:.1f}" x2="{u:.1f}" y2="{v:.1f}"'
        wide = min(max(1.2, 0.075 * box.scale), 4.2)
        items.append(((flat[i, 2] + flat[j, 2]) / 2 - 0.05,
                      f'<line class="halo" stroke-width="{wide + 3:.1f}" {place}/>'
                      f'<line class="bond" stroke-width="{wide:.1f}" {place}/>'))
    for label, point, radius in zip(scene.labels, flat, scene.radii):
        items.append((point[2], _disc(label, box.at(point), radius * box.scale)))
    return [text for _, text in sorted(items, key=lambda item: item[0])]


def _disc(label: str, place: tuple[float, float], radius: float) -> str:
    x, y = place
    tint = tint_of(label)
    dash = ' stroke-dasharray="2 2"' if tint == "dummy" else ""
    text = ""
    if radius >= LETTERED:
        size = min(1.15 * radius, 18) * (1.0 if len(label) < 3 else 0.75)
        text = (f'<text class="ink" x="{x:.1f}" y="{y + 0.36 * size:.1f}" font-size="{size:.1f}" '
                f'text-anchor="middle">{escape(label)}</text>')
    return (f'<circle class="{tint} rim" cx="{x:.1f}" cy="{y:.1f}" r="{radius:.1f}" '
            f'stroke-width="{min(max(0.8, 0.07 * radius), 1.8):.1f}"{dash}/>{text}')


def _arrows(scene: Scene, flat: np.ndarray, motion: Motion, box: _Frame) -> list[str]:
    """Return the displacements; of a large structure those on the far side are faint and come first."""
    far = flat[:, 2] < -0.15 * scene.reach if len(flat) > CROWDED else np.zeros(len(flat), bool)
    parts = []
    for chosen, faint in ((far, True), (~far, False)):
        drawn = "".join(_arrows_of(scene, flat, motion, box, np.flatnonzero(chosen)))
        parts.append(f'<g opacity="0.3">{drawn}</g>' if faint and drawn else drawn)
    return parts


def _arrows_of(scene: Scene, flat: np.ndarray, motion: Motion, box: _Frame, atoms) -> list[str]:
    """Return the displacements of some atoms: one path of shafts with its halo, one of heads, one of rings."""
    moves = motion.vectors @ scene.view.T
    wide = min(max(1.2, 0.045 * box.scale), 3.4)
    shafts, heads, rings, dots = [], [], [], []
    for point, radius, move in zip(flat[atoms], scene.radii[atoms], moves[atoms]):
        size = float(np.linalg.norm(move))
        if size < 0.04:
            continue
        across = float(np.linalg.norm(move[:2]))
        if across < 0.3 * size:
            _sign(box.at(point), max(3.0, 0.2 * box.scale * size ** 0.5), move[2] > 0, rings, dots)
            continue
        direction = move[:2] / across * [1, -1]
        start = np.array(box.at(point)) + direction * radius * box.scale
        length = max(5.0, across * box.arrow * box.scale)
        head = min(3.6 * wide, 0.7 * length)
        foot, end, side = (start + direction * (length - head), start + direction * length,
                           np.array([-direction[1], direction[0]]) * 0.55 * head)
        shafts.append(f"M{_xy(start)}L{_xy(foot)}")
        heads.append(f"M{_xy(end)}L{_xy(foot + side)}L{_xy(foot - side)}Z")
    path = "".join(shafts)
    return [f'<path class="halo" stroke-width="{wide + 2.4:.1f}" d="{path}"/>'
            f'<path class="move" stroke-width="{wide:.1f}" d="{path}"/>' if shafts else "",
            f'<path class="move" style="stroke:none" d="{"".join(heads + dots)}"/>' if heads or dots else "",
            f'<path class="move" style="fill:none" stroke-width="1.4" d="{"".join(rings)}"/>' if rings else ""]


def _sign(place: tuple[float, float], radius: float, towards: bool, rings: list[str], dots: list[str]) -> None:
    """A displacement towards the eye (ring and dot) or away from it (ring and cross)."""
    x, y = place
    rings.append(_ring(x, y, radius))
    if towards:
        dots.append(_ring(x, y, 0.38 * radius))
        return
    d = 0.7 * radius
    rings.append(f"M{x - d:.1f} {y - d:.1f}l{2 * d:.1f} {2 * d:.1f}M{x - d:.1f} {y + d:.1f}l{2 * d:.1f} {-2 * d:.1f}")


def _ring(x: float, y: float, r: float) -> str:
    return f"M{x - r:.1f} {y:.1f}a{r:.1f} {r:.1f} 0 1 0 {2 * r:.1f} 0a{r:.1f} {r:.1f} 0 1 0 {-2 * r:.1f} 0Z"


def _xy(point) -> str:
    return f"{point[0]:.1f} {point[1]:.1f}"


def _planes(scene: Scene) -> list:
    """Return the normals of the planes that are drawn: kind by kind while they stay few enough to be told apart."""
    shown: list = []
    for each in scene.elements:
        if each.kind == "plane" and len(shown) + len(each.vectors) <= MOST_PLANES:
            shown += each.vectors
    return shown


def _plane(box: _Frame, scene: Scene, normal) -> str:
    """A mirror plane as a thin disc seen askew."""
    normal = np.asarray(normal)
    first = np.cross(normal, [0, 0, 1] if abs(normal[2]) < 0.9 else [1, 0, 0])
    first /= np.linalg.norm(first)
    second = np.cross(normal, first)
    angles = np.linspace(0, 2 * np.pi, 49)[:-1]
    rim = 1.06 * scene.reach * (np.cos(angles)[:, None] * first + np.sin(angles)[:, None] * second)
    points = " ".join("{:.1f},{:.1f}".format(*box.at(point @ scene.view.T)) for point in rim)
    return (f'<polygon class="sheet" fill-opacity="0.06" stroke-width="0.8" stroke-dasharray="5 3" '
            f'points="{points}"/>')


def _axes(box: _Frame, scene: Scene) -> list[str]:
    """The proper axes of the highest order, and the centre, with their symbols."""
    from vibsym.groups.symbols import typeset

    texts = []
    proper = [each for each in scene.elements if each.kind == "axis"]
    shown = [each for each in proper if each.order in (0, max((one.order for one in proper), default=0))][:1]
    for each in shown:
        for vector in each.vectors[:6]:
            end = 1.12 * scene.reach * (np.asarray(vector) @ scene.view.T)
            (x, y), (u, v) = box.at(-end), box.at(end)
            texts.append(f'<line class="sheet" stroke-width="1.3" stroke-dasharray="9 3 2 3" x1="{x:.1f}" y1="{y:.1f}" '
                         f'x2="{u:.1f}" y2="{v:.1f}"/>')
        x, y = box.beyond(1.12 * scene.reach * (np.asarray(each.vectors[0]) @ scene.view.T))
        texts.append(f'<text class="sheet" style="stroke:none" font-size="13" font-style="italic" x="{x:.1f}" '
                     f'y="{y + 4:.1f}" text-anchor="middle">{set_svg(typeset(each.symbol), 13)}</text>')
    if any(each.kind == "centre" for each in scene.elements):
        x, y = box.at(np.zeros(3))
        texts.append(f'<circle class="sheet" style="fill:none" stroke-width="1.2" cx="{x:.1f}" cy="{y:.1f}" '
                     f'r="{scene.ring * box.scale or 3.5:.1f}"/>')
    return texts
