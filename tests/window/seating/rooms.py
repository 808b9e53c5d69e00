"""Invented meetings for tests of mixed tables: ``from rooms import TWO_HALVES``."""

from __future__ import annotations

from circles import circle, meeting, person
from msgspec.structs import replace

from deliberate.scenario.values import Plan, Stage

NAMES = ("Amina", "Bilal", "Chiara", "Davor", "Emeka", "Farah", "Goran", "Hana")
SPEAKERS = ("Amina", "Emeka")
MARKUP = "<b>Zoë</b> & Co <img src=x>"


def _people(names):
    for place, name in enumerate(names):
        one = person(name, 95.0 - 12 * place, (100.0 * place, 0.0), own=20.0)
        yield replace(one, role="speaker" if name in SPEAKERS else "")


# Everybody hears everybody; four start high, four low.
TWO_HALVES = meeting(tuple(_people(NAMES)), circle(*NAMES, points=10.0), Plan((Stage("Plenary", 1),)))
# The first one's name is markup.
HOSTILE = replace(
    TWO_HALVES,
    title="<h1>Label</h1>",
    variants=(
        replace(
            TWO_HALVES.variants[0],
            people=(replace(TWO_HALVES.variants[0].people[0], name=MARKUP), *TWO_HALVES.variants[0].people[1:]),
        ),
    ),
)
MANY = tuple(f"Name{number:02}" for number in range(36))
# Too many to try all: the search takes seconds.
ASSEMBLY = meeting(
    tuple(person(name, 2.5 * place, (0.0, 0.0), own=20.0) for place, name in enumerate(MANY)),
    circle(*MANY),
    Plan((Stage("Plenary", 1),)),
)
