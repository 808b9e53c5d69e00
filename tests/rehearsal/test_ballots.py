from collections.abc import Sequence
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from meetings import electors

from deliberate.rehearsal.ballots import Electorate, Tallies
from deliberate.scenario.values import Ballot, BallotTest, Person, Question

MOTION = Question("q", "Shall it be done?", 0, 1, pass_mark=0.5)
MAJORITY = Ballot()
TWO_THIRDS = Ballot(tests=(BallotTest("for", at_least="2/3"),))


def tally(question: Question, ballot: Ballot, people: Sequence[Person], beliefs: np.ndarray) -> Tallies:
    """The ballots that k lists of beliefs, shape (k, people), would give."""
    return Electorate(question, ballot, people).tally(beliefs)


def outcome(ballot: Ballot, in_favour: int, against: int, *, abstain: int = 0, absent: int = 0) -> bool:
    """Whether it passes with so many people on each side, one ballot each."""
    people = electors([1] * (in_favour + against + abstain + absent), range(in_favour + against + abstain, 999))
    beliefs = [1.0] * in_favour + [0.0] * against + [0.5] * abstain + [1.0] * absent
    (one,) = tally(MOTION, ballot, people, np.array([beliefs]))
    assert (one.in_favour, one.against, one.abstain) == (in_favour, against, abstain)
    return one.passes


@pytest.mark.parametrize(("cast", "needed"), [(19, 10), (20, 11), (21, 11)])
def test_majority(cast, needed):
    """Robert's Rules of Order Newly Revised, 12th ed., section 44 (figures from memory)."""
    assert outcome(MAJORITY, needed, cast - needed)
    assert not outcome(MAJORITY, needed - 1, cast - needed + 1)


@pytest.mark.parametrize(("cast", "needed"), [(30, 20), (31, 21), (32, 22), (33, 22)])
def test_two_thirds(cast, needed):
    """Robert's Rules of Order Newly Revised, 12th ed., section 44 (figures from memory)."""
    assert outcome(TWO_THIRDS, needed, cast - needed)
    assert not outcome(TWO_THIRDS, needed - 1, cast - needed + 1)


def test_blanks_and_abstentions_are_left_out():
    """Robert's Rules of Order Newly Revised, 12th ed., section 44."""
    assert outcome(MAJORITY, 2, 1, abstain=16)


def test_draft_international_standard():
    """ISO/IEC Directives Part 1, 2.6.3: 2/3 of the votes in favour, not more than 1/4 of all votes negative."""
    rule = Ballot(
        quorum=None, tests=(BallotTest("for", at_least="2/3"), BallotTest("against", at_most="1/4", of="cast"))
    )
    assert outcome(rule, 24, 8)  # 8 of 32 is exactly a quarter
    assert not outcome(rule, 23, 8)  # more than 2/3, and 8 of 31 is more than a quarter
    assert outcome(rule, 24, 8, abstain=20)
    assert not outcome(rule, 6, 3)  # exactly 2/3, too many negative


@pytest.mark.parametrize(
    ("members_for", "population_for", "passes"), [(15, 65, True), (14, 65, False), (15, 64.9, False), (27, 100, True)]
)
def test_double_majority(members_for, population_for, passes):
    """Treaty on European Union, art. 16(4): 55 % of the members (15 of 27) and 65 % of the population."""
    rule = Ballot(
        tests=(
            BallotTest("for", count="people", of="eligible", at_least=0.55),
            BallotTest("for", count="ballots", of="eligible", at_least=0.65),
        )
    )
    against = 27 - members_for
    shares = [population_for / members_for] * members_for + [(100 - population_for) / max(against, 1)] * against
    # Shares of a population are written with some decimals; the last member takes what rounding leaves.
    shares = [round(share, 6) for share in shares]
    shares[0] = round(shares[0] + population_for - sum(shares[:members_for]), 6)
    if against:
        shares[-1] = round(shares[-1] + 100 - sum(shares), 6)
    beliefs = np.array([[1.0] * members_for + [0.0] * against])
    (one,) = tally(MOTION, rule, electors(shares), beliefs)
    assert one.passes is passes


def test_thirds_are_thirds_and_0_55_is_55_hundredths():
    """20 of 30 are two thirds; 11 of 20 are 0.55, though the nearest double to 0.55 is larger."""
    assert Fraction(0.55) > Fraction(11, 20)
    assert outcome(Ballot(tests=(BallotTest("for", at_least=0.55),)), 11, 9)
    assert not outcome(Ballot(tests=(BallotTest("for", more_than=0.55),)), 11, 9)
    assert outcome(Ballot(tests=(BallotTest("against", less_than=0.1),)), 91, 9)
    assert not outcome(Ballot(tests=(BallotTest("against", less_than=0.1),)), 9, 1)


def test_weighted_ballots_add_up_as_decimals():
    """Three ballots of 0.1 against one of 0.3 tie, though 0.1 + 0.1 + 0.1 > 0.3 in doubles."""
    assert 0.1 + 0.1 + 0.1 > 0.3
    people = electors([0.1, 0.1, 0.1, 0.3])
    (tie,) = tally(MOTION, MAJORITY, people, np.array([[1.0, 1, 1, 0]]))
    assert not tie.passes
    assert (tie.in_favour, tie.against) == (0.3, 0.3)
    (one,) = tally(MOTION, MAJORITY, electors([2.5, 1, 1]), np.array([[1.0, 0, 0]]))
    assert (one.in_favour, one.against, one.passes) == (2.5, 2, True)


def test_people_can_be_counted_instead_of_ballots():
    rule = Ballot(tests=(BallotTest("for", count="people", more_than="1/2"),))
    (one,) = tally(MOTION, rule, electors([2.5, 1, 1]), np.array([[1.0, 0, 0]]))
    assert not one.passes


def test_ballots_of_any_size_are_counted_exactly():
    """One ballot in 1e30 decides; neither doubles nor 64 bits can tell."""
    people = electors([1e30, 1e30, 1e-3])
    for beliefs, passes in (([1.0, 0, 1], True), ([1.0, 0, 0], False), ([1.0, 0, 0.5], False)):
        (one,) = tally(MOTION, MAJORITY, people, np.array([beliefs]))
        assert one.passes is passes
    absent = tally(MOTION, MAJORITY, electors([1e30, 1], absent=[0, 1]), np.array([[1.0, 1]]))
    assert [one.in_favour for one in absent] == [0]
    (huge,) = tally(MOTION, MAJORITY, electors([1.7e308] * 3), np.ones((1, 3)))
    assert np.isfinite(huge.in_favour)


def test_fine_thresholds_are_compared_beyond_64_bits():
    people = electors([1e9] * 3)
    rule = Ballot(tests=(BallotTest("for", at_least="666666667/1000000000"),))
    assert not next(iter(tally(MOTION, rule, people, np.array([[1.0, 1, 0]])))).passes
    rule = Ballot(tests=(BallotTest("for", at_least="666666666/1000000000"),))
    assert next(iter(tally(MOTION, rule, people, np.array([[1.0, 1, 0]])))).passes


def test_nothing_passes_when_nobody_votes():
    consent = Ballot(quorum=None, tests=(BallotTest("objecting", at_most=0, of="present"),))
    assert not outcome(consent, 0, 0, abstain=5)
    assert not outcome(Ballot(quorum=None, tests=()), 0, 0, abstain=1)
    assert outcome(Ballot(quorum=None, tests=()), 1, 0)
    assert not outcome(Ballot(quorum="1/2"), 0, 0)


def test_consent_fails_by_one_objection():
    question = Question("q", "Consent?", 0, 100, pass_mark=50, objection_mark=25)
    rule = Ballot(tests=(BallotTest("objecting", at_most=0, of="present"),))
    people = electors([1, 1, 1])
    tallies = tally(question, rule, people, np.array([[60.0, 70, 25], [60, 70, 24.9], [60, 70, 40]]))
    assert tallies.passes.tolist() == [True, False, True]
    assert tallies.objecting.tolist() == [0, 1, 0]


def test_who_objects_without_a_mark_or_a_vote():
    question = Question("q", "Consent?", 0, 100, pass_mark=50, objection_mark=25)
    (one,) = tally(question, MAJORITY, electors([1, 0, 1], absent=[2]), np.array([[60.0, 0, 0]]))
    assert one.objecting == 0
    (one,) = tally(Question("q", "t", 0, 100, pass_mark=50), MAJORITY, electors([1, 1]), np.array([[60.0, 0]]))
    assert one.objecting == 0


def test_absent_people_count_among_the_eligible_only():
    absolute = Ballot(tests=(BallotTest("for", more_than="1/2", of="eligible"),))
    of_present = Ballot(tests=(BallotTest("for", more_than="1/2", of="present"),))
    assert not outcome(absolute, 3, 1, absent=2)
    assert outcome(absolute, 4, 0, absent=2)
    assert outcome(of_present, 3, 1, absent=2)
    assert not outcome(of_present, 3, 1, abstain=2)  # abstaining acts as a no


@pytest.mark.parametrize(("present", "met"), [(2, False), (3, True), (4, True)])
def test_quorum_counts_people_with_a_vote(present, met):
    people = (*electors([1] * 5, absent=range(present, 5)), Person("guest", ballots=0))
    rule = Ballot(quorum="3/5")
    (one,) = tally(MOTION, rule, people, np.ones((1, 6)))
    assert (one.quorum_met, one.passes) == (met, met)


def test_a_quorum_as_a_number_is_read_as_it_is_written():
    people = electors([1] * 10, absent=range(7, 10))
    assert Electorate(MOTION, Ballot(quorum=0.7), people).quorum_met
    assert Electorate(MOTION, Ballot(quorum=None), electors([1] * 10, absent=range(10))).quorum_met


@pytest.mark.parametrize(
    ("chair", "rule", "passes"),
    [
        ("p0", MAJORITY.tests, True),
        ("p1", MAJORITY.tests, False),
        (None, MAJORITY.tests, False),
        ("p2", MAJORITY.tests, True),  # a chair without a ballot, above the mark
        ("p3", MAJORITY.tests, False),  # absent
        ("p0", (BallotTest("for", more_than="1/2", of="present"),), False),
        ("p0", (BallotTest("for", more_than="2/3"),), False),
        ("p0", (BallotTest("for", more_than=0.5, count="people"),), True),
    ],
)
def test_the_casting_vote_breaks_a_tie_of_votes_cast(chair, rule, passes):
    people = electors([1, 1, 0, 1], absent=[3])
    (one,) = tally(MOTION, Ballot(casting_vote=chair, tests=rule), people, np.array([[1.0, 0, 1, 1]]))
    assert one.passes is passes


def test_the_casting_vote_decides_ties_only():
    people = electors([1, 1, 1])
    rule = Ballot(casting_vote="p0")
    tallies = tally(
        MOTION, rule, people, np.array([[1.0, 0, 0], [0, 1, 1], [1, 0, 0.5], [0.5, 1, 0], [0.5, 0.5, 0.5]])
    )
    assert tallies.passes.tolist() == [False, True, True, False, False]


def test_the_undecided_abstain_and_so_does_who_is_exactly_at_the_mark():
    question = Question("q", "t", 0, 1, pass_mark=0.3, undecided=0.1)
    beliefs = np.array([[0.4, 0.2, 0.41, 0.19, 0.3, 0.1 + 0.3]])
    assert 0.3 + 0.1 == 0.4 != 0.3 - 0.1
    (one,) = tally(question, MAJORITY, electors([1] * 6), beliefs)
    assert (one.in_favour, one.against, one.abstain) == (1, 1, 4)


def test_rounding_is_not_a_vote():
    third = Question("q", "t", 0, 1, pass_mark=0.1 + 0.2)
    (one,) = tally(third, MAJORITY, electors([1, 1, 1]), np.array([[0.3, 0.3 + 9e-13, 0.3 + 2e-12]]))
    assert (one.in_favour, one.against, one.abstain) == (1, 0, 2)
    far_out = Question("q", "t", 1_000_000, 1_000_001, pass_mark=1_000_000.3)
    (one,) = tally(far_out, MAJORITY, electors([1]), np.array([[np.nextafter(1_000_000.3, 2e6)]]))
    assert one.abstain == 1


def test_without_a_pass_mark_there_is_no_vote():
    with pytest.raises(ValueError, match="pass mark"):
        Electorate(Question("q", "t", 0, 1), MAJORITY, electors([1]))


BALLOTS = st.sampled_from([0.0, 1.0, 1.0, 2.5, 0.1, 1e-9, 1e20])
SHARES = st.sampled_from(["1/2", "2/3", 0.55, "0/1", 1, 0, "1/3"])
TESTS = st.builds(
    BallotTest,
    st.sampled_from(["for", "against", "objecting"]),
    st.sampled_from(["ballots", "people"]),
    st.sampled_from(["cast", "present", "eligible"]),
) | st.just(BallotTest("for"))


@given(
    st.lists(st.tuples(BALLOTS, st.booleans(), st.sampled_from([0, 0.2, 0.5, 0.6, 1])), min_size=1, max_size=7),
    st.lists(
        st.tuples(TESTS, st.sampled_from(["more_than", "at_least", "at_most", "less_than"]), SHARES), max_size=3
    ),
    st.none() | SHARES,
    st.none() | st.just("p0"),
)
def test_the_same_as_counting_one_by_one_in_fractions(people, tests, quorum, chair):
    """An independent tally: loops over people, fractions of decimal text, no arrays."""
    question = Question("q", "t", 0, 1, pass_mark=0.5, objection_mark=0.3)
    tests = tuple(
        BallotTest(test.side, test.count, test.of, **{comparison: share}) for test, comparison, share in tests
    )
    electorate = tuple(Person(f"p{i}", ballots=b, present=here) for i, (b, here, _) in enumerate(people))
    beliefs = np.array([[belief for _, _, belief in people], [1 - belief for _, _, belief in people]])
    tallies = tally(question, Ballot(quorum=quorum, casting_vote=chair, tests=tests), electorate, beliefs)
    for row, one in zip(beliefs.tolist(), tallies, strict=True):
        counted = _one_by_one(electorate, row, tests, quorum, chair)
        assert (one.quorum_met, one.passes) == counted["result"]
        assert one.in_favour == float(counted["for"])
        assert one.against == float(counted["against"])
        assert one.objecting == float(counted["objecting"])
        assert one.abstain == float(counted["present"] - counted["for"] - counted["against"])


def _one_by_one(people, beliefs, tests, quorum, chair):
    def fraction(share):
        return Fraction(share) if isinstance(share, str) else Fraction(str(share))

    sides = {
        "for": lambda b: b > 0.5,
        "against": lambda b: b < 0.5,
        "objecting": lambda b: b < 0.3,
        "present": lambda b: True,
        "cast": lambda b: b != 0.5,
    }

    def total(side, count):
        return sum(
            Fraction(str(person.ballots)) if count == "ballots" else 1
            for person, belief in zip(people, beliefs, strict=True)
            if person.present and person.ballots > 0 and sides[side](belief)
        )

    def eligible(count):
        return sum(Fraction(str(p.ballots)) if count == "ballots" else 1 for p in people if p.ballots > 0)

    def holds(test):
        share = total(test.side, test.count)
        of = eligible(test.count) if test.of == "eligible" else total(test.of, test.count)
        for name, compare in {
            "more_than": Fraction.__gt__,
            "at_least": Fraction.__ge__,
            "at_most": Fraction.__le__,
            "less_than": Fraction.__lt__,
        }.items():
            limit = getattr(test, name)
            if isinstance(limit, str | float | int):
                tie = share == fraction(limit) * of
                if (test.side, test.of, name, fraction(limit)) == (
                    "for",
                    "cast",
                    "more_than",
                    Fraction(1, 2),
                ) and tie:
                    return bool(chair) and people[0].present and beliefs[0] > 0.5
                return compare(Fraction(share), fraction(limit) * of)
        raise AssertionError

    quorum_met = quorum is None or total("present", "people") >= fraction(quorum) * eligible("people")
    passes = quorum_met and total("cast", "people") > 0 and all(holds(test) for test in tests)
    counts = {side: total(side, "ballots") for side in sides}
    return counts | {"result": (quorum_met, passes)}


@given(st.lists(st.lists(st.floats(0, 1), min_size=5, max_size=5), min_size=1, max_size=4))
def test_many_lists_are_counted_as_one_by_one(rows):
    electorate = Electorate(MOTION, TWO_THIRDS, electors([1, 2.5, 0, 1, 1], absent=[3]))
    together = list(electorate.tally(np.array(rows)))
    assert together == [next(iter(electorate.tally(np.array([row])))) for row in rows]


def test_a_threshold_as_small_as_doubles_get():
    rule = Ballot(tests=(BallotTest("for", more_than=5e-324),))
    (one,) = tally(MOTION, rule, electors([1, 0]), np.array([[1.0, 1]]))
    assert one.passes
    assert not next(iter(tally(MOTION, rule, electors([0]), np.array([[1.0]])))).passes
