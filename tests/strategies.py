"""Hypothesis strategies for valid meetings, to be imported by any test: ``from strategies import scenarios``."""

from __future__ import annotations

from hypothesis import strategies as st
from msgspec.structs import replace

from deliberate.scenario.values import (
    AgreementTest,
    Arrow,
    Ballot,
    BallotTest,
    FrozenDict,
    Person,
    Plan,
    Poll,
    Question,
    Scenario,
    Stage,
    Variant,
)

PEOPLE = ("ines", "tomas", "noor", "wei", "ada_1", "P.6")
QUESTIONS = ("levy", "quay-2", "Q.3")
SCALES = ((0.0, 1.0), (0.0, 100.0), (1.0, 9.0), (-5.5, 12.25), (1e6, 3e6))

lines = st.text(st.characters(exclude_categories=("Cc", "Cs")), min_size=1, max_size=12)
weights = st.one_of(st.integers(1, 100).map(float), st.floats(1e-300, 1e300))
small_weights = st.one_of(st.just(0.0), weights)
unit_numbers = st.one_of(st.sampled_from((0.0, 0.5, 1.0)), st.floats(0, 1))
shares = st.one_of(unit_numbers, st.sampled_from(("1/2", "2/3", "0/1", "7/7", "11/20")))
places = st.one_of(st.none(), st.floats(-1e4, 1e4))


def on_scale(question: Question) -> st.SearchStrategy[float]:
    """Numbers on the question's scale, its ends and its middle among them."""
    marks = st.sampled_from((question.low, question.middle, question.high))
    return st.one_of(marks, st.floats(question.low, question.high))


def lengths(question: Question) -> st.SearchStrategy[float]:
    """Lengths up to the width of the question's scale."""
    return st.floats(0, question.width)


@st.composite
def agreement_tests(draw: st.DrawFn, question: Question) -> AgreementTest:
    """An agreement test that suits the question's scale."""
    kinds = ["share-within", "quartile-range", "spread"]
    if (question.low, question.high) == (1, 9):
        kinds.append("rand-ucla")
    kind = draw(st.sampled_from(kinds))
    if kind == "share-within":
        low, high = sorted((draw(on_scale(question)), draw(on_scale(question))))
        return AgreementTest(test=kind, low=low, high=high, at_least=draw(shares))
    if kind == "rand-ucla":
        return AgreementTest(test=kind)
    return AgreementTest(test=kind, at_most=draw(lengths(question)))


@st.composite
def questions(draw: st.DrawFn, question_id: str) -> Question:
    """A question with some of its marks set."""
    low, high = draw(st.sampled_from(SCALES))
    bare = Question(id=question_id, text=draw(lines), low=low, high=high)
    mark = st.one_of(st.none(), on_scale(bare))
    return Question(
        id=question_id,
        text=bare.text,
        low=low,
        high=high,
        unit=draw(st.sampled_from(("", "thousand euros"))),
        pass_mark=draw(mark),
        undecided=draw(st.one_of(st.just(0.0), lengths(bare))),
        objection_mark=draw(mark),
        hearing_range=draw(st.one_of(st.none(), lengths(bare))),
        truth=draw(mark),
        agreement=tuple(draw(st.lists(agreement_tests(bare), max_size=2))),
    )


@st.composite
def people(draw: st.DrawFn, person_id: str, asked: tuple[Question, ...]) -> Person:
    """Somebody with some beliefs known and others not."""
    known = [question for question in asked if draw(st.booleans())]
    sure = [question for question in asked if draw(st.booleans())]
    person = Person(
        id=person_id,
        role=draw(st.sampled_from(("", "chair", "observer"))),
        x=draw(places),
        y=draw(places),
        present=draw(st.booleans()),
        own_weight=draw(small_weights),
        firmness=draw(unit_numbers),
        ballots=draw(st.sampled_from((0.0, 1.0, 2.5))),
        beliefs=FrozenDict({question.id: draw(on_scale(question)) for question in known}),
        margins=FrozenDict({question.id: draw(lengths(question)) for question in sure}),
    )
    return replace(person, name=draw(lines)) if draw(st.booleans()) else person


@st.composite
def stages(draw: st.DrawFn, ids: tuple[str, ...]) -> Stage:
    """A stage of any setting; tables, speakers and pairs may be kept in a setting that does not use them."""
    shuffled = draw(st.permutations(ids))
    cuts = sorted(draw(st.lists(st.integers(0, len(ids)), max_size=2)))
    tables = tuple(tuple(shuffled[a:b]) for a, b in zip([0, *cuts], cuts, strict=False))
    couples = st.sampled_from([(a, b) for a in ids for b in ids if a != b] or [None])
    pairs = draw(st.lists(couples, max_size=3, unique_by=lambda pair: frozenset(pair or ()))) if len(ids) > 1 else []
    return Stage(
        name=draw(lines),
        rounds=draw(st.integers(1, 5)),
        setting=draw(st.sampled_from(("plenary", "tables", "panel", "pairs", "silence"))),
        unheard=draw(st.sampled_from(("own", "rescale"))),
        tables=draw(st.sampled_from(((), tables))),
        speakers=tuple(shuffled[: draw(st.integers(0, len(ids)))]),
        pairs=tuple(pairs),
    )


@st.composite
def variants(draw: st.DrawFn, name: str, asked: tuple[Question, ...]) -> Variant:
    """One way of setting up a meeting of nobody to six people."""
    ids = tuple(draw(st.lists(st.sampled_from(PEOPLE), unique=True, max_size=len(PEOPLE))))
    couples = [(a, b) for a in ids for b in ids if a != b]
    heard = draw(st.lists(st.sampled_from(couples), unique=True, max_size=12)) if couples else []
    basis = st.sampled_from(("guess", "stated", "observed"))
    return Variant(
        name=name,
        people=tuple(draw(people(person_id, asked)) for person_id in ids),
        arrows=tuple(Arrow(listener, source, draw(weights), draw(basis)) for listener, source in heard),
        plan=Plan(
            stages=tuple(draw(st.lists(stages(ids), min_size=1, max_size=3))),
            afterwards=draw(st.sampled_from(("last", "repeat"))),
        ),
    )


@st.composite
def ballot_tests(draw: st.DrawFn) -> BallotTest:
    """One condition of a ballot rule."""
    return BallotTest(
        side=draw(st.sampled_from(("for", "against", "objecting"))),
        count=draw(st.sampled_from(("ballots", "people"))),
        of=draw(st.sampled_from(("cast", "present", "eligible"))),
        **{draw(st.sampled_from(("more_than", "at_least", "at_most", "less_than"))): draw(shares)},
    )


@st.composite
def scenarios(draw: st.DrawFn) -> Scenario:
    """A valid meeting: one to three questions, one to three variants, a ballot rule, and polls."""
    asked = tuple(draw(questions(one)) for one in QUESTIONS[: draw(st.integers(1, len(QUESTIONS)))])
    names = draw(st.lists(lines, min_size=1, max_size=3, unique=True))
    settings = tuple(draw(variants(name, asked)) for name in names)
    ids = sorted({person.id for variant in settings for person in variant.people})
    polls = []
    for question in asked:
        answering = draw(st.lists(st.sampled_from(ids), unique=True)) if ids else []
        beliefs = FrozenDict({one: draw(on_scale(question)) for one in answering})
        if draw(st.booleans()):
            polls.append(Poll(question=question.id, after_round=draw(st.integers(0, 9)), beliefs=beliefs))
    return Scenario(
        title=draw(lines),
        notes=draw(st.sampled_from(("", "Room 3\nbring name cards"))),
        questions=asked,
        variants=settings,
        ballot=Ballot(
            name=draw(lines),
            quorum=draw(st.one_of(st.none(), shares)),
            casting_vote=draw(st.sampled_from([None, *ids])),
            tests=tuple(draw(st.lists(ballot_tests(), max_size=2))),
        ),
        polls=tuple(polls),
    )
