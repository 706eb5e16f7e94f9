"""Method 7E and its family: calibration error, bias, drift and their alternatives, span, corrected means, papers.

Equations and bounds: 40 CFR 60 appendix A-4, Method 7E, 12.2 to 12.8 and 13.1 to 13.5; the arithmetic of each
expected number stands beside it.  Spans: NOx 100 ppm, CO 50 ppm, O2 and CO2 20 %.
"""

from __future__ import annotations

from dataclasses import replace
from datetime import date

import pytest

from reporter.outcome import Check, Outcome
from reporter.record import Given, Record, SamplingSystem
from tests.record_factory import (
    added,
    assess,
    at,
    calibration,
    calibrations,
    channel,
    codes,
    cylinder,
    cylinders,
    is_valid,
    number,
    readings,
    recalibrated,
    record,
    run,
    said,
    value,
    without_calibrations,
)


def _check(outcome: Outcome, words: str) -> Check:
    return next(check for check in outcome.checks if words in check.title)


def _drifted(low_pre: float, low_post: float, up_pre: float, up_post: float) -> Outcome:
    """Run 1 of NOx with these system readings of zero and 50 ppm gas."""
    made = record()
    for clock, reading in (("07:50", low_pre), ("08:40", low_post), ("07:52", up_pre), ("08:42", up_post)):
        if reading not in (0.0, 50.0) or (reading == 50.0) is not (clock[-1] == "2"):
            made = recalibrated(made, clock, "NOx", reading)
    return assess(made)


# ---- corrected means ------------------------------------------------------------------------------------------


def test_the_run_mean_is_corrected_with_the_mean_of_the_checks_around_it() -> None:
    """7E-5b: C_O = (0.4 + 0.8)/2 = 0.6, C_M = (49.0 + 48.6)/2 = 48.8; (40 - 0.6) 50/(48.8 - 0.6)."""
    outcome = _drifted(0.4, 0.8, 49.0, 48.6)
    assert value(outcome, "run.1.nox.zero") == pytest.approx(0.6, rel=1e-14)
    assert value(outcome, "run.1.nox.upscale") == pytest.approx(48.8, rel=1e-14)
    assert value(outcome, "run.1.nox.corrected") == pytest.approx(39.4 * 50 / 48.2, rel=1e-14)


def test_one_check_closes_a_run_and_opens_the_next() -> None:
    """Run 2: zero (0.8 + 0)/2 and upscale (48.6 + 50)/2: (40 - 0.4) 50/(49.3 - 0.4)."""
    outcome = _drifted(0.4, 0.8, 49.0, 48.6)
    assert value(outcome, "run.2.nox.corrected") == pytest.approx(39.6 * 50 / 48.9, rel=1e-14)
    assert value(outcome, "run.3.nox.corrected") == pytest.approx(40.0, rel=1e-14)


def _with_low_gas(certified: float, reading: float, level: str = "low") -> Record:
    """NOx with a low-level gas in place of the zero gas everywhere."""
    made = record()
    rows = tuple(
        replace(row, level=calibration("07:00", "NOx", "direct", level, 0).level, reading=number(reading))
        if row.channel.value == "NOx" and row.level.value.value == "zero"
        else row
        for row in made.calibrations
    )
    bottles = tuple(
        replace(c, certified_value=number(certified), kind=None, expires=Given(date(2026, 1, 1)))
        if c.cylinder.value == "NOx-zero"
        else c
        for c in made.cylinders
    )
    return replace(made, calibrations=rows, cylinders=bottles)


@pytest.mark.parametrize("level", ["low", "zero"])
def test_a_low_gas_that_is_not_zero_takes_7e_5a(level: str) -> None:
    """7E-5a: C_OA = 10, C_O = 10.3, C_M = 50, C_MA = 50: (40 - 50)(50 - 10)/(50 - 10.3) + 50; 7E-5b would differ."""
    outcome = assess(_with_low_gas(10.0, 10.3, level))
    assert value(outcome, "run.1.nox.corrected") == pytest.approx(-10 * 40 / 39.7 + 50, rel=1e-14)
    by_5b = (40 - 10.3) * 50 / (50 - 10.3)
    assert value(outcome, "run.1.nox.corrected") != pytest.approx(by_5b, rel=1e-3)


def test_the_upscale_gas_nearer_to_the_run_mean_is_used() -> None:
    """Mean 40: of 50 and 100 ppm the mid gas is nearer; mean 90: the high gas.  C_M of the high gas is 99."""
    high = [calibration(clock, "NOx", "system", "high", 99.0) for clock in ("07:54", "08:44")]
    made = added(record(), *high)
    assert value(assess(made), "run.1.nox.corrected") == pytest.approx(40.0, rel=1e-14)
    values = {"NOx": 90.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assess(replace(made, readings=readings(values)))
    assert value(outcome, "run.1.nox.corrected") == pytest.approx(90 * 100 / 99, rel=1e-14)


def test_upscale_gases_that_differ_before_and_after_are_not_averaged() -> None:
    made = without_calibrations(record(), "NOx", "08:42")
    made = added(made, calibration("08:42", "NOx", "system", "high", 100.0))
    outcome = assess(made)
    assert "run.1.nox.corrected" not in outcome.ledger
    assert not is_valid(outcome, "1")
    assert any("are not the same" in reason for reason in outcome.run("1").gas("nox").reasons)  # type: ignore[union-attr]


def test_low_gases_that_differ_before_and_after_are_not_averaged() -> None:
    made = without_calibrations(record(), "NOx", "08:40")
    made = replace(made, cylinders=(*made.cylinders, cylinder("NOx-low", "nox", 10.0, "ppm")))
    made = added(made, calibration("08:40", "NOx", "system", "low", 10.0))
    outcome = assess(made)
    assert "run.1.nox.corrected" not in outcome.ledger
    assert not is_valid(outcome, "1")


# ---- span ------------------------------------------------------------------------------------------------------


def test_the_span_is_the_high_gas_and_a_different_entry_is_a_finding() -> None:
    channels = (channel("NOx", calibration_span=number(90.0)), *(channel(name) for name in ("CO", "O2", "CO2")))
    outcome = assess(record(channels=channels))
    found = [p.found for p in outcome.problems if p.code == "span-differs"]
    assert found == ["NOx: entered 90, high-level gas 100 ppm"]
    assert is_valid(outcome, "1")


def test_without_a_whole_set_there_is_no_span_and_no_valid_run() -> None:
    outcome = assess(without_calibrations(record(), "NOx", "07:02"))
    assert codes(outcome).count("span-missing") == 3
    assert not any(is_valid(outcome, name) for name in "123")
    assert is_valid(outcome, "1", "o2")


def test_a_high_gas_certified_as_zero_gives_no_span() -> None:
    bottles = tuple(
        replace(c, certified_value=number(0.0)) if c.cylinder.value == "NOx-high" else c for c in cylinders()
    )
    outcome = assess(record(cylinders=bottles))
    assert "span-missing" in codes(outcome)
    assert not is_valid(outcome, "1")


def test_a_set_after_the_run_began_is_late() -> None:
    rows = tuple(
        replace(row, time=replace(row.time, value=at("08:10")))
        if row.channel.value == "NOx" and row.route.value.value == "direct"
        else row
        for row in calibrations()
    )
    outcome = assess(record(calibrations=rows))
    assert "calibration-late" in codes(outcome)
    assert not is_valid(outcome, "1")


def test_a_run_mean_above_span_makes_the_run_invalid() -> None:
    """Method 7E, 3.4: the raw mean counts; equal to the span is not above it."""
    for mean, met in ((100.0, True), (100.001, False)):
        values = {"NOx": mean, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
        outcome = assess(record(readings=readings(values)))
        assert is_valid(outcome, "1") == met
        assert ("run-mean-above-span" in codes(outcome)) != met
        assert value(outcome, "run.1.nox.within_span") == float(met)


# ---- calibration error ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("reading", "met"), [(52.0, True), (52.0001, False), (48.0, True), (47.9999, False), (50.49, True)]
)
def test_calibration_error_bound(reading: float, met: bool) -> None:
    """7E-1: 100 (reading - 50)/100, bound 2.0 % of span (13.1)."""
    made = recalibrated(record(), "07:01", "NOx", reading)
    outcome = assess(made)
    assert value(outcome, "calibration.nox.direct_2.error") == pytest.approx(reading - 50.0, rel=1e-9)
    assert _check(outcome, "Analyzer calibration error, mid gas").met == met
    assert value(outcome, "calibration.nox.set_1.accepted") == float(met)
    assert is_valid(outcome, "1") == met
    if not met:
        reasons = outcome.run("1").gas("nox").reasons  # type: ignore[union-attr]
        assert "the latest calibration error test is not met" in reasons


def _small_span(reading: float) -> Outcome:
    """CO with a span of 10 ppm (mid 5): the share of span is 10 (reading - 5) %, the alternative 0.5 ppm."""
    made = record()
    scaled = tuple(
        replace(row, reading=number(row.reading.value / 5.0)) if row.channel.value == "CO" else row
        for row in made.calibrations
    )
    bottles = tuple(
        replace(c, certified_value=number(c.certified_value.value / 5.0)) if c.gas.value == "co" else c
        for c in made.cylinders
    )
    made = replace(made, calibrations=scaled, cylinders=bottles)
    made = replace(made, readings=readings({"NOx": 40.0, "CO": 4.0, "O2": 5.0, "CO2": 9.0}))
    return assess(recalibrated(made, "07:01", "CO", reading))


@pytest.mark.parametrize(("reading", "met"), [(5.5, True), (5.501, False), (4.5, True), (4.499, False)])
def test_calibration_error_alternative(reading: float, met: bool) -> None:
    """5.5 ppm of 5 ppm: 5 % of the 10 ppm span, but 0.5 ppm apart (13.1): met; 5.501 ppm: neither."""
    outcome = _small_span(reading)
    assert value(outcome, "calibration.co.direct_2.error") == pytest.approx(10 * (reading - 5), rel=1e-9)
    assert value(outcome, "calibration.co.direct_2.met") == float(met)
    assert is_valid(outcome, "1", "co") == met


@pytest.mark.parametrize(("reading", "met"), [(10.5, True), (10.501, False)])
def test_the_alternative_of_a_diluent_is_half_a_percent(reading: float, met: bool) -> None:
    """Method 3A: O2 of 10 % read as 10.5 %: 2.5 % of span, but 0.5 % O2 apart: met."""
    outcome = assess(recalibrated(record(), "07:01", "O2", reading))
    assert value(outcome, "calibration.o2.direct_2.error") == pytest.approx(100 * (reading - 10) / 20, rel=1e-9)
    assert value(outcome, "calibration.o2.direct_2.met") == float(met)


# ---- bias ------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("reading", "met"), [(55.0, True), (55.001, False), (45.0, True), (44.999, False)])
def test_bias_bound(reading: float, met: bool) -> None:
    """7E-2: 100 (reading - 50)/100, bound 5.0 % of span (13.2)."""
    outcome = assess(recalibrated(record(), "07:52", "NOx", reading))
    assert value(outcome, "calibration.nox.system_2.bias") == pytest.approx(reading - 50, rel=1e-9)
    assert _check(outcome, "System bias, upscale gas, before run 1").met == met
    assert is_valid(outcome, "1") == met


def test_bias_is_against_the_direct_reading_not_the_certificate() -> None:
    """Direct 51 (1 % of span: accepted); system 56: 5 % of span against 51, 6 % against the certified 50."""
    made = recalibrated(recalibrated(record(), "07:01", "NOx", 51.0), "07:52", "NOx", 56.0)
    outcome = assess(made)
    assert value(outcome, "calibration.nox.system_2.bias") == pytest.approx(5.0, rel=1e-12)
    assert _check(outcome, "System bias, upscale gas, before run 1").met


def test_bias_is_against_the_latest_accepted_direct_reading_of_the_cylinder() -> None:
    """A lone direct reading of 51 at 08:50 is accepted (1 % of span) and serves the checks after it."""
    made = added(record(), calibration("08:50", "NOx", "direct", "mid", 51.0))
    outcome = assess(made)
    assert value(outcome, "calibration.nox.system_4.bias") == 0.0
    assert value(outcome, "calibration.nox.system_6.bias") == pytest.approx(-1.0, rel=1e-12)


def test_a_direct_reading_that_is_not_accepted_serves_no_bias() -> None:
    """53 of 50 ppm is 3 % of span: not met (13.1); the reading of 07:01 stays the reference."""
    made = added(record(), calibration("08:50", "NOx", "direct", "mid", 53.0))
    outcome = assess(made)
    assert value(outcome, "calibration.nox.system_6.bias") == 0.0


def test_a_check_whose_bias_cannot_be_stated_makes_the_run_invalid() -> None:
    """The mid gas of the checks was never read directly: nothing says that the bias is met."""
    made = record()
    rows = tuple(
        replace(row, cylinder=Given("NOx-other"))
        if row.channel.value == "NOx" and row.route.value.value == "system" and row.level.value.value == "mid"
        else row
        for row in made.calibrations
    )
    made = replace(made, calibrations=rows, cylinders=(*made.cylinders, cylinder("NOx-other", "nox", 52.0, "ppm")))
    outcome = assess(made)
    assert not is_valid(outcome, "1")
    assert "calibration-missing" in codes(outcome)
    reasons = outcome.run("1").gas("nox").reasons  # type: ignore[union-attr]
    assert any("no accepted direct reading of the upscale gas before the run" in reason for reason in reasons)


@pytest.mark.parametrize(("reading", "met"), [(1.0, True), (1.01, False), (-1.0, True)])
def test_zero_bias_of_a_percent_channel(reading: float, met: bool) -> None:
    """O2 zero: 5 % of the 20 % span is 1.0 %, above the alternative of 0.5 %."""
    outcome = assess(recalibrated(record(), "08:40", "O2", reading))
    assert is_valid(outcome, "1", "o2") == met


# ---- drift -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("after", "met"), [(48.0, True), (47.999, False)])
def test_drift_bound(after: float, met: bool) -> None:
    """7E-4: bias +1 % before, after - 50 % after; |after - 51| against 3.0 % of span (13.3)."""
    outcome = _drifted(0.0, 0.0, 51.0, after)
    assert value(outcome, "run.1.nox.drift.upscale") == pytest.approx(51 - after, rel=1e-9)
    assert _check(outcome, "Drift, upscale gas, run 1").met == met
    assert is_valid(outcome, "1")


@pytest.mark.parametrize(("after", "met"), [(0.5, True), (0.51, False)])
def test_drift_alternative(after: float, met: bool) -> None:
    """CO with a span of 10 ppm: 0.5 ppm is 5 % of span, met by the alternative alone (13.3)."""
    made = record()
    scaled = tuple(
        replace(row, reading=number(row.reading.value / 5.0)) if row.channel.value == "CO" else row
        for row in made.calibrations
    )
    bottles = tuple(
        replace(c, certified_value=number(c.certified_value.value / 5.0)) if c.gas.value == "co" else c
        for c in made.cylinders
    )
    made = replace(made, calibrations=scaled, cylinders=bottles)
    outcome = assess(recalibrated(made, "08:40", "CO", after))
    assert value(outcome, "run.1.co.drift.zero") == pytest.approx(10 * after, rel=1e-9)
    assert value(outcome, "run.1.co.drift.zero.met") == float(met)


def test_the_criteria_cite_their_paragraphs() -> None:
    outcome = assess(record())
    paragraphs = {
        "Analyzer calibration error": "13.1",
        "System bias": "13.2",
        "Drift": "13.3",
        "Run mean against": "3.4",
    }
    for words, paragraph in paragraphs.items():
        assert _check(outcome, words).citation.section == paragraph
        assert _check(outcome, words).citation.document == "m7e"


# ---- units of channels ----------------------------------------------------------------------------------------


def _carbon_monoxide_in_percent(direct: float) -> Outcome:
    """CO in percent, span 1 %, read as 0.4 %."""
    names = ("NOx", "CO", "O2", "CO2")
    channels = tuple(channel(name, unit="%" if name == "CO" else "") for name in names)
    rows = tuple(
        replace(row, reading=number(row.reading.value / 50.0)) if row.channel.value == "CO" else row
        for row in calibrations()
    )
    bottles = tuple(
        replace(c, certified_value=number(c.certified_value.value / 50.0), unit=cylinder("x", "co", 1, "%").unit)
        if c.gas.value == "co"
        else c
        for c in cylinders()
    )
    values = {"NOx": 40.0, "CO": 0.4, "O2": 5.0, "CO2": 9.0}
    made = record(channels=channels, calibrations=rows, cylinders=bottles, readings=readings(values))
    return assess(recalibrated(made, "07:01", "CO", direct) if direct != 0.5 else made)


def test_carbon_monoxide_in_percent_becomes_ppm() -> None:
    outcome = _carbon_monoxide_in_percent(0.5)
    assert value(outcome, "run.1.co.corrected") == pytest.approx(0.4, rel=1e-12)
    assert outcome.ledger["run.1.co.dry"].unit == "ppm"
    assert value(outcome, "run.1.co.dry") == pytest.approx(4000.0, rel=1e-12)


def test_the_half_ppm_alternative_is_not_half_a_percent() -> None:
    """0.9 % read for 0.5 %: 40 % of span, 4000 ppm apart: met by neither."""
    outcome = _carbon_monoxide_in_percent(0.9)
    assert value(outcome, "criterion.co.calibration_error.alternative") == pytest.approx(0.00005, rel=1e-12)
    assert not is_valid(outcome, "1", "co")


def test_a_certificate_in_another_unit_is_converted() -> None:
    """A CO2 cylinder certified as 100 000 ppm is the 10 % of the channel."""
    bottles = tuple(
        replace(c, certified_value=number(100_000.0), unit=cylinder("x", "co2", 1, "ppm").unit)
        if c.cylinder.value == "CO2-mid"
        else c
        for c in cylinders()
    )
    outcome = assess(record(cylinders=bottles))
    assert value(outcome, "cylinder.co2_mid.co2.certified") == pytest.approx(10.0, rel=1e-12)
    assert is_valid(outcome, "1", "co2")
    assert "certificate-differs" not in codes(outcome)


def test_a_channel_in_mass_per_volume() -> None:
    """NOx in mg/m3 at 273.15 K, cylinders in ppm: 50 ppm NO2 = 50 x 46.005 x 101.325/(8.314462618 x 273.15) mg/m3."""
    per_ppm = 46.005 * 101.325 / (8.314462618 * 273.15)
    channels = (channel("NOx", unit="mg/Nm3"), *(channel(name) for name in ("CO", "O2", "CO2")))
    rows = tuple(
        replace(row, reading=number(row.reading.value * per_ppm)) if row.channel.value == "NOx" else row
        for row in calibrations()
    )
    values = {"NOx": 40.0 * per_ppm, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    outcome = assess(record(channels=channels, calibrations=rows, readings=readings(values)))
    assert value(outcome, "cylinder.nox_mid.nox.certified") == pytest.approx(50 * per_ppm, rel=1e-12)
    assert value(outcome, "criterion.nox.system_bias.alternative") == pytest.approx(0.5 * per_ppm, rel=1e-12)
    assert value(outcome, "run.1.nox.dry") == pytest.approx(40.0, rel=1e-12)
    assert outcome.ledger["run.1.nox.corrected"].unit == "mg/m3"
    assert outcome.ledger["run.1.nox.dry"].unit == "ppm"
    assert is_valid(outcome, "1")
    assert said(outcome, "stated as NO2")


def test_a_mass_channel_without_conditions_says_what_is_taken() -> None:
    channels = (channel("NOx", unit="mg/m3"), *(channel(name) for name in ("CO", "O2", "CO2")))
    outcome = assess(record(channels=channels))
    assert "standard-conditions-assumed" in codes(outcome)


# ---- dilution -------------------------------------------------------------------------------------------------


def _dilution(mid: float = 0.5, mean: float = 0.4, factor: float | None = 100.0) -> Record:
    """NOx behind a dilution probe, factor 100, gases of 0, 50 and 100 ppm; every gas through the probe."""
    system = Given(SamplingSystem.DILUTION)
    ratio = None if factor is None else number(factor)
    channels = (channel("NOx", system=system, dilution_factor=ratio), *(channel(n) for n in ("CO", "O2", "CO2")))
    nox = [
        calibration("07:00", "NOx", "system", "zero", 0.0),
        calibration("07:01", "NOx", "system", "mid", mid),
        calibration("07:02", "NOx", "system", "high", 1.0),
    ]
    for clock, later in (("08:40", "08:42"), ("09:40", "09:42"), ("10:40", "10:42")):
        nox += [calibration(clock, "NOx", "system", "zero", 0.0), calibration(later, "NOx", "system", "mid", mid)]
    values = {"NOx": mean, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    return record(channels=channels, calibrations=(*nox, *calibrations(("CO", "O2", "CO2"))), readings=readings(values))


def test_a_dilution_system_is_held_to_7e_3_alone() -> None:
    """7E-3: 100 (0.505 x 100 - 50)/100 = 0.5 %; 7E-5b: 0.4 x 50/0.505."""
    outcome = assess(_dilution(mid=0.505))
    keys = [entry.key for entry in outcome.ledger if entry.key.startswith("calibration.nox")]
    assert not any(key.endswith(".bias") for key in keys)
    assert value(outcome, "calibration.nox.system_2.error") == pytest.approx(0.5, rel=1e-9)
    assert value(outcome, "run.1.nox.corrected") == pytest.approx(0.4 * 50 / 0.505, rel=1e-12)
    assert [is_valid(outcome, name) for name in "123"] == [True, True, True]
    assert "span-missing" not in codes(outcome)


@pytest.mark.parametrize(("mid", "met"), [(0.52, True), (0.5201, False)])
def test_dilution_calibration_error_bound(mid: float, met: bool) -> None:
    """100 (52 - 50)/100 = 2.0 % of span (13.1)."""
    outcome = assess(_dilution(mid=mid))
    assert is_valid(outcome, "1") == met


@pytest.mark.parametrize(("mean", "met"), [(1.0, True), (1.001, False)])
def test_the_span_of_a_dilution_system_is_of_the_undiluted_gas(mean: float, met: bool) -> None:
    """A mean of 1.0 ppm times 100 is the span of 100 ppm."""
    outcome = assess(_dilution(mean=mean))
    assert ("run-mean-above-span" in codes(outcome)) != met
    assert is_valid(outcome, "1") == met


def test_without_a_dilution_factor_the_readings_count_as_undiluted() -> None:
    outcome = assess(_dilution(factor=None))
    assert value(outcome, "channel.nox.dilution_factor") == 1.0
    assert not is_valid(outcome, "1")


# ---- methods and papers ---------------------------------------------------------------------------------------


def test_a_method_without_held_criteria_says_so_and_no_more() -> None:
    channels = (channel("NOx", method="Method 25A"), *(channel(name) for name in ("CO", "O2", "CO2")))
    outcome = assess(record(channels=channels))
    assert "no-criteria-held" in codes(outcome)
    assert not [check for check in outcome.checks if check.gas == "NOx"]
    assert "run.1.nox.corrected" not in outcome.ledger
    assert value(outcome, "run.1.nox.dry") == 40.0
    assert is_valid(outcome, "1")


def test_methods_not_entered_are_taken_by_gas_and_said() -> None:
    outcome = assess(record())
    assert said(outcome, "No method was entered for NOx; Method 7E is taken")
    assert said(outcome, "No method was entered for CO2; Method 3A is taken")


def _bottle(name: str, **changes: object) -> tuple[object, ...]:
    return tuple(replace(c, **changes) if c.cylinder.value == name else c for c in cylinders())  # type: ignore[arg-type]


def test_an_expired_cylinder_blocks_the_runs_it_bears() -> None:
    outcome = assess(record(cylinders=_bottle("NOx-mid", expires=Given(date(2025, 3, 13)))))
    assert "cylinder-expired" in codes(outcome)
    assert not any(is_valid(outcome, name) for name in "123")
    assert is_valid(outcome, "1", "co")
    last_day = assess(record(cylinders=_bottle("NOx-mid", expires=Given(date(2025, 3, 14)))))
    assert "cylinder-expired" not in codes(last_day)


def test_a_protocol_gas_without_expiry_is_an_expired_one() -> None:
    outcome = assess(record(cylinders=_bottle("NOx-high", expires=None)))
    assert "cylinder-expired" in codes(outcome)
    assert not is_valid(outcome, "1")


def test_a_certificate_and_a_typed_value_that_differ() -> None:
    rows = tuple(
        replace(row, certified_value=number(52.0)) if row.time.value == at("07:01") else row for row in calibrations()
    )
    outcome = assess(record(calibrations=rows))
    found = next(p for p in outcome.problems if p.code == "certificate-differs")
    assert found.found == "typed 52 ppm, certificate 50 ppm"
    assert value(outcome, "cylinder.nox_mid.nox.certified") == 50.0
    assert not is_valid(outcome, "1")


def test_a_certificate_missing() -> None:
    bottles = tuple(c for c in cylinders() if c.cylinder.value != "NOx-mid")
    outcome = assess(record(cylinders=bottles))
    assert "certificate-missing" in codes(outcome)
    assert not is_valid(outcome, "1")


def test_typed_values_without_a_cylinder_stay_apart() -> None:
    """Two mid gases typed as 50 and 60 ppm are two gases, whatever their level is called."""
    made = record()
    rows = tuple(
        replace(row, cylinder=None, certified_value=number(60.0 if row.time.value > at("08:00") else row.reading.value))
        if row.channel.value == "NOx" and row.level.value.value == "mid"
        else row
        for row in made.calibrations
    )
    outcome = assess(replace(made, calibrations=rows))
    assert value(outcome, "cylinder.mid.nox.certified") == 50.0
    assert value(outcome, "cylinder.mid.nox.certified.typed_2") == 60.0
    assert "run.1.nox.corrected" not in outcome.ledger


def test_a_zero_gas_needs_no_certificate() -> None:
    bottles = tuple(c for c in cylinders() if c.cylinder.value != "NOx-zero")
    outcome = assess(record(cylinders=bottles))
    assert is_valid(outcome, "1")
    assert value(outcome, "cylinder.nox_zero.nox.certified") == 0.0


# ---- converter ------------------------------------------------------------------------------------------------


def _converter(reading: float | None, *, expires: date = date(2026, 1, 1)) -> Outcome:
    made = record()
    if reading is None:
        return assess(made)
    bottle = cylinder("NO2-1", "no2", 20.0, "ppm", expires=expires)
    made = replace(made, cylinders=(*made.cylinders, bottle))
    return assess(added(made, calibration("07:20", "NOx", "direct", "NO2", reading, bottle="NO2-1")))


@pytest.mark.parametrize(("reading", "met"), [(18.0, True), (17.999, False), (20.4, True)])
def test_converter_efficiency(reading: float, met: bool) -> None:
    """7E-7: 100 reading/20, at least 90 % (13.5); it decides no run."""
    outcome = _converter(reading)
    assert value(outcome, "calibration.nox.converter_1.converter_efficiency") == pytest.approx(5 * reading, rel=1e-12)
    check = _check(outcome, "NO2 converter efficiency")
    assert (check.met, check.relation, check.citation.section) == (met, "at least", "13.5")
    assert is_valid(outcome, "1")
    assert "converter-missing" not in codes(outcome)


def test_no_converter_reading_is_a_note() -> None:
    assert "converter-missing" in codes(_converter(None))


def test_an_expired_no2_cylinder_is_said() -> None:
    assert "cylinder-expired" in codes(_converter(19.0, expires=date(2024, 1, 1)))


def test_no_response_time_is_a_note() -> None:
    channels = (channel("NOx", response_time_up=None), *(channel(name) for name in ("CO", "O2", "CO2")))
    outcome = assess(record(channels=channels))
    assert [p.found for p in outcome.problems if p.code == "response-time-missing"] == ["NOx"]


# ---- two channels of one gas ----------------------------------------------------------------------------------


def test_two_channels_of_one_gas_have_keys_of_their_own() -> None:
    channels = (*(channel(name) for name in ("NOx", "CO", "O2", "CO2")), channel("NOx B", gas="nox"))
    values = {"NOx": 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0, "NOx B": 44.0}
    second = tuple(replace(row, channel=Given("NOx B")) for row in calibrations() if row.channel.value == "NOx")
    outcome = assess(record(channels=channels, readings=readings(values), calibrations=(*calibrations(), *second)))
    assert value(outcome, "run.1.nox.dry") == pytest.approx(40.0, rel=1e-12)
    assert value(outcome, "run.1.nox_b.dry") == pytest.approx(44.0, rel=1e-12)
    assert is_valid(outcome, "1", "nox_b")


def test_a_channel_named_like_another_gas_is_not_taken_for_it() -> None:
    """The second NOx channel is called O2 by mistake: the oxygen is still that of the oxygen channel."""
    channels = (channel("NOx"), channel("O2", gas="nox", unit="ppm"), channel("Oxygen", gas="o2", unit="%"))
    values = {"NOx": 40.0, "O2": 44.0, "Oxygen": 5.0}
    outcome = assess(
        record(
            channels=channels,
            readings=readings(values),
            calibrations=calibrations(("NOx",)),
            runs=(run("1", "08:00", "08:30"),),
        )
    )
    gases = {gas.segment: gas.gas for gas in outcome.run("1").gases}
    assert gases == {"nox": "NOx", "nox_o2": "NOx", "o2": "O2"}
