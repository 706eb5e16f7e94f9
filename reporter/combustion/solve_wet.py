"""Dry air and dry products of a run with readings on wet gas, as ledger entries."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from reporter.basis import Moisture
from reporter.combustion import balance, shares, wet
from reporter.combustion.run_book import RunBook
from reporter.combustion.solve import AIR_LABEL, DRY_LABEL, Solution, cramer, products_less_oxygen
from reporter.equation import Equation
from reporter.ledger import Entry


@dataclass(frozen=True, slots=True)
class _Wet:
    """T = per_dry D + per_air a + fixed."""

    per_dry: Entry
    per_air: Entry
    fixed: Entry


def _wet_terms(book: RunBook) -> _Wet:
    found = book.fraction("hydrocarbon")
    is_wet = found.basis.moisture is Moisture.WET
    on_wet = found if is_wet else book.absent(Moisture.WET)
    on_dry = book.absent(Moisture.DRY) if is_wet else found
    atoms = book.atoms("hydrogen_atoms")
    per_dry = book.apply(
        wet.wet_per_dry,
        "wet_per_dry",
        {"dry_hydrocarbon": on_dry, "wet_hydrocarbon": on_wet, "hydrogen_atoms": atoms},
        "wet products per mole of dry products",
    )
    parts = {}
    for name, water in (("wet_per_air", book.humidity()), ("wet_fixed", book.of_fuel("combustion_water"))):
        parts[name] = book.apply(
            wet.wet_from_water,
            name,
            {"water": water, "wet_hydrocarbon": on_wet, "hydrogen_atoms": atoms},
            "wet products by the water of the " + ("air" if name == "wet_per_air" else "fuel"),
        )
    return _Wet(per_dry, parts["wet_per_air"], parts["wet_fixed"])


def _pair(book: RunBook, eq: Equation[Any], name: str, label: str) -> tuple[Entry, Entry]:
    """A sum over the dry readings and over the wet ones."""
    dry = book.sum_of(eq, name, f"{label}, readings on dry gas")
    on_wet = book.sum_of(eq, f"{name}.wet", f"{label}, readings on wet gas", Moisture.WET)
    return dry, on_wet


def _coefficient(book: RunBook, eq: Equation[Any], symbol: str, parts: tuple[Entry, Entry, Entry]) -> Entry:
    """A coefficient from its value for dry readings, the sum of wet readings, and the term of T it meets."""
    inputs = dict(zip(("on_dry", "on_wet", "wet_products"), parts, strict=True))
    name = "balance." + symbol.lower()
    return book.apply(eq, name, inputs, f"coefficient {symbol} of the balances", symbol)


def _wet_products(book: RunBook, terms: _Wet, air: Entry, dry: Entry) -> Entry:
    inputs = {
        "wet_per_dry": terms.per_dry,
        "products": dry,
        "wet_per_air": terms.per_air,
        "air": air,
        "fixed": terms.fixed,
    }
    return book.apply(wet.wet_products_of, "wet_products", inputs, "wet products")


def by_wet_oxygen(book: RunBook) -> Solution:
    """Measured O2 decides; some readings are on wet gas."""
    t = _wet_terms(book)
    net, net_wet = _pair(book, shares.net_oxygen, "net_oxygen", "net oxygen")
    added, added_wet = _pair(book, shares.added_moles, "added_moles", "added moles")
    rest = book.apply(balance.rest_of_products, "rest_of_products", {"added": added}, "rest of the dry products")
    raised, lowered = wet.raised_by_wet, wet.lowered_by_wet
    found = cramer(
        book,
        {
            "per_air": _coefficient(book, lowered, "p_a", (book.air.oxygen, net_wet, t.per_air)),
            "per_product": _coefficient(book, raised, "p_D", (net, net_wet, t.per_dry)),
            "fixed": _coefficient(book, raised, "p_0", (book.oxygen_needed(), net_wet, t.fixed)),
            "sum_per_air": _coefficient(book, raised, "q_a", (book.air.nitrogen, added_wet, t.per_air)),
            "sum_per_product": _coefficient(book, lowered, "q_D", (rest, added_wet, t.per_dry)),
            "sum_fixed": _coefficient(book, raised, "q_0", (book.from_fuel(), added_wet, t.fixed)),
        },
    )
    return Solution("o2", found.air, found.dry, _wet_products(book, t, found.air, found.dry))


def by_wet_carbon_dioxide(book: RunBook) -> Solution:
    """Measured CO2 decides and O2 is an unknown; some readings are on wet gas."""
    less = products_less_oxygen(book)
    t = _wet_terms(book)
    carbon, carbon_wet = _pair(book, shares.measured_carbon, "measured_carbon", "measured carbon")
    unburned, unburned_wet = _pair(book, shares.unburned_moles, "unburned_moles", "unburned moles")
    rest = book.apply(balance.rest_of_products, "rest_of_products", {"added": unburned}, "rest of the dry products")
    none = book.stated("air_carbon", 0.0, "dry air is taken to hold no carbon", label="carbon in dry air", symbol="c")
    whole = book.stated(
        "air_whole",
        1.0,
        "a mole of air adds a mole, less what q_0 takes",
        label="dry products per mole of air",
        symbol="c",
    )
    raised, lowered = wet.raised_by_wet, wet.lowered_by_wet
    c = {
        "per_air": _coefficient(book, raised, "c_a", (none, carbon_wet, t.per_air)),
        "per_product": _coefficient(book, raised, "c_D", (carbon, carbon_wet, t.per_dry)),
        "fixed": _coefficient(book, lowered, "c_0", (book.carbon(), carbon_wet, t.fixed)),
        "sum_per_air": _coefficient(book, raised, "q_a", (whole, unburned_wet, t.per_air)),
        "sum_per_product": _coefficient(book, lowered, "q_D", (rest, unburned_wet, t.per_dry)),
        "sum_fixed": _coefficient(book, raised, "q_0", (less, unburned_wet, t.fixed)),
    }
    dry = book.apply(wet.dry_products_from_wet_carbon, "dry_products", dict(c), DRY_LABEL)
    inputs = {name: c[name] for name in ("sum_per_product", "sum_fixed", "sum_per_air")} | {"products": dry}
    air = book.apply(wet.dry_air_from_wet_products, "air_dry", inputs, AIR_LABEL)
    return Solution("co2", air, dry, _wet_products(book, t, air, dry))
