"""Whether views settle, on what, and how soon: settles, lasting-gap, unfinished, slow."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from deliberate.rehearsal.findings.sketch import Sketch, ending, halves, is_are, points, rounds, since
from deliberate.rehearsal.findings.suggesting import introduction, joint_round
from deliberate.rehearsal.results import Finding, JointRound
from deliberate.rehearsal.words import count, percent

FEWEST_ROUNDS = 3.0  # a gap that halves sooner is not slow, however short the plan is
MUCH_OWN_VIEW = 0.75
ALIKE = 1e-9  # a difference of influence that is rounding
MUCH_INFLUENCE = 2.0  # times an equal share; beyond it `carries` tells more


def settles(sketch: Sketch) -> Iterator[Finding]:
    """A common view. Where all come to one view that does not move, `fixed_view` says it."""
    view = sketch.common_view
    if view is None or (sketch.still & sketch.heard).any():
        return
    agreed = sketch.agreed
    where, within = sketch.view(view), f"within {sketch.tolerance} of each other"
    if agreed == 0:
        says = f"All start {within}, and they settle on {where}."
        if _guessed(sketch):
            says = f"Taken to be at {sketch.number(sketch.question.middle)} where not known, a{says[1:]}"
    elif agreed is not None and agreed <= sketch.end:
        says = f"All settle on {where} in the sketch, {within} {since(agreed)}."
    else:
        says = f"If they talked on, all would settle on {where} in the sketch."
    yield Finding(
        kind="settles",
        says=says,
        why=_why_settles(sketch),
        people=sketch.ids(sketch.here),
        figures={"view": view} | ({} if agreed is None else {"rounds_to_agree": agreed}),
    )


def _guessed(sketch: Sketch) -> bool:
    """Whether somebody who is present has a start that is not known."""
    unknown = {sketch.assembly.place[person] for person in sketch.rehearsal.unknown_starts}
    return any(sketch.present[person] for person in unknown)


def _why_settles(sketch: Sketch) -> str:
    groups = sketch.closed
    if sketch.question.hearing_range is not None:
        return "Word gets round among all who take part, though views too far apart are not heard at first."
    if len(groups) != 1:
        return "They do not all hear each other for ever, but come near enough while they do, or start so."
    if len(groups[0]) == len(sketch.here):
        all_hear = (
            "Both hear each other"
            if len(sketch.here) == 2
            else "Everybody hears everybody, directly or through others"
        )
        return f"{all_hear}, {_how_much_counts(sketch)}."
    group = sketch.names(groups[0])
    if len(groups[0]) == 1:
        return f"In the end all others hear {group}, directly or through others, so their views draw to that one."
    return f"All hear {group}, directly or through others, and these hear each other, so views draw together."


def _how_much_counts(sketch: Sketch) -> str:
    """Whether starts count alike, rounded so that it stays true."""
    influence = sketch.influence[sketch.here]
    top, equal = float(influence.max()), 1 / len(influence)
    if top > MUCH_INFLUENCE * equal or len(influence) == 2:
        alike = np.ptp(influence) <= ALIKE
        return "and both starts count alike" if alike else "so views draw together round by round"
    if np.ptp(influence) <= ALIKE:
        return "and every start counts for as much as any other"
    return f"and no start makes up more than {math.ceil(100 * top - ALIKE)} %"


def lasting_gap(sketch: Sketch) -> Iterator[Finding]:
    """No common view, however long they talk, for reasons other than closed groups."""
    limit = sketch.rehearsal.limit
    if limit is None or len(sketch.here) < 2 or (len(sketch.closed) > 1 and not _all_still(sketch)):
        return
    gap = sketch.spread(limit)
    if gap <= sketch.rehearsal.tolerance:
        return
    low, high = (int(sketch.here[at(limit[sketch.here])]) for at in (np.argmin, np.argmax))
    views = _two_views(sketch, limit[low], limit[high])
    fixed = np.flatnonzero(sketch.still & sketch.heard)
    apart = [introduction(sketch, fixed[at : at + 1], np.delete(fixed, at)) for at in range(min(len(fixed), 8))]
    yield Finding(
        kind="lasting-gap",
        says=f"No common view, however long they talk: a gap of {sketch.gap(gap)} stays in the sketch.",
        why=f"{_why_gap(sketch)}; in the end {sketch.names([low])} and {sketch.names([high])} hold {views}.",
        people=sketch.ids([low, high]),
        figures={"gap": gap, "lowest": float(limit[low]), "highest": float(limit[high])},
        suggestion=next(filter(None, apart), None) or _meeting(sketch, gap),
    )


def _meeting(sketch: Sketch, gap: float) -> JointRound | None:
    """A joint round, where nobody hears anybody and it narrows the gap."""
    if not sketch.still[sketch.here].all():
        return None
    return joint_round(sketch, lambda after: after.spread(after.long_run) < gap)


def _two_views(sketch: Sketch, low: float, high: float) -> str:
    return f"{sketch.number(low, beside=high)} and {sketch.number(high, beside=low)}"


def _all_still(sketch: Sketch) -> bool:
    """Every closed group is a person whose view never moves."""
    return all(len(group) == 1 and sketch.still[group[0]] for group in sketch.closed)


def _why_gap(sketch: Sketch) -> str:
    firm = sketch.here[(sketch.firmness[sketch.here] > 0) & ~sketch.still[sketch.here]]
    fixed = sketch.here[sketch.still[sketch.here]]
    if len(firm):
        lowest, highest = sketch.firmness[firm].min(), sketch.firmness[firm].max()
        part = percent(lowest) if lowest == highest else f"{points(lowest)} to {percent(highest)}"
        everybody = "Both" if len(firm) == 2 else f"All {len(firm)}"
        whom = everybody if len(firm) == len(sketch.here) else sketch.names(firm)
        verb = ending(len(firm)) if len(firm) != len(sketch.here) else ""
        return f"{whom} bring{verb} back {part} of the start in every round"
    if len(fixed) == len(sketch.here):
        return "Nobody hears anybody in any stage, so every view stays where it starts"
    if len(fixed):
        return f"The views of {sketch.names(fixed)} do not move, and the others are drawn to more than one of them"
    distance = sketch.question.hearing_range
    if distance is not None:
        return f"Views more than {sketch.gap(distance)} apart are not heard"
    return "Not all can hear each other in the stage that goes on for ever"


def unfinished(sketch: Sketch) -> Iterator[Finding]:
    """The plan ends before views have come to where they are going."""
    limit = sketch.rehearsal.limit
    if limit is None or len(sketch.here) < 2:
        return
    view = sketch.common_view
    if view is None:
        yield from _still_moving(sketch)
        return
    spread = sketch.spread(sketch.ends)
    if spread <= sketch.rehearsal.tolerance:
        return
    agreed = sketch.agreed
    when = f"only {since(agreed)}" if agreed is not None else "only after very many rounds"
    low, high = (int(sketch.here[at(sketch.ends[sketch.here])]) for at in (np.argmin, np.argmax))
    suggestion = None
    if sketch.end == sketch.plan_rounds:
        suggestion = joint_round(sketch, lambda after: after.spread(after.ends) < spread)
    yield Finding(
        kind="unfinished",
        says=f"The plan ends before views meet: {sketch.at_end} they are still {sketch.gap(spread)} apart.",
        why=f"{_furthest(sketch, low, high)}; {_as_it_goes_on(sketch)} all would be within {sketch.tolerance} of each"
        f" other {when}, and the plan has {rounds(sketch.plan_rounds)}.",
        people=sketch.ids([low, high]),
        figures={"spread": spread, "plan_rounds": sketch.plan_rounds}
        | ({} if agreed is None else {"rounds_to_agree": agreed}),
        suggestion=suggestion,
    )


def _furthest(sketch: Sketch, low: int, high: int) -> str:
    views = _two_views(sketch, sketch.ends[low], sketch.ends[high])
    return f"{sketch.names([low])} and {sketch.names([high])} then hold {views}"


def _as_it_goes_on(sketch: Sketch) -> str:
    stages = sketch.variant.plan.stages
    if sketch.variant.plan.afterwards == "repeat":
        return "if the plan were repeated"
    return "if the last stage went on" if len(stages) > 1 else "if talk went on"


def _still_moving(sketch: Sketch) -> Iterator[Finding]:
    """Without a common view: somebody is still on the way at the plan's end."""
    away = np.abs(sketch.rehearsal.limit - sketch.ends)[sketch.here]
    furthest = int(sketch.here[np.argmax(away)])
    if away.max() <= sketch.rehearsal.tolerance:
        return
    moving = sketch.here[away > sketch.rehearsal.tolerance]
    start, end = sketch.ends[furthest], sketch.rehearsal.limit[furthest]
    yield Finding(
        kind="unfinished",
        says=f"The plan ends before views settle: {count(len(moving), 'view', 'views')}"
        f" {is_are(len(moving))} still on the move {sketch.at_end}.",
        why=f"The view of {sketch.names([furthest])} is at {sketch.number(start, beside=end)} then and would settle"
        f" on {sketch.number(end, beside=start)} {_as_it_goes_on(sketch)}.",
        people=sketch.ids(moving),
        figures={"furthest": float(away.max()), "plan_rounds": sketch.plan_rounds},
    )


def slow(sketch: Sketch) -> Iterator[Finding]:
    """In the whole plan what is left of the way to a common view does not even halve."""
    halving, view = sketch.rehearsal.rounds_to_halve, sketch.common_view
    if halving is None or view is None or halving < max(sketch.plan_rounds, FEWEST_ROUNDS):
        return
    if sketch.spread(sketch.ends) <= sketch.rehearsal.tolerance:
        return
    people, reason = _why_slow(sketch)
    yield Finding(
        kind="slow",
        says=f"Views draw together slowly: what is left of the gap {halves(halving)}.",
        why=reason,
        people=people,
        figures={"rounds_to_halve": halving, "plan_rounds": sketch.plan_rounds},
    )


def _why_slow(sketch: Sketch) -> tuple[tuple[str, ...], str]:
    own = np.asarray(sketch.drawn.matrix.diagonal())[sketch.here]
    most = np.flatnonzero(own >= MUCH_OWN_VIEW)
    if 0 < len(most) < len(sketch.here):
        keepers = sketch.here[most]
        bound = points(own[most].min()) if len(most) == 1 else f"{math.floor(100 * own[most].min())} or more"
        return sketch.ids(keepers), (
            f"{sketch.names(keepers)} keep{ending(len(most))} {bound} of 100 points for the own view,"
            " and the rest wait for that to move."
        )
    if len(most) == len(sketch.here):
        return sketch.ids(sketch.here), "Everybody keeps most of the 100 points for the own view, so little is heard."
    return (), "Word gets round only bit by bit: views far apart reach each other through few points or many people."
