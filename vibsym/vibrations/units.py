"""From a force constant and a mass to a wavenumber: ν = (1/2πc) (k/m)^(1/2).

CODATA 2018: atomic mass constant 1.66053906660e-27 kg, c = 299792458 m/s (exact); hartree 4.3597447222071e-18 J, bohr
0.529177210903 Å (E. Tiesinga et al., Rev. Mod. Phys. 93, 025010 (2021)).
"""

from math import pi, sqrt

ATOMIC_MASS = 1.66053906660e-27  # kg
LIGHT = 299792458e2  # cm/s
HARTREE = 4.3597447222071e-18  # J
BOHR = 0.529177210903e-10  # m
ELECTRONVOLT = 1.602176634e-19  # J

# cm-1 for 1 N/m and 1 u
WAVENUMBER = sqrt(1 / ATOMIC_MASS) / (2 * pi * LIGHT)

# N/m in one unit of a Cartesian force constant
HESSIAN_UNITS = {
    "N/m": 1.0,
    "mdyn/A": 100.0,
    "hartree/bohr2": HARTREE / BOHR**2,
    "eV/A2": ELECTRONVOLT / 1e-20,
    "kcal/mol/A2": 4184.0 / 6.02214076e23 / 1e-20,
    "kJ/mol/A2": 1000.0 / 6.02214076e23 / 1e-20,
}
