"""`vibsym group`: the ladder of groups that a structure approaches."""

import click

from vibsym.cli import options
from vibsym.cli.reading import finish, results_of
from vibsym.errors import VibsymError


@click.command("group")
@options.structures_argument
@options.output_options
@options.symmetry_options
@options.write_option
def command(structures, form, output, tolerance, as_group, axes, write, **reading):
    """Show the point group of each STRUCTURE and the higher groups that it nearly has.

    Each rung of the ladder stands with its deviation (the largest shift of an atom), its band counts and the atoms
    that spoil the next one.

    \b
    Examples:
      vibsym samples try-it
      vibsym group try-it/cluster-mo6cl14.xyz
      vibsym group try-it/cluster-mo6cl14.xyz --write symmetrised.xyz
    """
    from vibsym.report import climb as view
    from vibsym.spectra.climb import climb

    results, failures = results_of(
        structures, lambda structure: climb(structure, tolerance, axes=axes, as_group=as_group), **reading)
    if write is not None and not failures:
        if len(results) != 1:
            raise VibsymError(f"--write {write}: one structure at a time; {len(results)} were given")
        _save(write, results[0].chosen or results[0].suggested)
    finish(results, failures, view, form, output)


def _save(path: str, symmetry) -> None:
    from vibsym.files import write_text_atomically
    from vibsym.structures.writing import write_xyz

    comment = f"symmetrised to {symmetry.group.symbol}, largest shift {symmetry.deviation:.4f} Å"
    write_text_atomically(path, write_xyz(symmetry.symmetrised, comment))
