"""A technician under time pressure: each usual slip is named with its cell, gives its exit code, and loses nothing."""

from __future__ import annotations

import io
import re
from collections.abc import Callable, Iterator
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest
from technician_book import FIRST, at, columns, filled, item, put

from reporter import cli, tasks

Change = Callable[[Any], None]


def run(*arguments: object) -> tuple[int, str]:
    """Exit code, and all that was printed on one line."""
    out, err = io.StringIO(), io.StringIO()
    code = cli.main([str(a) for a in arguments], out, err)
    return code, re.sub(r"\s+", " ", out.getvalue() + err.getvalue())


def cell(sheet: str, column: str, value: Any, row: int = 0) -> Change:
    """One cell of a table changed; rows are counted from the first one filled in."""

    def change(book: Any) -> None:
        book[sheet].cell(FIRST + row, columns(book[sheet])[column]).value = value

    return change


def header(sheet: str, column: str, text: str) -> Change:
    """A header written otherwise."""

    def change(book: Any) -> None:
        book[sheet].cell(FIRST - 1, columns(book[sheet])[column]).value = text

    return change


def renamed(sheet: str, name: str) -> Change:
    """A sheet with another name."""

    def change(book: Any) -> None:
        book[sheet].title = name

    return change


def entered(name: str, entry: Any) -> Change:
    """An item of the sheet Test changed."""
    return lambda book: item(book, name, entry)


def added(sheet: str, **values: Any) -> Change:
    """A row added where the sheet is still empty."""
    return lambda book: put(book[sheet], FIRST, {name.replace("_", " "): value for name, value in values.items()})


def moments(book: Any) -> Iterator[Any]:
    """Every cell of readings, calibrations and runs that holds a time."""
    for sheet, names in (("Readings", ("Time",)), ("Calibrations", ("Time",)), ("Runs", ("Start", "End"))):
        for name in names:
            for row in book[sheet].iter_rows(min_row=FIRST):
                found = row[columns(book[sheet])[name] - 1]
                if found.value is not None:
                    yield found


def bare_over_midnight(book: Any) -> None:
    for found in moments(book):
        found.value = (found.value + timedelta(hours=12, minutes=50)).time()


def days_as_text(pattern: str) -> Change:
    def change(book: Any) -> None:
        for found in moments(book):
            found.value = found.value.strftime(pattern)

    return change


def no_cylinder(book: Any) -> None:
    for name in ("Cylinder", "Gas", "Certified value", "Unit", "Kind", "Expires"):
        cell("Cylinders", name, None, 1)(book)


EXCLUDED = {"Time": at(9, 40), "Until": at(9, 45), "What": "soot blowing", "Readings_excluded": "yes"}
#: What was done, exit code, and the words that must be printed: the place, and what was found or expected.
SLIPS: dict[str, tuple[Change, int, tuple[str, ...]]] = {
    "nothing": (lambda book: None, 0, ("3 runs",)),
    "days written day.month.year": (days_as_text("%d.%m.%Y %H:%M"), 0, ()),
    "test date day/month exchanged": (entered("Test date", "05/06/2026"), 3, ("Test!B19 (Test date)", "year first")),
    "two-digit year": (entered("Test date", "20.5.26"), 3, ("Test!B19 (Test date)", "20.5.26")),
    "times over midnight": (bare_over_midnight, 3, ("Runs!C7 (End)", "rows with their dates")),
    "sheet misspelt": (renamed("Calibrations", "Calibrtions"), 3, ("Calibrtions: A sheet", "'Calibrations'")),
    "optional sheet misspelt": (renamed("Limits", "Limts"), 3, ("Limts: A sheet", "'Limits'")),
    "sheet of another name": (renamed("Runs", "Sheet1"), 3, ("a sheet 'Runs'", "Found: Sheet1")),
    "column misspelt": (header("Limits", "Oxygen constant", "Oxygen constnat"), 3, ("Limits!K4", "'Oxygen constant'")),
    "header in another language": (header("Readings", "Time", "Uhrzeit"), 3, ("Found: Uhrzeit, SO2 [ppm]",)),
    "decimal comma": (cell("Readings", "SO2", "142,3", 15), 3, ("Readings!B20 (SO2)", "Found: 142,3")),
    "cylinder missing": (no_cylinder, 3, ("Calibrations!F7 (Cylinder)", "Found: B-SO2-high")),
    "cylinder in percent": (cell("Cylinders", "Unit", "%", 1), 3, ("Cylinders!C6", "250 %", "0 to 100 %")),
    "cylinder without unit": (cell("Cylinders", "Unit", None, 1), 0, ("Certified value in the unit of the channel",)),
    "cylinder expired": (cell("Cylinders", "Expires", at(1, 0).replace(2025), 1), 1, ("Cylinders!G6 (Expires)",)),
    "pressure in hPa": (cell("Runs", "Barometric pressure", 1002), 3, ("Runs!W5", "1002 kPa", "50.8 to 111.8 kPa")),
    "temperature in K": (cell("Limits", "Standard temperature", 273.15), 3, ("Limits!L5", "273.15 °C")),
    "moisture as a fraction": (cell("Runs", "Moisture", 0.112), 3, ("Runs!L5 (Moisture)", "0.112 or 11.2 percent")),
    "unit of another kind": (header("Runs", "Stack temperature", "Stack temperature [bar]"), 3, ("bar (pressure)",)),
    "percent for ppm": (header("Readings", "SO2", "SO2 [%]"), 3, ("% here, ppm on the sheet Channels",)),
    "reading beyond all gas": (cell("Readings", "O2", 420, 3), 3, ("Readings!D8 (O2)", "420 %")),
    "mark for a missing value": (cell("Readings", "THC", -9999, 3), 3, ("Readings!E8 (THC)", "missing value")),
    "OVER in a run": (cell("Readings", "SO2", "OVER", 3), 1, ("over range lie within the run",)),
    "a word in a run": (cell("Readings", "SO2", "pause", 3), 3, ("Readings!B8 (SO2)", "Found: pause")),
    "a time twice": (cell("Readings", "Time", at(9, 31), 2), 3, ("Readings!A7 (Time)", "also in A6")),
    "runs overlap": (cell("Runs", "Start", at(9, 40), 1), 3, ("Runs!B6 (Start)", "run 1 ends 2026-05-20 09:50")),
    "run reversed": (cell("Runs", "End", at(9, 0)), 3, ("Runs!C5 (End)", "an end later than the start")),
    "run without end": (cell("Runs", "End", None, 1), 3, ("Runs!C6 (End)", "or clear the whole row")),
    "run of another year": (cell("Runs", "Start", at(9, 30).replace(2025)), 3, ("Runs!C5 (End)", "a date is mistyped")),
    "interval in seconds": (entered("Logging interval", 60), 3, ("no whole interval of 3600 s", "on the sheet Test")),
    "event ends before it begins": (added("Events", **{**EXCLUDED, "Until": at(9, 30)}), 3, ("Events!B5 (Until)",)),
    "excluded without a reason": (added("Events", **EXCLUDED), 3, ("Events!E5 (Reason)", "the reason, where")),
    "fuel of another name": (cell("Fuel", "Fuel", "destillate oil"), 1, ("Fuel!A5", "'destillate oil' is not a fuel")),
    "limit without citation": (cell("Limits", "Citation", None), 1, ("not compared: no citation is entered",)),
    "limit unit unknown": (cell("Limits", "Unit", "mg/MJ2"), 3, ("Limits!D5 (Unit)", "Found: mg/MJ2")),
    "limit named twice": (cell("Limits", "Limit id", "SO2-limit", 1), 3, ("Limits!A6 (Limit id)", "also in A5")),
    "limit for a gas not measured": (cell("Limits", "Pollutant", "NOx"), 1, ("pollutant of a limit was not measured",)),
    "attachment missing": (added("Attachments", File="lost.pdf", What="certificate"), 0, ("Attachments!A5 (File)",)),
    "attachment of another kind": (added("Attachments", File="a.pdf", What="Brief"), 3, ("Attachments!B5 (What)",)),
    "formula never calculated": (cell("Limits", "Limit", "=400+100"), 3, ("Limits!C5 (Limit)", "never calculated")),
    "no time zone": (entered("Time zone", None), 3, ("Test!B24 (Time zone)",)),
}  # fmt: skip


@pytest.mark.parametrize("slip", SLIPS)
def test_a_slip_is_named_where_it_stands(slip: str, tmp_path: Path) -> None:
    change, code, words = SLIPS[slip]
    book = filled()
    change(book)
    book.save(tmp_path / "field.xlsx")
    found, text = run("check", tmp_path / "field.xlsx")
    assert found == code, text[:2000]
    for part in words:
        assert part in text, text[:2000]
    assert "error of the program" not in text
    assert [path.name for path in tmp_path.iterdir()] == ["field.xlsx"]


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (b"Time,SO2\n2026-05-20 09:30,142\n", "plain text, such as comma-separated values"),
        (b"%PDF-1.7 \xe2\xe3", "a PDF document"),
        (b"", "an empty file"),
        (bytes.fromhex("d0cf11e0a1b11ae1") + bytes(600), "save it as .xlsx"),
    ],
)
def test_what_is_no_workbook_is_said_in_words(content: bytes, words: str, tmp_path: Path) -> None:
    (tmp_path / "data.xlsx").write_bytes(content)
    code, text = run("report", tmp_path / "data.xlsx", "--out", tmp_path / "out")
    assert code == cli.UNREADABLE
    assert words in text
    assert not (tmp_path / "out").exists()


def test_a_folder_and_a_name_that_is_not_there(tmp_path: Path) -> None:
    assert run("check", tmp_path)[0] == cli.UNREADABLE
    assert "a name" not in run("check", tmp_path)[1]
    assert "no file of this name" in run("check", tmp_path / "nowhere.xlsx")[1]


def test_earlier_results_stay_where_one_new_file_cannot_be_written(tmp_path: Path) -> None:
    book, out = filled(), tmp_path / "out"
    book.save(tmp_path / "field.xlsx")
    (out / "field.pdf").mkdir(parents=True)
    (out / "field.json").write_bytes(b"of yesterday")
    code, text = run("report", tmp_path / "field.xlsx", "--out", out)
    assert code == cli.UNWRITTEN
    assert "a folder of this name is there already" in text
    assert sorted(path.name for path in out.iterdir()) == ["field.json", "field.pdf"]
    assert (out / "field.json").read_bytes() == b"of yesterday"


def test_a_fault_of_the_program_stops_one_input_and_is_one_line(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def broken(*arguments: object, **named: object) -> None:
        raise ZeroDivisionError("division by zero")

    filled().save(tmp_path / "field.xlsx")
    monkeypatch.setattr("reporter.terminal.summary", broken)
    task = tasks.check_input(tmp_path / "field.xlsx")
    assert task.code == cli.UNREADABLE
    assert "stopped by an error of the program" in task.text
    assert "ZeroDivisionError: division by zero" in task.text
    assert "Traceback" not in task.text
    code, text = run("check", tmp_path / "field.xlsx", tmp_path / "nowhere.xlsx")
    assert code == cli.UNREADABLE
    assert "2 inputs" in text


def test_a_name_cannot_steer_the_terminal(tmp_path: Path) -> None:
    path = tmp_path / "\x1b]0;title\x07\x1b[2J\u202efield.xlsx"
    path.write_bytes(b"")
    out, err = io.StringIO(), io.StringIO()
    cli.main(["check", str(path), str(path)], out, err)
    assert not re.search("[\x00-\x09\x0b-\x1f\x7f-\x9f\u202e]", out.getvalue() + err.getvalue())


@pytest.mark.parametrize("issued", ["9999-12-31T23:59:59-23:00", "0001-01-01T00:00:00+23:00"])
def test_an_issue_time_out_of_all_calendars_is_a_wrong_command(issued: str, tmp_path: Path) -> None:
    code, text = run("report", tmp_path / "field.xlsx", "--out", tmp_path, "--issued", issued)
    assert (code, issued in text) == (cli.USAGE, True)
