"""How much of a run its valid readings cover: their number, their share of it, the minutes with a valid reading."""

from __future__ import annotations

from reporter.equation import Citation, Value, constant, equation
from reporter.functions import count
from reporter.ledger import Entry, FromCells
from reporter.methods.criteria import at_or_above
from reporter.outcome import Check, Series
from reporter.record import Limit, Run
from reporter.reduction.book import Book, Lane
from reporter.reduction.places import cells_of
from reporter.reduction.window import Window

_EACH_MINUTE = Citation("m7e", "8.4", "at least one valid reading a minute")
#: A minimum run length is the limit's own, as its record has it.
_OF_THE_LIMIT = Citation("record", "", "minimum run length of the limit")


@equation("n", "1", {"readings": "*c"}, Citation("m7e", "12.6"), symbols={"readings": "C_i"}, series=("readings",))
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
    _EACH_MINUTE,
    symbols={"number": "n", "interval": "Δt", "duration": "t_run"},
)
def coverage(*, number: Value, interval: Value, duration: Value, hundred: Value = constant(100.0, "%")) -> Value:
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


@equation(
    "t_gap",
    "min",
    {"whole": "min", "number": "1", "interval": "min"},
    _EACH_MINUTE,
    symbols={"whole": "t_clock", "number": "n", "interval": "Δt"},
    difference=True,
)
def unfilled_minutes(*, whole: Value, number: Value, interval: Value) -> Value:
    """Clock minutes of a run without a valid reading, where each reading fills one clock minute of its own.

    Parameters
    ----------
    whole
        Clock minutes of the run [min].
    number
        Number of valid readings [1].
    interval
        Logging interval [min].

    Returns
    -------
    float
        Minutes without a valid reading [min].
    """
    return whole - number * interval


@equation(
    "t_valid",
    "min",
    {"duration": "min", "missing": "min"},
    _EACH_MINUTE,
    symbols={"duration": "t_run", "missing": "t_gap"},
    difference=True,
)
def valid_minutes(*, duration: Value, missing: Value) -> Value:
    """Length of a run without the clock minutes that have no valid reading.

    Parameters
    ----------
    duration
        Length of the run [min].
    missing
        Clock minutes without a valid reading [min], at most the length.

    Returns
    -------
    float
        Minutes with a valid reading [min].
    """
    return duration - missing


def enter_coverage(book: Book, lane: Lane, span: Window, entry: Entry, series: Series) -> None:
    """Enter number, share and minutes of the valid readings of a channel in a run."""
    run = span.run
    number = book.apply(reading_count, lane.key(run, "count"), {"readings": entry})
    length = book.given_duration(run)
    step = book.state("readings.interval", span.interval.total_seconds() / 60.0, "min", "logging interval")
    book.apply(coverage, lane.key(run, "coverage"), {"number": number, "interval": step, "duration": length})
    missing = _missing(book, lane, span, series, number, step)
    book.apply(valid_minutes, lane.key(run, "valid_minutes"), {"duration": length, "missing": missing})


def _missing(book: Book, lane: Lane, span: Window, series: Series, number: Entry, step: Entry) -> Entry:
    """The minutes without a valid reading: of the number of readings where each fills a minute of its own, so that a
    reading taken out of the results workbook shows; else as they were counted."""
    key, length = lane.key(span.run, "missing_minutes"), book.given_duration(span.run)
    gaps, whole = len(series.missing_minutes), float(series.minutes)
    if step.value == 1.0 and whole == length.value and gaps == whole - number.value:
        every = book.state(f"run.{span.run.key}.clock_minutes", whole, "min", "clock minutes of the run")
        return book.apply(unfilled_minutes, key, {"whole": every, "number": number, "interval": step})
    origin = FromCells(cells_of(book, lane.name, span.at), f"{gaps} of {series.minutes} clock minutes")
    return book.ledger.enter(key, min(float(gaps), length.value), "min", origin)


def long_enough(book: Book, run: Run, lane: Lane | None, limit: Limit) -> Entry:
    """Whether a run is as long as a limit asks: its minutes with a valid reading of a channel, or its length alone."""
    assert limit.minimum_run_length is not None
    bound = book.given(f"limit.{limit.key}.minimum_run_length", limit.minimum_run_length, "min")
    valid = None if lane is None else book.ledger.get(lane.key(run, "valid_minutes"))
    if lane is None or valid is None:
        key = f"run.{run.key}.long_enough.limit_{limit.key}"
        return book.apply(at_or_above, key, {"value": book.given_duration(run), "bound": bound})
    met = book.apply(at_or_above, lane.key(run, f"long_enough.limit_{limit.key}"), {"value": valid, "bound": bound})
    _note(book, run, lane, valid, bound, met)
    return met


def _note(book: Book, run: Run, lane: Lane, valid: Entry, bound: Entry, met: Entry) -> None:
    """List the criterion, once for limits that ask for the same length."""
    alike = (check for check in book.checks if check.value == valid.key)
    if any(book.ledger[check.bound].value == bound.value for check in alike):
        return
    book.checks.append(
        Check(
            key=met.key,
            title=f"Minutes with a valid reading, run {run.run.value}",
            gas=lane.gas.label,
            runs=(run.key,),
            value=valid.key,
            bound=bound.key,
            citation=_OF_THE_LIMIT,
            met=met.value == 1.0,
            consequence="" if met.value == 1.0 else "the run does not count for a limit that asks for this length",
            relation="at least",
        )
    )
