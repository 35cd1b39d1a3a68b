"""Budgets of symmetry coordinates and regions, as ratios against the same floor F as in test_budgets.py; printed only.

Run with `python -m pytest tests/benchmarks -s`.
"""

import os
import statistics
import subprocess
import sys
import time
from pathlib import Path

import complexes
import numpy as np
import pytest
from molecules import atoms, turned

ROOT = Path(__file__).parent.parent.parent
FLOOR = (sys.executable, "-c", "import numpy, click, rich.console")
PROGRAM = (sys.executable, "-m", "vibsym.cli.main")
RUNS = 15


@pytest.fixture
def environment(tmp_path_factory):
    """One thread, bytecode kept in a folder of its own so that it is warm after the first run."""
    bytecode = str(tmp_path_factory.mktemp("bytecode"))
    more = {"OMP_NUM_THREADS": "1", "OPENBLAS_NUM_THREADS": "1", "PYTHONPYCACHEPREFIX": bytecode}
    return {name: value for name, value in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"} | more


def seconds(command, environment):
    start = time.perf_counter()
    subprocess.run(command, cwd=ROOT, env=environment, check=True, stdout=subprocess.DEVNULL)
    return time.perf_counter() - start


def ratio(command, environment):
    """Return (command over floor, floor in seconds), medians of alternating runs after one to warm up."""
    pairs = [(seconds(FLOOR, environment), seconds(command, environment)) for _ in range(RUNS + 1)][1:]
    floor, whole = (statistics.median(times) for times in zip(*pairs))
    return whole / floor, floor


def hundred_and_twenty_atoms():
    """Return Mo(CO)4(PCy3)2 with seven atoms of argon, shaken: no symmetry, 354 vibrations of one species."""
    names, phosphine = complexes.tricyclohexylphosphine()
    frame, places = atoms(("Mo", (0, 0, 0)), *complexes.carbonyls([(1, 0, 0), (-1, 0, 0), (0, 1, 0), (0, -1, 0)]))
    ligand = phosphine * (1, 1, -1) + (0, 0, 2.55)
    argon = [(9.0, 9.0, 3.8 * k) for k in range(7)]
    positions = np.vstack([places, ligand, -ligand, argon])
    return [*frame, *names, *names, *["Ar"] * 7], turned(complexes.shaken(positions, 2), 3)


def test_stretches_of_c60_as_a_whole_command(environment):
    command = (*PROGRAM, "coordinates", "samples/soot-c60.xyz", "--select", "stretch C-C")
    value, floor = ratio(command, environment)
    print(f"\nC60, 90 stretches with exact coefficients, F = {1000 * floor:.0f} ms: {value:.2f} F (budget 20 F)")
    assert value > 0


def test_expect_with_regions_on_120_atoms(environment, tmp_path):
    symbols, positions = hundred_and_twenty_atoms()
    assert len(symbols) == 120
    path = tmp_path / "large.xyz"
    path.write_text(complexes.written(symbols, positions), encoding="utf-8")
    value, floor = ratio((*PROGRAM, "expect", str(path)), environment)
    print(f"\n`vibsym expect` with regions, 120 atoms in C1, F = {1000 * floor:.0f} ms: {value:.2f} F (budget 5 F)")
    assert value > 0
