"""What holds for every equation of the package: quantities agree with floats, and it can be printed."""

from __future__ import annotations

import random
from typing import Any

import numpy as np
import pytest

from reporter.equation import Equation, System, unit_in
from reporter.references import bibliography
from reporter.typeset import html_formula, text_formula
from reporter.units import quantity
from tests.every_equation import all_equations, case

EQUATIONS = all_equations()
#: A unit variable stands for any unit: ppm serves.
ANY = "ppm"


def as_quantities(eq: Equation[Any], values: dict[str, Any], system: System) -> dict[str, Any]:
    made: dict[str, Any] = {}
    for name, value in values.items():
        unit = unit_in(eq.parameters[name].unit, system)
        made[name] = quantity(
            np.array(value) if isinstance(value, tuple) else value, ANY if unit.startswith("*") else unit
        )
    return made


@pytest.mark.parametrize("system", list(System))
@pytest.mark.parametrize("name", EQUATIONS)
def test_quantities_give_the_float_result(name: str, system: System) -> None:
    eq = EQUATIONS[name]
    values, expected = case(random.Random(11), eq, system)
    found = eq.evaluate(as_quantities(eq, values, system), system)
    unit = unit_in(eq.unit, system)
    wanted = quantity(1.0, ANY if unit.startswith("*") else unit).units
    assert found.to(wanted).magnitude == pytest.approx(expected, rel=1e-12, abs=0)


@pytest.mark.parametrize("name", EQUATIONS)
def test_every_equation_can_be_printed_and_cited(name: str) -> None:
    eq = EQUATIONS[name]
    tree = eq.symbols()
    assert text_formula(tree)
    assert html_formula(tree)
    assert eq.summary
    assert eq.citation.document in bibliography()
    for parameter in eq.parameters.values():
        if parameter.constant is not None and parameter.constant.citation is not None:
            assert parameter.constant.citation.document in bibliography()
