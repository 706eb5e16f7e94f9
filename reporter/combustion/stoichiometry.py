"""Air need and products of complete combustion without excess air."""

from __future__ import annotations

from reporter.basis import AS_MEASURED, Basis, Moisture
from reporter.combustion.air import AMOUNT, BALANCE
from reporter.equation import Citation, Value, constant, equation

_UNIT = Citation("units")
_FUEL = {"carbon": "n_C", "hydrogen": "n_H", "oxygen": "n_O", "nitrogen": "n_N", "sulfur": "n_S"}


@equation(
    "v",
    AMOUNT,
    {"carbon": AMOUNT, "hydrogen": AMOUNT, "sulfur": AMOUNT, "oxygen": AMOUNT},
    BALANCE,
    symbols=_FUEL,
)
def stoichiometric_oxygen(*, carbon: Value, hydrogen: Value, sulfur: Value, oxygen: Value) -> Value:
    """Oxygen for complete combustion to CO2, H2O and SO2.

    Parameters
    ----------
    carbon, hydrogen, sulfur, oxygen
        Atoms of the fuel without its moisture [mol of atoms per kg or per mol of fuel].

    Returns
    -------
    float
        v [mol O2 per kg or per mol of fuel].
    """
    return carbon + hydrogen / 4 + sulfur - oxygen / 2


@equation(
    "A_st",
    AMOUNT,
    {"oxygen_needed": AMOUNT, "air_oxygen": "1"},
    BALANCE,
    symbols={"oxygen_needed": "v", "air_oxygen": "x_O2"},
)
def stoichiometric_air(*, oxygen_needed: Value, air_oxygen: Value) -> Value:
    """Dry air for complete combustion, by mole.

    Parameters
    ----------
    oxygen_needed
        Stoichiometric oxygen [mol per kg or mol of fuel].
    air_oxygen
        Mole fraction of oxygen in dry air [1].

    Returns
    -------
    float
        A_st [mol dry air per kg or per mol of fuel].
    """
    return oxygen_needed / air_oxygen


@equation("A_w", AMOUNT, {"air": AMOUNT, "humidity": "1"}, BALANCE, symbols={"air": "A", "humidity": "w"})
def humid_air(*, air: Value, humidity: Value) -> Value:
    """Humid air that brings an amount of dry air.

    Parameters
    ----------
    air
        Dry air [mol per kg or mol of fuel].
    humidity
        Water in the air [mol per mol dry air].

    Returns
    -------
    float
        Humid air [mol per kg or mol of fuel].
    """
    return air * (1 + humidity)


@equation(
    "AF",
    "1",
    {"air": "mol/kg", "air_mass": "g/mol"},
    BALANCE,
    symbols={"air": "A", "air_mass": "M_air"},
)
def air_by_mass(*, air: Value, air_mass: Value, grams: Value = constant(1000.0, "g/kg", "k", cite=_UNIT)) -> Value:
    """Air-fuel ratio by mass of a fuel given by weight.

    Parameters
    ----------
    air
        Dry air [mol per kg of fuel].
    air_mass
        Molar mass of dry air [g/mol].
    grams
        Grams in a kilogram [g/kg].

    Returns
    -------
    float
        AF [kg dry air per kg of fuel].
    """
    return air * air_mass / grams


@equation(
    "AF",
    "1",
    {"air": "mol/mol", "air_mass": "g/mol", "fuel_mass": "g/mol"},
    BALANCE,
    symbols={"air": "A", "air_mass": "M_air", "fuel_mass": "M_fuel"},
)
def air_by_mass_of_gas(*, air: Value, air_mass: Value, fuel_mass: Value) -> Value:
    """Air-fuel ratio by mass of a gas fuel.

    Parameters
    ----------
    air
        Dry air [mol per mol of fuel].
    air_mass, fuel_mass
        Molar mass of dry air and of the fuel [g/mol].

    Returns
    -------
    float
        AF [kg dry air per kg of fuel].
    """
    return air * air_mass / fuel_mass


@equation(
    "n_H2O,0",
    AMOUNT,
    {"hydrogen": AMOUNT, "water": AMOUNT},
    BALANCE,
    symbols=_FUEL | {"water": "n_W"},
)
def combustion_water(*, hydrogen: Value, water: Value) -> Value:
    """Water from the fuel: of its hydrogen, and its moisture.

    Parameters
    ----------
    hydrogen
        Hydrogen atoms of the fuel without its moisture [mol per kg or mol of fuel].
    water
        Moisture of the fuel [mol per kg or mol of fuel].

    Returns
    -------
    float
        Combustion water [mol per kg or mol of fuel].
    """
    return hydrogen / 2 + water


@equation(
    "D_f",
    AMOUNT,
    {"carbon": AMOUNT, "sulfur": AMOUNT, "nitrogen": AMOUNT, "inert": AMOUNT},
    BALANCE,
    symbols=_FUEL | {"inert": "n_I"},
)
def fuel_products(*, carbon: Value, sulfur: Value, nitrogen: Value, inert: Value) -> Value:
    """Dry products that come from the fuel itself: CO2, SO2, its nitrogen and its inert gas.

    Parameters
    ----------
    carbon, sulfur, nitrogen
        Atoms of the fuel [mol per kg or mol of fuel].
    inert
        Argon and helium of the fuel [mol per kg or mol of fuel].

    Returns
    -------
    float
        Dry products of the fuel [mol per kg or mol of fuel].
    """
    return carbon + sulfur + nitrogen / 2 + inert


@equation(
    "D_0",
    AMOUNT,
    {"from_fuel": AMOUNT, "air": AMOUNT, "air_nitrogen": "1"},
    BALANCE,
    symbols={"from_fuel": "D_f", "air": "A_st", "air_nitrogen": "x_N2"},
)
def stoichiometric_dry_products(*, from_fuel: Value, air: Value, air_nitrogen: Value) -> Value:
    """Dry products of complete combustion without excess air.

    Parameters
    ----------
    from_fuel
        Dry products of the fuel itself [mol per kg or mol of fuel].
    air
        Stoichiometric dry air [mol per kg or mol of fuel].
    air_nitrogen
        Mole fraction of dry air that is not oxygen [1].

    Returns
    -------
    float
        D_0 [mol per kg or mol of fuel].
    """
    return from_fuel + air_nitrogen * air


@equation(
    "CO2_max",
    "%",
    {"carbon": AMOUNT, "dry_products": AMOUNT},
    BALANCE,
    symbols=_FUEL | {"dry_products": "D_0"},
    gives=Basis(moisture=Moisture.DRY, oxygen=AS_MEASURED),
)
def co2_max(*, carbon: Value, dry_products: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Highest dry carbon dioxide: complete combustion without excess air.

    Parameters
    ----------
    carbon
        Carbon of the fuel [mol per kg or mol of fuel].
    dry_products
        Stoichiometric dry products [mol per kg or mol of fuel].
    hundred
        All of it [%].

    Returns
    -------
    float
        CO2_max [%, dry].
    """
    return hundred * carbon / dry_products


@equation(
    "F_o",
    "1",
    {"dry_products": AMOUNT, "carbon": AMOUNT, "air_oxygen": "1"},
    Citation("m3b", "12.3", "Eq. 3B-2 without excess air"),
    symbols=_FUEL | {"dry_products": "D_0", "air_oxygen": "x_O2"},
)
def fuel_factor_of_composition(*, dry_products: Value, carbon: Value, air_oxygen: Value) -> Value:
    """Fuel factor of complete combustion.

    Parameters
    ----------
    dry_products
        Stoichiometric dry products [mol per kg or mol of fuel].
    carbon
        Carbon of the fuel [mol per kg or mol of fuel], not zero.
    air_oxygen
        Mole fraction of oxygen in dry air [1].

    Returns
    -------
    float
        F_o [1].
    """
    return air_oxygen * dry_products / carbon
