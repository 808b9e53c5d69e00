import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.sparse import csr_array
from talk import in_other_order, line, network_of, plain_rounds, plenary, processes, ring, starts_of, talks

from deliberate.dynamics.longrun import final_map
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import block_at, play, scheduled
from deliberate.dynamics.shares import Shares, heard_at_tables, heard_from

ROUNDS = 9


def complete(people: int, unheard: str = "rescale") -> Process:
    """Everybody would hear everybody alike, herself included."""
    return Process(network_of(np.ones((people, people))), (Block(None, unheard, 1),), False, np.zeros(people))


def test_degroot():
    """DeGroot 1974, JASA 69:118-121 (from memory): second eigenvalue 1/4, so the spread is 4^-t."""
    played = play(plenary([[1, 1], [1, 3]]), [0, 1], 8)
    assert np.ptp(played, axis=1) == pytest.approx([4.0**-t for t in range(9)], rel=1e-12)


def test_round_0_is_the_start_and_no_round_needs_no_shares():
    assert play(plenary([[1, 1], [1, 3]]), [0.2, 0.9], 0).tolist() == [[0.2, 0.9]]


@given(talks())
def test_rounds_as_the_words_define_them(talk):
    process, starts = talk
    assert play(process, starts, ROUNDS) == pytest.approx(plain_rounds(process, starts, ROUNDS), abs=1e-14)


@given(talks(), st.sampled_from((0.0, 0.1, 0.25, 0.5, 1.0)))
def test_rounds_with_a_hearing_range_as_the_words_define_them(talk, reach):
    process, starts = talk
    found = play(process, starts, ROUNDS, hearing_range=reach)
    plain = plain_rounds(process, starts, ROUNDS, reach)
    gaps = np.abs(plain[:, :, None] - plain[:, None, :])
    assume(not (np.abs(gaps - reach - 1e-12) < 1e-13).any())  # there the two may rightly differ
    assert found == pytest.approx(plain, abs=1e-13)


@given(talks())
def test_a_hearing_range_as_wide_as_the_scale_changes_nothing(talk):
    process, starts = talk
    assert (play(process, starts, ROUNDS, hearing_range=1.0) == play(process, starts, ROUNDS)).all()


@given(talks())
def test_beliefs_stay_within_the_starts(talk):
    process, starts = talk
    for reach in (None, 0.3):
        played = play(process, starts, ROUNDS, hearing_range=reach)
        assert played.min() >= starts.min() - 1e-15
        assert played.max() <= starts.max() + 1e-15


@given(talks(firm=False))
def test_the_spread_never_rises_without_firmness(talk):
    process, starts = talk
    for reach in (None, 0.3):
        spread = np.ptp(play(process, starts, ROUNDS, hearing_range=reach), axis=1)
        assert (np.diff(spread) <= 1e-15).all()


@given(st.data())
def test_questions_side_by_side_are_questions_one_by_one(data):
    process = data.draw(processes())
    starts = np.stack([data.draw(starts_of(process)) for _ in range(3)], axis=1)
    for reach in (None, 0.3):
        together = play(process, starts, ROUNDS, hearing_range=reach)
        alone = [play(process, column, ROUNDS, hearing_range=reach) for column in starts.T]
        assert together == pytest.approx(np.stack(alone, axis=-1), abs=1e-15)
    assert play(process, starts[:, :0], ROUNDS, hearing_range=0.3).shape == (ROUNDS + 1, len(starts), 0)


@given(talks(), st.randoms(use_true_random=False))
def test_the_order_of_people_does_not_matter(talk, random):
    process, starts = talk
    order = list(range(len(starts)))
    random.shuffle(order)
    moved = play(in_other_order(process, np.array(order)), starts[order], ROUNDS)
    assert moved == pytest.approx(play(process, starts, ROUNDS)[:, order], abs=1e-15)


@given(talks())
def test_the_map_of_so_many_rounds_plays_them_at_once(talk):
    process, starts = talk
    played = play(process, starts, ROUNDS)
    for rounds in (0, 1, 4, ROUNDS):
        whole = final_map(process, rounds)
        assert whole.sum(axis=1) == pytest.approx(1, abs=1e-13)
        assert whole @ starts == pytest.approx(played[rounds], abs=1e-13)


def test_later_stages_multiply_on_the_left():
    """b(2) = T_2 T_1 b(0); the other order would give something else here."""
    network = network_of(np.ones((4, 4)))
    tables, panel = heard_at_tables(network, [0, 0, 1, 1]), heard_from(network, [True, False, False, False])
    process = Process(network, (Block(tables, "own", 1), Block(panel, "own", 1)), False, np.zeros(4))
    first, second = (leg.shares.matrix for leg in process.legs)
    assert not np.allclose(first @ second, second @ first)
    assert final_map(process, 2) == pytest.approx(second @ first, abs=1e-15)


@given(processes(), st.integers(0, 25))
def test_every_round_belongs_to_the_block_that_is_scheduled(process, rounds):
    steps = list(scheduled(process, rounds))
    assert steps == [process.legs[block_at(process, at)].shares for at in range(rounds)]
    for at in range(rounds):
        turn = sum(block.rounds for block in process.blocks)
        into = at % turn if process.repeat else min(at, turn - 1)
        index = block_at(process, at)
        begun = sum(block.rounds for block in process.blocks[:index])
        assert begun <= into < begun + process.blocks[index].rounds


def test_blocks_set_up_alike_share_one_matrix():
    network = network_of(np.ones((3, 3)))
    mask = heard_from(network, [True, False, False])
    blocks = (Block(mask, "own", 1), Block(None, "own", 2), Block(mask, "own", 3), Block(mask, "rescale", 1))
    legs = Process(network, blocks, False, np.zeros(3)).legs
    assert legs[0].shares is legs[2].shares
    assert len({id(leg.shares) for leg in legs}) == 3
    assert [leg.rounds for leg in legs] == [1, 2, 3, 1]


def test_full_and_sparse_rounds_agree():
    process = plenary(ring(30, 1.0))
    sparse = Shares(csr_array(process.legs[0].shares.matrix))
    beliefs = np.random.default_rng(1).uniform(0, 1, 30)
    played = play(process, beliefs, 40)
    for expected in played:
        assert beliefs == pytest.approx(expected, abs=1e-14)
        beliefs = sparse.hear(beliefs)


def test_a_firm_person_brings_her_start_back():
    """b(t+1) = F b(0) + (I - F) T b(t), worked by hand."""
    played = play(plenary([[1, 1], [1, 1]], [0.5, 0]), [1, 0], 3)
    assert played.tolist() == [[1, 0], [0.75, 0.5], [0.8125, 0.625], [0.859375, 0.71875]]


def test_a_line_is_not_as_quick_as_its_eigenvalues():
    """Own share 0.1, the one before 0.9: the second modulus is 0.1, yet 40 people need 49 rounds."""
    spread = np.ptp(play(plenary(line(40)), [1.0] + [0.0] * 39, 49), axis=1)
    assert (spread[:39] == 1).all()
    assert spread[48] > 0.01 >= spread[49]


def test_beliefs_exactly_at_the_range_are_heard():
    """Hegselmann and Krause 2002: |b_j - b_i| <= r; 0.1 + 0.2 is more than 0.3 in doubles and must be heard."""
    starts = np.array([0.3, 0.1 + 0.2, 0.6])
    played = play(complete(3), starts, 1, hearing_range=0.3)
    assert played[1] == pytest.approx([0.4, 0.4, 0.4])
    wide = play(complete(2), [0, 1e6], 1, hearing_range=1e6 - 1e-7, scale_width=1e6)
    assert wide[1] == pytest.approx([5e5, 5e5])
    assert play(complete(2), [0, 1], 1, hearing_range=1 - 1e-7)[1].tolist() == [0, 1]


def test_wrong_processes_are_refused():
    network = network_of(np.ones((2, 2)))
    with pytest.raises(ValueError, match="firmness"):
        Process(network, (Block(None, "own", 1),), False, np.zeros(3))
    with pytest.raises(ValueError, match="block"):
        Process(network, (), False, np.zeros(2))
    with pytest.raises(ValueError, match="block"):
        Process(network, (Block(None, "own", 0),), False, np.zeros(2))
