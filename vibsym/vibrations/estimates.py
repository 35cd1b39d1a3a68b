"""Estimated wavenumbers of a structure with their uncertainty, measured in the calibration."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache

from vibsym.errors import VibsymError
from vibsym.structures.symmetry import Symmetry
from vibsym.tables import read_table
from vibsym.vibrations.forcefield import ForceField, standard_field
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.normal_modes import Mode, normal_modes
from vibsym.vibrations.surroundings import Surroundings

LETTERS = {"stretch": "ν", "bend": "δ", "linear bend": "δ", "wag": "γ", "torsion": "τ"}
DOMINANT = 0.5  # share from which a kind names a mode


@dataclass(frozen=True, eq=False)
class Estimates:
    """Modes of the valence force field, the sets whose constants are fall-backs, and the coordinates used."""

    symmetry: Symmetry
    modes: tuple[Mode, ...]
    fallback: tuple[dict, ...]
    sets: Sequence

    @property
    def lacking(self) -> set[str]:
        """Names of the sets whose bonds have no entry."""
        return {each["set"] for each in self.fallback}

    def spread(self, mode: Mode) -> float:
        """Return the standard error of ln(estimate) of a mode."""
        return spread_of(mode_class(mode, self.lacking))

    def common(self, mode: Mode) -> float:
        """Return the part of the squared error that the modes of one set share."""
        return common_of(mode_class(mode, self.lacking))


def estimate(symmetry: Symmetry, field: ForceField | None = None, bonds=None) -> Estimates:
    """Return the modes of a structure by the valence force field (the standard one by default)."""
    field = standard_field() if field is None else field
    _refuse_dummies(symmetry.structure)
    sets = internal_coordinates(symmetry, bonds)
    if not sets and len(symmetry.positions) > 1:
        raise VibsymError(
            f"{symmetry.structure.source or symmetry.structure.formula}: no bonds, so the force field "
            "says nothing; name bonds with --bond I-J"
        )
    symbols, positions = symmetry.structure.symbols, symmetry.positions
    F = field.matrix(symbols, positions, sets)
    return Estimates(symmetry, normal_modes(symmetry, sets, F), field.fallback(symbols, positions, sets), sets)


def _refuse_dummies(structure) -> None:
    dummies = [name for name, dummy in zip(structure.symbols, structure.is_dummy) if dummy]
    if dummies:
        raise VibsymError(f"{structure.source or structure.formula}: the dummy atom {dummies[0]} has no mass; "
                          "normal modes need real atoms")


def mode_class(mode: Mode, lacking: set[str]) -> str:
    """Return the class of a mode in the error model, from its energy distribution.

    `stretch H`, `stretch`, `stretch fallback`, `bend H`, `bend`, `linear bend`, `wag`, `torsion`, or `mixed`.
    """
    totals: dict[str, float] = {}
    for name, share in mode.shares:
        kind, _, elements = name.rpartition(" ")
        if name in lacking:
            kind = "stretch fallback"
        elif kind in ("stretch", "bend"):
            ends = elements.split("-")
            light = any(_hydrogen(end) for end in (ends if kind == "stretch" else (ends[0], ends[-1])))
            kind += " H" if light else ""
        totals[kind] = totals.get(kind, 0.0) + share
    kind = max(totals, key=totals.get, default="mixed")
    if totals.get(kind, 0) < DOMINANT:
        return "mixed"
    if kind == "stretch H" and any(
        name.startswith("stretch ") and name.rpartition(" ")[2] in ("C-H", "C-D") for name, _ in mode.shares[:1]
    ):
        return "stretch C-H"
    return kind


def _hydrogen(label: str) -> bool:
    return label in ("H", "D", "T", "1H", "2H", "3H")


@cache
def _errors() -> dict[str, tuple[float, float]]:
    return {row["class"]: (float(row["spread"]), float(row["common"])) for row in read_table("estimate_errors.csv")}


def spread_of(name: str) -> float:
    """Return the spread of ln(estimate/observed) of a class; a class without enough cases takes that of all."""
    errors = _errors()
    return errors.get(name, errors["any"])[0]


def common_of(name: str) -> float:
    """Return the part of the squared error of a class that the modes of one set in one molecule share."""
    errors = _errors()
    return errors.get(name, errors["any"])[1]


def describe(mode: Mode, least: float = 0.15) -> str:
    """Return the energy distribution in words, `94 % ν(C–H)`; parts below `least` are left out.

    ν stretch, δ bend, γ wag (out of plane), τ torsion.
    """
    parts = []
    for name, share in mode.shares:
        if share >= least:
            kind, _, elements = name.rpartition(" ")
            parts.append(f"{100 * share:.0f} % {LETTERS[kind]}({elements.replace('-', '–')})")
    return " + ".join(parts)


def characteristic_name(set_name: str, estimates: Estimates) -> str:
    """Return the stretch factor of a set all of whose bonds are of one class, else an empty text."""
    if not set_name.startswith("stretch ") or any(mark in set_name for mark in ("D", "T-", "-T")):
        return ""
    field, symmetry = standard_field(), estimates.symmetry
    around = Surroundings(symmetry.structure.symbols, symmetry.positions, estimates.sets)
    each = next(each for each in estimates.sets if each.name == set_name)
    names = {field.bonds.entry(around, *atoms).name for atoms in each.atoms.tolist()}
    return names.pop() if len(names) == 1 else ""
