"""The structure on the page: the figure that turns, and the motions as cards, each with its drawing."""

import json
import re
from html import escape

from vibsym.groups.symbols import typeset
from vibsym.report.drawing import motion_svg, skeleton_symbol, structure_svg
from vibsym.report.labels import set_labels
from vibsym.report.scene import Motion, Scene
from vibsym.report.sticks import anchor

CARD = (200.0, 150.0)
_ELEMENT = re.compile(r"\b[CS]\d+(?='{0,2} ax[ei]s)'{0,2}")    # "C2 axis" among the words for an axis
MOST_ELEMENTS = 12             # switches; more kinds of elements than any point group of print has


def plate(scene: Scene, motions, name: str, group: str, axes: dict[str, str]) -> str:
    """Return the figure: a drawing that the script turns into a moving one, its switches, and where the axes point."""
    label = f"{name} in its standard frame, point group {group}"
    still = structure_svg(scene, elements=True, width=420, height=330, title=label)
    switches = "".join(_switch(number, each) for number, each in enumerate(scene.elements[:MOST_ELEMENTS]))
    elements = (f'<fieldset class="controls"><legend>Elements of '
                f'symmetry</legend>{switches}</fieldset>' if switches else "")
    faces = "".join(f'<button type="button" data-face="{axis}">along {axis}</button>' for axis in "xyz")
    told = {axis: _ELEMENT.sub(lambda found: typeset(found[0]), text) for axis, text in axes.items()}
    words = "".join(f"<dt>{escape(axis)}</dt><dd>{set_labels(text)}</dd>" for axis, text in told.items())
    caption = f'<figcaption><p class="caption-head">Where the axes point</p><dl>{words}</dl></figcaption>'
    return (f'<figure class="plate"><div class="stage" data-label="{escape(label)}">{still}</div>'
            f'<div class="controls"><button type="button" data-turn aria-pressed="false">Turn</button>{faces}'
            f'<button type="button" data-rest hidden>Rest</button></div><p class="status" role="status"></p>{elements}'
            + (caption if words else "")
            + f'<script type="application/json">{as_data(scene.to_dict(motions))}</script></figure>')


def as_data(value) -> str:
    """Return JSON that can stand inside a script element: no text can end the element or begin a comment."""
    text = json.dumps(value, ensure_ascii=False, separators=(",", ":"), allow_nan=False)
    return text.replace("&", "\\u0026").replace("<", "\\u003c").replace(">", "\\u003e")


def skeleton_store(scene: Scene, name: str) -> str:
    """Return the hidden drawing that all cards of a structure use."""
    return f'<svg class="store" aria-hidden="true">{skeleton_symbol(scene, name, *CARD)}</svg>'


def cards(scene: Scene, motions: list[Motion], skeleton: str, prefix: str, texts: dict[str, str] | None = None) -> str:
    """Return the motions as a list of cards; `texts` adds a line to a card."""
    texts = texts or {}
    found = "".join(_card(scene, each, skeleton, prefix, texts.get(each.key, "")) for each in motions)
    return f'<ul class="motions">{found}</ul>'


def _card(scene: Scene, motion: Motion, skeleton: str, prefix: str, text: str) -> str:
    place = "" if motion.wavenumber is None else f"<span>{motion.wavenumber:.0f} cm⁻¹</span>"
    title = f"{motion.label}: arrows show where the atoms move"
    what = "; ".join(filter(None, (text, motion.description)))
    return (f'<li class="motion" id="{prefix}{anchor(motion.key)}"><h3>{set_labels(motion.label)}</h3>'
            f'<p class="band">{place}{activity_words(motion)}</p>'
            + motion_svg(scene, motion, skeleton, *CARD, title)
            + f'<p class="what">{set_labels(what)}</p><button type="button" class="needs-script" '
              f'data-motion="{escape(motion.key)}" data-label="{escape(motion.label)}" aria-pressed="false">'
              f'Move<span class="hidden-words"> {escape(motion.label)}</span></button></li>')


def activity_words(each) -> str:
    """Return where a motion can be seen, as mark and word."""
    words = []
    if each.infrared:
        words.append('<span class="ir-word">▲ infrared</span>')
    if each.raman:
        words.append(f'<span class="raman-word">▼ Raman{", polarised" if each.polarised else ""}</span>')
    return "".join(words) or "<span>· silent</span>"


def _switch(number: int, each) -> str:
    several = f"{len(each.vectors)} " if len(each.vectors) > 1 else ""
    first = " checked" if number == 0 else ""
    word = {"axis": "axis", "improper": "improper axis", "plane": "mirror plane", "centre": "centre"}[each.kind]
    return (f'<label class="switch" title="{word}"><input type="checkbox" data-element="{number}"{first}>'
            f'<span>{several}{set_labels(typeset(each.symbol))}</span></label>')
