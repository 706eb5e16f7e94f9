"""A tiny field workbook for the tests of the reader: sheets as lists of rows, changed by each test."""

from __future__ import annotations

import copy
import io
import zipfile
from collections.abc import Callable, Mapping
from datetime import datetime, timedelta
from pathlib import Path
from typing import Any

import openpyxl

from reporter.intake import ReadResult, read_bytes
from reporter.record import Record

ROOT = Path(__file__).resolve().parents[2]
SAMPLES = ROOT / "sample_inputs" / "valid"
Rows = list[list[Any]]
Sheets = dict[str, Rows]

_START = datetime(2026, 4, 14, 9, 0)
_TINY: Sheets = {
    "Test": [
        ["Item", "Entry", "Note"],
        ["Facility", "Alder Creek Works (invented)", ""],
        ["Unit tested", "Boiler 2", ""],
        ["Authority", "Example Air Authority (invented)", ""],
        ["Testing firm", "Paper Lantern Stack Testing (invented)", ""],
        ["Test lead", "T. Samplewright", ""],
        ["Test date", datetime(2026, 4, 14), ""],
        ["Time zone", "UTC-06:00", ""],
        ["Unit system", "US", ""],
    ],
    "Channels": [
        ["Channel", "Gas", "Unit", "Moisture basis"],
        ["NOx", "NOx", "ppm", "dry"],
        ["O2", "O2", "%", "dry"],
    ],
    "Readings": [
        ["Time", "NOx", "O2"],
        *([_START + timedelta(minutes=i), 24.0 + i / 10, 4.0 + i / 100] for i in range(12)),
    ],
    "Runs": [
        ["Run", "Start", "End"],
        ["1", _START, _START + timedelta(minutes=5)],
        ["2", _START + timedelta(minutes=6), _START + timedelta(minutes=11)],
    ],
}


def tiny() -> Sheets:
    """The sheets of a small valid test, free to be changed."""
    return copy.deepcopy(_TINY)


def with_column(rows: Rows, header: str, *values: Any) -> None:
    """Add a column; values beyond those given are empty."""
    rows[0].append(header)
    for i, row in enumerate(rows[1:]):
        row.append(values[i] if i < len(values) else None)


def workbook(sheets: Mapping[str, Rows], change: Callable[[Any], None] | None = None) -> bytes:
    """The bytes of a workbook; `change` may alter the openpyxl workbook before it is saved."""
    book = openpyxl.Workbook()
    book.remove(book.active)
    for name, rows in sheets.items():
        page = book.create_sheet(name)
        for row in rows:
            page.append(row)
    if change is not None:
        change(book)
    buffer = io.BytesIO()
    book.save(buffer)
    return buffer.getvalue()


def read_sheets(sheets: Mapping[str, Rows], change: Callable[[Any], None] | None = None) -> ReadResult:
    """Read a workbook made of these sheets."""
    return read_bytes("tiny.xlsx", workbook(sheets, change))


def record_of(sheets: Mapping[str, Rows], change: Callable[[Any], None] | None = None) -> Record:
    """The record of these sheets; a workbook that cannot be read is an error of the test."""
    result = read_sheets(sheets, change)
    assert result.record is not None, [p.text() for p in result.problems]
    return result.record


def found(result: ReadResult) -> list[tuple[str, str]]:
    """Codes and places of the problems found: ``("reversed-run", "Runs!C2")``."""
    return [(p.code, f"{p.place.sheet}!{p.place.cell}".strip("!")) for p in result.problems]


def rezipped(
    content: bytes,
    change: Callable[[str, bytes], bytes] | None = None,
    more: Mapping[str, bytes] | None = None,
    packing: int = zipfile.ZIP_DEFLATED,
) -> bytes:
    """A container with its parts changed, and with parts added."""
    buffer = io.BytesIO()
    with (
        zipfile.ZipFile(io.BytesIO(content)) as old,
        zipfile.ZipFile(buffer, "w", packing) as new,
    ):
        for name in old.namelist():
            data = old.read(name)
            new.writestr(name, data if change is None else change(name, data))
        for name, data in (more or {}).items():
            new.writestr(name, data)
    return buffer.getvalue()
