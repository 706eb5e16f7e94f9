"""What holds for each equation of the balance: quantities, draws, uncertainty, tracing, docstring, citation."""

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

import reporter.combustion
from reporter.equation import Equation, System, unit_in
from reporter.functions import FUNCTIONS
from reporter.references import bibliography
from reporter.trace import Term
from reporter.typeset import html_formula, sheet_formula, text_formula
from reporter.units import quantity


def _equations() -> dict[str, Equation[Any]]:
    found: dict[str, Equation[Any]] = {}
    for module in pkgutil.walk_packages(reporter.combustion.__path__, "reporter.combustion."):
        for name, value in vars(importlib.import_module(module.name)).items():
            if isinstance(value, Equation) and value.body.__module__ == module.name:
                found[f"{module.name.rsplit('.', 1)[-1]}.{name}"] = value
    return found


EQUATIONS = _equations()
each_equation = pytest.mark.parametrize("name", sorted(EQUATIONS))
VARIABLES = {"*f": "mol/kg", "*t": "mol/mol", "*v": "kJ/kg", "*c": "ppm", "*r": "kg/h"}


def _unit(unit: str) -> str:
    return VARIABLES.get(unit, unit)


def _drawn(eq: Equation[Any], system: System, rng: random.Random) -> tuple[dict[str, Any], dict[str, Any]]:
    plain: dict[str, Any] = {}
    with_units: dict[str, Any] = {}
    for name, parameter in eq.parameters.items():
        if parameter.constant is not None:
            continue
        unit = _unit(unit_in(parameter.unit, system))
        # Below one third: 1 - 3 x stays positive; the square term is negative in nature.
        values = [rng.uniform(0.1, 0.3) * (-1.0 if name == "square" else 1.0) for _ in range(3)]
        if name == "linear":
            values = [value + 3.0 for value in values]
        plain[name] = values if parameter.series else values[0]
        quantities = [quantity(value, unit) for value in values]
        with_units[name] = quantities if parameter.series else quantities[0]
    return plain, with_units


def test_there_are_equations() -> None:
    assert len(EQUATIONS) > 80


@pytest.mark.parametrize("system", list(System), ids=lambda system: system.value)
@each_equation
def test_quantities_give_the_float_result(name: str, system: System) -> None:
    eq = EQUATIONS[name]
    rng = random.Random(f"{name} {system.value}")
    for _ in range(3):
        plain, with_units = _drawn(eq, system, rng)
        expected = eq.evaluate(plain, system)
        wanted = _unit(unit_in(eq.unit, system))
        found = eq.evaluate(with_units, system).to(quantity(1.0, wanted).units).magnitude
        assert found == pytest.approx(expected, rel=1e-12, abs=1e-15 if eq.difference else 0)


@each_equation
def test_draws_are_computed_one_by_one(name: str) -> None:
    eq = EQUATIONS[name]
    rng = random.Random(name)
    each = [_drawn(eq, System.US, rng)[0] for _ in range(4)]
    together = {key: np.array([draw[key] for draw in each]).T for key in each[0]}
    found = eq.evaluate(together, System.US)
    expected = [eq.evaluate(draw, System.US) for draw in each]
    assert list(found) == pytest.approx(expected, rel=1e-12, abs=1e-15 if eq.difference else 0)


@each_equation
def test_uncertain_numbers_keep_the_float_result(name: str) -> None:
    eq = EQUATIONS[name]
    plain, _ = _drawn(eq, System.US, random.Random(name))
    uncertain = {
        key: [ufloat(v, 0.001) for v in value] if isinstance(value, list) else ufloat(value, 0.001)
        for key, value in plain.items()
    }
    found = eq.evaluate(uncertain, System.US)
    assert found.nominal_value == pytest.approx(eq.evaluate(plain, System.US), rel=1e-12, abs=1e-15)
    assert found.std_dev > 0


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
    body = inspect.getsource(EQUATIONS[name].body).rsplit('"""', 1)[1]
    called = set(re.findall(r"([A-Za-z_]\w*)\s*\(", body)) - {"return"}
    assert called <= set(FUNCTIONS)
