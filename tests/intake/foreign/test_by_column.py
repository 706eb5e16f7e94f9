"""Reading by column gives what reading cell by cell gives: rows, kinds, texts, places, report and problems."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from datetime import date, datetime, time, timedelta
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reporter.errors import RecordError
from reporter.intake.foreign import ForeignReadings, apply, bulk, look, mapping_of
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.lines import plain_rows
from reporter.intake.foreign.moments import moments_of, stamps_of
from reporter.intake.foreign.numbers import NumberStyle
from reporter.intake.foreign.times import TimeStyle, joined, read_stamp
from reporter.intake.foreign.wording import read_cell
from reporter.intake.table import Raw
from reporter.logged import KINDS, STAMPS
from reporter.record import Reading
from tests.corpus.corpus import CASES
from tests.corpus.truth import STARTS

Both = Callable[[Callable[[], ForeignReadings]], tuple[ForeignReadings, ForeignReadings]]


@pytest.fixture
def both(monkeypatch: pytest.MonkeyPatch) -> Both:
    """The result of some work cell by cell, and by column."""

    def run(work: Callable[[], ForeignReadings]) -> tuple[ForeignReadings, ForeignReadings]:
        results = []
        for least in (10**9, 0):
            monkeypatch.setattr(bulk, "LONG", least)
            results.append(work())
        return results[0], results[1]

    return run


def same(one: ForeignReadings, two: ForeignReadings) -> None:
    assert one.readings == two.readings
    assert [list(c.texts) for c in one.readings.logged.columns] == [list(c.texts) for c in two.readings.logged.columns]
    for a, b in zip(one.readings.logged.columns, two.readings.logged.columns, strict=True):
        assert a.sources == b.sources
    assert one.report == two.report
    assert one.problems == two.problems


@pytest.mark.parametrize("name", sorted(CASES))
def test_every_file_of_the_corpus(name: str, tmp_path: Path, both: Both, monkeypatch: pytest.MonkeyPatch) -> None:
    case = CASES[name]
    path = tmp_path / case.file
    path.write_bytes(case.content)
    looks = []
    for least in (10**9, 0):
        monkeypatch.setattr(bulk, "LONG", least)
        looks.append(look(path, case.answers))
    for part in ("questions", "evidence", "problems", "mapping"):
        assert getattr(looks[0], part) == getattr(looks[1], part)
    try:
        mapping = mapping_of(looks[0])
    except RecordError:
        return
    same(*both(lambda: apply(path, mapping, day=STARTS[0].date())))


_CELL = st.one_of(
    st.sampled_from(
        ["12.5", "-3.0", "1,234.5", "12,5", "ND", "<0.5", "> 100", "OVER", "", "  ", "7 ppm", "5 %", "-999", "CAL",
         "abc", "#N/A", "1e3", "007", "+4", "−2", "'3.5", "1 234", "9999", "O.5", "---", "12.5 ", "\u00a04"]
    ),
    st.floats(-50.0, 500.0).map(lambda v: f"{v:.2f}"),
    st.text("0123456789.,-+ <>%eENDpm", max_size=7),
)  # fmt: skip
_CLOCK = st.sampled_from(["2026-04-14 09:0{}:00", "2026-04-14 9:0{}", "14.04.2026 09:0{}", "09:0{}", "2026-04-14",
                          "x{}", "Average {}", "2026-04-14T09:0{}:00+02:00", ""])  # fmt: skip


@settings(deadline=None, max_examples=150)
@given(
    rows=st.lists(st.tuples(_CLOCK, st.integers(0, 9), st.lists(_CELL, min_size=1, max_size=5)), max_size=12),
    decimal=st.sampled_from([".", ","]),
    ending=st.sampled_from(["\n", ""]),
)
def test_odd_rows(rows: list[tuple[str, int, list[str]]], decimal: str, ending: str) -> None:
    head = "Time;NOx [ppm dry];CO [ppm dry];O2 [% dry]\n2026-04-14 08:58;1.5;2.5;3.5\n2026-04-14 08:59;1.5;2.5;3.6\n"
    grid = grid_of("a.csv", (head + "\n".join(";".join((t.format(n), *c)) for t, n, c in rows) + ending).encode())
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(bulk, "LONG", 10**9)
        found = look_at_head(head)
        mapping = replace(
            found,
            numbers=NumberStyle(decimal, decimal == ","),
            words=(("x1", "error value"), ("-999", "number"), ("007", "7")),
        )
        one = apply_again(grid, mapping)
        patch.setattr(bulk, "LONG", 0)
        same(one, apply_again(grid, mapping))


def look_at_head(head: str):  # type: ignore[no-untyped-def]
    from reporter.intake.foreign.look import look_at_grid

    return mapping_of(look_at_grid(grid_of("a.csv", head.encode()), {"stamp": "interval end"}))


def apply_again(grid, mapping) -> ForeignReadings:  # type: ignore[no-untyped-def]
    from reporter.intake.foreign.apply import apply_to_grid

    return apply_to_grid(grid, mapping, day=date(2026, 4, 14))


_STAMP = st.one_of(
    st.sampled_from(["2026-04-14 09:00", "14.04.2026 09:00:01,5", "4/14/2026 9:00 AM", "4/14/26, 9:00", "9:00 PM",
                     "2026-04-14T09:00:00Z", "20260414 0900", "20260414", "14 Apr 2026 09:00", "14-Apr-26 24:00",
                     "Apr 14, 2026 09:00", "46126.375", "0.375", "09:00", "", "pause", "2026-04-14", "24:00:00",
                     "2026-04-14  09:00 -07:00", "2026-04-14 25:00", " 2026-04-14 09:00", "14.04.2026\u00a009:00"]),
    st.floats(0.0, 1.0), st.floats(29_000.0, 61_000.0), st.datetimes(datetime(1899, 12, 30), datetime(2079, 1, 1)),
    st.dates(date(1990, 1, 1), date(2070, 1, 1)), st.times(), st.timedeltas(timedelta(0), timedelta(days=2)),
    st.none(), st.booleans(),
)  # fmt: skip


@settings(deadline=None, max_examples=300)
@given(
    cells=st.lists(st.tuples(_STAMP, _STAMP), min_size=1, max_size=8),
    order=st.sampled_from(["year first", "day first", "month first", "serial 1900", "serial 1904"]),
    zone=st.sampled_from(["", "America/Denver", "UTC-07:00"]),
    day=st.sampled_from([None, date(2026, 4, 14)]),
    two=st.booleans(),
)
def test_stamps(cells: list[tuple[Raw, Raw]], order: str, zone: str, day: date | None, two: bool) -> None:
    columns = list(zip(*cells, strict=True))[: 2 if two else 1]
    style = TimeStyle(order, zone=zone)
    moments, found = moments_of([stamps_of(column, order) for column in columns], day, style)
    expected = [joined([read_stamp(cell, order) for cell in row], day, style) for row in zip(*columns, strict=True)]
    read = [moment if there else None for moment, there in zip(moments.astype(STAMPS).tolist(), found, strict=True)]
    assert read == expected


@settings(deadline=None, max_examples=200)
@given(
    cells=st.lists(st.one_of(_CELL, st.floats(-1e9, 1e9), st.none()), max_size=8),
    unit=st.sampled_from(["ppm", "%", "mg/m3"]),
    decimal=st.sampled_from([".", ","]),
)
def test_cells(cells: list[Raw], unit: str, decimal: str) -> None:
    words = {"abc": "calibration", "007": "7", "12.5": "number", "9999": "error value"}
    style = NumberStyle(decimal, decimal == ",")
    held = bulk.held(cells, unit, style, words)
    for index, cell in enumerate(cells):
        read = read_cell(cell, unit, style, words)
        assert held.faults.get(index) == (None if isinstance(read, Reading) else read)
        if isinstance(read, Reading):
            value, text = float(held.values[index]), held.texts[index]
            assert KINDS[held.kinds[index]] is read.kind
            assert (None if np.isnan(value) else value) == read.value
            assert text == read.text or (text is None and isinstance(cell, float))


@settings(deadline=None, max_examples=300)
@given(st.text("ab1,;. \t\r\n'é\u00a0", max_size=40), st.sampled_from(",;\t"))
def test_lines_without_quotation_marks_are_rows_as_the_csv_module_reads_them(text: str, mark: str) -> None:
    import csv
    import io

    rows = plain_rows(text, mark)
    assert rows is not None
    expected = [tuple(row) for row in csv.reader(io.StringIO(text, newline=""), delimiter=mark)]
    assert [*rows] == expected
    assert [rows[i] for i in range(len(rows))] == expected
    assert rows.widths == [len(row) for row in expected]
    assert [*rows.filled()] == [n for n, row in enumerate(expected) if any(cell.strip() for cell in row)]
    assert rows.end == max(rows.filled(), default=-1) + 1
    lettered = [n for n, row in enumerate(expected) if any(any(map(str.isalpha, cell)) for cell in row)]
    assert set(lettered) <= set(rows.wordy())
    where = range(len(expected))
    for column, cells in enumerate(rows.columns(range(4), where)):
        assert cells == [row[column] if column < len(row) else None for row in expected]


def test_quotation_marks_are_left_to_the_csv_module() -> None:
    assert plain_rows('a,"b\nc"\n', ",") is None
    page = grid_of("a.csv", b'Time,"NOx, dry"\n1,"2\n3"\n4,5\n').pages[0]
    assert [*page.rows] == [("Time", "NOx, dry"), ("1", "2\n3"), ("4", "5")]
    assert [*page.lines] == [1, 2, 4]


def test_a_time_is_no_number() -> None:
    assert not stamps_of([time(9), "x"], "year first").read.all()
