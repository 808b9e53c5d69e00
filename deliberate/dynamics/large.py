"""The long run of networks that are too large for full arrays: by iteration, checked, with Krylov steps where slow.

A turn is only ever applied, forwards to beliefs or backwards to what they count for, so whole passes through a
plan cost no more memory than single rounds.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array
from scipy.sparse.linalg import splu

from deliberate.dynamics.camps import stationary_of_camps
from deliberate.dynamics.destination import Destination, group_numbers
from deliberate.dynamics.elimination import stationary
from deliberate.dynamics.krylov import gmres, leading_eigenvalue
from deliberate.dynamics.network import Floats, Indices, sum_by
from deliberate.dynamics.process import Leg
from deliberate.dynamics.structure import ClosedSet, Structure, structure
from deliberate.dynamics.turns import TINY, advance, give_back
from deliberate.errors import DeliberateError

# Above this many people nothing of size n x n is built.
FULL_PEOPLE = 3000
# Relative accuracy aimed at, and the one below which the reader is told.
AIM = 1e-11
ENOUGH = 1e-9
# Steps shorter than this are rounding; shares that a turn moves no more than this are those of the long run.
ROUNDING = 1e-15
STILL = 1e-14
# Rounding beside so small a gap to 1 is more than ENOUGH.
BLURRED = 1e-7
# A part of the old shares is kept in every step, which makes groups that swing converge as well.
HELD_BACK = 0.1
STEPS = 400
TRIAL = 30
KRYLOV = 40
RESTARTS = 40
# Networks with at most so many arrows a person on which this many Krylov steps do not help are long and thin, and
# those have small factors (random ones have not, but there few steps do).
THIN = 6
THIN_RESTARTS = 8
MOST_LAYERED_ARROWS = 60_000_000
NOT_EXACT = "the network is large and close to falling apart: long-run numbers may be off by more than 1e-9"


@dataclass(frozen=True, eq=False)
class LargeTurn:
    """One turn, applied leg by leg. matrix: its share part (I - F) T as a `csr_array` when it is a single round."""

    legs: tuple[Leg, ...]
    firmness: Floats
    matrix: csr_array | None

    @property
    def people(self) -> int:
        """How many people there are."""
        return len(self.firmness)

    def apply(self, beliefs: Floats, starts: Floats) -> Floats:
        """Beliefs one turn on."""
        return advance(self.legs, self.firmness, beliefs, starts)

    def give_back(self, voice: Floats) -> tuple[Floats, Floats]:
        """What (n,) beliefs before the turn and (n,) starts count for in voice (n,) times beliefs after it."""
        return give_back(self.legs, self.firmness, voice)


def large_turn(legs: tuple[Leg, ...], firmness: Floats) -> LargeTurn:
    """The turn made of `legs`."""
    one_round = len(legs) == 1 and legs[0].rounds == 1
    return LargeTurn(legs, firmness, _round_matrix(legs[0], firmness) if one_round else None)


def _round_matrix(leg: Leg, firmness: Floats) -> csr_array:
    shares = leg.shares.as_sparse
    if not firmness.any():
        return shares
    rows = np.repeat(np.arange(len(firmness)), np.diff(shares.indptr))
    kept = firmness[rows] < 1
    data = np.maximum(shares.data * (1.0 - firmness[rows]), TINY)[kept]
    return csr_array((data, (rows[kept], shares.indices[kept])), shape=shares.shape)


def large_structure(turn: LargeTurn) -> Structure:
    """Closed groups, periods and phases of a turn, by arrows alone.

    A pass through a plan is followed round by round: node (round, person) hears nodes of the round before.
    """
    if turn.matrix is not None:
        return structure(turn.matrix, turn.firmness > 0)
    rounds = [leg.shares.as_sparse for leg in turn.legs for _ in range(leg.rounds)]
    arrows, layers, people = sum(matrix.nnz for matrix in rounds), len(rounds), turn.people
    if arrows > MOST_LAYERED_ARROWS:
        raise DeliberateError(
            f"a repeated plan may have {MOST_LAYERED_ARROWS:,} arrows in all its rounds together, has {arrows:,}"
        )
    # Layer 0 is the end of the pass, so that its nodes come first: it hears through the last round.
    rounds = [rounds[-1], *rounds[:-1]]
    indices = np.concatenate([m.indices + people * ((at - 1) % layers) for at, m in enumerate(rounds)])
    indptr = np.concatenate([[0], *(m.indptr[1:] for m in rounds)]).astype(np.int64)
    indptr[1:] += np.repeat(np.cumsum([0, *(m.nnz for m in rounds[:-1])]), people)
    whole = csr_array((np.ones(arrows), indices, indptr), shape=(layers * people, layers * people))
    found = structure(whole, np.tile(turn.firmness > 0, layers))
    closed = tuple(_end_of_pass(group, people, layers) for group in found.closed)
    return Structure(found.labels[:people], closed)


def _end_of_pass(group: ClosedSet, people: int, layers: int) -> ClosedSet:
    at_end = group.members < people
    return ClosedSet(group.members[at_end], group.period // layers, group.phases[at_end] // layers)


class Iterated(Destination):
    """The long-run map of a large turn. `exact` turns False when some number could not be held to 1e-9."""

    def __init__(self, turn: LargeTurn, groups: tuple[ClosedSet, ...]) -> None:
        group_of = group_numbers(groups, turn.people)
        within, self.exact = _influence(turn, groups, group_of)
        super().__init__(groups, group_of, within, np.flatnonzero(turn.firmness))
        self._turn = turn
        self._slowest: float | None = None
        self._inner = None if turn.matrix is None else turn.matrix[self.passing][:, self.passing]

    def carry(self, views: Floats, starts: Floats) -> Floats:
        """See `Destination`."""
        if len(views) + len(self.firm) == 1:
            return np.full(len(self.passing), views[0] if len(views) else starts[self.firm[0]])
        held = np.zeros(self._turn.people)
        held[self._settled] = views[self.group_of[self._settled]]
        nothing = np.zeros(self._turn.people)

        def inner(passing: Floats) -> Floats:
            beliefs = nothing.copy()
            beliefs[self.passing] = passing
            return self._turn.apply(beliefs, nothing)[self.passing]

        given = self._turn.apply(held, starts)[self.passing]
        return self._solve(inner, given, transposed=False)

    def trace(self, voice: Floats) -> tuple[Floats, Floats]:
        """See `Destination`."""
        if len(self.groups) + len(self.firm) == 1:
            ends = np.zeros(self._turn.people)
            ends[self.firm] = voice.sum()
            return np.full(len(self.groups), voice.sum()), ends

        def back(passing: Floats) -> Floats:
            whole = np.zeros(self._turn.people)
            whole[self.passing] = passing
            return self._turn.give_back(whole)[0][self.passing]

        whole = np.zeros(self._turn.people)
        whole[self.passing] = self._solve(back, voice, transposed=True)
        to_beliefs, to_starts = self._turn.give_back(whole)
        return sum_by(self.group_of[self._settled], to_beliefs[self._settled], len(self.groups)), to_starts

    def _solve(self, inner: Callable[[Floats], Floats], given: Floats, transposed: bool) -> Floats:
        """x = inner(x) + given."""
        answer, steps, step = given, _Steps(), np.inf
        while steps.go_on(step):
            after = inner(answer) + given
            step = np.abs(after - answer).max() / max(np.abs(after).max(), TINY)
            answer = after
        if steps.arrived and _fades(inner, np.ones(len(given)), lambda held: held.max(initial=0.0)).all():
            return answer
        if self._slowest is None:  # the same forwards and backwards
            self._slowest = abs(leading_eigenvalue(inner, len(given), KRYLOV)[0])
        answer, exact = _direct(lambda x: x - inner(x), self._inner, given, self._slowest, transposed)
        self.exact &= exact
        return answer


def _fades(apply: Callable[[Floats], Floats], held: Floats, size: Callable[[Floats], Floats]) -> NDArray[np.bool_]:
    """Whether what `size` measures, 1 or so at first, comes to nothing within STEPS applications.

    Where it does, short steps of an iteration mean that it has arrived. Where it does not they mean nothing: parts
    that hear each other with 1e-14 take steps that look like rounding for ever.
    """
    left = np.asarray(size(held))
    for done in range(0, STEPS, TRIAL):
        before = left
        for _ in range(TRIAL):
            held = apply(held)
        left = np.asarray(size(held))
        pace = left / np.maximum(before, TINY)
        if (left <= ENOUGH).all() or (left * pace ** ((STEPS - done) / TRIAL) > ENOUGH).any():
            break
    return left <= ENOUGH


class _Steps:
    """How far off an iteration still is, judged by the slowest of its last few steps."""

    def __init__(self) -> None:
        self._last = [np.inf] * 5
        self._left = STEPS
        self.arrived = False

    def go_on(self, step: float) -> bool:
        """Takes the relative length of the last step; True when more are needed and few enough will do."""
        self._last = [*self._last[1:], float(step)]
        self._left -= 1
        ratio = max(after / before if 0 < before < np.inf else np.inf for before, after in pairwise(self._last))
        remains = step * ratio / (1 - ratio) if ratio < 1 else np.inf
        self.arrived = step <= ROUNDING or (step <= AIM / 100 and remains <= AIM)
        if self.arrived or not self._left:
            return False
        on_trial = STEPS - self._left <= TRIAL
        return on_trial or (ratio < 1 and np.log(AIM / 100 / step) / np.log(ratio) <= self._left)


def _influence(turn: LargeTurn, groups: tuple[ClosedSet, ...], group_of: Indices) -> tuple[Floats, bool]:
    """(n,) shares within each closed group, all groups at once; and whether all of them are exact."""
    within = np.zeros(turn.people)
    settled = np.flatnonzero(group_of >= 0)
    if not len(settled):
        return within, True
    number = group_of[settled]
    sizes = np.bincount(number, minlength=len(groups))
    share = 1.0 / sizes[number]
    steps, step = _Steps(), np.inf
    while steps.go_on(step):
        within[settled] = share
        after = HELD_BACK * share + (1 - HELD_BACK) * turn.give_back(within)[0][settled]
        after /= sum_by(number, after, len(groups))[number]
        step = (np.abs(after - share) / after).max()
        share = after
    within[settled] = share
    mixed = _groups_that_mix(turn, number, settled, len(groups))
    moved = np.abs(turn.give_back(within)[0][settled] - within[settled]) / within[settled]
    mixed[number[moved > STILL]] = False
    exact = True
    for at in np.flatnonzero(~mixed):
        within[groups[at].members], well = _influence_of_slow(turn, groups[at].members, within)
        exact &= well
    return within, exact


def _groups_that_mix(turn: LargeTurn, number: Indices, settled: Indices, groups: int) -> NDArray[np.bool_]:
    """(groups,) True where any beliefs come together quickly, if a part of the old ones is kept."""
    nothing = np.zeros(turn.people)

    def lazily(beliefs: Floats) -> Floats:
        whole = nothing.copy()
        whole[settled] = beliefs
        return HELD_BACK * beliefs + (1 - HELD_BACK) * turn.apply(whole, nothing)[settled]

    def spread(beliefs: Floats) -> Floats:
        high, low = np.full(groups, -np.inf), np.full(groups, np.inf)
        np.maximum.at(high, number, beliefs)
        np.minimum.at(low, number, beliefs)
        return high - low

    return _fades(lazily, np.random.default_rng(0).random(len(settled)), spread)


def _influence_of_slow(turn: LargeTurn, members: Indices, within: Floats) -> tuple[Floats, bool]:
    """(k,) the shares of one closed group in which iteration is too slow, and whether they are exact."""
    if turn.matrix is None:
        return _influence_by_krylov(turn, members)
    matrix = turn.matrix if len(members) == turn.people else turn.matrix[members][:, members]
    if len(members) <= FULL_PEOPLE:
        return stationary(matrix.toarray()), True
    share = stationary_of_camps(matrix, within[members])
    return (share, True) if share is not None else _influence_by_krylov(turn, members)


def _influence_by_krylov(turn: LargeTurn, members: Indices) -> tuple[Floats, bool]:
    """The shares of one large group: v - v P = 0, with the first member's share held at 1."""
    whole = np.zeros(turn.people)
    rest = members[1:]

    def back(share: Floats) -> Floats:
        whole[:] = 0.0
        whole[rest] = share
        return turn.give_back(whole)[0][rest]

    whole[members[0]] = 1.0
    given = turn.give_back(whole)[0][rest]
    inner = None if turn.matrix is None else turn.matrix[rest][:, rest]
    slowest, _ = leading_eigenvalue(back, len(rest), KRYLOV)
    share, exact = _direct(lambda x: x - back(x), inner, given, abs(slowest), transposed=True)
    share = np.concatenate([[1.0], np.maximum(share, 0.0)])
    return share / share.sum(), exact


def _direct(
    missing: Callable[[Floats], Floats], inner: csr_array | None, given: Floats, slowest: float, transposed: bool
) -> tuple[Floats, bool]:
    """Solves missing(x) = given with GMRES, or by factors where that does not get there and they are small; and
    whether the answer can be trusted to 1e-9.

    inner: the matrix N with missing(x) = x - N x (x - x N when `transposed`), where there is one.
    slowest: its largest eigenvalue, about.
    """
    size = len(given)
    thin = inner is not None and inner.nnz <= THIN * size
    restarts = THIN_RESTARTS if thin else RESTARTS
    answer, last = _refined(lambda wanted: gmres(missing, wanted, KRYLOV, restarts), missing, given)
    if 1 - slowest < BLURRED:  # then corrections do not show how far off the answer is
        return answer, False
    if last <= AIM or not thin:
        return answer, last <= ENOUGH
    matrix = csr_array((np.ones(size), (np.arange(size), np.arange(size))), shape=(size, size)) - inner
    answer, last = _refined(splu((matrix.T if transposed else matrix).tocsc()).solve, missing, given)
    return answer, last <= ENOUGH


def _refined(
    solve: Callable[[Floats], Floats | None], missing: Callable[[Floats], Floats], given: Floats
) -> tuple[Floats, float]:
    """The answer with a few corrections, and how large the last one was beside it: how far it can be trusted."""
    answer, last = np.zeros(len(given)), np.inf
    for _ in range(6):
        correction = solve(given - missing(answer))
        if correction is None:
            return answer, np.inf
        answer = answer + correction
        before, last = last, float(np.abs(correction).max() / max(np.abs(answer).max(), TINY))
        if last <= AIM / 100 or last > before / 2:
            break
    return answer, last
