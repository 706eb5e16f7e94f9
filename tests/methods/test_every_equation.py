"""What holds for each equation of the methods: quantities, tracing, docstring, citation."""

from __future__ import annotations

import importlib
import inspect
import pkgutil
import random
import re
from typing import Any

import numpy as np
import pytest
from uncertainties import ufloat

import reporter.methods
from reporter.conversions import conversion_equation
from reporter.equation import Equation, Parameter, System, unit_in
from reporter.functions import FUNCTIONS
from reporter.references import bibliography
from reporter.trace import Term
from reporter.typeset import html_formula, sheet_formula, text_formula
from reporter.units import quantity


def _equations() -> dict[str, Equation[Any]]:
    found: dict[str, Equation[Any]] = {}
    for module in pkgutil.walk_packages(reporter.methods.__path__, "reporter.methods."):
        for name, value in vars(importlib.import_module(module.name)).items():
            if isinstance(value, Equation):
                found[f"{value.body.__module__.rsplit('.', 1)[-1]}.{name}"] = value
    return found


EQUATIONS = _equations()
each_equation = pytest.mark.parametrize("name", sorted(EQUATIONS))
each_system = pytest.mark.parametrize("system", list(System), ids=lambda system: system.value)

#: Plausible ranges by unit; anything else is drawn from 1 to 10.
RANGES = {
    "1": (0.05, 0.3),
    "%": (1.0, 9.0),
    "K": (290.0, 370.0),
    "°R": (520.0, 900.0),
    "kPa": (95.0, 105.0),
    "inHg": (28.0, 31.0),
    "mmHg": (700.0, 780.0),
    "ft3/MMBtu": (1000.0, 10000.0),
    "m3/J": (2e-8, 3e-7),
}
VARIABLES = {"*c": "ppm", "*v": "lb/h", "*p": "kPa", "*q": "ft3/h"}


def _number(name: str, unit: str, rng: random.Random) -> float:
    if name in ("decimals", "digits"):
        return 2.0
    if name in ("k", "certified", "upscale"):
        return rng.uniform(20.5, 21.0)
    return rng.uniform(*RANGES.get(unit, (1.0, 10.0)))


def _drawn(eq: Equation[Any], system: System, rng: random.Random) -> tuple[dict[str, Any], dict[str, Any]]:
    plain: dict[str, Any] = {}
    with_units: dict[str, Any] = {}
    for name, parameter in eq.parameters.items():
        if parameter.constant is not None:
            continue
        unit = _unit(parameter, system)
        values = [_number(name, unit, rng) for _ in range(3)]
        plain[name] = values if parameter.series else values[0]
        quantities = [quantity(value, unit) for value in values]
        with_units[name] = quantities if parameter.series else quantities[0]
    return plain, with_units


def _unit(parameter: Parameter, system: System) -> str:
    unit = unit_in(parameter.unit, system)
    return VARIABLES.get(unit, unit)


@each_system
@each_equation
def test_quantities_give_the_float_result(name: str, system: System) -> None:
    eq = EQUATIONS[name]
    rng = random.Random(f"{name} {system.value}")
    for _ in range(5):
        plain, with_units = _drawn(eq, system, rng)
        expected = eq.evaluate(plain, system)
        result = eq.evaluate(with_units, system)
        wanted = VARIABLES.get(unit_in(eq.unit, system), unit_in(eq.unit, system))
        in_unit = result.to(quantity(1.0, wanted).units).magnitude
        assert in_unit == pytest.approx(expected, rel=1e-12, abs=0)


def _nominal(value: Any) -> float:
    return float(getattr(value, "nominal_value", value))


@each_equation
def test_uncertain_numbers_keep_the_float_result(name: str) -> None:
    eq = EQUATIONS[name]
    plain, _ = _drawn(eq, System.US, random.Random(name))
    uncertain = {
        key: [ufloat(v, 0.001 * v) for v in value] if isinstance(value, list) else ufloat(value, 0.001 * value)
        for key, value in plain.items()
        if key not in ("decimals", "digits")
    }
    found = eq.evaluate(plain | uncertain, System.US)
    assert _nominal(found) == pytest.approx(eq.evaluate(plain, System.US), rel=1e-12, abs=0)


@each_equation
def test_draws_are_computed_one_by_one(name: str) -> None:
    eq = EQUATIONS[name]
    rng = random.Random(name)
    each = [_drawn(eq, System.US, rng)[0] for _ in range(4)]
    fixed = {key: each[0][key] for key in ("decimals", "digits") if key in each[0]}
    together = {key: np.array([draw[key] for draw in each]).T for key in each[0] if key not in ("decimals", "digits")}
    if fixed and "digits" in fixed:
        pytest.skip("a number of significant digits belongs to one number, not to draws")
    found = eq.evaluate(together | fixed, System.US)
    expected = [eq.evaluate(draw | fixed, System.US) for draw in each]
    assert list(found) == pytest.approx(expected, rel=1e-12, abs=0)


def test_a_quantity_of_the_wrong_dimension_is_refused() -> None:
    from reporter.errors import UnitError

    eq = EQUATIONS["method_19.eq_19_1"]
    with pytest.raises(UnitError):
        eq(cd=quantity(1e-5, "lb/ft3"), fd=quantity(8710.0, "ft3/MMBtu"), o2=quantity(3.0, "inHg"))


@each_equation
def test_the_formula_prints_in_its_three_forms(name: str) -> None:
    term = EQUATIONS[name].symbols()
    assert isinstance(term, Term)
    assert text_formula(term)
    assert sheet_formula(term)
    assert html_formula(term)


@each_equation
def test_docstring_names_each_parameter_in_order(name: str) -> None:
    eq = EQUATIONS[name]
    assert eq.__doc__ is not None
    section = re.search(r"Parameters\n-+\n(.*?)(?=\n\n[A-Z]\w+\n-+)", eq.__doc__, re.DOTALL)
    assert section is not None, "no Parameters section before Returns"
    lines = [line for line in section.group(1).splitlines() if line and not line.startswith(" ")]
    named = [part.strip() for line in lines for part in line.split(",")]
    assert named == list(inspect.signature(eq.body).parameters)
    assert "Returns\n-------\n" in eq.__doc__


@each_equation
def test_citations_are_in_the_bibliography(name: str) -> None:
    eq = EQUATIONS[name]
    constants = [p.constant.citation for p in eq.parameters.values() if p.constant is not None]
    for citation in (eq.citation, *(c for c in constants if c is not None)):
        assert citation.document in bibliography()


@each_equation
def test_a_body_uses_arithmetic_and_the_allowed_functions_only(name: str) -> None:
    source = inspect.getsource(EQUATIONS[name].body)
    body = source.rsplit('"""', 1)[1]
    called = set(re.findall(r"([A-Za-z_]\w*)\s*\(", body)) - {"return"}
    assert {call.lstrip("_") for call in called} <= set(FUNCTIONS)


@pytest.mark.parametrize(
    ("source", "target", "value", "expected"),
    [
        ("°F", "°C", 212.0, 100.0),
        ("°F", "K", 32.0, 273.15),
        ("°F", "°R", 68.0, 527.67),
        ("°C", "°F", -40.0, -40.0),
        ("°C", "K", 20.0, 293.15),
        ("min", "h", 90.0, 1.5),
        ("lb/h", "kg/h", 1.0, 0.45359237),
        ("ft3/min", "ft3/h", 1.0, 60.0),
        ("%", "1", 12.5, 0.125),
    ],
)
def test_conversions_by_definition_of_the_units(source: str, target: str, value: float, expected: float) -> None:
    eq = conversion_equation(source, target)
    assert eq(value=value) == pytest.approx(expected, rel=1e-14)
    assert eq(value=quantity(value, source)).magnitude == pytest.approx(expected, rel=1e-12)
