"""The same minutes are said once."""

from __future__ import annotations

from pathlib import Path

from reporter.api import problems_of

DEFECTS = Path(__file__).parents[1] / "sample_inputs" / "defects"


def test_calibration_gas_that_was_entered_is_said_by_the_assessment_with_its_minutes() -> None:
    """Zero gas and CO span gas in minutes of run 1, for which calibrations are entered."""
    problems = problems_of(DEFECTS / "calibration-gas-in-run.xlsx")
    assert "gas-in-run" not in {p.code for p in problems}
    own = next(p for p in problems if p.code == "calibration-gas-in-run")
    assert own.found.endswith("in the log 10:05 to 10:07, 10:09 to 10:11")


def test_air_that_nobody_entered_stays_a_note() -> None:
    """Four minutes of ambient air in a run."""
    problems = problems_of(DEFECTS / "gas-in-run.xlsx")
    assert [p.found.split(": ")[0] for p in problems if p.code == "gas-in-run"] == ["2026-04-14 09:31 to 09:34"]
