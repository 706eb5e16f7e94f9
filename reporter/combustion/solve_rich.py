"""Fuel-rich combustion and known air: dry products and the amounts they leave open, as ledger entries."""

from __future__ import annotations

from typing import Any

from reporter.combustion import given_air, rich, shares, water_gas
from reporter.combustion.products import water_vapour
from reporter.combustion.run_book import RunBook
from reporter.combustion.solve import (
    AIR_LABEL,
    DRY_LABEL,
    Solution,
    net_oxygen,
    products_less_oxygen,
    rest_beside_added,
    rest_beside_unburned,
)
from reporter.equation import Equation
from reporter.ledger import Entry, FromTable


def water_gas_constant(book: RunBook) -> Entry:
    """The water-gas constant, entered once."""
    key = "water_gas.constant"
    return book.ledger.get(key) or book.ledger.enter(
        key,
        water_gas.WATER_GAS_CONSTANT,
        "1",
        FromTable(water_gas.WATER_GAS),
        label="water-gas constant n_CO n_H2O / (n_CO2 n_H2)",
        symbol="K",
    )


def by_rich_carbon_monoxide(book: RunBook) -> Solution:
    """Little or no O2 beside CO: hydrogen by the water-gas relation; readings on dry gas only."""
    book.need_dry()
    net = net_oxygen(book)
    rest = rest_beside_added(book)
    x, needed = book.air.oxygen, book.oxygen_needed()
    carbon = book.sum_of(shares.measured_carbon, "measured_carbon", "carbon in CO and hydrocarbon", open_gas="co2")
    e: dict[str, Entry] = {"air_oxygen": x, "needed": needed, "net": net, "rest": rest, "measured": carbon}
    e |= {"from_fuel": book.from_fuel(), "ratio": water_gas_constant(book), "co": book.fraction("co")}
    e |= {"humidity": book.humidity(), "hydrocarbon": book.fraction("hydrocarbon")}
    e |= {"carbon": book.carbon(), "combustion": book.of_fuel("combustion_water")}
    e["hydrogen_atoms"] = book.atoms("hydrogen_atoms")
    steps: tuple[tuple[str, Equation[Any], str], ...] = (
        ("air_per_product", rich.rich_air_per_product, "dry air per mole of dry products"),
        ("air_fixed", rich.rich_air_fixed, "fixed part of the dry air"),
        ("hydrogen_per_product", rich.hydrogen_per_product, "hydrogen per mole of dry products"),
        ("hydrogen_fixed", rich.hydrogen_fixed, "fixed part of the hydrogen"),
        ("water_per_product", rich.water_per_product, "water per mole of dry products"),
        ("water_fixed", rich.water_fixed, "fixed part of the water"),
        ("square", water_gas.water_gas_square, "water-gas relation, square term"),
        ("linear", water_gas.water_gas_linear, "water-gas relation, linear term"),
        ("dry_products", water_gas.rich_dry_products, DRY_LABEL),
    )
    for name, eq, label in steps:
        key = name if name == "dry_products" else f"rich.{name}"
        e[name] = book.apply(eq, key, {argument: e[argument] for argument in eq.parameters}, label)
    e["products"] = e["dry_products"]
    air = book.apply(rich.rich_dry_air, "air_dry", {n: e[n] for n in rich.rich_dry_air.parameters}, AIR_LABEL)
    h2 = book.apply(rich.rich_hydrogen, "h2", {n: e[n] for n in rich.rich_hydrogen.parameters}, "hydrogen left")
    return Solution("rich", air, e["dry_products"], amounts={"h2": h2})


def by_given_air(book: RunBook, burned: Entry) -> Solution:
    """The air is known; measured O2 leaves CO open, else O2 is open, or CO and hydrogen where air is short."""
    book.need_dry()
    air = book.apply(given_air.dry_air_given, "air_dry", {"air": burned}, AIR_LABEL)
    if book.gas.o2 is not None:
        return _open_carbon_monoxide(book, air)
    short = float(air.value) * float(book.air.oxygen.value) < float(book.oxygen_needed().value)
    if short and book.gas.co is None and book.gas.hydrocarbon is None:
        return _open_shift(book, air)
    inputs = {
        "sum_fixed": products_less_oxygen(book),
        "air": air,
        "sum_per_product": rest_beside_unburned(book),
    }
    return Solution("air", air, book.apply(given_air.dry_products_of_air, "dry_products", inputs, DRY_LABEL))


def _open_carbon_monoxide(book: RunBook, air: Entry) -> Solution:
    net = book.sum_of(shares.net_oxygen, "net_oxygen", "net oxygen without CO", open_gas="co")
    dry = book.apply(
        given_air.dry_products_beside_oxygen,
        "dry_products",
        {
            "from_fuel": book.from_fuel(),
            "air_nitrogen": book.air.nitrogen,
            "air": air,
            "sum_per_product": rest_beside_added(book),
        },
        DRY_LABEL,
    )
    inputs = {
        "needed": book.oxygen_needed(),
        "net": net,
        "products": dry,
        "air_oxygen": book.air.oxygen,
        "air": air,
    }
    co = book.apply(given_air.carbon_monoxide_left, "co", inputs, "carbon monoxide")
    return Solution("air", air, dry, amounts={"co": co})


def _open_shift(book: RunBook, air: Entry) -> Solution:
    ratio, carbon = water_gas_constant(book), book.carbon()
    short = book.apply(
        given_air.unburned_pairs,
        "unburned_pairs",
        {"needed": book.oxygen_needed(), "air_oxygen": book.air.oxygen, "air": air},
        "CO and H2 that the lack of air leaves",
    )
    none = book.no_amount("hydrocarbon", "unburned hydrocarbon not measured: taken as zero", "unburned hydrocarbon")
    oxygen = book.no_amount("o2", "oxygen not measured and air short: taken as used up", "oxygen")
    water = water_of_all(book, air, none)
    linear = book.apply(
        given_air.shift_linear,
        "rich.linear",
        {"ratio": ratio, "carbon": carbon, "short": short, "water": water},
        "water-gas relation, linear term",
    )
    co = book.apply(
        given_air.carbon_monoxide_of_air,
        "co",
        {"linear": linear, "ratio": ratio, "carbon": carbon, "short": short},
        "carbon monoxide",
    )
    h2 = book.apply(given_air.hydrogen_of_air, "h2", {"short": short, "co": co}, "hydrogen left")
    dry = book.apply(
        given_air.rich_dry_products_of_air,
        "dry_products",
        {"from_fuel": book.from_fuel(), "air_nitrogen": book.air.nitrogen, "air": air, "h2": h2},
        DRY_LABEL,
    )
    return Solution("air", air, dry, amounts={"co": co, "h2": h2, "hydrocarbon": none, "o2": oxygen})


def water_of_all(book: RunBook, air: Entry, hydrocarbon: Entry) -> Entry:
    """Water if all hydrogen burned, entered once."""
    key = f"{book.prefix}.water_of_all"
    inputs = {
        "from_fuel": book.of_fuel("combustion_water"),
        "air": air,
        "humidity": book.humidity(),
        "hydrocarbon": hydrocarbon,
        "hydrogen_atoms": book.atoms("hydrogen_atoms"),
    }
    found = book.ledger.get(key)
    return found or book.apply(water_vapour, "water_of_all", inputs, "water if all hydrogen burned", "n_H2O,b")
