"""Folders of a test with logger files, each with one thing wrong."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from making.day import Rows

Files = dict[str, bytes]

MAPPING = """form = 1
name = "Boiler 2 logger (invented)"
version = 1
kind = "text"

[numbers]
decimal_mark = "."

[time]
order = "year first"
stamp = "interval end"

[[column]]
header = "Time"
use = "time"
"""
COLUMN = """
[[column]]
header = "{name} [{unit} dry]"
use = "reading"
channel = "{name}"
gas = "{gas}"
unit = "{unit}"
basis = "dry"
"""
UNITS = {"NOx": "ppm", "CO": "ppm", "O2": "%", "CO2": "%"}


def logger(readings: Rows, below: str = "") -> bytes:
    """The readings as comma-separated text."""
    lines = ["Time," + ",".join(f"{name} [{unit} dry]" for name, unit in UNITS.items())]
    for row in readings:
        cells = ("" if row[name] is None else str(row[name]) for name in UNITS)
        lines.append(f"{row['Time']:%Y-%m-%d %H:%M}," + ",".join(cells))
    return ("\n".join(lines) + "\n" + below).encode()


def mapping() -> bytes:
    """The mapping of that text."""
    columns = (COLUMN.format(name=name, unit=unit, gas=name.lower()) for name, unit in UNITS.items())
    return (MAPPING + "".join(columns)).encode()


def whole(field: bytes, readings: Rows) -> Files:
    """A folder with nothing wrong."""
    return {"field.xlsx": field, "logger.csv": logger(readings), "logger.map.toml": mapping()}


def _without_gases(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": b"Time,Load\n2026-04-14 09:01,46.1\n"}


def _no_mapping(files: Files, readings: Rows) -> Files:
    return {name: content for name, content in files.items() if not name.endswith(".toml")}


def _other_word(files: Files, readings: Rows) -> Files:
    return files | {"logger.map.toml": files["logger.map.toml"].replace(b'"year first"', b'"as usual"')}


def _new_header(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": files["logger.csv"].replace(b"NOx [ppm dry]", b"NOx [ppm wet]")}


def _other_basis(files: Files, readings: Rows) -> Files:
    return files | {"logger.map.toml": files["logger.map.toml"].replace(b'basis = "dry"', b'basis = "wet"', 1)}


def _two_days(files: Files, readings: Rows) -> Files:
    other: list[dict[str, Any]] = [{**row, "NOx": 99.9} if k == 0 else row for k, row in enumerate(readings[:3])]
    return files | {"later.csv": logger(other)}


def _missing_comma(files: Files, readings: Rows) -> Files:
    head, first, *rest = files["logger.csv"].decode().splitlines()
    shorter = ",".join(first.split(",")[:-1])
    return files | {"logger.csv": "\n".join([head, shorter, *rest, ""]).encode()}


def _two_workbooks(files: Files, readings: Rows) -> Files:
    return files | {"field again.xlsx": files["field.xlsx"]}


def _average(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": logger(readings, "Average,24.0,3.0,4.0,9.6\n")}


def _other_unit(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": b"Unit: Boiler 7\n" + files["logger.csv"]}


def _wrong_average(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": logger(readings, "Average,99.0,3.0,4.0,9.6\n")}


#: What is wrong, by the code of the problem.
CHANGES: dict[str, Callable[[Files, Rows], Files]] = {
    "no-readings-table": _without_gases,
    "mapping-missing": _no_mapping,
    "mapping-unreadable": _other_word,
    "mapping-differs": _new_header,
    "mapping-against-channels": _other_basis,
    "readings-contradict": _two_days,
    "row-out-of-line": _missing_comma,
    "folder-inputs": _two_workbooks,
    "rows-left-out": _average,
    "file-of-another-test": _other_unit,
    "foot-differs": _wrong_average,
}
