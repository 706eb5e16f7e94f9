"""Dry air and dry products of a run from its readings: each way to close the balances, as ledger entries."""

from __future__ import annotations

from dataclasses import dataclass, field

from reporter.combustion import balance, shares
from reporter.combustion.run_book import RunBook
from reporter.ledger import Entry


@dataclass(frozen=True, slots=True)
class Solution:
    """Dry air, dry products, wet products where readings stand on them, and amounts found on the way."""

    by: str
    air: Entry
    dry: Entry
    wet: Entry | None = None
    amounts: dict[str, Entry] = field(default_factory=dict)


AIR_LABEL = "dry air burned"
DRY_LABEL = "dry products"


def by_oxygen(book: RunBook) -> Solution:
    """Measured O2 decides; all readings are on dry gas."""
    net = net_oxygen(book)
    return cramer(
        book,
        {
            "per_air": book.air.oxygen,
            "per_product": net,
            "fixed": book.oxygen_needed(),
            "sum_per_air": book.air.nitrogen,
            "sum_per_product": rest_beside_added(book),
            "sum_fixed": book.from_fuel(),
        },
    )


def net_oxygen(book: RunBook) -> Entry:
    """Net oxygen of the dry readings, entered once."""
    found = book.ledger.get(f"{book.prefix}.net_oxygen")
    return found or book.sum_of(shares.net_oxygen, "net_oxygen", "net oxygen of the flue gas")


def cramer(book: RunBook, c: dict[str, Entry]) -> Solution:
    """Dry air and dry products from the six coefficients of the two balances."""
    names = ("per_air", "per_product", "sum_per_air", "sum_per_product")
    words = "oxygen taken from the air, per mole of dry products"
    det = book.apply(balance.determinant, "determinant", {name: c[name] for name in names}, words)
    air = book.apply(
        balance.dry_air,
        "air_dry",
        {name: c[name] for name in ("fixed", "sum_per_product", "per_product", "sum_fixed")} | {"denominator": det},
        AIR_LABEL,
    )
    dry = book.apply(
        balance.dry_products,
        "dry_products",
        {name: c[name] for name in ("per_air", "sum_fixed", "sum_per_air", "fixed")} | {"denominator": det},
        DRY_LABEL,
    )
    return Solution("o2", air, dry)


def by_carbon_dioxide(book: RunBook) -> Solution:
    """Measured CO2 decides and O2 is an unknown; all readings are on dry gas."""
    carbon = book.sum_of(shares.measured_carbon, "measured_carbon", "carbon in the measured gases")
    inputs = {"carbon": book.carbon(), "measured": carbon}
    dry = book.apply(balance.dry_products_from_carbon, "dry_products", inputs, DRY_LABEL)
    air = book.apply(
        balance.dry_air_from_products,
        "air_dry",
        {"products": dry, "sum_per_product": rest_beside_unburned(book), "sum_fixed": products_less_oxygen(book)},
        AIR_LABEL,
    )
    return Solution("co2", air, dry)


def rest_beside_added(book: RunBook) -> Entry:
    """One less the moles the measured gases add, all readings dry."""
    added = book.sum_of(shares.added_moles, "added_moles", "moles the measured gases add")
    return _rest(book, added)


def rest_beside_unburned(book: RunBook) -> Entry:
    """One less the moles unburned gases add, all readings dry."""
    unburned = book.sum_of(shares.unburned_moles, "unburned_moles", "moles unburned gases add")
    return _rest(book, unburned)


def _rest(book: RunBook, added: Entry) -> Entry:
    label = "rest of the dry products"
    return book.apply(balance.rest_of_products, "rest_of_products", {"added": added}, label)


def products_less_oxygen(book: RunBook) -> Entry:
    """Dry products of the fuel itself less its oxygen."""
    return book.apply(
        balance.products_less_oxygen,
        "products_less_oxygen",
        {"from_fuel": book.from_fuel(), "oxygen_needed": book.oxygen_needed()},
        "dry products of the fuel less its oxygen",
    )
