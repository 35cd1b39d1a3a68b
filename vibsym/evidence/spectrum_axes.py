"""What the axes of a measured spectrum are, from the words of a head line or a record."""

import re

UNITS = ("cm-1", "nm", "µm")
ORDINATES = ("absorbance", "transmittance", "intensity")


def unit_named(text: str) -> str | None:
    """Return the unit that a head line or a record names; None: none.

    >>> unit_named("Wavenumber (cm-1)"), unit_named("wavelength / nm"), unit_named("MICROMETERS"), unit_named("x")
    ('cm-1', 'nm', 'µm', None)
    """
    word = text.lower().replace("−", "-").replace("⁻¹", "-1").replace("μ", "µ").replace("^", "").replace("{", "")
    if re.search(r"cm ?-1|1/cm|wave ?number|raman ?shift", word):
        return "cm-1"
    if re.search(r"nanomet|\bnm\b|\(nm", word):
        return "nm"
    if re.search(r"micromet|micron|µm|\bum\b", word):
        return "µm"
    return None


def ordinate_named(text: str) -> str | None:
    """Return the ordinate that a head line or a record names; None: none.

    >>> ordinate_named("% Transmittance"), ordinate_named("ABSORBANCE"), ordinate_named("counts"), ordinate_named("y")
    ('transmittance', 'absorbance', 'intensity', None)
    """
    word = text.lower()
    if re.search(r"transm|%\s*t\b", word):
        return "transmittance"
    if re.search(r"absorb|\babs\b|extinction", word):
        return "absorbance"
    return "intensity" if re.search(r"intensit|counts|arb|raman (?!shift)|scatter", word) else None


def is_per_cent(text: str) -> bool:
    """Tell whether the words for an ordinate say that it is given in per cent."""
    return "%" in text or "percent" in text.lower()
