"""Several series as one by their time stamps; what two of them say differently is counted."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime

import numpy as np

from reporter.logged import CODE, Counts, LoggedColumn, LoggedRows, ReadingKind, Texts, Where, objects
from reporter.problems import Place
from reporter.record import Readings


@dataclass(slots=True)
class Clash:
    """How often a series says something else than those before it, and when first."""

    count: int
    first: datetime


@dataclass(slots=True)
class _Column:
    """A column being put together; where nothing was logged it is blank."""

    values: Where
    kinds: Where
    texts: Where
    rows: Counts
    source: Counts
    filled: Where
    sources: list[Place] = field(default_factory=list)


def merged(
    series: Sequence[tuple[Readings, Mapping[int, str]]], names: Sequence[str]
) -> tuple[LoggedRows, dict[int, Clash]]:
    """One row for each time stamp of any series, one column for each name.

    Parameters
    ----------
    series
        Each with the names of those of its columns that are taken, by their position.
    names
        The columns of the result.

    Returns
    -------
    The rows in time order, and the clashes by the position of the series that met them.
    """
    times = np.unique(np.concatenate([readings.times for readings, _ in series]))
    if len(series) == 1 and len(times) == len(series[0][0].times) and sorted(series[0][1].values()) == sorted(names):
        return _alone(*series[0], names), {}
    rows = np.zeros(len(times), dtype=np.int64)
    for readings, _ in reversed(series):
        rows[np.searchsorted(times, readings.times)[::-1]] = readings.logged.rows[::-1]
    made = {name: _empty(rows) for name in names}
    clashes: dict[int, Clash] = {}
    for number, (readings, own) in enumerate(series):
        where = np.searchsorted(times, readings.times)
        _, firsts = np.unique(where, return_index=True)
        differs = [_add(made[name], readings, index, (where, firsts)) for index, name in own.items()]
        if differs and (count := int(sum(map(np.count_nonzero, differs)))):
            first = int(np.argmax(np.logical_or.reduce(differs)))
            clashes[number] = Clash(count, readings.times[first].item())
    return LoggedRows(times, rows, [_column(made[name]) for name in names]), clashes


def _alone(readings: Readings, own: Mapping[int, str], names: Sequence[str]) -> LoggedRows:
    """The one series there is, its columns in the order of the names."""
    index = {name: at for at, name in own.items()}
    columns = [
        replace(readings.logged.columns[index[name]], sources=readings.sources(index[name])) for name in names
    ]  # fmt: skip
    return LoggedRows(readings.times, readings.logged.rows, columns)


def _empty(rows: Counts) -> _Column:
    size = len(rows)
    kinds = np.full(size, CODE[ReadingKind.BLANK], dtype=np.uint8)
    source = np.zeros(size, dtype=np.int64)
    return _Column(np.full(size, np.nan), kinds, objects([""] * size), rows.copy(), source, np.zeros(size, dtype=bool))


def _add(column: _Column, readings: Readings, index: int, places: tuple[Counts, Counts]) -> Where:
    """Take the readings of one more series where none is known yet; where it says something else than is known."""
    own, (where, firsts) = readings.logged.columns[index], places
    new = firsts[~column.filled[where[firsts]]]
    at = where[new]
    column.values[at], column.kinds[at], column.rows[at] = own.values[new], own.kinds[new], own.rows[new]
    column.texts[at] = own.texts.known[new]
    column.source[at] = len(column.sources) + (0 if own.source is None else own.source[new])
    column.sources += readings.sources(index)
    column.filled[at] = True
    known = column.values[where]
    same: Where = (known == own.values) | (np.isnan(known) & np.isnan(own.values))
    differs: Where = ~same | (column.kinds[where] != own.kinds)
    return differs


def _column(made: _Column) -> LoggedColumn:
    texts = Texts(made.texts, made.values)
    return LoggedColumn(made.values, made.kinds, texts, made.rows, tuple(made.sources), made.source)
