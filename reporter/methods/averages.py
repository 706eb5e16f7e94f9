"""Averages over runs, the distance from a limit, and the comparison itself (rounding: `methods.rounding`).

A comparison needs both numbers on one basis; two different bases are a `BasisError`, which the caller turns
into "not compared" with its reason.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import Basis, OxygenKind
from reporter.equation import Citation, Value, constant, equation
from reporter.errors import BasisError
from reporter.functions import at_least as _at_least
from reporter.functions import at_most as _at_most
from reporter.functions import dot, mean, total
from reporter.functions import less_than as _less_than

_RUNS = Citation("cfr60_8", "", "paragraph (f)")
_ENTERED = Citation("record", "", "limit")
_COMMON = Citation("practice")
_NO_OXYGEN = (OxygenKind.NONE, OxygenKind.AS_MEASURED)


def basis_mismatch(value: Basis, limit: Basis) -> str:
    """How two bases differ, in words; empty where they are one basis.

    A limit that names no expressed-as takes the value's; no oxygen reference and "as measured" are one.
    """
    pairs: list[tuple[str, str]] = []
    if value.moisture is not limit.moisture:
        pairs.append((value.moisture.value, limit.moisture.value))
    plain = value.oxygen.kind in _NO_OXYGEN and limit.oxygen.kind in _NO_OXYGEN
    if not plain and value.oxygen != limit.oxygen:
        pairs.append((value.oxygen.text(), limit.oxygen.text()))
    if not value.standard.same(limit.standard):
        pairs.append((value.standard.text(), limit.standard.text()))
    if limit.expressed_as and value.expressed_as != limit.expressed_as:
        pairs.append((f"as {value.expressed_as or 'itself'}", f"as {limit.expressed_as}"))
    if not pairs:
        return ""
    found = ", ".join(pair[0] or "no basis stated" for pair in pairs)
    wanted = ", ".join(pair[1] or "no basis stated" for pair in pairs)
    return f"the result is {found}, the limit is {wanted}"


def _compared(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    reason = basis_mismatch(bases["value"], bases["limit"])
    if reason:
        raise BasisError(reason)
    return Basis()


def _on_value(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    _compared(bases, values)
    return bases["value"]


@equation(
    "mean",
    "*v",
    {"values": "*v"},
    _RUNS,
    symbols={"values": "x"},
    gives="values",
    series=("values",),
)
def mean_of_all(*, values: Value) -> Value:
    """Arithmetic mean of all runs, or of several fuels, hours or readings.

    Parameters
    ----------
    values
        Values [any unit], a series of one basis.

    Returns
    -------
    float
        Mean [same unit and basis].
    """
    return mean(values)


@equation(
    "mean",
    "*v",
    {"values": "*v", "flags": "1"},
    _RUNS,
    symbols={"values": "x", "flags": "v"},
    gives="values",
    series=("values", "flags"),
)
def mean_of_valid(*, values: Value, flags: Value) -> Value:
    """Arithmetic mean of the runs whose flag is 1.

    Parameters
    ----------
    values
        Result of each run [any unit], a series of one basis.
    flags
        1 for a valid run, 0 for another [1], a series.

    Returns
    -------
    float
        Mean [same unit and basis].

    Raises
    ------
    EquationError
        No run is valid.
    """
    return dot(values, flags) / total(flags)


@equation(
    "n_valid",
    "1",
    {"flags": "1"},
    _RUNS,
    symbols={"flags": "v"},
    series=("flags",),
)
def count_valid(*, flags: Value) -> Value:
    """Number of runs whose flag is 1.

    Parameters
    ----------
    flags
        1 for a valid run, 0 for another [1], a series.

    Returns
    -------
    float
        Count [1].
    """
    return total(flags)


@equation(
    "Δ",
    "%",
    {"value": "*v", "reference": "*v"},
    _COMMON,
    symbols={"value": "x", "reference": "x_0"},
    difference=True,
)
def percent_difference(*, value: Value, reference: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Difference of a value from a reference value in percent of the reference.

    Parameters
    ----------
    value
        Value [any unit].
    reference
        What it is compared with [same unit], not zero.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Difference [%], signed.
    """
    return hundred * (value - reference) / reference


@equation(
    "margin",
    "*v",
    {"limit": "*v", "value": "*v"},
    _ENTERED,
    symbols={"limit": "L", "value": "x"},
    gives=_on_value,
    difference=True,
)
def margin(*, limit: Value, value: Value) -> Value:
    """What is left between a value and its limit; negative above the limit.

    Parameters
    ----------
    limit
        Limit as entered [any unit].
    value
        Result [same unit and basis].

    Returns
    -------
    float
        Limit minus value [same unit].

    Raises
    ------
    BasisError
        In a ledger, where limit and value are on different bases.
    """
    return limit - value


@equation(
    "share",
    "%",
    {"value": "*v", "limit": "*v"},
    _ENTERED,
    symbols={"limit": "L", "value": "x"},
    gives=_compared,
)
def percent_of_limit(*, value: Value, limit: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """A value in percent of its limit.

    Parameters
    ----------
    value
        Result [any unit].
    limit
        Limit as entered [same unit and basis], not zero.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Share [%].

    Raises
    ------
    BasisError
        In a ledger, where limit and value are on different bases.
    """
    return hundred * value / limit


@equation(
    "met", "1", {"value": "*v", "limit": "*v"}, _ENTERED, symbols={"value": "x", "limit": "L"},
    gives=_compared, indicator=True,
)  # fmt: skip
def at_most_limit(*, value: Value, limit: Value) -> Value:
    """Whether a value is at or below a limit that reads "at most".

    Parameters
    ----------
    value
        Result, rounded by the limit's rule [any unit].
    limit
        Limit as entered [same unit and basis].

    Returns
    -------
    float
        1 where value <= limit, else 0.

    Raises
    ------
    BasisError
        In a ledger, where limit and value are on different bases.
    """
    return _at_most(value, limit)


@equation(
    "met", "1", {"value": "*v", "limit": "*v"}, _ENTERED, symbols={"value": "x", "limit": "L"},
    gives=_compared, indicator=True,
)  # fmt: skip
def less_than_limit(*, value: Value, limit: Value) -> Value:
    """Whether a value is below a limit that reads "less than".

    Parameters
    ----------
    value
        Result, rounded by the limit's rule [any unit].
    limit
        Limit as entered [same unit and basis].

    Returns
    -------
    float
        1 where value < limit, else 0.

    Raises
    ------
    BasisError
        In a ledger, where limit and value are on different bases.
    """
    return _less_than(value, limit)


@equation(
    "met", "1", {"value": "*v", "limit": "*v"}, _ENTERED, symbols={"value": "x", "limit": "L"},
    gives=_compared, indicator=True,
)  # fmt: skip
def at_least_limit(*, value: Value, limit: Value) -> Value:
    """Whether a value is at or above a limit that reads "at least".

    Parameters
    ----------
    value
        Result, rounded by the limit's rule [any unit].
    limit
        Limit as entered [same unit and basis].

    Returns
    -------
    float
        1 where value >= limit, else 0.

    Raises
    ------
    BasisError
        In a ledger, where limit and value are on different bases.
    """
    return _at_least(value, limit)
