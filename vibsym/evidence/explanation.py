"""The explanation of the observed bands by one prediction that needs the least total weight of excuses.

Items are single infrared bands, single Raman bands and pairs.  Each takes a fundamental of its own, active where it was
seen, or stays unexplained; a pair may also be broken over two fundamentals.  Weights:

    unexplained   1, or 1/2 if the item is weak in every spectrum in which it was seen; a pair is one item
    leak          1/2  a weak band at a fundamental silent there, where the prediction allows it
    polarisation  1    a polarised line on a species that is not totally symmetric
    accidental    1/2 for the first k broken pairs together (k: what chance reaches with 1 %), 1 for each further one

Fundamentals of equal activity are interchangeable, and so are items of equal kind, so the problem is a small integer
program over numbers: how many items of a kind take which option.  It is solved by branch and bound; the bound proves
that no explanation has a smaller total.  Among equal totals: fewest unexplained, then most polarised lines on totally
symmetric fundamentals, then (so that the score does not depend on the order of rows) fewest predicted bands left
unseen, then input order.
"""

from collections import Counter
from dataclasses import dataclass
from typing import NamedTuple

from vibsym.evidence.coincidence import Coincidences
from vibsym.evidence.lines import Band
from vibsym.evidence.programme import least
from vibsym.evidence.weights import Activity, Kind, activity_of, cost_of, kind_of
from vibsym.spectra.prediction import Prediction, SpeciesBands


class Place(NamedTuple):
    """A band, or a pair, at one fundamental of a species; `broken` marks the halves of a pair split over two."""

    species: SpeciesBands
    item: tuple[Band, ...]
    broken: bool = False


@dataclass(frozen=True)
class Explanation:
    """Which band is explained by which species, and what stays unexplained; `halves` is twice the total weight."""

    places: tuple[Place, ...]
    unexplained: tuple[tuple[Band, ...], ...]
    broken: tuple[tuple[Band, ...], ...]
    halves: int

    @property
    def total(self) -> float:
        """Total weight of the excuses."""
        return self.halves / 2


def explain(prediction: Prediction, seen: Coincidences, spectra: tuple[str, ...] = ("IR", "Raman"),
            one_sided: frozenset[Band] = frozenset()) -> Explanation:
    """Return the explanation with the least total weight of excuses; `spectra` are those that were measured.

    `one_sided` are the bands that lie where the other spectrum was not observed: nothing is unseen there.  With no
    bands the explanation is empty, without fundamentals everything stays unexplained.
    """
    kinds = [kind_of(item, one_sided) for item in seen.items]
    capacities: Counter = Counter()
    for species in prediction.bands:
        capacities[activity_of(species)] += species.count
    numbers = sorted(Counter(kinds).items())
    place = {kind: index for index, (kind, _) in enumerate(numbers)}
    solution = least(tuple(numbers), tuple(sorted(capacities.items())), seen.by_chance, tuple(spectra),
                     tuple(dict.fromkeys(place[kind] for kind in kinds)))
    return _lay_out(prediction, seen, kinds, solution)


def _lay_out(prediction: Prediction, seen: Coincidences, kinds: list[Kind], solution) -> Explanation:
    """Hand the numbers of the solution to the items in input order and to the species in table order."""
    free = [[species, species.count] for species in prediction.bands]

    def take(activity: Activity) -> SpeciesBands:
        slot = next(slot for slot in free if slot[1] and activity_of(slot[0]) == activity)
        slot[1] -= 1
        return slot[0]

    whole = {kind: Counter(numbers) for kind, numbers in solution.whole.items()}
    broken = {kind: [Counter(side) for side in sides] for kind, sides in solution.broken.items()}
    rank: dict[Activity, int] = {}
    for index, species in enumerate(prediction.bands):
        rank.setdefault(activity_of(species), index)

    def best(kind: Kind, options: Counter) -> Activity:
        return min((activity for activity, number in options.items() if number),
                   key=lambda activity: (cost_of(kind, activity), rank[activity]))

    places, split, left = [], [], []
    for item, kind in zip(seen.items, kinds):
        if any(whole.get(kind, {}).values()):
            chosen = best(kind, whole[kind])
            whole[kind][chosen] -= 1
            places.append(Place(take(chosen), item))
        elif kind in broken and any(broken[kind][0].values()):
            split.append(item)
            for band, counter in zip(item, broken[kind]):
                chosen = best(kind_of((band,)), counter)
                counter[chosen] -= 1
                places.append(Place(take(chosen), (band,), broken=True))
        else:
            left.append(item)
    return Explanation(tuple(places), tuple(left), tuple(split), solution.halves)
