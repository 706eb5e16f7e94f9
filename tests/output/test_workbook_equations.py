"""Every equation of the package, written as a formula, recalculates to its Python value in both unit systems."""

from __future__ import annotations

import importlib
import pkgutil
import random
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
import xlsxwriter

import reporter
from reporter.equation import Equation, Parameter, System, unit_in
from reporter.errors import EquationError
from reporter.trace import Name, Term, Terms
from reporter.typeset import sheet_formula
from tests.spreadsheet import agrees, need_office, recalculated

#: Plausible values by unit, so that most equations are well within their range.
RANGES = {
    "%": (1.0, 19.0), "ppm": (5.0, 400.0), "1": (0.02, 0.6), "K": (280.0, 480.0), "°F": (60.0, 500.0),
    "°C": (15.0, 250.0), "°R": (520.0, 960.0), "kPa": (95.0, 105.0), "inHg": (28.0, 31.0),
}  # fmt: skip
TRIES = 200


def all_equations() -> dict[str, Equation[Any]]:
    """Every equation of every module, by module and name, each once."""
    found: dict[int, tuple[str, Equation[Any]]] = {}
    for module in pkgutil.walk_packages(reporter.__path__, "reporter."):
        if module.name.endswith("__main__"):
            continue
        for name, value in vars(importlib.import_module(module.name)).items():
            if isinstance(value, Equation):
                found.setdefault(id(value), (f"{module.name}.{name}", value))
    return dict(found.values())


def some_value(pick: random.Random, parameter: Parameter, system: System) -> Any:
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


def traced(eq: Equation[Any], values: dict[str, Any], system: System, spread: bool) -> Term:
    """The tree of an equation; a series as a range, or spread out as separate entries."""
    terms: dict[str, Term | Terms] = {}
    for name, value in values.items():
        if isinstance(value, tuple) and spread:
            terms[name] = Terms(tuple(Name(f"{name}.{i}", name) for i in range(len(value))))
        else:
            terms[name] = Name(name, name, series=isinstance(value, tuple))
    return eq.trace(terms, system)


def write_case(sheet: Any, row: int, eq: Equation[Any], values: dict[str, Any], system: System) -> None:
    """One row: the formula with a series spread out, the one with it as a range (where it can be written so),
    then the inputs."""
    cells: dict[str, str] = {}
    column = 3
    for name, value in values.items():
        first = column
        for i, number in enumerate(value if isinstance(value, tuple) else (value,)):
            sheet.write_number(row, column, number)
            cells[f"{name}.{i}"] = xlsxwriter.utility.xl_rowcol_to_cell(row, column)
            column += 1
        cells[name] = xlsxwriter.utility.xl_range(row, first, row, column - 1)
    for at, spread in enumerate((True, False)):
        try:
            formula = sheet_formula(traced(eq, values, system, spread), lambda name: cells[name.key])
        except TypeError:
            assert not spread, eq.name
            formula = f"A{row + 1}"
        sheet.write_formula(row, at, f"={formula}", None, 999.25)


@pytest.mark.libreoffice
def test_every_equation_recalculates_to_its_python_value(tmp_path: Path) -> None:
    need_office()
    pick = random.Random(7)
    buffer = BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True})
    sheet = book.add_worksheet("Equations")
    expected: list[tuple[str, System, float]] = []
    for name, eq in all_equations().items():
        for system in System:
            values, value = case(pick, eq, system)
            write_case(sheet, len(expected), eq, values, system)
            expected.append((name, system, value))
    book.close()
    assert len(expected) > 60
    cells = recalculated({"equations": buffer.getvalue()}, tmp_path)["equations"]["Equations"]
    wrong = [
        (name, system.value, cells.cell(row, column).value, value)
        for row, (name, system, value) in enumerate(expected, 1)
        for column in (1, 2)
        if not agrees(cells.cell(row, column).value, value)
    ]
    assert not wrong, wrong[:5]


def test_every_equation_has_a_line_of_text_and_a_typeset_form() -> None:
    from reporter.typeset import html_formula, text_formula

    for name, eq in all_equations().items():
        tree = eq.symbols()
        assert text_formula(tree), name
        assert html_formula(tree), name
        assert eq.summary, name
        assert eq.citation.text(), name
