"""Normal modes of a Cartesian Hessian computed elsewhere, labelled even where the geometry is nearly symmetric.

The matrix is made symmetric (within SYMMETRIC of its largest element), turned to the standard frame, mass-weighted,
and freed of translations and rotations at the geometry as read.  Modes of near-equal wavenumber form blocks; in each
block the directions that belong to one species are found from the species projectors, so that a split degenerate pair,
or two modes of different species that mix by accident, come apart again.  The weight of a mode is the part of it
inside its species; below 0.95 it is flagged.  The modes are then counted out so that every species has as many as Γvib
says (E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations, 1955, ch. 6).
"""

from dataclasses import dataclass
from pathlib import Path

import numpy as np

from vibsym.errors import VibsymError
from vibsym.groups.projection import symmetry_vectors
from vibsym.structures.symmetry import Symmetry
from vibsym.vibrations.bmatrix import rigid_motions
from vibsym.vibrations.cartesian import displacements
from vibsym.vibrations.normal_modes import Mode, mode_of, wavenumbers_of
from vibsym.vibrations.numbering import numbered
from vibsym.vibrations.units import HESSIAN_UNITS

SYMMETRIC = 1e-3  # of the largest element: how far H may be from its transpose
NEAR = 5.0  # cm-1; modes closer than this are projected as one block
DOUBTFUL = 0.95  # weight below which a label is flagged
HIGHEST, LOWEST = 6000.0, 30.0  # cm-1; beyond, the unit is wrong


@dataclass(frozen=True, eq=False)
class HessianModes:
    """Modes of an imported Hessian, what translations and rotations had, and what to know."""

    modes: tuple[Mode, ...]
    rigid: tuple[float, ...]  # cm-1, of translations and rotations before they were taken out
    notes: tuple[str, ...]


def read_hessian(path: str, atoms: int) -> np.ndarray:
    """Return the (3N, 3N) numbers of a file: text with blanks or commas, or .npy (told by content)."""
    try:
        raw = Path(path).read_bytes()
    except OSError as error:
        raise VibsymError(f"{path}: cannot be read ({(error.strerror or str(error)).lower()})") from None
    if raw[:6] == b"\x93NUMPY":
        import io

        try:
            matrix = np.load(io.BytesIO(raw), allow_pickle=False).astype(float)
        except (ValueError, TypeError, OSError, EOFError):
            raise VibsymError(f"{path}: a NumPy file that holds no matrix of numbers") from None
    else:
        matrix = _numbers(raw, path)
    size = 3 * atoms
    if matrix.size != size * size or (matrix.ndim == 2 and matrix.shape != (size, size)):
        shape = " × ".join(map(str, matrix.shape)) if matrix.ndim > 1 else f"{matrix.size} numbers"
        raise VibsymError(f"{path}: {shape}; {atoms} atoms need a {size} × {size} Hessian ({size * size} numbers)")
    matrix = matrix.reshape(size, size)
    if not np.isfinite(matrix).all():
        raise VibsymError(f"{path}: the Hessian holds values that are not finite numbers")
    return matrix


def _numbers(raw: bytes, path: str) -> np.ndarray:
    lines = raw.decode("utf-8", errors="replace").splitlines()
    found = []
    for number, line in enumerate(lines, 1):
        for word in line.split("#")[0].replace(",", " ").replace(";", " ").split():
            try:
                found.append(float(word.replace("D", "e").replace("d", "e")))
            except ValueError:
                raise VibsymError(f"{path}, line {number}: '{word[:30]}' is not a number; "
                                  "a Hessian is 3N × 3N numbers") from None
    return np.array(found)


def hessian_modes(symmetry: Symmetry, hessian: np.ndarray, unit: str = "N/m",
                  mass_weighted: bool = False) -> HessianModes:
    """Return the modes of a Hessian given in the orientation of the structure as read.

    `unit` is a key of HESSIAN_UNITS; with `mass_weighted` the elements are already divided by √(m_i m_j), m in u.
    """
    if unit not in HESSIAN_UNITS:
        raise VibsymError(f"no Hessian unit '{unit}'; it is one of {', '.join(HESSIAN_UNITS)}")
    structure, notes = symmetry.structure, []
    if np.isnan(structure.masses).any():
        raise VibsymError(f"{structure.formula}: a dummy atom has no mass; normal modes need real atoms")
    H = _symmetric(hessian, notes) * HESSIAN_UNITS[unit]
    turn = np.kron(np.eye(len(structure)), symmetry.frame)
    roots = np.sqrt(np.repeat(structure.masses, 3))
    H = turn @ H @ turn.T
    if not mass_weighted:
        H = H / np.outer(roots, roots)
    positions = (structure.positions - symmetry.origin) @ symmetry.frame.T
    left, sizes, _ = np.linalg.svd(roots[:, None] * rigid_motions(positions))
    motions = int((sizes > 1e-3 * sizes[0]).sum()) if not symmetry.group.infinite else 5
    rigid, inner = left[:, :motions], left[:, motions:]
    loose = wavenumbers_of(np.linalg.eigvalsh(rigid.T @ H @ rigid))
    squares, vectors = np.linalg.eigh(inner.T @ H @ inner)
    values, vectors = wavenumbers_of(squares), inner @ vectors
    _check_unit(values, unit)
    if np.abs(loose).max() > 50:
        notes.append(f"translations and rotations had up to {np.abs(loose).max():.0f} cm-1 before they were taken out: "
                     "was the Hessian computed at this geometry and in this orientation?")
    modes = _labelled(symmetry, H, values, vectors, notes)
    return HessianModes(modes, tuple(float(value) for value in loose), tuple(notes))


def _symmetric(hessian: np.ndarray, notes: list[str]) -> np.ndarray:
    gap, largest = np.abs(hessian - hessian.T), np.abs(hessian).max()
    if largest == 0:
        raise VibsymError("the Hessian is zero throughout")
    if gap.max() > SYMMETRIC * largest:
        i, j = np.unravel_index(int(gap.argmax()), gap.shape)
        raise VibsymError(f"the Hessian is not symmetric: element {i + 1},{j + 1} is {hessian[i, j]:g}, element "
                          f"{j + 1},{i + 1} is {hessian[j, i]:g}; they may differ by {SYMMETRIC:g} of the largest "
                          f"element ({largest:g})")
    if gap.max() > 1e-9 * largest:
        notes.append(f"the Hessian was made symmetric (largest difference {gap.max() / largest:.1e} of the largest "
                     "element)")
    return (hessian + hessian.T) / 2


def _check_unit(values: np.ndarray, unit: str) -> None:
    highest = np.abs(values).max(initial=0.0)
    if values.size and not LOWEST <= highest <= HIGHEST:
        others = ", ".join(name for name in HESSIAN_UNITS if name != unit)
        raise VibsymError(f"the highest wavenumber would be {highest:.3g} cm-1: the Hessian is not in {unit}; "
                          f"try --hessian-unit with {others}, or --mass-weighted if it is")


def _labelled(symmetry: Symmetry, H: np.ndarray, values: np.ndarray, vectors: np.ndarray,
              notes: list[str]) -> tuple[Mode, ...]:
    """Return the numbered modes of eigenvalues (cm-1) and eigenvectors (3N, k), each given to one species."""
    gamma = displacements(symmetry).gamma_vib
    frames = _species_rows(symmetry)
    labels = [label for label in frames if label in gamma]
    columns, squares, weights = [], [], []
    for block in np.split(np.arange(len(values)), np.flatnonzero(np.diff(values) > NEAR) + 1):
        for vector, square, weight in _parted(H, vectors[:, block], [frames[label] for label in labels]):
            columns.append(vector)
            squares.append(square)
            weights.append(weight)
    weights = np.array(weights).reshape(len(squares), len(labels))
    places = _counted_out(weights, labels, gamma, symmetry)
    modes = []
    for number, label in enumerate(labels):
        species = symmetry.group.species_named(label)
        own = sorted((k for k in range(len(squares)) if places[k] == number), key=lambda k: squares[k])
        for start in range(0, len(own), species.degeneracy):
            members = own[start:start + species.degeneracy]
            weight = float(np.mean([weights[k, number] for k in members]))
            value = float(np.mean(wavenumbers_of(np.array([squares[k] for k in members]))))
            modes.append(mode_of(species, value, columns[members[0]], weight=min(weight, 1.0)))
    _check_totals(weights, labels, gamma, symmetry, notes)
    doubtful = sum(mode.weight < DOUBTFUL for mode in modes)
    if doubtful:
        notes.append(f"{doubtful} of {len(modes)} labels have a weight below {DOUBTFUL}: the geometry is far from "
                     f"{symmetry.group.symbol} for these modes")
    return numbered(modes, symmetry)


def _species_rows(symmetry: Symmetry) -> dict[str, np.ndarray]:
    """Return {label: (rows, 3N)} orthonormal, all components of each species."""
    from vibsym.groups.bases import Basis

    group = symmetry.group
    basis = Basis.displacements(group.image, symmetry.permutations)
    found: dict[str, list] = {}
    for label, rows in symmetry_vectors(basis).items():
        found.setdefault(group.image_labels.get(label, label), []).append(rows.reshape(-1, rows.shape[-1]))
    return {label: np.concatenate(parts) for label, parts in found.items()}


def _parted(H: np.ndarray, block: np.ndarray, frames: list[np.ndarray]):
    """Yield (vector, eigenvalue, weights by species) of a block, parted into directions of one species each."""
    inside = [frame @ block for frame in frames]
    ranked = sum((number + 1) * part.T @ part for number, part in enumerate(inside))
    _, turn = np.linalg.eigh(ranked)
    vectors = block @ turn
    weights = np.array([((frame @ vectors) ** 2).sum(axis=0) for frame in frames]).T
    best = weights.argmax(axis=1)
    for number in np.unique(best):
        own = vectors[:, best == number]
        squares, mix = np.linalg.eigh(own.T @ H @ own)
        own = own @ mix
        for vector, square in zip(own.T, squares):
            yield vector, float(square), np.array([((frame @ vector) ** 2).sum() for frame in frames])


def _counted_out(weights: np.ndarray, labels: list[str], gamma: dict[str, int], symmetry: Symmetry) -> np.ndarray:
    """Return the species of every vector so that each has as many as Γvib says, with the largest total weight."""
    slots = [number for number, label in enumerate(labels)
             for _ in range(gamma[label] * symmetry.group.species_named(label).degeneracy)]
    best = weights.argmax(axis=1)
    if sorted(best.tolist()) == slots:
        return best
    from scipy.optimize import linear_sum_assignment

    rows, columns = linear_sum_assignment(-weights[:, slots])
    places = np.zeros(len(weights), int)
    places[rows] = np.array(slots)[columns]
    return places


def _check_totals(weights, labels, gamma, symmetry, notes) -> None:
    """Note where the species nearest to the modes are not as many as Γvib says."""
    best = weights.argmax(axis=1)
    counts = {label: int((best == number).sum()) // symmetry.group.species_named(label).degeneracy
              for number, label in enumerate(labels)}
    wrong = [label for label in labels if counts[label] != gamma[label]]
    if wrong:
        told = ", ".join(f"{label} are {counts[label]}, not {gamma[label]}" for label in wrong)
        notes.append(f"the modes nearest to {told}: labels were counted out to fit Γvib")
