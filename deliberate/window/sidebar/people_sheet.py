"""Cells of the table of people as tab-separated text, as sheets copy and paste it. Free of Qt."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import count
from deliberate.scenario import edits
from deliberate.scenario.values import Question, Scenario
from deliberate.window.chart.figures import RISKY, safe_cell
from deliberate.window.sidebar.people_columns import HEADINGS, Change, Column, Row, change, typed_over

MOST_ROWS = 500
_TEXTS = (Column.NAME, Column.ROLE)
_KEPT_WHEN_EMPTY = (Column.NAME, Column.FIRMNESS, Column.OWN, Column.BALLOTS, Column.PRESENT)


def as_text(rows: Sequence[Row], columns: Sequence[Column], question: Question) -> str:
    """One line per person. Names that a sheet would take for a formula get a leading quote."""
    text = io.StringIO()
    writer = csv.writer(text, delimiter="\t", lineterminator="\n")
    for row in rows:
        cells = ((column, typed_over(column, row, question)) for column in columns)
        writer.writerow([safe_cell(cell) if column in _TEXTS else cell for column, cell in cells])
    return text.getvalue()


def cells_in(text: str) -> list[list[str]]:
    """The cells of pasted text, line by line, without empty lines at the end and without our own headings.

    Raises DeliberateError where there is nothing in it, or too much.
    """
    try:
        lines = [[_unquoted(cell) for cell in line] for line in csv.reader(io.StringIO(text), delimiter="\t")]
    except csv.Error as error:
        raise DeliberateError(f"what is on the clipboard is not a table ({error})") from None
    headings = {heading.short.casefold() for heading in HEADINGS.values()}
    if len(lines) > 1 and lines[0] and all(cell.strip().casefold() in headings for cell in lines[0]):
        lines = lines[1:]
    while lines and not any(cell.strip() for cell in lines[-1]):
        lines.pop()
    if not lines:
        raise DeliberateError("there is nothing on the clipboard that could be pasted here")
    if len(lines) > MOST_ROWS:
        raise DeliberateError(f"there are {len(lines)} lines on the clipboard: paste up to {MOST_ROWS} at a time")
    return lines


def pasted(
    cells: Sequence[Sequence[str]],
    ids: Sequence[str],
    columns: Sequence[Column],
    *,
    question: str,
    variant: str,
) -> Change:
    """The edit that puts `cells` over people `ids`, line by line, and `columns` from left to right.

    Lines beyond the last person add people, where the names are among the columns; empty ones are passed over there.
    """
    beyond = [line for line in cells[len(ids) :] if any(map(str.strip, line))]
    cells = [*cells[: len(ids)], *beyond]

    def edit(scenario: Scenario) -> Scenario:
        width = max(map(len, cells))
        if width > len(columns):
            raise DeliberateError(
                f"the clipboard holds {count(width, 'column', 'columns')}, and there are {len(columns)} from here on:"
                " start further left, or show more columns"
            )
        scenario, everybody = _with_newcomers(scenario, cells, ids, columns, variant)
        for column, text, people in _alike(cells, everybody, columns):
            scenario = change(column, people, text, question=question, variant=variant)(scenario)
        return scenario

    return edit


def _with_newcomers(
    scenario: Scenario, cells: Sequence[Sequence[str]], ids: Sequence[str], columns: Sequence[Column], variant: str
) -> tuple[Scenario, list[str]]:
    everybody = list(ids[: len(cells)])
    for line in cells[len(ids) :]:
        named = dict(zip(columns, line, strict=False)).get(Column.NAME, "").strip()
        if not named:
            raise DeliberateError(
                f"the clipboard holds {count(len(cells), 'line', 'lines')}, and there are"
                f" {count(len(ids), 'person', 'people')} from here on: start further up, or paste names as well"
            )
        newcomer = edits.fresh_person_id(scenario, named)
        scenario = edits.add_person(scenario, named, variant=variant, person_id=newcomer)
        everybody.append(newcomer)
    return scenario, everybody


def _alike(
    cells: Sequence[Sequence[str]], ids: Sequence[str], columns: Sequence[Column]
) -> list[tuple[Column, str, list[str]]]:
    """The cells to set, those of a column with the same text together, so that hundreds take a few edits."""
    together: dict[tuple[Column, str, str], list[str]] = {}
    for person, line in zip(ids, cells, strict=True):
        for column, text in zip(columns, line, strict=False):
            if column == Column.NOW or (not text.strip() and column in _KEPT_WHEN_EMPTY):
                continue
            whose = person if column == Column.NAME else ""  # everybody is renamed alone
            together.setdefault((column, text, whose), []).append(person)
    return [(column, text, people) for (column, text, _), people in together.items()]


def _unquoted(cell: str) -> str:
    return cell[1:] if cell.startswith("'") and cell[1:].startswith(RISKY) else cell
