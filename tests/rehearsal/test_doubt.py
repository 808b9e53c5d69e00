import math
from itertools import pairwise

import numpy as np
import pytest
from harbour import HARBOUR, MIXED
from hypothesis import given, settings
from hypothesis import strategies as st
from meetings import meeting, meetings
from msgspec.structs import replace
from strategies import scenarios

from deliberate.errors import DeliberateError
from deliberate.rehearsal.doubt import DRAWS, MOST_NUMBERS, doubt
from deliberate.rehearsal.doubt_results import LEVELS, Concentration
from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario.values import AgreementTest, Arrow, Ballot, BallotTest, FrozenDict, Plan, Question, Stage

KNOWN = Concentration(math.inf, math.inf, math.inf)
VOTE = Question("q", "What is asked?", 0, 100, pass_mark=50)
TALKED_OUT = Plan((Stage(rounds=1),))
HALVES = [[1, 1], [1, 1]]
VERDICT = (AgreementTest("spread", at_most=10.5),)


def with_margins(margins, ids="abcdefghijklmnop"):
    return {one: {"margins": {"q": margin}} for one, margin in zip(ids, margins, strict=False)}


def near(odds, exact):
    """Within four standard errors."""
    return abs(odds.share - exact) <= 4 * odds.error


# Known answers


def test_odds_of_two_uniform_starts_that_meet_halfway():
    """The sum of two uniform variates on [-1, 1] has the triangular distribution on [-2, 2]. The mean of 50 +- 10 and
    52 +- 10 is 51 + 5 (U + V), above 50 where U + V > -0.2: 1 - 1.8^2 / 8 = 0.595."""
    scenario = meeting(HALVES, [50, 52], question=VOTE, plan=TALKED_OUT, people=with_margins([10, 10]))
    found = doubt(scenario, concentration=KNOWN)
    assert near(found.vote.passes[1], 0.595)
    assert near(found.vote.passes_in_long_run, 0.595)
    # Before they talk both have to be above 50 for more than half of the two votes: 0.5 * 0.6.
    assert near(found.vote.passes[0], 0.5 * 0.6)
    # Quantile p of the triangular distribution, on either side: -2 + sqrt(8 p) and 2 - sqrt(8 (1 - p)).
    quantiles = [-2 + math.sqrt(8 * p) if p < 0.5 else 2 - math.sqrt(8 * (1 - p)) for p in LEVELS]
    for person in (0, 1):
        assert found.beliefs[:, 1, person] == pytest.approx([51 + 5 * q for q in quantiles], abs=0.2)
    assert found.beliefs[:, 0, 0] == pytest.approx([40 + 20 * p for p in LEVELS], abs=0.1)
    hundredths = round(100 * found.vote.passes[1].share)
    assert found.says == f"At the plan's end it passes in {hundredths} of 100 draws: too close to call."


def test_odds_of_many_uniform_starts_are_nearly_normal():
    """Twelve starts 49 +- 6: their mean has the mean 49 and variance 36 / 3 / 12 = 1, so it is above 50 with the
    chance that a standard normal variate is above 1, 0.1587 (central limit; the Irwin-Hall sum of twelve)."""
    scenario = meeting(np.ones((12, 12)), [49] * 12, question=VOTE, plan=TALKED_OUT, people=with_margins([6] * 12))
    found = doubt(scenario, concentration=KNOWN, draws=8_192)
    assert near(found.vote.passes[1], 0.1587)
    assert found.mean[:, 1] == pytest.approx(49 + np.array([-1.2816, -0.6745, 0, 0.6745, 1.2816]), abs=0.06)


def test_odds_of_a_beta_row():
    """Who gives half her points to each of two views, 0 and 100, drawn with k = 10, has the belief 100 Beta(5, 5):
    above 60 with the chance I_0.4(5, 5) = sum over j >= 5 of C(9, j) 0.4^j 0.6^(9 - j) = 0.26657."""
    question = replace(VOTE, pass_mark=60.0)
    points = [[0, 1, 1], [0, 1, 0], [0, 0, 1]]
    ballots = {"b": {"ballots": 0.0}, "c": {"ballots": 0.0}}
    found = doubt(meeting(points, [50, 0, 100], question=question, plan=TALKED_OUT, people=ballots))
    exact = sum(math.comb(9, j) * 0.4**j * 0.6 ** (9 - j) for j in range(5, 10))
    assert near(found.vote.passes[1], exact)
    assert found.notes == ("three present people have no margin, so those starts are taken as known",)


def test_margins_end_with_the_scale():
    """95 +- 10 on a scale up to 100 is anything from 85 to 100 alike."""
    found = doubt(meeting([[1]], [95], people=with_margins([10])))
    assert found.beliefs[:, 0, 0] == pytest.approx([85 + 15 * p for p in LEVELS], abs=0.1)


def test_an_unknown_start_is_anything_on_the_scale():
    found = doubt(meeting([[1]], [None], question=replace(VOTE, pass_mark=25.0)))
    assert found.beliefs[:, 0, 0] == pytest.approx([100 * p for p in LEVELS], abs=0.5)
    assert near(found.vote.passes[0], 0.75)
    assert found.notes == ()


def test_what_the_mean_hangs_on():
    """The mean of four starts after full talk has variance shares w^2 m^2 over their sum: 9 + 4 + 1 + 0.04 parts."""
    margins = [3, 2, 1, 0.2]
    found = doubt(
        meeting(np.ones((4, 4)), [50] * 4, plan=TALKED_OUT, people=with_margins(margins)), concentration=KNOWN
    )
    assert found.hangs_about == "mean"
    assert [(guess.kind, guess.person) for guess in found.hangs_on] == [
        ("start", "a"),
        ("start", "b"),
        ("start", "c"),
    ]
    for guess, margin in zip(found.hangs_on, margins, strict=False):
        assert abs(guess.share - margin**2 / 14.04) < 4 * guess.error
    assert found.hangs_on[0].says == (
        f"Where a starts, between 47 and 53: about {100 * found.hangs_on[0].share:.0f} % of the doubt about the mean"
        " view at the plan's end."
    )


def test_what_the_vote_hangs_on():
    """One person's row decides alone: everything but its own noise hangs on it, and starts with margins elsewhere do
    not come up."""
    points = [[0, 1, 1], [0, 1, 0], [0, 0, 1]]
    people = {"b": {"ballots": 0.0}, "c": {"ballots": 0.0}, "a": {"margins": {"q": 20.0}}}
    found = doubt(meeting(points, [50, 0, 100], question=VOTE, plan=TALKED_OUT, people=people))
    assert found.hangs_about == "vote"
    (guess,) = found.hangs_on
    assert (guess.kind, guess.person) == ("row", "a")
    # A step at the median explained by a straight line: the squared correlation of Beta(5, 5) with it is about 0.63.
    assert guess.share == pytest.approx(0.63, abs=0.05)
    assert guess.says.startswith("Whose view counts how much for a (guessed): about 6")


def test_noise_is_not_reported():
    """Sixteen equal guesses explain a sixteenth each, and a seventeenth that counts for nothing is never told."""
    found = doubt(meeting([[1, 0], [0, 1]], [50, 50], people={"a": {"margins": {"q": 5.0}, "present": False}}))
    assert found.hangs_on == ()


def test_a_knife_edge_turns_as_often_as_the_change_is_wide():
    """A belief of 51 +- 10 alone: the same change of -1 (and a hair) turns the vote where it lies within 1 above the
    mark, in 1 of 20 draws."""
    scenario = meeting([[1]], [51], question=VOTE, people=with_margins([10]))
    (edge,) = (odds for odds in doubt(scenario).findings if odds.finding.kind == "knife-edge")
    assert near(edge.odds, abs(edge.finding.figures["change"]) / 20)


def test_a_person_who_carries_the_result_does_so_in_part_of_the_draws():
    """Two people who hear each other: the influence of b is a's points over both, T_ab / (T_ab + T_ba)."""
    scenario = meeting([[0.1, 0.9], [0.4, 0.6]], [0, 100])
    (carries,) = (odds for odds in doubt(scenario).findings if odds.finding.kind == "carries")
    draw = np.random.default_rng(5)
    given, back = draw.beta(9, 1, 100_000), draw.beta(4, 6, 100_000)
    assert carries.finding.people == ("b",)
    assert near(carries.odds, float((given / (given + back) > 2 / 3).mean()))


# Nothing in doubt


def without_doubt(scenario):
    """Every start known exactly."""
    question = scenario.questions[0]
    variant = scenario.variants[0]
    people = tuple(
        replace(
            person,
            beliefs=FrozenDict({**person.beliefs, question.id: person.beliefs.get(question.id, question.middle)}),
            margins=FrozenDict(),
        )
        for person in variant.people
    )
    return replace(scenario, variants=(replace(variant, people=people), *scenario.variants[1:]))


@given(st.one_of(meetings(), scenarios()))
def test_without_doubt_every_draw_is_the_plain_rehearsal(scenario):
    scenario = without_doubt(scenario)
    question, rehearsal = scenario.questions[0], rehearse(scenario)
    found = doubt(scenario, draws=3, concentration=KNOWN)
    for level in range(len(LEVELS)):
        assert found.beliefs[level] == pytest.approx(rehearsal.rounds, abs=1e-9 * question.width, rel=1e-9)
    if rehearsal.ballot is not None:
        assert [odds.share == 1 for odds in found.vote.passes] == [tally.passes for tally in rehearsal.ballot]
    if question.hearing_range is None:
        assert found.long_run[0] == pytest.approx(rehearsal.long_run_average, abs=1e-8 * question.width, rel=1e-8)
        assert (found.settles.share == 1) == rehearsal.settles
        looked_at = [odds for odds in found.findings if odds.odds is not None]
        assert [odds.finding.kind for odds in looked_at if odds.odds.share < 1] == []
    assert [odds.finding for odds in found.findings] == list(findings(scenario, rehearsal))
    assert found.hangs_on == ()


# Any meeting


@settings(max_examples=60)
@given(st.one_of(meetings(), scenarios()), st.sampled_from([1, 2, 70]))
def test_any_meeting_has_ordered_finite_bands(scenario, draws):
    question = scenario.questions[0]
    found = doubt(scenario, draws=draws)
    slack = 1e-9 * max(question.width, abs(question.low), abs(question.high))
    for bands in (found.beliefs, found.long_run, found.spread, found.spread_in_long_run, found.mean):
        assert np.isfinite(bands).all()
        assert (np.diff(bands, axis=0) >= 0).all()
        assert not bands.flags.writeable
    for bands in (found.beliefs, found.long_run):
        assert (bands >= question.low - slack).all()
        assert (bands <= question.high + slack).all()
    for odds in found.findings:
        assert odds.odds is None or 0 <= odds.odds.share <= 1
    assert found.draws == draws
    assert (found.vote is None) == (question.pass_mark is None)


@given(meetings())
def test_structure_is_the_same_in_all_draws(scenario):
    """Findings that hold by structure say so; everything else is looked at, but for what needs a spectrum."""
    for odds in doubt(scenario, draws=2).findings:
        if odds.by_structure:
            assert odds.odds.share == 1
            assert odds.odds.error == 0
        elif scenario.questions[0].hearing_range is None:
            assert (odds.odds is None) == (odds.finding.kind in ("bridge", "slow"))


def test_equal_people_have_equal_doubt():
    """Everybody hears all alike from the same start with the same margin: all bands are the same up to chance."""
    scenario = meeting(np.ones((5, 5)), [50] * 5, plan=TALKED_OUT, people=with_margins([10] * 5))
    found = doubt(scenario)
    assert np.ptp(found.beliefs[:, 1], axis=1).max() < 0.6
    assert found.beliefs[:, 1, 0] - 50 == pytest.approx(-(found.beliefs[::-1, 1, 0] - 50), abs=0.6)


def test_a_mirrored_meeting_has_mirrored_odds():
    points = [[2, 1, 0], [1, 1, 2], [3, 0, 1]]
    beliefs, people = np.array([40, 55, 60]), with_margins([10, 15, 5])
    found = doubt(meeting(points, beliefs, question=VOTE, people=people))
    mirrored = doubt(meeting(points, 100 - beliefs, question=VOTE, people=people))
    for one, other in zip(found.vote.passes, mirrored.vote.passes, strict=True):
        assert abs(one.share - (1 - other.share)) < 4 * math.hypot(one.error, other.error)


def test_looser_guesses_widen_the_bands():
    points = [[50, 30, 20], [10, 80, 10], [25, 25, 50]]
    widths = [
        np.ptp(doubt(meeting(points, [10, 50, 90]), concentration=Concentration(guess=k)).mean[:, -1])
        for k in (3, 10, 100, 1e6)
    ]
    assert all(wider > 1.5 * narrower for wider, narrower in pairwise(widths))


def test_arrows_are_drawn_by_their_basis():
    scenario = meeting(HALVES, [0, 100], plan=TALKED_OUT)
    (variant,) = scenario.variants
    widths = []
    for basis in ("guess", "stated", "observed"):
        arrows = tuple(Arrow(arrow.listener, arrow.source, arrow.weight, basis) for arrow in variant.arrows)
        found = doubt(replace(scenario, variants=(replace(variant, arrows=arrows),)))
        widths.append(found.beliefs[-1, 1, 0] - found.beliefs[0, 1, 0])
    # sqrt(0.25 / (k + 1)) for k = 10, 40, 160, times 2 * 1.28 for 8 of 10 draws, nearly normal
    assert widths == pytest.approx([38, 20, 10.1], rel=0.06)


# Seeds, stopping, mistakes


def arrays(found):
    return [found.beliefs, found.long_run, found.mean, found.spread, found.vote.in_favour, found.vote.against]


def test_the_same_seed_gives_the_same_numbers():
    first, again = doubt(HARBOUR), doubt(HARBOUR)
    assert all(np.array_equal(one, other) for one, other in zip(arrays(first), arrays(again), strict=True))
    assert (first.vote.passes, first.hangs_on) == (again.vote.passes, again.hangs_on)
    other = doubt(HARBOUR, seed=2)
    assert not np.array_equal(first.beliefs, other.beliefs)
    for one, two in zip(first.vote.passes, other.vote.passes, strict=True):
        assert abs(one.share - two.share) <= 6 * max(one.error, two.error)
    assert first.draws == DRAWS >= 2_000
    assert doubt(HARBOUR, MIXED, "days").variant == MIXED


def test_progress_runs_from_0_to_1():
    parts = []
    doubt(HARBOUR, draws=1_000, progress=parts.append)
    assert parts[0] == 0
    assert parts[-1] == 1
    assert len(parts) > 3
    assert parts == sorted(parts)


def test_stopping_gives_what_was_drawn_so_far():
    parts = []
    found = doubt(HARBOUR, draws=1_000, progress=parts.append, stopped=lambda: len(parts) > 2)
    assert 0 < found.draws < 1_000
    assert found.draws == parts[-1] * 1_000
    assert found.beliefs.shape == (5, 13, 4)
    assert found.notes[0] == f"stopped after {found.draws} of 1,000 draws"
    assert found.says == doubt(HARBOUR, draws=found.draws).says


def test_stopping_before_the_first_draw_gives_nothing():
    assert doubt(HARBOUR, stopped=lambda: True) is None


def test_stopping_while_stepping():
    """With a hearing range, the stop is seen while the long run of the first draws is looked for."""
    asked = []
    scenario = meeting(np.ones((3, 3)), [0, 50, 100], question=replace(VOTE, hearing_range=60.0))
    assert doubt(scenario, stopped=lambda: asked.append(1) or len(asked) > 14) is None


@pytest.mark.parametrize(
    ("asked", "said"),
    [
        ({"draws": 0}, "draws: must be 1 or more, is 0"),
        ({"seed": -1}, "seed: must be 0 or more, is -1"),
        ({"concentration": Concentration(stated=0)}, "stated: must be more than 0, is 0"),
        ({"concentration": Concentration(guess=math.nan)}, "guess: must be more than 0, is nan"),
        ({"variant": "X"}, 'variant: there is no "X"'),
        ({"question": "X"}, 'question: there is no "X"'),
        ({"draws": MOST_NUMBERS}, "ask for fewer draws"),
    ],
)
def test_what_makes_no_sense_is_said(asked, said):
    with pytest.raises(DeliberateError, match=said.replace("(", r"\(")):
        doubt(HARBOUR, **asked)


# Special meetings


def test_without_a_quorum_nothing_passes_whatever_the_views():
    people = {"a": {"present": False}, "b": {"present": False}, "c": {"margins": {"q": 40.0}}}
    found = doubt(meeting(np.ones((3, 3)), [60, 60, 60], question=VOTE, people=people))
    assert found.says == "It cannot pass without a quorum, whatever the views are."
    assert all(odds.share == 0 for odds in found.vote.passes)
    assert not found.vote.quorum_met


def test_the_absent_do_not_widen_the_spread_or_move_the_mean():
    people = {"c": {"present": False, "margins": {"q": 50.0}}}
    found = doubt(meeting(np.ones((3, 3)), [60, 60, 0], people=people))
    assert found.spread == pytest.approx(np.zeros((5, 13)), abs=1e-9)
    assert found.mean == pytest.approx(np.full((5, 13), 60))


def test_a_swing_has_no_vote_in_the_long_run():
    found = doubt(meeting([[0, 1], [1, 0]], [40, 61], question=VOTE, people=with_margins([5, 5])))
    assert found.settles.share == 0
    assert found.vote.passes_in_long_run is None
    assert found.long_run[2] == pytest.approx([50.5, 50.5], abs=0.2)
    assert "views swing in all 2,048 draws; long-run figures are averages over the swing" in found.notes
    (swing,) = (odds for odds in found.findings if odds.finding.kind == "swing")
    assert swing.odds.share == 1


def test_a_hearing_range_is_stepped_and_said():
    question = replace(VOTE, hearing_range=30.0)
    scenario = meeting(np.ones((2, 2)), [40, 75], question=question, people=with_margins([10, 10]))
    found = doubt(scenario, concentration=KNOWN)
    # They hear each other where the difference 35 + 10 (U + V) is at most 30: U + V <= -0.5, (1.5)^2 / 8 = 0.28125.
    assert near(found.agrees, 0.28125)
    assert found.settles.share == 1
    assert "the long run is found by stepping because of a hearing range" in found.notes


def test_agreement_tests_are_counted():
    """Two people 10 +- 10 apart before, the spread at the plan's end is what it is: no arrows."""
    question = Question("q", "t", 0, 100, agreement=VERDICT)
    found = doubt(meeting([[1, 0], [0, 1]], [40, 50], question=question, people=with_margins([5, 5])))
    (verdict,) = (odds for odds in found.findings if odds.finding.kind == "agreement")
    # The difference is 10 + 5 (U + V) > 10.5 where U + V > 0.1: (2 - 0.1)^2 / 8 = 0.45125; in the sketch it is met.
    assert near(verdict.odds, 1 - 0.45125)


def test_weighted_ballots_are_counted_in_ballots():
    people = {"a": {"ballots": 2.5, "margins": {"q": 10.0}}, "b": {"ballots": 1.0}}
    ballot = Ballot(tests=(BallotTest("for", at_least="2/3"),))
    found = doubt(meeting([[1, 0], [0, 1]], [50, 40], question=VOTE, ballot=ballot, people=people))
    assert near(found.vote.passes[-1], 0.5)
    assert found.vote.in_favour[[0, -1], -1].tolist() == [0, 2.5]
    assert found.vote.against[[0, -1], -1].tolist() == [1, 3.5]
