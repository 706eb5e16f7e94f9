"""Readings by column are the readings they were made of, row by row and reading by reading."""

from __future__ import annotations

import pickle
from dataclasses import replace
from datetime import datetime, timedelta

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from reporter.logged import LoggedColumn, LoggedRows, Texts, objects, plain_number
from reporter.problems import Place
from reporter.record import Reading, ReadingKind, ReadingRow, Readings

_WITH_VALUE = (ReadingKind.NUMBER, ReadingKind.BELOW, ReadingKind.OVER)
_KIND = st.sampled_from(list(ReadingKind))
_NUMBER = st.floats(-1e6, 1e6, allow_nan=False)


@st.composite
def reading(draw: st.DrawFn) -> Reading:
    kind = draw(_KIND)
    return Reading(kind, draw(_NUMBER) if kind in _WITH_VALUE else None, draw(st.text(max_size=6)))


@st.composite
def rows(draw: st.DrawFn) -> tuple[ReadingRow, ...]:
    width = draw(st.integers(0, 3))
    steps = draw(st.lists(st.integers(0, 10**9), max_size=6))
    time, made = datetime(2026, 4, 14, 9), []
    for number, step in enumerate(steps):
        time += timedelta(microseconds=step)
        made.append(ReadingRow(time, 3 * number + 2, tuple(draw(reading()) for _ in range(width))))
    return tuple(made)


@settings(deadline=None)
@given(rows())
def test_the_rows_come_back_as_they_were(made: tuple[ReadingRow, ...]) -> None:
    width = len(made[0].readings) if made else 1
    readings = Readings(tuple("ABC"[:width]), tuple("BCD"[:width]), made)
    assert tuple(readings.rows) == made
    assert [readings.rows[i] for i in range(len(made))] == list(made)
    assert readings.rows[1:3] == made[1:3]
    assert readings == Readings(readings.channels, readings.columns, made)
    assert pickle.loads(pickle.dumps(readings)) == readings
    assert replace(readings, rows=[*readings.rows]) == readings
    for index, channel in enumerate(readings.channels):
        assert list(readings.column(channel).readings()) == [row.readings[index] for row in made]


@settings(deadline=None)
@given(rows(), st.data())
def test_a_column_at_some_positions(made: tuple[ReadingRow, ...], data: st.DataObject) -> None:
    blank = (Reading(ReadingKind.BLANK, None, ""),)
    column = LoggedRows.of([replace(row, readings=row.readings or blank) for row in made], 1).columns[0]
    some = data.draw(st.lists(st.integers(0, max(len(made) - 1, 0)), max_size=5)) if made else []
    taken = column.take(np.array(some, dtype=np.int64))
    assert list(taken.readings()) == [column.reading(i) for i in some]
    assert taken.rows.tolist() == [made[i].row for i in some]


def test_another_value_kind_or_text_is_another_series() -> None:
    at = datetime(2026, 4, 14, 9)
    one = Reading(ReadingKind.NUMBER, 4.0, "4.0")
    base = Readings(("O2",), ("B",), (ReadingRow(at, 2, (one,)),))
    for other in (replace(one, value=4.1), replace(one, kind=ReadingKind.OVER), replace(one, text="4")):
        assert Readings(("O2",), ("B",), (ReadingRow(at, 2, (other,)),)) != base
    assert Readings(("O2",), ("B",), (ReadingRow(at + timedelta(seconds=1), 2, (one,)),)) != base


def test_the_text_of_a_number_cell_is_made_when_asked_for() -> None:
    numbers = np.array([24.1, 5.0, np.nan])
    texts = Texts(objects([None, None, "ND"]), numbers)
    assert list(texts) == [texts[0], texts[1], texts[2]] == ["24.1", "5", "ND"]
    assert list(texts.take(np.array([2, 0]))) == ["ND", "24.1"]
    assert [plain_number(v) for v in (1e15, 0.1 + 0.2, -3.0)] == ["1e+15", "0.3", "-3"]


def test_a_reading_knows_its_file() -> None:
    places = (Place("monday.csv", "", "B"), Place("tuesday.csv", "", "C"))
    values = np.array([1.0, 2.0, 3.0])
    kinds, rows = np.zeros(3, dtype=np.uint8), np.array([2, 3, 2])
    column = LoggedColumn(values, kinds, Texts(objects([None] * 3), values), rows, places, np.array([0, 0, 1]))
    source = column.take(np.array([2, 1])).source
    assert source is not None
    assert [places[i].file for i in source] == ["tuesday.csv", "monday.csv"]
