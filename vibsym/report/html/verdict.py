"""The screening at a glance: one card a structure, its verdict as sign, word and proofs."""

from html import escape

from vibsym.evidence.screening import EXCLUDED, FITS, STRAINED
from vibsym.groups.symbols import typeset
from vibsym.report.labels import set_group, set_labels
from vibsym.report.screening import lines_text
from vibsym.report.wording import count_text

MOST = 12
# Signs that differ in shape, not only in colour: a closed ring, a ring half closed, a ring struck out.
_RING = '<circle cx="20" cy="20" r="15" style="fill:none" stroke="currentColor" stroke-width="3"{dash}/>'
_SIGNS = {FITS: _RING.format(dash="") + '<path d="M12 21l6 6 11-13" style="fill:none" stroke="currentColor" '
                                        'stroke-width="3.4"/>',
          STRAINED: _RING.format(dash=' stroke-dasharray="7 4"')
          + '<path d="M11 22c3-6 6-6 9-2s6 4 9-2" style="fill:none" stroke="currentColor" stroke-width="3"/>',
          EXCLUDED: _RING.format(dash="") + '<path d="M10 30L30 10" style="fill:none" stroke="currentColor" '
                                            'stroke-width="3.4"/>'}
_WORDS = {FITS: "fits", STRAINED: "strained", EXCLUDED: "excluded"}


def verdicts(screening) -> str:
    """Return the candidates in the order of their rank."""
    cards = "".join(_card(each) for each in screening.candidates[:MOST])
    more = len(screening.candidates) - MOST
    told = f"<p>{more} more stand in the table.</p>" if more > 0 else ""
    return f'<ul class="verdicts">{cards}</ul>{told}'


def _card(candidate) -> str:
    prediction = candidate.prediction
    groups = " + ".join(set_group(typeset(part.group)) for part in (prediction.parts or (prediction,)))
    head = f"{escape(prediction.name)}, {groups}: {_WORDS[candidate.verdict]}"
    region = f"{prediction.region}: " if prediction.region else ""
    counts = prediction.counts
    predicted = (f"{region}predicted infrared {counts['infrared']}, Raman {counts['raman']}, both "
                 f"{counts['coincident']}, polarised {counts['polarised']}")
    score = (f"score {candidate.score:.2f}, excuses {candidate.weight:g}, "
             f"{count_text(len(candidate.unseen), 'band')} not seen")
    items = "".join(f"<li>{set_labels(text)}</li>" for text in _excuses(candidate) or ["nothing has to be excused"])
    return (f'<li class="verdict" data-verdict="{candidate.verdict}"><svg viewBox="0 0 40 40" aria-hidden="true">'
            f'{_SIGNS[candidate.verdict]}</svg><div><h3>{head}</h3><p class="key">{escape(predicted)}; '
            f"{escape(score)}</p><ul>{items}</ul></div></li>")


def _excuses(candidate) -> list[str]:
    told: dict[tuple[str, str], list] = {}
    for excuse in candidate.excuses:
        told.setdefault((excuse.kind, excuse.reason), []).append(excuse)
    return [f"{kind} {sum(each.weight for each in same):g}: {', '.join(map(lines_text, same))}: {reason}"
            for (kind, reason), same in told.items()]
