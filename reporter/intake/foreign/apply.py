"""A file read by a mapping: readings with their places, what was left out and why, and what is wrong."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from datetime import date, datetime
from itertools import pairwise
from pathlib import Path

from reporter.intake.dates import Fault
from reporter.intake.foreign.grid import Grid, Page, letters, read_grid
from reporter.intake.foreign.mapping import MappedColumn, Mapping, differences_of
from reporter.intake.foreign.model import Desk
from reporter.intake.foreign.numbers import hundredfold, style_of
from reporter.intake.foreign.sort import sort_rows
from reporter.intake.foreign.tables import Table, at, find_tables
from reporter.intake.foreign.times import TimeStyle, joined, order_of
from reporter.intake.foreign.wording import read_cell
from reporter.intake.gather import Gathered
from reporter.intake.table import Raw
from reporter.intake.workbook import ranges
from reporter.problems import Place, Problem
from reporter.record import Reading, ReadingKind, ReadingRow, Readings, SourceFile


@dataclass(frozen=True, slots=True)
class LeftOut:
    """A row that is no reading: its place and why."""

    place: Place
    why: str


@dataclass(frozen=True, slots=True)
class Report:
    """What was understood of a file."""

    file: str
    mapping: str
    rows: int = 0
    left_out: tuple[LeftOut, ...] = ()
    first: datetime | None = None
    last: datetime | None = None
    step: float = 0.0
    gaps: tuple[tuple[datetime, datetime], ...] = ()
    merged: int = 0
    columns: tuple[str, ...] = ()

    def lines(self) -> tuple[str, ...]:
        """The report in lines of plain text."""
        lines = [f"read by the mapping {self.mapping!r}: {self.rows} rows of readings"]
        if self.first is not None and self.last is not None:
            lines.append(f"time: {self.first:%Y-%m-%d %H:%M:%S} to {self.last:%Y-%m-%d %H:%M:%S}, each {self.step:g} s")
        lines += [f"column {words}" for words in self.columns]
        lines += [f"gap: nothing between {a:%Y-%m-%d %H:%M:%S} and {b:%Y-%m-%d %H:%M:%S}" for a, b in self.gaps[:10]]
        if len(self.gaps) > 10:
            lines.append(f"and {len(self.gaps) - 10} more gaps")
        if self.merged:
            lines.append(f"{self.merged} rows stood twice with the same readings and count once")
        lines += [f"left out {out.place.text()}: {out.why}" for out in self.left_out[:20]]
        if len(self.left_out) > 20:
            lines.append(f"and {len(self.left_out) - 20} more rows left out")
        return tuple(lines)


@dataclass(frozen=True, slots=True)
class ForeignReadings:
    """What a mapping gave: readings, the report, every problem, the columns they came from, the file."""

    readings: Readings
    report: Report
    problems: tuple[Problem, ...]
    columns: tuple[MappedColumn, ...] = ()
    time: TimeStyle = field(default_factory=TimeStyle)
    source: SourceFile = field(default_factory=lambda: SourceFile("", "", 0))


def apply(path: str | Path, mapping: Mapping, *, day: date | None = None) -> ForeignReadings:
    """Read a file by a mapping.

    Parameters
    ----------
    path
        The logger's file.
    mapping
        Made for files of its shape; another shape is a problem that says the difference.
    day
        The test date, where the mapping says that the file holds times alone.

    Returns
    -------
    ForeignReadings
        Rows in time order.  Nothing is raised for what is in the file.
    """
    return apply_to_grid(read_grid(path), mapping, day=day)


def apply_to_grid(grid: Grid, mapping: Mapping, *, day: date | None = None) -> ForeignReadings:
    """The same for a grid already read."""
    gathered = Gathered(grid.source.name)
    every = find_tables(grid)
    tables = [table for table in every if mapping.fits(table)]
    tables = [table for table in tables if not (table.page.hidden and mapping.hidden == "leave out")]
    changed = differences_of(mapping, grid, every) if grid.pages else ()
    if grid.pages and (changed or not tables):
        code = "mapping-differs" if every else "no-readings-table"
        gathered.add(code, gathered.place(), "; ".join(changed) or "only hidden sheets have the table")
    lanes = [(index, column) for index, column in enumerate(mapping.columns) if column.use == "reading"]
    empty = Readings(tuple(column.channel for _, column in lanes), (), (), Place(grid.source.name))
    if gathered.unreadable or not grid.pages:
        problems = (*grid.problems, *gathered.all())
        return ForeignReadings(empty, Report(grid.source.name, mapping.name), problems, source=grid.source)
    work = _Reader(grid, mapping, gathered, day)
    for table in tables:
        work.read(table)
    rows = work.in_order()
    columns = tuple(letters(tables[0].columns[index]) for index, _ in lanes)
    readings = Readings(empty.channels, columns, tuple(rows), Place(grid.source.name, tables[0].page.sheet))
    report = _report(work, rows, [column for _, column in lanes], columns)
    if work.left_out:
        first = work.left_out[0]
        counts = Counter(out.why.split(":")[0] for out in work.left_out)
        found = ", ".join(f"{count} ({why})" for why, count in counts.items())
        gathered.add("rows-left-out", first.place, found)
    for page in {id(table.page): table.page for table in tables}.values():
        rows_hidden = f"rows {ranges(page.number(row) for row in page.hidden_rows)}" if page.hidden_rows else ""
        if hidden := "the sheet" if page.hidden else rows_hidden:
            gathered.add("hidden-read", gathered.place(page.sheet), hidden)
    for count, place, lowest in work.negative.values():
        gathered.add("negative-reading", place, f"{count} readings, the lowest {lowest:g}")
    if not rows and not gathered.unreadable:
        gathered.add("no-readings-table", readings.place, "a header and no row of readings")
    used = tuple(column for _, column in lanes)
    problems = (*grid.problems, *gathered.all())
    return ForeignReadings(readings, report, problems, used, mapping.time, grid.source)


class _Reader:
    """The tables of one file on their way to rows of readings."""

    def __init__(self, grid: Grid, mapping: Mapping, gathered: Gathered, day: date | None) -> None:
        self.grid, self.mapping, self.gathered, self.day = grid, mapping, gathered, day
        self.words = dict(mapping.words)
        self.rows: list[ReadingRow] = []
        self.places: dict[int, Place] = {}
        self.left_out: list[LeftOut] = []
        self.negative: dict[str, tuple[int, Place, float]] = {}
        self.merged = 0

    def read(self, table: Table) -> None:
        """Read one table."""
        columns = list(zip(table.columns, self.mapping.columns, strict=True))
        times = [column for column, mapped in columns if mapped.use == "time"]
        lanes = [(column, mapped) for column, mapped in columns if mapped.use == "reading"]
        self._still_so(table, times, [column for column, _ in lanes])
        known: list[dict[Raw, Reading]] = [{} for _ in lanes]
        order = self.mapping.time.order
        for found in sort_rows(table, times, [c for c, _ in lanes], order, cut_off=self.grid.cut_off):
            place = self.grid.place(table.page, found.row, times[0], "Time")
            if found.fault:
                shown = " ".join(str(at(table.page.rows[found.row], c) or "") for c in times).strip()
                untimed = found.fault == "not-a-time"
                expected = f"a time, {order}" if untimed else ""
                self.gathered.add(found.fault, place, repr(shown) if untimed else found.why, expected=expected)
                continue
            if not found.stamps:
                self.left_out.append(LeftOut(place, found.why))
                if found.note:
                    self.gathered.add(found.note, place, found.why)
                continue
            moment = joined(found.stamps, self.day if self.mapping.time.day else None, self.mapping.time)
            if moment is None:
                self.gathered.add("not-a-time", place, "a stamp without its day or its time of day")
                continue
            readings = tuple(
                self._reading(table, found.row, lane, cache) for lane, cache in zip(lanes, known, strict=True)
            )
            number = table.page.number(found.row)
            self.places[len(self.rows)] = place
            self.rows.append(ReadingRow(moment, number, readings))

    def _reading(self, table: Table, row: int, lane: tuple[int, MappedColumn], known: dict[Raw, Reading]) -> Reading:
        column, mapped = lane
        page = table.page
        value = at(page.rows[row], column)
        if (row, column) in page.uncalculated:
            place = self.grid.place(page, row, column, mapped.channel)
            self.gathered.add("formula-without-value", place, "a formula that was never calculated")
            return Reading(ReadingKind.ERROR, None, "")
        percent = (row, column) in page.percent
        if not percent and (ready := known.get(value)) is not None:
            self._see(page, (row, column), mapped.channel, ready)
            return ready
        if percent and isinstance(value, float) and mapped.unit == "%":
            value = hundredfold(value)
        read = read_cell(value, mapped.unit, self.mapping.numbers, self.words)
        wrong = percent and mapped.unit not in ("%", "1")
        fault = Fault("wrong-dimension", f"{value} as a percentage", f"a number in {mapped.unit}") if wrong else None
        if fault is None and isinstance(read, Fault):
            fault = read
        if fault is not None or isinstance(read, Fault):
            fault = fault or Fault("text-for-number", str(value))
            place = self.grid.place(page, row, column, mapped.channel)
            self.gathered.add(fault.code, place, fault.found, expected=fault.expected)
            return Reading(ReadingKind.ERROR, None, str(value))
        if not percent:
            known[value] = read
        self._see(page, (row, column), mapped.channel, read)
        return read

    def _see(self, page: Page, where: tuple[int, int], channel: str, reading: Reading) -> None:
        """Count the negative readings of a channel; they are kept."""
        if reading.kind is ReadingKind.NUMBER and reading.value is not None and reading.value < 0.0:
            place = self.grid.place(page, *where, channel)
            count, first, lowest = self.negative.get(channel, (0, place, 0.0))
            self.negative[channel] = (count + 1, first, min(lowest, reading.value))

    def _still_so(self, table: Table, times: Sequence[int], lanes: Sequence[int]) -> None:
        """Hold the order of the dates and the decimal mark of the mapping against the file."""
        rows = table.page.rows[table.first : table.last]
        for column in times:
            desk = Desk({}, self.grid.source.name)
            place = self.grid.place(table.page, table.first, column, "Time")
            order = order_of([at(row, column) for row in rows], desk, place, epoch="")
            own = self.mapping.time.order
            if order in ("day first", "month first") and order != own and own in ("day first", "month first"):
                self.gathered.add("mapping-differs", place, f"dates are {order}, in the mapping {own}")
        desk = Desk({}, self.grid.source.name)
        style = style_of((c for row in rows for i in lanes if isinstance(c := at(row, i), str)), (), desk)
        telling = bool(desk.evidence) and not desk.open
        if telling and style.decimal != self.mapping.numbers.decimal:
            found = f"the decimal mark is {style.decimal!r}, in the mapping {self.mapping.numbers.decimal!r}"
            self.gathered.add("mapping-differs", self.gathered.place(table.page.sheet), found)

    def in_order(self) -> list[ReadingRow]:
        """The rows by time; a time that stands twice with the same readings counts once, else is a problem."""
        for index, (before, after) in enumerate(pairwise(self.rows), start=1):
            if after.time < before.time:
                found = f"{after.time:%Y-%m-%d %H:%M:%S} after {before.time:%Y-%m-%d %H:%M:%S}"
                code = "run-across-midnight" if self.mapping.time.day else "readings-out-of-order"
                self.gathered.add(code, self.places[index], found)
                break
        ordered = sorted(enumerate(self.rows), key=lambda pair: pair[1].time)
        kept: list[ReadingRow] = []
        for index, row in ordered:
            if kept and kept[-1].time == row.time:
                if same_readings(kept[-1], row):
                    self.merged += 1
                    continue
                found = f"{row.time:%Y-%m-%d %H:%M:%S}, also in row {kept[-1].row}, with other readings"
                self.gathered.add("duplicate-time", self.places[index], found)
            kept.append(row)
        return kept


def same_readings(one: ReadingRow, two: ReadingRow) -> bool:
    """Whether two rows hold the same readings; the texts may differ."""
    plain = [tuple((r.kind, r.value) for r in row.readings) for row in (one, two)]
    return plain[0] == plain[1]


def _report(work: _Reader, rows: Sequence[ReadingRow], used: Sequence[MappedColumn], columns: Sequence[str]) -> Report:
    steps = [(b.time - a.time).total_seconds() for a, b in pairwise(rows)]
    step = Counter(steps).most_common(1)[0][0] if steps else 0.0
    gaps = tuple((a.time, b.time) for (a, b), s in zip(pairwise(rows), steps, strict=True) if step and s > 1.5 * step)
    words = tuple(
        f"{letter}: {column.channel} in {column.unit}, {column.basis}"
        for letter, column in zip(columns, used, strict=True)
    )
    file, left_out = work.grid.source.name, tuple(work.left_out)
    report = Report(file, work.mapping.name, len(rows), left_out, gaps=gaps, columns=words)
    if not rows:
        return report
    return replace(report, first=rows[0].time, last=rows[-1].time, step=step, merged=work.merged)
