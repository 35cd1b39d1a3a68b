"""Assigned fundamentals as they are typed: `ν4:T2=1306`, `v4:T2=1306`, `T2=1306`, `ν4:T2`.

A mode given without a number is called by its species and its place among the modes of that species by falling
wavenumber: `T2(1)`, `T2(2)`, the order in which numbers are given to modes (R. S. Mulliken, J. Chem. Phys. 23, 1997
(1955)).
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass

from vibsym.errors import VibsymError

HIGHEST = 4500.0                   # cm-1; no fundamental lies higher than that of H2 (4161 cm-1)
_MODE = re.compile(r"(?:(?P<name>(?:ν|v|nu|Nu|V)_?\d+)\s*:)?\s*(?P<species>[^=:]+?)\s*(?:=\s*(?P<value>.*))?")


@dataclass(frozen=True)
class Mode:
    """A fundamental: what it is called, its species, its observed wavenumber (cm-1; None: not known)."""

    name: str
    species: str
    wavenumber: float | None = None

    def to_dict(self) -> dict:
        """Return the mode for JSON."""
        return {"mode": self.name, "species": self.species, "wavenumber": self.wavenumber}


def parse_modes(texts: Sequence[str], group) -> tuple[Mode, ...]:
    """Return the modes typed one by one; a species that the group lacks is an error.

    >>> from vibsym.groups.pointgroup import point_group
    >>> [mode.name for mode in parse_modes(["v4:T2=1306", "A1=2917"], point_group("Td"))]
    ['ν4', 'A1(1)']
    """
    return named_modes([_parse(text, group) for text in texts])


def named_modes(modes: Sequence[Mode]) -> tuple[Mode, ...]:
    """Give the modes without a name one by species and place, and refuse a name that occurs twice."""
    seen: set[str] = set()
    for mode in modes:
        if mode.name and mode.name in seen:
            raise VibsymError(f"mode {mode.name} is given twice; one wavenumber each is needed")
        seen.add(mode.name)
    places: dict[int, int] = {}
    for species in {mode.species for mode in modes}:
        own = [k for k, mode in enumerate(modes) if mode.species == species]
        own.sort(key=lambda k: -(modes[k].wavenumber or 0.0))
        places |= {k: place for place, k in enumerate(own, 1)}
    return tuple(mode if mode.name else Mode(f"{mode.species}({places[k]})", mode.species, mode.wavenumber)
                 for k, mode in enumerate(modes))


def mode_name(text: str) -> str:
    """Return the name of a mode as it is printed: `v4`, `nu4` and `ν_4` are `ν4`."""
    match = re.fullmatch(r"(?:ν|v|nu)_?(\d+)", text.strip(), re.IGNORECASE)
    return f"ν{int(match[1])}" if match else text.strip()


def mode_number(mode: Mode) -> float:
    """Return the number in the name of a mode, by which modes are sorted; those without one come last."""
    match = re.fullmatch(r"ν(\d+)", mode.name)
    return int(match[1]) if match else float("inf")


def _parse(text: str, group) -> Mode:
    match = _MODE.fullmatch(text.strip())
    if match is None:
        raise VibsymError(f"mode '{text}' cannot be read; write number:species=wavenumber, as in ν4:T2=1306 or T2=1306")
    species = group.species_named(match["species"]).label
    _check_linear(text, group, species)
    return Mode(mode_name(match["name"]) if match["name"] else "", species, _wavenumber(text, match["value"]))


def _check_linear(text: str, group, species: str) -> None:
    """Refuse what no vibration of a linear molecule is (Σ-, Δ, ...), and any vibration of a single atom."""
    if group.symbol == "Kh":
        raise VibsymError(f"mode '{text}': Kh is the group of a single atom, which has no vibrations")
    if group.infinite:
        possible = [label for label in group.image_labels.values() if not label.startswith("Σ") or label.endswith("+")]
        if species not in possible:
            raise VibsymError(f"mode '{text}': fundamentals of {group.symbol} are {', '.join(possible)}")


def _wavenumber(text: str, value: str | None) -> float | None:
    if value is None:
        return None
    try:
        number = float(value.replace("cm-1", ""))
    except ValueError:
        raise VibsymError(f"mode '{text}': '{value}' is not a wavenumber in cm-1") from None
    if not 0 < number <= HIGHEST:
        raise VibsymError(f"mode '{text}': a fundamental lies between 0 and {HIGHEST:g} cm-1")
    return number
