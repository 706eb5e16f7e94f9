"""Rehearsals with a clock of known error: the estimate, and nothing said where there is none."""

from __future__ import annotations

import tempfile
from pathlib import Path

import pytest

from reporter.api import opened
from reporter.outcome import Outcome
from reporter.rehearse import Fault, Order, Profile, rehearse
from reporter.rehearse.order import settings
from tests.record_factory import assessed, calibration, calibrations, event, readings

SAID = {"clock-differs", "calibration-not-logged", "calibration-gas-in-run"}


def outcome(order: Order) -> Outcome:
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "rehearsal.xlsx"
        path.write_bytes(rehearse(order).workbook)
        return opened(path)


def said(found: Outcome, code: str = "") -> list[str]:
    return [p.found for p in found.problems if p.code in ({code} if code else SAID)]


def order(seed: int, interval: int = 60, fault: Fault | None = None, profile: Profile = Profile.STEADY) -> Order:
    return Order(seed=seed, interval=interval, fault=fault, profile=profile, runs=2, run_minutes=30)


@pytest.mark.parametrize(("seed", "interval"), [(1, 60), (2, 60), (3, 60), (4, 10), (5, 30), (6, 120)])
def test_the_shift_of_the_truth_is_estimated_within_the_interval(seed: int, interval: int) -> None:
    made = outcome(order(seed, interval, Fault.CLOCK_SHIFT))
    truth = 60.0 * settings()["fault"]["clock-shift"]["minutes"]
    (words,) = said(made, "clock-differs")
    assert "behind that of the calibrations" in words
    estimate = float(words.split("(+")[1].split(" s to be added")[0])
    assert abs(estimate - truth) <= interval
    assert "confidence 0." in words
    if interval == 60:
        runs = said(made, "calibration-gas-in-run")
        assert len(runs) == 2
        assert "O2 zero" in runs[0]


@pytest.mark.parametrize("seed", range(10, 18))
def test_without_a_fault_nothing_is_said(seed: int) -> None:
    profile = list(Profile)[seed % 3]
    assert said(outcome(order(seed, (60, 30, 300)[seed % 3], profile=profile))) == []


@pytest.mark.parametrize("fault", [fault for fault in Fault if fault is not Fault.CLOCK_SHIFT])
def test_another_fault_is_not_blamed_on_the_clock(fault: Fault) -> None:
    assert said(outcome(order(3, fault=fault))) == []


def test_nothing_is_shifted() -> None:
    """The runs keep the readings that the stamps give them, whatever is said of the clock."""
    made = outcome(order(1, fault=Fault.CLOCK_SHIFT))
    first, run = made.runs[0].gases[0].series, made.record.runs[0]
    assert first is not None
    assert first.used[0][0] == run.start.value
    assert len(first.used) == 30


def test_a_gas_that_the_log_does_not_show() -> None:
    made = assessed(
        readings=readings(), calibrations=(*calibrations(), calibration("08:50", "NOx", "system", "zero", 0.0))
    )
    (words,) = said(made, "calibration-not-logged")
    assert words.startswith("NOx: 1 calibration reading(s), the first at 08:50: zero gas read as 0, the log shows 40 ")


def test_a_log_that_stops_before_the_gas_says_nothing() -> None:
    rows = (*calibrations(), calibration("10:50", "NOx", "system", "zero", 0.0))
    assert said(assessed(calibrations=rows)) == []


def test_a_calibration_entered_inside_a_run_and_shown_there() -> None:
    def zero(time: object) -> float:
        return 0.0 if str(time)[11:16] in ("08:14", "08:15") else 40.0

    rows = (*calibrations(), calibration("08:15", "NOx", "system", "zero", 0.0))
    values = {"NOx": zero, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    words = said(assessed(calibrations=rows, readings=readings(values)), "calibration-gas-in-run")
    assert words == ["run 1: NOx zero; the first at 08:15 by the clock of the readings"]
    excluded = event("08:13", "zero gas", until="08:15", excluded=True, reason="zero check")
    left_out = assessed(calibrations=rows, readings=readings(values), events=(excluded,))
    assert said(left_out, "calibration-gas-in-run") == []
