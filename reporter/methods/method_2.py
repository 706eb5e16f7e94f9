"""Method 2: stack gas velocity and flow, and flows restated at other conditions.

One set of constants throughout, the method's rounded one: 460 °R and 273 K for the scale's zero with 528 °R
and 293 K for standard temperature.  A test says how far it is from the exact set.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import ACTUAL, EPA_STANDARD, Basis, Moisture, Need
from reporter.equation import Citation, Value, constant, equation
from reporter.errors import BasisError
from reporter.functions import mean

_CITE = Citation("m2", "12")
_UNITS = Citation("units")
_BAROMETER = Citation("m2", "6.5", "barometer")
_VELOCITY = Citation("m2", "12", "average stack gas velocity")
_FLOW = Citation("m2", "12", "average stack gas dry volumetric flow rate")
_DRY_STANDARD = Basis(moisture=Moisture.DRY, standard=EPA_STANDARD)


@equation(
    "T_s",
    ("°R", "K"),
    {"temperature": ("°F", "°C")},
    _CITE,
    symbols={"temperature": "t_s"},
)
def absolute_temperature(
    *, temperature: Value, zero: Value = constant(460.0, ("°R", "K"), si=273.0, cite=_CITE)
) -> Value:
    """Absolute temperature with the method's rounded zero of the scale.

    Parameters
    ----------
    temperature
        Temperature [°F or °C].
    zero
        Printed 460 °R or 273 K (exact: 459.67 and 273.15; a change of unit uses those).

    Returns
    -------
    float
        Absolute temperature [°R or K].
    """
    return zero + temperature


@equation(
    "P_bar",
    ("inHg", "kPa"),
    {"station": ("inHg", "kPa"), "rise": ("ft", "m")},
    _BAROMETER,
    symbols={"station": "P_st", "rise": "z"},
)
def barometer_at(
    *,
    station: Value,
    rise: Value,
    rate: Value = constant(0.001, ("inHg/ft", "kPa/m"), si=0.0111, cite=_BAROMETER),
) -> Value:
    """Barometric pressure at a site, from that of a station lower down.

    Parameters
    ----------
    station
        Absolute pressure at the station [inHg or kPa].
    rise
        Height of the site above the station [ft or m]; negative where it lies below.
    rate
        Printed 0.1 in. Hg in 100 ft, or 2.5 mm Hg in 30 m (0.0111 kPa/m).

    Returns
    -------
    float
        Pressure at the site [inHg or kPa].
    """
    return station - rate * rise


@equation(
    "P_s",
    "inHg",
    {"barometric": "inHg", "static": "inH2O"},
    _CITE,
    symbols={"barometric": "P_bar", "static": "P_g"},
)
def absolute_pressure(
    *,
    barometric: Value,
    static: Value,
    density: Value = constant(13.6, "inH2O/inHg", cite=_CITE),
) -> Value:
    """Absolute pressure in the stack, the static pressure read on a water gauge.

    Parameters
    ----------
    barometric
        Barometric pressure at the sampling site [inHg].
    static
        Static pressure of the stack against the barometer [inH2O], signed.
    density
        Printed 13.6 inH2O/inHg.

    Returns
    -------
    float
        Absolute pressure [inHg].
    """
    return barometric + static / density


@equation(
    "P_s",
    "kPa",
    {"barometric": "kPa", "static": "kPa"},
    _CITE,
    symbols={"barometric": "P_bar", "static": "P_g"},
)
def absolute_pressure_metric(*, barometric: Value, static: Value) -> Value:
    """Absolute pressure in the stack, both pressures in one unit.

    Parameters
    ----------
    barometric
        Barometric pressure at the sampling site [kPa].
    static
        Static pressure of the stack against the barometer [kPa], signed.

    Returns
    -------
    float
        Absolute pressure [kPa].
    """
    return barometric + static


@equation(
    "v_s",
    ("ft/s", "m/s"),
    {
        "pitot": "1",
        "velocity_pressures": ("inH2O", "mmH2O"),
        "temperature": ("°R", "K"),
        "pressure": ("inHg", "mmHg"),
        "ms": ("lb/lbmol", "g/mol"),
    },
    _VELOCITY,
    symbols={
        "pitot": "C_p",
        "velocity_pressures": "Δp",
        "temperature": "T_s",
        "pressure": "P_s",
        "ms": "M_s",
    },
    series=("velocity_pressures",),
    gives=Basis(moisture=Moisture.WET, standard=ACTUAL),
)
def stack_velocity(
    *,
    pitot: Value,
    velocity_pressures: Value,
    temperature: Value,
    pressure: Value,
    ms: Value,
    kp: Value = constant(
        85.49,
        (
            "ft/s*lb^0.5*inHg^0.5/lbmol^0.5/°R^0.5/inH2O^0.5",
            "m/s*g^0.5*mmHg^0.5/mol^0.5/K^0.5/mmH2O^0.5",
        ),
        "K_p",
        si=34.97,
        cite=_VELOCITY,
    ),
) -> Value:
    """Mean velocity of the stack gas from a pitot traverse: the mean of the roots, not the root of the mean.

    Parameters
    ----------
    pitot
        Pitot coefficient [1].
    velocity_pressures
        Velocity pressure at each point [inH2O or mmH2O], a series, none negative.
    temperature
        Mean absolute stack temperature [°R or K].
    pressure
        Absolute stack pressure [inHg or mmHg].
    ms
        Molecular weight of the wet gas [lb/lbmol or g/mol].
    kp
        Printed pitot constant, 85.49 or 34.97.

    Returns
    -------
    float
        Velocity [ft/s or m/s; wet, actual conditions].
    """
    return kp * pitot * mean(velocity_pressures**0.5) * (temperature / (pressure * ms)) ** 0.5


@equation("A", ("ft2", "m2"), {"diameter": ("ft", "m")}, _CITE, symbols={"diameter": "D"})
def area_round(*, diameter: Value, pi: Value = constant(3.141592653589793, "1", "π")) -> Value:
    """Cross-section of a round stack.

    Parameters
    ----------
    diameter
        Inside diameter [ft or m].
    pi
        The number π.

    Returns
    -------
    float
        Area [ft2 or m2].
    """
    return pi * diameter**2 / 4


@equation(
    "A", ("ft2", "m2"), {"width": ("ft", "m"), "depth": ("ft", "m")}, _CITE,
    symbols={"width": "W", "depth": "L"},
)  # fmt: skip
def area_rectangular(*, width: Value, depth: Value) -> Value:
    """Cross-section of a rectangular duct.

    Parameters
    ----------
    width, depth
        Inside dimensions [ft or m].

    Returns
    -------
    float
        Area [ft2 or m2].
    """
    return width * depth


@equation(
    "Q_sd",
    ("ft3/h", "m3/h"),
    {
        "velocity": ("ft/s", "m/s"),
        "area": ("ft2", "m2"),
        "bws": "1",
        "temperature": ("°R", "K"),
        "pressure": ("inHg", "mmHg"),
    },
    _FLOW,
    symbols={"velocity": "v_s", "area": "A", "bws": "B_ws", "temperature": "T_s", "pressure": "P_s"},
    needs={"velocity": Need(moisture=Moisture.WET, standard=ACTUAL)},
    gives=_DRY_STANDARD,
)
def dry_standard_flow(
    *,
    velocity: Value,
    area: Value,
    bws: Value,
    temperature: Value,
    pressure: Value,
    hour: Value = constant(3600.0, "s/h", cite=_FLOW),
    t_std: Value = constant(528.0, ("°R", "K"), "T_std", si=293.0, cite=_FLOW),
    p_std: Value = constant(29.92, ("inHg", "mmHg"), "P_std", si=760.0, cite=_FLOW),
) -> Value:
    """Dry flow at standard conditions from velocity and cross-section.

    Parameters
    ----------
    velocity
        Mean velocity [ft/s or m/s; wet, actual conditions].
    area
        Cross-section [ft2 or m2].
    bws
        Moisture of the stack gas as a fraction [1].
    temperature
        Mean absolute stack temperature [°R or K].
    pressure
        Absolute stack pressure [inHg or mmHg].
    hour
        Printed 3600 s/h.
    t_std, p_std
        Printed standard temperature and pressure: 528 °R and 29.92 inHg, 293 K and 760 mmHg.

    Returns
    -------
    float
        Flow [ft3/h or m3/h; dry, 68 °F and 29.92 inHg].
    """
    return hour * (1 - bws) * velocity * area * (t_std / temperature) * (pressure / p_std)


def _standardised(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    return bases["flow"].but(standard=EPA_STANDARD)


@equation(
    "Q_std",
    "*q",
    {"flow": "*q", "temperature": ("°F", "°C"), "pressure": ("inHg", "kPa")},
    _FLOW,
    symbols={"flow": "Q_a", "temperature": "t_s", "pressure": "P_s"},
    needs={"flow": Need(standard=ACTUAL)},
    gives=_standardised,
)
def flow_to_standard(
    *,
    flow: Value,
    temperature: Value,
    pressure: Value,
    zero: Value = constant(460.0, ("°R", "K"), si=273.0, cite=_CITE),
    t_std: Value = constant(528.0, ("°R", "K"), "T_std", si=293.0, cite=_FLOW),
    p_std: Value = constant(29.92, ("inHg", "kPa"), "P_std", si=101.325, cite=_FLOW),
) -> Value:
    """Flow at standard conditions from a flow at stack conditions.

    Parameters
    ----------
    flow
        Flow [ft3/h, m3/h or another flow unit; actual conditions].
    temperature
        Stack temperature [°F or °C].
    pressure
        Absolute stack pressure [inHg or kPa].
    zero
        Printed 460 °R or 273 K.
    t_std, p_std
        Printed standard temperature and pressure: 528 °R and 29.92 inHg, 293 K and 760 mmHg in kPa.

    Returns
    -------
    float
        Flow [same unit; moisture basis of `flow`, 68 °F and 29.92 inHg].
    """
    return flow * (t_std / (zero + temperature)) * (pressure / p_std)


def _restated(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    stated = bases["flow"].standard
    if stated.temperature_k is None or stated.pressure_kpa is None:
        raise BasisError(
            f"restated_flow: flow must be at stated standard conditions, but is {stated.text() or 'without conditions'}"
        )
    return bases["flow"].but(standard=EPA_STANDARD)


@equation(
    "Q_std",
    "*q",
    {"flow": "*q", "temperature": ("°F", "°C"), "pressure": ("inHg", "kPa")},
    Citation("ideal"),
    symbols={"flow": "Q", "temperature": "t", "pressure": "P"},
    gives=_restated,
)
def restated_flow(
    *,
    flow: Value,
    temperature: Value,
    pressure: Value,
    zero: Value = constant(459.67, ("°R", "K"), si=273.15, cite=_UNITS),
    t_std: Value = constant(527.67, ("°R", "K"), "T_std", si=293.15, cite=_FLOW),
    p_std: Value = constant(29.92, ("inHg", "kPa"), "P_std", si=101.325, cite=_FLOW),
) -> Value:
    """Flow at 68 °F and 29.92 inHg from a flow stated at other standard conditions.

    Parameters
    ----------
    flow
        Flow [ft3/h, m3/h or another flow unit; at `temperature` and `pressure`].
    temperature
        Standard temperature the flow is stated at [°F or °C].
    pressure
        Standard pressure the flow is stated at [inHg or kPa].
    zero
        Zero of the scale, 459.67 °R or 273.15 K.
    t_std, p_std
        68 °F (20 °C) and 29.92 inHg (101.325 kPa).

    Returns
    -------
    float
        Flow [same unit; moisture basis of `flow`, 68 °F and 29.92 inHg].

    Raises
    ------
    BasisError
        In a ledger, where the flow is not at stated standard conditions.
    """
    return flow * (t_std / (zero + temperature)) * (pressure / p_std)


def _made(moisture: Moisture) -> Any:
    def gives(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
        return bases["flow"].but(moisture=moisture)

    return gives


@equation(
    "Q_d", "*q", {"flow": "*q", "bws": "1"}, _FLOW, symbols={"flow": "Q_w", "bws": "B_ws"},
    needs={"flow": Need(moisture=Moisture.WET)}, gives=_made(Moisture.DRY),
)  # fmt: skip
def dry_flow(*, flow: Value, bws: Value) -> Value:
    """Dry flow from a wet one.

    Parameters
    ----------
    flow
        Flow [ft3/h, m3/h or another flow unit; wet].
    bws
        Moisture of the stack gas as a fraction [1].

    Returns
    -------
    float
        Flow [same unit and conditions; dry].
    """
    return flow * (1 - bws)


@equation(
    "Q_w", "*q", {"flow": "*q", "bws": "1"}, _FLOW, symbols={"flow": "Q_d", "bws": "B_ws"},
    needs={"flow": Need(moisture=Moisture.DRY)}, gives=_made(Moisture.WET),
)  # fmt: skip
def wet_flow(*, flow: Value, bws: Value) -> Value:
    """Wet flow from a dry one.

    Parameters
    ----------
    flow
        Flow [ft3/h, m3/h or another flow unit; dry].
    bws
        Moisture of the stack gas as a fraction [1], below 1.

    Returns
    -------
    float
        Flow [same unit and conditions; wet].
    """
    return flow / (1 - bws)
