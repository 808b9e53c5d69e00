import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from meetings import meeting, meetings
from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario.edits import remove_people
from deliberate.scenario.values import Plan, Question, Stage

UNIT = Question("q", "t", 0, 1)


def by_id(rehearsal, values):
    return dict(zip(rehearsal.people, values, strict=True))


def test_degroot():
    """DeGroot 1974, JASA 69:118-121 (from memory): influence (1/3, 2/3), second eigenvalue 1/4, spread 4^-t."""
    rehearsal = rehearse(meeting([[1, 1], [1, 3]], [0, 1], question=UNIT))
    assert rehearsal.influence == pytest.approx([1 / 3, 2 / 3], rel=1e-12)
    assert rehearsal.limit == pytest.approx([2 / 3, 2 / 3], rel=1e-12)
    assert rehearsal.rate == pytest.approx(1 / 4, rel=1e-9)
    assert rehearsal.rounds_to_halve == pytest.approx(1 / 2, rel=1e-9)
    assert rehearsal.spread == pytest.approx([4.0**-t for t in range(13)], rel=1e-9)
    assert rehearsal.rounds_to_agree == 4
    assert rehearsal.effective_voices == pytest.approx(9 / 5)
    assert rehearsal.consensus
    assert rehearsal.consensus_from_any_start


def test_degroot_with_somebody_outside_and_with_two_groups():
    """DeGroot 1974 (from memory): the third of three is outside; two blocks of halves share no common view."""
    rehearsal = rehearse(meeting([[1, 1, 0], [1, 3, 0], [1, 1, 1]], [0, 50, 100]))
    assert rehearsal.outside == ("c",)
    assert rehearsal.influence == pytest.approx([1 / 3, 2 / 3, 0], rel=1e-12)
    blocks = rehearse(meeting([[1, 1, 0, 0], [1, 1, 0, 0], [0, 0, 1, 1], [0, 0, 1, 1]], [0, 10, 80, 90]))
    assert [group.people for group in blocks.closed_groups] == [("a", "b"), ("c", "d")]
    assert blocks.settles
    assert not blocks.consensus
    assert not blocks.consensus_from_any_start
    assert blocks.rounds_to_agree is None
    assert blocks.limit == pytest.approx([5, 5, 85, 85])


def test_friedkin_and_johnsen():
    """Friedkin and Johnsen 1999, Advances in Group Processes 16:1-29: prints as (60, 60, 75, 75)."""
    w = [[0.220, 0.120, 0.360, 0.300], [0.147, 0.215, 0.344, 0.294], [0, 0, 1, 0], [0.090, 0.178, 0.446, 0.286]]
    people = {one: {"firmness": w[i][i]} for i, one in enumerate("abcd")}
    rehearsal = rehearse(meeting(w, [25, 25, 75, 85], people=people))
    assert np.round(rehearsal.limit).tolist() == [60, 60, 75, 75]
    assert rehearsal.limit == pytest.approx([60.0208, 59.9840, 75, 74.9862], abs=5e-5)
    assert all(group.anchored and group.influence == {group.people[0]: 1} for group in rehearsal.closed_groups)
    assert rehearsal.outside == ()
    # Mean over listeners of the printed total effects, each within 0.0015.
    effects = np.array(
        [[0.280, 0.045, 0.551, 0.124], [0.047, 0.278, 0.549, 0.126], [0, 0, 1, 0], [0.030, 0.048, 0.532, 0.390]]
    )
    assert rehearsal.influence == pytest.approx(effects.mean(axis=0), abs=0.0015)


def test_two_who_answer_only_each_other_swing_for_ever():
    rehearsal = rehearse(meeting([[0, 1], [1, 0]], [80, 20]))
    assert not rehearsal.settles
    assert not rehearsal.settles_from_any_start
    assert rehearsal.limit is None
    assert rehearsal.cycle.period == 2
    assert rehearsal.cycle.beliefs.tolist() == [[80, 20], [20, 80]]
    assert rehearsal.long_run_average.tolist() == [50, 50]
    assert rehearsal.rate is None
    assert rehearsal.rounds_to_halve is None
    assert rehearsal.ballot_at_limit is None
    assert rehearsal.agreement_at_limit is None
    alike = rehearse(meeting([[0, 1], [1, 0]], [50, 50]))
    assert alike.settles
    assert not alike.settles_from_any_start
    assert alike.cycle is None


def test_the_ballot_is_taken_at_every_round_and_at_the_limit():
    question = Question("q", "t", 0, 100, pass_mark=50)
    rehearsal = rehearse(meeting([[88, 12, 0], [50, 45, 5], [50, 5, 45]], [80, 40, 30], question=question))
    assert [tally.passes for tally in rehearsal.ballot[:2]] == [False, True]
    assert rehearsal.ballot[0].in_favour == 1
    assert rehearsal.ballot_at_limit.in_favour == 3
    assert rehearse(meeting([[1]], [1])).ballot is None


def test_rounds_and_tolerance_as_asked():
    scenario = meeting([[1, 1], [1, 3]], [0, 1], question=UNIT, plan=Plan((Stage(rounds=2), Stage(rounds=3))))
    assert len(rehearse(scenario).rounds) == 6
    assert len(rehearse(scenario, rounds=0).rounds) == 1
    assert len(rehearse(scenario, rounds=9).rounds) == 10
    assert rehearse(scenario).tolerance == 0.01
    assert rehearse(scenario, tolerance=0.25).rounds_to_agree == 1
    assert rehearse(scenario, tolerance=1).rounds_to_agree == 0


def test_the_first_variant_and_question_are_the_default():
    scenario = meeting([[1, 1], [1, 3]], [0, 1], question=UNIT)
    scenario = replace(
        scenario,
        questions=(UNIT, Question("r", "t", 0, 10)),
        variants=(scenario.variants[0], replace(scenario.variants[0], name="other", arrows=())),
    )
    assert (rehearse(scenario).variant, rehearse(scenario).question) == ("As it stands", "q")
    assert len(rehearse(scenario, "other").closed_groups) == 2
    second = rehearse(scenario, question="r")
    assert second.unknown_starts == ("a", "b")
    assert second.rounds[0].tolist() == [5, 5]


@pytest.mark.parametrize(
    ("asked", "where", "what"),
    [
        ({"variant": "Nowhere"}, "variant", 'there is no "Nowhere"; the only variant is "As it stands"'),
        ({"question": "x"}, "question", 'there is no "x"; the only question is "q"'),
        ({"rounds": -1}, "rounds", "must be 0 or more, is -1"),
        (
            {"rounds": 10**9},
            "rounds",
            "1,000,000,000 with 1 person are more than 50,000,000 beliefs; ask for fewer rounds",
        ),
        ({"tolerance": 0}, "tolerance", "must be a number above 0, is 0"),
        ({"tolerance": math.nan}, "tolerance", "must be a number above 0, is nan"),
        ({"tolerance": math.inf}, "tolerance", "must be a number above 0, is inf"),
    ],
)
def test_what_cannot_be_asked(asked, where, what):
    with pytest.raises(DeliberateError) as caught:
        rehearse(meeting([[1]], [1]), **asked)
    assert (caught.value.where, caught.value.what) == (where, what)


def test_nobody_and_somebody_alone():
    empty = rehearse(meeting([], []))
    assert empty.rounds.shape == (13, 0)
    assert empty.spread.tolist() == [0] * 13
    assert empty.effective_voices == 0
    alone = rehearse(meeting([[0]], [7]))
    assert alone.consensus
    assert alone.limit.tolist() == [7]
    assert alone.rounds_to_agree == 0


def test_notes_say_what_a_reader_should_know_without_names():
    scenario = meeting([[1, 1], [1, 1]], [None, 1], people={"b": {"present": False, "name": "Bilal"}})
    notes = " ".join(rehearse(scenario).notes)
    assert "one person starts at the middle of the scale" in notes
    assert "one person is absent" in notes
    assert "Bilal" not in notes
    assert rehearse(meeting([[1, 1], [1, 1]], [0, 1])).notes == ()


def test_results_are_read_only():
    rehearsal = rehearse(meeting([[1, 1], [1, 3]], [0, 1]))
    for array in (
        rehearsal.rounds,
        rehearsal.spread,
        rehearsal.limit,
        rehearsal.long_run_average,
        rehearsal.influence,
    ):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 1


def person_by_person(scenario, rounds):
    """The rounds from the words of formats.md: loops over people and arrows, no arrays."""
    (variant,) = scenario.variants
    (question,) = scenario.questions
    order = [stage for stage in variant.plan.stages for _ in range(stage.rounds)]
    start = {p.id: p.beliefs.get("q", (question.low + question.high) / 2) for p in variant.people}
    here = {p.id for p in variant.people if p.present}
    lists = [start]
    for at in range(rounds):
        again = at % len(order) if variant.plan.afterwards == "repeat" else len(order) - 1
        stage, now, after = order[at if at < len(order) else again], lists[-1], {}
        for person in variant.people:
            counted, uncounted = {person.id: person.own_weight}, 0.0
            for arrow in variant.arrows:
                if arrow.listener == person.id:
                    if counts(stage, arrow, here) and in_range(question, now, arrow):
                        counted[arrow.source] = arrow.weight
                    else:
                        uncounted += arrow.weight
            if stage.unheard == "own":
                counted[person.id] += uncounted
            total = sum(counted.values())
            heard = sum(w * now[one] for one, w in counted.items()) / total if total else now[person.id]
            if person.id not in here:
                heard = now[person.id]
            after[person.id] = person.firmness * start[person.id] + (1 - person.firmness) * heard
        lists.append(after)
    return lists


def counts(stage, arrow, here):
    both = {arrow.listener, arrow.source}
    if not both <= here:
        return False
    return {
        "plenary": True,
        "silence": False,
        "tables": any(both <= set(table) for table in stage.tables),
        "panel": arrow.source in stage.speakers,
        "pairs": any(both == set(pair) for pair in stage.pairs),
    }[stage.setting]


def in_range(question, now, arrow):
    if question.hearing_range is None:
        return True
    return abs(now[arrow.listener] - now[arrow.source]) <= question.hearing_range + 1e-12 * question.width


@given(meetings())
def test_rounds_are_those_of_the_words(scenario):
    rehearsal = rehearse(scenario, rounds=8)
    for beliefs, expected in zip(rehearsal.rounds, person_by_person(scenario, 8), strict=True):
        assert by_id(rehearsal, beliefs) == pytest.approx(expected, abs=1e-9)


@given(meetings())
def test_what_holds_for_every_rehearsal(scenario):
    rehearsal = rehearse(scenario, rounds=5)
    people = scenario.variants[0].people
    low, high = rehearsal.rounds[0].min(), rehearsal.rounds[0].max()
    assert rehearsal.rounds.min() >= low - 1e-9
    assert rehearsal.rounds.max() <= high + 1e-9
    assert np.all(rehearsal.spread == np.ptp(rehearsal.rounds, axis=1))
    assert rehearsal.influence.sum() == pytest.approx(1, rel=1e-12)
    assert rehearsal.influence.min() >= 0
    assert 1 - 1e-12 <= rehearsal.effective_voices <= len(people) + 1e-9
    # With a hearing range the shares of influence hold for these starts only; they do so in any case.
    assert rehearsal.influence @ rehearsal.rounds[0] == pytest.approx(rehearsal.long_run_average.mean(), abs=1e-6)
    assert (rehearsal.limit is None) == (not rehearsal.settles)
    if rehearsal.consensus:
        assert rehearsal.settles
        assert np.ptp(rehearsal.limit) <= 1e-7
    if rehearsal.consensus_from_any_start:
        assert rehearsal.settles_from_any_start
        assert rehearsal.consensus
    for group in rehearsal.closed_groups:
        assert sum(group.influence.values()) == pytest.approx(1, rel=1e-12)
        assert tuple(group.influence) == group.people
        assert len(group.phases) == len(group.people)
        assert set(group.phases) == set(range(group.period))
    grouped = [one for group in rehearsal.closed_groups for one in group.people]
    assert sorted([*grouped, *rehearsal.outside]) == sorted(rehearsal.people)
    if rehearsal.ballot is not None:
        votes = sum(person.ballots for person in people if person.present)
        for tally in rehearsal.ballot:
            assert tally.in_favour + tally.against + tally.abstain == votes
            assert tally.objecting <= votes
        assert len(rehearsal.ballot) == 6
    assert len(rehearsal.agreement) == 6


@given(meetings())
def test_the_limit_is_what_many_rounds_come_to(scenario):
    rehearsal = rehearse(scenario)
    turn = scenario.variants[0].plan.rounds
    late = rehearse(scenario, rounds=400 * turn)
    if rehearsal.rate is not None and rehearsal.rate < 0.98 and rehearsal.limit is not None:
        assert late.rounds[-1] == pytest.approx(rehearsal.limit, abs=1e-3)
    if rehearsal.rounds_to_agree is not None and rehearsal.rounds_to_agree < 400 * turn:
        agreed = np.flatnonzero(late.spread > rehearsal.tolerance)
        assert rehearsal.rounds_to_agree == (agreed[-1] + 1 if len(agreed) else 0)


@given(meetings(), st.randoms(use_true_random=False))
def test_the_order_of_people_and_arrows_does_not_matter(scenario, chance):
    (variant,) = scenario.variants
    people, arrows = list(variant.people), list(variant.arrows)
    chance.shuffle(people)
    chance.shuffle(arrows)
    shuffled = replace(scenario, variants=(replace(variant, people=tuple(people), arrows=tuple(arrows)),))
    one, other = rehearse(scenario), rehearse(shuffled)
    assert by_id(one, one.rounds[-1]) == pytest.approx(by_id(other, other.rounds[-1]), abs=1e-9)
    assert by_id(one, one.influence) == pytest.approx(by_id(other, other.influence), abs=1e-9)
    assert by_id(one, one.long_run_average) == pytest.approx(by_id(other, other.long_run_average), abs=1e-6)
    assert one.settles_from_any_start == other.settles_from_any_start
    assert sorted(one.outside) == sorted(other.outside)
    sets = [sorted((sorted(group.people), group.period) for group in each.closed_groups) for each in (one, other)]
    assert sets[0] == sets[1]


@given(meetings())
def test_names_and_ids_do_not_matter(scenario):
    (variant,) = scenario.variants
    new = {person.id: f"new-{person.id}" for person in variant.people}
    renamed = replace(
        variant,
        people=tuple(replace(p, id=new[p.id], name=p.id.upper(), role="r", x=1.0, y=2.0) for p in variant.people),
        arrows=tuple(replace(a, listener=new[a.listener], source=new[a.source]) for a in variant.arrows),
        plan=replace(
            variant.plan,
            stages=tuple(
                replace(
                    stage,
                    tables=tuple(tuple(new[one] for one in table) for table in stage.tables),
                    speakers=tuple(new[one] for one in stage.speakers),
                    pairs=tuple((new[one], new[other]) for one, other in stage.pairs),
                )
                for stage in variant.plan.stages
            ),
        ),
    )
    ballot = replace(scenario.ballot, casting_vote=new.get(scenario.ballot.casting_vote))
    one, other = rehearse(scenario), rehearse(replace(scenario, ballot=ballot, variants=(renamed,)))
    assert np.array_equal(one.rounds, other.rounds)
    assert np.array_equal(one.long_run_average, other.long_run_average)
    assert np.array_equal(one.influence, other.influence)
    assert one.ballot == other.ballot
    assert one.notes == other.notes


@given(meetings())
def test_who_is_absent_stays_as_she_is_and_who_hears_on_hears_as_without_her(scenario):
    (variant,) = scenario.variants
    rescaled = tuple(replace(stage, unheard="rescale") for stage in variant.plan.stages)
    absent = [person.id for person in variant.people if not person.present]
    scenario = replace(scenario, variants=(replace(variant, plan=replace(variant.plan, stages=rescaled)),))
    rehearsal = rehearse(scenario)
    played = by_id(rehearsal, rehearsal.rounds.T.tolist())
    for one in absent:
        assert played[one] == pytest.approx([played[one][0]] * len(rehearsal.rounds))
    if absent and len(absent) < len(variant.people):
        without = rehearse(remove_people(scenario, absent, variant=variant.name))
        for one, beliefs in by_id(without, without.rounds.T.tolist()).items():
            assert played[one] == pytest.approx(beliefs, abs=1e-9)
