"""Hearing ranges: published endings, exact ties, and the course against plain stepping."""

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from talk import in_other_order, network_of, plain_rounds, plenary, talks

from deliberate.dynamics import hearing
from deliberate.dynamics.agreeing import rounds_to_agree
from deliberate.dynamics.hearing import BY_STEPPING, KEEPS_CHANGING, NOT_TRACED, follow_hearing
from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play


def equal_weights(people: int, unheard: str = "rescale") -> Process:
    """Everybody gives the same points to herself and each other (Hegselmann and Krause 2002)."""
    return Process(network_of(np.ones((people, people))), (Block(None, unheard, 1),), False, np.zeros(people))


def sizes(values) -> list[int]:
    """How many people hold each view, by view."""
    values = np.sort(values)
    cuts = np.flatnonzero(np.diff(values) > 1e-9) + 1
    return [len(part) for part in np.split(values, cuts)]


def in_fractions(people: int, reach: Fraction) -> list[Fraction]:
    """Equal weights and evenly spaced starts from 0 to 1, stepped in exact fractions until nobody moves."""
    held = [Fraction(at, people - 1) for at in range(people)]
    while True:
        after = []
        for own in held:
            heard = [view for view in held if abs(view - own) <= reach]
            after.append(sum(heard) / len(heard))
        if after == held:
            return held
        held = after


@pytest.mark.parametrize("people", range(1, 26))
def test_hegarty_and_wedin(people):
    """Hegarty and Wedin, arXiv:1406.0819 (text seen): equal weights, beliefs equally spaced at exactly the hearing
    range: for n people 2 floor(n/6) groups of 3 and one of n mod 6."""
    found = long_run(equal_weights(people), np.arange(people), scale_width=max(people - 1, 1), hearing_range=1.0)
    assert sorted(sizes(found.limit)) == sorted([3] * (2 * (people // 6)) + [people % 6] * (people % 6 > 0))


@pytest.mark.parametrize("scale", [1.0, 0.1, 1e6])
def test_hegarty_and_wedin_on_any_scale(scale):
    """The same where the spacing is no whole number, so that doubles meet the range only nearly."""
    starts = 7.3 * scale + np.arange(12) * (scale / 11)
    found = long_run(equal_weights(12), starts, scale_width=scale, hearing_range=scale / 11)
    assert sizes(found.limit) == [3, 3, 3, 3]


def test_fifty_one_people_end_in_one_group():
    """Evenly spaced, range a fifth of the scale: exact arithmetic ends in one group, bare doubles in two."""
    assert len(set(in_fractions(51, Fraction(1, 5)))) == 1
    found = long_run(equal_weights(51), np.arange(51) / 50, hearing_range=0.2)
    assert sizes(found.limit) == [51]
    assert found.limit[0] == pytest.approx(0.5, abs=1e-12)
    bare = np.arange(51) / 50
    for _ in range(100):
        near = np.abs(bare[:, None] - bare) <= 0.2
        bare = near @ bare / near.sum(axis=1)
    assert len(sizes(bare)) == 2


@pytest.mark.parametrize("people", [7, 11, 16, 21])
@pytest.mark.parametrize("reach", [Fraction(1, 10), Fraction(1, 5), Fraction(1, 4), Fraction(1, 3)])
def test_evenly_spaced_people_end_as_in_exact_fractions(people, reach):
    found = long_run(equal_weights(people), np.arange(people) / (people - 1), hearing_range=float(reach))
    assert found.limit == pytest.approx(np.array(in_fractions(people, reach), dtype=float), abs=1e-12)
    assert BY_STEPPING in found.notes


def test_krause_a_gap_wider_than_the_range_never_closes():
    """Hegselmann and Krause 2002: with equal weights, two who are out of range of each other, with nobody between,
    stay so."""
    found = long_run(equal_weights(6), [0, 0.1, 0.2, 0.6, 0.7, 0.8], hearing_range=0.3)
    assert found.limit == pytest.approx([0.1] * 3 + [0.7] * 3, abs=1e-12)
    assert [group.members.tolist() for group in found.groups] == [[0, 1, 2], [3, 4, 5]]
    assert not found.consensus_from_any_start
    assert rounds_to_agree(equal_weights(6), [0, 0.1, 0.2, 0.6, 0.7, 0.8], 0.5, found, 0.3) is None


@given(talks(), st.sampled_from((0.05, 0.15, 0.3, 0.6)))
def test_the_end_is_what_plain_stepping_comes_to(talk, reach):
    process, starts = talk
    found = long_run(process, starts, hearing_range=reach)
    turn = sum(block.rounds for block in process.blocks) if process.repeat else 1
    lists = found.limit[None, :] if found.cycle is None else found.cycle
    rounds = len(lists) * (800 // len(lists) + 1)
    played = play(process, starts, (rounds + len(lists)) * turn, hearing_range=reach)[::turn]
    for at, expected in enumerate(lists):
        assert played[rounds + at] == pytest.approx(expected, abs=1e-9)


@given(talks(), st.sampled_from((0.15, 0.3)))
def test_the_kept_course_retraces_the_rounds(talk, reach):
    """Influence is traced through the networks that were heard: carried forward it gives the average again."""
    process, starts = talk
    found = long_run(process, starts, hearing_range=reach)
    assert found.influence.sum() == pytest.approx(1, abs=1e-12)
    if found.cycle is None:
        assert found.influence @ starts == pytest.approx(found.average.mean(), abs=1e-11)
    heard = follow_hearing(process, starts, reach, 1.0)
    held = starts
    played = play(process, starts, min(heard.course.rounds_before, 60), hearing_range=reach)
    at = 0
    for leg in heard.course.before:
        for _ in range(leg.rounds):
            if at + 1 < len(played):
                held = process.firmness * starts + (1 - process.firmness) * leg.shares.hear(held)
                assert held == pytest.approx(played[at + 1], abs=1e-12)
            at += 1
    assert at == heard.course.rounds_before


@given(talks(), st.sampled_from((0.15, 0.3)), st.randoms(use_true_random=False))
def test_the_order_of_people_does_not_matter_to_who_is_in_range(talk, reach, random):
    process, starts = talk
    order = list(range(len(starts)))
    random.shuffle(order)
    here = long_run(process, starts, hearing_range=reach)
    moved = long_run(in_other_order(process, np.array(order)), starts[order], hearing_range=reach)
    assert moved.average == pytest.approx(here.average[order], abs=1e-10)
    assert moved.settles == here.settles


@given(talks())
def test_a_range_as_wide_as_the_scale_leads_where_plain_talk_leads(talk):
    process, starts = talk
    plain, ranged = long_run(process, starts), long_run(process, starts, hearing_range=1.0)
    assert ranged.average == pytest.approx(plain.average, abs=1e-10)
    assert ranged.settles == plain.settles
    assert ranged.influence == pytest.approx(plain.influence, abs=1e-9)


def test_own_and_rescale_differ_in_pace_only_where_everybody_is_in_range():
    starts = [0.1, 0.3, 0.9]
    for unheard in ("own", "rescale"):
        found = long_run(equal_weights(3, unheard), starts, hearing_range=0.5)
        assert found.limit == pytest.approx([0.2, 0.2, 0.9], abs=1e-12)
        assert found.rate == pytest.approx(1 / 3 if unheard == "own" else 0, abs=1e-9)


def test_slow_talk_that_comes_into_range_late_is_followed():
    """Two who hardly move reach each other's range after tens of thousands of rounds; squaring finds the round."""
    points = np.array([[1.0, 1e-5, 0], [0, 1, 0], [0, 0, 1]])
    points[2, 0] = 1.0
    process = plenary(points)
    starts = [0.0, 0.5, 1.0]
    found = long_run(process, starts, hearing_range=0.6)
    # Person 0 drifts to 0.5 as 0.5 (1 - share)^t and is heard by the third from 0.4 on.
    assert found.limit == pytest.approx([0.5, 0.5, 0.5], abs=1e-9)
    assert found.course.rounds_before > np.log(5) / 1e-5 - 2


@pytest.mark.parametrize("late", range(40, 66))
def test_a_change_at_any_round_is_followed(late):
    """The third hears the first from round `late` on, also where patience ends just then."""
    process = plenary([[0.99, 0.01, 0], [0, 1, 0], [0.5, 0, 0.5]])
    starts = np.array([0.0, 0.5, 1.0])
    first = 0.5 * (1 - 0.99**late)
    reach = 1 - first + 1e-4
    played = play(process, starts, 3_000, hearing_range=reach)
    assert played[late, 2] == 1 > played[late + 1, 2]
    assert long_run(process, starts, hearing_range=reach).limit == pytest.approx(played[-1], abs=1e-9)


def test_somebody_who_is_in_range_for_a_moment_is_not_missed():
    """A crest that goes round a large ring passes a listener for a few rounds, long after all has looked settled."""
    people = 150
    points = np.zeros((people + 1, people + 1))
    points[np.arange(people), np.arange(people)] = 0.02
    points[np.arange(people), (np.arange(people) + 1) % people] = 0.98
    points[people, [people, 0]] = 100, 1
    crest = 0.5 + 0.25 * np.cos(2 * np.pi * (np.arange(people) - 127) / people)
    starts = np.append(crest, 0.95)
    played = play(plenary(points), starts, 200, hearing_range=0.202)
    assert played[120, people] == 0.95 > played[170, people]
    found = long_run(plenary(points), starts, hearing_range=0.202)
    assert found.limit[people] == pytest.approx(0.5, abs=1e-6)


def test_beliefs_that_come_round_for_ever_are_the_cycle():
    """A firm person swings out of and into range of what she hears."""
    points = np.zeros((3, 3))
    points[0, 1] = points[1, 0] = 1.0
    points[2, [0, 1]] = 1.0
    found = long_run(
        Process(network_of(points), (Block(None, "own", 1),), False, np.zeros(3)), [0, 0.2, 0.1], hearing_range=0.25
    )
    assert found.cycle == pytest.approx(np.array([[0, 0.2, 0.1], [0.2, 0, 0.1]]))
    assert not found.settles


def test_who_hears_whom_may_keep_changing():
    points = np.zeros((4, 4))
    points[0, 1] = points[1, 0] = points[2, 0] = points[2, 3] = points[3, 3] = 1.0
    process = Process(network_of(points), (Block(None, "rescale", 1),), False, np.zeros(4))
    starts = [0.0, 0.4, 0.7, 0.7]
    found = long_run(process, starts, hearing_range=0.4)
    assert KEEPS_CHANGING in found.notes
    assert not found.settles
    played = play(process, starts, 200 * len(found.cycle), hearing_range=0.4)
    for at, expected in enumerate(found.cycle):
        assert played[len(found.cycle) * 100 + at] == pytest.approx(expected, abs=1e-12)
    assert found.average == pytest.approx(found.cycle.mean(axis=0))
    assert found.rate is None


def test_too_many_networks_to_keep_are_said_so(monkeypatch):
    monkeypatch.setattr(hearing, "KEPT_ENTRIES", 200)
    process = equal_weights(9)
    starts = np.arange(9) / 8
    found = long_run(process, starts, hearing_range=0.25)
    rounds = found.course.rounds_before
    assert NOT_TRACED.format(rounds=rounds) in found.notes
    monkeypatch.undo()
    kept = long_run(process, starts, hearing_range=0.25)
    assert found.limit == pytest.approx(kept.limit, abs=1e-13)
    for tolerance in (0.9, 0.3, 0.01):
        assert rounds_to_agree(process, starts, tolerance, found, 0.25) == rounds_to_agree(
            process, starts, tolerance, kept, 0.25
        )


def test_plain_rounds_agree_about_the_range():
    process = equal_weights(5)
    starts = np.array([0, 0.2, 0.45, 0.7, 1.0])
    assert play(process, starts, 5, hearing_range=0.3) == pytest.approx(
        plain_rounds(process, starts, 5, 0.3), abs=1e-15
    )
