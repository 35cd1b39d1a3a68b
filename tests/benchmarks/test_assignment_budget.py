"""Budgets of whole commands: `vibsym normal` on benzene 2 F and on C60 35 F, `vibsym assign` with sixty lines 12 F."""

import statistics
import sys
from pathlib import Path

import pytest
from test_budgets import FLOOR, environment, report, seconds

__all__ = ["environment"]  # the fixture

ROOT = Path(__file__).parents[2]
PUBLISHED = ROOT / "tests" / "reference" / "shimanouchi"
PROGRAM = (sys.executable, "-m", "vibsym.cli.main")


def measured(command, environment):
    pairs = [(seconds(FLOOR, environment), seconds(command, environment)) for _ in range(6)][1:]
    return [statistics.median(times) for times in zip(*pairs)]


@pytest.mark.parametrize(
    ("path", "budget"),
    [(PUBLISHED / "benzene.xyz", 2), (ROOT / "samples" / "soot-c60.xyz", 35)],
    ids=["benzene", "C60"],
)
def test_normal(environment, path, budget):
    floor, whole = measured((*PROGRAM, "normal", str(path)), environment)
    report(f"`vibsym normal {path.name}`, F = {1000 * floor:.0f} ms", whole / floor, budget, "F")
    assert floor > 0


def test_assign(environment, tmp_path):
    values = (2983, 2975, 2941, 2910, 2884, 1716, 1460, 1422, 1413, 1373, 1346, 1263, 1182, 1108, 1089, 997, 952, 939)
    values += (768, 760, 590, 460, 413, 260, 201, 106, 87, 2960, 2990, 1440)
    bands = tmp_path / "bands.csv"
    bands.write_text("wavenumber,spectrum\n" + "".join(f"{v},{name}\n" for v in values for name in ("IR", "Raman")))
    command = (*PROGRAM, "assign", str(PUBLISHED / "2-butanone.xyz"), "--bands", str(bands))
    floor, whole = measured(command, environment)
    report(f"`vibsym assign`, 60 lines, F = {1000 * floor:.0f} ms", whole / floor, 12, "F")
    assert floor > 0
