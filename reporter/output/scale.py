"""Axes: where a value lies on the paper, round tick values, and thinning of long series."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta

Point = tuple[float, float]
_MINUTES = (1, 2, 5, 10, 15, 20, 30, 60, 120, 180, 240, 360, 720, 1440)


@dataclass(frozen=True, slots=True)
class Axis:
    """A straight scale from values `low`..`high` to positions `start`..`end` [pt]."""

    low: float
    high: float
    start: float
    end: float

    def at(self, value: float) -> float:
        """The position of a value; values beyond the ends lie beyond them on paper too."""
        return self.start + (value - self.low) / (self.high - self.low) * (self.end - self.start)


@dataclass(frozen=True, slots=True)
class TimeAxis:
    """A straight scale of time."""

    low: datetime
    high: datetime
    start: float
    end: float

    def at(self, time: datetime) -> float:
        """The position of a time."""
        return self.start + (time - self.low) / (self.high - self.low) * (self.end - self.start)


@dataclass(frozen=True, slots=True)
class Ticks:
    """Round values on an axis and the decimals they are written with."""

    values: tuple[float, ...]
    decimals: int

    def text(self, value: float) -> str:
        """The label of a tick; zero is written without decimals."""
        if value == 0:
            return "0"
        grouping = "," if abs(value) >= 10_000 else ""
        shown = f"{value:{grouping}.{self.decimals}f}".replace(",", "\u202f")
        return shown.replace("-", "\u2212")


def _step(low: float, high: float, about: int) -> tuple[int, int]:
    """The step as (factor, power of ten) with factor 1, 2 or 5, so that about `about` steps fit."""
    raw = (high - low) / max(about, 1)
    power = math.floor(math.log10(raw))
    factor = next(f for f in (1, 2, 5, 10) if raw <= f * 10.0**power * (1 + 1e-9))
    return (1, power + 1) if factor == 10 else (factor, power)


def padded(low: float, high: float, share: float = 0.04) -> tuple[float, float]:
    """Ends a little outside two values, and apart where the two are equal."""
    if high - low <= 1e-9 * max(abs(low), abs(high)):
        spread = abs(low) * 0.05 or 0.5
        return low - spread, high + spread
    room = (high - low) * share
    return low - room, high + room


def ticks(low: float, high: float, about: int = 4) -> Ticks:
    """Round values from `low` to `high`, both included where they are round."""
    factor, power = _step(low, high, about)
    step = factor * 10.0**power
    first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
    values = tuple(_value(index * factor, power) for index in range(first, last + 1))
    return Ticks(values, max(0, -power))


def _value(count: int, power: int) -> float:
    """``count * 10**power`` as the double that prints shortest."""
    return float(f"{count}e{power}")


def time_ticks(low: datetime, high: datetime, about: int = 8) -> tuple[datetime, ...]:
    """Times on round minutes or hours."""
    minutes = (high - low).total_seconds() / 60
    step = next((m for m in _MINUTES if minutes <= m * about), 1440 * math.ceil(minutes / 1440 / about))
    midnight = low.replace(hour=0, minute=0, second=0, microsecond=0)
    first = math.ceil((low - midnight).total_seconds() / 60 / step)
    times: list[datetime] = []
    while (time := midnight + timedelta(minutes=step * (first + len(times)))) <= high:
        times.append(time)
    return tuple(times)


def unbroken(readings: Sequence[tuple[datetime, float]], gap: timedelta) -> list[list[tuple[datetime, float]]]:
    """Readings in time order cut wherever two are further apart than `gap`."""
    pieces: list[list[tuple[datetime, float]]] = []
    previous: datetime | None = None
    for reading in readings:
        if previous is None or reading[0] - previous > gap:
            pieces.append([])
        pieces[-1].append(reading)
        previous = reading[0]
    return pieces


def thinned(points: Sequence[Point], width: float) -> list[Point]:
    """At most the first, lowest, highest and last point of each `width` along x, so that spikes remain."""
    kept: list[Point] = []
    bucket: list[Point] = []
    edge = -math.inf
    for point in points:
        if point[0] >= edge:
            kept.extend(_envelope(bucket))
            bucket = []
            edge = point[0] + width
        bucket.append(point)
    kept.extend(_envelope(bucket))
    return kept


def _envelope(bucket: Sequence[Point]) -> list[Point]:
    if len(bucket) <= 4:
        return list(bucket)
    ys = [y for _, y in bucket]
    wanted = {0, ys.index(min(ys)), ys.index(max(ys)), len(bucket) - 1}
    return [bucket[index] for index in sorted(wanted)]
