"""The readings: raw text and number side by side, and each run's readings as a named range of the numbers."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from datetime import datetime

from xlsxwriter.utility import xl_range_abs

from reporter.ledger import Entry
from reporter.logged import KINDS
from reporter.outcome import Outcome, Series
from reporter.output.numbers import unit_text
from reporter.output.workbook_book import Book, Column, Sheet
from reporter.output.workbook_words import words
from reporter.record import ReadingKind

_NUMBER = re.compile(r"[-+]?\d+(\.\d+)?")
#: A number of a row, or None where the cell stays blank.
Numbers = dict[int, float | None]


@dataclass
class Lane:
    """The columns of one channel: raw text, then one column of numbers, and a further one only where two runs
    share rows and leave out different ones."""

    name: str
    unit: str
    index: int
    layers: list[Numbers] = field(default_factory=list)
    ranges: dict[str, tuple[int, int, int]] = field(default_factory=dict)

    def place(self, key: str, rows: Numbers) -> None:
        """Put a run's readings into the first column they agree with."""
        fits = [all(layer.get(row, value) == value for row, value in rows.items()) for layer in self.layers]
        number = fits.index(True) if True in fits else len(self.layers)
        if number == len(self.layers):
            self.layers.append({})
        self.layers[number].update(rows)
        used = [row for row, value in rows.items() if value is not None]
        self.ranges[key] = (number, min(used), max(used))


def write_readings(book: Book, sheet: Sheet, outcome: Outcome) -> None:
    """Write every logged row; the numbers of a run's named range are exactly those of its entry."""
    readings = outcome.record.readings
    said = words("readings")
    lanes = [_lane(outcome, name) for name in readings.channels]
    columns = _columns(lanes)
    sheet.title(said["title"], said["note"])
    sheet.head(columns, freeze=1)
    first = sheet.row
    reasons = _reasons(outcome)
    runs = _runs(outcome)
    shapes = {lane.name: _shape(outcome, lane) for lane in lanes}
    for number, row in enumerate(readings.rows):
        sheet.moment(0, row.time)
        sheet.text(1, ", ".join(runs.get(row.time, ())))
        column = 2
        for lane in lanes:
            reading = row.readings[lane.index]
            sheet.text(column, reading.text, "raw")
            column += 1
            plain = reading.value if reading.kind is ReadingKind.NUMBER else None
            for layer in lane.layers:
                _number(sheet, column, layer.get(number, plain), shapes[lane.name])
                column += 1
        sheet.text(column, "; ".join(reasons.get(row.time, ())), "after")
        sheet.next()
    sheet.rules(first, len(columns))
    _define(book, sheet, lanes, first)


def _shape(outcome: Outcome, lane: Lane) -> str:
    """A number format with as many decimals as the logger wrote, at most six."""
    texts = outcome.record.readings.column(lane.name).texts
    decimals = max((len(text.partition(".")[2]) for text in texts if _NUMBER.fullmatch(text)), default=0)
    return "0." + "0" * min(decimals, 6) if decimals else "0"


def _columns(lanes: Sequence[Lane]) -> list[Column]:
    said = words("readings")
    made = [Column(**said["time"]), Column(**said["run"])]
    for lane in lanes:
        raw, used = said["raw"], said["used"]
        unit = unit_text(lane.unit)
        made.append(Column(**{**raw, "name": raw["name"].format(channel=lane.name)}))
        heading = used["name"].format(channel=lane.name, unit=unit)
        made.extend([Column(**{**used, "name": heading})] * len(lane.layers))
    return [*made, Column(**said["reason"])]


def _number(sheet: Sheet, column: int, value: float | None, shape: str) -> None:
    if value is None:
        sheet.blank(column, "input")
    else:
        sheet.number(column, value, shape, "input")


def _lane(outcome: Outcome, name: str) -> Lane:
    channel = outcome.record.channel(name)
    readings = outcome.record.readings
    lane = Lane(name, channel.unit.value.unit, readings.index(name))
    rows = {time: number for number, time in enumerate(readings.times.tolist())}
    for series in _series(outcome):
        if series.channel == name and series.used and series.key in outcome.ledger:
            lane.place(series.key, _window(outcome.ledger[series.key], series, rows))
    if not lane.layers:
        lane.layers.append({})
    return lane


def _series(outcome: Outcome) -> list[Series]:
    return [gas.series for run in outcome.runs for gas in run.gases if gas.series is not None]


def _window(entry: Entry, series: Series, rows: Mapping[datetime, int]) -> Numbers:
    """The rows a run's readings stand in, each with the number of the entry, or blank where it is left out."""
    used = dict(zip((rows[time] for time, _ in series.used), entry.value, strict=True))
    left_out = [rows[time] for time, _, _ in series.left_out]
    return {row: used.get(row) for row in (*range(min(used), max(used) + 1), *left_out)}


def _define(book: Book, sheet: Sheet, lanes: Sequence[Lane], first: int) -> None:
    column = 2
    for lane in lanes:
        for key, (layer, top, bottom) in lane.ranges.items():
            at = column + 1 + layer
            book.define(key, f"{sheet.name}!{xl_range_abs(first + top, at, first + bottom, at)}")
        column += 1 + len(lane.layers)


def _runs(outcome: Outcome) -> dict[datetime, dict[str, None]]:
    """By time: the runs whose readings stand in that row, left out or not."""
    found: dict[datetime, dict[str, None]] = {}
    for run in outcome.runs:
        for series in (gas.series for gas in run.gases if gas.series is not None):
            times = [time for time, _ in series.used] + [time for time, _, _ in series.left_out]
            for time in times:
                found.setdefault(time, {})[run.run.run.value] = None
    return found


def _reasons(outcome: Outcome) -> dict[datetime, tuple[str, ...]]:
    """By time: what was left out of a mean and why, and what was counted as another number than logged."""
    said = words("readings")
    readings = outcome.record.readings
    rows = {time: number for number, time in enumerate(readings.times.tolist())}
    found: dict[datetime, dict[str, None]] = {}
    shut: dict[tuple[datetime, str], list[str]] = {}
    for series in _series(outcome):
        column = readings.column(series.channel)
        counted = {number for number, kind in enumerate(column.kinds.tolist()) if KINDS[kind] is not ReadingKind.NUMBER}
        for time, _, reason in series.left_out:
            shut.setdefault((time, reason), []).append(series.channel)
        for time, value in series.used:
            if rows[time] in counted:
                written = column.texts[rows[time]]
                text = said["counted"].format(channel=series.channel, text=written, value=value)
                found.setdefault(time, {})[text] = None
    for (time, reason), channels in shut.items():
        text = said["left_out"].format(channel=", ".join(dict.fromkeys(channels)), reason=reason)
        found.setdefault(time, {})[text] = None
    return {time: tuple(texts) for time, texts in found.items()}


def other_series(outcome: Outcome) -> list[Entry]:
    """The series that are no range of the readings as they stand, e.g. of the process log."""
    placed = {series.key for series in _series(outcome) if series.used}
    return [entry for entry in outcome.ledger if entry.is_series and entry.key not in placed]


def write_other_series(book: Book, sheet: Sheet, entries: Sequence[Entry]) -> None:
    """One column for each further series, named by its key."""
    said = words("series")
    sheet.title(said["title"], said["note"])
    heads = [f"{entry.key} [{unit_text(entry.unit)}]" if unit_text(entry.unit) else entry.key for entry in entries]
    sheet.head([Column(head, said["width"], "input") for head in heads], freeze=0, height=said["head_height"])
    first = sheet.row
    for column, entry in enumerate(entries):
        for offset, value in enumerate(entry.value):
            sheet.row = first + offset
            sheet.number(column, value, "General", "input")
        cells = xl_range_abs(first, column, first + len(entry.value) - 1, column)
        book.define(entry.key, f"'{sheet.name}'!{cells}")
