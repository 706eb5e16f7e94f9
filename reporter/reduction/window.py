"""The window of a run: its rows with the interval each covers, what events exclude, minutes without a reading."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime, timedelta
from itertools import pairwise
from statistics import median

from reporter.outcome import Exclusion
from reporter.record import Event, Readings, Run, text_of
from reporter.reduction.book import Book

_MINUTE = timedelta(minutes=1)


def logging_interval(book: Book) -> timedelta:
    """The logging interval: as entered, else the median step of the time stamps (then said)."""
    entered = book.record.test.logging_interval
    if entered is not None:
        unit = entered.unit.unit if entered.unit is not None else "min"
        return timedelta(seconds=entered.value * {"s": 1.0, "min": 60.0, "h": 3600.0}[unit])
    rows = book.record.readings.rows
    steps = [(b.time - a.time).total_seconds() for a, b in pairwise(rows)]
    step = median(steps) if steps else 60.0
    book.say(f"The logging interval was not entered; {step:g} s is the median step of the time stamps.")
    return timedelta(seconds=step)


def stamps_interval_start(book: Book) -> bool:
    """Whether a time stamp names the start of its interval; the end where it was not entered (then said)."""
    entered = book.record.test.reading_stamp
    if entered is None:
        book.say("Whether a time stamp names the start or the end of its interval was not entered; the end is taken.")
    return text_of(entered).endswith("start")


@dataclass(frozen=True, slots=True)
class Window:
    """The rows of one run, each with the interval it covers and the reason it is excluded ('' if it is not)."""

    run: Run
    rows: tuple[tuple[int, datetime, datetime, str], ...]
    exclusions: tuple[Exclusion, ...]
    interval: timedelta


def window(book: Book, run: Run) -> Window:
    """The rows of the readings that lie in a run, with the events that exclude some of them."""
    interval = logging_interval(book)
    at_start = stamps_interval_start(book)
    excluding = [event for event in book.record.events if _excludes(event, run)]
    tally = {id(event): 0 for event in excluding}
    rows: list[tuple[int, datetime, datetime, str]] = []
    for index, row in enumerate(book.record.readings.rows):
        begin = row.time if at_start else row.time - interval
        end = begin + interval
        if begin < run.start.value or end > run.end.value:
            continue
        reason = ""
        for event in excluding:
            if begin < _until(event, interval) and end > event.time.value:
                reason = text_of(event.reason) or event.what.value
                tally[id(event)] += 1
                break
        rows.append((index, begin, end, reason))
    exclusions = tuple(
        Exclusion(
            run=run.key,
            start=event.time.value,
            end=_until(event, interval),
            reason=text_of(event.reason) or event.what.value,
            count=tally[id(event)],
        )
        for event in excluding
        if tally[id(event)]
    )
    for event in excluding:
        if event.until is None and tally[id(event)]:
            moment = f"{event.time.value:%H:%M}"
            book.say(f"The event at {moment} ({event.what.value}) has no end; one logging interval is left out.")
    return Window(run, tuple(rows), exclusions, interval)


def _until(event: Event, interval: timedelta) -> datetime:
    """When an event ended; one logging interval after it began where no end was entered."""
    return event.until.value if event.until is not None else event.time.value + interval


def _excludes(event: Event, run: Run) -> bool:
    if event.readings_excluded is None or not event.readings_excluded.value:
        return False
    until = event.until.value if event.until is not None else event.time.value
    inside = event.time.value < run.end.value and until >= run.start.value
    return inside and (event.run is None or event.run.value == run.run.value)


def missing_minutes(span: Window, used: set[datetime], readings: Readings) -> tuple[datetime, ...]:
    """Each clock minute of the run without a valid reading, excluded periods counted too.

    A reading of up to a minute belongs to the minute its middle lies in, a longer one to every minute whose
    middle it covers; a minute only partly in the run is content with any reading that touches it.
    """
    start, stop = span.run.start.value, span.run.end.value
    valid = [(begin, end) for index, begin, end, _ in span.rows if readings.rows[index].time in used]
    owned = {minute for begin, end in valid for minute in _minutes_of(begin, end)}
    touched = {minute for begin, end in valid for minute in _minutes(begin, end)}
    return tuple(
        minute
        for minute in _minutes(start, stop)
        if minute not in (owned if start <= minute and minute + _MINUTE <= stop else touched)
    )


def _minutes(begin: datetime, end: datetime) -> Iterator[datetime]:
    minute = begin.replace(second=0, microsecond=0)
    while minute < end:
        yield minute
        minute += _MINUTE


def _minutes_of(begin: datetime, end: datetime) -> Iterator[datetime]:
    if end - begin <= _MINUTE:
        yield (begin + (end - begin) / 2).replace(second=0, microsecond=0)
        return
    yield from (minute for minute in _minutes(begin, end) if begin <= minute + _MINUTE / 2 < end)
