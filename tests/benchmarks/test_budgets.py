"""The budgets of the design, measured as ratios against a floor taken in the same run.

Run with `python -m pytest tests/benchmarks -s`.
F is the time of `python -c "import numpy, click, rich.console"`: what any such program pays before it does anything.
Nothing here asserts seconds or ratios (machines differ and are busy); a figure over its budget is marked in the print.
"""

import os
import statistics
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest
from molecules import MOLECULES, c60, turned

from vibsym import Structure, expect, find_symmetry

ROOT = Path(__file__).parent.parent.parent
ONE_THREAD = {"OMP_NUM_THREADS": "1", "OPENBLAS_NUM_THREADS": "1", "MKL_NUM_THREADS": "1"}
FLOOR = (sys.executable, "-c", "import numpy, click, rich.console")
RUNS = 15


@pytest.fixture
def environment(tmp_path_factory):
    """One thread, bytecode kept in a folder of its own so that it is warm after the first run."""
    more = {**ONE_THREAD, "PYTHONPYCACHEPREFIX": str(tmp_path_factory.mktemp("bytecode"))}
    return {name: value for name, value in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"} | more


def seconds(command, environment):
    start = time.perf_counter()
    subprocess.run(command, cwd=ROOT, env=environment, check=True, stdout=subprocess.DEVNULL)
    return time.perf_counter() - start


def best(function, runs=7):
    """Return the shortest time of some runs, in seconds: the one least disturbed."""
    times = []
    for _ in range(runs):
        start = time.perf_counter()
        function()
        times.append(time.perf_counter() - start)
    return min(times)


def report(name, value, budget, unit):
    print(f"\n{name}: {value:.2f} {unit} (budget {budget} {unit}){'  OVER' if value > budget else ''}")


def test_whole_expect_on_twenty_atoms(environment):
    command = (sys.executable, "-m", "vibsym.cli.main", "expect", "samples/stabiliser-dimethoxybenzene.xyz")
    pairs = [(seconds(FLOOR, environment), seconds(command, environment)) for _ in range(RUNS + 1)][1:]
    floor, whole = (statistics.median(times) for times in zip(*pairs))
    report(f"whole `vibsym expect`, 20 atoms, F = {1000 * floor:.0f} ms", whole / floor, 1.5, "F")
    assert floor > 0


def test_c60_in_a_warm_process():
    symbols, positions = c60()
    structure = Structure.from_atoms(symbols, turned(positions, 3))
    matrix = np.random.default_rng(1).normal(size=(180, 180))
    matrix += matrix.T
    assert expect(structure).counts.infrared == 4
    ratio = best(lambda: expect(structure).counts) / best(lambda: np.linalg.eigh(matrix))
    report("C60, group + Γvib + counts", ratio, 15, "eigh of 180 x 180")


def test_molecules_up_to_twelve_atoms_a_second():
    small = [Structure.from_atoms(symbols, turned(positions, seed))
             for seed, (symbols, positions) in enumerate(MOLECULES.values()) if len(symbols) <= 12]
    assert all(expect(each).counts.fundamentals for each in small)
    spent = best(lambda: [expect(each).counts for each in small], runs=3)
    print(f"\nexpect(structure).counts, up to 12 atoms: {len(small) / spent:.0f} a second (budget 300 a second)")


@pytest.mark.parametrize("shape", ["ring", "tube"])
def test_finding_the_group_grows_no_faster_than_n_log_n(shape):
    sizes, times = (60, 600, 6000, 18000), []
    for atoms in sizes:
        structure = Structure.from_atoms(["C"] * atoms, turned(rings(atoms, 6 if shape == "tube" else 60), 4))
        times.append(best(lambda structure=structure: find_symmetry(structure), runs=3))
    scale = [n * np.log(n) for n in sizes]
    growth = [times[k] / times[0] / (scale[k] / scale[0]) for k in range(len(sizes))]
    print(f"\ngroup of {shape}s of {sizes} atoms: {', '.join(f'{1000 * t:.1f} ms' for t in times)}; "
          f"relative to N log N: {', '.join(f'{g:.2f}' for g in growth)} (budget 1)")
    assert len(times) == len(sizes)


def rings(atoms, n):
    """Return rings of n atoms stacked on z, ends alike (Dnh)."""
    angles = 2 * np.pi * np.arange(n) / n
    count = atoms // n
    radius = max(1.6 * n / (2 * np.pi), 1.6)
    heights = 2.4 * (np.arange(count) - (count - 1) / 2)
    return np.array([(radius * np.cos(a), radius * np.sin(a), z) for z in heights for a in angles])
