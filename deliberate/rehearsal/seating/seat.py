"""Find who should sit with whom.

A seating only lets arrows count that are drawn: two at a table who do not hear each other do not mix. What is judged
is the end of the plan with the table stages in it (of its first pass, where it repeats), among those present.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.dynamics.network import Indices
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.progress import Progress, Stopped, never, no_report
from deliberate.dynamics.rounds import RANGE_SLACK, play
from deliberate.dynamics.seating.aims import Aim, Spread, Voices
from deliberate.dynamics.seating.conditions import (
    Apart,
    Condition,
    Linked,
    OneAtEvery,
    Room,
    Together,
    cannot_be_met,
)
from deliberate.dynamics.seating.drawing import NoSeatingError
from deliberate.dynamics.seating.search import Found, search
from deliberate.dynamics.seating.tables import TableTalk
from deliberate.dynamics.turns import give_back
from deliberate.errors import DeliberateError
from deliberate.rehearsal.assemble import Assembly, assemble
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.seating.plan import add_to
from deliberate.rehearsal.seating.told import condition_words
from deliberate.rehearsal.seating.wish import Goal, Seating, Tables, Wish, seated_people, table_sizes
from deliberate.rehearsal.words import count, listing
from deliberate.scenario import edits
from deliberate.scenario.access import person_with_id
from deliberate.scenario.values import Question, Scenario, Variant

MOST_PEOPLE = 1_000
MOST_ROTATIONS = 20


def seat(
    scenario: Scenario,
    variant: str | None,
    question: str | None,
    wish: Wish,
    *,
    seed: int = 1,
    effort: float = 1.0,
    progress: Progress = no_report,
    stopped: Stopped = never,
) -> Seating:
    """The best seating for `wish` that is found; the same seed gives the same one.

    All seatings are looked at where the group is small enough; otherwise it is a local search of a fixed length,
    which `effort` multiplies. progress is told the part that is done, 0 to 1. Once `stopped` is true the best so
    far comes back soon. Raises DeliberateError for a wish that makes no sense or cannot be met, saying what of it.
    """
    setup, asked = pick_variant(scenario, variant), pick_question(scenario, question)
    _check(setup, asked, wish)
    sketch = assemble(setup, asked)
    talk = TableTalk(
        sketch.process.network,
        sketch.process.firmness,
        sketch.starts,
        wish.rounds,
        wish.unheard,
        None if asked.hearing_range is None else asked.hearing_range + RANGE_SLACK * asked.width,
    )
    room, known = _room(setup, wish, sketch, talk)
    try:
        found = search(
            _aim(wish, setup, asked, sketch, talk),
            room,
            wish.rotations,
            seed=seed,
            effort=effort,
            progress=progress,
            stopped=stopped,
        )
    except NoSeatingError as error:
        raise DeliberateError(_why_not(error, room, known)) from None
    rotations = tuple(_tables(seats, sketch) for seats in found.seats)
    planned = add_to(scenario, setup.name, wish, rotations)
    random = found.random_figures
    return Seating(
        variant=setup.name,
        question=asked.id,
        wish=wish,
        rotations=rotations,
        before=figure(wish.goal, setup, asked),
        after=figure(wish.goal, pick_variant(planned, setup.name), asked),
        random_mean=float(random.mean()),
        random_best=float(random.max() if wish.goal == "more-voices" else random.min()),
        random_count=len(random),
        every=found.every,
        starts=found.starts,
        as_good=found.as_good,
        finished=not found.stopped,
        hear_nobody=tuple(_hear_nobody(found, talk, sketch)),
        apart_groups=sum(1 for _ in edits.linked_groups(setup)),
    )


def figure(goal: Goal, variant: Variant, question: Question) -> float:
    """What is sought, as the plan of `variant` gives it: the spread, or the number of equal voices, at its end."""
    sketch = assemble(variant, question)
    process, present = sketch.process, np.flatnonzero(sketch.process.network.present)
    if goal == "less-spread":
        end = play(process, sketch.starts, variant.plan.rounds, question.hearing_range, question.width)[-1]
        return float(np.ptp(end[present])) if len(present) else 0.0
    voice = np.zeros(len(sketch.people))
    voice[present] = 1 / max(len(present), 1)
    to_beliefs, to_starts = give_back(process.legs, process.firmness, voice)
    counts = to_beliefs + to_starts
    return float(1 / (counts @ counts)) if len(present) else 0.0


def _check(variant: Variant, question: Question, wish: Wish) -> None:
    people = len(variant.people)
    if people > MOST_PEOPLE:
        raise DeliberateError(f"tables are laid for up to {MOST_PEOPLE:,} people, there are {people:,}")
    if not 1 <= wish.rotations <= MOST_ROTATIONS:
        raise DeliberateError(f"people are seated 1 to {MOST_ROTATIONS} times, not {wish.rotations}")
    if not 1 <= wish.rounds <= 1_000:
        raise DeliberateError(f"a stage at tables has 1 to 1,000 rounds, not {wish.rounds}")
    if wish.goal == "more-voices" and question.hearing_range is not None:
        raise DeliberateError(
            "with a hearing range, how much a start counts depends on where everybody stands: "
            "seek less spread, or take the range off the question"
        )


def _aim(wish: Wish, variant: Variant, question: Question, sketch: Assembly, talk: TableTalk) -> Aim:
    blocks = dict(zip(map(id, variant.plan.stages), sketch.process.blocks, strict=True))
    parts = edits.around_tables(variant.plan, wish.place)
    before, after = (_part([blocks[id(stage)] for stage in part], sketch) for part in parts)
    present = sketch.process.network.present
    if wish.goal == "more-voices":
        return Voices(talk, before, after, present)
    return Spread(talk, before, after, sketch.starts, present, question.hearing_range, question.width)


def _part(blocks: list[Block], sketch: Assembly) -> Process | None:
    """The process of these blocks alone."""
    if not blocks:
        return None
    return Process(sketch.process.network, tuple(blocks), False, sketch.process.firmness)


def _room(variant: Variant, wish: Wish, sketch: Assembly, talk: TableTalk) -> tuple[Room, dict[Condition, str]]:
    """The room to seat people in, and its conditions in words."""
    seated = seated_people(variant)
    sizes = table_sizes(len(seated), wish)
    known: dict[Condition, str] = {}
    for kind, pairs in ((Together, wish.together), (Apart, wish.apart)):
        for pair in pairs:
            if len(set(pair)) < 2:
                raise DeliberateError("a condition on who sits with whom needs two people")
            condition = kind(tuple(_place(one, seated, variant, sketch) for one in pair))
            known[condition] = condition_words("together" if kind is Together else "apart", pair, variant)
    for role in wish.roles:
        holders = tuple(sketch.place[one.id] for one in variant.people if one.role == role and one.present)
        if len(holders) < len(sizes):
            raise DeliberateError(
                f"{condition_words('role', role, variant)}: for {count(len(sizes), 'table', 'tables')} there "
                f"{'is' if len(holders) == 1 else 'are'} {len(holders)} with that role present"
            )
        known[OneAtEvery(holders)] = condition_words("role", role, variant)
    if wish.linked:
        known[Linked()] = condition_words("linked", "", variant)
    people = np.array([sketch.place[one] for one in seated], dtype=np.intp)
    room = Room(len(sketch.people), people, sizes, talk.linked(), tuple(known))
    return room, known


def _place(person: str, seated: tuple[str, ...], variant: Variant, sketch: Assembly) -> int:
    if person not in seated:
        raise DeliberateError(f"{person_with_id(variant, person).shown_name} is not present, and so not seated")
    return sketch.place[person]


def _why_not(error: NoSeatingError, room: Room, known: dict[Condition, str]) -> str:
    if not error.proven:
        every = listing([known[condition] for condition in room.conditions])
        return f"no seating was found that keeps all conditions; leave one out: {every}"
    clash = [known[condition] for condition in cannot_be_met(room)]
    sizes = sorted({str(size) for size in room.sizes})
    tables = f"{count(len(room.sizes), 'table', 'tables')} of {' or '.join(sizes)}"
    if len(clash) == 1:
        return f"this cannot be met with {tables}: {clash[0]}"
    return f"these cannot all be met with {tables}: {listing(clash)}"


def _tables(seats: Indices, sketch: Assembly) -> Tables:
    """Tables by id, in the order of the people: the first person's table first."""
    tables = [sorted(row[row < len(sketch.people)].tolist()) for row in seats]
    return tuple(tuple(sketch.people[one] for one in table) for table in sorted(tables))


def _hear_nobody(found: Found, talk: TableTalk, sketch: Assembly) -> Iterator[tuple[str, ...]]:
    for seats in found.seats:
        alone = seats[~talk.hears(seats) & (seats < len(sketch.people))]
        yield tuple(sketch.people[one] for one in sorted(alone.tolist()))
