"""Amounts of every product from the element balances."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import NO_BASIS, Basis
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.combustion.balance import WET_PRODUCTS
from reporter.combustion.shares import one_moisture
from reporter.equation import Value, equation

#: Symbols of amounts and fractions.
SYMBOLS = {
    "carbon": "n_C",
    "hydrogen": "n_H",
    "oxygen": "n_O",
    "nitrogen": "n_N",
    "sulfur": "n_S",
    "water": "n_W",
    "inert": "n_I",
    "unburned": "n_C,u",
    "co2": "n_CO2",
    "co": "n_CO",
    "h2": "n_H2",
    "h2o": "n_H2O",
    "n2": "n_N2",
    "o2": "n_O2",
    "so2": "n_SO2",
    "no": "n_NO",
    "hydrocarbon": "n_HC",
    "carbon_atoms": "p",
    "hydrogen_atoms": "q",
    "air": "a",
    "air_oxygen": "x_O2",
    "air_nitrogen": "x_N2",
    "humidity": "w",
    "products": "D",
    "fraction": "y",
}


def amount_units(*amounts: str, pure: tuple[str, ...] = ()) -> dict[str, str]:
    """Units of an equation's arguments: amounts, and pure numbers."""
    return dict.fromkeys(amounts, AMOUNT) | dict.fromkeys(pure, "1")


def _no_basis_of_one(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    """An amount has no moisture basis; what it is made of must have one."""
    one_moisture(bases, values)
    return NO_BASIS


@equation("n", AMOUNT, amount_units("products", pure=("fraction",)), BALANCE, symbols=SYMBOLS, gives=_no_basis_of_one)
def amount_of(*, fraction: Value, products: Value) -> Value:
    """Amount of a measured gas.

    Parameters
    ----------
    fraction
        Its fraction of the flue gas [1, wet or dry].
    products
        Products on the same moisture basis [mol per kg or mol of fuel].

    Returns
    -------
    float
        n [mol per kg or mol of fuel].

    Raises
    ------
    BasisError
        In a ledger, where the two differ in moisture.
    """
    return fraction * products


@equation("n_C", AMOUNT, amount_units("carbon", "unburned"), BALANCE, symbols=SYMBOLS)
def burned_carbon(*, carbon: Value, unburned: Value) -> Value:
    """Carbon that leaves as gas.

    Parameters
    ----------
    carbon
        Carbon of the fuel [mol per kg or mol of fuel].
    unburned
        Carbon left in soot and ash [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_C less the unburned [mol per kg or mol of fuel].
    """
    return carbon - unburned


@equation(
    "n_CO2",
    AMOUNT,
    amount_units("carbon", "co", "hydrocarbon", pure=("carbon_atoms",)),
    BALANCE,
    symbols=SYMBOLS,
)
def carbon_dioxide(*, carbon: Value, co: Value, hydrocarbon: Value, carbon_atoms: Value) -> Value:
    """Carbon dioxide from the carbon balance.

    Parameters
    ----------
    carbon
        Carbon that leaves as gas [mol per kg or mol of fuel].
    co, hydrocarbon
        Amounts [mol per kg or mol of fuel].
    carbon_atoms
        p of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        n_CO2 [mol per kg or mol of fuel].
    """
    return carbon - co - carbon_atoms * hydrocarbon


@equation(
    "n_H2O",
    AMOUNT,
    amount_units("from_fuel", "air", "hydrocarbon", pure=("humidity", "hydrogen_atoms")),
    BALANCE,
    symbols=SYMBOLS | {"from_fuel": "n_H2O,0"},
)
def water_vapour(*, from_fuel: Value, air: Value, humidity: Value, hydrocarbon: Value, hydrogen_atoms: Value) -> Value:
    """Water from the hydrogen balance: of the fuel and of the air.

    Parameters
    ----------
    from_fuel
        Combustion water of the fuel [mol per kg or mol of fuel].
    air
        Dry air [mol per kg or mol of fuel].
    humidity
        Water in the air [mol per mol dry air].
    hydrocarbon
        Amount of the hydrocarbon [mol per kg or mol of fuel].
    hydrogen_atoms
        q of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        n_H2O [mol per kg or mol of fuel].
    """
    return from_fuel + humidity * air - hydrogen_atoms / 2 * hydrocarbon


@equation("n_N2", AMOUNT, amount_units("nitrogen", "air", "no", pure=("air_nitrogen",)), BALANCE, symbols=SYMBOLS)
def nitrogen_left(*, nitrogen: Value, air: Value, air_nitrogen: Value, no: Value) -> Value:
    """Nitrogen from the nitrogen balance, with the argon of the air.

    Parameters
    ----------
    nitrogen
        Nitrogen atoms of the fuel [mol per kg or mol of fuel].
    air
        Dry air [mol per kg or mol of fuel].
    air_nitrogen
        Mole fraction of dry air that is not oxygen [1].
    no
        Amount of NO [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_N2 [mol per kg or mol of fuel].
    """
    return nitrogen / 2 + air_nitrogen * air - no / 2


@equation(
    "n_O2",
    AMOUNT,
    amount_units(
        "air",
        "needed",
        "co",
        "no",
        "hydrocarbon",
        pure=("air_oxygen", "carbon_atoms", "hydrogen_atoms"),
    ),
    BALANCE,
    symbols=SYMBOLS | {"needed": "v"},
    difference=True,
)
def oxygen_left(
    *,
    air: Value,
    air_oxygen: Value,
    needed: Value,
    co: Value,
    no: Value,
    hydrocarbon: Value,
    carbon_atoms: Value,
    hydrogen_atoms: Value,
) -> Value:
    """Oxygen from the oxygen balance, where it was not measured.

    Parameters
    ----------
    air
        Dry air [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].
    needed
        Stoichiometric oxygen of what leaves as gas [mol per kg or mol of fuel].
    co, no, hydrocarbon
        Amounts [mol per kg or mol of fuel].
    carbon_atoms, hydrogen_atoms
        p and q of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        n_O2 [mol per kg or mol of fuel].
    """
    unburned = co / 2 + (carbon_atoms + hydrogen_atoms / 4) * hydrocarbon
    return air_oxygen * air - needed + unburned - no / 2


@equation(
    "T",
    AMOUNT,
    amount_units("dry", "water"),
    BALANCE,
    symbols=SYMBOLS | {"dry": "D", "water": "n_H2O"},
    gives=WET_PRODUCTS,
)
def wet_products(*, dry: Value, water: Value) -> Value:
    """Products with their water.

    Parameters
    ----------
    dry
        Dry products [mol per kg or mol of fuel].
    water
        Water [mol per kg or mol of fuel].

    Returns
    -------
    float
        T [mol per kg or mol of fuel].
    """
    return dry + water


@equation("n_SO2", AMOUNT, amount_units("sulfur"), BALANCE, symbols=SYMBOLS)
def sulfur_dioxide(*, sulfur: Value) -> Value:
    """Sulfur dioxide: all sulfur of the fuel leaves as SO2, none stays in the ash.

    Parameters
    ----------
    sulfur
        Sulfur of the fuel [mol per kg or mol of fuel].

    Returns
    -------
    float
        n_SO2 [mol per kg or mol of fuel].
    """
    return +sulfur
