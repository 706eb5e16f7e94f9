"""The clock of the readings against those of calibrations and process: said with its confidence, never applied here."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from datetime import datetime, timedelta
from statistics import median

import numpy as np

from reporter.clock_words import SAME, SLACK, differs, lag_words, shift_words
from reporter.clocks import Floats, Known, Lag, Log, lag_between, shift_of_gases
from reporter.outcome import Exclusion
from reporter.problems import Place
from reporter.record import Calibration, Level, Run
from reporter.reduction.book import Book, Lane
from reporter.reduction.window import Window, logging_interval, stamps_interval_start

#: Within this share of the channel's highest calibration reading, a logged value may still be the same gas.
ALIKE = 0.05
#: A log of longer intervals cannot show each gas [s]; a gas is looked for so far from its entered time [s].
FINE, AROUND = 60.0, 300.0
#: Lags against the process log are looked for so far either way [s].
REACH = 2 * 3600.0
_EPOCH = datetime(2000, 1, 1)


def look_at_clocks(book: Book, tracks: Sequence[Lane], runs: Sequence[Run], windows: Mapping[str, Window]) -> None:
    """Hold the calibration readings entered against the logged series, and the process log against the diluents.

    Parameters
    ----------
    book
        Takes the problems ``clock-differs``, ``calibration-not-logged``, ``calibration-gas-in-run``.
    tracks
        The channels.
    runs
        The runs.
    windows
        What events exclude in each run, by key.
    """
    logs = logs_of(book, tracks)
    step = float(logging_interval(book).total_seconds())
    shifted: list[tuple[Calibration, Known, float]] = []
    for file, names in _loggers(book, tracks).items():
        pairs = [(row, known) for row, known in _entered(book, logs) if row.channel.value in names]
        shift = shift_of_gases([known for _, known in pairs], step)
        by = shift.seconds if shift is not None and differs(shift, step) else 0.0
        if shift is not None and by:
            book.trouble("clock-differs", Place(file), shift_words(shift))
        elif step <= FINE:
            _not_logged(book, pairs)
        shifted += [(row, known, by) for row, known in pairs]
    _in_runs(book, shifted, runs, windows)
    _against_process(book, tracks, runs, logs)


def logs_of(book: Book, tracks: Sequence[Lane]) -> dict[str, Log]:
    """The logged series of each channel as intervals, by its name; times are seconds from the year 2000."""
    readings = book.record.readings
    step = logging_interval(book).total_seconds()
    stamps = (readings.times - np.datetime64(_EPOCH, "us")) / np.timedelta64(1, "s")
    begin = stamps if stamps_interval_start(book) else stamps - step
    return {lane.name: Log(begin, begin + step, readings.column(lane.name).measured) for lane in tracks}


def _loggers(book: Book, tracks: Sequence[Lane]) -> dict[str, set[str]]:
    """The channels by the first file they were logged in: each file has its clock."""
    readings = book.record.readings
    found: dict[str, set[str]] = {}
    for lane in tracks:
        sources = readings.sources(readings.index(lane.name))
        file = (sources[0].file if sources else "") or book.record.source.name
        found.setdefault(file, set()).add(lane.name)
    return found


def seconds(moment: datetime) -> float:
    """A time on the axis of the logs."""
    return (moment - _EPOCH).total_seconds()


def _entered(book: Book, logs: Mapping[str, Log]) -> Iterator[tuple[Calibration, Known]]:
    """The calibration readings that the log can be held against; the converter gas is read by another way."""
    highest: dict[str, float] = {}
    for row in book.record.calibrations:
        name = row.channel.value
        highest[name] = max(highest.get(name, 0.0), abs(row.reading.value))
    for row in book.record.calibrations:
        name = row.channel.value
        if row.level.value is not Level.NO2 and name in logs and highest[name] > 0.0:
            near = SAME * highest[name]
            yield row, Known(seconds(row.time.value), row.reading.value, near, logs[name])


def _not_logged(book: Book, pairs: Sequence[tuple[Calibration, Known]]) -> None:
    """Calibration gases that the log, though it has numbers all around their time, does not show."""
    missed: dict[str, list[tuple[Calibration, float]]] = {}
    for row, known in pairs:
        log = known.log
        near = (log.end > known.time - AROUND) & (log.begin < known.time + AROUND)
        logged = log.value[near]
        complete = float((log.end - log.begin)[near].sum()) >= 2.0 * AROUND and bool(np.isfinite(logged).all())
        wide = known.near * ALIKE / SAME
        if complete and not (np.abs(logged - known.value) <= wide).any():
            missed.setdefault(row.channel.value, []).append((row, median(logged.tolist())))
    for name, rows in missed.items():
        row, logged_value = rows[0]
        found = (
            f"{name}: {len(rows)} calibration reading(s), the first at {row.time.value:%H:%M}: {row.level.value.value} "
            f"gas read as {row.reading.value:g}, the log shows {logged_value:.4g} from {AROUND / 60:g} min before to "
            f"{AROUND / 60:g} min after"
        )
        book.trouble("calibration-not-logged", row.place, found)


def _in_runs(
    book: Book, pairs: Sequence[tuple[Calibration, Known, float]], runs: Sequence[Run], windows: Mapping[str, Window]
) -> None:
    """Calibration gases that the log shows inside a run, by its own stamps, and that no event excludes."""
    for run in runs:
        start, end = seconds(run.start.value), seconds(run.end.value)
        inside = [
            (known.time + by, row)
            for row, known, by in pairs
            if start < known.time + by <= end
            and known.is_telling()
            and known.shown(np.array([by]))[0]
            and not _excluded(known.time + by, windows[run.key].exclusions)
        ]
        if not inside:
            continue
        first = min(inside, key=lambda pair: pair[0])
        named = ", ".join(dict.fromkeys(f"{row.channel.value} {row.level.value.value}" for _, row in inside))
        moment = _EPOCH + timedelta(seconds=first[0])
        found = f"run {run.run.value}: {named}; the first at {moment:%H:%M} by the clock of the readings"
        book.trouble("calibration-gas-in-run", run.place, found)


def _excluded(moment: float, exclusions: Sequence[Exclusion]) -> bool:
    return any(seconds(one.start) <= moment <= seconds(one.end) for one in exclusions)


# ---- the process log ------------------------------------------------------------------------------------


def _against_process(book: Book, tracks: Sequence[Lane], runs: Sequence[Run], logs: Mapping[str, Log]) -> None:
    """The clock of the process log against that of the diluents, where one follows the other closely enough to tell."""
    log = book.record.process
    times = np.array([seconds(time) for time in log.times], dtype=np.float64)
    if len(times) < 2 or (np.diff(times) <= 0.0).any():
        return
    step = float(np.median(np.diff(times)))
    if (np.abs(np.diff(times) - step) > 0.1 * step).any():
        return
    best: tuple[str, Lag] | None = None
    for lane in tracks:
        if not lane.gas.is_diluent:
            continue
        gas = _about(logs[lane.name], times, step, runs)
        for position, column in enumerate(log.columns):
            cells = (row[position] for row in log.values)
            values = np.array([cell if isinstance(cell, float) else np.nan for cell in cells])
            lag = lag_between(values, gas, step, REACH)
            if lag is not None and (best is None or lag.confidence > best[1].confidence):
                best = (f"{lane.name} against {column}", lag)
    if best is not None and abs(best[1].seconds) > max(SLACK, step):
        book.trouble("clock-differs", log.place, f"{best[0]}: {lag_words(best[1], 'the readings', 'the process log')}")


def _about(log: Log, times: Floats, step: float, runs: Sequence[Run]) -> Floats:
    """The mean of what was logged inside the runs within half a step of each time."""
    middle = (log.begin + log.end) / 2.0
    within = [(middle > seconds(run.start.value)) & (middle <= seconds(run.end.value)) for run in runs]
    used = np.isfinite(log.value) & np.any(within, axis=0)
    place = np.floor((middle[used] - times[0]) / step + 0.5).astype(np.int64)
    inside = (place >= 0) & (place < len(times))
    total = np.bincount(place[inside], weights=log.value[used][inside], minlength=len(times))
    count = np.bincount(place[inside], minlength=len(times))
    return np.where(count > 0, total / np.maximum(count, 1), np.nan)
