"""Each limit beside what was measured: relation and rounding at exact equality, runs required, exclusions, dates.

Readings are 40 ppm NOx unless a test says otherwise, so that the average of three runs is 40 ppm, dry.
"""

from __future__ import annotations

from dataclasses import replace
from datetime import date, timedelta
from typing import Any

import pytest

from reporter.outcome import Outcome, RunState
from reporter.record import Given
from tests.record_factory import (
    DAY,
    assess,
    assessed,
    calibrations,
    channel,
    codes,
    comparison,
    fuel,
    identity,
    in_run,
    is_valid,
    limit,
    number,
    readings,
    record,
    rerun,
    run,
    runs,
    said,
    value,
)


def _runs_of(*nox: float, **more: Any) -> Outcome:
    """Three runs with these means of NOx (all gases perfect)."""
    values = {"NOx": in_run(nox), "CO": 10.0, "O2": more.pop("o2", 5.0), "CO2": more.pop("co2", 9.0)}
    return assessed(readings=readings(values), **more)


def _average(nox: float, **of_limit: Any) -> Outcome:
    return _runs_of(nox, nox, nox, limits=(limit(**of_limit),))


# ---- relation at equality, after each rounding rule --------------------------------------------------------------


@pytest.mark.parametrize(
    ("relation", "measured", "met"),
    [
        ("at most", 50.0, True),
        ("at most", 50.0001, False),
        ("less than", 49.9999, True),
        ("less than", 50.0, False),
        ("at least", 50.0, True),
        ("at least", 49.9999, False),
    ],
)
def test_relation_at_equality(relation: str, measured: float, met: bool) -> None:
    outcome = _average(measured, relation=relation, value=50.0)
    assert comparison(outcome).is_met == met
    assert value(outcome, "comparison.l1.met") == float(met)
    assert value(outcome, "comparison.l1.margin") == pytest.approx(50.0 - measured, rel=1e-6, abs=1e-9)
    assert value(outcome, "comparison.l1.percent") == pytest.approx(2 * measured, rel=1e-12)
    assert comparison(outcome).rounding_words == "no rounding rule entered: compared unrounded"


@pytest.mark.parametrize(
    ("rule", "measured", "rounded", "met"),
    [
        ("none", 50.4, 50.4, False),
        ("half up", 50.4, 50.0, True),
        ("half up", 50.5, 51.0, False),
        ("half up to 1 decimal", 50.04, 50.0, True),
        ("half up to 1 decimal", 50.05, 50.1, False),
        ("half even", 50.5, 50.0, True),
        ("half even", 51.5, 52.0, False),
        ("half even to 1 decimal", 50.25, 50.2, False),
        ("truncated", 50.99, 50.0, True),
        ("truncated", 51.0, 51.0, False),
        ("truncated to 1 decimal", 50.09, 50.0, True),
        ("half up to 2 significant digits", 50.49, 50.0, True),
        ("half up to 2 significant digits", 50.51, 51.0, False),
        ("half even to 2 significant digits", 50.5, 50.0, True),
        ("truncated to 2 significant digits", 50.9, 50.0, True),
        ("half up to 4 significant digits", 50.004, 50.0, True),
        ("half up to 4 significant digits", 50.005, 50.01, False),
    ],
)
def test_the_compared_number_is_rounded_once_by_the_rule(rule: str, measured: float, rounded: float, met: bool) -> None:
    outcome = _average(measured, value=50.0, rounding=rule)
    found = comparison(outcome)
    assert value(outcome, found.value) == pytest.approx(measured, rel=1e-12)
    assert value(outcome, found.rounded) == pytest.approx(rounded, rel=1e-14)
    assert found.is_met == met
    assert found.rounding_words.startswith("not rounded" if rule == "none" else rule.split(" to ")[0])


def test_without_a_number_the_rule_takes_the_decimals_of_the_limit_as_written() -> None:
    """40.10 is written with two decimals: 40.104 rounds to 40.10."""
    outcome = _average(40.104, value=40.10, written="40.10", rounding="half up")
    assert comparison(outcome).rounding_words == "half up to 2 decimals, those of the limit"
    assert value(outcome, "comparison.l1.rounded") == pytest.approx(40.10, rel=1e-14)
    assert comparison(outcome).is_met is True


def test_a_rule_that_is_not_known_is_not_compared() -> None:
    outcome = _average(40.0, rounding="generously")
    assert "rounding-rule-unknown" in codes(outcome)
    assert comparison(outcome).is_met is None
    assert "'generously' is not a rounding rule" in comparison(outcome).reason


@pytest.mark.parametrize("rule", ["half up to 2 significant digits", "half even to 2 significant digits", "half up"])
def test_an_average_of_exactly_zero_is_compared(rule: str) -> None:
    outcome = _average(0.0, rounding=rule)
    assert value(outcome, "comparison.l1.rounded") == 0.0
    assert comparison(outcome).is_met is True


def test_a_negative_average_is_compared_as_it_is() -> None:
    outcome = _average(-0.4, rounding="half up to 2 significant digits")
    assert value(outcome, "comparison.l1.rounded") == pytest.approx(-0.4, rel=1e-12)
    assert comparison(outcome).is_met is True


def test_a_limit_of_zero_has_no_percentage() -> None:
    outcome = _average(40.0, value=0.0)
    assert comparison(outcome).is_met is False
    assert "comparison.l1.percent" not in outcome.ledger


def test_a_relation_not_entered_is_at_most_and_said() -> None:
    outcome = _average(40.0, relation=None)
    assert comparison(outcome).is_met is True
    assert said(outcome, "no relation was entered; 'at most' is taken")


# ---- averaging ---------------------------------------------------------------------------------------------------


def test_the_mean_of_the_runs() -> None:
    outcome = _runs_of(30.0, 40.0, 65.0, limits=(limit(value=45.0),))
    assert value(outcome, comparison(outcome).value) == pytest.approx(45.0, rel=1e-12)
    assert comparison(outcome).is_met is True
    assert [name for name, _, _ in comparison(outcome).runs] == ["1", "2", "3"]


def test_each_run_is_held_to_the_limit() -> None:
    """Mean 45, highest 65; with "at least", the lowest counts."""
    each = limit("A", averaging="each run", value=60.0)
    lowest = limit("B", averaging="each run", value=35.0, relation="at least")
    outcome = _runs_of(30.0, 40.0, 65.0, limits=(each, lowest))
    assert value(outcome, "comparison.a.value") == pytest.approx(65.0, rel=1e-12)
    assert comparison(outcome, "a").is_met is False
    assert value(outcome, "comparison.b.value") == pytest.approx(30.0, rel=1e-12)
    assert comparison(outcome, "b").is_met is False


def test_each_run_passes_over_runs_that_do_not_count() -> None:
    made = record(limits=(limit(averaging="each run", value=50.0, runs_required=number(2.0)),))
    values = {"NOx": in_run((30.0, 40.0, 65.0)), "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assess(rerun(replace(made, readings=readings(values)), "3", excluded_because="trip of the boiler"))
    assert value(outcome, "comparison.l1.value") == pytest.approx(40.0, rel=1e-12)
    assert comparison(outcome).is_met is True


def test_results_are_averaged_not_their_inputs() -> None:
    """O2 2, 5, 11 %: the mean of 40 x 17.9/(20.9 - O2) is 53.42; with mean inputs it would be 48.06 (-10 %)."""
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"), value=60.0)
    outcome = _runs_of(40.0, 40.0, 40.0, o2=in_run((2.0, 5.0, 11.0)), co2=in_run((10.8, 9.0, 5.6)), limits=(at_3,))
    each = [40 * 17.9 / (20.9 - o2) for o2 in (2.0, 5.0, 11.0)]
    from_means = 40 * 17.9 / (20.9 - 6.0)
    assert value(outcome, "average.nox.at_reference") == pytest.approx(sum(each) / 3, rel=1e-12)
    assert value(outcome, "average.nox.at_reference.from_means") == pytest.approx(from_means, rel=1e-12)
    apart = 100 * (from_means - sum(each) / 3) / (sum(each) / 3)
    assert value(outcome, "average.nox.at_reference.order_difference") == pytest.approx(apart, rel=1e-9)
    found = next(p for p in outcome.problems if p.code == "order-of-averaging")
    assert f"{apart:+.2f} %" in found.found


def test_a_small_difference_of_order_is_kept_but_not_said() -> None:
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"))
    outcome = _runs_of(40.0, 40.0, 40.0, o2=in_run((4.9, 5.0, 5.1)), limits=(at_3,))
    assert abs(value(outcome, "average.nox.at_reference.order_difference")) < 0.01
    assert "order-of-averaging" not in codes(outcome)


def test_the_inputs_are_averaged_over_the_runs_of_the_result() -> None:
    """Run 3 has no valid NOx; its oxygen of 15 % must not enter the mean of inputs."""
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"), runs_required=number(2.0))
    values = {"NOx": 40.0, "CO": 10.0, "O2": in_run((5.0, 5.0, 15.0)), "CO2": in_run((9.0, 9.0, 3.4))}
    made = record(readings=readings(values), limits=(at_3,))
    rows = tuple(row for row in made.calibrations if row.channel.value != "NOx" or row.time.value.hour != 10)
    outcome = assess(replace(made, calibrations=rows))
    assert not is_valid(outcome, "3")
    assert value(outcome, "average.nox.at_reference.order_difference") == pytest.approx(0.0, abs=1e-9)


# ---- runs required, approvals, exclusions --------------------------------------------------------------------------


def _two_of_three(**of_limit: Any) -> Outcome:
    made = record(limits=(limit(**of_limit),))
    return assess(rerun(made, "3", excluded_because="load fell to half"))


def test_three_runs_unless_entered() -> None:
    outcome = _two_of_three()
    found = comparison(outcome)
    assert found.is_met is None
    assert found.reason == "2 valid run(s) of 3 required"
    assert "too-few-valid-runs" in codes(outcome)
    assert value(outcome, found.value) == pytest.approx(40.0, rel=1e-12)


def test_runs_required_as_entered() -> None:
    assert comparison(_two_of_three(runs_required=number(2.0))).is_met is True


def test_an_approval_lets_fewer_runs_stand() -> None:
    made = rerun(record(limits=(limit(),)), "3", excluded_because="load fell to half", approval_reference="letter 7")
    outcome = assess(made)
    assert comparison(outcome).is_met is True
    assert any("fewer runs as approved: letter 7" in note for note in comparison(outcome).notes)
    assert "too-few-valid-runs" not in codes(outcome)


def test_an_excluded_run_is_shown_with_and_without() -> None:
    values = {"NOx": in_run((30.0, 40.0, 65.0)), "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    made = record(readings=readings(values), limits=(limit(runs_required=number(2.0)),))
    outcome = assess(rerun(made, "3", excluded_because="load fell to half"))
    found = comparison(outcome)
    assert value(outcome, found.value) == pytest.approx(35.0, rel=1e-12)
    assert value(outcome, found.with_excluded) == pytest.approx(45.0, rel=1e-12)
    assert [outcome.run(name).state for name in "123"] == [RunState.VALID, RunState.VALID, RunState.EXCLUDED]
    assert outcome.run("3").reasons[0] == "load fell to half"
    assert is_valid(outcome, "3")
    assert [outcome.ledger[flag].value for _, _, flag in found.runs] == [1.0, 1.0, 0.0]


def test_a_blank_reason_excludes_nothing() -> None:
    outcome = assess(rerun(record(limits=(limit(),)), "3", excluded_because="  "))
    assert outcome.run("3").state is RunState.VALID
    assert comparison(outcome).with_excluded == ""


def test_all_runs_excluded() -> None:
    outcome = assessed(runs=runs(excluded_because="not representative"), limits=(limit(),))
    assert comparison(outcome).is_met is None
    assert comparison(outcome).reason == "no valid run has this result"


# ---- minimum run length --------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("minutes", "count"), [(30.0, 3), (30.1, 0)])
def test_minimum_run_length(minutes: float, count: int) -> None:
    """The runs are 30 min long."""
    outcome = assessed(limits=(limit(minimum_run_length=number(minutes, "min")),))
    assert (comparison(outcome).is_met is True) == (count == 3)
    assert value(outcome, "run.1.nox.long_enough.limit_l1") == float(count == 3)


def test_a_short_run_is_named() -> None:
    made = record(runs=(*runs()[:2], run("3", "10:00", "10:25")), limits=(limit(minimum_run_length=number(0.5, "h")),))
    outcome = assess(made)
    assert comparison(outcome).reason == "2 valid run(s) of 3 required"
    assert "run 3 has 25 min with valid readings; the limit asks for 30 min" in comparison(outcome).notes


@pytest.mark.parametrize("order", [("A", "B"), ("B", "A")])
def test_limits_with_and_without_a_length_do_not_share_an_average(order: tuple[str, str]) -> None:
    """Run 3 is short: A asks for 30 min and averages 30 and 40 ppm, B asks for nothing and averages all."""
    asks = {"A": {"minimum_run_length": number(30.0, "min"), "runs_required": number(2.0)}, "B": {}}
    limits = tuple(limit(name, **asks[name]) for name in order)
    values = {"NOx": in_run((30.0, 40.0, 65.0)), "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    made = record(runs=(*runs()[:2], run("3", "10:00", "10:25")), readings=readings(values), limits=limits)
    outcome = assess(made)
    assert value(outcome, comparison(outcome, "a").value) == pytest.approx(35.0, rel=1e-12)
    assert value(outcome, comparison(outcome, "b").value) == pytest.approx(45.0, rel=1e-12)


# ---- source, dates -------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("fields", "words"),
    [
        ({"citation": None}, "no citation is entered"),
        ({"authority": None}, "no authority is entered"),
        ({"authority": None, "citation": ""}, "no authority and no citation"),
    ],
)
def test_without_a_source_nothing_is_compared(fields: dict[str, Any], words: str) -> None:
    outcome = _average(40.0, **fields)
    found = comparison(outcome)
    assert found.is_met is None
    assert words in found.reason
    assert "no-citation" in codes(outcome)
    for ending in ("met", "margin", "percent"):
        assert f"comparison.l1.{ending}" not in outcome.ledger
    assert value(outcome, found.value) == pytest.approx(40.0, rel=1e-12)
    assert (found.met, found.margin) == ("", "")


@pytest.mark.parametrize(
    ("start", "end", "in_force"),
    [
        (DAY, None, True),
        (DAY + timedelta(days=1), None, False),
        (date(2020, 1, 1), DAY, True),
        (date(2020, 1, 1), DAY - timedelta(days=1), False),
    ],
)
def test_in_force_on_the_day_of_the_test(start: date, end: date | None, in_force: bool) -> None:
    outcome = _average(40.0, in_force_from=start, in_force_until=end)
    assert (comparison(outcome).is_met is True) == in_force
    assert ("limit-not-in-force" in codes(outcome)) != in_force
    assert ("comparison.l1.met" in outcome.ledger) == in_force


def test_a_limit_that_ends_within_the_test_days_is_not_in_force_throughout() -> None:
    test = identity(last_test_day=DAY + timedelta(days=1))
    outcome = assessed(test=test, limits=(limit(in_force_until=DAY),))
    assert comparison(outcome).is_met is None


def test_an_effective_date_missing_is_compared_and_said() -> None:
    outcome = _average(40.0, in_force_from=None)
    assert comparison(outcome).is_met is True
    assert "effective-date-missing" in codes(outcome)
    assert "no date from which the limit is in force was entered" in comparison(outcome).notes


def test_a_decision_rule_is_shown_beside_the_plain_comparison() -> None:
    outcome = _average(40.0, decision_rule="mean less expanded uncertainty")
    assert any("mean less expanded uncertainty; the plain comparison" in note for note in comparison(outcome).notes)


# ---- pollutants and units ------------------------------------------------------------------------------------------


def test_a_pollutant_nobody_measured_is_listed_with_its_reason() -> None:
    outcome = assessed(limits=(limit("A"), limit("B", "SO2"), limit("C", "CO")))
    assert [c.limit.limit_id.value for c in outcome.comparisons] == ["A", "B", "C"]
    assert comparison(outcome, "b").is_met is None
    assert comparison(outcome, "b").reason == "no channel measures SO2"
    assert "pollutant-missing" in codes(outcome)


def test_a_limit_in_percent_of_a_gas_in_ppm() -> None:
    outcome = assessed(limits=(limit(pollutant="CO", value=0.002, unit="%"),))
    assert value(outcome, comparison(outcome).value) == pytest.approx(0.001, rel=1e-12)
    assert comparison(outcome).is_met is True


def test_a_unit_that_says_its_basis_needs_no_column() -> None:
    outcome = assessed(limits=(limit(unit="ppmvd", moisture_basis=None),))
    assert comparison(outcome).is_met is True


def test_two_limits_on_one_basis_share_one_result_whatever_else_they_say() -> None:
    """Diluent and factor table mean nothing to a plain concentration."""
    limits = (limit("A"), limit("B", diluent="CO2"), limit("C", factor_table="40 CFR 60.45(f)"))
    outcome = assessed(limits=limits, fuels=(fuel(),))
    assert [c.quantity for c in outcome.comparisons] == ["nox.dry"] * 3
    assert [c.is_met for c in outcome.comparisons] == [True] * 3


def test_the_first_of_two_channels_is_compared_and_said() -> None:
    channels = (*(channel(name) for name in ("NOx", "CO", "O2", "CO2")), channel("NOx B", gas="nox"))
    values = {"NOx": 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0, "NOx B": 60.0}
    second = tuple(replace(row, channel=Given("NOx B")) for row in calibrations() if row.channel.value == "NOx")
    outcome = assessed(
        channels=channels, readings=readings(values), calibrations=(*calibrations(), *second), limits=(limit(),)
    )
    assert value(outcome, comparison(outcome).value) == pytest.approx(40.0, rel=1e-12)
    assert said(outcome, "Limit L1: NOx, NOx B measure NOx; NOx is compared")


# ---- groups --------------------------------------------------------------------------------------------------------


def _grouped(*limits: Any) -> Outcome:
    """Runs 1 and 2 of group high load (30, 40 ppm), run 3 of group low load (65 ppm)."""
    values = {"NOx": in_run((30.0, 40.0, 65.0)), "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    made = tuple(replace(r, group=Given("low load" if r.run.value == "3" else "high load")) for r in runs())
    return assessed(readings=readings(values), runs=made, limits=limits)


def test_runs_of_different_groups_are_never_averaged_together() -> None:
    outcome = _grouped()
    assert "average.nox.dry" not in outcome.ledger
    assert value(outcome, "average.nox.dry.group_high_load") == pytest.approx(35.0, rel=1e-12)
    assert value(outcome, "average.nox.dry.group_low_load") == pytest.approx(65.0, rel=1e-12)


def test_a_limit_is_about_the_group_it_names() -> None:
    high = limit("A", applies_when="high load, gas", runs_required=number(2.0))
    low = limit("B", applies_when="Low load", runs_required=number(1.0))
    outcome = _grouped(high, low)
    assert value(outcome, comparison(outcome, "a").value) == pytest.approx(35.0, rel=1e-12)
    assert value(outcome, comparison(outcome, "b").value) == pytest.approx(65.0, rel=1e-12)
    assert [name for name, _, _ in comparison(outcome, "b").runs] == ["3"]


@pytest.mark.parametrize("words", [None, "always", "high load and low load"])
def test_a_limit_that_names_no_group_or_two_is_not_compared(words: str | None) -> None:
    outcome = _grouped(limit(applies_when=words))
    assert comparison(outcome).is_met is None
    assert "the runs are of several groups" in comparison(outcome).reason


def test_one_group_alone_is_no_question() -> None:
    made = tuple(replace(r, group=Given("B")) for r in runs())
    outcome = assessed(runs=made, limits=(limit(),))
    assert comparison(outcome).is_met is True
    assert "average.nox.dry" in outcome.ledger
