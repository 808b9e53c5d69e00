"""How long reading, checking and writing take: 40 people as usual, 500 as the largest drawn, and a large file."""

from __future__ import annotations

import random
from functools import cache

import pytest

from deliberate.files import decode, encode
from deliberate.scenario.checks import validate
from deliberate.scenario.values import Arrow, FrozenDict, Person, Question, Scenario, Variant

SIZES = [(40, 300), (500, 5_000), (100_000, 1_000_000)]


@cache
def meeting(people: int, arrows: int) -> Scenario:
    """A meeting with everybody's belief and randomly drawn arrows."""
    chance = random.Random(1)
    pairs: dict[tuple[int, int], float] = {}
    while len(pairs) < arrows:
        listener, source = chance.randrange(people), chance.randrange(people)
        if listener != source:
            pairs[listener, source] = round(chance.uniform(0.1, 30), 2)
    everybody = tuple(
        Person(id=f"p{i:06}", name=f"Person {i}", beliefs=FrozenDict(levy=round(chance.random(), 3)))
        for i in range(people)
    )
    drawn = tuple(Arrow(f"p{one:06}", f"p{other:06}", weight) for (one, other), weight in pairs.items())
    question = Question(id="levy", text="Raise the harbour levy?", low=0, high=1, pass_mark=0.5)
    variant = Variant(name="As it stands", people=everybody, arrows=drawn)
    return Scenario(title="Harbour levy", questions=(question,), variants=(variant,))


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_reading(benchmark, people: int, arrows: int) -> None:
    data = encode(meeting(people, arrows))
    assert benchmark(decode, data) == meeting(people, arrows)


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_checking(benchmark, people: int, arrows: int) -> None:
    scenario = meeting(people, arrows)
    assert benchmark(validate, scenario) is scenario


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_writing(benchmark, people: int, arrows: int) -> None:
    assert benchmark(encode, meeting(people, arrows)).endswith(b"}\n")
