"""Readings to run means: the window of a run, what is left out and why, words, minutes without a reading."""

from __future__ import annotations

from dataclasses import replace
from datetime import datetime

import pytest

from reporter.outcome import Outcome
from reporter.record import Given
from reporter.units import read_unit
from tests.record_factory import (
    DAY,
    assessed,
    at,
    channel,
    codes,
    event,
    identity,
    in_run,
    is_valid,
    number,
    reading,
    readings,
    run,
    said,
    value,
)


def _but_nox(special: dict[str, object], otherwise: float = 40.0) -> object:
    """NOx readings of 40 ppm except at some time stamps, as rows of a readings sheet."""
    made = readings()
    rows = tuple(
        replace(row, readings=(reading(special[f"{row.time:%H:%M}"]), *row.readings[1:]))  # type: ignore[arg-type]
        if f"{row.time:%H:%M}" in special
        else row
        for row in made.rows
    )
    return replace(made, rows=rows)


def _missing(outcome: Outcome, name: str = "1", segment: str = "nox") -> list[str]:
    found = outcome.run(name).gas(segment)
    assert found is not None
    assert found.series is not None
    return [f"{minute:%H:%M}" for minute in found.series.missing_minutes]


def test_the_mean_is_of_the_readings_between_start_and_end() -> None:
    """End stamps 08:01 to 08:30 lie in the run 08:00 to 08:30; 08:00 and 08:31 do not (Method 7E, 12.6)."""
    outcome = assessed(readings=_but_nox({"08:00": 1000.0, "08:01": 70.0, "08:30": 10.0, "08:31": 1000.0}))
    assert value(outcome, "run.1.nox.count") == 30
    assert value(outcome, "run.1.nox.mean") == pytest.approx((28 * 40 + 70 + 10) / 30, rel=1e-15)
    assert value(outcome, "run.1.nox.coverage") == 100.0
    assert _missing(outcome) == []
    assert "coverage-low" not in codes(outcome)


def test_a_stamp_at_the_start_of_its_interval_moves_the_window() -> None:
    """Start stamps 08:00 to 08:29 lie in the run."""
    special = {"07:59": 1000.0, "08:00": 70.0, "08:29": 10.0, "08:30": 1000.0}
    outcome = assessed(test=identity(reading_stamp="interval start"), readings=_but_nox(special))
    assert value(outcome, "run.1.nox.count") == 30
    assert value(outcome, "run.1.nox.mean") == pytest.approx((28 * 40 + 70 + 10) / 30, rel=1e-15)
    assert _missing(outcome) == []


def test_stamp_and_interval_not_entered_are_said() -> None:
    outcome = assessed(test=identity(reading_stamp=None, logging_interval=None))
    assert value(outcome, "run.1.nox.count") == 30
    assert said(outcome, "the start or the end of its interval was not entered; the end is taken")
    assert said(outcome, "60 s is the median step of the time stamps")


@pytest.mark.parametrize(("step", "count"), [(15.0, 120), (60.0, 30), (300.0, 6)])
def test_other_logging_intervals(step: float, count: int) -> None:
    test = identity(logging_interval=number(step, "s"))
    made = readings(start="07:55", stop="10:35", step=step)
    outcome = assessed(test=test, readings=made)
    assert value(outcome, "run.1.nox.count") == count
    assert value(outcome, "run.1.nox.coverage") == pytest.approx(100.0, rel=1e-12)
    assert _missing(outcome) == []


def test_a_minute_needs_one_valid_reading_of_four() -> None:
    """15 s readings stamped at their end: three blanks leave the minute 08:10 covered, four do not."""
    test = identity(logging_interval=number(15.0, "s"))

    def nox(*blank: str) -> object:
        return lambda time: "" if f"{time:%H:%M:%S}" in blank else 40.0

    blanks = ("08:10:15", "08:10:30", "08:10:45")
    for more, expected in (((), []), (("08:11:00",), ["08:10"])):
        values = {"NOx": nox(*blanks, *more), "CO": 10.0, "O2": 5.0, "CO2": 9.0}
        outcome = assessed(test=test, readings=readings(values, step=15.0))  # type: ignore[arg-type]
        assert _missing(outcome) == expected
        assert ("coverage-low" in codes(outcome)) == bool(expected)


def test_a_missing_five_minute_reading_leaves_five_minutes() -> None:
    test = identity(logging_interval=number(5.0, "min"))
    values = {"NOx": lambda t: "" if t == at("08:15") else 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assessed(test=test, readings=readings(values, start="07:55", step=300.0))  # type: ignore[dict-item]
    assert _missing(outcome) == ["08:10", "08:11", "08:12", "08:13", "08:14"]


@pytest.mark.parametrize("offset", [10, 30, 50])
def test_a_missing_reading_is_seen_whatever_the_seconds_of_the_stamps(offset: int) -> None:
    """Logger 10, 30 or 50 s off the full minute: one blank is one clock minute without a reading, not none."""
    stamp = f"08:12:{offset}"
    values = {"NOx": lambda t: "" if f"{t:%H:%M:%S}" == stamp else 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    made = readings(values, start=f"07:56:{offset}")  # type: ignore[arg-type]
    outcome = assessed(readings=made, runs=(run("1", f"08:00:{offset}", f"08:30:{offset}"),))
    missing = _missing(outcome)
    assert len(missing) == 1
    assert missing[0] in ("08:11", "08:12")
    assert value(outcome, "run.1.nox.count") == 29


def test_the_minutes_are_listed_in_the_note() -> None:
    outcome = assessed(readings=_but_nox({"08:11": "", "08:12": "CAL"}))
    note = next(p for p in outcome.problems if p.code == "coverage-low")
    assert note.found == "NOx, run 1: 08:10 to 08:11, 2 minutes of 30; the mean rests on 28 reading(s)"
    assert value(outcome, "run.1.nox.count") == 28


def test_readings_outside_runs_do_no_harm() -> None:
    special = {"08:35": "OVER", "08:36": "ND", "08:37": "ERR", "08:38": "", "08:39": -5.0}
    outcome = assessed(readings=_but_nox(special))
    assert value(outcome, "run.1.nox.mean") == 40.0
    assert not {"over-range-in-run", "undecided-not-detected", "coverage-low"} & set(codes(outcome))


def test_words_are_left_out_and_stay_different() -> None:
    outcome = assessed(readings=_but_nox({"08:05": "CAL", "08:06": "ERR", "08:07": ""}))
    found = outcome.run("1").gas("nox")
    assert found is not None
    assert found.series is not None
    assert [why for _, _, why in found.series.left_out] == ["calibration", "error value", "blank"]
    assert value(outcome, "run.1.nox.count") == 27
    assert is_valid(outcome, "1")


def test_signed_values_are_kept() -> None:
    """Mean of 28 x 0.2, -0.7 and -1.3 ppm: 3.6/30."""
    values = {"NOx": 40.0, "CO": lambda t: {"08:05": -0.7, "08:06": -1.3}.get(f"{t:%H:%M}", 0.2), "O2": 5.0, "CO2": 9.0}
    outcome = assessed(readings=readings(values))  # type: ignore[arg-type]
    assert value(outcome, "run.1.co.mean") == pytest.approx(3.6 / 30, rel=1e-12)


def test_a_negative_mean_is_corrected_and_carried() -> None:
    values = {"NOx": 40.0, "CO": -0.3, "O2": 5.0, "CO2": 9.0}
    outcome = assessed(readings=readings(values))
    assert value(outcome, "run.1.co.corrected") == pytest.approx(-0.3, rel=1e-12)
    assert value(outcome, "average.co.dry") == pytest.approx(-0.3, rel=1e-12)


# ---- events ----------------------------------------------------------------------------------------------------


def test_an_event_leaves_its_readings_out_with_its_reason() -> None:
    """10:05 to 10:08: the intervals that end 10:06, 10:07 and 10:08."""
    special = {f"10:0{minute}": 90.0 for minute in (6, 7, 8)}
    stop = event("10:05", "soot blowing", until="10:08", excluded=True, reason="agreed in the protocol")
    outcome = assessed(readings=_but_nox(special), events=(stop,))
    assert value(outcome, "run.3.nox.mean") == 40.0
    assert value(outcome, "run.3.nox.count") == 27
    exclusion = outcome.run("3").exclusions[0]
    assert (exclusion.start, exclusion.end, exclusion.count) == (at("10:05"), at("10:08"), 3)
    assert exclusion.reason == "agreed in the protocol"
    assert _missing(outcome, "3") == ["10:05", "10:06", "10:07"]
    assert outcome.run("1").exclusions == ()


def test_an_event_that_does_not_exclude_changes_nothing() -> None:
    outcome = assessed(events=(event("08:05", "load step", until="08:10"),))
    assert value(outcome, "run.1.nox.count") == 30


def test_an_event_of_another_run_excludes_nothing_here() -> None:
    outcome = assessed(events=(event("08:05", "pause", until="08:10", excluded=True, run="2"),))
    assert value(outcome, "run.1.nox.count") == 30


def test_an_event_across_the_start_of_a_run_takes_what_lies_within() -> None:
    outcome = assessed(events=(event("07:58", "warm-up", until="08:02", excluded=True),))
    assert value(outcome, "run.1.nox.count") == 28


def test_an_event_without_an_end_takes_one_interval_and_says_so() -> None:
    outcome = assessed(events=(event("08:10", "spike of the recorder", excluded=True),))
    assert value(outcome, "run.1.nox.count") == 29
    assert _missing(outcome) == ["08:10"]
    assert said(outcome, "(spike of the recorder) has no end; one logging interval is left out")


def test_without_a_reason_the_event_itself_is_the_reason() -> None:
    outcome = assessed(events=(event("08:05", "port change", until="08:07", excluded=True),))
    assert outcome.run("1").exclusions[0].reason == "port change"


# ---- over range, not detected ----------------------------------------------------------------------------------


def test_over_range_makes_a_lower_bound_that_is_not_corrected() -> None:
    """28 x 40, >60 (counted at 60) and OVER (counted at the highest reading, 40): (1120 + 60 + 40)/30."""
    outcome = assessed(readings=_but_nox({"08:05": ">60", "08:06": "OVER"}))
    assert value(outcome, "run.1.nox.mean.lower_bound") == pytest.approx((28 * 40 + 60 + 40) / 30, rel=1e-15)
    assert "run.1.nox.mean" not in outcome.ledger
    assert "run.1.nox.corrected" not in outcome.ledger
    assert not is_valid(outcome, "1")
    assert is_valid(outcome, "2")
    assert codes(outcome).count("over-range-in-run") == 1


def test_a_run_all_over_range_says_so() -> None:
    values = {"NOx": "OVER", "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assessed(readings=readings(values))
    assert codes(outcome).count("over-range-in-run") == 3
    assert not is_valid(outcome, "1")
    assert not any(key.startswith("run.1.nox.mean") for key in (e.key for e in outcome.ledger))


def test_over_range_in_an_excluded_period_does_not_count() -> None:
    pause = event("08:04", "range change", until="08:06", excluded=True)
    outcome = assessed(readings=_but_nox({"08:05": "OVER", "08:06": "OVER"}), events=(pause,))
    assert value(outcome, "run.1.nox.mean") == 40.0
    assert "over-range-in-run" not in codes(outcome)


def _below(policy: str | None, cells: dict[str, object], detection: float | None = 0.6) -> Outcome:
    """CO of 3 ppm with some readings below detection."""
    values = {"NOx": 40.0, "CO": lambda t: cells.get(f"{t:%H:%M}", 3.0), "O2": 5.0, "CO2": 9.0}
    channels = tuple(
        channel(name, detection_limit=number(detection) if name == "CO" and detection is not None else None)
        for name in ("NOx", "CO", "O2", "CO2")
    )
    return assessed(
        test=identity(not_detected_counted_as=policy),
        channels=channels,
        readings=readings(values),  # type: ignore[arg-type]
    )


@pytest.mark.parametrize(("policy", "share"), [("zero", 0.0), ("half", 0.5), ("full", 1.0)])
def test_below_detection_with_a_policy(policy: str, share: float) -> None:
    """<0.4 is counted against 0.4, ND against the channel's detection limit 0.6: 28 x 3 + share (0.4 + 0.6)."""
    outcome = _below(policy, {"08:05": "<0.4", "08:06": "ND"})
    assert value(outcome, "run.1.co.mean") == pytest.approx((84 + share * 1.0) / 30, rel=1e-14)
    assert value(outcome, "run.1.co.count") == 30
    assert is_valid(outcome, "1", "co")
    assert said(outcome, f"counted at {policy} value")


def test_below_detection_without_a_policy_has_no_mean_but_shows_all_three() -> None:
    outcome = _below(None, {"08:05": "<0.4", "08:06": "ND"})
    assert "run.1.co.mean" not in outcome.ledger
    for policy, share in (("zero", 0.0), ("half", 0.5), ("full", 1.0)):
        shown = value(outcome, f"run.1.co.mean.counted_{policy}")
        assert shown == pytest.approx((84 + share * 1.0) / 30, rel=1e-14)
    assert codes(outcome).count("undecided-not-detected") == 1
    assert not is_valid(outcome, "1", "co")
    assert is_valid(outcome, "1", "nox")


@pytest.mark.parametrize("policy", ["half", "full"])
def test_nd_without_a_detection_limit_is_not_taken_as_zero(policy: str) -> None:
    outcome = _below(policy, {"08:06": "ND"}, detection=None)
    assert "run.1.co.mean" not in outcome.ledger
    problem = next(p for p in outcome.problems if p.code == "undecided-not-detected")
    assert "no detection limit" in problem.found
    assert "run.1.co.mean.counted_zero" in outcome.ledger
    assert "run.1.co.mean.counted_half" not in outcome.ledger


def test_nd_counted_as_zero_needs_no_detection_limit() -> None:
    outcome = _below("zero", {"08:06": "ND"}, detection=None)
    assert value(outcome, "run.1.co.mean") == pytest.approx(87 / 30, rel=1e-14)


def test_over_range_and_below_detection_are_both_said() -> None:
    outcome = _below(None, {"08:05": "ND", "08:06": "OVER"})
    assert {"over-range-in-run", "undecided-not-detected"} <= set(codes(outcome))
    assert value(outcome, "run.1.co.mean.lower_bound") == pytest.approx((28 * 3 + 0 + 3) / 30, rel=1e-14)


# ---- oxygen above air ------------------------------------------------------------------------------------------


def test_oxygen_above_air_is_a_note() -> None:
    values = {"NOx": 40.0, "CO": 10.0, "O2": lambda t: 21.3 if t == at("08:05") else 5.0, "CO2": 9.0}
    outcome = assessed(readings=readings(values))
    assert [p.found for p in outcome.problems if p.code == "oxygen-reading-implausible"] == ["21.3 % oxygen in run 1"]
    assert is_valid(outcome, "1", "o2")


def test_oxygen_read_in_ppm_is_judged_as_ppm() -> None:
    """50 000 ppm is 5 percent: nothing odd; 213 000 ppm is."""
    channels = tuple(channel(name, unit="ppm" if name == "O2" else "") for name in ("NOx", "CO", "O2", "CO2"))
    for shown, odd in ((50_000.0, False), (213_000.0, True)):
        values = {"NOx": 40.0, "CO": 10.0, "O2": shown, "CO2": 9.0}
        outcome = assessed(channels=channels, readings=readings(values))
        assert ("oxygen-reading-implausible" in codes(outcome)) == odd


def test_runs_of_different_values_stay_apart() -> None:
    values = {"NOx": in_run((20.0, 30.0, 45.0)), "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assessed(readings=readings(values))
    assert [value(outcome, f"run.{n}.nox.mean") for n in "123"] == [20.0, 30.0, 45.0]
    assert value(outcome, "average.nox.dry") == pytest.approx(95 / 3, rel=1e-14)


def test_times_are_whole_days_apart_only_by_their_date() -> None:
    """A reading of another day with the same clock is not of the run."""
    made = readings()
    other = replace(made.rows[10], time=datetime(DAY.year, DAY.month, DAY.day + 1, 8, 10))
    outcome = assessed(readings=replace(made, rows=(*made.rows, other)))
    assert value(outcome, "run.1.nox.count") == 30


def test_a_unit_of_the_interval_other_than_minutes() -> None:
    interval = Given(1.0 / 60.0, text="1/60", unit=read_unit("h"))
    outcome = assessed(test=identity(logging_interval=interval))
    assert value(outcome, "readings.interval") == pytest.approx(1.0, rel=1e-12)
    assert value(outcome, "run.1.nox.count") == 30
