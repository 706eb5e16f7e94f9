"""The minutes of a run without a reading, and the cells readings stand in, held against their plain definitions."""

from __future__ import annotations

from dataclasses import replace
from datetime import datetime, timedelta

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reporter.intake.foreign.merge import merged
from reporter.ledger import FromCells
from reporter.problems import Place
from reporter.record import Given, Reading, ReadingKind, ReadingRow, Readings
from reporter.reduction.places import cell_ranges
from reporter.reduction.window import Window, missing_minutes
from tests.record_factory import assessed, record

NOON = datetime(2026, 4, 14, 12)
MINUTE = timedelta(minutes=1)


def plainly(start: datetime, stop: datetime, spans: list[tuple[datetime, datetime]]) -> list[datetime]:
    """Minute by minute: the definition, without arrays."""

    def minutes(begin: datetime, end: datetime) -> list[datetime]:
        first = begin.replace(second=0, microsecond=0)
        return [first + n * MINUTE for n in range(5000) if first + n * MINUTE < end]

    def owned(begin: datetime, end: datetime) -> list[datetime]:
        if end - begin <= MINUTE:
            return [(begin + (end - begin) / 2).replace(second=0, microsecond=0)]
        return [minute for minute in minutes(begin, end) if begin <= minute + MINUTE / 2 < end]

    whole = {minute for span in spans for minute in owned(*span)}
    partly = {minute for span in spans for minute in minutes(*span)}
    return [
        minute
        for minute in minutes(start, stop)
        if minute not in (whole if start < minute and minute + MINUTE < stop else partly)
    ]


@settings(deadline=None)
@given(
    start=st.integers(0, 150), length=st.integers(1, 1500), interval=st.sampled_from([1, 7, 30, 60, 61, 90, 300, 900]),
    steps=st.lists(st.integers(0, 200), max_size=12), dropped=st.sets(st.integers(0, 12)),
)  # fmt: skip
def test_missing_minutes(start: int, length: int, interval: int, steps: list[int], dropped: set[int]) -> None:
    first, stop = NOON + timedelta(seconds=start), NOON + timedelta(seconds=start + length)
    made = record()
    run = replace(made.runs[0], start=Given(first), end=Given(stop))
    seconds = start + np.cumsum(np.array([0, *steps]))
    seconds = seconds[seconds + interval <= start + length]
    begin = np.datetime64(NOON, "us") + seconds.astype("timedelta64[s]")
    at = np.arange(len(begin)) + 40
    valid = np.array([n for n in range(len(at)) if n not in dropped], dtype=np.int64)
    span = Window(run, at, (), begin, np.zeros(len(at), dtype=np.int64), ("",), (), timedelta(seconds=interval))
    spans = [(b, b + span.interval) for n, b in enumerate(begin.tolist()) if n in valid]
    assert list(missing_minutes(span, valid)) == plainly(first, stop, spans)


@pytest.mark.parametrize(
    ("rows", "file", "cells"),
    [
        ([], "a.csv", "B"),
        ([7], "a.csv", "B7"),
        ([3, 4, 5, 9, 10, 20], "a.csv", "B3:B5;B9:B10;B20"),
        ([5, 4, 3], "a.csv", "B5;B4;B3"),
        ([0, 1, 2, 5], "a.json", "/0/B to /2/B;/5/B to /5/B"),
    ],
)
def test_cells_as_ranges(rows: list[int], file: str, cells: str) -> None:
    assert cell_ranges("B", rows, file) == cells


def test_readings_of_two_files_are_cited_in_the_file_each_stands_in() -> None:
    made = record()
    rows = list(made.readings.rows)
    parts = []
    for name, letters, part in (("one.csv", "CDEFGHI", rows[:75]), ("two.csv", "KLMNOPQ", rows[75:])):
        own = [ReadingRow(row.time, number, row.readings) for number, row in enumerate(part, start=2)]
        columns = tuple(letters[: len(made.readings.channels)])
        parts.append(Readings(made.readings.channels, columns, own, Place(name)))
    lanes = dict(enumerate(made.readings.channels))
    joined, clashes = merged([(part, lanes) for part in parts], made.readings.channels)
    assert not clashes
    assert [(row.time, row.readings) for row in joined] == [(row.time, row.readings) for row in rows]
    place = Place("one.csv, two.csv")
    outcome = assessed(readings=Readings(made.readings.channels, parts[0].columns, joined, place))
    cited = {}
    for run in "123":
        origin = outcome.ledger[f"run.{run}.nox.readings"].origin
        assert isinstance(origin, FromCells)
        cited[run] = (origin.place.file, origin.place.cell)
    assert cited == {
        "1": ("one.csv", "C7:C36"),
        "2": ("one.csv, two.csv", "C67:C76 of one.csv; K2:K21 of two.csv"),
        "3": ("two.csv", "K52:K81"),
    }


def test_what_a_second_file_says_differently_is_counted() -> None:
    number = Reading(ReadingKind.NUMBER, 4.0, "4.0")
    one = Readings(("O2",), ("B",), [ReadingRow(NOON + n * MINUTE, 2 + n, (number,)) for n in range(3)], Place("a"))
    other = (replace(number, value=5.0), replace(number, kind=ReadingKind.OVER), replace(number, text="4"))
    two = Readings(
        ("O2",), ("B",), [ReadingRow(NOON + n * MINUTE, 9 + n, (r,)) for n, r in enumerate(other)], Place("b")
    )
    rows, clashes = merged([(one, {0: "O2"}), (two, {0: "O2"})], ["O2", "CO"])
    assert {at: (clash.count, clash.first) for at, clash in clashes.items()} == {1: (2, NOON)}
    assert [row.readings[0] for row in rows] == [number] * 3
    assert all(row.readings[1] == Reading(ReadingKind.BLANK, None, "") for row in rows)
