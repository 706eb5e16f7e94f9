"""Long workbooks by a fast reader, after the look at the file has bounded what it will lay out in memory.

The reader does not tell error values and formulas without a value from blanks, nor percentages from numbers: the look
at the bytes has found those, and they are put back.
"""

from __future__ import annotations

import io
import re
import zipfile
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date, datetime
from operator import itemgetter
from typing import Any, overload

import numpy as np

from reporter.intake.corner import column_number
from reporter.intake.guard import Look
from reporter.intake.table import Raw
from reporter.intake.workbook import raw

#: A workbook of more cells is read by the fast reader.
MANY_CELLS = 100_000
#: It lays a sheet out as a full rectangle: so many fields at most, whether filled or not.
MAX_FIELDS = 4_000_000
#: So many bytes of text at most, counted as often as cells show it.
MAX_TEXT = 400 << 20
_SHARED = re.compile(rb"<si[\s>/]")
_USED = re.compile(rb" t=\"s\"[^<>]*>\s*<v>(\d{1,9})</v>")
_CELL = re.compile(r"([A-Z]+)(\d+)")
_PERCENTS = frozenset({9, 10})

Position = tuple[int, int]


class SheetRows(Sequence[tuple[Raw, ...]]):
    """The rows of a sheet as the fast reader gives them, with what it loses; blank cells are None.

    Parameters
    ----------
    rows
        Rows of values of equal length, a blank cell an empty text.
    others
        Values at positions where the reader has none, or another.
    """

    __slots__ = ("_others", "_rows", "_whole")

    def __init__(self, rows: Sequence[Sequence[Any]], others: Mapping[Position, Raw]) -> None:
        self._rows = rows
        self._whole: dict[int, list[Any]] = {}
        self._others: dict[int, dict[int, Raw]] = {}
        for (row, column), value in others.items():
            self._others.setdefault(row, {})[column] = value

    def __len__(self) -> int:
        return len(self._rows)

    @overload
    def __getitem__(self, index: int) -> tuple[Raw, ...]: ...
    @overload
    def __getitem__(self, index: slice) -> Sequence[tuple[Raw, ...]]: ...
    def __getitem__(self, index: int | slice) -> tuple[Raw, ...] | Sequence[tuple[Raw, ...]]:
        if isinstance(index, slice):
            return [self[row] for row in range(*index.indices(len(self)))]
        own = self._others.get(index % len(self._rows) if self._rows else index)
        values = [_raw(value) for value in self._rows[index]]
        for column, value in own.items() if own else ():
            values[column] = value
        return tuple(values)

    def __iter__(self) -> Iterator[tuple[Raw, ...]]:
        return (self[row] for row in range(len(self)))

    @property
    def widths(self) -> list[int]:
        """The number of cells of each row."""
        return list(map(len, self._rows))

    def filled(self) -> Iterator[int]:
        """Positions of the rows that hold anything."""
        return (number for number in range(len(self._rows)) if self._holds(number))

    def _holds(self, row: int) -> bool:
        return row in self._others or any(not isinstance(value, str) or value.strip() for value in self._rows[row])

    def wordy(self) -> list[int]:
        """Positions of the rows that hold a text."""
        return [number for number, row in enumerate(self._rows) if str in map(type, row)]

    @property
    def end(self) -> int:
        """One past the last row that holds anything."""
        return next((row for row in range(len(self._rows), 0, -1) if self._holds(row - 1)), 0)

    def columns(self, columns: Sequence[int], rows: Sequence[int]) -> list[list[Raw]]:
        """The cells of some columns in some rows, None where a row is short."""
        found = []
        for column in columns:
            whole = self._column(column)
            cells = whole[rows.start : rows.stop] if isinstance(rows, range) else [whole[row] for row in rows]
            if not set(map(type, cells)) <= {float, datetime}:
                cells = [_raw(value) for value in cells]
            found.append(cells)
        if self._others:
            at = {row: index for index, row in enumerate(rows)}
            for row, own in self._others.items():
                for place, column in enumerate(columns):
                    if row in at and column in own:
                        found[place][at[row]] = own[column]
        return found

    def _column(self, column: int) -> list[Any]:
        """A whole column as the fast reader gave it, kept: it is asked for by more than one room."""
        if column not in self._whole:
            wide = bool(self._rows) and column < len(self._rows[0])
            self._whole[column] = list(map(itemgetter(column), self._rows)) if wide else [""] * len(self._rows)
        return self._whole[column]


def _raw(value: Any) -> Raw:
    """A value as the usual reader gives it: nothing for a blank, a date with its midnight."""
    if value == "" and isinstance(value, str):
        return None
    if type(value) is date:
        return datetime(value.year, value.month, value.day)
    return raw(value)


@dataclass(frozen=True, slots=True)
class QuickSheet:
    """One sheet: its name, rows, and what is special about some; positions count from 0."""

    title: str
    rows: SheetRows
    hidden: bool = False
    hidden_rows: frozenset[int] = frozenset()
    percent: frozenset[Position] = frozenset()
    uncalculated: frozenset[Position] = frozenset()
    merged: tuple[tuple[int, int, int, int], ...] = field(default=())


def is_long(look: Look) -> bool:
    """Whether a workbook is long, and all of it is written in the way the fast reader may be trusted with."""
    return look.counts[b"c"] > MANY_CELLS and look.plain and not any(scan.odd for scan in look.scans.values())


def too_large(content: bytes, look: Look) -> str:
    """How a long workbook is larger in memory than its cells tell; empty if it is not."""
    fields = sum(scan.last_row * scan.last_column for scan in look.scans.values())
    if fields > MAX_FIELDS:
        return f"cells spread over {fields:,} fields"
    if max(scan.longest for scan in look.scans.values()) * look.counts[b"c"] <= MAX_TEXT:
        return ""
    size = _text_size(content)
    return f"{size >> 20} MB of repeated text" if size > MAX_TEXT else ""


def _text_size(content: bytes) -> int:
    """The bytes of the shared texts of all cells, each as often as it is used: the fast reader copies them."""
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        names = archive.namelist()
        shared = next((name for name in names if name.lower().endswith("sharedstrings.xml")), None)
        if shared is None:
            return 0
        lengths = np.diff([found.start() for found in _SHARED.finditer(archive.read(shared) + b"<si>")])
        used = (np.array(_USED.findall(archive.read(name)), dtype=np.int64) for name in names if _is_sheet(name))
        return sum(int(lengths[each[each < len(lengths)]].sum()) for each in used)


def _is_sheet(name: str) -> bool:
    return name.lower().endswith(".xml") and not name.lower().endswith("sharedstrings.xml")


def quick_sheets(content: bytes, look: Look, parts: Mapping[str, str]) -> tuple[list[QuickSheet], bool]:
    """The sheets of a long workbook, and whether its days count from 1904.

    Parameters
    ----------
    content
        The bytes of the file.
    look
        What the look at it found.
    parts
        The part of the container each sheet's cells stand in, with the name of the sheet.
    """
    from python_calamine import CalamineWorkbook, SheetTypeEnum, SheetVisibleEnum

    by_name = {name: part for part, name in parts.items()}
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        formats = _percent_formats(archive)
        shares = {name: _percent_cells(archive, part, formats) for name, part in by_name.items()} if formats else {}
        late = _is_late(archive.read("xl/workbook.xml"))
    if any(part not in look.scans for part in parts):
        raise ValueError("a sheet stands in a part that was not looked at")
    book = CalamineWorkbook.from_filelike(io.BytesIO(content))
    sheets = []
    for about in book.sheets_metadata:
        if about.typ != SheetTypeEnum.WorkSheet:
            continue
        page, part = book.get_sheet_by_name(about.name), by_name.get(about.name, "")
        never = frozenset(map(_position, look.uncalculated.get(part, ())))
        scan = look.scans[part]
        others: dict[Position, Raw] = {_position(cell): text for cell, text in scan.errors.items()}
        rows = SheetRows(page.to_python(skip_empty_area=False), others)
        hidden_rows = frozenset(row - 1 for row in scan.hidden) & frozenset(rows.filled() if scan.hidden else ())
        merged = tuple((a, b, c, d) for (a, b), (c, d) in page.merged_cell_ranges or ())
        hidden = about.visible != SheetVisibleEnum.Visible
        sheets.append(
            QuickSheet(about.name, rows, hidden, hidden_rows, shares.get(about.name, frozenset()), never, merged)
        )
    return sheets, late


def _is_late(book: bytes) -> bool:
    """Whether days count from 1904."""
    from defusedxml.ElementTree import fromstring

    marks = (node.get("date1904") for node in fromstring(book) if node.tag.endswith("}workbookPr"))
    return any(mark in ("1", "true") for mark in marks)


def _position(cell: str) -> Position:
    match = _CELL.fullmatch(cell)
    assert match is not None
    return int(match[2]) - 1, column_number(match[1]) - 1


def _percent_formats(archive: zipfile.ZipFile) -> list[int]:
    """Positions of the cell formats that show a number as a percentage."""
    from defusedxml.ElementTree import fromstring

    name = next((name for name in archive.namelist() if name.endswith("styles.xml")), None)
    if name is None:
        return []
    tree = fromstring(archive.read(name))
    codes = {
        int(n.get("numFmtId", -1)) for n in tree.iter() if n.tag.endswith("}numFmt") and "%" in n.get("formatCode", "")
    }
    formats = next((node for node in tree.iter() if node.tag.endswith("}cellXfs")), ())
    return [at for at, one in enumerate(formats) if int(one.get("numFmtId", 0)) in codes | _PERCENTS]


def _percent_cells(archive: zipfile.ZipFile, part: str, formats: Sequence[int]) -> frozenset[Position]:
    """The cells of a part that are shown as percentages."""
    numbers = "|".join(map(str, formats))
    tag = re.compile(rf'<c\s(?=[^<>]*\bs="(?:{numbers})")(?![^<>]*\bt="(?!n"))[^<>]*?\br="([A-Z]+\d+)"'.encode())
    return frozenset(_position(cell.decode()) for cell in tag.findall(archive.read(part)))
