"""A whole course of talk: the network, the stages one after the other, and what goes on after the last."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from deliberate.dynamics.network import Floats, Mask, Network
from deliberate.dynamics.shares import Shares, Unheard, shares


@dataclass(frozen=True, eq=False)
class Block:
    """So many `rounds` in which the arrows in `heard` (m,) count (None: all of them)."""

    heard: Mask | None
    unheard: Unheard
    rounds: int


@dataclass(frozen=True, eq=False)
class Leg:
    """So many `rounds` with one share matrix."""

    shares: Shares
    rounds: int


@dataclass(frozen=True, eq=False)
class Process:
    """b(t+1) = F b(0) + (I - F) T(t) b(t), with T(t) the shares of the block that round t+1 belongs to.

    After the last block its shares stay for ever, or, with `repeat`, the blocks are gone through again and again.
    firmness: (n,) in [0, 1], the part of the starting belief that a person brings back in every round (Friedkin
    and Johnsen 1990; their susceptibility is 1 - f). Share matrices are built once and kept.
    """

    network: Network
    blocks: tuple[Block, ...]
    repeat: bool
    firmness: Floats

    def __post_init__(self) -> None:
        object.__setattr__(self, "firmness", np.ascontiguousarray(self.firmness, dtype=np.float64))
        if self.firmness.shape != self.network.own.shape:
            raise ValueError("firmness must have shape (n,)")
        if not self.blocks or any(block.rounds < 1 for block in self.blocks):
            raise ValueError("there must be a block, and every block must have a round")

    @cached_property
    def legs(self) -> tuple[Leg, ...]:
        """The blocks with their share matrices."""
        built: dict[tuple[int, Unheard], Shares] = {}
        for block in self.blocks:
            key = (id(block.heard), block.unheard)
            if key not in built:
                built[key] = shares(self.network, block.heard, block.unheard)
        return tuple(Leg(built[id(block.heard), block.unheard], block.rounds) for block in self.blocks)


@dataclass(frozen=True, eq=False)
class Course:
    """A process in the form the long run is worked out in: `before`, once, and then `lasting`, for ever.

    A *turn* is what goes on for ever: one round of the last leg, or one pass through a plan that is repeated.
    turns_before, rounds_before: how many turns and rounds `before` amounts to, so that they can be counted from
        round 0.
    held: (n,) beliefs after `before`, when its legs were too many to be kept (`before` is then empty).
    """

    firmness: Floats
    before: tuple[Leg, ...]
    lasting: tuple[Leg, ...]
    turns_before: int
    rounds_before: int
    held: Floats | None = None

    @property
    def rounds_in_turn(self) -> int:
        """How many single rounds a turn has."""
        return sum(leg.rounds for leg in self.lasting)


def course(process: Process) -> Course:
    """The course of a process without a hearing range."""
    legs = process.legs
    if process.repeat:
        return Course(process.firmness, (), legs, 0, 0)
    before = legs[:-1]
    rounds = sum(leg.rounds for leg in before)
    return Course(process.firmness, before, (Leg(legs[-1].shares, 1),), rounds, rounds)
