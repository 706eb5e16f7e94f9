"""Heat input from fuel: by meter readings and gross heating values, in total and by share."""

from __future__ import annotations

from reporter.equation import Citation, Value, constant, equation
from reporter.functions import total

_PRACTICE = Citation("practice")
_UNITS = Citation("units")
_HEAT = ("MMBtu/h", "GJ/h")


@equation(
    "q",
    ("ft3/h", "m3/h"),
    {"end": ("ft3", "m3"), "start": ("ft3", "m3"), "factor": "1", "duration": "h"},
    _PRACTICE,
    symbols={"end": "M_end", "start": "M_start", "factor": "Y", "duration": "t"},
)
def metered_volume_rate(*, end: Value, start: Value, factor: Value, duration: Value) -> Value:
    """Fuel rate by volume from a meter read at the start and the end of a run.

    Parameters
    ----------
    end, start
        Meter readings [ft3 or m3].
    factor
        Meter factor [1].
    duration
        Length of the run [h], not zero.

    Returns
    -------
    float
        Fuel rate [ft3/h or m3/h], at the meter's base conditions.
    """
    return (end - start) * factor / duration


@equation(
    "H",
    _HEAT,
    {"rate": ("ft3/h", "m3/h"), "heating_value": ("Btu/ft3", "MJ/m3")},
    _PRACTICE,
    symbols={"rate": "q", "heating_value": "GCV"},
)
def heat_from_volume(
    *,
    rate: Value,
    heating_value: Value,
    scale: Value = constant(1e-6, ("MMBtu/Btu", "GJ/MJ"), si=1e-3, cite=_UNITS),
) -> Value:
    """Heat input from a fuel rate by volume and a gross heating value at the same conditions.

    Parameters
    ----------
    rate
        Fuel rate [ft3/h or m3/h].
    heating_value
        Gross heating value [Btu/ft3 or MJ/m3].
    scale
        Factor between the units.

    Returns
    -------
    float
        Heat input, gross [MMBtu/h or GJ/h].
    """
    return rate * heating_value * scale


@equation(
    "H",
    _HEAT,
    {"rate": ("lb/h", "kg/h"), "heating_value": ("Btu/lb", "kJ/kg")},
    _PRACTICE,
    symbols={"rate": "q", "heating_value": "GCV"},
)
def heat_from_mass(
    *,
    rate: Value,
    heating_value: Value,
    scale: Value = constant(1e-6, ("MMBtu/Btu", "GJ/kJ"), cite=_UNITS),
) -> Value:
    """Heat input from a fuel rate by mass and a gross heating value.

    Parameters
    ----------
    rate
        Fuel rate [lb/h or kg/h].
    heating_value
        Gross heating value [Btu/lb or kJ/kg].
    scale
        Factor between the units.

    Returns
    -------
    float
        Heat input, gross [MMBtu/h or GJ/h].
    """
    return rate * heating_value * scale


@equation(
    "H",
    _HEAT,
    {"rate": ("gal/h", "L/h"), "heating_value": ("Btu/gal", "MJ/L")},
    _PRACTICE,
    symbols={"rate": "q", "heating_value": "GCV"},
)
def heat_from_liquid(
    *,
    rate: Value,
    heating_value: Value,
    scale: Value = constant(1e-6, ("MMBtu/Btu", "GJ/MJ"), si=1e-3, cite=_UNITS),
) -> Value:
    """Heat input from a liquid fuel's rate by volume and a gross heating value by volume.

    Parameters
    ----------
    rate
        Fuel rate [gal/h or L/h].
    heating_value
        Gross heating value [Btu/gal or MJ/L].
    scale
        Factor between the units.

    Returns
    -------
    float
        Heat input, gross [MMBtu/h or GJ/h].
    """
    return rate * heating_value * scale


@equation("X", "1", {"part": "*h", "whole": "*h"}, _PRACTICE, symbols={"part": "H_k", "whole": "H"})
def heat_share(*, part: Value, whole: Value) -> Value:
    """Share of one fuel in the heat input.

    Parameters
    ----------
    part
        Heat input of the fuel [MMBtu/h or GJ/h].
    whole
        Heat input of all fuels [same unit], not zero.

    Returns
    -------
    float
        Share [1].
    """
    return part / whole


@equation(
    "H",
    _HEAT,
    {"parts": _HEAT},
    _PRACTICE,
    symbols={"parts": "H_k"},
    series=("parts",),
)
def heat_total(*, parts: Value) -> Value:
    """Heat input of all fuels of a run.

    Parameters
    ----------
    parts
        Heat input of each fuel [MMBtu/h or GJ/h], a series.

    Returns
    -------
    float
        Sum [same unit].
    """
    return total(parts)
