"""Words and numbers as they are printed: representations, lists of functions, lengths, characters."""

from typing import TYPE_CHECKING

from vibsym.groups.reduction import write_reduction
from vibsym.groups.symbols import hermann_mauguin, typeset, typeset_formula, typeset_function
from vibsym.report.document import Facts, Title
from vibsym.structures.symmetry import Symmetry, within

if TYPE_CHECKING:
    from vibsym.structures.structure import Structure

NOTHING = "–"


def gamma_text(gamma: dict[str, int]) -> str:
    """Return a representation as printed: `A₁′ + 2E′ + A₂″`; nothing at all is `0`."""
    return " + ".join((str(count) if count > 1 else "") + typeset(label) for label, count in gamma.items()) or "0"


def gamma_plain(gamma: dict[str, int]) -> str:
    """Return a representation with plain labels, for CSV; an empty one stays empty."""
    return write_reduction(gamma) if gamma else ""


def functions_text(functions, degeneracy: int) -> str:
    """Return functions as printed, partners of a degenerate set in brackets: `z, (x²−y², xy)`."""
    words = [typeset_function(each) for each in functions]
    if degeneracy == 1:
        return ", ".join(words)
    sets = [words[start:start + degeneracy] for start in range(0, len(words), degeneracy)]
    return ", ".join("(" + ", ".join(each) + ")" for each in sets)


def group_text(symbol: str) -> str:
    """Return a group as printed: Schoenflies, and for a crystallographic group Hermann–Mauguin beside it."""
    other = hermann_mauguin(symbol)
    return typeset(symbol) + (f" ({_barred(other)})" if other else "")


def _barred(symbol: str) -> str:
    """Put the bar over the digit that `-` announces (combining overline): `-6m2` is 6̅m2."""
    head, *rest = symbol.split("-")
    return head + "".join(each[0] + "\u0305" + each[1:] for each in rest)


def found_within(symmetry: Symmetry) -> str:
    """Return how well the structure has the group."""
    return f"deviation {within(symmetry.deviation)} Å, tolerance {symmetry.tolerance:g} Å"


def about_structure(structure: "Structure") -> Title:
    """Return the head of a page: formula, source, number of atoms."""
    aside = [structure.source, count_text(len(structure), "atom")]
    return Title(typeset_formula(structure.formula), ", ".join(filter(None, aside)))


def axes_facts(choice) -> list[Facts]:
    """Return where the axes point and what another choice exchanges (`AxisChoice`); nothing where there are none."""
    pairs = tuple(choice.words.items())
    if choice.exchange:
        swaps = ", ".join(typeset(each).replace("<->", "↔") for each in choice.exchange)
        pairs += (("other", f"another choice of axes (--axes) exchanges {swaps}"),)
    return [Facts(pairs, "Axes")] if pairs else []


def count_text(number: int, word: str) -> str:
    """Return a number with its noun: `1 vibration`, `3 vibrations`."""
    return f"{number} {word}{'s' if number != 1 else ''}"


def number_text(value: float) -> str:
    """Return a character: whole numbers whole, others to three places; minus signs as printed."""
    whole = round(value)
    text = str(whole) if abs(value - whole) < 1e-9 else f"{value:.3f}"
    return text.replace("-", "−")
