"""How a proposed structure is turned into a prediction (`Proposal`), and the prediction of a whole molecule.

The predictions of one region (`regional.py`) are named and bounded by the same functions.
"""

from dataclasses import dataclass

from vibsym.spectra.expectation import expect
from vibsym.spectra.prediction import Prediction, SpeciesBands, bands_of_gamma
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import DEFAULT_TOLERANCE, LOCAL_TOLERANCE, Symmetry, operations_become, within


@dataclass(frozen=True)
class Proposal:
    """How structures are turned into predictions."""

    tolerance: float = DEFAULT_TOLERANCE  # Å
    as_group: str | None = None
    axes: str | None = None               # the other choice of axes, where labels depend on it
    every_rung: bool = False
    oscillators: str | None = None        # "C-O", "Mo-C-O" or atom pairs
    local: bool = False
    local_tolerance: float = LOCAL_TOLERANCE  # Å
    distinguish: bool = False             # donors are alike only if their ligands have one formula


def whole_molecule(structure: Structure, symmetry: Symmetry, true: Symmetry | None = None) -> Prediction:
    """Return all fundamentals of a molecule; `true` is its symmetry if `symmetry` is a higher rung."""
    gamma = expect(symmetry).gamma_vib
    if true is not None and true.group.symbol == symmetry.group.symbol:
        true = None
    return Prediction(name_of(structure, symmetry, true), structure.to_dict(), symmetry.to_dict(),
                      bands_within(gamma, symmetry, true), true_group=true.group.symbol if true is not None else "")


def bands_within(gamma: dict[str, int], symmetry: Symmetry, true: Symmetry | None, point_like: bool = False,
                 ) -> tuple[SpeciesBands, ...]:
    """Return the bands of a representation, with what the lower true group and ligands taken as points let through."""
    if true is None:
        return bands_of_gamma(gamma, symmetry.group, point_like=point_like)
    return bands_of_gamma(gamma, symmetry.group, true.group, operations_become(true, symmetry), point_like)


def name_of(structure: Structure, symmetry: Symmetry | None = None, true: Symmetry | None = None) -> str:
    """Return the file's name without folder and ending, else the formula; with a `true` group also the rung."""
    from pathlib import PurePath

    name = PurePath(structure.source).stem or structure.formula
    return name if true is None else f"{name} as {symmetry.group.symbol} ({within(symmetry.deviation)} Å)"
