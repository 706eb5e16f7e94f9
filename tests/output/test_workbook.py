"""The results workbook of every sample: recalculated in a spreadsheet program it says what Python says."""

from __future__ import annotations

import re
import zipfile
from dataclasses import replace
from datetime import UTC, datetime
from functools import cache
from io import BytesIO
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from reporter.api import opened
from reporter.ledger import FromEquation
from reporter.outcome import Outcome
from reporter.output.workbook import write_workbook
from tests.spreadsheet import agrees, largest_term, need_office, recalculated

_INPUTS = Path(__file__).parents[2] / "sample_inputs"
#: Tests with results withheld for one reason or another; and series that are no column of the readings.
_WITHHELD = ("undecided-not-detected", "over-range-in-run", "diluent-missing", "no-citation")
SAMPLES = sorted((_INPUTS / "valid").glob("*.xlsx"))
SAMPLES += [_INPUTS / "defects" / f"{name}.xlsx" for name in _WITHHELD]
ISSUED = datetime(2026, 1, 2, 3, 4, 5, tzinfo=UTC)


@cache
def outcome_of(name: str) -> Outcome:
    return opened(next(path for path in SAMPLES if path.stem == name))


@cache
def content_of(name: str) -> bytes:
    return write_workbook(outcome_of(name), issued=ISSUED, version="0")


@cache
def formulas_of(name: str) -> Any:
    return openpyxl.load_workbook(BytesIO(content_of(name)))


def homes(book: Any) -> dict[str, tuple[str, str]]:
    """Sheet and cell (or range) of every defined name that is a key."""
    found: dict[str, tuple[str, str]] = {}
    for name, defined in book.defined_names.items():
        sheet, _, cells = defined.attr_text.partition("!")
        found[name] = (sheet.strip("'"), cells.replace("$", ""))
    return found


def values_at(book: Any, home: tuple[str, str]) -> tuple[Any, ...]:
    """The values of a home, blank cells passed over."""
    sheet, cells = home
    if ":" not in cells:
        return (book[sheet][cells].value,)
    return tuple(cell.value for row in book[sheet][cells] for cell in row if cell.value is not None)


@pytest.fixture(scope="module")
def calculated(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """Every sample's workbook after a forced recalculation."""
    need_office()
    files = {path.stem: content_of(path.stem) for path in SAMPLES}
    return recalculated(files, tmp_path_factory.mktemp("calculated"))


def wrong_entries(book: Any, outcome: Outcome, expected: dict[str, Any]) -> list[tuple[str, Any, Any]]:
    """The entries whose home does not hold the expected value."""
    wrong = []
    for key, home in homes(book).items():
        if key not in outcome.ledger:
            continue
        entry = outcome.ledger[key]
        found = values_at(book, home)
        value = expected[key] if entry.is_series else (expected[key],)
        largest = largest_term(outcome.ledger, entry)
        if len(found) != len(value) or not all(agrees(a, b, largest) for a, b in zip(found, value, strict=True)):
            wrong.append((key, found, value))
    return wrong


def test_there_are_samples() -> None:
    assert len(SAMPLES) >= 9
    assert all(path.is_file() for path in SAMPLES)


@pytest.mark.libreoffice
@pytest.mark.parametrize("name", [path.stem for path in SAMPLES])
def test_every_formula_recalculates_to_its_stored_value(name: str, calculated: dict[str, Any]) -> None:
    stored = openpyxl.load_workbook(BytesIO(content_of(name)), data_only=True)
    ledger = outcome_of(name).ledger
    checked, wrong = 0, []
    for sheet in formulas_of(name):
        for cell in (cell for row in sheet.iter_rows() for cell in row if cell.data_type == "f"):
            checked += 1
            found, value = (book[sheet.title][cell.coordinate].value for book in (calculated[name], stored))
            key = sheet.cell(cell.row, 1).value if sheet.title == "Derivations" else ""
            largest = largest_term(ledger, ledger[key]) if key else 0.0
            if not agrees(found or "" if value == "" else found, value, largest):
                wrong.append((sheet.title, cell.coordinate, found, value))
    assert not wrong, (len(wrong), wrong[:5])
    assert checked > 500


@pytest.mark.libreoffice
@pytest.mark.parametrize("name", [path.stem for path in SAMPLES])
def test_every_entry_has_its_value_in_its_home(name: str, calculated: dict[str, Any]) -> None:
    outcome = outcome_of(name)
    expected = {entry.key: entry.value for entry in outcome.ledger}
    assert not wrong_entries(calculated[name], outcome, expected)


@pytest.mark.parametrize("name", [path.stem for path in SAMPLES])
def test_every_entry_has_one_home_and_one_row(name: str) -> None:
    outcome, book = outcome_of(name), formulas_of(name)
    named = homes(book)
    assert set(named) >= {entry.key for entry in outcome.ledger}
    places = [named[entry.key] for entry in outcome.ledger]
    assert len(set(places)) == len(places)
    rows = [row[0] for row in book["Derivations"].iter_rows(min_row=5, values_only=True)]
    assert rows == [entry.key for entry in outcome.ledger]
    for entry in outcome.ledger:
        sheet = named[entry.key][0]
        if entry.is_series:
            assert sheet in {"Readings", "Other series"}
        else:
            assert sheet == ("Derivations" if isinstance(entry.origin, FromEquation) else "Inputs")


@pytest.mark.parametrize("name", [path.stem for path in SAMPLES])
def test_only_leaves_are_numbers_and_all_results_are_formulas(name: str) -> None:
    outcome, book = outcome_of(name), formulas_of(name)
    named = homes(book)
    for entry in outcome.ledger:
        if entry.is_series:
            continue
        sheet, cell = named[entry.key]
        is_formula = book[sheet][cell].data_type == "f"
        assert is_formula is isinstance(entry.origin, FromEquation), entry.key
    for title in ("Summary", "Runs", "Calibrations", "Criteria"):
        for cell in (cell for row in book[title].iter_rows() for cell in row):
            assert not isinstance(cell.value, (int, float)) or cell.is_date, (title, cell.coordinate)


@pytest.mark.parametrize("name", [path.stem for path in SAMPLES])
def test_limits_of_the_file_format_are_kept(name: str) -> None:
    book = formulas_of(name)
    cell_like = re.compile(r"[A-Za-z]{1,3}[0-9]+|[Rr][0-9]*[Cc][0-9]*|[RrCc]")
    for key in homes(book):
        assert len(key) <= 255
        assert not cell_like.fullmatch(key)
    for sheet in book:
        for cell in (cell for row in sheet.iter_rows() for cell in row):
            if cell.data_type == "f":
                assert len(cell.value) <= 8192
                assert most_arguments(cell.value) <= 255
            elif isinstance(cell.value, str):
                assert len(cell.value) <= 32767


def most_arguments(formula: str) -> int:
    """The largest number of arguments of any call in a formula without quoted commas."""
    depth, counts, most = 0, {0: 1}, 1
    for char in re.sub(r'"[^"]*"', "", formula):
        if char == "(":
            depth += 1
            counts[depth] = 1
        elif char == ",":
            counts[depth] += 1
            most = max(most, counts[depth])
        elif char == ")":
            depth -= 1
    return most


def test_same_outcome_and_issue_time_give_the_same_bytes() -> None:
    outcome = outcome_of(SAMPLES[0].stem)
    first = write_workbook(outcome, issued=ISSUED, version="0")
    assert first == write_workbook(outcome, issued=ISSUED, version="0")
    assert first != write_workbook(outcome, issued=ISSUED.replace(day=3), version="0")
    with zipfile.ZipFile(BytesIO(first)) as parts:
        assert {part.date_time for part in parts.infolist()} == {(1980, 1, 1, 0, 0, 0)}
        core = parts.read("docProps/core.xml").decode()
    assert set(re.findall(r"\d{4}-\d\d-\d\dT[\d:]+Z", core)) == {"2026-01-02T03:04:05Z"}


def test_text_of_a_user_is_never_a_formula_or_a_link() -> None:
    name = SAMPLES[0].stem
    outcome = outcome_of(name)
    evil = (
        "=cmd|' /C calc'!A0",
        "+1+1",
        "@SUM(A1)",
        "http://example.invalid/x",
        "<b>&amp;</b>",
        "x\x01" * 9,
        "a" * 40_000,
    )
    test = outcome.record.test
    facility = replace(test.facility, value=evil[0])
    limits = tuple(
        replace(each, citation=replace(each.citation, value=evil[1 + i % 6], text=evil[1 + i % 6]))
        for i, each in enumerate(outcome.record.limits)
    )
    record = replace(outcome.record, test=replace(test, facility=facility), limits=limits)
    comparisons = tuple(replace(made, limit=limit) for made, limit in zip(outcome.comparisons, limits, strict=True))
    problems = tuple(replace(outcome.problems[0], found=text) for text in evil)
    changed = replace(outcome, record=record, comparisons=comparisons, problems=problems)
    content = write_workbook(changed, issued=ISSUED, version="0")
    book = openpyxl.load_workbook(BytesIO(content))
    assert book["Summary"]["B4"].value == evil[0]
    for sheet in book:
        for cell in (cell for row in sheet.iter_rows() for cell in row):
            assert cell.hyperlink is None
            if cell.data_type == "f":
                assert "cmd" not in str(cell.value)
                assert "SUM(A1)" not in str(cell.value)
    shown = [row[3] for row in book["Problems"].iter_rows(min_row=5, max_row=11, values_only=True)]
    assert shown[:5] == list(evil[:5])
    assert len(shown[6]) == 32_000


@pytest.mark.parametrize("name", [path.stem for path in SAMPLES])
def test_readings_stand_as_logged_and_as_used(name: str) -> None:
    outcome, sheet = outcome_of(name), formulas_of(name)["Readings"]
    heads = [cell.value for cell in sheet[4]]
    readings = outcome.record.readings
    for number, row in enumerate(readings.rows, 5):
        for channel, reading in zip(readings.channels, row.readings, strict=True):
            column = heads.index(f"{channel}, as logged") + 1
            assert (sheet.cell(number, column).value or "") == reading.text
    for run in outcome.runs:
        for series in (gas.series for gas in run.gases if gas.series is not None):
            left_out = {time for time, _, _ in series.left_out}
            column = heads.index(f"{series.channel}, as logged") + 2
            for number, row in enumerate(readings.rows, 5):
                if row.time in left_out:
                    assert sheet.cell(number, column).value is None
                    assert series.channel in sheet.cell(number, len(heads)).value


def test_numbers_of_a_channel_that_is_not_valid_are_struck_out_live() -> None:
    name = SAMPLES[0].stem
    conditions = {
        formula
        for ranges in formulas_of(name)["Runs"].conditional_formatting
        for rule in ranges.rules
        for formula in rule.formula
    }
    assert conditions >= {f"{gas.valid}<>1" for run in outcome_of(name).runs for gas in run.gases}


def test_print_set_up() -> None:
    book = formulas_of(SAMPLES[0].stem)
    report = outcome_of(SAMPLES[0].stem).record.test.report_number
    assert report is not None
    for sheet in book:
        assert sheet.page_setup.orientation == "landscape"
        assert sheet.page_setup.fitToWidth in {None, 1}
        assert sheet.page_setup.fitToHeight == 0
        assert sheet.sheet_properties.pageSetUpPr.fitToPage
        assert report.value in sheet.oddFooter.left.text
        assert "&P" in sheet.oddFooter.right.text or "&[Page]" in sheet.oddFooter.right.text
    for title in ("Readings", "Derivations", "Inputs", "Criteria", "Calibrations", "Problems"):
        assert book[title].freeze_panes is not None
        assert book[title].print_title_rows is not None
