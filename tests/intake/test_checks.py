"""What rows of several sheets must agree on: names, references, times of runs and readings."""

from __future__ import annotations

from datetime import datetime, time
from pathlib import Path

import pytest
from field_book import found, read_sheets, record_of, tiny, with_column, workbook

from reporter.intake import attachment_path, read


def at(hour: int, minute: int = 0, day: int = 14) -> datetime:
    return datetime(2026, 4, day, hour, minute)


@pytest.mark.parametrize(
    ("start", "end", "expected"),
    [
        (at(9, 5), at(9, 0), [("reversed-run", "Runs!C2")]),
        (at(9, 5), at(9, 5), [("reversed-run", "Runs!C2")]),
        (time(9, 5), time(9, 0), [("reversed-run", "Runs!C2")]),
        (time(23, 30), time(0, 30), [("run-across-midnight", "Runs!C2")]),
        (at(23, 30), at(0, 30, 15), [("run-without-readings", "Runs!A2")]),
        (at(9, 0, 12), at(9, 5, 12), [("run-without-readings", "Runs!A2"), ("date-outside-test", "Runs!B2")]),
        (at(9, 0), at(9, 8), [("overlapping-runs", "Runs!B3")]),
        (at(9, 0), at(9, 6), []),
        (time(9, 0), time(9, 5), []),
    ],
)
def test_times_of_a_run(start: object, end: object, expected: list[tuple[str, str]]) -> None:
    sheets = tiny()
    sheets["Runs"][1][1:] = [start, end]
    assert found(read_sheets(sheets)) == expected


def test_runs_of_different_groups_may_overlap() -> None:
    sheets = tiny()
    sheets["Runs"] = [
        ["Run", "Start", "End", "Group"],
        ["A1", at(9), at(9, 8), "unit A"],
        ["B1", at(9, 2), at(9, 9), "unit B"],
    ]
    assert len(record_of(sheets).runs) == 2


def test_duplicate_times_and_order_of_readings() -> None:
    sheets = tiny()
    rows = sheets["Readings"]
    rows[3], rows[4] = rows[4], rows[3]
    result = read_sheets(sheets)
    assert found(result) == [("readings-out-of-order", "Readings!A5")]
    assert result.record is not None
    times = [row.time for row in result.record.readings.rows]
    assert times == sorted(times)
    rows[5][0] = rows[6][0]
    assert ("duplicate-time", "Readings!A7") in found(read_sheets(sheets))


def test_bare_reading_times_across_midnight_are_asked_about() -> None:
    sheets = tiny()
    clock = [time(23, 58), time(23, 59), time(0, 0), time(0, 1)]
    sheets["Readings"] = [["Time", "NOx", "O2"], *([t, 24.0, 4.0] for t in clock)]
    assert ("run-across-midnight", "Readings!A4") in found(read_sheets(sheets))


def test_a_column_that_a_spreadsheet_half_converted_is_asked_about() -> None:
    """Day-first texts opened by a month-first program: days up to 12 become wrong dates, later ones stay text."""
    sheets = tiny()
    sheets["Readings"][1][0] = datetime(2026, 12, 4, 9, 0)
    for row in sheets["Readings"][2:]:
        row[0] = f"14/04/2026 {row[0]:%H:%M}"
    assert ("ambiguous-date", "Readings!A2") in found(read_sheets(sheets))


def test_names_are_unique_by_the_key_they_give() -> None:
    sheets = tiny()
    sheets["Channels"][2] = ["nox", "NO", "ppm", "dry"]
    assert ("duplicate-id", "Channels!A3") in found(read_sheets(sheets))
    sheets = tiny()
    sheets["Runs"][2][0] = 1
    assert found(read_sheets(sheets)) == [("duplicate-id", "Runs!A3")]


@pytest.mark.parametrize(
    ("sheet", "rows", "cell"),
    [
        ("Moisture", [["Run", "Meter volume start [ft3]"], ["7", 412.1]], "A2"),
        ("Points", [["Run", "Point"], ["stratification", "A1"], ["7", "A2"]], "A3"),
        ("Calibrations", [["Time", "Channel", "Route", "Level", "Reading"], ["8:30", "SO2", "direct", "low", 0]], "B2"),
        ("Events", [["Time", "What", "Run"], ["9:02", "port change", "7"]], "C2"),
    ],
)  # fmt: skip
def test_references_to_nothing(sheet: str, rows: list[list[object]], cell: str) -> None:
    sheets = tiny()
    sheets[sheet] = rows
    assert found(read_sheets(sheets)) == [("unknown-reference", f"{sheet}!{cell}")]


def test_a_cylinder_is_only_looked_for_where_cylinders_are_entered() -> None:
    sheets = tiny()
    sheets["Calibrations"] = [
        ["Time", "Channel", "Route", "Level", "Reading", "Cylinder", "Certified value"],
        ["8:30", "NOx", "direct", "high", 49.8, "EX-1", 50.2],
    ]
    assert record_of(sheets).calibrations[0].certified_value is not None


def test_the_logging_interval() -> None:
    for entry, expected in ((60, []), (10, [("interval-differs", "Readings")])):
        sheets = tiny()
        sheets["Test"].append(["Logging interval [s]", entry, ""])
        assert found(read_sheets(sheets)) == expected


def test_notes_on_negative_and_missing_value_marks_change_nothing() -> None:
    sheets = tiny()
    sheets["Readings"][2][1], sheets["Readings"][3][1], sheets["Readings"][4][1] = -0.2, -0.4, 9999
    result = read_sheets(sheets)
    assert [(p.code, p.place.cell, p.found) for p in result.problems] == [
        ("sentinel-value", "B5", "1 reading of 9999"),
        ("negative-reading", "B4", "2 readings, the lowest -0.4"),
    ]
    assert result.record is not None
    assert result.record.readings.rows[3].readings[0].value == 9999.0


def test_attachments_are_looked_for_beside_the_workbook_only(tmp_path: Path) -> None:
    folder = tmp_path / "job"
    (folder / "papers").mkdir(parents=True)
    (tmp_path / "secret.pdf").write_bytes(b"x")
    (folder / "papers" / "certificate.pdf").write_bytes(b"x")
    (folder / "link.pdf").symlink_to(tmp_path / "secret.pdf")
    names = ["papers/certificate.pdf", "papers\\certificate.pdf", "../secret.pdf", str(tmp_path / "secret.pdf"),
             "link.pdf", "lost.pdf", "papers", "C:\\secret.pdf", "a\x00b"]  # fmt: skip
    there = [attachment_path(folder, name) is not None for name in names]
    assert there == [True, True, False, False, False, False, False, False, False]
    sheets = tiny()
    sheets["Attachments"] = [["File", "What"], *([name, "certificate"] for name in names[:3])]
    (folder / "field.xlsx").write_bytes(workbook(sheets))
    assert found(read(folder / "field.xlsx")) == [("attachment-missing", "Attachments!A4")]


@pytest.mark.parametrize(
    ("sheet", "name", "value", "expected"),
    [
        ("Runs", "Barometric pressure [kPa]", 1013, "a value from 50.8 to 111.8 kPa"),
        ("Runs", "Ambient temperature [°C]", 291, "a value from -62.22 to 65.56 °C"),
        ("Fuel", "Gross heating value [kJ/kg]", 44.8, "a value from 930.4 to 151200 kJ/kg"),
        ("Fuel", "Gross heating value [MJ/m3]", -1, "a value from 0 MJ/m3"),
    ],
)
def test_a_slip_of_the_unit_is_asked_about_in_the_unit_of_the_sheet(
    sheet: str, name: str, value: float, expected: str
) -> None:
    sheets = tiny()
    sheets["Fuel"] = [["Fuel", "Factor source"], ["natural gas", "published"]]
    with_column(sheets[sheet], name, value)
    assert [(p.code, p.expected) for p in read_sheets(sheets).problems] == [("out-of-range", expected)]


def test_the_units_that_slip_are_read_where_they_are_right() -> None:
    """1013 hPa, 291 K and 44.8 MJ/kg are usual (common practice), each in its own unit."""
    sheets = tiny()
    sheets["Fuel"] = [["Fuel", "Factor source"], ["natural gas", "published"]]
    with_column(sheets["Runs"], "Barometric pressure [hPa]", 1013)
    with_column(sheets["Runs"], "Ambient temperature [K]", 291)
    with_column(sheets["Fuel"], "Gross heating value [MJ/kg]", 44.8)
    assert found(read_sheets(sheets)) == []


def test_readings_no_gas_can_have() -> None:
    sheets = tiny()
    sheets["Readings"][2][1], sheets["Readings"][3][2], sheets["Readings"][4][2] = -9999, 100.5, 100.0
    assert found(read_sheets(sheets)) == [("out-of-range", "Readings!B3"), ("out-of-range", "Readings!C4")]


def test_a_run_of_a_year_is_a_mistyped_date() -> None:
    sheets = tiny()
    sheets["Runs"][2][2] = sheets["Runs"][2][2].replace(year=2027)
    assert found(read_sheets(sheets)) == [("out-of-range", "Runs!C3")]


def test_the_interval_is_held_against_the_runs() -> None:
    sheets = tiny()
    sheets["Test"].append(["Logging interval [min]", 60, ""])
    problems = read_sheets(sheets).problems
    assert [p.code for p in problems] == ["run-without-readings", "run-without-readings", "interval-differs"]
    assert "no whole interval of 3600 s" in problems[0].found
    assert "logging interval" in problems[0].remedy


def test_events_end_after_they_begin_and_exclude_for_a_reason() -> None:
    sheets = tiny()
    begin = sheets["Runs"][1][1]
    sheets["Events"] = [
        ["Time", "Until", "What", "Readings excluded", "Reason"],
        [begin, begin.replace(hour=8), "port change", "no", None],
        [begin, begin, "port change", "yes", None],
        [begin, begin, "port change", "yes", "probe out"],
    ]
    assert found(read_sheets(sheets)) == [("out-of-range", "Events!B2"), ("missing-entry", "Events!D3")]


def test_a_name_written_nearly_right_is_asked_about_where_the_right_one_is_missing() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Heat inputs [MMBtu/h]", 12)
    sheets["Limts"] = [["Limit id"], ["A"]]
    sheets["Test"].append(["Reveiwer", "V. Checkwell", ""])
    problems = read_sheets(sheets).problems
    assert {(p.code, p.place.sheet, p.found) for p in problems} == {
        ("misspelt-name", "Runs", "Heat inputs [MMBtu/h]"),
        ("misspelt-name", "Limts", "Limts"),
        ("misspelt-name", "Test", "Reveiwer"),
    }
    with_column(sheets["Runs"], "Heat input [MMBtu/h]", 12)
    sheets["Limits"], sheets["Test"][-1][0] = [], "Weather"
    assert {p.code for p in read_sheets(sheets).problems} == {"unknown-column", "unknown-sheet"}


def test_a_certified_value_without_unit_is_said() -> None:
    sheets = tiny()
    sheets["Cylinders"] = [["Cylinder", "Gas", "Certified value"], ["A", "NOx", 0], ["B", "NOx", 50]]
    problems = read_sheets(sheets).problems
    assert [(p.code, p.found) for p in problems] == [("unit-assumed", "Certified value in the unit of the channel")]
