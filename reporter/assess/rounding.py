"""The rounding rule of a limit's record, as the user wrote it."""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from math import floor, log10
from typing import Any

from reporter.equation import Equation
from reporter.errors import RecordError
from reporter.methods.rounding import (
    rounded_half_even,
    rounded_half_even_significant,
    rounded_half_up,
    rounded_half_up_significant,
    truncated_decimals,
    truncated_significant,
)
from reporter.record import Limit, text_of

_RULE = re.compile(
    r"(?P<rule>half up|half even|truncated)(?: to (?P<number>\d+) (?P<what>decimals?|significant digits?))?"
)
_EQUATIONS: dict[tuple[str, bool], Equation[Any]] = {
    ("half up", False): rounded_half_up,
    ("half even", False): rounded_half_even,
    ("truncated", False): truncated_decimals,
    ("half up", True): rounded_half_up_significant,
    ("half even", True): rounded_half_even_significant,
    ("truncated", True): truncated_significant,
}


@dataclass(frozen=True, slots=True)
class Rule:
    """A rounding rule: its equation (None: none), how many digits, whether significant, and its words."""

    equation: Equation[Any] | None
    digits: int
    significant: bool
    words: str


def rounding_rule(limit: Limit) -> Rule:
    """The rule of a limit.

    Without a number it rounds to the decimals of the limit as entered; an empty cell and ``none`` do not
    round.

    Raises
    ------
    RecordError
        The text is not a rule.
    """
    text = " ".join(text_of(limit.rounding).lower().split())
    if not text:
        return Rule(None, 0, False, "no rounding rule entered: compared unrounded")
    if text == "none":
        return Rule(None, 0, False, "not rounded")
    match = _RULE.fullmatch(text)
    if match is None:
        raise RecordError(
            f"{text!r} is not a rounding rule: none, half up, half even or truncated, "
            "each with an optional 'to N decimals' or 'to N significant digits'"
        )
    significant = (match["what"] or "").startswith("significant")
    digits = int(match["number"]) if match["number"] else decimals_of(limit.limit.text)
    kind = f"{'significant digit' if significant else 'decimal'}{'' if digits == 1 else 's'}"
    words = f"{match['rule']} to {digits} {kind}" + ("" if match["number"] else ", those of the limit")
    return Rule(_EQUATIONS[match["rule"], significant], digits, significant, words)


def decimals_of(text: str) -> int:
    """How many decimals a number was written with.

    Examples
    --------
    >>> decimals_of("0.036"), decimals_of("30"), decimals_of("1E-3")
    (3, 0, 3)
    """
    try:
        exponent = Decimal(text.strip().replace(",", "")).as_tuple().exponent
    except InvalidOperation:
        return 0
    return max(0, -exponent) if isinstance(exponent, int) else 0


def significant_places(value: float, digits: int) -> int:
    """Decimals that show a number with that many significant digits.

    Examples
    --------
    >>> significant_places(0.9778, 2), significant_places(24.06, 3), significant_places(1234.0, 2)
    (2, 1, 0)
    """
    return max(0, digits - 1 - floor(log10(abs(value)))) if value else 0
