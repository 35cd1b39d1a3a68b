"""Options that several commands share, one decorator each; they mean the same everywhere.

Values are taken as text or numbers and checked by the library, so that a wrong value is one line and exit code 1;
only what click refuses without reading anything leaves with 2.
"""

import click

from vibsym.report import FORMATS

TRIPLE = "vibsym.triple"      # where the letter of triply degenerate species waits in the click context

structures_argument = click.argument("structures", nargs=-1, required=True, metavar="STRUCTURE...")
structure_argument = click.argument("structure", metavar="STRUCTURE")

tolerance_option = click.option(
    "--tolerance", type=float, default=0.02, show_default=True, metavar="Å",
    help="Largest distance of an atom from its place in the group.")
as_option = click.option(
    "--as", "as_group", metavar="GROUP", help="Work in this group of the ladder (vibsym group shows it).")
axes_option = click.option(
    "--axes", metavar="CHOICE", help="Another choice of axes where labels depend on it: swap, or an order such as yxz.")
working_option = click.option(
    "--working", is_flag=True, help="Write the count out: class by class, then species by species.")
light_option = click.option(
    "--light", type=click.Choice(("plane", "natural")), default="plane", show_default=True,
    help="Light of the Raman measurement; decides the ratio of a depolarised line (3/4 or 6/7).")
select_option = click.option(
    "--select", multiple=True, metavar="SET", help='Only these coordinates: a set ("stretch C-O") or a kind ("bend").')
atoms_option = click.option(
    "--atoms", metavar="1,5,6", help="Only coordinates whose atoms are all among these.")
write_option = click.option(
    "--write", metavar="FILE", help="Save the symmetrised structure of the suggested rung (or of --as) as XYZ.")
modes_option = click.option(
    "--mode", "modes", multiple=True, metavar="ν4:T2=1306",
    help="A fundamental with its species and cm-1, once for each; v4 is read as ν4, and the number may be left out.")
assignment_option = click.option(
    "--assignment", multiple=True, metavar="FILE", help="Fundamentals from an assignment (CSV of vibsym assign).")
doublet_option = click.option(
    "--doublet", "doublets", multiple=True, metavar="1388:1285=1.6",
    help="Two lines in Fermi resonance and the intensity of the first over that of the second.")
temperature_option = click.option(
    "--temperature", type=float, default=296.0, show_default=True, metavar="K", help="Temperature of the sample.")


def oscillator_options(command):
    """Add what looks at one set of stretches: --oscillators, --local, --local-tolerance, --distinguish."""
    for option in (
        click.option("--distinguish", is_flag=True,
                     help="Local symmetry: donor atoms are alike only if their ligands have one formula."),
        click.option("--local-tolerance", type=float, default=0.3, show_default=True, metavar="Å",
                     help="Tolerance of the local group."),
        click.option("--local", is_flag=True,
                     help="The oscillators also in the group of what they see: their centres and its donor atoms."),
        click.option("--oscillators", metavar="C-O",
                     help="Bands of these stretches: C-O, from the centre Mo-C-O, or pairs of atoms 2-3,4-5."),
    ):
        command = option(command)
    return command


def _keep_letter(ctx, parameter, value):
    ctx.meta[TRIPLE] = value


def output_options(command):
    """Add --format, --output and --triple; the letter of --triple waits in the context until the result is set."""
    for option in (
        click.option("--triple", type=click.Choice(("T", "F")), default="T", show_default=True, expose_value=False,
                     callback=_keep_letter, help="Letter of triply degenerate species in what is written."),
        click.option("--output", metavar="FILE",
                     help="Write to this file what stdout would hold; nothing is written if anything failed."),
        click.option("--format", "form", type=click.Choice(FORMATS), default="table", show_default=True,
                     help="How the result is set."),
    ):
        command = option(command)
    return command


def reading_options(command):
    """Add what tells how a structure is read: --frame, --bond, --no-bond, --average-masses."""
    for option in (
        click.option("--average-masses", is_flag=True,
                     help="Standard atomic weights instead of the most abundant isotopes; never changes the group."),
        click.option("--no-bond", "no_bonds", multiple=True, metavar="I-J", help="Atoms I and J are not bonded."),
        click.option("--bond", "bonds", multiple=True, metavar="I-J", help="Atoms I and J are bonded."),
        click.option("--frame", default="1", show_default=True, metavar="N|all",
                     help="Which structure of a file that holds several."),
    ):
        command = option(command)
    return command


def symmetry_options(command):
    """Add what decides the group of a structure: --tolerance, --as, --axes, and how it is read."""
    for option in (reading_options, axes_option, as_option, tolerance_option):
        command = option(command)
    return command
