"""Method 3B: excess air, the fuel factor F_o, and its expected range for each fuel."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from typing import Any

from reporter.basis import DRY, NEED_DRY, Moisture, Need
from reporter.equation import Citation, Value, constant, equation
from reporter.resources import table_text

_CO = Citation("m3b", "12.3.1", "Eqs. 3B-3 and 3B-4")
_FACTOR = ("ft3/MMBtu", "m3/J")


@equation(
    "%EA",
    "%",
    {"o2": "%", "co": "%", "n2": "%"},
    Citation("m3b", "12.2", "Eq. 3B-1"),
    symbols={"o2": "%O2", "co": "%CO", "n2": "%N2"},
    needs={"o2": NEED_DRY, "co": NEED_DRY, "n2": NEED_DRY},
)
def excess_air(
    *,
    o2: Value,
    co: Value,
    n2: Value,
    ratio: Value = constant(0.264, "1"),
    hundred: Value = constant(100.0, "%"),
) -> Value:
    """Percent excess air; all nitrogen is taken to come from the air.

    Parameters
    ----------
    o2, co, n2
        Oxygen, carbon monoxide and nitrogen [%; dry].
    ratio
        Printed ratio of oxygen to nitrogen in air, 0.264.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        Excess air [%].
    """
    return hundred * (o2 - 0.5 * co) / (ratio * n2 - (o2 - 0.5 * co))


@equation(
    "F_o",
    "1",
    {"o2": "%", "co2": "%"},
    Citation("m3b", "12.3.2", "Eq. 3B-2"),
    symbols={"o2": "%O2", "co2": "%CO2"},
    needs={"o2": NEED_DRY, "co2": NEED_DRY},
)
def fuel_factor(*, o2: Value, co2: Value, air: Value = constant(20.9, "%")) -> Value:
    """Fuel factor from measured oxygen and carbon dioxide.

    Parameters
    ----------
    o2
        Oxygen [%; dry], adjusted for carbon monoxide where that is measurable in percent.
    co2
        Carbon dioxide [%; dry], above zero, adjusted likewise.
    air
        Oxygen of dry air, 20.9 [%].

    Returns
    -------
    float
        F_o [1].
    """
    return (air - o2) / co2


@equation(
    "%O2_adj",
    "%",
    {"o2": "%", "co": "%"},
    _CO,
    symbols={"o2": "%O2", "co": "%CO"},
    needs={"o2": NEED_DRY, "co": NEED_DRY},
    gives=DRY,
)
def oxygen_adjusted(*, o2: Value, co: Value) -> Value:
    """Oxygen adjusted for the carbon monoxide that could still burn.

    Parameters
    ----------
    o2, co
        Oxygen and carbon monoxide [%; dry].

    Returns
    -------
    float
        Adjusted oxygen [%; dry].
    """
    return o2 - 0.5 * co


@equation(
    "%CO2_adj",
    "%",
    {"co2": "%", "co": "%"},
    _CO,
    symbols={"co2": "%CO2", "co": "%CO"},
    needs={"co2": NEED_DRY, "co": NEED_DRY},
    gives=DRY,
)
def carbon_dioxide_adjusted(*, co2: Value, co: Value) -> Value:
    """Carbon dioxide adjusted for the carbon monoxide that could still burn.

    Parameters
    ----------
    co2, co
        Carbon dioxide and carbon monoxide [%; dry].

    Returns
    -------
    float
        Adjusted carbon dioxide [%; dry].
    """
    return co2 + co


@equation(
    "F_o",
    "1",
    {"fd": _FACTOR, "fc": _FACTOR},
    Citation("m3b", "12.3", "Eq. 3B-5"),
    symbols={"fd": "F_d", "fc": "F_c"},
    needs={"fd": Need(moisture=Moisture.DRY), "fc": Need(moisture=Moisture.NONE)},
)
def fuel_factor_from_f(*, fd: Value, fc: Value, air: Value = constant(0.209, "1")) -> Value:
    """Fuel factor from the F factors of Method 19.

    Parameters
    ----------
    fd, fc
        Dry and carbon dioxide F factors [ft3/MMBtu or m3/J].
    air
        Printed 0.209, the oxygen of dry air as a fraction.

    Returns
    -------
    float
        F_o [1].
    """
    return air * fd / fc


@dataclass(frozen=True, slots=True)
class FoRange:
    """Expected range of the fuel factor of one fuel, ends included; status as in the table's file."""

    fuel: str
    low: float
    high: float
    status: str
    citation: Citation


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(table_text("fo_ranges.toml"))


def fo_range(fuel: str) -> FoRange | None:
    """The expected range for a published fuel name; None where Table 3B-1 has none.

    Examples
    --------
    >>> fo_range("natural gas").low
    1.6
    >>> fo_range("municipal solid waste") is None
    True
    """
    name = " ".join(fuel.lower().split())
    row = _table()["ranges"].get(name)
    if row is None:
        return None
    citation = Citation("m3b", "", "Table 3B-1")
    return FoRange(name, float(row["low"]), float(row["high"]), row["status"], citation)


def fuels_holding(factor: float) -> tuple[str, ...]:
    """The published fuels whose expected range holds a fuel factor, in the order of the table.

    Examples
    --------
    >>> fuels_holding(1.7)
    ('natural gas',)
    >>> fuels_holding(2.5)
    ()
    """
    ranges = _table()["ranges"]
    return tuple(name for name, row in ranges.items() if row["low"] <= factor <= row["high"])


def mixed_fuel_tolerance() -> float:
    """Half-width [%] of the expected range around the computed F_o of fuels burned in varying ratio."""
    return float(_table()["mixed_fuels"]["tolerance_percent"])
