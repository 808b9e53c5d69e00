"""Edits on the plan."""

from __future__ import annotations

import pytest
from harbour import AS_IT_STANDS, HARBOUR, MIXED
from hypothesis import given
from hypothesis import strategies as st

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.values import Plan, Scenario, Stage

STAGES = HARBOUR.variants[1].plan.stages


def stages(scenario: Scenario) -> tuple[Stage, ...]:
    return scenario.variants[1].plan.stages


def test_stages_come_and_go_and_change_places() -> None:
    silence = Stage(name="Writing", rounds=1, setting="silence")
    assert stages(edits.add_stage(HARBOUR, silence, variant=MIXED)) == (*STAGES, silence)
    assert stages(edits.add_stage(HARBOUR, silence, variant=MIXED, at=1)) == (STAGES[0], silence, *STAGES[1:])
    assert stages(edits.remove_stage(HARBOUR, 1, variant=MIXED)) == (STAGES[0], STAGES[2])
    assert stages(edits.move_stage(HARBOUR, 0, 2, variant=MIXED)) == (STAGES[1], STAGES[2], STAGES[0])
    assert stages(edits.move_stage(HARBOUR, 2, 0, variant=MIXED)) == (STAGES[2], STAGES[0], STAGES[1])
    assert edits.move_stage(HARBOUR, 2, 9, variant=MIXED) is HARBOUR
    assert edits.add_stage(HARBOUR, silence, variant=MIXED).variants[0] is HARBOUR.variants[0]


def test_fields_change_by_name() -> None:
    after = edits.change_stage(HARBOUR, 1, variant=MIXED, name="Round\nof five", rounds=5, unheard="rescale")
    assert stages(after)[1] == Stage(
        name="Round of five", rounds=5, setting="panel", unheard="rescale", speakers=("tomas", "ines")
    )
    assert stages(after)[0] is STAGES[0]


def test_lists_that_are_given_become_tuples() -> None:
    after = edits.change_stage(HARBOUR, 0, variant=MIXED, tables=[["ines"], ["noor", "tomas"]])
    assert stages(after)[0].tables == (("ines",), ("noor", "tomas"))


def test_switching_the_setting_there_and_back_loses_nothing() -> None:
    for index in range(3):
        away = edits.set_setting(HARBOUR, index, "silence", variant=MIXED)
        assert stages(away)[index].setting == "silence"
        assert edits.set_setting(away, index, STAGES[index].setting, variant=MIXED) == HARBOUR


def test_tables_begin_as_one_of_everybody() -> None:
    after = edits.set_setting(HARBOUR, 0, "tables", variant=AS_IT_STANDS)
    assert after.variants[0].plan.stages[0].tables == (("ines", "tomas", "noor", "wei"),)


def test_tables_speakers_and_pairs_bring_their_setting() -> None:
    assert stages(edits.set_tables(HARBOUR, 2, [["ines"], ["noor", "tomas"]], variant=MIXED))[2] == Stage(
        name="In twos", rounds=1, setting="tables", tables=(("ines",), ("noor", "tomas")), pairs=STAGES[2].pairs
    )
    panel = stages(edits.set_speakers(HARBOUR, 0, ["noor", "noor"], variant=MIXED))[0]
    assert (panel.setting, panel.speakers, panel.tables) == ("panel", ("noor",), STAGES[0].tables)
    twos = stages(edits.set_pairs(HARBOUR, 0, [("ines", "noor"), ("noor", "ines")], variant=MIXED))[0]
    assert (twos.setting, twos.pairs) == ("pairs", (("noor", "ines"),))


def test_people_are_seated_and_leave_their_old_table() -> None:
    after = edits.seat_people(HARBOUR, 0, "ines", 1, variant=MIXED)
    assert stages(after)[0].tables == (("tomas",), ("noor", "ines"))
    after = edits.seat_people(HARBOUR, 0, ["noor", "tomas"], 2, variant=MIXED)
    assert stages(after)[0].tables == (("ines",), ("noor", "tomas"))
    after = edits.seat_people(HARBOUR, 0, ["noor"], None, variant=MIXED)
    assert stages(after)[0].tables == (("ines", "tomas"),)
    with pytest.raises(DeliberateError, match="there is no table 4: there are 2"):
        edits.seat_people(HARBOUR, 0, "noor", 3, variant=MIXED)
    with pytest.raises(DeliberateError, match='nobody with the id "wei"'):
        edits.seat_people(HARBOUR, 0, "wei", 0, variant=MIXED)


def test_what_goes_on_afterwards_and_whole_plans() -> None:
    assert edits.set_afterwards(HARBOUR, "last", variant=MIXED).variants[1].plan == Plan(stages=STAGES)
    assert edits.set_plan(HARBOUR, Plan(), variant=MIXED).variants[1].plan == Plan()
    with pytest.raises(DeliberateError, match="wei"):  # her plan names somebody who is not in the other variant
        edits.set_plan(HARBOUR, Plan(stages=(Stage(setting="panel", speakers=("wei",)),)), variant=MIXED)


@pytest.mark.parametrize(
    ("edit", "said"),
    [
        (lambda: edits.remove_stage(HARBOUR, 0, variant=AS_IT_STANDS), "at least one stage"),
        (lambda: edits.remove_stage(HARBOUR, 3, variant=MIXED), "no stage 4: the plan has 3"),
        (lambda: edits.move_stage(HARBOUR, -1, 0, variant=MIXED), "no stage 0"),
        (lambda: edits.change_stage(HARBOUR, 0, variant=MIXED, rounds=0), "rounds"),
        (lambda: edits.change_stage(HARBOUR, 0, variant=MIXED, rounds=2.5), "rounds"),
        (lambda: edits.set_tables(HARBOUR, 0, [["ines"], ["ines"]], variant=MIXED), "already sits"),
        (lambda: edits.set_speakers(HARBOUR, 0, ["wei"], variant=MIXED), "wei"),
        (lambda: edits.set_pairs(HARBOUR, 0, [("ines", "ines")], variant=MIXED), "two people"),
        (lambda: edits.set_setting(HARBOUR, 0, "banquet", variant=MIXED), "setting"),
    ],
)
def test_what_cannot_be_done_is_said_in_words(edit, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edit()


@given(st.integers(1, 60), st.data(), st.integers(0, 5))
def test_people_are_dealt_out_evenly(people, data, shift) -> None:
    ids = [f"p{number}" for number in range(people)]
    count = data.draw(st.integers(1, people))
    tables = edits.dealt(ids, count, shift)
    assert len(tables) == count
    assert sorted(one for table in tables for one in table) == sorted(ids)
    sizes = {len(table) for table in tables}
    assert max(sizes) - min(sizes) <= 1


def test_another_shift_mixes_the_tables_anew() -> None:
    ids = list("abcdef")
    assert edits.dealt(ids, 3) == (("a", "d"), ("b", "e"), ("c", "f"))
    assert edits.dealt(ids, 3, shift=1) == (("a", "f"), ("b", "d"), ("c", "e"))
    with pytest.raises(DeliberateError, match="2 people cannot sit at 3 tables"):
        edits.dealt(["a", "b"], 3)
