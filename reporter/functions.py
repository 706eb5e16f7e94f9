"""The only functions an equation's body may use.

Each takes floats, NumPy arrays, pint quantities, numbers with uncertainty and traced terms alike.  A series
runs along the first axis, which is the axis the reducing functions reduce; draws run along the last.
Indicator functions give 1.0 or 0.0; on numbers with uncertainty they use the nominal value.

Most decimal fractions have no exact binary number: 47.0 - 45.1 is not 1.9.  So that a value on a bound, or on
a half, on paper is on it here and in every spreadsheet, a comparison takes numbers as equal that agree to
`SAME` of the bound, and a rounding lifts the magnitude by `LIFT` of itself before it rounds.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from decimal import ROUND_DOWN, ROUND_HALF_UP, Decimal
from functools import reduce
from typing import Any

import numpy as np

from reporter.trace import Call, Term, Terms, as_term, is_traced

#: Share of the bound within which a compared number counts as equal to it.
SAME = 1e-9
#: Share of itself a number is lifted by before it is rounded.
LIFT = 1e-12


def _traced(*values: Any) -> bool:
    return any(is_traced(v) or (isinstance(v, (list, tuple)) and any(map(is_traced, v))) for v in values)


def _flat(*values: Any) -> tuple[Term, ...]:
    """Arguments of a call: a series of separate terms is spread out."""
    spread: list[Term] = []
    for value in values:
        parts = value if isinstance(value, (Terms, list, tuple)) else (value,)
        spread.extend(as_term(part) for part in parts)
    return tuple(spread)


def _each_term(function: str, *values: Any) -> Term | Terms:
    """A call on terms; on series of separate terms one call for each element."""
    lengths = {len(value) for value in values if isinstance(value, Terms)}
    if not lengths:
        return Call(function, tuple(as_term(value) for value in values))
    columns = [value if isinstance(value, Terms) else (value,) * max(lengths) for value in values]
    rows = zip(*columns, strict=True)
    return Terms(tuple(Call(function, tuple(as_term(value) for value in row)) for row in rows))


def is_quantity(value: Any) -> bool:
    """Whether a value is a pint quantity (asked without importing pint)."""
    return hasattr(value, "_REGISTRY")


def stacked(values: Any) -> Any:
    """Several values of one kind as one operand whose first axis is the series; anything else as it is."""
    if not isinstance(values, (list, tuple)):
        return values
    if set(map(type, values)) == {float}:
        return np.array(values)
    if any(is_traced(value) for value in values):
        return Terms(tuple(as_term(value) for value in values))
    if values and is_quantity(values[0]):
        units = values[0].units
        return type(values[0])(stacked([value.to(units).magnitude for value in values]), units)
    if any(isinstance(value, np.ndarray) and value.ndim for value in values):
        return np.array(np.broadcast_arrays(*values))
    return np.array(values)


def _is_uncertain(value: Any) -> bool:
    return hasattr(value, "std_dev") and hasattr(value, "nominal_value")


def _nominal(value: Any) -> Any:
    if _is_uncertain(value):
        return value.nominal_value
    if isinstance(value, np.ndarray) and value.dtype == object:
        return np.array([_nominal(v) for v in value], dtype=float)
    if isinstance(value, (list, tuple)):
        return stacked([_nominal(v) for v in value])
    return value


def _plain(value: Any) -> Any:
    """A zero-dimensional NumPy result as a Python float."""
    return float(value) if isinstance(value, (np.floating, np.integer, np.bool_)) else value


def mean(series: Any) -> Any:
    """Arithmetic mean of a series."""
    if _traced(series):
        return Call("mean", _flat(series))
    series = stacked(series)
    return total(series) / len(series)


def count(series: Any) -> Any:
    """How many values a series has."""
    if _traced(series):
        return Call("count", _flat(series))
    return float(len(series))


def total(series: Any) -> Any:
    """Sum of a series."""
    if _traced(series):
        return Call("total", _flat(series))
    series = stacked(series)
    if is_quantity(series):
        return np.sum(series, axis=0)
    array = np.asarray(series)
    if array.dtype == object:
        return reduce(lambda a, b: a + b, array)
    if array.ndim == 1:
        return math.fsum(array.tolist())
    return np.sum(array, axis=0)


def dot(left: Any, right: Any) -> Any:
    """Sum of the products of two series of one length."""
    if _traced(left, right):
        if isinstance(left, Term) and isinstance(right, Term):
            return Call("dot", (left, right))
        products = [as_term(a) * as_term(b) for a, b in zip(left, right, strict=True)]
        return reduce(lambda a, b: a + b, products)
    return total(stacked(left) * stacked(right))


def absolute(value: Any) -> Any:
    """Magnitude without its sign."""
    if _traced(value):
        return _each_term("absolute", value)
    if _is_uncertain(value):
        return -value if value.nominal_value < 0.0 else value
    if isinstance(value, np.ndarray) and value.dtype == object:
        return np.array([absolute(v) for v in value])
    return abs(value)


def _elementary(name: str, value: Any) -> Any:
    if _traced(value):
        return _each_term(name, value)
    if _is_uncertain(value):
        from uncertainties import umath

        return getattr(umath, "log" if name == "ln" else name)(value)
    if is_quantity(value):
        value = value.to("dimensionless")
        return type(value)(_elementary(name, value.magnitude), "dimensionless")
    if isinstance(value, np.ndarray):
        if value.dtype == object:
            return np.array([_elementary(name, v) for v in value])
        return getattr(np, "log" if name == "ln" else name)(value)
    return getattr(math, "log" if name == "ln" else name)(value)


def exp(value: Any) -> Any:
    """The exponential of a pure number."""
    return _elementary("exp", value)


def ln(value: Any) -> Any:
    """The natural logarithm of a pure number."""
    return _elementary("ln", value)


def log10(value: Any) -> Any:
    """The decimal logarithm of a pure number."""
    return _elementary("log10", value)


def _extreme(name: str, values: tuple[Any, ...]) -> Any:
    if _traced(*values):
        return Call(name, _flat(*values)) if len(values) == 1 else _each_term(name, *values)
    scalar = min if name == "lower" else max
    if len(values) == 1:
        series = stacked(values[0])
        if is_quantity(series) or series.dtype != object:
            return _plain((np.min if name == "lower" else np.max)(series, axis=0))
        return scalar(series, key=_nominal)
    if any(isinstance(getattr(v, "magnitude", v), np.ndarray) for v in values):
        return reduce(np.minimum if name == "lower" else np.maximum, values)
    return scalar(values, key=_nominal)


def lower(*values: Any) -> Any:
    """The lowest of its arguments, element by element; of one series, its lowest value."""
    return _extreme("lower", values)


def higher(*values: Any) -> Any:
    """The highest of its arguments, element by element; of one series, its highest value."""
    return _extreme("higher", values)


def _compare(name: str, left: Any, right: Any) -> Any:
    if _traced(left, right):
        return _each_term(name, left, right)
    difference = _nominal(left) - _nominal(right)
    same = SAME * abs(_nominal(right))
    if name == "at_most":
        result = difference <= same
    elif name == "at_least":
        result = difference >= -same
    else:
        result = difference < -same
    return np.asarray(result, dtype=float) if isinstance(result, np.ndarray) else 1.0 if result else 0.0


def at_most(value: Any, bound: Any) -> Any:
    """1 where value <= bound, else 0; see `SAME`."""
    return _compare("at_most", value, bound)


def at_least(value: Any, bound: Any) -> Any:
    """1 where value >= bound, else 0; see `SAME`."""
    return _compare("at_least", value, bound)


def less_than(value: Any, bound: Any) -> Any:
    """1 where value < bound, else 0; see `SAME`."""
    return _compare("less_than", value, bound)


def all_of(flags: Any) -> Any:
    """1 where every one of a series of indicators is 1, else 0."""
    if _traced(flags):
        return Call("all_of", _flat(flags))
    return _plain(np.min(_nominal(stacked(flags)), axis=0))


def any_of(flags: Any) -> Any:
    """1 where at least one of a series of indicators is 1, else 0."""
    if _traced(flags):
        return Call("any_of", _flat(flags))
    return _plain(np.max(_nominal(stacked(flags)), axis=0))


def choose(flag: Any, yes: Any, no: Any) -> Any:
    """`yes` where the indicator is 1, else `no`."""
    if _traced(flag, yes, no):
        return _each_term("choose", flag, yes, no)
    flag = _nominal(flag.to("dimensionless").magnitude if is_quantity(flag) else flag)
    if isinstance(flag, np.ndarray):
        return np.where(flag >= 0.5, yes, no)
    return yes if flag >= 0.5 else no


def _half_up(value: float, decimals: float) -> float:
    return _quantized(value * (1.0 + LIFT), decimals, ROUND_HALF_UP)


def _half_even(value: float, decimals: float) -> float:
    scaled = abs(value) * 10.0**decimals
    above_even = scaled - 2.0 * math.floor(scaled / 2.0)
    if abs(above_even - 0.5) <= LIFT * scaled:
        return _quantized(value, decimals, ROUND_DOWN)
    return _half_up(value, decimals)


def _truncated(value: float, decimals: float) -> float:
    return _quantized(value * (1.0 + LIFT), decimals, ROUND_DOWN)


def _quantized(value: float, decimals: float, mode: str) -> float:
    return float(Decimal(value).quantize(Decimal(1).scaleb(-int(decimals)), rounding=mode)) + 0.0


def _each(rule: Callable[[float, float], float], value: Any, second: Any) -> Any:
    """A scalar rule on the nominal value, element by element for an array."""
    value, second = _nominal(value), _nominal(second)
    if isinstance(value, np.ndarray) or isinstance(second, np.ndarray):
        return np.vectorize(rule, otypes=[float])(value, second)
    return rule(float(value), float(second))


def _rounded(rule: str, value: Any, decimals: Any) -> Any:
    if _traced(value, decimals):
        return _each_term(rule, value, decimals)
    places = decimals.magnitude if is_quantity(decimals) else decimals
    if is_quantity(value):
        return type(value)(_rounded(rule, value.magnitude, places), value.units)
    scalar = {"half_up": _half_up, "half_even": _half_even, "truncated": _truncated}[rule]
    return _each(scalar, value, places)


def half_up(value: Any, decimals: Any) -> Any:
    """Rounded to a number of decimals, a half going away from zero."""
    return _rounded("half_up", value, decimals)


def half_even(value: Any, decimals: Any) -> Any:
    """Rounded to a number of decimals, a half going to the even digit."""
    return _rounded("half_even", value, decimals)


def truncated(value: Any, decimals: Any) -> Any:
    """Cut after a number of decimals."""
    return _rounded("truncated", value, decimals)


def significant_decimals(value: Any, digits: Any) -> Any:
    """How many decimals give `value` that number of significant digits (value not zero)."""
    if _traced(value, digits):
        return _each_term("significant_decimals", value, digits)
    plain = [v.magnitude if is_quantity(v) else v for v in (value, digits)]
    return _each(_significant_decimals, *plain)


def _significant_decimals(value: float, digits: float) -> float:
    return digits - 1.0 - math.floor(math.log10(abs(value) * (1.0 + LIFT)))


FUNCTIONS: Sequence[str] = (
    "mean", "count", "total", "dot", "absolute", "exp", "ln", "log10", "lower", "higher",
    "at_most", "at_least", "less_than", "all_of", "any_of", "choose",
    "half_up", "half_even", "truncated", "significant_decimals",
)  # fmt: skip
