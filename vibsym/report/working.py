"""The working of a count on the page: the table of classes, then the reduction formula of every species in numbers."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Paragraph, Table
from vibsym.report.wording import number_text
from vibsym.vibrations.cartesian import Displacements
from vibsym.vibrations.working import WorkingLine, working


def working_parts(given: Displacements) -> list:
    """Return the parts of the page: classes, a sentence on the formula, one line a species."""
    written = working(given)
    head = ("", *(typeset(each.symbol) for each in written.image.classes))
    rows = (("unmoved atoms", *map(number_text, given.unmoved)), ("each gives", *map(number_text, given.contributions)),
            ("Γ3N", *map(number_text, given.chi_3n)), ("Γtranslation", *map(number_text, given.chi_translation)),
            ("Γrotation", *map(number_text, given.chi_rotation)), ("Γvib", *map(number_text, given.chi_vib)))
    lines = tuple((typeset(line.label), _sum(line)) for line in written.lines)
    return [Table(head, rows, right=frozenset(range(1, len(head))), heading="Working, class by class"),
            Paragraph(_formula(written, given)), Facts(lines, "Working, species by species")]


def _formula(written, given: Displacements) -> str:
    text = ("An atom left in place gives ±1 + 2cos θ (+ for a rotation, − for a rotation with reflection). Each "
            f"species occurs (1/h) Σ g·χ·χ(Γ3N) times, h = {written.image.order}")
    if any(species.pair for species in written.image.species):
        text += "; two conjugate species counted as one: 1/2h"
    text += ". Less translations and rotations this leaves Γvib."
    if given.group.infinite:
        text += (f" {typeset(given.group.symbol)} has infinitely many operations; its subgroup "
                 f"{typeset(written.image.symbol)} tells apart every species that a displacement can carry.")
    return text


def _sum(line: WorkingLine) -> str:
    terms = " + ".join(f"{size}·{_signed(own)}·{_signed(chi)}" for size, own, chi in line.terms if abs(chi) > 1e-9)
    return (f"({terms or '0'})/{line.divisor} = {line.in_3n}; "
            f"{line.in_3n} − {line.in_translation} − {line.in_rotation} = {line.in_vib}")


def _signed(value: float) -> str:
    text = number_text(value)
    return f"({text})" if text.startswith("−") else text
