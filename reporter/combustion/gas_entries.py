"""A gas fuel in the ledger: mole percentages, what a mole of it has, molar mass, heating value."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from reporter.combustion import composition as eq
from reporter.combustion.components import INERT, Component, component
from reporter.combustion.fuel_book import SYMBOLS, FuelBook, amount_symbol
from reporter.equation import Citation
from reporter.ledger import Entry, FromTable, Ledger

_CIAAW = Citation("ciaaw")


@dataclass(frozen=True, slots=True)
class _Gas:
    """The components of a gas, their shares as entries by component, and the sum of those."""

    book: FuelBook
    parts: tuple[Component, ...]
    shares: Mapping[str, Entry]
    whole: Entry

    def mean(self, name: str, symbol: str, values: Mapping[str, Entry]) -> Entry:
        """Enter the mean of what a mole of each component has; components without it are left out."""
        with_it = [row.key for row in self.parts if row.key in values]
        return self.book.ledger.apply(
            eq.mole_mean,
            f"{self.book.prefix}.{name}",
            {
                "shares": tuple(self.shares[key] for key in with_it),
                "values": tuple(values[key] for key in with_it),
                "whole": self.whole,
            },
            label=f"{self.book.fuel.name}: {name.replace('_', ' ')}",
            symbol=symbol,
        )


def enter_gas(book: FuelBook) -> None:
    """Enter the components of a gas, then the amounts [mol/mol], molar mass and heating values."""
    name, ledger = book.fuel.name, book.ledger
    rows = [(component(share.name), share) for share in book.fuel.shares]
    shares = {
        row.key: book.given(share, f"component.{row.key}.mole_percent", label=f"{name}: {row.label}")
        for row, share in rows
    }
    whole = ledger.apply(
        eq.sum_of_shares,
        f"{book.prefix}.sum_of_shares",
        {"shares": tuple(shares.values())},
        label=f"{name}: sum of mole percentages",
    )
    gas = _Gas(book, tuple(row for row, _ in rows), shares, whole)
    for amount in (*SYMBOLS, "water", "inert"):
        counts = _counts(ledger, gas.parts, amount)
        if counts:
            gas.mean(amount, amount_symbol(amount), counts)
        else:
            book.zero(amount, f"no component counts as {amount}")
    gas.mean("molar_mass", "M_fuel", {row.key: _molar_mass(ledger, row) for row in gas.parts})
    _enter_heat(gas)


def _counts(ledger: Ledger, parts: tuple[Component, ...], amount: str) -> dict[str, Entry]:
    """What a molecule of each component counts for; only components that count."""
    counted = {row.key: (row, _count(row, amount)) for row in parts}
    return {key: _counted(ledger, row, amount, count) for key, (row, count) in counted.items() if count}


def _count(row: Component, amount: str) -> int:
    """Atoms of an element, or one for a molecule of water or of inert gas."""
    if row.formula == "H2O" or row.formula in INERT:
        return int(amount == ("water" if row.formula == "H2O" else "inert"))
    return row.atoms.get(SYMBOLS.get(amount, ""), 0)


def _counted(ledger: Ledger, row: Component, amount: str, count: int) -> Entry:
    key = f"component.{row.key}.{amount}"
    origin = FromTable(Citation("balance", "", "formula"), row.formula)
    label = f"{row.label}: {amount} in a molecule"
    return ledger.get(key) or ledger.enter(key, float(count), "mol/mol", origin, label=label, decimals=0)


def _molar_mass(ledger: Ledger, row: Component) -> Entry:
    key = f"component.{row.key}.molar_mass"
    origin = FromTable(_CIAAW, row.formula)
    label = f"{row.label}: molar mass"
    return ledger.get(key) or ledger.enter(key, row.molar_mass, "g/mol", origin, label=label, decimals=3)


def _molar_heat(ledger: Ledger, row: Component, heat: float) -> Entry:
    key = f"component.{row.key}.molar_heating_value"
    origin = FromTable(row.citation, row.formula)
    label = f"{row.label}: molar gross heating value"
    return ledger.get(key) or ledger.enter(key, heat, "kJ/mol", origin, label=label, note=row.status, decimals=2)


def _enter_heat(gas: _Gas) -> None:
    """Heating values, where that of every component is known and one burns."""
    book, ledger = gas.book, gas.book.ledger
    if any(row.heat is None for row in gas.parts):
        return
    burning = {row.key: _molar_heat(ledger, row, row.heat) for row in gas.parts if row.heat}
    if not burning:
        return
    molar = gas.mean("molar_heating_value", "H_m", burning)
    ledger.apply(
        eq.heat_by_mass,
        f"{book.prefix}.gross_heating_value",
        {"molar_heat": molar, "molar_mass": f"{book.prefix}.molar_mass"},
        label=f"{book.fuel.name}: gross heating value by mass",
    )
    ledger.apply(
        eq.heat_by_volume,
        f"{book.prefix}.gross_heating_value.by_volume",
        {"molar_heat": molar},
        label=f"{book.fuel.name}: gross heating value by volume at 68 °F and 29.92 inHg",
    )
