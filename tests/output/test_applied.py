"""A criterion that repeats is printed once, with the runs it applies to."""

from __future__ import annotations

import re
from datetime import UTC, datetime
from pathlib import Path

from reporter.api import read
from reporter.outcome import Outcome
from reporter.output.applied import applied
from reporter.output.view.build import build_view
from reporter.output.view.model import Cell
from reporter.terminal import summary
from tests.record_factory import assess, assessed, calibration, fuel, recalibrated, record

SAMPLES = Path(__file__).parents[2] / "sample_inputs" / "valid"


def _titles(outcome: Outcome, criterion: str, gas: str) -> list[str]:
    mine = [check for check in outcome.checks if check.title.startswith(criterion) and check.gas == gas]
    return [line.about for line in applied(outcome, mine)]


def test_the_same_numbers_in_every_run_are_one_line_with_its_runs() -> None:
    """Readings of the record are constant: drift, emission and fuel factor are the same in each run."""
    outcome = assessed(fuels=(fuel(),))
    assert _titles(outcome, "Drift", "NOx") == ["zero or low-level gas, runs 1, 2, 3", "upscale gas, runs 1, 2, 3"]
    assert _titles(outcome, "Emission", "NOx") == ["runs 1, 2, 3"]
    assert _titles(outcome, "Fuel factor", "") == ["runs 1, 2, 3"]


def test_both_ends_of_a_range_are_one_line_where_both_are_met() -> None:
    assert _titles(assessed(), "Mid-level gas", "NOx") == ["set 1"]


def test_other_numbers_stay_apart_and_a_shared_check_is_between_its_runs() -> None:
    """52 ppm at 08:42 closes run 1 and opens run 2: bias +2 % there, 0 before run 1, 0 at the later checks."""
    outcome = assess(recalibrated(record(), "08:42", "NOx", 52.0))
    assert _titles(outcome, "System bias", "NOx")[1:] == [
        "upscale gas, before run 1",
        "upscale gas, between runs 1–2",
        "upscale gas, between runs 2–3",
        "upscale gas, after run 3",
    ]


def test_a_shared_check_that_is_not_met_is_said_once() -> None:
    """60 ppm for 50: bias +10 % of span, after run 1 and before run 2."""
    outcome = assess(recalibrated(record(), "08:42", "NOx", 60.0))
    text = " ".join(summary(outcome).split())
    assert text.count("System bias, upscale gas") == 1
    said = "NOx: System bias, upscale gas, between runs 1–2 is not met (Method 7E, § 13.2): 10.00 %, where"
    assert f"{said} within ±5.00 % is asked for" in text


def test_bounds_that_differ_by_run_stand_beside_the_values_both_ends_together() -> None:
    """Two fuels by their shares: each run has its own range of the fuel factor (Method 3B, 12.3.3)."""
    found = read(SAMPLES / "two_fuel_furnace.xlsx")
    assert found.record is not None
    view = build_view(assess(found.record), datetime(2026, 1, 1, tzinfo=UTC), "0.1.0")
    block = next(block for block in view.sections["criteria"] if block.title == "Fuel factor")
    texts = [cell.text for row in block.tables[0].rows for cell in row.cells if isinstance(cell, Cell)]
    assert len(texts) == 3
    assert all(re.match(r"run \d, at least 1\.\d{3} and at most 1\.\d{3}\t", text) for text in texts)


def test_a_direct_set_names_the_runs_it_bears_on() -> None:
    """A second whole set at 09:45 is the one of run 3."""
    levels = (("zero", 0.0), ("mid", 50.0), ("high", 100.0))
    more = [calibration(f"09:4{5 + at}", "NOx", "direct", level, given) for at, (level, given) in enumerate(levels)]
    made = record()
    outcome = assess(record(calibrations=(*made.calibrations, *more)))
    errors = [check for check in outcome.checks if check.title.startswith("Analyzer") and check.gas == "NOx"]
    assert [check.runs for check in errors] == [("1", "2")] * 3 + [("3",)] * 3
    assert _titles(outcome, "Low-level", "NOx") == ["set 1, runs 1, 2", "set 2, run 3"]
    assert _titles(assessed(), "Low-level", "NOx") == ["set 1"]  # it bears on every run
