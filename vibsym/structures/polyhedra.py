"""Ideal coordination shapes of coordination numbers 2 to 9, and how symmetry permutes their sites.

A shape is a set of directions from the centre, in the standard orientation of its point group; every operation
permutes the sites.  Symbols: IUPAC, Nomenclature of Inorganic Chemistry, Recommendations 2005, IR-9.3.2.  The
directions, the neighbours (which sites a chelate can span) and the free choices stand in `tables/polyhedra.csv`.
Putting ligands on the sites is left to `placing.py`, counting the ways of doing so to `arrangements.py`.
"""

import re
from dataclasses import dataclass
from functools import cache, cached_property
from math import cos, radians, sin, sqrt

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import PointGroup, point_group
from vibsym.tables import read_table

CLOSE = 1e-6                    # between unit vectors that are one site; sites are at least 0.8 apart
_FACTOR = re.compile(r"(?:(sqrt|cos|sin)\()?(?:(sqrt)\()?(\d+(?:\.\d+)?)(?:/(\d+))?\)*")


@dataclass(frozen=True, eq=False)
class Shape:
    """An idealised coordination polyhedron with its n sites, numbered from 0 here and from 1 on screen."""

    symbol: str                 # IUPAC polyhedral symbol, "OC-6"
    name: str                   # "octahedron"
    group: object               # PointGroup or InfiniteGroup
    places: tuple[str, ...]     # what a site is called where the shape has several kinds: "axial", "cap", ""
    directions: np.ndarray      # (n, 3) unit vectors from the centre
    neighbours: np.ndarray      # (n, n) bool: sites that share an edge

    def __len__(self) -> int:
        return len(self.places)

    @property
    def image(self) -> PointGroup:
        """The finite group whose operations permute the sites (for L-2: D4h in place of D∞h)."""
        return self.group.image

    @cached_property
    def permutations(self) -> np.ndarray:
        """(h, n) int: operation r carries what stands on site j to site permutations[r, j]."""
        moved = np.einsum("rab,jb->rja", self.image.matrices, self.directions)
        distance = np.linalg.norm(moved[:, :, None, :] - self.directions, axis=3)
        targets = distance.argmin(axis=2)
        if distance.min(axis=2).max() > CLOSE or np.any(np.sort(targets, axis=1) != np.arange(len(self))):
            raise VibsymError(f"tables/polyhedra.csv: the sites of {self.symbol} do not fit {self.group.symbol}")
        return targets

    @cached_property
    def opposite(self) -> tuple[int | None, ...]:
        """For each site the one trans to it: the only one at the largest angle, if that is at least 150 degrees.

        (Trans ligands in the base of the square pyramid are at 150 degrees; in a heptagon two sites are equally far.)
        """
        cosines = self.directions @ self.directions.T
        order = np.argsort(cosines, axis=1)
        if len(self) == 2:
            return (1, 0) if cosines[0, 1] < -0.86 else (None, None)
        rows = np.arange(len(self))
        far, next_far = cosines[rows, order[:, 0]], cosines[rows, order[:, 1]]
        alone = (far < -0.86) & (next_far > far + CLOSE)
        return tuple(int(order[site, 0]) if alone[site] else None for site in rows)


@cache
def shapes() -> dict[str, Shape]:
    """Return all shapes by symbol, in the order of their coordination numbers."""
    rows: dict[str, list[dict]] = {}
    for row in read_table("polyhedra.csv"):
        rows.setdefault(row["symbol"], []).append(row)
    return {symbol: _shape(symbol, sites) for symbol, sites in rows.items()}


def shape(symbol: str) -> Shape:
    """Return the shape with an IUPAC polyhedral symbol, typed in any case, with or without the hyphen.

    >>> shape("oc-6").name, shape("OC-6").group.symbol, shape("TBPY5").places[:3]
    ('octahedron', 'Oh', ('axial', 'axial', 'equatorial'))
    """
    plain = symbol.strip().upper().replace("-", "").replace("_", "")
    for known, found in shapes().items():
        if known.replace("-", "") == plain:
            return found
    raise VibsymError(f"no coordination shape '{symbol}'; vibsym has {', '.join(shapes())}")


def _shape(symbol: str, rows: list[dict]) -> Shape:
    vectors = np.array([[exact_number(row[axis]) for axis in "xyz"] for row in rows])
    vectors /= np.linalg.norm(vectors, axis=1)[:, None]
    edges = np.zeros((len(rows), len(rows)), dtype=bool)
    for index, row in enumerate(rows):
        edges[index, [int(number) - 1 for number in row["neighbours"].split()]] = True
    if np.any(edges != edges.T):
        raise VibsymError(f"tables/polyhedra.csv: the neighbours of {symbol} are not mutual")
    vectors.setflags(write=False)
    edges.setflags(write=False)
    first = rows[0]
    places = tuple(row["place"] for row in rows)
    return Shape(symbol, first["name"], point_group(first["group"]), places, vectors, edges)


def exact_number(text: str) -> float:
    """Return the value of factors joined by * and /: decimals, sqrt(n), and cos, sin of an angle in degrees.

    >>> exact_number("-sqrt(3)/2") == -(3**0.5) / 2, exact_number("cos(60)*sqrt(sqrt(16))")
    (True, 1.0000000000000002)
    """
    sign, body = (-1.0, text[1:]) if text.startswith("-") else (1.0, text)
    parts = re.split(r"([*/])(?![^(]*\))", body)          # not the division inside cos(360/7)
    value = sign
    for operator, factor in zip(["*", *parts[1::2]], parts[::2]):
        match = _FACTOR.fullmatch(factor)
        if not match:
            raise VibsymError(f"tables/polyhedra.csv: '{text}' is not a number that vibsym reads")
        outer, inner, number, divisor = match.groups()
        size = float(number) / float(divisor or 1)
        size = sqrt(size) if inner else size
        size = radians(size) if outer in ("cos", "sin") else size
        size = {"sqrt": sqrt, "cos": cos, "sin": sin, None: float}[outer](size)
        value = value * size if operator == "*" else value / size
    return value
