import pytest
from hypothesis import given
from hypothesis import strategies as st

from deliberate.rehearsal import words
from deliberate.rehearsal.results import Tally
from deliberate.scenario.values import AgreementTest, Person, Question, Variant


def scale(low: float, high: float, unit: str = "") -> Question:
    return Question("q", "What is asked?", low, high, unit=unit)


@pytest.mark.parametrize(
    ("low", "high", "value", "shown"),
    [
        (0, 1, 0.71428, "0.714"),
        (0, 1, 0.7, "0.7"),
        (0, 100, 71.428, "71.4"),
        (0, 100, 70.04, "70"),
        (1, 9, 5.954, "5.95"),
        (0, 1000, 480.4, "480"),
        (0, 50_000, 12_499.7, "12,500"),
        (-1, 1, -0.5, "-0.5"),
        (-1, 1, -1e-9, "0"),
        (-8e307, 8e307, 1.5e300, "1.5e+300"),
        (0, 1e-300, 5e-301, "5e-301"),
    ],
)
def test_a_figure_has_the_digits_that_its_scale_calls_for(low, high, value, shown):
    assert words.number(value, scale(low, high)) == shown


def test_a_figure_gets_more_digits_to_be_told_from_its_neighbour():
    question = scale(0, 100)
    assert words.number(50.0004, question) == "50"
    assert words.number(50.0004, question, beside=50) == "50.0004"
    assert words.number(49.99999, question, beside=50) == "49.99999"
    assert words.number(50, question, beside=50) == "50"


@given(st.floats(0, 100), st.floats(0, 100))
def test_two_figures_read_alike_only_when_they_hardly_differ(value, other):
    question = scale(0, 100)
    if words.number(value, question, other) == words.number(other, question, value):
        assert abs(value - other) < 1e-15 * 100


def test_units_stand_behind_the_figure():
    assert words.with_unit(480, scale(0, 1000, "thousand euros")) == "480 thousand euros"
    assert words.with_unit(0.5, scale(0, 1)) == "0.5"


@pytest.mark.parametrize(
    ("share", "shown"),
    [
        (0, "0 %"),
        (1e-9, "under 0.1 %"),
        (0.004, "0.4 %"),
        (0.00999, "1 %"),
        (0.8123, "81 %"),
        (0.125, "13 %"),
        (0.99, "99 %"),
        (0.994, "99.4 %"),
        (0.9999, "over 99.9 %"),
        (1, "100 %"),
    ],
)
def test_shares_are_never_rounded_to_nothing_or_to_all(share, shown):
    assert words.percent(share) == shown


@given(st.floats(0, 1))
def test_only_none_is_0_percent_and_only_all_is_100(share):
    assert (words.percent(share) == "0 %") == (share == 0)
    assert (words.percent(share) == "100 %") == (share == 1)


def test_counts_and_their_nouns():
    assert words.count(1, "person", "people") == "1 person"
    assert words.count(2.5, "ballot", "ballots") == "2.5 ballots"
    assert words.count(12_000, "person", "people") == "12,000 people"
    assert words.in_words(0, "person", "people") == "no people"
    assert words.in_words(1, "person", "people") == "one person"
    assert words.in_words(12, "person", "people") == "twelve people"
    assert words.in_words(13, "person", "people") == "13 people"


NAMES = ("Amina", "Bilal", "Chen", "Dolores", "Emeka", "Fatou")
COMMITTEE = Variant("v", tuple(Person(name.lower(), name=name) for name in NAMES))


@pytest.mark.parametrize(
    ("many", "said"),
    [
        (0, ""),
        (1, "Amina"),
        (2, "Amina and Bilal"),
        (4, "Amina, Bilal, Chen and Dolores"),
        (5, "Amina, Bilal, Chen and 2 others"),
        (6, "Amina, Bilal, Chen and 3 others"),
    ],
)
def test_long_lists_of_names_are_cut(many, said):
    assert words.names([name.lower() for name in NAMES[:many]], COMMITTEE) == said


def test_shorter_lists_can_be_asked_for():
    ids = [name.lower() for name in NAMES]
    assert words.names(ids, COMMITTEE, most=2) == "Amina and 5 others"
    assert words.names(ids, words.shown_names(COMMITTEE), most=9).endswith("Emeka and Fatou")


def test_people_of_one_name_are_told_apart_by_id():
    variant = Variant("v", (Person("a1", name="Amina"), Person("a2", name="Amina"), Person("b")))
    assert words.names(["a1", "a2", "b"], variant) == "Amina (a1), Amina (a2) and b"


def test_a_sentence_begins_with_a_capital():
    assert words.sentence("views settle on Ada's") == "Views settle on Ada's"


@pytest.mark.parametrize(
    ("tally", "said"),
    [
        (Tally(4, 3, 0, 0, quorum_met=True, passes=True), "4 for, 3 against: passes"),
        (
            Tally(4, 3, 1.5, 2, quorum_met=True, passes=False),
            "4 for, 3 against, 1.5 abstaining, 2 objecting: does not pass",
        ),
        (Tally(1, 0, 0, 0, quorum_met=False, passes=False), "1 for, 0 against: cannot pass without a quorum"),
        (Tally(0, 0, 0, 0, quorum_met=False, passes=False), "0 for, 0 against: cannot pass without a quorum"),
        (Tally(0, 0, 0, 0, quorum_met=True, passes=False), "nobody votes"),
    ],
)
def test_a_ballot_in_words(tally, said):
    assert words.ballot(tally) == said


@pytest.mark.parametrize("name", ["\u05de\u05e8\u05d9\u05dd", "\u0646\u0648\u0631 4", "Noor (\u0646\u0648\u0631)"])
def test_names_read_from_right_to_left_turn_round_nothing_but_themselves(name):
    """UAX #9, 6.1: text put into other text stands between FSI and PDI; rule P2 passes over it for the paragraph's
    direction."""
    told = f"{words.names(['a'], {'a': name})} listens to Ida: 30 of 100 points"
    assert told == f"\u2068{name}\u2069 listens to Ida: 30 of 100 points"
    assert words.without_marks(told) == f"{name} listens to Ida: 30 of 100 points"


@pytest.mark.parametrize(
    "name", ["Ida", "\u0391\u03bb\u03ad\u03be\u03b7\u03c2", "\u82b1\u5b50", "\u0e19\u0e34\u0e14"]
)
def test_names_read_from_left_to_right_stand_as_they_are(name):
    assert words.isolated(name) == name


def test_names_that_are_numbers_are_told_from_figures():
    people = {"p1": "7", "p2": "12 b", "p3": "3-4", "p4": "٤"}
    assert words.names(people, people) == '"7", 12 b, "3-4" and "٤"'


@pytest.mark.parametrize(
    ("test", "said"),
    [
        (AgreementTest("rand-ucla"), "RAND/UCLA"),
        (AgreementTest("share-within", low=7, high=9, at_least="3/4"), "3/4 within 7 to 9"),
        (AgreementTest("share-within", low=7, high=9, at_least=0.755), "75.5 % within 7 to 9"),
        (AgreementTest("quartile-range", at_most=1), "quartile range at most 1"),
        (AgreementTest("spread", at_most=0.0001), "spread at most 0.0001"),
    ],
)
def test_what_an_agreement_test_asks(test, said):
    assert words.agreement_test(test, Question("q", "t", 1, 9)) == said
