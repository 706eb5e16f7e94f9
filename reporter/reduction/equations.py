"""The small equations between the methods: values taken over, diluents, shares, volumes from masses."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import NEED_DRY, NO_VOLUME, Basis
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import at_least, choose

_PRACTICE = Citation("practice")
_UNITS = Citation("units")
_READABLE = Citation("practice", "", "smallest amount a gas analysis reads")
_GAS_CONSTANT = Citation("ideal", "", "molar gas constant")
_HEAT = ("MMBtu/h", "GJ/h")


@equation("x", "*v", {"value": "*v"}, _PRACTICE, symbols={"value": "x"}, gives="value")
def carried(*, value: Value) -> Value:
    """A value taken over unchanged: it is already on the basis asked for.

    Parameters
    ----------
    value
        Value [any unit].

    Returns
    -------
    float
        The same value [same unit and basis].
    """
    return value


@equation(
    "%CO",
    "%",
    {"co": "%"},
    Citation("m3b", "12.3.1"),
    symbols={"co": "%CO"},
    needs={"co": NEED_DRY},
    gives="co",
)
def carbon_monoxide_counted(
    *,
    co: Value,
    readable: Value = constant(0.1, "%", cite=_READABLE),
    none: Value = constant(0.0, "%"),
) -> Value:
    """Carbon monoxide that the adjustments of Method 3B count: none where it is below what they read.

    Parameters
    ----------
    co
        Carbon monoxide [%; dry].
    readable
        Smallest amount counted [%] (common practice).
    none
        Zero [%].

    Returns
    -------
    float
        Carbon monoxide counted [%; dry].
    """
    return choose(at_least(co, readable), co, none)


@equation(
    "u",
    "%",
    {"certified": "%", "certificate": "%", "low_shift": "%", "upscale_shift": "%"},
    Citation("gum", "4.3.7", "rectangular distributions"),
    symbols={
        "certified": "C_MA",
        "certificate": "U",
        "low_shift": "Δ_low",
        "upscale_shift": "Δ_up",
    },
)
def diluent_uncertainty(
    *,
    certified: Value,
    certificate: Value,
    low_shift: Value,
    upscale_shift: Value,
    hundred: Value = constant(100.0, "%"),
) -> Value:
    """Standard uncertainty of oxygen or carbon dioxide from the cylinder and half the drift, each taken as rectangular.

    Parameters
    ----------
    certified
        Certified value of the upscale gas [%].
    certificate
        Stated uncertainty of the certificate [% of value], taken as the half-width.
    low_shift, upscale_shift
        Reading after less reading before the run [%]; half of each is the half-width.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Standard uncertainty [%].
    """
    cylinder = certified * certificate / hundred
    return (cylinder**2 / 3 + low_shift**2 / 12 + upscale_shift**2 / 12) ** 0.5


@equation(
    "F_o,bound",
    "1",
    {"expected": "1", "share": "%"},
    Citation("m3b", "12.3.3"),
    symbols={"expected": "F_o", "share": "s"},
)
def fuel_factor_bound(*, expected: Value, share: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """End of the range of the fuel factor for fuels burned together.

    Parameters
    ----------
    expected
        Fuel factor of the prorated F factors [1].
    share
        Tolerance [%], negative for the lower end.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Bound [1].
    """
    return expected * (hundred + share) / hundred


@equation(
    "load",
    "%",
    {"load": "*u", "permitted": "*u"},
    Citation("practice", "", "load as a share of the permitted maximum"),
    symbols={"load": "L", "permitted": "L_max"},
)
def load_share(*, load: Value, permitted: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Load in percent of the permitted maximum.

    Parameters
    ----------
    load
        Load of the run [the plant's unit].
    permitted
        Permitted maximum [same unit], not zero.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Share [%].
    """
    return hundred * load / permitted


@equation(
    "C_undil",
    "*c",
    {"reading": "*c", "factor": "1"},
    Citation("m7e", "12.4"),
    symbols={"reading": "C_Avg", "factor": "DF"},
    gives="reading",
)
def undiluted(*, reading: Value, factor: Value) -> Value:
    """A reading of a dilution system brought to the undiluted gas.

    Parameters
    ----------
    reading
        Reading, or mean of readings [ppm or %], before the dilution factor.
    factor
        Dilution factor [1].

    Returns
    -------
    float
        Concentration [same unit and basis].
    """
    return reading * factor


def _volume_basis(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    return bases["c"].but(standard=NO_VOLUME, expressed_as="")


@equation(
    "C_ppm",
    "ppm",
    {"c": "mg/m3", "molar_mass": "g/mol", "temperature": "K", "pressure": "kPa"},
    Citation("ideal"),
    symbols={"c": "C_m", "molar_mass": "M", "temperature": "T_std", "pressure": "P_std"},
    gives=_volume_basis,
)
def volume_from_mass(
    *,
    c: Value,
    molar_mass: Value,
    temperature: Value,
    pressure: Value,
    gas_constant: Value = constant(8.314462618, "J/mol/K", "R", cite=_GAS_CONSTANT),
) -> Value:
    """Parts per million by volume from a mass concentration at stated conditions.

    Parameters
    ----------
    c
        Mass concentration [mg/m3].
    molar_mass
        Molar mass of the gas, or of what it is expressed as [g/mol].
    temperature
        Temperature the volume is stated at [K].
    pressure
        Pressure the volume is stated at [kPa].
    gas_constant
        Molar gas constant [J/(mol K)].

    Returns
    -------
    float
        Concentration [ppm], on the moisture and oxygen basis of `c`.
    """
    return c * gas_constant * temperature / (molar_mass * pressure)


@equation(
    "X",
    "%",
    {"amount": "mol/kg", "molar_mass": "g/mol"},
    Citation("ciaaw", "", "amount times molar mass"),
    symbols={"amount": "n", "molar_mass": "M"},
)
def percent_by_weight(
    *, amount: Value, molar_mass: Value, per_kilogram: Value = constant(10.0, "g/kg/%", cite=_UNITS)
) -> Value:
    """Percent by weight of an element from its amount in a kilogram of fuel.

    Parameters
    ----------
    amount
        Amount of the element [mol/kg of fuel].
    molar_mass
        Molar mass of the element [g/mol].
    per_kilogram
        Grams per kilogram in one percent [g/kg/%].

    Returns
    -------
    float
        Percent by weight [%].
    """
    return amount * molar_mass / per_kilogram
