"""A gas fuel in the ledger: mole percentages, what a mole of it has, molar mass, heating value."""

from __future__ import annotations

from collections.abc import Mapping

from reporter.combustion import composition as eq
from reporter.combustion.components import INERT, Component, component
from reporter.combustion.fuel_book import SYMBOLS, FuelBook
from reporter.equation import Citation
from reporter.ledger import Entry, FromTable, Ledger

_CIAAW = Citation("ciaaw")


def enter_gas(book: FuelBook) -> None:
    """Enter the components of a gas, then the amounts [mol/mol], molar mass and heating values."""
    fuel, ledger, prefix = book.fuel, book.ledger, book.prefix
    rows = [(component(share.name), share) for share in fuel.shares]
    shares: dict[str, Entry] = {}
    for row, share in rows:
        key = f"component.{row.key}.mole_percent"
        label = f"{fuel.name}: {row.label}"
        shares[row.key] = book.given(share.name, key, share.percent, "%", share.spread, label)
    parts = [row for row, _ in rows]
    whole = ledger.apply(
        eq.sum_of_shares,
        f"{prefix}.sum_of_shares",
        {"shares": tuple(shares.values())},
        label=f"{fuel.name}: sum of mole percentages",
    )
    for name, symbol in SYMBOLS.items():
        _mean_of(book, parts, shares, whole, name, _counts(ledger, parts, symbol, name))
    _mean_of(book, parts, shares, whole, "water", _counts(ledger, parts, "H2O", "water"))
    _mean_of(book, parts, shares, whole, "inert", _counts(ledger, parts, "inert", "inert"))
    masses = {row.key: _property(ledger, row, "molar_mass", row.molar_mass, "g/mol") for row in parts}
    _mean_of(book, parts, shares, whole, "molar_mass", masses)
    _enter_gas_heat(book, parts, shares, whole)


def _counts(ledger: Ledger, parts: list[Component], symbol: str, name: str) -> dict[str, Entry]:
    """How many atoms (or molecules of water, or of inert gas) a molecule counts for; only where any."""
    found: dict[str, Entry] = {}
    for row in parts:
        if row.formula == "H2O":
            count = 1 if symbol == "H2O" else 0
        elif row.formula in INERT:
            count = 1 if symbol == "inert" else 0
        else:
            count = row.atoms.get(symbol, 0)
        if count:
            found[row.key] = _property(ledger, row, name, float(count), "mol/mol")
    return found


def _property(ledger: Ledger, row: Component, name: str, value: float, unit: str) -> Entry:
    """A property of a component, entered once for all fuels."""
    key = f"component.{row.key}.{name}"
    citation = row.citation if unit == "kJ/mol" else _CIAAW
    words = name.replace("_", " ")
    note = row.status if unit == "kJ/mol" else ""
    return ledger.get(key) or ledger.enter(
        key, value, unit, FromTable(citation, row.formula), label=f"{row.label}: {words}", note=note
    )


def _mean_of(
    book: FuelBook,
    parts: list[Component],
    shares: Mapping[str, Entry],
    whole: Entry,
    name: str,
    values: Mapping[str, Entry],
) -> Entry:
    if not values:
        return book.zero(name, f"no component counts as {name}")
    symbols = {"molar_mass": "M_fuel", "molar_heating_value": "H_m", "water": "n_W", "inert": "n_I"}
    return book.ledger.apply(
        eq.mole_mean,
        f"{book.prefix}.{name}",
        {
            "shares": tuple(shares[row.key] for row in parts if row.key in values),
            "values": tuple(values[row.key] for row in parts if row.key in values),
            "whole": whole,
        },
        label=f"{book.fuel.name}: {name.replace('_', ' ')}",
        symbol=symbols.get(name, f"n_{SYMBOLS.get(name, name)}"),
    )


def _enter_gas_heat(book: FuelBook, parts: list[Component], shares: Mapping[str, Entry], whole: Entry) -> None:
    ledger, prefix, name = book.ledger, book.prefix, book.fuel.name
    if any(row.heat is None for row in parts):
        return
    burning = {row.key: _property(ledger, row, "molar_heating_value", row.heat, "kJ/mol") for row in parts if row.heat}
    if not burning:
        return
    molar = _mean_of(book, parts, shares, whole, "molar_heating_value", burning)
    ledger.apply(
        eq.heat_by_mass,
        f"{prefix}.gross_heating_value",
        {"molar_heat": molar, "molar_mass": f"{prefix}.molar_mass"},
        label=f"{name}: gross heating value by mass",
    )
    ledger.apply(
        eq.heat_by_volume,
        f"{prefix}.gross_heating_value.by_volume",
        {"molar_heat": molar},
        label=f"{name}: gross heating value by volume at 68 °F and 29.92 inHg",
    )
