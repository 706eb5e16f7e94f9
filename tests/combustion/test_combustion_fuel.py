"""Fuels as given: conventions, sums, components against a general library, nominal compositions against the tables."""

from __future__ import annotations

import json
from pathlib import Path

import chemicals
import pytest
from CoolProp.CoolProp import PropsSI

from reporter.combustion.bare import balance
from reporter.combustion.components import INERT, all_components, atoms_of, component, find_component
from reporter.combustion.composition import net_heating_value
from reporter.combustion.describe import describe_fuel
from reporter.combustion.fuel import (
    AnalysisBasis,
    Fuel,
    fuel_from_analysis,
    fuel_from_formula,
    fuel_from_gas,
    nominal_fuel,
    nominal_names,
)
from reporter.combustion.fuel_entries import amounts, enter_fuel, spreads
from reporter.combustion.parse import fuel_from_text, parse_composition
from reporter.equation import System
from reporter.errors import RecordError
from reporter.ledger import FromCells, FromEquation, FromTable, Ledger, Stated
from reporter.methods.method_3b import fo_range
from reporter.methods.tables import fuel_factors, fuel_names
from reporter.problems import Place

PUBLISHED = Path(__file__).parents[1] / "published" / "combustion"
CAS = {
    "ch4": "74-82-8",
    "c2h6": "74-84-0",
    "c3h8": "74-98-6",
    "n_c4h10": "106-97-8",
    "i_c4h10": "75-28-5",
    "n_c5h12": "109-66-0",
    "i_c5h12": "78-78-4",
    "neo_c5h12": "463-82-1",
    "n_c6h14": "110-54-3",
    "n_c7h16": "142-82-5",
    "n_c8h18": "111-65-9",
    "c2h4": "74-85-1",
    "c3h6": "115-07-1",
    "c4h8_1": "106-98-9",
    "i_c4h8": "115-11-7",
    "c4h6_13": "106-99-0",
    "c2h2": "74-86-2",
    "c6h6": "71-43-2",
    "c7h8": "108-88-3",
    "ch4o": "67-56-1",
    "h2": "1333-74-0",
    "co": "630-08-0",
    "h2s": "7783-06-4",
    "cos": "463-58-1",
    "nh3": "7664-41-7",
}
BURNING = [row for row in all_components() if row.heat and row.key != "h2o"]


# ---- components ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("row", BURNING, ids=lambda row: row.key)
def test_heating_values_agree_with_heats_of_formation(row: object) -> None:
    # chemicals: gas-phase heats of formation and the heat of reaction to CO2, liquid water, SO2 and N2.
    key = row.key  # type: ignore[attr-defined]
    table = component(key)
    atoms = {name: float(count) for name, count in table.atoms.items()}
    products = chemicals.combustion.combustion_stoichiometry(atoms)
    heat = -chemicals.combustion.HHV_stoichiometry(products, Hf=chemicals.Hfg(CAS[key])) / 1000.0
    assert table.heat == pytest.approx(heat, rel=1.5e-3)


def test_every_burning_component_is_checked() -> None:
    assert {row.key for row in BURNING} == set(CAS)


@pytest.mark.parametrize("row", all_components(), ids=lambda row: row.key)
def test_molar_masses_agree_with_a_general_library(row: object) -> None:
    table = component(row.key)  # type: ignore[attr-defined]
    # The library's weights differ from CIAAW 2021 in the sixth digit (sulfur in the fifth).
    expected = chemicals.molecular_weight({name: float(count) for name, count in table.atoms.items()})
    assert table.molar_mass == pytest.approx(expected, rel=2e-4)


def test_iso_6976_values_remembered_in_the_table_of_published_cases() -> None:
    rows = json.loads((PUBLISHED / "iso_6976_molar_heating_values.json").read_text("utf-8"))["table"]
    for row in rows:
        found = find_component(row["gas"])
        assert found is not None
        assert found.heat == pytest.approx(row["hhv_2016"] or row["hhv_1995"], abs=0.005)


@pytest.mark.parametrize(
    ("text", "key"),
    [
        ("CH4", "ch4"), ("ch₄", "ch4"), ("Methane", "ch4"), ("C1", "ch4"), ("iC4", "i_c4h10"), ("n-Butane", "n_c4h10"),
        ("C4H10", "n_c4h10"), ("C6+", "n_c6h14"), ("CO2", "co2"), ("CO", "co"), ("Carbon dioxide", "co2"),
        ("hydrogen sulphide", "h2s"), ("N2", "n2"), ("argon", "ar"), ("NH3", "nh3"), ("H2O", "h2o"),
    ],
)  # fmt: skip
def test_components_are_found_by_what_people_write(text: str, key: str) -> None:
    found = find_component(text)
    assert found is not None
    assert found.key == key


def test_spellings_name_one_component_each() -> None:
    owners: dict[str, set[str]] = {}
    for row in all_components():
        for name in (row.key, row.label, *row.spellings):
            owners.setdefault("".join(name.replace("-", "").replace("_", "").split()).lower(), set()).add(row.key)
    assert {name for name, keys in owners.items() if len(keys) > 1} == set()


def test_atoms_of_a_formula() -> None:
    assert atoms_of("C2H5OH") == {"C": 2, "H": 6, "O": 1}
    for wrong in ("", "Xy2", "ch4", "C-H"):
        with pytest.raises(RecordError, match="no formula"):
            atoms_of(wrong)


# ---- analysis by weight -------------------------------------------------------------------------------

DRY_WOOD = {"carbon": 50.0, "hydrogen": 6.0, "oxygen": 43.0, "ash": 1.0, "water": 40.0}


def test_three_ways_to_write_one_analysis_give_one_fuel() -> None:
    dry = fuel_from_analysis("wood", DRY_WOOD, heat=20000.0, basis=AnalysisBasis.DRY)
    fired = {name: value * 0.6 for name, value in DRY_WOOD.items()} | {"water": 40.0}
    as_fired = fuel_from_analysis("wood", fired, heat=12000.0)
    # CIAAW 2021: 2 H of 1.0080 and O of 15.999 in water of 18.015.
    with_water = fired | {
        "hydrogen": fired["hydrogen"] + 40.0 * 2.016 / 18.015,
        "oxygen": fired["oxygen"] + 40.0 * 15.999 / 18.015,
    }
    included = fuel_from_analysis("wood", with_water, heat=12000.0, hydrogen_includes_water=True)
    one, two, three = amounts(dry), amounts(as_fired), amounts(included)
    for name in ("carbon", "hydrogen", "oxygen", "water", "ash", "gross_heating_value", "net_heating_value"):
        assert getattr(two, name) == pytest.approx(getattr(one, name), rel=1e-12)
        assert getattr(three, name) == pytest.approx(getattr(one, name), rel=1e-12)
    assert one.carbon == pytest.approx(1000 * 0.30 / 12.011, rel=1e-12)
    assert one.water == pytest.approx(1000 * 0.40 / 18.015, rel=1e-12)


@pytest.mark.parametrize(
    ("percents", "found"),
    [
        ({"carbon": 85.0, "hydrogen": 12.0}, "97.00 %"),
        ({"carbon": 185.0}, "185 % of carbon"),
        ({"carbon": 101.0, "hydrogen": -1.0}, "101 % of carbon"),
        ({"carbon": 90.0, "tar": 10.0}, "'tar'"),
    ],
)
def test_a_wrong_analysis_says_what_was_found(percents: dict[str, float], found: str) -> None:
    with pytest.raises(RecordError, match=found):
        fuel_from_analysis("fuel", percents)


def test_a_heating_value_below_zero_and_water_counted_on_a_dry_basis_are_refused() -> None:
    with pytest.raises(RecordError, match="above zero"):
        fuel_from_analysis("fuel", {"carbon": 100.0}, heat=-1.0)
    with pytest.raises(RecordError, match="dry basis"):
        fuel_from_analysis("fuel", DRY_WOOD, basis=AnalysisBasis.DRY, hydrogen_includes_water=True)


# ---- gas ----------------------------------------------------------------------------------------------


def test_carbon_dioxide_and_nitrogen_belong_to_the_fuel_and_argon_is_inert() -> None:
    gas = amounts(fuel_from_gas("gas", {"CH4": 80.0, "CO2": 10.0, "N2": 5.0, "Ar": 2.0, "H2O": 3.0}))
    assert gas.carbon == pytest.approx(0.90, rel=1e-14)
    assert gas.oxygen == pytest.approx(0.20, rel=1e-14)
    assert gas.nitrogen == pytest.approx(0.10, rel=1e-14)
    assert gas.inert == pytest.approx(0.02, rel=1e-14)
    assert gas.water == pytest.approx(0.03, rel=1e-14)
    assert gas.hydrogen == pytest.approx(3.20, rel=1e-14)


def test_amounts_are_per_mole_of_the_sum() -> None:
    assert amounts(fuel_from_gas("gas", {"CH4": 94.0, "N2": 5.8})).carbon == pytest.approx(94.0 / 99.8, rel=1e-14)


@pytest.mark.parametrize(
    ("percents", "found"),
    [
        ({"CH4": 94.0, "C2H6": 4.0}, "98.00 %"),
        ({"CH4": 94.0, "Xe": 6.0}, "'Xe'"),
        ({"CH4": 50.0, "methane": 50.0}, "methane is given twice"),
        ({"CH4": 104.0, "N2": -4.0}, "104 % of ch4"),
    ],
)
def test_a_wrong_gas_says_what_was_found(percents: dict[str, float], found: str) -> None:
    with pytest.raises(RecordError, match=found):
        fuel_from_gas("gas", percents)


def test_molecules_by_formula() -> None:
    kerosene = amounts(fuel_from_formula("C12H23"))
    assert (kerosene.carbon, kerosene.hydrogen) == (12.0, 23.0)
    assert kerosene.gross_heating_value is None
    assert amounts(fuel_from_formula("C3H8")).gross_heating_value == pytest.approx(2219.17 / 44.097 * 1000, rel=1e-9)


def test_net_heating_value_against_a_general_library() -> None:
    # chemicals: LHV_from_HHV(-890590 J/mol, 2 mol of water) = -802567 J/mol.
    methane = amounts(fuel_from_formula("CH4"))
    assert methane.gross_heating_value is not None
    assert methane.net_heating_value is not None
    ratio = chemicals.combustion.LHV_from_HHV(-890590.0, 2) / -890590.0
    assert methane.net_heating_value / methane.gross_heating_value == pytest.approx(ratio, rel=2e-5)


def test_heat_of_condensation_against_the_equation_of_state_of_water() -> None:
    # CoolProp, IAPWS-95 at 25 °C; the table's ideal-gas value lies 0.06 % above it.
    vapour, liquid = (PropsSI("Hmolar", "T", 298.15, "Q", quality, "Water") for quality in (1, 0))
    condensed = -net_heating_value.in_system(System.SI)(gross=0.0, water=1.0)
    assert condensed == pytest.approx((vapour - liquid) / 1000.0, rel=1e-3)


# ---- published names ----------------------------------------------------------------------------------


@pytest.mark.parametrize("name", nominal_names())
def test_nominal_compositions_stay_near_the_published_factors(name: str) -> None:
    fuel = nominal_fuel(name)
    figures = describe_fuel(fuel)
    published = fuel_factors(name)
    assert fuel.assumed
    assert figures.row("F_d by composition").value == pytest.approx(published.fd.us, rel=0.03)
    # F_c of residual oil: the table has one factor for all oils, made for lighter ones.
    assert figures.row("F_c by composition").value == pytest.approx(published.fc.us, rel=0.06)
    if published.fw is not None:
        assert figures.row("F_w by composition").value == pytest.approx(published.fw.us, rel=0.035)
    expected = fo_range(name)
    if expected is not None:
        assert expected.low <= figures.row("F_o by composition").value <= expected.high


def test_nominal_names_are_those_of_the_table_and_shares_sum_to_100() -> None:
    assert set(nominal_names()) == set(fuel_names())
    for name in nominal_names():
        fuel = nominal_fuel(name)
        assert sum(share.percent for share in fuel.shares) == pytest.approx(100.0, abs=1e-9)
        assert all(share.spread > 0 for share in fuel.shares)
    with pytest.raises(RecordError, match="not a published fuel name"):
        nominal_fuel("peat")


@pytest.mark.parametrize("name", ["distillate oil", "wood", "bituminous coal"])
def test_nominal_analysis_by_the_printed_equations(name: str) -> None:
    # Eqs. 19-13 and 19-15 carry rounded constants; they differ from the element balance by under one percent.
    figures = describe_fuel(name)
    for symbol in ("d", "c"):
        printed = figures.row(f"F_{symbol} by analysis").value
        assert figures.row(f"F_{symbol} by composition").value == pytest.approx(printed, rel=0.01)


# ---- in the ledger ------------------------------------------------------------------------------------


def test_shares_keep_the_cell_they_were_read_from() -> None:
    ledger = Ledger(System.US)
    fuel = fuel_from_gas("site gas", {"methane": 96.0, "N2": 4.0})
    cells = {"methane": FromCells(Place("test.xlsx", "Fuel gas", "C5"), "96"), "N2": FromCells(Place(cell="C6"), "4")}
    enter_fuel(ledger, "fuel.site_gas", fuel, origin=cells)
    assert ledger["fuel.site_gas.component.ch4.mole_percent"].origin == cells["methane"]
    assert ledger["fuel.site_gas.component.n2.mole_percent"].origin == cells["N2"]
    carbon = ledger["fuel.site_gas.carbon"]
    assert isinstance(carbon.origin, FromEquation)
    roots = ledger.roots([carbon.key])
    assert {"fuel.site_gas.component.ch4.mole_percent", "component.ch4.carbon"} <= roots


def test_shares_that_are_entries_already_are_not_entered_again() -> None:
    ledger = Ledger(System.US)
    fuel = fuel_from_analysis("oil", {"carbon": 87.0, "hydrogen": 13.0}, heat=45000.0)
    given = {
        "carbon": ledger.enter("fuel.oil.given.carbon", 87.0, "%", Stated("test")),
        "heat": ledger.enter("fuel.oil.given.heat", 19346.0, "Btu/lb", Stated("test")),
    }
    enter_fuel(ledger, "fuel.oil", fuel, entries=given)
    assert "fuel.oil.carbon_percent" not in ledger
    assert "fuel.oil.given.carbon" in ledger.roots(["fuel.oil.carbon"])
    assert ledger["fuel.oil.gross_heating_value"].value == 19346.0


def test_an_assumed_composition_says_so_and_gives_its_spread() -> None:
    ledger = Ledger(System.SI)
    fuel = nominal_fuel("natural gas")
    enter_fuel(ledger, "fuel.gas", fuel)
    methane = ledger["fuel.gas.component.ch4.mole_percent"]
    assert isinstance(methane.origin, FromTable)
    assert methane.origin.citation.document == "practice"
    assert "assumed" in methane.note
    assert spreads(fuel, "fuel.gas")[methane.key] == 3.5
    assert spreads(fuel_from_formula("CH4"), "fuel.gas") == {}
    wood = spreads(nominal_fuel("wood"), "fuel.wood")
    enter_fuel(ledger, "fuel.wood", nominal_fuel("wood"))
    assert all(key in ledger for key in wood)


def test_both_unit_systems_give_one_fuel() -> None:
    us, si = Ledger(System.US), Ledger(System.SI)
    fuel = nominal_fuel("wood")
    for ledger in (us, si):
        enter_fuel(ledger, "fuel.it", fuel)
    for name in ("gross_heating_value", "net_heating_value"):
        # 1 Btu/lb is 2.326 kJ/kg by definition of the units.
        assert us[f"fuel.it.{name}"].value * 2.326 == pytest.approx(si[f"fuel.it.{name}"].value, rel=1e-12)


# ---- text ---------------------------------------------------------------------------------------------


def test_one_line_of_text_for_each_kind_of_fuel() -> None:
    assert fuel_from_text("  Wood  BARK ") == nominal_fuel("wood bark")
    gas = parse_composition("CH4 94, C2H6=4%; N2: 2")
    assert {share.name: share.percent for share in gas.shares} == {"ch4": 94.0, "c2h6": 4.0, "n2": 2.0}
    oil = parse_composition("C 86.5 H 12.5 S 0.4 O 0.6 HHV 45.0 MJ/kg")
    assert oil.heat == pytest.approx(45000.0)
    assert oil.percent("sulfur") == 0.4
    wood = parse_composition(
        "carbon 50, hydrogen 6, oxygen 43, ash 1, moisture 40, dry, gross heating value 8600 Btu/lb"
    )
    assert wood.basis is AnalysisBasis.DRY
    assert wood.heat == pytest.approx(8600 * 2.326)
    producer = parse_composition("hydrogen 14 methane 3 carbon monoxide 27 CO2 4.5 O2 1 N2 50.5")
    assert producer.is_gas


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("peat", "not a published fuel name"),
        ("C 85,3 H 12", "decimals are written with a point"),
        ("CH4 94 N2", "has no number"),
        ("CH4 94 XX 6", "'XX'"),
        ("C 90 CH4 10", "component of a gas"),
        ("CH4 50 CH4 50", "given twice"),
        ("C 86 H 14 HHV 45", "number and a unit"),
        ("C 86 H 14 HHV 45 MW", "not a unit of heat"),
        ("CH4 96 N2 4 HHV 50 MJ/kg", "from its components"),
        ("9", "no name before it"),
    ],
)
def test_text_that_is_no_fuel_is_refused_with_a_reason(text: str, found: str) -> None:
    with pytest.raises(RecordError, match=found):
        fuel_from_text(text)


def test_inert_gas_is_argon_and_helium_only() -> None:
    assert INERT == ("Ar", "He")
    gas = Fuel
    plain = fuel_from_gas("a", {"CH4": 100.0})
    diluted = fuel_from_gas("b", {"CH4": 50.0, "He": 50.0})
    assert isinstance(plain, gas)
    # Helium passes through: the same methane, with one mole of helium in the dry products.
    more = balance(diluted, {"o2": 0.0}).value("dry_products") - 0.5 * balance(plain, {"o2": 0.0}).value("dry_products")
    assert more == pytest.approx(0.5, rel=1e-12)
