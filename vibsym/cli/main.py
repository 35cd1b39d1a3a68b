"""The program `vibsym`: finds the command, and turns an error of the library into one line and exit code 1.

Commands are imported when they are called, so that each loads only what it needs.
"""

from importlib import import_module

import click

from vibsym import __version__
from vibsym.errors import VibsymError

# Command and the module that holds it (function `command`), in the order of a working day.
COMMANDS = {
    "expect": "vibsym.cli.expect",
    "group": "vibsym.cli.group",
    "table": "vibsym.cli.table",
    "coordinates": "vibsym.cli.coordinates",
    "isomers": "vibsym.cli.isomers",
    "screen": "vibsym.cli.screen",
    "normal": "vibsym.cli.normal",
    "assign": "vibsym.cli.assign",
    "peaks": "vibsym.cli.peaks",
    "report": "vibsym.cli.report",
    "combine": "vibsym.cli.combine",
    "descend": "vibsym.cli.descend",
    "isotopes": "vibsym.cli.isotopes",
    "samples": "vibsym.cli.samples",
}


class CommandGroup(click.Group):
    """Load commands on demand; print a VibsymError as one line on standard error and leave with status 1."""

    def list_commands(self, ctx):
        """Return the names of all commands in the order of the table."""
        return list(COMMANDS)

    def get_command(self, ctx, name):
        """Import the command that is asked for."""
        return import_module(COMMANDS[name]).command if name in COMMANDS else None

    def invoke(self, ctx):
        """Run the command; what the library refuses is one line."""
        try:
            return super().invoke(ctx)
        except VibsymError as error:
            raise click.ClickException(" ".join(str(error).splitlines())) from error


def _print_version(ctx, parameter, value):
    if value and not ctx.resilient_parsing:
        click.echo(f"vibsym {__version__}")
        ctx.exit()


@click.group(cls=CommandGroup, context_settings={"help_option_names": ["-h", "--help"]})
@click.option("--version", is_flag=True, expose_value=False, is_eager=True, callback=_print_version,
              help="Show the version and leave.")
def cli():
    """Infrared and Raman bands by symmetry.

    From a structure file to its point group, the species of its vibrations and the bands that infrared and Raman
    spectra can show.

    \b
    Try it:
      vibsym samples try-it
      vibsym expect try-it/cylinder-bf3.xyz
      vibsym table D3h
    """


def main():
    """Entry point of the installed program."""
    cli(prog_name="vibsym")


if __name__ == "__main__":
    main()
