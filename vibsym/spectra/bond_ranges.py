"""Where the stretches of short multiple bonds at a metal lie, so far from all others that a list can be cut to them.

The ranges are those of tables/characteristic_wavenumbers.csv (K. Nakamoto, Infrared and Raman Spectra of Inorganic and
Coordination Compounds, 5th ed., 1997, from memory), terminal, bridging and charged, widened by about 100 cm-1 (our own
rule).  Stretches from metal to ligand have no such range: bends of other molecules lie among them.
"""

RANGES = {frozenset("CO"): (1550.0, 2400.0), frozenset("CN"): (1900.0, 2400.0), frozenset("NO"): (1400.0, 2400.0),
          frozenset("N"): (1600.0, 2400.0)}


def range_of(first: str, second: str) -> tuple[float, float] | None:
    """Return the range (cm-1) of the stretch of a linear ligand bound to a metal, None where there is none.

    >>> range_of("C", "O"), range_of("Mo", "C")
    ((1550.0, 2400.0), None)
    """
    return RANGES.get(frozenset((first, second)))
