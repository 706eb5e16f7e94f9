"""The results workbook as a file: sheets, cells, formats, defined names, print set-up.

Text is always written as text: never a formula, never a link.  A formula is written with the value it had
when it was computed, so that a viewer that does not calculate shows it too.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date, datetime
from functools import reduce
from io import BytesIO
from operator import or_
from typing import Any

import xlsxwriter
from xlsxwriter.utility import xl_col_to_name
from xlsxwriter.worksheet import Worksheet

from reporter.errors import OutputError

#: What a cell, and a formula, may hold at most in a workbook.
MOST_TEXT, MOST_FORMULA = 32_000, 8_000
_MOST_HEADER = 200
_LINE_HEIGHT, _MOST_HEIGHT = 12.0, 400.0
#: Width of a character of wrapped text in the unit of column widths, words that do not fill a line included.
_CHARACTER = 0.93

_FONT = {"font_name": "Arial", "font_size": 9, "valign": "top"}
_INK, _RULE = "#1F3A4D", "#D0D5DA"
_YELLOW = {"bg_color": "#FFF6D6", "border": 1, "border_color": "#E3CF8F"}
_GREEN = {"bg_color": "#EEF3EA", "border": 1, "border_color": "#C9D8BE"}
_STYLES: dict[str, dict[str, Any]] = {
    "title": {"bold": True, "font_size": 15, "font_color": _INK},
    "note": {"font_color": "#5A6570", "italic": True},
    "section": {"bold": True, "font_size": 11, "font_color": _INK, "bottom": 2, "bottom_color": _INK},
    "group": {"bold": True, "font_color": _INK, "bg_color": "#F3F6F8"},
    "head": {
        "bold": True, "text_wrap": True, "valign": "vcenter", "bg_color": "#E4EAEE", "font_color": _INK,
        "top": 1, "bottom": 1, "border_color": "#8A98A5",
    },
    "text": {"align": "left"},
    "right": {"align": "right"},
    "after": {"align": "left", "indent": 1},
    "wrap": {"text_wrap": True},
    "strong": {"bold": True, "text_wrap": True},
    "center": {"align": "center"},
    "key": {"font_name": "Consolas", "font_size": 8, "text_wrap": True},
    "number": {"align": "right"},
    "raw": {"align": "right", "font_color": "#7A8590"},
    "input": {**_YELLOW, "align": "right"},
    "given": {**_GREEN, "align": "right"},
    "input_text": {**_YELLOW, "text_wrap": True},
}  # fmt: skip
_WRAPPED = frozenset(name for name, style in _STYLES.items() if style.get("text_wrap"))
#: How the heading of a column stands over cells of a style.
_HEADS = {"number": "head right", "input": "head right", "raw": "head right", "after": "head after"}
DATE, TIME = "yyyy-mm-dd", "yyyy-mm-dd hh:mm:ss"


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: its heading, its width in characters and the style of its text cells."""

    name: str
    width: float = 12.0
    style: str = "text"


class _Worksheet(Worksheet):  # type: ignore[misc]
    """A sheet whose formulas are written as they are: none of ours has a function of the kind that is looked for
    and renamed, and a text inside a formula must not be taken for one."""

    def _prepare_formula(self, formula: str, expand_future_functions: bool = False) -> str:
        return formula.removeprefix("=")


@dataclass
class Book:
    """The workbook while it is written; `report` names it in the footer of each printed page."""

    issued: datetime
    report: str
    metric_paper: bool
    _buffer: BytesIO = field(default_factory=BytesIO)
    _formats: dict[tuple[str, str], Any] = field(default_factory=dict)
    _names: dict[str, str] = field(default_factory=dict)

    def __post_init__(self) -> None:
        options = {
            "in_memory": True,
            "strings_to_formulas": False,
            "strings_to_urls": False,
            "strings_to_numbers": False,
            "nan_inf_to_errors": False,
        }
        self._file = xlsxwriter.Workbook(self._buffer, options)
        created = self.issued.replace(tzinfo=None)
        self._file.set_properties({"title": self.report, "comments": "Results workbook", "created": created})
        self.rule = self._file.add_format({"bottom": 1, "bottom_color": _RULE})
        struck = {"font_strikeout": True, "font_color": "#8A949E", "bottom": 1, "bottom_color": _RULE}
        self.struck = self._file.add_format(struck)

    def sheet(self, name: str, *, wide: bool = False) -> Sheet:
        """A new sheet with the print set-up all sheets share; a wide one is printed on A3 or tabloid."""
        made = self._file.add_worksheet(name, _Worksheet)
        made.hide_gridlines(2)
        made.set_landscape()
        papers = (8, 9) if self.metric_paper else (3, 1)
        made.set_paper(papers[0 if wide else 1])
        made.fit_to_pages(1, 0)
        made.set_margins(left=0.5, right=0.5, top=0.6, bottom=0.7)
        report = self.report.replace("&", "&&")[:_MOST_HEADER]
        made.set_footer(f"&L&8{report}, {name}&R&8&P / &N")
        return Sheet(self, name, made)

    def format(self, style: str, numbers: str = "") -> Any:
        """The format of one or several styles and a number format, made once."""
        known = (style, numbers)
        if known not in self._formats:
            more = {"num_format": numbers} if numbers else {}
            parts = [_STYLES[name] for name in style.split()]
            self._formats[known] = self._file.add_format(reduce(or_, parts, _FONT) | more)
        return self._formats[known]

    def define(self, name: str, cells: str) -> None:
        """Name a cell or a range.

        Raises
        ------
        OutputError
            The name is taken or no defined name.
        """
        if name in self._names or self._file.define_name(name, f"={cells}") != 0:
            raise OutputError(f"{name!r} cannot name a cell of the workbook")
        self._names[name] = cells

    def has(self, name: str) -> bool:
        """Whether a name is taken."""
        return name in self._names

    def cells_of(self, name: str) -> str:
        """The cell or range of a name, e.g. ``Inputs!$C$12``."""
        return self._names[name]

    def close(self) -> bytes:
        """Finish, and give the file's bytes."""
        self._file.close()
        return self._buffer.getvalue()


@dataclass
class Sheet:
    """One sheet; rows and columns are counted from 0."""

    book: Book
    name: str
    made: Any
    row: int = 0
    _widths: dict[int, float] = field(default_factory=dict)
    _lines: int = 1

    def title(self, title: str, note: str = "") -> None:
        """The sheet's title and what it shows."""
        self.made.set_row(0, 24)
        self.made.write_string(0, 0, title, self.book.format("title"))
        if note:
            self.made.write_string(1, 0, note, self.book.format("note"))
        self.row = 3

    def section(self, title: str, columns: int, style: str = "section") -> None:
        """A heading over a part of the sheet, after an empty row; one of style ``group`` stands close."""
        if style == "section":
            self.row += 1
        for column in range(1, columns):
            self.made.write_blank(self.row, column, None, self.book.format(style))
        self.made.write_string(self.row, 0, title, self.book.format(style))
        self.row += 1

    def widths(self, columns: Sequence[Column]) -> None:
        """Set the widths of the columns."""
        for index, column in enumerate(columns):
            self.made.set_column(index, index, column.width)
            self._widths[index] = column.width

    def head(self, columns: Sequence[Column], *, freeze: int = -1, height: float = 30.0) -> None:
        """The heading row of a table; `freeze` is the number of columns that stay in view (-1: no freezing)."""
        for index, column in enumerate(columns):
            head = self.book.format(_HEADS.get(column.style, "head"))
            self.made.write_string(self.row, index, column.name, head)
        self.made.set_row(self.row, height)
        if freeze >= 0:
            self.widths(columns)
            self.made.freeze_panes(self.row + 1, freeze)
            self.made.repeat_rows(self.row)
        self.row += 1

    def next(self) -> None:
        """Go to the next row; the row left is as high as its longest wrapped text needs."""
        if self._lines > 1:
            self.made.set_row(self.row, min(_LINE_HEIGHT * self._lines + 1.0, _MOST_HEIGHT))
        self._lines = 1
        self.row += 1

    def rules(self, first: int, columns: int) -> None:
        """A thin line under each row from `first` to the one before the present row."""
        if self.row > first:
            rule = {"type": "formula", "criteria": "=TRUE", "format": self.book.rule}
            self.made.conditional_format(first, 0, self.row - 1, columns - 1, rule)

    def strike(self, first: int, column: int, condition: str) -> None:
        """Strike out the cells of a column from `first` to the row before, where a live condition holds."""
        rule = {"type": "formula", "criteria": f"={condition}", "format": self.book.struck}
        self.made.conditional_format(first, column, self.row - 1, column, rule)

    def text(self, column: int, text: str, style: str = "text") -> None:
        """Text as text, cut where a cell cannot hold it; an empty text leaves the cell empty."""
        if not text:
            return
        shown = text if len(text) <= MOST_TEXT else text[: MOST_TEXT - 1] + "…"
        if style.split()[0] in _WRAPPED and column in self._widths:
            self._lines = max(self._lines, math.ceil(len(shown) * _CHARACTER / self._widths[column]))
        self.made.write_string(self.row, column, shown, self.book.format(style))

    def texts(self, texts: Mapping[int, str] | Sequence[str], columns: Sequence[Column]) -> None:
        """Several texts in the styles of their columns."""
        cells = texts.items() if isinstance(texts, Mapping) else enumerate(texts)
        for column, text in cells:
            self.text(column, text, columns[column].style)

    def blank(self, column: int, style: str) -> None:
        """An empty cell that shows its style."""
        self.made.write_blank(self.row, column, None, self.book.format(style))

    def number(self, column: int, value: float, numbers: str = "", style: str = "number") -> None:
        """A number as it is."""
        self.made.write_number(self.row, column, value, self.book.format(style, numbers))

    def moment(self, column: int, moment: date, style: str = "text") -> None:
        """A date, or a date with its time."""
        numbers = TIME if isinstance(moment, datetime) else DATE
        self.made.write_datetime(self.row, column, moment, self.book.format(style, numbers))

    def live(self, column: int, formula: str, value: float | str, numbers: str = "", style: str = "number") -> None:
        """A formula with the value it has now.

        Raises
        ------
        OutputError
            The formula is longer than a cell can hold.
        """
        if len(formula) > MOST_FORMULA:
            raise OutputError(f"a formula of {len(formula)} characters does not fit a cell: {formula[:80]}…")
        self.made.write_formula(self.row, column, f"={formula}", self.book.format(style, numbers), value)

    def here(self, column: int) -> str:
        """The address of a cell of the present row, e.g. ``Inputs!$C$12``."""
        return f"{self.name}!${xl_col_to_name(column)}${self.row + 1}"
