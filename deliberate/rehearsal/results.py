"""What a rehearsal gives back: numbers by person id, and findings in plain words.

Arrays over people follow `Rehearsal.people`; arrays over rounds start with round 0. All arrays are read-only.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from deliberate.dynamics.network import Floats
from deliberate.scenario.values import AgreementTest

Verdict = Literal["agreement", "disagreement", "neither"]


@dataclass(frozen=True, eq=False)
class ClosedGroup:
    """People who in the long run hear only each other (a closed communicating class).

    An `anchored` group is one firm person's own starting belief, a source that never changes. `phases` gives
    each person's place in the swing, 0 .. period - 1: in every round the people of one phase take over what
    those of the next one held. `influence` sums to 1 within the group (stationary distribution).
    """

    people: tuple[str, ...]
    period: int
    phases: tuple[int, ...]
    influence: Mapping[str, float]
    anchored: bool


@dataclass(frozen=True, eq=False)
class Cycle:
    """The `period` belief lists that are visited for ever; `beliefs` has shape (period, people)."""

    period: int
    beliefs: Floats


@dataclass(frozen=True)
class Tally:
    """The ballot that a list of beliefs would give under the body's rule, counted in ballots."""

    in_favour: float
    against: float
    abstain: float
    objecting: float
    quorum_met: bool
    passes: bool


@dataclass(frozen=True)
class Agreement:
    """The verdict of one agreement test, with the figure it was judged by."""

    test: AgreementTest
    verdict: Verdict
    figure: float


@dataclass(frozen=True, eq=False)
class Rehearsal:
    """One run of the whole computation on (scenario, variant, question)."""

    variant: str
    question: str
    people: tuple[str, ...]
    rounds: Floats  # (rounds + 1, people)
    spread: Floats  # (rounds + 1,)
    settles_from_any_start: bool
    settles: bool
    consensus_from_any_start: bool
    consensus: bool
    limit: Floats | None  # (people,)
    cycle: Cycle | None
    long_run_average: Floats  # (people,)
    closed_groups: tuple[ClosedGroup, ...]
    outside: tuple[str, ...]
    influence: Floats  # (people,), sums to 1
    effective_voices: float
    rate: float | None  # per round
    rounds_to_agree: int | None
    rounds_to_halve: float | None  # log(1/2) / log(rate); None when the rate is None or not below 1
    tolerance: float  # on the question's scale
    ballot: tuple[Tally, ...] | None
    ballot_at_limit: Tally | None
    agreement: tuple[tuple[Agreement, ...], ...] | None
    agreement_at_limit: tuple[Agreement, ...] | None
    unknown_starts: tuple[str, ...]
    notes: tuple[str, ...]


@dataclass(frozen=True)
class Introduce:
    """Let `listener` hear `source` with `points` of 100; the listener's other points shrink to make room."""

    listener: str
    source: str
    points: float


@dataclass(frozen=True)
class KeepOwnView:
    """Let each of `people` give her own view `points` of 100; her other points shrink to make room."""

    people: tuple[str, ...]
    points: float


@dataclass(frozen=True)
class JointRound:
    """Put a plenary stage of `rounds` before the others in which everybody present hears everybody: a go-round.

    A stage lets arrows count but cannot draw them, so those who do not hear each other yet get arrows. Where the
    sketch falls into groups without an arrow between them, later plenaries become tables of these groups, and the
    new arrows count in the joint stage only; where it hangs together they are small and stay.
    """

    rounds: int


@dataclass(frozen=True)
class Introductions:
    """Let each listener of `arrows` (listener, source) hear the source with `points` of 100, where she does not."""

    arrows: tuple[tuple[str, str], ...]
    points: float


@dataclass(frozen=True)
class MovePoints:
    """Let `listener` give `points` of her 100 to `to` instead of `away`; either may be herself, for the own view."""

    listener: str
    away: str
    to: str
    points: float


@dataclass(frozen=True)
class GoBetween:
    """Bring in somebody without a vote or a view of her own who hears all of `people` alike; each gives her
    `points` of 100. She starts at the mean of what they start with."""

    people: tuple[str, ...]
    points: float


@dataclass(frozen=True)
class SpeakFirst:
    """Begin with `rounds` in which only `speakers` are heard; everybody gives each of them at least `points` of 100,
    then and later (0: what they give already)."""

    speakers: tuple[str, ...]
    rounds: int
    points: float


@dataclass(frozen=True)
class PairTalks:
    """Begin with `rounds` in which people talk in `pairs`; the two of a pair give each other at least `points` of
    100, then and later."""

    pairs: tuple[tuple[str, str], ...]
    rounds: int
    points: float


@dataclass(frozen=True)
class MixedTables:
    """Begin with `rounds` at these `tables`; those who are new to each other give each other `points` of 100 and go
    on hearing each other."""

    tables: tuple[tuple[str, ...], ...]
    rounds: int
    points: float


@dataclass(frozen=True)
class GoRounds:
    """Let everybody hear everybody alike in all rounds, the own view counting for `own_points` of 100."""

    own_points: float


@dataclass(frozen=True)
class EndInPlenary:
    """End with `rounds` in plenary, in which every arrow counts."""

    rounds: int


@dataclass(frozen=True)
class ReorderStages:
    """Put the plan's stages into another order of their present places, counted from 0."""

    order: tuple[int, ...]


# New stages take their rounds out of the longest others while these keep one each; see `scenario.edits.process`.
Suggestion = (
    Introduce
    | KeepOwnView
    | JointRound
    | Introductions
    | MovePoints
    | GoBetween
    | SpeakFirst
    | PairTalks
    | MixedTables
    | GoRounds
    | EndInPlenary
    | ReorderStages
)

Kind = Literal[
    "settles",
    "closed-groups",
    "swing",
    "outside",
    "fixed-view",
    "lasting-gap",
    "unheard",
    "hears-nobody",
    "carries",
    "bridge",
    "slow",
    "unfinished",
    "vote",
    "knife-edge",
    "quorum",
    "agreement",
    "unknown-starts",
    "absent",
]


@dataclass(frozen=True)
class Finding:
    """One thing that stands out. `says` and `why` are one plain-text sentence each.

    `groups` are the people to light up together (closed groups, phases of a swing, the two sides of a bridge),
    `arrows` are (listener, source) pairs, `figures` the numbers behind the words.
    """

    kind: Kind
    says: str
    why: str
    people: tuple[str, ...]
    figures: Mapping[str, float]
    groups: tuple[tuple[str, ...], ...] = ()
    arrows: tuple[tuple[str, str], ...] = ()
    suggestion: Suggestion | None = None
