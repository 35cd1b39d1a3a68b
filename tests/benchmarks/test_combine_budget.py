"""The budget of `vibsym combine`: 30 fundamentals in twelve species to three quanta, as a whole command."""

import random
import statistics
import sys

import pytest
from test_budgets import FLOOR, environment, report, seconds

from vibsym.groups.pointgroup import point_group

__all__ = ["environment"]       # the fixture


@pytest.mark.parametrize("form", ["json", "table"])
def test_thirty_fundamentals_to_three_quanta(environment, form):
    draw = random.Random(1)
    labels = point_group("D6h").labels
    modes = [word for k in range(30)
             for word in ("--mode", f"v{k + 1}:{draw.choice(labels)}={draw.randint(200, 3200)}")]
    command = (sys.executable, "-m", "vibsym.cli.main", "combine", "D6h", *modes, "--quanta", "3", "--format", form)
    pairs = [(seconds(FLOOR, environment), seconds(command, environment)) for _ in range(6)][1:]
    floor, whole = (statistics.median(times) for times in zip(*pairs))
    report(f"`vibsym combine`, 30 fundamentals, 3 quanta, {form}, F = {1000 * floor:.0f} ms", whole / floor, 20, "F")
    assert floor > 0
