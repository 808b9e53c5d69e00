"""A meeting as immutable values: what a scenario file holds, and nothing else.

Every class here is a frozen `msgspec.Struct`; lists are tuples and mappings are `FrozenDict`. So a scenario can
be shared between threads, kept in a history and compared with ``==``. The annotations are the single source for
strict decoding and for the JSON Schema in `resources/`; what they cannot say (ids that must exist, beliefs
within their scale) is in `checks`.

Convention: an arrow is ``listener -> source``, the listener hears the source.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal, NoReturn

from msgspec import UNSET, Meta, Struct, UnsetType
from msgspec.structs import force_setattr

# A bare "$" would also match before a last line break in Python, but not in the schema's regular expressions; the
# descriptions complete the sentence "must be ..." in error messages and stand in the schema.
Id = Annotated[
    str, Meta(pattern=r"^[A-Za-z0-9_.-]{1,64}$(?!\n)", description="an id of 1 to 64 of A-Z, a-z, 0-9, _, . and -")
]
# No control characters (Cc): they garble lists and cannot be seen.
Line = Annotated[
    str,
    Meta(
        min_length=1,
        max_length=200,
        pattern=r"^[^\x00-\x1f\x7f-\x9f]*$(?!\n)",
        description="one line of text without control characters",
    ),
]
OptionalLine = Annotated[
    str,
    Meta(
        max_length=200,
        pattern=r"^[^\x00-\x1f\x7f-\x9f]*$(?!\n)",
        description="one line of text without control characters",
    ),
]
Notes = Annotated[
    str,
    Meta(
        max_length=20_000,
        pattern=r"^[^\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f]*$(?!\n)",
        description="text without control characters other than tabs and line breaks",
    ),
]
Fraction = Annotated[
    str, Meta(pattern=r"^[0-9]{1,9}/(?!0+$)[0-9]{1,9}$(?!\n)", description='a fraction such as "2/3"')
]
UnitNumber = Annotated[float, Meta(ge=0, le=1)]
NotNegative = Annotated[float, Meta(ge=0)]
Share = UnitNumber | Fraction

Setting = Literal["plenary", "tables", "panel", "pairs", "silence"]
Unheard = Literal["own", "rescale"]
Basis = Literal["guess", "stated", "observed"]
Side = Literal["for", "against", "objecting"]
Count = Literal["ballots", "people"]
Of = Literal["cast", "present", "eligible"]
Afterwards = Literal["last", "repeat"]

PLAN_ROUNDS = 12
LARGEST_WHOLE = 2**53 - 1  # beyond it, programs that read JSON disagree on whole numbers (RFC 7493)


class FrozenDict(dict[str, Any]):
    """A dict that refuses changes, so that values holding one stay immutable and hashable."""

    def _refuse(self, *_: object, **__: object) -> NoReturn:
        raise TypeError("this mapping belongs to an immutable value; make an edited copy instead")

    __setitem__ = __delitem__ = update = setdefault = pop = popitem = clear = __ior__ = _refuse  # type: ignore[assignment]

    def __hash__(self) -> int:  # type: ignore[override]
        return hash(frozenset(self.items()))

    def __reduce__(self) -> tuple[type, tuple[dict[str, Any]]]:
        return FrozenDict, (dict(self),)


class Value(Struct, frozen=True, forbid_unknown_fields=True):
    """Base of all values: unknown keys are refused when decoding."""


class AgreementTest(Value):
    """One definition of agreement on a question, fixed before the beliefs are known."""

    test: Literal["rand-ucla", "share-within", "quartile-range", "spread"]
    low: float | UnsetType = UNSET
    high: float | UnsetType = UNSET
    at_least: Share | UnsetType = UNSET
    at_most: NotNegative | UnsetType = UNSET


class Question(Value):
    """What is talked about, on a scale from `low` to `high`."""

    id: Id
    text: Line
    low: float
    high: float
    unit: OptionalLine = ""
    low_label: OptionalLine = ""
    high_label: OptionalLine = ""
    pass_mark: float | None = None
    undecided: NotNegative = 0.0
    objection_mark: float | None = None
    hearing_range: NotNegative | None = None
    truth: float | None = None
    agreement: tuple[AgreementTest, ...] = ()

    @property
    def width(self) -> float:
        """How long the scale is."""
        return self.high - self.low

    @property
    def middle(self) -> float:
        """Where a person starts of whom nothing is known."""
        return self.low + (self.high - self.low) / 2


class BallotTest(Value):
    """One condition: the share of `side` among `of`, counted in `count`, against exactly one threshold."""

    side: Side
    count: Count = "ballots"
    of: Of = "cast"
    more_than: Share | UnsetType = UNSET
    at_least: Share | UnsetType = UNSET
    at_most: Share | UnsetType = UNSET
    less_than: Share | UnsetType = UNSET


class Ballot(Value):
    """The body's own rule: it passes when every test holds and the quorum is met."""

    name: Line = "Simple majority"
    quorum: Share | None = "1/2"
    casting_vote: Id | None = None
    tests: tuple[BallotTest, ...] = (BallotTest(side="for", more_than="1/2"),)


class Person(Value):
    """Somebody in one variant of the meeting. `beliefs` and `margins` go by question id."""

    id: Id
    name: Line | UnsetType = UNSET
    role: OptionalLine = ""
    x: float | None = None
    y: float | None = None
    present: bool = True
    own_weight: NotNegative = 1.0
    firmness: UnitNumber = 0.0
    ballots: NotNegative = 1.0
    beliefs: Mapping[str, float] = FrozenDict()
    margins: Mapping[str, NotNegative] = FrozenDict()

    def __post_init__(self) -> None:
        force_setattr(self, "beliefs", FrozenDict(self.beliefs))
        force_setattr(self, "margins", FrozenDict(self.margins))

    @property
    def shown_name(self) -> str:
        """The name, or the id in a file without names."""
        return self.id if self.name is UNSET else self.name


class Arrow(Value, gc=False):
    """`listener` hears `source` with `weight` points of the listener's own choosing."""

    listener: Id
    source: Id
    weight: Annotated[float, Meta(gt=0)]
    basis: Basis = "guess"


class Stage(Value):
    """A block of rounds with one setting. `tables`, `speakers` and `pairs` count in their own setting only and
    are kept in the others, so that switching back and forth loses nothing."""

    name: Line = "Plenary"
    rounds: Annotated[int, Meta(ge=1, le=10_000)] = PLAN_ROUNDS
    setting: Setting = "plenary"
    unheard: Unheard = "own"
    tables: tuple[tuple[Id, ...], ...] = ()
    speakers: tuple[Id, ...] = ()
    pairs: tuple[tuple[Id, Id], ...] = ()


class Plan(Value):
    """The stages in order, and what goes on after the last round."""

    stages: Annotated[tuple[Stage, ...], Meta(min_length=1, max_length=200)] = (Stage(),)
    afterwards: Afterwards = "last"

    @property
    def rounds(self) -> int:
        """How many rounds the stages have together."""
        return sum(stage.rounds for stage in self.stages)


class Variant(Value):
    """One way of setting up the meeting."""

    name: Line
    people: Annotated[tuple[Person, ...], Meta(max_length=100_000)]
    notes: Notes = ""
    arrows: Annotated[tuple[Arrow, ...], Meta(max_length=2_000_000)] = ()
    plan: Plan = Plan()


class Poll(Value):
    """A show of hands or straw poll taken during the meeting."""

    question: Id
    after_round: Annotated[int, Meta(ge=0, le=LARGEST_WHOLE)]
    beliefs: Mapping[str, float] = FrozenDict()

    def __post_init__(self) -> None:
        force_setattr(self, "beliefs", FrozenDict(self.beliefs))


class Scenario(Value):
    """One meeting: its questions, its ballot rule, and the variants that are compared with each other."""

    title: Line
    questions: Annotated[tuple[Question, ...], Meta(min_length=1)]
    variants: Annotated[tuple[Variant, ...], Meta(min_length=1)]
    format: Literal["deliberate-scenario"] = "deliberate-scenario"
    version: Literal[1] = 1
    notes: Notes = ""
    ballot: Ballot = Ballot()
    polls: tuple[Poll, ...] = ()
