"""A file on its way: the truth with what was done to it, and the truth that must still come out."""

from __future__ import annotations

import io
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import datetime
from typing import Any

import openpyxl

from tests.corpus.case import HEADERS, Held, number, usual
from tests.corpus.truth import TRUTH

#: A line of the table: its time and cells, a number where it is one.
Line = tuple[datetime, list[float | str]]


@dataclass
class Draft:
    """Everything that a disturbance may change; `lost` rows and changed cells change the truth with the file."""

    book: bool
    lines: list[Line] = field(default_factory=lambda: [(row[0], list(row[1:])) for row in TRUTH])
    held: dict[datetime, list[Held]] = field(
        default_factory=lambda: {row[0]: [("number", value) for value in row[1:]] for row in TRUTH}
    )
    headers: list[list[str]] = field(default_factory=lambda: [list(HEADERS)])
    more: list[list[str]] = field(default_factory=list)
    answers: dict[str, str] = field(default_factory=lambda: {"stamp": "interval end"})
    above: list[list[str]] = field(default_factory=list)
    below: list[list[str]] = field(default_factory=list)
    between: dict[int, list[str]] = field(default_factory=dict)
    clock: Callable[[datetime], Any] = usual
    shift: Callable[[datetime], datetime] = lambda moment: moment
    delimiter: str = ","
    decimal: str = "."
    group: str = ""
    around: str = "{}"
    encoding: str = "utf-8"
    end: str = "\n"
    time_last: bool = False
    last: str = ""
    hidden_row: bool = False
    sheets: str = "one"
    broken: datetime | None = None

    def set(self, at: int, column: int, written: float | str, held: Held) -> None:
        """Another cell, and what it holds."""
        moment, cells = self.lines[at]
        cells[column] = written
        for other, own in self.lines:
            if other == moment:
                own[column] = written
        self.held[moment][column] = held

    def expected(self) -> list[tuple[datetime, tuple[Held, ...]]]:
        """The rows that must come, in time order."""
        return sorted((self.shift(moment), tuple(held)) for moment, held in self.held.items())

    # ---- as a file -------------------------------------------------------------------------------------

    @property
    def name(self) -> str:
        """The name of the file."""
        return "logger.xlsx" if self.book else "logger.csv"

    def content(self) -> bytes:
        """The file."""
        return self._workbook() if self.book else self._text().encode(self.encoding, "replace")

    def _cells(self, at: int, *, typed: bool) -> list[Any]:
        moment, cells = self.lines[at]
        stamps = self.clock(self.shift(moment))
        shown = [self._shown(cell, typed=typed) for cell in [*cells, *(column[at] for column in self.more)]]
        stamps = stamps if isinstance(stamps, list) else [stamps]
        return [*shown, *stamps] if self.time_last else [*stamps, *shown]

    def _shown(self, cell: float | str, *, typed: bool) -> Any:
        if typed:
            return cell
        text = number(cell, self.decimal, self.group) if isinstance(cell, float) else cell
        return self.around.format(text)

    def _heads(self) -> list[list[str]]:
        stamps = len(self.clock(TRUTH[0][0])) if isinstance(self.clock(TRUTH[0][0]), list) else 1
        made = []
        for row in self.headers:
            first, rest = (["Date", "Clock"] if stamps == 2 and row[0] else row[:1] * stamps), row[1:]
            made.append([*rest, *first] if self.time_last else [*first, *rest])
        return made

    def _text(self) -> str:
        rows: list[list[str]] = [*self.above, *self._heads()]
        for at in range(len(self.lines)):
            if at in self.between:
                rows.append(self.between[at])
            cells = [str(cell) for cell in self._cells(at, typed=False)]
            rows.append([*cells[:2], "7", *cells[2:]] if self.lines[at][0] == self.broken else cells)
        rows += self.below
        return self.end.join([*(self.delimiter.join(row) for row in rows), self.last])

    def _workbook(self) -> bytes:
        book = openpyxl.Workbook()
        sheet = book.active
        for row in [*self.above, *self._heads()]:
            sheet.append(row)
        for at in range(len(self.lines)):
            if self.sheets != "one" and at in (20, 40):
                sheet = book.create_sheet() if self.sheets == "many" else sheet
                for row in [[], *self._heads()]:
                    sheet.append(row)
            if at in self.between:
                sheet.append(self.between[at])
            sheet.append(self._cells(at, typed=True))
        for row in self.below:
            sheet.append(row)
        if self.hidden_row:
            sheet.row_dimensions[9].hidden = True
        buffer = io.BytesIO()
        book.save(buffer)
        return buffer.getvalue()
