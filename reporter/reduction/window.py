"""The window of a run: its rows with the interval each covers, what events exclude, minutes without a reading."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime, timedelta

import numpy as np

from reporter.logged import Counts, Moments, Where
from reporter.outcome import Exclusion
from reporter.record import Event, Run, text_of
from reporter.reduction.book import Book

_MINUTE, _MICROSECOND = timedelta(minutes=1), timedelta(microseconds=1)


def logging_interval(book: Book) -> timedelta:
    """The logging interval: as entered, else the median step of the time stamps (then said)."""
    entered = book.record.test.logging_interval
    if entered is not None:
        unit = entered.unit.unit if entered.unit is not None else "min"
        return timedelta(seconds=entered.value * {"s": 1.0, "min": 60.0, "h": 3600.0}[unit])
    steps = np.diff(book.record.readings.times).astype(np.int64) / 1e6
    step = float(np.median(steps)) if len(steps) else 60.0
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
    """The readings of one run.

    `at` are their positions in the series, `times` their stamps, `begin` where the interval of each begins,
    `excluded` the position in `reasons` of why it is left out (0, the empty reason, where it is not).
    """

    run: Run
    at: Counts
    times: tuple[datetime, ...]
    begin: Moments
    excluded: Counts
    reasons: tuple[str, ...]
    exclusions: tuple[Exclusion, ...]
    interval: timedelta


def window(book: Book, run: Run) -> Window:
    """The rows of the readings that lie in a run, with the events that exclude some of them."""
    interval = logging_interval(book)
    times, length = book.record.readings.times, np.timedelta64(interval, "us")
    begin = times if stamps_interval_start(book) else times - length
    at = np.flatnonzero((begin >= _stamp(run.start.value)) & (begin + length <= _stamp(run.end.value)))
    begin = begin[at]
    excluding = [event for event in book.record.events if _excludes(event, run)]
    excluded = np.zeros(len(at), dtype=np.int64)
    for number, event in enumerate(excluding, start=1):
        inside = (begin < _stamp(_until(event, interval))) & (begin + length > _stamp(event.time.value))
        excluded[inside & (excluded == 0)] = number
    tally = {id(event): int(np.count_nonzero(excluded == n)) for n, event in enumerate(excluding, start=1)}
    reasons = ("", *(text_of(event.reason) or event.what.value for event in excluding))
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
    return Window(run, at, tuple(times[at].tolist()), begin, excluded, reasons, exclusions, interval)


def _until(event: Event, interval: timedelta) -> datetime:
    """When an event ended; one logging interval after it began where no end was entered."""
    return event.until.value if event.until is not None else event.time.value + interval


def _excludes(event: Event, run: Run) -> bool:
    if event.readings_excluded is None or not event.readings_excluded.value:
        return False
    until = event.until.value if event.until is not None else event.time.value
    inside = event.time.value < run.end.value and until >= run.start.value
    return inside and (event.run is None or event.run.value == run.run.value)


def missing_minutes(span: Window, valid: Counts) -> tuple[datetime, ...]:
    """Each clock minute of the run without a valid reading, excluded periods counted too.

    A reading of up to a minute belongs to the minute its middle lies in, a longer one to every minute whose
    middle it covers; the first and the last minute of the run are content with any reading that touches them, for
    where the stamps stand beside the minute the reading across an end is not the run's.  `valid` are the positions
    of the valid readings in the window.
    """
    start, stop = span.run.start.value, span.run.end.value
    origin = start.replace(second=0, microsecond=0)
    count = clock_minutes(span)
    begin = (span.begin[valid] - _stamp(origin)).astype(np.int64)
    end = begin + span.interval // _MICROSECOND
    minute = _MINUTE // _MICROSECOND
    if span.interval <= _MINUTE:
        middle = (begin + (span.interval / 2) // _MICROSECOND) // minute
        owned = _covered(middle, middle + 1, count)
    else:
        owned = _covered(-((minute // 2 - begin) // minute), -((minute // 2 - end) // minute), count)
    touched = _covered(begin // minute, -(-end // minute), count)
    found = []
    for number in range(count):
        at = origin + number * _MINUTE
        inner = start < at and at + _MINUTE < stop
        if not (owned if inner else touched)[number]:
            found.append(at)
    return tuple(found)


def clock_minutes(span: Window) -> int:
    """How many clock minutes a run touches."""
    origin = span.run.start.value.replace(second=0, microsecond=0)
    return -((origin - span.run.end.value) // _MINUTE)


def _covered(first: Counts, last: Counts, count: int) -> Where:
    """Which of a number of minutes lie in any of some spans of minutes, ends not included."""
    begin, end = (np.bincount(np.clip(edge, 0, count), minlength=count + 1) for edge in (first, last))
    edges = begin - end
    return np.cumsum(edges)[:count] > 0


def _stamp(moment: datetime) -> np.datetime64:
    return np.datetime64(moment, "us")
