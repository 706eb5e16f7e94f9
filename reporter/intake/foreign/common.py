"""Logger files of different intervals as one series of common intervals, with what was done to each channel."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from itertools import combinations

import numpy as np

from reporter.intake.foreign.intervals import (
    ALIKE,
    LEAST_COVERAGE,
    SECOND,
    Averages,
    Clockwork,
    Series,
    Ticks,
    average,
    clockwork,
    common_interval,
    intervals_of,
    lengths,
)
from reporter.intake.foreign.merge import Clash, merged
from reporter.logged import CODE, STAMPS, LoggedColumn, LoggedRows, Moments, ReadingKind, Texts, objects
from reporter.record import Readings

#: Stamps of two files that overlap are the same where this share of the fewer stands in both.
SHARED = 0.5
RULE = (
    f"an interval has a number where valid readings cover at least {LEAST_COVERAGE:.0%} of it (common practice), and a "
    "word that stands in it makes it that word"
)


@dataclass(frozen=True, slots=True)
class File:
    """One logger file: its name, readings, the channel of each of its columns that is taken, its stamps."""

    name: str
    readings: Readings
    own: Mapping[int, str]
    at_start: bool


@dataclass(slots=True)
class Common:
    """Rows of common intervals [s], clashes by the number of the file, what was done in words.

    `blank` says of each channel what stays blank, with the first of its files.
    """

    rows: LoggedRows
    step: float
    clashes: dict[int, Clash] = field(default_factory=dict)
    words: list[str] = field(default_factory=list)
    blank: list[tuple[str, str]] = field(default_factory=list)


def needed_step(files: Sequence[File], wanted: float | None) -> float | None:
    """The common interval that files have to be brought to [s]; None where they have one already.

    Parameters
    ----------
    files
        The logger files.
    wanted
        The logging interval entered on the sheet Test [s].
    """
    every = [intervals_of(ticks(file.readings.times)) for file in files]
    steps = [step for found in every for step in found]
    if not steps:
        return None
    alike = max(steps) - min(steps) <= ALIKE * min(steps)
    if wanted is not None and max(steps) < wanted * (1.0 - ALIKE):
        return wanted
    if alike and len({file.at_start for file in files}) < 2 and not _out_of_step(files):
        return None
    return wanted if wanted is not None else common_interval(steps)


def ticks(times: Moments) -> Ticks:
    """Time stamps as whole microseconds."""
    return times.astype(STAMPS).astype(np.int64)


def _out_of_step(files: Sequence[File]) -> bool:
    """Whether two files that overlap in time have stamps at other seconds."""
    for one, two in combinations([ticks(file.readings.times) for file in files], 2):
        if not len(one) or not len(two):
            continue
        begin, end = max(one[0], two[0]), min(one[-1], two[-1])
        parts = [own[(own >= begin) & (own <= end)] for own in (one, two)]
        fewest = min(map(len, parts))
        if fewest > 1 and len(np.intersect1d(*parts)) < SHARED * fewest:
            return True
    return False


def on_common_intervals(files: Sequence[File], names: Sequence[str], step: float, *, at_start: bool) -> Common:
    """The series of all files on common intervals.

    Parameters
    ----------
    files
        The logger files; overlapping ones must agree.
    names
        The channels of the result.
    step
        The common interval [s].
    at_start
        Whether the stamps of the result name the start of their intervals.
    """
    pieces = [_ended(file) for file in files]
    every = [ticks(file.readings.times) for file in pieces]
    size = round(step * SECOND)
    begin = min(int(own[0] - lengths(own, at_start=False)[0]) for own in every)
    grid = clockwork(begin, max(int(own[-1]) for own in every), size)
    made = Common(LoggedRows(np.array([], dtype=STAMPS), np.array([], dtype=np.int64), ()), step)
    channels = [_channel(pieces, name, grid, made) for name in names]
    kept = _whole([channel.averages for channel in channels])
    columns = [_column(channel.column, channel.averages.at(kept)) for channel in channels]
    for channel in channels:
        _say(made, channel, channel.averages.at(kept))
    stamps = grid.ends[kept] - (size if at_start else 0)
    numbers = np.max([column.rows for column in columns], axis=0)
    made.rows = LoggedRows(stamps.astype(STAMPS), numbers, columns)
    return made


@dataclass(frozen=True, slots=True)
class _Channel:
    """A channel on the common intervals: its name, files, own intervals [s], readings as they were, averages."""

    name: str
    files: tuple[str, ...]
    intervals: tuple[float, ...]
    column: LoggedColumn | None
    averages: Averages


def _whole(every: Sequence[Averages]) -> Ticks:
    """The intervals with readings, from the first to the last in which any channel has more than a part of one."""
    some = np.flatnonzero(np.any([own.row >= 0 for own in every], axis=0))
    filled = np.flatnonzero(np.any([own.kind != CODE[ReadingKind.BLANK] for own in every], axis=0))
    return some[(some >= filled[0]) & (some <= filled[-1])] if len(filled) else some


def _ended(file: File) -> File:
    """A file with stamps at the end of its intervals."""
    if not file.at_start or not len(file.readings.times):
        return file
    times = ticks(file.readings.times)
    moved = (times + lengths(times, at_start=True)).astype(STAMPS)
    rows = LoggedRows(moved, file.readings.logged.rows, file.readings.logged.columns)
    return replace(file, readings=replace(file.readings, rows=rows), at_start=False)


def _channel(files: Sequence[File], name: str, grid: Clockwork, made: Common) -> _Channel:
    """One channel on the common intervals, from every file that has it."""
    holding = [(number, file) for number, file in enumerate(files) if name in file.own.values()]
    if not holding:
        empty = Series(*(np.array([], dtype=np.int64),) * 2, np.array([]), np.array([], dtype=np.uint8))
        return _Channel(name, (), (), None, average(empty, grid))
    stamps, column = _alone(holding[0][1], name) if len(holding) == 1 else _together(holding, name, made)
    series = Series(stamps - lengths(stamps, at_start=False), stamps, column.values, column.kinds)
    names = tuple(file.name for _, file in holding)
    return _Channel(name, names, intervals_of(stamps), column, average(series, grid))


def _alone(file: File, name: str) -> tuple[Ticks, LoggedColumn]:
    """Stamps and readings of a channel that one file has."""
    index = next(index for index, own in file.own.items() if own == name)
    column = file.readings.logged.columns[index]
    source = np.zeros(len(column), dtype=np.int64) if column.source is None else column.source
    return ticks(file.readings.times), replace(column, sources=file.readings.sources(index), source=source)


def _together(holding: Sequence[tuple[int, File]], name: str, made: Common) -> tuple[Ticks, LoggedColumn]:
    """Stamps and readings of a channel of several files; what they say differently is a clash."""
    only = [(file.readings, {index: own for index, own in file.own.items() if own == name}) for _, file in holding]
    rows, clashes = merged(only, [name])
    for place, clash in clashes.items():
        number = holding[place][0]
        known = made.clashes.setdefault(number, Clash(0, clash.first))
        known.count, known.first = known.count + clash.count, min(known.first, clash.first)
    return ticks(rows.times), rows.columns[0]


def _say(made: Common, channel: _Channel, own: Averages) -> None:
    """What was done to a channel, and what of it stays blank."""
    name = channel.name
    covered = own.coverage[own.kind == CODE[ReadingKind.NUMBER]]
    if len(covered) and channel.intervals != (made.step,):
        low, high = (f"{100.0 * share:.4g}" for share in (covered.min(), covered.max()))
        share = f"{low} %" if low == high else f"{low} to {high} %"
        steps = " and ".join(length(step) for step in channel.intervals)
        files = ", ".join(channel.files)
        made.words.append(f"{name} ({files}): {steps} averaged to {length(made.step)}, coverage {share}")
    if own.short:
        words = f"{name}: {own.short} intervals covered to less than {LEAST_COVERAGE:.0%}"
        made.blank.append((channel.files[0], words))
    if own.too_long:
        words = f"{name}: {own.too_long} readings stand for more than {length(made.step)} each"
        made.blank.append((channel.files[0], words))


def length(step: float) -> str:
    """A length of time in words."""
    return f"{step / 60.0:g} min" if step >= 60.0 else f"{step:g} s"


def _column(column: LoggedColumn | None, own: Averages) -> LoggedColumn:
    """The averages as a column; words and places are those of the reading that tells."""
    at = np.maximum(own.row, 0)
    kinds = own.kind
    texts = objects([""] * len(kinds))
    numbers = kinds == CODE[ReadingKind.NUMBER]
    texts[numbers] = [f"{value:.6g}" for value in own.value[numbers].tolist()]
    short = (kinds == CODE[ReadingKind.BLANK]) & (own.coverage > 0.0)
    texts[short] = [f"coverage {share:.0%}" for share in own.coverage[short].tolist()]
    if column is None or not len(column):
        return LoggedColumn(own.value, kinds, Texts(texts, own.value), np.zeros(len(kinds), dtype=np.int64))
    words = np.flatnonzero(~numbers & (own.row >= 0) & (kinds != CODE[ReadingKind.BLANK]))
    texts[words] = [column.texts[place] for place in own.row[words].tolist()]
    rows = np.where(own.row >= 0, column.rows[at], 0)
    source = None if column.source is None else column.source[at]
    return LoggedColumn(own.value, kinds, Texts(texts, own.value), rows, column.sources, source)
