"""By how much two clocks differ, by what was logged: steps to known gases, and two series that move together.

Pure functions on arrays.  Times are seconds on one common axis; a shift is what must be added to a time of the other
clock (of the calibrations, of the first series) to find the same moment by the clock of the log.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Counts = NDArray[np.int64]

#: Shifts looked at reach so far either way [s]: a whole day's worth of wrong time zones.
FARTHEST = 14 * 3600.0
#: Shifts are first tried in steps no finer than this [s]: a gas flows for minutes.
COARSE = 10.0
#: A reading that more than this share of the log shows tells nothing about the clock.
TELLING = 0.25
#: So many telling readings, entered at so many different times, are needed.
LEAST_READINGS, LEAST_TIMES = 6, 3
#: Share of the telling readings that the log must show at the best shift, and the most at any other.
FOUND, ELSEWHERE = 0.8, 0.6
#: Shifts within so many seconds of the best are not another shift.
NEAR = 600.0
#: So many times the usual distance from the usual value is far from it.
FAR = 8.0
#: Correlation at the best lag; by how much it must exceed that at lag zero and at any other; points in common.
CORRELATED, BETTER, POINTS = 0.8, 0.15, 30
#: So many pairs of values are compared at once.
_AT_ONCE = 500_000


@dataclass(frozen=True, slots=True)
class Log:
    """One channel as logged: intervals (begin, end] in time order [s] and their values, not a number where none is."""

    begin: Floats
    end: Floats
    value: Floats

    def at(self, times: Floats) -> Floats:
        """The value of the interval that each time lies in; not a number outside any."""
        if not len(self.end):
            return np.full(np.shape(times), np.nan)
        index = np.minimum(np.searchsorted(self.end, times, side="left"), len(self.end) - 1)
        inside = (self.begin[index] < times) & (times <= self.end[index])
        return np.where(inside, self.value[index], np.nan)


@dataclass(frozen=True, slots=True)
class Known:
    """One reading of a calibration gas: when it was entered [s], its value, how near counts, the log of its channel."""

    time: float
    value: float
    near: float
    log: Log

    def is_telling(self) -> bool:
        """Whether few enough intervals of the log show this value."""
        logged = self.log.value[np.isfinite(self.log.value)]
        return bool(len(logged)) and float(np.mean(np.abs(logged - self.value) <= self.near)) <= TELLING

    def shown(self, shifts: Floats) -> Bools:
        """At which shifts the log shows the value."""
        found: Bools = np.abs(self.log.at(self.time + shifts) - self.value) <= self.near
        return found


@dataclass(frozen=True, slots=True)
class Shift:
    """An estimated difference of two clocks.

    `seconds` is the clock of the log less the other clock; `first` and `last` are the ends of the shifts that fit
    [s]; `found` of `total` readings fit at the best, `as_stamped` at none, `elsewhere` at the next best shift.
    """

    seconds: float
    first: float
    last: float
    found: int
    total: int
    as_stamped: int
    elsewhere: int

    @property
    def confidence(self) -> float:
        """The share of readings found at the best shift less the share at the next best: 0 tells nothing, 1 all."""
        return (self.found - self.elsewhere) / self.total


def shift_of_gases(readings: Sequence[Known], step: float) -> Shift | None:
    """The shift at which the log shows the calibration gases; None where it cannot be told.

    Parameters
    ----------
    readings
        Readings of calibration gases with the logs of their channels.
    step
        Steps in which shifts are tried [s]: the logging interval.

    Returns
    -------
    Shift or None
        A reading is entered when it has settled, just before the gas is changed: of the shifts that fit, the last
        is the estimate.
    """
    telling = [one for one in readings if one.is_telling()]
    if len(telling) < LEAST_READINGS or len({one.time for one in telling}) < LEAST_TIMES:
        return None
    wide = max(step, COARSE)
    lowest = max(-FARTHEST, min(float(one.log.begin[0]) - one.time for one in telling))
    highest = min(FARTHEST, max(float(one.log.end[-1]) - one.time for one in telling))
    shifts = np.arange(np.floor(lowest / wide), np.ceil(highest / wide) + 1, dtype=np.float64) * wide
    count = _found(telling, shifts)
    first, last = _fitting(shifts, count)
    away = (shifts < first - NEAR) | (shifts > last + NEAR)
    elsewhere, total = int(count[away].max(initial=0)), len(telling)
    if wide > step:
        shifts = np.arange(np.floor((first - wide) / step), np.ceil((last + wide) / step) + 1) * step
        count = _found(telling, shifts)
        first, last = _fitting(shifts, count)
    found = int(count.max())
    if found < FOUND * total or elsewhere > ELSEWHERE * total:
        return None
    return Shift(last, first, last, found, total, int(_found(telling, np.zeros(1))[0]), elsewhere)


def _found(readings: Sequence[Known], shifts: Floats) -> NDArray[np.int64]:
    """How many readings the log shows at each shift."""
    count = np.zeros(len(shifts), dtype=np.int64)
    for one in readings:
        count += one.shown(shifts)
    return count


def _fitting(shifts: Floats, count: NDArray[np.int64]) -> tuple[float, float]:
    """The first and the last of the shifts around the best that find nearly as many readings."""
    first = last = int(count.argmax())
    fits = count >= FOUND * count[first]
    while first > 0 and fits[first - 1]:
        first -= 1
    while last < len(shifts) - 1 and fits[last + 1]:
        last += 1
    return float(shifts[first]), float(shifts[last])


@dataclass(frozen=True, slots=True)
class Lag:
    """How far one series stands behind another [s], and the correlations at that lag, at none and at the next best."""

    seconds: float
    correlation: float
    as_stamped: float
    elsewhere: float
    points: int

    @property
    def confidence(self) -> float:
        """The size of the correlation at the lag less the largest elsewhere: 0 tells nothing, 1 all."""
        return abs(self.correlation) - abs(self.elsewhere)


def lag_between(one: Floats, two: Floats, step: float, farthest: float) -> Lag | None:
    """How far the second series stands behind the first; None where it cannot be told.

    Parameters
    ----------
    one, two
        Values at the same times, `step` seconds apart, not a number where there is none.
    step
        Seconds between the values.
    farthest
        Longest lag looked at either way [s].

    Returns
    -------
    Lag or None
        Positive where what the first series shows stands later in the second.
    """
    most = min(int(farthest // step), len(one) - POINTS)
    if most < 1:
        return None
    correlations, points = _correlations(one, two, most)
    size = np.abs(correlations)
    best = int(size.argmax())
    if size[best] < CORRELATED:
        return None
    low, high = _peak(size, best)
    others = np.concatenate([correlations[:low], correlations[high + 1 :]]).tolist()
    elsewhere = max(others, key=abs, default=0.0)
    correlation, as_stamped = correlations[[best, most]].tolist()
    if abs(correlation) - abs(elsewhere) < BETTER:
        return None
    return Lag((best - most) * step, correlation, as_stamped, elsewhere, int(points[best]))


def departures(values: Floats) -> Floats:
    """Where a series stands far from its usual value: 1 there, 0 elsewhere, not a number where it is none.

    Far is more than `FAR` times the usual distance (median of the sizes) from the median: calibration gases, ambient
    air, an outage, which two loggers see at the same time whatever gas each reads.
    """
    known = values[np.isfinite(values)]
    if not len(known):
        return values
    distance = np.abs(values - np.median(known))
    usual = float(np.median(distance[np.isfinite(distance)]))
    return np.where(np.isfinite(values), (distance > FAR * usual).astype(np.float64), np.nan)


def _correlations(one: Floats, two: Floats, most: int) -> tuple[Floats, Counts]:
    """The correlation of values as many places apart as each lag from -`most` to `most`, and the pairs it rests on."""
    beyond = np.full(most, np.nan)
    shifted = np.lib.stride_tricks.sliding_window_view(np.concatenate([beyond, two, beyond]), len(one))
    lags = max(1, _AT_ONCE // len(one))
    parts = [_correlated(one, shifted[start : start + lags]) for start in range(0, len(shifted), lags)]
    return np.concatenate([part for part, _ in parts]), np.concatenate([points for _, points in parts])


def _correlated(one: Floats, others: Floats) -> tuple[Floats, Counts]:
    """The correlation of a series with each of others, over the pairs that both have."""
    both = np.isfinite(one) & np.isfinite(others)
    points = both.sum(axis=1)
    count = np.maximum(points, 1)[:, None]
    first, second = np.where(both, one, 0.0), np.where(both, others, 0.0)
    first = np.where(both, first - first.sum(axis=1, keepdims=True) / count, 0.0)
    second = np.where(both, second - second.sum(axis=1, keepdims=True) / count, 0.0)
    scale = np.sqrt((first**2).sum(axis=1) * (second**2).sum(axis=1))
    known = (points >= POINTS) & (scale > 0.0)
    return np.where(known, (first * second).sum(axis=1) / np.where(known, scale, 1.0), 0.0), points


def _peak(size: Floats, best: int) -> tuple[int, int]:
    """The places about the best over which the correlation falls without rising again."""
    low = high = best
    while low > 0 and size[low - 1] < size[low]:
        low -= 1
    while high < len(size) - 1 and size[high + 1] < size[high]:
        high += 1
    return low, high
