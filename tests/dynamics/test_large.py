"""The way of large networks against elimination, on networks that both can do."""

import networkx as nx
import numpy as np
import pytest
from hypothesis import given
from talk import line, network_of, plenary, ring, talks

from deliberate.dynamics import large, longrun
from deliberate.dynamics.large import Iterated, large_structure, large_turn
from deliberate.dynamics.longrun import NOT_EXACT, long_run
from deliberate.dynamics.process import Block, Process, course
from deliberate.dynamics.shares import heard_at_tables, shares
from deliberate.errors import DeliberateError


@pytest.fixture
def as_large(monkeypatch) -> None:
    """Everybody counts as a large network."""
    monkeypatch.setattr(longrun, "FULL_PEOPLE", 0)
    monkeypatch.setattr(large, "FULL_PEOPLE", 0)


def both(process: Process, starts, **options) -> tuple[longrun.LongRun, longrun.LongRun]:
    """The long run by elimination, and by iteration."""
    eliminated = long_run(process, starts, **options)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(longrun, "FULL_PEOPLE", 0)
        patch.setattr(large, "FULL_PEOPLE", 0)
        return eliminated, long_run(process, starts, **options)


def assert_alike(eliminated, iterated, relative: float = 1e-9) -> None:
    assert [group.members.tolist() for group in iterated.groups] == [g.members.tolist() for g in eliminated.groups]
    assert [group.period for group in iterated.groups] == [group.period for group in eliminated.groups]
    assert [group.phases.tolist() for group in iterated.groups] == [g.phases.tolist() for g in eliminated.groups]
    for one, other in zip(iterated.groups, eliminated.groups, strict=True):
        assert one.influence == pytest.approx(other.influence, rel=relative)
    assert iterated.outside.tolist() == eliminated.outside.tolist()
    assert iterated.settles == eliminated.settles
    assert iterated.average == pytest.approx(eliminated.average, abs=relative)
    assert iterated.influence == pytest.approx(eliminated.influence, rel=relative, abs=1e-14)
    assert iterated.cycle_period == eliminated.cycle_period
    if eliminated.cycle is not None:
        assert iterated.cycle == pytest.approx(eliminated.cycle, abs=relative)


def crowd(people: int, hears: int, seed: int, camps: int = 1, cross: float = 0.0) -> np.ndarray:
    """Points at random, in camps that hear each other with `cross` through one arrow."""
    generator = np.random.default_rng(seed)
    points = np.zeros((people, people))
    camp = np.arange(people) * camps // people
    for person in range(people):
        near = np.flatnonzero(camp == camp[person])
        points[person, generator.choice(near, min(hears, len(near)), replace=False)] = generator.uniform(1, 9)
    for at in range(camps if cross else 0):
        points[np.argmax(camp == at), np.argmax(camp == (at + 1) % camps)] = cross
    return points + np.eye(people)


@given(talks())
def test_any_talk_leads_to_the_same(talk):
    process, starts = talk
    assert_alike(*both(process, starts))


@given(talks())
def test_groups_of_a_plan_followed_round_by_round_are_those_of_its_map(talk):
    process, _ = talk
    lasting = course(process).lasting
    layered = large_structure(large_turn(lasting, process.firmness)).closed
    turn = longrun.turn_of(lasting, process.firmness)
    full = longrun.full_structure(turn.kept, turn.brought.any(axis=1)).closed
    assert [(g.members.tolist(), g.period, g.phases.tolist()) for g in layered] == [
        (g.members.tolist(), g.period, g.phases.tolist()) for g in full
    ]


@pytest.mark.parametrize("seed", range(3))
def test_a_crowd(seed):
    points = crowd(400, 8, seed)
    starts = np.random.default_rng(seed).uniform(0, 1, 400)
    firmness = np.where(np.arange(400) % 9 == 0, 0.3, 0.0)
    assert_alike(*both(plenary(points), starts))
    assert_alike(*both(plenary(points, firmness), starts))


@pytest.mark.parametrize("cross", [1.0, 1e-3, 1e-6, 1e-9, 1e-13, 1e-100])
def test_camps_that_hardly_hear_each_other(cross):
    """Where plain iteration would take millions of rounds, or for ever, and its steps look like rounding."""
    eliminated, iterated = both(plenary(crowd(300, 6, 1, camps=3, cross=cross)), np.arange(300) / 299)
    assert_alike(eliminated, iterated)
    assert NOT_EXACT not in iterated.notes


def test_slow_groups_of_middling_size_are_eliminated(monkeypatch):
    """Cross weights of 1e-14 are beyond any iteration; groups up to the size of full arrays keep all their digits."""
    process, starts = plenary(crowd(120, 6, 1, camps=3, cross=1e-14)), np.arange(120) / 119
    eliminated = long_run(process, starts)
    monkeypatch.setattr(longrun, "FULL_PEOPLE", 0)
    iterated = long_run(process, starts)
    assert_alike(eliminated, iterated, 1e-12)


@pytest.mark.parametrize("leak", [1e-3, 1e-13])
def test_what_cannot_be_held_is_said(leak, as_large):
    """Camps of people outside who hear either end with next to nothing: below some leak doubles cannot tell."""
    points = np.zeros((302, 302))
    points[:300, :300] = crowd(300, 6, 1, camps=3, cross=leak)
    points[300, 300] = points[301, 301] = 1.0
    points[0, 300], points[299, 301] = leak, leak
    starts = np.arange(302) / 301
    found = long_run(plenary(points), starts)
    assert found.influence.sum() == pytest.approx(1)
    assert (found.influence >= 0).all()
    assert (NOT_EXACT in found.notes) == (leak < 1e-10)


def test_long_thin_networks_are_factored():
    """A ring of hundreds who hear their neighbours mixes too slowly for steps, and has small factors."""
    starts = np.random.default_rng(4).uniform(0, 1, 700)
    eliminated, iterated = both(plenary(ring(700, 1.0) + np.triu(ring(700))), starts)
    assert_alike(eliminated, iterated)
    passing = ring(600, 1.0)
    passing[0], passing[300] = np.eye(600)[0], np.eye(600)[300]
    assert_alike(*both(plenary(passing), starts[:600]))


def test_a_line_of_passing_people():
    starts = np.arange(300) / 299
    assert_alike(*both(plenary(line(300)), starts))
    two_ends = line(300)
    two_ends[150, 298] = 0.2
    two_ends[299] = np.eye(300)[299]
    assert_alike(*both(plenary(two_ends), starts))


def test_swings_carry_on_to_those_outside():
    points = np.zeros((60, 60))
    points[:4] = np.roll(np.eye(60), 1, axis=1)[:4]
    points[3, :] = np.eye(60)[0]
    points[4:7] = np.roll(np.eye(60), 1, axis=1)[4:7]
    points[6, :] = np.eye(60)[4]
    points[7:] = crowd(60, 5, 2)[7:]
    eliminated, iterated = both(plenary(points), np.random.default_rng(2).uniform(0, 1, 60))
    assert eliminated.cycle_period == 12
    assert_alike(eliminated, iterated)


def test_a_repeated_plan_of_a_crowd():
    network = network_of(crowd(150, 10, 3))
    tables = heard_at_tables(network, np.arange(150) % 10)
    blocks = (Block(tables, "own", 3), Block(None, "rescale", 2))
    process = Process(network, blocks, True, np.where(np.arange(150) % 7 == 0, 0.2, 0.0))
    eliminated, iterated = both(process, np.random.default_rng(3).uniform(0, 1, 150))
    assert_alike(eliminated, iterated)
    assert iterated.rate == pytest.approx(eliminated.rate, rel=0.02)


def test_influence_of_a_walk_on_a_large_graph(as_large):
    """Exact theorem: equal points to every neighbour give degree over total."""
    graph = nx.barabasi_albert_graph(500, 3, seed=1)
    degrees = np.array([degree for _, degree in graph.degree()])
    found = long_run(plenary(nx.to_numpy_array(graph)), np.zeros(500))
    assert found.influence == pytest.approx(degrees / degrees.sum(), rel=1e-9)


@given(talks())
def test_giving_back_answers_carrying_on_for_large_turns_too(talk):
    process, starts = talk
    turn = large_turn(course(process).lasting, process.firmness)
    reached = Iterated(turn, large_structure(turn).closed)
    beliefs, voice = np.sqrt(starts + 0.5), np.linspace(0.2, 1.1, len(starts))
    to_beliefs, to_starts = reached.give_back(voice)
    carried = voice @ reached.average(beliefs, starts)
    assert to_beliefs @ beliefs + to_starts @ starts == pytest.approx(carried, rel=1e-9)


def test_a_plan_with_too_many_arrows_in_all_is_refused(monkeypatch, as_large):
    monkeypatch.setattr(large, "MOST_LAYERED_ARROWS", 50)
    network = network_of(np.ones((5, 5)))
    process = Process(network, (Block(None, "own", 3),), True, np.zeros(5))
    with pytest.raises(DeliberateError, match="repeated plan"):
        long_run(process, np.zeros(5))


def test_a_round_matrix_keeps_tiny_shares_and_drops_those_of_the_fully_firm():
    matrix = shares(network_of(np.ones((2, 2))))
    turn = large_turn((course(plenary(np.ones((2, 2)))).lasting[0],), np.array([1.0, np.nextafter(1, 0)]))
    assert turn.matrix.toarray()[0].tolist() == [0, 0]
    assert (turn.matrix.toarray()[1] > 0).all()
    assert matrix.people == turn.people


def test_nobody_and_one_person(as_large):
    assert len(long_run(plenary(np.zeros((0, 0))), []).influence) == 0
    assert long_run(plenary([[1.0]]), [0.4]).limit.tolist() == [0.4]
    assert long_run(plenary([[1.0]], [0.5]), [0.4]).limit.tolist() == [0.4]
