"""Results to text: terminal, JSON, CSV, Markdown, LaTeX. Functions from a result to a string.

A *view* is a module with three functions of a result and the options of its page:
`parts(result, **options)` the page, `rows(result, **options)` the CSV rows, `as_object(result, **options)` the JSON
object; it may have `head(result, **options)`, comment lines above the CSV.  `render` sets one or several results in any
format.
"""

FORMATS = ("table", "json", "csv", "markdown", "latex")


def render(results, view, form: str = "table", width: int = 80, colour: bool = False, triple: str = "T",
           spell=None, **options) -> str:
    """Return results as text: a page, a JSON line or CSV rows each.

    `triple` is the letter of triply degenerate species; `spell` turns the words of a page into letters that a poor
    terminal has, before columns are measured.
    """
    text = _set(results, view, form, width, colour, spell, options)
    if triple == "T":
        return text
    from vibsym.report.triple import holds_tritium, with_letter

    return text if any(map(holds_tritium, results)) else with_letter(text, triple)


def _set(results, view, form, width, colour, spell, options) -> str:
    if form == "json":
        from vibsym.report.json import set_json

        return set_json([view.as_object(result, **options) for result in results])
    if form == "csv":
        from vibsym.report.csv import set_csv

        notes = [line for result in results for line in getattr(view, "head", _no_head)(result, **options)]
        return ("".join(f"# {' '.join(line.split())}\n" for line in notes)
                + set_csv([row for result in results for row in view.rows(result, **options)]))
    if form == "markdown":
        from vibsym.report.markdown import set_markdown

        return "\n".join(set_markdown(view.parts(result, **options)) for result in results)
    if form == "latex":
        from vibsym.report.latex import set_latex

        return "\n".join(set_latex(view.parts(result, **options)) for result in results)
    from vibsym.report.terminal import set_page

    if spell is not None:
        from vibsym.report.document import spelled

        return "\n\n".join(set_page([spelled(part, spell) for part in view.parts(result, **options)], width, colour)
                           for result in results)
    return "\n\n".join(set_page(view.parts(result, **options), width, colour) for result in results)


def _no_head(result, **_) -> list[str]:
    return []
