"""The time columns of a table, and what its stamps mean: asked where the file does not say."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import UTC, datetime, timedelta, tzinfo
from itertools import pairwise

from reporter.intake.foreign.grid import Grid, letters
from reporter.intake.foreign.mapping import AS_ENTERED, MOMENT
from reporter.intake.foreign.model import Desk, Option
from reporter.intake.foreign.tables import Table, at, blank, is_timelike
from reporter.intake.foreign.times import (
    Stamp,
    TimeStyle,
    half_day_clock,
    joined,
    order_of,
    read_stamp,
    zone_of,
)
from reporter.intake.foreign.words import stamp_of, time_part, zone_in
from reporter.intake.table import Raw, show

#: Stamps looked at where only their form matters.
ENOUGH = 5000
_OFFSET = re.compile(r"(?:Z|[A-Z]{2,4}|[+\-]\d{2}:?\d{2})$")
_ZONE_TITLE = re.compile(
    r"time ?zone|zeitzone|fuseau|huso|zona horaria|fuso|utc offset|times? (?:is|are|in) ", re.IGNORECASE
)
_AS_ENTERED = Option(AS_ENTERED, "the item Reading stamp of the sheet Test decides")


@dataclass(frozen=True, slots=True)
class TimeBase:
    """The columns of the page that hold the time, and how they are read; `order` is empty while it is open."""

    columns: tuple[int, ...]
    order: str
    stamp: str
    zone: str
    day: str
    written: str = ""


def time_columns(table: Table) -> dict[int, str]:
    """The columns whose header names a part of the time and whose cells may be one."""
    found = {}
    for column, header in zip(table.columns, table.headers, strict=True):
        part = time_part(header)
        rows = table.page.rows[table.first : table.last] if part else ()
        if any(is_timelike(cell) or _day_number(cell) for cell in (at(row, column) for row in rows)):
            found[column] = part
    return found


def _day_number(cell: Raw) -> bool:
    if isinstance(cell, str):
        return read_stamp(cell, "serial 1900") is not None
    return isinstance(cell, float) and (0.0 <= cell < 1.0 or 30_000.0 < cell < 60_000.0)


def time_base(grid: Grid, tables: Sequence[Table], desk: Desk, *, of_plant: bool = False) -> TimeBase | None:
    """The time base of tables of one shape; None while its columns are open.

    In a plant's own log (`of_plant`) a stamp may be the moment of a value.
    """
    table = tables[0]
    columns = _columns(grid, table, desk)
    if not columns:
        return None
    cells = [_cells(tables, column) for column in columns]
    place = grid.place(table.page, table.first, columns[0])
    epoch = "" if grid.kind == "text" else "serial 1904" if grid.epoch_1904 else "serial 1900"
    orders = [order_of(values, desk, place, epoch=epoch) for values in cells if _dated(values)]
    order = next((o for o in orders if o not in ("", "year first")), "" if "" in orders else "year first")
    stamps = [[read_stamp(value, order or "year first") for value in values[:ENOUGH]] for values in cells]
    if order and all(stamp is None for part in stamps[-1:] for stamp in part):
        asks = "These times cannot be read. Export the file with dates as 2026-04-20 and times as 09:50"
        desk.ask("time-form", asks, repr(show(cells[-1][0])) if cells[-1] else "no time", (), place)
    other = Option(MOMENT, "the value stood so at 09:00") if of_plant else _AS_ENTERED
    stamp = _stamp(grid, table, columns, desk, other)
    every = [s for part in stamps for s in part if s is not None]
    later = [s for own in cells for cell in _turns(own) if (s := read_stamp(cell, order or "year first")) is not None]
    written = "" if any(s.offset is not None for s in (*every, *later)) else _named_zone(table, columns)
    ahead = zone_of(written).utcoffset(None) if written else None
    offsets = [replace(s, offset=ahead) for s in every] if written else [*every, *later]
    zone = _zone(offsets, desk, written)
    day = "" if not order else _day(every, tables, desk)
    if order:
        _half_days(cells, stamps, desk)
    return TimeBase(columns, order, stamp, zone, day, written if zone else "")


def _turns(values: Sequence[Raw]) -> list[Raw]:
    """The cells beyond those looked at, before and behind each change of what is written after the time."""
    found: list[Raw] = []
    last = ""
    for before, cell in pairwise(values[ENOUGH - 1 :] if len(values) > ENOUGH else ()):
        if isinstance(cell, str):
            match = _OFFSET.search(cell)
            now = match[0] if match else ""
            if now != last:
                found += [before, cell]
                last = now
    return found


def _named_zone(table: Table, columns: Sequence[int]) -> str:
    """The zone of the clock that the headers of the time or a line above the table names."""
    headers = dict(zip(table.columns, table.headers, strict=True))
    for row in table.page.rows[: table.header_rows[0]]:
        text = " ".join(show(cell) for cell in row if isinstance(cell, str))
        if _ZONE_TITLE.search(text) and (zone := zone_in(text)):
            return zone
    return next((zone for column in columns if (zone := zone_in(headers[column]))), "")


def _columns(grid: Grid, table: Table, desk: Desk) -> tuple[int, ...]:
    found = time_columns(table)
    headers = dict(zip(table.columns, table.headers, strict=True))
    by_part = {part: [column for column, own in found.items() if own == part] for part in ("both", "date", "time")}
    candidates = by_part["both"] or by_part["time"] or by_part["date"]
    if len(candidates) > 1:
        starts = [column for column in candidates if stamp_of(headers[column]) == "interval start"]
        ends = [column for column in candidates if stamp_of(headers[column]) == "interval end"]
        if len(starts) == 1 and len(ends) == 1 and len(candidates) == 2:
            desk.say(f"columns {letters(starts[0])} and {letters(ends[0])} hold start and end: the start is read")
            candidates = starts
        else:
            options = [Option(letters(column), headers[column]) for column in candidates]
            place = grid.place(table.page, table.header_rows[0], candidates[0])
            words = ", ".join(repr(headers[column]) for column in candidates)
            answer = desk.ask("time-column", "Which column is the time of a reading?", words, options, place)
            candidates = [column for column in candidates if letters(column) == answer]
    if not candidates:
        if all(question.key != "time-column" for question in desk.open):
            asks = "No column of this table is named as its time: type Time above it, or leave the table out"
            desk.ask("time-column", asks, ", ".join(map(repr, table.headers)), ())
        return ()
    if by_part["both"] or not by_part["time"] or len(by_part["date"]) != 1:
        chosen: tuple[int, ...] = (candidates[0],)
    elif _has_dates(table, candidates[0]):
        chosen = (candidates[0],)
    else:
        chosen = (by_part["date"][0], candidates[0])
    desk.say(f"time: {' and '.join(f'column {letters(c)} ({headers[c]!r})' for c in chosen)}")
    return chosen


def _has_dates(table: Table, column: int) -> bool:
    """Whether the first cell of a column of times holds a date as well."""
    for row in table.page.rows[table.first : table.last]:
        cell = at(row, column)
        if is_timelike(cell):
            if isinstance(cell, datetime):
                return cell.year > 1904
            return isinstance(cell, str) and any(mark in cell for mark in "-/") and ":" in cell
    return False


def _cells(tables: Sequence[Table], column: int) -> list[Raw]:
    position = tables[0].columns.index(column)
    return [
        cell
        for table in tables
        for row in table.page.rows[table.first : table.last]
        if not blank(cell := at(row, table.columns[position])) and (is_timelike(cell) or _day_number(cell))
    ]


def _dated(values: Sequence[Raw]) -> bool:
    """Whether the cells of a column hold dates, or numbers of days."""
    return any(
        isinstance(v, datetime)
        or (isinstance(v, str) and (any(m in v for m in "-/") or "." in v or not v.strip()[:1].isdigit() or " " in v))
        or (isinstance(v, float) and v > 1.0)
        or (isinstance(v, str) and v.strip().isdigit())
        for v in values[:ENOUGH]
    )


def _stamp(grid: Grid, table: Table, columns: Sequence[int], desk: Desk, other: Option) -> str:
    headers = dict(zip(table.columns, table.headers, strict=True))
    text = " ".join(headers[column] for column in columns)
    said = stamp_of(text)
    if said:
        desk.say(f"stamps are the {said.split()[1]} of the interval, by the header {text!r}")
        return said
    options = (
        Option("interval start", "a stamp of 09:00 covers the time from 09:00"),
        Option("interval end", "a stamp of 09:00 covers the time up to 09:00"),
        other,
    )
    place = grid.place(table.page, table.header_rows[0], columns[-1])
    asks = "Does a stamp stand for the start or for the end of its interval?"
    return desk.ask("stamp", asks, f"the header {text!r} does not say", options, place)


def _zone(stamps: Sequence[Stamp], desk: Desk, written: str = "") -> str:
    offsets = {stamp.offset for stamp in stamps if stamp.offset is not None}
    if not offsets:
        return ""
    found = ", ".join(f"{offset / timedelta(hours=1):+g}" for offset in sorted(offsets)) + " h from UTC"
    given = desk.answers.get("time-zone", "")
    if given and given != "as written":
        try:
            zone = zone_of(given)
        except ValueError:
            found += f"; {given!r} is no time zone"
            zone = None
        if zone is not None and (back := _goes_back(stamps, zone)):
            found += f"; by {given} {back}: answer a fixed one, such as UTC-07:00"
        elif zone is not None:
            desk.say(f"stamps have their offset ({found}); they are converted to {given}, as answered")
            return given
    back = _goes_back(stamps, None)
    kept = () if back else (Option("as written", "the clock in the file is the clock of the test"),)
    found += f"; as written {back}" if back else ""
    options = (
        *kept,
        Option(
            "UTC-07:00" if back else "America/Denver", "convert to this zone; any name of a zone, or hours from UTC"
        ),
    )
    says = f"The file says that its clock is {written}" if written else "The stamps say their offset"
    answer = desk.ask("time-zone", f"{says}: what is the clock of the test?", found, options)
    return "" if answer == "as written" else answer


def _goes_back(stamps: Sequence[Stamp], zone: tzinfo | None) -> str:
    """Where a clock (None: as written) goes back while the time goes on, in words; empty where it does not."""
    moments = []
    for stamp in stamps:
        if stamp.day is not None and stamp.clock is not None and stamp.offset is not None:
            local = datetime(stamp.day.year, stamp.day.month, stamp.day.day) + stamp.clock
            moments.append((local - stamp.offset, local))
    moments.sort()
    clocks = [
        local if zone is None else utc.replace(tzinfo=UTC).astimezone(zone).replace(tzinfo=None)
        for utc, local in moments
    ]
    for (one, before), (two, after) in pairwise(zip((utc for utc, _ in moments), clocks, strict=True)):
        if after < before or (after == before and two > one):
            return f"the clock goes back from {before:%Y-%m-%d %H:%M} to {after:%H:%M}"
    return ""


def _day(stamps: Sequence[Stamp], tables: Sequence[Table], desk: Desk) -> str:
    if any(stamp.day is not None and stamp.day.year > 1904 for stamp in stamps):
        return ""
    days = dict.fromkeys(table.page.sheet for table in tables if is_timelike(table.page.sheet))
    if len(days) > 1:
        asks = "Is each sheet a day? Type the date beside the times of each sheet, or export one file for each day"
        return desk.ask("day", asks, f"times without a date on the sheets {', '.join(map(repr, days))}", ())
    if stamps[:1] and stamps[0].clock == timedelta(0):
        first = show(at(tables[0].page.rows[tables[0].first], tables[0].columns[0]))
        asks = "Do these times count from the start? Export the file with the time of day instead"
        options = (Option("test date", "no: they are times of the day of the item Test date, from midnight on"),)
        return desk.ask("day", asks, f"no date in any row, and the first time is {first!r}", options)
    options = (Option("test date", "the item Test date of the sheet Test"),)
    return desk.ask("day", "The file holds times without a date: which day is it?", "no date in any row", options)


def _half_days(cells: Sequence[Sequence[Raw]], stamps: Sequence[Sequence[Stamp | None]], desk: Desk) -> None:
    """Ask about a clock that steps from 12 back to 1."""
    style = TimeStyle()
    rows = zip(*stamps, strict=False)
    day = datetime(2000, 1, 1).date()
    moments = [moment for row in rows if (moment := joined(row, day, style)) is not None]
    halves = any("m" in show(value).casefold()[-3:] for value in cells[-1][:ENOUGH])
    step = half_day_clock(moments, halves)
    if step is not None:
        found = f"{step[0]:%H:%M}, then {step[1]:%H:%M} on the same day, and no a.m. or p.m."
        options = (Option("as written", "the rows really step back"),)
        desk.ask("half-day-clock", "Is this a clock of twelve hours? Then export it with 24 hours", found, options)
