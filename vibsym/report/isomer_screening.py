"""The page, the rows and the object of isomers screened against observed bands (`vibsym isomers --bands`)."""

from vibsym.evidence.isomer_screening import IsomerScreening
from vibsym.report import isomers, screening


def parts(result: IsomerScreening, **options) -> list:
    """Return the page: the verdict and its proofs, then the isomers."""
    *page, caution = screening.parts(result.screening, most=result.limit)[1:]
    if len(result.listed) < len(result.pairs):
        title, count = isomers.opening(result.listing)
        return [title, count, *page, caution]
    title, count, *rest = isomers.parts(result.listing, **options)
    return [title, count, *page, *rest, caution]


def rows(result: IsomerScreening, **options) -> list[dict]:
    """Return the row of each listed isomer with its rank, score and verdict."""
    plain = dict(zip(map(id, result.listing.entries), isomers.rows(result.listing, **options)))
    return [plain[id(entry)] | {"rank": each.rank, "score": each.score, "verdict": each.verdict, "excuses": each.weight,
                                "unseen": len(each.unseen)} for entry, each in result.listed]


def as_object(result: IsomerScreening, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()
