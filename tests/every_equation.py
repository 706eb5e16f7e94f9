"""Every equation of the package with plausible inputs, for tests that hold for all of them."""

from __future__ import annotations

import importlib
import random
from typing import Any

from reporter.conversions import conversion_equation
from reporter.equation import Equation, Parameter, System, unit_in
from reporter.errors import EquationError
from reporter.resources import PACKAGE
from reporter.units import dimension, spellings_of

#: Plausible values by unit, so that most equations are well within their range.
RANGES = {
    "%": (1.0, 19.0), "ppm": (5.0, 400.0), "1": (0.02, 0.6), "K": (280.0, 480.0), "°F": (60.0, 500.0),
    "°C": (15.0, 250.0), "°R": (520.0, 960.0), "kPa": (95.0, 105.0), "inHg": (28.0, 31.0),
}  # fmt: skip
TRIES = 200
#: One unit of each dimension that is converted.
_DIMENSIONS = (
    "1",
    "K",
    "Pa",
    "m",
    "m2",
    "m3",
    "kg",
    "s",
    "m3/h",
    "kg/h",
    "MW",
    "GJ",
    "kJ/kg",
    "MJ/m3",
    "mg/m3",
    "ng/J",
)


def all_equations() -> dict[str, Equation[Any]]:
    """Every equation of every module, by module and name, each once; and a change of unit to and from each unit."""
    found: dict[int, tuple[str, Equation[Any]]] = {}
    for path in sorted(PACKAGE.rglob("*.py")):
        if "@equation(" not in path.read_text(encoding="utf-8"):
            continue
        module = ".".join(path.relative_to(PACKAGE.parent).with_suffix("").parts)
        for name, value in vars(importlib.import_module(module)).items():
            if isinstance(value, Equation):
                found.setdefault(id(value), (f"{module}.{name}", value))
    return dict(found.values()) | _conversions()


def _conversions() -> dict[str, Equation[Any]]:
    made: dict[str, Equation[Any]] = {}
    for base in _DIMENSIONS:
        for unit in spellings_of(dimension(base)):
            if unit != base:
                made[f"{unit} to {base}"] = conversion_equation(unit, base)
                made[f"{base} to {unit}"] = conversion_equation(base, unit)
    return made


def some_value(pick: random.Random, parameter: Parameter, system: System) -> Any:
    """A plausible value of an argument; 0 or 1 for one that is called a flag."""

    def one() -> float:
        if parameter.name.startswith("flag"):
            return pick.choice((0.0, 1.0))
        return round(pick.uniform(*RANGES.get(unit_in(parameter.unit, system), (1.0, 90.0))), 3)

    return tuple(one() for _ in range(3)) if parameter.series else one()


def case(pick: random.Random, eq: Equation[Any], system: System) -> tuple[dict[str, Any], float]:
    """Inputs for which the equation has a value, and the value."""
    for _ in range(TRIES):
        values = {
            name: some_value(pick, parameter, system)
            for name, parameter in eq.parameters.items()
            if parameter.constant is None
        }
        try:
            return values, eq.evaluate(values, system)
        except EquationError:
            continue
    raise AssertionError(f"no inputs found for which {eq.name} has a value")
