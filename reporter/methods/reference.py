"""Correction of a concentration to a reference oxygen or carbon dioxide, and how far an error of oxygen goes.

The percent oxygen of dry air k is the limit's own (20.9 or 21) here; Method 19 keeps 20.9 whatever it is.
A wet oxygen is made dry first (`method_7e.dry_from_wet`).  At or above k the correction has no meaning:
`reference_refusal` says so, and the caller asks it before the equation.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import NEED_DRY, Basis, Oxygen, OxygenKind
from reporter.equation import Citation, Value, constant, equation


def _corrected_o2(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    return bases["c"].but(oxygen=Oxygen(OxygenKind.CORRECTED, float(values["reference"]), float(values["k"]), "O2"))


def _corrected_co2(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    return bases["c"].but(oxygen=Oxygen(OxygenKind.CORRECTED, float(values["reference"]), None, "CO2"))


@equation(
    "C_ref",
    "*c",
    {"c": "*c", "o2": "%", "reference": "%", "k": "%"},
    Citation("reference_oxygen", "", "(k − ref)/(k − O2)"),
    symbols={"c": "C", "o2": "%O2", "reference": "%O2_ref", "k": "k"},
    needs={"c": NEED_DRY, "o2": NEED_DRY},
    gives=_corrected_o2,
)
def oxygen_reference(*, c: Value, o2: Value, reference: Value, k: Value) -> Value:
    """Concentration corrected to a reference oxygen.

    Parameters
    ----------
    c
        Concentration [ppm, mg/m3 or another unit; dry, as measured].
    o2
        Oxygen [%; dry], below `k`.
    reference
        Reference oxygen of the limit [%].
    k
        Percent oxygen of dry air of the limit, 20.9 or 21 [%].

    Returns
    -------
    float
        Concentration [unit of `c`; dry, corrected to `reference` with constant `k`].

    Raises
    ------
    BasisError
        In a ledger, where concentration or oxygen is not dry and as measured.
    """
    return c * (k - reference) / (k - o2)


@equation(
    "C_ref",
    "*c",
    {"c": "*c", "co2": "%", "reference": "%"},
    Citation("practice", "", "C·CO2_ref/CO2"),
    symbols={"c": "C", "co2": "%CO2", "reference": "%CO2_ref"},
    needs={"c": NEED_DRY, "co2": NEED_DRY},
    gives=_corrected_co2,
)
def carbon_dioxide_reference(*, c: Value, co2: Value, reference: Value) -> Value:
    """Concentration corrected to a reference carbon dioxide.

    Parameters
    ----------
    c
        Concentration [ppm, mg/m3 or another unit; dry, as measured].
    co2
        Carbon dioxide [%; dry], above zero.
    reference
        Reference carbon dioxide of the limit [%].

    Returns
    -------
    float
        Concentration [unit of `c`; dry, corrected to `reference`].

    Raises
    ------
    BasisError
        In a ledger, where concentration or carbon dioxide is not dry and as measured.
    """
    return c * reference / co2


@equation(
    "X_CO2",
    "%",
    {"reference": "%", "fo": "1", "k": "%"},
    Citation("cfr60_4213", "", "paragraph (d)"),
    symbols={"reference": "%O2_ref", "fo": "F_o", "k": "k"},
)
def co2_correction_factor(*, reference: Value, fo: Value, k: Value) -> Value:
    """Carbon dioxide that goes with a reference oxygen, by the fuel factor.

    Parameters
    ----------
    reference
        Reference oxygen of the limit [%].
    fo
        Fuel factor 0.209 F_d/F_c [1], above zero.
    k
        Percent oxygen of dry air [%]; printed with 20.9 (5.9 at 15 percent).

    Returns
    -------
    float
        X_CO2 [%; dry].
    """
    return (k - reference) / fo


@equation(
    "C_ref",
    "*c",
    {"c": "*c", "co2": "%", "reference": "%", "fo": "1", "k": "%"},
    Citation("cfr60_4213", "", "paragraph (d)"),
    symbols={"c": "C_d", "co2": "%CO2", "reference": "%O2_ref", "fo": "F_o", "k": "k"},
    needs={"c": NEED_DRY, "co2": NEED_DRY},
    gives=_corrected_o2,
)
def oxygen_reference_by_co2(*, c: Value, co2: Value, reference: Value, fo: Value, k: Value) -> Value:
    """Concentration corrected to a reference oxygen by measured carbon dioxide and the fuel factor.

    Parameters
    ----------
    c
        Concentration [ppm, mg/m3 or another unit; dry, as measured].
    co2
        Carbon dioxide [%; dry], above zero.
    reference
        Reference oxygen of the limit [%].
    fo
        Fuel factor 0.209 F_d/F_c [1], above zero.
    k
        Percent oxygen of dry air [%]; printed with 20.9 (5.9 at 15 percent).

    Returns
    -------
    float
        Concentration [unit of `c`; dry, corrected to `reference` with constant `k`].

    Raises
    ------
    BasisError
        In a ledger, where concentration or carbon dioxide is not dry and as measured.
    """
    return c * ((k - reference) / fo) / co2


@equation(
    "gain",
    "%/%",
    {"k": "%", "o2": "%"},
    Citation("gum", "5.1.2", "sensitivity of (k − ref)/(k − O2)"),
    symbols={"k": "k", "o2": "%O2"},
    needs={"o2": NEED_DRY},
)
def gain(*, k: Value, o2: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Relative change of a corrected concentration per percent of oxygen.

    Parameters
    ----------
    k
        Percent oxygen of dry air [%].
    o2
        Oxygen [%; dry], below `k`.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Gain [percent of the result per percent oxygen].
    """
    return hundred / (k - o2)


@equation(
    "u_factor",
    "%",
    {"u_o2": "%", "k": "%", "o2": "%"},
    Citation("gum", "5.1.2", "Eq. 10"),
    symbols={"u_o2": "u_O2", "k": "k", "o2": "%O2"},
    needs={"o2": NEED_DRY},
)
def correction_factor_uncertainty(*, u_o2: Value, k: Value, o2: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Relative standard uncertainty of the oxygen correction from that of the oxygen, to first order.

    Parameters
    ----------
    u_o2
        Standard uncertainty of the oxygen [%].
    k
        Percent oxygen of dry air [%].
    o2
        Oxygen [%; dry], below `k`.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Relative standard uncertainty of the factor [%].
    """
    return hundred * u_o2 / (k - o2)


def reference_refusal(k: float, o2: float) -> str | None:
    """Why an oxygen correction is refused, or None where it can be made.

    Parameters
    ----------
    k
        Percent oxygen of dry air [%].
    o2
        Oxygen [%; dry].

    Examples
    --------
    >>> reference_refusal(20.9, 3.0) is None
    True
    >>> reference_refusal(20.9, 21.3)
    'measured oxygen 21.3 % is not below the 20.9 % of dry air: no combustion gas is left to correct'
    """
    if o2 < k:
        return None
    return f"measured oxygen {o2:.4g} % is not below the {k:g} % of dry air: no combustion gas is left to correct"
