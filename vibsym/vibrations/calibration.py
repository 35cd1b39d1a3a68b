"""Calibrate the force field on published fundamentals; write its table and that of its errors.

    python -m vibsym.vibrations.calibration                 fit, and print the errors
    python -m vibsym.vibrations.calibration --leave-out     refit without each family of isotopologues, errors on what
    was left out python -m vibsym.vibrations.calibration --write         write the tables (with --leave-out also the
    error model)

Data: tests/reference/shimanouchi (T. Shimanouchi, NSRDS-NBS 39, 1972) and tests/reference/fundamentals (from memory of
the works it names).  The second set serves bond types that the first lacks and weighs less.  Isotopologues of one
molecule are one family: they share its weight and are left out together.
"""

import csv
import re
import sys
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import permutations
from pathlib import Path

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.finder import find_symmetry
from vibsym.structures.reading import read
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.fitting import Assembly, Problem, fit
from vibsym.vibrations.forcefield import ForceField, standard_field
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.normal_modes import species_blocks

REFERENCE = Path(__file__).parents[2] / "tests" / "reference"
FROM_MEMORY = 0.6  # weight of a molecule of the second set

# Prior value and spread of ln(factor), or of a share, by the beginning of the name; the first that fits counts.
PRIORS = (
    ("bend shape ", 0.0, 0.5),
    ("bend centre H$", np.log(0.5), 0.35),  # half an electron pair in each bond of a three-centre bond
    ("bend centre [A-Z][a-z]?$", 0.0, 0.5),
    ("bend centre ", 0.0, 0.2),
    ("bend ends ", 0.0, 0.5),
    ("bend end Hb$", np.log(0.5), 0.35),  # half an electron pair in each bond, as above
    ("bend end ", 0.0, 0.35),
    ("bend ", 0.0, 0.25),
    ("bend$", np.log(6.0), 1.0),
    ("linear bend centre ", 0.0, 0.5),
    ("linear bend end ", 0.0, 0.4),
    ("linear bend ", 0.0, 0.3),
    ("linear bend$", np.log(6.5), 1.0),
    ("(square )?wag centre ", 0.0, 0.5),
    ("(square )?wag end ", 0.0, 0.35),
    ("(square )?wag ", 0.0, 0.3),
    ("wag$", np.log(30.0), 1.0),
    ("square wag$", np.log(20.0), 1.0),
    ("torsion 2 ", np.log(8.0), 0.5),
    ("torsion 1.5 ", np.log(3.0), 0.5),
    ("torsion straight ", np.log(12.0), 0.5),
    ("torsion \\S+ \\d$", np.log(0.6), 0.5),
    ("torsion heavy", 0.0, 0.5),
    ("torsion large", 0.0, 0.7),
    ("torsion ", 0.0, 0.4),
    ("repulsion 0 H", np.log(70.0), 0.7),
    ("repulsion 1 H", np.log(25.0), 0.7),
    ("repulsion 2 H", np.log(5.0), 0.7),
    ("repulsion ", 0.0, 0.35),
    ("hydrogen ", 0.0, 0.03),
    ("bonds at ", 0.0, 0.02),
    ("bends (at|across [^a])", 0.0, 0.04),
    ("bonds (straight|trans)", 0.0, 0.05),
    ("bonds ", 0.0, 0.03),
    ("bends ", 0.0, 0.08),
    ("(wags|torsions|linear bends) ", 0.0, 0.15),
)
STRETCH_SPREAD = 0.2


@dataclass(frozen=True, eq=False)
class Sample:
    """A molecule with its published fundamentals: {species: wavenumbers, NaN where unknown}."""

    name: str
    symmetry: Symmetry
    observed: dict[str, list[float]]
    family: str
    from_memory: bool


def samples(reference: Path = REFERENCE) -> list[Sample]:
    """Return all molecules of both sets."""
    found = []
    for folder, file, memory in (("shimanouchi", "published.csv", False), ("fundamentals", "fundamentals.csv", True)):
        path = reference / folder / file
        if not path.exists():
            raise VibsymError(f"{path} is missing; the calibration needs the repository with its tests")
        lines = [line for line in path.read_text(encoding="utf-8").splitlines() if not line.startswith("#")]
        for row in csv.DictReader(lines):
            symmetry = find_symmetry(read(str(reference / folder / f"{row['slug']}.xyz")))
            observed = _mended(row["slug"], published(row["wavenumbers"]))
            found.append(Sample(row["slug"], symmetry, observed, _family(symmetry, row["slug"], memory), memory))
    return found


def published(text: str) -> dict[str, list[float]]:
    """Return `A1: 2917; T2: 3019,1306` as lists; of two values for one mode the first, `-` as NaN."""
    parts = (part.split(":") for part in text.split(";"))
    return {
        label.strip(): [
            float("nan") if value.strip() == "-" else float(value.split("/")[0]) for value in values.split(",")
        ]
        for label, values in parts
    }


def _mended(name: str, observed: dict) -> dict:
    """Mend two known faults of the source: a lost prime in methyl acetate, `ag` for A1g in hexabromoethane."""
    if name == "methyl-acetate":
        observed = {
            "A'": sorted([*observed["A'"], 303.0], reverse=True),
            "A''": [v for v in observed["A''"] if v != 303.0],
        }
    if name == "hexabromoethane":
        observed = {"A1g" if label == "Ag" else label: values for label, values in observed.items()}
    return observed


def _family(symmetry: Symmetry, name: str, memory: bool) -> str:
    """Return what isotopologues have in common: elements and bonds."""
    structure = symmetry.structure
    around: dict[int, list[str]] = {atom: [] for atom in range(len(structure))}
    for each in internal_coordinates(symmetry):
        if each.kind == "stretch":
            for i, j in each.atoms.tolist():
                around[i].append(structure.symbols[j])
                around[j].append(structure.symbols[i])
    key = ".".join(sorted(structure.symbols[atom] + "".join(sorted(ends)) for atom, ends in around.items()))
    return f"{key} {name}" if memory else key


@dataclass(eq=False)
class Calibration:
    """The problem, the observed wavenumbers by block, and the molecules behind them."""

    samples: list[Sample]
    problem: Problem
    weights: np.ndarray
    lengths: dict[str, float]
    observed: dict[int, np.ndarray]

    def families(self) -> list[set[int]]:
        """Return the molecules of each family."""
        found: dict[str, set[int]] = {}
        for number, sample in enumerate(self.samples):
            found.setdefault(sample.family, set()).add(number)
        return list(found.values())

    def errors(self, p: np.ndarray, molecules=None) -> dict[int, np.ndarray]:
        """Return ln(calculated/observed) by block."""
        values = self.problem.wavenumbers(p, molecules)
        return {
            number: np.log(value / self.observed[number]) for number, value in values.items() if number in self.observed
        }


def calibration(found: list[Sample], field: ForceField | None = None) -> Calibration:
    """Set the problem up; lengths and classes of bonds are those of the table."""
    field = standard_field() if field is None else field
    assembly = Assembly(lambda name: prior(name, field))
    for number, sample in enumerate(found):
        symmetry = sample.symmetry
        sets = internal_coordinates(symmetry)
        terms = field.terms(symmetry.structure.symbols, symmetry.positions, sets)
        assembly.add(
            number, terms, [(block.species, block.rows, block.modes) for block in species_blocks(symmetry, sets)]
        )
    problem = assembly.problem()
    sizes: dict[str, int] = {}
    for sample in found:
        sizes[sample.family] = sizes.get(sample.family, 0) + 1
    weights = np.array([(FROM_MEMORY if s.from_memory else 1.0) / sizes[s.family] ** 0.5 for s in found])
    made = Calibration(found, problem, weights, dict(field.bonds.lengths), {})
    start = np.array([starting_value(name, field, value) for name, value in zip(problem.names, problem.prior)])
    made.observed = matched(made, start)
    return made


def prior(name: str, field: ForceField) -> tuple[float, float]:
    """Return the prior of a parameter: Badger's rule for stretches, else the table above."""
    if name.startswith("stretch "):
        return (float(np.log(field.bonds.badger(name))) if name in field.bonds.lengths else 0.0), STRETCH_SPREAD
    for beginning, value, spread in PRIORS:
        if re.match(beginning, name):
            return float(value), spread
    raise VibsymError(f"no prior for the parameter '{name}'")


def starting_value(name: str, field: ForceField, otherwise: float) -> float:
    """Return the tabulated value as a parameter: the share of an interaction, else ln(factor)."""
    value = field.values.get(name)
    if value is None:
        return otherwise
    return value if is_share(name) else float(np.log(value))


def is_share(name: str) -> bool:
    """Tell interactions (shares) from factors."""
    return bool(re.match("(bonds|bends|wags|torsions|linear bends) ", name))


def matched(made: Calibration, p: np.ndarray) -> dict[int, np.ndarray]:
    """Return the observed wavenumbers by block, labelled in the axes that fit best."""
    values = made.problem.wavenumbers(p)
    numbers: dict[int, dict[str, int]] = {}
    for number, block in enumerate(made.problem.blocks):
        numbers.setdefault(block.molecule, {})[block.label] = number
    observed = {}
    for molecule, sample in enumerate(made.samples):
        choices = []
        for renamed in relabellings(sample.symmetry.group.symbol):
            labelled = {renamed.get(label, label): np.sort(lines)[::-1] for label, lines in sample.observed.items()}
            misfit = sum(
                label not in numbers[molecule] or len(lines) != made.problem.blocks[numbers[molecule][label]].modes
                for label, lines in labelled.items()
            )
            kept = {
                numbers[molecule][label]: lines
                for label, lines in labelled.items()
                if label in numbers[molecule]
                and len(lines) == made.problem.blocks[numbers[molecule][label]].modes
                and not np.isnan(lines).any()
            }
            distance = sum(np.abs(np.log(values[number] / lines)).sum() for number, lines in kept.items())
            choices.append((misfit, distance, len(choices), kept))
        observed |= min(choices)[3]
    return observed


def relabellings(symbol: str) -> list[dict[str, str]]:
    """Return the exchanges of labels that turned axes make, the identity first.

    >>> relabellings("C2v")
    [{}, {'B1': 'B2', 'B2': 'B1'}]
    """
    if symbol in ("D2", "D2h"):
        endings = "gu" if symbol == "D2h" else ("",)
        return [
            {f"B{i + 1}{end}": f"B{turned[i]}{end}" for i in range(3) for end in endings}
            for turned in permutations("123")
        ]
    if re.fullmatch("(C|D)[2468]v?h?|C10v|D10h?", symbol) and symbol not in (
        "C2",
        "C4",
        "C6",
        "C8",
        "C2h",
        "C4h",
        "C6h",
        "C8h",
    ):
        endings = "gu" if symbol.endswith("h") else ("",)
        return [{}, {f"B{i}{end}": f"B{3 - i}{end}" for i in (1, 2) for end in endings}]
    return [{}]


def fitted(made: Calibration, molecules=None, start: np.ndarray | None = None, rounds: int = 40) -> np.ndarray:
    """Return the parameters of least cost."""
    return fit(made.problem, made.observed, made.weights, start, molecules, rounds)


def left_out(made: Calibration, p: np.ndarray, rounds: int = 3) -> Iterator[tuple[set[int], np.ndarray]]:
    """Yield each family with the parameters fitted without it; what only it has starts at the prior."""
    everything = set(range(len(made.samples)))
    for family in made.families():
        kept = everything - family
        alive = np.zeros(len(p), bool)
        for block in made.problem.blocks:
            if block.molecule in kept:
                alive |= (made.problem.powers[block.types] != 0).any(axis=0)
                signed = made.problem.share[block.types]
                alive[signed[signed >= 0]] = True
        start = np.where(alive, p, made.problem.prior)
        yield family, fit(made.problem, made.observed, made.weights, start, kept, rounds)


def summary(errors: np.ndarray) -> str:
    """Return median, 90th percentile and the share within 12 % of the relative errors."""
    size = np.abs(np.exp(errors) - 1)
    return (
        f"{len(size)} wavenumbers: median {100 * np.median(size):.2f} %, "
        f"nine tenths within {100 * np.quantile(size, 0.9):.1f} %, "
        f"{100 * np.mean(size <= 0.12):.1f} % within 12 %"
    )


def main(arguments: list[str]) -> None:
    """Fit, and do what the options ask."""
    from vibsym.vibrations.calibration_report import report

    report(arguments)


if __name__ == "__main__":
    main(sys.argv[1:])
