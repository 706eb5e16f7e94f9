"""The process log: columns of the plant's own, kept with their units and times."""

from __future__ import annotations

from reporter.errors import UnitError
from reporter.intake.readings import is_clock, time_positions, timed
from reporter.intake.rows import RowReader
from reporter.intake.table import Cell, HeaderCell, SheetTable
from reporter.record import ProcessLog
from reporter.units import ReadUnit, read_unit


def read_process(table: SheetTable, reader: RowReader) -> ProcessLog:
    """The process log: each column with its unit, each row with its time; words stay words."""
    clock = time_positions(table)
    if clock is None:
        place = reader.gathered.place(table.sheet, table.header[0].cell if table.header else "", "Time")
        reader.gathered.add("missing-column", place, expected="a column 'Time'")
        return ProcessLog()
    columns = [(i, h) for i, h in enumerate(table.header) if h.text and not is_clock(table, h)]
    rows = timed(table, clock, reader)
    values = tuple(
        tuple(_process_value(row.cells[i], table, header, reader) for i, header in columns) for row, _ in rows
    )
    units = tuple(_process_unit(header) for _, header in columns)
    names = tuple(h.name if unit else h.text for (_, h), unit in zip(columns, units, strict=True))
    place = reader.gathered.place(table.sheet)
    letters = tuple(header.column for _, header in columns)
    numbers = tuple(row.number for row, _ in rows)
    return ProcessLog(names, units, tuple(moment for _, moment in rows), values, place, letters, numbers)


def _process_unit(header: HeaderCell) -> ReadUnit | None:
    try:
        return read_unit(header.unit) if header.unit else None
    except UnitError:
        return None


def _process_value(cell: Cell, table: SheetTable, header: HeaderCell, reader: RowReader) -> float | str | None:
    if cell.uncalculated:
        place = reader.gathered.place(table.sheet, cell.cell, header.text)
        reader.gathered.add("formula-without-value", place, "a formula that was never calculated")
        return None
    if cell.blank:
        return None
    if isinstance(cell.value, float):
        return cell.value * 100.0 if cell.percent else cell.value
    return cell.text
