"""Changes of unit as ledger entries: each with its factor, so that it shows in the cell's formula."""

from __future__ import annotations

import re
from functools import cache
from typing import Any

from reporter.equation import Citation, Equation, Value, constant, equation
from reporter.ledger import Entry, Ledger
from reporter.units import factor, known

_CITE = Citation("units")


def convert_entry(ledger: Ledger, key: str, entry: Entry, unit: str, *, label: str = "", symbol: str = "") -> Entry:
    """A number in another unit of its dimension, recorded with the factor; the entry itself in its own unit.

    Parameters
    ----------
    ledger
        Where the new entry goes.
    key
        Key of the new entry.
    entry
        Number to convert; its basis, and its label and symbol where none are given, are kept.
    unit
        Canonical unit wanted.

    Raises
    ------
    UnitError
        The two units have different dimensions.
    """
    if entry.unit == unit:
        return entry
    return ledger.apply(
        conversion_equation(entry.unit, unit),
        key,
        {"value": entry},
        label=label or entry.label,
        symbol=symbol or entry.symbol,
    )


@cache
def conversion_equation(source: str, target: str) -> Equation[Any]:
    """The equation that changes a value from one canonical unit to another.

    A temperature with a zero point of its own is shifted first and scaled after.  The factor multiplies or
    divides, whichever number is shorter to print (60 for minutes to hours, 0.45359237 for lb to kg).

    Raises
    ------
    UnitError
        The two units have different dimensions.
    """
    ratio = _neat(factor(source, target))
    inverse = _neat(factor(target, source))
    shift = _neat((known(source).offset - known(target).offset) / known(source).factor)
    name = f"convert_{_slug(source)}_to_{_slug(target)}"
    decorate = equation("x", target, {"value": source}, _CITE, symbols={"value": "x"}, gives="value")
    if shift:
        return decorate(_named(_shifted(shift, inverse, source, target), name, source, target))
    if len(repr(inverse)) < len(repr(ratio)):
        return decorate(_named(_divided(inverse, source, target), name, source, target))
    return decorate(_named(_multiplied(ratio, source, target), name, source, target))


def converted(value: float, source: str, target: str) -> float:
    """A plain value in another unit, as `convert_entry` computes it."""
    return value if source == target else float(conversion_equation(source, target)(value=value))


def _multiplied(ratio: float, source: str, target: str) -> Any:
    per = constant(ratio, _per(target, source), cite=_CITE)

    def body(*, value: Value, scale: Value = per) -> Value:
        return value * scale

    return body


def _divided(inverse: float, source: str, target: str) -> Any:
    per = constant(inverse, _per(source, target), cite=_CITE)

    def body(*, value: Value, scale: Value = per) -> Value:
        return value / scale

    return body


def _shifted(shift: float, inverse: float, source: str, target: str) -> Any:
    zero_point = constant(abs(shift), source, cite=_CITE)
    per = constant(inverse, _per(source, target), cite=_CITE)

    def lowered(*, value: Value, zero: Value = zero_point, scale: Value = per) -> Value:
        return (value - zero) / scale

    def raised(*, value: Value, zero: Value = zero_point, scale: Value = per) -> Value:
        return (value + zero) / scale

    def moved(*, value: Value, zero: Value = zero_point) -> Value:
        return value + zero

    def moved_down(*, value: Value, zero: Value = zero_point) -> Value:
        return value - zero

    if inverse == 1.0:
        return moved_down if shift < 0 else moved
    return lowered if shift < 0 else raised


def _named(body: Any, name: str, source: str, target: str) -> Any:
    body.__name__ = name
    body.__doc__ = f"Change of unit from {source or '1'} to {target or '1'}."
    return body


def _neat(value: float) -> float:
    """A factor without the last-digit noise of its quotient."""
    return float(f"{value:.15g}")


def _per(upper: str, lower: str) -> str:
    """One unit over another, as a product the registry reads from left to right."""
    return upper + "/" + lower.translate(str.maketrans("*/", "/*"))


def _slug(unit: str) -> str:
    words = unit.replace("%", "percent").replace("°", "deg").replace("µ", "u")
    return re.sub(r"[^A-Za-z0-9]+", "_", words).strip("_").lower()
