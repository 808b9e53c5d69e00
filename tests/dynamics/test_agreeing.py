import numpy as np
import pytest
from hypothesis import assume, given, reject
from hypothesis import strategies as st
from talk import in_other_order, line, network_of, plenary, ring, talks

from deliberate.dynamics import agreeing as module
from deliberate.dynamics.agreeing import agreeing, rounds_to_agree
from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play
from deliberate.dynamics.shares import heard_in_silence

FAR = 2_500  # rounds that are played one by one
ROUND_ABOUT = 200  # whatever swings or repeats does so within as many
TOLERANCES = (0.5, 0.2, 0.1, 0.01, 1e-4, 1e-7)


def counted(process, starts, tolerance, **options) -> int | None:
    return rounds_to_agree(process, starts, tolerance, long_run(process, starts, **options), **options)


def by_playing(process, starts, tolerance, reach=None, rounds=FAR) -> int | None:
    """The first round from which the spread stays within the tolerance, as far as so many rounds can tell."""
    spread = np.ptp(play(process, starts, rounds, hearing_range=reach), axis=1)
    if (np.abs(spread - tolerance) <= 1e-12).any():
        reject()  # there rounding decides
    wide = np.flatnonzero(spread > tolerance)
    if not len(wide):
        return 0
    if wide[-1] < rounds - ROUND_ABOUT:
        return int(wide[-1]) + 1
    if spread[-ROUND_ABOUT:].max() < spread[-2 * ROUND_ABOUT : -ROUND_ABOUT].max() - 1e-12:
        reject()  # still falling
    return None


@pytest.fixture(params=["played", "squared"])
def way(request, monkeypatch) -> str:
    """Rounds played as far as usual, and squared from the first one on."""
    if request.param == "squared":
        monkeypatch.setattr(module, "PLAYED_FIRST", 1)
    return request.param


def test_degroot(way):
    """DeGroot 1974, JASA 69:118-121 (from memory): the spread is 4^-t, so within 0.01 first at round 4."""
    process = plenary([[1, 1], [1, 3]])
    assert counted(process, [0, 1], 0.01) == 4
    for rounds in range(20):
        assert counted(process, [0, 1], 4.0**-rounds * 1.001) == rounds


@pytest.mark.parametrize("people", [40, 200])
def test_a_line_takes_longer_than_its_eigenvalues_say(way, people):
    """Own share 0.1, modulus 0.1: that would be two rounds to 1 %; for 40 people it is 49."""
    starts = np.zeros(people)
    starts[0] = 1.0
    found = counted(plenary(line(people)), starts, 0.01)
    assert found == by_playing(plenary(line(people)), starts, 0.01)
    if people == 40:
        assert found == 49


@pytest.mark.parametrize("squared", [False, True])
@given(talk=talks(), tolerance=st.sampled_from(TOLERANCES))
def test_rounds_are_those_of_playing_them(squared, talk, tolerance):
    process, starts = talk
    with pytest.MonkeyPatch.context() as patch:
        if squared:
            patch.setattr(module, "PLAYED_FIRST", 1)
        found = counted(process, starts, tolerance)
    assert found == by_playing(process, starts, tolerance)


@given(talks(), st.sampled_from(TOLERANCES), st.sampled_from((0.1, 0.3)))
def test_rounds_with_a_hearing_range_are_those_of_playing_them(talk, tolerance, reach):
    process, starts = talk
    expected = by_playing(process, starts, tolerance, reach, rounds=600)
    assert counted(process, starts, tolerance, hearing_range=reach) == expected


@pytest.mark.parametrize("cross", [1e-3, 1e-6, 1e-9, 1e-12])
def test_two_people_who_hardly_hear_each_other(cross):
    """The spread is (1 - 2 cross)^t: counted by the formula, to one part in a thousand million."""
    found = counted(plenary([[1 - cross, cross], [cross, 1 - cross]]), [0, 1], 0.01)
    expected = np.log(0.01) / np.log1p(-2 * cross)
    assert found == pytest.approx(expected, rel=max(1e-9, 1.01 / expected))


@pytest.mark.parametrize("firmness", [1e-2, 1e-4, 1e-6])
def test_one_firm_person_pulls_everybody_in_the_end(firmness):
    """Two people mix fully; a pinch of firmness brings both to the firm one's start at rate 1 - firmness / 2."""
    process = plenary([[1, 1], [1, 1]], [firmness, 0])
    found = counted(process, [0, 1], firmness / 50)
    # After the first round both are at m = 1/2 or so, the spread is firmness m, and m falls by 1 - firmness / 2.
    assert found == pytest.approx(1 + np.log(1 / 25) / np.log1p(-firmness / 2), abs=2)


def test_the_spread_may_rise_again_with_firm_people(way):
    """Within the tolerance at first, beyond it for ever once the firm person's start has come back."""
    points = [[0, 1, 0, 0], [0, 0, 1, 0], [0, 0, 1, 0], [0, 0, 1, 0]]
    process = plenary(points, [0.5, 0, 0, 0])
    starts = [0.0, 0.2, 0.8, 0.5]  # b_0: 0, 0.1, 0.4; b_1: 0.2, 0.8
    assert np.ptp(play(process, starts, 3), axis=1) == pytest.approx([0.8, 0.7, 0.4, 0.4])
    assert counted(process, starts, 0.5) == 2
    assert counted(process, starts, 0.39) is None
    narrow = [0.5, 0.5, 0.5, 0.5]
    assert counted(process, narrow, 0.01) == 0
    rising = plenary([[0, 1, 0], [0, 0, 1], [0, 0, 1]], [0.5, 0, 0])
    assert np.ptp(play(rising, [0.5, 0.1, 0.5], 3), axis=1) == pytest.approx([0.4, 0.2, 0, 0])


def test_never_and_at_once():
    apart = plenary(np.eye(2))
    assert counted(apart, [0, 1], 0.5) is None
    assert counted(apart, [0, 1], 1.0) == 0
    assert counted(plenary([[0, 1], [1, 0]]), [0, 1], 0.9) is None
    assert rounds_to_agree(plenary(np.zeros((0, 0))), [], 0.1, long_run(plenary(np.zeros((0, 0))), [])) == 0


def test_a_tolerance_below_what_doubles_tell_apart_is_never_reached_or_at_once():
    process = plenary([[3, 1, 2], [1, 5, 1], [2, 1, 4]])
    found = agreeing(process, [0.1, 0.7, 0.4], 1e-30, long_run(process, [0.1, 0.7, 0.4]))
    assert found.rounds is None or np.ptp(play(process, [0.1, 0.7, 0.4], found.rounds)[-1]) <= 1e-30


def test_agreeing_before_the_last_stage_is_counted_there(way):
    network = network_of([[1, 1], [1, 3]])
    talk, silence = Block(None, "own", 300), Block(heard_in_silence(network), "own", 1)
    assert counted(Process(network, (talk, silence), False, np.zeros(2)), [0, 1], 0.01) == 4
    late = Process(network, (Block(silence.heard, "own", 1000), talk), False, np.zeros(2))
    assert counted(late, [0, 1], 0.01) == 1004
    short = Process(network, (Block(None, "own", 3), silence), False, np.zeros(2))
    assert counted(short, [0, 1], 0.01) is None


def test_a_repeated_plan_is_counted_in_single_rounds(way):
    network = network_of([[1, 1], [1, 3]])
    silence = Block(heard_in_silence(network), "own", 2)
    process = Process(network, (silence, Block(None, "own", 1)), True, np.zeros(2))
    assert counted(process, [0, 1], 0.01) == 12
    assert counted(process, [0, 1], 4.0**-20 * 1.001) == 60


@given(talks(firm=False), st.sampled_from(TOLERANCES))
def test_a_wider_tolerance_is_never_reached_later(talk, tolerance):
    process, starts = talk
    narrow, wide = counted(process, starts, tolerance), counted(process, starts, 2 * tolerance)
    assert narrow is None or wide <= narrow


@given(talks(), st.sampled_from(TOLERANCES), st.randoms(use_true_random=False))
def test_the_order_of_people_does_not_matter_to_the_count(talk, tolerance, random):
    process, starts = talk
    order = list(range(len(starts)))
    random.shuffle(order)
    here = counted(process, starts, tolerance)
    assume(here is None or abs(np.ptp(play(process, starts, here)[-1]) - tolerance) > 1e-12)
    assert counted(in_other_order(process, np.array(order)), starts[order], tolerance) == here


def test_beyond_what_can_be_squared_rounds_are_played_and_then_estimated(monkeypatch):
    process = plenary(ring(30, 2.0))
    starts = np.arange(30) / 29
    exact = counted(process, starts, 0.001)
    assert exact > 300
    monkeypatch.setattr(module, "SQUARING_PEOPLE", 10)
    assert agreeing(process, starts, 0.001, long_run(process, starts)) == module.Agreeing(exact, False)
    monkeypatch.setattr(module, "PLAYED_AT_MOST", 200)
    carried_on = agreeing(process, starts, 0.001, long_run(process, starts))
    assert carried_on.estimated
    assert carried_on.rounds == pytest.approx(exact, rel=0.02)
