"""Force constants given by the user: a TOML file with one table a kind of coordinate.

    [units]                     # optional
    stretch = "mdyn/A"          # N/m (default) or mdyn/A
    bend = "mdyn A/rad2"        # aJ/rad2 (default), mdyn A/rad2 (the same), or N/m A2

    [stretch]
    "C-H" = 480

    [bend]
    "H-C-H" = 0.55

Tables: stretch, bend, "linear bend", wag, torsion; keys are the sets that `vibsym normal` lists, without isotope
marks.  A constant replaces the diagonal constant of every coordinate of its set; interactions, which are shares of
diagonal constants, follow. A torsion is the sum over the dihedral angles of its bond.
"""

from collections.abc import Sequence
from pathlib import Path

from vibsym.errors import VibsymError
from vibsym.vibrations.forcefield import plain_name
from vibsym.vibrations.naming import KINDS

UNITS = {"stretch": {"N/m": 1.0, "mdyn/A": 100.0, "mdyn/Å": 100.0, "aJ/A2": 100.0, "aJ/Å2": 100.0}}
ANGLES = {"aJ/rad2": 100.0, "mdyn A/rad2": 100.0, "mdyn Å/rad2": 100.0, "N/m A2": 1.0, "N/m Å2": 1.0}
LARGEST = 1e5  # N/m; the stiffest bond known (N2) has 2300


def read_constants(path: str, symbols: Sequence[str], sets) -> dict[str, float]:
    """Return {set: constant in N/m or N/m Å²} of a file; an unknown key is an error with the sets."""
    import tomllib

    try:
        tables = tomllib.loads(Path(path).read_text(encoding="utf-8-sig"))
    except OSError as error:
        raise VibsymError(f"{path}: cannot be read ({(error.strerror or str(error)).lower()})") from None
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise VibsymError(f"{path}: not a TOML file ({error})") from None
    units = _units(path, tables.pop("units", {}))
    known = {plain_name(each, symbols): each for each in sets}
    found = {}
    for kind, entries in tables.items():
        if kind not in KINDS or not isinstance(entries, dict):
            raise VibsymError(f"{path}: unknown table '{kind}'; the tables are units, {', '.join(KINDS)}")
        for elements, value in entries.items():
            name = _set_name(path, kind, elements, known)
            if isinstance(value, bool) or not isinstance(value, int | float) or not 0 < value * units[kind] <= LARGEST:
                raise VibsymError(f'{path}: [{kind}] "{elements}" = {value!r}: a positive force constant is needed')
            found[name] = float(value) * units[kind]
    if not found:
        raise VibsymError(f'{path}: no force constants; write for example [stretch] and "C-H" = 480')
    return found


def _units(path: str, given) -> dict[str, float]:
    units = {kind: 1.0 if kind == "stretch" else 100.0 for kind in KINDS}
    if not isinstance(given, dict):
        raise VibsymError(f"{path}: units must be a table: [units]")
    for kind, name in given.items():
        if kind not in units:
            raise VibsymError(f"{path}: [units] has the unknown key '{kind}'; the kinds are {', '.join(KINDS)}")
        choices = UNITS.get(kind, ANGLES)
        if name not in choices:
            raise VibsymError(f"{path}: no unit '{name}' for {kind}; it is one of {', '.join(choices)}")
        units[kind] = choices[name]
    return units


def _set_name(path: str, kind: str, elements: str, known: dict) -> str:
    parts = elements.replace("–", "-").split("-")
    for name in (f"{kind} {'-'.join(parts)}", f"{kind} {'-'.join(reversed(parts))}"):
        if name in known:
            return name
    own = ", ".join(name.rpartition(" ")[2] for name in known if name.rpartition(" ")[0] == kind) or "none"
    raise VibsymError(f'{path}: [{kind}] has the unknown key "{elements}"; the structure has {own}')
