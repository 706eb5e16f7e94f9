"""Readings to run means: what of a run's window counts, words as what they are, the mean, its coverage."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime

from reporter.basis import AS_MEASURED, NO_VOLUME, Basis, Moisture
from reporter.conversions import converted
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import count
from reporter.ledger import Entry, FromCells
from reporter.methods.method_7e import run_mean
from reporter.outcome import Series
from reporter.problems import Place
from reporter.record import MoistureBasis, Reading, ReadingKind, text_of
from reporter.reduction.book import Book, Lane
from reporter.reduction.channel_units import channel_standard, is_mass
from reporter.reduction.window import Window, missing_minutes
from reporter.units import dimension

#: Share a value below detection is counted at, by the policy entered in the Test sheet.
POLICIES = {"zero": 0.0, "half": 0.5, "full": 1.0}
#: Oxygen [%] that no gas with air as its only source of oxygen exceeds, with the last digit of an analyzer.
_AIR_AT_MOST = 21.0


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
    Citation("m7e", "", "one valid reading a minute"),
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


def channel_basis(book: Book, lane: Lane) -> Basis:
    """The basis of a channel's readings; a mass concentration carries its conditions too."""
    wet = lane.channel.moisture_basis.value is MoistureBasis.WET
    return Basis(
        moisture=Moisture.WET if wet else Moisture.DRY,
        oxygen=AS_MEASURED,
        standard=channel_standard(book, lane) if is_mass(lane.unit) else NO_VOLUME,
        expressed_as=lane.gas.expressed_as if is_mass(lane.unit) else "",
    )


@dataclass
class _Sorted:
    """The readings of a window by what they are.

    `below` holds position and bound of each reading below detection (None: no bound is known), `over` the bound
    of each reading over range (None: none was logged).
    """

    used: list[tuple[datetime, float]] = field(default_factory=list)
    left: list[tuple[datetime, Reading, str]] = field(default_factory=list)
    below: list[tuple[int, float | None]] = field(default_factory=list)
    over: list[float | None] = field(default_factory=list)


def reduce_readings(book: Book, lane: Lane, span: Window) -> Series:
    """Enter the readings of a channel in a run and its mean; no mean where none can be made.

    A reading over range makes the mean a lower bound, which is entered as such and never corrected; a
    reading below detection needs an entered policy, else the mean at zero, half and full value is shown.
    """
    found = _sort(book, lane, span)
    readings = book.record.readings
    rows = [readings.rows[index].row for index, *_ in span.rows]
    series = Series(
        key=lane.key(span.run, "readings"),
        channel=lane.name,
        used=tuple(found.used),
        left_out=tuple(found.left),
        missing_minutes=missing_minutes(span, {time for time, _ in found.used}, readings),
        interval=span.interval,
        first_row=min(rows, default=0),
        last_row=max(rows, default=0),
    )
    place = _place(book, lane, series)
    _implausible(book, lane, span, place, found)
    if found.used:
        return _with_mean(book, lane, span, series, found)
    if found.over:
        words = f"run {span.run.run.value}: all readings are over range"
        where = _over_place(book, lane, found)
        book.trouble("over-range-in-run", where, words, concerns=(lane.key(span.run, "mean"),))
    return series


def _sort(book: Book, lane: Lane, span: Window) -> _Sorted:
    readings = book.record.readings
    column = readings.index(lane.name)
    found = _Sorted()
    for index, _begin, _end, reason in span.rows:
        row = readings.rows[index]
        reading = row.readings[column]
        if reason:
            found.left.append((row.time, reading, reason))
        elif reading.kind is ReadingKind.NUMBER and reading.value is not None:
            found.used.append((row.time, reading.value))
        elif reading.kind in {ReadingKind.NOT_DETECTED, ReadingKind.BELOW}:
            bound = reading.value if reading.value is not None else _detection_limit(lane)
            found.below.append((len(found.used), bound))
            found.used.append((row.time, bound or 0.0))
        else:
            if reading.kind is ReadingKind.OVER:
                found.over.append(reading.value)
            found.left.append((row.time, reading, reading.kind.value))
    return found


def _detection_limit(lane: Lane) -> float | None:
    limit = lane.channel.detection_limit
    return None if limit is None else limit.value


def _place(book: Book, lane: Lane, series: Series) -> Place:
    readings = book.record.readings
    letter = readings.columns[readings.index(lane.name)]
    used = {time for time, _ in series.used}
    numbers = [row.row for row in readings.rows if row.time in used]
    whole = readings_place(book)
    return Place(whole.file, whole.sheet, cell_ranges(letter, numbers, whole.file), lane.name)


def _over_place(book: Book, lane: Lane, found: _Sorted) -> Place:
    """The cells of the readings over range."""
    readings = book.record.readings
    times = {time for time, reading, _ in found.left if reading.kind is ReadingKind.OVER}
    rows = [row.row for row in readings.rows if row.time in times]
    whole = readings_place(book)
    cells = cell_ranges(readings.columns[readings.index(lane.name)], rows, whole.file)
    return Place(whole.file, whole.sheet, cells, lane.name)


def readings_place(book: Book) -> Place:
    """The file and sheet the readings came from: the field workbook's, or a logger's file of the folder."""
    place = book.record.readings.place
    if place.file and place.file != book.record.source.name:
        return Place(place.file, place.sheet)
    return Place(book.record.source.name, place.sheet or "Readings")


def cell_ranges(letter: str, rows: Sequence[int], file: str) -> str:
    """The cells of some rows of a column as ranges, e.g. ``B149:B175;B179:B211``; JSON pointers in a JSON record."""
    parts: list[tuple[int, int]] = []
    for row in rows:
        if parts and row == parts[-1][1] + 1:
            parts[-1] = (parts[-1][0], row)
        else:
            parts.append((row, row))
    if file.lower().endswith(".json"):
        return ";".join(f"/{first}/{letter} to /{last}/{letter}" for first, last in parts)
    ranges = (f"{letter}{a}" if a == b else f"{letter}{a}:{letter}{b}" for a, b in parts)
    return ";".join(ranges) or letter


def _implausible(book: Book, lane: Lane, span: Window, place: Place, found: _Sorted) -> None:
    """Oxygen above that of air, whatever the unit of the channel."""
    if lane.gas.key != "o2" or not found.used or dimension(lane.unit) != "fraction":
        return
    highest = converted(max(value for _, value in found.used), lane.unit, "%")
    if highest > _AIR_AT_MOST:
        book.trouble("oxygen-reading-implausible", place, f"{highest:g} % oxygen in run {span.run.run.value}")


def _with_mean(book: Book, lane: Lane, span: Window, series: Series, found: _Sorted) -> Series:
    run, place = span.run, _place(book, lane, series)
    values = [value for _, value in series.used]
    undecided = _undecided(book, found)
    if found.below and not undecided:
        policy = text_of(book.record.test.not_detected_counted_as)
        values = _counted(values, found.below, POLICIES[policy])
        series = replace(series, used=tuple(zip((t for t, _ in series.used), values, strict=True)))
        book.say(f"Readings below detection are counted at {policy} value, as entered.")
    entry = _enter(book, lane, series.key, values, place)
    _counts(book, lane, span, entry)
    if undecided:
        _show_policies(book, lane, span, values, found)
        words = f"run {run.run.value}: {len(found.below)} reading(s) below detection and {undecided}"
        book.trouble("undecided-not-detected", place, words, concerns=(lane.key(run, "mean"),))
    if found.over:
        _lower_bound(book, lane, span, _counted(values, found.below, 0.0) if undecided else values, found.over)
        words = f"run {run.run.value}: {len(found.over)} reading(s) over range; the mean is a lower bound"
        where = _over_place(book, lane, found)
        book.trouble("over-range-in-run", where, words, concerns=(lane.key(run, "mean"),))
    elif not undecided:
        book.apply(run_mean, lane.key(run, "mean"), {"readings": entry})
    return series


def _undecided(book: Book, found: _Sorted) -> str:
    """Why readings below detection cannot be counted; empty where there are none, or they can."""
    policy = text_of(book.record.test.not_detected_counted_as)
    if found.below and not policy:
        return "no policy entered"
    if policy in ("half", "full") and any(bound is None for _, bound in found.below):
        return "no detection limit entered"
    return ""


def _show_policies(book: Book, lane: Lane, span: Window, values: Sequence[float], found: _Sorted) -> None:
    """The mean with readings below detection at zero, half and full value, as far as their bounds are known."""
    place = replace(readings_place(book), field=lane.name)
    known = all(bound is not None for _, bound in found.below)
    for name, share in POLICIES.items():
        if share == 0.0 or known:
            key = lane.key(span.run, f"readings.counted_{name}")
            some = _enter(book, lane, key, _counted(values, found.below, share), place)
            book.apply(run_mean, lane.key(span.run, f"mean.counted_{name}"), {"readings": some})


def _lower_bound(book: Book, lane: Lane, span: Window, values: Sequence[float], over: Sequence[float | None]) -> None:
    """The mean with each reading over range at its bound, or at the highest reading where none was logged."""
    place = replace(readings_place(book), field=lane.name)
    known = [bound if bound is not None else max(values) for bound in over]
    whole = _enter(book, lane, lane.key(span.run, "readings.with_over_range"), [*values, *known], place)
    book.apply(run_mean, lane.key(span.run, "mean.lower_bound"), {"readings": whole})


def _counted(values: Sequence[float], below: Sequence[tuple[int, float | None]], share: float) -> list[float]:
    counted = list(values)
    for position, bound in below:
        counted[position] = share * (bound or 0.0)
    return counted


def _enter(book: Book, lane: Lane, key: str, values: Sequence[float], place: Place) -> Entry:
    return book.ledger.enter(
        key, values, lane.unit, FromCells(place, f"{len(values)} readings"), basis=channel_basis(book, lane)
    )


def _counts(book: Book, lane: Lane, span: Window, entry: Entry) -> None:
    run = span.run
    number = book.apply(reading_count, lane.key(run, "count"), {"readings": entry})
    length = book.given_duration(run)
    step = book.state("readings.interval", span.interval.total_seconds() / 60.0, "min", "logging interval")
    book.apply(coverage, lane.key(run, "coverage"), {"number": number, "interval": step, "duration": length})
