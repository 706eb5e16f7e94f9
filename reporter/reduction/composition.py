"""Fuels of the record as compositions: analysis by weight, gas composition, or a published name (assumed)."""

from __future__ import annotations

from reporter.combustion.fuel import (
    AnalysisBasis,
    Fuel,
    FuelKind,
    fuel_from_analysis,
    fuel_from_gas,
    nominal_fuel,
    nominal_names,
)
from reporter.combustion.fuel_entries import by_mass, enter_fuel
from reporter.combustion.stoichiometry_entries import enter_stoichiometry
from reporter.equation import Citation
from reporter.gases import atomic_weights
from reporter.ledger import Entry, FromCells, Origin, slug
from reporter.methods.f_factors import eq_19_13, eq_19_14, eq_19_15
from reporter.record import FuelRow, Real, text_of
from reporter.reduction.book import Book
from reporter.reduction.equations import percent_by_weight
from reporter.reduction.fuels import Factors

_ELEMENTS = {"hydrogen": "H", "carbon": "C", "sulfur": "S", "nitrogen": "N", "oxygen": "O"}
_SHARES = ("carbon", "hydrogen", "oxygen", "nitrogen", "sulfur", "ash", "water")


def composition_key(name: str) -> str:
    """Key stem of a fuel's composition."""
    return f"fuel.{slug(name)}.composition"


def fuel_of(book: Book, row: FuelRow) -> Fuel | None:
    """The composition of a fuel of the record; a published name's nominal one is assumed, and said so."""
    name = row.fuel.value
    components = [c for c in book.record.fuel_gas if c.fuel.value == name]
    if components:
        return fuel_from_gas(name, {c.component.value: c.mole_fraction.value for c in components})
    if row.carbon is not None and row.hydrogen is not None:
        return _from_analysis(book, row)
    if name.lower() in nominal_names():
        book.say(f"{name}: the composition is assumed (nominal); the combustion balance rests on it.")
        return nominal_fuel(name)
    return None


def _from_analysis(book: Book, row: FuelRow) -> Fuel:
    percents = {name: value.value for name in _SHARES if (value := _share(row, name)) is not None}
    dry = text_of(row.analysis_basis, "as fired") == "dry"
    heat = None
    if row.gross_heating_value is not None:
        entry = book.given(
            f"fuel.{slug(row.fuel.value)}.gross_heating_value",
            row.gross_heating_value,
            book.unit("Btu/lb", "kJ/kg"),
        )
        heat = _kilojoules(entry)
    return fuel_from_analysis(
        row.fuel.value,
        percents,
        heat=heat,
        basis=AnalysisBasis.DRY if dry else AnalysisBasis.AS_FIRED,
        kind=FuelKind.SOLID,
    )


def _kilojoules(entry: Entry) -> float:
    from reporter.units import convert

    return convert(float(entry.value), entry.unit, "kJ/kg")


def _share(row: FuelRow, name: str) -> Real | None:
    found: Real | None = getattr(row, name)
    return found


def _entries(book: Book, row: FuelRow) -> dict[str, Entry]:
    """The shares of an analysis that are entries already: one leaf for F factors and balance."""
    if any(c.fuel.value == row.fuel.value for c in book.record.fuel_gas) or row.carbon is None:
        return {}
    stem = f"fuel.{slug(row.fuel.value)}"
    made = {
        name: book.given(f"{stem}.{name}", value, "%") for name in _SHARES if (value := _share(row, name)) is not None
    }
    heat = book.ledger.get(f"{stem}.gross_heating_value")
    if heat is not None:
        made["heat"] = heat
    return made


def _origins(book: Book, row: FuelRow) -> dict[str, Origin] | None:
    """Where each share was read, for the ledger; None where the composition is nominal."""
    components = [c for c in book.record.fuel_gas if c.fuel.value == row.fuel.value]
    if components:
        return {c.component.value: FromCells(c.mole_fraction.place, c.mole_fraction.text) for c in components}
    found = {name: FromCells(value.place, value.text) for name in _SHARES if (value := _share(row, name)) is not None}
    if row.gross_heating_value is not None:
        found["heat"] = FromCells(row.gross_heating_value.place, row.gross_heating_value.text)
    return dict(found) or None


def enter_composition(book: Book, row: FuelRow) -> str | None:
    """Enter a fuel's composition and stoichiometry once; its key stem, or None where it is not known."""
    stem = composition_key(row.fuel.value)
    if book.ledger.under(stem):
        return stem
    fuel = fuel_of(book, row)
    if fuel is None:
        return None
    enter_fuel(book.ledger, stem, fuel, origin=_origins(book, row), entries=_entries(book, row))
    enter_stoichiometry(book.ledger, stem)
    return stem


def factors_from_composition(book: Book, row: FuelRow, stem: str) -> Factors:
    """F factors of a gas fuel by Eqs. 19-13 to 19-15, on its composition by weight."""
    made = enter_composition(book, row)
    if made is None:
        book.trouble("factor-missing", row.place, f"{row.fuel.value}: no composition in Fuel gas", concerns=(stem,))
        return Factors(None, None, None)
    gcv = book.ledger.get(f"{made}.gross_heating_value")
    if gcv is None:
        book.trouble("factor-missing", row.place, f"{row.fuel.value}: no heating value follows", concerns=(stem,))
        return Factors(None, None, None)
    parts = {name: _by_weight(book, made, stem, name, symbol) for name, symbol in _ELEMENTS.items()}
    inputs = {**parts, "gcv": gcv}
    water = book.state(f"{stem}.water", 0.0, "%", "dry gas: the analysis names no water")
    return Factors(
        book.apply(eq_19_13, f"{stem}.fd", inputs),
        book.apply(eq_19_14, f"{stem}.fw", {**inputs, "water": water}),
        book.apply(eq_19_15, f"{stem}.fc", {"carbon": parts["carbon"], "gcv": gcv}),
    )


def _by_weight(book: Book, made: str, stem: str, name: str, symbol: str) -> Entry:
    """Percent by weight of an element of a gas fuel."""
    weight = atomic_weights()[symbol]
    mass = book.table(f"element.{name}.molar_mass", weight, "g/mol", Citation("ciaaw"), row=symbol)
    amount = by_mass(book.ledger, made, name)
    return book.apply(percent_by_weight, f"{stem}.{name}", {"amount": amount, "molar_mass": mass})
