"""Assignments of published fundamentals, in sample and with each family of isotopologues left out of the calibration.

    python tests/benchmarks/assignment.py            # four to six minutes on one core

Prints, for lines with and without polarisation, how many have the published species and how many of the firm ones; the
limit FIRM of vibsym/evidence/assignment.py is chosen on the left-out figures.  A bond that only the family left out has
counts as a fall-back, as it would for a user.  Fundamentals of one wavenumber count as a multiset: nobody can tell
which of them is which.
"""

import sys
from dataclasses import replace
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1]))
from published_lines import judged, score

from vibsym.vibrations.calibration import calibration, fitted, left_out, matched, samples, summary
from vibsym.vibrations.calibration_report import field_of, lacking_sets, parameters_of, stretches_of
from vibsym.vibrations.estimates import estimate
from vibsym.vibrations.forcefield import standard_field


def main() -> None:
    made = calibration(samples())
    p = parameters_of(made, standard_field())
    made.observed = matched(made, p)
    p = fitted(made, start=p)
    inside = [estimate(sample.symmetry) for sample in made.samples]
    outside, errors, (_, lonely) = [None] * len(inside), {}, stretches_of(made)
    for family, q in left_out(made, p):
        field = field_of(made, q)
        errors |= made.errors(q, family)
        for number in family:
            symmetry = made.samples[number].symmetry
            lacking = tuple({"set": name, "constant": 0.0} for name in lacking_sets(symmetry, field, lonely))
            outside[number] = replace(estimate(symmetry, field), fallback=lacking)
    for memory, source in ((False, "NSRDS-NBS 39"), (True, "from memory")):
        chosen = [
            values
            for number, values in errors.items()
            if made.samples[made.problem.blocks[number].molecule].from_memory == memory
        ]
        print(f"{source}, left out: {summary(np.concatenate(chosen))}")
        for name, estimates in (("in sample", inside), ("left out", outside)):
            for polarisation in (True, False):
                lines = [
                    line
                    for sample, each in zip(made.samples, estimates)
                    if sample.from_memory == memory
                    for line in judged(sample, each, polarisation)
                ]
                number, right, firm, sure = score(lines)
                print(
                    f"{source}, {name}, {'with' if polarisation else 'without'} polarisation: "
                    f"{number} lines, {100 * right:.2f} % right, "
                    f"{100 * firm:.0f} % firm, of these {100 * sure:.2f} % right"
                )


if __name__ == "__main__":
    main()
