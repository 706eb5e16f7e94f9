"""A barometer that shows the pressure at sea level, as weather reports give it, at a site that lies high."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.methods.method_2 import barometer_at
from reporter.record import Run
from reporter.reduction.book import Book
from reporter.units import convert

#: Usual pressure at sea level [inHg], printed so in the standard conditions of 40 CFR 60.2.
SEA_LEVEL = 29.92
#: A site is high where its pressure is lower by more than the weather changes it [inHg]: common practice.
WEATHER = 1.0


def look_at_barometer(book: Book, runs: Sequence[Run]) -> None:
    """Note each run whose barometer stands nearer to that of sea level than to that of the site's elevation."""
    elevation = book.record.location.elevation
    if elevation is None or elevation.unit is None:
        return
    height = convert(elevation.value, elevation.unit.unit, "ft")
    expected = barometer_at(station=SEA_LEVEL, rise=height)
    if SEA_LEVEL - expected < WEATHER:
        return
    for run in runs:
        given = run.barometric_pressure
        if given is None or given.unit is None:
            continue
        entered = convert(given.value, given.unit.unit, "inHg")
        if abs(entered - SEA_LEVEL) < abs(entered - expected):
            unit = given.unit.unit
            usual = convert(expected, "inHg", unit)
            where = f"{elevation.text} {elevation.unit.unit}"
            said = f"{given.text} {unit} in run {run.run.value}; at {where} usually {usual:.4g}"
            book.trouble("barometer-at-sea-level", given.place, said)
