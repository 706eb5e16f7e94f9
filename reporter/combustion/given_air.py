"""Where the air is known, one measured gas, or none, leaves one amount open: O2, CO, or CO beside hydrogen."""

from __future__ import annotations

from reporter.basis import Moisture, Need
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.combustion.balance import DRY_PRODUCTS
from reporter.combustion.water_gas import WATER_GAS
from reporter.equation import Value, equation

_DRY = Need(moisture=Moisture.DRY)
_S = {
    "air": "a",
    "air_oxygen": "x_O2",
    "air_nitrogen": "x_N2",
    "sum_fixed": "q_0",
    "sum_per_product": "q_D",
    "from_fuel": "D_f",
    "needed": "v",
    "net": "g_O",
    "products": "D",
    "carbon": "n_C",
    "short": "r",
    "water": "n_H2O,b",
    "ratio": "K",
    "co": "n_CO",
}


def _units(*amounts: str, pure: tuple[str, ...] = ()) -> dict[str, str]:
    return dict.fromkeys(amounts, AMOUNT) | dict.fromkeys(pure, "1")


@equation("a", AMOUNT, _units("air"), BALANCE, symbols={"air": "a_given"})
def dry_air_given(*, air: Value) -> Value:
    """Dry air burned, as it was given.

    Parameters
    ----------
    air
        Dry air [mol per kg or mol of fuel].

    Returns
    -------
    float
        a [mol per kg or mol of fuel].
    """
    return +air


@equation(
    "D",
    AMOUNT,
    _units("sum_fixed", "air", pure=("sum_per_product",)),
    BALANCE,
    symbols=_S,
    gives=DRY_PRODUCTS,
)
def dry_products_of_air(*, sum_fixed: Value, air: Value, sum_per_product: Value) -> Value:
    """Dry products of a known amount of air, O2 being open.

    Parameters
    ----------
    sum_fixed
        Dry products of the fuel itself less its stoichiometric oxygen [mol per kg or mol of fuel].
    air
        Dry air [mol per kg or mol of fuel].
    sum_per_product
        One less the unburned moles per mole of dry products [1].

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    return (sum_fixed + air) / sum_per_product


@equation(
    "D",
    AMOUNT,
    _units("from_fuel", "air", pure=("air_nitrogen", "sum_per_product")),
    BALANCE,
    symbols=_S,
    gives=DRY_PRODUCTS,
)
def dry_products_beside_oxygen(*, from_fuel: Value, air_nitrogen: Value, air: Value, sum_per_product: Value) -> Value:
    """Dry products of a known amount of air, O2 being measured and CO open.

    Parameters
    ----------
    from_fuel
        Dry products of the fuel itself [mol per kg or mol of fuel].
    air_nitrogen
        Mole fraction of dry air that is not oxygen [1].
    air
        Dry air [mol per kg or mol of fuel].
    sum_per_product
        One less the added moles per mole of dry products [1].

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    return (from_fuel + air_nitrogen * air) / sum_per_product


@equation(
    "n_CO",
    AMOUNT,
    _units("needed", "products", "air", pure=("net", "air_oxygen")),
    BALANCE,
    symbols=_S,
    needs={"net": _DRY},
    difference=True,
)
def carbon_monoxide_left(
    *,
    needed: Value,
    net: Value,
    products: Value,
    air: Value,
    air_oxygen: Value,
) -> Value:
    """CO from the oxygen balance, where air and O2 are known.

    Parameters
    ----------
    needed
        Stoichiometric oxygen [mol per kg or mol of fuel].
    net
        Net oxygen of the measured gases without CO, per mole of dry products [1].
    products, air
        Dry products and dry air [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].

    Returns
    -------
    float
        n_CO [mol per kg or mol of fuel].
    """
    return 2 * (needed + net * products - air_oxygen * air)


@equation("r", AMOUNT, _units("needed", "air", pure=("air_oxygen",)), BALANCE, symbols=_S, difference=True)
def unburned_pairs(*, needed: Value, air_oxygen: Value, air: Value) -> Value:
    """CO and H2 together that a lack of air leaves: twice the oxygen that is missing.

    Parameters
    ----------
    needed
        Stoichiometric oxygen [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    air
        Dry air [mol per kg or mol of fuel].

    Returns
    -------
    float
        r = n_CO + n_H2 [mol per kg or mol of fuel].
    """
    return 2 * (needed - air_oxygen * air)


@equation("B", AMOUNT, _units("carbon", "short", "water", pure=("ratio",)), WATER_GAS, symbols=_S)
def shift_linear(*, ratio: Value, carbon: Value, short: Value, water: Value) -> Value:
    """Coefficient of n_CO in the water-gas relation, where the air is known.

    Parameters
    ----------
    ratio
        Water-gas constant K [1].
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].
    short
        r = n_CO + n_H2 [mol per kg or mol of fuel].
    water
        Water if all hydrogen burned [mol per kg or mol of fuel].

    Returns
    -------
    float
        B [mol per kg or mol of fuel].
    """
    return ratio * (carbon + short) + water - short


@equation("n_CO", AMOUNT, _units("linear", "carbon", "short", pure=("ratio",)), WATER_GAS, symbols=_S | {"linear": "B"})
def carbon_monoxide_of_air(*, linear: Value, ratio: Value, carbon: Value, short: Value) -> Value:
    """CO of a known lack of air: the smaller root of (K - 1) n_CO^2 - B n_CO + K n_C r = 0.

    Parameters
    ----------
    linear
        B [mol per kg or mol of fuel].
    ratio
        Water-gas constant K [1].
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].
    short
        r = n_CO + n_H2 [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_CO [mol per kg or mol of fuel].
    """
    free = ratio * carbon * short
    return 2 * free / (linear + (linear**2 - 4 * (ratio - 1) * free) ** 0.5)


@equation("n_H2", AMOUNT, _units("short", "co"), BALANCE, symbols=_S, difference=True)
def hydrogen_of_air(*, short: Value, co: Value) -> Value:
    """Hydrogen of a known lack of air.

    Parameters
    ----------
    short
        r = n_CO + n_H2 [mol per kg or mol of fuel].
    co
        n_CO [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_H2 [mol per kg or mol of fuel].
    """
    return short - co


@equation(
    "D",
    AMOUNT,
    _units("from_fuel", "air", "h2", pure=("air_nitrogen",)),
    BALANCE,
    symbols=_S | {"h2": "n_H2"},
    gives=DRY_PRODUCTS,
)
def rich_dry_products_of_air(*, from_fuel: Value, air_nitrogen: Value, air: Value, h2: Value) -> Value:
    """Dry products of a known lack of air.

    Parameters
    ----------
    from_fuel
        Dry products of the fuel itself [mol per kg or mol of fuel].
    air_nitrogen
        Mole fraction of dry air that is not oxygen [1].
    air, h2
        Dry air and hydrogen left [mol per kg or mol of fuel].

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    return from_fuel + air_nitrogen * air + h2
