"""Measured against expected: how far a point may lie off the line of its fuel, and what would bring it back.

On complete combustion dry CO2 falls from its highest value to zero along a straight line while dry O2 rises to
that of air.  With O2 and CO2 alone there is one redundant number: a fault is seen here, not located.
"""

from __future__ import annotations

from reporter.combustion.air import AMOUNT, BALANCE
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import dot

_PROPAGATED = Citation("gum", "5.1.2", "Eq. 10; coverage factor 2")
_ALLOWED = Citation("gum", "4.3.7", "rectangular distribution")
_LINE = {"slope": "s", "co2": "CO2", "o2": "O2", "air_oxygen": "x_O2"}


@equation("s", "1", {"expected": "%", "o2": "%", "air_oxygen": "1"}, BALANCE, symbols={"expected": "CO2_exp", **_LINE})
def line_slope(*, expected: Value, o2: Value, air_oxygen: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Fall of dry CO2 for each dry O2 along the line of a fuel.

    Parameters
    ----------
    expected
        Dry CO2 expected at the measured oxygen [%].
    o2
        Measured dry oxygen [%], below that of air.
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    hundred
        All of it [%].

    Returns
    -------
    float
        s [% CO2 per % O2].
    """
    return expected / (hundred * air_oxygen - o2)


@equation(
    "u",
    "%",
    {"known": "%", "allowed": "%", "span": "%"},
    _ALLOWED,
    symbols={"known": "u_0", "allowed": "ACE_max", "span": "CS"},
)
def uncertainty_allowed(*, known: Value, allowed: Value, span: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Standard uncertainty of a diluent with the calibration error that its method accepts, as rectangular.

    Parameters
    ----------
    known
        Standard uncertainty from cylinder and drift [%].
    allowed
        Largest calibration error the method accepts [% of span].
    span
        Calibration span [%].
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Standard uncertainty [%].
    """
    return (known**2 + (allowed * span / hundred) ** 2 / 3) ** 0.5


@equation(
    "Δ_max",
    "%",
    {"u_co2": "%", "u_o2": "%", "slope": "1", "spread": "%"},
    _PROPAGATED,
    symbols={"u_co2": "u_CO2", "u_o2": "u_O2", "slope": "s", "spread": "r"},
)
def agreement_bound(*, u_co2: Value, u_o2: Value, slope: Value, spread: Value) -> Value:
    """How far measured CO2 may lie from the expected: twice the standard uncertainty, and the composition's spread.

    Parameters
    ----------
    u_co2, u_o2
        Standard uncertainty of dry CO2 and dry O2 [%].
    slope
        Fall of CO2 for each O2 along the line of the fuel [1].
    spread
        Reach of an assumed composition [% CO2].

    Returns
    -------
    float
        Bound [%].
    """
    return 2 * (u_co2**2 + (slope * u_o2) ** 2) ** 0.5 + spread


@equation(
    "r",
    "%",
    {"expected": "%", "shares": "1", "reaches": "%"},
    BALANCE,
    symbols={"expected": "CO2_exp", "shares": "X_k", "reaches": "ρ_k"},
    series=("shares", "reaches"),
)
def co2_spread(*, expected: Value, shares: Value, reaches: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """How far assumed compositions reach in the expected CO2; of fuels burned together each by its share.

    Parameters
    ----------
    expected
        Dry CO2 expected [%].
    shares
        Share of the heat input of each assumed fuel [1], a series.
    reaches
        Reach of each in its highest CO2 [% of it], a series.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Reach [% CO2].
    """
    return expected * dot(shares, reaches) / hundred


@equation(
    "r",
    "1",
    {"expected": "1", "shares": "1", "reaches": "%"},
    BALANCE,
    symbols={"expected": "B_exp", "shares": "X_k", "reaches": "ρ_k"},
    series=("shares", "reaches"),
)
def moisture_spread(*, expected: Value, shares: Value, reaches: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """How far assumed compositions reach in the expected moisture; of fuels burned together each by its share.

    Parameters
    ----------
    expected
        Moisture expected [1].
    shares
        Share of the heat input of each assumed fuel [1], a series.
    reaches
        Reach of each in its water for each dry flue gas [% of it], a series.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Reach [1].
    """
    return expected * (1 - expected) * dot(shares, reaches) / hundred


@equation("C_d", "*c", {"value": "*c", "moisture": "1"}, BALANCE, symbols={"value": "C", "moisture": "B_ws"})
def as_if_wet(*, value: Value, moisture: Value) -> Value:
    """What a concentration, or its uncertainty, would be on dry gas if it had been read on wet gas.

    Parameters
    ----------
    value
        Value as read [% or ppm].
    moisture
        Moisture fraction of the gas [1], below 1.

    Returns
    -------
    float
        Value over the dry share [same unit].
    """
    return value / (1 - moisture)


@equation("CO2", "%", {"slope": "1", "o2": "%", "air_oxygen": "1"}, BALANCE, symbols=_LINE)
def co2_on_line(*, slope: Value, o2: Value, air_oxygen: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Dry CO2 on the line of the fuel at an oxygen.

    Parameters
    ----------
    slope
        Fall of CO2 for each O2 along the line [1].
    o2
        Dry oxygen [%].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    hundred
        All of it [%].

    Returns
    -------
    float
        Dry CO2 [%].
    """
    return slope * (hundred * air_oxygen - o2)


@equation("O2", "%", {"slope": "1", "co2": "%", "air_oxygen": "1"}, BALANCE, symbols=_LINE, difference=True)
def o2_on_line(*, slope: Value, co2: Value, air_oxygen: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Dry oxygen on the line of the fuel at a CO2.

    Parameters
    ----------
    slope
        Fall of CO2 for each O2 along the line [1], not zero.
    co2
        Dry CO2 [%].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    hundred
        All of it [%].

    Returns
    -------
    float
        Dry O2 [%]; negative where no oxygen brings so much CO2 onto the line.
    """
    return hundred * air_oxygen - co2 / slope


@equation("k", "1", {"slope": "1", "o2": "%", "co2": "%", "air_oxygen": "1"}, BALANCE, symbols=_LINE)
def scale_to_line(
    *, slope: Value, o2: Value, co2: Value, air_oxygen: Value, hundred: Value = constant(100.0, "%")
) -> Value:
    """The one factor on both O2 and CO2 that brings a point onto the line of the fuel.

    Parameters
    ----------
    slope
        Fall of CO2 for each O2 along the line [1].
    o2, co2
        Measured dry gases [%].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    hundred
        All of it [%].

    Returns
    -------
    float
        k [1]: above 1 where both read low.
    """
    return slope * hundred * air_oxygen / (co2 + slope * o2)


@equation(
    "B_exp",
    "1",
    {"expected": "1", "o2": "%", "other": "%", "air_oxygen": "1"},
    BALANCE,
    symbols={"expected": "B_exp", "o2": "O2", "other": "O2_2", "air_oxygen": "x_O2"},
)
def moisture_at_oxygen(
    *, expected: Value, o2: Value, other: Value, air_oxygen: Value, hundred: Value = constant(100.0, "%")
) -> Value:
    """Moisture that combustion gives at another oxygen than the one it was computed for, the air taken as dry.

    Parameters
    ----------
    expected
        Moisture expected at the first oxygen [1].
    o2, other
        The first and the other dry oxygen [%], below that of air.
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    hundred
        All of it [%].

    Returns
    -------
    float
        Moisture at the other oxygen [1].
    """
    dry = (1 - expected) * (hundred * air_oxygen - o2)
    water = expected * (hundred * air_oxygen - other)
    return water / (dry + water)


@equation("Δ_low", "1", {"tolerance": "1", "spread": "1"}, BALANCE, symbols={"tolerance": "t", "spread": "r"})
def moisture_lowest(*, tolerance: Value, spread: Value) -> Value:
    """How far below the water of combustion measured moisture may lie, as a negative difference.

    Parameters
    ----------
    tolerance
        Tolerance of the measurement, as a fraction of the gas [1].
    spread
        Reach of an assumed composition [1].

    Returns
    -------
    float
        Lowest difference [1].
    """
    return -(tolerance + spread)


@equation(
    "Δ_high",
    "1",
    {"tolerance": "1", "spread": "1", "humidity": "1", "air": AMOUNT, "wet": AMOUNT, "expected": "1"},
    BALANCE,
    symbols={"tolerance": "t", "spread": "r", "humidity": "w", "air": "a", "wet": "T", "expected": "B_exp"},
)
def moisture_highest(
    *, tolerance: Value, spread: Value, humidity: Value, air: Value, wet: Value, expected: Value
) -> Value:
    """How far above the water of combustion measured moisture may lie.

    Parameters
    ----------
    tolerance
        Tolerance of the measurement, as a fraction of the gas [1].
    spread
        Reach of an assumed composition [1].
    humidity
        Water the air may have held that is not counted [mol/mol dry air]; zero where it was entered.
    air, wet
        Dry air, and wet products [mol per kg or mol of fuel].
    expected
        Moisture expected from combustion [1].

    Returns
    -------
    float
        Highest difference [1].
    """
    return tolerance + spread + humidity * air * (1 - expected) / wet


@equation(
    "L_B",
    "%",
    {"measured": "1", "expected": "1", "humidity": "1"},
    BALANCE,
    symbols={"measured": "B_ws", "expected": "B_exp", "humidity": "w"},
    difference=True,
)
def air_by_moisture(
    *, measured: Value, expected: Value, humidity: Value, hundred: Value = constant(100.0, "%")
) -> Value:
    """Share of ambient air in the dry sample that would explain moisture above the expected.

    Parameters
    ----------
    measured, expected
        Moisture measured on its own, and expected at the oxygen of the sample [1].
    humidity
        Water of the ambient air [mol/mol dry air].
    hundred
        All of it [%].

    Returns
    -------
    float
        Share of air [%]; negative where moisture lies below the expected.
    """
    water = measured / (1 - measured)
    return hundred * (water - expected / (1 - expected)) / (water - humidity)


@equation(
    "L_r",
    "%",
    {"by_flow": "*r", "by_heat": "*r"},
    BALANCE,
    symbols={"by_flow": "E_flow", "by_heat": "E_heat"},
    difference=True,
)
def air_by_routes(*, by_flow: Value, by_heat: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Share of ambient air in the sample that would explain a rate by flow below the one by heat input.

    Parameters
    ----------
    by_flow, by_heat
        Mass rate from concentration and stack flow, and from F factor and heat input [mass per time].
    hundred
        All of it [%].

    Returns
    -------
    float
        Share of air [%]; negative where the rate by flow is the higher one.
    """
    return hundred * (1 - by_flow / by_heat)
