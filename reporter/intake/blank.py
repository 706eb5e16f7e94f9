"""The blank field workbook: drop-down lists, notes on cells, units in headers, set up to be printed.

What it prints is decided by `tables/field_sheets.toml` and by `prefilled`; how it looks is decided here.
"""

from __future__ import annotations

import io
import os
from collections.abc import Sequence
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from reporter.equation import System
from reporter.errors import OutputError, RecordError
from reporter.gases import Gas, all_gases, find_gas
from reporter.intake.prefilled import prefilled
from reporter.intake.sheets import (
    ITEM_COLUMNS,
    Column,
    Kind,
    Sheet,
    Type,
    process_columns,
    sheet,
    sheets,
    suggestions,
)

#: Rows above the data: title, note, an empty line, the header (counted from 0).
HEADER_ROW = 3
#: Widths of a printed page in characters: narrower tables are widened to the first (at most by half), wider
#: ones than the second are printed on several pages of about the third, the first column on each.
NARROW_PAGE, WIDE_PAGE, PAGE_WIDTH = 110.0, 180.0, 130.0
ITEM_WIDTHS = (34.0, 58.0, 46.0)
#: Width of a column by what it holds; choices and names are widened to what they say.
WIDTHS = {Type.TEXT: 15.0, Type.NUMBER: 11.5, Type.DATE: 12.0, Type.DATETIME: 17.0, Type.UNIT: 9.0}
#: Columns that take sentences.
WIDE = {"What": 40.0, "Reason": 34.0, "Citation": 28.0, "Authority": 24.0, "File": 34.0, "Content line": 24.0}
#: Columns that take a short name.
NARROW = {"Run": 8.0, "Point": 9.0, "Channel": 11.0, "Gas": 9.0, "Group": 9.0, "Load unit": 13.0, "Flag": 9.0}
ACCENT, PALE, LINE, GREY = "#1F4E5F", "#E4ECEF", "#B8C4C9", "#5B666B"
#: Creation date written into the file where SOURCE_DATE_EPOCH does not set one, so that bytes repeat.
CREATED = datetime(2026, 1, 1)
FONT = "Calibri"


def write_blank(path: str | Path, gases: Sequence[str], runs: int, system: System) -> None:
    """Write an empty field workbook.

    Parameters
    ----------
    path
        The file to write, ending in .xlsx; it appears whole or not at all, and never in the place of another file.
    gases
        The gases of the channels, as people write them, e.g. ``["NOx", "CO", "O2"]``.
    runs
        Number of runs to print, 1 to 99.
    system
        Unit system of the headers.

    Raises
    ------
    RecordError
        A gas is not known or named twice, the number of runs is out of range, or the name does not end in .xlsx.
    OutputError
        The file cannot be written, or one of its name is there.
    """
    target = Path(path)
    if target.suffix.lower() != ".xlsx":
        raise RecordError(f"the name {target.name!r} does not end in .xlsx")
    content = blank_bytes(gases, runs, system)
    if target.exists() or target.is_symlink():
        raise OutputError("a file of this name is there, perhaps filled in; choose another name", target.name)
    beside = target.with_name(f".{target.name}.part")
    try:
        beside.write_bytes(content)
        beside.replace(target)
    except OSError as error:
        beside.unlink(missing_ok=True)
        raise OutputError(f"cannot write: {error.strerror}", target.name) from error


def blank_bytes(gases: Sequence[str], runs: int, system: System) -> bytes:
    """The bytes of an empty field workbook; see `write_blank`."""
    import xlsxwriter

    found = _gases(gases)
    if not 1 <= runs <= 99:
        raise RecordError(f"the number of runs is {runs}; it must be from 1 to 99")
    buffer = io.BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False})
    book.set_properties({"title": "Field workbook", "created": _created()})
    form = _Form(book, found, runs, system)
    for spec in sheets():
        form.add(spec)
    book.close()
    return buffer.getvalue()


def _created() -> datetime:
    try:
        return datetime.fromtimestamp(int(os.environ.get("SOURCE_DATE_EPOCH", "")), UTC).replace(tzinfo=None)
    except (ValueError, OverflowError, OSError):
        return CREATED


def _gases(names: Sequence[str]) -> tuple[Gas, ...]:
    found: list[Gas] = []
    for name in names:
        gas = find_gas(name)
        if gas is None:
            known = ", ".join(one.label for one in all_gases())
            raise RecordError(f"the gas {name!r} is not known; known are {known}")
        if gas in found:
            raise RecordError(f"the gas {name!r} is named twice")
        found.append(gas)
    if not found:
        raise RecordError("no gas is named")
    return tuple(found)


class _Form:
    """One workbook being written: its formats and what every sheet shares."""

    def __init__(self, book: Any, gases: tuple[Gas, ...], runs: int, system: System) -> None:
        self.book, self.gases, self.runs, self.system = book, gases, runs, system
        cell = {"font_name": FONT, "font_size": 11, "border": 1, "border_color": LINE, "valign": "vcenter"}
        head = {**cell, "bold": True, "text_wrap": True, "align": "left", "indent": 1, "font_size": 10}
        self.formats = {
            "title": book.add_format({"font_name": FONT, "bold": True, "font_size": 16, "font_color": ACCENT}),
            "note": book.add_format(
                {"font_name": FONT, "font_size": 10, "font_color": GREY, "valign": "top", "text_wrap": True}
            ),
            "required": book.add_format({**head, "bg_color": ACCENT, "font_color": "#FFFFFF"}),
            "optional": book.add_format({**head, "bg_color": PALE, "font_color": ACCENT}),
            "item": book.add_format({**cell, "align": "left", "indent": 1, "bg_color": PALE, "font_color": ACCENT}),
            "item required": book.add_format(
                {**cell, "align": "left", "indent": 1, "bg_color": PALE, "font_color": ACCENT, "bold": True}
            ),
        }
        for kind, number in (
            (Type.TEXT, "General"),
            (Type.DATE, "yyyy-mm-dd"),
            (Type.DATETIME, "yyyy-mm-dd hh:mm"),
        ):
            for band in (False, True):
                more = {"num_format": number, "align": "left", "indent": 1, "text_wrap": kind is Type.TEXT}
                shade = {"bg_color": "#ECF1F3"} if band else {}
                self.formats[f"{kind.value}{band}"] = book.add_format({**cell, **more, **shade})

    def cell_format(self, column: Column, band: bool = False) -> Any:
        """The format of an empty cell of a column."""
        kind = column.type if column.type in (Type.DATE, Type.DATETIME) else Type.TEXT
        return self.formats[f"{kind.value}{band}"]

    def add(self, spec: Sheet) -> None:
        """Write one sheet."""
        page = self.book.add_worksheet(spec.name)
        page.hide_gridlines(2)
        page.set_tab_color(ACCENT if spec.required else LINE)
        page.set_row(0, 26)
        page.set_row(2, 6)
        widths = self._items(page, spec) if spec.kind is Kind.ITEMS else self._table(page, spec)
        width = sum(widths)
        first = 0 if width <= WIDE_PAGE else 1  # the first column stands on each page and would cut the title
        last = next((i for i in range(first, len(widths)) if sum(widths[first : i + 1]) >= 100), len(widths) - 1)
        page.write_string(0, first, spec.title, self.formats["title"])
        page.set_row(1, 18 if spec.kind is Kind.ITEMS else 30)
        page.merge_range(1, first, 1, last, _note(spec), self.formats["note"])
        self._print_setup(page, spec, width)

    def _items(self, page: Any, spec: Sheet) -> list[float]:
        for position, (name, wide) in enumerate(zip(ITEM_COLUMNS, ITEM_WIDTHS, strict=True)):
            page.write_string(HEADER_ROW, position, name, self.formats["required" if position < 2 else "optional"])
            page.set_column(position, position, wide)
        page.set_row(HEADER_ROW, 22)
        known = prefilled(spec, self.gases, self.runs, self.system)
        entries = {str(row["Item"]): row["Entry"] for row in known}
        last = HEADER_ROW + len(spec.columns) + 2
        for number in range(HEADER_ROW + 1, last + 1):
            page.set_row(number, 20)
            index = number - HEADER_ROW - 1
            column = spec.columns[index] if index < len(spec.columns) else None
            look = self.formats["item required" if column is not None and column.required else "item"]
            if column is None:
                for position in range(3):
                    page.write_blank(number, position, None, self.formats["textFalse"])
                continue
            page.write_string(number, 0, header_text(column, self.system), look)
            page.write_comment(number, 0, column.note, _comment(column.note))
            _write(page, number, 1, entries.get(column.name), self.cell_format(column))
            page.write_blank(number, 2, None, self.formats["textFalse"])
            self._list(page, column, (number, number), 1)
        page.freeze_panes(HEADER_ROW + 1, 1)
        return list(ITEM_WIDTHS)

    def _table(self, page: Any, spec: Sheet) -> list[float]:
        columns = [c for c in spec.columns if spec.kind is Kind.TABLE or c.required]
        headers = [header_text(c, self.system) for c in columns]
        required = [c.required for c in columns]
        if spec.kind is Kind.READINGS:
            headers += [f"{gas.label} [{gas.unit}]" for gas in self.gases]
            required += [True] * len(self.gases)
        elif spec.kind is Kind.PROCESS:
            headers += process_columns(self.system)
            required += [False] * len(process_columns(self.system))
        columns += [_FREE] * (len(headers) - len(columns))
        known = prefilled(spec, self.gases, self.runs, self.system)
        last = HEADER_ROW + len(known) + spec.empty_rows
        page.set_row(HEADER_ROW, 58)
        widths = _widths(columns, headers)
        for position, (column, text) in enumerate(zip(columns, headers, strict=True)):
            look = self.formats["required" if required[position] else "optional"]
            page.write_string(HEADER_ROW, position, text, look)
            if column.note:
                page.write_comment(HEADER_ROW, position, column.note, _comment(column.note))
            page.set_column(position, position, widths[position])
            self._list(page, column, (HEADER_ROW + 1, last + 200), position)
        for number in range(HEADER_ROW + 1, last + 1):
            index = number - HEADER_ROW - 1
            row = known[index] if index < len(known) else {}
            page.set_row(number, 21 if last > HEADER_ROW + 16 else 28)
            for position, column in enumerate(columns):
                look = self.cell_format(column, bool(row.get("band")))
                _write(page, number, position, row.get(column.name), look)
        page.freeze_panes(HEADER_ROW + 1, 1)
        return widths

    def _list(self, page: Any, column: Column, rows: tuple[int, int], position: int) -> None:
        """The drop-down list of a column: its choices, suggestions, or the names of another sheet."""
        rule: dict[str, Any] = {"validate": "list", "ignore_blank": True}
        if column.choices:
            rule |= {
                "source": list(column.choices),
                "error_title": column.name,
                "error_message": ("One of: " + ", ".join(column.choices))[:255],
            }
        elif column.suggest:
            rule |= {"source": list(suggestions(column.suggest)), "show_error": False}
        elif column.refers:
            first, last = HEADER_ROW + 2, HEADER_ROW + 41
            rule |= {"source": f"='{sheet(column.refers).name}'!$A${first}:$A${last}", "show_error": False}
        else:
            return
        page.data_validation(rows[0], position, rows[1], position, rule)

    def _print_setup(self, page: Any, spec: Sheet, width: float) -> None:
        page.set_paper(1 if self.system is System.US else 9)
        page.set_margins(left=0.5, right=0.5, top=0.8, bottom=0.8)
        page.set_landscape()
        page.fit_to_pages(1 if width <= WIDE_PAGE else round(width / PAGE_WIDTH), 0)
        page.repeat_rows(HEADER_ROW)
        if width > WIDE_PAGE:
            page.repeat_columns(0)
        page.set_header(f'&L&"{FONT},Bold"&10Field workbook: {spec.name}&R&10Page &P of &N', {"scale_with_doc": False})
        blanks = "Facility and unit: ____________________________________    Date: ____________________"
        page.set_footer(
            f'&L&"{FONT},Regular"&9{blanks}&R&9Recorded by: ____________________________', {"scale_with_doc": False}
        )


#: A column of the form that stands in no list: a channel, a process reading.
_FREE = Column("", "", Type.NUMBER, False, "", (), "", "", "", (), "", "", (), "", (), None, None, None)


def header_text(column: Column, system: System) -> str:
    """The header of a column with its unit: ``Stack temperature [°F]``."""
    unit = column.default_unit(system)
    return f"{column.name} [{unit}]" if unit else column.name


def _note(spec: Sheet) -> str:
    required = " Dark headers are required." if spec.kind is not Kind.ITEMS else " Items in bold are required."
    return spec.note + required


def _widths(columns: Sequence[Column], headers: Sequence[str]) -> list[float]:
    widths = [_width(column, text) for column, text in zip(columns, headers, strict=True)]
    widen = min(1.5, max(1.0, NARROW_PAGE / sum(widths)))
    return [round(width * widen, 1) for width in widths]


def _width(column: Column, text: str) -> float:
    if column.name in WIDE or column.name in NARROW:
        return WIDE.get(column.name) or NARROW[column.name]
    words = max(len(word) for word in text.split()) + 3.0
    choices = max((len(choice) for choice in column.choices), default=0) + 3.0
    return max(WIDTHS.get(column.type, 9.0), words, choices)


def _write(page: Any, row: int, position: int, value: object, look: Any) -> None:
    if value is None:
        page.write_blank(row, position, None, look)
    elif isinstance(value, int):
        page.write_number(row, position, value, look)
    else:
        page.write_string(row, position, str(value), look)


def _comment(text: str) -> dict[str, Any]:
    lines = 1 + len(text) // 34
    return {"x_scale": 1.6, "height": 18 * lines + 12, "font_name": FONT, "font_size": 10, "color": "#FFFFF4"}
