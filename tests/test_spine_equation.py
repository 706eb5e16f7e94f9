"""An equation is written once: every kind of number it is given agrees with every other."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from uncertainties import ufloat

from reporter import functions as f
from reporter.basis import DRY, WET, Basis, Moisture, Need
from reporter.equation import Citation, Equation, System, Value, constant, equation
from reporter.errors import BasisError, EquationError, LedgerError, UnitError
from reporter.trace import Name, Terms
from reporter.typeset import sheet_formula, text_formula
from reporter.units import quantity

_CITE = Citation("practice", "1", "Eq. 1")


@equation("r", "ppm", {"c": "ppm", "x": "%"}, _CITE, needs={"c": Need(moisture=Moisture.DRY)}, gives="c")
def referenced(*, c: Value, x: Value, k: Value = constant(20.9, "%", "k")) -> Value:
    """A concentration referred to 15 % of the oxygen of air."""
    return c * (k - 0.15 * k) / (k - x)


@equation("m", "*c", {"readings": "*c", "offset": "*c"}, _CITE, series=("readings",))
def shifted_mean(*, readings: Value, offset: Value) -> Value:
    """Mean of readings less an offset."""
    return f.mean(readings - offset)


@equation("s", "*c", {"readings": "*c"}, _CITE, series=("readings",))
def rms(*, readings: Value) -> Value:
    """Root of the mean of squares."""
    return f.mean(readings**2.0) ** 0.5


@equation("q", "1", {"a": "1", "b": "1"}, _CITE)
def quotient(*, a: Value, b: Value) -> Value:
    """A quotient."""
    return a / b


@equation("q", "1", {"a": "1", "b": "1"}, _CITE)
def nested(*, a: Value, b: Value) -> Value:
    """A quotient of a quotient."""
    return a / (a / b)


@equation("p", "1", {"a": "1"}, _CITE)
def root(*, a: Value) -> Value:
    """A root."""
    return a**0.5


@equation("w", "lb/h", {"e": "lb/MMBtu", "h": "MMBtu/h"}, _CITE)
def rate(*, e: Value, h: Value) -> Value:
    """A mass rate."""
    return e * h


@equation("met", "1", {"a": "1", "b": "1"}, _CITE, indicator=True)
def root_at_most(*, a: Value, b: Value) -> Value:
    """Whether a root is at most a bound."""
    return f.at_most(a**0.5, b)


def test_kinds_agree() -> None:
    c, x = 31.5, 4.25
    plain = referenced(c=c, x=x)
    assert plain == pytest.approx(31.5 * 20.9 * 0.85 / (20.9 - 4.25), rel=1e-15)
    array = referenced(c=np.array([c, 2 * c]), x=np.array([x, x]))
    assert array.tolist() == [plain, 2 * plain]
    pint = referenced(c=quantity(c, "ppm"), x=quantity(x, "%"))
    assert pint.magnitude == pytest.approx(plain, rel=1e-12)
    uncertain = referenced(c=ufloat(c, 0.1), x=ufloat(x, 0.05))
    assert uncertain.nominal_value == pytest.approx(plain, rel=1e-15)
    # GUM, clause 5.1.2: the sum of the squares of each sensitivity times its standard uncertainty
    expected = plain * math.hypot(0.1 / c, 0.05 / (20.9 - x))
    assert uncertain.std_dev == pytest.approx(expected, rel=1e-12)


def test_quantities_are_taken_in_other_units_of_the_dimension() -> None:
    pint = referenced(c=quantity(31_500.0, "ppb"), x=quantity(0.0425, "1"))
    assert pint.magnitude == pytest.approx(referenced(c=31.5, x=4.25), rel=1e-12)
    assert rate(e=quantity(1.0, "kg/GJ"), h=quantity(1.0, "MW")).to("kg/h").magnitude == pytest.approx(3.6)


def test_draws_agree_with_floats_whatever_else_is_a_plain_number() -> None:
    rng = np.random.default_rng(5)
    readings, offset = (4.0, 5.5, 7.25), 1.5
    drawn = rng.normal(offset, 0.2, 3)
    by_draw = [shifted_mean(readings=readings, offset=float(d)) for d in drawn]
    # as many draws as readings: the two axes must not be taken for one another
    assert shifted_mean(readings=readings, offset=drawn) == pytest.approx(by_draw, rel=1e-14)
    columns = rng.normal(5.0, 1.0, (3, 3))
    by_draw = [shifted_mean(readings=tuple(columns[:, i]), offset=offset) for i in range(3)]
    assert shifted_mean(readings=columns, offset=offset) == pytest.approx(by_draw, rel=1e-14)
    mixed = shifted_mean(readings=(4.0, drawn, 7.25), offset=offset)
    assert mixed == pytest.approx([shifted_mean(readings=(4.0, float(d), 7.25), offset=offset) for d in drawn])


def test_series_kinds_agree() -> None:
    values = (3.0, 4.0, 12.0, 84.0)
    plain = rms(readings=values)
    assert plain == pytest.approx(math.sqrt((9 + 16 + 144 + 7056) / 4), rel=1e-15)
    assert rms(readings=[quantity(v, "ppm") for v in values]).magnitude == pytest.approx(plain, rel=1e-12)
    assert rms(readings=[ufloat(v, 0.1) for v in values]).nominal_value == pytest.approx(plain, rel=1e-14)
    cells = rms(readings=Name("run.1.nox.readings", "C", series=True))
    assert sheet_formula(cells) == (
        "(SUMPRODUCT(ISNUMBER(run.1.nox.readings)*(run.1.nox.readings^2))/COUNT(run.1.nox.readings))^0.5"
    )
    spread = rms(readings=Terms((Name("a.b", "a"), Name("c.d", "c"))))
    assert sheet_formula(spread) == "AVERAGE(a.b^2,c.d^2)^0.5"
    assert text_formula(spread) == "mean(a^2, c^2)^(1/2)"


def test_printed_constants_are_those_of_the_unit_system() -> None:
    @equation("t", ("°R", "K"), {"t": ("°F", "°C")}, _CITE)
    def absolute_temperature(*, t: Value, zero: Value = constant(460.0, ("°R", "K"), "T_0", si=273.0)) -> Value:
        """An absolute temperature with printed zero points."""
        return t + zero

    assert absolute_temperature(t=68.0) == 528.0
    assert absolute_temperature.in_system(System.SI)(t=20.0) == 293.0
    assert absolute_temperature.system is System.US
    assert absolute_temperature(t=68.0, zero=459.67) == pytest.approx(527.67, rel=1e-15)


@pytest.mark.parametrize("bad", [0.0, math.nan, math.inf])
def test_no_finite_value_is_an_error_with_the_inputs(bad: float) -> None:
    with pytest.raises(EquationError) as caught:
        quotient(a=1.0, b=bad) if bad == 0.0 else quotient(a=bad, b=1.0)
    assert "quotient" in caught.value.message
    assert f"{bad}" in caught.value.place


def test_a_hidden_division_by_zero_is_no_silent_zero() -> None:
    for zero in (0.0, np.float64(0.0), np.array([1.0, 0.0])):
        with pytest.raises(EquationError):
            nested(a=1.0 + zero * 0.0, b=zero)
    with pytest.raises(EquationError):
        quotient(a=quantity(1.0, "1"), b=quantity(0.0, "1"))


@pytest.mark.parametrize("number", [-4.0, np.array([1.0, -4.0]), quantity(-4.0, "1"), ufloat(-4.0, 0.1)], ids=str)
def test_complex_results_are_refused(number: Any) -> None:
    with pytest.raises(EquationError):
        root(a=number)


def test_a_complex_number_inside_a_comparison_is_refused_too() -> None:
    with pytest.raises(EquationError):
        root_at_most(a=-4.0, b=1.0)


def test_overflow_is_refused() -> None:
    @equation("x", "1", {"a": "1"}, _CITE)
    def grown(*, a: Value) -> Value:
        """An exponential."""
        return f.exp(a)

    for number in (1e4, np.array([1e4])):
        with pytest.raises(EquationError):
            grown(a=number)


def test_quantities_of_the_wrong_dimension_cannot_pass() -> None:
    with pytest.raises(UnitError):
        rate(e=quantity(1.0, "lb/MMBtu"), h=quantity(1.0, "lb/h"))
    with pytest.raises(UnitError):
        shifted_mean(readings=(quantity(1.0, "ppm"), quantity(2.0, "ppm")), offset=quantity(1.0, "kg"))


def test_arguments_are_checked_by_name() -> None:
    with pytest.raises(TypeError, match="keyword"):
        quotient(1.0, 2.0)  # type: ignore[misc]
    with pytest.raises(TypeError, match="missing"):
        quotient(a=1.0)  # type: ignore[call-arg]
    with pytest.raises(TypeError, match="unknown"):
        quotient(a=1.0, b=2.0, c=3.0)  # type: ignore[call-arg]
    with pytest.raises(TypeError, match="no unit"):
        equation("x", "1", {}, _CITE)(lambda *, a: a)


def test_units_and_bases_are_checked() -> None:
    assert referenced.units_of({"c": "ppm", "x": "%"}, System.US) == "ppm"
    assert shifted_mean.units_of({"readings": "%", "offset": "%"}, System.US) == "%"
    with pytest.raises(LedgerError, match="must be in ppm"):
        referenced.units_of({"c": "%", "x": "%"}, System.US)
    with pytest.raises(LedgerError, match="must be in %"):
        shifted_mean.units_of({"readings": "%", "offset": "ppm"}, System.US)
    assert referenced.basis_of({"c": DRY, "x": Basis()}, {}) == DRY
    with pytest.raises(BasisError, match="dry, but is wet"):
        referenced.basis_of({"c": WET, "x": Basis()}, {})


KINDS: dict[str, Any] = {
    "float": lambda v: v,
    "array": lambda v: np.array([v, v]),
    "pint": lambda v: quantity(v, "1"),
    "uncertain": lambda v: ufloat(v, 0.01),
}


@pytest.mark.parametrize("kind", KINDS)
def test_the_few_functions_take_every_kind(kind: str) -> None:
    make = KINDS[kind]
    a, b = make(0.75), make(-2.5)
    cases = [
        (f.absolute(b), 2.5),
        (f.exp(a), math.exp(0.75)),
        (f.ln(a), math.log(0.75)),
        (f.log10(a), math.log10(0.75)),
        (f.lower(a, b), -2.5),
        (f.higher(a, b), 0.75),
        (f.mean((a, b)), -0.875),
        (f.total((a, b)), -1.75),
        (f.dot((a, b), (b, a)), -3.75),
        (f.count((a, b)), 2.0),
        (f.at_most(b, a), 1.0),
        (f.at_least(b, a), 0.0),
        (f.less_than(b, a), 1.0),
        (f.choose(f.at_most(b, a), a, b), 0.75),
        (f.half_up(b, 0.0), -3.0),
        (f.half_even(b, 0.0), -2.0),
        (f.truncated(b, 0.0), -2.0),
        (f.significant_decimals(a, 3.0), 3.0),
    ]
    for found, expected in cases:
        number = getattr(found, "magnitude", getattr(found, "nominal_value", found))
        assert np.all(np.isclose(number, expected, rtol=1e-14, atol=0)), (found, expected)


def test_extremes_of_one_series_are_numbers() -> None:
    assert f.lower((3.0, 1.0, 2.0)) == 1.0
    assert f.higher(np.array([3.0, 1.0, 2.0])) == 3.0
    assert f.higher((ufloat(1.0, 0.1), ufloat(2.0, 0.2))).nominal_value == 2.0


def test_flags() -> None:
    assert [f.all_of((1.0, 1.0)), f.all_of((1.0, 0.0)), f.any_of((0.0, 1.0)), f.any_of((0.0, 0.0))] == [1, 0, 1, 0]
    drawn = np.array([1.0, 0.0, 1.0])
    assert f.all_of((drawn, 1.0)).tolist() == [1.0, 0.0, 1.0]
    assert f.any_of((drawn, 0.0)).tolist() == [1.0, 0.0, 1.0]


@pytest.mark.parametrize(
    ("value", "bound", "at_most", "at_least", "less_than"),
    [
        # On paper 1.9/95 is 2 %, and 0.2/10 is 2 %: on the bound, whatever the binary fractions are.
        (100.0 * (47.0 - 45.1) / 95.0, 2.0, 1.0, 1.0, 0.0),
        (100.0 * (10.3 - 10.1) / 10.0, 2.0, 1.0, 1.0, 0.0),
        (0.1 + 0.2, 0.3, 1.0, 1.0, 0.0),
        (2.00001, 2.0, 0.0, 1.0, 0.0),
        (1.99999, 2.0, 1.0, 0.0, 1.0),
        (-2.00001, -2.0, 1.0, 0.0, 1.0),
        (0.0, 0.0, 1.0, 1.0, 0.0),
        (-1e-7, 0.0, 1.0, 0.0, 1.0),
    ],
)
def test_a_number_on_its_bound_on_paper_is_on_it(
    value: float, bound: float, at_most: float, at_least: float, less_than: float
) -> None:
    assert f.at_most(value, bound) == at_most
    assert f.at_least(value, bound) == at_least
    assert f.less_than(value, bound) == less_than


@pytest.mark.parametrize(
    ("rule", "value", "decimals", "expected"),
    [
        (f.half_up, 2.5, 0, 3.0),
        (f.half_up, -2.5, 0, -3.0),
        (f.half_up, 1.005, 2, 1.01),
        (f.half_up, (0.1 + 0.2) * 10 - 0.5, 0, 3.0),
        (f.half_up, 1249.0, -2, 1200.0),
        (f.half_up, -0.2, 0, 0.0),
        (f.half_even, 2.5, 0, 2.0),
        (f.half_even, 3.5, 0, 4.0),
        (f.half_even, 2.345, 2, 2.34),
        (f.half_even, 2.355, 2, 2.36),
        (f.half_even, 2.3451, 2, 2.35),
        (f.half_even, -0.5, 0, 0.0),
        (f.truncated, 2.999, 2, 2.99),
        (f.truncated, 0.3 + 0.3 + 0.3, 1, 0.9),
        (f.truncated, -1.29, 1, -1.2),
    ],
)
def test_rounding_is_that_of_paper(rule: Any, value: float, decimals: int, expected: float) -> None:
    found = rule(value, float(decimals))
    assert found == expected
    assert math.copysign(1.0, found) == math.copysign(1.0, expected)


def test_significant_digits() -> None:
    assert [f.significant_decimals(v, 3.0) for v in (0.0321, 1.0, 999.0, 1000.0, -12345.0)] == [4, 2, 0, -1, -2]
    with pytest.raises(EquationError):
        equation("x", "1", {"v": "1"}, _CITE)(lambda *, v: f.significant_decimals(v, 3.0))(v=0.0)


def test_an_equation_keeps_its_description() -> None:
    assert isinstance(referenced, Equation)
    assert referenced.summary == "A concentration referred to 15 % of the oxygen of air"
    assert referenced.parameters["k"].constant is not None
    assert text_formula(referenced.symbols()) == "c · (k − 0.15 · k) / (k − x)"
