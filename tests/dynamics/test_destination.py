import numpy as np
import pytest
from exact import exact_shares, long_run_map
from hypothesis import given
from talk import as_numbers, plenary, point_matrices, talks

from deliberate.dynamics.destination import Eliminated, group_numbers
from deliberate.dynamics.process import course
from deliberate.dynamics.structure import ClosedSet, full_structure
from deliberate.dynamics.turns import turn_of


def reached(process) -> tuple[Eliminated, object]:
    turn = turn_of(course(process).lasting, process.firmness)
    return Eliminated(turn, full_structure(turn.kept, turn.brought.any(axis=1)).closed), turn


def set_of(*members: int) -> ClosedSet:
    return ClosedSet(np.array(members), 1, np.zeros(len(members), dtype=np.intp))


def test_group_numbers():
    assert group_numbers((set_of(1, 3), set_of(2)), 5).tolist() == [-1, 0, 1, 0, -1]
    assert group_numbers((), 2).tolist() == [-1, -1]


@given(point_matrices())
def test_averages_for_any_beliefs_are_those_of_the_exact_map(written):
    destination, _ = reached(plenary(as_numbers(written)))
    exact = np.array(long_run_map(exact_shares(written)), dtype=float)
    nothing = np.zeros(len(written))
    found = np.array([destination.average(beliefs, nothing) for beliefs in np.eye(len(written))]).T
    assert found == pytest.approx(exact, rel=1e-12)


@given(talks())
def test_the_average_is_a_fixed_point_of_its_turn(talk):
    process, starts = talk
    destination, turn = reached(process)
    average = destination.average(starts, starts)
    assert turn.apply(average, starts) == pytest.approx(average, abs=1e-13)
    assert destination.average(average, starts) == pytest.approx(average, abs=1e-13)


@given(talks())
def test_giving_back_answers_carrying_on(talk):
    """voice @ average = counts of beliefs + counts of starts, for any voice: an adjoint identity."""
    process, starts = talk
    destination, _ = reached(process)
    beliefs, voice = np.sqrt(starts + 0.5), np.linspace(0.2, 1.1, len(starts))
    to_beliefs, to_starts = destination.give_back(voice)
    assert to_beliefs.sum() + to_starts.sum() == pytest.approx(voice.sum(), rel=1e-13)
    carried = voice @ destination.average(beliefs, starts)
    assert to_beliefs @ beliefs + to_starts @ starts == pytest.approx(carried, rel=1e-12)
    assert (to_beliefs[destination.passing] == 0).all()
    assert (np.delete(to_starts, destination.firm) == 0).all()


@given(talks())
def test_views_of_groups_are_what_their_members_come_to(talk):
    process, starts = talk
    destination, _ = reached(process)
    average, views = destination.average(starts, starts), destination.group_views(starts)
    for group, view in zip(destination.groups, views, strict=True):
        assert average[group.members] == pytest.approx(np.full(len(group.members), view), abs=1e-15)
