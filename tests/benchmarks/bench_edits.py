"""How long one edit takes in a large meeting: 500 people and 10,000 arrows."""

from __future__ import annotations

import pytest

from deliberate.scenario import edits
from deliberate.scenario.values import Arrow, FrozenDict, Person, Question, Scenario, Variant

PEOPLE, SOURCES = 500, 20


@pytest.fixture(scope="module")
def crowd() -> Scenario:
    people = tuple(Person(id=f"p{number}", beliefs=FrozenDict(q=0.5)) for number in range(PEOPLE))
    arrows = tuple(
        Arrow(f"p{listener}", f"p{(listener + 1 + step * step) % PEOPLE}", 2.0)
        for listener in range(PEOPLE)
        for step in range(SOURCES)
    )
    question = Question(id="q", text="Q?", low=0.0, high=1.0)
    return Scenario(title="Crowd", questions=(question,), variants=(Variant(name="v", people=people, arrows=arrows),))


EDITS = {
    "belief": lambda crowd: edits.set_belief(crowd, "p250", "q", 0.25, variant="v"),
    "name": lambda crowd: edits.rename_person(crowd, "p250", "Ana"),
    "move": lambda crowd: edits.move_people(crowd, {"p250": (3.0, 4.0)}, variant="v"),
    "weight": lambda crowd: edits.set_weight(crowd, [("p250", "p251")], 3.0, variant="v"),
    "points": lambda crowd: edits.set_points(crowd, "p250", "p251", 40.0, variant="v"),
    "remove": lambda crowd: edits.remove_people(crowd, "p250", variant="v"),
}


@pytest.mark.parametrize("edit", EDITS.values(), ids=EDITS.keys())
def test_one_edit(benchmark, crowd, edit) -> None:
    after = benchmark(edit, crowd)
    assert after != crowd
