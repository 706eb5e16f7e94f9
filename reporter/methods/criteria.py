"""Quality criteria: the yes-or-no equations, and the table of criteria each method family is held to.

A criterion's bound and alternative are ledger entries, so that a changed reading changes the answer in the
workbook as it does here.  `criteria` gives None for a method whose criteria are not held.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any

from reporter.equation import Citation, Value, constant, equation
from reporter.functions import absolute, all_of, any_of, at_least, at_most, less_than
from reporter.references import short_name
from reporter.resources import table_text

_CRITERIA = Citation("criterion")


@dataclass(frozen=True, slots=True)
class Criterion:
    """One criterion of a method: name, operator, bound, alternative, paragraph and what follows.

    `relation` is "at most", "at least" or "less than"; `unit` is the bound's unit; `alternative` is the bound
    on the absolute difference, in `alternative_unit`, that meets the criterion too (None: there is none).
    `status` says whether the number was read in a source ("found") or is recalled ("memory").
    """

    name: str
    label: str
    relation: str
    bound: float
    unit: str
    alternative: float | None
    alternative_unit: str
    paragraph: str
    consequence: str
    status: str
    citation: Citation


def _adopted(method: str, printed_in: str) -> str:
    """The method that takes a criterion over from the one it is printed in; empty where they are one."""
    return "" if method == printed_in else f"as adopted by {short_name(method)}"


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(table_text("criteria.toml"))


def method_family(method: str) -> str:
    """The key of a method in the table from how people write it, ``7E`` from ``EPA Method 7E``; or empty."""
    written = re.findall(r"(?<![0-9A-Z])[0-9]+[A-Z]?(?![0-9A-Z])", method.upper())
    return next((key for key in written if key in _tables()["methods"]), "")


def criteria(method: str) -> Mapping[str, Criterion] | None:
    """The criteria held for a method by name of the criterion; None where none are held.

    Parameters
    ----------
    method
        Method as written on the sheet, e.g. ``7E``, ``Method 10``, ``EPA 3A``.
    """
    family = _tables()["methods"].get(method_family(method))
    if family is None or not family["held"]:
        return None
    held: dict[str, Criterion] = {}
    for name in family["criteria"]:
        row = _tables()["criteria"][name]
        alternative = row.get("alternative", {})
        unit = next((u for u in family["units"] if u in alternative), "")
        held[name] = Criterion(
            name=name,
            label=row["label"],
            relation=row["relation"],
            bound=float(row["bound"]),
            unit=row["unit"],
            alternative=float(alternative[unit]) if unit else None,
            alternative_unit=unit,
            paragraph=row["paragraph"],
            consequence=row["consequence"],
            status=_weaker(row["status"], family["status"]),
            citation=Citation(row["document"], row["paragraph"], _adopted(family["document"], row["document"])),
        )
    return held


def _weaker(*statuses: str) -> str:
    return "found" if set(statuses) == {"found"} else "memory"


def not_held_reason(method: str) -> str:
    """Why no criteria are held for a method; empty where they are."""
    family = _tables()["methods"].get(method_family(method))
    if family is None:
        return f"no criteria are held for {method.strip() or 'a channel without a method'}"
    return "" if family["held"] else str(family["reason"])


@equation(
    "met",
    "1",
    {"share": "%", "bound": "%", "difference": "*c", "alternative": "*c"},
    _CRITERIA,
    symbols={"share": "share", "bound": "bound", "difference": "Δ", "alternative": "Δ_max"},
    indicator=True,
)
def criterion_met(*, share: Value, bound: Value, difference: Value, alternative: Value) -> Value:
    """Whether a share of span is within its bound, or the difference within the alternative.

    Parameters
    ----------
    share
        Error, bias or drift [% of span], of either sign.
    bound
        Largest magnitude of the share [%].
    difference
        Difference of the two readings behind the share [ppm or %], of either sign.
    alternative
        Largest magnitude of the difference [same unit].

    Returns
    -------
    float
        1 where one of the two is met, else 0.
    """
    return any_of((at_most(absolute(share), bound), at_most(absolute(difference), alternative)))


@equation(
    "met",
    "1",
    {"value": "*v", "bound": "*v"},
    _CRITERIA,
    symbols={"value": "value", "bound": "bound"},
    indicator=True,
)
def share_within(*, value: Value, bound: Value) -> Value:
    """Whether the magnitude of a value is within its bound.

    Parameters
    ----------
    value
        Value [any unit], of either sign.
    bound
        Largest magnitude [same unit].

    Returns
    -------
    float
        1 where it is met, else 0.
    """
    return at_most(absolute(value), bound)


@equation("met", "1", {"value": "*v", "bound": "*v"}, _CRITERIA, indicator=True)
def at_or_below(*, value: Value, bound: Value) -> Value:
    """Whether a value is at or below its bound.

    Parameters
    ----------
    value
        Value [any unit].
    bound
        Bound [same unit].

    Returns
    -------
    float
        1 where value <= bound, else 0.
    """
    return at_most(value, bound)


@equation("met", "1", {"value": "*v", "bound": "*v"}, _CRITERIA, indicator=True)
def at_or_above(*, value: Value, bound: Value) -> Value:
    """Whether a value is at or above its bound.

    Parameters
    ----------
    value
        Value [any unit].
    bound
        Bound [same unit].

    Returns
    -------
    float
        1 where value >= bound, else 0.
    """
    return at_least(value, bound)


@equation("met", "1", {"value": "*v", "bound": "*v"}, _CRITERIA, indicator=True)
def below(*, value: Value, bound: Value) -> Value:
    """Whether a value is below its bound.

    Parameters
    ----------
    value
        Value [any unit].
    bound
        Bound [same unit].

    Returns
    -------
    float
        1 where value < bound, else 0.
    """
    return less_than(value, bound)


@equation("met", "1", {"flags": "1"}, _CRITERIA, indicator=True, series=("flags",))
def all_met(*, flags: Value) -> Value:
    """Whether all of several criteria are met.

    Parameters
    ----------
    flags
        Indicators [1 or 0], a series.

    Returns
    -------
    float
        1 where every one is 1, else 0.
    """
    return all_of(flags)


@equation("met", "1", {"flags": "1"}, _CRITERIA, indicator=True, series=("flags",))
def any_met(*, flags: Value) -> Value:
    """Whether at least one of several criteria is met.

    Parameters
    ----------
    flags
        Indicators [1 or 0], a series.

    Returns
    -------
    float
        1 where at least one is 1, else 0.
    """
    return any_of(flags)


@equation(
    "Δ",
    "*c",
    {"reading": "*c", "other": "*c"},
    _CRITERIA,
    symbols={"reading": "C_1", "other": "C_2"},
    difference=True,
)
def reading_difference(*, reading: Value, other: Value) -> Value:
    """Difference of two readings, for the alternative of a criterion.

    Parameters
    ----------
    reading
        Reading [ppm or %]: direct, system, or after the run.
    other
        What it is compared with [same unit]: certificate, direct reading, or before the run.

    Returns
    -------
    float
        Difference [same unit], signed.
    """
    return reading - other


@equation(
    "Δ_DF",
    "*c",
    {"system": "*c", "dilution_factor": "1", "certified": "*c"},
    _CRITERIA,
    symbols={"system": "C_S", "dilution_factor": "DF", "certified": "C_V"},
    difference=True,
)
def dilution_difference(*, system: Value, dilution_factor: Value, certified: Value) -> Value:
    """Difference of a dilution system's reading from the certified value, for the alternative of a criterion.

    Parameters
    ----------
    system
        Reading of the gas given at the probe [ppm or %], before the dilution factor.
    dilution_factor
        Dilution factor [1].
    certified
        Certified value of that gas [same unit].

    Returns
    -------
    float
        Difference [same unit], signed.
    """
    return system * dilution_factor - certified


@equation(
    "share",
    "%",
    {"value": "*c", "span": "*c"},
    Citation("m7e", "3.4"),
    symbols={"value": "C", "span": "CS"},
)
def share_of_span(*, value: Value, span: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """A concentration in percent of the calibration span.

    Parameters
    ----------
    value
        Concentration [ppm or %], e.g. a raw run mean or a certified value.
    span
        Calibration span [same unit], not zero.
    hundred
        The 100 of a percentage [%].

    Returns
    -------
    float
        Share [% of span].
    """
    return hundred * value / span
