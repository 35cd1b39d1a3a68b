"""The budget of `vibsym screen`: 40 lines against 50 different structures of 20 atoms."""

import random
import statistics
import sys

import numpy as np
from test_budgets import FLOOR, environment, report, seconds

__all__ = ["environment"]       # the fixture

AXES = np.array([*np.eye(3), *-np.eye(3)])


def write_structures(folder) -> list[str]:
    """Write 50 structures of 20 atoms, a centre with atoms at many distances, some symmetric and some not."""
    draw, paths = random.Random(5), []
    for number in range(50):
        half = draw.choice((True, False, False))
        places = [np.zeros(3)]
        while len(places) < 20:
            place = AXES[draw.randrange(6)] * (1.9 + 1.2 * draw.randrange(4)) if draw.random() < 0.7 else \
                np.array([draw.uniform(-4, 4) for _ in range(3)])
            new = [place, -place] if half else [place]
            apart = all(np.linalg.norm(one - other) > 1.1 for one in new for other in places)
            if apart and len(places) + len(new) <= 20:
                places += new
            elif half and len(places) == 19:
                places.append(np.array([0, 0, 9.0]))
        text = "\n".join(f"{'W' if not k else 'O'} {x:.6f} {y:.6f} {z:.6f}" for k, (x, y, z) in enumerate(places))
        path = folder / f"{number:02d}.xyz"
        path.write_text(f"20\n\n{text}\n")
        paths.append(str(path))
    return paths


def write_bands(folder) -> str:
    """Write 40 lines of mixed strength and polarisation; 8 of them coincide."""
    draw = random.Random(3)
    infrared = sorted(draw.sample(range(200, 2100, 7), 22))
    raman = [place + 1 for place in draw.sample(infrared, 8)] + draw.sample(range(203, 2100, 7), 10)
    rows = [f"{place},IR,{draw.choice(('vs', 's', 'm', 'w', 'sh'))}," for place in infrared]
    rows += [f"{place},Raman,{draw.choice(('vs', 's', 'm', 'w'))},{draw.choice(('', '', 'p', 'dp'))}"
             for place in raman]
    path = folder / "bands.csv"
    path.write_text("wavenumber,spectrum,strength,polarisation\n" + "\n".join(rows) + "\n")
    return str(path)


def test_forty_lines_against_fifty_structures(environment, tmp_path):
    command = (sys.executable, "-m", "vibsym.cli.main", "screen", *write_structures(tmp_path), "--bands",
               write_bands(tmp_path), "--output", str(tmp_path / "page"))
    pairs = [(seconds(FLOOR, environment), seconds(command, environment)) for _ in range(6)][1:]
    floor, screened = (statistics.median(times) for times in zip(*pairs))
    report(f"`vibsym screen`, 40 lines, 50 structures, F = {1000 * floor:.0f} ms", screened / floor, 12, "F")
    assert "Ranked" in (tmp_path / "page").read_text()
