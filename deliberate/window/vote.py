"""The vote after a round in one sentence, wherever the window says it."""

from __future__ import annotations

from deliberate.rehearsal.results import Rehearsal
from deliberate.rehearsal.words import ballot
from deliberate.window.doubting import Doubting

CAUTION = "A sketch, not a forecast of people"


def vote_in_words(rehearsal: Rehearsal | None, round_: int, doubting: Doubting) -> str:
    """What the vote would be after `round_` by the sketch, with the odds where they were drawn; empty where nothing
    is voted on."""
    if rehearsal is None or rehearsal.ballot is None:
        return ""
    at = min(round_, len(rehearsal.ballot) - 1)
    tally = rehearsal.ballot[at]
    drawn = doubting.outcome_in_words(at, tally.passes)
    odds = f", as in {drawn}" if drawn else ""
    return f"Round {at}, by the sketch: {ballot(tally)}{odds}"
