"""`vibsym samples`: copy the sample files to a folder of one's own."""

import click


@click.command("samples")
@click.argument("directory", metavar="DIR")
def command(directory):
    """Copy the sample structures to the new folder DIR.

    \b
    Example:
      vibsym samples try-it
    """
    import shutil
    from pathlib import Path

    from vibsym.errors import VibsymError
    from vibsym.tables import folder

    target = Path(directory)
    if target.exists():
        name = directory or "(empty name)"
        raise VibsymError(f"{name}: exists already and nothing is overwritten; name a new folder")
    try:
        shutil.copytree(folder("samples"), target, ignore=shutil.ignore_patterns("__pycache__"))
    except OSError as error:
        raise VibsymError(f"{directory}: cannot be written ({error.strerror or error})") from None
    click.echo(f"{len([each for each in target.iterdir() if each.is_file()])} files in {directory}; "
               "README.md tells what they are")
