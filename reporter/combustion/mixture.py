"""What the amounts say of the mixture: excess air, equivalence ratio, expected concentrations, closure."""

from __future__ import annotations

from reporter.basis import AS_MEASURED, Basis, Moisture, Need
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.equation import Value, constant, equation

_DRY = Need(moisture=Moisture.DRY)
_AIR = {"air": "a", "stoichiometric": "A_st"}


@equation(
    "%EA",
    "%",
    {"air": AMOUNT, "stoichiometric": AMOUNT},
    BALANCE,
    symbols=_AIR,
    difference=True,
)
def excess_air_of_balance(*, air: Value, stoichiometric: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Excess air from the air burned.

    Parameters
    ----------
    air, stoichiometric
        Dry air burned, and for complete combustion [mol per kg or mol of fuel].
    hundred
        All of it [%].

    Returns
    -------
    float
        Excess air [%]; negative where air is short.
    """
    return hundred * (air / stoichiometric - 1)


@equation("φ", "1", {"air": AMOUNT, "stoichiometric": AMOUNT}, BALANCE, symbols=_AIR)
def equivalence_ratio(*, air: Value, stoichiometric: Value) -> Value:
    """Fuel-air equivalence ratio: below 1 fuel-lean, above 1 fuel-rich; the same by mole and by mass.

    Parameters
    ----------
    air, stoichiometric
        Dry air burned, and for complete combustion [mol per kg or mol of fuel].

    Returns
    -------
    float
        φ [1].
    """
    return stoichiometric / air


@equation(
    "AF",
    AMOUNT,
    {"stoichiometric": AMOUNT, "ratio": "1"},
    BALANCE,
    symbols={"stoichiometric": "A_st", "ratio": "φ"},
)
def air_fuel_by_mole(*, stoichiometric: Value, ratio: Value) -> Value:
    """Air-fuel ratio by mole from the equivalence ratio.

    Parameters
    ----------
    stoichiometric
        Dry air for complete combustion [mol per kg or mol of fuel].
    ratio
        Equivalence ratio φ [1].

    Returns
    -------
    float
        AF [mol dry air per kg or per mol of fuel].
    """
    return stoichiometric / ratio


@equation(
    "C_d",
    "%",
    {"amount": AMOUNT, "products": AMOUNT},
    BALANCE,
    symbols={"amount": "n", "products": "D"},
    needs={"products": _DRY},
    gives=Basis(moisture=Moisture.DRY, oxygen=AS_MEASURED),
)
def expected_percent(*, amount: Value, products: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Concentration of a product in dry flue gas.

    Parameters
    ----------
    amount
        Amount of the product [mol per kg or mol of fuel].
    products
        Dry products [mol per kg or mol of fuel].
    hundred
        All of it [%].

    Returns
    -------
    float
        Concentration [%, dry].
    """
    return hundred * amount / products


@equation(
    "B_ws",
    "1",
    {"water": AMOUNT, "products": AMOUNT},
    BALANCE,
    symbols={"water": "n_H2O", "products": "T"},
    needs={"products": Need(moisture=Moisture.WET)},
)
def expected_moisture(*, water: Value, products: Value) -> Value:
    """Moisture fraction of the flue gas from combustion.

    Parameters
    ----------
    water
        Water [mol per kg or mol of fuel].
    products
        Wet products [mol per kg or mol of fuel].

    Returns
    -------
    float
        B_ws [1].
    """
    return water / products


@equation(
    "w",
    "1",
    {"moisture": "1", "dry": AMOUNT, "from_fuel": AMOUNT, "air": AMOUNT},
    BALANCE,
    symbols={"moisture": "B_ws", "dry": "D", "from_fuel": "n_H2O,f", "air": "a"},
    needs={"dry": _DRY},
    difference=True,
)
def implied_humidity(*, moisture: Value, dry: Value, from_fuel: Value, air: Value) -> Value:
    """Humidity the air must have had for the moisture measured in the flue gas.

    Parameters
    ----------
    moisture
        Moisture fraction measured [1].
    dry
        Dry products [mol per kg or mol of fuel].
    from_fuel
        Water the fuel leaves in the flue gas [mol per kg or mol of fuel].
    air
        Dry air [mol per kg or mol of fuel].

    Returns
    -------
    float
        w [mol per mol dry air]; negative where less water was measured than the fuel makes.
    """
    return (moisture / (1 - moisture) * dry - from_fuel) / air


@equation(
    "n_H2O,f",
    AMOUNT,
    {"water": AMOUNT, "air": AMOUNT, "humidity": "1"},
    BALANCE,
    symbols={"water": "n_H2O", "air": "a", "humidity": "w"},
)
def water_without_air(*, water: Value, air: Value, humidity: Value) -> Value:
    """Water of the flue gas that does not come from the air.

    Parameters
    ----------
    water
        Water [mol per kg or mol of fuel].
    air
        Dry air [mol per kg or mol of fuel].
    humidity
        Water taken for the air [mol per mol dry air].

    Returns
    -------
    float
        Water of the fuel [mol per kg or mol of fuel].
    """
    return water - humidity * air
