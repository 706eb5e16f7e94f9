"""Moisture by every source, and readings brought from wet to dry and back (Methods 4 and 7E)."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from reporter.outcome import Outcome
from tests.record_factory import (
    assess,
    assessed,
    channel,
    codes,
    component,
    fuel,
    identity,
    limit,
    number,
    readings,
    record,
    runs,
    said,
    train,
    value,
)

# 1 inHg = 3.386388640341 kPa (conventional).  Saturation pressure of water, kPa, from IAPWS-95 by way of the
# `chemicals` library: 60 °C 19.946, 25 °C 3.1699; the method's formula lies within 0.12 % of it.
KPA = 3.386388640341


def _wet_nox(**more: Any) -> Outcome:
    """NOx read wet, everything else dry."""
    channels = tuple(channel(name, wet=name == "NOx") for name in ("NOx", "CO", "O2", "CO2"))
    return assessed(channels=channels, **more)


# ---- entered ---------------------------------------------------------------------------------------------------


def test_moisture_as_entered() -> None:
    """7E-10: 40/(1 - 0.16) dry; CO 10 x (1 - 0.16) wet."""
    outcome = _wet_nox(runs=runs(moisture=number(16.0, "%"), moisture_source="wet and dry bulb"))
    assert value(outcome, "run.1.moisture") == pytest.approx(0.16, rel=1e-14)
    assert value(outcome, "run.1.nox.dry") == pytest.approx(40 / 0.84, rel=1e-14)
    assert value(outcome, "run.1.nox.wet") == 40.0
    assert value(outcome, "run.1.co.wet") == pytest.approx(8.4, rel=1e-14)
    assert outcome.ledger["run.1.nox.dry"].basis.text() == "dry"
    assert not said(outcome, "source of the moisture")


def test_a_source_not_entered_and_an_assumed_one_are_said() -> None:
    assert said(_wet_nox(runs=runs(moisture=number(16.0, "%"))), "the source of the moisture was not entered")
    outcome = _wet_nox(runs=runs(moisture=number(16.0, "%"), moisture_source="assumed"))
    assert said(outcome, "the moisture is assumed, not measured")


def test_moisture_as_a_fraction_in_its_header() -> None:
    outcome = _wet_nox(runs=runs(moisture=number(0.16, "fraction"), moisture_source="assumed"))
    assert value(outcome, "run.1.moisture.entered") == pytest.approx(16.0, rel=1e-14)
    assert value(outcome, "run.1.moisture") == pytest.approx(0.16, rel=1e-14)


def test_a_wet_reading_without_moisture_blocks_its_dry_value() -> None:
    outcome = _wet_nox()
    assert codes(outcome).count("moisture-missing") == 3
    assert "run.1.nox.dry" not in outcome.ledger
    assert value(outcome, "run.1.nox.wet") == 40.0


def test_dry_readings_need_no_moisture() -> None:
    outcome = assessed()
    assert "moisture-missing" not in codes(outcome)
    assert "run.1.nox.wet" not in outcome.ledger


@pytest.mark.parametrize("percent", [100.0, 0.0])
def test_the_ends_of_moisture(percent: float) -> None:
    """A gas of water alone has no dry part; zero moisture makes wet and dry one."""
    outcome = _wet_nox(runs=runs(moisture=number(percent, "%"), moisture_source="assumed"))
    if percent == 100.0:
        assert "run.1.nox.dry" not in outcome.ledger
        assert "moisture-missing" in codes(outcome)
    else:
        assert value(outcome, "run.1.nox.dry") == 40.0


# ---- Method 4 --------------------------------------------------------------------------------------------------


def _train(**more: Any) -> Any:
    usual = {
        "meter_volume_start": number(100.0, "ft3"),
        "meter_volume_end": number(130.0, "ft3"),
        "meter_factor": number(0.99),
        "meter_temperature": number(80.0, "°F"),
        "meter_pressure": number(29.5, "inHg"),
        "water_collected": number(90.0, "g"),
        "silica_gel_gain": number(8.0, "g"),
    }
    return train("1", **(usual | more))


def test_method_4_from_the_train() -> None:
    """Vm(std) = 17.64 x 0.99 x 30 x 29.5/(460 + 80); Vwc = 0.04716 x 90; Vwsg = 0.04716 x 8 (Method 4, 12.1)."""
    outcome = _wet_nox(moisture=(_train(),))
    gas = 17.64 * 0.99 * 30 * 29.5 / 540
    water = 0.04716 * 98
    assert value(outcome, "run.1.moisture.meter_volume_standard") == pytest.approx(gas, rel=1e-12)
    assert value(outcome, "run.1.moisture") == pytest.approx(water / (water + gas), rel=1e-12)
    assert value(outcome, "run.1.nox.dry") == pytest.approx(40 / (1 - water / (water + gas)), rel=1e-12)
    assert codes(outcome).count("moisture-missing") == 2


def test_water_by_volume_takes_the_constant_of_older_editions() -> None:
    """0.04707 ft3/mL x 90 mL + 0.04716 x 8."""
    outcome = _wet_nox(moisture=(_train(water_collected=number(90.0, "mL")),))
    gas = 17.64 * 0.99 * 30 * 29.5 / 540
    water = 0.04707 * 90 + 0.04716 * 8
    assert value(outcome, "run.1.moisture") == pytest.approx(water / (water + gas), rel=1e-12)


def test_method_4_in_si() -> None:
    """0.3858 K/mmHg = 0.3858/0.133322387415 K/kPa; 273 + 27; 0.001335 m3/g."""
    metric = _train(
        meter_volume_start=number(1.0, "m3"),
        meter_volume_end=number(1.85, "m3"),
        meter_temperature=number(27.0, "°C"),
        meter_pressure=number(100.0, "kPa"),
    )
    outcome = _wet_nox(test=identity(unit_system="SI"), moisture=(metric,))
    gas = 0.3858 / 0.133322387415 * 0.99 * 0.85 * 100.0 / 300
    water = 0.001335 * 98
    assert value(outcome, "run.1.moisture") == pytest.approx(water / (water + gas), rel=1e-9)


def test_the_train_wins_and_a_difference_is_said() -> None:
    near = _wet_nox(moisture=(_train(),), runs=runs(moisture=number(13.6, "%")))
    far = _wet_nox(moisture=(_train(),), runs=runs(moisture=number(13.0, "%")))
    assert value(near, "run.1.moisture") == value(far, "run.1.moisture")
    percent = 100 * value(near, "run.1.moisture")
    assert abs(percent - 13.6) < 0.5 < abs(percent - 13.0)
    assert not said(near, "differs from that of the train")
    assert said(far, "Run 1: the moisture entered, 13 %, differs from that of the train")
    assert not said(far, "Run 1: the source of the moisture was not entered")
    assert value(far, "run.2.moisture") == pytest.approx(0.13, rel=1e-12)


def test_an_incomplete_train_blocks_only_where_nothing_else_is_entered() -> None:
    alone = _wet_nox(moisture=(_train(meter_pressure=None),))
    assert "the train's row is not complete" in next(p.found for p in alone.problems if p.code == "moisture-missing")
    beside = _wet_nox(moisture=(_train(meter_pressure=None),), runs=runs(moisture=number(16.0, "%")))
    assert value(beside, "run.1.moisture") == pytest.approx(0.16, rel=1e-12)
    assert said(beside, "the moisture entered is used")
    assert "moisture-missing" not in codes(beside)


def test_a_meter_that_ran_backwards_gives_no_moisture() -> None:
    """End 99.9 ft3 after 100: the train would give more than all of the gas as water."""
    outcome = _wet_nox(moisture=(_train(meter_volume_end=number(99.9, "ft3")),))
    assert "run.1.moisture" not in outcome.ledger
    assert "moisture-missing" in codes(outcome)


def test_defaults_of_a_train_are_stated() -> None:
    bare = _train(meter_factor=None, meter_volume_start=None, silica_gel_gain=None)
    outcome = _wet_nox(moisture=(bare,))
    gas, water = 17.64 * 130 * 29.5 / 540, 0.04716 * 90
    assert value(outcome, "run.1.moisture") == pytest.approx(water / (water + gas), rel=1e-12)


# ---- saturation ------------------------------------------------------------------------------------------------


def _saturated(temperature: float, moisture: float | None, source: str = "Method 4", **more: Any) -> Outcome:
    fields = {
        "moisture": None if moisture is None else number(moisture, "%"),
        "moisture_source": source,
        "stack_temperature": number(temperature, "°C"),
        "barometric_pressure": number(100.0, "kPa"),
        "static_pressure": number(0.0, "kPa"),
    }
    return _wet_nox(test=identity(unit_system="SI"), runs=runs(**(fields | more)))


def test_the_lower_of_measured_and_saturation() -> None:
    """60 °C at 100 kPa: 0.19946 at saturation: 25 % measured is above, 15 % below."""
    above, below = _saturated(60.0, 25.0), _saturated(60.0, 15.0)
    assert value(above, "run.1.moisture") == pytest.approx(0.19946, rel=2e-3)
    assert value(above, "run.1.moisture") == value(above, "run.1.moisture.saturation")
    assert said(above, "the measured moisture is above saturation")
    assert value(below, "run.1.moisture") == pytest.approx(0.15, rel=1e-14)
    assert not said(below, "above saturation")


def test_saturation_as_the_source_needs_no_value() -> None:
    outcome = _saturated(60.0, None, "saturation")
    assert value(outcome, "run.1.moisture") == pytest.approx(0.19946, rel=2e-3)


def test_saturation_uses_the_static_pressure() -> None:
    """-2 kPa: 19.946/98."""
    outcome = _saturated(60.0, None, "saturation", static_pressure=number(-2.0, "kPa"))
    assert value(outcome, "run.1.moisture") == pytest.approx(0.19946 * 100 / 98, rel=2e-3)


def test_no_static_pressure_is_said() -> None:
    outcome = _saturated(60.0, 25.0, static_pressure=None)
    assert said(outcome, "no static pressure was entered")
    hot = _saturated(150.0, 25.0, static_pressure=None)
    assert not said(hot, "no static pressure was entered")
    assert value(hot, "run.1.moisture") == pytest.approx(0.25, rel=1e-14)


def test_a_saturation_of_more_than_all_is_no_moisture() -> None:
    """100 °C at 95 kPa: the vapour alone would have 101.4 kPa."""
    outcome = _saturated(100.0, None, "saturation", barometric_pressure=number(95.0, "kPa"))
    assert "run.1.moisture" not in outcome.ledger
    assert "moisture-missing" in codes(outcome)
    measured = _saturated(100.0, 25.0, barometric_pressure=number(95.0, "kPa"))
    assert value(measured, "run.1.moisture") == pytest.approx(0.25, rel=1e-14)


# ---- fuel calculation ------------------------------------------------------------------------------------------


def _calculated(**more: Any) -> Outcome:
    fields = {"moisture_source": "fuel calculation"} | more
    return _wet_nox(runs=runs(**fields), fuels=(fuel("propane", "gas analysis"),), fuel_gas=_PROPANE)


_PROPANE = (component("propane", "C3H8", 100.0),)


def test_moisture_from_the_fuel_calculation() -> None:
    """Propane with dry air, O2 5 % dry, CO 10 ppm dry, NOx 40 ppm wet: C3H8 + 5 O2 -> 3 CO2 + 4 H2O.

    By hand with complete combustion and air of 20.95 % O2: dry products per mole of fuel D = (A - 5) + 3 with
    A = D 0.05/0.2095 + 5/0.2095 (oxygen left is 0.05 D = 0.2095 A - 5), so D (1 - 0.05/0.2095) = 5/0.2095 - 2 and
    moisture = 4/(4 + D); the ppm of CO and NOx move it by less than 1e-4 of itself.
    """
    outcome = _calculated()
    dry = (5 / 0.2095 - 2) / (1 - 0.05 / 0.2095)
    assert value(outcome, "run.1.moisture") == pytest.approx(4 / (4 + dry), rel=1e-3)
    bws = value(outcome, "run.1.moisture")
    assert value(outcome, "run.1.nox.dry") == pytest.approx(40 / (1 - bws), rel=1e-12)
    assert value(outcome, "run.1.o2.wet") == pytest.approx(5 * (1 - bws), rel=1e-12)
    assert "moisture-missing" not in codes(outcome)
    assert said(outcome, "the moisture is calculated from the fuel and the readings, not measured")
    assert "run.1.combustion.moisture_difference" not in outcome.ledger


def test_a_value_entered_with_that_source_stands() -> None:
    outcome = _calculated(moisture=number(14.0, "%"))
    assert value(outcome, "run.1.moisture") == pytest.approx(0.14, rel=1e-14)


def test_without_a_fuel_the_calculation_gives_nothing() -> None:
    outcome = _wet_nox(runs=runs(moisture_source="fuel calculation"))
    assert codes(outcome).count("moisture-missing") == 3
    assert "run.1.nox.dry" not in outcome.ledger


def test_moisture_below_combustion_water_is_a_note_unless_it_is_that_water() -> None:
    low = _calculated(moisture=number(5.0, "%"), moisture_source="Method 4")
    assert codes(low).count("moisture-below-combustion") == 3
    assert "moisture-below-combustion" not in codes(_calculated())


# ---- ambient air -----------------------------------------------------------------------------------------------


def test_ambient_moisture_as_entered() -> None:
    outcome = assessed(runs=runs(ambient_moisture=number(1.2, "%")))
    assert value(outcome, "run.1.moisture.ambient") == pytest.approx(0.012, rel=1e-14)


def test_ambient_moisture_from_humidity_temperature_and_barometer() -> None:
    """RH 50 %, 77 °F (25 °C, 3.1699 kPa), 29.53 inHg: 0.5 x 3.1699/(29.53 x 3.38639)."""
    weather = {
        "relative_humidity": number(50.0, "%"),
        "ambient_temperature": number(77.0, "°F"),
        "barometric_pressure": number(29.53, "inHg"),
    }
    outcome = assessed(runs=runs(**weather))
    assert value(outcome, "run.1.moisture.ambient") == pytest.approx(0.5 * 3.1699 / (29.53 * KPA), rel=2e-3)
    entered = assessed(runs=runs(**weather, ambient_moisture=number(2.0, "%")))
    assert value(entered, "run.1.moisture.ambient") == pytest.approx(0.02, rel=1e-14)


@pytest.mark.parametrize("lacking", ["relative_humidity", "ambient_temperature", "barometric_pressure"])
def test_without_one_of_the_three_there_is_no_ambient_moisture(lacking: str) -> None:
    weather = {
        "relative_humidity": number(50.0, "%"),
        "ambient_temperature": number(77.0, "°F"),
        "barometric_pressure": number(29.53, "inHg"),
    }
    del weather[lacking]
    assert "run.1.moisture.ambient" not in assessed(runs=runs(**weather)).ledger


def test_air_below_freezing_is_not_computed_and_said() -> None:
    weather = {
        "relative_humidity": number(50.0, "%"),
        "ambient_temperature": number(20.0, "°F"),
        "barometric_pressure": number(29.53, "inHg"),
    }
    outcome = assessed(runs=runs(**weather))
    assert "run.1.moisture.ambient" not in outcome.ledger
    assert said(outcome, "air below freezing")


# ---- wet oxygen ------------------------------------------------------------------------------------------------


def test_wet_oxygen_is_made_dry_before_it_corrects() -> None:
    """O2 4.2 % wet at 16 % moisture is 5 % dry (7E-10)."""
    channels = tuple(channel(name, wet=name == "O2") for name in ("NOx", "CO", "O2", "CO2"))
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"))
    values = {"NOx": 40.0, "CO": 10.0, "O2": 4.2, "CO2": 9.0}
    made = record(channels=channels, readings=readings(values), limits=(at_3,))
    outcome = assess(replace(made, runs=runs(moisture=number(16.0, "%"))))
    assert value(outcome, "run.1.o2.dry") == pytest.approx(5.0, rel=1e-14)
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * 17.9 / 15.9, rel=1e-12)
    without = assess(made)
    assert "run.1.nox.at_reference" not in without.ledger
    assert without.comparisons[0].is_met is None
