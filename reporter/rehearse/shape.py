"""A rehearsal in a firm's own shape: the field workbook without readings, and these as the firm's logger writes them.

The shape is that of a mapping: kind of file, headers and their order, units, basis, stamps, order of the dates, marks
of the numbers.  What a mapping does not tell is chosen: semicolons with a decimal comma, else commas; UTF-8; one sheet.
What is written is read back by the mapping before it is handed out, and must be the readings that were meant.
"""

from __future__ import annotations

import csv
from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import UTC, date, datetime, timedelta
from io import BytesIO, StringIO
from itertools import zip_longest
from typing import Any

from reporter.errors import RecordError
from reporter.gases import gas
from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.mapping import AS_ENTERED, MappedColumn, Mapping
from reporter.intake.foreign.times import zone_of
from reporter.intake.foreign.words import time_part
from reporter.rehearse.book import page_marks, properties
from reporter.rehearse.order import Order, settings
from reporter.rehearse.sheets import Rows
from reporter.synthetic import MARK

_DAYS = {"year first": "%Y-%m-%d", "day first": "%d/%m/%Y", "month first": "%m/%d/%Y"}
_EPOCHS = {"serial 1900": datetime(1899, 12, 30), "serial 1904": datetime(1904, 1, 1)}
_CLOCK = "%H:%M:%S"
#: What a cell holds before it is written.
Cell = str | float | datetime


def ordered_in_shape(order: Order, mapping: Mapping) -> Order:
    """The order with what the mapping says: gases in its order, basis, stamp, zone of the clock.

    Raises
    ------
    RecordError
        The mapping has a gas or a unit that a rehearsal does not have, or one gas twice.
    """
    lanes = [column for column in mapping.columns if column.use == "reading"]
    labels = [gas(lane.gas).label for lane in lanes]
    for lane, label in zip(lanes, labels, strict=True):
        usual = gas(lane.gas).unit
        if lane.unit != usual:
            raise RecordError(f"the mapping reads {label} in {lane.unit}; a rehearsal has it in {usual}")
    stamp = mapping.time.stamp
    return replace(
        order,
        gases=tuple(labels),
        wet=tuple(label for lane, label in zip(lanes, labels, strict=True) if lane.basis == "wet"),
        stamp=order.stamp if stamp in ("", AS_ENTERED) else stamp,
        zone=mapping.time.zone or order.zone,
    )


def logger_file(readings: Rows, decimals: dict[str, int], mapping: Mapping, name: str) -> bytes:
    """The readings as a file of the mapping's shape, marked synthetic above and below the table.

    Raises
    ------
    RecordError
        The shape cannot be written so that the mapping reads the same readings back.
    """
    writer = _Writer(mapping, decimals)
    rows = [writer.row(row) for row in readings]
    content = _workbook(writer, rows) if mapping.kind == "workbook" else _text(writer, rows)
    _held(readings, mapping, name, content)
    return content


def ending(mapping: Mapping) -> str:
    """The ending of the name of such a file."""
    return ".xlsx" if mapping.kind == "workbook" else ".csv"


@dataclass(slots=True)
class _Writer:
    """Writes cells as the files of a mapping have them."""

    mapping: Mapping
    decimals: dict[str, int]

    @property
    def typed(self) -> bool:
        """Whether cells hold numbers and times, not their texts."""
        return self.mapping.kind == "workbook"

    def header(self) -> list[list[str]]:
        """The header rows: a header of several parts stands in as many rows."""
        parts = [column.header.split(" | ") for column in self.mapping.columns]
        return [list(row) for row in zip_longest(*parts, fillvalue="")]

    def row(self, row: dict[str, Any]) -> list[Cell]:
        """The cells of one logged interval."""
        stamps = iter(self._stamps(row["Time"]))
        return [next(stamps) if c.use == "time" else self._cell(c, row) for c in self.mapping.columns]

    def _cell(self, column: MappedColumn, row: dict[str, Any]) -> Cell:
        """A reading; in a column that is left out, the mark of a rehearsal."""
        if column.use == "ignore":
            return MARK
        one = gas(column.gas)
        value = float(row[f"{one.label} [{one.unit}]"])
        return value if self.typed else self.number(value, self.decimals[one.label])

    def number(self, value: float, digits: int) -> str:
        """A number with the marks of the mapping."""
        style = self.mapping.numbers
        text = f"{value:{',' if style.grouped else ''}.{digits}f}"
        return text.translate(str.maketrans(",.", ".,")) if style.decimal == "," else text

    # ---- times ---------------------------------------------------------------------------------------------

    def _stamps(self, moment: datetime) -> Sequence[Cell]:
        """The one or two cells of a time stamp."""
        headers = [column.header for column in self.mapping.columns if column.use == "time"]
        zone = self.mapping.time.zone
        if zone:
            moment = moment.replace(tzinfo=zone_of(zone)).astimezone(UTC).replace(tzinfo=None)
        clock = f"{moment:{_CLOCK}}{'Z' if zone else ''}"
        if len(headers) == 2:
            pair = (self._day(moment.date()), self._share(moment) if self._is_serial else clock)
            return pair[::-1] if [time_part(text) for text in headers] == ["time", "date"] else pair
        if self.mapping.time.day:
            return (clock,)
        if self._is_serial:
            return (self._serial(moment),)
        if self.typed and self.mapping.time.order == "year first" and not zone:
            return (moment,)
        return (f"{self._day(moment.date())} {clock}",)

    @property
    def _is_serial(self) -> bool:
        return self.mapping.time.order in _EPOCHS

    def _day(self, day: date) -> Cell:
        if self._is_serial:
            return self._serial(datetime(day.year, day.month, day.day))
        text = f"{day:{_DAYS[self.mapping.time.order]}}"
        return text.replace("/", ".") if self.mapping.numbers.decimal == "," else text

    def _serial(self, moment: datetime) -> Cell:
        days = (moment - _EPOCHS[self.mapping.time.order]) / timedelta(days=1)
        return days if self.typed else f"{days:.8f}".replace(".", self.mapping.numbers.decimal)

    def _share(self, moment: datetime) -> Cell:
        part = (moment - datetime(moment.year, moment.month, moment.day)) / timedelta(days=1)
        return part if self.typed else f"{part:.8f}".replace(".", self.mapping.numbers.decimal)


# ---- files ---------------------------------------------------------------------------------------------------


def _text(writer: _Writer, rows: Sequence[Sequence[Cell]]) -> bytes:
    words, stream = settings()["words"], StringIO()
    delimiter = ";" if writer.mapping.numbers.decimal == "," else ","
    lines = csv.writer(stream, delimiter=delimiter, lineterminator="\n")
    lines.writerows([[words["title"]], [words["comment"]], [], *writer.header(), *rows, [words["title"]]])
    return stream.getvalue().encode()


def _workbook(writer: _Writer, rows: Sequence[Sequence[Cell]]) -> bytes:
    import xlsxwriter

    words, buffer = settings()["words"], BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False})
    book.set_properties(properties())
    moments = book.add_format({"num_format": "yyyy-mm-dd hh:mm:ss"})
    page = book.add_worksheet("Readings")
    lines: list[Sequence[Cell]] = [[words["title"]], [words["comment"]], [], *writer.header(), *rows, [words["title"]]]
    for number, line in enumerate(lines):
        for column, cell in enumerate(line):
            if isinstance(cell, datetime):
                page.write_datetime(number, column, cell, moments)
            elif isinstance(cell, str):
                page.write_string(number, column, cell)
            else:
                page.write_number(number, column, cell)
    page_marks(page)
    book.close()
    return buffer.getvalue()


# ---- read back -----------------------------------------------------------------------------------------------


def _held(readings: Rows, mapping: Mapping, name: str, content: bytes) -> None:
    """Read the file by the mapping and compare each time and each number."""
    found = apply_to_grid(grid_of(name, content), mapping, day=settings()["day"]["date"])
    labels = [gas(column.gas) for column in mapping.columns if column.use == "reading"]
    wanted = [(row["Time"], [row[f"{one.label} [{one.unit}]"] for one in labels]) for row in readings]
    made = [(row.time, [reading.value for reading in row.readings]) for row in found.readings.rows]
    if made != wanted:
        said = "; ".join(problem.text() for problem in found.problems[:3])
        raise RecordError(f"the shape {mapping.name!r} cannot be written so that it reads back the same: {said}")
