"""Tracing and printing: what a traced value refuses, and how trees are printed in the three forms."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest

from reporter import functions as f
from reporter.trace import Name, Number, Term, Terms, as_term, has_series, is_traced
from reporter.typeset import html_formula, number_text, sheet_formula, symbol_html, text_formula

A, B, C = (Name(f"x.{letter}", letter) for letter in "abc")
S = Name("x.s", "s", series=True)
PAIR = Terms((A, B))


@pytest.mark.parametrize(
    "misuse",
    [
        lambda x: bool(x),
        lambda x: x == 1.0,
        lambda x: x != 1.0,
        lambda x: x < 1.0,
        lambda x: x <= 1.0,
        lambda x: x > 1.0,
        lambda x: x >= 1.0,
        lambda x: sorted([1.0, x]),
        lambda x: not x,
        lambda x: x and 1.0,
        lambda x: 1.0 if x else 2.0,
        lambda x: min(x, 1.0),
        lambda x: hash(x),
    ],
)
@pytest.mark.parametrize("operand", [A, PAIR, A + B, -A, f.exp(A)])
def test_a_traced_value_is_neither_compared_nor_true(operand: Any, misuse: Any) -> None:
    with pytest.raises(TypeError):
        misuse(operand)


@pytest.mark.parametrize(
    "misuse",
    [
        lambda: math.exp(A),
        lambda: np.exp(A),
        lambda: abs(A),
        lambda: round(A),
        lambda: float(A),
        lambda: A + np.array([1.0]),
        lambda: np.array([1.0]) * A,
        lambda: A + "text",
        lambda: A + None,
        lambda: A + True,
        lambda: sum(S),
    ],
)
def test_what_would_leave_the_tree_is_refused(misuse: Any) -> None:
    with pytest.raises(TypeError):
        misuse()


def test_plain_numbers_of_numpy_join_the_tree() -> None:
    for tree in (np.float64(2.0) * A, A * np.float64(2.0), A * np.int64(2)):
        assert "2" in sheet_formula(tree)
    assert is_traced(PAIR)
    assert not is_traced(2.0)
    assert as_term(A) is A


@pytest.mark.parametrize(
    ("tree", "sheet", "text"),
    [
        (A + B * C, "x.a + x.b * x.c", "a + b · c"),
        ((A + B) * C, "(x.a + x.b) * x.c", "(a + b) · c"),
        (A - (B - C), "x.a - (x.b - x.c)", "a − (b − c)"),
        (A - B - C, "x.a - x.b - x.c", "a − b − c"),
        (A / (B * C), "x.a / (x.b * x.c)", "a / (b · c)"),
        (A / B * C, "x.a / x.b * x.c", "a / b · c"),
        (A / (B / C), "x.a / (x.b / x.c)", "a / (b / c)"),
        (-A, "(-x.a)", "−a"),
        (-(A + B), "(-(x.a + x.b))", "−(a + b)"),
        ((-A) ** 2.0, "(-x.a)^2", "(−a)^2"),
        (-(A**2.0), "(-(x.a^2))", "−a^2"),
        (A ** (B**C), "x.a^(x.b^x.c)", "a^(b^c)"),
        ((A**B) ** C, "(x.a^x.b)^x.c", "(a^b)^c"),
        (A**-1.0, "x.a^(-1)", "a^(−1)"),
        (A * -2.0, "x.a * (-2)", "a · (−2)"),
        (2.0 - A, "2 - x.a", "2 − a"),
        (2.0 / A, "2 / x.a", "2 / a"),
        (2.0**A, "2^x.a", "2^a"),
        (1e-7 * A, "1E-07 * x.a", "1×10^-7 · a"),
        (Number(1.2e-7) ** A, "1.2E-07^x.a", "(1.2×10^-7)^a"),
        ((A + B) ** 0.5, "(x.a + x.b)^0.5", "(a + b)^(1/2)"),
        (+A, "x.a", "a"),
        (f.absolute(A - B), "ABS(x.a - x.b)", "|a − b|"),
        (f.lower(A, B, 3.0), "MIN(x.a,x.b,3)", "lower of(a, b, 3)"),
        (f.at_most(A, B), "IF(x.a - x.b<=1E-09*ABS(x.b),1,0)", "a ≤ b"),
        (f.at_least(A, B + C), "IF(x.a - (x.b + x.c)>=-1E-09*ABS(x.b + x.c),1,0)", "a ≥ b + c"),
        (f.less_than(A, 0.0), "IF(x.a<0,1,0)", "a < 0"),
        (f.all_of((A, B)), "IF(AND(x.a=1,x.b=1),1,0)", "all of(a, b)"),
        (f.choose(A, B, C), "IF(x.a>=0.5,x.b,x.c)", "choose(a, b, c)"),
        (f.half_up(A, 2.0), "ROUND(x.a*(1+1E-12),2)", "round(a, 2)"),
        (f.truncated(A + B, C), "ROUNDDOWN((x.a + x.b)*(1+1E-12),x.c)", "truncated(a + b, c)"),
        (f.mean(S), "AVERAGE(x.s)", "mean(s)"),
        (f.count(S), "COUNT(x.s)", "count(s)"),
        (f.total(PAIR), "SUM(x.a,x.b)", "sum(a, b)"),
        (f.total((A, 2.0)), "SUM(x.a,2)", "sum(a, 2)"),
        (f.dot(S, S), "SUMPRODUCT(x.s,x.s)", "sum(s · s)"),
        (f.dot(PAIR, PAIR), "x.a * x.a + x.b * x.b", "a · a + b · b"),
        (f.mean((S - A) ** 2.0), "(SUMPRODUCT(ISNUMBER(x.s)*((x.s - x.a)^2))/COUNT(x.s))", "mean((s − a)^2)"),
        (f.mean((PAIR - C) ** 2.0), "AVERAGE((x.a - x.c)^2,(x.b - x.c)^2)", "mean((a − c)^2, (b − c)^2)"),
        (f.higher(S), "MAX(x.s)", "higher of(s)"),
        (f.all_of(S), "IF(MIN(x.s)=1,1,0)", "all of(s)"),
        (f.any_of(f.less_than(PAIR, 0.0)), "IF(OR(IF(x.a<0,1,0)=1,IF(x.b<0,1,0)=1),1,0)", "any of(a < 0, b < 0)"),
    ],
)  # fmt: skip
def test_printed_forms(tree: Term, sheet: str, text: str) -> None:
    assert sheet_formula(tree) == sheet
    assert text_formula(tree) == text
    assert html_formula(tree)


def test_a_series_takes_over_from_a_single_term() -> None:
    for tree in (C - PAIR, PAIR - C, C / PAIR, C**PAIR, 2.0**PAIR, -PAIR, PAIR * PAIR, f.lower(PAIR, C)):
        assert isinstance(tree, Terms)
        assert len(tree) == 2
    assert [sheet_formula(term) for term in C - PAIR] == ["x.c - x.a", "x.c - x.b"]
    with pytest.raises(ValueError, match="argument"):
        PAIR + Terms((A, B, C))


@pytest.mark.parametrize("tree", [f.lower(S, A), f.half_even(S, 1.0), f.choose(S, A, B), f.higher(S + A)])
def test_what_no_range_formula_says_is_refused(tree: Any) -> None:
    with pytest.raises(TypeError, match="range"):
        sheet_formula(f.mean(tree) if has_series(tree) else tree)


def test_deep_trees_print_in_a_moment() -> None:
    tree: Any = A
    for _ in range(200):
        tree = (tree * B) - C
    assert text_formula(tree).count("·") == 200
    assert sheet_formula(tree).count("*") == 200


@pytest.mark.parametrize("value", [0.1, 1 / 3, 1e-300, 1.194e-7, 385.3, 1e22, 2.0**60, 123456789012345.0, -0.0])
def test_numbers_are_printed_so_that_the_same_double_is_read_back(value: float) -> None:
    assert float(number_text(value)) == value


def test_html_is_typeset_and_escaped() -> None:
    markup = html_formula((A - B) / C, lambda name: symbol_html({"a": "C_O2", "b": "x<y", "c": "%O2_w"}[name.symbol]))
    assert '<span class="frac">' in markup
    assert "<i>C</i><sub>O<sub>2</sub></sub>" in markup
    assert "x&lt;y" in markup
    assert html_formula(A**0.5) == "<i>a</i><sup>1/2</sup>"
    assert html_formula(A**B, lambda name: {"a": "12.5", "b": "3"}[name.symbol]) == "12.5<sup>3</sup>"
    assert html_formula(f.less_than(A, B)) == "<i>a</i> &lt; <i>b</i>"


def test_negative_numbers_put_in_are_bracketed() -> None:
    values = {"a": "−3.2", "b": "5"}
    assert text_formula(B - A, lambda name: values[name.symbol]) == "5 − (−3.2)"
    assert text_formula(A**2.0, lambda name: values[name.symbol]) == "(−3.2)^2"
