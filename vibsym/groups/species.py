"""Rows and columns of a character table: species with the functions that belong to them, and classes of operations.

Species that are complex-conjugate pairs (E of C3, S4, T, ...) are one real two-dimensional species: the sum over the
group of its squared characters is 2h, and it counts as one band.
The activity of a species follows from its functions alone (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular
Vibrations, 1955, ch. 3 and 7).
"""

from dataclasses import dataclass


@dataclass(frozen=True)
class OperationClass:
    """A class of conjugate operations: `2C3` with the places of its members among the operations."""

    symbol: str
    size: int
    members: tuple[int, ...]


@dataclass(frozen=True)
class Species:
    """An irreducible representation with its characters (one a class) and the functions that belong to it."""

    label: str
    degeneracy: int
    characters: tuple[float, ...]
    pair: bool
    linear: tuple[str, ...]
    rotations: tuple[str, ...]
    quadratic: tuple[str, ...]
    cubic: tuple[str, ...]
    totally_symmetric: bool

    @property
    def norm(self) -> int:
        """Sum of squared characters over the order: 2 for a conjugate pair, else 1."""
        return 2 if self.pair else 1

    @property
    def infrared(self) -> bool:
        """The species occurs in Γ(x, y, z)."""
        return bool(self.linear)

    @property
    def raman(self) -> bool:
        """The species occurs in Γ(x², y², z², xy, xz, yz)."""
        return bool(self.quadratic)

    @property
    def hyper_raman(self) -> bool:
        """The species occurs among the ten cubic functions, far from resonance."""
        return bool(self.cubic)

    @property
    def polarised(self) -> bool:
        """Raman lines can be polarised only where the species is totally symmetric."""
        return self.totally_symmetric and self.raman

    @property
    def silent(self) -> bool:
        """Neither infrared nor Raman active."""
        return not (self.infrared or self.raman)
