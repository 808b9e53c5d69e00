import pytest
from harbour import AS_IT_STANDS, HARBOUR, MIXED

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.values import Plan, Stage

STAGES = HARBOUR.variants[1].plan.stages  # at tables, a panel, in twos
SEATINGS = [[["ines", "noor"], ["tomas"]], [["ines"], ["tomas", "noor"], []]]
FIRST = Stage("Mixed tables 1", 2, "tables", "rescale", tables=(("ines", "noor"), ("tomas",)))
SECOND = Stage("Mixed tables 2", 2, "tables", "rescale", tables=(("ines",), ("tomas", "noor")))


@pytest.mark.parametrize(
    ("place", "after"),
    [
        ("before", (FIRST, SECOND, *STAGES)),
        ("after", (*STAGES, FIRST, SECOND)),
        ("instead", (FIRST, SECOND, *STAGES[1:])),
    ],
)
def test_table_stages_go_where_they_are_wanted(place, after):
    edited = edits.add_table_stages(HARBOUR, SEATINGS, variant=MIXED, rounds=2, place=place)
    assert edited.variants[1].plan == Plan(after, "repeat")
    assert edited.variants[0] is HARBOUR.variants[0]


def test_they_take_the_place_of_the_first_table_stage_and_of_all_of_them():
    panel, tables = STAGES[1], STAGES[0]
    meeting = edits.set_plan(HARBOUR, Plan((panel, tables, panel, tables)), variant=MIXED)
    edited = edits.add_table_stages(meeting, SEATINGS[:1], variant=MIXED, rounds=2, place="instead", name="Anew")
    names = [(stage.name, stage.setting) for stage in edited.variants[1].plan.stages]
    assert names == [("Panel", "panel"), ("Anew", "tables"), ("Panel", "panel")]


def test_where_no_stage_is_at_tables_they_come_first():
    edited = edits.add_table_stages(HARBOUR, SEATINGS[:1], variant=AS_IT_STANDS, rounds=1, place="instead")
    assert [stage.setting for stage in edited.variants[0].plan.stages] == ["tables", "plenary"]


@pytest.mark.parametrize("seatings", [[], [[["ines", "stranger"]]], [[["ines"], ["ines"]]]])
def test_what_makes_no_sense_is_refused(seatings):
    with pytest.raises(DeliberateError):
        edits.add_table_stages(HARBOUR, seatings, variant=MIXED, rounds=2)
