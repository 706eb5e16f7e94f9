"""A fuel's figures as a table for the terminal."""

from __future__ import annotations

from reporter.combustion.describe import describe_fuel, fuel_from_text
from reporter.equation import System


def fuel_text(text: str, system: System) -> str:
    """Heating value, F factors, air, fuel factor, maximum CO2 and combustion water of a fuel.

    Raises
    ------
    RecordError
        The text is neither a published fuel name nor a composition.
    """
    fuel = fuel_from_text(text)
    return str(describe_fuel(fuel, system))
