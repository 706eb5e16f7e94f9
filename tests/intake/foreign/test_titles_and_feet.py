"""Titles that name another test, and rows at the foot that are not what they say."""

from __future__ import annotations

import pytest

from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import look_at_grid
from reporter.intake.foreign.mapping import dump, parse
from reporter.intake.foreign.tables import find_tables
from reporter.intake.foreign.titles import strangers
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
