"""Correction to a reference diluent as each limit fixes it: (k - ref)/(k - O2), the CO2 route, refusals, sensitivity.

Equations: 40 CFR 60.4213(d) (20.9 - ref)/(20.9 - O2); directive 2010/75/EU (21 - ref)/(21 - O2).
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from reporter.outcome import Outcome
from tests.record_factory import (
    assess,
    assessed,
    calibrations,
    channel,
    codes,
    comparison,
    cylinder,
    cylinders,
    fuel,
    limit,
    number,
    readings,
    recalibrated,
    record,
    said,
    value,
)


def _at(reference: float = 3.0, k: float | None = 20.9, *, o2: float = 5.0, co2: float = 9.0, **more: Any) -> Outcome:
    fields: dict[str, Any] = {"reference_oxygen": number(reference, "%")}
    if k is not None:
        fields["oxygen_constant"] = number(k, "%")
    limits = (limit(**(fields | more.pop("of_limit", {}))),)
    values = {"NOx": 40.0, "CO": 10.0, "O2": o2, "CO2": co2}
    return assessed(limits=limits, readings=readings(values), **more)


@pytest.mark.parametrize(
    ("reference", "k", "o2"),
    [(3.0, 20.9, 5.0), (15.0, 20.9, 14.0), (11.0, 21.0, 9.0), (6.0, 21.0, 8.0), (0.0, 20.9, 5.0), (3.0, 20.9, -0.2)],
)
def test_reference_oxygen(reference: float, k: float, o2: float) -> None:
    outcome = _at(reference, k, o2=o2, co2=4.0)
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * (k - reference) / (k - o2), rel=1e-12)
    basis = outcome.ledger["run.1.nox.at_reference"].basis
    assert (basis.oxygen.reference, basis.oxygen.constant) == (reference, k)


def test_a_constant_not_entered_is_20_9_and_said() -> None:
    outcome = _at(k=None)
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * 17.9 / 15.9, rel=1e-12)
    assert said(outcome, "Limit L1: no oxygen constant was entered; 20.9 % is taken")
    assert comparison(outcome).is_met is True


@pytest.mark.parametrize(("k", "o2", "refused"), [(20.9, 20.9, True), (20.9, 20.89, False), (21.0, 20.95, False)])
def test_oxygen_at_or_above_the_constant_is_refused(k: float, o2: float, refused: bool) -> None:
    outcome = _at(15.0, k, o2=o2, co2=0.1)
    assert ("run.1.nox.at_reference" not in outcome.ledger) == refused
    assert ("oxygen-at-or-above-air" in codes(outcome)) == refused
    if refused:
        assert comparison(outcome).is_met is None
        assert "is not below the 20.9 % of dry air" in comparison(outcome).reason
        assert comparison(outcome).value == ""


def test_near_the_constant_gain_and_uncertainty_are_stated() -> None:
    """Gain 100/(20.9 - 19) = 52.6 % per % O2.  u(O2): certificate 1 % of 10 %: 0.1/sqrt(3); no drift."""
    outcome = _at(15.0, o2=19.0, co2=1.0)
    assert value(outcome, "run.1.nox.at_reference.gain") == pytest.approx(100 / 1.9, rel=1e-12)
    u = 0.1 / 3**0.5
    assert value(outcome, "run.1.o2.uncertainty") == pytest.approx(u, rel=1e-12)
    assert value(outcome, "run.1.nox.at_reference.gain_uncertainty") == pytest.approx(100 * u / 1.9, rel=1e-12)
    assert codes(outcome).count("near-oxygen-constant") == 3
    assert said(outcome, "taken from the cylinder's certificate and half the drift, each as a rectangular")


def test_far_from_the_constant_it_is_not_said() -> None:
    assert "near-oxygen-constant" not in codes(_at())


def test_the_uncertainty_of_oxygen_as_entered() -> None:
    channels = tuple(
        channel(name, standard_uncertainty=number(0.15, "%") if name == "O2" else None)
        for name in ("NOx", "CO", "O2", "CO2")
    )
    outcome = _at(15.0, o2=19.0, co2=1.0, channels=channels)
    assert value(outcome, "run.1.nox.at_reference.gain_uncertainty") == pytest.approx(100 * 0.15 / 1.9, rel=1e-12)


def test_half_the_drift_enters_the_uncertainty() -> None:
    """Zero 0 then 0.2 %, upscale 10 then 10.3 %: (0.1^2/3 + 0.2^2/12 + 0.3^2/12)^0.5."""
    at_15 = limit(reference_oxygen=number(15.0, "%"), oxygen_constant=number(20.9, "%"))
    made = record(limits=(at_15,))
    made = recalibrated(recalibrated(made, "08:40", "O2", 0.2), "08:42", "O2", 10.3)
    expected = (0.1**2 / 3 + 0.2**2 / 12 + 0.3**2 / 12) ** 0.5
    assert value(assess(made), "run.1.o2.uncertainty") == pytest.approx(expected, rel=1e-9)


def test_limits_that_differ_in_reference_or_constant_have_their_own_results() -> None:
    limits = (
        limit("A", reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%")),
        limit("B", reference_oxygen=number(3.0, "%"), oxygen_constant=number(21.0, "%")),
        limit("C", reference_oxygen=number(15.0, "%"), oxygen_constant=number(20.9, "%")),
        limit("D", reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"), value=30.0),
    )
    outcome = assessed(limits=limits)
    assert [c.quantity for c in outcome.comparisons] == [
        "nox.at_reference",
        "nox.at_reference.limit_b",
        "nox.at_reference.limit_c",
        "nox.at_reference",
    ]
    assert value(outcome, "run.1.nox.at_reference.limit_b") == pytest.approx(40 * 18 / 16, rel=1e-12)
    assert value(outcome, "run.1.nox.at_reference.limit_c") == pytest.approx(40 * 5.9 / 15.9, rel=1e-12)
    assert [c.is_met for c in outcome.comparisons] == [True, True, True, False]


# ---- carbon dioxide --------------------------------------------------------------------------------------------


def test_a_reference_carbon_dioxide() -> None:
    """40 x 12/9."""
    outcome = assessed(limits=(limit(diluent="CO2", reference_carbon_dioxide=number(12.0, "%"), value=60.0),))
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * 12 / 9, rel=1e-12)
    assert outcome.ledger["run.1.nox.at_reference"].basis.oxygen.diluent == "CO2"
    assert comparison(outcome).is_met is True


def test_a_reference_carbon_dioxide_names_its_diluent_itself() -> None:
    outcome = assessed(limits=(limit(reference_carbon_dioxide=number(12.0, "%")),))
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * 12 / 9, rel=1e-12)


def test_reference_oxygen_by_carbon_dioxide_where_the_limit_says_so() -> None:
    """Fo = 0.209 x 8710/1040; X = (20.9 - 3)/Fo; 40 X/9 (40 CFR 60.4213(d)(3))."""
    outcome = _at(of_limit={"diluent": "CO2"}, fuels=(fuel(),))
    fo = 0.209 * 8710 / 1040
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * (17.9 / fo) / 9, rel=1e-12)


def test_the_co2_route_with_two_tables_keeps_two_fuel_factors() -> None:
    """60.45(f): natural gas 8740 and 1040."""
    fields = {"reference_oxygen": number(3.0, "%"), "oxygen_constant": number(20.9, "%"), "diluent": "CO2"}
    limits = (limit("A", **fields), limit("B", **fields, factor_table="40 CFR 60.45(f)"))
    outcome = assessed(limits=limits, fuels=(fuel(),))
    for key, fd in (("at_reference", 8710), ("at_reference.limit_b", 8740)):
        expected = 40 * 17.9 / (0.209 * fd / 1040) / 9
        assert value(outcome, f"run.1.nox.{key}") == pytest.approx(expected, rel=1e-12)


def test_the_co2_route_without_a_fuel_is_not_made() -> None:
    outcome = _at(of_limit={"diluent": "CO2"})
    assert "factor-missing" in codes(outcome)
    assert comparison(outcome).is_met is None


@pytest.mark.parametrize("co2", [0.0, -0.1])
def test_carbon_dioxide_that_is_not_above_zero_gives_no_result(co2: float) -> None:
    outcome = _at(of_limit={"diluent": "CO2"}, fuels=(fuel(),), co2=co2)
    assert "run.1.nox.at_reference" not in outcome.ledger
    assert "is not above zero" in comparison(outcome).reason


# ---- limits that contradict themselves -------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("fields", "words"),
    [
        ({"reference_oxygen": number(20.9, "%"), "oxygen_constant": number(20.9, "%")}, "is not below the 20.9 %"),
        (
            {"reference_oxygen": number(3.0, "%"), "reference_carbon_dioxide": number(12.0, "%")},
            "both a reference oxygen and a reference carbon dioxide",
        ),
        ({"reference_carbon_dioxide": number(12.0, "%"), "diluent": "O2"}, "the diluent is O2"),
        ({"reference_oxygen": number(3.0, "%"), "wet": True}, "goes with a dry basis"),
        ({"moisture_basis": None}, "dry or wet is not entered"),
    ],
)
def test_a_limit_that_contradicts_itself_is_not_compared(fields: dict[str, Any], words: str) -> None:
    outcome = assessed(limits=(limit(**fields),), fuels=(fuel(),))
    assert words in comparison(outcome).reason
    assert comparison(outcome).is_met is None
    assert "basis-missing" in codes(outcome)


def test_no_oxygen_channel() -> None:
    names = ("NOx", "CO2")
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"))
    outcome = assessed(
        channels=tuple(channel(name) for name in names),
        readings=readings({"NOx": 40.0, "CO2": 9.0}),
        cylinders=cylinders(names),
        limits=(at_3,),
    )
    assert "diluent-missing" in codes(outcome)
    assert "no dry oxygen" in comparison(outcome).reason


def test_a_limit_on_oxygen_itself() -> None:
    """At least 4 % O2, dry: 5 % is at or above it."""
    outcome = assessed(limits=(limit(pollutant="O2", value=4.0, unit="%", relation="at least"),))
    assert comparison(outcome).quantity == "o2.dry"
    assert comparison(outcome).is_met is True


def test_an_oxygen_channel_in_ppm_corrects_as_percent() -> None:
    channels = tuple(channel(name, unit="ppm" if name == "O2" else "") for name in ("NOx", "CO", "O2", "CO2"))
    bottles = tuple(
        c if c.gas.value != "o2" else cylinder(c.cylinder.value, "o2", c.certified_value.value * 1e4, "ppm")
        for c in cylinders()
    )
    rows = tuple(
        replace(row, reading=number(row.reading.value * 1e4)) if row.channel.value == "O2" else row
        for row in calibrations()
    )
    values = {"NOx": 40.0, "CO": 10.0, "O2": 50_000.0, "CO2": 9.0}
    at_3 = limit(reference_oxygen=number(3.0, "%"), oxygen_constant=number(20.9, "%"))
    outcome = assessed(
        channels=channels, cylinders=bottles, calibrations=rows, readings=readings(values), limits=(at_3,)
    )
    assert value(outcome, "run.1.nox.at_reference") == pytest.approx(40 * 17.9 / 15.9, rel=1e-12)
    assert value(outcome, "criterion.o2.system_bias.alternative") == pytest.approx(5000.0, rel=1e-12)
