"""Long tables by column: which rows are surely readings, and what each different cell holds, looked at once.

What a row is, and what a cell holds, is said by `sort` and `wording`; here it is only said of many at a time.
Rows that are anything but ordinary are left to them.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from reporter.intake.dates import Fault
from reporter.intake.foreign.lines import PlainRows
from reporter.intake.foreign.moments import Stamps, stamps_of
from reporter.intake.foreign.numbers import NumberStyle
from reporter.intake.foreign.sort import usual_length
from reporter.intake.foreign.tables import Table, blank
from reporter.intake.foreign.wording import read_cell
from reporter.intake.foreign.words import is_foot
from reporter.intake.readings import most_of
from reporter.intake.sheets import reading_words, sentinels
from reporter.intake.table import Raw
from reporter.logged import CODE, Codes, Counts, Floats, ReadingKind, Where, objects

#: Tables of fewer rows are read row by row.
LONG = 2_000
_PLAIN = {mark: re.compile(rf"[+\-]?\d{{1,15}}(?:{re.escape(mark)}\d{{1,15}})?") for mark in ".,"}


@dataclass(frozen=True, slots=True)
class Coded:
    """The cells of a column: each different one once, and for each row the position of its own."""

    distinct: list[Raw]
    codes: Counts

    @classmethod
    def of(cls, cells: Sequence[Raw]) -> Coded:
        """The same of cells, none of which is yes or no (these equal one and nought)."""
        if set(map(type, cells)) == {float}:
            each, codes = np.unique(np.array(cells, dtype=np.float64), return_inverse=True)
            return cls(each.tolist(), codes)
        found = {cell: code for code, cell in enumerate(dict.fromkeys(cells))}
        return cls(list(found), np.fromiter(map(found.__getitem__, cells), np.int64, len(cells)))

    def cells(self) -> list[Raw]:
        """The cells as they stand."""
        return [self.distinct[code] for code in self.codes.tolist()]

    def where(self, marked: Sequence[bool]) -> Where:
        """The rows whose cell is marked."""
        return np.array(marked, dtype=bool)[self.codes] if len(marked) else np.zeros(0, dtype=bool)


@dataclass(frozen=True, slots=True)
class Ordinary:
    """Rows that are surely readings: their positions, their stamps by column of times, their cells by column."""

    rows: Counts
    stamps: tuple[Stamps, ...]
    cells: Mapping[int, Coded]

    def take(self, where: Where) -> Ordinary:
        """Some of the rows."""
        stamps = tuple(Stamps(s.day[where], s.clock[where], s.offset[where], s.read[where]) for s in self.stamps)
        cells = {column: Coded(own.distinct, own.codes[where]) for column, own in self.cells.items()}
        return Ordinary(self.rows[where], stamps, cells)


def ordinary_rows(
    table: Table, times: Sequence[int], readings: Sequence[int], order: str, *, usual: int, cut_off: bool = False
) -> Ordinary:
    """The rows of a table that are surely readings: a time that can be read, and no word where a number may be.

    Parameters
    ----------
    table
        The table.
    times, readings
        Columns of the page.
    order
        How dates are written.
    usual
        The number of cells of a row, 0 where no cell can shift.
    cut_off
        Whether the file ends without the end of its line: its last row is then no ordinary one.
    """
    page = table.page
    rows = np.arange(table.first, table.last)
    if cut_off:
        rows = rows[rows != len(page.rows) - 1]
    if usual:
        rows = rows[np.array(page.widths(table.first, table.last), dtype=np.int64)[rows - table.first] == usual]
    rows, cells, lanes = _cells(table, rows, readings)
    stamps = tuple(stamps_of(cells[column], order) for column in times)
    filled = np.zeros(len(rows), dtype=np.int64)
    for own in lanes.values():
        filled += ~own.where([blank(cell) for cell in own.distinct])
    several = (filled != 1) | (len(readings) <= 1)
    read = np.logical_and.reduce([s.read for s in stamps])
    texts = (cells[column] if column in cells else lanes[column].cells() for column in table.columns)
    return Ordinary(rows, stamps, lanes).take(read & several & ~_foot(texts, len(rows)))


def rows_known(table: Table, times: Sequence[int], readings: Sequence[int], order: str) -> list[int]:
    """The rows of a long table that are surely readings; none of a short one."""
    if table.last - table.first < LONG:
        return []
    known = ordinary_rows(table, times, readings, order, usual=usual_length(table))
    return list(known.rows.tolist())


def _cells(
    table: Table, rows: Counts, readings: Sequence[int]
) -> tuple[Counts, dict[int, list[Raw]], dict[int, Coded]]:
    """The rows that hold plain cells alone, their cells by column, and those of the readings coded."""
    page, where = table.page, rows.tolist()
    if isinstance(page.rows, PlainRows) and where and (coded := page.rows.coded(readings, where)) is not None:
        others = [column for column in table.columns if column not in readings]
        lanes = {column: Coded(list(own), codes) for column, (own, codes) in zip(readings, coded, strict=True)}
        return rows, dict(zip(others, page.columns(others, where), strict=True)), lanes
    cells = dict(zip(table.columns, page.columns(table.columns, where), strict=True))
    if not isinstance(page.rows, PlainRows) and not (sound := _sound(cells, rows)).all():
        rows = rows[sound]
        cells = {column: [own[i] for i in np.flatnonzero(sound).tolist()] for column, own in cells.items()}
    return rows, cells, {column: Coded.of(cells[column]) for column in readings}


def _sound(cells: Mapping[int, Sequence[Raw]], rows: Counts) -> Where:
    """Where no cell is a yes or no, and none holds further lines."""
    sound = np.ones(len(rows), dtype=bool)
    for own in cells.values():
        types = set(map(type, own))
        if bool in types:
            sound &= np.array([not isinstance(cell, bool) for cell in own], dtype=bool)
        if str in types:
            sound &= np.array([not isinstance(cell, str) or "\n" not in cell for cell in own], dtype=bool)
    return sound


def _foot(columns: Iterable[Sequence[Raw]], size: int) -> Where:
    """Where the first filled cell of a row is the first word of an average or the like."""
    foot, open_ = np.zeros(size, dtype=bool), np.ones(size, dtype=bool)
    for own in columns:
        where = np.flatnonzero(open_).tolist()
        some = own if len(where) == size else [own[i] for i in where]
        if all(isinstance(cell, str) and cell[:1].isdigit() for cell in some):
            break
        coded = Coded.of(some)
        foot[where] |= coded.where([_is_foot(cell) for cell in coded.distinct])
        open_[where] &= coded.where([blank(cell) for cell in coded.distinct])
    return foot


def _is_foot(cell: Raw) -> bool:
    """Whether a cell is a word of the foot; none of them begins with a digit."""
    return isinstance(cell, str) and not cell[:1].isdigit() and any(map(str.isalpha, cell)) and is_foot(cell)


@dataclass(frozen=True, slots=True)
class Held:
    """What each different cell of a column holds; `faults` are those that cannot be read, by their position."""

    values: Floats
    kinds: Codes
    texts: Where
    faults: Mapping[int, Fault]


def held(distinct: Sequence[Raw], unit: str, style: NumberStyle, words: Mapping[str, str]) -> Held:
    """What different cells hold, as `read_cell` says; plain numbers without asking it."""
    values, plain = _plain_numbers(distinct, unit, style, words)
    kinds = np.full(len(distinct), CODE[ReadingKind.NUMBER], dtype=np.uint8)
    texts = objects([cell if isinstance(cell, str) else None for cell in distinct])
    faults: dict[int, Fault] = {}
    for code in np.flatnonzero(~plain).tolist():
        read = read_cell(distinct[code], unit, style, words)
        if isinstance(read, Fault):
            faults[code] = read
            values[code], kinds[code], texts[code] = np.nan, CODE[ReadingKind.ERROR], str(distinct[code])
        else:
            values[code] = np.nan if read.value is None else read.value
            kinds[code], texts[code] = CODE[read.kind], read.text
    return Held(values, kinds, texts, faults)


def _plain_numbers(
    distinct: Sequence[Raw], unit: str, style: NumberStyle, words: Mapping[str, str]
) -> tuple[Floats, Where]:
    """The numbers among some cells, and which cells are numbers that mean nothing but themselves."""
    pattern, known = _PLAIN[style.decimal], words.keys() | reading_words().keys()
    values, comma = np.full(len(distinct), np.nan), style.decimal == ","
    for code, cell in enumerate(distinct):
        if type(cell) is float:
            values[code] = cell
        elif type(cell) is str and pattern.fullmatch(cell) and cell not in known:
            values[code] = float(cell.replace(",", ".") if comma else cell)
    doubtful = [*sentinels(), *(number for word in words if (number := _number(word)) is not None)]
    return values, (np.abs(values) <= most_of(unit)) & ~np.isin(values, doubtful)


def _number(word: str) -> float | None:
    try:
        return float(word)
    except ValueError:
        return None
