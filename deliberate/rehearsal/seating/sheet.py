"""The list that is hung up or put into the invitation: who sits where in each rotation.

It names people and tables only: no beliefs and no figures, because it is read by the people in it.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from html import escape

from deliberate.rehearsal.seating.told import stage_names, table_names
from deliberate.rehearsal.seating.wish import Seating
from deliberate.rehearsal.words import shown_names
from deliberate.scenario.values import Variant

TABLES_ABREAST = 4
# What a browser and Qt's rich text both understand.
STYLE = """\
body { font-family: sans-serif; font-size: 11pt; }
h1 { font-size: 17pt; margin-bottom: 4px; }
h2 { font-size: 13pt; margin-top: 22px; margin-bottom: 6px; }
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
    for person, numbers in by_name(seating, variant):
        lines.append(f"{known[person]}: {', then '.join(f'table {number}' for number in numbers)}")
    return "\n".join(lines) + "\n"


def as_html(title: str, seating: Seating, variant: Variant) -> str:
    """The same for print, a name a line, with every name escaped."""
    known = {person: escape(name) for person, name in shown_names(variant).items()}
    parts = [f"<html><head><style>{STYLE}</style></head><body><h1>{escape(title)}</h1>"]
    for name, tables in zip(stage_names(seating), seating.rotations, strict=True):
        cells = [
            _table_cell(table, [known[one] for one in people])
            for table, people in zip(table_names(seating), tables, strict=True)
        ]
        parts.append(f"<h2>{escape(name)}</h2>{_table(_rows(cells), width='100%')}")
    heads = ["<td></td>", *(f'<td align="center"><b>{turn}</b></td>' for turn in stage_names(seating))]
    rows = [
        [f"<td>{known[person]}</td>", *(f'<td align="center">{number}</td>' for number in numbers)]
        for person, numbers in by_name(seating, variant)
    ]
    door = '<h2 style="page-break-before: always">By name</h2>'  # a sheet of its own, for the door
    parts.append(f"{door}{_table([heads, *rows])}</body></html>")
    return "".join(parts)


def _table_cell(table: str, escaped: Sequence[str]) -> str:
    return f'<td valign="top" width="{100 // TABLES_ABREAST}%"><b>{table}</b><br>{"<br>".join(escaped)}</td>'


def _rows(cells: Sequence[str]) -> list[Sequence[str]]:
    return [cells[at : at + TABLES_ABREAST] for at in range(0, len(cells), TABLES_ABREAST)]


def _table(rows: Iterable[Sequence[str]], width: str = "60%") -> str:
    lines = "".join(f"<tr>{''.join(row)}</tr>" for row in rows)
    return f'<table cellspacing="0" cellpadding="5" width="{width}">{lines}</table>'


def by_name(seating: Seating, variant: Variant) -> Iterator[tuple[str, tuple[int, ...]]]:
    """Everybody who is seated, by name, with the number of her table in each rotation."""
    known = shown_names(variant)
    table_of = [
        {person: number for number, table in enumerate(tables, start=1) for person in table}
        for tables in seating.rotations
    ]
    for person in sorted(table_of[0], key=lambda one: (known[one].casefold(), one)):
        yield person, tuple(there[person] for there in table_of)
