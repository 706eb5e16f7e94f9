"""Readings to run means: what of a run's window counts, words as what they are, the mean, its coverage."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime

import numpy as np

from reporter.basis import AS_MEASURED, NO_VOLUME, Basis, Moisture
from reporter.conversions import converted
from reporter.ledger import Entry, FromCells
from reporter.logged import KINDS, Counts, Timed, is_kind
from reporter.methods.method_7e import run_mean
from reporter.outcome import Series
from reporter.problems import Place
from reporter.record import MoistureBasis, Reading, ReadingKind, text_of
from reporter.reduction.book import Book, Lane
from reporter.reduction.channel_units import channel_standard, is_mass
from reporter.reduction.coverage import enter_coverage
from reporter.reduction.places import cells_of, readings_place
from reporter.reduction.window import Window, clock_minutes, missing_minutes
from reporter.units import dimension

#: Share a value below detection is counted at, by the policy entered in the Test sheet.
POLICIES = {"zero": 0.0, "half": 0.5, "full": 1.0}
#: Oxygen [%] that no gas with air as its only source of oxygen exceeds, with the last digit of an analyzer.
_AIR_AT_MOST = 21.0


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
    of each reading over range (None: none was logged); `valid` are positions in the window,
    `used_at` and `over_at` positions in the series.
    """

    used: Timed = field(default_factory=Timed)
    left: list[tuple[datetime, Reading, str]] = field(default_factory=list)
    below: list[tuple[int, float | None]] = field(default_factory=list)
    over: list[float | None] = field(default_factory=list)
    valid: Counts = field(default_factory=lambda: np.zeros(0, dtype=np.int64))
    used_at: Counts = field(default_factory=lambda: np.zeros(0, dtype=np.int64))
    over_at: Counts = field(default_factory=lambda: np.zeros(0, dtype=np.int64))


def reduce_readings(book: Book, lane: Lane, span: Window) -> Series:
    """Enter the readings of a channel in a run and its mean; no mean where none can be made.

    A reading over range makes the mean a lower bound, which is entered as such and never corrected; a
    reading below detection needs an entered policy, else the mean at zero, half and full value is shown.
    """
    found = _sort(book, lane, span)
    rows = book.record.readings.column(lane.name).rows[span.at]
    series = Series(
        key=lane.key(span.run, "readings"),
        channel=lane.name,
        used=found.used,
        left_out=tuple(found.left),
        missing_minutes=missing_minutes(span, found.valid),
        minutes=clock_minutes(span),
        interval=span.interval,
        first_row=int(rows.min(initial=rows[0])) if len(rows) else 0,
        last_row=int(rows.max(initial=0)),
    )
    place = cells_of(book, lane.name, found.used_at)
    _implausible(book, lane, span, place, found)
    if found.used:
        return _with_mean(book, lane, span, series, found)
    if found.over:
        words = f"run {span.run.run.value}: all readings are over range"
        where = cells_of(book, lane.name, found.over_at)
        book.trouble("over-range-in-run", where, words, concerns=(lane.key(span.run, "mean"),))
    return series


def _sort(book: Book, lane: Lane, span: Window) -> _Sorted:
    column = book.record.readings.column(lane.name)
    numbers, kinds = column.values[span.at], column.kinds[span.at]
    below = is_kind(kinds, ReadingKind.NOT_DETECTED, ReadingKind.BELOW)
    counts = (span.excluded == 0) & ((is_kind(kinds, ReadingKind.NUMBER) & ~np.isnan(numbers)) | below)
    used = np.flatnonzero(counts)
    over = np.flatnonzero((span.excluded == 0) & is_kind(kinds, ReadingKind.OVER))
    limit, low = _detection_limit(lane), below[used]
    bounds = [limit if value != value else value for value in numbers[used[low]].tolist()]
    values = numbers[used]
    values[low] = [bound or 0.0 for bound in bounds]
    left = [
        (span.times[at], column.reading(int(span.at[at])), span.reasons[span.excluded[at]] or KINDS[kinds[at]].value)
        for at in np.flatnonzero(~counts).tolist()
    ]
    times = span.times if len(used) == len(span.times) else [span.times[at] for at in used.tolist()]
    return _Sorted(
        used=Timed(times, values.tolist()),
        left=left,
        below=list(zip(np.flatnonzero(low).tolist(), bounds, strict=True)),
        over=[None if value != value else value for value in numbers[over].tolist()],
        valid=used,
        used_at=span.at[used],
        over_at=span.at[over],
    )


def _detection_limit(lane: Lane) -> float | None:
    limit = lane.channel.detection_limit
    return None if limit is None else limit.value


def _implausible(book: Book, lane: Lane, span: Window, place: Place, found: _Sorted) -> None:
    """Oxygen above that of air, whatever the unit of the channel."""
    if lane.gas.key != "o2" or not found.used or dimension(lane.unit) != "fraction":
        return
    highest = converted(max(found.used.values), lane.unit, "%")
    if highest > _AIR_AT_MOST:
        book.trouble("oxygen-reading-implausible", place, f"{highest:g} % oxygen in run {span.run.run.value}")


def _with_mean(book: Book, lane: Lane, span: Window, series: Series, found: _Sorted) -> Series:
    run, place = span.run, cells_of(book, lane.name, found.used_at)
    values = found.used.values
    undecided = _undecided(book, found)
    if found.below and not undecided:
        policy = text_of(book.record.test.not_detected_counted_as)
        values = _counted(values, found.below, POLICIES[policy])
        series = replace(series, used=Timed(found.used.times, values))
        book.say(f"Readings below detection are counted at {policy} value, as entered.")
    entry = _enter(book, lane, series.key, values, place)
    enter_coverage(book, lane, span, entry, series)
    if undecided:
        _show_policies(book, lane, span, values, found)
        words = f"run {run.run.value}: {len(found.below)} reading(s) below detection and {undecided}"
        book.trouble("undecided-not-detected", place, words, concerns=(lane.key(run, "mean"),))
    if found.over:
        _lower_bound(book, lane, span, _counted(values, found.below, 0.0) if undecided else values, found.over)
        words = f"run {run.run.value}: {len(found.over)} reading(s) over range; the mean is a lower bound"
        where = cells_of(book, lane.name, found.over_at)
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
    words = f"{len(values)} {book.record.readings.made or 'readings'}"
    return book.ledger.enter(key, values, lane.unit, FromCells(place, words), basis=channel_basis(book, lane))
