"""The highest or lowest result among the runs that count, for limits that each run is compared with."""

from __future__ import annotations

from reporter.equation import Citation, Value, equation
from reporter.functions import choose, higher, lower


@equation(
    "x_max",
    "*v",
    {"values": "*v", "flags": "1"},
    Citation("record", "", "each run is compared"),
    symbols={"values": "x", "flags": "v"},
    gives="values",
    series=("values", "flags"),
)
def highest_of_valid(*, values: Value, flags: Value) -> Value:
    """The highest result among the runs that count.

    Parameters
    ----------
    values
        Result of each run [any unit], a series.
    flags
        1 where the run counts, else 0 [1], a series.

    Returns
    -------
    float
        Highest [same unit and basis]; the lowest of all where no run counts.
    """
    return higher(choose(flags, values, lower(values)))


@equation(
    "x_min",
    "*v",
    {"values": "*v", "flags": "1"},
    Citation("record", "", "each run is compared"),
    symbols={"values": "x", "flags": "v"},
    gives="values",
    series=("values", "flags"),
)
def lowest_of_valid(*, values: Value, flags: Value) -> Value:
    """The lowest result among the runs that count.

    Parameters
    ----------
    values
        Result of each run [any unit], a series.
    flags
        1 where the run counts, else 0 [1], a series.

    Returns
    -------
    float
        Lowest [same unit and basis]; the highest of all where no run counts.
    """
    return lower(choose(flags, values, higher(values)))
