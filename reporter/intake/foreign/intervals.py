"""Logged series of different intervals on one common interval: means weighted by time, each with its coverage.

The common interval is the logging interval entered on the sheet Test, else the coarsest at which any channel was
logged.  The coarsest, because a value that stands for fifteen minutes says nothing of any one of them: put on a finer
interval it would have to be repeated or left to one minute, and either invents readings.  The finer series loses
nothing that a mean over a run needs.  Where the interval entered is finer than a channel was logged, that channel stays
blank there, and is said to.

An interval has a number where valid readings cover at least `LEAST_COVERAGE` of it (common practice, no rule of a
method).
A word is never averaged away: calibration and over range make the interval what they are, a not-detected beside
numbers leaves it without a value.  All times are whole microseconds; an interval is (begin, end].
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reporter.record import ReadingKind

Floats = NDArray[np.float64]
Ticks = NDArray[np.int64]
Codes = NDArray[np.uint8]
Bools = NDArray[np.bool_]

SECOND = 1_000_000
#: Least share of an interval that valid readings cover where it has a number (common practice).
LEAST_COVERAGE = 0.75
#: Steps this much alike, and so many one after the other, are an interval of the logger.
ALIKE, REPEATED = 0.1, 3
#: Intervals that fit the clock [s].
CLOCKWORK = (
    1, 2, 3, 4, 5, 6, 10, 12, 15, 20, 30, 60, 120, 180, 240, 300, 360, 600, 720, 900, 1200, 1800, 3600
)  # fmt: skip
_CODE = {kind: code for code, kind in enumerate(ReadingKind)}
_NUMBER, _BLANK, _OVER = _CODE[ReadingKind.NUMBER], _CODE[ReadingKind.BLANK], _CODE[ReadingKind.OVER]
_CAL, _ERROR = _CODE[ReadingKind.CALIBRATION], _CODE[ReadingKind.ERROR]
_ND, _BELOW = _CODE[ReadingKind.NOT_DETECTED], _CODE[ReadingKind.BELOW]


@dataclass(frozen=True, slots=True)
class Series:
    """Readings of one channel: the interval each covers [µs], its number or bound, and the code of its kind."""

    begin: Ticks
    end: Ticks
    value: Floats
    kind: Codes


@dataclass(frozen=True, slots=True)
class Clockwork:
    """Common intervals: `count` of them, `step` [µs] long, the first beginning at `first` [µs]."""

    first: int
    step: int
    count: int

    @property
    def ends(self) -> Ticks:
        """The end of each interval."""
        return self.first + self.step * np.arange(1, self.count + 1, dtype=np.int64)


@dataclass(frozen=True, slots=True)
class Averages:
    """A channel on common intervals.

    `coverage` is the share of each interval that its numbers cover; `row` the position of the reading that gave an
    interval its word, or of the first in it, -1 where there is none; `too_long` how many readings cover more than
    an interval and are not used.
    """

    value: Floats
    kind: Codes
    coverage: Floats
    row: Ticks
    too_long: int

    def at(self, where: Ticks) -> Averages:
        """The same at some of the intervals."""
        return Averages(self.value[where], self.kind[where], self.coverage[where], self.row[where], self.too_long)

    @property
    def short(self) -> int:
        """How many intervals have readings and too little coverage for a number."""
        plain = (self.kind == _BLANK) | (self.kind == _ERROR)
        return int(np.count_nonzero(plain & (self.coverage > 0.0)))


def lengths(stamps: Ticks, *, at_start: bool) -> Ticks:
    """The interval each row covers [µs], from the steps between the stamps.

    A step that stands at least `REPEATED` times one after the other is an interval of the logger, so that an interval
    may change inside a file; a longer step that stands alone is a gap, and its row covers the shorter of the
    intervals around it.

    Parameters
    ----------
    stamps
        Time stamps, ascending, each once.
    at_start
        Whether a stamp names the start of its interval.
    """
    if len(stamps) < 2:
        return np.zeros(len(stamps), dtype=np.int64)
    steps = np.diff(stamps)
    regular = _regular(steps)
    if regular.any():
        index = np.arange(len(steps))
        before = np.maximum.accumulate(np.where(regular, index, -1))
        after = np.minimum.accumulate(np.where(regular, index, len(steps))[::-1])[::-1]
        longest = np.iinfo(np.int64).max
        left = np.where(before >= 0, steps[np.maximum(before, 0)], longest)
        right = np.where(after < len(steps), steps[np.minimum(after, len(steps) - 1)], longest)
        around = np.minimum(left, right)
    else:
        around = np.full(len(steps), np.sort(steps)[len(steps) // 2])
    own = np.where(regular, steps, np.minimum(steps, around))
    return np.append(own, own[-1]) if at_start else np.insert(own, 0, own[0])


def _regular(steps: Ticks) -> Bools:
    """Which steps belong to a row of at least `REPEATED` that are alike."""
    regular = np.zeros(len(steps), dtype=np.bool_)
    if len(steps) < REPEATED:
        return regular
    alike = np.abs(np.diff(steps)) <= ALIKE * np.minimum(steps[1:], steps[:-1])
    width = REPEATED - 1
    shifted = [alike[place : len(alike) - width + 1 + place] for place in range(width)]
    whole = np.asarray(np.all(shifted, axis=0), dtype=np.bool_)
    for place in range(REPEATED):
        regular[place : place + len(whole)] |= whole
    return regular


def intervals_of(stamps: Ticks) -> tuple[float, ...]:
    """The intervals of a logger in the order in which they first stand [s]; those near one of the clock, as that."""
    if len(stamps) < 2:
        return ()
    steps = np.diff(stamps)
    regular = _regular(steps)
    chosen = steps[regular] if regular.any() else np.array([np.sort(steps)[len(steps) // 2]])
    found: list[float] = []
    changed = np.append(0, np.flatnonzero(np.diff(chosen)) + 1)
    for step in dict.fromkeys(chosen[changed].tolist()):
        size = _fitting(step / SECOND)
        if not any(abs(size - known) <= ALIKE * min(size, known) for known in found):
            found.append(size)
    return tuple(found)


def _fitting(size: float) -> float:
    near = min(CLOCKWORK, key=lambda known: abs(known - size))
    return float(near) if abs(near - size) <= ALIKE * near else size


def common_interval(intervals: Sequence[float]) -> float:
    """The common interval of loggers' intervals [s]: the coarsest, or the next that fits the clock."""
    coarsest = max(intervals)
    return float(next((known for known in CLOCKWORK if known >= coarsest), coarsest))


def clockwork(begin: int, end: int, step: int) -> Clockwork:
    """Common intervals that hold all from `begin` to `end` [µs], counted from a midnight."""
    day = 86_400 * SECOND
    midnight = begin // day * day
    first = midnight + (begin - midnight) // step * step
    return Clockwork(first, step, max(1, -(-(end - first) // step)))


def average(series: Series, grid: Clockwork) -> Averages:
    """A series on common intervals.

    Parameters
    ----------
    series
        Readings in time order; one that covers more than a common interval is not used.
    grid
        The common intervals.
    """
    length = series.end - series.begin
    fits = (length <= grid.step) & (length > 0)
    used = np.flatnonzero(fits & (series.begin >= grid.first) & (series.end <= grid.first + grid.step * grid.count))
    cell = (series.begin[used] - grid.first) // grid.step
    here = np.minimum(series.end[used], grid.first + (cell + 1) * grid.step) - series.begin[used]
    rest = length[used] - here
    over = np.flatnonzero(rest)
    parts = _Parts(
        np.concatenate([cell, cell[over] + 1]), np.concatenate([here, rest[over]]), np.concatenate([used, used[over]])
    )
    too_long = int(np.count_nonzero((length > grid.step) & (series.kind != _BLANK)))
    return _decided(series, parts, grid, too_long)


@dataclass(frozen=True, slots=True)
class _Parts:
    """Parts of readings: the common interval each lies in, its length [µs], the reading it is of."""

    cell: Ticks
    length: Ticks
    row: Ticks


def _decided(series: Series, parts: _Parts, grid: Clockwork, too_long: int) -> Averages:
    """What each common interval holds."""
    kind, value = series.kind[parts.row], series.value[parts.row]

    present = np.bincount(kind, minlength=len(_CODE))

    def time_of(*codes: int) -> Floats:
        if not present[list(codes)].any():
            return np.zeros(grid.count)
        chosen = np.isin(kind, codes)
        weights = parts.length[chosen].astype(np.float64)
        return np.bincount(parts.cell[chosen], weights=weights, minlength=grid.count).astype(np.float64)

    def mean_of(*codes: int) -> Floats:
        if not present[list(codes)].any():
            return np.full(grid.count, np.nan)
        chosen = np.isin(kind, codes)
        weights = parts.length[chosen] * value[chosen]
        total = np.bincount(parts.cell[chosen], weights=weights, minlength=grid.count)
        time = time_of(*codes)
        return np.where(time > 0.0, total / np.where(time > 0.0, time, 1.0), np.nan)

    numbers, words = time_of(_NUMBER), time_of(_ND, _BELOW)
    coverage = numbers / grid.step
    bounds = mean_of(_BELOW, _ND)
    nothing = np.full(grid.count, np.nan)
    cases: list[tuple[Bools, int, Floats]] = [
        (time_of(_CAL) > 0.0, _CAL, nothing),
        (time_of(_OVER) > 0.0, _OVER, mean_of(_NUMBER, _OVER)),
        ((words > 0.0) & (numbers > 0.0), _ERROR, nothing),
        ((words >= LEAST_COVERAGE * grid.step) & np.isfinite(bounds), _BELOW, bounds),
        (words >= LEAST_COVERAGE * grid.step, _ND, nothing),
        (coverage >= LEAST_COVERAGE, _NUMBER, mean_of(_NUMBER)),
        (time_of(_ERROR) > 0.0, _ERROR, nothing),
    ]
    conditions = [condition for condition, _, _ in cases]
    made = np.select(conditions, [np.full(grid.count, code) for _, code, _ in cases], _BLANK).astype(np.uint8)
    values = np.select(conditions, [v for *_, v in cases], np.nan)
    return Averages(values, made, coverage, _telling(parts, kind, made), too_long)


def _telling(parts: _Parts, kind: Codes, made: Codes) -> Ticks:
    """The first reading of each interval that is of the interval's kind; of any kind where none is."""
    found = np.full(len(made), -1, dtype=np.int64)
    order = np.argsort(parts.row, kind="stable")[::-1]
    found[parts.cell[order]] = parts.row[order]
    not_detected = (kind == _ND) | (kind == _BELOW)
    same = (kind == made[parts.cell]) | ((made[parts.cell] == _ERROR) & not_detected)
    chosen = order[same[order]]
    found[parts.cell[chosen]] = parts.row[chosen]
    return found
