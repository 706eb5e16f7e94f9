"""Moisture of the combustion air: as entered, else from humidity, temperature and barometer."""

from __future__ import annotations

from reporter.conversions import convert_entry
from reporter.ledger import Entry
from reporter.methods.water_vapour import ambient_moisture, saturation_pressure
from reporter.record import Run
from reporter.reduction.book import Book

#: Temperatures [K] the saturation pressure over liquid water is printed for.
_LIQUID = (273.15, 373.15)


def ambient_air(book: Book, run: Run) -> Entry | None:
    """Moisture of the ambient air as a fraction, key ``run.<run>.moisture.ambient``; None where it is not known.

    Tried once for a run: what could not be computed is said the first time.
    """
    key = f"run.{run.key}.moisture.ambient"
    found = book.ledger.get(key)
    if found is not None:
        return found
    if run.ambient_moisture is not None:
        return convert_entry(book.ledger, key, book.given(f"{key}_entered", run.ambient_moisture, "%"), "1")
    if run.relative_humidity is None or run.ambient_temperature is None or run.barometric_pressure is None:
        return None
    stem = f"run.{run.key}.ambient"
    if f"{stem}.temperature" in book.ledger:
        return None
    temperature = book.given(f"{stem}.temperature", run.ambient_temperature, book.unit("°F", "°C"))
    kelvin = convert_entry(book.ledger, f"{stem}.temperature.kelvin", temperature, "K")
    if not _LIQUID[0] <= kelvin.value <= _LIQUID[1]:
        book.say(f"Run {run.run.value}: the moisture of air below freezing is not computed from its humidity.")
        return None
    barometer = book.given(f"run.{run.key}.barometric_pressure", run.barometric_pressure, book.unit("inHg", "kPa"))
    inputs = {
        "relative_humidity": book.given(f"{stem}.relative_humidity", run.relative_humidity, "%"),
        "vapour_pressure": book.apply(saturation_pressure, f"{stem}.saturation_pressure", {"temperature": kelvin}),
        "pressure": convert_entry(book.ledger, f"{stem}.pressure", barometer, "kPa"),
    }
    if inputs["pressure"].value <= inputs["vapour_pressure"].value:
        book.say(f"Run {run.run.value}: the barometer is below the vapour pressure of water; no ambient moisture.")
        return None
    return book.apply(ambient_moisture, key, inputs)
