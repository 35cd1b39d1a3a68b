"""Envelopes of the bands of an asymmetric top, summed over the lines of the rigid rotor.

Lower and upper level have the same constants.  The levels are those of H = A Ja² + B Jb² + C Jc² in symmetric-top
functions |J K> about a; a line J τ -> J' τ' has the strength (2J + 1) |<J' τ'|Φ|J τ>|², Φ the direction cosines of the
moment along a, b or c, by the Clebsch-Gordan coefficients <J K 1 q|J' K'>, and the weight exp(-E/kT) of its lower level
(G. Herzberg, Infrared and Raman Spectra, 1945, ch. I,4 and IV,4; R. M. Badger, L. R. Zumwalt, J. Chem. Phys. 6, 711
(1938) did the sum by hand).  Many levels make the shape independent of the temperature, which stretches it as √T: it is
summed once, at kT = 300 C, and symmetrised.
"""

from collections.abc import Sequence

import numpy as np

LEVELS = 300.0                     # kT in units of C: enough levels to make the envelope smooth
HIGHEST = 3.3                      # J in units of √(kT/C): beyond it 2e-5 of the molecules
WIDTH = 0.22                       # resolution in units of √(B kT), B the mean of the constants across the moment
CENTRE = 0.3                       # the Q branch lies within, in the same units
COARSE = 0.44                      # Q branches 2(A - (B + C)/2) apart, farther than the resolution, make no wing
ALIKE = 0.9                        # two maxima of one wing, one at least so high beside the other, leave none named
STEP = 0.02


def branch_separation(constants: Sequence[float], axis: int, temperature: float) -> float | None:
    """Return the distance of the maxima of the P and the R wing.

    None where a wing has no maximum, or two of like height (type B near the oblate limit), and for types B and C near
    the prolate limit, which fall apart into Q branches.

    `constants` A, B, C and the result have one unit, and so has `temperature` (kT/hc); `axis` (0, 1, 2) is that of the
    moment: type A, B or C.

    >>> round(branch_separation((2.027, 0.344, 0.2935), 0, 205.7), 0), branch_separation((9.4, 0.34, 0.33), 2, 206.0)
    (27.0, None)
    """
    A, B, C = constants
    thermal = LEVELS * C
    across = (A + B + C - constants[axis]) / 2
    unit = (across * thermal) ** 0.5
    spacing = 2 * A - B - C                               # of the Q branches of types B and C near the prolate limit
    if axis > 0 and spacing > COARSE * unit:
        return None
    x, height = _envelope(constants, axis, thermal, unit)
    rising, falling = height[1:-1] > height[:-2], height[1:-1] >= height[2:]
    peaks = np.flatnonzero(rising & falling) + 1
    peaks = peaks[x[peaks] > CENTRE]
    if not len(peaks):
        return None
    best = height[peaks].max()
    if np.count_nonzero(height[peaks] > ALIKE * best) > 1:
        return None
    return float(2 * x[peaks[height[peaks].argmax()]] * (across * temperature) ** 0.5)


def _envelope(constants, axis: int, thermal: float, unit: float) -> tuple[np.ndarray, np.ndarray]:
    """The smoothed envelope at x = 0 ... 6 (in `unit`) from the centre, both wings added."""
    highest = int(HIGHEST * (thermal / constants[2]) ** 0.5) + 1
    levels = [_levels(constants, J) for J in range(highest + 2)]
    count = round(6 / STEP)
    total = np.zeros(count + 1)
    for J in range(highest + 1):
        energy, vectors = levels[J]
        weight = (2 * J + 1) * np.exp(-energy / thermal)
        for upper in range(max(J - 1, 0), J + 2):
            high, others = levels[upper]
            strength = (others.T @ (direction_cosines(J, upper, axis) @ vectors)) ** 2 * weight
            place = np.rint(np.abs(high[:, None] - energy) / (unit * STEP)).astype(int)
            inside = place <= count
            total += np.bincount(place[inside], strength[inside], minlength=count + 1)
    total[0] *= 2                                         # the bin at the centre has both wings
    distance = np.arange(-round(4 * WIDTH / STEP), round(4 * WIDTH / STEP) + 1) * STEP
    both = np.concatenate([total[:0:-1], total])
    smooth = np.convolve(both, np.exp(-(distance / WIDTH) ** 2 / 2), mode="same")[count:]
    return np.arange(count + 1) * STEP, smooth


def _levels(constants, J: int) -> tuple[np.ndarray, np.ndarray]:
    """Energies (2J+1,) and vectors of the rigid rotor in |J K>, K = -J ... J about a."""
    A, B, C = constants
    K = np.arange(-J, J + 1.0)
    up = np.sqrt(np.maximum(J * (J + 1) - K * (K + 1), 0.0))
    H = np.diag((B + C) / 2 * (J * (J + 1) - K**2) + A * K**2)
    place = np.arange(2, 2 * J + 1)                       # K and K - 2
    H[place, place - 2] = (B - C) / 4 * up[:-2] * up[1:-1]
    return np.linalg.eigh(H)                              # reads the lower triangle


def direction_cosines(J: int, upper: int, axis: int) -> np.ndarray:
    """Return (2J'+1, 2J+1): the moment along a, b or c between |J K> and |J' K'>."""
    if axis == 0:
        return _coupling(J, upper, 0)
    sign = -1 if axis == 1 else 1
    return (_coupling(J, upper, -1) + sign * _coupling(J, upper, 1)) / 2**0.5


def _coupling(J: int, upper: int, q: int) -> np.ndarray:
    """<J K 1 q|J' K+q> at row K + q, column K (E. U. Condon, G. H. Shortley, Theory of Atomic Spectra, 1935, p. 76)."""
    k = np.arange(-J, J + 1.0)
    matrix = np.zeros((2 * upper + 1, 2 * J + 1))
    if J == upper == 0:
        return matrix
    with np.errstate(divide="ignore", invalid="ignore"):
        if upper == J + 1:
            square = {1: (J + k + 1) * (J + k + 2) / ((2 * J + 1) * (2 * J + 2)),
                      0: (J - k + 1) * (J + k + 1) / ((2 * J + 1) * (J + 1)),
                      -1: (J - k + 1) * (J - k + 2) / ((2 * J + 1) * (2 * J + 2))}[q]
        elif upper == J:
            square = {1: (J + k + 1) * (J - k) / (2 * J * (J + 1)), 0: k * k / (J * (J + 1)),
                      -1: (J - k + 1) * (J + k) / (2 * J * (J + 1))}[q]
        else:
            square = {1: (J - k - 1) * (J - k) / (2 * J * (2 * J + 1)), 0: (J - k) * (J + k) / (J * (2 * J + 1)),
                      -1: (J + k - 1) * (J + k) / (2 * J * (2 * J + 1))}[q]
    sign = {1: np.ones_like(k), 0: np.sign(k), -1: np.ones_like(k)}[q] if upper == J else np.ones_like(k)
    if (upper == J and q == 1) or (upper == J - 1 and q == 0):
        sign = -sign
    row = (k + q + upper).astype(int)
    inside = (row >= 0) & (row <= 2 * upper)
    matrix[row[inside], np.flatnonzero(inside)] = (sign * np.sqrt(np.maximum(square, 0.0)))[inside]
    return matrix
