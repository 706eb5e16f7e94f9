"""Readings to run means: the window of a run, what is left out and why, coverage minute by minute."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import datetime, timedelta
from itertools import pairwise
from statistics import median

from reporter.basis import AS_MEASURED, Basis, Moisture
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import count
from reporter.ledger import Entry, FromCells
from reporter.methods.method_7e import run_mean
from reporter.outcome import Exclusion, Series
from reporter.problems import Place
from reporter.record import Event, MoistureBasis, Reading, ReadingKind, Readings, Run, text_of
from reporter.reduction.book import Book, Lane

_MINUTE = timedelta(minutes=1)
#: Share a value below detection is counted at, by the policy entered in the Test sheet.
POLICIES = {"zero": 0.0, "half": 0.5, "full": 1.0}


@equation(
    "n", "1", {"readings": "*c"}, Citation("m7e", "12.6"), symbols={"readings": "C_i"}, series=("readings",)
)
def reading_count(*, readings: Value) -> Value:
    """Number of valid readings of a run.

    Parameters
    ----------
    readings
        Valid readings of the run [ppm or %], a series.

    Returns
    -------
    float
        Count [1].
    """
    return count(readings)


@equation(
    "coverage",
    "%",
    {"number": "1", "interval": "min", "duration": "min"},
    Citation("m7e", "8.5"),
    symbols={"number": "n", "interval": "Δt", "duration": "t_run"},
)
def coverage(
    *, number: Value, interval: Value, duration: Value, hundred: Value = constant(100.0, "%")
) -> Value:
    """Share of a run's length that its valid readings cover.

    Parameters
    ----------
    number
        Number of valid readings [1].
    interval
        Logging interval [min].
    duration
        Length of the run [min], not zero.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Coverage [%].
    """
    return hundred * number * interval / duration


def channel_basis(lane: Lane) -> Basis:
    """The basis of a channel's readings."""
    wet = lane.channel.moisture_basis.value is MoistureBasis.WET
    return Basis(moisture=Moisture.WET if wet else Moisture.DRY, oxygen=AS_MEASURED)


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
        book.say(
            "Whether a time stamp names the start or the end of its interval was not entered; the end is taken."
        )
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
            until = event.until.value if event.until is not None else event.time.value + interval
            if begin < until and end > event.time.value:
                reason = text_of(event.reason) or event.what.value
                tally[id(event)] += 1
                break
        rows.append((index, begin, end, reason))
    exclusions = tuple(
        Exclusion(
            run=run.key,
            start=event.time.value,
            end=event.until.value if event.until is not None else event.time.value + interval,
            reason=text_of(event.reason) or event.what.value,
            count=tally[id(event)],
        )
        for event in excluding
        if tally[id(event)]
    )
    return Window(run, tuple(rows), exclusions, interval)


def _excludes(event: Event, run: Run) -> bool:
    if event.readings_excluded is None or not event.readings_excluded.value:
        return False
    until = event.until.value if event.until is not None else event.time.value
    inside = event.time.value < run.end.value and until >= run.start.value
    return inside and (event.run is None or event.run.value == run.run.value)


def reduce_readings(book: Book, lane: Lane, span: Window) -> Series | None:
    """Enter the readings of a channel in a run and its mean; None where no mean can be made.

    A reading over range makes the mean a lower bound, which is entered as such and never corrected; a
    reading below detection needs an entered policy, else the mean at zero, half and full value is shown.
    """
    readings = book.record.readings
    column = readings.index(lane.name)
    used: list[tuple[datetime, float]] = []
    left: list[tuple[datetime, Reading, str]] = []
    below: list[tuple[int, float]] = []
    over: list[float | None] = []
    for index, _begin, _end, reason in span.rows:
        row = readings.rows[index]
        reading = row.readings[column]
        if reason:
            left.append((row.time, reading, reason))
        elif reading.kind is ReadingKind.NUMBER and reading.value is not None:
            used.append((row.time, reading.value))
        elif reading.kind in {ReadingKind.NOT_DETECTED, ReadingKind.BELOW}:
            bound = reading.value if reading.value is not None else _detection_limit(lane)
            below.append((len(used), bound))
            used.append((row.time, bound))
        else:
            if reading.kind is ReadingKind.OVER:
                over.append(reading.value)
            left.append((row.time, reading, reading.kind.value))
    rows = [readings.rows[index].row for index, *_ in span.rows]
    series = Series(
        key=lane.key(span.run, "readings"),
        channel=lane.name,
        used=tuple(used),
        left_out=tuple(left),
        missing_minutes=_missing_minutes(span, {time for time, _ in used}, readings),
        interval=span.interval,
        first_row=min(rows, default=0),
        last_row=max(rows, default=0),
    )
    if not used:
        return series
    return _with_mean(book, lane, span, series, below, over)


def _detection_limit(lane: Lane) -> float:
    limit = lane.channel.detection_limit
    return 0.0 if limit is None else limit.value


def _place(book: Book, lane: Lane, series: Series) -> Place:
    readings = book.record.readings
    letter = readings.columns[readings.index(lane.name)]
    cells = f"{letter}{series.first_row}:{letter}{series.last_row}"
    return Place(book.record.source.name, readings.place.sheet or "Readings", cells, lane.name)


def _with_mean(
    book: Book,
    lane: Lane,
    span: Window,
    series: Series,
    below: Sequence[tuple[int, float]],
    over: Sequence[float | None],
) -> Series:
    run, place = span.run, _place(book, lane, series)
    values = [value for _, value in series.used]
    policy = text_of(book.record.test.not_detected_counted_as)
    if below and policy:
        values = _counted(values, below, POLICIES[policy])
        series = replace(series, used=tuple(zip((t for t, _ in series.used), values, strict=True)))
        book.say(f"Readings below detection are counted at {policy} value, as entered.")
    entry = _enter(book, lane, series.key, values, place)
    _counts(book, lane, span, entry)
    if over:
        key = lane.key(run, "mean.lower_bound")
        known = [bound if bound is not None else max(values) for bound in over]
        whole = _enter(book, lane, lane.key(run, "readings.with_over_range"), values + known, place)
        book.apply(run_mean, key, {"readings": whole})
        words = f"{len(over)} reading(s) over range; the mean is a lower bound"
        book.trouble("over-range-in-run", place, words, concerns=(lane.key(run, "mean"),))
        return series
    if below and not policy:
        for name, share in POLICIES.items():
            some = _enter(
                book, lane, lane.key(run, f"readings.counted_{name}"), _counted(values, below, share), place
            )
            book.apply(run_mean, lane.key(run, f"mean.counted_{name}"), {"readings": some})
        words = f"{len(below)} reading(s) below detection and no policy entered"
        book.trouble("undecided-not-detected", place, words, concerns=(lane.key(run, "mean"),))
        return series
    book.apply(run_mean, lane.key(run, "mean"), {"readings": entry})
    if lane.gas.key == "o2" and max(values) > 21.0:
        book.trouble("oxygen-reading-implausible", place, f"{max(values):g} % oxygen in run {run.run.value}")
    return series


def _counted(values: Sequence[float], below: Sequence[tuple[int, float]], share: float) -> list[float]:
    counted = list(values)
    for position, bound in below:
        counted[position] = share * bound
    return counted


def _enter(book: Book, lane: Lane, key: str, values: Sequence[float], place: Place) -> Entry:
    return book.ledger.enter(
        key, values, lane.unit, FromCells(place, f"{len(values)} readings"), basis=channel_basis(lane)
    )


def _counts(book: Book, lane: Lane, span: Window, entry: Entry) -> None:
    run = span.run
    number = book.apply(reading_count, lane.key(run, "count"), {"readings": entry})
    length = book.given_duration(run)
    step = book.state("readings.interval", span.interval.total_seconds() / 60.0, "min", "logging interval")
    book.apply(coverage, lane.key(run, "coverage"), {"number": number, "interval": step, "duration": length})


def _missing_minutes(span: Window, used: set[datetime], readings: Readings) -> tuple[datetime, ...]:
    """Each clock minute of the run that no valid reading covers, excluded periods counted too."""
    covered: set[datetime] = set()
    for index, begin, end, _reason in span.rows:
        if readings.rows[index].time in used:
            minute = begin.replace(second=0, microsecond=0)
            while minute < end:
                covered.add(minute)
                minute += _MINUTE
    missing: list[datetime] = []
    minute = span.run.start.value.replace(second=0, microsecond=0)
    while minute < span.run.end.value:
        if minute not in covered:
            missing.append(minute)
        minute += _MINUTE
    return tuple(missing)
