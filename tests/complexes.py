"""Complexes with ligands too large for the symmetry of their metal: built from ideal parts, then shaken and turned,
seeded.

`python tests/complexes.py` writes the sample `samples/carbonyl-w-pcy3.xyz`; a test proves that the file is this recipe.
Lengths are ordinary values in Å, from memory, and carry no claim.
"""

from pathlib import Path

import numpy as np
from molecules import atoms, cyclohexane, ring, turned

SAMPLE = Path(__file__).parent.parent / "samples" / "carbonyl-w-pcy3.xyz"
SHAKE = 0.05                                  # Å, standard length of the displacement of an atom


def rotation_between(one, other):
    """Return the shortest rotation that takes a unit vector into another."""
    axis = np.cross(one, other)
    cosine = one @ other
    cross = np.array([[0, -axis[2], axis[1]], [axis[2], 0, -axis[0]], [-axis[1], axis[0], 0]])
    return np.eye(3) + cross + cross @ cross / (1 + cosine)


def about(axis, angle):
    """Return the rotation by an angle about a unit vector."""
    cross = np.array([[0, -axis[2], axis[1]], [axis[2], 0, -axis[0]], [-axis[1], axis[0], 0]])
    return np.eye(3) + np.sin(angle) * cross + (1 - np.cos(angle)) * cross @ cross


def cyclohexyl(start, direction, twist):
    """Return C6H11 whose first carbon stands at `start`; its free equatorial bond points against `direction`."""
    symbols, positions = cyclohexane()
    bond = positions[6] - positions[0]
    turn = about(direction, twist) @ rotation_between(bond / np.linalg.norm(bond), -direction)
    kept = [k for k in range(18) if k != 6]
    return [symbols[k] for k in kept], start + (positions[kept] - positions[0]) @ turn.T


def tricyclohexylphosphine():
    """Return P(C6H11)3, P at the origin and its lone pair along z, the rings turned so that they stay farthest
    apart."""
    foot = np.array((1.68, 0, -0.80))
    twists = np.radians(np.arange(0, 360, 10))
    thirds = [about(np.array((0, 0, 1.0)), 2 * np.pi * k / 3).T for k in range(3)]
    names = cyclohexyl(foot, foot / np.linalg.norm(foot), 0.0)[0]
    first = [cyclohexyl(foot, foot / np.linalg.norm(foot), twist)[1] for twist in twists]
    room = np.array([[closest(one[1:], other[1:] @ thirds[1]) for other in first] for one in first])   # ring and next
    worst = np.minimum(np.minimum(room[:, :, None], room[None]), room.T[:, None, :])
    chosen = np.unravel_index(np.argmax(worst), worst.shape)
    rings = [first[twist] @ third for twist, third in zip(chosen, thirds)]
    return ["P", *(names * 3)], np.vstack([np.zeros((1, 3)), *rings])


def carbonyls(directions, metal_carbon=2.02, carbon_oxygen=1.15):
    """Return the C and O atoms along unit vectors from a metal at the origin."""
    directions = np.asarray(directions)
    return ("C", metal_carbon * directions), ("O", (metal_carbon + carbon_oxygen) * directions)


def closest(positions, others):
    """Return the shortest distance between two sets of points."""
    return np.linalg.norm(positions[:, None] - others[None], axis=2).min()


def pentacarbonyl_phosphine():
    """Return W(CO)5(PCy3), 63 atoms, the ligand turned about W-P so that it stays farthest from the carbonyls."""
    frame, places = atoms(("W", (0, 0, 0)), *carbonyls(np.vstack([ring(4, 1), [(0, 0, -1)]])))
    symbols, phosphine = tricyclohexylphosphine()
    turns = [phosphine @ about(np.array((0, 0, 1.0)), turn).T * (1, 1, -1) + (0, 0, 2.55)
             for turn in np.radians(np.arange(0, 120, 10))]
    ligand = max(turns, key=lambda turned_ligand: closest(turned_ligand[1:], places))
    return frame + symbols, np.vstack([places, ligand])


def shaken(positions, seed, size=SHAKE):
    """Return positions with a random displacement of mean square length `size`² on every atom."""
    random = np.random.default_rng(seed)
    return positions + random.normal(scale=size / 3**0.5, size=positions.shape)


def sample_complex():
    """Return the atoms of the sample."""
    symbols, positions = pentacarbonyl_phosphine()
    return symbols, turned(shaken(positions, 20), 21)


def written(symbols, positions):
    """Return the atoms as the sample file has them."""
    head = [str(len(symbols)), "pentacarbonyl(tricyclohexylphosphane)tungsten, built and shaken"]
    lines = [f"{symbol:<2} {x:11.5f} {y:11.5f} {z:11.5f}" for symbol, (x, y, z) in zip(symbols, positions)]
    return "\n".join([*head, *lines]) + "\n"


def half_sandwich(metal, n, radius, height, directions, extra=(), tilt=0.0):
    """Return (ηn-CnHn)M with carbonyls along directions (z from the ring), other (symbol, place) atoms, the ring
    turned by `tilt`."""
    phase = tilt / (360 / n)
    parts = [(metal, (0, 0, 0)), ("C", ring(n, radius, height, phase)), ("H", ring(n, radius + 1.08, height, phase))]
    return atoms(*parts, *carbonyls(directions, 1.85), *extra)


def piano_stool(legs, angle):
    """Return unit vectors of the legs of a stool, at an angle (degrees) from -z."""
    return ring(legs, np.sin(np.radians(angle)), -np.cos(np.radians(angle)))


if __name__ == "__main__":
    SAMPLE.write_text(written(*sample_complex()), encoding="utf-8")
