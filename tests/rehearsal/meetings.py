"""Meetings for tests: from a matrix of points, and at random."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from hypothesis import strategies as st

from deliberate.scenario.checks import validate
from deliberate.scenario.values import (
    AgreementTest,
    Arrow,
    Ballot,
    BallotTest,
    Person,
    Plan,
    Question,
    Scenario,
    Stage,
    Variant,
)

IDS = tuple("abcdefghijklmnop")


def meeting(
    points: Sequence[Sequence[float]],
    beliefs: Sequence[float | None],
    *,
    question: Question | None = None,
    ballot: Ballot | None = None,
    plan: Plan | None = None,
    people: Mapping[str, Mapping[str, object]] | None = None,
) -> Scenario:
    """People a, b, c, ... whose row of `points` says whom they hear, the diagonal being their own weight.

    `people` adds fields of a person by id.
    """
    question = question or Question("q", "What is asked?", 0, 100)
    everybody = tuple(
        Person(
            IDS[i],
            own_weight=float(row[i]),
            beliefs={} if belief is None else {question.id: float(belief)},
            **(people or {}).get(IDS[i], {}),
        )
        for i, (row, belief) in enumerate(zip(points, beliefs, strict=True))
    )
    arrows = tuple(
        Arrow(IDS[i], IDS[j], float(weight))
        for i, row in enumerate(points)
        for j, weight in enumerate(row)
        if i != j and weight
    )
    variant = Variant("As it stands", everybody, arrows=arrows, plan=plan or Plan())
    scenario = Scenario("A test", (question,), (variant,), ballot=ballot or Ballot())
    return validate(scenario)


def electors(ballots: Sequence[float], absent: Sequence[int] = ()) -> tuple[Person, ...]:
    """People p0, p1, ... with these ballots."""
    return tuple(Person(f"p{i}", ballots=float(b), present=i not in absent) for i, b in enumerate(ballots))


@st.composite
def meetings(draw: st.DrawFn, most: int = 6) -> Scenario:
    """Small meetings with all that the dynamics know: firmness, absence, settings, hearing ranges, unknown starts."""
    size = draw(st.integers(1, most))
    ids = IDS[:size]
    weights = st.sampled_from([0, 0, 1, 2.5, 10, 1e-6])
    beliefs = st.none() | st.sampled_from([0, 10, 25, 50, 50.0001, 75, 100]) | st.floats(0, 100)
    fields = st.fixed_dictionaries(
        {
            "firmness": st.sampled_from([0, 0, 0, 0.3, 1]),
            "present": st.sampled_from([True, True, True, False]),
            "ballots": st.sampled_from([1, 1, 0, 2.5]),
        }
    )
    question = Question(
        "q",
        "What is asked?",
        0,
        100,
        pass_mark=draw(st.sampled_from([None, 50])),
        undecided=draw(st.sampled_from([0, 5])),
        objection_mark=draw(st.sampled_from([None, 20])),
        hearing_range=draw(st.sampled_from([None, None, 30])),
        agreement=(AgreementTest("spread", at_most=10), AgreementTest("quartile-range", at_most=5)),
    )
    ballot = Ballot(
        casting_vote=draw(st.none() | st.sampled_from(ids)),
        tests=draw(
            st.sampled_from(
                [
                    (BallotTest("for", more_than="1/2"),),
                    (BallotTest("for", at_least="2/3", of="present"), BallotTest("objecting", at_most=0)),
                    (BallotTest("for", count="people", at_least=0.55, of="eligible"),),
                ]
            )
        ),
    )
    return meeting(
        [[draw(weights) for _ in ids] for _ in ids],
        [draw(beliefs) for _ in ids],
        question=question,
        ballot=ballot,
        plan=Plan(draw(st.lists(_stages(ids), min_size=1, max_size=3).map(tuple)), draw(_afterwards)),
        people={one: draw(fields) for one in ids},
    )


_afterwards = st.sampled_from(["last", "last", "repeat"])


@st.composite
def _stages(draw: st.DrawFn, ids: Sequence[str]) -> Stage:
    order = draw(st.permutations(ids))
    cut = draw(st.integers(0, len(ids)))
    return Stage(
        name="Stage",
        rounds=draw(st.integers(1, 3)),
        setting=draw(st.sampled_from(["plenary", "plenary", "tables", "panel", "pairs", "silence"])),
        unheard=draw(st.sampled_from(["own", "rescale"])),
        tables=tuple(table for table in (tuple(order[:cut]), tuple(order[cut:])) if table),
        speakers=tuple(order[:cut]),
        pairs=tuple(zip(order[::2], order[1::2], strict=False)),
    )
