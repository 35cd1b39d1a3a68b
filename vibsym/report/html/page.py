"""The report as one HTML file that needs nothing else: style, script, drawings and results are all inside.

Each section is made from the same parts (`report/document.py`) as the page on the terminal, and the JSON of every
result lies in the file (script elements of type application/json, ids `result-...`), so numbers cannot disagree.
"""

import re
from html import escape
from pathlib import Path

from vibsym import __version__
from vibsym.groups.symbols import typeset, typeset_formula
from vibsym.report.collection import Report, Sheet
from vibsym.report.html.sections import SECTIONS, motions_of, shared_sections
from vibsym.report.html.structure_view import as_data, plate, skeleton_store
from vibsym.report.labels import set_group, set_labels
from vibsym.report.triple import holds_tritium, with_letter

# Nothing may be loaded from anywhere; style and script are those of the file itself.
_POLICY = "default-src 'none'; style-src 'unsafe-inline'; script-src 'unsafe-inline'; img-src data:; base-uri 'none'"
_ICON = ("data:image/svg+xml,%3Csvg xmlns='http://www.w3.org/2000/svg' viewBox='0 0 16 16'%3E%3Cpath d='M2 8h12' "
         "stroke='%2324666e'/%3E%3Cpath d='M5 8V2M11 8V4' stroke='%239c3710' stroke-width='2'/%3E%3Cpath d='M7 8v6' "
         "stroke='%231b5a86' stroke-width='2'/%3E%3C/svg%3E")


def report_page(report: Report, triple: str = "T") -> str:
    """Return the page; `triple` is the letter of triply degenerate species (the JSON inside keeps T)."""
    titles = [typeset_formula(sheet.expectation.structure.formula) for sheet in report.sheets]
    names = ", ".join(dict.fromkeys(titles))
    body = []
    if len(report.sheets) > 1:
        body.append(_cover(report, names))
    for number, sheet in enumerate(report.sheets):
        body.append(_article(report, sheet, number))
    body.append(_foot(report))
    return ('<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n'
            '<meta name="viewport" content="width=device-width, initial-scale=1">\n'
            f'<meta http-equiv="Content-Security-Policy" content="{_POLICY}">\n'
            f'<meta name="generator" content="vibsym {__version__}">\n<link rel="icon" href="{_ICON}">\n'
            f"<title>{escape(names)}: infrared and Raman "
            f"bands</title>\n<style>\n{_beside('page.css')}</style>\n</head>\n"
            '<body>\n<a class="skip" href="#text">To the text</a>\n<main id="text" class="sheet-of-paper">\n'
            + _lettered("\n".join(body), report, triple)
            + f"\n</main>\n{_results(report)}<script>\n{_beside('page.js')}</script>\n"
            "</body>\n</html>\n")


def _lettered(text: str, report: Report, triple: str) -> str:
    if triple == "T" or any(holds_tritium(sheet.expectation) for sheet in report.sheets):
        return text
    return with_letter(re.sub("T(?=<(?:sub|tspan[^<>]*)>[12][gu]?</)", triple, text), triple)


def _file_name(sheet: Sheet) -> str:
    """The name of the file without its folder, which is nobody's business but the maker's (the JSON has the path)."""
    return sheet.expectation.structure.source.replace("\\", "/").rpartition("/")[2]


def _beside(name: str) -> str:
    return (Path(__file__).parent / name).read_text(encoding="utf-8")


def _cover(report: Report, names: str) -> str:
    """The head of a page on several structures, with what concerns them all."""
    formulas = [set_labels(typeset_formula(sheet.expectation.structure.formula), True) for sheet in report.sheets]
    rows = "".join(f'<li><a href="#sheet-{number}">{formula}</a>, {escape(_file_name(sheet))}</li>'
                   for number, (formula, sheet) in enumerate(zip(formulas, report.sheets)))
    sections = "".join(_section(number, title, f"all-{key}", text)
                       for number, (key, title, text) in enumerate(shared_sections(report), 1))
    return (f'<header class="top"><h1>{set_labels(names, True)}</h1><p class="source">{len(report.sheets)} '
            f'structures</p></header>'
            f'<ul class="contents">{rows}</ul>{sections}')


def _article(report: Report, sheet: Sheet, number: int) -> str:
    found = sheet.expectation
    group = typeset(found.symmetry.group.symbol)
    formula = typeset_formula(found.structure.formula)
    made = [(key, title, text) for key, title, make in SECTIONS if (text := make(report, sheet, f"s{number}-"))]
    if len(report.sheets) == 1:
        shared = shared_sections(report)
        made = made[:1] + shared + made[1:] if shared else made
    contents = "".join(f'<li><a href="#s{number}-{key}">{escape(title)}</a></li>' for key, title, _ in made)
    sections = "".join(_section(place, title, f"s{number}-{key}", text)
                       for place, (key, title, text) in enumerate(made, 1))
    tag = "h1" if len(report.sheets) == 1 else "h2"
    comment = found.structure.comment.strip()
    told = f'<p class="comment">{escape(comment)}</p>' if comment else ""
    atoms = len(found.structure)
    figure = plate(sheet.scene, motions_of(sheet), formula, group, found.axes.words)
    return (f'<article id="sheet-{number}"><header class="top"><{tag}>{set_labels(formula, True)}</{tag}>'
            f'<span class="stamp" title="point group">{set_group(group)}</span><p class="source">'
            f'{escape(_file_name(sheet))}, {atoms} atom{"s" if atoms != 1 else ""}</p></header>'
            f'<nav aria-label="Sections of {escape(formula)}"><ul class="contents">{contents}</ul></nav>{told}'
            f'{skeleton_store(sheet.scene, f"skeleton-{number}")}<div class="spread"><div '
            f'class="plate-column">{figure}</div>'
            f'<div class="text">{sections}</div></div></article>')


def _section(number: int, title: str, place: str, text: str) -> str:
    return (f'<section id="{place}"><h2><span class="number">{number}</span>{escape(title)}</h2>{text}</section>')


def _foot(report: Report) -> str:
    made = f"<pre><code>{escape(report.command)}</code></pre>" if report.command else ""
    return (f'<section id="made"><h2>How this page was made</h2>{made}<p>vibsym {__version__}. The results stand in '
            "this file as JSON too (script elements named result-...); the page loads nothing from the network.</p>"
            "</section>")


def _results(report: Report) -> str:
    """The JSON of every result, as the commands print it."""
    found = {}
    for number, sheet in enumerate(report.sheets):
        found[f"expect-{number}"] = sheet.expectation.to_dict()
        if sheet.estimates is not None:
            found[f"normal-{number}"] = {"modes": [mode.to_dict() for mode in sheet.estimates.modes],
                                         "fallback": list(sheet.estimates.fallback)}
        if sheet.assignment is not None:
            found[f"assign-{number}"] = sheet.assignment.to_dict()
    if report.screening is not None:
        found["screen"] = report.screening.to_dict()
    if report.observed is not None:
        found["bands"] = report.observed.to_dict()
        found |= {f"peaks-{number}": peaks.to_dict() for number, peaks in enumerate(report.observed.measured)}
    return "".join(f'<script type="application/json" id="result-{name}">{as_data(value)}</script>\n'
                   for name, value in found.items())
