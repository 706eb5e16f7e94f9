"""Oxygen and carbon dioxide together (Methods 3 and 3B): O2 5 %, CO2 9 %, CO 10 ppm, dry, unless said otherwise."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from reporter.outcome import Outcome
from tests.record_factory import (
    assessed,
    calibrations,
    channel,
    codes,
    cylinder,
    cylinders,
    fuel,
    number,
    readings,
    runs,
    value,
)


def _made(o2: float = 5.0, co2: float = 9.0, **more: Any) -> Outcome:
    values = {"NOx": 40.0, "CO": 10.0, "O2": o2, "CO2": co2}
    return assessed(**({"readings": readings(values), "fuels": (fuel(),)} | more))


def _with_percent_monoxide(percent: float) -> Outcome:
    """A CO channel in percent, span 2 %."""
    channels = tuple(channel(name, unit="%" if name == "CO" else "") for name in ("NOx", "CO", "O2", "CO2"))
    rows = tuple(
        replace(row, reading=number(row.reading.value / 25.0)) if row.channel.value == "CO" else row
        for row in calibrations()
    )
    bottles = tuple(
        cylinder(c.cylinder.value, "co", c.certified_value.value / 25.0, "%") if c.gas.value == "co" else c
        for c in cylinders()
    )
    values = {"NOx": 40.0, "CO": percent, "O2": 5.0, "CO2": 9.0}
    return assessed(channels=channels, calibrations=rows, cylinders=bottles, readings=readings(values), fuels=(fuel(),))


def test_nitrogen_and_molecular_weight() -> None:
    """Eq. 3-1: 0.440 x 9 + 0.320 x 5 + 0.280 (85.999 + 0.001); wet at 16 %: Md 0.84 + 18.0 x 0.16 (Method 2)."""
    outcome = _made(runs=runs(moisture=number(16.0, "%"), moisture_source="assumed"))
    assert value(outcome, "run.1.combustion.nitrogen") == pytest.approx(85.999, rel=1e-12)
    md = 0.44 * 9 + 0.32 * 5 + 0.28 * 86.0
    assert value(outcome, "run.1.combustion.molecular_weight_dry") == pytest.approx(md, rel=1e-12)
    assert value(outcome, "run.1.combustion.molecular_weight_wet") == pytest.approx(0.84 * md + 2.88, rel=1e-12)


def test_excess_air_by_gas_analysis() -> None:
    """Eq. 3B-1: 100 (5 - 0.0005)/(0.264 x 85.999 - 4.9995)."""
    outcome = _made()
    expected = 100 * 4.9995 / (0.264 * 85.999 - 4.9995)
    assert value(outcome, "run.1.combustion.excess_air.by_analysis") == pytest.approx(expected, rel=1e-12)


def test_the_fuel_factor_without_countable_monoxide() -> None:
    """Eq. 3B-2: (20.9 - 5)/9; 10 ppm CO is not measurable in percent (12.3.1)."""
    outcome = _made()
    assert value(outcome, "run.1.combustion.fuel_factor") == pytest.approx(15.9 / 9, rel=1e-12)
    assert value(outcome, "run.1.combustion.co_counted") == 0.0


@pytest.mark.parametrize(("percent", "counted"), [(0.4, 0.4), (0.1, 0.1), (0.09, 0.0)])
def test_the_fuel_factor_adjusted_for_monoxide(percent: float, counted: float) -> None:
    """Eqs. 3B-3 and 3B-4: O2 - 0.5 CO, CO2 + CO; CO counts from 0.1 % on (common practice)."""
    outcome = _with_percent_monoxide(percent)
    expected = (20.9 - (5 - 0.5 * counted)) / (9 + counted)
    assert value(outcome, "run.1.combustion.fuel_factor") == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("co2", "inside"), [(15.9 / 1.600, True), (15.9 / 1.599, False), (15.9 / 1.836, True), (15.9 / 1.837, False)]
)
def test_the_range_of_the_fuel(co2: float, inside: bool) -> None:
    """Table 3B-1, natural gas 1.600 to 1.836 (from memory), ends included; outside is a note, not a rejection."""
    outcome = _made(co2=co2)
    assert value(outcome, "run.1.combustion.fuel_factor.met") == float(inside)
    assert ("fuel-factor-out-of-range" in codes(outcome)) != inside
    assert all(gas.is_valid for gas in outcome.run("1").gases)


def test_a_fuel_name_with_capitals_has_its_range() -> None:
    outcome = _made(fuels=(fuel("Natural Gas"),))
    assert value(outcome, "fuel.natural_gas.fuel_factor.lowest") == 1.6


def test_without_carbon_dioxide_there_is_no_factor_and_no_complaint() -> None:
    names = ("NOx", "O2")
    outcome = assessed(
        channels=tuple(channel(name) for name in names),
        readings=readings({"NOx": 40.0, "O2": 5.0}),
        calibrations=calibrations(names),
        fuels=(fuel(),),
    )
    assert "run.1.combustion.fuel_factor" not in outcome.ledger
    assert not [code for code in codes(outcome) if code.startswith("diluent")]


@pytest.mark.parametrize("co2", [0.0, -0.1])
def test_no_carbon_dioxide_in_the_gas_breaks_nothing(co2: float) -> None:
    outcome = _made(o2=20.8, co2=co2)
    factor = outcome.ledger.get("run.1.combustion.fuel_factor")
    assert factor is None or factor.value < 0.0


def test_monoxide_not_measured_counts_as_none_and_says_so() -> None:
    names = ("NOx", "O2", "CO2")
    outcome = assessed(
        channels=tuple(channel(name) for name in names),
        readings=readings({"NOx": 40.0, "O2": 5.0, "CO2": 9.0}),
        calibrations=calibrations(names),
    )
    assert value(outcome, "run.1.combustion.nitrogen") == pytest.approx(86.0, rel=1e-12)
    assert value(outcome, "run.1.combustion.co_percent") == 0.0
