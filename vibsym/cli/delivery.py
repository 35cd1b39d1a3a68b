"""Where a result goes: to standard output, or to a file that is written beside its place and then renamed.

Only a terminal gets its own width and bold headings; a file or a pipe gets 80 columns and no colour.
"""

import os
import shutil
import sys
import tempfile
from pathlib import Path

import click

from vibsym.errors import VibsymError
from vibsym.report import render

PLAIN_WIDTH = 80
WIDEST = 120
# For a terminal that knows no Greek: what stands for the letters and marks that pages use.
_SPELLED = {"Γ": "Gamma", "Σ": "Sigma", "Π": "Pi", "Δ": "Delta", "Φ": "Phi", "∞": "inf", "ν": "nu", "ρ": "rho",
            "σ": "sigma", "θ": "theta", "φ": "phi", "ᵠ": "^phi", "π": "pi", "χ": "chi", "′": "'", "″": "''", "−": "-",
            "–": "-", "·": "*", "↔": "<->", "√": "sqrt", "½": "1/2", "Å": "Angstrom", "─": "-", "≤": "<=", "±": "+-",
            "…": "...", "°": "deg", "²": "2", "³": "3", "×": "x", "⁺": "+", "⁻": "-"}
_SPELLED |= {chr(0x2080 + digit): str(digit) for digit in range(10)}
_SPELLED |= {mark: "^" + digit for mark, digit in zip("⁰¹⁴⁵⁶⁷⁸⁹", "01456789")}


def deliver(results: list, view, form: str, output: str | None = None, **options) -> None:
    """Render results and print them, or write them to `output`."""
    if output is not None:
        write_file(output, render(results, view, form, PLAIN_WIDTH, False, **options))
        return
    on_screen = form == "table" and sys.stdout.isatty()
    width = min(WIDEST, max(40, shutil.get_terminal_size().columns)) if on_screen else PLAIN_WIDTH
    colour = on_screen and "NO_COLOR" not in os.environ
    click.echo(spelled(render(results, view, form, width, colour, **options), form), nl=False)
    sys.stdout.flush()


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


def write_file(path: str, text: str) -> None:
    """Write a file beside its place and rename it, so that a failure leaves the old one as it was."""
    target = Path(path)
    try:
        if target.is_dir():
            raise IsADirectoryError(21, "is a directory")
        handle, name = tempfile.mkstemp(prefix=f".{target.name}.", dir=target.parent)
        try:
            with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as stream:
                stream.write(text)
            os.chmod(name, target.stat().st_mode & 0o777 if target.exists() else 0o666 & ~_umask())
            os.replace(name, target)
        except BaseException:
            os.unlink(name)
            raise
    except OSError as error:
        raise VibsymError(f"{path}: cannot be written ({(error.strerror or str(error)).lower()})") from None


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
