"""What a picture of a structure shows: atoms, bonds, elements of symmetry and displacements, in the standard frame.

A *motion* is one displacement pattern that can be drawn as arrows: a normal mode, x = M^-1/2 Q, or a symmetry
coordinate, for which the atoms move along x = M^-1 B'c (the motion that a force along the coordinate starts from rest).
Patterns are scaled so that the farthest moving atom moves by 1.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from vibsym.groups.symbols import typeset
from vibsym.groups.symmetry_elements import ElementKind, symmetry_elements
from vibsym.structures.symmetry import Symmetry

TILT, TURN = np.radians(17.0), np.radians(-24.0)    # of the picture, so that no axis points at the eye
_DEFAULT_RADIUS = 0.9


@dataclass(frozen=True)
class Motion:
    """A displacement pattern: (N, 3) `vectors`, what it is called, and where its bands are."""

    key: str                   # "ν4", "Eu:1"
    label: str                 # typeset: "ν₄ T₂"
    species: str
    infrared: bool
    raman: bool
    polarised: bool
    vectors: np.ndarray = field(repr=False, compare=False)
    wavenumber: float | None = None
    description: str = ""


@dataclass(frozen=True, eq=False)
class Scene:
    """A structure ready to be drawn."""

    labels: tuple[str, ...]
    positions: np.ndarray      # (N, 3) symmetrised, standard frame, Å
    radii: np.ndarray          # (N,) of the discs, Å
    bonds: np.ndarray          # (B, 2)
    elements: tuple[ElementKind, ...]
    view: np.ndarray           # (3, 3) rows: right, up, towards the eye

    @property
    def reach(self) -> float:
        """Radius of a ball round the origin that holds the atoms, Å; at least 1, so that one atom stays a disc."""
        return float(max((np.linalg.norm(self.positions, axis=1) + self.radii).max(), 1.0))

    @property
    def ring(self) -> float:
        """Radius in Å of the ring that marks a centre of inversion round the atom there; 0 where no atom is there."""
        there = np.linalg.norm(self.positions, axis=1) < 0.05
        return float(1.25 * self.radii[there].max()) if there.any() else 0.0

    def to_dict(self, motions: Sequence[Motion] = ()) -> dict:
        """Return what the page's script draws, rounded to 0.001."""
        return {"labels": list(self.labels), "positions": _rounded(self.positions), "radii": _rounded(self.radii),
                "bonds": self.bonds.tolist(), "view": _rounded(self.view), "reach": round(self.reach, 3),
                "ring": round(self.ring, 3),
                "tints": [tint_of(label) for label in self.labels],
                "elements": [each.to_dict() | {"symbol": typeset(each.symbol)} for each in self.elements],
                "motions": {each.key: _rounded(each.vectors) for each in motions}}


def scene_of(symmetry: Symmetry) -> Scene:
    """Return the scene of a structure, seen against its least extension, z upwards where that can be."""
    from vibsym.structures.bonds import find_bonds

    structure = symmetry.structure
    bonds = structure.bonds if structure.bonds is not None else find_bonds(structure)
    radii = np.array([disc_radius(symbol) for symbol in structure.symbols])
    return Scene(structure.labels, symmetry.positions, radii, np.asarray(bonds).reshape(-1, 2),
                 symmetry_elements(symmetry.group), view_of(symmetry.positions))


def disc_radius(symbol: str) -> float:
    """Return the radius of an atom's disc in Å: well inside its covalent radius, so that bonds show."""
    from vibsym.structures.elements import covalent_radius
    from vibsym.structures.labels import is_dummy

    radius = _DEFAULT_RADIUS if is_dummy(symbol) else covalent_radius(symbol)
    return 0.2 + 0.17 * radius


def view_of(positions: np.ndarray) -> np.ndarray:
    """Return (3, 3) rows right, up and towards the eye: the least extended axis is looked along, a little askew."""
    spread = np.abs(positions).max(axis=0).round(3)
    toward = int(np.argmin(spread[[0, 1, 2]]))
    up = 2 if toward != 2 else 1
    if np.linalg.norm(spread[:2]) < 1e-6 and spread[2] > 0:          # linear: lay the axis across the page
        base = np.array([[0.0, 0, 1], [1, 0, 0], [0, 1, 0]])
        return base
    axes = np.eye(3)
    base = np.array([np.cross(axes[up], axes[toward]), axes[up], axes[toward]])
    about_up = np.array([[np.cos(TURN), 0, np.sin(TURN)], [0, 1, 0], [-np.sin(TURN), 0, np.cos(TURN)]])
    about_right = np.array([[1, 0, 0], [0, np.cos(TILT), -np.sin(TILT)], [0, np.sin(TILT), np.cos(TILT)]])
    return about_right @ about_up @ base


def tint_of(label: str) -> str:
    """Return the name of the tint of an element's disc; the letter inside tells the element, the tint only helps."""
    symbol = label.lstrip("0123456789")
    for tint, members in _TINTS.items():
        if symbol in members:
            return tint
    return "dummy" if symbol.startswith("X") and symbol != "Xe" else "metal"


_TINTS = {"hydrogen": ("H", "D", "T"), "carbon": ("C", "Si", "Ge"), "nitrogen": ("N",), "oxygen": ("O",),
          "halogen": ("F", "Cl", "Br", "I", "At"), "third": ("P", "S", "Se", "As", "Te", "B", "Sb"),
          "noble": ("He", "Ne", "Ar", "Kr", "Xe", "Rn")}


def mode_motions(symmetry: Symmetry, modes: Sequence) -> tuple[Motion, ...]:
    """Return the motions of normal modes, whose `vector` is in mass-weighted displacements."""
    roots = np.sqrt(np.repeat(symmetry.structure.masses, 3))
    found = []
    for mode in modes:
        if mode.vector is None:
            continue
        shares = ", ".join(f"{100 * share:.0f} % {name}" for name, share in mode.shares[:3])
        found.append(Motion(mode.name, f"{typeset(mode.name)} {typeset(mode.species)}", mode.species, mode.infrared,
                            mode.raman, mode.polarised, _scaled((mode.vector / roots).reshape(-1, 3)), mode.wavenumber,
                            shares))
    return tuple(found)


def coordinate_motions(found, component: int = 1) -> tuple[Motion, ...]:
    """Return the motions of symmetry coordinates (`SymmetryCoordinates`), one component of each; `Eu:1`, `Eu:2`, ..."""
    from vibsym.vibrations.bmatrix import b_matrix

    symmetry = found.symmetry
    if not found.sets:
        return ()
    B = b_matrix(symmetry.positions, found.sets)
    rows = {name: k for k, name in enumerate(name for each in found.sets for name in each.ids)}
    masses = np.nan_to_num(np.repeat(symmetry.structure.masses, 3), nan=1.0)
    counts: dict[str, int] = {}
    motions = []
    for each in found.combinations:
        if each.component != component:
            continue
        counts[each.species] = number = counts.get(each.species, 0) + 1
        force = sum(term.value * B[rows[term.coordinate]] for term in each.terms)
        vectors = (force / masses).reshape(-1, 3)
        if np.abs(vectors).max() < 1e-6:                  # wholly redundant: nothing moves
            continue
        species = symmetry.group.species_named(each.species)
        motions.append(Motion(f"{each.species}:{number}", f"{typeset(each.species)} : {number}", each.species,
                              species.infrared, species.raman, species.polarised, _scaled(vectors),
                              description=each.set))
    return tuple(motions)


def _scaled(vectors: np.ndarray) -> np.ndarray:
    largest = np.linalg.norm(vectors, axis=1).max()
    scaled = vectors / largest if largest > 0 else vectors
    first = np.flatnonzero(np.abs(scaled).max(axis=1) > 0.5)       # a sign that does not depend on the solver
    if len(first):
        row = scaled[first[0]]
        scaled = scaled * np.sign(row[np.abs(row).argmax()])
    return scaled


def _rounded(values: np.ndarray) -> list:
    return (np.round(values, 3) + 0.0).tolist()
