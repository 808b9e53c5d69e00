import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from meetings import electors

from deliberate.rehearsal.agreement import judge, notes
from deliberate.scenario.values import AgreementTest, Question

RAND = Question("q", "How appropriate?", 1, 9, agreement=(AgreementTest("rand-ucla"),))


def rand(ratings, ballots=None):
    ((one,),) = judge(RAND, electors(ballots or [1] * len(ratings)), np.array([ratings], dtype=float))
    return one


@pytest.mark.parametrize(("panel", "most_outside"), [(8, 2), (9, 2), (10, 2), (11, 3), (13, 3), (14, 4), (16, 4)])
def test_rand_ucla_table(panel, most_outside):
    """BMC Med. Inform. Decis. Mak. 2012;12:93: agreement with at most 2 / 3 / 4 ratings outside the median's third,
    disagreement with at least 3 / 4 / 5 in each outer third."""
    agreeing = rand([8] * (panel - most_outside) + [5] * most_outside)
    assert (agreeing.verdict, agreeing.figure) == ("agreement", most_outside)
    assert rand([8] * (panel - most_outside - 1) + [5] * (most_outside + 1)).verdict == "neither"
    camp = most_outside + 1
    assert rand([1] * camp + [9] * camp + [5] * (panel - 2 * camp)).verdict == "disagreement"
    assert rand([1] * most_outside + [9] * (panel - most_outside)).verdict == "agreement"
    assert rand([1] * most_outside + [9] * camp + [5] * (panel - most_outside - camp)).verdict == "neither"


def test_rand_ucla_false_calm():
    """Ratings 9 8 8 7 8 6 5 3 2 1 2 disagree: four low and five high in a panel of 11; their mean says 5.4."""
    assert rand([9, 8, 8, 7, 8, 6, 5, 3, 2, 1, 2]).verdict == "disagreement"


def test_rand_ucla_rounds_half_up():
    assert rand([6.5] * 6 + [3, 3]).verdict == "agreement"
    assert rand([6.5] * 6 + [3, 3]).figure == 2
    assert rand([6.4999] * 6 + [8, 8, 8]).figure == 3  # all of the six lie in the middle third
    assert rand([6.5 - 1e-13] * 8).figure == 0  # rounding of beliefs is no rating


def test_rand_ucla_median_between_thirds_counts_to_the_upper_one():
    assert rand([6] * 4 + [7] * 4).figure == 4
    assert rand([3] * 2 + [3] * 2 + [4] * 4).figure == 4
    assert rand([1] * 4 + [6] * 4).figure == 4  # median 3.5
    assert rand([1] * 4 + [4] * 5).figure == 4


@pytest.mark.parametrize("panel", [1, 7, 17])
def test_rand_ucla_says_nothing_about_other_panels(panel):
    assert rand([8] * panel).verdict == "neither"
    assert notes(RAND, electors([1] * panel)) != ()
    assert str(panel) in notes(RAND, electors([1] * panel))[0]


def test_only_those_present_with_a_vote_are_asked():
    people = electors([1] * 8 + [0, 1], absent=[9])
    ((one,),) = judge(RAND, people, np.array([[8.0] * 8 + [1, 1]]))
    assert (one.verdict, one.figure) == ("agreement", 0)
    assert notes(RAND, people) == ()


def test_share_within_is_compared_as_a_fraction():
    """Median definition of consensus in Delphi studies: 75 % (Diamond et al. 2014, J. Clin. Epidemiol. 67:401)."""
    test = AgreementTest("share-within", low=7, high=9, at_least="3/4")
    question = Question("q", "t", 1, 9, agreement=(test,))
    verdicts = judge(question, electors([1] * 4), np.array([[7.0, 8, 9, 1], [7, 8, 6.9, 1], [7 - 1e-13, 9, 9, 9]]))
    assert [(one.verdict, one.figure) for (one,) in verdicts] == [
        ("agreement", 0.75),
        ("neither", 0.5),
        ("agreement", 1),
    ]
    tenths = Question("q", "t", 1, 9, agreement=(AgreementTest("share-within", low=7, high=9, at_least=0.7),))
    ((one,),) = judge(tenths, electors([1] * 10), np.array([[8.0] * 7 + [1.0] * 3]))
    assert one.verdict == "agreement"


def test_quartile_range_is_interpolated():
    """Linear interpolation: quartiles of 1, 2, 3, 4 are 1.75 and 3.25 (Hyndman and Fan 1996, type 7)."""
    question = Question("q", "t", 0, 9, agreement=(AgreementTest("quartile-range", at_most=1.5),))
    verdicts = judge(question, electors([1] * 4), np.array([[1.0, 2, 3, 4], [1, 2, 3, 5]]))
    assert [(one.verdict, one.figure) for (one,) in verdicts] == [("agreement", 1.5), ("neither", 1.75)]


def test_spread_at_exactly_its_bar_is_met():
    question = Question("q", "t", 0, 1, agreement=(AgreementTest("spread", at_most=0.1),))
    assert 0.8 - 0.7 > 0.1 - 1e-16
    verdicts = judge(question, electors([1] * 2), np.array([[0.7, 0.8], [0.3, 0.4], [0.3, 0.4001]]))
    assert [one.verdict for (one,) in verdicts] == ["agreement", "agreement", "neither"]


def test_nobody_with_a_vote_and_nothing_to_test():
    assert [one.verdict for one in judge(RAND, electors([0, 0]), np.ones((1, 2)))[0]] == ["neither"]
    assert judge(Question("q", "t", 0, 1), electors([1]), np.ones((3, 1))) == ((), (), ())


@given(st.lists(st.integers(1, 9), min_size=8, max_size=16))
def test_rand_ucla_as_a_committee_clerk_would_count(ratings):
    """An independent count by sorting and comparing, from the published table."""
    one = rand(ratings)
    at_most = {8: 2, 9: 2, 10: 2, 11: 3, 12: 3, 13: 3, 14: 4, 15: 4, 16: 4}[len(ratings)]
    ordered = sorted(ratings)
    median = (ordered[(len(ordered) - 1) // 2] + ordered[len(ordered) // 2]) / 2
    third = range(1, 4) if median < 3.5 else range(4, 7) if median < 6.5 else range(7, 10)
    outside = sum(rating not in third for rating in ratings)
    lows, highs = sum(rating <= 3 for rating in ratings), sum(rating >= 7 for rating in ratings)
    assert one.figure == outside
    assert (one.verdict == "agreement") == (outside <= at_most)
    assert (one.verdict == "disagreement") == (min(lows, highs) > at_most)
