"""The program from outside, as its user has it: drawn with the mouse, read by a screen reader, saved to a file."""

from __future__ import annotations

from pathlib import Path

from patience import until
from saving import save_as

PLACES = {"Noor": (420, 250), "Teo": (640, 250), "Ilse": (530, 450)}
STARTS = {"Noor": 80, "Teo": 20, "Ilse": 60}


def test_draw_three_people_play_read_and_save(start, hands, reader, home: Path) -> None:
    start()
    until("the window is there", lambda: reader.find("Picture of the committee"))
    until("a demo is open the first time", lambda: reader.find("Amina"))
    hands.turn_to("Deliberate")
    hands.press("ctrl+n")
    until("the picture is empty", lambda: not reader.find("Amina"))

    for name, place in PLACES.items():
        hands.click(place, times=2)
        hands.write(name)
        hands.press("Return")
        until(f"{name} is in the picture", lambda name=name: reader.find(name, "list item"))
    for listener, source in (("Noor", "Teo"), ("Teo", "Noor"), ("Ilse", "Noor")):
        hands.drag(ring_of(reader, listener), reader.find(source, "list item").middle)
        until("the arrow is drawn", lambda a=listener, b=source: reader.says(f"{a} listens to {b}"))
    for name, belief in STARTS.items():
        hands.click(reader.find(name, "list item").middle)
        hands.write(str(belief))
        hands.press("Return")
        until("the number is the start", lambda name=name, belief=belief: reader.says(f"{name}: {belief}"))

    until(
        "why it settles is read", lambda: reader.says("Nobody hears Ilse, so that start does not count in the end.")
    )
    hands.press("F9")
    until("it plays to the end", lambda: reader.find("Round 12 of 12"))

    meeting = save_as(hands, reader, home / "harbour")
    (variant,) = meeting["variants"]
    question = meeting["questions"][0]["id"]
    names = {person["id"]: person["name"] for person in variant["people"]}
    assert {person["name"]: person["beliefs"][question] for person in variant["people"]} == STARTS
    assert {(names[arrow["listener"]], names[arrow["source"]]) for arrow in variant["arrows"]} == {
        ("Noor", "Teo"),
        ("Teo", "Noor"),
        ("Ilse", "Noor"),
    }


def ring_of(reader, name: str) -> tuple[int, int]:
    """A point on the ring around somebody: just inside what the screen reader is told as her place."""
    person = reader.find(name, "list item")
    return person.left + person.width // 2, person.top + person.height - 3
