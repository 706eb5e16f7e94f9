"""Units and bases: the table against the unit registry, spellings people write, what a basis asks."""

from __future__ import annotations

import pytest

from reporter.basis import (
    ACTUAL,
    DRY,
    EPA_STANDARD,
    EPA_STANDARD_SI,
    NO_BASIS,
    NORMAL,
    WET,
    Basis,
    Moisture,
    Need,
    Oxygen,
    OxygenKind,
    Standard,
)
from reporter.errors import BasisError, UnitError
from reporter.units import (
    _table,
    convert,
    dimension,
    factor,
    known,
    pint_expression,
    pint_unit,
    quantity,
    read_unit,
    registry,
    spellings_of,
)

UNITS = sorted(_table()[0])
SCALES = {"°C": "degC", "°F": "degF", "K": "kelvin", "°R": "degR"}


@pytest.mark.parametrize("name", UNITS)
def test_factors_are_those_of_the_registry(name: str) -> None:
    # the bases of the table are products of the SI base units, so that their factor is 1
    expected = registry().Quantity(1.0, pint_unit(name)).to_base_units().magnitude
    assert known(name).factor == pytest.approx(expected, rel=1e-15, abs=0)


@pytest.mark.parametrize("source", SCALES)
@pytest.mark.parametrize("target", SCALES)
@pytest.mark.parametrize("value", [-40.0, 0.0, 68.0, 451.0])
def test_temperatures_are_converted_with_their_zero_point(source: str, target: str, value: float) -> None:
    expected = registry().Quantity(value, SCALES[source]).to(SCALES[target]).magnitude
    assert convert(value, source, target) == pytest.approx(expected, rel=1e-13, abs=1e-12)


def test_fixed_points_of_the_scales() -> None:
    # definitions: 0 °C is 273.15 K and 32 °F, 100 °C is 212 °F, 0 K is -459.67 °F
    assert convert(0.0, "°C", "K") == 273.15
    assert convert(32.0, "°F", "°C") == pytest.approx(0.0, abs=1e-12)
    assert convert(100.0, "°C", "°F") == pytest.approx(212.0, rel=1e-14)
    assert convert(0.0, "K", "°F") == pytest.approx(-459.67, rel=1e-14)
    assert convert(528.0, "°R", "°F") == pytest.approx(68.33, rel=1e-13)
    assert convert(3.25, "ppm", "ppm") == 3.25


def test_another_dimension_is_refused() -> None:
    for source, target in (("ppm", "kg"), ("lb/h", "lb"), ("mg/m3", "ng/J")):
        with pytest.raises(UnitError, match="cannot become"):
            factor(source, target)
        with pytest.raises(UnitError, match="cannot become"):
            convert(1.0, source, target)
    with pytest.raises(UnitError, match="not a unit"):
        known("furlong")


def test_units_of_a_dimension() -> None:
    assert dimension("inHg") == "pressure"
    assert {"Pa", "kPa", "inHg"} <= set(spellings_of("pressure"))


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("ppm", "ppm"),
        (" PPMV ", "ppm"),
        ("[°F]", "°F"),
        ("deg C", "°C"),
        ("in. Hg", "inHg"),
        ("lb/MMBtu", "lb/MMBtu"),
        ("LB/HR", "lb/h"),
        ("mg/Nm³", "mg/m3"),
        ("μg/m3", "µg/m3"),
        ("dscfm", "ft3/min"),
        ("", "1"),
        ("%", "%"),
        ("vol-%", "%"),
    ],
)
def test_spellings_people_write(text: str, name: str) -> None:
    assert read_unit(text).unit == name


@pytest.mark.parametrize("spelling", sorted(_table()[1]))
def test_every_listed_spelling_is_read(spelling: str) -> None:
    assert read_unit(spelling).unit in _table()[0]


@pytest.mark.parametrize("name", [name for name in UNITS if name != "mol/mol"])
def test_every_canonical_name_reads_as_itself(name: str) -> None:
    assert read_unit(name).unit == name


def test_moles_per_mole_on_a_sheet_are_a_fraction() -> None:
    assert read_unit("mol/mol").unit == "1"


@pytest.mark.parametrize(
    ("text", "moisture", "standard"),
    [
        ("ppmvd", Moisture.DRY, ""),
        ("ppmvw", Moisture.WET, ""),
        ("ppm (dry)", Moisture.DRY, ""),
        ("% wet", Moisture.WET, ""),
        ("ppm", None, ""),
        ("dscf/min", Moisture.DRY, "68 °F, 29.92 inHg"),
        ("acfm", None, "actual conditions"),
        ("mg/Nm3", None, "273.15 K, 101.325 kPa"),
    ],
)
def test_hints_of_the_basis_in_a_spelling(text: str, moisture: Moisture | None, standard: str) -> None:
    read = read_unit(text)
    assert (read.moisture, read.standard.text()) == (moisture, standard)


@pytest.mark.parametrize("text", ["furlongs", "ppm/", "dry", "m3/fortnight", "MPH"])
def test_unknown_spellings_are_refused(text: str) -> None:
    with pytest.raises(UnitError, match="not known"):
        read_unit(text)


def test_a_capital_that_changes_a_unit_a_billion_times_is_not_lowered() -> None:
    assert read_unit("mg").unit == "mg"
    assert convert(1.0, read_unit("Mg").unit, "kg") == pytest.approx(1000.0)


@pytest.mark.parametrize("name", ["lb/ft3/ppm", "ft3/lb/%", "kg*J/ng/GJ", "1/ppm"])
def test_products_of_units_are_read_by_the_registry(name: str) -> None:
    assert pint_expression(name)
    assert quantity(2.0, name).magnitude == 2.0


# --- basis


def test_a_basis_in_words() -> None:
    basis = Basis(Moisture.DRY, Oxygen(OxygenKind.CORRECTED, 3.0, 20.9), NORMAL, "NO2")
    assert basis.text() == "dry, at 3 % O2 (k = 20.9), 273.15 K, 101.325 kPa, as NO2"
    assert Basis(oxygen=Oxygen(OxygenKind.CORRECTED, 12.0, None, "CO2")).text() == "at 12 % CO2"
    assert DRY.text() == "dry"
    assert NO_BASIS.text() == ""
    assert basis.as_dict()["oxygen_reference"] == 3.0
    assert DRY.but(moisture=Moisture.WET) == WET
    assert DRY.but() == DRY


@pytest.mark.parametrize(
    ("need", "basis", "words"),
    [
        (Need(moisture=Moisture.DRY), WET, "c must be dry, but is wet"),
        (Need(moisture=Moisture.DRY), NO_BASIS, "c must be dry, but is no moisture basis"),
        (Need(moisture=Moisture.WET), Basis(Moisture.UNKNOWN), "c must be wet, but is moisture basis unknown"),
        (
            Need(oxygen=OxygenKind.AS_MEASURED),
            Basis(oxygen=Oxygen(OxygenKind.CORRECTED, 3.0, 21.0)),
            "c must be as measured, but is at 3 % O2 (k = 21)",
        ),
        (Need(standard=EPA_STANDARD), Basis(standard=ACTUAL), "c must be 68 °F, 29.92 inHg, but is actual conditions"),
        (Need(standard=EPA_STANDARD), Basis(standard=NORMAL), "c must be 68 °F, 29.92 inHg, but is 273.15 K"),
    ],
)
def test_a_need_names_both_sides(need: Need, basis: Basis, words: str) -> None:
    with pytest.raises(BasisError) as caught:
        need.check(basis, "c")
    assert str(caught.value).startswith(words)


def test_conditions_are_one_within_the_rounding_of_their_units() -> None:
    assert EPA_STANDARD.same(EPA_STANDARD_SI)
    assert not EPA_STANDARD.same(NORMAL)
    assert not NORMAL.same(Standard(273.15, 101.34))
    assert not ACTUAL.same(NORMAL)
    assert ACTUAL.same(ACTUAL)
    Need(standard=EPA_STANDARD).check(Basis(standard=EPA_STANDARD_SI), "c")
