"""The balances of a burned fuel as two linear equations in dry air and dry products, solved by Cramer's rule.

With a mol of dry air and D mol of dry products per kg or per mole of fuel, and O2 measured::

    p_a a - p_D D = p_0        oxygen
    q_D D - q_a a = q_0        sum of the dry products

All readings dry: p_a is the oxygen fraction of air, p_D the net oxygen, p_0 the stoichiometric oxygen, q_a
the rest of air, q_D one less the added moles, q_0 the dry products of the fuel itself.  Readings on wet gas
stand on the wet products T = t_D D + t_a a + t_0 (`reporter.combustion.wet`): both equations stay linear.

With CO2 measured in place of O2::

    c_D D + c_a a = c_0        carbon; c_a is zero where all readings are dry
    q_D D - q_a a = q_0        sum of the dry products less the oxygen balance
"""

from __future__ import annotations

from reporter.basis import Basis, Moisture, Need
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.equation import Value, equation

_DRY = Need(moisture=Moisture.DRY)
#: Basis of an amount of flue gas: its moisture says which readings stand on it.
DRY_PRODUCTS = Basis(moisture=Moisture.DRY)
WET_PRODUCTS = Basis(moisture=Moisture.WET)


@equation(
    "Δ",
    "1",
    {"per_air": "1", "per_product": "1", "sum_per_air": "1", "sum_per_product": "1"},
    BALANCE,
    symbols={"per_air": "p_a", "per_product": "p_D", "sum_per_air": "q_a", "sum_per_product": "q_D"},
    difference=True,
)
def determinant(*, per_air: Value, per_product: Value, sum_per_air: Value, sum_per_product: Value) -> Value:
    """Determinant of the two balances; for readings on dry gas, the oxygen taken from air by combustion.

    Parameters
    ----------
    per_air, per_product
        Coefficients p_a, p_D of the first balance [1].
    sum_per_air, sum_per_product
        Coefficients q_a, q_D of the second balance [1].

    Returns
    -------
    float
        Δ [1]; zero or less where the oxygen measured is that of air or more.
    """
    return per_air * sum_per_product - per_product * sum_per_air


@equation(
    "a",
    AMOUNT,
    {
        "fixed": AMOUNT,
        "sum_per_product": "1",
        "per_product": "1",
        "sum_fixed": AMOUNT,
        "denominator": "1",
    },
    BALANCE,
    symbols={
        "fixed": "p_0",
        "sum_per_product": "q_D",
        "per_product": "p_D",
        "sum_fixed": "q_0",
        "denominator": "Δ",
    },
)
def dry_air(
    *,
    fixed: Value,
    sum_fixed: Value,
    per_product: Value,
    sum_per_product: Value,
    denominator: Value,
) -> Value:
    """Dry air burned, from the two balances.

    Parameters
    ----------
    fixed, sum_fixed
        Right-hand sides p_0, q_0 [mol per kg or mol of fuel].
    per_product, sum_per_product
        Coefficients p_D, q_D [1].
    denominator
        Their determinant [1], not zero.

    Returns
    -------
    float
        a [mol dry air per kg or per mol of fuel].
    """
    return (fixed * sum_per_product + per_product * sum_fixed) / denominator


@equation(
    "D",
    AMOUNT,
    {"per_air": "1", "sum_fixed": AMOUNT, "sum_per_air": "1", "fixed": AMOUNT, "denominator": "1"},
    BALANCE,
    symbols={
        "per_air": "p_a",
        "sum_fixed": "q_0",
        "sum_per_air": "q_a",
        "fixed": "p_0",
        "denominator": "Δ",
    },
    gives=DRY_PRODUCTS,
)
def dry_products(
    *,
    per_air: Value,
    sum_per_air: Value,
    fixed: Value,
    sum_fixed: Value,
    denominator: Value,
) -> Value:
    """Dry products, from the two balances.

    Parameters
    ----------
    per_air, sum_per_air
        Coefficients p_a, q_a [1].
    fixed, sum_fixed
        Right-hand sides p_0, q_0 [mol per kg or mol of fuel].
    denominator
        Their determinant [1], not zero.

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    return (per_air * sum_fixed + sum_per_air * fixed) / denominator


@equation(
    "q_D",
    "1",
    {"added": "1"},
    BALANCE,
    symbols={"added": "g"},
    needs={"added": _DRY},
)
def rest_of_products(*, added: Value) -> Value:
    """Share of the dry products that is not added by the measured gases (readings on dry gas).

    Parameters
    ----------
    added
        Added or unburned moles per mole of dry products [1].

    Returns
    -------
    float
        q_D [1].
    """
    return 1 - added


@equation(
    "q_0",
    AMOUNT,
    {"from_fuel": AMOUNT, "oxygen_needed": AMOUNT},
    BALANCE,
    symbols={"from_fuel": "D_f", "oxygen_needed": "v"},
    difference=True,
)
def products_less_oxygen(*, from_fuel: Value, oxygen_needed: Value) -> Value:
    """Right-hand side of the second balance where CO2 is measured: dry products of the fuel less its oxygen.

    Parameters
    ----------
    from_fuel
        Dry products of the fuel itself [mol per kg or mol of fuel].
    oxygen_needed
        Stoichiometric oxygen [mol per kg or mol of fuel].

    Returns
    -------
    float
        q_0 [mol per kg or mol of fuel].
    """
    return from_fuel - oxygen_needed


@equation(
    "D",
    AMOUNT,
    {"carbon": AMOUNT, "measured": "1"},
    BALANCE,
    symbols={"carbon": "n_C", "measured": "g_C"},
    needs={"measured": _DRY},
    gives=DRY_PRODUCTS,
)
def dry_products_from_carbon(*, carbon: Value, measured: Value) -> Value:
    """Dry products from the carbon balance, where CO2 is measured (readings on dry gas).

    Parameters
    ----------
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].
    measured
        Carbon in the measured gases [mol per mol of dry products], not zero.

    Returns
    -------
    float
        D [mol of dry products per kg or per mol of fuel].
    """
    return carbon / measured


@equation(
    "a",
    AMOUNT,
    {"products": AMOUNT, "sum_per_product": "1", "sum_fixed": AMOUNT},
    BALANCE,
    symbols={"products": "D", "sum_per_product": "q_D", "sum_fixed": "q_0"},
)
def dry_air_from_products(*, products: Value, sum_per_product: Value, sum_fixed: Value) -> Value:
    """Dry air from the dry products, where CO2 is measured (readings on dry gas).

    Parameters
    ----------
    products
        Dry products [mol per kg or mol of fuel].
    sum_per_product
        Coefficient q_D [1].
    sum_fixed
        Right-hand side q_0 [mol per kg or mol of fuel].

    Returns
    -------
    float
        a [mol dry air per kg or per mol of fuel].
    """
    return sum_per_product * products - sum_fixed
