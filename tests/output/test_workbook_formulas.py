"""Random expression trees, written as formulas, recalculate in a spreadsheet to their Python value."""

from __future__ import annotations

import math
import random
from collections.abc import Callable
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
import xlsxwriter

from reporter import functions
from reporter.trace import Name, Terms
from reporter.typeset import sheet_formula
from tests.spreadsheet import agrees, need_office, recalculated

SEED, WANTED = 20240611, 600
VALUES = {
    "x.a": 12.34, "x.b": -7.5, "x.c": 0.0031, "x.d": 20.9, "x.e": -2.25, "x.f": 528.0, "x.g": 1.194e-7,
    "x.h": 47.0, "x.i": 45.1, "x.j": 1.0, "x.k": 0.0,
}  # fmt: skip
SERIES = {"s.one": (1.5, 2.25, -0.125, 4.0, 3.3), "s.two": (0.7, 0.6, 0.9, -0.2, 0.1)}
#: A reading left out in the middle of the first series: a blank cell of the range.
GAP = 2
Maker = Callable[[dict[str, Any]], Any]


def leaf(pick: random.Random) -> Maker:
    if pick.random() < 0.25:
        number = pick.choice([2.0, -3.0, 0.5, -0.5, 1e-6, -4e3, 1.0, 7.0])
        return lambda x: number
    name = pick.choice(sorted(VALUES))
    return lambda x: x[name]


def flag(pick: random.Random, depth: int) -> Maker:
    a, b = tree(pick, depth), tree(pick, depth)
    compare = getattr(functions, pick.choice(["at_most", "at_least", "less_than"]))
    if depth > 1 and pick.random() < 0.4:
        others = [flag(pick, depth - 1) for _ in range(pick.randint(1, 3))]
        join = getattr(functions, pick.choice(["all_of", "any_of"]))
        return lambda x: join([other(x) for other in others] + [compare(a(x), b(x))])
    return lambda x: compare(a(x), b(x))


def call(pick: random.Random, depth: int) -> Maker:
    a, b, c = (tree(pick, depth) for _ in range(3))
    places = float(pick.randint(-1, 3))
    rule = getattr(functions, pick.choice(["half_up", "half_even", "truncated"]))
    series, other = pick.choice([("s.one", "s.two"), ("s.two", "s.one")])
    reduce = getattr(functions, pick.choice(["mean", "total", "lower", "higher", "count"]))
    reduce_expression = getattr(functions, pick.choice(["mean", "total"]))
    test = flag(pick, depth)
    return pick.choice(
        [
            lambda x: functions.absolute(a(x)),
            lambda x: functions.exp(a(x) / 1e3),
            lambda x: functions.ln(functions.absolute(a(x)) + 1.0),
            lambda x: functions.log10(functions.absolute(a(x)) + 0.5),
            lambda x: functions.lower(a(x), b(x), c(x)),
            lambda x: functions.higher(a(x), b(x)),
            lambda x: functions.mean((a(x), b(x), c(x))),
            lambda x: functions.total((a(x), b(x))),
            lambda x: functions.choose(test(x), a(x), b(x)),
            lambda x: rule(a(x), places),
            lambda x: functions.significant_decimals(a(x), 3.0),
            lambda x: reduce(x[series]),
            lambda x: functions.dot(x[series], x[other]),
            lambda x: reduce_expression((x[series] - a(x)) ** 2.0 * b(x)),
            lambda x: functions.all_of(functions.at_most(functions.absolute(x[series]), a(x))),
            lambda x: functions.any_of(functions.less_than(x[series] - b(x), -x[series])),
        ]
    )


def power(pick: random.Random, depth: int) -> Maker:
    base = tree(pick, depth)
    if pick.random() < 0.5:
        exponent = pick.choice([2.0, 3.0, -1.0, -2.0])
        return lambda x: base(x) ** exponent
    if pick.random() < 0.5:
        return lambda x: (functions.absolute(base(x)) ** 0.5) ** 2.0
    return lambda x: 2.0 ** (base(x) / 100.0) ** 2.0


def tree(pick: random.Random, depth: int) -> Maker:
    """A random expression as a function of its leaves, so that floats and traced terms go the same way."""
    if depth == 0 or pick.random() < 0.08:
        return leaf(pick)
    kind = pick.random()
    if kind < 0.14:
        operand = tree(pick, depth - 1)
        return lambda x: -operand(x)
    if kind < 0.28:
        return power(pick, depth - 1)
    if kind < 0.52:
        return call(pick, depth - 1)
    a, b = tree(pick, depth - 1), tree(pick, depth - 1)
    return pick.choice(
        [
            lambda x: a(x) + b(x),
            lambda x: a(x) - b(x),
            lambda x: a(x) * b(x),
            lambda x: a(x) / b(x),
            lambda x: a(x) - (b(x) - a(x)),
            lambda x: a(x) / (b(x) / a(x)),
        ]
    )


def floats(shift: float = 0.0) -> dict[str, Any]:
    import numpy as np

    scalars: dict[str, Any] = {name: value * (1.0 + shift) for name, value in VALUES.items()}
    kept = [i for i in range(5) if i != GAP]
    return scalars | {name: np.array([v[i] for i in kept]) * (1.0 + shift) for name, v in SERIES.items()}


def terms() -> dict[str, Any]:
    scalars: dict[str, Any] = {name: Name(name, name) for name in VALUES}
    return scalars | {name: Name(name, name, series=True) for name in SERIES}


def value_of(made: Maker, shift: float = 0.0) -> float | None:
    """The value, or None where it is no finite real number of a sensible size."""
    import numpy as np

    try:
        with np.errstate(all="raise"):
            value = made(floats(shift))
    except (ArithmeticError, ValueError, TypeError):
        return None
    if isinstance(value, (complex, np.ndarray)) or not math.isfinite(value) or abs(value) > 1e120:
        return None
    return float(value)


def sound(made: Maker) -> float | None:
    """The value where it does not hang on the last digits of its leaves."""
    value, near, far = value_of(made), value_of(made, 3e-13), value_of(made, -3e-13)
    if value is None or near is None or far is None or 0.0 < abs(value) < 1e-100:
        return None
    return value if max(abs(near - value), abs(far - value)) <= 1e-10 * abs(value) else None


def write_leaves(book: Any) -> None:
    sheet = book.add_worksheet("Leaves")
    for row, (name, value) in enumerate(VALUES.items()):
        sheet.write_number(row, 0, value)
        book.define_name(name, f"=Leaves!$A${row + 1}")
    for column, (name, values) in enumerate(SERIES.items(), 2):
        for row, value in enumerate(values):
            if row != GAP:
                sheet.write_number(row, column, value)
        letter = "ABCDEF"[column]
        book.define_name(name, f"=Leaves!${letter}$1:${letter}$5")


@pytest.mark.libreoffice
def test_random_trees_recalculate_to_their_python_value(tmp_path: Path) -> None:
    need_office()
    pick = random.Random(SEED)
    buffer = BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True})
    write_leaves(book)
    sheet = book.add_worksheet("Trees")
    expected: list[tuple[str, float]] = []
    while len(expected) < WANTED:
        made = tree(pick, pick.randint(2, 4))
        value = sound(made)
        if value is None:
            continue
        traced = made(terms())
        formula = sheet_formula(traced) if not isinstance(traced, float) else ""
        if not formula or len(formula) > 8000:
            continue
        sheet.write_formula(len(expected), 0, f"={formula}", None, 999.25)
        expected.append((formula, value))
    book.close()
    cells = recalculated({"trees": buffer.getvalue()}, tmp_path)["trees"]["Trees"]
    wrong = [
        (formula, cells.cell(row, 1).value, value)
        for row, (formula, value) in enumerate(expected, 1)
        if not agrees(cells.cell(row, 1).value, value)
    ]
    assert not wrong, f"{len(wrong)} of {len(expected)}: {wrong[:3]}"
    used = " ".join(formula for formula, _ in expected)
    for name in ("(-", "^(", "ROUNDDOWN", "SUMPRODUCT", "ISNUMBER", "AND(", "OR(", "LOG10", "AVERAGE(s."):
        assert name in used


def test_many_arguments_are_nested() -> None:
    many = Terms(tuple(Name(f"x.n{i}", "x") for i in range(450)))
    for function in (functions.total, functions.mean, functions.all_of, functions.lower):
        formula = sheet_formula(function(many))
        inner = formula[formula.rindex("(") :]
        assert inner.count(",") < 255
        assert formula.count("x.n") == 450
