"""Trade names of isomers: cis, trans, fac, mer, axial, equatorial, ... where the trade has them.

Two alike ligands that are trans or cis, three that share a face (fac) or a meridian (mer); in shapes with sites of
several kinds the place of the rarer ligands (axial, apical, cap).  Two chelates of three donors are mer, s-fac or
u-fac.  (All common practice; the names of IUPAC are the indices of `configuration_index.py`.) One ligand names an
isomer if that is enough to tell all apart; else every ligand is named, then the trans pairs, then a running number is
added.
"""

from collections import Counter
from collections.abc import Sequence

from vibsym.structures.arrangements import Orbits

ONLY = "only isomer"
_TRANS_SHAPES = ("SP-4", "SPY-4", "OC-6")
_LATIN = {2: "di", 3: "tri", 4: "tetra"}


def trade_names(found: Orbits) -> list[str]:
    """Return one name for each isomer, all different.

    >>> from vibsym.structures.arrangements import orbits
    >>> from vibsym.structures.ligands import read_ligands
    >>> from vibsym.structures.polyhedra import shape
    >>> trade_names(orbits(shape("OC-6"), read_ligands(["CO=3", "L=3"])))
    ['fac', 'mer']
    """
    if found.count == 1:
        return [ONLY]
    rows = found.sites.tolist()
    names = _relations(found, rows) if found.shape.symbol in _TRANS_SHAPES else _places(found, rows)
    if found.shape.symbol in (*_TRANS_SHAPES, "SPY-5") and len(set(names)) < len(names):
        pairs = [trans_pairs(found, row) for row in rows]
        doubled = Counter(names)
        names = [name if doubled[name] == 1 else "; ".join(filter(None, (name, pair)))
                 for name, pair in zip(names, pairs)]
    return _numbered(names)


def _relations(found: Orbits, rows: Sequence[Sequence[int]]) -> list[str]:
    """cis, trans, fac, mer of each colour that occurs two or three times (or of the two single ligands of MA4BC)."""
    bis = _bis_terdentate(found)
    if bis:
        return bis
    counts = [rows[0].count(colour) for colour in range(len(found.colours))]
    words: list[tuple[str, list[str]]] = []
    for colour in sorted(range(len(counts)), key=lambda k: counts[k] != 3):
        if counts[colour] in (2, 3):
            told = [_relation(found, [site for site, here in enumerate(row) if here == colour]) for row in rows]
            words.append((label(found, colour), told))
    singles = [colour for colour, count in enumerate(counts) if count == 1]
    if not words and len(singles) == 2:
        return [_relation(found, [site for site, here in enumerate(row) if here in singles]) for row in rows]
    for _, told in words:
        if len(set(told)) == len(rows):
            return told
    if len(words) == 1:
        return words[0][1]
    names = []
    for k in range(len(rows)):
        told = [each[k] for _, each in words]
        same = len(set(told)) == 1 and told[0] in ("cis", "trans") and len(told) == 3
        names.append(f"all-{told[0]}" if same else ", ".join(f"{word}({who})" for (who, _), word in zip(words, told)))
    return names


def _relation(found: Orbits, sites: Sequence[int]) -> str:
    trans = any(found.shape.opposite[site] in sites for site in sites)
    if len(sites) == 3:
        return "mer" if trans else "fac"
    return "trans" if trans else "cis"


def _bis_terdentate(found: Orbits) -> list[str] | None:
    """mer, s-fac, u-fac of two alike chains of three donors."""
    if len(found.ligands) != 1 or found.ligands[0].span != "chain" or len(found.ligands[0].donors) != 3:
        return None
    names = []
    for row, held in zip(found.sites.tolist(), found.holders.tolist()):
        first = [site for site, bits in enumerate(held) if bits == held[0]]
        if _relation(found, first) == "mer":
            names.append("mer")
            continue
        middle = [site for site, colour in enumerate(row) if found.colours[colour].donor == 1]
        names.append("s-fac" if _relation(found, middle) == "trans" else "u-fac")
    return names


def trans_pairs(found: Orbits, row: Sequence[int]) -> str:
    """Return what stands trans to what: `CO–L, CO–CO, L–L`, first named first."""
    opposite = found.shape.opposite
    pairs = sorted(tuple(sorted((row[site], row[opposite[site]]))) for site in range(len(row))
                   if opposite[site] is not None and site < opposite[site])
    return "trans: " + ", ".join("–".join(label(found, colour) for colour in pair) for pair in pairs)


def _places(found: Orbits, rows: Sequence[Sequence[int]]) -> list[str]:
    """Where the rarest ligand stands, else what stands on every kind of site but the last."""
    places = found.shape.places
    kinds = list(dict.fromkeys(places))
    if len(kinds) == 1:
        return [""] * len(rows)
    totals = Counter(rows[0])
    rarest = min(totals, key=lambda colour: (totals[colour], -colour))
    where = [[site for site, here in enumerate(row) if here == rarest] for row in rows]
    named = [_of_colour(places, sites) for sites in where]
    if found.shape.symbol == "SPY-5" and totals[rarest] == 2:
        named = [f"{_relation(found, sites)}-{name}" if name == "dibasal" else name
                 for name, sites in zip(named, where)]
    if len(totals) == 2 or len(set(named)) == len(rows):
        return named
    return ["; ".join(f"{kind} " + ", ".join(label(found, row[site]) for site in sorted(
        (site for site, place in enumerate(places) if place == kind), key=row.__getitem__)) for kind in kinds[:-1])
        for row in rows]


def _of_colour(places: Sequence[str], sites: Sequence[int]) -> str:
    words = Counter(places[site] for site in sites)
    if len(words) == 1 and len(sites) in _LATIN and " " not in places[sites[0]]:
        return _LATIN[len(sites)] + next(iter(words))
    return ", ".join(word if number == 1 else f"{number} {word}" for word, number in words.items())


def label(found: Orbits, colour: int) -> str:
    """Return how a colour is written: `CO`, `en:N`."""
    what = found.colours[colour]
    return found.ligands[what.ligand].donor_text(what.donor)


def _numbered(names: Sequence[str]) -> list[str]:
    """Add running numbers to names that occur more than once; the nameless are `isomer 1`, `isomer 2`, ..."""
    doubled, seen = Counter(names), Counter()
    numbered = []
    for name in names:
        seen[name] += 1
        if not name:
            numbered.append(f"isomer {seen[name]}")
        else:
            numbered.append(name if doubled[name] == 1 else f"{name} ({seen[name]})")
    return numbered
