"""The blank field workbook: it reads back, prints well, and its bytes repeat."""

from __future__ import annotations

import io
from datetime import datetime
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from reporter.equation import System
from reporter.errors import OutputError, RecordError
from reporter.intake import read_bytes
from reporter.intake.blank import blank_bytes, header_text, write_blank
from reporter.intake.sheets import Kind, sheets

GASES = ["NOx", "carbon monoxide", "O2", "CO2"]


@pytest.fixture(scope="module", params=[System.US, System.SI], ids=lambda s: s.value)
def system(request: pytest.FixtureRequest) -> System:
    return System(request.param)


@pytest.fixture(scope="module")
def book(system: System) -> Any:
    return openpyxl.load_workbook(io.BytesIO(blank_bytes(GASES, 3, system)))


def test_it_reads_back_with_nothing_entered_as_its_only_problems(system: System) -> None:
    result = read_bytes("blank.xlsx", blank_bytes(GASES, 3, system))
    assert {p.code for p in result.problems} == {"missing-entry", "no-rows", "unfilled-row"}


def test_filled_in_it_is_a_record(system: System) -> None:
    book = openpyxl.load_workbook(io.BytesIO(blank_bytes(["NOx", "O2"], 1, system)))
    entries = dict.fromkeys(
        ("Facility", "Unit tested", "Authority", "Testing firm", "Test lead"), "an entry (invented)"
    )
    entries |= {"Test date": datetime(2026, 4, 14), "Time zone": "UTC-06:00"}
    for row in book["Test"].iter_rows(min_row=5):
        if row[0].value in entries:
            row[1].value = entries[row[0].value]
    for row in (5, 6):
        book["Channels"].cell(row, 4, "dry")
    book["Runs"]["B5"], book["Runs"]["C5"] = datetime(2026, 4, 14, 9, 0), datetime(2026, 4, 14, 9, 2)
    for i in range(3):
        for column, value in enumerate((datetime(2026, 4, 14, 9, i), 24.0 + i, 4.0), start=1):
            book["Readings"].cell(5 + i, column, value)
    buffer = io.BytesIO()
    book.save(buffer)
    record = read_bytes("filled.xlsx", buffer.getvalue()).record
    assert record is not None
    assert record.system is system
    assert [channel.unit.value.unit for channel in record.channels] == ["ppm", "%"]
    assert len(record.readings.rows) == 3


def test_every_sheet_and_column_is_there_with_its_unit(book: Any, system: System) -> None:
    assert book.sheetnames == [spec.name for spec in sheets()]
    for spec in sheets():
        cells = book[spec.name]["A"][4:] if spec.kind is Kind.ITEMS else book[spec.name][4]
        texts = [cell.value for cell in cells]
        for column in spec.columns:
            if spec.kind is Kind.ITEMS or spec.kind is Kind.TABLE:
                assert header_text(column, system) in texts
                cell = cells[texts.index(header_text(column, system))]
                assert cell.comment is not None
                assert cell.comment.text.strip() == column.note
    assert [cell.value for cell in book["Readings"][4]] == ["Time", "NOx [ppm]", "CO [ppm]", "O2 [%]", "CO2 [%]"]


def test_drop_down_lists(book: Any) -> None:
    for spec in sheets():
        rules = [str(rule.formula1) for rule in book[spec.name].data_validations.dataValidation]
        for column in spec.columns:
            if column.choices:
                assert any(",".join(column.choices) in rule for rule in rules), column.name
            elif column.refers and spec.kind is Kind.TABLE:
                assert any(f"'{column.refers}'!$A$5" in rule for rule in rules), column.name


def test_printing(book: Any, system: System) -> None:
    for page in book.worksheets:
        assert page.page_setup.orientation == "landscape"
        assert page.page_setup.paperSize == (1 if system is System.US else 9)
        assert page.sheet_properties.pageSetUpPr.fitToPage
        assert page.page_setup.fitToHeight == 0
        assert "$4:$4" in page.print_title_rows
        assert page.freeze_panes == "B5"
        assert page.title in page.oddHeader.left.text


def test_what_is_printed_already(book: Any) -> None:
    assert [row[0].value for row in book["Runs"].iter_rows(min_row=5, max_row=8)] == [1, 2, 3, None]
    assert [cell.value for cell in book["Channels"]["B"][4:8]] == ["NOx", "CO", "O2", "CO2"]
    rows = [[cell.value for cell in row[1:4]] for row in book["Calibrations"].iter_rows(min_row=5)]
    rows = [row for row in rows if row[0]]
    direct = [row for row in rows if row[1] == "direct"]
    assert direct[:3] == [["NOx", "direct", "zero"], ["NOx", "direct", "mid"], ["NOx", "direct", "high"]]
    assert direct[-1] == ["NOx", "direct", "NO2"]
    system_checks = [row for row in rows if row[1] == "system"]
    assert len(system_checks) == 4 * 4 * 2  # before run 1 and after each of three runs; four gases; zero and upscale


def test_the_same_bytes_each_time(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("SOURCE_DATE_EPOCH", raising=False)
    one = blank_bytes(GASES, 3, System.US)
    assert one == blank_bytes(GASES, 3, System.US)
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1700000000")
    dated = blank_bytes(GASES, 3, System.US)
    assert dated != one
    created = openpyxl.load_workbook(io.BytesIO(dated)).properties.created
    assert created == datetime(2023, 11, 14, 22, 13, 20)  # 1 700 000 000 s after 1970 in UTC


def test_what_it_refuses(tmp_path: Path) -> None:
    for gases, runs in ((["phlogiston"], 3), (["NOx", "nox"], 3), ([], 3), (["NOx"], 0), (["NOx"], 100)):
        with pytest.raises(RecordError):
            write_blank(tmp_path / "x.xlsx", gases, runs, System.US)
    with pytest.raises(OutputError):
        write_blank(tmp_path / "nowhere" / "x.xlsx", GASES, 3, System.US)
    assert list(tmp_path.iterdir()) == []
    with pytest.raises(RecordError, match="does not end in"):
        write_blank(tmp_path / "x.csv", GASES, 3, System.US)
    write_blank(tmp_path / "x.xlsx", GASES, 3, System.US)
    assert [path.name for path in tmp_path.iterdir()] == ["x.xlsx"]


def test_a_workbook_already_filled_in_is_never_replaced(tmp_path: Path) -> None:
    (tmp_path / "x.xlsx").write_bytes(b"a day of work")
    with pytest.raises(OutputError, match="choose another name"):
        write_blank(tmp_path / "x.xlsx", GASES, 3, System.US)
    assert [(path.name, path.read_bytes()) for path in tmp_path.iterdir()] == [("x.xlsx", b"a day of work")]
