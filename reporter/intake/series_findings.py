"""What only a series shows: values that stand still, spikes, rails, switched ranges, air and gases inside a run.

Works on columns of numbers (no number: NaN).  Nothing is changed; each finding names its readings.  The thresholds are
common practice of looking at logged series, chosen so that a quiet series of normal noise gives no finding.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from reporter.logged import Moments

Values = NDArray[np.float64]
Marks = NDArray[np.bool_]
#: So many equal readings in a row stand still, so many at the highest or lowest value stand at a rail.
STILL, RAILED = 10, 5
#: A channel that repeats itself more often than this share of its readings may well stand still.
REPEATS = 0.2
#: A spike stands out by so many times the usual noise and this share of the level, for at most two readings.
SPIKE_NOISE, SPIKE_SHARE, SPIKE_LENGTH = 12.0, 0.3, 2
#: Readings compared on each side of a switched range, and how near its ratio is to a power of ten.
SIDE, RATIO = 5, 0.05
#: Oxygen of ambient air as a drifted analyzer may show it [%], and of flue gas at most.
AIR, FLUE = (20.4, 21.5), 18.0
#: A gas is absent below this share of its usual value; a plateau is as near to its cylinder.
ABSENT, PLATEAU = 0.03, 0.02
#: So many readings in a row are air, zero gas or calibration gas.
LEAST = 2
#: Readings on the way to another gas and back, on each side of it.
RESPONSE = 2
#: Numbers from which the middle of a channel, or its noise, is known well enough.
ENOUGH = 5000


@dataclass(frozen=True, slots=True)
class Trace:
    """The readings of one channel: name, gas, numbers (NaN where there is none), cylinder values in its unit."""

    name: str
    gas: str
    values: Values
    cylinders: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Finding:
    """A finding of a channel (empty: of all), from its first to its last reading, in words."""

    code: str
    channel: str
    first: int
    last: int
    words: str


def findings(times: Moments, traces: Sequence[Trace], spans: Sequence[tuple[int, int]]) -> list[Finding]:
    """Look at a series.

    Parameters
    ----------
    times
        The stamp of each reading, in order.
    traces
        One for each channel, as long as `times`.
    spans
        The runs as first reading and end (not included); the whole series where no run is known.

    Returns
    -------
    list of Finding
        In order of the spans.
    """
    found: list[Finding] = []
    for first, end in spans:
        if end - first < 2:
            continue
        found += _intervals(times, first, end)
        cut = [Trace(t.name, t.gas, t.values[first:end], t.cylinders) for t in traces]
        own = [*_foreign_gas(cut)]
        taken = _marked([(max(f.first - RESPONSE, 0), f.last + RESPONSE) for f in own], end - first)
        for trace in cut:
            own += _of_one(trace, taken)
        own += _ranges(cut, _marked([(f.first, f.last) for f in own], end - first))
        found += [Finding(f.code, f.channel, f.first + first, f.last + first, f.words) for f in own]
    return found


def stretches(marks: Marks, least: int) -> Iterator[tuple[int, int]]:
    """First and last position of each stretch of marks that is long enough."""
    edges = np.flatnonzero(np.diff(np.concatenate(([False], marks, [False])).astype(np.int8)))
    for start, end in zip(edges[::2], edges[1::2], strict=True):
        if end - start >= least:
            yield int(start), int(end) - 1


def _marked(spans: Sequence[tuple[int, int]], length: int) -> Marks:
    marks = np.zeros(length, dtype=np.bool_)
    for first, last in spans:
        marks[first : last + 1] = True
    return marks


def _intervals(times: Moments, first: int, end: int) -> Iterator[Finding]:
    """The first place where the usual step between readings becomes another."""
    steps = np.diff(times[first:end].astype("datetime64[ms]")).astype(np.int64)
    same = np.concatenate(([False], steps[1:] == steps[:-1]))
    usual = [(start, int(steps[start])) for start, _ in stretches(same, LEAST)]
    for (_, before), (start, after) in pairwise(usual):
        if abs(after - before) > 0.2 * min(before, after):
            words = f"a reading each {before / 1000:g} s, then each {after / 1000:g} s"
            yield Finding("interval-changes", "", first + start, first + start, words)
            return


# ---- air and gases --------------------------------------------------------------------------------------


def _foreign_gas(traces: Sequence[Trace]) -> Iterator[Finding]:
    """Minutes of ambient air, of zero gas, and of a cylinder's gas."""
    known = [(trace, middle) for trace in traces if (middle := _middle(trace.values)) > 0.0]
    if len(known) < 2:
        return
    absent = {trace.name: np.abs(trace.values) <= ABSENT * middle for trace, middle in known}
    oxygen = next((trace for trace, middle in known if trace.gas == "o2" and middle < FLUE), None)
    if oxygen is not None:
        others = [absent[trace.name] for trace, _ in known if trace.gas != "o2"]
        air = (oxygen.values >= AIR[0]) & (oxygen.values <= AIR[1]) & _all(others)
        for first, last in stretches(air, LEAST):
            yield Finding("gas-in-run", oxygen.name, first, last, "ambient air: the other gases near zero")
    for first, last in stretches(_all(list(absent.values())), LEAST):
        yield Finding("gas-in-run", known[0][0].name, first, last, "zero gas: every channel near zero")
    for trace, middle in known:
        rest = [marks for name, marks in absent.items() if name != trace.name]
        for value in trace.cylinders:
            if value > 0.0 and abs(value - middle) > 0.15 * value:
                plateau = (np.abs(trace.values - value) <= PLATEAU * value) & np.any(rest, axis=0)
                for first, last in stretches(plateau, LEAST):
                    yield Finding("gas-in-run", trace.name, first, last, f"a plateau at {value:g}, as in a cylinder")


def _middle(values: Values) -> float:
    """The middle of a channel's numbers, of some thousand of them where there are more; zero where there is none."""
    numbers = values[~np.isnan(values)]
    return float(np.median(numbers[:: 1 + numbers.size // ENOUGH])) if numbers.size else 0.0


def _all(marks: Sequence[Marks]) -> Any:
    return np.logical_and.reduce(marks)


# ---- one channel ----------------------------------------------------------------------------------------


def _of_one(trace: Trace, taken: Marks) -> Iterator[Finding]:
    """Rails, stretches that stand still, and spikes of a channel, apart from readings already explained."""
    where = np.flatnonzero(~np.isnan(trace.values) & ~taken)
    numbers = trace.values[where]
    if numbers.size < 2 * STILL:
        return
    equal = np.concatenate(([False], numbers[1:] == numbers[:-1]))
    low, high = float(numbers.min()), float(numbers.max())
    for start, last in stretches(equal, RAILED - 1):
        value, first, count = float(numbers[start]), start - 1, last - start + 2
        others = np.count_nonzero(equal) - (count - 1)
        railed = value in (low, high) and low != high
        if value == 0.0 or others > REPEATS * (numbers.size - count) or not (railed or count >= STILL):
            continue
        end = "highest" if value == high else "lowest"
        words = (
            f"its {end} value, {value:g}, {count} times in a row" if railed else f"{value:g}, {count} times in a row"
        )
        code = "rail-readings" if railed else "stuck-readings"
        yield Finding(code, trace.name, int(where[first]), int(where[last]), words)
    yield from _spikes(trace.name, where, numbers)


def _spikes(name: str, where: NDArray[np.int64], numbers: Values) -> Iterator[Finding]:
    steps = np.abs(np.diff(numbers))
    moving = steps[steps > 0.0]
    if not moving.size:
        return
    bound = SPIKE_NOISE * float(np.median(moving[:: 1 + moving.size // ENOUGH]))
    leaps = np.flatnonzero(steps > bound / 2.0)
    near = np.unique(np.clip(np.concatenate([leaps - 1, leaps, leaps + 1, leaps + 2]), 0, numbers.size - 1))
    level = np.full(numbers.size, np.nan)
    level[near] = np.median(np.pad(numbers, 2, mode="edge")[near[:, None] + np.arange(5)], axis=1)
    with np.errstate(invalid="ignore"):
        marks = np.abs(numbers - level) > np.maximum(bound, SPIKE_SHARE * np.abs(level))
    found = [pair for pair in stretches(marks, 1) if pair[1] - pair[0] < SPIKE_LENGTH]
    if not found:
        return
    first, last = found[0]
    more = f"; and {len(found) - 1} more" if len(found) > 1 else ""
    words = f"{numbers[first]:g} between readings near {level[first]:g}{more}"
    yield Finding("spike-reading", name, int(where[first]), int(where[last]), words)


# ---- ranges ---------------------------------------------------------------------------------------------


def _ranges(traces: Sequence[Trace], taken: Marks) -> Iterator[Finding]:
    """Where a channel goes to another level by a power of ten, or to coarser readings, while the others stay."""
    for trace in traces:
        others = [other.values for other in traces if other.name != trace.name]
        for at in _jumps(trace.values):
            side = slice(at - SIDE, at + SIDE)
            if taken[side].any() or any(_moves(values, at) for values in others):
                continue
            before, after = _level(trace.values[at - SIDE : at]), _level(trace.values[at : at + SIDE])
            power = abs(np.log10(after / before))
            tenfold = power > 0.5 and abs(power - round(power)) < np.log10(1.0 + RATIO)
            if tenfold or _decimals(trace.values[at - SIDE : at]) != _decimals(trace.values[at : at + SIDE]):
                words = f"from {before:g} to {after:g} at once, the other channels as before"
                yield Finding("range-switch", trace.name, at, at, words)
                break


def _jumps(values: Values) -> list[int]:
    """Positions at which the level changes by half or more and stays there."""
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = values[1:] / values[:-1]
    steps = np.flatnonzero((ratio > 1.5) | ((ratio > 0.0) & (ratio < 1 / 1.5))) + 1
    kept = []
    for at in steps[(steps >= SIDE) & (steps <= values.size - SIDE)]:
        before, after = values[at - SIDE : at], values[at : at + SIDE]
        if _steady(before) and _steady(after):
            kept.append(int(at))
    return kept


def _steady(side: Values) -> bool:
    middle = _level(side)
    return bool(not np.isnan(side).any() and middle > 0.0 and np.all(np.abs(side - middle) < 0.15 * middle))


def _level(side: Values) -> float:
    return float(np.median(side))


def _moves(values: Values, at: int) -> bool:
    before, after = _level(values[at - SIDE : at]), _level(values[at : at + SIDE])
    return abs(after - before) > 0.2 * abs(before) if before else False


def _decimals(side: Values) -> int:
    """The decimals that the numbers need, at most four."""
    return next((d for d in range(4) if np.all(np.abs(np.round(side, d) - side) < 1e-9 * (1.0 + np.abs(side)))), 4)
