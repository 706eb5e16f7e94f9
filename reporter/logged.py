"""Logged readings by column: arrays of numbers and kinds, texts made when asked for, rows as a view.

A series of a hundred thousand rows costs a few arrays; a single row or reading is an object only while it is
looked at.  Each reading knows the row of the file it came from, and which file that was.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from datetime import datetime
from enum import Enum
from math import isfinite
from typing import Any, TypeAlias, overload

import numpy as np
from numpy.typing import NDArray

from reporter.problems import Place

Floats: TypeAlias = NDArray[np.float64]
Counts: TypeAlias = NDArray[np.int64]
Codes: TypeAlias = NDArray[np.uint8]
Moments: TypeAlias = NDArray[np.datetime64]
Where: TypeAlias = NDArray[Any]

#: Resolution of time stamps: that of `datetime`.
STAMPS = "datetime64[us]"


class ReadingKind(Enum):
    """What one cell of the Readings sheet holds."""

    NUMBER = "number"
    BLANK = "blank"
    NOT_DETECTED = "not detected"
    BELOW = "below a stated value"
    OVER = "over range"
    CALIBRATION = "calibration"
    ERROR = "error value"


#: Kinds by the code they have in an array, and the codes.
KINDS = tuple(ReadingKind)
CODE = {kind: code for code, kind in enumerate(KINDS)}


@dataclass(frozen=True, slots=True)
class Reading:
    """One logged value: its kind, the number (or the bound of ``<x`` and ``>x``), and the raw text."""

    kind: ReadingKind
    value: float | None
    text: str


@dataclass(frozen=True, slots=True)
class ReadingRow:
    """One logged interval: its time stamp, the row it stands in, one reading per channel."""

    time: datetime
    row: int
    readings: tuple[Reading, ...]


def plain_number(value: float) -> str:
    """A number as it would be typed: up to 15 digits, no exponent where it can be avoided."""
    if isfinite(value) and value == int(value) and abs(value) < 1e15:
        return str(int(value))
    return f"{value:.15g}"


class Texts(Sequence[str]):
    """The texts of a column: as they stood, or made of the number where a cell held a number.

    Parameters
    ----------
    known
        Array of texts, None where the number says it.
    numbers
        The column's numbers, same length.
    """

    __slots__ = ("_known", "_numbers")

    def __init__(self, known: Where, numbers: Floats) -> None:
        self._known, self._numbers = known, numbers

    def __len__(self) -> int:
        return len(self._known)

    @overload
    def __getitem__(self, index: int) -> str: ...
    @overload
    def __getitem__(self, index: slice) -> Sequence[str]: ...
    def __getitem__(self, index: int | slice) -> str | Sequence[str]:
        if isinstance(index, slice):
            return Texts(self._known[index], self._numbers[index])
        text = self._known[index]
        return plain_number(float(self._numbers[index])) if text is None else str(text)

    def __iter__(self) -> Iterator[str]:
        for text, number in zip(self._known.tolist(), self._numbers.tolist(), strict=True):
            yield plain_number(number) if text is None else text

    def take(self, where: Where) -> Texts:
        """The texts at some positions."""
        return Texts(self._known[where], self._numbers[where])

    @property
    def known(self) -> Where:
        """The texts that stood in the file, None where the number says it."""
        return self._known


@dataclass(frozen=True, slots=True, eq=False)
class LoggedColumn:
    """The readings of one channel, in time order.

    `values` holds numbers and bounds, NaN where a reading has none; `kinds` the codes of `KINDS`; `rows` the row
    or line of each reading in its file; `source` the position of that file in `sources`, whose places say file,
    sheet and the letter of the column (empty where all stands in one file, the place of the series).
    """

    values: Floats
    kinds: Codes
    texts: Texts
    rows: Counts
    sources: tuple[Place, ...] = ()
    source: Counts | None = None

    def __len__(self) -> int:
        return len(self.values)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, LoggedColumn):
            return NotImplemented
        same = np.array_equal(self.kinds, other.kinds) and np.array_equal(self.values, other.values, equal_nan=True)
        return same and np.array_equal(self.rows, other.rows) and list(self.texts) == list(other.texts)

    def __hash__(self) -> int:
        return hash((self.values.tobytes(), self.kinds.tobytes()))

    def is_kind(self, *wanted: ReadingKind) -> NDArray[np.bool_]:
        """Where the readings are of one of some kinds."""
        return is_kind(self.kinds, *wanted)

    @property
    def measured(self) -> Floats:
        """The measured numbers, NaN where a reading is a word, a bound or nothing."""
        return np.where(self.kinds == CODE[ReadingKind.NUMBER], self.values, np.nan)

    def take(self, where: Where) -> LoggedColumn:
        """The column at some positions."""
        source = None if self.source is None else self.source[where]
        return replace(
            self, values=self.values[where], kinds=self.kinds[where], texts=self.texts.take(where),
            rows=self.rows[where], source=source,
        )  # fmt: skip

    def reading(self, index: int) -> Reading:
        """One reading."""
        value = float(self.values[index])
        return Reading(KINDS[self.kinds[index]], None if value != value else value, self.texts[index])

    def readings(self) -> Iterator[Reading]:
        """The readings, one after the other."""
        for code, value, text in zip(self.kinds.tolist(), self.values.tolist(), self.texts, strict=True):
            yield Reading(KINDS[code], None if value != value else value, text)


class LoggedRows(Sequence[ReadingRow]):
    """Rows in time order, kept by column; a row is made when it is asked for.

    Parameters
    ----------
    times
        Time stamps, ascending, `STAMPS`.
    rows
        The row of each in the file its first reading came from.
    columns
        One for each channel, of the same length.
    """

    __slots__ = ("columns", "rows", "times")

    def __init__(self, times: Moments, rows: Counts, columns: Sequence[LoggedColumn]) -> None:
        self.times, self.rows, self.columns = times, rows, tuple(columns)

    @classmethod
    def of(cls, rows: Sequence[ReadingRow], width: int) -> LoggedRows:
        """The same of plain rows of a number of channels."""
        numbers = np.array([row.row for row in rows], dtype=np.int64)
        columns = []
        for index in range(width):
            own = [row.readings[index] for row in rows]
            values = np.array([np.nan if r.value is None else r.value for r in own], dtype=np.float64)
            kinds = np.array([CODE[r.kind] for r in own], dtype=np.uint8)
            columns.append(LoggedColumn(values, kinds, Texts(objects([r.text for r in own]), values), numbers))
        return cls(np.array([row.time for row in rows], dtype=STAMPS), numbers, columns)

    def __len__(self) -> int:
        return len(self.times)

    @overload
    def __getitem__(self, index: int) -> ReadingRow: ...
    @overload
    def __getitem__(self, index: slice) -> Sequence[ReadingRow]: ...
    def __getitem__(self, index: int | slice) -> ReadingRow | Sequence[ReadingRow]:
        if isinstance(index, slice):
            return tuple(self[i] for i in range(*index.indices(len(self))))
        readings = tuple(column.reading(index) for column in self.columns)
        return ReadingRow(self.times[index].item(), int(self.rows[index]), readings)

    def __iter__(self) -> Iterator[ReadingRow]:
        readings = zip(*(column.readings() for column in self.columns), strict=True) if self.columns else None
        for time, row in zip(self.times.tolist(), self.rows.tolist(), strict=True):
            yield ReadingRow(time, row, () if readings is None else next(readings))

    def __eq__(self, other: object) -> bool:
        if isinstance(other, tuple):
            return tuple(self) == other
        if not isinstance(other, LoggedRows):
            return NotImplemented
        same = np.array_equal(self.times, other.times) and np.array_equal(self.rows, other.rows)
        return same and self.columns == other.columns

    def __hash__(self) -> int:
        return hash((self.times.tobytes(), self.rows.tobytes()))

    def __repr__(self) -> str:
        return f"<{len(self)} rows of {len(self.columns)} channels>"


def is_kind(kinds: Codes, *wanted: ReadingKind) -> NDArray[np.bool_]:
    """Where readings are of one of some kinds."""
    among = np.zeros(len(KINDS), dtype=bool)
    among[[CODE[kind] for kind in wanted]] = True
    return among[kinds]


class Timed(Sequence[tuple[datetime, float]]):
    """Pairs of time stamp and number, made when they are asked for."""

    __slots__ = ("times", "values")

    def __init__(self, times: Sequence[datetime] = (), values: Sequence[float] = ()) -> None:
        self.times, self.values = times, values

    def __len__(self) -> int:
        return len(self.values)

    @overload
    def __getitem__(self, index: int) -> tuple[datetime, float]: ...
    @overload
    def __getitem__(self, index: slice) -> Sequence[tuple[datetime, float]]: ...
    def __getitem__(self, index: int | slice) -> tuple[datetime, float] | Sequence[tuple[datetime, float]]:
        if isinstance(index, slice):
            return Timed(self.times[index], self.values[index])
        return self.times[index], self.values[index]

    def __iter__(self) -> Iterator[tuple[datetime, float]]:
        return zip(self.times, self.values, strict=True)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Sequence) and list(self) == list(other)

    def __hash__(self) -> int:
        return hash(tuple(self.values))


def objects(values: Sequence[Any]) -> Where:
    """An array of objects, each as it is."""
    made = np.empty(len(values), dtype=object)
    made[:] = values
    return made
