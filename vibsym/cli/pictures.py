"""Options of the commands that can draw: --picture FILE.svg and what to --show."""

import click
from click.core import ParameterSource

from vibsym.errors import VibsymError

strip_option = click.option("--strip", is_flag=True,
                            help="Show the bands as a strip: one line a region, marks up for infrared, down for Raman.")


def picture_options(default: str):
    """Add --picture and --show; `default` is what the command draws when it is not told."""
    def add(command):
        command = click.option("--show", default=default, show_default=True, metavar="WHAT",
                               help="What --picture draws: structure, sticks, a mode (ν4 or v4) or a symmetry "
                                    "coordinate (Eu:1).")(command)
        return click.option("--picture", metavar="FILE.svg", help="Save a vector drawing fit for a paper.")(command)
    return add


def save_picture(path: str | None, show: str, symmetries, **given) -> None:
    """Draw what was asked for, of the one structure there is, and save it; without a path do nothing."""
    if path is None:
        if click.get_current_context().get_parameter_source("show") is ParameterSource.COMMANDLINE:
            raise VibsymError(f"--show {show}: it tells what --picture FILE.svg draws; give the file too")
        return
    if not path.lower().endswith(".svg"):
        raise VibsymError(f"--picture {path}: drawings are SVG; name a file that ends in .svg")
    symmetries = list(symmetries)
    if len(symmetries) != 1:
        raise VibsymError(f"--picture {path}: one structure at a time; {len(symmetries)} were read")
    from vibsym.files import write_text_atomically
    from vibsym.report.picture import picture

    write_text_atomically(path, picture(show, symmetries[0], **given))
