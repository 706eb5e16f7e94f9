"""What follows from a criterion that is not met, through to the average and the comparison (Method 7E, 8.5, 13).

Bias not met: the run is invalid.  Drift not met with bias met: the run is valid.  After either, no later run is
valid until a three-point set and a bias check are met.  Spans: NOx 100 ppm; bounds: bias 5, drift 3, error 2 ppm.
"""

from __future__ import annotations

from dataclasses import replace

import pytest

from reporter.outcome import Outcome, RunState
from reporter.record import Record
from tests.record_factory import (
    added,
    assess,
    at,
    calibration,
    calibrations,
    channel,
    codes,
    comparison,
    event,
    is_valid,
    limit,
    number,
    readings,
    recalibrated,
    record,
    rerun,
    run,
    said,
    value,
    without_calibrations,
)


def _valid(outcome: Outcome, segment: str = "nox") -> list[bool]:
    return [is_valid(outcome, run.key, segment) for run in outcome.runs]


def _reasons(outcome: Outcome, name: str) -> str:
    found = outcome.run(name).gas("nox")
    assert found is not None
    return "; ".join(found.reasons)


def _renewed(made: Record, begin: str, check: str, *, mid: float = 50.0, check_mid: float = 50.0) -> Record:
    """A direct set of NOx from `begin` on and a system check at `check` (zero) and two minutes later (mid)."""
    minute = at(begin)
    times = [f"{minute.hour:02d}:{minute.minute + k:02d}" for k in range(3)]
    later = f"{at(check).hour:02d}:{at(check).minute + 2:02d}"
    return added(
        made,
        calibration(times[0], "NOx", "direct", "zero", 0.0),
        calibration(times[1], "NOx", "direct", "mid", mid),
        calibration(times[2], "NOx", "direct", "high", 100.0),
        calibration(check, "NOx", "system", "zero", 0.0),
        calibration(later, "NOx", "system", "mid", check_mid),
    )


# ---- bias ------------------------------------------------------------------------------------------------------


def test_bias_not_met_before_a_run_makes_it_and_all_later_runs_invalid() -> None:
    """Run 1 opens with 56 ppm for 50; nothing is renewed, although the later checks read 50."""
    outcome = assess(recalibrated(record(), "07:52", "NOx", 56.0))
    assert _valid(outcome) == [False, False, False]
    assert "bias of the upscale gas before the run is not met" in _reasons(outcome, "1")


def test_bias_not_met_after_a_run_makes_it_and_the_run_it_opens_invalid() -> None:
    outcome = assess(recalibrated(record(), "08:42", "NOx", 56.0))
    assert _valid(outcome) == [False, False, False]
    assert "bias of the upscale gas after the run is not met" in _reasons(outcome, "1")
    assert "bias of the upscale gas before the run is not met" in _reasons(outcome, "2")
    assert "an earlier bias or drift was not met" in _reasons(outcome, "3")


def test_a_good_check_alone_does_not_renew() -> None:
    """A repeated check of 50 at 08:47 is the one before run 2, but no three-point set was made."""
    made = recalibrated(record(), "08:42", "NOx", 56.0)
    made = added(
        made,
        calibration("08:45", "NOx", "system", "zero", 0.0),
        calibration("08:47", "NOx", "system", "mid", 50.0),
    )
    outcome = assess(made)
    assert _valid(outcome) == [False, False, False]
    assert "an earlier bias or drift was not met" in _reasons(outcome, "2")


def test_a_set_and_a_check_renew() -> None:
    made = _renewed(recalibrated(record(), "08:42", "NOx", 56.0), "08:45", "08:50")
    outcome = assess(made)
    assert _valid(outcome) == [False, True, True]


def test_a_set_without_a_check_after_it_does_not_renew() -> None:
    """The set is made at 08:45, but the last check before run 2 is the failed one of 08:42."""
    made = recalibrated(record(), "08:42", "NOx", 56.0)
    made = added(
        made,
        calibration("08:45", "NOx", "direct", "zero", 0.0),
        calibration("08:46", "NOx", "direct", "mid", 50.0),
        calibration("08:47", "NOx", "direct", "high", 100.0),
    )
    outcome = assess(made)
    assert _valid(outcome)[1] is False


def test_a_set_made_before_the_failed_check_does_not_renew() -> None:
    """Run 1 ends 08:30, a set follows at 08:35, the check of 08:42 fails and a repeated check at 08:47 is good."""
    made = recalibrated(record(), "08:42", "NOx", 56.0)
    made = added(
        made,
        calibration("08:35", "NOx", "direct", "zero", 0.0),
        calibration("08:36", "NOx", "direct", "mid", 50.0),
        calibration("08:37", "NOx", "direct", "high", 100.0),
        calibration("08:45", "NOx", "system", "zero", 0.0),
        calibration("08:47", "NOx", "system", "mid", 50.0),
    )
    outcome = assess(made)
    assert _valid(outcome) == [False, False, False]


def test_a_set_that_is_not_met_does_not_renew() -> None:
    made = _renewed(recalibrated(record(), "08:42", "NOx", 56.0), "08:45", "08:50", mid=52.5)
    outcome = assess(made)
    assert _valid(outcome) == [False, False, False]
    assert "the latest calibration error test is not met" in _reasons(outcome, "2")


def test_a_check_that_is_not_met_does_not_renew() -> None:
    made = _renewed(recalibrated(record(), "08:42", "NOx", 56.0), "08:45", "08:50", check_mid=56.0)
    outcome = assess(made)
    assert _valid(outcome) == [False, False, False]


def test_renewal_before_the_third_run_saves_the_third_alone() -> None:
    made = _renewed(recalibrated(record(), "08:42", "NOx", 56.0), "09:45", "09:50")
    outcome = assess(made)
    assert _valid(outcome) == [False, False, True]


def test_a_failed_set_between_good_runs_is_not_passed_over() -> None:
    """A three-point test at 09:45 reads 53 for 50: run 3 is not valid, although the morning's set was."""
    made = _renewed(record(), "09:45", "09:50", mid=53.0)
    outcome = assess(made)
    assert _valid(outcome) == [True, True, False]
    assert "the latest calibration error test is not met" in _reasons(outcome, "3")


def test_only_the_channel_concerned_is_invalid() -> None:
    outcome = assess(recalibrated(record(), "08:42", "NOx", 56.0))
    for segment in ("co", "o2", "co2"):
        assert _valid(outcome, segment) == [True, True, True]


def test_the_state_of_the_runs_and_the_problems_say_so() -> None:
    outcome = assess(recalibrated(record(), "08:42", "NOx", 56.0))
    assert [r.state for r in outcome.runs] == [RunState.INVALID] * 3
    assert codes(outcome).count("run-invalid") == 3


# ---- drift -----------------------------------------------------------------------------------------------------


def test_drift_not_met_with_bias_met_leaves_the_run_valid() -> None:
    """+2.0 before, -1.5 after: each within 5, but 3.5 apart.  Later runs wait for a renewal."""
    made = recalibrated(recalibrated(record(), "07:52", "NOx", 52.0), "08:42", "NOx", 48.5)
    outcome = assess(made)
    assert _valid(outcome) == [True, False, False]
    assert said(outcome, "drift of the upscale gas is not met; the run stays valid")
    assert value(outcome, "run.1.nox.drift.upscale") == pytest.approx(3.5, rel=1e-9)
    assert "an earlier bias or drift was not met" in _reasons(outcome, "2")


def test_after_drift_a_set_and_a_check_renew() -> None:
    made = recalibrated(recalibrated(record(), "07:52", "NOx", 52.0), "08:42", "NOx", 48.5)
    outcome = assess(_renewed(made, "08:45", "08:50"))
    assert _valid(outcome) == [True, True, True]


def test_drift_over_the_last_run_costs_nothing() -> None:
    made = recalibrated(recalibrated(record(), "09:42", "NOx", 51.8), "10:42", "NOx", 48.6)
    outcome = assess(made)
    assert _valid(outcome) == [True, True, True]
    assert value(outcome, "run.3.nox.drift.upscale.met") == 0.0


def test_zero_drift_counts_as_well() -> None:
    made = recalibrated(recalibrated(record(), "07:50", "NOx", 2.0), "08:40", "NOx", -1.5)
    outcome = assess(made)
    assert value(outcome, "run.1.nox.drift.zero") == pytest.approx(3.5, rel=1e-9)
    assert _valid(outcome) == [True, False, False]


# ---- checks missing, late, shared, named ------------------------------------------------------------------------


def test_no_check_before_the_first_run() -> None:
    outcome = assess(without_calibrations(record(), "NOx", "07:50", "07:52"))
    assert _valid(outcome) == [False, True, True]
    assert "calibration-missing" in codes(outcome)
    assert "no system check before the run" in _reasons(outcome, "1")


def test_no_check_after_the_last_run() -> None:
    outcome = assess(without_calibrations(record(), "NOx", "10:40", "10:42"))
    assert _valid(outcome) == [True, True, False]
    assert codes(outcome).count("calibration-missing") == 1


def test_one_gas_of_a_check_missing() -> None:
    outcome = assess(without_calibrations(record(), "NOx", "10:40"))
    assert "no system check of the zero or low-level gas after the run" in _reasons(outcome, "3")


def test_the_check_that_closes_the_next_run_closes_none_before_it() -> None:
    """Nothing between runs 1 and 2; the check of 09:40 closes run 2, and run 1 has none."""
    outcome = assess(without_calibrations(record(), "NOx", "08:40", "08:42"))
    assert _valid(outcome) == [False, False, True]
    assert codes(outcome).count("calibration-missing") == 2
    assert "calibration-late" not in codes(outcome)
    assert "closing-check-misplaced" not in codes(outcome)


def _moved(clock: str, *gone: str) -> list[tuple[str, str]]:
    """Code and what was found, with the checks of some times gone and one made at another time."""
    made = without_calibrations(record(), "NOx", *gone)
    rows = (calibration(clock, "NOx", "system", level, 50.0 * (level == "mid")) for level in ("zero", "mid"))
    outcome = assess(added(made, *rows))
    wanted = ("calibration-missing", "calibration-late", "closing-check-misplaced")
    return [(problem.code, problem.found) for problem in outcome.problems if problem.code in wanted]


def test_a_check_at_the_wrong_time_is_worded_by_its_case() -> None:
    """Opening check late, closing check too early, closing check within the next run; a missing one has no time."""
    late = "NOx, run 1: no system check before the run: it was made at 08:05, after the run had begun at 08:00"
    assert _moved("08:05", "07:50", "07:52") == [("calibration-late", late)]
    early = "NOx, run 3: no system check after the run: it was made at 10:25, before the run ended at 10:30"
    assert _moved("10:25", "10:40", "10:42") == [("closing-check-misplaced", early)]
    within = [
        ("closing-check-misplaced", "NOx, run 1: no system check after the run: it was made at 09:05, "
         "after the next run had begun at 09:00"),
        ("calibration-late", "NOx, run 2: no system check before the run: it was made at 09:05, "
         "after the run had begun at 09:00"),
    ]  # fmt: skip
    assert _moved("09:05", "08:40", "08:42") == within
    missing = "NOx, run 3: no system check after the run"
    assert _moved("08:41", "10:40", "10:42") == [("calibration-missing", missing)]


def test_the_first_check_within_the_run_is_late() -> None:
    made = without_calibrations(record(), "NOx", "07:50", "07:52")
    made = added(
        made,
        calibration("08:01", "NOx", "system", "zero", 0.0),
        calibration("08:03", "NOx", "system", "mid", 50.0),
    )
    outcome = assess(made)
    assert "calibration-late" in codes(outcome)
    assert _valid(outcome) == [False, True, True]


def test_a_check_long_after_the_run_is_a_note() -> None:
    """Run 3 ends 10:30: a check at 11:31 is said to be late, at 11:30 not; the run stays valid."""
    for clock, late in (("11:30", False), ("11:31", True)):
        made = without_calibrations(record(), "NOx", "10:40", "10:42")
        made = added(
            made,
            calibration("11:29", "NOx", "system", "zero", 0.0),
            calibration(clock, "NOx", "system", "mid", 50.0),
        )
        outcome = assess(made)
        assert ("sequence-late" in codes(outcome)) == late
        assert _valid(outcome) == [True, True, True]


def test_run_and_when_override_the_time() -> None:
    """Two checks between runs 1 and 2: the second is named as the one after run 1 (46 ppm), the first opens run 2."""
    made = added(
        record(),
        calibration("08:44", "NOx", "system", "zero", 0.0, run="1", when="after"),
        calibration("08:46", "NOx", "system", "mid", 47.5, run="1", when="after"),
    )
    outcome = assess(made)
    assert value(outcome, "run.1.nox.upscale") == pytest.approx((50 + 47.5) / 2, rel=1e-12)
    assert value(outcome, "run.2.nox.upscale") == pytest.approx((47.5 + 50) / 2, rel=1e-12)


def test_a_check_named_for_the_other_side_of_a_run_is_not_taken() -> None:
    """The last check before run 2 is named as the one after it (the clock was wrong): 08:42 opens run 2."""
    made = without_calibrations(record(), "NOx", "09:40", "09:42")
    made = added(
        made,
        calibration("08:50", "NOx", "system", "zero", 0.5, run="2", when="after"),
        calibration("08:52", "NOx", "system", "mid", 48.0, run="2", when="after"),
        calibration("09:44", "NOx", "system", "zero", 0.0, run="3", when="before"),
        calibration("09:46", "NOx", "system", "mid", 50.0, run="3", when="before"),
    )
    outcome = assess(made)
    assert value(outcome, "run.2.nox.zero") == pytest.approx((0.0 + 0.5) / 2, rel=1e-12)
    assert value(outcome, "run.2.nox.upscale") == pytest.approx((50 + 48) / 2, rel=1e-12)


def test_one_named_gas_leaves_the_other_to_the_time() -> None:
    made = added(record(), calibration("08:46", "NOx", "system", "mid", 48.0, run="1", when="after"))
    outcome = assess(made)
    assert value(outcome, "run.1.nox.upscale") == pytest.approx(49.0, rel=1e-12)
    assert value(outcome, "run.1.nox.zero") == 0.0


def test_the_first_check_after_a_run_counts_not_a_better_one_later() -> None:
    made = recalibrated(record(), "08:42", "NOx", 56.0)
    made = added(made, calibration("08:46", "NOx", "system", "mid", 50.0))
    assert _valid(assess(made))[0] is False


# ---- adjustments ------------------------------------------------------------------------------------------------


def test_an_adjustment_before_the_closing_check_voids_it() -> None:
    made = replace(record(), events=(event("08:35", "NOx analyzer adjusted"),))
    outcome = assess(made)
    assert _valid(outcome) == [False, True, True]
    assert _valid(outcome, "co") == [True, True, True]
    assert codes(outcome).count("adjustment-before-check") == 1
    assert "adjusted at 08:35, before the check at 08:4" in _reasons(outcome, "1")


def test_an_adjustment_that_names_no_channel_voids_all() -> None:
    made = replace(record(), events=(event("08:35", "span adjustment of the analyzers"),))
    outcome = assess(made)
    for segment in ("nox", "co", "o2", "co2"):
        assert _valid(outcome, segment) == [False, True, True]


@pytest.mark.parametrize("clock", ["08:29", "08:43", "07:55"])
def test_an_adjustment_at_another_time_voids_nothing(clock: str) -> None:
    made = replace(record(), events=(event(clock, "NOx analyzer adjusted"),))
    assert _valid(assess(made)) == [True, True, True]


def test_a_gas_named_within_another_word_is_not_that_gas() -> None:
    """CO2 adjusted says nothing about the CO channel, nor about O2."""
    made = replace(record(), events=(event("08:35", "CO2 zero adjusted"),))
    outcome = assess(made)
    assert _valid(outcome, "co2") == [False, True, True]
    assert _valid(outcome, "co") == [True, True, True]
    assert _valid(outcome, "o2") == [True, True, True]


def test_an_adjustment_between_the_two_gases_of_a_check_voids_the_second() -> None:
    made = replace(record(), events=(event("08:41", "NOx adjusted"),))
    outcome = assess(made)
    assert _valid(outcome)[0] is False


@pytest.mark.parametrize("words", ["no adjustment of the analyzers", "analyzers not adjusted", "never re-zeroed"])
def test_an_event_that_says_nothing_was_adjusted(words: str) -> None:
    made = replace(record(), events=(event("08:35", words),))
    assert _valid(assess(made)) == [True, True, True]


def test_re_zeroing_is_an_adjustment() -> None:
    made = replace(record(), events=(event("08:35", "NOx re-zeroed"),))
    assert _valid(assess(made)) == [False, True, True]


# ---- groups of runs ---------------------------------------------------------------------------------------------


def test_runs_of_two_groups_may_overlap() -> None:
    """Run 1b of another group lies across run 1: both are closed by the check of 08:40."""
    more = run("1b", "08:10", "08:35", group="B")
    made = record()
    outcome = assess(replace(made, runs=(*(replace(r, group=None) for r in made.runs), more)))
    assert _valid(outcome) == [True] * 4


# ---- through to the end -----------------------------------------------------------------------------------------


def _limited(made: Record) -> Outcome:
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"), runs_required=number(2.0))
    return assess(replace(made, limits=(at_3, limit("L2", "CO", 50.0))))


def test_an_invalid_run_is_out_of_the_average_and_the_count() -> None:
    """Runs 20, 30, 45 ppm, run 3 without its closing check: the average is of runs 1 and 2."""
    values = {"NOx": lambda t: 20.0 if t <= at("08:30") else 30.0 if t <= at("09:30") else 45.0}
    made = record(
        channels=(channel("NOx"), channel("O2")),
        readings=readings({**values, "O2": 5.0}),  # type: ignore[arg-type]
        calibrations=calibrations(("NOx", "O2")),
    )
    outcome = _limited(without_calibrations(made, "NOx", "10:40", "10:42"))
    assert value(outcome, "average.nox.at_reference") == pytest.approx(25.0 * 17.9 / 15.9, rel=1e-12)
    assert value(outcome, "comparison.l1.count") == 2.0
    assert comparison(outcome).is_met is True


def test_an_invalid_diluent_takes_the_results_it_bears_with_it() -> None:
    """O2 fails after run 1: NOx at reference O2 has no valid run; NOx dry and CO dry have three."""
    outcome = _limited(recalibrated(record(), "08:42", "O2", 11.5))
    assert comparison(outcome).is_met is None
    assert "no valid run" in comparison(outcome).reason
    assert value(outcome, "comparison.l2.count") == 3.0
    assert comparison(outcome, "l2").is_met is True
    assert value(outcome, "average.nox.dry") == pytest.approx(40.0, rel=1e-12)


def test_a_changed_reading_replayed_changes_validity_as_a_new_assessment_does() -> None:
    """The indicator chain is live: replaying the ledger with 56 ppm gives what reading 56 ppm gives."""
    good = _limited(record())
    flags = [f"run.{name}.nox.valid" for name in "123"]
    changed = good.ledger.replay({"calibration.nox.system_4.reading": 56.0}, only=flags)
    bad = _limited(recalibrated(record(), "08:42", "NOx", 56.0))
    for name in "123":
        assert changed[f"run.{name}.nox.valid"] == value(bad, f"run.{name}.nox.valid") == 0.0


def test_a_changed_reading_of_the_set_replayed() -> None:
    good = _limited(record())
    changed = good.ledger.replay({"calibration.nox.direct_2.reading": 52.5}, only=["run.1.nox.valid"])
    assert changed["run.1.nox.valid"] == 0.0


def test_an_approval_does_not_make_an_invalid_run_count() -> None:
    made = rerun(recalibrated(record(), "10:42", "NOx", 56.0), "3", approval_reference="letter 7")
    outcome = _limited(made)
    assert value(outcome, "comparison.l1.count") == 2.0
