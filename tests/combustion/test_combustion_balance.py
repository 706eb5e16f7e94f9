"""The balance finds the flue gas it was made from, closes every element, and agrees whichever reading decides."""

from __future__ import annotations

import pytest
from combustion_forward import OXYGEN, Burnout, Flue, Fuel, burn, stoichiometric_air
from hypothesis import given, settings
from hypothesis import strategies as st

from reporter.basis import AS_MEASURED, DRY, NO_BASIS, WET, Basis, Moisture, Oxygen, OxygenKind
from reporter.combustion.air import air_model
from reporter.combustion.bare import balance
from reporter.combustion.fuel import fuel_from_formula, fuel_from_gas, nominal_fuel, nominal_names
from reporter.combustion.run import balance_given_air, balance_run
from reporter.combustion.run_book import FlueGas
from reporter.combustion.state import State
from reporter.equation import System
from reporter.errors import BasisError, EquationError, LedgerError, RecordError
from reporter.ledger import Entry, Ledger, Stated

METHOD = air_model("method")
HYDROCARBONS = {"CH4": (1, 4), "C3H8": (3, 8), "C": (1, 0)}


def enter(fuel: Fuel, unit: str = "mol/kg") -> Ledger:
    ledger = Ledger(System.US)
    amounts = {
        "carbon": fuel.c,
        "hydrogen": fuel.h,
        "oxygen": fuel.o,
        "nitrogen": fuel.n,
        "sulfur": fuel.s,
        "water": fuel.w,
        "inert": fuel.inert,
        "combustion_water": fuel.h / 2 + fuel.w,
    }
    for name, amount in amounts.items():
        ledger.enter(f"fuel.it.{name}", amount, unit, Stated("test"))
    return ledger


def reading(ledger: Ledger, name: str, value: float, unit: str, basis: Basis) -> Entry:
    return ledger.enter(f"reading.{name}", value, unit, Stated("test"), basis=basis)


def solve(fuel: Fuel, flue: Flue, names: tuple[str, ...], wet: tuple[str, ...], formula: str, humidity: float) -> State:
    ledger = enter(fuel)
    given_gas: dict[str, Entry] = {}
    for name in names:
        percent = flue.percent({"hydrocarbon": "hc"}.get(name, name), wet=name in wet)
        unit, scale = ("%", 1.0) if name in ("o2", "co2") else ("ppm", 1e4)
        given_gas[name] = reading(ledger, name, percent * scale, unit, WET if name in wet else DRY)
    moisture = reading(ledger, "air_moisture", humidity / (1 + humidity), "1", NO_BASIS)
    gas = FlueGas(**given_gas, hydrocarbon_formula=formula, air_moisture=moisture)
    return balance_run(ledger, "run.1.combustion", "fuel.it", gas)


def is_closed(state: State) -> bool:
    scale = max(state.value("dry_products"), state.value("air_dry"), 1.0)
    names = ("c", "h", "o", "n", "s", "dry")
    return all(abs(state.value(f"closure_{name}")) <= 1e-12 * scale for name in names)


fuels = st.builds(
    Fuel,
    c=st.floats(10.0, 75.0),
    h=st.floats(0.0, 140.0),
    o=st.floats(0.0, 15.0),
    n=st.floats(0.0, 2.0),
    s=st.floats(0.0, 1.5),
    w=st.floats(0.0, 30.0),
    inert=st.floats(0.0, 1.0),
)
shares = st.floats(0.0, 0.02)
cases = {
    "fuel": fuels,
    "excess": st.floats(0.1, 3.0),
    "co": shares,
    "hc": shares,
    "no": st.floats(0.0, 0.002),
    "humidity": st.floats(0.0, 0.04),
    "formula": st.sampled_from(sorted(HYDROCARBONS)),
}
ALL = ("o2", "co", "no", "hydrocarbon")


def made(fuel: Fuel, excess: float, co: float, hc: float, no: float, humidity: float, formula: str) -> Flue:
    p, q = HYDROCARBONS[formula]
    left = Burnout(co * fuel.c, no * fuel.c, hc * fuel.c / p, p, q)
    return burn(fuel, (1 + excess) * stoichiometric_air(fuel), left, humidity=humidity)


@settings(max_examples=60, deadline=None)
@given(**cases, wet=st.sets(st.sampled_from(ALL)))
def test_measured_oxygen_gives_back_the_flue_gas(wet: set[str], formula: str, humidity: float, **of: object) -> None:
    flue = made(**of, humidity=humidity, formula=formula)  # type: ignore[arg-type]
    fuel = of["fuel"]
    assert isinstance(fuel, Fuel)
    state = solve(fuel, flue, ALL, tuple(wet), formula, humidity)
    assert state.by == "o2"
    for name, expected in (("air_dry", flue.air), ("dry_products", flue.dry), ("wet_products", flue.wet)):
        assert state.value(name) == pytest.approx(expected, rel=1e-9)
    for name in ("co2", "co", "no", "h2o", "o2", "n2", "so2"):
        assert state.value(name) == pytest.approx(getattr(flue, name), rel=1e-9, abs=1e-9)
    assert state.value("co2_expected") == pytest.approx(flue.percent("co2"), rel=1e-9)
    assert state.value("moisture_expected") == pytest.approx(flue.percent("h2o", wet=True) / 100, rel=1e-9)
    assert is_closed(state)


@settings(max_examples=60, deadline=None)
@given(**cases, wet=st.sets(st.sampled_from(("co2", "co", "no", "hydrocarbon"))))
def test_measured_carbon_dioxide_gives_back_the_flue_gas(
    wet: set[str], formula: str, humidity: float, **of: object
) -> None:
    flue = made(**of, humidity=humidity, formula=formula)  # type: ignore[arg-type]
    fuel = of["fuel"]
    assert isinstance(fuel, Fuel)
    state = solve(fuel, flue, ("co2", "co", "no", "hydrocarbon"), tuple(wet), formula, humidity)
    assert state.by == "co2"
    assert state.value("air_dry") == pytest.approx(flue.air, rel=1e-9)
    assert state.value("o2") == pytest.approx(flue.o2, rel=1e-8, abs=1e-9)
    assert state.value("o2_expected") == pytest.approx(flue.percent("o2"), rel=1e-8, abs=1e-9)
    assert is_closed(state)


@settings(max_examples=60, deadline=None)
@given(
    fuel=fuels,
    o2=st.floats(-0.3, 20.5),
    co=st.floats(-5.0, 4000.0),
    no=st.floats(-5.0, 2000.0),
    hydrocarbon=st.floats(-5.0, 3000.0),
    wet=st.sets(st.sampled_from(ALL)),
)
def test_elements_close_for_any_readings(fuel: Fuel, wet: set[str], **values: float) -> None:
    ledger = enter(fuel)
    gas = FlueGas(
        **{
            name: reading(ledger, name, value, "%" if name == "o2" else "ppm", WET if name in wet else DRY)
            for name, value in values.items()
        }
    )
    state = balance_run(ledger, "run.1.combustion", "fuel.it", gas)
    assert is_closed(state)


@settings(max_examples=40, deadline=None)
@given(
    c=st.floats(10.0, 75.0),
    hydrogen=st.floats(0.5, 4.0),
    o=st.floats(0.0, 8.0),
    w=st.floats(0.0, 20.0),
    air=st.floats(0.6, 0.99),
    humidity=st.floats(0.0, 0.03),
)
def test_fuel_rich_readings_give_back_air_and_hydrogen(
    c: float, hydrogen: float, o: float, w: float, air: float, humidity: float
) -> None:
    fuel = Fuel(c=c, h=hydrogen * c, o=o, w=w)
    ledger = enter(fuel)
    moist = reading(ledger, "air_moisture", humidity / (1 + humidity), "1", NO_BASIS)
    burned = ledger.enter("reading.air", air * stoichiometric_air(fuel), "mol/kg", Stated("test"))
    made_state = balance_given_air(ledger, "run.1.combustion", "fuel.it", burned, gas=FlueGas(air_moisture=moist))
    n = {name: made_state.value(name) for name in ("co", "h2o", "co2", "h2", "dry_products")}
    # 40 CFR 1065.655 prints the water-gas constant 3.5.
    assert n["co"] * n["h2o"] / (n["co2"] * n["h2"]) == pytest.approx(3.5, rel=1e-9)
    assert min(n.values()) > 0
    assert is_closed(made_state)

    co = reading(ledger, "co", 1e6 * n["co"] / n["dry_products"], "ppm", DRY)
    o2 = reading(ledger, "o2", 0.0, "%", DRY)
    found = balance_run(ledger, "run.2.combustion", "fuel.it", FlueGas(o2=o2, co=co, air_moisture=moist))
    assert found.by == "rich"
    assert found.mixture == "fuel-rich"
    assert found.value("air_dry") == pytest.approx(float(burned.value), rel=1e-8)
    assert found.value("h2") == pytest.approx(n["h2"], rel=1e-6)
    assert is_closed(found)


@settings(max_examples=30, deadline=None)
@given(fuel=fuels, excess=st.floats(0.05, 2.0), co=st.floats(0.0, 0.05))
def test_given_air_leaves_what_one_reading_leaves_open(fuel: Fuel, excess: float, co: float) -> None:
    flue = burn(fuel, (1 + excess) * stoichiometric_air(fuel), Burnout(co=co * fuel.c))
    ledger = enter(fuel)
    burned = ledger.enter("reading.air", flue.air, "mol/kg", Stated("test"))
    o2 = reading(ledger, "o2", flue.percent("o2"), "%", DRY)
    monoxide = reading(ledger, "co", 1e4 * flue.percent("co"), "ppm", DRY)
    open_co = balance_given_air(ledger, "run.1.combustion", "fuel.it", burned, gas=FlueGas(o2=o2))
    open_o2 = balance_given_air(ledger, "run.2.combustion", "fuel.it", burned, gas=FlueGas(co=monoxide))
    assert open_co.value("co") == pytest.approx(flue.co, rel=1e-7, abs=1e-9)
    assert open_o2.value("o2") == pytest.approx(flue.o2, rel=1e-9, abs=1e-9)
    assert open_o2.value("o2_expected") == pytest.approx(flue.percent("o2"), rel=1e-9, abs=1e-9)
    assert is_closed(open_co)
    assert is_closed(open_o2)


@pytest.mark.parametrize("name", nominal_names())
@pytest.mark.parametrize("oxygen", [0.0, 3.0, 11.0, 18.0])
def test_complete_combustion_lies_on_the_fuel_line(name: str, oxygen: float) -> None:
    # CO2 = CO2max (x - O2) / x, an identity of complete combustion.
    fuel = nominal_fuel(name)
    most = balance(fuel, {"o2": 0.0}).value("co2_expected")
    found = balance(fuel, {"o2": oxygen}).value("co2_expected")
    assert found == pytest.approx(most * (OXYGEN - oxygen / 100) / OXYGEN, rel=1e-12)


def test_wet_and_dry_readings_of_one_gas_give_one_balance() -> None:
    fuel = nominal_fuel("wood")
    dry = balance(fuel, {"o2": 7.0, "co": 900.0, "hydrocarbon": 60.0, "air_moisture": 0.012})
    to_wet = 1.0 - dry.value("moisture_expected")
    wet = balance(
        fuel,
        {"o2": 7.0 * to_wet, "co": 900.0 * to_wet, "hydrocarbon": 60.0, "air_moisture": 0.012},
        wet=("o2", "co"),
    )
    for name in ("air_dry", "dry_products", "h2o", "co2", "o2", "excess_air"):
        assert wet.value(name) == pytest.approx(dry.value(name), rel=1e-12)


def test_concentrations_are_expected_only_where_they_were_not_what_decided() -> None:
    fuel = nominal_fuel("wood")
    names = {"co2_expected", "o2_expected"}
    made = {
        "o2": balance(fuel, {"o2": 7.0, "co": 90.0}, wet=("co",)),
        "wet o2": balance(fuel, {"o2": 7.0}, wet=("o2",)),
        "co2": balance(fuel, {"co2": 12.0}),
    }
    found = {case: {name for name in names if state.get(name) is not None} for case, state in made.items()}
    assert found == {"o2": {"co2_expected"}, "wet o2": names, "co2": {"o2_expected"}}


def test_moisture_measured_tells_the_humidity_of_the_air() -> None:
    fuel = nominal_fuel("natural gas")
    humid = balance(fuel, {"o2": 3.0, "air_moisture": 0.02})
    measured = humid.value("moisture_expected")
    dry_guess = balance(fuel, {"o2": 3.0, "moisture": measured})
    assert dry_guess.value("air_humidity_implied") == pytest.approx(0.02 / 0.98, rel=1e-12)


def test_unburned_carbon_lowers_the_air_and_closes() -> None:
    fuel = Fuel(c=50.0, h=40.0, o=5.0)
    ledger = enter(fuel)
    soot = ledger.enter("reading.soot", 2.0, "mol/kg", Stated("test"))
    gas = FlueGas(o2=reading(ledger, "o2", 5.0, "%", DRY), unburned_carbon=soot)
    state = balance_run(ledger, "run.1.combustion", "fuel.it", gas)
    other = enter(Fuel(c=48.0, h=40.0, o=5.0))
    less = balance_run(other, "run.1.combustion", "fuel.it", FlueGas(o2=reading(other, "o2", 5.0, "%", DRY)))
    assert state.value("air_dry") == pytest.approx(less.value("air_dry"), rel=1e-12)
    assert state.value("co2") == pytest.approx(48.0, rel=1e-12)
    # Excess air still counts against the air of the whole fuel: 50 + 10 - 2.5 mol O2 per kg.
    assert state.value("air_stoichiometric") == pytest.approx(57.5 / OXYGEN, rel=1e-12)


def test_mass_and_mole_ratios_agree_in_the_equivalence_ratio() -> None:
    state = balance(fuel_from_formula("CH4"), {"o2": 5.0}, air=METHOD)
    by_mole = state.value("air_stoichiometric") / state.value("air_fuel_mole")
    # 16.043 g/mol of methane, 28.847 g/mol of air with 20.9 % oxygen and the rest nitrogen (CIAAW 2021).
    stoichiometric_by_mass = 2 / 0.209 * 28.847 / 16.043
    assert state.value("equivalence_ratio") == pytest.approx(by_mole, rel=1e-12)
    assert state.value("equivalence_ratio") == pytest.approx(
        stoichiometric_by_mass / state.value("air_fuel_mass"), rel=1e-9
    )
    assert state.mixture == "fuel-lean"


@pytest.mark.parametrize(
    ("readings", "words"),
    [
        ({"o2": 3.0}, "fuel-lean"),
        ({"o2": 0.0}, "stoichiometric"),
        ({"o2": 0.02, "co": 9000.0}, "fuel-rich"),
        ({"o2": 21.2}, ""),
    ],
)
def test_words_for_the_mixture(readings: dict[str, float], words: str) -> None:
    assert balance(nominal_fuel("natural gas"), readings).mixture == words


def test_hydrogen_fuel_has_no_carbon_dioxide() -> None:
    state = balance(fuel_from_gas("hydrogen", {"H2": 100.0}), {"o2": 3.0})
    assert state.value("co2_expected") == 0.0
    assert state.value("h2o") == pytest.approx(1.0, rel=1e-12)


def test_oxygen_exactly_that_of_air_has_no_solution() -> None:
    with pytest.raises(EquationError):
        balance(fuel_from_formula("CH4"), {"o2": 20.9}, air=METHOD)


def test_faults_of_use_are_refused() -> None:
    fuel = nominal_fuel("natural gas")
    with pytest.raises(LedgerError, match="O2 or CO2"):
        balance(fuel, {"co": 5.0})
    with pytest.raises(RecordError, match="no reading of a balance"):
        balance(fuel, {"ox": 5.0})
    with pytest.raises(BasisError, match="must be dry"):
        balance(fuel, {"o2": 3.0}, wet=("o2",), air_burned=11.0)
    ledger = enter(Fuel(c=50.0, h=40.0))
    corrected = Basis(Moisture.DRY, Oxygen(OxygenKind.CORRECTED, 3.0, 20.9))
    gas = FlueGas(o2=reading(ledger, "o2", 3.0, "%", DRY), co=reading(ledger, "co", 50.0, "ppm", corrected))
    with pytest.raises(BasisError, match="as measured"):
        balance_run(ledger, "run.1.combustion", "fuel.it", gas)
    unknown = FlueGas(o2=reading(ledger, "o2.unknown", 3.0, "%", Basis(Moisture.UNKNOWN, AS_MEASURED)))
    with pytest.raises(BasisError, match="dry or wet"):
        balance_run(ledger, "run.2.combustion", "fuel.it", unknown)
    mass = FlueGas(o2=reading(ledger, "o2.mass", 3.0, "mg/m3", DRY))
    with pytest.raises(LedgerError, match="% or ppm"):
        balance_run(ledger, "run.3.combustion", "fuel.it", mass)


def test_a_changed_reading_replays_as_a_new_balance() -> None:
    fuel = nominal_fuel("wood")
    state = balance(fuel, {"o2": 7.0, "co": 900.0})
    again = state.ledger.replay({"reading.o2": 9.0})
    fresh = balance(fuel, {"o2": 9.0, "co": 900.0})
    for name in ("air_dry", "co2_expected", "moisture_expected", "excess_air"):
        assert again[f"{state.prefix}.{name}"] == pytest.approx(fresh.value(name), rel=1e-14)
