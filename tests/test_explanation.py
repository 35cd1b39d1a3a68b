"""The explanation is the least: against exhaustive search on thousands of seeded random cases, and by hand."""

import random
from itertools import product

import pytest

from vibsym.evidence.coincidence import Coincidences
from vibsym.evidence.explanation import explain
from vibsym.evidence.lines import Band, Line
from vibsym.spectra.prediction import SURROUNDINGS, Prediction, SpeciesBands


def predicted(*bands: SpeciesBands) -> Prediction:
    return Prediction("test", {}, {"symbol": "C1"}, bands)


def search(prediction: Prediction, seen: Coincidences, spectra=("IR", "Raman")) -> tuple:
    """Return the least (twice the total, unexplained, -polarised on symmetric, unseen) by trying everything.

    Written from the conventions, on single fundamentals and single items, without kinds or activities.
    """
    fundamentals = [species for species in prediction.bands for _ in range(species.count)]
    options = []
    for item in seen.items:
        choices = [("unexplained", ())]
        choices += [("whole", (f,)) for f in range(len(fundamentals)) if cost(fundamentals[f], item) is not None]
        if len(item) == 2:
            choices += [("broken", (f, g)) for f in range(len(fundamentals)) for g in range(len(fundamentals))
                        if f != g and cost(fundamentals[f], item[:1]) is not None
                        and cost(fundamentals[g], item[1:]) is not None]
        options.append(choices)
    best = None
    for choice in product(*options):
        used = [f for _, places in choice for f in places]
        if len(set(used)) < len(used):
            continue
        score = weigh(choice, fundamentals, seen, spectra)
        best = score if best is None else min(best, score)
    return best


def cost(species: SpeciesBands, item: tuple[Band, ...]) -> int | None:
    halves = 0
    for band in item:
        active = species.infrared if band.spectrum == "IR" else species.raman
        leak = species.leak_infrared if band.spectrum == "IR" else species.leak_raman
        if not active and not (band.weak and leak):
            return None
        halves += not active
        halves += 2 * (band.polarised and not species.totally_symmetric)
    return halves


def weigh(choice, fundamentals, seen, spectra) -> tuple:
    halves = unexplained = symmetric = broken = 0
    seen_in = [set() for _ in fundamentals]
    for item, (role, places) in zip(seen.items, choice):
        if role == "unexplained":
            unexplained += 1
            halves += 1 if all(band.weak for band in item) else 2
        broken += role == "broken"
        parts = [item] if role == "whole" else [(band,) for band in item]
        for part, f in zip(parts, places):
            halves += cost(fundamentals[f], part)
            seen_in[f] |= {band.spectrum for band in part}
            symmetric += any(band.polarised for band in part) and fundamentals[f].totally_symmetric
    allowance = seen.by_chance
    halves += 0 if not broken else (1 if allowance else 0) + 2 * max(0, broken - allowance)
    due = [{name for name, active in (("IR", f.infrared), ("Raman", f.raman)) if active and name in spectra}
           for f in fundamentals]
    unseen = sum(bool(wanted - where) for wanted, where in zip(due, seen_in))
    return halves, unexplained, -symmetric, unseen


def random_case(seed: int) -> tuple[Prediction, Coincidences, tuple[str, ...]]:
    """Few species of any activity, few bands of any strength; chance allows none, one or two pairs."""
    draw = random.Random(seed)
    species, symmetric = [], draw.random() < 0.8
    for index in range(draw.randint(0, 4)):
        leak = [(SURROUNDINGS,) if draw.random() < 0.4 else () for _ in range(2)]
        first = symmetric and index == 0
        species.append(SpeciesBands(f"S{index}", draw.choice((0, 1, 1, 1, 2)), draw.random() < 0.5,
                                    first or draw.random() < 0.5, first, *leak))
    spectra = draw.choice((("IR", "Raman"), ("IR", "Raman"), ("IR",), ("Raman",)))

    def band(spectrum: str, place: float) -> Band:
        return Band((Line(place, spectrum, draw.choice(("s", "s", "w", "vw", "sh")),
                          polarised=spectrum == "Raman" and draw.random() < 0.4),))
    items = []
    for index in range(draw.randint(0, 4)):
        where = draw.choice(("IR", "Raman", "both")) if len(spectra) == 2 else spectra[0]
        names = ("IR", "Raman") if where == "both" else (where,)
        items.append(tuple(band(name, 500 + 10 * index) for name in names))
    return predicted(*species), Coincidences(tuple(items), 5.0, draw.choice((0.0, 0.05, 0.2, 1.0))), spectra


def judged(prediction: Prediction, seen: Coincidences, spectra) -> tuple:
    """Weigh what `explain` returned with the rules of this file, checking that it is an explanation at all."""
    answer = explain(prediction, seen, spectra)
    used, choice, broken = [], {}, {}
    fundamentals = [species for species in prediction.bands for _ in range(species.count)]
    for place in answer.places:
        f = next(f for f, species in enumerate(fundamentals) if f not in used and species == place.species)
        used.append(f)
        if place.broken:
            item = next(item for item in answer.broken if place.item[0] in item)
            broken.setdefault(id(item), []).append((place.item[0].spectrum, f))
        else:
            choice[id(place.item)] = ("whole", (f,))
    for key, halves in broken.items():
        choice[key] = ("broken", tuple(f for _, f in sorted(halves)))   # "IR" sorts before "Raman"
    for item in answer.unexplained:
        choice[id(item)] = ("unexplained", ())
    score = weigh([choice[id(item)] for item in seen.items], fundamentals, seen, spectra)
    assert score[0] == answer.halves
    return score


@pytest.mark.parametrize("block", range(12))
def test_least_of_all_explanations(block):
    for seed in range(block * 250, (block + 1) * 250):
        prediction, seen, spectra = random_case(seed)
        assert judged(prediction, seen, spectra) == search(prediction, seen, spectra), seed


def bands(text: str) -> Coincidences:
    """Return the items of a list such as `IR 2000 s, Raman 1900 w p, pair 1800 s s`."""
    items = []
    for row in text.split(", "):
        kind, place, *rest = row.split()
        names = ("IR", "Raman") if kind == "pair" else (kind,)
        items.append(tuple(Band((Line(float(place), name, rest[index], polarised=name == "Raman" and "p" in rest),))
                           for index, name in enumerate(names)))
    return Coincidences(tuple(items), 5.0, 0.05)


def told(prediction: Prediction, text: str) -> tuple:
    answer = explain(prediction, bands(text))
    return (answer.total, sorted((place.species.label, " = ".join(map(str, place.item))) for place in answer.places),
            [" = ".join(map(str, item)) for item in answer.unexplained])


A1 = SpeciesBands("A1", 1, True, True, True)
E = SpeciesBands("E", 1, True, True, False)
IR_ONLY, RAMAN_ONLY = SpeciesBands("Au", 1, True, False, False), SpeciesBands("Bg", 1, False, True, False)


def test_a_polarised_line_takes_the_totally_symmetric_fundamental_whatever_the_order():
    for text in ("Raman 900 s, Raman 800 s p", "Raman 800 s p, Raman 900 s"):
        assert told(predicted(E, A1), text) == (0, [("A1", "800"), ("E", "900")], [])


def test_of_equal_totals_the_one_with_fewest_unexplained():
    # breaking the pair (1/2, then 1) against leaving it unexplained (1): with no room for chance both weigh 1
    seen = bands("pair 900 s s")
    by_hand = explain(predicted(IR_ONLY, RAMAN_ONLY), Coincidences(seen.items, 5.0, 0.0))
    assert by_hand.total == 1 and by_hand.broken == seen.items and not by_hand.unexplained
    assert told(predicted(IR_ONLY, RAMAN_ONLY), "pair 900 s s")[0] == 0.5


def test_of_equal_lines_the_first_is_explained():
    assert told(predicted(A1), "IR 900 s, IR 800 s") == (1, [("A1", "900")], ["800"])
    assert told(predicted(A1), "IR 800 s, Raman 900 s") == (1, [("A1", "800")], ["900"])
    assert told(predicted(A1), "Raman 900 s, IR 800 s") == (1, [("A1", "900")], ["800"])
    assert told(predicted(A1), "IR 800 w, IR 900 s") == (0.5, [("A1", "900")], ["800"])      # weight comes first


def test_one_fundamental_takes_two_lines_only_as_a_pair():
    assert told(predicted(A1), "pair 900 s s") == (0, [("A1", "900 = 900")], [])
    assert told(predicted(A1), "IR 900 s, Raman 800 s")[0] == 1


def test_a_leak_needs_a_weak_line_and_a_permission():
    leaky = SpeciesBands("B1", 1, False, True, False, (SURROUNDINGS,), ())
    assert told(predicted(leaky), "IR 900 vw") == (0.5, [("B1", "900")], [])
    assert told(predicted(leaky), "IR 900 s") == (1, [], ["900"])
    assert told(predicted(leaky), "pair 900 w s") == (0.5, [("B1", "900 = 900")], [])
    assert told(predicted(RAMAN_ONLY), "pair 900 w s") == (1, [], ["900 = 900"])


def test_nothing_to_explain_and_nothing_to_explain_with():
    assert told(predicted(), "IR 900 s") == (1, [], ["900"])
    assert explain(predicted(A1), Coincidences((), 5.0, 0.0)).total == 0
