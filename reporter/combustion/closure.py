"""Closure of each element, and of the sum of dry products: out less in, zero but for rounding."""

from __future__ import annotations

from reporter.combustion.air import AMOUNT, BALANCE
from reporter.combustion.products import SYMBOLS, amount_units
from reporter.equation import Value, equation


@equation(
    "ΔC",
    AMOUNT,
    amount_units("co2", "co", "hydrocarbon", "carbon", pure=("carbon_atoms",)),
    BALANCE,
    symbols=SYMBOLS,
    difference=True,
)
def closure_carbon(*, co2: Value, co: Value, hydrocarbon: Value, carbon_atoms: Value, carbon: Value) -> Value:
    """Carbon in the gases less carbon that leaves the fuel as gas.

    Parameters
    ----------
    co2, co, hydrocarbon
        Amounts [mol per kg or mol of fuel].
    carbon_atoms
        p of the hydrocarbon as it is reported [1].
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].

    Returns
    -------
    float
        Residual [mol per kg or mol of fuel].
    """
    return co2 + co + carbon_atoms * hydrocarbon - carbon


@equation(
    "ΔH",
    AMOUNT,
    amount_units("h2o", "h2", "hydrocarbon", "hydrogen", "water", "air", pure=("hydrogen_atoms", "humidity")),
    BALANCE,
    symbols=SYMBOLS,
    difference=True,
)
def closure_hydrogen(
    *,
    h2o: Value,
    h2: Value,
    hydrocarbon: Value,
    hydrogen_atoms: Value,
    hydrogen: Value,
    water: Value,
    air: Value,
    humidity: Value,
) -> Value:
    """Hydrogen atoms out less in.

    Parameters
    ----------
    h2o, h2, hydrocarbon
        Amounts [mol per kg or mol of fuel].
    hydrogen_atoms
        q of the hydrocarbon as it is reported [1].
    hydrogen, water
        Hydrogen atoms and moisture of the fuel [mol per kg or mol of fuel].
    air, humidity
        Dry air [mol per kg or mol of fuel] and its water [mol per mol].

    Returns
    -------
    float
        Residual [mol per kg or mol of fuel].
    """
    return 2 * h2o + 2 * h2 + hydrogen_atoms * hydrocarbon - hydrogen - 2 * water - 2 * humidity * air


@equation(
    "ΔO",
    AMOUNT,
    amount_units(
        "co2",
        "co",
        "h2o",
        "o2",
        "so2",
        "no",
        "oxygen",
        "water",
        "air",
        pure=("air_oxygen", "humidity"),
    ),
    BALANCE,
    symbols=SYMBOLS,
    difference=True,
)
def closure_oxygen(
    *,
    co2: Value,
    co: Value,
    h2o: Value,
    o2: Value,
    so2: Value,
    no: Value,
    oxygen: Value,
    water: Value,
    air: Value,
    air_oxygen: Value,
    humidity: Value,
) -> Value:
    """Oxygen atoms out less in.

    Parameters
    ----------
    co2, co, h2o, o2, so2, no
        Amounts [mol per kg or mol of fuel].
    oxygen, water
        Oxygen atoms and moisture of the fuel [mol per kg or mol of fuel].
    air
        Dry air [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    humidity
        Water in the air [mol per mol dry air].

    Returns
    -------
    float
        Residual [mol per kg or mol of fuel].
    """
    out = 2 * co2 + co + h2o + 2 * o2 + 2 * so2 + no
    return out - oxygen - water - (2 * air_oxygen + humidity) * air


@equation(
    "ΔN",
    AMOUNT,
    amount_units("n2", "no", "nitrogen", "air", pure=("air_nitrogen",)),
    BALANCE,
    symbols=SYMBOLS,
    difference=True,
)
def closure_nitrogen(*, n2: Value, no: Value, nitrogen: Value, air: Value, air_nitrogen: Value) -> Value:
    """Nitrogen atoms out less in.

    Parameters
    ----------
    n2, no
        Amounts [mol per kg or mol of fuel].
    nitrogen
        Nitrogen atoms of the fuel [mol per kg or mol of fuel].
    air, air_nitrogen
        Dry air [mol per kg or mol of fuel] and its fraction that counts as nitrogen [1].

    Returns
    -------
    float
        Residual [mol per kg or mol of fuel].
    """
    return 2 * n2 + no - nitrogen - 2 * air_nitrogen * air


@equation("ΔS", AMOUNT, amount_units("so2", "sulfur"), BALANCE, symbols=SYMBOLS, difference=True)
def closure_sulfur(*, so2: Value, sulfur: Value) -> Value:
    """Sulfur out less in.

    Parameters
    ----------
    so2
        Amount [mol per kg or mol of fuel].
    sulfur
        Sulfur of the fuel [mol per kg or mol of fuel].

    Returns
    -------
    float
        Residual [mol per kg or mol of fuel].
    """
    return so2 - sulfur


@equation(
    "ΔD",
    AMOUNT,
    amount_units("co2", "co", "h2", "o2", "n2", "so2", "no", "hydrocarbon", "inert", "products"),
    BALANCE,
    symbols=SYMBOLS,
    difference=True,
)
def closure_dry(
    *,
    co2: Value,
    co: Value,
    h2: Value,
    o2: Value,
    n2: Value,
    so2: Value,
    no: Value,
    hydrocarbon: Value,
    inert: Value,
    products: Value,
) -> Value:
    """Sum of the dry gases less the dry products.

    Parameters
    ----------
    co2, co, h2, o2, n2, so2, no, hydrocarbon
        Amounts [mol per kg or mol of fuel].
    inert
        Inert gas of the fuel [mol per kg or mol of fuel].
    products
        Dry products [mol per kg or mol of fuel].

    Returns
    -------
    float
        Residual [mol per kg or mol of fuel].
    """
    return co2 + co + h2 + o2 + n2 + so2 + no + hydrocarbon + inert - products
