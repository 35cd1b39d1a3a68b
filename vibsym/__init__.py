"""vibsym: point groups, vibrational species and band assignment for infrared and Raman spectra."""

__version__ = "0.1.0"
