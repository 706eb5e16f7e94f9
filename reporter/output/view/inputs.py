"""The sheets as they were read: narrow tables as they stand, wide ones turned so that rows become columns."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.output.numbers import moment
from reporter.output.view.desk import Desk
from reporter.output.view.model import Block, Column, Row, Table
from reporter.record import SheetCopy

#: Sheets that stand in full in another section, and the series.
_ELSEWHERE = frozenset({"Calibrations", "Cylinders", "Events", "Attachments", "Readings"})
#: A sheet with more filled columns than this is turned; so many of its rows stand beside each other.
_WIDE, _ACROSS = 7, 6
#: Minute rows beside each other.
_MINUTES_ACROSS = 2


def inputs(desk: Desk, *, minute_data: bool) -> tuple[Block, ...]:
    """All sheets in the order of the file; the readings only on request."""
    name = "inputs_minutes" if minute_data else "inputs"
    lead = desk.words(f"lead.{name}", calibrations=desk.section_number("calibrations"))
    blocks = [Block(text=(lead,))]
    for sheet in desk.outcome.record.sheets:
        if sheet.sheet not in _ELSEWHERE and sheet.rows:
            blocks.append(_sheet(sheet))
    if minute_data:
        blocks.append(_minutes(desk))
    return tuple(blocks)


def _sheet(sheet: SheetCopy) -> Block:
    title = f"{sheet.sheet} (hidden sheet)" if sheet.hidden else sheet.sheet
    filled = [
        index for index in range(len(sheet.header)) if any(index < len(row) and row[index] for row in sheet.rows)
    ]
    header = [sheet.header[index] for index in filled]
    rows = [[row[index] if index < len(row) else "" for index in filled] for row in sheet.rows]
    if not filled:
        return Block()
    if len(filled) > _WIDE:
        return Block(title=title, tables=tuple(_turned(header, rows)))
    return Block(title=title, tables=(_upright(header, rows),))


def _upright(header: Sequence[str], rows: Sequence[Sequence[str]]) -> Table:
    widths = [_width([name, *(row[index] for row in rows)]) for index, name in enumerate(header)]
    columns = tuple(Column(name, width=width) for name, width in zip(header, widths, strict=True))
    return Table(columns, tuple(Row(tuple(row)) for row in rows), small=True)


def _turned(header: Sequence[str], rows: Sequence[Sequence[str]]) -> list[Table]:
    """Column names down, rows across; the first column names each row."""
    tables = []
    for start in range(0, len(rows), _ACROSS):
        some = rows[start : start + _ACROSS]
        columns = (Column(header[0], width=1.6), *(Column(row[0], width=1.5) for row in some))
        lines = tuple(
            Row((name, *(row[index] for row in some)))
            for index, name in enumerate(header)
            if index and any(row[index] for row in some)
        )
        tables.append(Table(columns, lines, small=True))
    return tables


def _width(texts: Sequence[str]) -> float:
    """A width by the longest text, within bounds that keep short columns readable."""
    return min(max(max(len(text) for text in texts), 8), 60) ** 0.8


def _minutes(desk: Desk) -> Block:
    """Every logged row as it was read, two rows of the log beside each other."""
    readings = desk.outcome.record.readings
    names = ("Time", *readings.channels)
    columns = tuple(Column(name) for _ in range(_MINUTES_ACROSS) for name in names)
    half = -(-len(readings.rows) // _MINUTES_ACROSS)
    rows = []
    for at in range(half):
        cells: list[str] = []
        for place in range(at, len(readings.rows), half):
            row = readings.rows[place]
            cells += [moment(row.time), *(reading.text for reading in row.readings)]
        cells += [""] * (len(columns) - len(cells))
        rows.append(Row(tuple(cells)))
    return Block(title="Readings", tables=(Table(columns, tuple(rows), small=True),))
