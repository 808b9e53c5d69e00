"""Random edits in random order: always a valid meeting, the same after a round trip, and undo is exact."""

from __future__ import annotations

import inspect
from collections.abc import Callable

import pytest
from harbour import HARBOUR
from hypothesis import assume, event, given, settings
from hypothesis import strategies as st
from strategies import (
    agreement_tests,
    ballot_tests,
    lines,
    on_scale,
    questions,
    scenarios,
    stages,
    variants,
    weights,
)

from deliberate import files
from deliberate.errors import DeliberateError
from deliberate.scenario import edits, rules
from deliberate.scenario.checks import validate
from deliberate.scenario.values import Ballot, Plan, Scenario, Variant

Names = st.one_of(lines, st.just(""), st.sampled_from(("Zoë Łuk", "Мария", "王伟", "O'Neill\n2")))
Points = st.one_of(st.integers(0, 100), st.floats(0, 100), st.sampled_from((-1.0, 101.0, float("nan"))))
Numbers = st.one_of(st.floats(0, 1), st.sampled_from((0, 1, 2, -0.5, 1e300, float("inf"), float("nan"))))


class Hand:
    """Draws what an edit is given: mostly fitting, at times not."""

    def __init__(self, draw: st.DrawFn, scenario: Scenario) -> None:
        self.draw = draw
        self.scenario = scenario
        self.variant: Variant = draw(st.sampled_from(scenario.variants))
        for other in scenario.variants:  # arrows are rare among drawn meetings, and many edits need one
            if other.arrows and not self.variant.arrows and draw(st.booleans()):
                self.variant = other
        self.question = draw(st.sampled_from(scenario.questions))
        self.name = self.variant.name
        self.ids = tuple(person.id for person in self.variant.people)

    def __call__(self, strategy: st.SearchStrategy) -> object:
        return self.draw(strategy)

    def person(self) -> str:
        return self.draw(st.sampled_from((*self.ids, *self.ids, *self.ids, "stranger")))

    def some(self) -> list[str]:
        return self.draw(st.lists(st.sampled_from(self.ids or ("stranger",)), min_size=1, max_size=3))

    def pairs(self) -> list[tuple[str, str]]:
        known = [(arrow.listener, arrow.source) for arrow in self.variant.arrows]
        return self.draw(st.lists(st.sampled_from(known or [("ines", "stranger")]), min_size=1, max_size=3))

    def other(self) -> str:
        return self.draw(st.sampled_from(self.scenario.variants)).name

    def place(self) -> int:
        return self.draw(st.integers(-1, 4))

    def stage(self) -> int:
        return self.draw(st.integers(0, len(self.variant.plan.stages)))

    def belief(self) -> float | None:
        return self.draw(st.one_of(st.none(), on_scale(self.question), Numbers))

    def anybody(self) -> str:
        everybody = sorted({person.id for variant in self.scenario.variants for person in variant.people})
        return self.draw(st.sampled_from((*everybody, "stranger")))


def _row(hand: Hand) -> dict[str, float]:
    parts = {one: hand(st.integers(0, 9)) for one in (*hand.some(), hand.person())}
    total = sum(parts.values())
    return {one: 100 * part / total for one, part in parts.items()} if total else parts


def _clip(hand: Hand) -> edits.Clip:
    origin = hand(st.sampled_from(hand.scenario.variants))
    ids = [person.id for person in origin.people]
    clip = edits.extract(origin, hand(st.lists(st.sampled_from(ids), max_size=3)) if ids else [])
    foreign = variants("elsewhere", (hand(questions("other")), hand(questions(hand.question.id))))
    return edits.extract(other := hand(foreign), [p.id for p in other.people]) if hand(st.booleans()) else clip


# One entry per edit: what to give it besides the scenario, and the variant where it asks for one.
GIVEN: dict[Callable[..., Scenario], Callable[[Hand], tuple[tuple, dict]]] = {
    edits.add_arrow: lambda h: ((h.person(), h.person(), h(st.one_of(st.none(), weights, Numbers))), {}),
    edits.set_weight: lambda h: ((h.pairs(), h(st.one_of(weights, Numbers))), {}),
    edits.scale_weights: lambda h: ((h.pairs(), h(st.one_of(weights, Numbers))), {}),
    edits.set_basis: lambda h: ((h.pairs(), h(st.sampled_from(("guess", "stated", "observed")))), {}),
    edits.turn_arrows: lambda h: ((h.pairs(),), {}),
    edits.remove_arrows: lambda h: ((h.pairs(),), {}),
    edits.paste: lambda h: ((_clip(h), (24.0, -8.0)), {}),
    edits.add_go_round: lambda h: (
        (),
        {"points": h(st.one_of(Points, st.just(5))), "ids": h(st.sampled_from((None, h.some())))},
    ),
    edits.add_joint_round: lambda h: ((h(st.integers(0, 3)),), {"points": h(st.one_of(st.none(), Points))}),
    edits.let_hear: lambda h: (([(h.person(), h.person()), *h.pairs()], h(st.one_of(Points, st.just(5)))), {}),
    edits.give_at_least: lambda h: (([(h.person(), h.person()), *h.pairs()], h(st.one_of(Points, st.just(5)))), {}),
    edits.acquaint: lambda h: (([h.some(), h.some()], h(st.one_of(Points, st.just(5)))), {}),
    edits.move_points: lambda h: ((h.person(), h.person(), h.person(), h(st.one_of(Points, st.just(5)))), {}),
    edits.hear_all_alike: lambda h: ((h(Points),), {}),
    edits.add_go_between: lambda h: ((h.some(), h(st.one_of(Points, st.just(5)))), {"name": h(Names)}),
    edits.begin_with: lambda h: ((h(stages(h.ids)),), {}),
    edits.end_with: lambda h: ((h(stages(h.ids)),), {}),
    edits.add_table_stages: lambda h: (
        ([[h.ids[:2], h.ids[2:]], [h.some()]],),
        {
            "rounds": h(st.integers(0, 3)),
            "place": h(st.sampled_from(("before", "after", "instead"))),
            "name": h(Names),
        },
    ),
    edits.reorder_stages: lambda h: ((h(st.permutations(range(len(h.variant.plan.stages)))),), {}),
    edits.add_person: lambda h: ((h(Names),), {"place": h(st.sampled_from((None, (3, 4.5)))), "role": h(Names)}),
    edits.bring_people: lambda h: ((h.some(),), {"source": h.name, "variant": h.other()}),
    edits.remove_people: lambda h: ((h.some(),), {}),
    edits.rename_person: lambda h: ((h.person(), h(Names)), {}),
    edits.set_role: lambda h: ((h.some(), h(Names)), {}),
    edits.reorder_people: lambda h: ((h(st.permutations(h.ids)),), {}),
    edits.move_people: lambda h: ((dict.fromkeys(h.some(), h(st.sampled_from((None, (1, 2.5))))),), {}),
    edits.set_belief: lambda h: ((h.some(), h.question.id, h.belief()), {}),
    edits.set_beliefs: lambda h: (({one: h.belief() for one in h.some()}, h.question.id), {}),
    edits.set_margin: lambda h: ((h.some(), h.question.id, h(st.one_of(st.none(), Numbers))), {}),
    edits.set_firmness: lambda h: ((h.some(), h(Numbers)), {}),
    edits.set_ballots: lambda h: ((h.some(), h(Numbers)), {}),
    edits.set_presence: lambda h: ((h.some(), h(st.booleans())), {}),
    edits.set_own_weight: lambda h: ((h.some(), h(st.one_of(weights, Numbers))), {}),
    edits.give_points: lambda h: ((h.person(), _row(h)), {}),
    edits.set_points: lambda h: (
        (h.person(), h.person(), h(Points)),
        {"others": h(st.sampled_from(("keep", "rescale")))},
    ),
    edits.set_own_points: lambda h: ((h.some(), h(Points)), {}),
    edits.add_stage: lambda h: ((h(stages(h.ids)),), {"at": h(st.sampled_from((None, h.place())))}),
    edits.change_stage: lambda h: ((h.stage(),), {"name": h(Names), "rounds": h(st.integers(0, 9))}),
    edits.remove_stage: lambda h: ((h.stage(),), {}),
    edits.move_stage: lambda h: ((h.stage(), h.place()), {}),
    edits.set_setting: lambda h: (
        (h.stage(), h(st.sampled_from(("plenary", "tables", "panel", "pairs", "silence")))),
        {},
    ),
    edits.set_tables: lambda h: ((h.stage(), h(st.sampled_from(([h.ids], [h.some(), h.some()], [h.ids[:2]])))), {}),
    edits.seat_people: lambda h: ((h.stage(), h.some(), h(st.sampled_from((None, 0, 1, 9)))), {}),
    edits.set_speakers: lambda h: ((h.stage(), h.some()), {}),
    edits.set_pairs: lambda h: ((h.stage(), [(h.person(), h.person()), *h.pairs()]), {}),
    edits.set_afterwards: lambda h: ((h(st.sampled_from(("last", "repeat"))),), {}),
    edits.set_plan: lambda h: ((Plan(stages=tuple(h(st.lists(stages(h.ids), max_size=2)))),), {}),
    edits.set_variant_notes: lambda h: ((h.name, h(st.sampled_from(("two\nlines", "\x07")))), {}),
    edits.rename_variant: lambda h: ((h.name, h(Names)), {}),
    edits.remove_variant: lambda h: ((h.name,), {}),
    edits.move_variant: lambda h: ((h.name, h.place()), {}),
    edits.replace_variant: lambda h: ((h.name, h(variants(h(lines), h.scenario.questions))), {}),
    edits.add_variant: lambda h: ((), {"copy_of": h.name, "name": h(st.one_of(st.none(), Names))}),
    edits.set_title: lambda h: ((h(Names),), {}),
    edits.set_notes: lambda h: ((h(st.sampled_from(("two\nlines", "\x07"))),), {}),
    edits.set_ballot: lambda h: ((Ballot(casting_vote=h.anybody(), tests=(h(ballot_tests()),)),), {}),
    edits.change_ballot: lambda h: ((), {"quorum": h(st.sampled_from((None, 0.25, "1/3", "4/3", "1/0")))}),
    edits.use_rule: lambda h: ((h(st.sampled_from(rules.READY_RULES)).ballot,), {}),
    edits.set_casting_vote: lambda h: ((h(st.sampled_from((None, h.anybody()))),), {}),
    edits.record_poll: lambda h: (
        (h.question.id, h(st.integers(-1, 5)), {h.anybody(): h(on_scale(h.question))}),
        {},
    ),
    edits.set_poll_belief: lambda h: ((h(st.integers(0, 2)), h.anybody(), h.belief()), {}),
    edits.set_poll_round: lambda h: ((h(st.integers(0, 2)), h(st.integers(-1, 5))), {}),
    edits.remove_poll: lambda h: ((h(st.integers(0, 2)),), {}),
    edits.add_question: lambda h: ((h(Names),), {"low": h(Numbers), "high": h(Points), "at": h.place()}),
    edits.change_question: lambda h: (
        (h.question.id,),
        {"text": h(Names), "pass_mark": h.belief(), "agreement": (h(agreement_tests(h.question)),)},
    ),
    edits.remove_question: lambda h: ((h.question.id,), {}),
    edits.move_question: lambda h: ((h.question.id, h.place()), {}),
    edits.set_scale: lambda h: (
        (h.question.id, h(st.sampled_from((-3, 0, h.question.low))), h(st.sampled_from((0.1, 9, 1e7, 1e300)))),
        {"numbers": h(st.sampled_from(("keep", "rescale")))},
    ),
}


def _edit(draw: st.DrawFn, scenario: Scenario, edit: Callable[..., Scenario]) -> Scenario | None:
    """The scenario after the edit, or None where the edit cannot be done."""
    hand = Hand(draw, scenario)
    given_to_it, named = GIVEN[edit](hand)
    in_one_variant = inspect.signature(edit).parameters.get("variant")
    if in_one_variant is not None and in_one_variant.kind is inspect.Parameter.KEYWORD_ONLY:
        every = in_one_variant.annotation != "str" and draw(st.booleans())
        named = {"variant": None if every else hand.name, **named}
    try:
        return edit(scenario, *given_to_it, **named)
    except DeliberateError:
        return None


def test_random_edits_know_every_edit() -> None:
    made = {edit for name in edits.__all__ if _is_edit(edit := getattr(edits, name))}
    assert set(GIVEN) == made


def _is_edit(one: object) -> bool:
    return inspect.isfunction(one) and inspect.signature(one).return_annotation == "Scenario"


@settings(max_examples=200)
@given(st.data(), scenarios(), st.lists(st.sampled_from(list(GIVEN)), min_size=1, max_size=12))
def test_random_edits_leave_a_valid_meeting_and_undo_is_exact(data, scenario, chosen) -> None:
    history = [(scenario, files.encode(scenario))]
    for edit in chosen:
        after = _edit(data.draw, scenario, edit)
        event("refused" if after is None else "unchanged" if after is scenario else "done")
        if after is None:
            continue
        assert validate(after) is after  # nothing in it that a file would not give back
        if after == scenario:
            assert after is scenario
        history.append((after, files.encode(after)))
        scenario = after
    for value, written in reversed(history):
        assert files.encode(value) == written
        assert files.decode(written) == value


@pytest.mark.parametrize("edit", GIVEN, ids=lambda edit: edit.__name__)
def test_each_edit_can_be_done_and_leaves_a_valid_meeting(edit) -> None:
    done = 0

    @settings(max_examples=15)
    @given(st.data(), st.one_of(st.just(HARBOUR), scenarios()))
    def many_times(data, scenario) -> None:
        nonlocal done
        written = files.encode(scenario)
        after = _edit(data.draw, scenario, edit)
        assert files.encode(scenario) == written
        if after is not None and after is not scenario:
            done += 1
            assert validate(after) is after
            assert files.decode(files.encode(after)) == after

    many_times()
    assert done > 0


@given(st.data(), scenarios())
def test_people_who_are_left_nowhere_are_named_nowhere(data, scenario) -> None:
    for variant in scenario.variants:
        gone = [person.id for person in variant.people if data.draw(st.booleans())]
        scenario = edits.remove_people(scenario, gone, variant=variant.name)
    known = {person.id for variant in scenario.variants for person in variant.people}
    assert scenario.ballot.casting_vote in known | {None}
    assert all(poll.beliefs.keys() <= known for poll in scenario.polls)
    assert validate(scenario) is scenario


@given(st.data(), scenarios())
def test_questions_take_their_answers_with_them(data, scenario) -> None:
    gone = data.draw(st.sampled_from(scenario.questions)).id
    if len(scenario.questions) == 1:
        with pytest.raises(DeliberateError, match="at least one question"):
            edits.remove_question(scenario, gone)
        return
    left = edits.remove_question(scenario, gone)
    people = [person for variant in left.variants for person in variant.people]
    assert not any(gone in person.beliefs or gone in person.margins for person in people)
    assert not any(poll.question == gone for poll in left.polls)


@given(st.data(), scenarios())
def test_what_an_edit_leaves_alone_keeps_its_identity(data, scenario) -> None:
    variant = data.draw(st.sampled_from(scenario.variants))
    assume(variant.people)
    mover = data.draw(st.sampled_from(variant.people))
    after = edits.move_people(scenario, {mover.id: (1e6, -1e6)}, variant=variant.name)
    for before_one, after_one in zip(scenario.variants, after.variants, strict=True):
        if before_one is variant:
            assert after_one.arrows is before_one.arrows
            kept = [a is b for a, b in zip(before_one.people, after_one.people, strict=True)]
            assert kept.count(False) == 1
        else:
            assert after_one is before_one
