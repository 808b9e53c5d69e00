from __future__ import annotations

from collections.abc import Callable

import numpy as np
from circles import AS_IT_STANDS, CIRCLES
from pytestqt.qtbot import QtBot

from deliberate.scenario import edits
from deliberate.window.canvas import Canvas, arrange

SEATED = edits.add_table_stages(
    CIRCLES, [[["amina", "davor"], ["bilal", "chiara", "emeka"]]], variant=AS_IT_STANDS, rounds=2
)


def nearest(canvas: Canvas, person: str) -> str:
    scene = canvas.picture.scene
    distance = np.hypot(*(scene.places - scene.places[scene.index[person]]).T)
    return scene.ids[int(np.argsort(distance)[1])]


def test_people_stand_by_their_tables_after_one_step(qtbot: QtBot, open_canvas: Callable[..., Canvas]) -> None:
    canvas = open_canvas(SEATED)
    canvas.arrange("tables")
    scene = canvas.picture.scene
    assert nearest(canvas, "amina") == "davor"
    assert {nearest(canvas, one) for one in ("bilal", "chiara", "emeka")} <= {"bilal", "chiara", "emeka"}
    assert [ground.title for ground in canvas.picture.grounds] == ["Table 1", "Table 2"]
    assert canvas.session.undo_step == "Arrange by table"
    assert len(scene.ids) == 6, "Farah, who has no chair, stands by herself and is not lost"
    canvas.session.undo()
    assert canvas.session.scenario is SEATED


def test_without_tables_in_the_present_round_nothing_moves(qtbot: QtBot, open_canvas: Callable[..., Canvas]) -> None:
    canvas = open_canvas(SEATED)
    canvas.session.player.seek(3)
    with qtbot.waitSignal(canvas.session.refused) as refused:
        canvas.arrange("tables")
    assert "tables" in refused.args[0]
    assert canvas.session.scenario is SEATED


def test_groups_stand_largest_first_or_as_given() -> None:
    groups = [[0, 1], [2, 3, 4, 5]]
    given = arrange.by_group(groups, 6, largest_first=False)
    largest = arrange.by_group(groups, 6)
    assert given[[0, 1], 1].max() < given[[2, 3, 4, 5], 1].min()
    assert largest[[2, 3, 4, 5], 1].max() < largest[[0, 1], 1].min()
