"""Fuel rates from meters that count liquid volume, mass or energy (a gas meter: `equations.metered_volume_rate`)."""

from __future__ import annotations

from typing import Any

from reporter.equation import Citation, Equation, UnitSpec, Value, equation

_PRACTICE = Citation("practice")


def _metered(amount: UnitSpec, rate: UnitSpec, name: str) -> Equation[Any]:
    def metered_rate(*, end: Value, start: Value, factor: Value, duration: Value) -> Value:
        """Fuel rate from a meter read at the start and the end of a run.

        Parameters
        ----------
        end, start
            Meter readings [amount].
        factor
            Meter factor [1].
        duration
            Length of the run [h], not zero.

        Returns
        -------
        float
            Fuel rate [amount per hour].
        """
        return (end - start) * factor / duration

    metered_rate.__name__ = name
    units: dict[str, UnitSpec] = {"end": amount, "start": amount, "factor": "1", "duration": "h"}
    symbols = {"end": "M_end", "start": "M_start", "factor": "Y", "duration": "t"}
    return equation("q", rate, units, _PRACTICE, symbols=symbols)(metered_rate)


metered_liquid_rate = _metered(("gal", "L"), ("gal/h", "L/h"), "metered_liquid_rate")
metered_mass_rate = _metered(("lb", "kg"), ("lb/h", "kg/h"), "metered_mass_rate")
metered_energy_rate = _metered(("MMBtu", "GJ"), ("MMBtu/h", "GJ/h"), "metered_energy_rate")
