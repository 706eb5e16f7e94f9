"""Fuel-rich combustion with measured CO: air, hydrogen and water are linear in the dry products D.

`reporter.combustion.water_gas` closes the balance: hydrogen is carried by the water-gas relation.
"""

from __future__ import annotations

from reporter.basis import Moisture, Need
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.equation import Value, equation

_DRY = Need(moisture=Moisture.DRY)
_S = {
    "air_oxygen": "x_O2",
    "net": "g_O",
    "rest": "q_D",
    "from_fuel": "D_f",
    "needed": "v",
    "air_per_product": "a_D",
    "air_fixed": "a_0",
    "hydrogen_per_product": "h_D",
    "hydrogen_fixed": "h_0",
}


def _units(*amounts: str, pure: tuple[str, ...] = ()) -> dict[str, str]:
    return dict.fromkeys(amounts, AMOUNT) | dict.fromkeys(pure, "1")


@equation("a_D", "1", _units(pure=("rest", "net", "air_oxygen")), BALANCE, symbols=_S, needs={"net": _DRY})
def rich_air_per_product(*, rest: Value, net: Value, air_oxygen: Value) -> Value:
    """Dry air per mole of dry products beyond a fixed part, where hydrogen is left.

    Parameters
    ----------
    rest
        Share of the dry products not added by the measured gases [1].
    net
        Net oxygen per mole of dry products [1].
    air_oxygen
        Mole fraction of oxygen in dry air [1].

    Returns
    -------
    float
        a_D [1].
    """
    return (rest - 2 * net) / (1 - 3 * air_oxygen)


@equation("a_0", AMOUNT, _units("from_fuel", "needed", pure=("air_oxygen",)), BALANCE, symbols=_S)
def rich_air_fixed(*, from_fuel: Value, needed: Value, air_oxygen: Value) -> Value:
    """Fixed part that is taken from a_D D to give the dry air, where hydrogen is left.

    Parameters
    ----------
    from_fuel
        Dry products of the fuel itself [mol per kg or mol of fuel].
    needed
        Stoichiometric oxygen [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].

    Returns
    -------
    float
        a_0 [mol per kg or mol of fuel].
    """
    return (from_fuel + 2 * needed) / (1 - 3 * air_oxygen)


@equation("h_D", "1", _units(pure=("net", "air_oxygen", "air_per_product")), BALANCE, symbols=_S)
def hydrogen_per_product(*, net: Value, air_oxygen: Value, air_per_product: Value) -> Value:
    """Hydrogen per mole of dry products beyond a fixed part, from the oxygen balance.

    Parameters
    ----------
    net
        Net oxygen per mole of dry products [1].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    air_per_product
        a_D [1].

    Returns
    -------
    float
        h_D [1].
    """
    return 2 * (net - air_oxygen * air_per_product)


@equation("h_0", AMOUNT, _units("needed", "air_fixed", pure=("air_oxygen",)), BALANCE, symbols=_S)
def hydrogen_fixed(*, needed: Value, air_oxygen: Value, air_fixed: Value) -> Value:
    """Fixed part of the hydrogen, from the oxygen balance.

    Parameters
    ----------
    needed
        Stoichiometric oxygen [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    air_fixed
        a_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        h_0 [mol per kg or mol of fuel].
    """
    return 2 * (needed + air_oxygen * air_fixed)


_HUMID = {"humidity": "w", "hydrocarbon": "y_HC", "hydrogen_atoms": "q", "combustion": "n_H2O,0"}


@equation(
    "w_D",
    "1",
    _units(pure=("humidity", "air_per_product", "hydrocarbon", "hydrogen_atoms", "hydrogen_per_product")),
    BALANCE,
    symbols=_S | _HUMID,
    needs={"hydrocarbon": _DRY},
)
def water_per_product(
    *,
    humidity: Value,
    air_per_product: Value,
    hydrogen_per_product: Value,
    hydrocarbon: Value,
    hydrogen_atoms: Value,
) -> Value:
    """Water per mole of dry products beyond a fixed part, from the hydrogen balance.

    Parameters
    ----------
    humidity
        Water in the air [mol per mol dry air].
    air_per_product, hydrogen_per_product
        a_D and h_D [1].
    hydrocarbon, hydrogen_atoms
        Hydrocarbon as a fraction of the dry gas, and its q [1].

    Returns
    -------
    float
        w_D [1].
    """
    return humidity * air_per_product - hydrogen_atoms / 2 * hydrocarbon - hydrogen_per_product


@equation(
    "w_0",
    AMOUNT,
    _units("combustion", "air_fixed", "hydrogen_fixed", pure=("humidity",)),
    BALANCE,
    symbols=_S | _HUMID,
)
def water_fixed(*, combustion: Value, humidity: Value, air_fixed: Value, hydrogen_fixed: Value) -> Value:
    """Fixed part of the water, from the hydrogen balance.

    Parameters
    ----------
    combustion
        Combustion water of the fuel [mol per kg or mol of fuel].
    humidity
        Water in the air [mol per mol dry air].
    air_fixed, hydrogen_fixed
        a_0 and h_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        w_0 [mol per kg or mol of fuel].
    """
    return combustion - humidity * air_fixed - hydrogen_fixed


@equation(
    "a",
    AMOUNT,
    _units("products", "air_fixed", pure=("air_per_product",)),
    BALANCE,
    symbols=_S | {"products": "D"},
)
def rich_dry_air(*, air_per_product: Value, products: Value, air_fixed: Value) -> Value:
    """Dry air burned, where hydrogen is left.

    Parameters
    ----------
    air_per_product
        a_D [1].
    products
        Dry products [mol per kg or mol of fuel].
    air_fixed
        a_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        a [mol dry air per kg or per mol of fuel].
    """
    return air_per_product * products - air_fixed


@equation(
    "n_H2",
    AMOUNT,
    _units("products", "hydrogen_fixed", pure=("hydrogen_per_product",)),
    BALANCE,
    symbols=_S | {"products": "D"},
    difference=True,
)
def rich_hydrogen(*, hydrogen_fixed: Value, hydrogen_per_product: Value, products: Value) -> Value:
    """Hydrogen left in the flue gas.

    Parameters
    ----------
    hydrogen_fixed
        h_0 [mol per kg or mol of fuel].
    hydrogen_per_product
        h_D [1].
    products
        Dry products [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_H2 [mol per kg or mol of fuel].
    """
    return hydrogen_fixed + hydrogen_per_product * products


@equation(
    "n_H2O",
    AMOUNT,
    _units("water", "h2"),
    BALANCE,
    symbols={"water": "n_H2O,b", "h2": "n_H2"},
)
def water_beside_hydrogen(*, water: Value, h2: Value) -> Value:
    """Water where some hydrogen has not burned.

    Parameters
    ----------
    water
        Water if all hydrogen burned [mol per kg or mol of fuel].
    h2
        Hydrogen left [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_H2O [mol per kg or mol of fuel].
    """
    return water - h2
