"""The one clean truth of the corpus: three runs of twenty minutes, four channels, two decimals each."""

from __future__ import annotations

import random
from collections.abc import Callable, Sequence
from datetime import datetime, timedelta

#: A minute of the truth: its time, then a value for each channel.
Row = tuple[datetime, float, float, float, float]

CHANNELS = ("NOx", "CO", "O2", "CO2")
UNITS = {"nox": "ppm", "co": "ppm", "o2": "%", "co2": "%"}
#: The third run goes over noon, so that clocks of twelve hours are put to the test.
STARTS = (datetime(2026, 4, 20, 9, 50), datetime(2026, 4, 20, 10, 30), datetime(2026, 4, 20, 11, 50))
MINUTES = 20
#: Middle of each channel and its largest step from minute to minute, in hundredths.
_LEVELS = ((2440, 60), (112_000, 900), (450, 12), (920, 10))


def _walk(middle: int, step: int, chance: random.Random) -> list[float]:
    """A series of hundredths that wanders about its middle and never stands still."""
    level, values = middle, []
    for _ in range(len(STARTS) * MINUTES):
        level += chance.choice([-1, 1]) * chance.randint(1, step) + (middle - level) // 4
        values.append(level / 100)
    return values


def _rows() -> tuple[Row, ...]:
    chance = random.Random(20260420)
    series = [_walk(middle, step, chance) for middle, step in _LEVELS]
    times = [start + timedelta(minutes=k) for start in STARTS for k in range(MINUTES)]
    return tuple((moment, *values) for moment, *values in zip(times, *series, strict=True))  # type: ignore[misc]


TRUTH: tuple[Row, ...] = _rows()


def at(change: Callable[[datetime], datetime], rows: Sequence[Row] = TRUTH) -> tuple[Row, ...]:
    """The truth with other times."""
    return tuple((change(row[0]), *row[1:]) for row in rows)


def from_start(start: datetime) -> tuple[Row, ...]:
    """The truth as one hour without pauses, from a given minute."""
    return tuple((start + timedelta(minutes=k), *row[1:]) for k, row in enumerate(TRUTH))
