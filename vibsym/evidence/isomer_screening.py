"""Which isomer of a composition is in the flask: each one screened against the observed bands of its oscillators."""

from dataclasses import dataclass

from vibsym.evidence.bandlist import BandList
from vibsym.evidence.screening import Candidate, Screening, ScreenOptions, screen_predictions
from vibsym.spectra.isomer_bands import IsomerBands, IsomerList


@dataclass(frozen=True, eq=False)
class IsomerScreening:
    """All isomers of a composition with their evidence; `limit` says how many are listed, the best first."""

    listing: IsomerList
    screening: Screening
    pairs: tuple[tuple[IsomerBands, Candidate], ...]    # by rank
    limit: int | None = None

    @property
    def listed(self) -> tuple[tuple[IsomerBands, Candidate], ...]:
        """The isomers that are listed, by rank."""
        return self.pairs[:self.limit]

    def to_dict(self) -> dict:
        """Return the JSON object of `vibsym isomers --bands`; `mixtures` only if they were asked for."""
        answer = self.listing.to_dict()
        answer["isomers"] = [entry.to_dict() | candidate.evidence() for entry, candidate in self.listed]
        mixtures = [each for each in self.screening.candidates if each.prediction.parts]
        if mixtures:
            answer["mixtures"] = [{"isomers": [part.name for part in each.prediction.parts]} | each.to_dict()
                                  for each in mixtures[:self.limit]]
        return answer | {"bands": self.screening.bands_object(), "separating": list(self.screening.separating),
                         "limits": list(self.screening.limits), "caution": self.screening.caution}


def screen_isomers(listing: IsomerList, observed: BandList, options: ScreenOptions | None = None,
                   limit: int | None = None, progress=None) -> IsomerScreening:
    """Return every isomer of a list made without a limit, ranked by how well it explains the bands."""
    predictions = [entry.prediction() for entry in listing.entries]
    screening = screen_predictions(predictions, observed, options, progress)
    entry_of = {id(prediction): entry for prediction, entry in zip(predictions, listing.entries)}
    pairs = tuple((entry_of[id(each.prediction)], each) for each in screening.candidates if not each.prediction.parts)
    return IsomerScreening(listing, screening, pairs, limit)
