"""The product rule of Teller and Redlich: wavenumbers of isotopologues, species by species.

    Π ω(to)/ω(from) = Π_s (m_s/m_s')^(n_s/2) · (M'/M)^(t/2) · (det I'/det I)^(1/2)

in each species of the group that both molecules have; a degenerate set counts once, and everything is taken for one
component: n_s is how often the set s of equivalent atoms (mass m, m') contributes displacements, t how many
translations there are, I the block of the inertia tensor of the rotations (its determinant where two share a species;
a linear molecule has no rotation about its axis).  Source: O. Redlich, Z. phys. Chem. B 28, 371 (1935); G. Herzberg,
Infrared and Raman Spectra (1945), ch. II,6; E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), ch.
8.  The rule is exact for harmonic vibrations in any force field.
"""

from dataclasses import dataclass

import numpy as np

from vibsym.groups.bases import Basis
from vibsym.structures.isotopes import Substitution
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.cartesian import displacements


@dataclass(frozen=True)
class ProductLine:
    """The rule in one species of the common group: theory, and the factors that make it.

    `hydrogenic`: vibrations in which an exchanged hydrogen isotope moves, at most.
    """

    species: str
    modes: int
    theory: float
    factors: tuple[tuple[str, float], ...]
    hydrogenic: int

    def to_dict(self) -> dict:
        """Return the line for JSON."""
        return {"species": self.species, "modes": self.modes, "theory": self.theory,
                "factors": dict(self.factors), "hydrogenic": self.hydrogenic}


def product_rule(pair: Substitution) -> tuple[ProductLine, ...]:
    """Return the rule for every species of the common group that holds a vibration, in table order."""
    common = pair.common
    masses = np.stack([pair.original.structure.masses, pair.substituted.structure.masses])
    return product_rule_of(common, masses)


def product_rule_of(common: Symmetry, masses: np.ndarray) -> tuple[ProductLine, ...]:
    """Return the rule for masses (2, N), before and after, in a group that both molecules have."""
    counted = displacements(common)
    group, image = common.group, common.group.image
    back = {name: label for label, name in group.image_labels.items()}
    basis = Basis.displacements(image, common.permutations)
    orbits = basis.orbits()
    contributions = [basis.restrict(orbit).reduce() for orbit in orbits]
    weights = np.array([masses[:, orbit].mean(axis=1) for orbit in orbits])      # (sets, 2)
    total = masses.sum(axis=1)
    tensors = np.array([inertia_tensor(common.positions, row) for row in masses])
    lines = []
    for label, modes in counted.gamma_vib.items():
        own = back[label]
        times = np.array([each.get(own, 0) for each in contributions])
        factors = [(_set_name(common, orbit), float((m[0] / m[1]) ** (n / 2)))
                   for orbit, m, n in zip(orbits, weights, times) if n and m[0] != m[1]]
        translations = counted.gamma_translation.get(label, 0)
        if translations:
            factors.append(("translation", float((total[1] / total[0]) ** (translations / 2))))
        axes = rotation_axes(group, label) if counted.gamma_rotation.get(label) else []
        if axes:
            before, after = (np.linalg.det(tensor[np.ix_(axes, axes)]) for tensor in tensors)
            factors.append(("rotation", float((after / before) ** 0.5)))
        hydrogen = [common.structure.numbers[orbit[0]] == 1 and m[0] != m[1] for orbit, m in zip(orbits, weights)]
        hydrogenic = min(modes, int(times[hydrogen].sum()))
        theory = float(np.prod([value for _, value in factors])) if factors else 1.0
        lines.append(ProductLine(label, modes, theory, tuple(factors), hydrogenic))
    return tuple(lines)


def inertia_tensor(positions: np.ndarray, masses: np.ndarray) -> np.ndarray:
    """Return the tensor of inertia (3, 3) in u Å² about the centre of mass, Σ m (r² 1 - r r^T).

    >>> inertia_tensor(np.array([[0.0, 0, 0.5], [0, 0, -0.5]]), np.array([1.0, 1.0])).diagonal().tolist()
    [0.5, 0.5, 0.0]
    """
    away = positions - masses @ positions / masses.sum()
    moments = np.einsum("n,ni,nj->ij", masses, away, away)
    return np.trace(moments) * np.eye(3) - moments


def rotation_axes(group, label: str) -> list[int]:
    """Return the axes (0, 1, 2) of the rotations that belong to one component of a species.

    One-dimensional species: all its rotations; degenerate ones: the first of each set of partners.
    """
    species = group.species_named(label)
    axes = ["xyz".index(name[1]) for name in species.rotations]
    return axes[::species.degeneracy] if species.degeneracy > 1 else axes


def _set_name(common: Symmetry, orbit: np.ndarray) -> str:
    atoms = ",".join(str(atom + 1) for atom in orbit.tolist())
    return f"{common.structure.symbols[orbit[0]]} {atoms}"
