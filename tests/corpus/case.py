"""What a case of the corpus is, and how its file is written from the truth."""

from __future__ import annotations

import io
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import datetime
from typing import Any

import openpyxl

from tests.corpus.truth import CHANNELS, TRUTH, UNITS, Row

HEADERS = ("Time", "NOx [ppm dry]", "CO [ppm dry]", "O2 [% dry]", "CO2 [% dry]")
#: The only answer that a plain file needs: none says what its stamps stand for.
END = {"stamp": "interval end"}
#: Kind and value of a cell, as a reading has them.
Held = tuple[str, float | None]


@dataclass(frozen=True)
class Case:
    """A file and what must come of it: the truth, or the question or problem that stops it.

    `cells` holds what stands in a cell in place of its number, by row and channel; `extra` files lie in its folder;
    `stops` is the key of a question, or the code of a problem; `says` are words that must be shown.
    """

    name: str
    arrives: str
    content: bytes
    file: str = "logger.csv"
    answers: Mapping[str, str] = field(default_factory=lambda: END)
    stops: str = ""
    rows: Sequence[Row] = TRUTH
    channels: Sequence[str] = CHANNELS
    cells: Mapping[tuple[int, str], Held] = field(default_factory=dict)
    basis: str = "dry"
    units: Mapping[str, str] = field(default_factory=lambda: UNITS)
    notes: frozenset[str] = frozenset()
    says: Sequence[str] = ()
    day: bool = False
    extra: Mapping[str, bytes] = field(default_factory=dict)

    def expected(self) -> list[tuple[datetime, tuple[Held, ...]]]:
        """Each row that must come: its time, and kind and value in each channel."""
        made = []
        for number, row in enumerate(self.rows):
            plain = dict(zip(CHANNELS, row[1:], strict=True))
            held = tuple(self.cells.get((number, name), ("number", plain[name])) for name in self.channels)
            made.append((row[0], held))
        return made


def number(value: float, decimal: str = ".", group: str = "", digits: int = 2) -> str:
    """A number with its marks."""
    whole, _, part = f"{value:,.{digits}f}".partition(".")
    return whole.replace(",", group) + (decimal + part if part else "")


def comma(value: float) -> str:
    """A number with a decimal comma."""
    return number(value, ",")


def usual(moment: datetime) -> str:
    """The time as most loggers write it."""
    return f"{moment:%Y-%m-%d %H:%M:%S}"


@dataclass
class Sheet:
    """A text table on its way: everything that a case may change."""

    delimiter: str = ","
    headers: Sequence[Sequence[str]] = (HEADERS,)
    clock: Callable[[datetime], str] = usual
    show: Callable[[float], str] = number
    rows: Sequence[Row] = TRUTH
    above: Sequence[str] = ()
    below: Sequence[str] = ()
    order: Sequence[int] | None = None
    put: Mapping[tuple[int, int], str] = field(default_factory=dict)
    before: Mapping[int, Sequence[str]] = field(default_factory=dict)
    end: str = "\n"

    def text(self) -> str:
        """The file's text; `put` holds cells by row and column, `before` lines that stand before a row."""
        lines = [*self.above, *(self.delimiter.join(row) for row in self.headers)]
        for at in range(len(self.rows)) if self.order is None else self.order:
            lines += self.before.get(at, ())
            moment, *values = self.rows[at]
            cells = [self.clock(moment), *map(self.show, values)]
            for column in range(len(cells)):
                cells[column] = self.put.get((at, column), cells[column])
            lines.append(self.delimiter.join(cells))
        return self.end.join([*lines, *self.below]) + self.end


def text(**how: Any) -> str:
    """The truth as a text table."""
    return Sheet(**how).text()


def plain(encoding: str = "utf-8", **how: Any) -> bytes:
    """The bytes of a text table."""
    return text(**how).encode(encoding)


def book(fill: Callable[[Any], None]) -> bytes:
    """The bytes of a workbook."""
    made = openpyxl.Workbook()
    fill(made)
    buffer = io.BytesIO()
    made.save(buffer)
    return buffer.getvalue()


def rows_on(sheet: Any, headers: Sequence[Any] = HEADERS, top: int = 0, rows: Sequence[Sequence[Any]] = TRUTH) -> None:
    """Header and rows appended to a sheet below `top` lines."""
    for k in range(top):
        sheet.append([f"title line {k + 1}"])
    sheet.append(list(headers))
    for row in rows:
        sheet.append(list(row))


def without(*gone: int) -> tuple[Row, ...]:
    """The truth without some of its rows."""
    return tuple(row for at, row in enumerate(TRUTH) if at not in gone)


def words(column: int, at: int, word: str) -> bytes:
    """The plain file with one cell of a channel's column changed."""
    return plain(put={(at, column): word})
