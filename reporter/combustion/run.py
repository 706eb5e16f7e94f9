"""One run: from its readings to every product, the air, the expected concentrations and the closure."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from reporter.basis import Moisture
from reporter.combustion import closure, mixture, products, rich
from reporter.combustion.air import Air, air_model, enter_air
from reporter.combustion.run_book import FlueGas, RunBook
from reporter.combustion.solve import Solution, by_carbon_dioxide, by_oxygen, net_oxygen
from reporter.combustion.solve_rich import by_given_air, by_rich_carbon_monoxide, water_of_all
from reporter.combustion.solve_wet import by_wet_carbon_dioxide, by_wet_oxygen
from reporter.combustion.state import State
from reporter.combustion.stoichiometry import humid_air, stoichiometric_air
from reporter.combustion.stoichiometry_entries import air_fuel_by_mass, enter_oxygen_needed
from reporter.errors import LedgerError
from reporter.ledger import Entry, Ledger


def balance_run(ledger: Ledger, prefix: str, fuel_prefix: str, gas: FlueGas, *, air: Air | None = None) -> State:
    """Solve the element balances of a run and enter each step.

    Measured O2 decides; without it, measured CO2.  Where all readings are dry and less O2 is left than the
    CO would take, combustion was fuel-rich and hydrogen is carried by the water-gas relation.

    Parameters
    ----------
    ledger
        Where to; the fuel stands under `fuel_prefix` already (`enter_fuel`).
    prefix
        ``run.<run>.combustion``.  Written: `air_stoichiometric`, `air_dry`, `air_humid`, `dry_products`,
        `wet_products`, `co2`, `co`, `h2`, `h2o`, `o2`, `n2`, `so2`, `no`, `hydrocarbon` [mol/kg or
        mol/mol], `excess_air` [%], `equivalence_ratio`, `air_fuel_mole`, `air_fuel_mass`, `co2_expected`
        and `o2_expected` [%, dry] where they were not what decided, `moisture_expected` [1], closure
        residuals `closure_c` to `closure_s` and `closure_dry`, and the steps between.
    fuel_prefix
        ``fuel.<slug>``.
    gas
        The readings.
    air
        The model of dry air; 20.95 % oxygen where absent.

    Returns
    -------
    State
        The solved balance.

    Raises
    ------
    BasisError
        A reading has no moisture basis, or is corrected to a reference.
    EquationError
        The balances have no finite solution (oxygen exactly that of air, no carbon dioxide).
    LedgerError
        There is neither O2 nor CO2, or a reading is not in % or ppm.
    """
    book = RunBook(ledger, prefix, fuel_prefix, gas, enter_air(ledger, air or air_model("physical")))
    return _finish(book, _way(book)(book))


def balance_given_air(
    ledger: Ledger,
    prefix: str,
    fuel_prefix: str,
    air_burned: Entry,
    *,
    gas: FlueGas | None = None,
    air: Air | None = None,
) -> State:
    """Solve the balances for a known amount of dry air; what one measured gas leaves open is computed.

    Parameters
    ----------
    ledger, prefix, fuel_prefix
        As in `balance_run`.
    air_burned
        Dry air [mol per kg or mol of fuel].
    gas
        Readings on dry gas.  O2 measured leaves CO open; CO measured leaves O2 open; nothing measured means
        complete combustion, or CO and hydrogen by the water-gas relation where air is short.
    air
        The model of dry air; 20.95 % oxygen where absent.

    Raises
    ------
    BasisError
        A reading is on wet gas.
    """
    model = enter_air(ledger, air or air_model("physical"))
    book = RunBook(ledger, prefix, fuel_prefix, gas or FlueGas(), model)
    state = _finish(book, by_given_air(book, air_burned))
    return replace(state, readings=(*state.readings, air_burned.key))


def _way(book: RunBook) -> Callable[[RunBook], Solution]:
    gas = book.gas
    if gas.o2 is None:
        if gas.co2 is None:
            raise LedgerError(f"{book.prefix}: a balance needs measured O2 or CO2")
        return by_wet_carbon_dioxide if gas.wet else by_carbon_dioxide
    if gas.wet:
        return by_wet_oxygen
    is_rich = gas.co is not None and gas.co.value > 0 and net_oxygen(book).value < 0
    return by_rich_carbon_monoxide if is_rich else by_oxygen


def _finish(book: RunBook, solution: Solution) -> State:
    amounts = _amounts(book, solution)
    _mixture(book, solution, amounts)
    _expected(book, solution, amounts)
    _closures(book, solution, amounts)
    return State(book.ledger, book.prefix, book.fuel, solution.by, tuple(e.key for e in book.gas.readings))


def _measured(book: RunBook, solution: Solution, name: str, label: str) -> Entry:
    if name in solution.amounts:
        return solution.amounts[name]
    fraction = book.fraction(name)
    is_wet = fraction.basis.moisture is Moisture.WET and solution.wet is not None
    stands_on = solution.wet if is_wet and solution.wet is not None else solution.dry
    inputs = {"fraction": fraction, "products": stands_on}
    symbol = "n_HC" if name == "hydrocarbon" else f"n_{name.upper()}"
    return book.apply(products.amount_of, name, inputs, label, symbol)


def _amounts(book: RunBook, solution: Solution) -> dict[str, Entry]:
    n: dict[str, Entry] = {}
    n["co"] = _measured(book, solution, "co", "carbon monoxide")
    n["no"] = _measured(book, solution, "no", "nitrogen oxides as NO")
    n["hydrocarbon"] = _measured(book, solution, "hydrocarbon", "unburned hydrocarbon")
    p, q = book.atoms("carbon_atoms"), book.atoms("hydrogen_atoms")
    carbon = {"carbon": book.carbon(), "co": n["co"], "hydrocarbon": n["hydrocarbon"], "carbon_atoms": p}
    n["co2"] = book.apply(products.carbon_dioxide, "co2", carbon, "carbon dioxide")
    n["so2"] = book.apply(products.sulfur_dioxide, "so2", {"sulfur": book.of_fuel("sulfur")}, "sulfur dioxide")
    nitrogen = {"nitrogen": book.of_fuel("nitrogen"), "air": solution.air, "no": n["no"]}
    n["n2"] = book.apply(
        products.nitrogen_left,
        "n2",
        nitrogen | {"air_nitrogen": book.air.nitrogen},
        "nitrogen, with the argon of the air",
    )
    n["o2"] = _oxygen(book, solution, n, p, q)
    _water(book, solution, n, q)
    return n


def _oxygen(book: RunBook, solution: Solution, n: dict[str, Entry], p: Entry, q: Entry) -> Entry:
    if book.gas.o2 is not None or "o2" in solution.amounts:
        return _measured(book, solution, "o2", "oxygen")
    inputs = {
        "air": solution.air,
        "air_oxygen": book.air.oxygen,
        "needed": book.oxygen_needed(),
        "co": n["co"],
        "no": n["no"],
        "hydrocarbon": n["hydrocarbon"],
        "carbon_atoms": p,
        "hydrogen_atoms": q,
    }
    return book.apply(products.oxygen_left, "o2", inputs, "oxygen from the oxygen balance")


def _water(book: RunBook, solution: Solution, n: dict[str, Entry], q: Entry) -> None:
    if "h2" in solution.amounts:
        n["h2"] = solution.amounts["h2"]
        water = water_of_all(book, solution.air, n["hydrocarbon"])
        inputs = {"water": water, "h2": n["h2"]}
        n["h2o"] = book.apply(rich.water_beside_hydrogen, "h2o", inputs, "water")
    else:
        n["h2"] = book.no_amount("h2", "hydrogen taken as burned", "hydrogen left")
        vapour = {
            "from_fuel": book.of_fuel("combustion_water"),
            "air": solution.air,
            "humidity": book.humidity(),
            "hydrocarbon": n["hydrocarbon"],
            "hydrogen_atoms": q,
        }
        n["h2o"] = book.apply(products.water_vapour, "h2o", vapour, "water")
    n["wet"] = solution.wet or book.apply(
        products.wet_products, "wet_products", {"dry": solution.dry, "water": n["h2o"]}, "wet products"
    )


def _mixture(book: RunBook, solution: Solution, n: dict[str, Entry]) -> None:
    needed = enter_oxygen_needed(book.ledger, book.fuel)
    least = book.apply(
        stoichiometric_air,
        "air_stoichiometric",
        {"oxygen_needed": needed, "air_oxygen": book.air.oxygen},
        "stoichiometric dry air by mole",
    )
    pair = {"air": solution.air, "stoichiometric": least}
    book.apply(humid_air, "air_humid", {"air": solution.air, "humidity": book.humidity()}, "air with its water")
    book.apply(mixture.excess_air_of_balance, "excess_air", pair, "excess air")
    ratio = book.apply(mixture.equivalence_ratio, "equivalence_ratio", pair, "equivalence ratio")
    by_mole = book.apply(
        mixture.air_fuel_by_mole,
        "air_fuel_mole",
        {"stoichiometric": least, "ratio": ratio},
        "air-fuel ratio by mole, dry air",
    )
    air_fuel_by_mass(book.ledger, f"{book.prefix}.air_fuel_mass", by_mole, book.fuel, book.air)


def _expected(book: RunBook, solution: Solution, n: dict[str, Entry]) -> None:
    def dry_percent(name: str, label: str) -> None:
        inputs = {"amount": n[name], "products": solution.dry}
        book.apply(mixture.expected_percent, f"{name}_expected", inputs, label)

    if solution.by != "co2":
        dry_percent("co2", "dry CO2 expected from the balance")
    if book.gas.o2 is None or book.gas.o2 in book.gas.wet:
        dry_percent("o2", "dry O2 expected from the balance")
    inputs = {"water": n["h2o"], "products": n["wet"]}
    book.apply(mixture.expected_moisture, "moisture_expected", inputs, "moisture expected from combustion")
    if book.gas.moisture is None:
        return
    without = book.apply(
        mixture.water_without_air,
        "h2o_of_fuel",
        {"water": n["h2o"], "air": solution.air, "humidity": book.humidity()},
        "water that does not come from the air",
    )
    book.apply(
        mixture.implied_humidity,
        "air_humidity_implied",
        {"moisture": book.gas.moisture, "dry": solution.dry, "from_fuel": without, "air": solution.air},
        "humidity of the air that the measured moisture implies",
    )


def _closures(book: RunBook, solution: Solution, n: dict[str, Entry]) -> None:
    known = {
        **n,
        "carbon": book.carbon(),
        **{name: book.of_fuel(name) for name in ("hydrogen", "oxygen", "nitrogen", "sulfur", "water", "inert")},
        "air": solution.air,
        "air_oxygen": book.air.oxygen,
        "air_nitrogen": book.air.nitrogen,
        "humidity": book.humidity(),
        "carbon_atoms": book.atoms("carbon_atoms"),
        "hydrogen_atoms": book.atoms("hydrogen_atoms"),
        "products": solution.dry,
    }
    for name, eq, words in (
        ("closure_c", closure.closure_carbon, "carbon out less in"),
        ("closure_h", closure.closure_hydrogen, "hydrogen out less in"),
        ("closure_o", closure.closure_oxygen, "oxygen out less in"),
        ("closure_n", closure.closure_nitrogen, "nitrogen out less in"),
        ("closure_s", closure.closure_sulfur, "sulfur out less in"),
        ("closure_dry", closure.closure_dry, "sum of the dry gases less the dry products"),
    ):
        book.apply(eq, name, {argument: known[argument] for argument in eq.parameters}, words)
