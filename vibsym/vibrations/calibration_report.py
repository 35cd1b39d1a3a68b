"""What the calibration prints and writes: errors, the two tables, and the error model of estimates.

Error model: the spread of ln(observed/calculated) on molecules left out, by the kind of coordinate that dominates the
mode (half-width of the central 68 %), so that an estimate can be weighed against another when bands are assigned.
"""

import csv
import io

import numpy as np

from vibsym.tables import folder, read_table
from vibsym.vibrations.calibration import (
    Calibration,
    calibration,
    fitted,
    is_share,
    left_out,
    matched,
    samples,
    starting_value,
    summary,
)
from vibsym.vibrations.estimates import mode_class
from vibsym.vibrations.forcefield import ForceField, standard_field
from vibsym.vibrations.internal import internal_coordinates
from vibsym.vibrations.normal_modes import normal_modes
from vibsym.vibrations.surroundings import Surroundings

NEGLIGIBLE = 0.005  # of ln(factor) or of a share
FEWEST = 12  # left-out modes a class needs for a spread of its own
FEWEST_PAIRS = 60  # pairs of left-out modes a class needs for a correlation of its own
LEAST_CORRELATION = 0.5  # below, the order of the modes is left to their own errors
OUTLIER = 2.5  # spreads to which errors are drawn in where their correlation is measured

HEAD = """\
# Valence force field: factors whose product is a diagonal constant or a 1,3-repulsion, and shares of interactions
# (vibsym/vibrations/valence.py).
# stretch: N/m at the length given (Å), scaled to other lengths by Badger's law; class by bond order, or for bonds to
# hydrogen by the
# neighbours of the heavier atom. bend, linear bend: N/m, times r1 r2; wag, torsion: N/m Å² (100 N/m Å² = 1 aJ/rad²);
# repulsion: N/m at
# 0.8 of the contact distance; all other factors are pure numbers, shares are parts of the geometric mean of two
# diagonal constants.
# badger i-j: d (Å) of k = 186 N/m Å³/(r - d)³ for atoms of periods i and j, the fall-back for bonds without an entry.
# "fitted": python -m vibsym.vibrations.calibration --write, on NSRDS-NBS 39 and on fundamentals from memory
# (tests/reference).
# The constants reproduce observed fundamentals (anharmonicity included), not harmonic frequencies. Factors within 0.5
# % of 1 are left out.
"""
UNITS = (
    ("stretch", "N/m"),
    ("bend", "N/m"),
    ("linear bend", "N/m"),
    ("wag", "N/m Å2"),
    ("square wag", "N/m Å2"),
    ("repulsion", "N/m"),
)


def report(arguments: list[str]) -> None:
    """Fit, print the errors, and write what is asked for."""
    made = calibration(samples())
    p = fitted(made)
    made.observed = matched(made, p)
    p = fitted(made, start=p)
    print("in sample, NSRDS-NBS 39:  ", summary(_chosen(made, made.errors(p), False)))
    print("in sample, from memory:   ", summary(_chosen(made, made.errors(p), True)))
    if "--write" in arguments:
        _write("force_field.csv", table_text(made, p))
    if "--leave-out" in arguments:
        errors, classes = leave_out(made, p)
        known, fallback = split_by_fallback(made, errors)
        print("left out, NSRDS-NBS 39:   ", summary(_chosen(made, errors, False)))
        print("  all bond types known:   ", summary(_chosen(made, known, False)))
        print("  a bond by Badger's rule:", summary(_chosen(made, fallback, False)))
        print("left out, from memory:    ", summary(_chosen(made, errors, True)))
        if "--write" in arguments:
            _write("estimate_errors.csv", error_table(made, errors, classes))


def leave_out(made: Calibration, p: np.ndarray) -> tuple[dict[int, np.ndarray], dict[int, list[tuple]]]:
    """Return ln(calculated/observed) and (class, dominant set) of every mode, by block, fitted without its family."""
    errors, classes = {}, {}
    _, lonely = stretches_of(made)
    for family, q in left_out(made, p):
        errors |= made.errors(q, family)
        field = field_of(made, q)
        for molecule in family:
            classes |= _classes(made, molecule, field, lonely)
    return errors, classes


def field_of(made: Calibration, p: np.ndarray) -> ForceField:
    """Return the force field of given parameters."""
    values = {name: float(value if is_share(name) else np.exp(value)) for name, value in zip(made.problem.names, p)}
    return ForceField({**standard_field().values, **values}, standard_field().bonds)


def parameters_of(made: Calibration, field: ForceField) -> np.ndarray:
    """Return the parameters of a tabulated field."""
    return np.array([starting_value(name, field, 0.0) for name in made.problem.names])


def stretches_of(made: Calibration) -> tuple[dict[int, set[str]], set[str]]:
    """Return the stretch factors of every molecule, and those that only one family has."""
    used: dict[int, set[str]] = {}
    families: dict[str, set[str]] = {}
    for block in made.problem.blocks:
        present = np.flatnonzero((made.problem.powers[block.types] != 0).any(axis=0)).tolist()
        names = {made.problem.names[k] for k in present if made.problem.names[k].startswith("stretch ")}
        used.setdefault(block.molecule, set()).update(names)
        for name in names:
            families.setdefault(name, set()).add(made.samples[block.molecule].family)
    return used, {name for name, owners in families.items() if len(owners) == 1}


def split_by_fallback(made: Calibration, errors: dict) -> tuple[dict, dict]:
    """Part the errors: molecules all of whose bond types occur in other families too, and the others."""
    used, lonely = stretches_of(made)
    known, fallback = {}, {}
    for number, values in errors.items():
        alone = used[made.problem.blocks[number].molecule] & lonely
        (fallback if alone else known)[number] = values
    return known, fallback


def table_text(made: Calibration, p: np.ndarray) -> str:
    """Return the text of force_field.csv for fitted parameters; rows that are not fitted stay."""
    fit_values = dict(zip(made.problem.names, p))
    rows = []
    old = read_table("force_field.csv")
    for row in old:
        name = row["name"]
        if row["source"] == "fitted":
            if name.startswith("stretch ") and name in fit_values:
                rows.append({**row, "value": f"{np.exp(fit_values[name]):.5g}"})
        else:
            rows.append(row)
    known = {row["name"] for row in rows}
    for name in sorted(fit_values, key=_place):
        value = fit_values[name]
        if name not in known and abs(value) > NEGLIGIBLE and not name.startswith("stretch "):
            unit = (
                "share"
                if is_share(name)
                else dict(UNITS).get(
                    name,
                    "N/m" if name.startswith("repulsion ") and name[-1] == "H" and name[10].isdigit() else "factor",
                )
            )
            unit = (
                "N/m Å2"
                if name.startswith("torsion ")
                and len(name.split()) == 3
                and "heavy" not in name
                and "large" not in name
                else unit
            )
            rows.append(
                {
                    "name": name,
                    "length": "",
                    "value": f"{value if is_share(name) else np.exp(value):.5g}",
                    "unit": unit,
                    "source": "fitted",
                }
            )
    return HEAD + _csv(("name", "length", "value", "unit", "source"), rows)


def error_table(made: Calibration, errors: dict, classes: dict) -> str:
    """Return the text of estimate_errors.csv; `classes` holds (class, dominant set) of every mode, by block."""
    found: dict[str, list[float]] = {}
    together: dict[tuple, list[float]] = {}
    for number, values in errors.items():
        for value, (name, owner) in zip(values, classes[number]):
            found.setdefault(name, []).append(float(value))
            found.setdefault("any", []).append(float(value))
            together.setdefault((name, made.problem.blocks[number].molecule, owner), []).append(float(value))
    rows = [
        {
            "class": name,
            "spread": f"{_spread(values):.4f}",
            "shift": f"{np.median(values):.4f}",
            "common": f"{_common([each for key, each in together.items() if key[0] == name]):.2f}",
            "modes": len(values),
        }
        for name, values in sorted(found.items())
        if len(values) >= FEWEST
    ]
    head = (
        "# Error model of estimated wavenumbers: half-width of the central 68 % of ln(estimate/observed) by the kind\n"
        "# of coordinate that dominates the mode, its median (shift), and the part of its square that modes of one\n"
        "# set in one molecule share (common: their correlation). Measured on molecules left out of the fit with all\n"
        "# their isotopologues:\n"
        "# python -m vibsym.vibrations.calibration --leave-out --write\n"
    )
    return head + _csv(("class", "spread", "shift", "common", "modes"), rows)


def _common(families: list[list[float]]) -> float:
    """Return the correlation of the errors of one set in one molecule, outliers drawn in; 0 where it means little."""
    if not families:  # `any`: modes of no set in particular
        return 0.0
    everything = np.concatenate(families)
    most = OUTLIER * _spread(everything)
    drawn = [np.clip(values, -most, most) for values in families if len(values) > 1]
    if sum(len(values) * (len(values) - 1) // 2 for values in drawn) < FEWEST_PAIRS:
        return 0.0
    products = sum((values.sum() ** 2 - (values**2).sum()) / len(values) for values in drawn)
    pairs = sum(len(values) - 1 for values in drawn)
    found = float(products / pairs / np.mean(np.clip(everything, -most, most) ** 2))
    return found if found >= LEAST_CORRELATION else 0.0


def lacking_sets(symmetry, field: ForceField, lonely: set[str]) -> set[str]:
    """Return the sets that hold a bond whose stretch only this family has: left out, it is a fall-back."""
    sets = internal_coordinates(symmetry)
    around = Surroundings(symmetry.structure.symbols, symmetry.positions, sets)
    return {
        each.name
        for each in sets
        if each.kind == "stretch"
        and any(field.bonds.entry(around, *bond).name in lonely for bond in each.atoms.tolist())
    }


def _classes(made: Calibration, molecule: int, field: ForceField, lonely: set[str]) -> dict[int, list[tuple]]:
    """Return (class, dominant set) of the modes of a molecule left out; a bond that only it has is a fall-back."""
    symmetry = made.samples[molecule].symmetry
    sets, symbols = internal_coordinates(symmetry), symmetry.structure.symbols
    lacking = lacking_sets(symmetry, field, lonely)
    modes = normal_modes(symmetry, sets, field.matrix(symbols, symmetry.positions, sets))
    found = {}
    for number, block in enumerate(made.problem.blocks):
        if block.molecule == molecule and number in made.observed:
            found[number] = [
                (mode_class(mode, lacking), mode.shares[0][0] if mode.shares else "")
                for mode in modes
                if mode.species == block.label
            ]
    return found


def _spread(values) -> float:
    low, high = np.quantile(values, (0.16, 0.84))
    return float((high - low) / 2)


def _chosen(made: Calibration, errors: dict, memory: bool) -> np.ndarray:
    return np.concatenate(
        [
            values
            for number, values in errors.items()
            if made.samples[made.problem.blocks[number].molecule].from_memory == memory
        ]
    )


def _place(name: str) -> tuple:
    kinds = (
        "stretch",
        "hydrogen",
        "bend",
        "linear",
        "wag",
        "square",
        "torsion",
        "repulsion",
        "bonds",
        "bends",
        "wags",
        "torsions",
    )
    words = name.split()
    return kinds.index(words[0]), len(words), name


def _csv(head, rows) -> str:
    stream = io.StringIO()
    writer = csv.DictWriter(stream, head, lineterminator="\n")
    writer.writeheader()
    writer.writerows(rows)
    return stream.getvalue()


def _write(name: str, text: str) -> None:
    path = folder("tables") / name
    path.write_text(text, encoding="utf-8")
    print("wrote", path)
