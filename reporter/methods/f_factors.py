"""Method 19: F factors from an ultimate analysis (Eqs. 19-13 to 19-15) and of mixed fuels (19-16 to 19-18).

Weight percentages and gross calorific value are on one basis: dry with dry for F_d and F_c, as fired with as
fired for F_w.  The constants are the method's rounded ones, not better stoichiometric numbers.
"""

from __future__ import annotations

from reporter.basis import Moisture, Need
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import dot
from reporter.methods.method_19 import FC_BASIS, FD_BASIS, FW_BASIS

_FACTOR = ("ft3/MMBtu", "m3/J")
_PER_MASS = ("ft3/lb/%", "m3/kg")
_HEAT = ("Btu/lb", "kJ/kg")
_SCALE = ("Btu/MMBtu", "kJ/J/%")
_ANALYSIS = {
    "hydrogen": "%H",
    "carbon": "%C",
    "sulfur": "%S",
    "nitrogen": "%N",
    "oxygen": "%O",
    "water": "%H2O",
}


def _cite(section: str, number: str) -> Citation:
    return Citation("m19", section, number)


_K = _cite("12.3.2.1", "Eqs. 19-13 to 19-15")


@equation(
    "F_d",
    _FACTOR,
    {"hydrogen": "%", "carbon": "%", "sulfur": "%", "nitrogen": "%", "oxygen": "%", "gcv": _HEAT},
    _cite("12.3.2.1", "Eq. 19-13"),
    symbols=_ANALYSIS | {"gcv": "GCV"},
    gives=FD_BASIS,
)
def eq_19_13(
    *,
    hydrogen: Value,
    carbon: Value,
    sulfur: Value,
    nitrogen: Value,
    oxygen: Value,
    gcv: Value,
    k: Value = constant(1e6, _SCALE, "K", si=1e-5, cite=_K),
    k_hd: Value = constant(3.64, _PER_MASS, "K_hd", si=22.7, cite=_K),
    k_c: Value = constant(1.53, _PER_MASS, "K_c", si=9.57, cite=_K),
    k_s: Value = constant(0.57, _PER_MASS, "K_s", si=3.54, cite=_K),
    k_n: Value = constant(0.14, _PER_MASS, "K_n", si=0.86, cite=_K),
    k_o: Value = constant(0.46, _PER_MASS, "K_o", si=2.85, cite=_K),
) -> Value:
    """Dry F factor from an ultimate analysis.

    Parameters
    ----------
    hydrogen, carbon, sulfur, nitrogen, oxygen
        Weight percentages [%; on the basis of `gcv`].
    gcv
        Gross calorific value [Btu/lb or kJ/kg].
    k, k_hd, k_c, k_s, k_n, k_o
        Printed constants.

    Returns
    -------
    float
        F_d [ft3/MMBtu or m3/J; dry, 68 °F and 29.92 inHg].
    """
    return k * (k_hd * hydrogen + k_c * carbon + k_s * sulfur + k_n * nitrogen - k_o * oxygen) / gcv


@equation(
    "F_w",
    _FACTOR,
    {
        "hydrogen": "%",
        "carbon": "%",
        "sulfur": "%",
        "nitrogen": "%",
        "oxygen": "%",
        "water": "%",
        "gcv": _HEAT,
    },
    _cite("12.3.2.1", "Eq. 19-14"),
    symbols=_ANALYSIS | {"gcv": "GCV_w"},
    gives=FW_BASIS,
)
def eq_19_14(
    *,
    hydrogen: Value,
    carbon: Value,
    sulfur: Value,
    nitrogen: Value,
    oxygen: Value,
    water: Value,
    gcv: Value,
    k: Value = constant(1e6, _SCALE, "K", si=1e-5, cite=_K),
    k_hw: Value = constant(5.57, _PER_MASS, "K_hw", si=34.74, cite=_K),
    k_c: Value = constant(1.53, _PER_MASS, "K_c", si=9.57, cite=_K),
    k_s: Value = constant(0.57, _PER_MASS, "K_s", si=3.54, cite=_K),
    k_n: Value = constant(0.14, _PER_MASS, "K_n", si=0.86, cite=_K),
    k_o: Value = constant(0.46, _PER_MASS, "K_o", si=2.85, cite=_K),
    k_w: Value = constant(0.21, _PER_MASS, "K_w", si=1.30, cite=_K),
) -> Value:
    """Wet F factor from an ultimate analysis.

    Parameters
    ----------
    hydrogen, carbon, sulfur, nitrogen, oxygen
        Weight percentages [%; as fired], without the hydrogen and oxygen of the water.
    water
        Water of the fuel [% by weight; as fired]; 0 where hydrogen and oxygen include the water's.
    gcv
        Gross calorific value [Btu/lb or kJ/kg; as fired].
    k, k_hw, k_c, k_s, k_n, k_o, k_w
        Printed constants.

    Returns
    -------
    float
        F_w [ft3/MMBtu or m3/J; wet, 68 °F and 29.92 inHg].
    """
    gas = k_hw * hydrogen + k_c * carbon + k_s * sulfur + k_n * nitrogen - k_o * oxygen + k_w * water
    return k * gas / gcv


@equation(
    "F_c",
    _FACTOR,
    {"carbon": "%", "gcv": _HEAT},
    _cite("12.3.2.1", "Eq. 19-15"),
    symbols=_ANALYSIS | {"gcv": "GCV"},
    gives=FC_BASIS,
)
def eq_19_15(
    *,
    carbon: Value,
    gcv: Value,
    k: Value = constant(1e6, _SCALE, "K", si=1e-5, cite=_K),
    k_cc: Value = constant(0.321, _PER_MASS, "K_cc", si=2.0, cite=_K),
) -> Value:
    """Carbon dioxide F factor from an ultimate analysis.

    Parameters
    ----------
    carbon
        Weight percentage of carbon [%; on the basis of `gcv`].
    gcv
        Gross calorific value [Btu/lb or kJ/kg].
    k, k_cc
        Printed constants.

    Returns
    -------
    float
        F_c [ft3/MMBtu or m3/J; 68 °F and 29.92 inHg].
    """
    return k * (k_cc * carbon) / gcv


@equation(
    "F_d",
    _FACTOR,
    {"shares": "1", "factors": _FACTOR},
    _cite("12.3.3", "Eq. 19-16"),
    symbols={"shares": "X_k", "factors": "F_dk"},
    needs={"factors": Need(moisture=Moisture.DRY)},
    gives="factors",
    series=("shares", "factors"),
)
def eq_19_16(*, shares: Value, factors: Value) -> Value:
    """Dry F factor of mixed fuels.

    Parameters
    ----------
    shares
        Share of each fuel in the heat input as a fraction [1], a series that sums to 1.
    factors
        Dry F factor of each fuel [ft3/MMBtu or m3/J], a series.

    Returns
    -------
    float
        F_d of the mixture [same unit].
    """
    return dot(shares, factors)


@equation(
    "F_w",
    _FACTOR,
    {"shares": "1", "factors": _FACTOR},
    _cite("12.3.3", "Eq. 19-17"),
    symbols={"shares": "X_k", "factors": "F_wk"},
    needs={"factors": Need(moisture=Moisture.WET)},
    gives="factors",
    series=("shares", "factors"),
)
def eq_19_17(*, shares: Value, factors: Value) -> Value:
    """Wet F factor of mixed fuels.

    Parameters
    ----------
    shares
        Share of each fuel in the heat input as a fraction [1], a series that sums to 1.
    factors
        Wet F factor of each fuel [ft3/MMBtu or m3/J], a series.

    Returns
    -------
    float
        F_w of the mixture [same unit].
    """
    return dot(shares, factors)


@equation(
    "F_c",
    _FACTOR,
    {"shares": "1", "factors": _FACTOR},
    _cite("12.3.3", "Eq. 19-18"),
    symbols={"shares": "X_k", "factors": "F_ck"},
    needs={"factors": Need(moisture=Moisture.NONE)},
    gives="factors",
    series=("shares", "factors"),
)
def eq_19_18(*, shares: Value, factors: Value) -> Value:
    """Carbon dioxide F factor of mixed fuels.

    Parameters
    ----------
    shares
        Share of each fuel in the heat input as a fraction [1], a series that sums to 1.
    factors
        Carbon dioxide F factor of each fuel [ft3/MMBtu or m3/J], a series.

    Returns
    -------
    float
        F_c of the mixture [same unit].
    """
    return dot(shares, factors)
