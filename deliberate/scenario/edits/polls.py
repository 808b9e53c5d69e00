"""Edits on straw polls taken during the meeting. Polls are counted from 0."""

from __future__ import annotations

from collections.abc import Mapping

from deliberate.errors import DeliberateError
from deliberate.scenario.access import people_anywhere, question_with_id
from deliberate.scenario.edits._common import as_number, changed, checked, inserted, replaced
from deliberate.scenario.values import FrozenDict, Poll, Scenario


def record_poll(scenario: Scenario, question: str, after_round: int, beliefs: Mapping[str, float]) -> Scenario:
    """Note what people held on `question` after a round, by person id, in place of an earlier note of the same.

    A new poll stands before those of later rounds.
    """
    poll = _checked_poll(scenario, Poll(question=question, after_round=after_round, beliefs=FrozenDict(beliefs)))
    for index, known in enumerate(scenario.polls):
        if (known.question, known.after_round) == (question, after_round):
            return checked(scenario, polls=replaced(scenario.polls, index, changed(known, beliefs=poll.beliefs)))
    later = (index for index, known in enumerate(scenario.polls) if known.after_round > after_round)
    return checked(scenario, polls=inserted(scenario.polls, next(later, None), poll))


def set_poll_belief(scenario: Scenario, index: int, person_id: str, belief: float | None) -> Scenario:
    """Set what one person held in the poll at `index`; None means that it was not noted."""
    poll = _poll_at(scenario, index)
    beliefs = {one: held for one, held in poll.beliefs.items() if one != person_id}
    if belief is not None:
        beliefs = {**poll.beliefs, person_id: belief}
    after = _checked_poll(scenario, changed(poll, beliefs=FrozenDict(beliefs)))
    return checked(scenario, polls=replaced(scenario.polls, index, after))


def set_poll_round(scenario: Scenario, index: int, after_round: int) -> Scenario:
    """Say after which round the poll at `index` was taken."""
    after = changed(_poll_at(scenario, index), after_round=after_round)
    return checked(scenario, polls=replaced(scenario.polls, index, after))


def remove_poll(scenario: Scenario, index: int) -> Scenario:
    """Drop the poll at `index`."""
    _poll_at(scenario, index)
    return checked(scenario, polls=(*scenario.polls[:index], *scenario.polls[index + 1 :]))


def _poll_at(scenario: Scenario, index: int) -> Poll:
    if not 0 <= index < len(scenario.polls):
        raise DeliberateError(f"there is no poll {index + 1}: there are {len(scenario.polls)}")
    return scenario.polls[index]


def _checked_poll(scenario: Scenario, poll: Poll) -> Poll:
    """The poll with beliefs as floats. Raises DeliberateError for strangers and beliefs off the scale."""
    question = question_with_id(scenario, poll.question)
    for stranger in sorted(poll.beliefs.keys() - people_anywhere(scenario)):
        raise DeliberateError(f'there is nobody with the id "{stranger}"')
    beliefs = {
        one: as_number(belief, "a belief in a poll", question.low, question.high)
        for one, belief in poll.beliefs.items()
    }
    return changed(poll, beliefs=FrozenDict(beliefs))
