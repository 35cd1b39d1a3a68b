"""Ligands as a chemist types them: `CO=4`, `Cl=2`, `L=2`, `en(N,N)=3`, with what the later steps need to know of each.

A ligand is an atom (its symbol is that of an element, and no other donor is named for it), a linear diatomic (CO, CN,
NO, N2, ..., donor first) or a named point: a ligand of which only the place counts.  Those in `tables/ligands.csv` have
a known donor; another point has one where the user names it (`--donor L=P`).  A chelate lists its donors: in
parentheses a chain, whose consecutive donors stand on neighbouring sites (`dien(N,N',N)`), in square brackets a ring or
tripod, of which every two do (`tacn[N,N,N]`). Donors of a chelate with the same name are alike, but the middle of a
chain of three never equals its ends.
"""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache

from vibsym.errors import VibsymError
from vibsym.structures.elements import element, elements
from vibsym.structures.labels import HYDROGEN_ISOTOPES
from vibsym.tables import read_table

MOST_SITES = 9
_CHELATE = re.compile(r"(?P<name>[^\s()\[\],=]+)"
                      r"(?:\((?P<chain>[^()\[\]]*,[^()\[\]]*)\)|\[(?P<ring>[^()\[\]]*,[^()\[\]]*)\])")
_NAME = re.compile(r"[^\s,=\[\]]+")


@dataclass(frozen=True)
class Donor:
    """The atom of a ligand that stands on a site: its name, element if known, and the atoms next to it if known."""

    name: str                               # "C" of CO, "N'" of dien, "L" of a named point
    element: str | None                     # None: unknown until --donor names it
    next_atoms: tuple[str, ...] | None      # other than the centre; () for a monatomic ligand, None where not known


@dataclass(frozen=True)
class Ligand:
    """One sort of ligand and how many of them there are."""

    name: str
    count: int
    donors: tuple[Donor, ...]
    kinds: tuple[int, ...]                  # equal numbers: donors of this ligand that are alike
    span: str                               # "single", "chain" or "ring"
    outer: str | None = None                # second atom of a linear diatomic
    length: float | None = None             # Å, of its bond

    @property
    def form(self) -> str:
        """How it is placed: "atom", "diatomic" or "point"."""
        if self.outer:
            return "diatomic"
        monatomic = self.span == "single" and self.name == self.donors[0].name and self.donors[0].next_atoms == ()
        return "atom" if monatomic else "point"

    @property
    def words(self) -> str:
        """What the name was taken for, in words."""
        if self.form == "atom":
            element_name = element("H" if self.name in HYDROGEN_ISOTOPES else self.name).name
            return {"D": "deuterium", "T": "tritium"}.get(self.name, element_name) + " atom"
        if self.form == "diatomic":
            return f"linear, {self.donors[0].element} bound"
        if self.span == "single":
            return "named point, donor " + (self.donors[0].element or "not known")
        return f"chelate, {self.span} of donors " + ", ".join(donor.name for donor in self.donors)

    def donor_text(self, place: int) -> str:
        """How the donor is written on its site: `CO`, or `en:N` for a chelate."""
        return self.name if self.span == "single" else f"{self.name}:{self.donors[place].name}"


@cache
def known_ligands() -> dict[str, dict]:
    """Return the rows of `tables/ligands.csv` by name."""
    return {row["ligand"]: row for row in read_table("ligands.csv")}


def read_ligands(texts: Sequence[str], donors: Sequence[str] = (), sites: int | None = None) -> tuple[Ligand, ...]:
    """Return the ligands of a composition from `NAME=COUNT` texts; `donors` are `NAME=ELEMENT` texts for named points.

    `sites` is the coordination number that they must fill.

    >>> [(ligand.name, ligand.count, ligand.form) for ligand in read_ligands(["CO=4", "L=2"], sites=6)]
    [('CO', 4, 'diatomic'), ('L', 2, 'point')]
    """
    if not texts:
        raise VibsymError("no ligands; give at least one, as in --ligand CO=4")
    named = _read_donors(donors)
    used: set[str] = set()
    ligands = tuple(_read_ligand(text, named, used) for text in texts)
    names = [ligand.name for ligand in ligands]
    for name in names:
        if names.count(name) > 1:
            raise VibsymError(f"ligand {name} is given {names.count(name)} times; give it once with the whole count")
    for name in named:
        if name not in used:
            raise VibsymError(f"--donor {name}={named[name]}: no ligand or donor of that name needs one; the ligands "
                              f"are {', '.join(names)}")
    _check_count(ligands, sites)
    return ligands


def _check_count(ligands: Sequence[Ligand], sites: int | None) -> None:
    count = sum(ligand.count * len(ligand.donors) for ligand in ligands)
    said = " + ".join(f"{ligand.count * len(ligand.donors)} ({ligand.name})" for ligand in ligands)
    if count > MOST_SITES:
        raise VibsymError(f"{count} donors, {said}: more than nine ligands; the shapes end at coordination number 9")
    if sites is not None and count != sites:
        raise VibsymError(f"{count} donors, {said}, for a shape of {sites} sites; the counts must add up to {sites}")


def _read_donors(texts: Sequence[str]) -> dict[str, str]:
    found: dict[str, str] = {}
    for text in texts:
        name, equals, symbol = (part.strip() for part in str(text).partition("="))
        if not (name and equals and symbol):
            raise VibsymError(f"--donor '{text}' is not NAME=ELEMENT; write --donor L=P")
        if symbol not in elements():
            raise VibsymError(f"--donor '{text}': '{symbol}' is not an element symbol; write --donor {name}=P")
        if found.get(name, symbol) != symbol:
            raise VibsymError(f"--donor {name} is given twice, as {found[name]} and as {symbol}")
        found[name] = symbol
    return found


def _read_ligand(text: str, named: Mapping[str, str], used: set[str]) -> Ligand:
    head, equals, tail = str(text).strip().rpartition("=")
    name, count = (head.strip(), _count(text, tail)) if equals else (str(text).strip(), 1)
    chelate = _CHELATE.fullmatch(name)
    if chelate:
        tokens = [token.strip() for token in (chelate["chain"] or chelate["ring"]).split(",")]
        return _chelate(text, chelate["name"], count, tokens, "chain" if chelate["chain"] else "ring", named, used)
    if not name or not _NAME.fullmatch(name):
        raise VibsymError(f"ligand '{text}' is not NAME=COUNT, as CO=4; a chelate lists its donors, as 'en(N,N)=3'")
    row = known_ligands().get(name)
    if row:
        _agree(name, row["donors"], named, used)
        return _known(name, count, row)
    symbol = "H" if name in HYDROGEN_ISOTOPES else name
    if symbol in elements() and named.get(name, symbol) == symbol:
        used.update({name} & set(named))
        return Ligand(name, count, (Donor(name, symbol, ()),), (0,), "single")
    if name in named:               # a letter such as B is then a point, not boron
        used.add(name)
    return Ligand(name, count, (Donor(name, named.get(name), None),), (0,), "single")


def _agree(name: str, donors: str, named: Mapping[str, str], used: set[str]) -> None:
    """Accept a donor that only repeats what is known of a ligand; another one is an error."""
    if name in named and len(donors.split()) == 1:
        if named[name] != donors:
            raise VibsymError(f"--donor {name}={named[name]}: {name} is known to bind through {donors}; give a ligand "
                              "that binds otherwise a name of its own")
        used.add(name)


def _count(text: str, digits: str) -> int:
    digits = digits.strip()
    if not (digits.isascii() and digits.isdigit()) or int(digits[:4]) < 1:
        raise VibsymError(f"ligand '{text}': the count '{digits}' must be a whole number from 1 to 9")
    return int(digits[:4])


def _known(name: str, count: int, row: dict) -> Ligand:
    tokens = row["donors"].split()
    lists = [tuple(part.split()) for part in row["next"].split("|")]
    if len(lists) != len(tokens):
        raise VibsymError(f"tables/ligands.csv: {name} has {len(tokens)} donors and {len(lists)} lists of next atoms")
    donors = tuple(Donor(token, token.rstrip("'"), around) for token, around in zip(tokens, lists, strict=True))
    return Ligand(name, count, donors, _kinds(tokens, row["span"]), row["span"], row["outer"] or None,
                  float(row["length"]) if row["length"] else None)


def _chelate(text, name, count, tokens, span, named, used) -> Ligand:
    if not all(tokens):
        raise VibsymError(f"ligand '{text}': an empty donor; list them as in 'en(N,N)=3'")
    if len(tokens) > 3:
        raise VibsymError(f"ligand '{text}': {len(tokens)} donors; chelates have two or three")
    row = known_ligands().get(name)
    if row and row["donors"].split() == tokens and row["span"] == span:
        return _known(name, count, row)
    donors = []
    for token in tokens:
        symbol = token.rstrip("'")
        if symbol not in elements():
            symbol = named.get(token, named.get(name))
            used.update({token, name} & set(named))
        donors.append(Donor(token, symbol, None))
    return Ligand(name, count, tuple(donors), _kinds(tokens, span), span)


def _kinds(tokens: Sequence[str], span: str) -> tuple[int, ...]:
    """Number the donors of a ligand so that alike ones have one number; the middle of a chain of three stands apart."""
    keys = [(token, span == "chain" and len(tokens) == 3 and place == 1) for place, token in enumerate(tokens)]
    return tuple(keys.index(key) for key in keys)
