"""Every equation of the package, written as a formula, recalculates to its Python value in both unit systems."""

from __future__ import annotations

import random
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
import xlsxwriter

from reporter.equation import Equation, System
from reporter.trace import Name, Term, Terms
from reporter.typeset import sheet_formula
from tests.every_equation import all_equations, case
from tests.spreadsheet import agrees, need_office, recalculated


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
    assert len(expected) > 400
    cells = recalculated({"equations": buffer.getvalue()}, tmp_path)["equations"]["Equations"]
    wrong = [
        (name, system.value, cells.cell(row, column).value, value)
        for row, (name, system, value) in enumerate(expected, 1)
        for column in (1, 2)
        if not agrees(cells.cell(row, column).value, value)
    ]
    assert not wrong, wrong[:5]
