"""Vibrations of one structure: displacements, internal coordinates, normal modes. No spectra."""
