"""Rounding by the rule a limit's record names: to decimals or to significant digits.

A value is looked at with 15 significant digits before it is rounded, as a spreadsheet does.  The one edge
where rounding happens is the comparison; nothing else is computed from a rounded number.
"""

from __future__ import annotations

from reporter.equation import Citation, Value, equation
from reporter.functions import half_even, half_up, significant_decimals, truncated

_CITE = Citation("rounding")
_DECIMALS = {"value": "*v", "decimals": "1"}
_DIGITS = {"value": "*v", "digits": "1"}


@equation("rounded", "*v", _DECIMALS, _CITE, symbols={"value": "x", "decimals": "n"}, gives="value")
def rounded_half_up(*, value: Value, decimals: Value) -> Value:
    """A value rounded to decimals, a half going away from zero.

    Parameters
    ----------
    value
        Value [any unit].
    decimals
        Number of decimals [1], a whole number; negative for tens and hundreds.

    Returns
    -------
    float
        Rounded value [same unit and basis].
    """
    return half_up(value, decimals)


@equation("rounded", "*v", _DECIMALS, _CITE, symbols={"value": "x", "decimals": "n"}, gives="value")
def rounded_half_even(*, value: Value, decimals: Value) -> Value:
    """A value rounded to decimals, a half going to the even digit.

    Parameters
    ----------
    value
        Value [any unit].
    decimals
        Number of decimals [1], a whole number; negative for tens and hundreds.

    Returns
    -------
    float
        Rounded value [same unit and basis].
    """
    return half_even(value, decimals)


@equation("rounded", "*v", _DECIMALS, _CITE, symbols={"value": "x", "decimals": "n"}, gives="value")
def truncated_decimals(*, value: Value, decimals: Value) -> Value:
    """A value cut after a number of decimals.

    Parameters
    ----------
    value
        Value [any unit].
    decimals
        Number of decimals [1], a whole number; negative for tens and hundreds.

    Returns
    -------
    float
        Cut value [same unit and basis].
    """
    return truncated(value, decimals)


@equation("rounded", "*v", _DIGITS, _CITE, symbols={"value": "x", "digits": "s"}, gives="value")
def rounded_half_up_significant(*, value: Value, digits: Value) -> Value:
    """A value rounded to significant digits, a half going away from zero.

    Parameters
    ----------
    value
        Value [any unit], not zero.
    digits
        Number of significant digits [1], a whole number above zero.

    Returns
    -------
    float
        Rounded value [same unit and basis].
    """
    return half_up(value, significant_decimals(value, digits))


@equation("rounded", "*v", _DIGITS, _CITE, symbols={"value": "x", "digits": "s"}, gives="value")
def rounded_half_even_significant(*, value: Value, digits: Value) -> Value:
    """A value rounded to significant digits, a half going to the even digit.

    Parameters
    ----------
    value
        Value [any unit], not zero.
    digits
        Number of significant digits [1], a whole number above zero.

    Returns
    -------
    float
        Rounded value [same unit and basis].
    """
    return half_even(value, significant_decimals(value, digits))


@equation("rounded", "*v", _DIGITS, _CITE, symbols={"value": "x", "digits": "s"}, gives="value")
def truncated_significant(*, value: Value, digits: Value) -> Value:
    """A value cut after a number of significant digits.

    Parameters
    ----------
    value
        Value [any unit], not zero.
    digits
        Number of significant digits [1], a whole number above zero.

    Returns
    -------
    float
        Cut value [same unit and basis].
    """
    return truncated(value, significant_decimals(value, digits))
