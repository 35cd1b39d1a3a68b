"""The rigid rotor: principal moments and axes, rotational constants, kind of top, spin weights of linear molecules.

Moments I_a ≤ I_b ≤ I_c in u Å²; A, B, C = h/(8π²cI) in cm-1.  A molecule whose group has an axis of order three or
more (or S4) is a symmetric top, prolate when the axis is that of the smallest moment; cubic groups make spherical
tops (G. Herzberg, Infrared and Raman Spectra, 1945, ch. I).
"""

from dataclasses import dataclass
from fractions import Fraction
from functools import cache

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.symmetry import Symmetry
from vibsym.tables import read_table
from vibsym.vibrations.productrule import inertia_tensor

CONSTANT = 16.857629206            # h/(8π²c) in cm-1 u Å² (CODATA 2018)
EQUAL = 1e-4                       # moments that agree so far are equal for band contours


@dataclass(frozen=True, eq=False)
class Rotor:
    """A rigid molecule: `axes` (3, 3) has the principal axes a, b, c as rows in the standard frame.

    `kind`: atom, linear, spherical, prolate, oblate or asymmetric; `by_symmetry`: the group asks for it.
    """

    kind: str
    moments: np.ndarray
    axes: np.ndarray
    by_symmetry: bool

    @property
    def constants(self) -> tuple[float | None, float | None, float | None]:
        """A, B, C in cm-1; None for a rotation that a linear molecule does not have."""
        return tuple(float(CONSTANT / moment) if moment > 1e-6 else None for moment in self.moments)

    @property
    def unique(self) -> int | None:
        """Place of the axis of a symmetric top or a linear molecule among a, b, c."""
        return {"prolate": 0, "linear": 0, "oblate": 2}.get(self.kind)

    @property
    def ray(self) -> float | None:
        """Ray's asymmetry parameter κ = (2B - A - C)/(A - C) of an asymmetric top: -1 prolate, +1 oblate."""
        if self.kind != "asymmetric":
            return None
        a, b, c = self.constants
        return (2 * b - a - c) / (a - c)

    def to_dict(self) -> dict:
        """Return the rotor for JSON; moments in u Å², constants in cm-1, axes in the standard frame."""
        return {"rotor": self.kind, "moments": np.round(self.moments, 6).tolist(),
                "constants": dict(zip("ABC", self.constants)), "asymmetry": self.ray,
                "principal_axes": {name: (np.round(axis, 6) + 0.0).tolist() for name, axis in zip("abc", self.axes)}}


def rotor(symmetry: Symmetry) -> Rotor:
    """Return the rigid rotor of a structure; a dummy atom has no mass and is refused."""
    structure = symmetry.structure
    if bool(structure.is_dummy.any()):
        name = structure.symbols[int(structure.is_dummy.argmax())]
        raise VibsymError(f"{structure.source or structure.formula}: the dummy atom {name} has no mass; "
                          "moments of inertia need the real atom")
    moments, vectors = np.linalg.eigh(inertia_tensor(symmetry.positions, structure.masses))
    axes = vectors.T * np.where(vectors[np.abs(vectors).argmax(axis=0), range(3)] < 0, -1.0, 1.0)[:, None]
    moments = np.where(moments < 1e-9 * max(moments[2], 1.0), 0.0, moments)
    kind = _kind(symmetry, moments)
    degenerate = any(species.linear and species.degeneracy > 1 for species in symmetry.group.species)
    return Rotor(kind, moments, axes, kind in ("atom", "asymmetric") or degenerate)


def _kind(symmetry: Symmetry, moments: np.ndarray) -> str:
    if len(symmetry.structure) == 1:
        return "atom"
    if symmetry.group.infinite:
        return "linear"
    low, high = (abs(moments[k + 1] - moments[k]) <= EQUAL * moments[2] for k in (0, 1))
    return "spherical" if low and high else "oblate" if low else "prolate" if high else "asymmetric"


def spin_weights(symmetry: Symmetry) -> dict[str, int] | None:
    """Return the statistical weights of even and odd J of a linear molecule in its ground state; None for others.

    D∞h: half turns exchange pairs of nuclei; of the Π(2I + 1) = D spin functions of one half D(D + 1)/2 are symmetric
    in the exchange and D(D - 1)/2 antisymmetric; an even number of exchanged fermion pairs goes with the symmetric
    ones at even J (Herzberg 1945, ch. I,1).  C∞v: all J alike.

    Returns None where a spin is not in tables/nuclear_spins.csv.
    """
    group, structure = symmetry.group, symmetry.structure
    if group.symbol not in ("C∞v", "D∞h"):
        return None
    spins = [nuclear_spin(symbol, number) for symbol, number in zip(structure.symbols, structure.mass_numbers)]
    if None in spins:
        return None
    states = [int(2 * spin + 1) for spin in spins]
    if group.symbol == "C∞v":
        weight = int(np.prod(states))
        return {"even": weight, "odd": weight}
    exchange = symmetry.permutations[group.image.operation_symbols.index("i")]
    half = [atom for atom, partner in enumerate(exchange.tolist()) if atom < partner]
    alone = int(np.prod([states[atom] for atom, partner in enumerate(exchange.tolist()) if atom == partner]))
    functions = int(np.prod([states[atom] for atom in half]))
    bosons = sum(spins[atom].denominator == 2 for atom in half) % 2 == 0
    symmetric, antisymmetric = functions * (functions + 1) // 2, functions * (functions - 1) // 2
    even, odd = (symmetric, antisymmetric) if bosons else (antisymmetric, symmetric)
    return {"even": even * alone, "odd": odd * alone}


def nuclear_spin(symbol: str, mass_number: int | None) -> Fraction | None:
    """Return the spin of a nucleus; None where the table does not have it.

    >>> nuclear_spin("H", 2), nuclear_spin("F", None)
    (Fraction(1, 1), Fraction(1, 2))
    """
    from vibsym.structures.elements import element

    return _spins().get((symbol, mass_number or element(symbol).isotope))


@cache
def _spins() -> dict[tuple[str, int], Fraction]:
    return {(row["symbol"], int(row["mass_number"])): Fraction(row["spin"]) for row in read_table("nuclear_spins.csv")}
