"""A centre and its ligands placed on an ideal shape: the structure of a complex, with tabulated bond lengths.

The centre stands at the origin, each donor on the direction of its site at the sum of the covalent radii, the second
atom of a linear diatomic behind it.  A named point is a dummy atom (`L` is `XL`), as is every donor of a chelate.
The shape is exact, the lengths are those of the tables: good enough for symmetry and for pictures, not for force
fields.
"""

from collections.abc import Sequence

import numpy as np

from vibsym.errors import VibsymError
from vibsym.structures.elements import covalent_radius, elements
from vibsym.structures.labels import HYDROGEN_ISOTOPES
from vibsym.structures.ligands import Ligand, read_ligands
from vibsym.structures.polyhedra import Shape, shape
from vibsym.structures.structure import Structure

CENTRE_RADIUS = 1.4             # Å, of a centre that is only a name (M); about that of a 4d metal
POINT_RADIUS = 0.9              # Å, of a donor that is not known; between those of N and P


def place(symbol: str | Shape, centre: str, ligands: Sequence[str]) -> Structure:
    """Return a complex with the ligands named site by site: atoms, linear diatomics (donor first) or named points.

    >>> place("SP-4", "Pt", ["Cl", "Cl", "CO", "L"]).symbols
    ('Pt', 'Cl', 'Cl', 'C', 'O', 'XL')
    """
    where = symbol if isinstance(symbol, Shape) else shape(symbol)
    if len(ligands) != len(where):
        raise VibsymError(f"{len(ligands)} ligands for {where.symbol}, which has {len(where)} sites; name one for each")
    sorts = {name: read_ligands([f"{name}=1"])[0] for name in dict.fromkeys(ligands)}
    for name, sort in sorts.items():
        if len(sort.donors) > 1:
            raise VibsymError(f"{name} is a chelate; name one ligand for each site")
    return placed(where, centre, [(sorts[name], 0) for name in ligands])[0]


def placed(where: Shape, centre: str, sites: Sequence[tuple[Ligand, int]]) -> tuple[Structure, np.ndarray, np.ndarray]:
    """Return (structure, donors, outer) of a complex whose site j holds donor sites[j][1] of the ligand sites[j][0].

    `donors` (n,) and `outer` (n,) are the atoms of each site (outer -1 where there is none); the centre is atom 0.
    """
    name, radius = centre_atom(centre)
    labels, positions, bonds = [name], [np.zeros(3)], []
    donors, outer = np.empty(len(where), dtype=int), np.full(len(where), -1)
    points = dummy_names([ligand.donor_text(donor) for ligand, donor in sites])
    for site, ((ligand, donor), direction) in enumerate(zip(sites, where.directions, strict=True)):
        element = ligand.donors[donor].element
        reach = radius + (covalent_radius(element) if element else POINT_RADIUS)
        donors[site] = len(labels)
        bonds.append((0, len(labels)))
        labels.append(points[ligand.donor_text(donor)] if ligand.form == "point" else
                      ligand.name if ligand.form == "atom" else element)
        positions.append(reach * direction)
        if ligand.outer:
            outer[site] = len(labels)
            bonds.append((len(labels) - 1, len(labels)))
            labels.append(ligand.outer)
            positions.append((reach + ligand.length) * direction)
    structure = Structure.from_atoms(labels, positions, source=where.symbol, bonds=bonds)
    return structure, donors, outer


def centre_atom(name: str) -> tuple[str, float]:
    """Return (label, radius in Å) of a centre: an element, or a mere name such as M, which becomes a dummy atom.

    >>> centre_atom("Mo"), centre_atom("M")
    (('Mo', 1.54), ('XM', 1.4))
    """
    if name in elements():
        return name, covalent_radius(name)
    if name in HYDROGEN_ISOTOPES or not (name.isascii() and name.isalnum() and name[:1].isalpha()):
        raise VibsymError(f"centre '{name}': write an element symbol, as Mo, or a name of letters and digits, as M")
    return _dummy(name), CENTRE_RADIUS


def dummy_names(texts: Sequence[str]) -> dict[str, str]:
    """Return the dummy symbol of each named point, different for different names.

    >>> dummy_names(["L", "L'", "P(OMe)3"])
    {'L': 'XL', "L'": 'XLp', 'P(OMe)3': 'XPOMe3'}
    """
    found: dict[str, str] = {}
    for text in dict.fromkeys(texts):
        name = _dummy(text)
        while name in found.values():
            name += "a"
        found[text] = name
    return found


def _dummy(text: str) -> str:
    """X and the letters and digits of the name; never Xe, which is xenon."""
    name = "".join(c for c in text.replace("'", "p") if c.isascii() and c.isalnum())
    name = "X" + name[:1].upper() + name[1:]
    return name + "0" if name.lower() == "xe" else name
