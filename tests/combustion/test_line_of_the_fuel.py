"""Points about the line of a fuel, against complete combustion of methane worked by hand.

CH4 + 2 O2 -> CO2 + 2 H2O in air of 20.95 % oxygen: 2/0.2095 mol of air leave 1 mol of CO2 and 2 (1 - 0.2095)/0.2095 of
nitrogen in the dry gas; e mol of air too many leave e more of dry gas, 0.2095 e of it oxygen.
"""

from __future__ import annotations

import pytest

from reporter.combustion import agreement as eq
from reporter.combustion.bare import balance
from reporter.combustion.fuel import nominal_fuel, nominal_names, nominal_reach
from reporter.combustion.fuel_entries import spreads
from reporter.equation import System

X = 0.2095
DRY = 1 + 2 * (1 - X) / X


def flue(excess: float) -> tuple[float, float, float]:
    """Dry O2 [%], dry CO2 [%] and moisture [1] with so many moles of dry air too many."""
    dry = DRY + excess
    return 100 * X * excess / dry, 100 / dry, 2 / (dry + 2)


O2, CO2, MOISTURE = flue(2.0)
SLOPE = eq.line_slope(expected=CO2, o2=O2, air_oxygen=X)


def test_the_slope_is_that_from_no_oxygen_to_air() -> None:
    assert pytest.approx(100 / DRY / 20.95, rel=1e-12) == SLOPE


@pytest.mark.parametrize("excess", [0.0, 0.7, 5.0, 40.0])
def test_every_complete_combustion_lies_on_the_line(excess: float) -> None:
    oxygen, dioxide, _ = flue(excess)
    assert eq.co2_on_line(slope=SLOPE, o2=oxygen, air_oxygen=X) == pytest.approx(dioxide, rel=1e-12)
    assert eq.o2_on_line(slope=SLOPE, co2=dioxide, air_oxygen=X) == pytest.approx(oxygen, rel=1e-9, abs=1e-9)
    assert eq.scale_to_line(slope=SLOPE, o2=oxygen, co2=dioxide, air_oxygen=X) == pytest.approx(1, rel=1e-12)


@pytest.mark.parametrize("excess", [0.0, 0.7, 5.0])
def test_moisture_at_another_oxygen_is_that_of_the_combustion_there(excess: float) -> None:
    oxygen, _, moisture = flue(excess)
    found = eq.moisture_at_oxygen(expected=MOISTURE, o2=O2, other=oxygen, air_oxygen=X)
    assert found == pytest.approx(moisture, rel=1e-12)


def test_a_wet_sample_is_brought_back_by_its_moisture_and_by_the_factor_to_the_line() -> None:
    wet = {"o2": O2 * (1 - MOISTURE), "co2": CO2 * (1 - MOISTURE)}
    assert eq.as_if_wet(value=wet["o2"], moisture=MOISTURE) == pytest.approx(O2, rel=1e-12)
    assert eq.scale_to_line(slope=SLOPE, air_oxygen=X, **wet) == pytest.approx(1 / (1 - MOISTURE), rel=1e-12)


@pytest.mark.parametrize("share", [0.02, 0.12, 0.4])
def test_air_in_the_sample_is_found_from_its_moisture_and_from_the_routes(share: float) -> None:
    """A leak moves oxygen along the line, and nothing else: moisture measured elsewhere stays, flow times ppm falls."""
    oxygen = O2 + share * (20.95 - O2)
    expected = eq.moisture_at_oxygen(expected=MOISTURE, o2=O2, other=oxygen, air_oxygen=X)
    found = eq.air_by_moisture(measured=MOISTURE, expected=expected, humidity=0.0)
    assert found == pytest.approx(100 * share, rel=1e-9)
    dioxide = CO2 * (1 - share)
    assert eq.co2_on_line(slope=SLOPE, o2=oxygen, air_oxygen=X) == pytest.approx(dioxide, rel=1e-12)
    assert eq.air_by_routes(by_flow=7.0 * (1 - share), by_heat=7.0) == pytest.approx(100 * share, rel=1e-12)


def test_the_bound_propagates_both_uncertainties() -> None:
    """JCGM 100, Eq. 10: variances by squared sensitivity; 3 and 0.5 * 8 make 5, twice that and the spread 11."""
    found = eq.agreement_bound(u_co2=3.0, u_o2=8.0, slope=0.5, spread=1.0)
    assert found == pytest.approx(11.0, rel=1e-15)


def test_the_accepted_calibration_error_is_rectangular() -> None:
    """JCGM 100, 4.3.7: half-width over the root of 3; 2 % of a span of 15 % is 0.3 %."""
    found = eq.uncertainty_allowed.evaluate({"known": 0.0, "allowed": 2.0, "span": 15.0}, System.SI)
    assert found == pytest.approx(0.3 / 3**0.5, rel=1e-12)


def test_moisture_bounds_hold_tolerance_spread_and_the_water_of_air_not_counted() -> None:
    """Air of so much water adds it to the wet gas: one per cent and what 0.0277 mol for each mole of air makes."""
    assert eq.moisture_lowest(tolerance=0.01, spread=0.002) == pytest.approx(-0.012)
    air, water = 2 / X, 0.0277
    humid = (2 + water * air) / (DRY + 2 + water * air)
    dry = 2 / (DRY + 2)
    more = {"air": air, "wet": DRY + 2, "expected": dry}
    found = eq.moisture_highest(tolerance=0.0, spread=0.0, humidity=water, **more)
    assert found == pytest.approx(humid - dry, rel=0.03)


# ---- assumed compositions ------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", nominal_names())
def test_the_reach_of_a_nominal_fuel_follows_from_its_spreads(name: str) -> None:
    """Central differences of the balance by each share, times half of its range, summed without regard to sign."""
    fuel = nominal_fuel(name)
    state = balance(fuel, {"o2": 5.0})
    found = []
    for quantity in ("co2_expected", "moisture_expected"):
        key, at = f"{state.prefix}.{quantity}", state.value(quantity)
        total = 0.0
        for leaf, half in spreads(fuel, state.fuel_prefix).items():
            share = float(state.ledger[leaf].value)
            step = 1e-4 * max(share, 0.1)
            ends = [float(state.ledger.replay({leaf: share + s}, only=[key])[key]) for s in (-step, step)]
            total += abs(ends[1] - ends[0]) / (2 * step) * half
        found.append(100 * total / (at if quantity == "co2_expected" else at * (1 - at)))
    assert nominal_reach(name) == pytest.approx(found, abs=6e-4)


def test_a_reach_is_taken_of_the_expected_by_the_share_of_heat() -> None:
    """Half of the heat from a fuel that reaches 4 %: 2 % of 10 % CO2; of water over dry gas 0.02 B (1 - B)."""
    half = {"shares": (0.5,), "reaches": (4.0,)}
    assert eq.co2_spread(expected=10.0, **half) == pytest.approx(0.2)
    assert eq.moisture_spread(expected=0.25, **half) == pytest.approx(0.02 * 0.25 * 0.75)
