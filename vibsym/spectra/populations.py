"""How many molecules are in an excited level: Boltzmann's law for harmonic vibrations.

    fraction = g exp(-hc E/kT) / Q,      Q = Π (1 - exp(-hc ν/kT))^(-d)

g is the number of states of the level: n quanta in a d-fold degenerate vibration make C(n + d - 1, n) of them
(G. Herzberg, Infrared and Raman Spectra, 1945, ch. V,1).  Q runs over the fundamentals that are known.
"""

from collections.abc import Iterable, Mapping
from math import comb, exp, inf

from vibsym.errors import VibsymError

HC_OVER_K = 1.438776877            # cm K, second radiation constant (CODATA 2018, exact)
DEFAULT_TEMPERATURE = 296.0        # K


def checked_temperature(temperature: float) -> float:
    """Return the temperature in K, refused below zero and where it is not a number."""
    if not 0 <= temperature < inf:
        raise VibsymError(f"the temperature {temperature:g} K is below zero or not finite; write --temperature 296")
    return float(temperature)


def partition_function(modes: Iterable[tuple[float, int]], temperature: float) -> float:
    """Return Q of harmonic vibrations given as (wavenumber in cm-1, degeneracy), counted from the ground level.

    >>> round(partition_function([(667.4, 2)], 296.0), 4)
    1.0828
    """
    product = 1.0
    for wavenumber, degeneracy in modes:
        product *= (1 - boltzmann(wavenumber, temperature)) ** -degeneracy
    return product


def boltzmann(energy: float, temperature: float) -> float:
    """Return exp(-hc E/kT) for an energy in cm-1; at 0 K nothing is excited."""
    return exp(-HC_OVER_K * energy / temperature) if temperature > 0 else float(energy <= 0)


def states(quanta: Mapping[str, int], degeneracy: Mapping[str, int]) -> int:
    """Return how many states a level has: C(n + d - 1, n) for each vibration.

    >>> states({"ν4": 2}, {"ν4": 3})
    6
    """
    count = 1
    for mode, n in quanta.items():
        count *= comb(n + degeneracy[mode] - 1, n)
    return count
