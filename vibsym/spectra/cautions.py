"""What to beware of when a prediction is held against a spectrum: one sentence for each thing that applies here.

Symmetry permits a band, it never promises one; labels depend on axes; real samples are mixtures of isotopes; and some
molecules are not rigid.  What is said follows from the species and the structure, not from the name of the group.
"""

from vibsym.structures.elements import element
from vibsym.structures.rotors import find_rotors
from vibsym.structures.structure import Structure
from vibsym.structures.symmetry import within

# Below this share of its most abundant isotope an element is called a mixture (Cl 0.76, Br 0.51, B 0.80, most metals).
NEARLY_PURE = 0.9


def cautions(result) -> tuple[str, ...]:
    """Return the sentences for an `Expectation`, most important first."""
    structure = result.structure
    if len(structure) == 1:
        return ("One atom: it has no vibrations, so there are no bands to expect.", *structure.notes)
    notes = (*_bounds(), *_exclusion(result), *_chirality(result), *_pairs(result), *result.axes.notes,
             *structure.notes, *_isotopes(structure), *_rotors(structure), *_dummies(structure))
    return tuple(map(sentence, notes))


def sentence(note: str) -> str:
    """Return a note as a sentence: capital letter, full stop."""
    return note[:1].upper() + note[1:] + ("" if note.endswith((".", "?", "!")) else ".")


def _bounds() -> tuple[str, ...]:
    return ("Counts are of fundamentals and upper bounds: fewer bands never exclude the structure; overtones, "
            "combinations and isotopes may add lines.",)


def _exclusion(result) -> tuple[str, ...]:
    """Mutual exclusion, or the same without a centre; said from the species of the whole table."""
    group = result.symmetry.group
    if any(species.infrared and species.raman for species in group.species):
        return ()
    if group.centrosymmetric:
        return ("Mutual exclusion (centre of inversion): no fundamental is active in both infrared and Raman; absence "
                "of coincidences alone does not prove a centre.",)
    return (f"No species of {group.symbol} is active in both infrared and Raman although it has no centre of "
            "inversion: absence of coincidences does not prove a centre.",)


def _chirality(result) -> tuple[str, ...]:
    if not result.symmetry.group.chiral:
        return ()
    text = "The group is chiral: vibrational circular dichroism and Raman optical activity are allowed"
    above = result.ladder.next
    if above is not None and not above.symmetry.group.chiral:
        text += f", but the next rung, {above.symmetry.group.symbol} at {within(above.deviation)} Å, is not chiral"
    return (text + ".",)


def _pairs(result) -> tuple[str, ...]:
    labels = [species.label for species, _ in result.species if species.pair]
    if not labels:
        return ()
    return (f"{', '.join(labels)}: two complex-conjugate species taken as one, counted as one band.",)


def _isotopes(structure: Structure) -> tuple[str, ...]:
    """Name the elements without isotope label that nature supplies as mixtures, and what that does to the symmetry."""
    unlabelled = [name for name, number, dummy in zip(structure.symbols, structure.mass_numbers, structure.is_dummy)
                  if number is None and not dummy]
    mixed = {name: unlabelled.count(name) for name in dict.fromkeys(unlabelled)
             if 0 < element(name).abundance < NEARLY_PURE}
    if not mixed:
        return ()
    shares = ", ".join(f"{100 * element(name).abundance:.0f} % of {name} is {element(name).isotope}{name}"
                       for name in mixed)
    text = f"The real sample is a mixture of isotopes ({shares})"
    if max(mixed.values()) > 1:
        return (text + ", mostly of lower symmetry: bands may be split or weak extra lines appear.",)
    return (text + ": bands may be split; the symmetry stays.",)


def _rotors(structure: Structure) -> tuple[str, ...]:
    """Name the parts that turn easily."""
    counts: dict[str, list[str]] = {}
    for rotor in find_rotors(structure):
        counts.setdefault(rotor.name, []).append(f"{structure.symbols[rotor.atom]}{rotor.atom + 1}")
    if not counts:
        return ()
    parts = ", ".join(f"{name} ({_holders(atoms)})" for name, atoms in counts.items())
    return (f"Turns easily: {parts}. If it turns freely, the group of the rigid shape may mislead.",)


def _holders(atoms: list[str]) -> str:
    """Return the atoms that name or hold what turns, one that holds several once: `2 on Fe1`."""
    told = [atom if atoms.count(atom) == 1 else f"{atoms.count(atom)} on {atom}" for atom in dict.fromkeys(atoms)]
    return ", ".join(told[:6]) + (", ..." if len(told) > 6 else "")


def _dummies(structure: Structure) -> tuple[str, ...]:
    names = list(dict.fromkeys(name for name, dummy in zip(structure.symbols, structure.is_dummy) if dummy))
    if not names:
        return ()
    return (f"Dummy atoms {', '.join(names)} are counted as atoms that move.",)
