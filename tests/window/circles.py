"""Small invented meetings for tests of the window: ``from circles import CIRCLES``. Ids are names in lower case."""

from __future__ import annotations

from itertools import permutations

from deliberate.scenario.values import Arrow, FrozenDict, Person, Plan, Question, Scenario, Stage, Variant

LABEL = Question(id="label", text="Adopt the label?", low=0.0, high=100.0, pass_mark=50.0)
AS_IT_STANDS = "As it stands"


def person(name: str, start: float | None, place: tuple[float, float], own: float = 40.0) -> Person:
    """Somebody with a start on `LABEL`, at a place."""
    beliefs = FrozenDict() if start is None else FrozenDict(label=start)
    return Person(id=name.lower(), name=name, x=place[0], y=place[1], own_weight=own, beliefs=beliefs)


def circle(*names: str, points: float = 20.0) -> tuple[Arrow, ...]:
    """Everybody named hears everybody else named."""
    return tuple(Arrow(one.lower(), other.lower(), points) for one, other in permutations(names, 2))


def meeting(people: tuple[Person, ...], arrows: tuple[Arrow, ...], plan: Plan | None = None) -> Scenario:
    """One variant with these people."""
    variant = Variant(name=AS_IT_STANDS, people=people, arrows=arrows, plan=plan or Plan((Stage(rounds=6),)))
    return Scenario(title="Label", questions=(LABEL,), variants=(variant,))


# Two closed circles of three: 80 and 20 for ever.
CIRCLES = meeting(
    (
        person("Amina", 90.0, (-300.0, -100.0)),
        person("Bilal", 80.0, (-300.0, 100.0)),
        person("Chiara", 70.0, (-140.0, 0.0)),
        person("Davor", 30.0, (140.0, 0.0)),
        person("Emeka", 20.0, (300.0, -100.0)),
        person("Farah", 10.0, (300.0, 100.0)),
    ),
    circle("Amina", "Bilal", "Chiara", points=30.0) + circle("Davor", "Emeka", "Farah", points=30.0),
)

# Two who answer only each other swap places for ever.
SWAP = meeting(
    (person("Goran", 80.0, (-100.0, 0.0), own=0.0), person("Hana", 20.0, (100.0, 0.0), own=0.0)),
    (Arrow("goran", "hana", 100.0), Arrow("hana", "goran", 100.0)),
)
