import math
import re

import msgspec
import numpy as np
import pytest
from harbour import HARBOUR
from hypothesis import given, settings
from hypothesis import strategies as st
from meetings import meeting, meetings
from strategies import scenarios

from deliberate.rehearsal.doubt import doubt
from deliberate.rehearsal.doubt_report import doubt_summary, doubt_to_json
from deliberate.rehearsal.doubt_results import LEVELS, Concentration, FindingOdds, Odds, call_of
from deliberate.rehearsal.doubt_words import holds, in_draws, says_vote
from deliberate.rehearsal.page import CAUTION
from deliberate.rehearsal.results import Finding, Kind
from deliberate.scenario import edits
from deliberate.scenario.values import Question

VOTE = Question("q", "Adopt the plan?", 0, 100, pass_mark=50)
JUDGING = re.compile(r"stubborn|blocker|\bweak|predict|certain\b|will pass|surely", re.IGNORECASE)


@pytest.mark.parametrize(("hits", "draws"), [(0, 10), (3, 10), (10, 10), (50, 100), (2_000, 2_048)])
def test_errors_of_odds_are_wilsons(hits, draws):
    """Half of Wilson's interval for one standard deviation: the p with (p - hits/draws)^2 = p (1 - p) / draws (Wilson
    1927, JASA 22:209, from memory), from the roots of that equation."""
    share = hits / draws
    low, high = sorted(np.roots([1 + 1 / draws, -(2 * share + 1 / draws), share**2]).real)
    odds = Odds.of(hits, draws)
    assert odds.share == share
    assert odds.error == pytest.approx((high - low) / 2, rel=1e-9)
    assert odds.error > 0
    assert odds.against == Odds(1 - share, odds.error, odds.sure)
    commoner, squared = max(share, 1 - share), 4 / draws  # two standard deviations
    assert odds.sure == pytest.approx(min(np.roots([1 + squared, -(2 * commoner + squared), commoner**2]).real))


@pytest.mark.parametrize(
    ("hits", "draws", "call"),
    [
        (1_024, 2_048, "too-close"),
        (1_270, 2_048, "too-close"),
        (1_660, 2_048, "too-close"),  # 81 of 100, may be below 80
        (1_700, 2_048, "leans"),
        (348, 2_048, "leans"),
        (1_950, 2_048, "leans"),  # 95.2 of 100, may be below 95
        (1_980, 2_048, "nearly-all"),
        (2_047, 2_048, "nearly-all"),
        (2_048, 2_048, "all"),
        (0, 2_048, "all"),
        (20, 20, "leans"),  # twenty draws that agree do not show much
        (3, 3, "too-close"),
        (90, 100, "leans"),
    ],
)
def test_the_call_is_never_surer_than_the_draws(hits, draws, call):
    assert call_of(Odds.of(hits, draws)) == call


def test_more_draws_of_the_same_share_never_make_the_call_less_sure():
    order = ["too-close", "leans", "nearly-all", "all"]
    for share in (0.5, 0.8, 0.9, 0.96, 1.0):
        calls = [order.index(call_of(Odds.of(share * draws, draws))) for draws in (50, 500, 5_000, 50_000)]
        assert calls == sorted(calls)


@pytest.mark.parametrize(
    ("share", "said"),
    [
        (0, "none of 2,048 draws"),
        (1 / 2048, "fewer than 1 of 100 draws"),
        (0.62, "62 of 100 draws"),
        (2047 / 2048, "more than 99 of 100 draws"),
        (1, "all 2,048 draws"),
    ],
)
def test_draws_in_words(share, said):
    assert in_draws(Odds.of(share * 2_048, 2_048), 2_048) == said


@pytest.mark.parametrize(
    ("hits", "said"),
    [
        (1_270, "At the plan's end it passes in 62 of 100 draws: too close to call."),
        (778, "At the plan's end it does not pass in 62 of 100 draws: too close to call."),
        (1_800, "At the plan's end it passes in 88 of 100 draws: it leans that way, and may go the other."),
        (20, "At the plan's end it does not pass in 99 of 100 draws: as sketched, hardly in doubt."),
        (2_048, "At the plan's end it passes in all 2,048 draws: as sketched, not in doubt."),
    ],
)
def test_the_vote_in_words(hits, said):
    assert says_vote(Odds.of(hits, 2_048), 2_048, quorum_met=True) == said


@pytest.mark.parametrize(
    ("kind", "hits", "said"),
    [
        ("settles", 2_048, "In all 2,048 draws, with figures of its own in each."),
        ("closed-groups", 1_024, "In 50 of 100 draws, with figures of its own in each."),
        ("slow", 0, "In none of 2,048 draws."),
        ("agreement", 1_024, "In 50 of 100 draws."),
        ("vote", 1_024, "The same outcome in 50 of 100 draws."),
        ("knife-edge", 1_024, "The same change turns the vote in 50 of 100 draws."),
    ],
)
def test_what_holds_in_the_draws_holds_with_their_figures(kind, hits, said):
    """All may settle in every draw, and yet each time on another view."""
    finding = Finding(kind, "All settle on 45.", "Everybody hears everybody.", ("a", "b"), {})
    assert holds(FindingOdds(finding, Odds.of(hits, 2_048), by_structure=False), 2_048) == said


def test_a_whole_page():
    people = {"a": {"name": "Amina", "margins": {"q": 10.0}}, "b": {"name": "Bilal", "margins": {"q": 10.0}}}
    scenario = meeting([[1, 1], [1, 1]], [49, 57], question=VOTE, people=people)
    found = doubt(scenario, concentration=Concentration(guess=1e9))
    page = doubt_summary(scenario, found)
    lines = page.splitlines()
    assert lines[:2] == ["A test", "Adopt the plan?"]
    assert lines[5].split() == ["mean", "spread", "for", "against", "passes"]
    assert lines[6].startswith("Start")
    assert lines[8].startswith("Long run")
    assert "Sampling error of the odds: up to 1.1 of 100" in page.replace("\n", " ")
    hundredths = round(100 * found.vote.passes[-1].share)
    assert f"Vote     At the plan's end it passes in {hundredths} of 100 draws" in page
    assert "give or take 0 where guessed, 7 where" in page.replace("\n         ", " ")
    assert "Views at the plan's end in 8 of 10 draws, the widest first\n  Amina: " in page
    assert "What stands out, and in how many draws it does\n  1. " in page
    assert "Worth asking about again (sampling error of the shares: up to" in page
    assert page.endswith(f"\n\n{CAUTION}\n")


def test_the_widest_of_many_are_shown_without_the_absent():
    people = {one: {"margins": {"q": 5.0 + at}} for at, one in enumerate("abcdefghijkl")}
    people["l"]["present"] = False
    scenario = meeting(np.eye(12), [50] * 12, people=people)
    page = doubt_summary(scenario, doubt(scenario))
    assert "Views at the plan's end in 8 of 10 draws, the widest 8 of 11\n  k: 38.0 to 62.0" in page
    assert "\n  l: " not in page


def test_nothing_in_doubt_is_said_plainly():
    scenario = meeting([[1, 0], [0, 1]], [40, 60])
    page = doubt_summary(scenario, doubt(scenario))
    assert "No single guess explains a telling part of the doubt about the mean view" in page
    assert "Note: two present people have no margin, so those starts are taken as known.\n" in page
    assert "Views at the plan's end" not in page
    assert "The mean view at the plan's end is 50 in at least 8 of 10 draws." in page


# fmt: off
KEYS = [
    "format", "version", "variant", "question", "people", "draws", "seed", "concentration", "levels", "beliefs",
    "long_run", "mean", "mean_in_long_run", "spread", "spread_in_long_run", "settles", "agrees", "tolerance",
    "ballot", "ballot_in_long_run", "findings", "hangs_about", "hangs_on", "says", "notes",
]
# fmt: on


def numbers_in(data):
    """All numbers, however deep."""
    match data:
        case dict():
            return [number for value in data.values() for number in numbers_in(value)]
        case list():
            return [number for value in data for number in numbers_in(value)]
        case bool() | str() | None:
            return []
        case _:
            return [data]


def test_json_of_the_harbour():
    found = doubt(HARBOUR, concentration=Concentration(observed=math.inf))
    data = msgspec.json.decode(msgspec.json.encode(doubt_to_json(found)))
    assert list(data) == KEYS
    assert (data["format"], data["version"]) == ("deliberate-doubt", 1)
    assert data["concentration"] == {"guess": 10, "stated": 40, "observed": None}
    assert data["levels"] == list(LEVELS)
    assert np.shape(data["beliefs"]) == (5, 13, 4)
    assert data["beliefs"] == found.beliefs.tolist()
    assert [list(tally) for tally in data["ballot"]] == [["passes", "for", "against", "quorum_met"]] * 13
    assert data["ballot"][12]["passes"] == {
        "share": found.vote.passes[12].share,
        "error": found.vote.passes[12].error,
    }
    in_long_run = found.vote.passes_in_long_run
    assert data["ballot_in_long_run"] == {
        "passes": {"share": in_long_run.share, "error": in_long_run.error},
        "quorum_met": True,
    }
    assert all(list(one) == ["kind", "says", "holds", "by_structure"] for one in data["findings"])
    assert all(list(one) == ["kind", "person", "share", "error", "says"] for one in data["hangs_on"])
    assert {one["kind"] for one in data["findings"]} <= set(Kind.__args__)


def test_a_question_without_a_vote_has_no_ballot():
    data = doubt_to_json(doubt(HARBOUR, question="days", draws=20))
    assert data["ballot"] is None
    assert data["ballot_in_long_run"] is None


@pytest.mark.parametrize(("present", "told"), [(0, []), (1, ["Settles"]), (2, ["Agree", "Settles"])])
def test_nothing_is_said_of_views_where_nobody_is_there_to_hold_them(present, told):
    absent = [person.id for person in HARBOUR.variants[0].people[present:]]
    scenario = edits.set_presence(HARBOUR, absent, False, variant=HARBOUR.variants[0].name)
    page = doubt_summary(scenario, doubt(scenario, draws=20))
    labels = [line.split()[0] for line in page.splitlines() if line[:1].isupper()]
    assert [label for label in labels if label in ("Agree", "Settles")] == told
    assert ("8 of 10 draws lie within" in page) == (present > 0)
    assert ("explains a telling part" in page or "Worth asking" in page) == (present > 0)


@settings(max_examples=60)
@given(st.one_of(meetings(), scenarios()))
def test_any_meeting_gives_finite_numbers_and_a_readable_page(scenario):
    found = doubt(scenario, draws=30)
    assert all(math.isfinite(number) for number in numbers_in(doubt_to_json(found)))
    page = doubt_summary(scenario, found)
    assert page.endswith(f"{CAUTION}\n")
    assert all(len(line) <= 80 for line in page.splitlines() if line.isascii())
    names = {person.shown_name for variant in scenario.variants for person in variant.people}
    said = [found.says, *found.notes, *(guess.says for guess in found.hangs_on)]
    for text in said:
        for name in names:
            text = text.replace(name, "")
        assert not JUDGING.search(text)
        assert "nan" not in text
        assert "inf" not in text
    assert all(text.endswith(".") for text in (found.says, *(guess.says for guess in found.hangs_on)))
