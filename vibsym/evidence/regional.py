"""Predictions for one region: the stretches of one kind of bond, in the group of the molecule or in their local group.

In the local group a weak forbidden band may leak (a) where the molecule's own, lower group allows it, and (b) by the
surroundings, if a polyatomic ligand was taken for a point.
"""

import numpy as np

from vibsym.errors import VibsymError
from vibsym.evidence.whole_molecule import Proposal, bands_within, name_of
from vibsym.spectra.activity import SetBands
from vibsym.spectra.bond_ranges import range_of
from vibsym.spectra.oscillators import LocalSymmetry, Oscillators, find_oscillators, oscillators
from vibsym.spectra.prediction import SURROUNDINGS, TRUE_GROUP, Prediction, SpeciesBands
from vibsym.structures.equivalent_bonds import symmetric_bonds
from vibsym.structures.finder import find_symmetry
from vibsym.structures.ladder import as_group, ladder
from vibsym.structures.periodic import is_metal
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import Symmetry


def regional_predictions(structure: Structure, proposal: Proposal) -> list[Prediction]:
    """Return the prediction of the oscillators: one, or with `every_rung` one for each group of the ladder."""
    if proposal.every_rung:
        true, *higher = (rung.symmetry for rung in ladder(structure, proposal.tolerance, proposal.axes).rungs)
        return [_of_molecule(structure, true, None, proposal),
                *(_of_molecule(structure, each, true, proposal) for each in higher)]
    found = find_symmetry(structure, proposal.tolerance, axes=None if proposal.as_group else proposal.axes)
    if proposal.as_group:
        symmetry = as_group(structure, proposal.as_group, proposal.tolerance, proposal.axes)
        true = found if found.group.symbol != symmetry.group.symbol else None
    else:
        symmetry, true = found, None
    if proposal.local:
        return [_of_surroundings(structure, symmetry, proposal)]
    return [_of_molecule(structure, symmetry, true, proposal)]


def _stretches(structure: Structure, symmetry: Symmetry, proposal: Proposal) -> Oscillators:
    try:
        return oscillators(symmetry, proposal.oscillators, proposal.local, proposal.local_tolerance,
                           proposal.distinguish)
    except VibsymError as error:
        raise VibsymError(f"{structure.source or structure.formula}: {error}") from None


def _of_molecule(structure: Structure, symmetry: Symmetry, true: Symmetry | None, proposal: Proposal) -> Prediction:
    """The oscillators in the group of the molecule; `true` is its own group if `symmetry` is a higher rung."""
    found = _stretches(structure, symmetry, proposal).bands
    span = _span(structure, symmetry, proposal)
    points = ", ".join(_named_points(structure))
    return Prediction(name_of(structure, symmetry, true), structure.to_dict(), symmetry.to_dict(),
                      bands_within(found.gamma, symmetry, true, bool(points)), region=found.name,
                      true_group=true.group.symbol if true is not None else "", surroundings=points, span=span,
                      notes=_blunt(symmetry, found))


def _of_surroundings(structure: Structure, symmetry: Symmetry, proposal: Proposal) -> Prediction:
    """The oscillators in their local group, with the leaks that the molecule's group and its ligands allow."""
    local = _stretches(structure, symmetry, proposal).local
    points = _points(structure, local)
    opened = {leak.species: leak for leak in local.leaks}
    bands = []
    for label, number in local.bands.gamma.items():
        species, leak = local.symmetry.group.species_named(label), opened.get(label)
        ways = [(TRUE_GROUP,) * bool(leak and allowed) + (SURROUNDINGS,) * bool(points)
                for allowed in ((leak.infrared, leak.raman) if leak else (False, False))]
        bands.append(SpeciesBands(label, number, species.infrared, species.raman, species.totally_symmetric,
                                  () if species.infrared else ways[0], () if species.raman else ways[1]))
    return Prediction(name_of(structure), structure.to_dict(), symmetry.to_dict(), tuple(bands),
                      region=f"{local.bands.name}, local group", true_group=symmetry.group.symbol, surroundings=points,
                      local_group=local.symmetry.to_dict(), span=_span(structure, symmetry, proposal))


def _blunt(symmetry: Symmetry, found: SetBands) -> tuple[str, ...]:
    """Say that --local sees more where the group of the molecule is too low to forbid a band or to make two one."""
    counts = found.counts
    if symmetry.group.infinite or symmetry.group.order > 2 or not 1 < counts.fundamentals == counts.coincident:
        return ()
    return (f"In {symmetry.group.symbol} every band of {found.name} is allowed in both spectra, so structures of this "
            "group look alike; --local compares in the group of what the oscillators see.",)


def _span(structure: Structure, symmetry: Symmetry, proposal: Proposal) -> tuple[float, float] | None:
    """Return the range of the oscillators if all are diatomic ligands of metals, terminal or bridging; a nitro group or
    an acyl is none."""
    bonds = symmetric_bonds(symmetry)
    _, pairs, _ = find_oscillators(structure, bonds, proposal.oscillators)
    degree = np.bincount(bonds.ravel(), minlength=len(structure))
    metal = np.array([is_metal(number) for number in structure.numbers.tolist()])
    metals = np.zeros(len(structure), dtype=int)
    for column in (0, 1):
        np.add.at(metals, bonds[metal[bonds[:, 1 - column]], column], 1)
    inner = np.where(degree[pairs[:, 0]] >= degree[pairs[:, 1]], pairs[:, 0], pairs[:, 1])
    outer = pairs.sum(axis=1) - inner
    diatomic = (metals[inner] > 0) & (degree[inner] == metals[inner] + 1) & (degree[outer] == 1)
    if not diatomic.all() or metal[pairs].any():
        return None
    spans = {range_of(structure.symbols[i], structure.symbols[j]) for i, j in pairs.tolist()}
    return spans.pop() if len(spans) == 1 else None


def _points(structure: Structure, local: LocalSymmetry) -> str:
    """Name what stands as a point: donors whose ligand goes on, several atoms taken as one, and named points."""
    reduced = local.reduced
    kept, goes_on = set(reduced.atoms), set()
    for i, j in symmetric_bonds(local.whole).tolist():
        goes_on |= {i} & kept if j not in kept else {j} & kept if i not in kept else set()
    names = [name for origin, name in zip(reduced.origins, reduced.names)
             if (len(origin) > 1 or goes_on & set(origin)) and not structure.is_dummy[list(origin)].any()]
    counts = {name: names.count(name) for name in dict.fromkeys(names)}
    told = [f"{number} ligands at {name}" if number > 1 else f"the ligand at {name}" for name, number in counts.items()]
    return ", ".join(told + _named_points(structure))


def _named_points(structure: Structure) -> list[str]:
    """Name the dummy atoms: ligands of which only the place is known."""
    return [f"point {name}" for name in dict.fromkeys(
        name for name, dummy in zip(structure.symbols, structure.is_dummy) if dummy)]
