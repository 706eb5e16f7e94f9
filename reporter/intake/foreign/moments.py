"""Whole columns of time stamps at once.  What `times.read_stamp` and `times.joined` say of each cell is the rule.

A text of date and time is read in two halves, each different half once; numbers and dates of a workbook are
read as arrays; anything else cell by cell.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta
from operator import attrgetter
from typing import Any

import numpy as np

from reporter.intake.foreign.times import EPOCHS, SERIALS, Stamp, TimeStyle, read_stamp, zone_of
from reporter.intake.table import Raw
from reporter.logged import STAMPS, Counts, Moments, Where

#: Stands for a part that a stamp does not have.
NONE = np.iinfo(np.int64).min
_DAY, _MICROSECOND = timedelta(days=1), timedelta(microseconds=1)
_DAY_LENGTH = _DAY // _MICROSECOND
_FIRST = date(1970, 1, 1)
#: Days up to the end of 1904 are those a spreadsheet program gives to a time alone.
_NO_DAY_UNTIL = (date(1905, 1, 1) - _FIRST).days
#: No zone changes its offset within so long a time, counted from a full hour.
_QUARTER = timedelta(minutes=15) // _MICROSECOND


@dataclass(frozen=True, slots=True)
class Stamps:
    """The stamps of a column: days since 1970, time of day and offset [µs], `NONE` for what a stamp has not.

    `read` says where a stamp could be read.
    """

    day: Counts
    clock: Counts
    offset: Counts
    read: Where


def stamps_of(cells: Sequence[Raw], order: str) -> Stamps:
    """The stamps of a column of cells in an order."""
    parts = np.full((3, len(cells)), NONE, dtype=np.int64)
    read = np.zeros(len(cells), dtype=bool)
    types = set(map(type, cells))
    for kind in types:
        alone = len(types) == 1
        where = np.arange(len(cells)) if alone else np.array([i for i, c in enumerate(cells) if type(c) is kind])
        some = list(cells) if alone else [cells[i] for i in where.tolist()]
        if kind is str:
            _texts(some, order, where, parts, read)
        elif kind is float:
            _serials(np.array(some, dtype=np.float64), order, where, parts, read)
        elif kind is datetime and set(map(attrgetter("tzinfo"), some)) == {None}:
            _dates(np.array(some, dtype=STAMPS), where, parts, read)
        else:
            _each(some, order, where, parts, read)
    return Stamps(parts[0], parts[1], parts[2], read)


def _parts(stamp: Stamp | None) -> tuple[int, int, int]:
    """Day, time of day and offset of one stamp as numbers."""
    if stamp is None:
        return NONE, NONE, NONE
    return (
        NONE if stamp.day is None else (stamp.day - _FIRST).days,
        NONE if stamp.clock is None else stamp.clock // _MICROSECOND,
        NONE if stamp.offset is None else stamp.offset // _MICROSECOND,
    )


def _each(cells: Sequence[Any], order: str, where: Counts, parts: Counts, read: Where) -> None:
    """Cell by cell, each different one once."""
    known = {cell: read_stamp(cell, order) for cell in set(cells)}
    found = {cell: _parts(stamp) for cell, stamp in known.items()}
    parts[:, where] = np.array([found[cell] for cell in cells], dtype=np.int64).T
    read[where] = [known[cell] is not None for cell in cells]


def _texts(cells: Sequence[Any], order: str, where: Counts, parts: Counts, read: Where) -> None:
    """Texts: a date, then a time; where the halves are not just that, the whole text."""
    mark = " " if any(" " in cell for cell in cells[:50]) else "T"
    heads, tails = [cell.partition(mark)[0] for cell in cells], [cell.partition(mark)[2] for cell in cells]
    days = {head: _half(read_stamp(head, order), clock=False)[0] for head in set(heads)}
    parts[0, where] = [days[head] for head in heads]
    clocks, plain = _plain_clocks(tails)
    if not plain.all():
        each = {tail: _half(read_stamp(tail.strip(), order), clock=True) for tail in set(tails)}
        parts[1, where] = [each[tail][1] for tail in tails]
        parts[2, where] = [each[tail][2] for tail in tails]
    parts[1, where[plain]] = clocks[plain]
    whole = (parts[0, where] != NONE) & (parts[1, where] != NONE)
    read[where] = whole
    if rest := np.flatnonzero(~whole).tolist():
        _each([cells[i] for i in rest], order, where[rest], parts, read)


def _plain_clocks(texts: Sequence[str]) -> tuple[Counts, Where]:
    """Times written ``08:00`` or ``08:00:00`` throughout, in microseconds, and which of them are such."""
    lengths = set(map(len, texts))
    if len(lengths) != 1 or not lengths <= {5, 8}:
        return np.zeros(len(texts), dtype=np.int64), np.zeros(len(texts), dtype=bool)
    length = lengths.pop()
    marks = np.array(texts, dtype=f"U{length}").view(np.uint32).reshape(len(texts), length).astype(np.int64) - ord("0")
    plain = np.all(marks[:, 2::3] == ord(":") - ord("0"), axis=1)
    seconds = np.zeros(len(texts), dtype=np.int64)
    for at, most in ((0, 23), (3, 59), (6, 59)):
        if at < length:
            tens, ones = marks[:, at], marks[:, at + 1]
            number = 10 * tens + ones
            plain &= (tens >= 0) & (tens <= 9) & (ones >= 0) & (ones <= 9) & (number <= most)
            seconds = 60 * seconds + number
        else:
            seconds = 60 * seconds
    return seconds * 1_000_000, plain


def _half(stamp: Stamp | None, *, clock: bool) -> tuple[int, int, int]:
    """A stamp that is a time alone, or a date alone; nothing where it is more, or less."""
    day, time, offset = _parts(stamp)
    right = day == NONE if clock else time == NONE
    return (day, time, offset) if right else (NONE, NONE, NONE)


def _serials(numbers: Where, order: str, where: Counts, parts: Counts, read: Where) -> None:
    """Numbers of days: a time alone up to one, else days since the epoch of the order."""
    time = (numbers >= 0.0) & (numbers <= 1.0)
    epoch = EPOCHS.get(order)
    dated = (numbers >= SERIALS[0]) & (numbers <= SERIALS[1]) & (epoch is not None)
    exact = np.rint(np.where(time | dated, numbers, 0.0) * 86_400_000).astype(np.int64) * 1000
    if epoch is not None:
        moments = (np.datetime64(epoch, "us") + exact[dated].astype("timedelta64[us]")).astype(STAMPS)
        _dates(moments, where[dated], parts, read)
    parts[1, where[time]] = exact[time]
    read[where[time]] = True


def _dates(moments: Moments, where: Counts, parts: Counts, read: Where) -> None:
    """Moments to the millisecond: what is finer is the spreadsheet's rounding."""
    exact = (moments.astype(np.int64) + 500) // 1000 * 1000
    parts[0, where], parts[1, where] = exact // _DAY_LENGTH, exact % _DAY_LENGTH
    read[where] = True


def moments_of(columns: Sequence[Stamps], day: date | None, style: TimeStyle) -> tuple[Counts, Where]:
    """The moment of each row from its one or two stamps, in microseconds since 1970, and where there is one."""
    size = len(columns[0].day)
    on = np.full(size, NONE if day is None else (day - _FIRST).days, dtype=np.int64)
    clock, offset = np.full(size, NONE, dtype=np.int64), np.full(size, NONE, dtype=np.int64)
    for stamps in reversed(columns):
        dated = (stamps.day != NONE) & (stamps.day >= _NO_DAY_UNTIL)
        on[dated] = stamps.day[dated]
    for stamps in columns:
        timed = stamps.clock != NONE
        clock[timed], offset[timed] = stamps.clock[timed], stamps.offset[timed]
    found = (on != NONE) & (clock != NONE) & np.logical_and.reduce([stamps.read for stamps in columns])
    moments = np.where(found, on, 0) * _DAY_LENGTH + np.where(found, clock, 0)
    if style.zone and style.written:
        ahead = zone_of(style.written).utcoffset(None)
        offset[offset == NONE] = (ahead or timedelta(0)) // _MICROSECOND
    if style.zone and (written := found & (offset != NONE)).any():
        moments[written] = _in_zone(moments[written] - offset[written], style.zone)
    return moments, found


def _in_zone(moments: Counts, name: str) -> Counts:
    """Moments of UTC by the clock of a zone."""
    zone = zone_of(name)
    quarters, where = np.unique(moments // _QUARTER, return_inverse=True)
    offsets = []
    for quarter in quarters.tolist():
        there = (datetime(1970, 1, 1, tzinfo=UTC) + quarter * _QUARTER * _MICROSECOND).astimezone(zone).utcoffset()
        offsets.append((there or timedelta(0)) // _MICROSECOND)
    found: Counts = moments + np.array(offsets, dtype=np.int64)[where]
    return found
