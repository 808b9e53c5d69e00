"""The list that is hung up or put into the invitation: who sits where in each rotation.

It names people and tables only: no beliefs and no figures, because it is read by the people in it.
"""

from __future__ import annotations

from collections.abc import Iterator
from html import escape

from deliberate.rehearsal.seating.told import stage_names, table_names
from deliberate.rehearsal.seating.wish import Seating
from deliberate.rehearsal.words import shown_names
from deliberate.scenario.values import Variant

STYLE = """\
body { font-family: sans-serif; font-size: 11pt; }
h1 { font-size: 17pt; margin-bottom: 2pt; }
h2 { font-size: 13pt; margin-top: 16pt; margin-bottom: 4pt; }
td { padding: 3pt 14pt 3pt 0; vertical-align: top; }
td.table { font-weight: bold; white-space: nowrap; }
td.turn { text-align: center; }
"""


def as_text(title: str, seating: Seating, variant: Variant) -> str:
    """Plain text: the rotations table by table, then everybody in order of name with her tables."""
    known = shown_names(variant)
    lines = [title]
    for name, tables in zip(stage_names(seating), seating.rotations, strict=True):
        lines += ["", name]
        for table, people in zip(table_names(seating), tables, strict=True):
            lines.append(f"{table}: {', '.join(known[one] for one in people)}")
    lines += ["", "By name"]
    for person, numbers in by_name(seating):
        lines.append(f"{known[person]}: {', then '.join(f'table {number}' for number in numbers)}")
    return "\n".join(lines) + "\n"


def as_html(title: str, seating: Seating, variant: Variant) -> str:
    """The same for print, with every name escaped."""
    known = {person: escape(name) for person, name in shown_names(variant).items()}
    parts = [f"<html><head><style>{STYLE}</style></head><body><h1>{escape(title)}</h1>"]
    for name, tables in zip(stage_names(seating), seating.rotations, strict=True):
        parts.append(f"<h2>{escape(name)}</h2><table>")
        for table, people in zip(table_names(seating), tables, strict=True):
            listed = ", ".join(known[one] for one in people)
            parts.append(f'<tr><td class="table">{table}</td><td>{listed}</td></tr>')
        parts.append("</table>")
    heads = "".join(f'<td class="turn"><b>{turn}</b></td>' for turn in stage_names(seating))
    parts.append(f"<h2>By name</h2><table><tr><td></td>{heads}</tr>")
    for person, numbers in by_name(seating):
        cells = "".join(f'<td class="turn">{number}</td>' for number in numbers)
        parts.append(f"<tr><td>{known[person]}</td>{cells}</tr>")
    parts.append("</table></body></html>")
    return "".join(parts)


def by_name(seating: Seating) -> Iterator[tuple[str, tuple[int, ...]]]:
    """Everybody who is seated, in the order of the people, with the number of her table in each rotation."""
    table_of = [
        {person: number for number, table in enumerate(tables, start=1) for person in table}
        for tables in seating.rotations
    ]
    for person in table_of[0]:
        yield person, tuple(there[person] for there in table_of)
