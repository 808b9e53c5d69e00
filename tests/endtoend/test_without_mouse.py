"""The same first meeting by keys alone, and what a screen reader is told of a window full of people."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from patience import until
from saving import save_as

STARTS = {"Noor": 80, "Teo": 20, "Ilse": 60}
# What can be worked with must have a name.
WORKED_WITH = {
    "push button",
    "button menu",
    "check box",
    "combo box",
    "slider",
    "spin box",
    "text",
    "menu item",
    "page tab",
    "page tab list",
    "list",
    "list item",
    "table",
    "table cell",
    "cell",
}


def test_draw_play_and_save_by_keys_alone(start, hands, reader, home: Path) -> None:
    start()
    until("a demo is open the first time", lambda: reader.find("Amina"))
    hands.turn_to("Deliberate")
    hands.press("ctrl+n")
    until("the picture is empty", lambda: not reader.find("Amina"))

    for name in STARTS:
        hands.press("ctrl+shift+n")
        hands.write(name)
        hands.press("Return")
        until(f"{name} is in the picture", lambda name=name: reader.find(name, "list item"))
    for listener, source in (("Noor", "Teo"), ("Teo", "Noor"), ("Ilse", "Noor")):
        walk_to(hands, reader, listener, "shift+Tab")
        hands.press("a")
        walk_to(hands, reader, source, "Tab")
        hands.press("Return")
        until("the arrow is drawn", lambda a=listener, b=source: reader.says(f"{a} listens to {b}"))
    for name, belief in STARTS.items():
        walk_to(hands, reader, name, "Tab" if name != "Noor" else "shift+Tab")
        hands.write(str(belief))
        hands.press("Return")
        until("the number is the start", lambda name=name, belief=belief: reader.says(f"{name}: {belief}"))

    hands.press("F9")
    until("it plays to the end", lambda: reader.find("Round 12 of 12"))
    meeting = save_as(hands, reader, home / "harbour")
    (variant,) = meeting["variants"]
    assert sorted(belief for person in variant["people"] for belief in person["beliefs"].values()) == [20, 60, 80]
    assert len(variant["arrows"]) == 3


@pytest.mark.parametrize("demo", ["air-sensor-label", "dock-roster"])
def test_everything_is_spoken(demo: str, start, hands, reader, checkout: Path) -> None:
    path = checkout / "scenarios" / f"{demo}.deliberate.json"
    meeting = json.loads(path.read_text(encoding="utf-8"))
    variant = meeting["variants"][0]
    names = {person["id"]: person["name"] for person in variant["people"]}
    start(path)
    until("people are spoken", lambda: reader.find(next(iter(names.values())), "list item"))
    until("what stands out is spoken", lambda: reader.says("By the sketch the vote would be"))
    items = reader.items()

    spoken = {item.name for item in items if item.role == "list item"}
    assert set(names.values()) <= spoken
    for arrow in variant["arrows"]:
        beginning = f"{names[arrow['listener']]} listens to {names[arrow['source']]}: "
        assert any(name.startswith(beginning) for name in spoken), beginning
    nameless = [item for item in items if item.role in WORKED_WITH and not item.name]
    assert not nameless
    marked_up = [item for item in items if "<" in item.name + item.description]
    assert not marked_up


def walk_to(hands, reader, name: str, way_back: str) -> None:
    """Walk through the people with Tab and Shift+Tab until `name` has the keys; `way_back` is pressed while nobody
    has them, as after typing."""
    order = list(STARTS)
    for _ in range(20):
        here = [place for place, other in enumerate(order) if reader.find(other, "list item").focused]
        if here == [order.index(name)]:
            return
        hands.press(way_back if not here else "Tab" if here[0] < order.index(name) else "shift+Tab")
    raise AssertionError(f"{name} cannot be reached")
