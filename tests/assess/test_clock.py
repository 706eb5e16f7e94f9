"""Rehearsals with a clock of known error: the estimate, and nothing said where there is none."""

from __future__ import annotations

import tempfile
from dataclasses import replace
from datetime import datetime, timedelta
from pathlib import Path
from random import Random

import pytest

from reporter.api import opened
from reporter.intake.read import read_bytes
from reporter.outcome import Outcome
from reporter.record import ProcessLog
from reporter.rehearse import Fault, Order, Profile, rehearse
from reporter.rehearse.order import settings
from reporter.units import read_unit
from tests.record_factory import assess, assessed, at, calibration, calibrations, event, readings

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


@pytest.mark.parametrize("minutes", [-20, -12, -5, 3, 25])
def test_clocks_that_are_ahead_or_far_behind(minutes: int, monkeypatch: pytest.MonkeyPatch) -> None:
    """Minutes the logger is behind the truth."""
    monkeypatch.setitem(settings()["fault"]["clock-shift"], "minutes", minutes)
    (words,) = said(outcome(order(21, fault=Fault.CLOCK_SHIFT)), "clock-differs")
    estimate = float(words.split("(")[1].split(" s to be added")[0])
    assert abs(estimate - 60.0 * minutes) <= 60.0
    assert ("behind" if minutes > 0 else "ahead of") in words


@pytest.mark.parametrize("minutes", [61, -120])
def test_a_clock_so_wrong_that_a_run_has_no_readings(minutes: int, monkeypatch: pytest.MonkeyPatch) -> None:
    """The file cannot be assessed, and what is wrong with it is said all the same."""
    monkeypatch.setitem(settings()["fault"]["clock-shift"], "minutes", minutes)
    found = read_bytes("rehearsal.xlsx", rehearse(order(21, fault=Fault.CLOCK_SHIFT)).workbook)
    assert found.record is None
    (hint,) = [p.found for p in found.problems if p.code == "clock-differs"]
    assert abs(float(hint.split("(")[1].split(" s to be added")[0]) - 60.0 * minutes) <= 60.0


def process(late: int, *, follows: bool = True) -> ProcessLog:
    """A load each minute whose steps the oxygen of `loaded` follows; its clock is so many minutes behind."""
    times = [at("07:30") + timedelta(minutes=k) for k in range(200)]
    values = [(step(time) if follows else 40.0 + 0.1 * (k % 7),) for k, time in enumerate(times)]
    units = (read_unit("t/h"),)
    return ProcessLog(("Load",), units, tuple(t - timedelta(minutes=late) for t in times), tuple(values))


def step(time: datetime) -> float:
    """A load that goes to another height each seven minutes."""
    return 40.0 + Random(int((time - at("07:00")).total_seconds() // 420)).random() * 13.0


def loaded() -> Outcome:
    return assessed(readings=readings({"NOx": 40.0, "CO": 10.0, "O2": lambda t: 9.0 - step(t) / 10.0, "CO2": 9.0}))


@pytest.mark.parametrize("late", [0, 10, -8])
def test_a_process_log_by_another_clock(late: int) -> None:
    made = assess(replace(loaded().record, process=process(late)))
    words = said(made, "clock-differs")
    assert len(words) == (late != 0)
    if late:
        assert words[0].startswith("O2 against Load: the clock of the readings stands ")
        estimate = float(words[0].split("(")[1].split(" s to be added")[0])
        assert estimate == -60.0 * late


def test_a_process_log_that_nothing_follows_tells_nothing() -> None:
    assert said(assess(replace(loaded().record, process=process(10, follows=False)))) == []


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
