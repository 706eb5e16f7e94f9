"""How numbers, units and moments are written for people: rounded once, here.

Rounding for print is half to even on the decimal value of the number, taken with 15 significant digits, so that
the binary residue of a mean decides nothing.  A minus is a true minus, and groups of three digits are set apart
by a narrow space from 10 000 on.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from datetime import date, datetime
from decimal import ROUND_HALF_EVEN, Decimal

from reporter.errors import LedgerError
from reporter.ledger import Entry, FromEquation
from reporter.quantities import quantity_of, table

#: Significant digits of a number whose quantity is not in the table.
SIGNIFICANT = 4
_SMALLEST, _GROUPED, _LARGEST = 1e-4, 10_000, 1e7
#: Quantities that need other decimals in one unit than in the rest.
_BY_UNIT = {("static_pressure", "kPa"): 3, ("load", "MW"): 2}
#: The mean of two readings ends on a half: it is printed with one decimal more.
_ONE_MORE = "mean_of_two"
#: A space as wide as a digit (and as a minus), for numbers that are aligned as text.
FIGURE_SPACE = "\u2007"
#: What a moisture without a unit is.
FRACTION = "fraction by volume"
_NARROW = "\u202f"
_POWERS = str.maketrans("23", "²³")
_LOWERED = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_POWER = re.compile(r"(?<=ft|in|[^a-zA-Z]m|cm|mm)[23](?![0-9A-Za-z])|(?<=^m)[23](?![0-9A-Za-z])")
_COUNTED = re.compile(r"([0-9]+) ([a-z ]+?)\(s\)")
_ONE = re.compile(r"(?<![0-9.])1 (decimal|digit|reading|minute|run|significant digit)s\b")
_FORMULA = re.compile(r"(?<![A-Za-z])(in|mm)?(CO2|SO2|NO2|N2O|H2O|H2S|NH3|O2|N2|H2|C3H8|CH4|C2H6)(?![A-Za-z0-9])")


def decimal_value(value: float) -> Decimal:
    """The decimal value of a number: its first 15 significant digits, which a double holds without loss."""
    return Decimal(f"{float(value):.15g}")


def fixed(value: float, decimals: int) -> str:
    """A number with a fixed count of decimals, e.g. ``12.30``."""
    step = Decimal(1).scaleb(-decimals)
    rounded = decimal_value(value).quantize(step, rounding=ROUND_HALF_EVEN)
    if rounded == 0:
        rounded = abs(rounded)
    text = f"{rounded:f}"
    return _grouped(text).replace("-", "−")


def significant(value: float, digits: int) -> str:
    """A number with a count of significant digits; a power of ten only where it is very small or large."""
    size = abs(value)
    if size == 0 or not math.isfinite(size):
        return fixed(value, 0)
    if size < _SMALLEST or size >= _LARGEST:
        mantissa, power = f"{decimal_value(value):.{digits - 1}e}".split("e")
        return f"{mantissa}×10^{int(power)}".replace("-", "−")
    decimals = digits - 1 - math.floor(math.log10(size))
    if decimals >= 0:
        return fixed(value, decimals)
    step = Decimal(1).scaleb(-decimals)
    return _grouped(f"{decimal_value(value).quantize(step, rounding=ROUND_HALF_EVEN):f}").replace("-", "−")


def shortest(value: float, digits: int) -> str:
    """A number with at most a count of significant digits, without zeros at its end, e.g. ``0.215``."""
    text = significant(value, digits)
    head, power, tail = text.partition("×")
    if "." in head:
        head = head.rstrip("0").rstrip(".")
    return f"{head}{power}{tail}"


def shown(entry: Entry) -> str:
    """The printed text of an entry: its own decimals, else those of its quantity in its unit."""
    value = float(entry.value)
    if entry.decimals is not None:
        return fixed(value, max(entry.decimals, 0))
    try:
        found, variants = quantity_of(entry.key)
    except LedgerError:
        return significant(value, SIGNIFICANT)
    own = table().get(variants[-1]) if variants else None
    if own is not None and own.decimals is not None:
        found = own
    decimals = _BY_UNIT.get((found.segment, entry.unit), found.decimals)
    if decimals is None:
        return significant(value, found.significant)
    origin = entry.origin
    return fixed(value, decimals + (isinstance(origin, FromEquation) and origin.equation.name == _ONE_MORE))


def decimals_in(text: str) -> int:
    """The count of digits behind the decimal point of a printed number."""
    return len(text.partition(".")[2]) if text.replace("−", "").replace(_NARROW, "").replace(".", "").isdigit() else 0


def unit_text(unit: str) -> str:
    """A canonical unit as it is printed: ``ft³/MMBtu``, ``in. H₂O``; nothing for a pure number."""
    if unit in {"", "1"}:
        return ""
    text = _POWER.sub(lambda match: match.group().translate(_POWERS), unit)
    return formulas(text).replace("*", "·")


def formulas(text: str) -> str:
    """A text of ours in which the digits of the usual gases' formulas are lowered."""
    return _FORMULA.sub(lambda m: (m.group(1) or "") + m.group(2).translate(_LOWERED), text)


def counted(text: str) -> str:
    """A sentence of ours with its counted words in the right number: ``3 minute(s)`` as ``3 minutes``."""
    text = _COUNTED.sub(lambda m: f"{m[1]} {m[2]}{'' if m[1] == '1' else 's'}", text)
    return _ONE.sub(lambda m: f"1 {m[1]}", text)


def runs_text(names: Sequence[str]) -> str:
    """Runs by name in words, as in ``runs 1, 3, 4``."""
    return f"run{'' if len(names) == 1 else 's'} {', '.join(names)}"


def capital(text: str) -> str:
    """A text with its first letter a capital; the rest as it is."""
    return text[:1].upper() + text[1:]


def moment(value: datetime) -> str:
    """Clock time, e.g. ``09:05``; with seconds where there are some."""
    return value.strftime("%H:%M:%S" if value.second else "%H:%M")


def day(value: date) -> str:
    """A day as year-month-day."""
    return value.strftime("%Y-%m-%d")


def period(start: datetime, end: datetime) -> str:
    """From and until, the day only where it changes."""
    if start.date() == end.date():
        return f"{moment(start)}–{moment(end)}"
    return f"{day(start)} {moment(start)} – {day(end)} {moment(end)}"


def _grouped(text: str) -> str:
    sign = "-" if text.startswith("-") else ""
    whole, point, rest = text.lstrip("-").partition(".")
    if int(whole or 0) >= _GROUPED:
        whole = f"{int(whole):,}".replace(",", _NARROW)
    return f"{sign}{whole}{point}{rest}"
