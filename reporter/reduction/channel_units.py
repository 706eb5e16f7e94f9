"""Numbers about one gas in the unit of its channel: parts by volume, or mass per volume at stated conditions."""

from __future__ import annotations

from dataclasses import replace

from reporter.basis import Standard
from reporter.conversions import convert_entry
from reporter.ledger import Entry
from reporter.methods.mass_concentration import mass_concentration
from reporter.record import Real
from reporter.reduction.book import Book, Lane
from reporter.reduction.equations import volume_from_mass
from reporter.reduction.standards import conditions
from reporter.units import ReadUnit, dimension


def is_mass(unit: str) -> bool:
    """Whether a unit is a mass per volume."""
    return dimension(unit) == "mass_concentration"


def channel_standard(book: Book, lane: Lane) -> Standard:
    """Conditions of a channel read in mass per volume: by its unit's spelling, else the unit system's (then said)."""
    unit = lane.channel.unit
    found = conditions(book, None, None, unit.value)
    if found.assumed:
        said = f"{lane.name}: mass per volume without temperature and pressure; {found.assumed} taken"
        book.trouble("standard-conditions-assumed", unit.place, said)
    return found.standard


def given_in_channel_unit(
    book: Book, lane: Lane, key: str, value: Real, *, unit: ReadUnit | None = None, decimals: int | None = None
) -> Entry:
    """Enter a number about a channel's gas in the channel's unit; `unit` is its own where it carries none."""
    found = book.ledger.get(key)
    if found is not None:
        return found
    entered = value.unit or unit
    if entered is None or dimension(entered.unit) == dimension(lane.unit):
        return book.given(key, replace(value, unit=entered), lane.unit, decimals=decimals)
    raw = book.given(f"{key}.as_entered", replace(value, unit=None), entered.unit)
    return in_channel_unit(book, lane, key, raw)


def in_channel_unit(book: Book, lane: Lane, key: str, entry: Entry) -> Entry:
    """An entry about a channel's gas in the channel's unit."""
    if dimension(entry.unit) == dimension(lane.unit):
        return convert_entry(book.ledger, key, entry, lane.unit)
    if not is_mass(lane.unit):
        return in_parts(book, lane, key, entry, lane.unit)
    parts = convert_entry(book.ledger, f"{key}.in_ppm", entry, "ppm")
    inputs = {"c": parts, **_conditions(book, lane)}
    if lane.unit == "mg/m3":
        return book.apply(mass_concentration, key, inputs, basis=entry.basis)
    mass = book.apply(mass_concentration, f"{key}.in_mg_per_m3", inputs, basis=entry.basis)
    return convert_entry(book.ledger, key, mass, lane.unit)


def in_parts(book: Book, lane: Lane, key: str, entry: Entry, unit: str) -> Entry:
    """An entry about a channel's gas in parts by volume, whatever it was read in."""
    if not is_mass(entry.unit):
        return convert_entry(book.ledger, key, entry, unit)
    mass = convert_entry(book.ledger, f"{key}.in_mg_per_m3", entry, "mg/m3")
    inputs = {"c": mass, **_conditions(book, lane)}
    if unit == "ppm":
        return book.apply(volume_from_mass, key, inputs)
    parts = book.apply(volume_from_mass, f"{key}.in_ppm", inputs)
    return convert_entry(book.ledger, key, parts, unit)


def _conditions(book: Book, lane: Lane) -> dict[str, Entry]:
    gas, standard = lane.gas, channel_standard(book, lane)
    assert standard.temperature_k is not None
    assert standard.pressure_kpa is not None
    stem, words = f"channel.{lane.segment}", f"standard conditions: {standard.text()}"
    named = gas.expressed_as or gas.label
    if gas.expressed_as:
        book.say(f"{lane.name} is read in mass per volume; the mass is taken to be stated as {named}.")
    return {
        "molar_mass": book.table(f"gas.{gas.key}.molar_mass", gas.mass, "g/mol", gas.mass_citation, row=named),
        "temperature": book.state(f"{stem}.standard_temperature", standard.temperature_k, "K", words),
        "pressure": book.state(f"{stem}.standard_pressure", standard.pressure_kpa, "kPa", words),
    }
