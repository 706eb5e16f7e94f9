"""One cell to one value: numbers, choices, units, gases.  A cell that cannot be read is a `Fault`."""

from __future__ import annotations

import re
from dataclasses import dataclass

from reporter.errors import UnitError
from reporter.gases import all_gases, find_gas
from reporter.intake.dates import Fault
from reporter.intake.sheets import ANY, Column, choice_words, fold
from reporter.intake.table import Cell, clean, plain_number
from reporter.units import ReadUnit, convert, dimension, read_unit, spellings_of

_NUMBER = re.compile(r"^[+\-−]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+\-]?\d{1,3})?$")
_GROUPED = re.compile(r"^[+\-−]?\d{1,3}(?:,\d{3})+\.\d+$|^[+\-−]?\d{1,3}(?:,\d{3}){2,}$")
_COMMA = re.compile(r"^[+\-−]?(?=[\d.,' ]*\d[,'])[\d.,' ]*+$")
_WITH_UNIT = re.compile(r"^([+\-−]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+\-]?\d{1,3})?)\s*([^\d\s.,+\-−].*)$")
_ERROR = re.compile(r"^#[A-Z0-9/]+[!?]?$")


#: No number of a test is larger, in whatever unit.
LARGEST = 1e15


@dataclass(frozen=True, slots=True)
class NumberRead:
    """A number with the unit that stood in its own cell, and whether it was stored as text."""

    value: float
    unit: ReadUnit | None = None
    from_text: bool = False


def number_of(cell: Cell) -> NumberRead | Fault:
    """The number a cell holds; a percentage cell gives percent."""
    value = cell.value
    if isinstance(value, bool):
        return Fault("text-for-number", cell.text)
    if isinstance(value, float):
        if cell.percent:
            return NumberRead(value * 100.0, read_unit("%"))
        return NumberRead(value)
    if isinstance(value, str):
        return number_text(clean(value))
    return Fault("text-for-number", cell.text)


def number_text(text: str) -> NumberRead | Fault:
    """The number a text holds, with its unit if a known one follows; a lone comma is asked about."""
    plain = _plain(text)
    if plain is not None:
        return NumberRead(plain, from_text=True)
    if _GROUPED.match(text):
        return NumberRead(float(text.replace(",", "").replace("−", "-")), from_text=True)
    if _COMMA.match(text):
        return Fault("ambiguous-number", text)
    if _ERROR.match(text):
        return Fault("error-value", text)
    match = _WITH_UNIT.match(text)
    if match:
        try:
            return NumberRead(float(match[1].replace("−", "-")), read_unit(match[2]), from_text=True)
        except UnitError:
            pass
    return Fault("text-for-number", text)


def _plain(text: str) -> float | None:
    if not _NUMBER.match(text):
        return None
    value = float(text.replace("−", "-"))
    return value if abs(value) < float("inf") else None


def unit_of(text: str, column: Column) -> ReadUnit | Fault:
    """The unit a text names, held against the dimensions of the column."""
    known = ", ".join(name for d in column.dimensions if d != ANY for name in spellings_of(d) if name)
    expected = f"one of: {known}" if known else ""
    try:
        found = read_unit(text)
    except UnitError:
        return Fault("unknown-unit", text, expected)
    if column.dimensions and ANY not in column.dimensions and dimension(found.unit) not in column.dimensions:
        return Fault("wrong-dimension", f"{text} ({dimension(found.unit).replace('_', ' ')})", expected)
    return found


def choice_of(cell: Cell, column: Column) -> str | Fault:
    """The choice a cell names, in the spelling of the column."""
    wanted = fold(cell.text)
    for choice in column.choices:
        if wanted == fold(choice):
            return choice
    raw = cell.text.casefold()
    for choice in column.choices:
        words = choice_words().get(choice, ())
        if wanted in words or raw in words:
            return choice
    return Fault("not-a-choice", cell.text, "one of: " + ", ".join(column.choices))


def gas_of(cell: Cell) -> str | Fault:
    """The key of the gas a cell names."""
    found = find_gas(cell.text)
    if found is None:
        return Fault("unknown-gas", cell.text, "one of: " + ", ".join(gas.label for gas in all_gases()))
    return found.key


def out_of_range(value: float, unit: ReadUnit | None, column: Column) -> Fault | None:
    """Why a number cannot be right for its column, if it cannot; the bounds are said in the unit it stands in."""
    low, high = _bounds(unit, column)
    if abs(value) > LARGEST:
        return Fault("out-of-range", f"{value:g}", f"a number not beyond {LARGEST:g}")
    slack = 1e-9 * abs(value)
    if (low is None or value >= low - slack) and (high is None or value <= high + slack):
        return None
    suffix = unit.unit if unit else ""
    bounds = f"from {_plain_bound(low)}" if low is not None else ""
    bounds += f" to {_plain_bound(high)}" if high is not None else ""
    return Fault("out-of-range", f"{value:g} {suffix}".strip(), f"a value {bounds.strip()} {suffix}".strip())


def _plain_bound(bound: float) -> str:
    return plain_number(float(f"{bound:.4g}"))


def _bounds(unit: ReadUnit | None, column: Column) -> tuple[float | None, float | None]:
    """Lowest and highest value of a column in a unit; no part of a gas is more than all of it."""
    low, high = column.minimum, column.maximum
    if unit is None:
        return low, high
    if column.unit_from and dimension(unit.unit) == "fraction":
        return low, convert(100.0, "%", unit.unit)
    if not column.us:
        return low, high
    if dimension(unit.unit) != dimension(column.us):  # the bounds are those of the column's first dimension
        return (None if low is None else min(low, 0.0)), None
    return (
        None if low is None else convert(low, column.us, unit.unit),
        None if high is None else convert(high, column.us, unit.unit),
    )


def perhaps_fraction(value: float, unit: ReadUnit | None, column: Column) -> Fault | None:
    """Whether a percentage is so small that it may have been meant as a fraction."""
    below = column.fraction_below
    if below is None or unit is None or unit.unit != "%" or not 0.0 < value < below:
        return None
    return Fault("ambiguous-moisture", f"{value:g}, which may mean {value:g} or {value * 100:g} percent")
