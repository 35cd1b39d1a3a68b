"""The settings of a group: the frames in which it stands alike but its species are named differently.

Only C2v, D2, D2h, C(2k)v, D(2k), D(2k)h (k >= 2) have more than one: exchanging x and y, or turning by pi/2k, carries
the group into itself and exchanges labels such as B1 and B2. Within a setting `equal_turns` lead from one frame to
those that no label tells apart. Which setting a structure gets: vibsym/structures/axis_choice.py.
Source: R. S. Mulliken, J. Chem. Phys. 23, 1997 (1955), rules for axes.
"""

import re
from functools import cache
from itertools import permutations

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group


@cache
def settings(symbol: str) -> dict[str, np.ndarray]:
    """Return the frames that labels can tell apart, as turns (3, 3) of the default one; a single entry where there is
    no choice.

    >>> list(settings("C2v")), list(settings("D4h")), list(settings("D3h"))
    (['xyz', 'yxz'], ['xyz', 'swap'], ['xyz'])
    """
    if symbol == "C2v":
        return {name: axes_order(name) for name in ("xyz", "yxz")}
    if symbol in ("D2", "D2h"):
        return {"".join(name): axes_order("".join(name)) for name in permutations("xyz")}
    parts = re.fullmatch(r"([CD])(\d+)(v|h|)", symbol)
    if parts and int(parts[2]) % 2 == 0 and int(parts[2]) >= 4 and (parts[1] == "D") == (parts[3] != "v"):
        angle = np.pi / int(parts[2])
        c, s = np.cos(angle), np.sin(angle)
        return {"xyz": np.eye(3), "swap": np.array([[c, s, 0], [-s, c, 0], [0, 0, 1]])}
    return {"xyz": np.eye(3)}


def axes_order(name: str) -> np.ndarray:
    """Return the proper rotation whose new x, y, z are the old ones in the order `name`, one of them reversed where
    it must be.
    """
    turn = np.eye(3)[["xyz".index(letter) for letter in name]]
    if np.linalg.det(turn) < 0:
        turn[1] *= -1
    return turn


def requested(symbol: str, axes: str | None) -> str | None:
    """Return the name of the setting asked for, None for the default; anything impossible is an error that names what
    is possible.
    """
    if axes is None:
        return None
    possible = settings(symbol)
    name = str(axes).strip().lower()
    if len(possible) == 1:
        raise VibsymError(f"--axes '{axes}': {symbol} leaves no choice of axes that labels depend on; leave --axes out")
    if name == "swap" and len(possible) == 2:
        return list(possible)[1]
    if name in possible:
        return name
    names = [key for key in possible if key != "xyz"]
    if symbol == "C2v":
        names = ["swap", *names]
    meaning = "" if names == ["swap"] else " (the new x, y, z among the default ones)"
    raise VibsymError(f"--axes '{axes}': in {symbol} the choice is {', '.join(names)}{meaning}")


@cache
def equal_turns(symbol: str) -> np.ndarray:
    """Return (k, 3, 3) turns between frames that no label tells apart, the identity first.

    They are the operations R of the group, -R for an improper one (it turns the frame as R does, since the inversion
    commutes with all), and turns that carry the group into itself without exchanging species: z reversed (C, S), x
    reversed (D), x and y (T, Th).
    """
    matrices = point_group(symbol).image.matrices
    determinants = np.round(np.linalg.det(matrices))
    centred = (matrices.trace(axis1=1, axis2=2) < -3 + 1e-9).any()      # then -R is in the group too
    turns = matrices[determinants > 0] if centred else matrices * determinants[:, None, None]
    more = []
    if symbol[0] in "CS":
        more = [np.diag([1.0, -1, -1])]
    if symbol in ("C1", "Ci"):
        more += [np.diag([-1.0, 1, -1]), np.diag([-1.0, -1, 1])]
    if symbol[0] == "D" and len(turns) % 4:
        more = [np.diag([-1.0, -1, 1])]
    if symbol in ("T", "Th"):
        more = [np.array([[0.0, -1, 0], [1, 0, 0], [0, 0, 1]])]
    return np.concatenate([turns] + [turns @ turn for turn in more])
