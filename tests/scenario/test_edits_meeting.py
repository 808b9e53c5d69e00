"""Edits on the meeting as a whole, its variants, its polls; copy and paste."""

from __future__ import annotations

import math

import pytest
from harbour import ARROWS, AS_IT_STANDS, HARBOUR, INES, MIXED

from deliberate.errors import DeliberateError
from deliberate.scenario import edits, rules
from deliberate.scenario.access import variant_named
from deliberate.scenario.values import Arrow, Ballot, BallotTest, Person, Poll, Question, Scenario, Variant


def names(scenario: Scenario) -> list[str]:
    return [variant.name for variant in scenario.variants]


# Title, notes, ballot rule


def test_title_and_notes() -> None:
    assert edits.set_title(HARBOUR, " Harbour\tdues ").title == "Harbour dues"
    assert edits.set_notes(HARBOUR, "one\ntwo").notes == "one\ntwo"
    assert edits.set_title(HARBOUR, "Harbour levy") is HARBOUR
    with pytest.raises(DeliberateError, match="needs a title"):
        edits.set_title(HARBOUR, "  ")
    with pytest.raises(DeliberateError, match="notes"):
        edits.set_notes(HARBOUR, "bell \x07")


def test_a_ready_rule_leaves_quorum_and_casting_vote_alone() -> None:
    strict = edits.change_ballot(HARBOUR, quorum="2/3")
    after = edits.use_rule(strict, rules.UNANIMITY.ballot)
    assert after.ballot == Ballot(
        name="Unanimity", quorum="2/3", casting_vote="ines", tests=rules.UNANIMITY.ballot.tests
    )
    assert edits.set_ballot(strict, Ballot()).ballot == Ballot()


def test_casting_vote() -> None:
    assert edits.set_casting_vote(HARBOUR, "wei").ballot.casting_vote == "wei"
    assert edits.set_casting_vote(HARBOUR, None).ballot.casting_vote is None
    with pytest.raises(DeliberateError, match='nobody with the id "jun"'):
        edits.set_casting_vote(HARBOUR, "jun")


@pytest.mark.parametrize(
    "ballot",
    [
        Ballot(quorum="3/2"),
        Ballot(quorum=1.5),
        Ballot(name=""),
        Ballot(casting_vote="jun"),
        Ballot(tests=(BallotTest(side="for"),)),
        Ballot(tests=(BallotTest(side="for", at_least=0.5, at_most=0.75),)),
    ],
)
def test_ballot_rules_that_cannot_be(ballot) -> None:
    with pytest.raises(DeliberateError, match="ballot"):
        edits.set_ballot(HARBOUR, ballot)


# Variants


def test_a_copy_stands_behind_the_original_under_a_fresh_name() -> None:
    once = edits.add_variant(HARBOUR, copy_of=AS_IT_STANDS)
    twice = edits.add_variant(once, copy_of=AS_IT_STANDS)
    assert names(twice) == [AS_IT_STANDS, f"{AS_IT_STANDS} (3)", f"{AS_IT_STANDS} (2)", MIXED]
    assert twice.variants[1].people is HARBOUR.variants[0].people
    assert twice.variants[1].arrows is HARBOUR.variants[0].arrows
    assert names(edits.add_variant(HARBOUR, copy_of=MIXED, name="With an\nintroduction"))[2] == "With an introduction"
    assert edits.fresh_variant_name(HARBOUR, " ") == "Variant"
    assert len(edits.fresh_variant_name(HARBOUR, "x" * 300)) <= 200


def test_variants_are_renamed_moved_and_removed() -> None:
    assert names(edits.rename_variant(HARBOUR, MIXED, "Tables ")) == [AS_IT_STANDS, "Tables"]
    assert edits.rename_variant(HARBOUR, MIXED, MIXED) is HARBOUR
    assert names(edits.move_variant(HARBOUR, MIXED, 0)) == [MIXED, AS_IT_STANDS]
    assert edits.set_variant_notes(HARBOUR, MIXED, "a\nb").variants[1].notes == "a\nb"
    left = edits.remove_variant(HARBOUR, AS_IT_STANDS)
    assert names(left) == [MIXED]
    assert [dict(poll.beliefs) for poll in left.polls] == [{"ines": 0.6}]  # Wei was in the other one only
    for edit, said in (
        (lambda: edits.rename_variant(HARBOUR, MIXED, AS_IT_STANDS), "called .As it stands. already"),
        (lambda: edits.rename_variant(HARBOUR, MIXED, " "), "needs a name"),
        (lambda: edits.remove_variant(left, MIXED), "at least one variant"),
        (lambda: edits.remove_variant(HARBOUR, "Other"), "no variant called .Other."),
    ):
        with pytest.raises(DeliberateError, match=said):
            edit()


def test_a_whole_variant_can_be_replaced() -> None:
    new = Variant(name="From a sheet", people=(INES, Person(id="jun")), arrows=(Arrow("jun", "ines", 1.0),))
    after = edits.replace_variant(HARBOUR, AS_IT_STANDS, new)
    assert after.variants == (new, HARBOUR.variants[1])
    assert [dict(poll.beliefs) for poll in after.polls] == [{"ines": 0.6}]
    for arrows in (ARROWS, (Arrow("jun", "ines", 1.0),) * 2, (Arrow("jun", "jun", 1.0),)):
        with pytest.raises(DeliberateError, match="arrows"):
            edits.replace_variant(HARBOUR, AS_IT_STANDS, Variant(name="n", people=new.people, arrows=arrows))


# Polls


def test_a_poll_is_recorded_in_the_order_of_rounds_and_once_per_round() -> None:
    after = edits.record_poll(HARBOUR, "days", 3, {"ines": 4})
    assert [(poll.question, poll.after_round) for poll in after.polls] == [("levy", 2), ("days", 3), ("days", 4)]
    again = edits.record_poll(after, "days", 3, {"tomas": 9})
    assert again.polls == (HARBOUR.polls[0], Poll("days", 3, {"tomas": 9.0}), HARBOUR.polls[1])


def test_polls_change_answer_by_answer_and_go() -> None:
    assert edits.set_poll_belief(HARBOUR, 0, "wei", None).polls[0].beliefs == {"ines": 0.6}
    assert edits.set_poll_belief(HARBOUR, 0, "tomas", 1).polls[0].beliefs == {"ines": 0.6, "wei": 0.4, "tomas": 1.0}
    assert edits.set_poll_round(HARBOUR, 1, 7).polls[1].after_round == 7
    assert edits.remove_poll(HARBOUR, 0).polls == HARBOUR.polls[1:]
    assert edits.set_poll_belief(HARBOUR, 1, "ines", None) is HARBOUR
    for edit, said in (
        (lambda: edits.remove_poll(HARBOUR, 2), "no poll 3: there are 2"),
        (lambda: edits.set_poll_belief(HARBOUR, 0, "jun", 1), 'nobody with the id "jun"'),
        (lambda: edits.set_poll_belief(HARBOUR, 0, "ines", 2), "must lie between 0 and 1, is 2"),
        (lambda: edits.record_poll(HARBOUR, "levy", -1, {}), "after_round"),
        (lambda: edits.record_poll(HARBOUR, "tax", 1, {}), 'no question with the id "tax"'),
        (lambda: edits.record_poll(HARBOUR, "levy", 1, {"ines": math.nan}), "finite"),
    ):
        with pytest.raises(DeliberateError, match=said):
            edit()


# Copy and paste


def test_a_clip_holds_people_and_the_arrows_among_them() -> None:
    clip = edits.extract(HARBOUR.variants[0], ["wei", "noor", "tomas"])
    assert [person.id for person in clip.people] == ["tomas", "noor", "wei"]
    assert clip.arrows == ARROWS[3:]
    with pytest.raises(DeliberateError, match='nobody with the id "jun"'):
        edits.extract(HARBOUR.variants[0], ["jun"])


def test_pasted_people_are_new_and_stand_a_little_aside() -> None:
    clip = edits.extract(HARBOUR.variants[0], ["ines", "tomas", "wei"])
    after = variant_named(edits.paste(HARBOUR, clip, (24, 10), variant=MIXED), MIXED)
    assert after.people[:3] == HARBOUR.variants[1].people
    assert [person.id for person in after.people[3:]] == ["ines-2", "tomas-2", "wei-2"]
    assert [(person.x, person.y) for person in after.people[3:]] == [(24, 10), (124, 10), (None, None)]
    assert [person.name for person in after.people[3:5]] == ["Ines", "Tomás"]
    assert after.people[5].shown_name == "wei-2"
    assert after.people[4].beliefs == {"levy": 0.2, "days": 3.0}
    assert after.arrows[2:] == (
        Arrow("ines-2", "tomas-2", 20.0, "stated"),
        Arrow("tomas-2", "ines-2", 30.0, "observed"),
        Arrow("tomas-2", "wei-2", 10.0),
    )


def test_in_another_meeting_only_beliefs_that_it_asks_for_are_kept() -> None:
    other = Scenario(
        title="Elsewhere",
        questions=(
            Question(id="days", text="Days?", low=0.0, high=5.0),
            Question(id="x", text="X", low=0.0, high=1.0),
        ),
        variants=(Variant(name="Only", people=()),),
    )
    after = edits.paste(other, edits.extract(HARBOUR.variants[0], ["tomas", "noor"]), variant="Only")
    tomas, noor = after.variants[0].people
    assert (tomas.id, tomas.beliefs, tomas.margins) == ("tomas", {"days": 3.0}, {"days": 1.0})
    assert noor.beliefs == {}  # started at 9, off this scale


def test_pasting_nothing_changes_nothing() -> None:
    assert edits.paste(HARBOUR, edits.Clip(people=()), variant=MIXED) is HARBOUR
    loose = edits.Clip(people=(INES,), arrows=ARROWS)  # a clip from outside may name people it does not hold
    assert edits.paste(HARBOUR, loose, variant=MIXED).variants[1].arrows == HARBOUR.variants[1].arrows
