"""A fuel given by weight in the ledger: percentages as fired, amounts per kg, heating value."""

from __future__ import annotations

from collections.abc import Mapping

from reporter.combustion import composition as eq
from reporter.combustion.fuel import ANALYSIS, AnalysisBasis, Fuel, Share
from reporter.combustion.fuel_book import SYMBOLS, FuelBook, amount_symbol
from reporter.equation import Citation, System
from reporter.gases import atomic_weights, molar_mass
from reporter.ledger import Entry, FromTable, Ledger
from reporter.units import convert

_CIAAW = Citation("ciaaw")
_WATER = {"H": 2.0, "O": 1.0}


def _element(ledger: Ledger, name: str) -> Entry:
    """Atomic weight of an element, or molar mass of water, entered once."""
    key = f"element.{name}"
    found = ledger.get(key)
    if found is not None:
        return found
    mass = molar_mass(_WATER) if name == "water" else atomic_weights()[SYMBOLS[name]]
    symbol = "M_H2O" if name == "water" else f"M_{SYMBOLS[name]}"
    words = "molar mass of water" if name == "water" else f"atomic weight of {name}"
    return ledger.enter(key, mass, "g/mol", FromTable(_CIAAW, name), label=words, symbol=symbol, decimals=3)


def enter_analysis(book: FuelBook) -> None:
    """Enter the shares of an analysis, then the amounts [mol/kg] and the heating value as fired."""
    fuel, ledger, prefix = book.fuel, book.ledger, book.prefix
    percents: dict[str, Entry] = {}
    for share in sorted(fuel.shares, key=lambda share: ANALYSIS.index(share.name)):
        label = f"{fuel.name}: {share.name} by weight, {_basis_words(fuel, share.name)}"
        percents[share.name] = book.given(share, f"{share.name}_percent", label=label)
    for name in (*SYMBOLS, "water"):
        if name not in percents:
            book.zero(name, f"the analysis names no {name}: taken as zero")
            continue
        ledger.apply(
            eq.amount_by_weight,
            f"{prefix}.{name}",
            {"percent": _as_fired(book, percents, name), "molar_mass": _element(ledger, name)},
            label=f"{fuel.name}: {name}",
            symbol=amount_symbol(name),
        )
    if "ash" in percents:
        _as_fired(book, percents, "ash")
    book.zero("inert", "no inert gas in a fuel given by weight")
    _enter_weight_heat(book, percents)


def _basis_words(fuel: Fuel, name: str) -> str:
    return AnalysisBasis.AS_FIRED.value if name == "water" else fuel.basis.value


def _as_fired(book: FuelBook, percents: Mapping[str, Entry], name: str) -> Entry:
    """The percentage of the fuel as fired, without the hydrogen and oxygen of its water."""
    fuel, given, water = book.fuel, percents[name], percents.get("water")
    if water is None or name == "water":
        return given
    key = f"{book.prefix}.{name}_percent.as_fired"
    if fuel.basis is AnalysisBasis.DRY:
        return book.ledger.apply(
            eq.as_fired,
            key,
            {"dry": given, "water": water},
            label=f"{fuel.name}: {name} by weight, as fired",
        )
    if fuel.hydrogen_includes_water and name in ("hydrogen", "oxygen"):
        share = _share_of_water(book.ledger, name)
        return book.ledger.apply(
            eq.without_water,
            key,
            {"percent": given, "water": water, "share": share},
            label=f"{fuel.name}: {name} by weight, as fired, without that of the water",
        )
    return given


def _share_of_water(ledger: Ledger, name: str) -> Entry:
    key = f"element.water.{name}_share"
    atoms = {"H": 2.0} if name == "hydrogen" else {"O": 1.0}
    share = molar_mass(atoms) / molar_mass(_WATER)
    return ledger.get(key) or ledger.enter(
        key, share, "1", FromTable(_CIAAW, "water"), label=f"mass share of {name} in water"
    )


def _enter_weight_heat(book: FuelBook, percents: Mapping[str, Entry]) -> None:
    fuel, ledger, prefix = book.fuel, book.ledger, book.prefix
    if fuel.heat is None and "heat" not in book.entries:
        return
    unit = "Btu/lb" if ledger.system is System.US else "kJ/kg"
    on_dry = fuel.basis is AnalysisBasis.DRY and "water" in percents
    key = "gross_heating_value.dry" if on_dry else "gross_heating_value"
    words = fuel.basis.value if on_dry else "as fired"
    share = Share("heat", convert(fuel.heat or 0.0, "kJ/kg", unit), convert(fuel.heat_spread, "kJ/kg", unit))
    heat = book.given(share, key, label=f"{fuel.name}: gross heating value, {words}", unit=unit)
    if on_dry:
        ledger.apply(
            eq.as_fired,
            f"{prefix}.gross_heating_value",
            {"dry": heat, "water": percents["water"]},
            label=f"{fuel.name}: gross heating value, as fired",
            symbol="H_g",
        )
    elif heat.key != f"{prefix}.gross_heating_value":
        ledger.apply(
            eq.heat_as_fired,
            f"{prefix}.gross_heating_value",
            {"heat": heat},
            label=f"{fuel.name}: gross heating value, as fired",
        )
