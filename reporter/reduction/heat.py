"""Heat input of a run: as entered, or from the fuel used, by volume, liquid volume, mass or energy."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from reporter.conversions import convert_entry
from reporter.equation import Equation, UnitSpec, unit_in
from reporter.ledger import Entry, slug
from reporter.methods.averages import percent_difference
from reporter.record import FuelUse, Real, text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import carried
from reporter.reduction.fuel_heat import (
    heat_from_liquid,
    heat_from_mass,
    heat_from_volume,
    heat_total,
    metered_volume_rate,
)
from reporter.reduction.meters import metered_energy_rate, metered_liquid_rate, metered_mass_rate
from reporter.units import dimension

_LIQUID = ("MJ/L", "Btu/gal", "MMBtu/gal")
#: Difference of metered from entered heat input [%] above which the two are said to disagree.
_DISAGREE = 10.0


@dataclass(frozen=True, slots=True)
class Way:
    """How fuel becomes heat: units of meter, rate and heating value, and the equations; no heat equation for energy."""

    amount: UnitSpec
    rate: UnitSpec
    heating: UnitSpec
    metered: Equation[Any]
    heat: Equation[Any] | None


_WAYS: Mapping[str, Way] = {
    "gas": Way(("ft3", "m3"), ("ft3/h", "m3/h"), ("Btu/ft3", "MJ/m3"), metered_volume_rate, heat_from_volume),
    "liquid": Way(("gal", "L"), ("gal/h", "L/h"), ("Btu/gal", "MJ/L"), metered_liquid_rate, heat_from_liquid),
    "mass": Way(("lb", "kg"), ("lb/h", "kg/h"), ("Btu/lb", "kJ/kg"), metered_mass_rate, heat_from_mass),
    "energy": Way(("MMBtu", "GJ"), ("MMBtu/h", "GJ/h"), "", metered_energy_rate, None),
}


def heat_inputs(book: Book, about: RunBook) -> dict[str, Entry]:
    """Heat input of each fuel of a run from Fuel use, by fuel name; a fuel on several rows is their sum."""
    each: dict[str, list[Entry]] = {}
    seen: dict[str, int] = {}
    for use in book.record.fuel_use:
        if use.run.value != about.run.run.value:
            continue
        name = use.fuel.value
        seen[name] = seen.get(name, 0) + 1
        stem = about.key(f"fuel_use.{slug(name)}") + (f".row_{seen[name]}" if seen[name] > 1 else "")
        entry = _heat_of(book, about, use, stem)
        if entry is not None:
            each.setdefault(name, []).append(entry)
    return {
        name: entries[0]
        if len(entries) == 1
        else book.apply(heat_total, about.key(f"fuel_use.{slug(name)}.heat_input.sum"), {"parts": entries})
        for name, entries in each.items()
        if len(entries) == seen[name]
    }


def heat_input(book: Book, about: RunBook, parts: dict[str, Entry]) -> Entry | None:
    """Heat input of a run [MMBtu/h or GJ/h]: as entered, else the sum of the fuels metered.

    Where both are there, their difference is entered, and said where it is large.
    """
    key, entered = about.key("heat_input"), about.run.heat_input
    uses = {use.fuel.value for use in book.record.fuel_use if use.run.value == about.run.run.value}
    total = None
    if parts and len(parts) == len(uses):
        total = book.apply(heat_total, f"{key}.metered", {"parts": list(parts.values())})
    if entered is None:
        return None if total is None else book.apply(carried, key, {"value": total})
    made = book.given(key, entered, book.unit("MMBtu/h", "GJ/h"))
    if total is not None:
        inputs = {"value": total, "reference": made}
        apart = book.attempt(percent_difference, f"{key}.metered_difference", inputs)
        if apart is not None and abs(apart.value) > _DISAGREE:
            said = f"run {about.run.run.value}: the fuel used gives {apart.value:+.1f} % of the heat input entered"
            book.trouble("routes-disagree", entered.place, said)
    return made


def _heat_of(book: Book, about: RunBook, use: FuelUse, stem: str) -> Entry | None:
    """The heat of one row of Fuel use, or a problem that says why there is none."""
    made = _heat(book, about, use, stem)
    if isinstance(made, Entry) and made.value >= 0.0:
        return made
    why = _backwards(use) if isinstance(made, Entry) else made
    said = f"{use.fuel.value}, run {use.run.value}: {why}"
    book.trouble("heat-input-missing", use.place, said, concerns=(about.key("heat_input"),))
    return None


def _backwards(use: FuelUse) -> str:
    """Why a row gives less than no heat: where its meter ends below its start, with the reading to enter instead."""
    if use.rate is not None or use.meter_start is None or use.meter_end is None:
        return "the heat of this fuel is below zero"
    start, end = use.meter_start.value, use.meter_end.value
    turn = 10 ** len(str(int(abs(start))))
    return (
        f"the meter reads {end:.12g} at the end, less than {start:.12g} at the start: exchanged, reset or rolled over. "
        f"If it went from {turn - 1} to 0, enter {turn + end:.12g} as its end; after a reset enter the rate"
    )


def _heat(book: Book, about: RunBook, use: FuelUse, stem: str) -> Entry | str:
    if text_of(use.heating_value_kind, "gross") == "net":
        return "the heating value is net; F factors go with gross"
    amount = use.rate or use.meter_end
    if amount is None or (use.rate is None and use.meter_start is None):
        return "neither a rate nor two meter readings"
    heating = use.heating_value or _of_fuel(book, use)
    kind = _kind(amount, heating)
    if kind not in _WAYS:
        return kind
    way = _WAYS[kind]
    rate = _rate(book, about, use, way, stem)
    if way.heat is None:
        return book.apply(carried, f"{stem}.heat_input", {"value": rate})
    assert heating is not None
    value = book.given(f"{stem}.heating_value", heating, unit_in(way.heating, book.system))
    return book.apply(way.heat, f"{stem}.heat_input", {"rate": rate, "heating_value": value})


def _of_fuel(book: Book, use: FuelUse) -> Real | None:
    """The gross heating value of the sheet Fuel, as fired, where Fuel use names none."""
    row = next((row for row in book.record.fuels if row.fuel.value == use.fuel.value), None)
    if row is None or row.gross_heating_value is None or text_of(row.analysis_basis) == "dry":
        return None
    book.say(f"{use.fuel.value}: Fuel use names no heating value; the gross one of the sheet Fuel is taken.")
    return row.gross_heating_value


def _kind(amount: Real, heating: Real | None) -> str:
    """Which way an amount of fuel becomes heat, or why it cannot."""
    heat_unit = heating.unit.unit if heating is not None and heating.unit is not None else ""
    by_mass = heat_unit != "" and dimension(heat_unit) == "heat_by_mass"
    usual = "mass" if by_mass else "liquid" if heat_unit in _LIQUID else "gas"
    size = dimension(amount.unit.unit) if amount.unit is not None else ""
    if size in ("power", "energy"):
        return "energy"
    if heating is None:
        return "no heating value"
    if size and (size in ("mass", "mass_flow")) is not by_mass:
        return f"the fuel is in {amount.unit.unit if amount.unit else ''}, but its heating value in {heat_unit}"
    return usual


def _rate(book: Book, about: RunBook, use: FuelUse, way: Way, stem: str) -> Entry:
    """The rate of a fuel: as entered, else from the meter readings at start and end."""
    if use.rate is not None:
        return book.given(f"{stem}.rate", use.rate, unit_in(way.rate, book.system))
    assert use.meter_end is not None
    assert use.meter_start is not None
    amount = unit_in(way.amount, book.system)
    factor = (
        book.given(f"{stem}.meter_factor", use.meter_factor, "1")
        if use.meter_factor is not None
        else book.state(f"{stem}.meter_factor", 1.0, "1", "fuel meter factor not entered: 1 is taken")
    )
    key = about.key("duration.hours")
    hours = book.ledger.get(key) or convert_entry(book.ledger, key, book.given_duration(about.run), "h")
    inputs = {
        "end": book.given(f"{stem}.meter_end", use.meter_end, amount),
        "start": book.given(f"{stem}.meter_start", use.meter_start, amount),
        "factor": factor,
        "duration": hours,
    }
    return book.apply(way.metered, f"{stem}.rate", inputs)
