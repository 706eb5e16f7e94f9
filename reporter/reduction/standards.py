"""Standard temperature and pressure: as entered, by a unit's spelling, else those of Method 19."""

from __future__ import annotations

from dataclasses import dataclass

from reporter.basis import EPA_STANDARD, EPA_STANDARD_SI, NORMAL, Standard
from reporter.equation import System
from reporter.record import Real
from reporter.reduction.book import Book
from reporter.units import ReadUnit, convert


@dataclass(frozen=True, slots=True)
class Conditions:
    """Standard conditions of a number and, where any of them was assumed, what was assumed."""

    standard: Standard
    assumed: str = ""


def method_standard(book: Book) -> Standard:
    """Method 19's standard conditions as the unit system words them."""
    return EPA_STANDARD if book.system is System.US else EPA_STANDARD_SI


def conditions(book: Book, temperature: Real | None, pressure: Real | None, unit: ReadUnit | None = None) -> Conditions:
    """The conditions a volume is stated at.

    Parameters
    ----------
    temperature, pressure
        As entered; one without the other leaves the other to the next rule.
    unit
        The number's own unit, whose spelling may name conditions (Nm3, dscf).
    """
    spelled = unit.standard if unit is not None and unit.standard.temperature_k is not None else None
    other = spelled or method_standard(book)
    if temperature is None and pressure is None:
        return Conditions(other, "" if other is NORMAL else other.text())
    entered = Standard(
        other.temperature_k if temperature is None else _in(temperature, "K"),
        other.pressure_kpa if pressure is None else _in(pressure, "kPa"),
    )
    named = _named(entered, temperature, pressure)
    if temperature is not None and pressure is not None:
        return Conditions(named)
    lacking = "temperature" if temperature is None else "pressure"
    return Conditions(named, f"the {lacking} of {other.text()}")


def _in(value: Real, unit: str) -> float:
    entered = value.unit.unit if value.unit is not None else unit
    return round(convert(value.value, entered, unit), 6)


def _named(entered: Standard, temperature: Real | None, pressure: Real | None) -> Standard:
    """The condition in its usual words where it has some, else as entered."""
    for known in (NORMAL, EPA_STANDARD_SI, EPA_STANDARD):
        if (entered.temperature_k, entered.pressure_kpa) == (known.temperature_k, known.pressure_kpa):
            return known
    parts = [
        _words(temperature) if temperature is not None else f"{entered.temperature_k:.6g} K",
        _words(pressure) if pressure is not None else f"{entered.pressure_kpa:.6g} kPa",
    ]
    return Standard(entered.temperature_k, entered.pressure_kpa, ", ".join(parts))


def _words(value: Real) -> str:
    return f"{value.value:g} {value.unit.unit if value.unit is not None else ''}".strip()
