"""Without a fault the program finds the truth again, as near as cylinders, drift, noise and meters allow.

The tolerance of a concentration is the allowance written into the truth file; its parts are recomputed here by hand
from the printed properties of analyzers and cylinders, and it may be no wider than they make it.
"""

from __future__ import annotations

import math
from typing import Any

import pytest
from rehearsals import GAS, SYSTEMS, WOOD, made, not_met, value

from reporter.combustion.bare import balance
from reporter.combustion.parse import fuel_from_text
from reporter.equation import System
from reporter.outcome import RunState
from reporter.rehearse import Order, Profile
from reporter.rehearse.order import settings
from reporter.units import convert

#: Numbers entered with four digits, and the printed constants of Methods 4 and 19: together below this share.
PRINTED = 1e-3
ORDERS = [
    Order(fuel=fuel, system=system, oxygen=oxygen, seed=seed)
    for fuel, oxygen in ((GAS, 4.0), (WOOD, 7.5))
    for system in SYSTEMS
    for seed in (1, 2, 3)
]


def _id(order: Order) -> str:
    return f"{order.fuel.split()[0]} {order.system.value} {order.seed}"


def _runs(order: Order) -> list[tuple[int, dict[str, Any]]]:
    return list(enumerate(made(order)[0].truth["runs"], 1))


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_nothing_is_found_and_every_run_is_valid(order: Order) -> None:
    outcome = made(order)[1]
    assert not_met(outcome) == []
    assert [run.state for run in outcome.runs] == [RunState.VALID] * 3
    assert {p.code for p in outcome.problems} <= {"negative-reading", "synthetic-test"}


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_corrected_concentrations_are_the_truth_within_their_allowance(order: Order) -> None:
    outcome = made(order)[1]
    for number, run in _runs(order):
        for label, true in run["dry"].items():
            found = value(outcome, number, f"{label.lower()}.corrected")
            assert abs(found - true["value"]) <= true["allowance"]["total"], (number, label)


def test_the_allowance_is_what_cylinder_drift_and_noise_make_it() -> None:
    """Recomputed for O2 of run 1 from the times, the certificates and the last digit of the workbook."""
    order = Order(fuel=GAS)
    rehearsal, outcome = made(order)
    true = rehearsal.truth["runs"][0]["dry"]["O2"]
    analyzer = next(one for one in rehearsal.truth["analyzers"] if one["channel"] == "O2")
    cylinder = next(c for c in outcome.record.cylinders if c.cylinder.value == "SYN-4" and c.gas.value == "o2")
    parts, concentration = true["allowance"], true["value"]
    assert cylinder.uncertainty is not None
    assert parts["certificate"] == pytest.approx(cylinder.uncertainty.value / 100 * concentration)
    run = outcome.record.runs[0]
    middle, apart = run.start.value + (run.end.value - run.start.value) / 2, {}
    for level in ("zero", "mid"):
        times = [
            c.time.value
            for c in outcome.record.calibrations
            if c.channel.value == "O2" and c.route.value.value == "system" and c.level.value.value == level
        ]
        checks = times[0] + (times[1] - times[0]) / 2
        apart[level] = abs((middle - checks).total_seconds()) / 3600
    share = concentration / cylinder.certified_value.value
    zero = 0.08 / 100 * analyzer["span"] * (abs(1 - share) * apart["zero"] + share * apart["mid"])
    assert parts["drift"] == pytest.approx(zero + 0.10 / 100 * concentration * apart["mid"])
    check = 0.05 / 100 * analyzer["span"] / math.sqrt(2)
    noise = 4 * math.hypot(0.10 / 100 * analyzer["span"] / math.sqrt(60), (1 - share) * check, share * check)
    assert parts["noise"] == pytest.approx(noise)
    assert parts["rounding"] == pytest.approx(0.005 * (abs(1 - share) + share))
    assert parts["total"] == pytest.approx(sum(part for name, part in parts.items() if name != "total"))


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_no_allowance_is_wide(order: Order) -> None:
    """At most the certificate and 0.4 % of the span: half of what a drift of 1 % of the span would be."""
    truth = made(order)[0].truth
    spans = {one["channel"]: one["span"] for one in truth["analyzers"]}
    for _, run in _runs(order):
        for label, true in run["dry"].items():
            allowance = true["allowance"]
            assert allowance["total"] - allowance["certificate"] <= 0.004 * spans[label], label


def test_a_wrong_program_would_be_noticed() -> None:
    """Uncorrected means lie outside the allowance somewhere: the comparison is not empty."""
    order = ORDERS[0]
    outcome = made(order)[1]
    outside = [
        (number, label)
        for number, run in _runs(order)
        for label, true in run["dry"].items()
        if abs(value(outcome, number, f"{label.lower()}.mean") - true["value"]) > true["allowance"]["total"]
    ]
    assert outside


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_moisture_heat_and_flow_are_the_truth_within_the_errors_of_their_meters(order: Order) -> None:
    outcome, stated = made(order)[1], settings()["measured"]
    for number, run in _runs(order):
        moisture = run["moisture_percent"] / 100
        bound = (stated["water"] / 100 * (1 - moisture) + PRINTED) * moisture
        assert abs(value(outcome, number, "moisture") - moisture) <= bound
        heat = outcome.ledger[f"run.{number}.heat_input"]
        true = convert(run["heat_input_gj_per_h"], "GJ/h", heat.unit)
        assert heat.value == pytest.approx(true, rel=stated["fuel"] / 100 + PRINTED)
        flow = outcome.ledger[f"run.{number}.flow.dry_standard"]
        true = convert(run["stack_flow_dry_m3_per_h"], "m3/h", flow.unit)
        assert flow.value == pytest.approx(true, rel=stated["flow"] / 100 + PRINTED)


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_expected_moisture_and_carbon_dioxide_follow_from_the_oxygen(order: Order) -> None:
    """The balance of the report, at an oxygen off by its allowance, brackets the truth; CO2 by its own allowance."""
    outcome = made(order)[1]
    for number, run in _runs(order):
        oxygen, dioxide = run["dry"]["O2"], run["dry"]["CO2"]
        slope = 1.2 * oxygen["allowance"]["total"]  # CO2 falls by at most 20.2/20.95 for each O2, with any fuel here
        found = value(outcome, number, "combustion.co2_difference")
        assert abs(found) <= dioxide["allowance"]["total"] + slope
        # Water over wet gas changes by less than 1 % of itself for 0.1 % O2 (both fuels, 3 to 9 % O2).
        bound = 0.1 * oxygen["allowance"]["total"] + PRINTED
        expected = value(outcome, number, "combustion.moisture_expected")
        assert expected == pytest.approx(run["moisture_percent"] / 100, rel=bound)


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_excess_air_is_the_truth_within_the_allowance_of_oxygen(order: Order) -> None:
    outcome, fuel = made(order)[1], fuel_from_text(order.fuel)
    for number, run in _runs(order):
        oxygen = run["dry"]["O2"]
        ends = [
            balance(fuel, {"o2": oxygen["value"] + sign * oxygen["allowance"]["total"]}).value("excess_air")
            for sign in (-1, 1)
        ]
        width = (ends[1] - ends[0]) / 2
        assert abs(value(outcome, number, "combustion.excess_air") - run["excess_air_percent"]) <= 1.05 * width


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_mass_rates_are_the_truth_within_concentration_and_flow(order: Order) -> None:
    outcome, stated = made(order)[1], settings()["measured"]
    for number, run in _runs(order):
        true, dry = run["rates"]["CO"]["kg_per_h"], run["dry"]["CO"]
        share = dry["allowance"]["total"] / dry["value"] + stated["flow"] / 100 + PRINTED
        entry = outcome.ledger[f"run.{number}.co.mass_rate"]
        assert entry.value == pytest.approx(convert(true, "kg/h", entry.unit), rel=share)


@pytest.mark.parametrize("order", ORDERS, ids=_id)
def test_rates_by_heat_are_the_truth_apart_from_what_method_19_itself_differs_by(order: Order) -> None:
    """Eq. 19-1 with Fd by Eq. 19-13 and 20.9 against the products of this fuel in air of 20.95 %: a known share."""
    outcome, truth = made(order)[1], made(order)[0].truth
    fuel, stem = fuel_from_text(order.fuel), "fuel.fuel_as_given.fd"
    heat = truth["fuel"].get("gross_heat_kj_per_mol") or truth["fuel"]["gross_heat_kj_per_kg"]
    fd = outcome.ledger[stem]
    per_gj = convert(fd.value, "ft3/MMBtu", "m3/J") * 1e9 if order.system is System.US else fd.value * 1e9
    for number, run in _runs(order):
        dry, oxygen = run["dry"]["NOx"], run["dry"]["O2"]
        products = balance(fuel, {"o2": oxygen["value"]}).value("dry_products")
        volume = products * 24.0548e-3 / heat * 1e6  # m3 per GJ; 24.0548 L/mol at 20 °C and 101.325 kPa (CODATA R)
        method = per_gj * 20.9 / (20.9 - oxygen["value"]) / volume
        assert method == pytest.approx(1, abs=0.012)
        share = dry["allowance"]["total"] / dry["value"] + oxygen["allowance"]["total"] / (20.9 - oxygen["value"])
        entry = outcome.ledger[f"run.{number}.nox.emission_rate"]
        found = convert(entry.value, entry.unit, "g/GJ")
        assert found == pytest.approx(run["rates"]["NOx"]["g_per_gj"] * method, rel=share + PRINTED)


@pytest.mark.parametrize(
    "order",
    [
        Order(fuel="distillate oil", gases=("SO2", "O2"), oxygen=3.0, interval=10, profile=Profile.SWING),
        Order(fuel=GAS, oxygen=15.0, runs=1, run_minutes=21, profile=Profile.RAMP, system=System.SI),
        Order(fuel=GAS, gases=("NOx", "CO2"), interval=300),
        Order(fuel=WOOD, gases=("O2", "CO2", "SO2", "CO", "NOx"), interval=900, runs=2, oxygen=9.0),
    ],
    ids=["swing, 10 s", "ramp, one short run", "carbon dioxide only", "five gases, 15 min"],
)
def test_other_profiles_intervals_and_gases_give_the_truth_too(order: Order) -> None:
    outcome = made(order)[1]
    assert not_met(outcome) == []
    for number, run in _runs(order):
        for label, true in run["dry"].items():
            found = value(outcome, number, f"{label.lower()}.corrected")
            assert abs(found - true["value"]) <= true["allowance"]["total"], (number, label)
