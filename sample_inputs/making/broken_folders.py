"""Folders of a test with logger files, each with one thing wrong."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from datetime import timedelta
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


def logger(readings: Rows, below: str = "", names: Sequence[str] = tuple(UNITS)) -> bytes:
    """The readings as comma-separated text."""
    lines = ["Time," + ",".join(f"{name} [{UNITS[name]} dry]" for name in names)]
    for row in readings:
        cells = ("" if row[name] is None else str(row[name]) for name in names)
        lines.append(f"{row['Time']:%Y-%m-%d %H:%M}," + ",".join(cells))
    return ("\n".join(lines) + "\n" + below).encode()


def mapping(names: Sequence[str] = tuple(UNITS)) -> bytes:
    """The mapping of that text."""
    columns = (COLUMN.format(name=name, unit=UNITS[name], gas=name.lower()) for name in names)
    return (MAPPING + "".join(columns)).encode()


def whole(field: bytes, readings: Rows) -> Files:
    """A folder with nothing wrong."""
    return {"field.xlsx": field, "logger.csv": logger(readings), "logger.map.toml": mapping()}


def _without_gases(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": b"Time,Level\n2026-04-14 09:01,46.1\n"}


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


def _other_units(files: Files, readings: Rows) -> Files:
    lines = files["logger.csv"].splitlines(keepends=True)
    half = len(lines) // 2
    return files | {"logger.csv": b"".join([*lines[:half], b"Units,mg/m3 dry,mg/m3 dry,,\n", *lines[half:]])}


def _wrong_average(files: Files, readings: Rows) -> Files:
    return files | {"logger.csv": logger(readings, "Average,99.0,3.0,4.0,9.6\n")}


def _two_loggers(files: Files, first: Rows, second: Rows) -> Files:
    """Pollutants by one logger, diluents by another."""
    pollutants, diluents = ("NOx", "CO"), ("O2", "CO2")
    return {
        "field.xlsx": files["field.xlsx"],
        "pollutants.csv": logger(first, names=pollutants),
        "pollutants.map.toml": mapping(pollutants),
        "diluents.csv": logger(second, names=diluents),
        "diluents.map.toml": mapping(diluents),
    }


def _late_logger(files: Files, readings: Rows) -> Files:
    late = [{**row, "Time": row["Time"] + timedelta(minutes=7)} for row in readings]
    return _two_loggers(files, late, readings)


def _coarse_logger(files: Files, readings: Rows) -> Files:
    return _two_loggers(files, readings, readings[14::15])


#: The codes whose folders need each minute of the day.
WHOLE_DAY = frozenset({"loggers-differ", "interval-blank"})
#: What is wrong, by the code of the problem.
CHANGES: dict[str, Callable[[Files, Rows], Files]] = {
    "no-readings-table": _without_gases,
    "mapping-missing": _no_mapping,
    "mapping-unreadable": _other_word,
    "mapping-differs": _new_header,
    "mapping-against-channels": _other_basis,
    "readings-contradict": _two_days,
    "loggers-differ": _late_logger,
    "interval-blank": _coarse_logger,
    "row-out-of-line": _missing_comma,
    "unit-changes": _other_units,
    "folder-inputs": _two_workbooks,
    "rows-left-out": _average,
    "file-of-another-test": _other_unit,
    "foot-differs": _wrong_average,
}
