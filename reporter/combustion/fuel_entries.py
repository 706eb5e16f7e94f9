"""A fuel in the ledger: what was given, and the amounts, molar mass and heating values that follow."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from reporter.combustion import composition as eq
from reporter.combustion.fuel import Fuel
from reporter.combustion.fuel_book import SYMBOLS, FuelBook
from reporter.combustion.gas_entries import enter_gas
from reporter.combustion.stoichiometry import combustion_water
from reporter.combustion.weight_entries import enter_analysis
from reporter.equation import System
from reporter.ledger import Entry, Ledger, Origin, slug


@dataclass(frozen=True, slots=True)
class FuelAmounts:
    """Amounts per kg or mole of fuel (`unit`), ash [kg/kg], molar mass [g/mol], heating values [kJ/kg]."""

    unit: str
    carbon: float
    hydrogen: float
    oxygen: float
    nitrogen: float
    sulfur: float
    water: float
    inert: float
    ash: float
    molar_mass: float | None
    gross_heating_value: float | None
    net_heating_value: float | None


@cache
def amounts(fuel: Fuel) -> FuelAmounts:
    """The amounts of a fuel as bare numbers, by the same equations as in a ledger."""
    ledger = Ledger(System.SI)
    enter_fuel(ledger, "fuel", fuel)

    def value(name: str) -> float | None:
        entry = ledger.get(f"fuel.{name}")
        return None if entry is None else float(entry.value)

    elements = {name: value(name) or 0.0 for name in (*SYMBOLS, "water", "inert")}
    return FuelAmounts(
        unit=fuel.amount_unit,
        **elements,
        ash=(value("ash_percent.as_fired") or value("ash_percent") or 0.0) / 100.0,
        molar_mass=value("molar_mass"),
        gross_heating_value=value("gross_heating_value"),
        net_heating_value=value("net_heating_value"),
    )


def enter_fuel(
    ledger: Ledger,
    prefix: str,
    fuel: Fuel,
    *,
    origin: Origin | Mapping[str, Origin] | None = None,
    entries: Mapping[str, Entry] | None = None,
) -> None:
    """Enter a fuel: its shares as given, then its amounts by equations.

    Parameters
    ----------
    ledger
        Where to.
    prefix
        ``fuel.<slug>``; the amounts become ``<prefix>.carbon``, ``.hydrogen``, ``.oxygen``, ``.nitrogen``,
        ``.sulfur``, ``.water``, ``.inert`` and ``.combustion_water`` [mol/kg or mol/mol], with
        ``.molar_mass`` of a gas, ``.gross_heating_value`` and ``.net_heating_value`` [Btu/lb or kJ/kg].
    fuel
        The fuel.
    origin
        Where its shares and its heat come from: one origin, or one by share name (`heat` for the heating
        value).  The fuel's own citation where absent.
    entries
        Shares (in %) and heat (in the unit of the ledger's system) that are entries already, by name.
    """
    book = FuelBook.of(ledger, prefix, fuel, origin, entries)
    if fuel.is_gas:
        enter_gas(book)
    else:
        enter_analysis(book)
    book.ledger.apply(
        combustion_water,
        f"{prefix}.combustion_water",
        {"hydrogen": f"{prefix}.hydrogen", "water": f"{prefix}.water"},
        label=f"{fuel.name}: water of combustion and of the fuel",
    )
    _enter_net(book)


def by_mass(ledger: Ledger, fuel_prefix: str, name: str) -> Entry:
    """An amount of a fuel per kg of it [mol/kg]: the entry itself, or its value by mass for a gas fuel."""
    entry = ledger[f"{fuel_prefix}.{name}"]
    if entry.unit == "mol/kg":
        return entry
    key = f"{entry.key}.by_mass"
    return ledger.get(key) or ledger.apply(
        eq.amount_by_mass,
        key,
        {"amount": entry, "molar_mass": f"{fuel_prefix}.molar_mass"},
        label=f"{entry.label}, per kg of fuel",
    )


def _enter_net(book: FuelBook) -> None:
    gross = book.ledger.get(f"{book.prefix}.gross_heating_value")
    if gross is not None:
        book.ledger.apply(
            eq.net_heating_value,
            f"{book.prefix}.net_heating_value",
            {"gross": gross, "water": by_mass(book.ledger, book.prefix, "combustion_water")},
            label=f"{book.fuel.name}: net heating value",
        )


def fuel_prefix(name: str) -> str:
    """The key prefix of a fuel: ``fuel.natural_gas``."""
    return f"fuel.{slug(name)}"


def spreads(fuel: Fuel, prefix: str) -> dict[str, float]:
    """Half of the usual range of each share of an assumed composition, by ledger key; empty for a measured one."""
    if not fuel.assumed:
        return {}
    if fuel.is_gas:
        return {f"{prefix}.component.{share.name}.mole_percent": share.spread for share in fuel.shares}
    return {f"{prefix}.{share.name}_percent": share.spread for share in fuel.shares}
