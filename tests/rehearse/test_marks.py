"""A rehearsal says that it is synthetic in everything it becomes, and cannot be issued as a real test."""

from __future__ import annotations

import io
import json
import tomllib
from collections.abc import Callable
from dataclasses import replace
from functools import cache
from typing import Any

import jsonschema
import openpyxl
import pytest
from pypdf import PdfReader
from rehearsals import GAS, made, outcome_of

from reporter.api import assess, issue_time, opened, report_files
from reporter.outcome import Outcome
from reporter.output.results_schema import results_schema
from reporter.record import Given, Record
from reporter.rehearse import Order
from reporter.resources import table_text
from reporter.synthetic import MARK, STAMP, is_synthetic
from reporter.terminal import summary
from reporter.terminal_brief import brief
from tests.output.conftest import SAMPLES
from tests.record_factory import identity, record

SHORT = Order(fuel=GAS, gases=("NOx", "O2"), runs=1, run_minutes=21)


def _edited(change: Callable[[Any], None]) -> Outcome:
    """The outcome of the workbook after someone edited its sheet Test."""
    book = openpyxl.load_workbook(io.BytesIO(made(SHORT)[0].workbook))
    change(book["Test"])
    buffer = io.BytesIO()
    book.save(buffer)
    return outcome_of(buffer.getvalue())


def _set(page: Any, item: str, entry: str | None) -> None:
    row = next(row for row in page.iter_rows(min_row=4) if row[0].value == item)
    if entry is None:
        page.delete_rows(row[0].row)
    else:
        row[1].value = entry


def _final(page: Any) -> None:
    _set(page, "Status", "final")


def _final_and_unmarked(page: Any) -> None:
    _final(page)
    _set(page, "Synthetic", None)


def _final_and_denied(page: Any) -> None:
    _final(page)
    _set(page, "Synthetic", "no")


def _final_and_renamed(page: Any) -> None:
    """All of the sheet Test made to look real; the mark is still in cylinders, fuel, limits and events."""
    for row in page.iter_rows(min_row=4):
        if isinstance(row[1].value, str) and MARK in row[1].value:
            row[1].value = "Example Works (invented)"
    _set(page, "Report number", "R-1")
    _final_and_unmarked(page)


EDITS = [_final, _final_and_unmarked, _final_and_denied, _final_and_renamed]


@cache
def _files(edit: Callable[[Any], None]) -> dict[str, bytes]:
    return report_files(_edited(edit), issue_time("2026-06-10T08:00:00+00:00"))


@pytest.mark.parametrize("edit", EDITS)
def test_status_is_draft_whatever_is_entered(edit: Callable[[Any], None]) -> None:
    outcome = _edited(edit)
    test = outcome.record.test
    assert test.status is not None
    assert test.status.value == "draft"
    assert test.synthetic is not None
    assert test.synthetic.value.startswith("yes")
    assert "synthetic-test" in {problem.code for problem in outcome.problems}


def test_every_page_of_the_report_says_it() -> None:
    pages = PdfReader(io.BytesIO(_files(_final_and_renamed)[".pdf"])).pages
    assert len(pages) > 3
    for page in pages:
        text = page.extract_text()
        assert f"{STAMP}, DRAFT" in text


def test_the_cover_says_where_the_readings_come_from() -> None:
    first = PdfReader(io.BytesIO(_files(_final)[".pdf"])).pages[0].extract_text()
    assert f"yes, {MARK}, seed 1" in " ".join(first.split())


def test_the_results_workbook_says_it_on_every_sheet_and_in_its_summary() -> None:
    book = openpyxl.load_workbook(io.BytesIO(_files(_final_and_unmarked)[".xlsx"]))
    assert STAMP in book.properties.title
    for sheet in book:
        assert STAMP in sheet.oddFooter.left.text, sheet.title
    cells = [cell for row in book.worksheets[0].iter_rows(values_only=True) for cell in row]
    assert any(isinstance(cell, str) and cell.startswith(f"yes, {MARK}") for cell in cells)
    assert "final" not in cells


def test_the_json_says_it() -> None:
    document = json.loads(_files(_final_and_denied)[".json"])
    jsonschema.validate(document, results_schema())
    test = document["test"]
    assert "yes, entered as: no" in json.dumps(test["synthetic"])
    assert "draft" in json.dumps(test["status"])
    assert "final" not in json.dumps(test["status"])


def test_the_terminal_says_it() -> None:
    outcome = made(SHORT)[1]
    assert summary(outcome).startswith(STAMP)
    assert brief(outcome).startswith(STAMP)


def test_the_field_workbook_says_it_on_each_printed_page_and_in_its_properties() -> None:
    book = openpyxl.load_workbook(io.BytesIO(made(SHORT)[0].workbook))
    assert STAMP in book.properties.title
    assert MARK in book.properties.description
    for sheet in book:
        assert STAMP in sheet.oddHeader.center.text
        assert MARK in sheet.oddFooter.center.text
        assert STAMP in sheet["A1"].value


def test_every_text_of_a_rehearsal_bears_the_mark() -> None:
    words = tomllib.loads(table_text("rehearse.toml"))["words"]
    for name, text in words.items():
        assert MARK in text or name in ("report", "heat_source"), name
        assert "synthetic" in text.lower(), name


def test_a_firms_phrases_cannot_take_the_stamp_away(tmp_path: Any) -> None:
    (tmp_path / "phrases.toml").write_text('[status]\ndraft_mark = ""\n', encoding="utf-8")
    outcome = _edited(_final_and_renamed)
    files = report_files(outcome, issue_time("2026-06-10T08:00:00+00:00"), templates=tmp_path)
    for page in PdfReader(io.BytesIO(files[".pdf"])).pages:
        assert STAMP in page.extract_text()


def test_a_real_test_is_not_touched() -> None:
    outcome = opened(SAMPLES / "gas_boiler_us.xlsx")
    assert not is_synthetic(outcome.record)
    assert STAMP not in summary(outcome)
    plain = record(test=identity(status="final", synthetic="no"))
    assert assess(plain).record is plain


@pytest.mark.parametrize(
    ("entry", "synthetic"), [("yes", True), ("rehearsal", True), ("No", False), ("no, measured", False), ("", False)]
)
def test_what_the_item_means(entry: str, synthetic: bool) -> None:
    usual: Record = record()
    said = replace(usual, test=replace(usual.test, synthetic=Given(entry)))
    assert is_synthetic(said) is synthetic
