"""Dates, times and numbers as people write them; what could be read two ways is asked about."""

from __future__ import annotations

from datetime import date, datetime, time, timedelta

import pytest

from reporter.intake.cells import NumberRead, choice_of, gas_of, number_of, unit_of
from reporter.intake.dates import Fault, MomentRead, date_of, moment_of
from reporter.intake.readings import reading_of
from reporter.intake.sheets import sheet
from reporter.intake.table import Cell, Raw, split_header
from reporter.record import Reading, ReadingKind

DAY = date(2026, 4, 14)


def code(value: object) -> str:
    assert isinstance(value, Fault), value
    return value.code


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        (datetime(2026, 4, 14, 9, 30), date(2026, 4, 14)),
        ("2026-04-05", date(2026, 4, 5)),
        ("2026/4/5", date(2026, 4, 5)),
        ("14/04/2026", date(2026, 4, 14)),
        ("04/14/2026", date(2026, 4, 14)),
        ("05.05.2026", date(2026, 5, 5)),
        ("5 April 2026", date(2026, 4, 5)),
        ("April 5, 2026", date(2026, 4, 5)),
        ("5-Apr-2026", date(2026, 4, 5)),
        ("5 août 2026", date(2026, 8, 5)),
        ("12 dic. 2026", date(2026, 12, 12)),
        ("\u00a02026-04-05 ", date(2026, 4, 5)),
    ],
)
def test_dates_that_can_be_read(value: Raw, expected: date) -> None:
    assert date_of(Cell("A1", value)) == expected


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        ("04/05/2026", "ambiguous-date"),
        ("4.5.2026", "ambiguous-date"),
        ("14/04/26", "ambiguous-date"),
        ("31/31/2026", "not-a-date"),
        ("2026-02-30", "not-a-date"),
        ("14 Foo 2026", "not-a-date"),
        ("0205-03-14", "not-a-date"),
        ("soon", "not-a-date"),
        (46126.0, "not-a-date"),
        (True, "not-a-date"),
    ],
)
def test_dates_that_are_asked_about(value: Raw, expected: str) -> None:
    assert code(date_of(Cell("A1", value))) == expected


@pytest.mark.parametrize(
    ("value", "expected", "bare"),
    [
        (datetime(2026, 4, 14, 9, 30), datetime(2026, 4, 14, 9, 30), False),
        (datetime(2026, 4, 14, 9, 29, 59, 999_999), datetime(2026, 4, 14, 9, 30), False),
        (time(9, 30), datetime(2026, 4, 14, 9, 30), True),
        (timedelta(hours=24), datetime(2026, 4, 15), True),
        ("9:30", datetime(2026, 4, 14, 9, 30), True),
        ("0930", datetime(2026, 4, 14, 9, 30), True),
        ("9:30 pm", datetime(2026, 4, 14, 21, 30), True),
        ("12:00 AM", datetime(2026, 4, 14, 0, 0), True),
        ("12:05 p.m.", datetime(2026, 4, 14, 12, 5), True),
        ("24:00", datetime(2026, 4, 15), True),
        ("2026-04-13T23:59:30", datetime(2026, 4, 13, 23, 59, 30), False),
        ("04/14/2026 9:30 AM", datetime(2026, 4, 14, 9, 30), False),
    ],
)
def test_moments_that_can_be_read(value: Raw, expected: datetime, bare: bool) -> None:
    assert moment_of(Cell("A1", value), DAY) == MomentRead(expected, bare)


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        ("25:00", "not-a-time"),
        ("24:01", "not-a-time"),
        ("13:00 pm", "not-a-time"),
        ("9:61", "not-a-time"),
        ("2026-04-14", "not-a-time"),
        ("2026-04-14T09:30Z", "not-a-time"),
        ("2026-04-14 09:30+02:00", "not-a-time"),
        ("04/05/2026 9:30", "ambiguous-date"),
        ("noon", "not-a-time"),
        (0.3958, "not-a-time"),
    ],
)
def test_moments_that_are_asked_about(value: Raw, expected: str) -> None:
    assert code(moment_of(Cell("A1", value), DAY)) == expected


def test_a_bare_time_waits_for_the_test_date() -> None:
    assert moment_of(Cell("A1", "9:30"), None) is None


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        (12.5, NumberRead(12.5)),
        ("12.5", NumberRead(12.5, from_text=True)),
        ("\u00a0-0.3", NumberRead(-0.3, from_text=True)),
        ("−0.3", NumberRead(-0.3, from_text=True)),
        ("1e-3", NumberRead(0.001, from_text=True)),
        ("1,234.5", NumberRead(1234.5, from_text=True)),
        ("1,234,567", NumberRead(1234567.0, from_text=True)),
    ],
)
def test_numbers(value: Raw, expected: NumberRead) -> None:
    assert number_of(Cell("A1", value)) == expected


def test_a_number_may_bring_its_unit() -> None:
    for value, number, unit in (("36 in", 36.0, "in"), ("12%", 12.0, "%"), ("1.2 ppmvd", 1.2, "ppm")):
        read = number_of(Cell("A1", value))
        assert isinstance(read, NumberRead)
        assert read.unit is not None
        assert (read.value, read.unit.unit) == (number, unit)
    shown_as_percent = number_of(Cell("A1", 0.125, percent=True))
    assert isinstance(shown_as_percent, NumberRead)
    assert shown_as_percent.unit is not None
    assert (shown_as_percent.value, shown_as_percent.unit.unit) == (12.5, "%")


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        ("12,5", "ambiguous-number"),
        ("1,234", "ambiguous-number"),
        ("1.234,5", "ambiguous-number"),
        ("1'234", "ambiguous-number"),
        ("1O.5", "text-for-number"),
        ("l2", "text-for-number"),
        ("12.3 zorkmids", "text-for-number"),
        ("nan", "text-for-number"),
        ("inf", "text-for-number"),
        ("1_000", "text-for-number"),
        ("1e999", "text-for-number"),
        ("#DIV/0!", "error-value"),
        (True, "text-for-number"),
        (datetime(2026, 4, 14), "text-for-number"),
    ],
)
def test_numbers_that_are_asked_about(value: Raw, expected: str) -> None:
    assert code(number_of(Cell("A1", value))) == expected


@pytest.mark.parametrize(
    ("value", "kind", "number"),
    [
        (None, ReadingKind.BLANK, None),
        ("  ", ReadingKind.BLANK, None),
        ("---", ReadingKind.BLANK, None),
        ("ND", ReadingKind.NOT_DETECTED, None),
        ("bdl", ReadingKind.NOT_DETECTED, None),
        ("<0.5", ReadingKind.BELOW, 0.5),
        ("< 0.5", ReadingKind.BELOW, 0.5),
        (">100", ReadingKind.OVER, 100.0),
        ("OVER", ReadingKind.OVER, None),
        ("CAL", ReadingKind.CALIBRATION, None),
        ("#N/A", ReadingKind.ERROR, None),
        ("#DIV/0!", ReadingKind.ERROR, None),
        ("****", ReadingKind.ERROR, None),
        (-0.1, ReadingKind.NUMBER, -0.1),
        (9999.0, ReadingKind.NUMBER, 9999.0),
        ("24.1", ReadingKind.NUMBER, 24.1),
    ],
)
def test_what_a_reading_holds(value: Raw, kind: ReadingKind, number: float | None) -> None:
    read = reading_of(Cell("B2", value), "ppm")
    assert isinstance(read, Reading)
    assert (read.kind, read.value) == (kind, number)


@pytest.mark.parametrize(
    ("cell", "expected"),
    [
        (Cell("B2", "port change"), "text-for-number"),
        (Cell("B2", "24,1"), "ambiguous-number"),
        (Cell("B2", "0.4 %"), "wrong-dimension"),
        (Cell("B2", 0.04, percent=True), "wrong-dimension"),
        (Cell("B2", None, uncalculated=True), "formula-without-value"),
        (Cell("B2", datetime(2026, 4, 14)), "text-for-number"),
    ],
)
def test_readings_that_are_asked_about(cell: Cell, expected: str) -> None:
    assert code(reading_of(cell, "ppm")) == expected


def test_a_percentage_cell_of_a_percent_channel_is_percent() -> None:
    assert reading_of(Cell("C2", 0.042, percent=True), "%") == Reading(ReadingKind.NUMBER, 4.2, "4.2 %")


def test_choices_gases_units() -> None:
    basis = sheet("Channels").column("Moisture basis")
    assert choice_of(Cell("D2", " Dry basis "), basis) == "dry"
    assert code(choice_of(Cell("D2", "damp"), basis)) == "not-a-choice"
    relation = sheet("Limits").column("Relation")
    assert choice_of(Cell("E2", "<="), relation) == "at most"
    assert choice_of(Cell("E2", "<"), relation) == "less than"
    excluded = sheet("Events").column("Readings excluded")
    assert choice_of(Cell("E2", True), excluded) == "yes"
    assert choice_of(Cell("E2", 0.0), excluded) == "no"
    assert gas_of(Cell("B2", "oxides of nitrogen")) == "nox"
    assert code(gas_of(Cell("B2", "phlogiston"))) == "unknown-gas"
    assert code(unit_of("kg", sheet("Runs").column("Stack flow"))) == "wrong-dimension"
    assert code(unit_of("furlong", sheet("Runs").column("Stack flow"))) == "unknown-unit"


def test_headers_with_units() -> None:
    assert split_header("Stack temperature [°F]") == ("Stack temperature", "°F")
    assert split_header("Heat  input\n(MMBtu/h)") == ("Heat input", "MMBtu/h")
    assert split_header("Run") == ("Run", "")
