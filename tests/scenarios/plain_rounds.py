"""The rounds of a scenario in a few lines of plain numpy, from the words of formats.md and from nothing in the
program but the values it reads: what the demo tests are checked against besides the program itself."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from deliberate.scenario.values import Arrow, Question, Scenario, Stage, Variant

Floats = NDArray[np.float64]


def plain_rounds(scenario: Scenario, variant: str, question: str, rounds: int) -> Floats:
    """Beliefs after round 0 to `rounds`, shape (rounds + 1, people)."""
    meeting = next(one for one in scenario.variants if one.name == variant)
    asked = next(one for one in scenario.questions if one.id == question)
    start = np.array([person.beliefs.get(question, (asked.low + asked.high) / 2) for person in meeting.people])
    firmness = np.array([person.firmness for person in meeting.people])
    order = [stage for stage in meeting.plan.stages for _ in range(stage.rounds)]
    matrices: dict[Stage, Floats] = {}
    beliefs = [start]
    for at in range(rounds):
        beyond = at % len(order) if meeting.plan.afterwards == "repeat" else len(order) - 1
        stage = order[at if at < len(order) else beyond]
        if stage not in matrices or asked.hearing_range is not None:
            matrices[stage] = share_matrix(meeting, stage, asked, beliefs[-1])
        beliefs.append(firmness * start + (1 - firmness) * (matrices[stage] @ beliefs[-1]))
    return np.array(beliefs)


def share_matrix(meeting: Variant, stage: Stage, asked: Question, beliefs: Floats) -> Floats:
    """T of one round: row = listener, each row adds to 1."""
    index = {person.id: at for at, person in enumerate(meeting.people)}
    present = {person.id for person in meeting.people if person.present}
    own = np.array([person.own_weight for person in meeting.people])
    drawn, counts = np.zeros((2, len(index), len(index)))
    for arrow in meeting.arrows:
        listener, source = index[arrow.listener], index[arrow.source]
        drawn[listener, source] = arrow.weight
        near = asked.hearing_range is None or abs(beliefs[source] - beliefs[listener]) <= asked.hearing_range + 1e-9
        if near and arrow.listener in present and arrow.source in present and _counts(stage, arrow):
            counts[listener, source] = arrow.weight
    total = own + drawn.sum(axis=1)
    if stage.unheard == "rescale":
        total = own + counts.sum(axis=1)
        own_shares = own
    else:
        own_shares = total - counts.sum(axis=1)
    silent = total == 0
    shares = (counts + np.diag(own_shares)) / np.where(silent, 1, total)[:, None]
    shares[silent, silent] = 1
    return shares


def _counts(stage: Stage, arrow: Arrow) -> bool:
    match stage.setting:
        case "tables":
            return any({arrow.listener, arrow.source} <= set(table) for table in stage.tables)
        case "panel":
            return arrow.source in stage.speakers
        case "pairs":
            return {arrow.listener, arrow.source} in [set(pair) for pair in stage.pairs]
        case "silence":
            return False
    return True
