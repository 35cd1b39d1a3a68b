"""The weights of evidence: what an item costs at a fundamental, unexplained, or as a pair broken by chance.

Costs are counted in halves, so that they are whole numbers.  The weights themselves are our own rule: a forbidden band
that is seen weighs far more than an allowed one that is missing, and it weighs by its strength.
"""

from typing import NamedTuple

from vibsym.evidence.lines import Band
from vibsym.spectra.prediction import SpeciesBands


class Kind(NamedTuple):
    """What distinguishes items for an explanation: where seen, where weak, and the polarisation of the Raman band.

    `one_sided`: a single band where the other spectrum was not observed, so that nothing is missing there.
    """

    infrared: bool
    raman: bool
    weak_infrared: bool
    weak_raman: bool
    polarised: bool
    depolarised: bool
    one_sided: bool = False


class Activity(NamedTuple):
    """What distinguishes fundamentals for an explanation."""

    infrared: bool
    raman: bool
    totally_symmetric: bool
    leak_infrared: bool
    leak_raman: bool


def kind_of(item: tuple[Band, ...], one_sided: frozenset[Band] = frozenset()) -> Kind:
    """Return the kind of an item; `one_sided` are the bands that lie where the other spectrum was not observed."""
    seen = {band.spectrum: band for band in item}
    infrared, raman = seen.get("IR"), seen.get("Raman")
    return Kind(infrared is not None, raman is not None, bool(infrared and infrared.weak), bool(raman and raman.weak),
                bool(raman and raman.polarised), bool(raman and raman.depolarised),
                len(item) == 1 and item[0] in one_sided)


def activity_of(species: SpeciesBands) -> Activity:
    """Return the activity of a species."""
    return Activity(species.infrared, species.raman, species.totally_symmetric,
                    bool(species.leaks_in("IR")), bool(species.leaks_in("Raman")))


def cost_of(kind: Kind, activity: Activity) -> int | None:
    """Return twice the weight of the excuses for an item of a kind at one fundamental; None where it cannot be.

    >>> strong = Kind(True, False, False, False, False, False)
    >>> cost_of(strong, Activity(True, True, False, False, False))
    0
    >>> cost_of(strong, Activity(False, True, False, True, False)) is None
    True
    """
    halves = 0
    if kind.infrared and not activity.infrared:
        if not (kind.weak_infrared and activity.leak_infrared):
            return None
        halves += 1
    if kind.raman and not activity.raman:
        if not (kind.weak_raman and activity.leak_raman):
            return None
        halves += 1
    if kind.polarised and not activity.totally_symmetric:
        halves += 2
    return halves


def unexplained_cost(kind: Kind) -> int:
    """Return twice the weight of an item left unexplained."""
    weak = (kind.weak_infrared or not kind.infrared) and (kind.weak_raman or not kind.raman)
    return 1 if weak else 2


def accidental_cost(broken: int, by_chance: int) -> int:
    """Return twice the weight of so many broken pairs, of which chance explains `by_chance`.

    >>> accidental_cost(0, 2), accidental_cost(2, 2), accidental_cost(4, 2), accidental_cost(1, 0)
    (0, 1, 5, 2)
    """
    return (1 if broken and by_chance else 0) + 2 * max(0, broken - by_chance)
