"""Run times proposed from the data: by the stated rules, all in time order, and never by a pollutant."""

from __future__ import annotations

from datetime import datetime, timedelta
from pathlib import Path
from typing import Any

import openpyxl
import pytest
from field_book import ROOT

from reporter.api import read_input
from reporter.intake.windows import Candidate, Day, Load, candidates

SAMPLE = ROOT / "sample_inputs" / "valid" / "gas_boiler_us.xlsx"


def at(clock: str) -> datetime:
    return datetime.fromisoformat(f"2026-04-14T{clock}")


def day(**parts: Any) -> Day:
    usual: dict[str, Any] = {
        "logged": ((at("08:00"), at("13:00")),),
        "calibrations": tuple(map(at, ("08:40", "08:45", "10:07", "10:15", "11:35"))),
        "load": None,
        "purge": timedelta(minutes=5),
        "least": timedelta(minutes=60),
    }
    return Day(**(usual | parts))


def spans(made: tuple[Candidate, ...]) -> list[str]:
    return [f"{one.start:%H:%M}-{one.end:%H:%M}" for one in made]


def load(*values: float) -> Load:
    return Load("Steam flow", tuple((at("08:00") + timedelta(minutes=15 * k), v) for k, v in enumerate(values)))


def test_a_run_lies_between_calibrations_after_a_purge_and_before_the_next_gas() -> None:
    made = candidates(day())
    assert spans(made) == ["08:50-09:57", "10:20-11:25"]
    assert made[0].words() == (
        "2026-04-14 08:50 to 09:57 (67 min): between the calibrations at 08:45 and 10:07; no process log shows the load"
    )


def test_the_purge_of_a_slow_system_is_longer() -> None:
    assert spans(candidates(day(purge=timedelta(minutes=7)))) == ["08:52-09:57", "10:22-11:25"]


def test_a_shorter_least_length_gives_more() -> None:
    parts = {"calibrations": (at("08:00"), at("08:50"), at("10:10"))}
    assert spans(candidates(day(**parts))) == ["08:55-10:00"]
    assert spans(candidates(day(**parts, least=timedelta(minutes=30)))) == ["08:05-08:40", "08:55-10:00"]


def test_a_gap_of_the_log_parts_a_stretch() -> None:
    logged = ((at("08:00"), at("09:10")), (at("09:20"), at("13:00")))
    assert spans(candidates(day(logged=logged, least=timedelta(minutes=30)))) == ["09:20-09:57", "10:20-11:25"]


def test_a_load_that_leaves_its_range_parts_a_stretch() -> None:
    """At 09:15 the load falls for one reading of the first stretch."""
    steady = candidates(day(load=load(*[40.0] * 20)))
    assert spans(steady) == ["08:50-09:57", "10:20-11:25"]
    assert steady[0].why.endswith("Steam flow within 10% of 40")
    fallen = candidates(day(load=load(*[40.0] * 5, 30.0, *[40.0] * 14)))
    assert spans(fallen) == ["10:20-11:25"]
    both = candidates(day(load=load(*[40.0] * 5, 30.0, *[40.0] * 14), least=timedelta(minutes=25)))
    assert spans(both) == ["08:50-09:15", "09:15-09:57", "10:20-11:25"]


def test_without_calibrations_that_is_said() -> None:
    (one,) = candidates(day(calibrations=()))
    assert one.why.startswith("no calibration is known")


def workbook(path: Path, *, factor: float = 1.0, least: float | None = None) -> Path:
    """The sample without the times of its runs, its pollutants multiplied."""
    book = openpyxl.load_workbook(SAMPLE)
    _each(book, "Runs", ("Start", "End"), lambda value: None)
    if factor != 1.0:
        _each(book, "Readings", ("NOx", "CO"), lambda value: value if value is None else (value + 3.0) * factor)
    if least is not None:
        _each(book, "Limits", ("Minimum run length [min]",), lambda value: least)
    book.save(path)
    return path


def _each(book: Any, sheet: str, names: tuple[str, ...], change: Any) -> None:
    """Change the cells of columns below the header row, which is the one that holds all names."""
    page = book[sheet]
    header = next(row for row in page.iter_rows() if any(cell.value == names[0] for cell in row))
    columns = [cell.column for cell in header if cell.value in names]
    assert len(columns) == len(names), [cell.value for cell in header]
    last = max(row[0].row for row in page.iter_rows() if row[0].value is not None)
    for row in page.iter_rows(min_row=header[0].row + 1, max_row=last):
        for cell in row:
            if cell.column in columns:
                cell.value = change(cell.value)


def proposed(path: Path) -> str:
    found = read_input(path)
    assert found.record is None
    (one,) = [p for p in found.problems if p.code == "run-times-missing"]
    assert one.place.sheet == "Runs"
    return one.found


def test_the_runs_of_the_sample_lie_in_what_is_proposed(tmp_path: Path) -> None:
    """The runs were 09:00 to 10:00, 10:25 to 11:28 and 11:53 to 12:53."""
    words = proposed(workbook(tmp_path / "b.xlsx"))
    for start in ("1) 2026-04-14 08:50 to 09:57", "2) 2026-04-14 10:20 to 11:25", "3) 2026-04-14 11:48 to 12:50"):
        assert start in words
    assert "4)" not in words
    assert "Steam flow within 10% of" in words


@pytest.mark.parametrize("factor", [0.1, 40.0])
def test_the_pollutants_do_not_enter_the_choice(factor: float, tmp_path: Path) -> None:
    assert proposed(workbook(tmp_path / "a.xlsx")) == proposed(workbook(tmp_path / "b.xlsx", factor=factor))


def test_a_longer_least_length_of_a_limit_counts(tmp_path: Path) -> None:
    words = proposed(workbook(tmp_path / "b.xlsx", least=66.0))
    assert "1) 2026-04-14 08:50 to 09:57" in words
    assert "2)" not in words
    assert "no stretch of 90 min" in proposed(workbook(tmp_path / "c.xlsx", least=90.0))


def test_nothing_is_proposed_where_one_run_has_its_times() -> None:
    assert all(p.code != "run-times-missing" for p in read_input(SAMPLE).problems)
