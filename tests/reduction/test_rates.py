"""Method 19 by the bases at hand, F factors by their source, mass rates by both routes, mass concentrations.

Printed values: Table 19-1 K(NOx) 1.194E-7 lb/scf per ppm and 1.912E6 ng/scm per ppm; Table 19-2 natural gas
F_d 8,710, F_w 10,610, F_c 1,040, oil 9,190 and 1,420, wood 9,240 dscf/MMBtu; 60.45(f) natural gas 8,740 (F_w and
60.45(f) from memory).  One ft3/MMBtu is 0.3048^3/1.05505585262e9 m3/J.
"""

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
    comparison,
    component,
    cylinders,
    fuel,
    fuel_use,
    identity,
    limit,
    number,
    readings,
    record,
    rerun,
    runs,
    said,
    value,
)

K_NOX = 1.194e-7
FD, FW, FC = 8710.0, 10610.0, 1040.0
SI = {"test": identity(unit_system="SI")}
PER_J = 0.3048**3 / 1055055852.62


def _wet(*names: str) -> tuple[Any, ...]:
    return tuple(channel(name, wet=name in names) for name in ("NOx", "CO", "O2", "CO2"))


def _rate(wet: tuple[str, ...] = (), moisture: float | None = 16.0, **more: Any) -> Outcome:
    """NOx 40 ppm, O2 5 %, CO2 9 % as read, natural gas, a limit in lb/MMBtu."""
    fields = {} if moisture is None else {"moisture": number(moisture, "%"), "moisture_source": "assumed"}
    of_limit = more.pop("of_limit", {})
    of_runs = more.pop("of_runs", {})
    usual: dict[str, Any] = {
        "channels": _wet(*wet),
        "runs": runs(**fields, **of_runs),
        "fuels": (fuel(),),
        "limits": (limit(value=0.1, unit="lb/MMBtu", **of_limit),),
    }
    return assessed(**(usual | more))


# ---- the nine forms --------------------------------------------------------------------------------------------

C = 40 * K_NOX
B = 0.16
FORMS = {
    "19-1": ((), "O2", C * FD * 20.9 / (20.9 - 5)),
    "19-3": (("NOx", "O2"), "O2", C * FD * 20.9 / (20.9 * (1 - B) - 5)),
    "19-4": (("NOx",), "O2", C * FD * 20.9 / ((1 - B) * (20.9 - 5))),
    "19-5": (("O2",), "O2", C * FD * 20.9 / (20.9 - 5 / (1 - B))),
    "19-6": ((), "CO2", C * FC * 100 / 9),
    "19-7": (("NOx", "CO2"), "CO2", C * FC * 100 / 9),
    "19-8": (("NOx",), "CO2", C * FC * 100 / ((1 - B) * 9)),
    "19-9": (("CO2",), "CO2", C * (1 - B) * FC * 100 / 9),
}


@pytest.mark.parametrize("form", FORMS)
def test_the_form_of_method_19_follows_the_bases(form: str) -> None:
    wet, diluent, expected = FORMS[form]
    outcome = _rate(wet, of_limit={"diluent": diluent})
    entry = outcome.ledger["run.1.nox.emission_rate"]
    assert entry.value == pytest.approx(expected, rel=1e-12)
    assert entry.origin.equation.citation.number == f"Eq. {form}"  # type: ignore[union-attr]
    assert value(outcome, "average.nox.emission_rate") == pytest.approx(expected, rel=1e-12)
    assert comparison(outcome).is_met is True


@pytest.mark.parametrize(("entered", "bwa"), [(None, 0.027), (1.2, 0.012)])
def test_wet_and_wet_without_stack_moisture_takes_ambient_air(entered: float | None, bwa: float) -> None:
    """19-2 with F_w; 0.027 where no ambient moisture is entered (12.2.2.1), and said."""
    of_runs = {} if entered is None else {"ambient_moisture": number(entered, "%")}
    outcome = _rate(("NOx", "O2"), None, of_runs=of_runs)
    expected = C * FW * 20.9 / (20.9 * (1 - bwa) - 5)
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(expected, rel=1e-12)
    assert said(outcome, "0.027, which Method 19 (12.2.2.1) allows") == (entered is None)


def test_ambient_moisture_from_weather_serves_19_2() -> None:
    """RH 50 % at 25 °C and 100 kPa: 0.5 x 3.1699/100 (IAPWS-95)."""
    weather = {
        "relative_humidity": number(50.0, "%"),
        "ambient_temperature": number(25.0, "°C"),
        "barometric_pressure": number(100.0, "kPa"),
    }
    outcome = _rate(("NOx", "O2"), None, of_runs=weather)
    bwa = 0.5 * 3.1699 / 100
    expected = C * FW * 20.9 / (20.9 * (1 - bwa) - 5)
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize("wet", [("NOx",), ("O2",)])
def test_mixed_bases_without_moisture_give_no_rate(wet: tuple[str, ...]) -> None:
    outcome = _rate(wet, None)
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert "moisture-missing" in codes(outcome)
    assert "the moisture of the stack gas is needed" in comparison(outcome).reason


def test_wet_and_wet_with_wood_has_no_wet_factor() -> None:
    """Table 19-2 prints no F_w for wood: stack moisture is needed, and 19-2 is not made with F_d."""
    outcome = _rate(("NOx", "O2"), None, fuels=(fuel("wood"),))
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert comparison(outcome).is_met is None


@pytest.mark.parametrize(
    ("wet", "moisture", "o2"), [((), 16.0, 20.9), (("NOx", "O2"), 16.0, 17.6), (("NOx", "O2"), None, 20.4)]
)
def test_no_rate_where_oxygen_is_that_of_air(wet: tuple[str, ...], moisture: float | None, o2: float) -> None:
    """Wet 17.6 % at 16 % moisture is 20.95 % dry; wet 20.4 % exceeds 20.9 (1 - 0.027) = 20.34 %."""
    values = {"NOx": 40.0, "CO": 10.0, "O2": o2, "CO2": 0.1}
    outcome = _rate(wet, moisture, readings=readings(values))
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert "oxygen-at-or-above-air" in codes(outcome)


@pytest.mark.parametrize("co2", [0.0, -0.2])
def test_no_rate_where_carbon_dioxide_is_not_above_zero(co2: float) -> None:
    values = {"NOx": 40.0, "CO": 10.0, "O2": 5.0, "CO2": co2}
    outcome = _rate(of_limit={"diluent": "CO2"}, readings=readings(values))
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert "is not above zero" in comparison(outcome).reason


def test_carbon_dioxide_alone_is_the_diluent_where_the_limit_names_none() -> None:
    names = ("NOx", "CO2")
    outcome = _rate(
        channels=tuple(channel(name) for name in names),
        readings=readings({"NOx": 40.0, "CO2": 9.0}),
        cylinders=cylinders(names),
    )
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * FC * 100 / 9, rel=1e-12)


def test_method_19_keeps_20_9_whatever_the_limit_says() -> None:
    outcome = _rate(of_limit={"oxygen_constant": number(21.0, "%")})
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * FD * 20.9 / 15.9, rel=1e-12)


def test_carbon_monoxide_by_method_19_is_by_analogy() -> None:
    """K(CO) = 28.01/385.3E6 lb/scf per ppm."""
    limits = (limit(pollutant="CO", value=0.1, unit="lb/MMBtu"),)
    outcome = assessed(fuels=(fuel(),), limits=limits)
    expected = 10 * 28.01 / 385.3e6 * FD * 20.9 / 15.9
    assert value(outcome, "run.1.co.emission_rate") == pytest.approx(expected, rel=1e-12)
    assert said(outcome, "CO by Method 19 is by analogy")
    assert "by analogy with Method 19" in comparison(outcome).notes


def test_method_19_in_si() -> None:
    """1.912E6 ng/scm per ppm and 8,710 dscf/MMBtu converted exactly; the printed metric factor is shown."""
    outcome = _rate(**SI, limits=(limit(value=60.0, unit="ng/J"),))
    expected = 40 * 1.912e6 * FD * PER_J * 20.9 / 15.9
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(expected, rel=1e-9)
    assert said(outcome, "the metric value printed in the table is 2.43e-07 m3/J")


@pytest.mark.parametrize(
    ("unit", "size"), [("g/GJ", 1.0), ("mg/MJ", 1.0), ("kg/GJ", 0.001), ("lb/MMBtu", 1 / 429.9226)]
)
def test_a_limit_in_another_unit_of_the_same_kind(unit: str, size: float) -> None:
    """1 ng/J is 1 g/GJ; 1 lb/MMBtu is 453.59237 g/1.05505585262 GJ = 429.9226 ng/J."""
    outcome = _rate(**SI, limits=(limit(value=60.0 * size, unit=unit),))
    plain = value(outcome, "average.nox.emission_rate")
    assert value(outcome, comparison(outcome).value) == pytest.approx(plain * size, rel=1e-6)
    assert comparison(outcome).is_met is True


def test_the_same_result_in_grams_and_micrograms_is_not_one_entry() -> None:
    limits = (limit("A", value=1.0, unit="g/m3"), limit("B", value=1e5, unit="µg/m3"))
    outcome = assessed(limits=limits)
    first, second = (value(outcome, c.value) for c in outcome.comparisons)
    assert second == pytest.approx(first * 1e6, rel=1e-12)


# ---- F factors -------------------------------------------------------------------------------------------------

COAL = {
    "carbon": number(70.0, "%"),
    "hydrogen": number(5.0, "%"),
    "nitrogen": number(1.5, "%"),
    "sulfur": number(2.0, "%"),
    "oxygen": number(9.0, "%"),
    "water": number(5.0, "%"),
    "ash": number(7.5, "%"),
    "gross_heating_value": number(12500.0, "Btu/lb"),
}


def test_f_factors_from_an_analysis() -> None:
    """19-13: 1E6 (3.64 H + 1.53 C + 0.57 S + 0.14 N - 0.46 O)/GCV; 19-14 with 5.57 H and 0.21 H2O; 19-15: 0.321 C."""
    outcome = _rate(fuels=(fuel("mill coal", "analysis", **COAL),))
    common = 1.53 * 70 + 0.57 * 2 + 0.14 * 1.5 - 0.46 * 9
    fd = 1e6 * (3.64 * 5 + common) / 12500
    assert value(outcome, "fuel.mill_coal.fd") == pytest.approx(fd, rel=1e-12)
    fw = 1e6 * (5.57 * 5 + common + 0.21 * 5) / 12500
    assert value(outcome, "fuel.mill_coal.fw") == pytest.approx(fw, rel=1e-12)
    assert value(outcome, "fuel.mill_coal.fc") == pytest.approx(1e6 * 0.321 * 70 / 12500, rel=1e-12)
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * fd * 20.9 / 15.9, rel=1e-12)


def test_a_dry_analysis_gives_no_wet_factor() -> None:
    outcome = _rate(fuels=(fuel("mill coal", "analysis", analysis_basis="dry", **COAL),))
    assert "fuel.mill_coal.fw" not in outcome.ledger
    assert "fuel.mill_coal.fd" in outcome.ledger


@pytest.mark.parametrize("lacking", ["carbon", "hydrogen", "gross_heating_value"])
def test_an_analysis_without_its_main_parts_gives_no_factor(lacking: str) -> None:
    parts = {name: entry for name, entry in COAL.items() if name != lacking}
    outcome = _rate(fuels=(fuel("mill coal", "analysis", **parts),))
    assert "factor-missing" in codes(outcome)
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert comparison(outcome).is_met is None


def test_f_factors_from_a_gas_composition() -> None:
    """Pure methane by 19-13 to 19-15: 12.011/16.043 carbon and 4.032/16.043 hydrogen by weight; gross heating value
    890.58 kJ/mol (ISO 6976:2016, 25 °C) over 16.043 g/mol in Btu/lb.
    """
    outcome = _rate(fuels=(fuel("line gas", "gas analysis"),), fuel_gas=(component("line gas", "CH4", 100.0),))
    carbon, hydrogen = 1201.1 / 16.043, 403.2 / 16.043
    gcv = 890.58e3 / 16.043 / 2.326
    fd = 1e6 * (3.64 * hydrogen + 1.53 * carbon) / gcv
    assert value(outcome, "fuel.line_gas.fd") == pytest.approx(fd, rel=5e-4)
    assert value(outcome, "fuel.line_gas.fw") == pytest.approx(1e6 * (5.57 * hydrogen + 1.53 * carbon) / gcv, rel=5e-4)
    assert value(outcome, "fuel.line_gas.fc") == pytest.approx(1e6 * 0.321 * carbon / gcv, rel=5e-4)
    used = value(outcome, "fuel.line_gas.fd")
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * used * 20.9 / 15.9, rel=1e-12)


def test_the_stoichiometric_factors_of_a_gas_stand_beside() -> None:
    """Own derivation with heats of formation of the `chemicals` library: 8624, 10 637, 1006 scf/MMBtu for methane."""
    outcome = _rate(fuels=(fuel("line gas", "gas analysis"),), fuel_gas=(component("line gas", "CH4", 100.0),))
    found = {k: value(outcome, f"fuel.line_gas.composition.{k}.composition") for k in ("fd", "fw", "fc")}
    assert found["fd"] == pytest.approx(8624, rel=2e-3)
    assert found["fw"] == pytest.approx(10637, rel=2e-3)
    assert found["fc"] == pytest.approx(1006, rel=2e-3)


def test_a_published_fuel_in_any_case() -> None:
    outcome = _rate(fuels=(fuel("Natural Gas"),))
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * FD * 20.9 / 15.9, rel=1e-12)


def test_an_unknown_fuel_has_no_factor() -> None:
    outcome = _rate(fuels=(fuel("mill gas"),))
    assert "factor-missing" in codes(outcome)
    assert comparison(outcome).is_met is None


def test_no_fuel() -> None:
    outcome = _rate(fuels=())
    assert "fuel-missing" in codes(outcome)


def test_the_table_named_by_the_limit() -> None:
    limits = (
        limit("A", value=0.1, unit="lb/MMBtu"),
        limit("B", value=0.1, unit="lb/MMBtu", factor_table="40 CFR 60.45(f)(4)"),
    )
    outcome = _rate(limits=limits)
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * 8710 * 20.9 / 15.9, rel=1e-12)
    assert value(outcome, "run.1.nox.emission_rate.limit_b") == pytest.approx(C * 8740 * 20.9 / 15.9, rel=1e-12)
    assert said(outcome, "F factors of table 60.45(f) are used for limit B")


def test_a_table_that_is_not_known_gives_no_rate() -> None:
    outcome = _rate(of_limit={"factor_table": "Table 9 of the invented handbook"})
    assert comparison(outcome).is_met is None
    assert "factor-missing" in codes(outcome)


# ---- mixed fuels -----------------------------------------------------------------------------------------------


def _mixed(**more: Any) -> Outcome:
    """Gas and oil, metered: run 1 burns 3000 scf/h of gas at 1000 Btu/scf and 50 gal/h of oil at 140 000 Btu/gal."""
    uses = []
    for name, gas, oil in (("1", 3000.0, 50.0), ("2", 7000.0, 50.0), ("3", 7000.0, 0.0)):
        gas_heat, oil_heat = number(1000.0, "Btu/ft3"), number(140_000.0, "Btu/gal")
        uses.append(fuel_use(name, rate=number(gas, "ft3/h"), heating_value=gas_heat))
        uses.append(fuel_use(name, "distillate oil", rate=number(oil, "gal/h"), heating_value=oil_heat))
    usual: dict[str, Any] = {"fuels": (fuel(), fuel("distillate oil")), "fuel_use": tuple(uses)}
    return _rate(**(usual | more))


def test_shares_by_each_run_s_heat_input() -> None:
    """Heat: run 1 3 + 7, run 2 7 + 7, run 3 7 + 0 MMBtu/h: shares of gas 0.3, 0.5, 1 (19-16: sum of X F)."""
    outcome = _mixed()
    for name, share in (("1", 0.3), ("2", 0.5), ("3", 1.0)):
        assert value(outcome, f"run.{name}.share.natural_gas") == pytest.approx(share, rel=1e-12)
        fd = share * 8710 + (1 - share) * 9190
        assert value(outcome, f"run.{name}.fd") == pytest.approx(fd, rel=1e-12)
        assert value(outcome, f"run.{name}.fc") == pytest.approx(share * 1040 + (1 - share) * 1420, rel=1e-12)
        assert value(outcome, f"run.{name}.nox.emission_rate") == pytest.approx(C * fd * 20.9 / 15.9, rel=1e-12)
    assert value(outcome, "run.1.heat_input") == pytest.approx(10.0, rel=1e-12)


def test_the_fuel_factor_of_a_blend_is_held_to_12_percent() -> None:
    """Method 3B, 12.3.3: Fo = 0.209 F_d/F_c of the prorated factors, 12 % either way."""
    outcome = _mixed()
    fo = 0.209 * (0.3 * 8710 + 0.7 * 9190) / (0.3 * 1040 + 0.7 * 1420)
    assert value(outcome, "run.1.combustion.fuel_factor.lowest") == pytest.approx(0.88 * fo, rel=1e-12)
    assert value(outcome, "run.1.combustion.fuel_factor.highest") == pytest.approx(1.12 * fo, rel=1e-12)


def test_shares_as_entered() -> None:
    fuels = (
        fuel(share_of_heat_input=number(25.0, "%")),
        fuel("distillate oil", share_of_heat_input=number(75.0, "%")),
    )
    outcome = _mixed(fuels=fuels, fuel_use=())
    assert value(outcome, "run.1.fd") == pytest.approx(0.25 * 8710 + 0.75 * 9190, rel=1e-12)


@pytest.mark.parametrize("second", [70.0, None])
def test_shares_that_do_not_make_a_whole_give_no_rate(second: float | None) -> None:
    share = None if second is None else number(second, "%")
    fuels = (fuel(share_of_heat_input=number(25.0, "%")), fuel("distillate oil", share_of_heat_input=share))
    outcome = _mixed(fuels=fuels, fuel_use=())
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert "fuel-missing" in codes(outcome)


def test_a_fuel_use_that_cannot_be_read_leaves_no_share() -> None:
    """Oil with a net heating value: the gas is not taken as the only fuel."""
    uses = (
        fuel_use("1", rate=number(3000.0, "ft3/h"), heating_value=number(1000.0, "Btu/ft3")),
        fuel_use(
            "1", "distillate oil", rate=number(50.0, "gal/h"), heating_value=number(130_000.0, "Btu/gal"),
            heating_value_kind="net",
        ),
    )  # fmt: skip
    outcome = _mixed(fuel_use=uses)
    assert "run.1.nox.emission_rate" not in outcome.ledger
    assert "heat-input-missing" in codes(outcome)


def test_the_only_fuel_metered_is_taken_as_the_only_one_and_said() -> None:
    uses = tuple(
        fuel_use(name, rate=number(3000.0, "ft3/h"), heating_value=number(1000.0, "Btu/ft3")) for name in "123"
    )
    outcome = _mixed(fuel_use=uses)
    assert value(outcome, "run.1.nox.emission_rate") == pytest.approx(C * FD * 20.9 / 15.9, rel=1e-12)
    assert said(outcome, "Run 1: natural gas is the only fuel in Fuel use")


# ---- mass rates ------------------------------------------------------------------------------------------------

HEAT = {"heat_input": number(50.0, "MMBtu/h")}
FLOW = {
    "stack_flow": number(600_000.0, "dscfh"),
    "flow_basis": "dry standard",
    "flow_standard_temperature": number(68.0, "°F"),
    "flow_standard_pressure": number(29.92, "inHg"),
}
BY_HEAT = C * FD * 20.9 / 15.9 * 50.0
BY_FLOW = C * 600_000.0


def _mass(of_runs: dict[str, Any], route: str = "", **of_limit: Any) -> Outcome:
    fields = {"mass_rate_route": route} if route else {}
    return _rate(of_runs=of_runs, limits=(limit(value=5.0, unit="lb/h", **fields, **of_limit),))


def test_mass_rate_from_heat_input_and_the_flow_as_cross_check() -> None:
    """E H; C Q; the difference in percent of the limit's route."""
    outcome = _mass(HEAT | FLOW, "heat input")
    assert value(outcome, "run.1.nox.mass_rate") == pytest.approx(BY_HEAT, rel=1e-12)
    assert value(outcome, "run.1.nox.mass_rate.by_flow") == pytest.approx(BY_FLOW, rel=1e-12)
    apart = 100 * (BY_FLOW - BY_HEAT) / BY_HEAT
    assert value(outcome, "run.1.nox.mass_rate.route_difference") == pytest.approx(apart, rel=1e-9)
    assert ("routes-disagree" in codes(outcome)) == (abs(apart) > 10)
    assert value(outcome, comparison(outcome).cross) == pytest.approx(BY_FLOW, rel=1e-12)


def test_the_flow_route_where_the_limit_says_so() -> None:
    outcome = _mass(HEAT | FLOW, "flow")
    assert value(outcome, "run.1.nox.mass_rate") == pytest.approx(BY_FLOW, rel=1e-12)
    assert value(outcome, "run.1.nox.mass_rate.by_heat_input") == pytest.approx(BY_HEAT, rel=1e-12)


def test_routes_that_disagree_are_said() -> None:
    outcome = _mass(HEAT | FLOW | {"stack_flow": number(750_000.0, "dscfh")}, "heat input")
    assert codes(outcome).count("routes-disagree") >= 3


@pytest.mark.parametrize(
    ("of_runs", "route", "code"), [(HEAT, "flow", "flow-missing"), (FLOW, "heat input", "heat-input-missing")]
)
def test_the_limit_s_own_route_or_none(of_runs: dict[str, Any], route: str, code: str) -> None:
    outcome = _mass(of_runs, route)
    assert code in codes(outcome)
    assert comparison(outcome).is_met is None
    assert "run.1.nox.mass_rate" not in outcome.ledger


def test_without_a_route_the_one_at_hand_is_taken() -> None:
    assert value(_mass(FLOW), "run.1.nox.mass_rate") == pytest.approx(BY_FLOW, rel=1e-12)
    assert value(_mass(HEAT), "run.1.nox.mass_rate") == pytest.approx(BY_HEAT, rel=1e-12)
    assert value(_mass(HEAT | FLOW), "run.1.nox.mass_rate") == pytest.approx(BY_HEAT, rel=1e-12)


def test_with_neither_the_heat_input_is_missed() -> None:
    outcome = _mass({})
    assert "heat-input-missing" in codes(outcome)


# ---- flow ------------------------------------------------------------------------------------------------------


def _flow(**of_runs: Any) -> Outcome:
    return _mass(of_runs, "flow")


def test_a_wet_standard_flow_needs_moisture() -> None:
    """600 000 (1 - 0.16) dscfh."""
    outcome = _flow(**(FLOW | {"flow_basis": "wet standard", "stack_flow": number(600_000.0, "ft3/h")}))
    assert value(outcome, "run.1.flow.dry_standard") == pytest.approx(504_000.0, rel=1e-12)


def test_an_actual_flow() -> None:
    """Method 2: 20 000 acfm x 60 x 528/(460 + 300) x P/29.92 x (1 - 0.16), P = 29.5 - 0.5/13.6 inHg."""
    outcome = _flow(
        stack_flow=number(20_000.0, "ft3/min"),
        flow_basis="actual",
        stack_temperature=number(300.0, "°F"),
        barometric_pressure=number(29.5, "inHg"),
        static_pressure=number(-0.5, "inH2O"),
    )
    expected = 20_000 * 60 * 528 / 760 * (29.5 - 0.5 / 13.6) / 29.92 * 0.84
    assert value(outcome, "run.1.flow.dry_standard") == pytest.approx(expected, rel=1e-12)


def test_an_actual_flow_without_temperature_is_missing() -> None:
    outcome = _flow(stack_flow=number(20_000.0, "ft3/min"), flow_basis="actual")
    assert "flow-missing" in codes(outcome)


def test_a_flow_at_other_standard_conditions_is_restated() -> None:
    """60 °F and 29.92 inHg to 68 °F: (68 + 459.67)/(60 + 459.67)."""
    outcome = _flow(**(FLOW | {"flow_standard_temperature": number(60.0, "°F")}))
    assert value(outcome, "run.1.flow.dry_standard") == pytest.approx(600_000 * 527.67 / 519.67, rel=1e-12)


def test_a_flow_in_normal_cubic_metres_is_at_zero_celsius() -> None:
    """Nm3/h: 273.15 K; at 20 °C it is 293.15/273.15 as much."""
    outcome = _rate(
        **SI,
        of_runs={"stack_flow": number(10_000.0, "Nm3/h"), "flow_basis": "dry standard"},
        limits=(limit(value=5.0, unit="kg/h", mass_rate_route="flow"),),
    )
    assert value(outcome, "run.1.flow.dry_standard") == pytest.approx(10_000 * 293.15 / 273.15, rel=1e-9)
    assert "standard-conditions-assumed" not in codes(outcome)


def test_one_standard_condition_entered_is_not_dropped() -> None:
    """0 °C entered, pressure not: the pressure alone is assumed, and said."""
    of_runs = {
        "stack_flow": number(10_000.0, "m3/h"),
        "flow_basis": "dry standard",
        "flow_standard_temperature": number(0.0, "°C"),
    }
    outcome = _rate(**SI, of_runs=of_runs, limits=(limit(value=5.0, unit="kg/h", mass_rate_route="flow"),))
    assert value(outcome, "run.1.flow.dry_standard") == pytest.approx(10_000 * 293.15 / 273.15, rel=1e-9)
    found = next(p for p in outcome.problems if p.code == "standard-conditions-assumed")
    assert "the pressure of 20 °C, 101.325 kPa taken" in found.found


def test_standard_conditions_not_entered_are_said() -> None:
    outcome = _flow(stack_flow=number(600_000.0, "ft3/h"), flow_basis="dry standard")
    assert "standard-conditions-assumed" in codes(outcome)
    assert value(outcome, "run.1.flow.dry_standard") == pytest.approx(600_000.0, rel=1e-12)


@pytest.mark.parametrize(
    ("unit", "basis"), [("ft3/h", None), ("acfm", "dry standard")], ids=["no basis", "contradiction"]
)
def test_a_flow_without_or_against_its_basis(unit: str, basis: str | None) -> None:
    outcome = _flow(stack_flow=number(600_000.0, unit), flow_basis=basis)
    assert "basis-missing" in codes(outcome)
    assert comparison(outcome).is_met is None


# ---- mass concentration ----------------------------------------------------------------------------------------

R = 8.314462618


def _milligrams(ppm: float, molar_mass: float, kelvin: float, kpa: float = 101.325) -> float:
    return ppm * molar_mass * kpa / (R * kelvin)


def test_mass_concentration_at_the_limit_s_conditions() -> None:
    """NOx as NO2 (46.005), CO 28.010: ppm M P/(R T), at 273.15 K and at 293.15 K."""
    limits = (
        limit("A", value=100.0, unit="mg/Nm3"),
        limit("B", value=100.0, unit="mg/m3", standard_temperature=number(20.0, "°C"),
              standard_pressure=number(101.325, "kPa")),
        limit("C", "CO", 100.0, "mg/Nm3"),
    )  # fmt: skip
    outcome = assessed(**SI, limits=limits)
    assert value(outcome, "run.1.nox.mass_concentration") == pytest.approx(_milligrams(40, 46.005, 273.15), rel=1e-9)
    other = value(outcome, "run.1.nox.mass_concentration.limit_b")
    assert other == pytest.approx(_milligrams(40, 46.005, 293.15), rel=1e-9)
    assert value(outcome, "run.1.co.mass_concentration") == pytest.approx(_milligrams(10, 28.010, 273.15), rel=1e-9)
    assert outcome.ledger["run.1.nox.mass_concentration"].basis.expressed_as == "NO2"
    assert "standard-conditions-assumed" not in codes(outcome)


def test_mass_concentration_at_reference_oxygen_with_21() -> None:
    fields = {"reference_oxygen": number(6.0, "%"), "oxygen_constant": number(21.0, "%")}
    outcome = assessed(**SI, limits=(limit(value=300.0, unit="mg/Nm3", **fields),))
    expected = _milligrams(40, 46.005, 273.15) * 15 / 16
    assert value(outcome, "run.1.nox.mass_concentration.at_reference") == pytest.approx(expected, rel=1e-9)


def test_plain_and_referenced_at_different_conditions_do_not_share_a_number() -> None:
    """A plain limit at 273.15 K, then a referenced one at 20 °C."""
    fields = {"reference_oxygen": number(6.0, "%"), "oxygen_constant": number(21.0, "%")}
    at_20 = {"standard_temperature": number(20.0, "°C"), "standard_pressure": number(101.325, "kPa")}
    limits = (limit("A", value=300.0, unit="mg/Nm3"), limit("B", value=300.0, unit="mg/m3", **fields, **at_20))
    outcome = assessed(**SI, limits=limits)
    expected = _milligrams(40, 46.005, 293.15) * 15 / 16
    assert value(outcome, comparison(outcome, "b").value) == pytest.approx(expected, rel=1e-9)
    assert comparison(outcome, "b").is_met is True


def test_conditions_not_entered_are_said() -> None:
    outcome = assessed(**SI, limits=(limit(value=300.0, unit="mg/m3"),))
    assert "standard-conditions-assumed" in codes(outcome)
    assert value(outcome, "run.1.nox.mass_concentration") == pytest.approx(_milligrams(40, 46.005, 293.15), rel=1e-9)


@pytest.mark.parametrize(
    ("pollutant", "words", "is_made"),
    [("NOx", "NO2", True), ("NOx", "as NO2", True), ("NOx", "no2", True), ("NOx", "NO", False), ("CO", "CO", True)],
)
def test_what_a_mass_is_expressed_as(pollutant: str, words: str, is_made: bool) -> None:
    outcome = assessed(**SI, limits=(limit(pollutant=pollutant, value=300.0, unit="mg/Nm3", expressed_as=words),))
    assert (comparison(outcome).is_met is not None) == is_made
    assert ("basis-missing" in codes(outcome)) != is_made


def test_a_wet_limit() -> None:
    """40 ppm dry at 16 % moisture is 33.6 ppm wet."""
    outcome = assessed(runs=runs(moisture=number(16.0, "%")), limits=(limit(wet=True, value=34.0),))
    assert value(outcome, comparison(outcome).value) == pytest.approx(33.6, rel=1e-12)
    assert comparison(outcome).quantity == "nox.wet"
    assert comparison(outcome).is_met is True


# ---- output ----------------------------------------------------------------------------------------------------


def test_mass_per_output() -> None:
    """lb/h over MW: lb/MWh; hp to MW by 745.69987158 W."""
    outcome = _rate(of_runs=HEAT | {"output": number(4.0, "MW")}, limits=(limit(value=1.0, unit="lb/MWh"),))
    assert value(outcome, comparison(outcome).value) == pytest.approx(BY_HEAT / 4.0, rel=1e-12)
    engine = _rate(of_runs=HEAT | {"output": number(5000.0, "hp")}, limits=(limit(value=1.0, unit="lb/MWh"),))
    assert value(engine, comparison(engine).value) == pytest.approx(BY_HEAT / (5000 * 745.69987158e-6), rel=1e-8)


def test_grams_per_kilowatt_hour_in_si() -> None:
    """50 GJ/h, E in ng/J: E x 50 x 0.001 kg/h over 4 MW, in g/kWh."""
    of_runs = {"heat_input": number(50.0, "GJ/h"), "output": number(4.0, "MW")}
    outcome = _rate(**SI, of_runs=of_runs, limits=(limit(value=1.0, unit="g/kWh"),))
    rate = 40 * 1.912e6 * FD * PER_J * 20.9 / 15.9
    assert value(outcome, comparison(outcome).value) == pytest.approx(rate * 50 * 0.001 / 4, rel=1e-9)


@pytest.mark.parametrize("output", [None, 0.0])
def test_no_output_no_result(output: float | None) -> None:
    of_runs = HEAT | ({} if output is None else {"output": number(output, "MW")})
    outcome = _rate(of_runs=of_runs, limits=(limit(value=1.0, unit="lb/MWh"),))
    assert "basis-missing" in codes(outcome)
    assert comparison(outcome).is_met is None


# ---- what is read beside ---------------------------------------------------------------------------------------


def test_load_output_and_the_installed_monitor_stand_beside() -> None:
    made = record(runs=runs(load=number(42.0), load_unit=None, load_basis=number(50.0), output=number(4.0, "MW")))
    outcome = assess(rerun(made, "1", installed_monitor_mean=number(41.2, "ppm")))
    assert value(outcome, "run.1.load.share") == pytest.approx(84.0, rel=1e-12)
    assert value(outcome, "run.1.nox.installed_monitor") == 41.2
    assert "run.2.nox.installed_monitor" not in outcome.ledger
    assert value(outcome, "average.nox.dry") == pytest.approx(40.0, rel=1e-12)


def test_load_and_permitted_maximum_in_different_units() -> None:
    outcome = assessed(runs=runs(load=number(42.0, "MW"), load_basis=number(50_000.0, "kW")))
    assert value(outcome, "run.1.load.share") == pytest.approx(84.0, rel=1e-12)
    foreign = assessed(runs=runs(load=number(42.0, "MW"), load_basis=number(50.0, "klb/h")))
    assert "run.1.load.share" not in foreign.ledger
    assert said(foreign, "the load has no share of the permitted maximum")


def test_a_result_nobody_asks_for_says_why_it_is_missing() -> None:
    outcome = assessed(fuels=(fuel(),))
    assert said(outcome, "NOx, mass rate: not stated in run 1, 2, 3; no heat input.")
    assert replace(outcome, stated=()).comparisons == ()
