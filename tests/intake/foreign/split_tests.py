"""A rehearsal as a folder: the field workbook without readings, and logger files of chosen channels."""

from __future__ import annotations

import io
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from functools import cache
from pathlib import Path

import numpy as np
import openpyxl

from reporter.intake.read import read_bytes
from reporter.record import Record
from reporter.rehearse import Order, rehearse

MAPPING = """form = 1
name = "{name}"
version = 1
kind = "text"

[numbers]
decimal_mark = "."

[time]
order = "year first"
stamp = "{stamp}"

[[column]]
header = "{name} time"
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


@dataclass(frozen=True)
class Logger:
    """A logger file: channels, interval [s], what its clock is behind [s], stamp, words put into some rows."""

    channels: tuple[str, ...]
    step: int
    behind: int = 0
    stamp: str = "interval start"
    words: tuple[tuple[int, str], ...] = ()


@cache
def source(seed: int = 1, minutes: int = 30) -> tuple[bytes, Record]:
    """A rehearsal of two runs of so many minutes, logged each ten seconds, and its record."""
    content = rehearse(Order(seed=seed, interval=10, runs=2, run_minutes=minutes)).workbook
    record = read_bytes("whole.xlsx", content).record
    assert record is not None
    return content, record


def means(record: Record, name: str, step: int) -> tuple[list[datetime], list[float]]:
    """The readings of a channel as plain means over longer intervals, stamped at their starts."""
    first, second = (one.item() for one in record.readings.times[:2])
    count = round(step / (second - first).total_seconds())
    values = record.readings.column(name).values
    whole = len(values) // count * count
    times = [first + timedelta(seconds=step * place) for place in range(whole // count)]
    return times, np.mean(values[:whole].reshape(-1, count), axis=1).tolist()


def csv(record: Record, name: str, logger: Logger) -> bytes:
    """The text of a logger file; numbers with all their digits."""
    lines = [",".join([f"{name} time", *(f"{one} [{UNITS[one]} dry]" for one in logger.channels)])]
    columns = [means(record, one, logger.step) for one in logger.channels]
    put = dict(logger.words)
    shift = timedelta(seconds=(logger.step if logger.stamp == "interval end" else 0) - logger.behind)
    for place, time in enumerate(columns[0][0]):
        cells = [put.get(place, repr(values[place])) for _, values in columns]
        lines.append(",".join([f"{time + shift:%Y-%m-%d %H:%M:%S}", *cells]))
    return ("\n".join(lines) + "\n").encode()


def changing(record: Record, first: int, second: int, minutes: int) -> tuple[bytes, list[tuple[datetime, int, int]]]:
    """One file of all channels that goes from one interval [s] to another after so many minutes; the rows' spans.

    A span is the start of a row and the positions of the ten-second readings it is the mean of.
    """
    logger = Logger(tuple(UNITS), 10)
    lines = [csv(record, "one", logger).decode().splitlines()[0]]
    times = record.readings.times
    spans, place = [], 0
    while True:
        step = first if place * 10 < minutes * 60 else second
        end = place + step // 10
        if end > len(times):
            return ("\n".join(lines) + "\n").encode(), spans
        cells = [repr(float(np.mean(record.readings.column(name).values[place:end]))) for name in UNITS]
        lines.append(",".join([f"{times[place].item():%Y-%m-%d %H:%M:%S}", *cells]))
        spans.append((times[place].item(), place, end))
        place = end


def mapping(name: str, logger: Logger) -> str:
    """The mapping of that file."""
    columns = (COLUMN.format(name=one, unit=UNITS[one], gas=one.lower()) for one in logger.channels)
    return MAPPING.format(name=name, stamp=logger.stamp) + "".join(columns)


def folder(
    path: Path, loggers: Mapping[str, Logger], *, keep: Sequence[str] = (), test: tuple[bytes, Record] | None = None
) -> Path:
    """Write the folder; of the items of the sheet Test, stamp and interval stay only where they are kept."""
    content, record = test or source()
    book = openpyxl.load_workbook(io.BytesIO(content))
    del book["Readings"]
    for row in book["Test"].iter_rows():
        name = str(row[0].value).partition(" [")[0]
        if name in ("Reading stamp", "Logging interval") and name not in keep:
            row[1].value = None
    path.mkdir(exist_ok=True)
    book.save(path / "field.xlsx")
    for name, logger in loggers.items():
        (path / f"{name}.csv").write_bytes(csv(record, name, logger))
        (path / f"{name}.map.toml").write_text(mapping(name, logger), encoding="utf-8")
    return path
