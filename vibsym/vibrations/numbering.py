"""Number the fundamentals ν1, ν2, ... as Herzberg does.

Species by species, g before u and ′ before ″ within a kind (Σg+ Σu+ Πg Πu; A1′ A1″ A2′ A2″ E′ E″; A1g A1u A2g A2u Eg
Eu T1g T1u), by falling wavenumber within a species; in a linear triatomic molecule the bend is ν2 (G. Herzberg,
Infrared and Raman Spectra, 1945, p. 272).  This is not the order in which character tables list the species.

>>> sorted(["A2''", "E'", "A1'"], key=herzberg_key)
["A1'", "A2''", "E'"]
>>> sorted(["T2g", "T1u", "Eg", "T2u", "A1g"], key=herzberg_key)
['A1g', 'Eg', 'T1u', 'T2g', 'T2u']
"""

import re
from collections.abc import Sequence
from dataclasses import replace

from vibsym.structures.symmetry import Symmetry

LETTERS = ("A", "Σ", "B", "E", "Π", "Δ", "Φ", "Γ", "T", "G", "H", "I")
SUFFIX = {"": 0, "g": 0, "u": 1, "'": 0, "''": 1}


def herzberg_key(label: str) -> tuple:
    """Return what sorts species labels (ASCII, Greek as Unicode) into Herzberg's order."""
    letter, number, suffix, sign = re.fullmatch(r"(\w)(\d*)(g|u|''|'|)([+\-]?)", label).groups()
    place = LETTERS.index(letter) if letter in LETTERS else len(LETTERS)
    return place, "+-".find(sign), int(number or 0), SUFFIX[suffix]


def numbered(modes: Sequence, symmetry: Symmetry) -> tuple:
    """Return the modes with their names, in the order of the numbers."""
    order = sorted(modes, key=lambda mode: (herzberg_key(mode.species), -mode.wavenumber))
    if symmetry.group.infinite and len(symmetry.structure) == 3 and len(order) == 3:
        bend = next(mode for mode in order if mode.degeneracy == 2)
        stretches = [mode for mode in order if mode is not bend]
        order = [stretches[0], bend, stretches[1]]
    return tuple(replace(mode, name=f"ν{number}") for number, mode in enumerate(order, 1))
