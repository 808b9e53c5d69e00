"""Who hears only whom, and who is not heard: closed-groups, outside, unheard, hears-nobody."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.rehearsal.findings.sketch import Indices, Sketch, ending, is_are
from deliberate.rehearsal.findings.suggesting import acquaintance, introduction, joint_round, tried
from deliberate.rehearsal.results import Finding, Floats, Suggestion
from deliberate.rehearsal.words import in_words, listing, sentence

NAMED_GROUPS = 3
COUNTS_FOR_NOTHING = 1e-9  # influence below this is rounding


def closed_groups(sketch: Sketch) -> Iterator[Finding]:
    """Two or more groups that hear only themselves, at least one of them of several people."""
    groups = sorted(sketch.closed, key=lambda group: -len(group))
    if len(groups) < 2 or len(groups[0]) < 2:
        return
    ends = np.array([sketch.long_run[group].mean() for group in groups])
    gap = float(np.ptp(ends))
    apart = gap > sketch.rehearsal.tolerance
    # A stage that keeps people apart only after they have come together stops nothing.
    if not apart and sketch.met:
        return
    yield Finding(
        kind="closed-groups",
        says=_says_closed(sketch, groups, gap if apart else None),
        why=_why_closed(sketch, groups, ends),
        people=sketch.ids(np.concatenate(groups)),
        figures={"groups": len(groups), "gap": gap}
        | {f"view_{at}": end for at, end in enumerate(ends[:9].tolist(), 1)},
        groups=tuple(sketch.ids(group) for group in groups),
        suggestion=_meeting(sketch, groups),
    )


def _says_closed(sketch: Sketch, groups: list[Indices], gap: float | None) -> str:
    them = in_words(len(groups), "group", "groups")
    up_to = "" if len(groups) == 2 else "up to "
    ends = ", though they happen to end together" if gap is None else f" and end {up_to}{sketch.gap(gap)} apart"
    distance = sketch.question.hearing_range
    if distance is not None and sketch.met:
        return sentence(f"views too far apart are not heard: {them} form{ends}.")
    if sketch.met:
        plan = sketch.variant.plan
        whole = plan.afterwards == "repeat" and len(plan.stages) > 1
        what = "the plan" if whole else f'"{plan.stages[-1].name}"'
        return sentence(f"{them} hear only themselves for as long as {what} goes on{ends}.")
    return sentence(f"{them} hear only themselves{ends}.")


def _why_closed(sketch: Sketch, groups: list[Indices], ends: Floats) -> str:
    everybody = np.concatenate(groups)
    about = "at" if sketch.rehearsal.settles and not sketch.firmness[everybody].any() else "around"
    parts = []
    for group, end in zip(groups[:NAMED_GROUPS], ends, strict=False):
        verb = "" if parts else f" end{ending(len(group))}"
        parts.append(f"{sketch.names(group, 4 if len(groups) == 2 else 3)}{verb} {about} {sketch.number(end)}")
    rest = len(groups) - NAMED_GROUPS
    if rest > 0:
        where = f" {about} {listing([sketch.number(end) for end in ends[NAMED_GROUPS:]])}" if rest <= 3 else ""
        parts.append(f"{in_words(rest, 'more group', 'more groups')}{where}")
    distance = sketch.question.hearing_range
    if distance is not None and sketch.met:
        parts.append(f"in the sketch nobody takes in a view more than {sketch.number(distance)} away")
    else:
        parts.append("no arrow that counts leads across")
    return f"{'; '.join(parts)}."


def _meeting(sketch: Sketch, groups: list[Indices]) -> Suggestion | None:
    """The first two to be introduced of those that are needed; a joint round where a stage keeps groups apart."""
    # Both ways, so that neither group's starts fade out.
    gap = sketch.spread(sketch.long_run)
    return acquaintance(sketch, groups[1], groups[0]) or joint_round(
        sketch, lambda after: after.spread(after.long_run) < gap
    )


def outside(sketch: Sketch) -> Iterator[Finding]:
    """People who hear those who settle the view and are not heard by them, so that their starts fade out."""
    place = sketch.assembly.place
    people = np.array([place[person] for person in sketch.rehearsal.outside], dtype=np.intp)
    people = people[sketch.present[people] & (sketch.influence[people] <= COUNTS_FOR_NOTHING)]
    unheard = people[~sketch.heard[people]]
    settling = np.flatnonzero(sketch.influence > COUNTS_FOR_NOTHING)
    if not len(people) or not len(settling) or sketch.still[settling].all():
        return  # where only views that do not move count, `fixed_view` tells it
    if len(unheard) == len(people):
        yield _nobody_hears(sketch, people, settling)
        return
    yield Finding(
        kind="outside",
        says=f"What {sketch.names(people)} start{ending(len(people))} with no longer counts in the end.",
        why=_why_outside(sketch, settling),
        people=sketch.ids(people),
        figures={"people": len(people)},
        groups=(sketch.ids(people),),
        suggestion=_hearing(sketch, settling, people),
    )


def _why_outside(sketch: Sketch, settling: Indices) -> str:
    name, firm = sketch.names(settling), sketch.firmness[settling] > 0
    if firm.all():
        back = "who brings" if len(settling) == 1 else "who bring"
        return f"In the end all depends on {name}, {back} back the start, or a part of it, in every round."
    if firm.any() or not sketch.one_setting:
        return f"In the end all depends on {name}; what others start with fades as views mix."
    reaches = "whose view reaches" if len(settling) == 1 else "whose views reach"
    return f"In the end all depends on {name}, {reaches} the others, directly or through others; nothing comes back."


def _hearing(sketch: Sketch, settling: Indices, people: Indices) -> Suggestion | None:
    """Somebody whose start counts hears one of `people`, where that is enough for the start of the latter to count:
    where people are firm, or several groups settle, it fades all the same."""
    if sketch.firmness[settling].any() or len(sketch.closed) != 1:
        return None
    suggestion = introduction(sketch, settling, people)
    if suggestion is None or sketch.one_setting:
        return suggestion
    heard = sketch.assembly.place[suggestion.source]
    return suggestion if tried(sketch, suggestion).influence[heard] > COUNTS_FOR_NOTHING else None


def _nobody_hears(sketch: Sketch, people: Indices, settling: Indices) -> Finding:
    return Finding(
        kind="unheard",
        says=f"Nobody hears {sketch.names(people)}, so what they start with does not count in the end."
        if len(people) > 1
        else f"Nobody hears {sketch.names(people)}, so that start does not count in the end.",
        why=f"No arrow that counts leads to {'them' if len(people) > 1 else 'this person'}, and the own view gives"
        f" way to what is heard from {sketch.names(settling)}.",
        people=sketch.ids(people),
        figures={"people": len(people)},
        suggestion=_hearing(sketch, settling, people),
    )


def unheard(sketch: Sketch) -> Iterator[Finding]:
    """People nobody hears whose start counts for themselves, because they are firm; for others see `outside`."""
    people = np.flatnonzero(sketch.present & sketch.hears & ~sketch.heard & (sketch.firmness > 0))
    if not len(people):
        return
    others = np.setdiff1d(sketch.here, people)
    yield Finding(
        kind="unheard",
        says=f"Nobody hears {sketch.names(people)}.",
        why=f"{sketch.names(people)} hear{ending(len(people))} others, but no arrow that counts leads back, so"
        " nobody else is moved by what is brought from there.",
        people=sketch.ids(people),
        figures={"people": len(people)},
        suggestion=introduction(sketch, others, people),
    )


def hears_nobody(sketch: Sketch) -> Iterator[Finding]:
    """People who stand apart from the talk of the others."""
    people = np.flatnonzero(sketch.apart)
    if not len(people):
        return
    firm = sketch.firmness[people] == 1
    yield Finding(
        kind="hears-nobody",
        says=f"{sketch.names(people)} {is_are(len(people))} apart from the talk: neither hearing nor heard.",
        why=f"No arrow that counts leads to or from {'them' if len(people) > 1 else 'this person'}, so the view"
        f"{'s stay' if len(people) > 1 else ' stays'} at the start and nobody else is moved by"
        f" {'them' if len(people) > 1 else 'it'}.",
        people=sketch.ids(people),
        figures={"people": len(people)},
        suggestion=introduction(sketch, people[~firm], sketch.here),
    )
