"""A structure: which atoms, where, how heavy, and which of them are alike.

Atoms are alike when element and mass agree (within 0.01 u); dummy atoms when their symbols agree.  A dummy atom is a
named point (`X`, `XL`) with no mass: NaN stands in `masses`, so that no sum over masses takes it for zero in silence.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.distances import closest_pair
from vibsym.structures.elements import average_mass, element, isotopes, mass
from vibsym.structures.labels import is_dummy, read_label, write_label

MASS_AGREEMENT = 0.01           # u; atoms of one element whose masses agree so far are alike
ONE_SPOT = 0.1                  # Å; nuclei never come so close (the shortest bond, H2, has 0.74 Å), copies do
SUSPICIOUS_DISTANCE = 0.5       # Å; below, a note asks for the unit of length
LARGEST_COORDINATE = 1e6        # Å = 0.1 mm; beyond, the figures needed for symmetry are lost


@dataclass(frozen=True, eq=False, repr=False)
class Structure:
    """Atoms with positions; make one with `Structure.from_atoms`, `structure_of` or a reader.

    >>> water = Structure.from_atoms(["O", "H", "D"], [[0, 0, 0], [0.76, 0, 0.59], [-0.76, 0, 0.59]])
    >>> water.formula, water.kinds.tolist()
    ('HDO', [0, 1, 2])
    """

    symbols: tuple[str, ...]                    # element symbols; of a dummy atom its kind
    positions: np.ndarray                       # (N, 3), Å, read-only
    masses: np.ndarray                          # (N,), u, read-only; NaN for a dummy atom
    kinds: np.ndarray                           # (N,) int, read-only; equal where atoms are alike; by first appearance
    mass_numbers: tuple[int | None, ...]        # None: the most abundant isotope (or a mean mass)
    source: str = ""
    comment: str = ""
    notes: tuple[str, ...] = ()
    bonds: np.ndarray | None = None             # (B, 2) int from 0: bonds that the file states; None: it states none
    charge: int | None = None                   # of the whole, where the file states it

    @classmethod
    def from_atoms(cls, symbols: Sequence, positions, masses=None, source: str = "", *, comment: str = "",
                   notes: Sequence[str] = (), bonds=None, charge: int | None = None,
                   first_line: int | None = None) -> "Structure":
        """Return a structure from labels (`"C"`, `"D"`, `"13C"`, 6, `"X"`), (N, 3) positions in Å and masses in u.

        `first_line` is the line of the file where the first atom stands, if each atom has a line: for messages.
        """
        where = f"{source}: " if source else ""
        try:
            labels = [read_label(str(label)) for label in symbols]
        except VibsymError as error:
            raise VibsymError(f"{where}{error}") from None
        names = tuple(label[0] for label in labels)
        mass_numbers = [label[1] for label in labels]
        positions = _checked_positions(positions, names, where)
        if masses is None:
            values = [_default_mass(name, number) for name, number in labels]
        else:
            values, mass_numbers = _given_masses(names, mass_numbers, masses, where)
        i, j, distance = closest_pair(positions)
        if distance < ONE_SPOT:
            if first_line is not None:
                where = f"{source}, lines {first_line + i} and {first_line + j}: "
            raise VibsymError(f"{where}atoms {i + 1} ({names[i]}) and {j + 1} ({names[j]}) lie on one spot "
                              f"({distance:.3f} Å apart); remove one of them")
        notes = tuple(notes)
        if distance < SUSPICIOUS_DISTANCE:
            notes += (f"atoms {i + 1} and {j + 1} are only {distance:.2f} Å apart: are the coordinates in Å?",)
        return cls(names, positions, _frozen(values, float), _frozen(_kinds(names, values), int), tuple(mass_numbers),
                   source, comment, notes, None if bonds is None else _frozen(bonds, int).reshape(-1, 2), charge)

    def __len__(self) -> int:
        return len(self.symbols)

    def __repr__(self) -> str:
        return f"<Structure {self.formula}, {len(self)} atoms{', ' + self.source if self.source else ''}>"

    @cached_property
    def numbers(self) -> np.ndarray:
        """(N,) atomic numbers; 0 for a dummy atom."""
        return _frozen([0 if is_dummy(name) else element(name).number for name in self.symbols], int)

    @cached_property
    def is_dummy(self) -> np.ndarray:
        """(N,) bool: True for dummy atoms."""
        return _frozen(self.numbers == 0, bool)

    @cached_property
    def labels(self) -> tuple[str, ...]:
        """The atoms as written in a file: `C`, `D`, `13C`, `XL`."""
        return tuple(map(write_label, self.symbols, self.mass_numbers))

    @cached_property
    def formula(self) -> str:
        """The formula in Hill's order, isotopes after their element (`CHD3`, `(13C)HN`), dummy atoms after a `·`.

        E. A. Hill, J. Am. Chem. Soc. 22, 478 (1900): carbon, hydrogen, then the alphabet; without carbon the alphabet.
        """
        counts: dict[tuple, int] = {}
        for key in zip(self.symbols, self.mass_numbers):
            counts[key] = counts.get(key, 0) + 1
        organic = "C" in self.symbols

        def place(key):
            name, number = key
            return is_dummy(name), (name != "C", name != "H") if organic else (), name, number or 0

        parts = {False: "", True: ""}
        for name, number in sorted(counts, key=place):
            label = write_label(name, number)
            if label[0].isdigit() or (is_dummy(name) and len(name) > 1):
                label = f"({label})"
            count = counts[name, number]
            parts[is_dummy(name)] += label + (str(count) if count > 1 else "")
        return "·".join(part for part in parts.values() if part)

    def moved(self, positions) -> "Structure":
        """Return the same atoms at other (N, 3) positions."""
        return replace(self, positions=_frozen(positions, float).reshape(len(self), 3))

    def with_notes(self, *notes: str) -> "Structure":
        """Return the same structure with more notes."""
        return replace(self, notes=self.notes + notes)

    def with_isotopes(self, mass_numbers: Mapping[int, int | None]) -> "Structure":
        """Return the structure with other isotopes at some atoms, counted from 0; None is the most abundant isotope.

        >>> Structure.from_atoms(["H", "H"], [[0, 0, 0], [0, 0, 0.74]]).with_isotopes({1: 2}).formula
        'HD'
        """
        numbers, masses = list(self.mass_numbers), self.masses.tolist()
        for atom, number in mass_numbers.items():
            if not 0 <= atom < len(self):
                raise VibsymError(f"no atom {atom + 1}; {self.formula} has atoms 1 to {len(self)}")
            name = self.symbols[atom]
            if is_dummy(name):
                raise VibsymError(f"atom {atom + 1} is the dummy atom {name}, which has no isotopes")
            masses[atom] = mass(name, number)
            numbers[atom] = None if number == element(name).isotope else number
        return self._with_masses(masses, numbers)

    def with_average_masses(self) -> "Structure":
        """Return the structure with standard atomic weights on all atoms without an isotope label; the kinds stay."""
        values = [value if number is not None or is_dummy(name) else average_mass(name)
                  for name, number, value in zip(self.symbols, self.mass_numbers, self.masses.tolist())]
        return replace(self, masses=_frozen(values, float))

    def _with_masses(self, masses, mass_numbers) -> "Structure":
        return replace(self, masses=_frozen(masses, float), kinds=_frozen(_kinds(self.symbols, masses), int),
                       mass_numbers=tuple(mass_numbers))

    def to_dict(self) -> dict:
        """Return the `structure` object of every JSON result."""
        return {"source": self.source, "formula": self.formula, "atoms": len(self)}


def structure_of(thing) -> Structure:
    """Return a structure from anything that offers chemical symbols and positions in Å.

    Accepted: a `Structure`; an object with `get_chemical_symbols()` and `get_positions()`, or `symbols`, `positions`.
    Masses are taken from `masses`, or from `get_masses()` where the object says that they were set (`has("masses")`).
    """
    if isinstance(thing, Structure):
        return thing
    names, positions = _offer(thing, "get_chemical_symbols", "symbols"), _offer(thing, "get_positions", "positions")
    if names is None or positions is None:
        raise VibsymError(f"a {type(thing).__name__} offers no chemical symbols and positions; give an object that "
                          "has both, or Structure.from_atoms(symbols, positions)")
    masses = getattr(thing, "masses", None)
    has = getattr(thing, "has", None)
    if masses is None and callable(has) and has("masses"):
        masses = thing.get_masses()
    periodic = getattr(thing, "pbc", None)
    notes = ("the lattice is ignored: the atoms are taken as one molecule",) if np.any(periodic) else ()
    return Structure.from_atoms(list(names), positions, masses, notes=notes)


def _offer(thing, method: str, attribute: str):
    call = getattr(thing, method, None)
    return call() if callable(call) else getattr(thing, attribute, None)


def _frozen(values, dtype) -> np.ndarray:
    array = np.array(values, dtype=dtype)
    array.flags.writeable = False
    return array


def _default_mass(name: str, mass_number: int | None) -> float:
    return float("nan") if is_dummy(name) else mass(name, mass_number)


def _checked_positions(positions, names, where: str) -> np.ndarray:
    try:
        array = _frozen(positions, float)
    except (TypeError, ValueError):
        raise VibsymError(f"{where}the positions are not numbers; {len(names)} rows of x, y, z are needed") from None
    if not names:
        raise VibsymError(f"{where}no atoms; at least one is needed")
    if array.shape != (len(names), 3):
        raise VibsymError(f"{where}positions have the shape {array.shape}; {len(names)} atoms need ({len(names)}, 3)")
    largest = np.abs(array).max()
    if not largest <= LARGEST_COORDINATE:       # also true for NaN
        atom = int(np.argmax(~(np.abs(array) <= LARGEST_COORDINATE).all(axis=1)))
        value = next(v for v in array[atom] if not abs(v) <= LARGEST_COORDINATE)
        raise VibsymError(f"{where}atom {atom + 1} ({names[atom]}) has the coordinate {value:g}; finite values in Å "
                          f"are needed, at most {LARGEST_COORDINATE:g}")
    return array


def _given_masses(names, mass_numbers, masses, where: str) -> tuple[list[float], list[int | None]]:
    """Return masses and mass numbers where masses are given; a given mass outweighs the label."""
    try:
        given = np.array(masses, dtype=float).reshape(-1).tolist()
    except (TypeError, ValueError):
        raise VibsymError(f"{where}the masses are not numbers") from None
    if len(given) != len(names):
        raise VibsymError(f"{where}{len(given)} masses for {len(names)} atoms; one each is needed")
    values, numbers = [], []
    known: dict[tuple, tuple] = {}
    for index, key in enumerate(zip(names, mass_numbers, given)):
        if key not in known:
            known[key] = _isotope_of_mass(*key, atom=index + 1, where=where)
        value, number = known[key]
        values.append(value)
        numbers.append(number)
    return values, numbers


def _isotope_of_mass(name: str, label: int | None, value: float, atom: int, where: str) -> tuple[float, int | None]:
    """Return (mass, mass number) of an atom whose mass is given: the isotope within 0.01 u, else no label."""
    if is_dummy(name):
        return float("nan"), None
    if not 0.5 < value < 400:
        raise VibsymError(f"{where}atom {atom} ({name}) has the mass {value:g}; a positive mass in u is needed")
    main = element(name)
    if abs(value - main.isotope_mass) <= MASS_AGREEMENT:
        return value, None
    for number, isotope in isotopes(name).items():
        if abs(value - isotope.mass) <= MASS_AGREEMENT:
            return value, number
    if not 0.9 * min(isotopes(name)) <= value <= 1.1 * max(isotopes(name)):
        raise VibsymError(f"{where}atom {atom} ({name}) has the mass {value:g} u, far from every isotope of {name}")
    return value, label


def _kinds(names: Sequence[str], masses: Sequence[float]) -> list[int]:
    """Return equal numbers for atoms of one element whose masses agree within 0.01 u, by first appearance."""
    keys = [(name, 0.0 if value != value else value) for name, value in zip(names, masses)]
    first: dict[tuple, int] = {}
    for index, key in enumerate(keys):
        first.setdefault(key, index)
    leader: dict[tuple, int] = {}               # the first atom of the kind, for each different (symbol, mass)
    group: list[tuple] = []
    for key in sorted(first):
        if group and (key[0] != group[-1][0] or key[1] - group[-1][1] > MASS_AGREEMENT):
            group = []
        group.append(key)
        start = min(first[member] for member in group)
        for member in group:
            leader[member] = start
    rank = {start: number for number, start in enumerate(sorted(set(leader.values())))}
    return [rank[leader[key]] for key in keys]
