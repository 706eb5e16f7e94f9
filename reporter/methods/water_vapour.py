"""Water vapour in air and gas: saturation pressure (40 CFR 1065.645(a)) and the water that air carries."""

from __future__ import annotations

from reporter.equation import Citation, Value, constant, equation
from reporter.functions import log10

_SAT = Citation("cfr1065", "1065.645(a)", "liquid water")
_HUMID = Citation("cfr1065", "1065.645")


@equation("P_sat", "kPa", {"temperature": "K"}, _SAT, symbols={"temperature": "T"})
def saturation_pressure(
    *,
    temperature: Value,
    triple: Value = constant(273.16, "K", cite=_SAT),
    unit_pressure: Value = constant(1.0, "kPa", "p_1", cite=_SAT),
) -> Value:
    """Saturation pressure of water over liquid.

    From 0 to 100 °C it lies 0.08 to 0.11 percent below the IAPWS formulation of 1995.

    Parameters
    ----------
    temperature
        Temperature [K], 273.15 to 373.15.
    triple
        Printed temperature of the triple point, 273.16 K.
    unit_pressure
        1 kPa, the unit the printed logarithm is taken of.

    Returns
    -------
    float
        Pressure [kPa].
    """
    ratio = temperature / triple
    exponent = (
        10.79574 * (1 - triple / temperature)
        - 5.02800 * log10(ratio)
        + 1.50475e-4 * (1 - 10 ** (-8.2969 * (ratio - 1)))
        + 0.42873e-3 * (10 ** (4.76955 * (1 - triple / temperature)) - 1)
        - 0.2138602
    )
    return unit_pressure * 10**exponent


@equation(
    "w",
    "1",
    {"relative_humidity": "%", "vapour_pressure": "*p", "pressure": "*p"},
    _HUMID,
    symbols={"relative_humidity": "RH", "vapour_pressure": "P_sat", "pressure": "P"},
)
def water_per_dry_air(
    *,
    relative_humidity: Value,
    vapour_pressure: Value,
    pressure: Value,
    hundred: Value = constant(100.0, "%"),
) -> Value:
    """Water carried by humid air, mole per mole of dry air.

    Parameters
    ----------
    relative_humidity
        Relative humidity [%].
    vapour_pressure
        Saturation pressure at the air's temperature [any pressure unit].
    pressure
        Absolute pressure of the air [same unit], above the water's partial pressure.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Humidity [mol/mol dry air].
    """
    return relative_humidity / hundred * vapour_pressure / (pressure - relative_humidity / hundred * vapour_pressure)


@equation(
    "B_wa",
    "1",
    {"relative_humidity": "%", "vapour_pressure": "*p", "pressure": "*p"},
    _HUMID,
    symbols={"relative_humidity": "RH", "vapour_pressure": "P_sat", "pressure": "P"},
)
def ambient_moisture(
    *,
    relative_humidity: Value,
    vapour_pressure: Value,
    pressure: Value,
    hundred: Value = constant(100.0, "%"),
) -> Value:
    """Moisture of the ambient air as a fraction by volume.

    Parameters
    ----------
    relative_humidity
        Relative humidity [%].
    vapour_pressure
        Saturation pressure at the air's temperature [any pressure unit].
    pressure
        Absolute pressure of the air [same unit].
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        B_wa [1].
    """
    return relative_humidity / hundred * vapour_pressure / pressure
