"""Fuel-rich combustion: hydrogen is carried by the water-gas relation n_CO n_H2O / (n_CO2 n_H2) = K.

With measured CO (readings on dry gas) air, hydrogen and water are linear in the dry products D, and the relation
is a quadratic in D; with given air it is a quadratic in CO.  Of the two roots the smaller is the physical one:
the other has negative carbon dioxide or hydrogen.
"""

from __future__ import annotations

from reporter.basis import Moisture, Need
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.combustion.balance import DRY_PRODUCTS
from reporter.equation import Citation, Value, equation

WATER_GAS = Citation("cfr1065", "1065.655", "water-gas reaction equilibrium coefficient")
WATER_GAS_CONSTANT = 3.5
_DRY = Need(moisture=Moisture.DRY)
_S = {
    "air_oxygen": "x_O2",
    "net": "g_O",
    "measured": "g_C",
    "rest": "q_D",
    "from_fuel": "D_f",
    "needed": "v",
    "carbon": "n_C",
    "co": "y_CO",
    "ratio": "K",
    "air_per_product": "a_D",
    "air_fixed": "a_0",
    "hydrogen_per_product": "h_D",
    "hydrogen_fixed": "h_0",
    "water_per_product": "w_D",
    "water_fixed": "w_0",
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
    "A",
    "1",
    _units(pure=("co", "water_per_product", "ratio", "measured", "hydrogen_per_product")),
    WATER_GAS,
    symbols=_S,
    needs={"co": _DRY, "measured": _DRY},
)
def water_gas_square(
    *,
    co: Value,
    water_per_product: Value,
    hydrogen_per_product: Value,
    ratio: Value,
    measured: Value,
) -> Value:
    """Coefficient of D squared in the water-gas relation.

    Parameters
    ----------
    co
        Carbon monoxide as a fraction of the dry gas [1].
    water_per_product, hydrogen_per_product
        w_D and h_D [1].
    ratio
        Water-gas constant K [1].
    measured
        Carbon of CO and hydrocarbon per mole of dry products [1].

    Returns
    -------
    float
        A [1].
    """
    return co * water_per_product + ratio * measured * hydrogen_per_product


@equation(
    "B",
    AMOUNT,
    _units(
        "water_fixed",
        "carbon",
        "hydrogen_fixed",
        pure=("co", "ratio", "hydrogen_per_product", "measured"),
    ),
    WATER_GAS,
    symbols=_S,
    needs={"co": _DRY, "measured": _DRY},
)
def water_gas_linear(
    *,
    co: Value,
    water_fixed: Value,
    hydrogen_fixed: Value,
    ratio: Value,
    carbon: Value,
    hydrogen_per_product: Value,
    measured: Value,
) -> Value:
    """Coefficient of D in the water-gas relation.

    Parameters
    ----------
    co
        Carbon monoxide as a fraction of the dry gas [1].
    water_fixed, hydrogen_fixed
        w_0 and h_0 [mol per kg or mol of fuel].
    ratio
        Water-gas constant K [1].
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].
    hydrogen_per_product
        h_D [1].
    measured
        Carbon of CO and hydrocarbon per mole of dry products [1].

    Returns
    -------
    float
        B [mol per kg or mol of fuel].
    """
    return co * water_fixed - ratio * carbon * hydrogen_per_product + ratio * measured * hydrogen_fixed


@equation(
    "D",
    AMOUNT,
    _units("linear", "carbon", "hydrogen_fixed", pure=("square", "ratio")),
    WATER_GAS,
    symbols=_S | {"square": "A", "linear": "B"},
    gives=DRY_PRODUCTS,
)
def rich_dry_products(*, square: Value, linear: Value, ratio: Value, carbon: Value, hydrogen_fixed: Value) -> Value:
    """Dry products where hydrogen is left: the smaller root of A D^2 + B D - K n_C h_0 = 0.

    Parameters
    ----------
    square, linear
        A [1] and B [mol per kg or mol of fuel].
    ratio
        Water-gas constant K [1].
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].
    hydrogen_fixed
        h_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    free = ratio * carbon * hydrogen_fixed
    return 2 * free / (linear + (linear**2 + 4 * square * free) ** 0.5)


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
