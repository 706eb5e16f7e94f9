"""A blank field workbook filled in as a technician fills it in: SO2, CO and O2 dry, THC wet, SI units, three runs."""

from __future__ import annotations

import io
import random
from collections.abc import Iterator, Mapping
from datetime import datetime, timedelta
from functools import cache
from typing import Any

import openpyxl

from reporter.equation import System
from reporter.intake.blank import HEADER_ROW, blank_bytes
from reporter.intake.table import split_header

GASES = ("SO2", "CO", "O2", "THC")
#: What each gas is in the stack; the high and the mid gas; gain and offset of its sampling system.
_STACK = {"SO2": 142.0, "CO": 48.0, "O2": 4.2, "THC": 26.0}
_HIGH = {"SO2": 250.0, "CO": 200.0, "O2": 15.0, "THC": 100.0}
_SYSTEM = {"SO2": (0.985, 0.6), "CO": (1.004, 0.3), "O2": (0.998, 0.02), "THC": (0.99, 0.2)}
_TEST = {
    "Facility": "Marlpit Laundry (invented)", "Unit tested": "Boiler 4", "Authority": "Example Authority (invented)",
    "Testing firm": "Tin Whistle Testing (invented)", "Test lead": "A. Placeholder", "Test date": datetime(2026, 5, 20),
    "Time zone": "UTC+02:00", "Reading stamp": "interval start", "Logging interval": 1, "Report number": "TW-26-001",
}  # fmt: skip
_RUN = {
    "Load": 10.4, "Load unit": "t/h steam", "Heat input": 8.6, "Moisture": 11.2, "Moisture source": "wet and dry bulb",
    "Stack flow": 9100, "Flow basis": "dry standard", "Flow standard temperature": 0, "Flow standard pressure": 101.325,
    "Stack temperature": 190, "Barometric pressure": 100.2,
}  # fmt: skip
_LIMIT = {
    "Relation": "at most", "Moisture basis": "dry", "Diluent": "O2", "Reference oxygen": 3, "Oxygen constant": 21,
    "Standard temperature": 0, "Standard pressure": 101.325, "Rounding": "half up",
    "Authority": "Example Air Authority (invented)", "In force from": datetime(2024, 1, 1),
}  # fmt: skip
FIRST = HEADER_ROW + 2
_MINUTES, _RUNS = 20, 3


def at(hour: int, minute: int) -> datetime:
    """A moment of the test day."""
    return datetime(2026, 5, 20, hour, minute)


def columns(sheet: Any) -> dict[str, int]:
    """The column of each header, without its unit."""
    cells = ((split_header(str(cell.value))[0], cell.column) for cell in sheet[FIRST - 1] if cell.value is not None)
    return dict(cells)


def put(sheet: Any, row: int, values: Mapping[str, Any]) -> None:
    """Write values of one row under their headers."""
    where = columns(sheet)
    for name, value in values.items():
        sheet.cell(row, where[name]).value = value


def item(book: Any, name: str, entry: Any) -> None:
    """Write the entry of an item of the sheet Test."""
    for row in book["Test"].iter_rows(min_row=FIRST):
        if split_header(str(row[0].value))[0] == name:
            row[1].value = entry


def _calibrations() -> Iterator[dict[str, Any]]:
    """A direct set, a system check before the first run, and one after each run that opens the next."""
    starts = [at(9, 30) + timedelta(minutes=45 * run) for run in range(_RUNS)]
    times = [at(8, 30), at(9, 15), *(start + timedelta(minutes=_MINUTES + 3) for start in starts)]
    for number, moment in enumerate(times):
        for gas in GASES:
            gain, offset = (1.001, 0.01) if number == 0 else _SYSTEM[gas]
            for level in ("zero", "mid", "high") if number == 0 else ("zero", "mid"):
                true = {"zero": 0.0, "mid": _HIGH[gas] / 2, "high": _HIGH[gas]}[level]
                cylinder = "B-0" if level == "zero" else f"B-{gas}-{level}"
                yield {
                    "Time": moment, "Channel": gas, "Route": "system" if number else "direct", "Level": level,
                    "Reading": round(true * gain + offset, 2), "Cylinder": cylinder,
                }  # fmt: skip
                moment += timedelta(minutes=1)


def _cylinders() -> Iterator[dict[str, Any]]:
    for gas in GASES:
        unit = "%" if gas == "O2" else "ppm"
        yield {"Cylinder": "B-0", "Gas": gas, "Certified value": 0, "Unit": unit, "Kind": "zero"}
        for level, value in (("high", _HIGH[gas]), ("mid", _HIGH[gas] / 2)):
            yield {
                "Cylinder": f"B-{gas}-{level}", "Gas": gas, "Certified value": value, "Unit": unit, "Kind": "protocol",
                "Expires": datetime(2028, 1, 31),
            }  # fmt: skip


@cache
def _filled() -> bytes:
    book = openpyxl.load_workbook(io.BytesIO(blank_bytes(GASES, _RUNS, System.SI)))
    dice = random.Random(5)
    for name, entry in _TEST.items():
        item(book, name, entry)
    put(book["Fuel"], FIRST, {"Fuel": "distillate oil", "Share of heat input": 100, "Factor source": "published"})
    for at_row, gas in enumerate(GASES):
        put(book["Channels"], FIRST + at_row, {"Moisture basis": "wet" if gas == "THC" else "dry"})
    for sheet, rows in (("Cylinders", _cylinders()), ("Calibrations", _calibrations())):
        for at_row, values in enumerate(rows):
            put(book[sheet], FIRST + at_row, values)
    row = FIRST
    for run in range(_RUNS):
        start = at(9, 30) + timedelta(minutes=45 * run)
        put(book["Runs"], FIRST + run, {"Start": start, "End": start + timedelta(minutes=_MINUTES), **_RUN})
        for minute in range(_MINUTES):
            values = {gas: round(_STACK[gas] * (1.0 + 0.01 * dice.gauss(0.0, 1.0)), 2) for gas in GASES}
            put(book["Readings"], row, {"Time": start + timedelta(minutes=minute), **values})
            row += 1
    for at_row, (gas, value, unit) in enumerate((("SO2", 500, "mg/m3"), ("CO", 100, "mg/m3"), ("THC", 40, "ppm"))):
        limit = {"Limit id": f"{gas}-limit", "Pollutant": gas, "Limit": value, "Unit": unit, "Citation": f"3.{at_row}"}
        put(book["Limits"], FIRST + at_row, limit | _LIMIT)
    buffer = io.BytesIO()
    book.save(buffer)
    return buffer.getvalue()


def filled() -> Any:
    """The workbook, free to be changed."""
    return openpyxl.load_workbook(io.BytesIO(_filled()))
