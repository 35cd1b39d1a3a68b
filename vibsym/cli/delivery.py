"""Where a result goes: to standard output, or to a file that is written beside its place and then renamed.

Only a terminal gets its own width and bold headings; a file or a pipe gets 80 columns and no colour.
"""

import os
import sys

import click

from vibsym.cli.options import TRIPLE
from vibsym.report import render

PLAIN_WIDTH = 80
NARROWEST, WIDEST = 40, 120
# For a terminal that knows no Greek: what stands for the letters and marks that pages use.
_SPELLED = {"Γ": "Gamma", "Σ": "Sigma", "Π": "Pi", "Δ": "Delta", "Φ": "Phi", "∞": "inf", "ν": "nu", "ρ": "rho",
            "σ": "sigma", "θ": "theta", "φ": "phi", "ᵠ": "^phi", "π": "pi", "χ": "chi", "′": "'", "″": "''", "−": "-",
            "–": "-", "·": "*", "↔": "<->", "√": "sqrt", "½": "1/2", "Å": "Angstrom", "─": "-", "≤": "<=", "±": "+-",
            "…": "...", "°": "deg", "²": "2", "³": "3", "×": "x", "▲": "^", "▼": "v", "◆": "X", "○": "o",
            "│": "|", "⁺": "+", "⁻": "-"}
_SPELLED |= {chr(0x2080 + digit): str(digit) for digit in range(10)}
_SPELLED |= dict(zip("⁰¹⁴⁵⁶⁷⁸⁹", "01456789"))


def deliver(results: list, view, form: str, output: str | None = None, **options) -> None:
    """Render results and print them, or write them to `output`."""
    context = click.get_current_context(silent=True)
    options["triple"] = context.meta.get(TRIPLE, "T") if context else "T"
    if output is not None:
        from vibsym.files import write_text_atomically

        write_text_atomically(output, render(results, view, form, PLAIN_WIDTH, False, **options))
        return
    on_screen = form == "table" and sys.stdout.isatty()
    width = _screen_width() if on_screen else PLAIN_WIDTH
    colour = on_screen and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"
    text = render(results, view, form, width, colour, **options)
    plain = spelled(text, form)
    if plain != text and form == "table":
        plain = spelled(render(results, view, form, width, colour, spell=spelled, **options))
    click.echo(plain, nl=False)
    sys.stdout.flush()


def _screen_width() -> int:
    """Return the width of the terminal within reason; some tell 0, which is no width."""
    columns = os.get_terminal_size(sys.stdout.fileno()).columns or PLAIN_WIDTH
    return min(WIDEST, max(NARROWEST, columns))


def spelled(text: str, form: str = "table") -> str:
    """Return the text as it is if standard output can carry it, else with the letters it lacks spelled out."""
    encoding = getattr(sys.stdout, "encoding", None) or "utf-8"
    try:
        text.encode(encoding)
        return text
    except (UnicodeEncodeError, LookupError):
        pass
    if form == "json":
        import json

        return "".join(c if c.isascii() else json.dumps(c)[1:-1] for c in text)
    import re

    text = re.sub("(.)\u0305", r"-\1", text)                          # 6 with a bar is -6 in ASCII
    text = "".join(c if c.isascii() else _SPELLED.get(c, c) for c in text)
    return text.encode(encoding, "replace").decode(encoding)
