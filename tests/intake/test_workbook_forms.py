"""Field workbooks as they arrive: titles, units, hidden parts, footers, merged cells, synonyms, text."""

from __future__ import annotations

from datetime import datetime, time
from typing import Any

import pytest
from field_book import SAMPLES, found, read_sheets, record_of, tiny, with_column

from reporter.basis import Moisture
from reporter.equation import System
from reporter.intake import read
from reporter.record import ReadingKind


def test_the_record_of_a_small_workbook() -> None:
    record = record_of(tiny())
    assert record.system is System.US
    assert record.test.facility.value == "Alder Creek Works (invented)"
    assert record.test.facility.place.text() == "tiny.xlsx, Test!B2 (Facility)"
    assert [channel.gas.value for channel in record.channels] == ["nox", "o2"]
    assert record.readings.channels == ("NOx", "O2")
    assert record.readings.columns == ("B", "C")
    assert record.readings.rows[2].row == 4
    assert record.readings.rows[2].readings[0].value == 24.2
    assert record.source.size == len(record.source.content)
    assert [copy.sheet for copy in record.sheets] == ["Test", "Channels", "Readings", "Runs"]
    assert record.sheets[2].rows[0] == ("2026-04-14 09:00", "24", "4")


@pytest.mark.parametrize("path", sorted(SAMPLES.glob("*.xlsx")), ids=lambda p: p.stem)
def test_the_valid_samples_are_read_with_notes_only(path: Any) -> None:
    result = read(path)
    assert result.record is not None
    assert {p.code for p in result.problems} <= {"negative-reading"}


def test_titles_and_notes_may_stand_above() -> None:
    sheets = tiny()
    sheets["Runs"] = [["Run sheet of the test"], [], ["Written by hand, then typed"], [], *sheets["Runs"]]
    record = record_of(sheets)
    assert record.runs[0].start.place.cell == "B6"


def test_order_of_sheets_and_columns_is_free_and_names_have_synonyms() -> None:
    sheets = tiny()
    sheets["Runs"] = [list(reversed(row)) for row in sheets["Runs"]]
    sheets["Runs"][0] = ["Stop time", "START TIME", " run no "]
    sheets["minute data"] = sheets.pop("Readings")
    record = record_of(dict(reversed(sheets.items())))
    assert [run.run.value for run in record.runs] == ["1", "2"]


def test_units_in_headers() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Stack temperature [°C]", 150)
    with_column(sheets["Runs"], "Heat input (MMBtu/h)", 55.5)
    with_column(sheets["Runs"], "Barometric pressure, inHg", 29.9)
    with_column(sheets["Runs"], "Stack flow dscfm", 10_000)
    with_column(sheets["Runs"], "Flow basis", "dry standard")
    run = record_of(sheets).runs[0]
    units = [g.unit.unit for g in (run.stack_temperature, run.heat_input, run.barometric_pressure, run.stack_flow)]
    assert units == ["°C", "MMBtu/h", "inHg", "ft3/min"]
    assert run.stack_flow is not None
    assert run.stack_flow.unit is not None
    assert run.stack_flow.unit.moisture is Moisture.DRY


def test_units_in_a_row_of_their_own() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Stack temperature", 300)
    with_column(sheets["Runs"], "Barometric pressure", 99.1)
    sheets["Runs"].insert(1, [None, None, None, "°F", "[kPa]"])
    run = record_of(sheets).runs[0]
    assert run.barometric_pressure is not None
    assert run.barometric_pressure.unit is not None
    assert run.barometric_pressure.unit.unit == "kPa"


def test_the_unit_system_decides_where_a_header_names_no_unit() -> None:
    for system, unit in (("US", "°F"), ("SI", "°C")):
        sheets = tiny()
        sheets["Test"][8][1] = system
        with_column(sheets["Runs"], "Stack temperature", 300)
        result = read_sheets(sheets)
        assert result.record is not None
        given = result.record.runs[0].stack_temperature
        assert given is not None
        assert given.unit is not None
        assert given.unit.unit == unit
        assert [(p.code, p.found) for p in result.problems] == [("unit-assumed", f"Stack temperature in {unit}")]


def test_an_unknown_unit_in_brackets_is_never_ignored() -> None:
    for header in ("Heat input [MBq]", "Heat input (MBq)"):
        sheets = tiny()
        with_column(sheets["Runs"], header, 55.5)
        assert ("unknown-unit", "Runs!D1") in found(read_sheets(sheets))


def test_a_unit_of_the_wrong_dimension() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Stack flow [lb/h]", 10_000)
    problems = read_sheets(sheets).problems
    assert problems[0].code == "wrong-dimension"
    assert "ft3/min" in problems[0].expected


def test_values_keep_the_unit_of_their_channel_or_row() -> None:
    sheets = tiny()
    with_column(sheets["Channels"], "Calibration span", 50, 12)
    sheets["Cylinders"] = [["Cylinder", "Gas", "Certified value", "Unit"], ["EX-1", "NOx", 0.005, "%"]]
    sheets["Calibrations"] = [
        ["Time", "Channel", "Route", "Level", "Reading", "Cylinder"],
        [time(8, 30), "nox", "Direct", "High", 49.8, "ex-1"],
    ]
    record = record_of(sheets)
    assert [c.calibration_span.unit.unit for c in record.channels] == ["ppm", "%"]
    assert record.cylinders[0].certified_value.unit.unit == "%"
    assert record.calibrations[0].reading.unit.unit == "ppm"
    assert record.calibrations[0].time.value == datetime(2026, 4, 14, 8, 30)
    assert record.calibrations[0].channel.value == "NOx"
    assert record.calibrations[0].cylinder.value == "EX-1"


def test_a_header_that_contradicts_its_row_is_asked_about() -> None:
    sheets = tiny()
    with_column(sheets["Channels"], "Calibration span [%]", 50, 12)
    assert found(read_sheets(sheets)) == [("unit-contradiction", "Channels!E2")]


def test_hidden_rows_columns_and_sheets_are_read_and_said() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Group", "A", "A")

    def hide(book: Any) -> None:
        book["Runs"].row_dimensions[3].hidden = True
        book["Runs"].column_dimensions["D"].hidden = True
        book["Channels"].sheet_state = "hidden"

    result = read_sheets(sheets, hide)
    assert result.record is not None
    assert len(result.record.runs) == 2
    assert [(p.place.sheet, p.found) for p in result.problems] == [
        ("Channels", "the sheet"),
        ("Runs", "rows 3, columns D"),
    ]
    assert result.record.sheets[1].hidden


def test_a_foot_is_no_data_and_data_is_no_foot() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Load", 46.0, 47.0)
    sheets["Runs"] += [["Average", None, None, 46.5], [], ["Checked by the test lead"]]
    result = read_sheets(sheets)
    assert result.record is not None
    assert len(result.record.runs) == 2
    assert found(result) == [("footer-row", "Runs!A4")]
    sheets["Runs"].append(["3", datetime(2026, 4, 14, 9, 11), datetime(2026, 4, 14, 9, 12), 46.0])
    assert "missing-entry" in {p.code for p in read_sheets(sheets).problems}


def test_average_and_extremes_below_the_readings() -> None:
    sheets = tiny()
    sheets["Readings"] += [["Average", 24.5, 4.1], ["Max", 25.1, 4.2]]
    result = read_sheets(sheets)
    assert result.record is not None
    assert len(result.record.readings.rows) == 12
    assert found(result) == [("footer-row", "Readings!A14")]


def test_a_cell_merged_downwards_holds_for_its_rows() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Group", "A", None)
    record = record_of(sheets, lambda book: book["Runs"].merge_cells("D2:D3"))
    assert [run.group.value for run in record.runs if run.group] == ["A", "A"]


def test_a_title_merged_across_is_tolerated() -> None:
    sheets = tiny()
    sheets["Runs"] = [["Runs of the test"], *sheets["Runs"]]
    assert len(record_of(sheets, lambda book: book["Runs"].merge_cells("A1:C1")).runs) == 2


def test_percent_cells_and_the_question_of_fraction_or_percent() -> None:
    sheets = tiny()
    with_column(sheets["Runs"], "Moisture [%]", 0.17, 17.2)
    assert found(read_sheets(sheets)) == [("ambiguous-moisture", "Runs!D2")]

    def percent(book: Any) -> None:
        book["Runs"]["D2"].number_format = "0.0%"

    given = record_of(sheets, percent).runs[0].moisture
    assert given is not None
    assert (given.value, given.text) == (pytest.approx(17.0), "17 %")
    sheets["Runs"][0][3], sheets["Runs"][2][3] = "Moisture [fraction]", 0.172
    assert record_of(sheets).runs[0].moisture.unit.unit == "1"
    sheets["Runs"][2][3] = 17.2
    assert found(read_sheets(sheets)) == [("out-of-range", "Runs!D3")]


def test_items_with_units_and_rows_of_ones_own() -> None:
    sheets = tiny()
    sheets["Test"] += [["Logging interval [s]", 60, ""], ["Weather", "overcast", "kept as typed"]]
    sheets["Location"] = [["Item", "Entry"], ["Diameter", "42 in"], ["Elevation [ft]", 780], ["Paint", "grey"]]
    record = record_of(sheets)
    assert record.test.logging_interval.unit.unit == "s"
    assert [(e.item, e.entry, e.note) for e in record.test.extra] == [("Weather", "overcast", "kept as typed")]
    assert record.location.diameter.unit.unit == "in"
    assert record.location.diameter.value == 42.0
    assert record.location.extra[0].place.cell == "B4"


def test_a_channel_column_may_carry_its_unit_or_the_name_of_its_gas() -> None:
    for headers in (["Time", "NOx [ppm]", "O2 %"], ["Date and time", "oxides of nitrogen", "Oxygen (%)"]):
        sheets = tiny()
        sheets["Readings"][0] = headers
        assert record_of(sheets).readings.channels == ("NOx", "O2")


def test_two_columns_for_one_channel_are_never_picked_silently() -> None:
    sheets = tiny()
    with_column(sheets["Readings"], "NOx (ppm)", *[20.0] * 12)
    assert found(read_sheets(sheets)) == [("repeated-column", "Readings!D1")]
    sheets = tiny()
    sheets["Channels"].append(["NOx-B", "NOx", "ppm", "dry"])
    sheets["Readings"][0] = ["Time", "oxides of nitrogen", "O2"]
    assert {code for code, _ in found(read_sheets(sheets))} == {"missing-column", "unknown-column"}


def test_a_reading_column_that_names_another_unit_or_basis() -> None:
    for header, code in (("NOx [%]", "unit-contradiction"), ("NOx [ppmvw]", "basis-contradiction")):
        sheets = tiny()
        sheets["Readings"][0][1] = header
        assert found(read_sheets(sheets)) == [(code, "Readings!B1")]


def test_unit_and_moisture_basis_contradict() -> None:
    sheets = tiny()
    sheets["Channels"][1][2] = "ppmvw"
    assert found(read_sheets(sheets)) == [("basis-contradiction", "Channels!C2")]
    sheets = tiny()
    with_column(sheets["Runs"], "Stack flow [acfm]", 1000, 1000)
    with_column(sheets["Runs"], "Flow basis", "actual", "dry standard")
    assert found(read_sheets(sheets)) == [("basis-contradiction", "Runs!D3")]


def test_date_and_time_in_columns_of_their_own() -> None:
    sheets = tiny()
    sheets["Readings"] = [
        ["Date", "Time", "NOx", "O2"],
        *([row[0].date(), row[0].time(), *row[1:]] for row in sheets["Readings"][1:]),
    ]
    assert record_of(sheets).readings.rows[0].time == datetime(2026, 4, 14, 9, 0)


def test_process_columns_keep_their_units_and_words() -> None:
    sheets = tiny()
    sheets["Process"] = [
        ["Time", "Steam flow [klb/h]", "Damper", "Oddity [smiles]"],
        ["9:00", 46.1, "open", 1],
        ["9:05", None, "half", 2],
    ]
    log = record_of(sheets).process
    assert log.columns == ("Steam flow", "Damper", "Oddity [smiles]")
    assert [unit.unit if unit else None for unit in log.units] == ["klb/h", None, None]
    assert log.values == ((46.1, "open", 1.0), (None, "half", 2.0))
    assert log.times[1] == datetime(2026, 4, 14, 9, 5)


def test_printed_rows_that_nobody_filled_in() -> None:
    sheets = tiny()
    sheets["Runs"] += [["3", None, None], ["4", None, None]]
    result = read_sheets(sheets)
    assert result.record is not None
    assert len(result.record.runs) == 2
    assert [(p.code, p.found) for p in result.problems] == [("unfilled-row", "2 rows, the first in row 4")]


def test_all_problems_are_reported_together_the_grave_ones_first() -> None:
    sheets = tiny()
    del sheets["Test"][6]  # the test date
    sheets["Channels"][1][1] = "phlogiston"
    sheets["Runs"][2][2] = None
    sheets["Readings"][2][1] = "24,1"
    sheets["Lunch"] = [["soup"]]
    result = read_sheets(sheets)
    assert result.record is None
    assert found(result) == [
        ("missing-entry", "Test"),
        ("unknown-gas", "Channels!B2"),
        ("missing-entry", "Runs!C3"),
        ("ambiguous-number", "Readings!B3"),
        ("unknown-sheet", "Lunch"),
    ]


def test_many_problems_of_one_kind_are_counted() -> None:
    sheets = tiny()
    for row in sheets["Readings"][1:]:
        row[1] = "broken"
    problems = [p for p in read_sheets(sheets).problems if p.code == "text-for-number"]
    assert len(problems) == 5
    assert problems[-1].found.endswith("and 7 more like it in this column")


def test_the_words_of_readings_stay_apart() -> None:
    sheets = tiny()
    words = ["ND", "<0.5", "OVER", ">100", "CAL", "#N/A", None]
    for row, word in zip(sheets["Readings"][1:], words, strict=False):
        row[1] = word
    kinds = [row.readings[0].kind for row in record_of(sheets).readings.rows[: len(words)]]
    assert kinds == [
        ReadingKind.NOT_DETECTED, ReadingKind.BELOW, ReadingKind.OVER, ReadingKind.OVER,
        ReadingKind.CALIBRATION, ReadingKind.ERROR, ReadingKind.BLANK,
    ]  # fmt: skip
