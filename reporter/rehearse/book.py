"""The field workbook of a rehearsal as a file: the sheets and columns of the form, each page marked synthetic."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import date, datetime
from io import BytesIO
from typing import Any

from reporter.intake.blank import CREATED, FONT
from reporter.intake.sheets import sheets
from reporter.rehearse.order import settings
from reporter.rehearse.sheets import Row, Rows

_HEAD = 2  # row of the headers; title and note stand above
_FORMATS: dict[str, dict[str, Any]] = {
    "title": {"font_name": FONT, "bold": True, "font_size": 14, "font_color": "#9C2B1B"},
    "note": {"font_name": FONT, "font_size": 10, "font_color": "#5B666B"},
    "head": {"font_name": FONT, "bold": True, "text_wrap": True, "bottom": 1, "bg_color": "#E4ECEF", "valign": "top"},
    "text": {"font_name": FONT},
    "time": {"font_name": FONT, "num_format": "yyyy-mm-dd hh:mm:ss", "align": "left"},
    "date": {"font_name": FONT, "num_format": "yyyy-mm-dd", "align": "left"},
}


def written(tables: Mapping[str, Rows]) -> bytes:
    """The workbook of some tables by sheet name; sheets without rows are left out.  The same bytes each time."""
    import xlsxwriter

    words, buffer = settings()["words"], BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False})
    book.set_properties(properties())
    formats = {name: book.add_format(look) for name, look in _FORMATS.items()}
    for spec in sheets():
        rows = tables.get(spec.name, [])
        if rows:
            columns = [column.name for column in spec.columns]
            _write(book.add_worksheet(spec.name), f"{spec.title}: {words['title']}", _ordered(rows, columns), formats)
    book.close()
    return buffer.getvalue()


def _ordered(rows: Rows, form: list[str]) -> Rows:
    """Rows with their columns in the order of the form; others last, in the order they came."""
    found = list(dict.fromkeys(name for row in rows for name in row))
    if found[0] == "Item":
        return rows
    places = {name: form.index(bare) if (bare := name.split(" [")[0]) in form else len(form) for name in found}
    return [{name: row.get(name) for name in sorted(found, key=places.__getitem__)} for row in rows]


def _write(page: Any, heading: str, rows: list[Row], formats: Mapping[str, Any]) -> None:
    words = settings()["words"]
    page.write_string(0, 0, heading, formats["title"])
    page.write_string(1, 0, words["comment"], formats["note"])
    for c, name in enumerate(rows[0]):
        page.write_string(_HEAD, c, name, formats["head"])
        page.set_column(c, c, _width(name, rows))
    for r, row in enumerate(rows, start=_HEAD + 1):
        for c, value in enumerate(row.values()):
            _cell(page, r, c, value, formats)
    page.freeze_panes(_HEAD + 1, 1)
    page.set_landscape()
    page.fit_to_pages(1, 0)
    page.repeat_rows(_HEAD)
    page_marks(page)


def properties() -> dict[str, Any]:
    """The properties of a workbook that say what it is."""
    words = settings()["words"]
    return {
        "title": words["title"],
        "subject": "SYNTHETIC",
        "category": "SYNTHETIC",
        "keywords": "synthetic, rehearsal",
        "comments": words["comment"],
        "created": CREATED,
    }


def page_marks(page: Any) -> None:
    """Header and footer of a sheet that say what it is on each printed page."""
    words = settings()["words"]
    page.set_header(f'&C&"{FONT},Bold"&11{words["title"]}')
    page.set_footer(f'&C&"{FONT},Bold"&11{words["comment"]}&R&P of &N')


def _cell(page: Any, row: int, column: int, value: Any, formats: Mapping[str, Any]) -> None:
    if value is None or value == "":
        return
    if isinstance(value, datetime):
        page.write_datetime(row, column, value, formats["time"])
    elif isinstance(value, date):
        page.write_datetime(row, column, datetime(value.year, value.month, value.day), formats["date"])
    elif isinstance(value, str):
        page.write_string(row, column, value, formats["text"])
    else:
        page.write_number(row, column, value, formats["text"])


def _width(name: str, rows: list[Row]) -> float:
    longest = max((len(str(row[name])) for row in rows if row[name] is not None), default=0)
    return float(min(max(longest, len(name) / 2, 9) + 3, 48))
