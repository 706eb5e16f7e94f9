"""How far the clocks of two loggers differ, by what both saw: said, never applied."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import combinations, product

import numpy as np

from reporter.clocks import Floats, Lag, departures, lag_between
from reporter.intake.foreign.common import File, length, ticks
from reporter.intake.foreign.intervals import (
    SECOND,
    Clockwork,
    Series,
    average,
    clockwork,
    common_interval,
    intervals_of,
    lengths,
)
from reporter.logged import CODE, ReadingKind

#: Lags looked at reach so far either way [s], in steps no finer than this [s].
FARTHEST, FINEST = 2 * 3600.0, 10.0
#: So many channels of each file are compared.
MOST = 6


def lags_between_files(files: Sequence[File]) -> tuple[tuple[str, str], ...]:
    """For each two files whose clocks seem to differ: the second of them, and by how much and how surely, in words.

    The channels of both are put on common intervals and compared at every lag; what moves them together (a gas both
    were given, a change of the burner) tells.  A difference of one interval is not said.
    """
    found = []
    for one, two in combinations(files, 2):
        grid = _grid(one, two)
        if grid is None:
            continue
        step = grid.step / SECOND
        best: tuple[str, Lag] | None = None
        for (name, first), (other, second) in product(_channels(one, grid), _channels(two, grid)):
            for made in (np.asarray, departures):
                lag = lag_between(made(first), made(second), step, FARTHEST)
                if lag is not None and (best is None or lag.confidence > best[1].confidence):
                    best = (f"{name} of {one.name} and {other} of {two.name}", lag)
        if best is not None and abs(best[1].seconds) > step:
            found.append((two.name, _words(two.name, best[0], best[1])))
    return tuple(found)


def _grid(one: File, two: File) -> Clockwork | None:
    """Common intervals of what two files have in common; None where they do not overlap."""
    times = [ticks(file.readings.times) for file in (one, two)]
    steps = [step for own in times for step in intervals_of(own)]
    if not steps or not all(map(len, times)):
        return None
    begin, end = max(own[0] for own in times), min(own[-1] for own in times)
    step = round(max(common_interval(steps), FINEST) * SECOND)
    return clockwork(int(begin), int(end), step) if end - begin > step else None


def _channels(file: File, grid: Clockwork) -> Iterator[tuple[str, Floats]]:
    """The channels of a file on common intervals, not a number where an interval has none."""
    stamps = ticks(file.readings.times)
    size = lengths(stamps, at_start=file.at_start)
    begin = stamps if file.at_start else stamps - size
    for index, name in list(file.own.items())[:MOST]:
        column = file.readings.logged.columns[index]
        made = average(Series(begin, begin + size, column.values, column.kinds), grid)
        yield name, np.where(made.kind == CODE[ReadingKind.NUMBER], made.value, np.nan)


def _words(file: str, pair: str, lag: Lag) -> str:
    side = "ahead" if lag.seconds > 0.0 else "behind"
    return (
        f"the clock of {file} stands {length(abs(lag.seconds))} {side} ({-lag.seconds:+g} s to be added to its stamps, "
        f"or {lag.seconds:+g} s to those of the other), by {pair}: "
        f"correlation {lag.correlation:.2f} at that lag, {lag.as_stamped:.2f} as stamped, at most "
        f"{abs(lag.elsewhere):.2f} in size at any other, over {lag.points} intervals; confidence "
        f"{lag.confidence:.2f}, of 1"
    )
