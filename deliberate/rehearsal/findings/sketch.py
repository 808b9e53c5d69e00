"""What every family of findings looks at: the rehearsal and its meeting, as arrays over people, and words for both.

Absent people neither hear nor are heard, and people who stand apart neither hear nor are heard in any stage:
talk of groups, of a common view and of the spread leaves both out.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from deliberate.dynamics.large import large_structure, large_turn
from deliberate.dynamics.longrun import final_map
from deliberate.dynamics.network import Indices, Mask
from deliberate.dynamics.process import course
from deliberate.dynamics.shares import Shares, shares
from deliberate.dynamics.structure import full_structure, structure
from deliberate.dynamics.turns import turn_of
from deliberate.rehearsal import words
from deliberate.rehearsal.agreement import voters
from deliberate.rehearsal.assemble import Assembly, assemble
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.rehearse import rounds_to_agree_among
from deliberate.rehearsal.results import Floats, Rehearsal
from deliberate.scenario.values import Question, Scenario, Variant

FULL_PEOPLE = 400  # up to here a full map from starts to the plan's end costs less than an edit may
A_MILLION = 1_000_000


@dataclass(frozen=True, eq=False)
class Sketch:
    """One rehearsal with its meeting. Arrays over people follow `rehearsal.people`."""

    scenario: Scenario
    variant: Variant
    question: Question
    rehearsal: Rehearsal

    # The meeting as arrays

    @cached_property
    def assembly(self) -> Assembly:
        """The meeting as the dynamics compute with it."""
        return assemble(self.variant, self.question)

    @property
    def starts(self) -> Floats:
        """(n,) starting beliefs."""
        return self.assembly.starts

    @property
    def firmness(self) -> Floats:
        """(n,) the part of the start that each person brings back in every round."""
        return self.assembly.process.firmness

    @property
    def present(self) -> Mask:
        """(n,) who is there."""
        return self.assembly.process.network.present

    @cached_property
    def counts(self) -> Mask:
        """(m,) the arrows that count in some stage of the plan: both are present, and the setting lets it through."""
        process = self.assembly.process
        network = process.network
        counts = (network.weight > 0) & network.present[network.listener] & network.present[network.source]
        if all(block.heard is not None for block in process.blocks):
            heard = np.zeros(network.arrows, dtype=bool)
            for mask in {id(block.heard): block.heard for block in process.blocks}.values():
                heard |= mask
            counts &= heard
        return counts

    @cached_property
    def one_setting(self) -> bool:
        """Whether the same arrows count in all stages."""
        blocks = self.assembly.process.blocks
        return all(block.heard is blocks[0].heard and block.unheard == blocks[0].unheard for block in blocks)

    @cached_property
    def drawn(self) -> Shares:
        """Shares over all arrows that count in some stage, what goes to others being kept by the own view."""
        return shares(self.assembly.process.network, self.counts)

    @cached_property
    def hears(self) -> Mask:
        """(n,) who takes in somebody in some stage; a person of firmness 1 takes in nobody."""
        return self._touched(self.assembly.process.network.listener)

    @cached_property
    def heard(self) -> Mask:
        """(n,) whom somebody takes in in some stage."""
        return self._touched(self.assembly.process.network.source)

    def _touched(self, ends: Indices) -> Mask:
        network = self.assembly.process.network
        taken_in = self.counts & (self.firmness[network.listener] < 1)
        touched = np.zeros(network.people, dtype=bool)
        touched[ends[taken_in]] = True
        return touched

    @cached_property
    def still(self) -> Mask:
        """(n,) present people whose view can never move, because they take in nobody in any stage."""
        return self.present & ~self.hears

    @cached_property
    def apart(self) -> Mask:
        """(n,) present people who stand apart from the talk of the others; nobody where all do."""
        apart = self.still & ~self.heard
        return np.zeros_like(apart) if apart[self.present].all() else apart

    @cached_property
    def here(self) -> Indices:
        """The present people who take part in the talk; all who are present where nobody does."""
        return np.flatnonzero(self.present & ~self.apart)

    @cached_property
    def closed(self) -> tuple[Indices, ...]:
        """Groups of people who in the long run hear only themselves, firm or not, without those who stand apart."""
        if self.question.hearing_range is None and any(group.anchored for group in self.rehearsal.closed_groups):
            groups = self._closed_without_firmness()
        else:
            place = self.assembly.place
            groups = [
                np.array([place[person] for person in group.people], dtype=np.intp)
                for group in self.rehearsal.closed_groups
                if not group.anchored
            ]
        taking_part = self.present & ~self.apart
        return tuple(group for group in groups if taking_part[group[0]])

    def _closed_without_firmness(self) -> list[Indices]:
        lasting = course(self.assembly.process).lasting
        nobody_firm = np.zeros(len(self.present))
        if len(nobody_firm) > FULL_PEOPLE:
            found = large_structure(large_turn(lasting, nobody_firm))
        else:
            found = full_structure(turn_of(lasting, nobody_firm).kept, nobody_firm > 0)
        return [group.members for group in found.closed]

    @cached_property
    def met(self) -> bool:
        """Whether all who take part would be linked into one closed group if every drawn arrow counted for ever."""
        found = structure(shares(self.assembly.process.network).as_sparse)
        taking_part = self.present & ~self.apart
        return sum(bool(taking_part[group.members[0]]) for group in found.closed) == 1

    # The rehearsal

    @cached_property
    def plan_rounds(self) -> int:
        """How many rounds the plan has."""
        return self.variant.plan.rounds

    @cached_property
    def end(self) -> int:
        """The round at the plan's end, or the last one that was played when that comes before."""
        return min(self.plan_rounds, len(self.rehearsal.rounds) - 1)

    @property
    def at_end(self) -> str:
        """When that is, in words."""
        return "at the plan's end" if self.end == self.plan_rounds else f"after round {words.amount(self.end)}"

    @property
    def ends(self) -> Floats:
        """(n,) beliefs at the plan's end."""
        return self.rehearsal.rounds[self.end]

    @property
    def long_run(self) -> Floats:
        """(n,) where beliefs lead: the limit, or the average over a swing."""
        limit = self.rehearsal.limit
        return self.rehearsal.long_run_average if limit is None else limit

    @cached_property
    def common_view(self) -> float | None:
        """What those who take part settle on, to within the tolerance; None where they do not, or where there is
        but one."""
        if self.rehearsal.limit is None or len(self.here) < 2:
            return None
        limit = self.rehearsal.limit[self.here]
        return float(limit.mean()) if np.ptp(limit) <= self.rehearsal.tolerance else None

    @cached_property
    def agreed(self) -> int | None:
        """The round from which those who take part stay within the tolerance; None for never, or beyond counting."""
        return rounds_to_agree_among(self.here, self.assembly, self.question, self.rehearsal)

    @cached_property
    def influence(self) -> Floats:
        """(n,) what each start counts for in the average long-run view of those present; the absent have none."""
        influence = np.where(self.present, self.rehearsal.influence, 0.0)
        total = influence.sum()
        return influence / total if total > 0 else influence

    @cached_property
    def final_map(self) -> Floats | None:
        """(n, n) the matrix P with ``ends = P @ starts``; None with a hearing range and for very many people."""
        if self.question.hearing_range is not None or len(self.present) > FULL_PEOPLE:
            return None
        return final_map(self.assembly.process, self.end)

    @cached_property
    def electorate(self) -> Electorate | None:
        """Those who may vote on the question; None where it has no vote."""
        if self.question.pass_mark is None:
            return None
        return Electorate(self.question, self.scenario.ballot, self.variant.people)

    @cached_property
    def voters(self) -> Indices:
        """The present people with a vote."""
        return voters(self.variant.people)

    # Words

    def ids(self, people: Iterable[int]) -> tuple[str, ...]:
        """The ids of people given by index."""
        known = self.rehearsal.people
        return tuple(known[at] for at in people)

    @cached_property
    def shown_names(self) -> Mapping[str, str]:
        """Each id's name."""
        return words.shown_names(self.variant)

    def names(self, people: Iterable[int], most: int = 4) -> str:
        """The people in a sentence, at most so many."""
        return words.names(self.ids(people), self.shown_names, most)

    def number(self, value: float, beside: float | None = None) -> str:
        """A belief, or the distance between two, on the question's scale."""
        return words.number(float(value), self.question, beside)

    def gap(self, value: float) -> str:
        """A distance between views that is not nothing."""
        return self.number(value, beside=0.0)

    def view(self, value: float) -> str:
        """A belief with its unit."""
        return words.with_unit(float(value), self.question)

    @cached_property
    def tolerance(self) -> str:
        """How near views must be to count as one, in words."""
        return self.gap(self.rehearsal.tolerance)

    def spread(self, beliefs: Floats) -> float:
        """Highest minus lowest belief of those who take part."""
        return float(np.ptp(beliefs[self.here])) if len(self.here) else 0.0


def sketch_of(scenario: Scenario, rehearsal: Rehearsal) -> Sketch:
    """The sketch behind a rehearsal of `scenario`."""
    variant = pick_variant(scenario, rehearsal.variant)
    return Sketch(scenario, variant, pick_question(scenario, rehearsal.question), rehearsal)


def rounds(number: float) -> str:
    """A number of rounds: "1 round", "7.3 rounds", "more than a million rounds"."""
    if number >= A_MILLION:
        return "more than a million rounds"
    return words.count(round(number, 1 if number < 10 else 0), "round", "rounds")


def round_name(number: int) -> str:
    """One round of many: "round 12"; beyond a million nobody counts."""
    return f"round {words.amount(number)}" if number < A_MILLION else "a round beyond the millionth"


def since(number: int) -> str:
    """From when something holds: "from the start", "from round 12 on"."""
    return "from the start" if number == 0 else f"from {round_name(number)} on"


def halves(number: float) -> str:
    """What a gap does that halves once in so many rounds: "halves every 46 rounds"."""
    if number >= A_MILLION:
        return "halves once in more than a million rounds"
    shown = round(number, 1)
    if shown < 1:
        return "more than halves in every round"
    return "halves in every round" if shown == 1 else f"halves every {rounds(number)}"


def pairs(sketch: Sketch, arrows: Indices) -> tuple[tuple[str, str], ...]:
    """Arrows given by index as (listener, source)."""
    network = sketch.assembly.process.network
    listeners, sources = sketch.ids(network.listener[arrows]), sketch.ids(network.source[arrows])
    return tuple(zip(listeners, sources, strict=True))


def points(share: float) -> str:
    """A share as points of 100: "12", "0.4"; never rounded to nothing or to all."""
    hundredth = 100 * float(share)
    if 0 < hundredth < 0.1:
        return "under 0.1"
    if 99.5 <= hundredth < 100:
        return "over 99"
    return words.amount(round(hundredth, 1 if hundredth < 10 else 0))


def is_are(people: int) -> str:
    """The verb that goes with so many people."""
    return "is" if people == 1 else "are"


def ending(people: int) -> str:
    """The ending of a verb that goes with so many people: "hear", "hears"."""
    return "s" if people == 1 else ""
