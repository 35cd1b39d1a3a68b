"""The infinite groups: C∞v and D∞h of linear molecules, Kh of a single atom.

Their species are numbered by the quantum number of the rotation (Σ Π Δ Φ about the axis, S P D F of the sphere).
Whatever the displacements of atoms can carry has at most one quantum, |k| ≤ 1 (l ≤ 1), so C4v, D4h and Oh tell all of
it apart: they are the `image` in which representations are reduced and projected, exactly and without any rounding.
Source: G. Herzberg, Infrared and Raman Spectra (1945), tables 20 and 21; IUPAC, Pure Appl. Chem. 69, 1641 (1997).
"""

import re
from functools import cached_property

from vibsym.errors import VibsymError
from vibsym.groups.species import OperationClass, Species
from vibsym.groups.symbols import plain_label

IMAGES = {"C∞v": "C4v", "D∞h": "D4h", "Kh": "Oh"}
_IMAGE_LABELS = {
    "C∞v": {"A1": "Σ+", "A2": "Σ-", "E": "Π"},
    "D∞h": {"A1g": "Σg+", "A2g": "Σg-", "Eg": "Πg", "A2u": "Σu+", "A1u": "Σu-", "Eu": "Πu"},
    "Kh": {"A1g": "Sg", "T1g": "Pg", "A1u": "Su", "T1u": "Pu"},
}
AXIAL_LETTERS = "ΣΠΔΦΓ"
SPHERICAL_LETTERS = "SPDFGHIKLM"
# Functions by quantum number; g/u follow from the degree (even g, odd u).
_AXIAL_FUNCTIONS = {
    "Σ+": (("z",), (), ("x2+y2", "z2"), ("z3", "z(x2+y2)")), "Σ-": ((), ("Rz",), (), ()),
    "Π": (("x", "y"), ("Rx", "Ry"), ("xz", "yz"), ("xz2", "yz2", "x(x2+y2)", "y(x2+y2)")),
    "Δ": ((), (), ("x2-y2", "xy"), ("xyz", "z(x2-y2)")), "Φ": ((), (), (), ("x(x2-3y2)", "y(3x2-y2)")),
}
_SPHERICAL_FUNCTIONS = {
    "S": ((), (), ("x2+y2+z2",), ()), "P": (("x", "y", "z"), ("Rx", "Ry", "Rz"), (),
                                            ("x(x2+y2+z2)", "y(x2+y2+z2)", "z(x2+y2+z2)")),
    "D": ((), (), ("2z2-x2-y2", "x2-y2", "yz", "xz", "xy"), ()),
    "F": ((), (), (), ("z(2z2-3x2-3y2)", "x(4z2-x2-y2)", "y(4z2-x2-y2)", "xyz", "z(x2-y2)", "x(x2-3y2)", "y(3x2-y2)")),
}


class InfiniteGroup:
    """C∞v, D∞h or Kh: the attributes of a `PointGroup`, with `order` None and a finite `image` for displacements.

    `point_group(symbol)` makes one, with the `PointGroup` of `IMAGES[symbol]` for its image.
    """

    infinite = True
    order = None

    def __init__(self, symbol: str, image):
        self.symbol = symbol
        self.image = image
        self.image_labels = dict(_IMAGE_LABELS[symbol])

    @property
    def chiral(self) -> bool:
        """No improper operation: true of none of the three."""
        return False

    @property
    def centrosymmetric(self) -> bool:
        """The inversion is among the operations."""
        return self.symbol != "C∞v"

    @property
    def classes(self) -> tuple[OperationClass, ...]:
        """The classes as handbooks print them; those with an angle φ hold infinitely many operations (size 0)."""
        names = {"C∞v": ("E", "2C∞^φ", "∞σv"), "D∞h": ("E", "2C∞^φ", "∞σv", "i", "2S∞^φ", "∞C2"),
                 "Kh": ("E", "∞C∞^φ", "i", "∞S∞^φ")}[self.symbol]
        return tuple(OperationClass(name, 1 if name in "Ei" else 0, ()) for name in names)

    @cached_property
    def species(self) -> tuple[Species, ...]:
        """The species with functions up to the third degree: Σ to Φ, or S to F."""
        return tuple(self.species_named(label) for label in self.labels)

    @property
    def labels(self) -> tuple[str, ...]:
        """Labels of `species`."""
        if self.symbol == "C∞v":
            return "Σ+", "Σ-", "Π", "Δ", "Φ"
        if self.symbol == "D∞h":
            return "Σg+", "Σg-", "Πg", "Δg", "Φg", "Σu+", "Σu-", "Πu", "Δu", "Φu"
        return "Sg", "Pg", "Dg", "Fg", "Su", "Pu", "Du", "Fu"

    def quantum(self, label: str) -> tuple[int, str, str]:
        """Return (quantum number, parity '' g or u, '+' or '-' for Σ) of a label of any height.

        Beyond Γ species are written by their number, as `8` in `8g` (common practice).
        """
        plain = plain_label(label)
        if self.symbol == "Kh" and plain.startswith("T"):
            plain = "F" + plain[1:]                       # here F is l = 3, not another name of T
        letters = SPHERICAL_LETTERS if self.symbol == "Kh" else AXIAL_LETTERS
        match = re.fullmatch(rf"([{letters}]|\d+)([gu]?)([+-]?)", plain)
        if not match or (match[1] == "Σ") != bool(match[3]) or bool(match[2]) != self.centrosymmetric:
            raise VibsymError(f"no species '{label}' in {self.symbol}; it has {', '.join(self.labels)}, ...")
        return letters.index(match[1]) if match[1] in letters else int(match[1]), match[2], match[3]

    def label(self, quantum: int, parity: str = "", sign: str = "") -> str:
        """Return the label of a species from its quantum number, parity and, for Σ, sign."""
        letters = SPHERICAL_LETTERS if self.symbol == "Kh" else AXIAL_LETTERS
        name = letters[quantum] if quantum < len(letters) else str(quantum)
        return name + parity + (sign if name == "Σ" else "")

    def species_named(self, label: str) -> Species:
        """Return the species with a label of any height (`Δ`, `Hg`, `8g`)."""
        quantum, parity, sign = self.quantum(label)
        spherical = self.symbol == "Kh"
        table = _SPHERICAL_FUNCTIONS if spherical else _AXIAL_FUNCTIONS
        key = (SPHERICAL_LETTERS if spherical else AXIAL_LETTERS)[quantum] if quantum < 4 else ""
        linear, rotations, quadratic, cubic = table.get(key + sign, ((), (), (), ()))
        if self.centrosymmetric:                          # polynomials of even degree are g, of odd degree u
            if parity == "g":
                linear, cubic = (), ()
            else:
                rotations, quadratic = (), ()
        degeneracy = 2 * quantum + 1 if spherical else 1 if quantum == 0 else 2
        symmetric = quantum == 0 and parity in ("", "g") and sign in ("", "+")
        return Species(self.label(quantum, parity, sign), degeneracy, (), False, linear, rotations, quadratic, cubic,
                       symmetric)

    def exact_characters(self, label: str) -> list[str]:
        """Return the characters as they are printed, one for each class; φ is the angle of the rotation."""
        quantum, parity, sign = self.quantum(label)
        u = -1 if parity == "u" else 1
        if self.symbol == "Kh":
            turn = f"sin({2 * quantum + 1}φ/2)/sin(φ/2)" if quantum else "1"
            improper = _signed(u * (-1) ** quantum, turn.replace("φ/2", "(φ+π)/2")) if quantum else str(u)
            return [str(2 * quantum + 1), turn, str(u * (2 * quantum + 1)), improper]
        if quantum == 0:
            plane = 1 if sign == "+" else -1
            half = ["1", "1", str(plane)]
            other = [str(u), str(u), str(u * plane)]
        else:
            angle = f"2cos({quantum if quantum > 1 else ''}φ)"
            half = ["2", angle, "0"]
            other = [str(2 * u), _signed(u * (-1) ** quantum, angle), "0"]
        return half if self.symbol == "C∞v" else half + other

    def __repr__(self) -> str:
        return f"<InfiniteGroup {self.symbol}>"


def _signed(sign: int, text: str) -> str:
    return text if sign > 0 else "-" + text
