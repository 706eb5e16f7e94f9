"""From percentages to amounts: equations that turn a fuel as given into moles per kg or per mole of it."""

from __future__ import annotations

from reporter.basis import EPA_STANDARD, Basis
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import dot, total

HEAT = ("Btu/lb", "kJ/kg")
_ATOMS = Citation("ciaaw", "", "amount = mass / molar mass")
_MIXTURE = Citation("balance", "", "mean by mole fraction")
_ISO = Citation("iso6976", "", "molar heat of condensation of water at 25 °C")
_UNIT = Citation("units")
_IDEAL = Citation("ideal", "", "68 °F and 29.92 inHg")


@equation("n", "mol/kg", {"percent": "%", "molar_mass": "g/mol"}, _ATOMS, symbols={"molar_mass": "M"})
def amount_by_weight(
    *,
    percent: Value,
    molar_mass: Value,
    grams: Value = constant(1000.0, "g/kg", "k", cite=_UNIT),
    hundred: Value = constant(100.0, "%"),
) -> Value:
    """Moles of an element, or of water, in one kg of fuel.

    Parameters
    ----------
    percent
        Percent by weight in the fuel as fired [%].
    molar_mass
        Atomic weight, or molar mass of water [g/mol].
    grams
        Grams in a kilogram [g/kg].
    hundred
        All of it [%].

    Returns
    -------
    float
        n [mol/kg].
    """
    return grams * percent / (hundred * molar_mass)


@equation("X_af", "*v", {"dry": "*v", "water": "%"}, Citation("practice", "", "basis of an analysis"))
def as_fired(*, dry: Value, water: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """A percentage, or a heating value, of dry fuel on the fuel as fired.

    Parameters
    ----------
    dry
        Value on a dry basis [any unit].
    water
        Water in the fuel as fired [% by weight].
    hundred
        All of it [%].

    Returns
    -------
    float
        Value as fired [unit of `dry`].
    """
    return dry * (hundred - water) / hundred


@equation(
    "X",
    "%",
    {"percent": "%", "water": "%", "share": "1"},
    Citation("ciaaw", "", "mass share of the element in water"),
    symbols={"share": "s_X"},
)
def without_water(*, percent: Value, water: Value, share: Value) -> Value:
    """Percent of hydrogen or oxygen in the fuel substance, where the figure includes that of the water.

    Parameters
    ----------
    percent
        Hydrogen or oxygen as reported [% by weight, as fired].
    water
        Water in the fuel as fired [% by weight].
    share
        Mass share of the element in water [1].

    Returns
    -------
    float
        Share without the water's [% by weight, as fired].
    """
    return percent - share * water


@equation("H_g", HEAT, {"heat": HEAT}, Citation("practice", "", "basis of an analysis"), symbols={"heat": "H"})
def heat_as_fired(*, heat: Value) -> Value:
    """The gross heating value as fired, where that is the one given.

    Parameters
    ----------
    heat
        Gross heating value as given [Btu/lb or kJ/kg, as fired].

    Returns
    -------
    float
        The same [Btu/lb or kJ/kg].
    """
    return +heat


@equation("x", "%", {"shares": "%"}, _MIXTURE, symbols={"shares": "x_k"}, series=("shares",))
def sum_of_shares(*, shares: Value) -> Value:
    """Sum of the mole percentages of a gas.

    Parameters
    ----------
    shares
        Mole percent of each component [%], a series.

    Returns
    -------
    float
        Their sum [%].
    """
    return total(shares)


@equation(
    "X",
    "*v",
    {"shares": "%", "values": "*v", "whole": "%"},
    _MIXTURE,
    symbols={"shares": "x_k", "values": "X_k", "whole": "x"},
    series=("shares", "values"),
)
def mole_mean(*, shares: Value, values: Value, whole: Value) -> Value:
    """Mean over the components of a gas, weighted by mole.

    Parameters
    ----------
    shares
        Mole percent of each component that contributes [%], a series.
    values
        What a mole of each component has: atoms, mass, heat [any unit], a series of the same length.
    whole
        Sum of all mole percentages of the gas [%].

    Returns
    -------
    float
        What a mole of the gas has [unit of `values`].
    """
    return dot(shares, values) / whole


@equation(
    "n",
    "mol/kg",
    {"amount": "mol/mol", "molar_mass": "g/mol"},
    _ATOMS,
    symbols={"amount": "n_mol", "molar_mass": "M_fuel"},
)
def amount_by_mass(
    *, amount: Value, molar_mass: Value, grams: Value = constant(1000.0, "g/kg", "k", cite=_UNIT)
) -> Value:
    """An amount per mole of a gas fuel as an amount per kg of it.

    Parameters
    ----------
    amount
        Moles per mole of fuel [mol/mol].
    molar_mass
        Molar mass of the fuel [g/mol].
    grams
        Grams in a kilogram [g/kg].

    Returns
    -------
    float
        Moles per kg of fuel [mol/kg].
    """
    return grams * amount / molar_mass


@equation(
    "H_g",
    HEAT,
    {"molar_heat": "kJ/mol", "molar_mass": "g/mol"},
    Citation("iso6976", "", "by mass, from the molar values of the components"),
    symbols={"molar_heat": "H_m", "molar_mass": "M_fuel"},
)
def heat_by_mass(
    *,
    molar_heat: Value,
    molar_mass: Value,
    scale: Value = constant(1000 / 2.326, ("Btu*g/lb/kJ", "g/kg"), "k", si=1000.0, cite=_UNIT),
) -> Value:
    """Heating value by weight of a gas from its molar heating value.

    Parameters
    ----------
    molar_heat
        Molar heating value [kJ/mol].
    molar_mass
        Molar mass of the gas [g/mol].
    scale
        Change of unit [Btu g/(lb kJ) or g/kg]; 1 Btu/lb is 2.326 kJ/kg.

    Returns
    -------
    float
        Heating value [Btu/lb or kJ/kg].
    """
    return scale * molar_heat / molar_mass


@equation(
    "H_v",
    ("Btu/ft3", "MJ/m3"),
    {"molar_heat": "kJ/mol"},
    _IDEAL,
    symbols={"molar_heat": "H_m"},
    gives=Basis(standard=EPA_STANDARD),
)
def heat_by_volume(
    *,
    molar_heat: Value,
    scale: Value = constant(1000 / 2.326, ("Btu*mol/lbmol/kJ", "MJ*L/m3/kJ"), "k", si=1.0, cite=_UNIT),
    molar_volume: Value = constant(385.33, ("ft3/lbmol", "L/mol"), "V_m", si=24.055, cite=_IDEAL),
) -> Value:
    """Heating value per volume of the ideal gas at 68 °F and 29.92 inHg.

    Parameters
    ----------
    molar_heat
        Molar heating value [kJ/mol].
    scale
        Change of unit [Btu mol/(lbmol kJ), or 1 for kJ/L to MJ/m3].
    molar_volume
        Volume of a mole [ft3/lbmol or L/mol].

    Returns
    -------
    float
        Heating value [Btu/ft3 or MJ/m3].
    """
    return scale * molar_heat / molar_volume


@equation(
    "H_n",
    HEAT,
    {"gross": HEAT, "water": "mol/kg"},
    _ISO,
    symbols={"gross": "H_g", "water": "n_H2O"},
)
def net_heating_value(
    *,
    gross: Value,
    water: Value,
    condensation: Value = constant(44.013 / 2.326, ("Btu*kg/lb/mol", "kJ/mol"), "h", si=44.013, cite=_ISO),
) -> Value:
    """Net (lower) heating value: the water of combustion and of the fuel stays vapour.

    Parameters
    ----------
    gross
        Gross heating value as fired [Btu/lb or kJ/kg].
    water
        Combustion water of one kg of fuel [mol/kg].
    condensation
        Molar heat of condensation of water at 25 °C [44.013 kJ/mol].

    Returns
    -------
    float
        Net heating value [Btu/lb or kJ/kg].
    """
    return gross - condensation * water
