"""The sheets as they were read: short tables as lines with tabs, wide ones a paragraph for each row."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reporter.output.numbers import moment
from reporter.output.view.desk import Desk
from reporter.output.view.model import Block
from reporter.record import SheetCopy

#: Sheets that stand in full in another section, and the series.
_ELSEWHERE = frozenset({"Calibrations", "Cylinders", "Events", "Attachments", "Readings"})
#: Lines with tabs: so wide is the text [mm], so wide a letter of it; a sheet of fewer rows has none.
_WIDTH, _LETTER, _LONG = 175, 1.35, 6
_ITEMS = ("Item", "Entry")
#: Columns in which midnight is a time.
_TIMES = frozenset({"Start", "End", "Time", "From", "Until"})
_MIDNIGHT = " 00:00"
_DAY = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}" + _MIDNIGHT)


def inputs(desk: Desk, *, minute_data: bool) -> tuple[Block, ...]:
    """All sheets in the order of the file; the readings only on request."""
    name = "inputs_minutes" if minute_data else "inputs"
    lead = desk.words(f"lead.{name}", calibrations=desk.section_number("calibrations"))
    blocks = [Block(text=(lead,))]
    if prepared := desk.outcome.record.prepared:
        blocks.append(Block(title=desk.words("lead.prepared"), lines=prepared))
    for sheet in desk.outcome.record.sheets:
        if sheet.sheet not in _ELSEWHERE and sheet.rows:
            blocks.append(_sheet(sheet))
    if minute_data:
        blocks.append(_minutes(desk))
    return tuple(blocks)


def _sheet(sheet: SheetCopy) -> Block:
    title = f"{sheet.sheet} (hidden sheet)" if sheet.hidden else sheet.sheet
    filled = [index for index in range(len(sheet.header)) if any(index < len(row) and row[index] for row in sheet.rows)]
    header = [sheet.header[index] for index in filled]
    rows = [[_cell(sheet, row, index) for index in filled] for row in sheet.rows]
    if tuple(header[:2]) == _ITEMS:
        return Block(title=title, lines=tuple(": ".join(part for part in row if part) for row in rows))
    longest = max((len(cell) for row in rows for cell in row), default=0)
    if len(rows) >= _LONG and len(header) * _tab(longest) <= _WIDTH:
        names = "; ".join(f"({number}) {name}" for number, name in enumerate(header, 1))
        marks = [f"({number})" for number in range(1, len(header) + 1)]
        return Block(
            title=title, text=(names,), lines=tuple("\t".join(row) for row in (marks, *rows)), tab=_tab(longest)
        )
    return Block(title=title, lines=tuple(_paragraph(header, row) for row in rows))


def _cell(sheet: SheetCopy, row: Sequence[str], index: int) -> str:
    """A cell as it was read; a day without the midnight a workbook gives it, except where times stand."""
    text = row[index] if index < len(row) else ""
    is_day = _DAY.fullmatch(text) and sheet.header[index] not in _TIMES
    return text.removesuffix(_MIDNIGHT) if is_day else text


def _tab(longest: int) -> int:
    """The width of a column of lines with tabs [mm]."""
    return int(longest * _LETTER) + 3


def _paragraph(header: Sequence[str], row: Sequence[str]) -> str:
    """A row as the names of its columns with what stood there; the first names the row."""
    rest = "; ".join(f"{name}: {cell}" for name, cell in zip(header[1:], row[1:], strict=True) if cell)
    return f"{header[0]} {row[0]}. {rest}"


def _minutes(desk: Desk) -> Block:
    """Every logged row as it was read."""
    readings = desk.outcome.record.readings
    names = ("Time", *readings.channels)
    lines = ["\t".join(names)]
    lines += ["\t".join((moment(row.time), *(reading.text for reading in row.readings))) for row in readings.rows]
    return Block(title="Readings", lines=tuple(lines), tab=max(18, _WIDTH // max(len(names), 8)))
