import numpy as np
from hypothesis import given
from talk import network_of, processes

from deliberate.dynamics.process import Block, Process, course


def three_blocks(repeat: bool) -> Process:
    network = network_of(np.ones((2, 2)))
    blocks = (Block(None, "own", 2), Block(np.zeros(2, dtype=bool), "own", 3), Block(None, "rescale", 4))
    return Process(network, blocks, repeat, np.zeros(2))


def test_the_last_block_goes_on_for_ever():
    track = course(three_blocks(repeat=False))
    assert [leg.rounds for leg in track.before] == [2, 3]
    assert [leg.rounds for leg in track.lasting] == [1]
    assert (track.rounds_in_turn, track.turns_before, track.rounds_before) == (1, 5, 5)


def test_a_plan_that_is_repeated_has_nothing_before_it():
    track = course(three_blocks(repeat=True))
    assert track.before == ()
    assert [leg.rounds for leg in track.lasting] == [2, 3, 4]
    assert (track.rounds_in_turn, track.turns_before, track.rounds_before) == (9, 0, 0)


@given(processes())
def test_legs_follow_the_blocks_and_are_built_once(process):
    assert process.legs is process.legs
    assert [leg.rounds for leg in process.legs] == [block.rounds for block in process.blocks]
    track = course(process)
    assert track.lasting[-1].shares is process.legs[-1].shares
    assert track.held is None
