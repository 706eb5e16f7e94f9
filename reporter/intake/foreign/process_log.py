"""Files of a plant's own log, read by their mappings and put together to the process log of the record."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import date, datetime, timedelta
from statistics import median

from reporter.intake.dates import Fault
from reporter.intake.foreign.grid import Grid, letters
from reporter.intake.foreign.mapping import MappedColumn, Mapping, differences_of
from reporter.intake.foreign.sort import sort_rows
from reporter.intake.foreign.tables import Table, at, find_tables
from reporter.intake.foreign.times import joined
from reporter.intake.foreign.wording import read_cell
from reporter.intake.gather import Gathered
from reporter.intake.sheets import sentinels
from reporter.intake.table import show
from reporter.problems import Place, Problem, problem
from reporter.record import ProcessLog, ReadingKind
from reporter.units import read_unit

Value = float | str | None
Row = tuple[datetime, int, tuple[Value, ...]]


@dataclass(frozen=True, slots=True)
class ProcessFile:
    """One file of a plant's log: its name, the log, what was understood in words, problems."""

    name: str
    log: ProcessLog
    lines: tuple[str, ...]
    problems: tuple[Problem, ...]


def read_process_file(grid: Grid, mapping: Mapping, *, day: date | None = None) -> ProcessFile:
    """Read a plant's log by a mapping.

    Parameters
    ----------
    grid
        The file.
    mapping
        Made for files of its shape, with columns of the use ``process``.
    day
        The test date, where the mapping says that the file holds times alone.

    Returns
    -------
    ProcessFile
        Stamps of an interval become its middle, so that each value falls into the run that holds most of it.
    """
    name = grid.source.name
    gathered = Gathered(name)
    every = find_tables(grid)
    changed = differences_of(mapping, grid, every) if grid.pages else ()
    tables = [table for table in every if mapping.fits(table)]
    if grid.pages and (changed or not tables):
        gathered.add("mapping-differs", gathered.place(), "; ".join(changed))
    if gathered.unreadable or not grid.pages:
        return ProcessFile(name, ProcessLog(), (), (*grid.problems, *gathered.all()))
    rows: list[Row] = []
    for table in tables:
        rows += _rows(grid, mapping, table, gathered, day)
    rows = _in_order(rows, gathered)
    own = [(i, column) for i, column in enumerate(mapping.columns) if column.use == "process"]
    log = ProcessLog(
        columns=tuple(column.channel for _, column in own),
        units=tuple(read_unit(column.unit) if column.unit else None for _, column in own),
        times=tuple(time for time, _, _ in rows),
        values=tuple(values for *_, values in rows),
        place=Place(name, tables[0].page.sheet),
        letters=tuple(letters(tables[0].columns[i]) for i, _ in own),
        rows=tuple(number for _, number, _ in rows),
    )
    lines = [f"read by the mapping {mapping.name!r}: {len(rows)} rows of the plant's log"]
    if rows:
        lines.append(f"time: {rows[0][0]:%Y-%m-%d %H:%M:%S} to {rows[-1][0]:%Y-%m-%d %H:%M:%S}")
    lines += [f"process: {column.channel}{f' in {column.unit}' if column.unit else ''}" for _, column in own]
    log, words = _at_middle(log, mapping.time.stamp)
    return ProcessFile(name, log, (*lines, *words), (*grid.problems, *gathered.all()))


def _rows(grid: Grid, mapping: Mapping, table: Table, gathered: Gathered, day: date | None) -> list[Row]:
    """The rows of one table; totals and rows of text are left out, numbers without a time are a problem."""
    columns = list(zip(table.columns, mapping.columns, strict=True))
    times = [column for column, mapped in columns if mapped.use == "time"]
    own = [(column, mapped) for column, mapped in columns if mapped.use == "process"]
    found: list[Row] = []
    for row in sort_rows(table, times, [c for c, _ in own], mapping.time.order, cut_off=grid.cut_off):
        place = grid.place(table.page, row.row, times[0], "Time")
        if row.fault:
            shown = " ".join(show(at(table.page.rows[row.row], column)) for column in times).strip()
            gathered.add(row.fault, place, repr(shown) if row.fault == "not-a-time" else row.why)
            continue
        if not row.stamps:
            gathered.add("rows-left-out", place, row.why)
            continue
        moment = joined(row.stamps, day if mapping.time.day else None, mapping.time)
        if moment is None:
            gathered.add("not-a-time", place, "a stamp without its day or its time of day")
            continue
        values = tuple(_value(grid, mapping, table, row.row, cell, gathered) for cell in own)
        found.append((moment, table.page.number(row.row), values))
    return found


def _value(
    grid: Grid, mapping: Mapping, table: Table, row: int, cell: tuple[int, MappedColumn], gathered: Gathered
) -> Value:
    """What one cell holds: a number, nothing, or its word; a mark for a missing value is a word, and is said."""
    column, mapped = cell
    page = table.page
    value = at(page.rows[row], column)
    place = grid.place(page, row, column, mapped.channel)
    if (row, column) in page.uncalculated:
        gathered.add("formula-without-value", place, "a formula that was never calculated")
        return None
    if (row, column) in page.percent and isinstance(value, float):
        value *= 100.0
    read = read_cell(value, "", mapping.numbers, dict(mapping.words))
    if isinstance(read, Fault):
        return show(value)
    if read.kind is ReadingKind.NUMBER and read.value is not None:
        if read.value in sentinels():
            gathered.add("sentinel-value", place, show(value), expected="a measured number; it is counted as one")
        return read.value
    return None if read.kind is ReadingKind.BLANK else read.text


def _in_order(rows: list[Row], gathered: Gathered) -> list[Row]:
    """The rows by time; one that stands twice with the same values counts once."""
    kept: list[Row] = []
    for row in sorted(rows, key=lambda one: one[0]):
        if kept and kept[-1][0] == row[0]:
            if kept[-1][2] != row[2]:
                found = f"{row[0]:%Y-%m-%d %H:%M:%S}, also in row {kept[-1][1]}, with other values"
                gathered.add("duplicate-time", gathered.place("", f"A{row[1]}", "Time"), found)
            continue
        kept.append(row)
    return kept


def _at_middle(log: ProcessLog, stamp: str) -> tuple[ProcessLog, tuple[str, ...]]:
    """The log with stamps of an interval moved to its middle; as it is where stamps are moments."""
    if stamp not in ("interval start", "interval end") or len(log.times) < 2:
        return log, ("each stamp is taken as the moment of its value",)
    steps = [(b - a).total_seconds() for a, b in zip(log.times, log.times[1:], strict=False)]
    half = timedelta(seconds=median(steps) / 2.0) * (1 if stamp == "interval start" else -1)
    words = f"stamps are the {stamp.split()[1]} of intervals of {median(steps):g} s; each value stands at its middle"
    return replace(log, times=tuple(time + half for time in log.times)), (words,)


def process_of(own: ProcessLog, files: Sequence[ProcessFile]) -> tuple[ProcessLog, list[Problem]]:
    """One process log of the sheet Process and of files; a column that two hold must agree where they overlap."""
    logs = [log for log in (own, *(file.log for file in files)) if log.columns]
    if len(logs) < 2:
        return (logs[0] if logs else own), []
    problems: list[Problem] = []
    units: dict[str, str] = {}
    cells: dict[str, dict[datetime, Value]] = {}
    for log in logs:
        for position, (name, unit) in enumerate(zip(log.columns, log.units, strict=True)):
            written = "" if unit is None else unit.unit
            if units.setdefault(name, written) != written:
                words = f"{name} in {written or 'no unit'} here, in {units[name] or 'no unit'} in another log"
                problems.append(problem("readings-contradict", log.place, words))
                continue
            column = cells.setdefault(name, {})
            for time, values in zip(log.times, log.values, strict=True):
                if column.setdefault(time, values[position]) != values[position]:
                    words = f"{name} at {time:%Y-%m-%d %H:%M:%S}"
                    problems.append(problem("readings-contradict", log.place, words))
                    break
    times = sorted({time for column in cells.values() for time in column})
    place = Place(", ".join(dict.fromkeys(log.place.file for log in logs if log.place.file)))
    table: list[tuple[Value, ...]] = [tuple(column.get(time) for column in cells.values()) for time in times]
    read = tuple(read_unit(units[name]) if units[name] else None for name in cells)
    return ProcessLog(tuple(cells), read, tuple(times), tuple(table), place), problems
