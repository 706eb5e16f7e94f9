"""Names and masses of gases; changes of unit as ledger entries."""

from __future__ import annotations

import itertools

import chemicals
import pytest

from reporter.basis import DRY
from reporter.conversions import conversion_equation, convert_entry, converted
from reporter.errors import RecordError, UnitError
from reporter.gases import all_gases, atomic_weights, find_gas, gas, molar_mass
from reporter.ledger import FromEquation, Ledger, Stated
from reporter.typeset import text_formula
from reporter.units import convert, quantity, spellings_of

GASES = all_gases()


@pytest.mark.parametrize(
    ("text", "key"),
    [
        ("NOx", "nox"),
        ("NOX", "nox"),
        ("NO_x", "nox"),
        ("NOₓ", "nox"),
        (" Oxides of Nitrogen ", "nox"),
        ("02", "o2"),
        ("O₂", "o2"),
        ("oxygen", "o2"),
        ("co", "co"),
        ("CO₂", "co2"),
        ("VOC", "thc"),
        ("sulphur dioxide", "so2"),
    ],
)
def test_gases_as_people_write_them(text: str, key: str) -> None:
    found = find_gas(text)
    assert found is not None
    assert found.key == key


@pytest.mark.parametrize("text", ["", "NOy", "gas", "O3"])
def test_no_guess_at_an_unknown_gas(text: str) -> None:
    assert find_gas(text) is None


def test_an_unknown_key_is_an_error() -> None:
    with pytest.raises(RecordError, match="noy"):
        gas("noy")


def test_no_name_stands_for_two_gases() -> None:
    names = [(name.lower().replace("_", "").replace(" ", ""), g.key) for g in GASES for name in (g.label, *g.synonyms)]
    for (a, first), (b, second) in itertools.combinations(names, 2):
        assert a != b or first == second


# The element masses of the library are an older table (sulfur 32.065, chlorine 35.453): 0.02 % covers it.
@pytest.mark.parametrize("found", GASES, ids=lambda g: g.key)
def test_physical_masses_against_chemicals(found: object) -> None:
    row = gas(found.key)  # type: ignore[attr-defined]
    independent = chemicals.elements.molecular_weight(dict(row.atoms))
    assert row.mass == pytest.approx(independent, rel=2e-4)
    assert row.method_mass == pytest.approx(row.mass, rel=1e-3)


# CIAAW 2021, abridged: CO 28.010, CO2 44.009, NO 30.006, NO2 46.005, SO2 64.058, H2O 18.015, CH4 16.043.
@pytest.mark.parametrize(
    ("key", "mass"),
    [
        ("co", 28.010),
        ("co2", 44.009),
        ("no", 30.006),
        ("no2", 46.005),
        ("so2", 64.058),
        ("h2o", 18.015),
        ("ch4", 16.043),
        ("c3h8", 44.097),
    ],
)
def test_masses_from_the_atomic_weights(key: str, mass: float) -> None:
    assert gas(key).mass == pytest.approx(mass, abs=5.1e-4)


def test_nox_is_nitrogen_dioxide_and_hydrocarbons_are_propane() -> None:
    assert (gas("nox").expressed_as, gas("nox").method_mass) == ("NO2", 46.01)
    assert (gas("thc").expressed_as, gas("thc").method_mass) == ("C3H8", 44.10)
    assert molar_mass({"N": 1, "O": 2}) == gas("nox").mass
    assert atomic_weights()["S"] == 32.06


def test_method_19_names_particulate_sulfur_dioxide_and_nitrogen_oxides_only() -> None:
    assert not gas("nox").by_analogy
    assert not gas("so2").by_analogy
    assert gas("co").by_analogy
    assert gas("thc").by_analogy
    assert [g.key for g in GASES if g.is_diluent] == ["o2", "co2"]


def _pairs() -> list[tuple[str, str]]:
    dimensions = ["temperature", "pressure", "flow", "mass_flow", "power", "mass_concentration", "mass_by_energy"]
    return [pair for name in dimensions for pair in itertools.permutations(spellings_of(name), 2)]


@pytest.mark.parametrize(("source", "target"), _pairs())
def test_a_change_of_unit_is_that_of_the_table(source: str, target: str) -> None:
    found = conversion_equation(source, target)(value=73.25)
    assert found == pytest.approx(convert(73.25, source, target), rel=1e-13)
    assert converted(73.25, source, target) == found
    with_unit = conversion_equation(source, target)(value=quantity(73.25, source))
    assert with_unit.magnitude == pytest.approx(found, rel=1e-12)


def test_units_of_two_dimensions_are_refused() -> None:
    with pytest.raises(UnitError):
        conversion_equation("inHg", "ft3/h")


def test_the_factor_shows_in_the_formula() -> None:
    assert text_formula(conversion_equation("°F", "°C").symbols()) == "(x − 32) / 1.8"
    assert text_formula(conversion_equation("min", "h").symbols()) == "x / 60"
    assert text_formula(conversion_equation("lb/h", "kg/h").symbols()) == "x · 0.45359237"
    assert text_formula(conversion_equation("°C", "K").symbols()) == "x + 273.15"


def test_a_converted_entry_keeps_basis_label_and_symbol() -> None:
    ledger = Ledger()
    percent = ledger.enter("co", 0.0125, "%", Stated("test value"), basis=DRY, label="CO", symbol="C")
    ppm = convert_entry(ledger, "co.ppm", percent, "ppm")
    assert ppm.value == pytest.approx(125.0, rel=1e-14)
    assert (ppm.basis, ppm.label, ppm.symbol, ppm.unit) == (DRY, "CO", "C", "ppm")
    assert isinstance(ppm.origin, FromEquation)
    assert ledger.replay({"co": 0.02})["co.ppm"] == pytest.approx(200.0, rel=1e-14)
    assert convert_entry(ledger, "unused", ppm, "ppm") is ppm
    assert "unused" not in ledger
