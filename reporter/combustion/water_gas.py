"""The water-gas relation n_CO n_H2O / (n_CO2 n_H2) = K as a quadratic in the dry products.

Of its two roots the smaller is the physical one: the other has negative carbon dioxide or hydrogen.
"""

from __future__ import annotations

from reporter.basis import Moisture, Need
from reporter.combustion.air import AMOUNT
from reporter.combustion.balance import DRY_PRODUCTS
from reporter.equation import Citation, Value, equation

WATER_GAS = Citation("cfr1065", "1065.655", "water-gas reaction equilibrium coefficient")
#: Printed in 40 CFR 1065.655; other sources use 3.8.
WATER_GAS_CONSTANT = 3.5
_DRY = Need(moisture=Moisture.DRY)
_S = {
    "measured": "g_C",
    "carbon": "n_C",
    "co": "y_CO",
    "ratio": "K",
    "hydrogen_per_product": "h_D",
    "hydrogen_fixed": "h_0",
    "water_per_product": "w_D",
    "water_fixed": "w_0",
}


def _units(*amounts: str, pure: tuple[str, ...] = ()) -> dict[str, str]:
    return dict.fromkeys(amounts, AMOUNT) | dict.fromkeys(pure, "1")


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
