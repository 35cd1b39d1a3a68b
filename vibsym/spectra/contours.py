"""Contours of infrared bands of a gas: band type and P-R separation of every infrared-active species.

The transition moment lies along the functions x, y, z of the species.  Linear: Σ bands P R, Π bands P Q R.  Symmetric
tops: parallel and perpendicular.  Asymmetric tops: type A, B or C after the principal axis along the moment, hybrid
where the species holds more than one (G. Herzberg, Infrared and Raman Spectra, 1945, ch. IV).  Separations of the P
and R maxima, cm-1 (papers from memory):

- linear, parallel: S(β) √(8 B kT/hc), log10 S = 0.721/(β + 4)^1.13, β = A/B - 1, A about the axis; linear: S = 1.
  S. L. Gerhard, D. M. Dennison, Phys. Rev. 43, 197 (1933), no Coriolis coupling (ζ = 0).
- spherical: 4 (1 - ζ) √(B kT/hc).  W. F. Edgell, R. E. Moynihan, J. Chem. Phys. 27, 155 (1957).
- asymmetric, A and C: the parallel formula with the constant about the axis of the moment for A and the mean of the
  others for B.  W. A. Seth-Paul, J. Mol. Struct. 3, 403 (1969).

The last holds only as far as the top is nearly symmetric about that axis.  So the lines of the rigid rotor are summed
(vibsym/vibrations/envelope.py): where the formula agrees within 10 % it is given, else the sum, and for type B always
the sum.  None is given for hybrids, whose shares are not known.  Perpendicular bands of symmetric tops are Q branches
2[A(1 - ζ) - B] apart, those of types B and C near the prolate limit 2A - B - C where they leave no two wings.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field, replace

import numpy as np

from vibsym.errors import VibsymError
from vibsym.spectra.populations import DEFAULT_TEMPERATURE, HC_OVER_K, checked_temperature
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.envelope import branch_separation
from vibsym.vibrations.rotor import Rotor, rotor, spin_weights

GERHARD_DENNISON = "Gerhard & Dennison 1933, ζ = 0"
EDGELL_MOYNIHAN = "Edgell & Moynihan 1957"
SETH_PAUL = "Seth-Paul 1969"
ESTIMATED = "normal"               # Coriolis constants from the normal modes of the valence force field
RIGID_ROTOR = "rigid rotor, summed"
NEAR_PROLATE = "Herzberg 1945, near prolate"
NEARLY = 0.9                       # Ray's κ beyond this: nearly a symmetric top
TRUSTED = 0.1                      # how far the formula for asymmetric tops may be from the rigid rotor


@dataclass(frozen=True)
class Contour:
    """The bands of one species: `type` A, B, C, hybrid, parallel or perpendicular; branches; separations in cm-1.

    `mode` names one band of the species, where each has a Coriolis constant of its own.
    """

    species: str
    type: str
    branches: str
    separation: float | None = None
    spacing: float | None = None
    zeta: float | None = None
    source: str = ""
    mode: str | None = None

    def to_dict(self) -> dict:
        """Return the contour for JSON."""
        mode = {} if self.mode is None else {"mode": self.mode}
        return mode | {"species": self.species, "type": self.type, "branches": self.branches,
                "pr_separation": None if self.separation is None else round(self.separation, 3),
                "q_spacing": None if self.spacing is None else round(self.spacing, 4), "zeta": self.zeta,
                "source": self.source}


@dataclass(frozen=True, eq=False)
class GasPhase:
    """How the infrared bands of a gas look."""

    rotor: Rotor
    temperature: float
    contours: tuple[Contour, ...]
    weights: dict[str, int] | None
    notes: tuple[str, ...] = field(default=())

    def to_dict(self) -> dict:
        """Return the result for JSON."""
        contours = [each.to_dict() for each in self.contours]
        return self.rotor.to_dict() | {"temperature": self.temperature, "spin_weights": self.weights,
                                       "contours": contours, "notes": list(self.notes)}


def gas_phase(symmetry: Symmetry, gamma_vib: Mapping[str, int], temperature: float = DEFAULT_TEMPERATURE,
              zeta: float | str | Mapping[str, float] | None = None) -> GasPhase:
    """Return rotor and contours; `zeta` is the Coriolis constant of degenerate species (see `parse_zeta`)."""
    temperature = checked_temperature(temperature)
    top = rotor(symmetry)
    own = _estimated_zetas(symmetry, top) if zeta == ESTIMATED else {}
    zetas = {} if zeta == ESTIMATED else _zetas(symmetry, zeta)
    contours = []
    for label in gamma_vib:
        species = symmetry.group.species_named(label)
        if not species.infrared:
            continue
        if label not in own:
            contours.append(_contour(top, species, temperature, zetas.get(label)))
        for name, value in own.get(label, ()):
            contours.append(replace(_contour(top, species, temperature, value), mode=name))
    notes = _notes(symmetry, top) + _missing(contours)
    return GasPhase(top, temperature, tuple(contours), spin_weights(symmetry), notes)


def separation_parallel(about: float | None, across: float, temperature: float) -> float:
    """Return the P-R separation (cm-1) of a parallel band: constants about the axis (None: linear) and across it, cm-1.

    >>> round(separation_parallel(None, 0.39, 300.0), 1)
    25.5
    """
    thermal = temperature / HC_OVER_K
    factor = 1.0 if about is None else 10 ** (0.721 / (about / across + 3) ** 1.13)
    return float(factor * (8 * across * thermal) ** 0.5)


def separation_spherical(constant: float, temperature: float, zeta: float = 0.0) -> float:
    """Return the P-R separation (cm-1) of a T band of a spherical top.

    >>> round(separation_spherical(5.24, 300.0, 0.0), 0)
    132.0
    """
    return float(4 * (1 - zeta) * (constant * temperature / HC_OVER_K) ** 0.5)


def parse_zeta(text: str) -> float | str | dict[str, float]:
    """Return the Coriolis constant typed as `0.05`, as `T1u=0.05,E=0.1` for each species, or `normal` as it is."""
    if text.strip() == ESTIMATED:
        return ESTIMATED
    try:
        if "=" not in text:
            return float(text)
        return {label.strip(): float(value) for label, _, value in (part.partition("=") for part in text.split(","))}
    except ValueError:
        raise VibsymError(f"zeta '{text}' cannot be read; write a number, species=number as in T2=0.05, "
                          "or normal") from None


def _estimated_zetas(symmetry: Symmetry, top: Rotor) -> dict[str, list[tuple[str, float]]]:
    """ζ of every degenerate infrared-active band by the valence force field: {species: [(mode, ζ), ...]}."""
    from vibsym.vibrations.coriolis import coriolis_constant
    from vibsym.vibrations.estimates import estimate

    found: dict[str, list[tuple[str, float]]] = {}
    if top.kind in ("spherical", "prolate", "oblate"):
        for mode in estimate(symmetry).modes:
            value = coriolis_constant(symmetry, mode.species, mode.vector)
            if value is not None:
                found.setdefault(mode.species, []).append((mode.name, round(value, 4)))
    return found


def _zetas(symmetry: Symmetry, zeta) -> dict[str, float]:
    group = symmetry.group
    if zeta is None:
        return {}
    if isinstance(zeta, Mapping):
        found = {group.species_named(label).label: float(value) for label, value in zeta.items()}
    else:
        found = {species.label: float(zeta) for species in group.species if species.degeneracy > 1}
    for label, value in found.items():
        if not -1 <= value <= 1:
            raise VibsymError(f"ζ = {value:g} of {label}: a Coriolis constant lies between -1 and 1")
        if group.species_named(label).degeneracy == 1:
            raise VibsymError(f"ζ of {label}: only degenerate species have a first-order Coriolis constant")
    return found


def _contour(top: Rotor, species, temperature: float, zeta: float | None) -> Contour:
    constants = top.constants
    if top.kind == "linear":
        parallel = species.degeneracy == 1
        return Contour(species.label, "parallel" if parallel else "perpendicular", "PR" if parallel else "PQR",
                       separation_parallel(None, constants[1], temperature), source=GERHARD_DENNISON)
    if top.kind == "spherical":
        value = 0.0 if zeta is None else zeta
        return Contour(species.label, "spherical", "PQR", separation_spherical(constants[1], temperature, value),
                       zeta=value, source=EDGELL_MOYNIHAN)
    inside = _share(top, species)
    if top.kind == "asymmetric":
        return _asymmetric(top, species, inside, temperature)
    about, across = constants[top.unique], constants[1]
    along, off = inside[top.unique] > 0.5, bool(np.any(np.delete(inside, top.unique) > 0.5))
    separation = separation_parallel(about, across, temperature)
    if along and off:
        return Contour(species.label, "parallel/perpendicular hybrid", "PQR", separation, source=GERHARD_DENNISON)
    if along:
        return Contour(species.label, "parallel", "PQR", separation, source=GERHARD_DENNISON)
    value = 0.0 if zeta is None else zeta
    return Contour(species.label, "perpendicular", "PQR", None, abs(2 * (about * (1 - value) - across)), value,
                   "Herzberg 1945, ch. IV,2" if zeta is not None else "Herzberg 1945, ch. IV,2, ζ = 0")


def _asymmetric(top: Rotor, species, inside: np.ndarray, temperature: float) -> Contour:
    letters = [letter for letter, share in zip("ABC", inside) if share > 0.5]
    if len(letters) > 1:
        return Contour(species.label, "/".join(letters) + " hybrid", "PQR")
    axis = "ABC".index(letters[0])
    branches = "PR" if letters[0] == "B" else "PQR"       # type B: a minimum in the centre
    summed = branch_separation(top.constants, axis, temperature / HC_OVER_K)
    if summed is None and axis > 0 and top.ray < -NEARLY:
        spacing = 2 * top.constants[0] - top.constants[1] - top.constants[2]
        return Contour(species.label, letters[0], branches, None, spacing, source=NEAR_PROLATE)
    if summed is None:
        return Contour(species.label, letters[0], branches)
    about, across = top.constants[axis], sum(value for k, value in enumerate(top.constants) if k != axis) / 2
    formula = separation_parallel(about, across, temperature)
    if letters[0] != "B" and abs(formula - summed) <= TRUSTED * summed:
        return Contour(species.label, letters[0], branches, formula, source=SETH_PAUL)
    return Contour(species.label, letters[0], branches, summed, source=RIGID_ROTOR)


def _share(top: Rotor, species) -> np.ndarray:
    """How much of each principal axis lies in the space of the species' transition moments, (3,) between 0 and 1."""
    coordinates = ["xyz".index(name) for name in species.linear]
    return np.sum(top.axes[:, coordinates] ** 2, axis=1)


def _notes(symmetry: Symmetry, top: Rotor) -> tuple[str, ...]:
    notes = []
    if not top.by_symmetry:
        notes.append(f"two moments agree within {1e-4:.0e} by chance: a {top.kind} top only in its contours")
    if top.ray is not None and abs(top.ray) > NEARLY:
        ray = f"{top.ray:.3f}".replace("-", "−")
        notes.append(f"Ray's κ = {ray}: nearly a {'prolate' if top.ray < 0 else 'oblate'} symmetric top")
    if symmetry.group.symbol in ("C∞v", "D∞h") and spin_weights(symmetry) is None:
        notes.append("a nuclear spin is not in tables/nuclear_spins.csv: no statistical weights")
    return tuple(notes)


def _missing(contours: list[Contour]) -> tuple[str, ...]:
    """Say why bands have no P-R separation."""
    without = [each for each in contours if each.separation is None and each.spacing is None]
    hybrids = [each for each in without if each.type.endswith("hybrid")]
    notes = []
    if hybrids:
        notes.append("no P–R separation of hybrid bands: how much of each type a band holds is not known from symmetry")
    if len(without) > len(hybrids):
        notes.append("no P–R separation where the summed lines of the rigid rotor show no two wings")
    return tuple(notes)
