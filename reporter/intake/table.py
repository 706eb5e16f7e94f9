"""What a sheet is between its file and the record: header cells and rows of cells, each with its address."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta

from reporter.intake.sheets import Sheet
from reporter.logged import plain_number as plain_number

#: Caps on one table: its columns, its fields (rows by columns), the characters of one text and of all texts.
MAX_COLUMNS, MAX_FIELDS, MAX_TEXT, MAX_TEXTS = 512, 1_200_000, 32_767, 500_000
#: What a cell may hold once it is read.
Raw = str | float | bool | datetime | date | time | timedelta | None


@dataclass(frozen=True, slots=True)
class Cell:
    """One cell: address, value, whether it is shown as a percentage, whether it is a formula never calculated.

    An error value (``#N/A``) is held as its text.
    """

    cell: str
    value: Raw
    percent: bool = False
    uncalculated: bool = False

    @property
    def text(self) -> str:
        """The cell as text, as a reader of the sheet would write it."""
        if self.percent and isinstance(self.value, float):
            return f"{plain_number(self.value * 100.0)} %"
        return show(self.value)

    @property
    def blank(self) -> bool:
        """Whether nothing stands in the cell."""
        return not self.uncalculated and (self.value is None or (isinstance(self.value, str) and not clean(self.value)))


@dataclass(frozen=True, slots=True)
class HeaderCell:
    """One header: address, column letter (or key), text, name without unit, unit text (may be empty)."""

    cell: str
    column: str
    text: str
    name: str
    unit: str = ""


@dataclass(frozen=True, slots=True)
class Row:
    """One row: its number, and a cell for each header (same order)."""

    number: int
    cells: tuple[Cell, ...]

    @property
    def blank(self) -> bool:
        """Whether all cells are empty."""
        return all(cell.blank for cell in self.cells)


@dataclass(frozen=True, slots=True)
class SheetTable:
    """A sheet as read: what it is, its name in the file, header, rows of data, rows at the foot.

    `hidden` names what is hidden ("the sheet", "columns C, D", "rows 12 to 14"); `header_found` is False
    where no header row was recognised.
    """

    spec: Sheet
    sheet: str
    header: tuple[HeaderCell, ...]
    rows: tuple[Row, ...]
    footers: tuple[Row, ...] = ()
    hidden: tuple[str, ...] = ()
    header_found: bool = True


def too_large(rows: int, columns: int) -> str:
    """How a table is larger than any of a test; empty if it is not."""
    if columns > MAX_COLUMNS:
        return f"{columns:,} columns"
    return f"{rows:,} rows of {columns:,} columns" if rows * columns > MAX_FIELDS else ""


_BLANKS = str.maketrans({"\u00a0": " ", "\u2007": " ", "\u202f": " ", "\u200b": "", "\ufeff": ""})


def clean(text: str) -> str:
    """Text without the blanks that only look like blanks, and without blanks around it."""
    return text.strip() if text.isascii() else text.translate(_BLANKS).strip()


def whole_text(text: str) -> str:
    """Text that can be written anywhere: halves of characters become question marks."""
    return text.encode("utf-8", "replace").decode("utf-8")


def show(value: Raw) -> str:
    """A value as text: dates year first, times to the second where there are seconds."""
    if value is None:
        return ""
    if isinstance(value, str):
        return clean(value)
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, datetime):
        return f"{value:%Y-%m-%d %H:%M}" if not value.second else f"{value:%Y-%m-%d %H:%M:%S}"
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, time):
        return f"{value:%H:%M}" if not value.second else f"{value:%H:%M:%S}"
    if isinstance(value, timedelta):
        minutes, seconds = divmod(int(value.total_seconds()), 60)
        return f"{minutes // 60}:{minutes % 60:02d}" + (f":{seconds:02d}" if seconds else "")
    return plain_number(value)


_UNIT_IN_BRACKETS = re.compile(
    r"^(?P<name>.*?)(?<!\s)\s*+(?:\[(?P<square>[^\[\]]*)\]|\((?P<round>[^()]*)\))\s*$", re.DOTALL
)


def split_header(text: str) -> tuple[str, str]:
    """Name and unit of a header: ``Stack temperature [°F]`` gives ``("Stack temperature", "°F")``."""
    plain = " ".join(clean(text).split())
    match = _UNIT_IN_BRACKETS.match(plain)
    if match and match["name"]:
        return match["name"], (match["square"] if match["square"] is not None else match["round"]).strip()
    return plain, ""
