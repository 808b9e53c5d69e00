"""Edits on the meeting as a whole: title, notes, and the body's ballot rule."""

from __future__ import annotations

from typing import Any

from deliberate.errors import DeliberateError
from deliberate.scenario.access import people_anywhere
from deliberate.scenario.edits._common import as_line, changed, checked
from deliberate.scenario.values import Ballot, Scenario


def set_title(scenario: Scenario, title: str) -> Scenario:
    """Call the meeting `title`."""
    line = as_line(title)
    if not line:
        raise DeliberateError("a meeting needs a title")
    return checked(scenario, title=line)


def set_notes(scenario: Scenario, notes: str) -> Scenario:
    """Replace the notes on the meeting."""
    return checked(scenario, notes=notes)


def set_ballot(scenario: Scenario, ballot: Ballot) -> Scenario:
    """Replace the whole ballot rule, quorum and casting vote included."""
    return checked(scenario, ballot=ballot)


def change_ballot(scenario: Scenario, **fields: Any) -> Scenario:
    """Change fields of the ballot rule by name: name, quorum, casting_vote, tests."""
    if "name" in fields:
        fields["name"] = as_line(fields["name"])
    return checked(scenario, ballot=changed(scenario.ballot, **fields))


def use_rule(scenario: Scenario, rule: Ballot) -> Scenario:
    """Vote by the name and the tests of `rule`; the body's quorum and casting vote stay."""
    return change_ballot(scenario, name=rule.name, tests=rule.tests)


def set_casting_vote(scenario: Scenario, person_id: str | None) -> Scenario:
    """Let this person's own vote decide a tie, or nobody's."""
    if person_id is not None and person_id not in people_anywhere(scenario):
        raise DeliberateError(f'there is nobody with the id "{person_id}"')
    return change_ballot(scenario, casting_vote=person_id)
