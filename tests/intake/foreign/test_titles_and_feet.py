"""Titles that name another test, and rows at the foot that are not what they say."""

from __future__ import annotations

import pytest

from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import look_at_grid
from reporter.intake.foreign.mapping import dump, parse
from reporter.intake.foreign.tables import find_tables
from reporter.intake.foreign.titles import strange_folder, strangers
from reporter.record import Given
from tests.corpus.case import END, plain
from tests.corpus.truth import TRUTH

TEST = {"unit_tested": Given("Boiler 2"), "facility": Given("Alder Creek Works (invented)")}


@pytest.mark.parametrize(
    ("title", "strange"),
    [
        ("Unit: Boiler 7", True),
        ("Unit:,7", True),
        ("Boiler,7", True),
        ("Facility,Cedar Mill", True),
        ("Unit: B2", False),
        ("Unit: boiler no. 02", False),
        ("Boiler,2", False),
        ("Unit,ppm", False),
        ("Plant: Alder Creek", False),
        ("Operator: Boiler 7 crew", False),
        ("Unit tested,Boiler", False),
        ("Logger,DL-7,Unit,ppm", False),
        ("Unit", False),
    ],
)
def test_a_title_against_the_sheet_test(title: str, strange: bool) -> None:
    grid = grid_of("a.csv", plain(above=[title]))
    made = strangers(grid, find_tables(grid), TEST, ())
    assert [p.code for p in made] == ["file-of-another-test"] * strange
    assert strangers(grid, find_tables(grid), TEST, (title.replace(",", ":").partition(":")[2].strip(":, "),)) == []


@pytest.mark.parametrize(
    ("name", "strange"),
    [
        ("boiler_7", True),
        ("Unit 3 day 2", True),
        ("boiler7_2026-04-20", True),
        ("boiler_2", False),
        ("B-02", False),
        ("boiler 2026-04-20", False),
        ("day 7", False),
        ("unit", False),
    ],
)
def test_the_name_of_a_folder_against_the_sheet_test(name: str, strange: bool) -> None:
    assert [p.code for p in strange_folder(name, TEST, ())] == ["file-of-another-test"] * strange
    assert strange_folder(name, TEST, ("Boiler 7", "unit 3")) == []
    assert strange_folder(name, {}, ()) == []


@pytest.mark.parametrize(
    ("title", "strange"),
    [
        ("Analyzer serial: X-0077", True),
        ("Analyser S/N,0077", True),
        ("Analyzer serial: a 0001", False),
        ("Serial,0077", False),
    ],
)
def test_the_serial_number_of_an_analyzer_against_the_sheet_channels(title: str, strange: bool) -> None:
    """The serial number of the logger itself is on no sheet: only that of an analyzer is held."""
    grid = grid_of("a.csv", plain(above=[title]))
    tables = find_tables(grid)
    made = strangers(grid, tables, TEST, (), ("A-0001", "A-0002"))
    assert [p.code for p in made] == ["file-of-another-test"] * strange
    assert strangers(grid, tables, TEST, ("X-0077", "0077"), ("A-0001",)) == []
    assert strangers(grid, tables, TEST, ()) == []


def test_titles_of_a_mapping_are_kept() -> None:
    import tomllib
    from dataclasses import replace

    own = look_at_grid(grid_of("a.csv", plain()), END).mapping
    assert own is not None
    mapping = replace(own, titles=("Boiler 7", 'the "old" one'))
    assert parse(tomllib.loads(dump(mapping))) == mapping


def foot(row: str) -> list[str]:
    grid = grid_of("a.csv", plain(below=[row]))
    found = look_at_grid(grid, END)
    assert found.mapping is not None
    return [p.found for p in apply_to_grid(grid, found.mapping).problems if p.code == "foot-differs"]


@pytest.mark.parametrize("name", ["Average", "Total", "Max", "Min"])
def test_a_row_at_the_foot_is_held_against_its_column(name: str) -> None:
    columns = list(zip(*TRUTH, strict=True))[1:]
    work = {"Average": lambda v: sum(v) / len(v), "Total": sum, "Max": max, "Min": min}[name]
    values = [f"{work(column):.2f}" for column in columns]
    assert foot(",".join([name, *values])) == []
    wrong = [*values[:2], f"{float(values[2]) + 0.2:.2f}", values[3]]
    (said,) = foot(",".join([name, *wrong]))
    assert f"{float(wrong[2]):g} under 'O2 [% dry]' is not the" in said


def test_a_label_that_names_no_statistic_is_not_verified() -> None:
    assert foot("Std dev,0.1,0.2,0.3,0.4") == []
    assert foot("Average,,,,") == []
