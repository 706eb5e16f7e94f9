"""Tables of runs: many runs are split, nothing measured leaves no empty row, a finding is told of its runs."""

from __future__ import annotations

from datetime import timedelta

import pytest
from conftest import ISSUED

from reporter.outcome import Outcome
from reporter.output.view.build import build_view
from reporter.output.view.model import Table, View
from reporter.output.view.tabular import ACROSS, side_by_side
from reporter.record import ProcessLog
from reporter.units import read_unit
from tests.record_factory import (
    CHANNELS,
    assessed,
    at,
    calibrations,
    channel,
    cylinders,
    fuel,
    limit,
    number,
    readings,
    run,
)

MANY = 30


def _view(outcome: Outcome) -> View:
    return build_view(outcome, ISSUED, "0.1.0")


@pytest.fixture(scope="module")
def many() -> View:
    """Thirty runs of four minutes with load, moisture and a process log."""
    starts = [at("08:00") + timedelta(minutes=5 * at_run) for at_run in range(MANY)]
    more = {"load": number(4.0, "MW"), "moisture": number(17.0, "%")}
    made = tuple(
        run(str(name), f"{start:%H:%M}", f"{start + timedelta(minutes=4):%H:%M}", **more)
        for name, start in enumerate(starts, 1)
    )
    times = tuple(start + timedelta(minutes=minute) for start in starts for minute in (1, 3))
    log = ProcessLog(
        ("Steam flow",), (read_unit("t/h"),), times, tuple((10.0,) for _ in times), letters=("B",),
        rows=tuple(range(2, 2 + len(times))),
    )  # fmt: skip
    channels = tuple(channel(name, method="EN 14792") for name in CHANNELS)  # no criteria held: no checks are needed
    return _view(assessed(channels=channels, runs=made, fuels=(fuel(),), limits=(limit(),), process=log))


def _tables(view: View, section: str) -> list[Table]:
    return [table for block in view.sections[section] for table in block.tables]


@pytest.mark.parametrize("section", ["process", "runs", "combustion"])
def test_no_table_holds_more_runs_than_it_has_room_for(many: View, section: str) -> None:
    named = [[c.title for c in table.columns if c.title.startswith("Run ")] for table in _tables(many, section)]
    assert max(map(len, named)) == ACROSS
    tables = [names for names in named if names]
    assert {name for names in tables for name in names} == {f"Run {name}" for name in range(1, MANY + 1)}


def test_runs_are_spread_evenly_over_as_few_tables_as_needed() -> None:
    sizes = [[len(some) for some in side_by_side(range(count))] for count in (0, 1, 5, 6, 7, 11, 30)]
    assert sizes == [[0], [1], [5], [3, 3], [4, 3], [4, 4, 3], [5] * 6]


def test_averages_stand_once_beside_the_last_runs(many: View) -> None:
    heads = [[column.title for column in table.columns] for table in _tables(many, "combustion")]
    assert sum("Average" in head for head in heads) == 1


@pytest.fixture(scope="module")
def bare() -> View:
    """NOx and O2 alone: no CO2 channel, and a limit whose pollutant no channel measures."""
    names = ("NOx", "O2")
    outcome = assessed(
        channels=tuple(channel(name) for name in names),
        readings=readings({"NOx": 40.0, "O2": 5.0}),
        calibrations=calibrations(names),
        cylinders=cylinders(names),
        fuels=(fuel(),),
        limits=(limit("N"), limit("S", "SO2")),
    )
    return _view(outcome)


def test_what_was_not_measured_has_no_row_of_what_counts(bare: View) -> None:
    table = bare.limits.table
    assert table is not None
    firsts = [row.cells[0] for row in table.rows]
    assert "Counts" not in firsts
    assert [cell for cell in firsts if isinstance(cell, str)] == ["NOx [ppm]", "SO₂ [ppm]"]


def test_expected_carbon_dioxide_says_that_none_was_measured(bare: View) -> None:
    against = next(block for block in bare.sections["combustion"] if block.title == "Measured against expected")
    assert against.tables[0].rows[0].cells[:3] == ("CO₂, dry", "expected; not measured", "%, dry")


def test_a_finding_names_its_runs_once(bare: View) -> None:
    found = next(block for block in bare.sections["combustion"] if block.title == "Findings")
    assert found.notes == ("Runs\u00a01,\u00a02,\u00a03: Readings imply fuel-lean combustion.",)
