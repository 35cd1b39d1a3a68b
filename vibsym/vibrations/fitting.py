"""Fit the factors of the force field to observed wavenumbers: regularised nonlinear least squares.

    minimise  Σ w ρ(ln(calculated/observed)/0.025)  +  Σ ((p - p0)/σ)² ,      ρ(z) = 2 (√(1 + z²) - 1)

over p = ln(factor), or p = share of an interaction.  p0, σ are prior value and spread (ridge): what the data cannot
tell stays at its prior.  The species are compared one by one, both lists sorted.  H = Σ_t c_t K_t is linear in the
constants c_t, and dν/ν = v'K_t v dc_t/(2λ) (Hellmann–Feynman), so one evaluation needs only the small matrices K_t of
every species. Damping after K. Levenberg, Quart. Appl. Math. 2, 164 (1944); D. W. Marquardt, J. Soc. Ind. Appl. Math.
11, 431 (1963).
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from vibsym.vibrations.units import WAVENUMBER

SCALE = 0.025  # of ln(calculated/observed): where an error begins to count as an outlier
SOFT = 300.0  # cm-1; modes below weigh less, in proportion
LONGEST_STEP = 0.6
FLOOR = 1e-4  # N/m/u; keeps the logarithm of a vanishing eigenvalue finite
ENOUGH = 1e-4  # change of the cost at which the fit has converged


class Block(NamedTuple):
    """One species of one molecule: types (t,), K (t, n, n), number of vibrations, label."""

    molecule: int
    label: str
    types: np.ndarray
    K: np.ndarray
    modes: int


@dataclass
class Problem:
    """Parameters with priors, constants as products of parameters, and the species of all molecules."""

    names: list[str]
    prior: np.ndarray  # (p,)
    spread: np.ndarray  # (p,)
    powers: np.ndarray  # (types, p)
    share: np.ndarray  # (types,) index of a signed parameter, or -1
    blocks: list[Block]

    def constants(self, p: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return c_t without and with its signed share."""
        plain = np.exp(self.powers @ p)
        signed = np.where(self.share >= 0, plain * p[self.share], plain)
        return plain, signed

    def wavenumbers(self, p: np.ndarray, molecules=None, slopes: bool = False):
        """Return {block number: falling wavenumbers}, with slopes also {block number: d ln ν / dp}."""
        plain, constants = self.constants(p)
        values, gradients = {}, {}
        for number, block in enumerate(self.blocks):
            if molecules is not None and block.molecule not in molecules:
                continue
            squares, vectors = np.linalg.eigh(np.tensordot(constants[block.types], block.K, 1))
            squares, vectors = np.maximum(squares[::-1][: block.modes], FLOOR), vectors[:, ::-1][:, : block.modes]
            values[number] = WAVENUMBER * np.sqrt(squares)
            if slopes:
                along = np.einsum("am,tab,bm->mt", vectors, block.K, vectors, optimize=True) / (2 * squares[:, None])
                change = constants[block.types][:, None] * self.powers[block.types]
                signed = np.flatnonzero(self.share[block.types] >= 0)
                change[signed, self.share[block.types][signed]] += plain[block.types][signed]
                gradients[number] = along @ change
        return (values, gradients) if slopes else values


class Assembly:
    """Collects types and parameters from the terms of molecule after molecule."""

    def __init__(self, prior_of: Callable[[str], tuple[float, float]]):
        self.prior_of = prior_of
        self.parameters: dict[str, int] = {}
        self.types: dict[tuple, int] = {}
        self.blocks: list[Block] = []

    def parameter(self, name: str) -> int:
        """Return the number of a parameter."""
        return self.parameters.setdefault(name, len(self.parameters))

    def add(self, molecule: int, terms, frames) -> None:
        """Add a molecule; `frames` lists (label, B M^-1/2 U, number of vibrations) of its species."""
        matrices: dict[int, list] = {}

        def put(key, i, j, value):
            matrices.setdefault(self.types.setdefault(key, len(self.types)), []).append((i, j, value))

        diagonals = terms.diagonals
        for row, each in enumerate(diagonals):
            put((self._powers(each.factors), None), row, row, each.geometry)
        for each in terms.interactions:
            one, two = diagonals[each.first], diagonals[each.second]
            half = [(name, power / 2) for name, power in (*one.factors, *two.factors)]
            value = each.weight * np.sqrt(one.geometry * two.geometry)
            key = self._powers(half), self.parameter(each.share)
            put(key, each.first, each.second, value)
            put(key, each.second, each.first, value)
        for each in terms.repulsions:
            key = self._powers(each.factors), None
            for i, u in zip(each.rows, each.slopes):
                for j, v in zip(each.rows, each.slopes):
                    put(key, i, j, each.geometry * u * v)
        self._blocks(molecule, len(diagonals), matrices, frames)

    def _powers(self, factors) -> tuple:
        total: dict[int, float] = {}
        for name, power in factors:
            number = self.parameter(name)
            total[number] = total.get(number, 0.0) + power
        return tuple(sorted((number, power) for number, power in total.items() if power))

    def _blocks(self, molecule, size, matrices, frames):
        for label, rows, modes in frames:
            types, stack = [], []
            for number, entries in matrices.items():
                Q = np.zeros((size, size))
                for i, j, value in entries:
                    Q[i, j] += value
                K = rows.T @ Q @ rows
                if np.abs(K).max() > 1e-12:
                    types.append(number)
                    stack.append(K)
            if types:
                self.blocks.append(Block(molecule, label, np.array(types), np.array(stack), modes))

    def problem(self) -> Problem:
        """Return the finished problem."""
        powers = np.zeros((len(self.types), len(self.parameters)))
        share = np.full(len(self.types), -1)
        for (factors, signed), number in self.types.items():
            for parameter, power in factors:
                powers[number, parameter] = power
            if signed is not None:
                share[number] = signed
        priors = np.array([self.prior_of(name) for name in self.parameters])
        return Problem(list(self.parameters), priors[:, 0], priors[:, 1], powers, share, self.blocks)


def fit(
    problem: Problem,
    observed: dict[int, np.ndarray],
    weights: np.ndarray,
    start: np.ndarray | None = None,
    molecules=None,
    rounds: int = 40,
) -> np.ndarray:
    """Return the parameters of least cost; `observed` by block number, falling; `weights` by molecule.

    With `molecules` only those take part: the others are left out.
    """
    used = [number for number in observed if molecules is None or problem.blocks[number].molecule in molecules]
    chosen = {problem.blocks[number].molecule for number in used}
    seen = np.concatenate([observed[number] for number in used])
    weight = np.concatenate(
        [np.full(len(observed[number]), weights[problem.blocks[number].molecule]) for number in used]
    )
    weight = weight * np.clip(seen / SOFT, 0.3, 1.0)
    p = (problem.prior if start is None else start).copy()
    damping, residual = 1e-2, _Residual(problem, used, chosen, np.log(seen))
    r, J = residual(p, True)
    cost = _cost(problem, p, r, weight)
    for _ in range(rounds):
        pull = weight / np.sqrt(1 + (r / SCALE) ** 2) / SCALE**2
        normal = (J.T * pull) @ J + np.diag(1 / problem.spread**2)
        slope = (J.T * pull) @ r + (p - problem.prior) / problem.spread**2
        while True:
            step = np.linalg.solve(normal + damping * np.diag(np.diag(normal)), -slope).clip(
                -LONGEST_STEP, LONGEST_STEP
            )
            lower = _cost(problem, p + step, residual(p + step)[0], weight)
            if lower < cost:
                break
            damping *= 5
            if damping > 1e6:
                return p
        p, gain, cost, damping = p + step, cost - lower, lower, max(damping / 5, 1e-6)
        if gain < ENOUGH * cost:
            return p
        r, J = residual(p, True)
    return p


class _Residual:
    """ln(calculated/observed) of the species used, with slopes on request."""

    def __init__(self, problem: Problem, used: Sequence[int], molecules: set, logarithms: np.ndarray):
        self.problem, self.used, self.molecules, self.logarithms = problem, used, molecules, logarithms

    def __call__(self, p, slopes: bool = False):
        found = self.problem.wavenumbers(p, self.molecules, slopes)
        values, gradients = found if slopes else (found, None)
        r = np.log(np.concatenate([values[number] for number in self.used])) - self.logarithms
        return r, np.concatenate([gradients[number] for number in self.used]) if slopes else None


def _cost(problem: Problem, p: np.ndarray, r: np.ndarray, weight: np.ndarray) -> float:
    z = r / SCALE
    return float((weight * 2 * (np.sqrt(1 + z * z) - 1)).sum() + (((p - problem.prior) / problem.spread) ** 2).sum())
