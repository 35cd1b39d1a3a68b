"""Structures from the command line: read each file, make each result, and tell of those that failed.

One unreadable structure does not stop the others; it is told on standard error and the exit code is 1.
"""

import sys
from collections.abc import Callable
from dataclasses import replace

import click

from vibsym.cli.progress import counted
from vibsym.errors import VibsymError

LONG_WORK = 20  # structures; from here on a terminal shows a progress bar


def read_structures(path: str, frame: str = "1", bonds=(), no_bonds=(), average_masses: bool = False) -> list:
    """Return the structures of one argument, with the bonds and masses asked for."""
    from vibsym.structures.reading import read, read_all

    found = read_all(path) if frame == "all" else [read(path, _frame_number(frame))]
    return [_prepared(structure, bonds, no_bonds, average_masses) for structure in found]


def read_all_structures(paths, *reading) -> list:
    """Return the structures of all arguments; the first that cannot be read stops."""
    return [structure for path in paths for structure in read_structures(path, *reading)]


def results_of(paths, make: Callable, **reading) -> tuple[list, int]:
    """Return the results of all structures that could be read, and how many files failed.

    `reading` holds the options of `options.reading_options`.
    """
    results, failures = [], 0
    for path in counted(paths, "structures", LONG_WORK):
        try:
            for structure in read_structures(path, **reading):
                results.append(make(structure))
        except VibsymError as error:
            failures += 1
            click.echo(f"Error: {' '.join(str(error).splitlines())}", err=True)
    return results, failures


def finish(results: list, failures: int, view, form: str, output: str | None, **options) -> None:
    """Deliver the results; after a failure write no file and leave with status 1."""
    from vibsym.cli.delivery import deliver

    if results and not (failures and output is not None):
        deliver(results, view, form, output, **options)
    if failures:
        if output is not None:
            click.echo(f"Error: {output} was not written because a structure failed", err=True)
        sys.exit(1)


def _prepared(structure, bonds, no_bonds, average_masses: bool):
    if bonds or no_bonds:
        from vibsym.structures.bonds import find_bonds, parse_bond

        add, remove = ([parse_bond(text, len(structure)) for text in texts] for texts in (bonds, no_bonds))
        structure = replace(structure, bonds=find_bonds(structure, add, remove))
    return structure.with_average_masses() if average_masses else structure


def _frame_number(text: str) -> int:
    if not text.isascii() or not text.isdigit() or int(text) < 1:
        raise VibsymError(f"--frame {text}: give the number of a frame, counted from 1, or all")
    return int(text)
