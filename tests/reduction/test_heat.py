"""Heat input of a run: as entered, or metered by gas volume, liquid volume, mass or energy.  Runs are half an hour."""

from __future__ import annotations

from typing import Any

import pytest

from reporter.outcome import Outcome
from tests.record_factory import assessed, codes, fuel, fuel_use, identity, number, runs, said, value

NATURAL = number(1020.0, "Btu/ft3")


def _used(*rows: dict[str, Any], **more: Any) -> Outcome:
    """Fuel used in run 1."""
    uses = tuple(fuel_use("1", **row) for row in rows)
    return assessed(**({"fuels": (fuel(),), "fuel_use": uses} | more))


def _heat(outcome: Outcome) -> float:
    return value(outcome, "run.1.heat_input")


def test_heat_input_as_entered() -> None:
    outcome = assessed(runs=runs(heat_input=number(48.5, "MMBtu/h")))
    assert _heat(outcome) == 48.5


def test_heat_input_in_megawatts_becomes_the_unit_system_s() -> None:
    """1 MW is 3.6 GJ/h and 3.6E9/1.05505585262E9 MMBtu/h."""
    metric = assessed(test=identity(unit_system="SI"), runs=runs(heat_input=number(10.0, "MW")))
    assert _heat(metric) == pytest.approx(36.0, rel=1e-12)
    customary = assessed(runs=runs(heat_input=number(10.0, "MW")))
    assert _heat(customary) == pytest.approx(36.0 / 1.05505585262, rel=1e-9)


def test_a_gas_meter() -> None:
    """(24 600 - 100) x 1.02/0.5 h x 1020 Btu/scf."""
    outcome = _used(
        {
            "meter_start": number(100.0, "ft3"),
            "meter_end": number(24_600.0, "ft3"),
            "meter_factor": number(1.02),
            "heating_value": NATURAL,
        }
    )
    assert _heat(outcome) == pytest.approx(24_500 * 1.02 / 0.5 * 1020e-6, rel=1e-12)


def test_a_gas_meter_in_cubic_metres() -> None:
    """800 m3 in half an hour at 39.1 MJ/m3: 62.56 GJ/h; the factor not entered is 1."""
    row = {
        "meter_start": number(0.0, "m3"),
        "meter_end": number(800.0, "m3"),
        "heating_value": number(39.1, "MJ/m3"),
    }
    outcome = _used(row, test=identity(unit_system="SI"))
    assert _heat(outcome) == pytest.approx(1600 * 39.1e-3, rel=1e-12)


def test_a_rate_by_volume_in_another_unit() -> None:
    """500 scfm is 30 000 scf/h."""
    outcome = _used({"rate": number(500.0, "ft3/min"), "heating_value": NATURAL})
    assert _heat(outcome) == pytest.approx(30_000 * 1020e-6, rel=1e-12)


def test_a_rate_by_mass() -> None:
    """4000 lb/h at 12 500 Btu/lb."""
    outcome = _used({"rate": number(4000.0, "lb/h"), "heating_value": number(12_500.0, "Btu/lb")})
    assert _heat(outcome) == pytest.approx(50.0, rel=1e-12)


def test_a_scale_by_mass() -> None:
    """2 t in half an hour at 16 000 kJ/kg: 64 GJ/h."""
    row = {
        "meter_start": number(1.0, "t"),
        "meter_end": number(3.0, "t"),
        "heating_value": number(16_000.0, "kJ/kg"),
    }
    outcome = _used(row, test=identity(unit_system="SI"))
    assert _heat(outcome) == pytest.approx(64.0, rel=1e-12)


def test_an_oil_meter_in_gallons() -> None:
    """60 gal in half an hour at 140 000 Btu/gal: 16.8 MMBtu/h."""
    row = {
        "meter_start": number(1000.0, "gal"),
        "meter_end": number(1060.0, "gal"),
        "heating_value": number(140_000.0, "Btu/gal"),
    }
    assert _heat(_used(row)) == pytest.approx(16.8, rel=1e-12)


def test_an_energy_meter_needs_no_heating_value() -> None:
    """120 therms in half an hour: 24 MMBtu/h; a rate in MMBtu/h stands as it is."""
    meter = {"meter_start": number(0.0, "therm"), "meter_end": number(120.0, "therm")}
    assert _heat(_used(meter)) == pytest.approx(24.0, rel=1e-9)
    assert _heat(_used({"rate": number(24.0, "MMBtu/h")})) == pytest.approx(24.0, rel=1e-12)


def test_two_meters_of_one_fuel_are_summed() -> None:
    outcome = _used(
        {"rate": number(10_000.0, "ft3/h"), "heating_value": NATURAL},
        {"rate": number(5_000.0, "ft3/h"), "heating_value": NATURAL},
    )
    assert _heat(outcome) == pytest.approx(15_000 * 1020e-6, rel=1e-12)
    assert value(outcome, "run.1.share.natural_gas") == 1.0


def test_one_of_two_meters_unreadable_gives_no_sum() -> None:
    outcome = _used({"rate": number(10_000.0, "ft3/h"), "heating_value": NATURAL}, {"meter_end": number(5.0, "ft3")})
    assert "run.1.heat_input" not in outcome.ledger
    assert "heat-input-missing" in codes(outcome)


def test_the_heating_value_of_the_sheet_fuel_serves_where_fuel_use_has_none() -> None:
    row = {"rate": number(4000.0, "lb/h")}
    fuels = (fuel(gross_heating_value=number(12_500.0, "Btu/lb")),)
    outcome = _used(row, fuels=fuels)
    assert _heat(outcome) == pytest.approx(50.0, rel=1e-12)
    assert said(outcome, "Fuel use names no heating value; the gross one of the sheet Fuel is taken")
    dry = (fuel(gross_heating_value=number(12_500.0, "Btu/lb"), analysis_basis="dry"),)
    assert "heat-input-missing" in codes(_used(row, fuels=dry))


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"rate": number(1.0, "ft3/h"), "heating_value": NATURAL, "heating_value_kind": "net"}, "is net"),
        ({"heating_value": NATURAL}, "neither a rate nor two meter readings"),
        ({"meter_end": number(5.0, "ft3"), "heating_value": NATURAL}, "neither a rate nor two meter readings"),
        ({"rate": number(1.0, "ft3/h")}, "no heating value"),
        ({"rate": number(1.0, "ft3/h"), "heating_value": number(1.0, "Btu/lb")}, "its heating value in Btu/lb"),
        ({"rate": number(1.0, "lb/h"), "heating_value": NATURAL}, "its heating value in Btu/ft3"),
        (
            {"meter_start": number(9.0, "ft3"), "meter_end": number(5.0, "ft3"), "heating_value": NATURAL},
            "If it went from 9 to 0, enter 15 as its end",
        ),
    ],
)
def test_a_fuel_use_that_gives_no_heat_says_why(row: dict[str, Any], words: str) -> None:
    outcome = _used(row)
    assert "run.1.heat_input" not in outcome.ledger
    problem = next(p for p in outcome.problems if p.code == "heat-input-missing")
    assert words in problem.found


def test_entered_wins_over_metered_and_their_difference_is_kept() -> None:
    """Metered 20.4 of 20 MMBtu/h entered: +2 %; of 15: +36 %, said."""
    row = {"rate": number(20_000.0, "ft3/h"), "heating_value": NATURAL}
    near = _used(row, runs=runs(heat_input=number(20.0, "MMBtu/h")))
    assert _heat(near) == 20.0
    assert value(near, "run.1.heat_input.metered_difference") == pytest.approx(2.0, rel=1e-9)
    assert "routes-disagree" not in codes(near)
    far = _used(row, runs=runs(heat_input=number(15.0, "MMBtu/h")))
    assert "routes-disagree" in codes(far)


def test_a_heat_input_of_nothing_is_no_division() -> None:
    row = {"rate": number(0.0, "ft3/h"), "heating_value": NATURAL}
    oil = {"name": "distillate oil", "rate": number(0.0, "gal/h"), "heating_value": number(1e5, "Btu/gal")}
    outcome = _used(row, oil, fuels=(fuel(), fuel("distillate oil")))
    assert _heat(outcome) == 0.0
    assert "run.1.share.natural_gas" not in outcome.ledger
