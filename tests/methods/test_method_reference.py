"""Reference correction, mass concentration, averages, comparison, rounding."""

from __future__ import annotations

import pytest

from reporter.basis import (
    AS_MEASURED,
    DRY,
    EPA_STANDARD,
    EPA_STANDARD_SI,
    NORMAL,
    WET,
    Basis,
    Moisture,
    Oxygen,
    OxygenKind,
    Standard,
)
from reporter.equation import System
from reporter.errors import BasisError, EquationError
from reporter.gases import gas
from reporter.ledger import Ledger, Stated
from reporter.methods import averages as av
from reporter.methods import reference as ref
from reporter.methods import rounding as rd
from reporter.methods.mass_concentration import mass_concentration, molar_volume, standard_of
from reporter.methods.method_3b import fuel_factor_from_f
from reporter.units import convert

SAID = Stated("test value")


def _ledger() -> Ledger:
    ledger = Ledger()
    ledger.enter("conc", 30.0, "ppm", SAID, basis=DRY.but(expressed_as="NO2"))
    ledger.enter("c_wet", 25.0, "ppm", SAID, basis=WET)
    ledger.enter("oxygen", 5.0, "%", SAID, basis=DRY)
    ledger.enter("o2_wet", 4.2, "%", SAID, basis=WET)
    ledger.enter("dioxide", 9.0, "%", SAID, basis=DRY)
    ledger.enter("ref", 3.0, "%", SAID)
    ledger.enter("ref_co2", 12.0, "%", SAID)
    ledger.enter("of_air", 20.9, "%", SAID)
    ledger.enter("fo", 1.75, "1", SAID)
    return ledger


def test_the_corrected_basis_names_reference_and_constant() -> None:
    entry = _ledger().apply(
        ref.oxygen_reference, "at_reference", {"c": "conc", "o2": "oxygen", "reference": "ref", "k": "of_air"}
    )
    assert entry.value == pytest.approx(30.0 * 17.9 / 15.9, rel=1e-14)
    assert entry.basis.oxygen == Oxygen(OxygenKind.CORRECTED, 3.0, 20.9)
    assert entry.basis.moisture is Moisture.DRY
    assert entry.basis.expressed_as == "NO2"
    assert "at 3 % O2 (k = 20.9)" in entry.basis.text()


@pytest.mark.parametrize("wrong", [{"c": "c_wet"}, {"o2": "o2_wet"}], ids=["wet concentration", "wet oxygen"])
def test_a_wet_correction_is_refused(wrong: dict[str, str]) -> None:
    inputs = {"c": "conc", "o2": "oxygen", "reference": "ref", "k": "of_air"} | wrong
    with pytest.raises(BasisError, match="must be dry"):
        _ledger().apply(ref.oxygen_reference, "at_reference", inputs)


def test_a_correction_is_not_made_twice() -> None:
    ledger = _ledger()
    inputs = {"c": "conc", "o2": "oxygen", "reference": "ref", "k": "of_air"}
    once = ledger.apply(ref.oxygen_reference, "once", inputs)
    with pytest.raises(BasisError, match="as measured"):
        ledger.apply(ref.oxygen_reference, "twice", inputs | {"c": once})


def test_carbon_dioxide_reference_has_its_own_basis() -> None:
    entry = _ledger().apply(
        ref.carbon_dioxide_reference, "at_co2", {"c": "conc", "co2": "dioxide", "reference": "ref_co2"}
    )
    assert entry.value == pytest.approx(40.0, rel=1e-14)
    assert entry.basis.oxygen == Oxygen(OxygenKind.CORRECTED, 12.0, None, "CO2")


def test_both_routes_agree_on_a_gas_of_the_published_fuel_factor() -> None:
    fo = fuel_factor_from_f(fd=8710.0, fc=1040.0)
    for o2 in (2.0, 8.0, 16.0):
        co2 = (20.9 - o2) / fo
        by_o2 = ref.oxygen_reference(c=40.0, o2=o2, reference=15.0, k=20.9)
        by_co2 = ref.oxygen_reference_by_co2(c=40.0, co2=co2, reference=15.0, fo=fo, k=20.9)
        x_co2 = ref.co2_correction_factor(reference=15.0, fo=fo, k=20.9)
        assert by_co2 == pytest.approx(by_o2, rel=1e-12)
        assert 40.0 * x_co2 / co2 == pytest.approx(by_o2, rel=1e-12)


# Common practice: gain in percent per percent of oxygen.
@pytest.mark.parametrize(("o2", "percent"), [(3.0, 5.6), (15.0, 17.0), (18.0, 34.0), (20.0, 111.0)])
def test_gain(o2: float, percent: float) -> None:
    assert ref.gain(k=20.9, o2=o2) == pytest.approx(percent, rel=0.02)


# Common practice: 0.2 % of oxygen, in percent of the result.
@pytest.mark.parametrize(
    ("o2", "percent", "digit"),
    [
        (3.0, 1.1, 0.1),
        (8.0, 1.6, 0.1),
        (15.0, 3.4, 0.1),
        (18.0, 6.9, 0.1),
        (19.5, 14.0, 1.0),
        (20.5, 50.0, 1.0),
    ],
)
def test_correction_factor_uncertainty(o2: float, percent: float, digit: float) -> None:
    found = ref.correction_factor_uncertainty(u_o2=0.2, k=20.9, o2=o2)
    assert found == pytest.approx(percent, abs=digit / 2)


def test_no_correction_at_or_above_the_oxygen_of_air() -> None:
    assert ref.reference_refusal(20.9, 20.89) is None
    for o2 in (20.9, 21.3):
        reason = ref.reference_refusal(20.9, o2)
        assert reason is not None
        assert f"{o2:.4g} %" in reason
    with pytest.raises(EquationError):
        ref.oxygen_reference(c=1.0, o2=20.9, reference=3.0, k=20.9)


# Standard volumes: 385.33 and 379.48 ft3/lbmol, 24.055, 22.414 and 24.465 L/mol, at 101.325 kPa or 14.696 psia.
@pytest.mark.parametrize(
    ("system", "t", "p", "expected", "digit"),
    [
        (System.US, 527.67, convert(101.325, "kPa", "inHg"), 385.33, 0.01),
        (System.US, 519.67, convert(14.696, "psi", "inHg"), 379.48, 0.01),
        (System.SI, 293.15, 101.325, 24.055, 0.001),
        (System.SI, 273.15, 101.325, 22.414, 0.001),
        (System.SI, 298.15, 101.325, 24.465, 0.001),
    ],
)
def test_standard_volumes(system: System, t: float, p: float, expected: float, digit: float) -> None:
    found = molar_volume.in_system(system)(temperature=t, pressure=p)
    assert found == pytest.approx(expected, abs=digit / 2)


def test_the_two_gas_constants_are_one() -> None:
    us = molar_volume(temperature=527.67, pressure=29.92) * 0.028316846592 * 1000.0 / 453.59237
    si = molar_volume.in_system(System.SI)(temperature=293.15, pressure=convert(29.92, "inHg", "kPa"))
    assert us == pytest.approx(si, rel=1e-12)


# Common practice: mg/m3 per ppm at 0, 20 and 25 °C.
@pytest.mark.parametrize(
    ("key", "at_0", "at_20", "at_25"),
    [("no2", 2.0525, 1.9125, 1.8804), ("co", 1.2497, 1.1644, 1.1449), ("so2", 2.8583, 2.6633, 2.6186)],
)
def test_mass_concentration_per_ppm(key: str, at_0: float, at_20: float, at_25: float) -> None:
    for temperature, expected in ((273.15, at_0), (293.15, at_20), (298.15, at_25)):
        found = mass_concentration(c=1.0, molar_mass=gas(key).method_mass, temperature=temperature, pressure=101.325)
        assert found == pytest.approx(expected, rel=2e-4)


def test_mass_concentration_carries_its_own_conditions() -> None:
    ledger = Ledger(System.SI)
    c = ledger.enter("conc", 100.0, "ppm", SAID, basis=DRY.but(expressed_as="NO2"))
    ledger.enter("mass_of_one", 46.01, "g/mol", SAID)
    ledger.enter("std_t", 273.15, "K", SAID)
    ledger.enter("std_p", 101.3, "kPa", SAID)
    inputs = {"c": c, "molar_mass": "mass_of_one", "temperature": "std_t", "pressure": "std_p"}
    entry = ledger.apply(mass_concentration, "mass", inputs)
    assert entry.unit == "mg/m3"
    assert entry.basis.standard == Standard(273.15, 101.3, "273.15 K, 101.3 kPa")
    assert entry.basis.oxygen == AS_MEASURED
    at_conditions = ledger.enter("c_at", 100.0, "ppm", SAID, basis=DRY.but(standard=NORMAL))
    with pytest.raises(BasisError):
        ledger.apply(mass_concentration, "again", inputs | {"c": at_conditions})


def test_known_conditions_keep_their_words() -> None:
    assert standard_of(273.15, 101.325) is NORMAL
    assert standard_of(293.15, 101.325) is EPA_STANDARD_SI
    assert standard_of(293.15, 101.32) is EPA_STANDARD


def test_mean_of_valid_runs() -> None:
    assert av.mean_of_valid(values=[10.0, 20.0, 60.0], flags=[1.0, 1.0, 0.0]) == 15.0
    assert av.count_valid(flags=[1.0, 1.0, 0.0]) == 2.0
    assert av.mean_of_all(values=[10.0, 20.0, 60.0]) == 30.0
    with pytest.raises(EquationError):
        av.mean_of_valid(values=[10.0, 20.0], flags=[0.0, 0.0])


def test_a_mean_of_two_bases_is_refused() -> None:
    ledger = _ledger()
    with pytest.raises(BasisError, match="one basis"):
        ledger.apply(av.mean_of_all, "mean", {"values": ["conc", "c_wet"]})


AT_3 = DRY.but(oxygen=Oxygen(OxygenKind.CORRECTED, 3.0, 20.9))


@pytest.mark.parametrize(
    ("value", "limit", "word"),
    [
        (AT_3, AT_3, ""),
        (DRY, Basis(moisture=Moisture.DRY), ""),
        (DRY.but(standard=EPA_STANDARD), DRY.but(standard=EPA_STANDARD_SI), ""),
        (AT_3.but(expressed_as="NO2"), AT_3, ""),
        (AT_3, WET, "wet"),
        (AT_3, DRY, "at 3 % O2"),
        (AT_3, DRY.but(oxygen=Oxygen(OxygenKind.CORRECTED, 3.0, 21.0)), "k = 21"),
        (DRY.but(standard=EPA_STANDARD), DRY.but(standard=NORMAL), "273.15 K"),
        (DRY.but(expressed_as="C3H8"), DRY.but(expressed_as="C"), "as C3H8"),
        (DRY, Basis(), "no basis stated"),
    ],
)
def test_a_comparison_needs_one_basis(value: Basis, limit: Basis, word: str) -> None:
    reason = av.basis_mismatch(value, limit)
    assert word in reason
    assert bool(reason) is bool(word)
    ledger = Ledger()
    ledger.enter("value", 29.0, "ppm", SAID, basis=value)
    ledger.enter("limit", 30.0, "ppm", SAID, basis=limit)
    inputs = {"value": "value", "limit": "limit"}
    for eq in (av.at_most_limit, av.margin, av.percent_of_limit):
        if word:
            with pytest.raises(BasisError):
                ledger.apply(eq, eq.name, inputs)
        else:
            ledger.apply(eq, eq.name, inputs)


def test_relations_at_the_limit() -> None:
    assert av.at_most_limit(value=30.0, limit=30.0) == 1.0
    assert av.less_than_limit(value=30.0, limit=30.0) == 0.0
    assert av.at_least_limit(value=30.0, limit=30.0) == 1.0
    assert av.margin(limit=30.0, value=31.5) == -1.5
    assert av.percent_of_limit(value=15.0, limit=30.0) == 50.0
    assert av.percent_difference(value=11.0, reference=10.0) == pytest.approx(10.0)


@pytest.mark.parametrize(
    ("eq", "value", "places", "expected"),
    [
        (rd.rounded_half_up, 2.5, 0.0, 3.0),
        (rd.rounded_half_up, -2.5, 0.0, -3.0),
        (rd.rounded_half_up, 1.005, 2.0, 1.01),
        (rd.rounded_half_even, 2.5, 0.0, 2.0),
        (rd.rounded_half_even, 3.5, 0.0, 4.0),
        (rd.truncated_decimals, 2.99, 1.0, 2.9),
        (rd.truncated_decimals, -2.99, 1.0, -2.9),
        (rd.rounded_half_up, 1250.0, -2.0, 1300.0),
        (rd.rounded_half_even, 1250.0, -2.0, 1200.0),
    ],
)
def test_rounding_to_decimals(eq: object, value: float, places: float, expected: float) -> None:
    assert eq(value=value, decimals=places) == expected  # type: ignore[operator]


@pytest.mark.parametrize(
    ("eq", "value", "digits", "expected"),
    [
        (rd.rounded_half_up_significant, 0.03645, 3.0, 0.0365),
        (rd.rounded_half_even_significant, 0.03645, 3.0, 0.0364),
        (rd.truncated_significant, 0.03649, 3.0, 0.0364),
        (rd.rounded_half_up_significant, 30.49, 2.0, 30.0),
        (rd.rounded_half_up_significant, 1234.5, 2.0, 1200.0),
    ],
)
def test_rounding_to_significant_digits(eq: object, value: float, digits: float, expected: float) -> None:
    assert eq(value=value, digits=digits) == expected  # type: ignore[operator]


def test_zero_has_no_significant_digits() -> None:
    with pytest.raises(EquationError):
        rd.rounded_half_up_significant(value=0.0, digits=3.0)
