"""Methods 2, 3, 3B and 4: printed constants against physics, and the basis of flows and volumes."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import pytest

from reporter.basis import ACTUAL, DRY, EPA_STANDARD, NORMAL, WET, Basis, Moisture
from reporter.equation import Equation, System
from reporter.errors import BasisError
from reporter.ledger import Ledger, Stated
from reporter.methods import method_2 as m2
from reporter.methods import method_3 as m3
from reporter.methods import method_3b as m3b
from reporter.methods import method_4 as m4
from reporter.methods.mass_concentration import molar_volume
from reporter.typeset import text_formula
from reporter.units import convert, quantity, registry

SAID = Stated("test value")
CONSTANTS = Path(__file__).parents[1] / "published" / "method_4" / "constants.json"


def _constant(eq: Equation[Any], name: str, system: System) -> float:
    printed = eq.parameters[name].constant
    assert printed is not None
    return printed.value(system)


US, SI = System.US, System.SI
MMHG = convert(1.0, "kPa", "mmHg")
PRINTED = {
    "k": _constant(m4.metered_volume, "k", US),
    "k_metric": _constant(m4.metered_volume, "k", SI) / MMHG,
    "k1": _constant(m4.water_volume_from_volume, "k", US),
    "k1_metric": _constant(m4.water_volume_from_volume, "k", SI),
    "k1_current": _constant(m4.water_volume_from_mass, "k", US),
    "k3_metric": _constant(m4.water_volume_from_mass, "k", SI),
    "kp": _constant(m2.stack_velocity, "kp", US),
    "kp_metric": _constant(m2.stack_velocity, "kp", SI),
}
ROWS = [row for row in json.loads(CONSTANTS.read_text(encoding="utf-8"))["table"] if row["symbol"] in PRINTED]


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['symbol']} [{row['status']}]")
def test_constants_are_the_printed_ones(row: dict[str, Any]) -> None:
    assert PRINTED[row["symbol"]] == pytest.approx(row["value"], rel=1e-12)


def test_only_the_older_silica_gel_constant_is_not_used() -> None:
    rows = json.loads(CONSTANTS.read_text(encoding="utf-8"))["table"]
    assert {row["symbol"] for row in rows} - set(PRINTED) == {"k3"}


# One gram and one millilitre of water as vapour at 68 °F and 29.92 inHg, from the ideal gas, 18.0153 g/mol and
# 0.9982 g/mL (the density of water at 20 °C); the printed constants are rounded to four digits.
@pytest.mark.parametrize("system", [US, SI])
def test_water_constants_against_physics(system: System) -> None:
    t, p = (527.67, 29.9213) if system is US else (293.15, 101.325)
    mole = molar_volume.in_system(system)(temperature=t, pressure=p)
    per_gram = mole / 453.59237 / 18.0153 if system is US else mole / 1000.0 / 18.0153
    assert _constant(m4.water_volume_from_mass, "k", system) == pytest.approx(per_gram, rel=4e-4)
    assert _constant(m4.silica_gel_volume, "k", system) == pytest.approx(per_gram, rel=4e-4)
    assert _constant(m4.water_volume_from_volume, "k", system) == pytest.approx(per_gram * 0.9982, rel=4e-4)


def test_meter_constant_is_a_rounded_ratio_of_standard_conditions() -> None:
    # 528/29.92 = 17.647, 527.67/29.92 = 17.636; 293/760 = 0.38553, 293.15/760 = 0.38572.
    assert _constant(m4.metered_volume, "k", US) == pytest.approx(528.0 / 29.92, rel=5e-4)
    assert _constant(m4.metered_volume, "k", US) == pytest.approx(527.67 / 29.92, rel=3e-4)
    assert _constant(m4.metered_volume, "k", SI) == pytest.approx(293.0 / 101.325, rel=8e-4)


@pytest.mark.parametrize(
    ("system", "units"),
    [
        (US, ("inch_H2O", "degR", "inch_Hg", "pound/pound_mole", "foot/second")),
        (SI, ("millimeter_H2O", "kelvin", "millimeter_Hg", "gram/mole", "meter/second")),
    ],
)
def test_pitot_constant_against_physics(system: System, units: tuple[str, ...]) -> None:
    # v = (2 dp R T / (P M))^(1/2) with one of each unit; the printed constant lies between a water column of 4 °C
    # (the conventional unit) and one of 20 °C (0.9982 of its density).
    ureg = registry()
    dp, t, p, m, v = (ureg.Quantity(1.0, unit) for unit in units)
    gas = ureg.Quantity(8.314462618, "joule/(mole*kelvin)")
    cold = ((2 * dp * gas * t / (p * m)) ** 0.5).to(v.units).magnitude
    assert 0.9982**0.5 * cold < _constant(m2.stack_velocity, "kp", system) < cold


def test_velocity_uses_the_mean_of_the_roots() -> None:
    given = {"pitot": 0.84, "temperature": 770.0, "pressure": 29.76, "ms": 28.1}
    found = m2.stack_velocity(velocity_pressures=[0.25, 0.36], **given)
    expected = 85.49 * 0.84 * 0.55 * math.sqrt(770.0 / (29.76 * 28.1))
    assert found == pytest.approx(expected, rel=1e-14)


def test_the_rounded_set_differs_from_the_exact_one_by_a_few_hundredths_of_a_percent() -> None:
    rounded = m2.flow_to_standard(flow=1000.0, temperature=350.0, pressure=29.92)
    exact = 1000.0 * 527.67 / (350.0 + 459.67)
    assert rounded / exact - 1.0 == pytest.approx(2.2e-4, abs=1e-5)
    assert m2.flow_to_standard(flow=1000.0, temperature=68.0, pressure=29.92) == pytest.approx(1000.0)
    assert m2.absolute_temperature(temperature=68.0) == 528.0
    assert m2.absolute_temperature.in_system(SI)(temperature=20.0) == 293.0


def test_static_pressure_is_signed() -> None:
    assert m2.absolute_pressure(barometric=29.9, static=-1.36) == pytest.approx(29.8, rel=1e-14)
    assert m2.absolute_pressure_metric(barometric=101.0, static=-0.5) == 100.5


def test_no_constant_of_one_is_printed_where_both_pressures_have_one_unit() -> None:
    """Common practice: pressures in kPa are added as they are."""
    assert text_formula(m2.absolute_pressure_metric.symbols()) == "P_bar + P_g"


def test_a_barometer_is_lower_by_a_tenth_of_an_inch_in_a_hundred_feet() -> None:
    """Method 2, section 6.5: minus 0.1 in. Hg in 100 ft, minus 2.5 mm Hg in 30 m; in millimetres and metres here."""
    assert m2.barometer_at(station=29.92, rise=1000.0) == pytest.approx(28.92, rel=1e-14)
    assert m2.barometer_at.in_system(SI)(station=101.3, rise=30.0) == pytest.approx(101.3 - 2.5 * 0.13332, abs=5e-4)


def test_areas() -> None:
    assert m2.area_round(diameter=2.0) == pytest.approx(math.pi, rel=1e-15)
    assert m2.area_rectangular(width=2.0, depth=3.0) == 6.0


def test_a_restated_flow_is_the_ideal_gas_ratio() -> None:
    # 60 °F and 14.696 psia to 68 °F and 29.92 inHg: 1.5 % of volume (common practice).
    found = m2.restated_flow(flow=1000.0, temperature=60.0, pressure=convert(14.696, "psi", "inHg"))
    assert found == pytest.approx(1015.4, abs=0.1)
    normal = m2.restated_flow.in_system(SI)(flow=1000.0, temperature=0.0, pressure=101.325)
    assert normal == pytest.approx(1000.0 * 293.15 / 273.15, rel=1e-14)


def _flows() -> Ledger:
    ledger = Ledger()
    ledger.enter("actual", 1e6, "ft3/h", SAID, basis=Basis(moisture=Moisture.WET, standard=ACTUAL))
    ledger.enter("normal", 1e6, "ft3/h", SAID, basis=Basis(moisture=Moisture.WET, standard=NORMAL))
    ledger.enter("temp", 350.0, "°F", SAID)
    ledger.enter("press", 29.8, "inHg", SAID)
    ledger.enter("bws", 0.1, "1", SAID)
    return ledger


def test_a_flow_becomes_standard_then_dry() -> None:
    ledger = _flows()
    inputs = {"flow": "actual", "temperature": "temp", "pressure": "press"}
    standard = ledger.apply(m2.flow_to_standard, "standard", inputs)
    assert standard.basis == Basis(moisture=Moisture.WET, standard=EPA_STANDARD)
    dry = ledger.apply(m2.dry_flow, "dry", {"flow": standard, "bws": "bws"})
    assert dry.basis == Basis(moisture=Moisture.DRY, standard=EPA_STANDARD)
    back = ledger.apply(m2.wet_flow, "wet", {"flow": dry, "bws": "bws"})
    assert back.value == pytest.approx(standard.value, rel=1e-14)
    with pytest.raises(BasisError, match="must be wet"):
        ledger.apply(m2.dry_flow, "twice", {"flow": dry, "bws": "bws"})


def test_actual_and_standard_flows_are_not_mixed_up() -> None:
    ledger = _flows()
    given = {"temperature": "temp", "pressure": "press"}
    with pytest.raises(BasisError, match="actual conditions"):
        ledger.apply(m2.flow_to_standard, "standard", given | {"flow": "normal"})
    with pytest.raises(BasisError, match="actual conditions"):
        ledger.apply(m2.restated_flow, "restated", given | {"flow": "actual"})
    assert ledger.apply(m2.restated_flow, "done", given | {"flow": "normal"}).basis.standard == EPA_STANDARD


def test_molecular_weights() -> None:
    md = m3.dry_molecular_weight(co2=10.0, o2=8.0, n2=82.0, co=0.0)
    assert md == pytest.approx(4.4 + 2.56 + 22.96, rel=1e-14)
    assert m3.wet_molecular_weight(md=30.0, bws=0.1) == pytest.approx(28.8, rel=1e-14)
    assert m3.nitrogen_by_difference(co2=10.0, o2=8.0, co=0.5) == 81.5


def test_molecular_weight_needs_a_dry_composition() -> None:
    ledger = Ledger()
    for key, basis in (("dioxide", DRY), ("oxygen", WET), ("monoxide", DRY), ("nitrogen", DRY)):
        ledger.enter(key, 5.0, "%", SAID, basis=basis)
    inputs = {"co2": "dioxide", "o2": "oxygen", "n2": "nitrogen", "co": "monoxide"}
    with pytest.raises(BasisError, match="o2 must be dry"):
        ledger.apply(m3.dry_molecular_weight, "md", inputs)


def test_excess_air_of_air_and_of_stoichiometric_gas() -> None:
    # Dry air-like nitrogen with no oxygen left: no excess air; CO counts against the oxygen.
    assert m3b.excess_air(o2=0.0, co=0.0, n2=88.0) == 0.0
    assert m3b.excess_air(o2=0.5, co=1.0, n2=88.0) == 0.0
    assert m3b.oxygen_adjusted(o2=5.0, co=0.4) == pytest.approx(4.8)
    assert m3b.carbon_dioxide_adjusted(co2=10.0, co=0.4) == pytest.approx(10.4)


def test_moisture_of_a_train_in_both_systems() -> None:
    us = m4.moisture_fraction(
        water=m4.water_volume_from_mass(mass=100.0),
        silica=m4.silica_gel_volume(mass=8.0),
        gas=m4.metered_volume(start=100.0, end=135.0, factor=1.002, temperature=85.0, pressure=29.9),
    )
    si = m4.moisture_fraction(
        water=m4.water_volume_from_mass.in_system(SI)(mass=100.0),
        silica=m4.silica_gel_volume.in_system(SI)(mass=8.0),
        gas=m4.metered_volume.in_system(SI)(
            start=0.0,
            end=convert(35.0, "ft3", "m3"),
            factor=1.002,
            temperature=convert(85.0, "°F", "°C"),
            pressure=convert(29.9, "inHg", "kPa"),
        ),
    )
    # Printed constants: 17.64 is 0.04 % below 528/29.92, 0.3858 is 0.07 % above 293/760, and the water constants of
    # the two systems are 0.03 % apart; times 1 - B_ws that is 0.12 % of B_ws.
    assert si == pytest.approx(us, rel=1.25e-3)
    assert 0.12 < us < 0.14


def test_the_lower_of_two_moistures() -> None:
    assert m4.lower_moisture(measured=0.16, saturation=0.12) == 0.12
    assert m4.lower_moisture(measured=0.10, saturation=0.12) == 0.10
    assert m4.saturation_moisture(vapour_pressure=12.35, pressure=101.3) == pytest.approx(0.1219, abs=1e-4)


def test_metered_volume_of_quantities_in_other_units_is_the_same_volume() -> None:
    bare = m4.metered_volume(start=0.0, end=35.0, factor=1.0, temperature=85.0, pressure=29.9)
    mixed = m4.metered_volume(
        start=quantity(0.0, "ft3"),
        end=quantity(convert(35.0, "ft3", "m3"), "m3"),
        factor=quantity(1.0, "1"),
        temperature=quantity(85.0, "°F"),
        pressure=quantity(convert(29.9, "inHg", "mmHg"), "mmHg"),
    )
    assert mixed.to("foot**3").magnitude == pytest.approx(bare, rel=1e-12)
