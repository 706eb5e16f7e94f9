"""One table as it is read: its rows, their moments and its columns, put together from ordinary rows and others."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from reporter.intake.foreign.grid import Page
from reporter.intake.foreign.mapping import MappedColumn
from reporter.logged import CODE, STAMPS, Counts, Where, objects
from reporter.record import Reading

#: A column of the page, and what the mapping says of it.
Lane = tuple[int, MappedColumn]


@dataclass(slots=True)
class Column:
    """One channel of one table, as it is put together."""

    values: Where
    kinds: Where
    texts: Where


@dataclass(slots=True)
class Part:
    """One table read: positions of its rows, their moments [µs], its columns in the order of the lanes."""

    page: Page
    clock: int
    lanes: Sequence[Lane]
    rows: Counts
    moments: Counts
    columns: list[Column]

    @property
    def numbers(self) -> Counts:
        """The line or row numbers people see."""
        return np.asarray(self.page.lines, dtype=np.int64)[self.rows] if self.page.lines else self.rows + 1


def put_among(part: Part, rows: Sequence[int], moments: Sequence[datetime], readings: list[list[Reading]]) -> None:
    """Add further rows to a part, each at its place in the file."""
    every = np.append(part.rows, np.array(rows, dtype=np.int64))
    order = np.argsort(every, kind="stable")
    part.rows = every[order]
    part.moments = np.append(part.moments, np.array(moments, dtype=STAMPS).astype(np.int64))[order]
    for index, column in enumerate(part.columns):
        own = [row[index] for row in readings]
        values = np.array([np.nan if r.value is None else r.value for r in own])
        column.values = np.append(column.values, values)[order]
        column.kinds = np.append(column.kinds, np.array([CODE[r.kind] for r in own], dtype=np.uint8))[order]
        column.texts = np.append(column.texts, objects([r.text for r in own]))[order]
