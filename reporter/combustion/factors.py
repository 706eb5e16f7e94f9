"""F factors from the composition of a fuel: products of complete combustion per gross heating value.

They take the place of Eqs. 19-13 to 19-15 where a composition by mole is known.  Unlike those they carry no
rounded constants, so a fuel computed both ways differs by up to about one percent.
"""

from __future__ import annotations

from reporter.combustion.composition import HEAT
from reporter.equation import Citation, Value, constant, equation
from reporter.methods.method_19 import FC_BASIS, FD_BASIS, FW_BASIS

_FACTOR = ("ft3/MMBtu", "m3/J")
_COMPOSED = Citation("m19", "12.3.2", "by composition")
_UNIT = Citation("units")
_AMOUNT_SCALE = ("mol*lb/kg/lbmol", "L/m3")
_HEAT_SCALE = ("Btu/MMBtu", "kJ/J")
_VOLUME = ("ft3/lbmol", "L/mol")
_V_CITE = Citation("ideal", "", "68 °F and 29.92 inHg")


@equation(
    "F_d",
    _FACTOR,
    {"dry_products": "mol/kg", "heat": HEAT},
    _COMPOSED,
    symbols={"dry_products": "D_0", "heat": "H_g"},
    gives=FD_BASIS,
)
def fd_of_composition(
    *,
    dry_products: Value,
    heat: Value,
    per_heat: Value = constant(1e6, _HEAT_SCALE, "K", si=1e-3, cite=_UNIT),
    per_amount: Value = constant(1000.0, _AMOUNT_SCALE, "k", cite=_UNIT),
    molar_volume: Value = constant(385.33, _VOLUME, "V_m", si=24.055, cite=_V_CITE),
) -> Value:
    """Dry F factor from the composition: dry products without excess air per gross heat.

    Parameters
    ----------
    dry_products
        Stoichiometric dry products with air of 20.9 % oxygen [mol/kg].
    heat
        Gross heating value of the same fuel as fired [Btu/lb or kJ/kg].
    per_heat, per_amount
        Changes of unit.
    molar_volume
        Volume of a mole at 68 °F and 29.92 inHg [ft3/lbmol or L/mol].

    Returns
    -------
    float
        F_d [ft3/MMBtu or m3/J; dry, 68 °F and 29.92 inHg].
    """
    return per_heat * molar_volume * dry_products / (per_amount * heat)


@equation(
    "F_w",
    _FACTOR,
    {"dry_products": "mol/kg", "water": "mol/kg", "heat": HEAT},
    _COMPOSED,
    symbols={"dry_products": "D_0", "water": "n_H2O,0", "heat": "H_g"},
    gives=FW_BASIS,
)
def fw_of_composition(
    *,
    dry_products: Value,
    water: Value,
    heat: Value,
    per_heat: Value = constant(1e6, _HEAT_SCALE, "K", si=1e-3, cite=_UNIT),
    per_amount: Value = constant(1000.0, _AMOUNT_SCALE, "k", cite=_UNIT),
    molar_volume: Value = constant(385.33, _VOLUME, "V_m", si=24.055, cite=_V_CITE),
) -> Value:
    """Wet F factor from the composition: products with the combustion water, dry air, per gross heat.

    Parameters
    ----------
    dry_products
        Stoichiometric dry products with air of 20.9 % oxygen [mol/kg].
    water
        Combustion water [mol/kg].
    heat
        Gross heating value of the same fuel as fired [Btu/lb or kJ/kg].
    per_heat, per_amount
        Changes of unit.
    molar_volume
        Volume of a mole at 68 °F and 29.92 inHg [ft3/lbmol or L/mol].

    Returns
    -------
    float
        F_w [ft3/MMBtu or m3/J; wet, 68 °F and 29.92 inHg].
    """
    return per_heat * molar_volume * (dry_products + water) / (per_amount * heat)


@equation(
    "F_c",
    _FACTOR,
    {"carbon": "mol/kg", "heat": HEAT},
    _COMPOSED,
    symbols={"carbon": "n_C", "heat": "H_g"},
    gives=FC_BASIS,
)
def fc_of_composition(
    *,
    carbon: Value,
    heat: Value,
    per_heat: Value = constant(1e6, _HEAT_SCALE, "K", si=1e-3, cite=_UNIT),
    per_amount: Value = constant(1000.0, _AMOUNT_SCALE, "k", cite=_UNIT),
    molar_volume: Value = constant(385.33, _VOLUME, "V_m", si=24.055, cite=_V_CITE),
) -> Value:
    """Carbon dioxide F factor from the composition: carbon dioxide per gross heat.

    Parameters
    ----------
    carbon
        Carbon of the fuel [mol/kg].
    heat
        Gross heating value of the same fuel as fired [Btu/lb or kJ/kg].
    per_heat, per_amount
        Changes of unit.
    molar_volume
        Volume of a mole at 68 °F and 29.92 inHg [ft3/lbmol or L/mol].

    Returns
    -------
    float
        F_c [ft3/MMBtu or m3/J; 68 °F and 29.92 inHg].
    """
    return per_heat * molar_volume * carbon / (per_amount * heat)
