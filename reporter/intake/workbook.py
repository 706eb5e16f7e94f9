"""A workbook file to plain sheet tables: header row found by its words, hidden parts read and said.

openpyxl reads the cells, after `reporter.intake.guard` has looked at the file; XML is parsed by defusedxml.
Nothing is run, fetched or followed: formulas are their stored values, links and pictures are not looked at.
"""

from __future__ import annotations

import io
import math
import warnings
import zipfile
from collections.abc import Iterable, Sequence
from datetime import date, datetime, time, timedelta
from typing import Any

from reporter.intake.container import sheets_of
from reporter.intake.gather import Gathered
from reporter.intake.guard import Look
from reporter.intake.headers import HEADER_WITHIN, score, split_footers, unit_row
from reporter.intake.sheets import Kind, Sheet, find_sheet, footer_words, near_sheet
from reporter.intake.table import MAX_COLUMNS, Cell, HeaderCell, Raw, Row, SheetTable, show, split_header, too_large

#: One sheet's cells by row and column number.
Grid = dict[int, dict[int, Cell]]


def read_workbook(content: bytes, look: Look, gathered: Gathered) -> tuple[SheetTable, ...]:
    """All known sheets of a workbook as tables; problems go to `gathered`."""
    import openpyxl

    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            book = openpyxl.load_workbook(io.BytesIO(content), data_only=True, keep_links=False)
            parts = sheet_parts(content) if look.uncalculated else {}
    except Exception as error:  # whatever the library raises on a damaged file means one thing
        gathered.add("truncated", gathered.place(), f"{type(error).__name__} while reading the workbook")
        return ()
    tables = []
    names = [sheet.title for sheet in book.worksheets]
    for sheet in book.worksheets:
        spec = find_sheet(sheet.title)
        if spec is None:
            unknown_sheet(gathered, sheet.title, names)
            continue
        part = next((part for part, name in parts.items() if name == sheet.title), "")
        tables.append(_table(spec, sheet, look.uncalculated.get(part, frozenset()), gathered))
    return tuple(table for table in tables if table is not None)


def unknown_sheet(gathered: Gathered, title: str, names: Sequence[str]) -> None:
    """Say that a sheet was not read; a problem where its name is nearly that of one the file lacks."""
    near = near_sheet(title)
    if near is None or any(find_sheet(name) is near for name in names):
        gathered.add("unknown-sheet", gathered.place(title), title)
    else:
        gathered.add("misspelt-name", gathered.place(title), title, expected=f"{near.name!r}, or a name less like it")


def sheet_parts(content: bytes) -> dict[str, str]:
    """The part of the container each sheet's cells stand in, with the name of the sheet."""
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        return dict(sheets_of(archive))


def _table(spec: Sheet, sheet: Any, uncalculated: frozenset[str], gathered: Gathered) -> SheetTable | None:
    grid = _grid(sheet, uncalculated)
    used = {column for row in grid.values() for column in row}
    if max(used, default=0) > MAX_COLUMNS:
        gathered.add("far-cell", gathered.place(sheet.title), "a filled cell right of column SR")
        return None
    if large := too_large(len(grid), len(used)):
        gathered.add("zip-bomb", gathered.place(sheet.title), large)
        return SheetTable(spec, sheet.title, (), (), header_found=False)
    hidden = _hidden(sheet, grid)
    start = _header_row(spec, grid)
    if start is None:
        if grid or spec.required:
            gathered.add("missing-header", gathered.place(sheet.title), _top(grid), expected=_expected_header(spec))
        return SheetTable(spec, sheet.title, (), (), hidden=hidden, header_found=False)
    header, columns = _header(sheet, grid, start)
    _fill_merged(sheet, grid, start)
    rows = [Row(n, _cells(sheet, grid[n], n, columns)) for n in sorted(grid) if n > start]
    if rows and spec.kind is not Kind.ITEMS and (with_units := unit_row(header, rows[0].cells)):
        header, rows = with_units, rows[1:]
    if spec.kind is Kind.ITEMS:
        return SheetTable(spec, sheet.title, header, tuple(r for r in rows if not r.blank), hidden=hidden)
    data, foot = split_footers(rows, footer_words())
    return SheetTable(spec, sheet.title, header, data, footers=foot, hidden=hidden)


def _grid(sheet: Any, uncalculated: frozenset[str]) -> Grid:
    """The filled cells only: a stray cell a million rows down costs nothing.

    openpyxl's public iteration makes every cell of the rectangle; its dictionary holds those of the file.
    """
    grid: Grid = {}
    for (row, column), cell in sheet._cells.items():
        value = cell.value
        never = bool(uncalculated) and value is None and cell.coordinate in uncalculated
        if value is None and not never:
            continue
        percent = type(value) in (int, float) and cell.has_style and "%" in cell.number_format
        grid.setdefault(row, {})[column] = Cell(cell.coordinate, raw(value), percent, never)
    return grid


def raw(value: object) -> Raw:
    """A value as a cell may hold it; a number too large for a float is kept as text."""
    if value is None or isinstance(value, (str, bool, datetime, date, time, timedelta)):
        return value
    if isinstance(value, (int, float)):
        try:
            number = float(value)
        except OverflowError:
            return str(value)
        return number if math.isfinite(number) else str(value)
    return str(value)


def _header_row(spec: Sheet, grid: Grid) -> int | None:
    """The number of the header row: the best of the first rows, the first among equals."""
    best, best_score = None, 0
    required = sum(1 for column in spec.columns if column.required)
    for number in sorted(grid)[:HEADER_WITHIN]:
        texts = [show(cell.value) for cell in grid[number].values() if isinstance(cell.value, str)]
        points = score(spec, texts)
        if points > best_score:
            best, best_score = number, points
        if spec.kind is not Kind.TABLE and best is not None:
            break
        if best_score >= max(required, 2) and best != number:
            break
    return best


def _top(grid: Grid) -> str:
    """The row at the top of a sheet that holds the most texts, as it stands."""
    texts = [
        [show(c.value) for c in grid[n].values() if isinstance(c.value, str)] for n in sorted(grid)[:HEADER_WITHIN]
    ]
    fullest = max(texts, key=len, default=[])
    return ", ".join(text[:40] for text in fullest[:8]) + (", ..." if len(fullest) > 8 else "")


def _expected_header(spec: Sheet) -> str:
    if spec.kind is Kind.ITEMS:
        return "a row with the words Item, Entry, Note"
    if spec.kind is Kind.READINGS:
        return "a row with the word Time and the names of the channels"
    names = [column.name for column in spec.columns if column.required] or [c.name for c in spec.columns[:3]]
    return "a row with the words " + ", ".join(names)


def _header(sheet: Any, grid: Grid, start: int) -> tuple[tuple[HeaderCell, ...], tuple[int, ...]]:
    """Header cells from the first to the last column that holds anything below or in the header row."""
    used = {column for number, row in grid.items() if number >= start for column in row}
    columns = tuple(sorted(used))
    header = []
    for column in columns:
        letters = _letters(column)
        cell = grid[start].get(column)
        text = "" if cell is None else " ".join(show(cell.value).split())
        name, unit = split_header(text)
        header.append(HeaderCell(f"{letters}{start}", letters, text, name, unit))
    return tuple(header), columns


def _cells(sheet: Any, row: dict[int, Cell], number: int, columns: Sequence[int]) -> tuple[Cell, ...]:
    return tuple(row.get(column) or Cell(f"{_letters(column)}{number}", None) for column in columns)


def _letters(column: int) -> str:
    text = ""
    while column:
        column, rest = divmod(column - 1, 26)
        text = chr(65 + rest) + text
    return text


def _fill_merged(sheet: Any, grid: Grid, start: int) -> None:
    """A cell merged downwards holds for each of its rows."""
    for merged in sheet.merged_cells.ranges:
        if merged.min_col == merged.max_col and merged.min_row > start:
            first = grid.get(merged.min_row, {}).get(merged.min_col)
            if first is None:
                continue
            for number in range(merged.min_row + 1, merged.max_row + 1):
                if number in grid:
                    address = f"{_letters(merged.min_col)}{number}"
                    grid[number][merged.min_col] = Cell(address, first.value, first.percent, first.uncalculated)


def _hidden(sheet: Any, grid: Grid) -> tuple[str, ...]:
    """What of the sheet is hidden and holds something, in words."""
    said = ["the sheet"] if sheet.sheet_state != "visible" else []
    rows = [n for n, dimension in sheet.row_dimensions.items() if dimension.hidden and n in grid]
    if rows:
        said.append("rows " + ranges(rows))
    used = {column for row in grid.values() for column in row}
    columns = [
        column
        for dimension in sheet.column_dimensions.values()
        if dimension.hidden
        for column in used
        if (dimension.min or 1) <= column <= (dimension.max or dimension.min or 1)
    ]
    if columns:
        said.append("columns " + ", ".join(_letters(column) for column in sorted(columns)))
    return tuple(said)


def ranges(numbers: Iterable[int]) -> str:
    """Numbers in words: ``3, 7 to 9``."""
    spans: list[list[int]] = []
    for number in sorted(numbers):
        if spans and number == spans[-1][1] + 1:
            spans[-1][1] = number
        else:
            spans.append([number, number])
    return ", ".join(str(a) if a == b else f"{a} to {b}" for a, b in spans)
