"""Gaps in a run: said with what is left, held against a limit's own minimum run length, and against nothing else."""

from __future__ import annotations

from datetime import datetime, timedelta

import pytest

from reporter.outcome import Outcome
from reporter.output.phrases import load_phrases
from reporter.terminal import summary
from tests.record_factory import assessed, at, codes, comparison, event, limit, number, readings, run, runs, value

SHORT = limit("L1", minimum_run_length=number(30.0, "min"))


def _with_gap(first: str, last: str, **more: object) -> Outcome:
    """No NOx reading between two stamps of run 1 (08:00 to 08:30; a stamp names the end of its minute)."""

    def nox(time: datetime) -> float | str:
        return "" if at(first) <= time <= at(last) else 40.0

    values = {"NOx": nox, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    return assessed(readings=readings(values), **more)  # type: ignore[arg-type]


def test_two_minutes_of_thirty_are_said_plainly() -> None:
    """Stamps 08:03 to 08:30 are blank: the minutes 08:02 to 08:29."""
    outcome = _with_gap("08:03", "08:30")
    note = next(problem for problem in outcome.problems if problem.code == "coverage-low")
    assert note.found == "NOx, run 1: 08:02 to 08:29, 28 minutes of 30; the mean rests on 2 reading(s)"
    assert "Method 7E, § 8.4" in note.expected
    state = load_phrases()("run.valid_with_gaps", missing=28, whole=30)
    assert state in " ".join(summary(outcome).split())


def test_no_length_of_our_own_is_held_against_a_run() -> None:
    """Without a minimum run length in the limit's record a run of two minutes counts, and the gap is said."""
    outcome = _with_gap("08:03", "08:30", limits=(limit("L1"),))
    assert comparison(outcome).is_met is True
    assert not [check for check in outcome.checks if check.title.startswith("Minutes with a valid reading")]


def test_the_limits_own_length_is_held_against_the_valid_minutes() -> None:
    outcome = _with_gap("08:03", "08:30", limits=(SHORT,))
    assert value(outcome, "run.1.nox.valid_minutes") == 2.0
    assert comparison(outcome).reason == "2 valid run(s) of 3 required"
    assert "run 1 has 2 min with valid readings; the limit asks for 30 min" in comparison(outcome).notes
    checks = {c.runs[0]: c for c in outcome.checks if c.title.startswith("Minutes with a valid reading")}
    assert [checks[run].met for run in ("1", "2", "3")] == [False, True, True]
    assert checks["1"].citation.document == "record"  # the limit's record, no method
    assert outcome.run("1").gases[0].is_valid  # the method itself says nothing of a minimum


def test_a_run_lengthened_by_what_was_left_out_is_long_enough() -> None:
    """Common practice: three minutes left out, and 33 minutes run for a limit of 30."""
    longer = (run("1", "08:00", "08:33"), *runs()[1:])
    gone = event("08:10", "air in the line", until="08:13", excluded=True)
    outcome = assessed(runs=longer, events=(gone,), limits=(SHORT,))
    assert value(outcome, "run.1.nox.valid_minutes") == 30.0
    assert comparison(outcome).is_met is True


@pytest.mark.parametrize("shift", [0, 12, 30])
def test_stamps_beside_the_minute_cost_no_valid_minute(shift: int) -> None:
    """A logger whose stamps are some seconds past the minute: one reading less fits, no clock minute is without one."""
    start = at("07:56") + timedelta(seconds=shift)
    outcome = assessed(readings=readings(start=f"{start:%H:%M:%S}"), limits=(SHORT,))
    assert value(outcome, "run.1.nox.valid_minutes") == 30.0
    assert comparison(outcome).is_met is True
    assert "coverage-low" not in codes(outcome)


def test_a_missing_reading_among_many_of_a_minute_costs_nothing() -> None:
    """Method 7E, § 8.4, asks for one valid reading a minute: of six, one is enough."""
    values = {"NOx": lambda t: "" if t == at("08:05:10") else 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assessed(readings=readings(values, step=10.0), limits=(SHORT,))  # type: ignore[arg-type]
    assert value(outcome, "run.1.nox.valid_minutes") == 30.0


def test_limits_of_one_length_share_the_criterion() -> None:
    outcome = assessed(limits=(SHORT, limit("L2", minimum_run_length=number(0.5, "h"))))
    mine = [check for check in outcome.checks if check.title.startswith("Minutes with a valid reading")]
    assert len(mine) == 3
