"""Findings of a series as notes with their cells: of a record, within its runs, or of a logger's file as a whole."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from datetime import datetime
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from reporter.errors import UnitError
from reporter.intake.series_findings import Finding, Trace, findings
from reporter.logged import Moments
from reporter.problems import Place, Problem, problem
from reporter.record import Channel, Readings, Record, text_of
from reporter.units import convert

if TYPE_CHECKING:
    from reporter.intake.foreign.apply import ForeignReadings

_SPAN = re.compile(r"(\d{4}-\d\d-\d\d) (\d\d:\d\d(?::\d\d)?) to (?:(\d{4}-\d\d-\d\d) )?(\d\d:\d\d(?::\d\d)?): ")
#: Notes of one kind in one channel that are said.
LISTED = 5
Side: TypeAlias = Literal["left", "right"]


def notes_of_file(made: ForeignReadings) -> tuple[Problem, ...]:
    """What the whole series of a logger's file shows; no run is known yet."""
    gases = {column.channel: column.gas for column in made.columns}
    traces = _traces(made.readings, gases, {})
    return _said(made.readings, findings(made.readings.times, traces, [(0, len(made.readings.rows))]))


def notes_of_record(record: Record) -> tuple[Problem, ...]:
    """What the readings of each run show; readings that an event excludes are not looked at."""
    times = record.readings.times
    gases = {channel.channel.value: channel.gas.value for channel in record.channels}
    cylinders = {channel.channel.value: _cylinders(record, channel) for channel in record.channels}
    traces = _traces(record.readings, gases, cylinders)
    for event in record.events:
        if event.readings_excluded is not None and event.readings_excluded.value:
            until = event.time if event.until is None else event.until
            for trace in traces:
                trace.values[_from(times, event.time.value, "left") : _from(times, until.value, "right")] = np.nan
    side: Side = "left" if text_of(record.test.reading_stamp).endswith("start") else "right"
    spans = [(_from(times, run.start.value, side), _from(times, run.end.value, side)) for run in record.runs]
    return _said(record.readings, findings(times, traces, spans))


def _from(times: Moments, moment: datetime, side: Side) -> int:
    return int(np.searchsorted(times, np.datetime64(moment), side=side))


def _traces(readings: Readings, gases: Mapping[str, str], cylinders: Mapping[str, Sequence[float]]) -> list[Trace]:
    """The channels as columns of numbers."""
    return [
        Trace(name, gases.get(name, ""), readings.column(name).measured, tuple(cylinders.get(name, ())))
        for name in readings.channels
    ]


def _cylinders(record: Record, channel: Channel) -> list[float]:
    """The certified values of the gas of a channel, in its unit."""
    values = []
    for cylinder in record.cylinders:
        if cylinder.gas.value == channel.gas.value:
            unit = channel.unit.value.unit if cylinder.unit is None else cylinder.unit.value.unit
            try:
                values.append(convert(cylinder.certified_value.value, unit, channel.unit.value.unit))
            except UnitError:
                continue
    return sorted(set(values))


def _said(readings: Readings, found: Sequence[Finding]) -> tuple[Problem, ...]:
    """Findings as notes: the cell of the first reading, and the times."""
    notes = []
    for code, name in dict.fromkeys((f.code, f.channel) for f in found):
        same = [f for f in found if (f.code, f.channel) == (code, name)]
        for number, one in enumerate(same[:LISTED], start=1):
            more = f"; and {len(same) - LISTED} more" if number == LISTED < len(same) else ""
            place = _place(readings, one)
            notes.append(problem(code, place, f"{_span(readings, one)}: {one.words}{more}"))
    return tuple(notes)


def _place(readings: Readings, one: Finding) -> Place:
    """The cell of the first reading; of a finding of all channels, the row in the first of them."""
    place = readings.place_of(readings.index(one.channel) if one.channel else 0, one.first)
    return Place(place.file, place.sheet, place.cell, one.channel)


def span_of(found: str) -> tuple[datetime, datetime] | None:
    """The first and the last time that a note of several readings begins with."""
    match = _SPAN.match(found)
    if match is None:
        return None
    day, first, last_day, last = match.groups()
    return datetime.fromisoformat(f"{day} {first}"), datetime.fromisoformat(f"{last_day or day} {last}")


def _span(readings: Readings, one: Finding) -> str:
    first, last = readings.times[[one.first, one.last]].tolist()
    form = "%H:%M" if not (first.second or last.second) else "%H:%M:%S"
    start = f"{first:%Y-%m-%d} {first.strftime(form)}"
    if one.first == one.last:
        return start
    same = first.date() == last.date()
    return f"{start} to {last.strftime(form) if same else last.strftime(f'%Y-%m-%d {form}')}"
