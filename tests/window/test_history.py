from __future__ import annotations

from circles import AS_IT_STANDS, CIRCLES
from msgspec.structs import replace

from deliberate.window.history import MOST_STEPS, History


def titled(title: str):
    return replace(CIRCLES, title=title)


def test_undo_and_redo_walk_along_the_same_values() -> None:
    history = History(CIRCLES, AS_IT_STANDS)
    one, two = titled("one"), titled("two")
    history.push("First", one, AS_IT_STANDS)
    history.push("Second", two, AS_IT_STANDS)
    assert history.now.scenario is two
    assert (history.undo_step, history.redo_step) == ("Second", None)
    assert history.undo()
    assert history.now.scenario is one
    assert (history.undo_step, history.redo_step) == ("First", "Second")
    assert history.undo()
    assert history.now.scenario is CIRCLES
    assert not history.undo()
    assert history.redo()
    assert history.redo()
    assert history.now.scenario is two
    assert not history.redo()


def test_a_new_step_forgets_what_was_undone() -> None:
    history = History(CIRCLES, AS_IT_STANDS)
    history.push("First", titled("one"), AS_IT_STANDS)
    history.undo()
    history.push("Other", titled("two"), AS_IT_STANDS)
    assert history.redo_step is None
    assert history.undo_step == "Other"


def test_steps_with_the_same_merge_key_are_one_until_sealed() -> None:
    history = History(CIRCLES, AS_IT_STANDS)
    for turn in range(5):
        history.push("Turn the wheel", titled(f"{turn}"), AS_IT_STANDS, "wheel")
    assert history.now.scenario.title == "4"
    history.undo()
    assert history.now.scenario is CIRCLES
    history.redo()
    history.seal()
    history.push("Turn the wheel", titled("later"), AS_IT_STANDS, "wheel")
    history.undo()
    assert history.now.scenario.title == "4"


def test_modified_compares_with_what_was_saved() -> None:
    history = History(CIRCLES, AS_IT_STANDS)
    assert not history.modified
    history.push("First", titled("one"), AS_IT_STANDS)
    assert history.modified
    history.mark_saved(history.now.scenario)
    assert not history.modified
    history.undo()
    assert history.modified
    history.push("Back by hand", titled("one"), AS_IT_STANDS)
    assert not history.modified, "equal to the saved value, however it came about"
    history.mark_saved(None)
    assert history.modified


def test_showing_another_variant_is_not_a_step() -> None:
    history = History(CIRCLES, AS_IT_STANDS)
    history.show("Another")
    assert history.now.variant == "Another"
    assert history.undo_step is None


def test_only_so_many_steps_are_kept() -> None:
    history = History(CIRCLES, AS_IT_STANDS)
    for number in range(MOST_STEPS + 50):
        history.push("Step", titled(f"{number}"), AS_IT_STANDS)
    steps = 0
    while history.undo():
        steps += 1
    assert steps == MOST_STEPS - 1
    assert history.now.scenario.title == "50"
