"""From a variant of the meeting and a question to the arrays that the dynamics compute with."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from deliberate.dynamics.network import Network
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.shares import heard_at_tables, heard_from, heard_in_pairs, heard_in_silence
from deliberate.rehearsal.results import Floats
from deliberate.scenario.values import Question, Stage, Variant


@dataclass(frozen=True, eq=False)
class Assembly:
    """One variant and question as numbers; `people` gives the order of every array, `place` the way back."""

    people: tuple[str, ...]
    place: Mapping[str, int]
    process: Process
    starts: Floats  # (people,)
    unknown_starts: tuple[str, ...]


def assemble(variant: Variant, question: Question) -> Assembly:
    """The talking of `variant` about `question`; who has no belief on it starts at the middle of the scale."""
    people = tuple(person.id for person in variant.people)
    place = {person: at for at, person in enumerate(people)}
    network = _network(variant, place)
    masks: dict[tuple[object, ...], NDArray[np.bool_] | None] = {}
    blocks = []
    for stage in variant.plan.stages:
        # Stages set up alike share one mask, so that the dynamics can see that they are the same.
        alike = (stage.setting, stage.tables, stage.speakers, stage.pairs)
        if alike not in masks:
            masks[alike] = heard(stage, network, place)
        blocks.append(Block(masks[alike], stage.unheard, stage.rounds))
    firmness = _over_people(variant, "firmness")
    given = [person.beliefs.get(question.id) for person in variant.people]
    return Assembly(
        people=people,
        place=place,
        process=Process(network, tuple(blocks), variant.plan.afterwards == "repeat", firmness),
        starts=np.array([question.middle if belief is None else belief for belief in given], dtype=float),
        unknown_starts=tuple(person for person, belief in zip(people, given, strict=True) if belief is None),
    )


def _network(variant: Variant, place: Mapping[str, int]) -> Network:
    arrows, many = variant.arrows, len(variant.arrows)
    return Network(
        own=_over_people(variant, "own_weight"),
        listener=np.fromiter((place[arrow.listener] for arrow in arrows), np.intp, many),
        source=np.fromiter((place[arrow.source] for arrow in arrows), np.intp, many),
        weight=np.fromiter((arrow.weight for arrow in arrows), float, many),
        present=np.fromiter((person.present for person in variant.people), bool, len(place)),
    )


def _over_people(variant: Variant, attribute: str) -> Floats:
    return np.fromiter((getattr(person, attribute) for person in variant.people), float, len(variant.people))


def heard(stage: Stage, network: Network, place: Mapping[str, int]) -> NDArray[np.bool_] | None:
    """Which arrows count in the stage's setting; None for all."""
    match stage.setting:
        case "plenary":
            return None
        case "silence":
            return heard_in_silence(network)
        case "tables":
            table_of = np.full(len(place), -1)
            for number, table in enumerate(stage.tables):
                table_of[[place[person] for person in table]] = number
            return heard_at_tables(network, table_of)
        case "panel":
            speakers = np.zeros(len(place), bool)
            speakers[[place[person] for person in stage.speakers]] = True
            return heard_from(network, speakers)
        case "pairs":
            pairs = np.array([[place[person] for person in pair] for pair in stage.pairs], dtype=np.intp)
            return heard_in_pairs(network, pairs.reshape(-1, 2))
