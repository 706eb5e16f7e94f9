"""Rows to a field workbook file, the same bytes each time."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import date, datetime, time
from io import BytesIO
from typing import Any

import xlsxwriter

from making.day import Rows

NOTE = "Invented example. One row is one entry; units stand in brackets."
CREATED = datetime(2026, 1, 5, 8, 0, 0)


def columns_of(rows: Rows) -> list[str]:
    """Column names in the order of first appearance."""
    return list(dict.fromkeys(name for row in rows for name in row))


def write(title: str, sheets: Mapping[str, Rows]) -> bytes:
    """A workbook with one sheet per table: a title line, a note, the header, the rows."""
    buffer = BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False})
    book.set_properties({"title": title, "comments": "Invented example data", "created": CREATED})
    formats = {
        "title": book.add_format({"bold": True, "font_size": 12}),
        "note": book.add_format({"italic": True, "font_color": "#555555"}),
        "head": book.add_format({"bold": True, "text_wrap": True, "bottom": 1, "bg_color": "#EDEDED", "valign": "top"}),
        "clock": book.add_format({"num_format": "hh:mm", "align": "left"}),
        "time": book.add_format({"num_format": "yyyy-mm-dd hh:mm", "align": "left"}),
        "date": book.add_format({"num_format": "yyyy-mm-dd", "align": "left"}),
    }
    for name, rows in sheets.items():
        _write_sheet(book.add_worksheet(name), f"{name}: {title}", rows, formats)
    book.close()
    return buffer.getvalue()


def _write_sheet(sheet: Any, heading: str, rows: Rows, formats: Mapping[str, Any]) -> None:
    columns = columns_of(rows)
    sheet.write_string(0, 0, heading, formats["title"])
    sheet.write_string(1, 0, NOTE, formats["note"])
    sheet.set_row(2, 46 if any(len(column) > 18 for column in columns) else 16)
    for c, column in enumerate(columns):
        sheet.write_string(2, c, column, formats["head"])
        sheet.set_column(c, c, _width(column, rows))
    for r, row in enumerate(rows, start=3):
        for c, column in enumerate(columns):
            _write_cell(sheet, r, c, row.get(column), formats)
    sheet.freeze_panes(3, 1)
    sheet.set_landscape()
    sheet.fit_to_pages(1, 0)
    sheet.repeat_rows(2)


def _write_cell(sheet: Any, row: int, column: int, value: Any, formats: Mapping[str, Any]) -> None:
    if value is None or value == "":
        return
    if isinstance(value, datetime):
        sheet.write_datetime(row, column, value, formats["time"])
    elif isinstance(value, time):
        sheet.write_datetime(row, column, value, formats["clock"])
    elif isinstance(value, date):
        sheet.write_datetime(row, column, datetime(value.year, value.month, value.day), formats["date"])
    elif isinstance(value, str):
        sheet.write_string(row, column, value)
    else:
        sheet.write_number(row, column, value)


def _width(column: str, rows: Rows) -> float:
    longest = max((len(str(row[column])) for row in rows if row.get(column) is not None), default=0)
    return float(min(max(longest, len(column) / 2, 9) + 3, 48))
