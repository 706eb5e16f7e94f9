"""Readings on wet gas: the wet products T = t_D D + t_a a + t_0, and the coefficients of the balances."""

from __future__ import annotations

from reporter.basis import Moisture, Need
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.combustion.balance import DRY_PRODUCTS, WET_PRODUCTS
from reporter.equation import Value, equation

_DRY = Need(moisture=Moisture.DRY)
_WET = Need(moisture=Moisture.WET)


@equation(
    "t_D",
    "1",
    {"dry_hydrocarbon": "1", "wet_hydrocarbon": "1", "hydrogen_atoms": "1"},
    BALANCE,
    symbols={"dry_hydrocarbon": "y_HC,d", "wet_hydrocarbon": "y_HC,w", "hydrogen_atoms": "q"},
    needs={"dry_hydrocarbon": _DRY, "wet_hydrocarbon": _WET},
)
def wet_per_dry(*, dry_hydrocarbon: Value, wet_hydrocarbon: Value, hydrogen_atoms: Value) -> Value:
    """Wet products per mole of dry products.

    Parameters
    ----------
    dry_hydrocarbon, wet_hydrocarbon
        Hydrocarbon as a fraction of the dry or of the wet gas [1], the other one zero.
    hydrogen_atoms
        q of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        t_D [1].
    """
    return (1 - hydrogen_atoms / 2 * dry_hydrocarbon) / (1 + hydrogen_atoms / 2 * wet_hydrocarbon)


@equation(
    "t",
    "*t",
    {"water": "*t", "wet_hydrocarbon": "1", "hydrogen_atoms": "1"},
    BALANCE,
    symbols={"water": "w", "wet_hydrocarbon": "y_HC,w", "hydrogen_atoms": "q"},
    needs={"wet_hydrocarbon": _WET},
)
def wet_from_water(*, water: Value, wet_hydrocarbon: Value, hydrogen_atoms: Value) -> Value:
    """Wet products by the water of the air (t_a) or of the fuel (t_0).

    Parameters
    ----------
    water
        Humidity of the air [mol per mol dry air], or combustion water [mol per kg or mol of fuel].
    wet_hydrocarbon
        Hydrocarbon as a fraction of the wet gas [1].
    hydrogen_atoms
        q of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        t_a [1] or t_0 [mol per kg or mol of fuel].
    """
    return water / (1 + hydrogen_atoms / 2 * wet_hydrocarbon)


@equation(
    "c",
    "*t",
    {"on_dry": "*t", "on_wet": "1", "wet_products": "*t"},
    BALANCE,
    symbols={"on_dry": "c_d", "on_wet": "g_w", "wet_products": "t"},
    needs={"on_wet": _WET},
)
def raised_by_wet(*, on_dry: Value, on_wet: Value, wet_products: Value) -> Value:
    """A coefficient with what readings on wet gas add to it (p_D, p_0, q_a, q_0; c_D, c_a).

    Parameters
    ----------
    on_dry
        The coefficient for the readings on dry gas [any unit].
    on_wet
        Sum of the readings on wet gas [1].
    wet_products
        t_D, t_a or t_0 [unit of `on_dry`].

    Returns
    -------
    float
        The coefficient [unit of `on_dry`].
    """
    return on_dry + on_wet * wet_products


@equation(
    "c",
    "*t",
    {"on_dry": "*t", "on_wet": "1", "wet_products": "*t"},
    BALANCE,
    symbols={"on_dry": "c_d", "on_wet": "g_w", "wet_products": "t"},
    needs={"on_wet": _WET},
)
def lowered_by_wet(*, on_dry: Value, on_wet: Value, wet_products: Value) -> Value:
    """A coefficient less what readings on wet gas take from it (p_a, q_D; c_0).

    Parameters
    ----------
    on_dry
        The coefficient for the readings on dry gas [any unit].
    on_wet
        Sum of the readings on wet gas [1].
    wet_products
        t_D, t_a or t_0 [unit of `on_dry`].

    Returns
    -------
    float
        The coefficient [unit of `on_dry`].
    """
    return on_dry - on_wet * wet_products


_CARBON = {
    "fixed": "c_0",
    "per_air": "c_a",
    "per_product": "c_D",
    "sum_fixed": "q_0",
    "sum_per_air": "q_a",
    "sum_per_product": "q_D",
}


@equation(
    "D",
    AMOUNT,
    {name: AMOUNT if name.endswith("fixed") else "1" for name in _CARBON},
    BALANCE,
    symbols=_CARBON,
    gives=DRY_PRODUCTS,
)
def dry_products_from_wet_carbon(
    *,
    fixed: Value,
    per_air: Value,
    per_product: Value,
    sum_fixed: Value,
    sum_per_air: Value,
    sum_per_product: Value,
) -> Value:
    """Dry products from the carbon balance, where CO2 or another reading is on wet gas.

    Parameters
    ----------
    fixed, per_air, per_product
        Coefficients c_0 [mol per kg or mol of fuel], c_a, c_D [1] of the carbon balance.
    sum_fixed, sum_per_air, sum_per_product
        Coefficients q_0 [mol per kg or mol of fuel], q_a, q_D [1] of the second balance.

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    return (fixed * sum_per_air + per_air * sum_fixed) / (per_product * sum_per_air + per_air * sum_per_product)


@equation(
    "a",
    AMOUNT,
    {"products": AMOUNT, "sum_per_product": "1", "sum_fixed": AMOUNT, "sum_per_air": "1"},
    BALANCE,
    symbols=_CARBON | {"products": "D"},
)
def dry_air_from_wet_products(
    *,
    products: Value,
    sum_per_product: Value,
    sum_per_air: Value,
    sum_fixed: Value,
) -> Value:
    """Dry air from the dry products, where CO2 is measured and a reading is on wet gas.

    Parameters
    ----------
    products
        Dry products [mol per kg or mol of fuel].
    sum_per_product, sum_per_air
        Coefficients q_D, q_a [1].
    sum_fixed
        Right-hand side q_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        a [mol dry air per kg or per mol of fuel].
    """
    return (sum_per_product * products - sum_fixed) / sum_per_air


@equation(
    "T",
    AMOUNT,
    {"wet_per_dry": "1", "products": AMOUNT, "wet_per_air": "1", "air": AMOUNT, "fixed": AMOUNT},
    BALANCE,
    symbols={
        "wet_per_dry": "t_D",
        "products": "D",
        "wet_per_air": "t_a",
        "air": "a",
        "fixed": "t_0",
    },
    gives=WET_PRODUCTS,
)
def wet_products_of(
    *,
    wet_per_dry: Value,
    wet_per_air: Value,
    products: Value,
    air: Value,
    fixed: Value,
) -> Value:
    """Wet products from the dry products and the air.

    Parameters
    ----------
    wet_per_dry, wet_per_air
        t_D and t_a [1].
    products, air
        Dry products and dry air [mol per kg or mol of fuel].
    fixed
        t_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        T [mol of wet products per kg or per mol of fuel].
    """
    return wet_per_dry * products + wet_per_air * air + fixed
