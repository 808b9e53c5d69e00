"""One run of the whole computation: a scenario's variant and question in, a `Rehearsal` out."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from deliberate.dynamics.agreeing import rounds_to_agree
from deliberate.dynamics.longrun import Group, LongRun, long_run
from deliberate.dynamics.rounds import play
from deliberate.errors import DeliberateError
from deliberate.rehearsal import agreement
from deliberate.rehearsal.assemble import Assembly, assemble
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.results import ClosedGroup, Cycle, Floats, Rehearsal, Tally
from deliberate.rehearsal.words import count, in_words
from deliberate.scenario.values import Question, Scenario, Variant

TOLERANCE = 0.01  # of the scale's width
COMMON_VIEW = 1e-9  # of the scale's width: a limit with no larger spread is one view
MOST_NUMBERS = 50_000_000  # beliefs kept, rounds times people


def rehearse(
    scenario: Scenario,
    variant: str | None = None,
    question: str | None = None,
    rounds: int | None = None,
    tolerance: float | None = None,
) -> Rehearsal:
    """Play the meeting and work out where the talking leads.

    `variant` is a name and `question` an id; left out, the first ones. `rounds` defaults to the plan's rounds in
    all, `tolerance` (on the question's scale) to 1 % of its width. Raises DeliberateError for a name that is not
    in the scenario and for rounds or a tolerance that make no sense.
    """
    setup = pick_variant(scenario, variant)
    asked = pick_question(scenario, question)
    played = _checked_rounds(setup, rounds)
    within = _checked_tolerance(asked, tolerance)
    sketch = assemble(setup, asked)
    beliefs = play(sketch.process, sketch.starts, played, asked.hearing_range, asked.width)
    fate = long_run(sketch.process, sketch.starts, scale_width=asked.width, hearing_range=asked.hearing_range)
    agreed = rounds_to_agree(sketch.process, sketch.starts, within, fate, asked.hearing_range, asked.width)
    vote, vote_at_limit = _ballots(scenario, setup, asked, beliefs, fate.limit)
    verdicts, verdicts_at_limit = _agreements(setup, asked, beliefs, fate.limit)
    return Rehearsal(
        variant=setup.name,
        question=asked.id,
        people=sketch.people,
        rounds=_kept(beliefs),
        spread=_kept(_spread(beliefs)),
        settles_from_any_start=fate.settles_from_any_start,
        settles=fate.settles,
        consensus_from_any_start=fate.consensus_from_any_start,
        consensus=fate.limit is not None and bool(_spread(fate.limit) <= COMMON_VIEW * asked.width),
        limit=None if fate.limit is None else _kept(fate.limit),
        cycle=_cycle(fate),
        long_run_average=_kept(fate.average),
        closed_groups=tuple(_closed_group(group, sketch) for group in fate.groups),
        outside=tuple(sketch.people[at] for at in fate.outside.tolist()),
        influence=_kept(fate.influence),
        effective_voices=_effective_voices(fate.influence),
        rate=fate.rate,
        rounds_to_agree=agreed,
        rounds_to_halve=_rounds_to_halve(fate.rate),
        tolerance=within,
        ballot=vote,
        ballot_at_limit=vote_at_limit,
        agreement=verdicts,
        agreement_at_limit=verdicts_at_limit,
        unknown_starts=sketch.unknown_starts,
        notes=(*fate.notes, *_notes(setup, asked, sketch)),
    )


def rounds_to_agree_among(
    people: NDArray[np.intp], assembly: Assembly, question: Question, rehearsal: Rehearsal
) -> int | None:
    """`rounds_to_agree` of a part of the people, given by index, who hear nobody else: those present, say.

    None for never, for nobody, and beyond counting.
    """
    if len(people) == len(assembly.people):
        return rehearsal.rounds_to_agree
    if not len(people):
        return None
    process, hearing, width = assembly.process, question.hearing_range, question.width
    fate = long_run(process, assembly.starts, scale_width=width, hearing_range=hearing)
    return rounds_to_agree(process, assembly.starts, rehearsal.tolerance, fate, hearing, width, among=people)


def _checked_rounds(variant: Variant, rounds: int | None) -> int:
    played = variant.plan.rounds if rounds is None else rounds
    if played < 0:
        raise DeliberateError(f"must be 0 or more, is {played}", "rounds")
    if (played + 1) * len(variant.people) > MOST_NUMBERS:
        people = count(len(variant.people), "person", "people")
        raise DeliberateError(
            f"{played:,} with {people} are more than {MOST_NUMBERS:,} beliefs; ask for fewer rounds", "rounds"
        )
    return played


def _checked_tolerance(question: Question, tolerance: float | None) -> float:
    if tolerance is None:
        return TOLERANCE * question.width
    if not (math.isfinite(tolerance) and tolerance > 0):
        raise DeliberateError(f"must be a number above 0, is {tolerance}", "tolerance")
    return float(tolerance)


def _ballots(
    scenario: Scenario, variant: Variant, question: Question, beliefs: Floats, limit: Floats | None
) -> tuple[tuple[Tally, ...] | None, Tally | None]:
    if question.pass_mark is None:
        return None, None
    electorate = Electorate(question, scenario.ballot, variant.people)
    at_limit = None if limit is None else next(iter(electorate.tally(limit[None, :])))
    return tuple(electorate.tally(beliefs)), at_limit


def _agreements(
    variant: Variant, question: Question, beliefs: Floats, limit: Floats | None
) -> tuple[tuple[tuple[agreement.Agreement, ...], ...] | None, tuple[agreement.Agreement, ...] | None]:
    if not question.agreement:
        return None, None
    at_limit = None if limit is None else agreement.judge(question, variant.people, limit[None, :])[0]
    return agreement.judge(question, variant.people, beliefs), at_limit


def _spread(beliefs: Floats) -> Floats:
    """Highest minus lowest belief along the last axis; 0 where there is nobody."""
    if beliefs.shape[-1] == 0:
        return np.zeros(beliefs.shape[:-1])
    return beliefs.max(axis=-1) - beliefs.min(axis=-1)


def _cycle(fate: LongRun) -> Cycle | None:
    if fate.cycle is None or fate.cycle_period is None:
        return None
    return Cycle(fate.cycle_period, _kept(fate.cycle))


def _closed_group(group: Group, sketch: Assembly) -> ClosedGroup:
    people = tuple(sketch.people[at] for at in group.members.tolist())
    return ClosedGroup(
        people=people,
        period=group.period,
        phases=tuple(group.phases.tolist()),
        influence=dict(zip(people, group.influence.tolist(), strict=True)),
        anchored=group.anchored,
    )


def _effective_voices(influence: Floats) -> float:
    """1 over the sum of squared shares (Laakso and Taagepera 1979): so many equal voices are as concentrated."""
    return 1 / float(influence @ influence) if len(influence) else 0.0


def _rounds_to_halve(rate: float | None) -> float | None:
    if rate is None or rate >= 1:
        return None
    return 0.0 if rate <= 0 else math.log(0.5) / math.log(rate)


def _notes(variant: Variant, question: Question, sketch: Assembly) -> Sequence[str]:
    """What a reader should know of this set-up; without names, so that they can be passed on."""
    notes = []
    if sketch.unknown_starts:
        people = in_words(len(sketch.unknown_starts), "person starts", "people start")
        notes.append(f"{people} at the middle of the scale because no starting belief is known")
    absent = sum(not person.present for person in variant.people)
    if absent:
        people = in_words(absent, "person is", "people are")
        notes.append(
            f"{people} absent; beliefs of the absent stay as they are, and spread and influence include them"
        )
    return [*notes, *agreement.notes(question, variant.people)]


def _kept(array: Floats) -> Floats:
    """Read-only, because results are shared."""
    array.flags.writeable = False
    return array
