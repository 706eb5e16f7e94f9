"""Mass per unit of output, for limits stated per megawatt-hour."""

from __future__ import annotations

from reporter.equation import Citation, Value, constant, equation

_UNITS = Citation("units")


@equation(
    "e_out",
    ("lb/MWh", "g/kWh"),
    {"rate": ("lb/h", "kg/h"), "output": "MW"},
    Citation("practice", "", "mass rate over output"),
    symbols={"rate": "W", "output": "P"},
    gives="rate",
)
def mass_per_output(
    *,
    rate: Value,
    output: Value,
    scale: Value = constant(1.0, ("MW*h/MWh", "MW*h*g/kg/kWh"), si=1.0, cite=_UNITS),
) -> Value:
    """Mass of a pollutant per unit of output; gross, net or shaft output as the record says.

    Parameters
    ----------
    rate
        Mass rate [lb/h or kg/h].
    output
        Output [MW], not zero.
    scale
        Factor between the units.

    Returns
    -------
    float
        Mass per output [lb/MWh or g/kWh].
    """
    return rate / output * scale
