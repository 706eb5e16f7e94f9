"""A file read by a mapping: readings with their places, what was left out and why, and what is wrong."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from datetime import date, datetime
from pathlib import Path

import numpy as np

from reporter.intake.foreign.grid import Grid, letters, read_grid
from reporter.intake.foreign.mapping import MappedColumn, Mapping, differences_of
from reporter.intake.foreign.reader import LeftOut, Reader
from reporter.intake.foreign.tables import Table, find_tables
from reporter.intake.foreign.times import TimeStyle
from reporter.intake.gather import Gathered
from reporter.logged import Floats, LoggedRows
from reporter.problems import Place, Problem
from reporter.record import Readings, SourceFile


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
    comments: tuple[str, ...] = ()

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
        lines += self.comments[:20]
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


def _not_read(grid: Grid, every: Sequence[Table], tables: Sequence[Table]) -> list[LeftOut]:
    """The tables of a file that are not among those read."""
    others = [table for table in every if table.last > table.first and all(table is not one for one in tables)]
    places = (grid.place(table.page, table.header_rows[0], table.columns[0]) for table in others)
    return [LeftOut(place, f"a table: {table.words()}") for place, table in zip(places, others, strict=True)]


def apply_to_grid(
    grid: Grid, mapping: Mapping, *, day: date | None = None, tables: Sequence[Table] | None = None
) -> ForeignReadings:
    """The same for a grid already read, and its tables if they have been found."""
    gathered = Gathered(grid.source.name)
    every = find_tables(grid) if tables is None else tables
    fitting = [table for table in every if mapping.fits(table)]
    tables = [table for table in fitting if not (table.page.hidden and mapping.hidden == "leave out")]
    changed = differences_of(mapping, grid, every) if grid.pages else ()
    if grid.pages and (changed or not tables):
        code = "mapping-differs" if every else "no-readings-table"
        gathered.add(code, gathered.place(), "; ".join(changed) or "only hidden sheets have the table")
    lanes = [(index, column) for index, column in enumerate(mapping.columns) if column.use == "reading"]
    empty = Readings(tuple(column.channel for _, column in lanes), (), (), Place(grid.source.name))
    if gathered.unreadable or not grid.pages:
        problems = (*grid.problems, *gathered.all())
        return ForeignReadings(empty, Report(grid.source.name, mapping.name), problems, source=grid.source)
    work = Reader(grid, mapping, gathered, day)
    for table in tables:
        work.read(table)
    work.left_out += _not_read(grid, every, tables)
    rows = work.in_order()
    columns = tuple(letters(tables[0].columns[index]) for index, _ in lanes)
    readings = Readings(empty.channels, columns, rows, Place(grid.source.name, tables[0].page.sheet))
    report = _report(work, rows, [column for _, column in lanes], columns)
    report = replace(report, comments=tuple(text for table in tables for text in table.page.comment_words()))
    if work.left_out:
        first = work.left_out[0]
        counts = Counter(out.why.split(":")[0] for out in work.left_out)
        found = ", ".join(f"{count} ({why})" for why, count in counts.items())
        gathered.add("rows-left-out", first.place, found)
    for page in {id(table.page): table.page for table in tables}.values():
        if hidden := "the sheet" if page.hidden else page.hidden_words():
            gathered.add("hidden-read", gathered.place(page.sheet), hidden)
    work.say_negative()
    work.say_fractions()
    if not len(rows) and not gathered.unreadable:
        gathered.add("no-readings-table", readings.place, "a header and no row of readings")
    used = tuple(column for _, column in lanes)
    problems = (*grid.problems, *gathered.all())
    return ForeignReadings(readings, report, problems, used, mapping.time, grid.source)


def _report(work: Reader, rows: LoggedRows, used: Sequence[MappedColumn], columns: Sequence[str]) -> Report:
    times = rows.times
    steps = np.diff(times).astype(np.int64) / 1e6
    step = _most_common(steps) if len(steps) else 0.0
    gaps = np.flatnonzero(steps > 1.5 * step) if step else np.zeros(0, dtype=np.int64)
    words = tuple(
        f"{letter}: {column.channel} in {column.unit}, {column.basis}"
        for letter, column in zip(columns, used, strict=True)
    )
    ends = tuple(zip(times[gaps].tolist(), times[gaps + 1].tolist(), strict=True))
    report = Report(work.grid.source.name, work.mapping.name, len(rows), tuple(work.left_out), gaps=ends, columns=words)
    if not len(rows):
        return report
    return replace(report, first=times[0].item(), last=times[-1].item(), step=step, merged=work.merged)


def _most_common(steps: Floats) -> float:
    """The most common of some steps, the first among equals."""
    each, firsts, counts = np.unique(steps, return_index=True, return_counts=True)
    return float(each[min(range(len(each)), key=lambda at: (-counts[at], firsts[at]))])
