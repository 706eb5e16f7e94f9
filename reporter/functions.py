"""The only functions an equation's body may use.

Each takes floats, NumPy arrays, pint quantities, numbers with uncertainty and traced terms alike.  A series
runs along the first axis, which is the axis the reducing functions reduce; draws run along the last.
Indicator functions give 1.0 or 0.0; on numbers with uncertainty they use the nominal value.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from decimal import ROUND_DOWN, ROUND_HALF_EVEN, ROUND_HALF_UP, Decimal
from functools import reduce
from typing import Any

import numpy as np

from reporter.trace import Call, Term, Terms, as_term, is_traced


def _traced(*values: Any) -> bool:
    return any(is_traced(v) or (isinstance(v, (list, tuple)) and any(map(is_traced, v))) for v in values)


def _flat(*values: Any) -> tuple[Term, ...]:
    """Arguments of a call: a series of separate terms is spread out."""
    spread: list[Term] = []
    for value in values:
        spread.extend(value if isinstance(value, (Terms, list, tuple)) else (as_term(value),))
    return tuple(spread)


def _is_quantity(value: Any) -> bool:
    return hasattr(value, "_REGISTRY")


def _is_uncertain(value: Any) -> bool:
    return hasattr(value, "std_dev") and hasattr(value, "nominal_value")


def _nominal(value: Any) -> Any:
    if _is_uncertain(value):
        return value.nominal_value
    if isinstance(value, np.ndarray) and value.dtype == object:
        return np.array([_nominal(v) for v in value], dtype=float)
    return value


def _plain(value: Any) -> Any:
    """A zero-dimensional NumPy result as a Python float."""
    return float(value) if isinstance(value, (np.floating, np.integer, np.bool_)) else value


def mean(series: Any) -> Any:
    """Arithmetic mean of a series."""
    if _traced(series):
        return Call("mean", _flat(series))
    return total(series) / len(series)


def total(series: Any) -> Any:
    """Sum of a series."""
    if _traced(series):
        return Call("total", _flat(series))
    if _is_quantity(series):
        return np.sum(series, axis=0)
    array = np.asarray(series)
    if array.dtype == object:
        return reduce(lambda a, b: a + b, array)
    if array.ndim == 1:
        return math.fsum(array)
    return np.sum(array, axis=0)


def dot(left: Any, right: Any) -> Any:
    """Sum of the products of two series of one length."""
    if _traced(left, right):
        if isinstance(left, Terms) or isinstance(right, Terms):
            products = [as_term(a) * as_term(b) for a, b in zip(left, right, strict=True)]
            return reduce(lambda a, b: a + b, products)
        return Call("dot", (as_term(left), as_term(right)))
    if _is_quantity(left) or _is_quantity(right):
        return total(left * right)
    return total(np.asarray(left) * np.asarray(right))


def absolute(value: Any) -> Any:
    """Magnitude without its sign."""
    return Call("absolute", (as_term(value),)) if _traced(value) else abs(value)


def _elementary(name: str, value: Any) -> Any:
    if _traced(value):
        return Call(name, (as_term(value),))
    if _is_uncertain(value):
        from uncertainties import umath

        return getattr(umath, "log" if name == "ln" else name)(value)
    if _is_quantity(value):
        value = value.to("dimensionless")
        return type(value)(_elementary(name, value.magnitude), "dimensionless")
    if isinstance(value, np.ndarray):
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
        return Call(name, _flat(*values))
    if any(isinstance(v, np.ndarray) for v in values):
        return reduce(np.minimum if name == "lower" else np.maximum, values)
    return (min if name == "lower" else max)(values)


def lower(*values: Any) -> Any:
    """The lowest of its arguments."""
    return _extreme("lower", values)


def higher(*values: Any) -> Any:
    """The highest of its arguments."""
    return _extreme("higher", values)


def _compare(name: str, left: Any, right: Any) -> Any:
    if _traced(left, right):
        return Call(name, (as_term(left), as_term(right)))
    a, b = _nominal(left), _nominal(right)
    if name == "at_most":
        result = a <= b
    elif name == "at_least":
        result = a >= b
    else:
        result = a < b
    return np.asarray(result, dtype=float) if isinstance(result, np.ndarray) else 1.0 if result else 0.0


def at_most(value: Any, bound: Any) -> Any:
    """1 where value <= bound, else 0."""
    return _compare("at_most", value, bound)


def at_least(value: Any, bound: Any) -> Any:
    """1 where value >= bound, else 0."""
    return _compare("at_least", value, bound)


def less_than(value: Any, bound: Any) -> Any:
    """1 where value < bound, else 0."""
    return _compare("less_than", value, bound)


def all_of(flags: Any) -> Any:
    """1 where every one of a series of indicators is 1, else 0."""
    if _traced(flags):
        return Call("all_of", _flat(flags))
    return _plain(np.min(np.asarray(flags, dtype=float), axis=0))


def any_of(flags: Any) -> Any:
    """1 where at least one of a series of indicators is 1, else 0."""
    if _traced(flags):
        return Call("any_of", _flat(flags))
    return _plain(np.max(np.asarray(flags, dtype=float), axis=0))


def choose(flag: Any, yes: Any, no: Any) -> Any:
    """`yes` where the indicator is 1, else `no`."""
    if _traced(flag, yes, no):
        return Call("choose", (as_term(flag), as_term(yes), as_term(no)))
    if isinstance(flag, np.ndarray):
        return np.where(flag >= 0.5, yes, no)
    return yes if flag >= 0.5 else no


def _decimal_shift(value: float, decimals: float, rule: str) -> float:
    step = Decimal(1).scaleb(-int(decimals))
    mode = {"half_up": ROUND_HALF_UP, "half_even": ROUND_HALF_EVEN, "truncated": ROUND_DOWN}[rule]
    # A spreadsheet looks at 15 significant digits before it rounds; so do we.
    return float(Decimal(format(value, ".15g")).quantize(step, rounding=mode))


def _rounded(rule: str, value: Any, decimals: Any) -> Any:
    if _traced(value, decimals):
        return Call(rule, (as_term(value), as_term(decimals)))
    if _is_quantity(value):
        places = decimals.magnitude if _is_quantity(decimals) else decimals
        return type(value)(_rounded(rule, value.magnitude, places), value.units)
    value, decimals = _nominal(value), _nominal(decimals)
    if isinstance(value, np.ndarray):
        return np.array([_decimal_shift(float(v), float(decimals), rule) for v in value])
    return _decimal_shift(float(value), float(decimals), rule)


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
        return Call("significant_decimals", (as_term(value), as_term(digits)))
    if _is_quantity(value):
        value = value.magnitude
    if _is_quantity(digits):
        digits = digits.magnitude
    return float(digits) - 1.0 - math.floor(math.log10(abs(float(_nominal(value)))))


FUNCTIONS: Sequence[str] = (
    "mean", "total", "dot", "absolute", "exp", "ln", "log10", "lower", "higher", "at_most", "at_least",
    "less_than", "all_of", "any_of", "choose", "half_up", "half_even", "truncated", "significant_decimals",
)  # fmt: skip
