"""Mass concentration at a record's own standard temperature and pressure, by the ideal-gas law."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import EPA_STANDARD, EPA_STANDARD_SI, NO_VOLUME, NORMAL, Basis, Need, Standard
from reporter.equation import Citation, Value, constant, equation

IDEAL = Citation("ideal")
R_CITED = Citation("ideal", "", "molar gas constant")


def standard_of(temperature_k: float, pressure_kpa: float) -> Standard:
    """The standard condition of a temperature [K] and a pressure [kPa], in its usual words where it has some.

    Examples
    --------
    >>> standard_of(293.15, 101.325).text()
    '20 °C, 101.325 kPa'
    >>> standard_of(298.15, 101.325).text()
    '298.15 K, 101.325 kPa'
    """
    for known in (NORMAL, EPA_STANDARD_SI, EPA_STANDARD):
        if (temperature_k, pressure_kpa) == (known.temperature_k, known.pressure_kpa):
            return known
    return Standard(temperature_k, pressure_kpa, f"{temperature_k:.6g} K, {pressure_kpa:.6g} kPa")


def _at_standard(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    return bases["c"].but(standard=standard_of(float(values["temperature"]), float(values["pressure"])))


@equation(
    "C_m",
    "mg/m3",
    {"c": "ppm", "molar_mass": "g/mol", "temperature": "K", "pressure": "kPa"},
    IDEAL,
    symbols={"c": "C_ppm", "molar_mass": "M", "temperature": "T_std", "pressure": "P_std"},
    needs={"c": Need(standard=NO_VOLUME)},
    gives=_at_standard,
)
def mass_concentration(
    *,
    c: Value,
    molar_mass: Value,
    temperature: Value,
    pressure: Value,
    gas_constant: Value = constant(8.314462618, "J/mol/K", "R", cite=R_CITED),
) -> Value:
    """Mass per volume of a gas from parts per million by volume.

    Parameters
    ----------
    c
        Concentration [ppm].
    molar_mass
        Molar mass of the gas, or of what it is expressed as (NO2 for NOx) [g/mol].
    temperature
        Standard temperature of the record [K].
    pressure
        Standard pressure of the record [kPa].
    gas_constant
        Molar gas constant [J/(mol K)].

    Returns
    -------
    float
        Concentration [mg/m3], on the moisture and oxygen basis of `c` at the standard conditions given.
    """
    return c * molar_mass * pressure / (gas_constant * temperature)


@equation(
    "V_m",
    ("ft3/lbmol", "L/mol"),
    {"temperature": ("°R", "K"), "pressure": ("inHg", "kPa")},
    IDEAL,
    symbols={"temperature": "T", "pressure": "P"},
)
def molar_volume(
    *,
    temperature: Value,
    pressure: Value,
    gas_constant: Value = constant(
        21.84971285306435, ("inHg*ft3/lbmol/°R", "kPa*L/mol/K"), "R", si=8.314462618, cite=R_CITED
    ),
) -> Value:
    """Volume of one mole of an ideal gas.

    Parameters
    ----------
    temperature
        Absolute temperature [°R or K].
    pressure
        Absolute pressure [inHg or kPa].
    gas_constant
        Molar gas constant in the units of the system.

    Returns
    -------
    float
        Molar volume [ft3/lbmol or L/mol].
    """
    return gas_constant * temperature / pressure
