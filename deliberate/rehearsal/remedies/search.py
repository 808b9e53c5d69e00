"""Remedies: changes of process for a neutral aim, recomputed exactly and ranked by what they do for how much."""

from __future__ import annotations

from dataclasses import dataclass

from deliberate.dynamics.leverage import FULL_PEOPLE
from deliberate.dynamics.progress import Progress, Stopped, never, no_report
from deliberate.errors import DeliberateError
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.remedies.aims import AIMS, ALL_OR_NOTHING, Aim, Meeting, as_aim, asked_for, reached, way
from deliberate.rehearsal.remedies.candidates import candidates
from deliberate.rehearsal.remedies.figures import Effort, Figures, effort, figures, price, sketch_for
from deliberate.rehearsal.remedies.grounds import Grounds
from deliberate.rehearsal.remedies.told import arrows_of, asks, concerned, does, outcome
from deliberate.rehearsal.results import Introductions, Suggestion
from deliberate.rehearsal.suggestions import apply, words
from deliberate.scenario.access import variant_index
from deliberate.scenario.values import Scenario

TOLD = 8
PRICE = 0.5  # asking everything of everybody outweighs half of the way
FEWER_VOICES = 0.5  # and so does putting the result of all into one hand


@dataclass(frozen=True, eq=False)
class Remedy:
    """A change of process for an aim.

    says: the change as a request; does: what that would do for the aim; asks: what it takes; outcome: mean and vote
    at the plan's end, before and after, whichever way they go. Plain text, all but the request whole sentences.
    before, after: the figures of the variant and of what `suggestions.apply` makes of it. way: how much of the way
    to the aim it goes, at most 1; worth: that less what it asks, by which remedies are ranked. people, arrows
    (listener, source): those to light up.
    """

    aim: Aim
    suggestion: Suggestion
    says: str
    does: str
    asks: str
    outcome: str
    before: Figures
    after: Figures
    effort: Effort
    way: float
    worth: float
    people: tuple[str, ...]
    arrows: tuple[tuple[str, str], ...]


def remedies(
    scenario: Scenario,
    variant: str | None,
    question: str | None,
    aim: str,
    *,
    progress: Progress = no_report,
    stopped: Stopped = never,
) -> tuple[Remedy, ...]:
    """The best change of each kind for the aim, the best first; none where nothing that is tried serves it.

    `variant` is a name and `question` an id; None for the first ones. `progress` is told the part that is done, 0 to
    1. Once `stopped` is true the search ends, and what it found comes back. Raises DeliberateError for names that are
    not there and for more than 1,000 people.
    """
    return _search(scenario, variant, question).best(as_aim(aim), progress, stopped)


def aims_here(scenario: Scenario, variant: str | None = None, question: str | None = None) -> tuple[Aim, ...]:
    """The aims that the figures of a meeting ask for."""
    return _search(scenario, variant, question).aims()


def best_for_each_aim(
    scenario: Scenario, variant: str | None = None, question: str | None = None
) -> dict[Aim, tuple[Remedy, ...]]:
    """The best change for each aim that the figures ask for; no change where nothing that is tried serves it."""
    search = _search(scenario, variant, question)
    return {aim: search.best(aim)[:1] for aim in search.aims()}


def _search(scenario: Scenario, variant: str | None, question: str | None) -> _Search:
    setup, asked = pick_variant(scenario, variant), pick_question(scenario, question)
    if len(setup.people) > FULL_PEOPLE:
        raise DeliberateError(
            f"remedies are looked for among up to {FULL_PEOPLE:,} people, there are {len(setup.people):,}"
        )
    return _Search(scenario, setup.name, asked.id)


class _Search:
    def __init__(self, scenario: Scenario, variant: str, question: str) -> None:
        self.scenario = scenario
        self.variant = variant
        self.question = question
        self.sketch = sketch_for(scenario, variant, question)
        self.before = figures(self.sketch)
        present = int(self.sketch.present.sum())
        self.meeting = Meeting(present, self.sketch.plan_rounds, self.sketch.question.width)

    def aims(self) -> tuple[Aim, ...]:
        return tuple(aim for aim in AIMS if asked_for(aim, self.before, self.meeting))

    def best(self, aim: Aim, progress: Progress = no_report, stopped: Stopped = never) -> tuple[Remedy, ...]:
        found: dict[tuple[type, int], Remedy] = {}
        waiting = candidates(aim, Grounds(self.sketch)) if self.meeting.people else ()
        for done, suggestion in enumerate(waiting):
            if stopped():
                break
            progress(done / len(waiting))
            remedy = self._tried(aim, suggestion, stopped)
            kind = _kind(suggestion)
            if remedy is not None and _better(remedy, found.get(kind)):
                found[kind] = remedy
        else:
            progress(1.0)
        return tuple(sorted(found.values(), key=lambda one: -one.worth)[:TOLD])

    def _tried(self, aim: Aim, suggestion: Suggestion, stopped: Stopped) -> Remedy | None:
        try:
            changed = apply(self.scenario, self.variant, suggestion)
        except DeliberateError:  # no room in a row, or a table that nobody can sit at
            return None
        if stopped():  # in a large meeting making the variant takes as long as rehearsing it
            return None
        place = variant_index(self.scenario, self.variant)
        after = figures(sketch_for(changed, changed.variants[place + 1].name, self.question))
        if not reached(aim, self.before, after):
            return None
        asked = effort(self.scenario.variants[place], changed.variants[place + 1], suggestion)
        goes = way(aim, self.before, after)
        fewer = max(self.before.voices - after.voices, 0.0) / max(self.meeting.people, 1)
        cost = PRICE * price(asked, self.meeting.people, self.meeting.rounds) + FEWER_VOICES * fewer
        if goes <= cost and aim not in ALL_OR_NOTHING:
            return None
        return Remedy(
            aim=aim,
            suggestion=suggestion,
            says=words(suggestion, self.scenario.variants[place]),
            does=does(aim, self.sketch, self.before, after),
            asks=asks(asked),
            outcome=outcome(self.sketch, self.before, after),
            before=self.before,
            after=after,
            effort=asked,
            way=goes,
            worth=goes - cost,
            people=concerned(suggestion),
            arrows=arrows_of(suggestion),
        )


def _kind(suggestion: Suggestion) -> tuple[type, int]:
    """Of changes of one kind only the best is told; so many introductions at once are a kind of their own."""
    return type(suggestion), len(suggestion.arrows) if isinstance(suggestion, Introductions) else 0


def _better(one: Remedy, than: Remedy | None) -> bool:
    return than is None or one.worth > than.worth + 1e-9
