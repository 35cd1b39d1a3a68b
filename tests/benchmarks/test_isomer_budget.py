"""The budget of `vibsym isomers`: nine different ligands on TPRS-9, 362,880 arrangements, counted and listed."""

import statistics
import sys

from test_budgets import FLOOR, environment, report, seconds

__all__ = ["environment"]       # the fixture


def test_nine_different_ligands_counted_and_listed(environment):
    ligands = [word for number in range(1, 10) for word in ("--ligand", f"L{number}=1")]
    command = (sys.executable, "-m", "vibsym.cli.main", "isomers", "TPRS-9", "--centre", "Re", *ligands)
    for limit in ("200", "30240"):
        whole = (*command, "--limit", limit)
        pairs = [(seconds(FLOOR, environment), seconds(whole, environment)) for _ in range(4)][1:]
        floor, listed = (statistics.median(times) for times in zip(*pairs))
        report(f"`vibsym isomers TPRS-9`, {limit} rows, F = {1000 * floor:.0f} ms", listed / floor, 60, "F")
        assert floor > 0
