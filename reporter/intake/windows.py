"""Run times proposed from the data where none are entered: every stretch that the rules allow, in time order.

The rules, all common practice, look at times alone: a run lies between two calibrations, begins after a purge, ends
before gas may flow again, has no gap in the log, has a stable load where a process log shows one, and is at least as
long as asked for.  No reading of a pollutant enters: nothing is chosen by its result, and the user enters the times.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from itertools import pairwise
from statistics import median
from typing import Any

import numpy as np

from reporter.gases import find_gas
from reporter.intake.rows import Filled
from reporter.logged import Moments, is_kind
from reporter.record import ProcessLog, ReadingKind, Readings
from reporter.units import convert

#: After a calibration reading at least so long, or twice the longest response time; before one so long.
PURGE, AHEAD = timedelta(minutes=5), timedelta(minutes=10)
#: A longer time without a row ends a stretch.
GAP = timedelta(minutes=5)
#: The load stays within this share of its median over the stretch.
STEADY = 0.10
#: Length of a run where no limit says more.
LENGTH = timedelta(minutes=60)
#: Words of a process column that is a load, the better before the worse.
LOADS = ("load", "steam flow", "heat input", "heat output", "output", "charge rate", "fuel")


@dataclass(frozen=True, slots=True)
class Load:
    """A process column that shows the load: its name, times and values."""

    name: str
    points: tuple[tuple[datetime, float], ...]


@dataclass(frozen=True, slots=True)
class Day:
    """What the choice rests on: stretches that were logged, calibration readings, load, purge, least length."""

    logged: tuple[tuple[datetime, datetime], ...]
    calibrations: tuple[datetime, ...]
    load: Load | None
    purge: timedelta
    least: timedelta


@dataclass(frozen=True, slots=True)
class Candidate:
    """A stretch that could be a run, and why."""

    start: datetime
    end: datetime
    why: str

    def words(self) -> str:
        """The candidate in one line."""
        minutes = round((self.end - self.start).total_seconds() / 60)
        end = f"{self.end:%H:%M}" if self.end.date() == self.start.date() else f"{self.end:%Y-%m-%d %H:%M}"
        return f"{self.start:%Y-%m-%d %H:%M} to {end} ({minutes} min): {self.why}"


def candidates(day: Day) -> tuple[Candidate, ...]:
    """Every stretch of a day that the rules allow, in time order."""
    found = []
    for start, end, around in _between(day):
        for first, last in _logged(day, start, end):
            for begin, until, load in _steady(day, first, last):
                begin, until = _whole_minutes(begin, until)
                if until - begin >= day.least:
                    found.append(Candidate(begin, until, f"{around}; {load}"))
    return tuple(found)


def _between(day: Day) -> Iterator[tuple[datetime, datetime, str]]:
    """What lies between calibrations; all of the log where there is none."""
    if not day.calibrations:
        for start, end in day.logged:
            yield start, end, "no calibration is known, so that only gaps and load part the log"
        return
    for before, after in pairwise(sorted(day.calibrations)):
        yield before + day.purge, after - AHEAD, f"between the calibrations at {before:%H:%M} and {after:%H:%M}"


def _logged(day: Day, start: datetime, end: datetime) -> Iterator[tuple[datetime, datetime]]:
    for first, last in day.logged:
        if max(first, start) < min(last, end):
            yield max(first, start), min(last, end)


def _steady(day: Day, start: datetime, end: datetime) -> Iterator[tuple[datetime, datetime, str]]:
    """The parts in which the load stays near its median, with what is said of it."""
    inside = [] if day.load is None else [(t, v) for t, v in day.load.points if start <= t <= end]
    if day.load is None or len(inside) < 2:
        yield start, end, "no process log shows the load"
        return
    middle = median(value for _, value in inside)
    steady = [abs(value - middle) <= STEADY * abs(middle) for _, value in inside]
    words = f"{day.load.name} within {STEADY:.0%} of {middle:.4g}"
    if all(steady):
        yield start, end, words
        return
    begin = start
    for (moment, _), still in zip(inside, steady, strict=True):
        if not still:
            yield begin, moment, words
            begin = moment
    yield begin, end, words


def _whole_minutes(begin: datetime, until: datetime) -> tuple[datetime, datetime]:
    minute = timedelta(minutes=1)
    floor = begin.replace(second=0, microsecond=0)
    return (floor if floor == begin else floor + minute), until.replace(second=0, microsecond=0)


# ---- from the sheets ------------------------------------------------------------------------------------


def day_of(rows: dict[str, list[Filled]], readings: Readings, process: ProcessLog, *, at_start: bool) -> Day:
    """What the sheets give for the choice; `at_start` is whether a stamp names the start of its interval."""
    channels = rows.get("channels", [])
    times = [row.values["time"].value for row in rows.get("calibrations", ()) if "time" in row.values]
    response = [
        seconds for channel in channels for seconds in _numbers(channel, "response_time_up", "response_time_down")
    ]
    lengths = [minutes for limit in rows.get("limits", ()) for minutes in _numbers(limit, "minimum_run_length")]
    return Day(
        logged=_stretches(readings.times, at_start=at_start),
        calibrations=tuple(sorted({*times, *_marked(channels, readings)})),
        load=_load(process),
        purge=max(PURGE, timedelta(seconds=2.0 * max(response, default=0.0))),
        least=timedelta(minutes=max(lengths)) if lengths else LENGTH,
    )


def _numbers(row: Filled, *attrs: str) -> list[float]:
    wanted = {"minimum_run_length": "min"}
    found: list[Any] = [(attr, row.values[attr]) for attr in attrs if attr in row.values]
    return [
        convert(given.value, given.unit.unit, wanted.get(attr, "s")) if given.unit is not None else given.value
        for attr, given in found
    ]


def _marked(channels: Sequence[Filled], readings: Readings) -> list[datetime]:
    """The times that the log of a diluent marks as calibration."""
    diluents = {c.text("channel") for c in channels if (gas := find_gas(c.text("gas"))) is not None and gas.is_diluent}
    kinds = [readings.column(name).kinds for name in readings.channels if name in diluents]
    marked = [is_kind(own, ReadingKind.CALIBRATION) for own in kinds]
    return list(readings.times[np.logical_or.reduce(marked)].tolist()) if marked else []


def _stretches(times: Moments, *, at_start: bool) -> tuple[tuple[datetime, datetime], ...]:
    """The stretches of the log without a gap."""
    if len(times) < 2:
        return ()
    steps = np.diff(times)
    step: timedelta = np.sort(steps)[len(steps) // 2].item()
    cuts = np.flatnonzero(steps > np.timedelta64(max(GAP, 1.5 * step), "us"))
    lead, tail = (timedelta(0), step) if at_start else (step, timedelta(0))
    first, last = times[[0, *(cuts + 1)]].tolist(), times[[*cuts, -1]].tolist()
    return tuple((begin - lead, end + tail) for begin, end in zip(first, last, strict=True))


def _load(process: ProcessLog) -> Load | None:
    """The process column that shows the load best, by its name."""
    for word in LOADS:
        for place, name in enumerate(process.columns):
            values = [row[place] for row in process.values]
            points = tuple((t, v) for t, v in zip(process.times, values, strict=True) if isinstance(v, float))
            if word in name.casefold() and points:
                return Load(name, tuple(sorted(points)))
    return None
