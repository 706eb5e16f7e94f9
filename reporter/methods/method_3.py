"""Method 3: molecular weight of the stack gas, and nitrogen by difference.

Argon is counted as nitrogen, as in the method.
"""

from __future__ import annotations

from reporter.basis import DRY, NEED_DRY, Basis, Moisture
from reporter.equation import Citation, Value, constant, equation

_MASS = ("lb/lbmol", "g/mol")
_PER_PERCENT = ("lb/lbmol/%", "g/mol/%")
_MD = Citation("m3", "12", "Eq. 3-1")
_MS = Citation("m2", "12", "wet molecular weight")


@equation(
    "M_d",
    _MASS,
    {"co2": "%", "o2": "%", "n2": "%", "co": "%"},
    _MD,
    symbols={"co2": "%CO2", "o2": "%O2", "n2": "%N2", "co": "%CO"},
    needs={"co2": NEED_DRY, "o2": NEED_DRY, "n2": NEED_DRY, "co": NEED_DRY},
    gives=Basis(moisture=Moisture.DRY),
)
def dry_molecular_weight(
    *,
    co2: Value,
    o2: Value,
    n2: Value,
    co: Value,
    m_co2: Value = constant(0.440, _PER_PERCENT, cite=_MD),
    m_o2: Value = constant(0.320, _PER_PERCENT, cite=_MD),
    m_n2: Value = constant(0.280, _PER_PERCENT, cite=_MD),
) -> Value:
    """Molecular weight of the dry stack gas.

    Parameters
    ----------
    co2, o2, n2, co
        Composition [%; dry].
    m_co2, m_o2, m_n2
        Printed molar masses divided by 100.

    Returns
    -------
    float
        M_d [lb/lbmol or g/mol; dry].
    """
    return m_co2 * co2 + m_o2 * o2 + m_n2 * (n2 + co)


@equation(
    "M_s",
    _MASS,
    {"md": _MASS, "bws": "1"},
    _MS,
    symbols={"md": "M_d", "bws": "B_ws"},
    gives=Basis(moisture=Moisture.WET),
)
def wet_molecular_weight(*, md: Value, bws: Value, water: Value = constant(18.0, _MASS, cite=_MS)) -> Value:
    """Molecular weight of the wet stack gas.

    Parameters
    ----------
    md
        Molecular weight of the dry gas [lb/lbmol or g/mol].
    bws
        Moisture of the stack gas as a fraction [1].
    water
        Printed molar mass of water, 18.0.

    Returns
    -------
    float
        M_s [same unit; wet].
    """
    return md * (1 - bws) + water * bws


@equation(
    "%N2",
    "%",
    {"co2": "%", "o2": "%", "co": "%"},
    Citation("m3b", "12"),
    symbols={"co2": "%CO2", "o2": "%O2", "co": "%CO"},
    needs={"co2": NEED_DRY, "o2": NEED_DRY, "co": NEED_DRY},
    gives=DRY,
)
def nitrogen_by_difference(*, co2: Value, o2: Value, co: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Nitrogen as what carbon dioxide, oxygen and carbon monoxide leave.

    Parameters
    ----------
    co2, o2, co
        Composition [%; dry].
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        Nitrogen [%; dry].
    """
    return hundred - co2 - o2 - co
