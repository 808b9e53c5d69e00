"""Which findings come first, and which are left out because another says as much; what changes are offered."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from meetings import meeting, meetings
from telling import after, all_told, kinds, sketch, talk

from deliberate.rehearsal.results import Finding, Introduce, JointRound, KeepOwnView
from deliberate.scenario.values import Arrow, Ballot, BallotTest, Person, Plan, Question, Scenario, Stage, Variant

LEVY = Question("q", "Raise the levy?", 0, 100, pass_mark=50)
EVEN = [[1] * 4] * 4
CIRCLES = [[1, 1, 0, 0], [1, 1, 0, 0], [0, 0, 1, 1], [0, 0, 1, 1]]


def test_a_healthy_meeting_has_one_finding() -> None:
    assert kinds(meeting(EVEN, [80, 60, 40, 20])) == ["settles"]


def test_what_stops_the_meeting_comes_first_and_the_vote_after_it() -> None:
    people = {"d": {"present": False}}
    rule = Ballot(quorum="1/1", tests=(BallotTest("for", more_than="1/2"),))
    scenario = meeting(CIRCLES, [80, 70, 20, None], question=LEVY, ballot=rule, people=people)
    found = kinds(scenario)
    assert found[0] == "quorum"
    assert found[-1] == "absent"
    assert found.index("quorum") < found.index("vote")


def test_a_close_vote_comes_right_behind_the_top() -> None:
    close = meeting([[90, 5, 5], [45, 10, 45], [45, 45, 10]], [53, 40, 45], question=LEVY, plan=talk(1))
    found = kinds(close)
    assert found[0] == "carries"
    assert found[1:3] == ["vote", "knife-edge"]
    clear = kinds(meeting([[90, 5, 5], [45, 10, 45], [45, 45, 10]], [90, 40, 45], question=LEVY, plan=talk(9)))
    assert "knife-edge" not in clear
    assert clear.index("settles") < clear.index("vote")


def test_nobody_and_nobody_present() -> None:
    assert kinds(meeting([], [])) == []
    absent = {one: {"present": False} for one in "ab"}
    assert kinds(meeting([[1, 1], [1, 1]], [20, 80], people=absent)) == ["absent"]
    assert kinds(meeting([[1, 1], [1, 1]], [20, 80], question=LEVY, people=absent)) == ["quorum", "absent"]


def test_one_person_alone() -> None:
    assert kinds(meeting([[1]], [20])) == []
    assert set(kinds(meeting([[1]], [20], question=LEVY))) == {"vote"}


# What is offered does what its finding asks for


def is_mended(scenario: Scenario, finding: Finding) -> bool:
    before, then = sketch(scenario), after(scenario, finding)
    change = finding.suggestion
    source = then.assembly.place[change.source] if isinstance(change, Introduce) else None
    listener = then.assembly.place[change.listener] if isinstance(change, Introduce) else None
    match finding.kind, change:
        case "closed-groups", Introduce():
            return len(then.closed) < len(before.closed)
        case (("closed-groups" | "lasting-gap"), _):
            return then.spread(then.long_run) < before.spread(before.long_run)
        case "swing", KeepOwnView():
            return then.rehearsal.settles
        case (("outside" | "unheard"), Introduce()):
            return bool(
                then.influence[source] > before.influence[source] or then.heard[source] > before.heard[source]
            )
        case "hears-nobody", Introduce():
            return not then.apart[listener]
        case "fixed-view", Introduce():
            return bool(then.hears[listener])
        case "bridge", Introduce():
            return then.rehearsal.rounds_to_halve < before.rehearsal.rounds_to_halve
        case "unfinished", JointRound():
            return then.spread(then.ends) < before.spread(before.ends)
    raise AssertionError(f"no finding of the kind {finding.kind} offers {change}")


@settings(max_examples=150)
@given(meetings(7))
def test_every_change_is_offered_once_and_helps(scenario: Scenario) -> None:
    offering = [finding for finding in all_told(scenario) if finding.suggestion is not None]
    assert len({finding.suggestion for finding in offering}) == len(offering)
    assert all(is_mended(scenario, finding) for finding in offering)


@pytest.mark.parametrize(("people", "offered"), [(40, True), (41, False)])
def test_a_joint_round_has_room_for_forty(people: int, offered: bool) -> None:
    ids = [f"p{at}" for at in range(people)]
    scenario = meeting_of_two_tables(ids)
    changes = [finding.suggestion for finding in all_told(scenario)]
    assert (JointRound(1) in changes) == offered


def meeting_of_two_tables(ids: list[str]) -> Scenario:
    """Everybody hears everybody, at two tables for ever."""
    half = len(ids) // 2
    people = tuple(Person(one, beliefs={"q": 20.0 if at < half else 80.0}) for at, one in enumerate(ids))
    arrows = tuple(Arrow(a, b, 1.0) for a in ids for b in ids if a != b)
    stage = Stage("Tables", 2, "tables", tables=(tuple(ids[:half]), tuple(ids[half:])))
    question = Question("q", "What is asked?", 0, 100)
    return Scenario("A test", (question,), (Variant("As it stands", people, arrows=arrows, plan=Plan((stage,))),))


def test_no_introduction_where_a_hearing_range_decides() -> None:
    question = Question("q", "What is asked?", 0, 100, hearing_range=10)
    changes = [finding.suggestion for finding in all_told(meeting(CIRCLES, [80, 70, 20, 10], question=question))]
    assert not any(isinstance(change, Introduce) for change in changes)


def test_no_introduction_that_the_last_stage_would_not_let_through() -> None:
    plan = Plan((Stage("Tables", 2, "tables", tables=(("a", "b"), ("c", "d"))),))
    changes = [finding.suggestion for finding in all_told(meeting(CIRCLES, [80, 70, 20, 10], plan=plan))]
    assert not any(isinstance(change, Introduce) for change in changes)
