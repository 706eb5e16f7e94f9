"""The ledger: keys, checks of unit and basis, replay with other leaves, correlation by shared leaves."""

from __future__ import annotations

import math
import pickle
from typing import Any

import numpy as np
import pytest
from uncertainties import ufloat

from reporter.basis import DRY, WET, Basis, Moisture, Need
from reporter.equation import Citation, System, Value, constant, equation
from reporter.errors import BasisError, EquationError, LedgerError
from reporter.functions import mean
from reporter.ledger import Entry, FromCells, FromTable, Ledger, Stated, slug
from reporter.problems import Place
from reporter.trace import Name
from reporter.typeset import sheet_formula, text_formula

_CITE = Citation("practice", "1")
HERE = FromCells(Place("field.xlsx", "Runs", "C5"), "12.0")


@equation("d", "*c", {"a": "*c", "b": "*c"}, _CITE, symbols={"a": "C_1", "b": "C_2"}, difference=True)
def difference(*, a: Value, b: Value) -> Value:
    """A difference."""
    return a - b


@equation("q", "1", {"a": "*c", "b": "*c"}, _CITE)
def ratio(*, a: Value, b: Value) -> Value:
    """A ratio."""
    return a / b


@equation("m", "*c", {"series": "*c"}, _CITE, gives="series", series=("series",))
def average(*, series: Value) -> Value:
    """A mean."""
    return mean(series)


@equation("c", "ppm", {"c": "ppm", "o2": "%"}, _CITE, needs={"c": Need(moisture=Moisture.DRY)}, gives="c")
def corrected(*, c: Value, o2: Value, k: Value = constant(20.9, "%", "k")) -> Value:
    """A concentration for another oxygen."""
    return c * k / (k - o2)


@equation("y", "1", {"x": "1"}, _CITE)
def doubled(*, x: Value) -> Value:
    """Each element doubled."""
    return x * 2.0


def filled() -> Ledger:
    ledger = Ledger()
    ledger.enter("run.1.nox.readings", [20.0, 22.0, 24.0], "ppm", HERE, basis=DRY)
    ledger.enter("run.1.o2.mean", 4.0, "%", FromTable(_CITE, "a row"), basis=DRY)
    ledger.apply(average, "run.1.nox.mean", {"series": "run.1.nox.readings"})
    ledger.apply(corrected, "run.1.nox.at_reference", {"c": "run.1.nox.mean", "o2": "run.1.o2.mean"})
    return ledger


def test_entries_are_kept_in_order_with_what_is_known_of_them() -> None:
    ledger = filled()
    assert [entry.key for entry in ledger] == [
        "run.1.nox.readings", "run.1.o2.mean", "run.1.nox.mean", "run.1.nox.at_reference",
    ]  # fmt: skip
    last = ledger["run.1.nox.at_reference"]
    assert last.value == pytest.approx(22.0 * 20.9 / 16.9, rel=1e-15)
    assert (last.unit, last.basis, last.symbol) == ("ppm", DRY, "c")
    assert len(ledger) == 4
    assert "run.1.o2.mean" in ledger
    assert ledger.get("run.1.o2") is None
    assert [entry.key for entry in ledger.under("run.1.o2")] == ["run.1.o2.mean"]
    ledger.annotate("run.1.o2.mean", "first")
    ledger.annotate("run.1.o2.mean", "second")
    assert ledger["run.1.o2.mean"].note == "first; second"


@pytest.mark.parametrize(
    "key",
    ["", "Run.1", "1.run", "run..1", "run.1.", ".run", "run 1", "run-1", "rün", "x." * 110 + "x",
     "a1", "xfd1048576", "r1c1", "r", "rc", "true"],
)  # fmt: skip
def test_ill_formed_keys_are_refused(key: str) -> None:
    with pytest.raises(LedgerError, match="is not a key"):
        Ledger().enter(key, 1.0, "1", HERE)


@pytest.mark.parametrize("key", ["run", "run.1", "a1.b2", "x", "run.1.nox.at_reference.limit_3", "abcd1"])
def test_well_formed_keys(key: str) -> None:
    assert Ledger().enter(key, 1.0, "1", HERE).key == key


def test_a_key_is_used_once() -> None:
    ledger = filled()
    with pytest.raises(LedgerError, match="taken"):
        ledger.enter("run.1.o2.mean", 5.0, "%", HERE)
    with pytest.raises(LedgerError, match="no entry"):
        ledger["run.9"]
    with pytest.raises(LedgerError, match="no entry"):
        ledger.apply(ratio, "x.y", {"a": "run.9", "b": "run.1.o2.mean"})


@pytest.mark.parametrize("value", [math.nan, math.inf, [1.0, math.nan], []])
def test_only_finite_numbers_are_entered(value: Any) -> None:
    with pytest.raises(LedgerError, match="finite"):
        Ledger().enter("x.y", value, "1", HERE)


def test_units_and_bases_are_checked() -> None:
    ledger = filled()
    ledger.enter("wet.nox", 20.0, "ppm", HERE, basis=WET)
    with pytest.raises(LedgerError, match="must be in ppm, but is in %"):
        ledger.apply(corrected, "x.y", {"c": "run.1.o2.mean", "o2": "run.1.o2.mean"})
    with pytest.raises(LedgerError, match="must be in ppm, but is in %"):
        ledger.apply(ratio, "x.y", {"a": "wet.nox", "b": "run.1.o2.mean"})
    with pytest.raises(BasisError, match="must be dry, but is wet"):
        ledger.apply(corrected, "x.y", {"c": "wet.nox", "o2": "run.1.o2.mean"})
    with pytest.raises(LedgerError, match="entries of one unit"):
        ledger.apply(average, "x.y", {"series": ["wet.nox", "run.1.o2.mean"]})
    with pytest.raises(BasisError, match="entries of one basis"):
        ledger.apply(average, "x.y", {"series": ["wet.nox", "run.1.nox.mean"]})
    with pytest.raises(LedgerError, match="entries of one unit"):
        ledger.apply(average, "x.y", {"series": []})
    assert "x.y" not in ledger


def test_a_series_and_a_number_are_not_taken_for_each_other() -> None:
    ledger = filled()
    with pytest.raises(LedgerError, match="is a series"):
        ledger.apply(average, "x.y", {"series": "run.1.nox.mean"})
    with pytest.raises(LedgerError, match="is one number"):
        ledger.apply(ratio, "x.y", {"a": "run.1.nox.readings", "b": "run.1.nox.mean"})
    each = equation("y", "1", {"x": "1"}, _CITE, series=("x",))(lambda *, x: x * 2.0)
    ledger.enter("a.series", [1.0, 2.0], "1", HERE)
    with pytest.raises(LedgerError, match="gives a series"):
        ledger.apply(each, "x.y", {"x": "a.series"})


def test_names_of_arguments_are_checked() -> None:
    ledger = filled()
    with pytest.raises(TypeError, match="missing"):
        ledger.apply(ratio, "x.y", {"a": "run.1.o2.mean"})
    with pytest.raises(TypeError, match="unknown"):
        ledger.apply(average, "x.y", {"series": "run.1.nox.readings", "more": "run.1.o2.mean"})


def test_an_error_names_key_and_inputs() -> None:
    ledger = filled()
    zero = ledger.enter("zero.o2", 0.0, "%", Stated("none"))
    with pytest.raises(EquationError) as caught:
        ledger.apply(ratio, "x.y", {"a": "run.1.o2.mean", "b": zero})
    assert caught.value.message.startswith("x.y: ")
    assert "b = 0.0" in caught.value.place


def test_a_given_basis_replaces_the_equations() -> None:
    ledger = filled()
    own = Basis(expressed_as="NO2")
    made = ledger.apply(ratio, "x.y", {"a": "run.1.nox.mean", "b": "run.1.nox.mean"}, basis=own)
    assert made.basis == own


def test_replay_with_nothing_changed_gives_the_recorded_values() -> None:
    ledger = filled()
    assert ledger.replay() == {entry.key: entry.value for entry in ledger}


def test_replay_with_changed_leaves_and_results() -> None:
    ledger = filled()
    values = ledger.replay({"run.1.nox.readings": (30.0, 30.0)})
    assert values["run.1.nox.mean"] == 30.0
    assert values["run.1.nox.at_reference"] == pytest.approx(30.0 * 20.9 / 16.9, rel=1e-15)
    values = ledger.replay({"run.1.nox.mean": 10.0})
    assert values["run.1.nox.at_reference"] == pytest.approx(10.0 * 20.9 / 16.9, rel=1e-15)
    assert set(ledger.replay(only=["run.1.nox.mean"])) == {"run.1.nox.mean", "run.1.nox.readings"}


def with_a_shared_leaf() -> Ledger:
    ledger = Ledger()
    ledger.enter("cylinder.mid", 50.0, "ppm", HERE)
    ledger.enter("cylinder.other", 50.0, "ppm", HERE)
    ledger.apply(difference, "same.difference", {"a": "cylinder.mid", "b": "cylinder.mid"})
    ledger.apply(difference, "other.difference", {"a": "cylinder.mid", "b": "cylinder.other"})
    ledger.apply(average, "pair.mean", {"series": ["cylinder.mid", "cylinder.mid"]})
    return ledger


def test_a_shared_leaf_is_one_leaf_in_a_replay_with_uncertainty() -> None:
    values = with_a_shared_leaf().replay(leaf=lambda entry: ufloat(entry.value, 0.5))
    assert values["same.difference"].std_dev == 0.0
    # independent leaves: root of the sum of squares (GUM 5.1.2); one leaf twice in a mean: its own uncertainty
    assert values["other.difference"].std_dev == pytest.approx(0.5 * math.sqrt(2.0), rel=1e-12)
    assert values["pair.mean"].std_dev == pytest.approx(0.5, rel=1e-12)


def test_a_shared_leaf_is_one_leaf_in_a_replay_with_draws() -> None:
    rng = np.random.default_rng(2)
    draws = {key: rng.normal(50.0, 0.5, 20_000) for key in ("cylinder.mid", "cylinder.other")}
    values = with_a_shared_leaf().replay(leaf=lambda entry: draws[entry.key])
    assert np.all(values["same.difference"] == 0.0)
    assert np.std(values["other.difference"]) == pytest.approx(0.5 * math.sqrt(2.0), rel=0.03)
    assert values["pair.mean"] == pytest.approx(draws["cylinder.mid"], rel=1e-14)


def test_a_replay_mixes_draws_and_plain_numbers() -> None:
    ledger = filled()
    drawn = np.array([3.9, 4.0, 4.1])
    values = ledger.replay({"run.1.o2.mean": drawn})
    assert values["run.1.nox.mean"] == 22.0
    assert values["run.1.nox.at_reference"] == pytest.approx(22.0 * 20.9 / (20.9 - drawn), rel=1e-14)


def test_roots_are_the_leaves_an_entry_rests_on() -> None:
    ledger = filled()
    assert ledger.roots(["run.1.nox.at_reference"]) == {"run.1.nox.readings", "run.1.o2.mean"}
    assert ledger.roots(["run.1.nox.mean"], everything=True) == {"run.1.nox.mean", "run.1.nox.readings"}


def test_the_trace_of_an_entry_is_its_formula_in_names_of_entries() -> None:
    ledger = filled()
    tree = ledger.trace(ledger["run.1.nox.at_reference"])
    assert sheet_formula(tree) == "run.1.nox.mean * 20.9 / (20.9 - run.1.o2.mean)"
    assert text_formula(tree) == "c · 20.9 / (20.9 − o2)"
    assert sheet_formula(ledger.trace(ledger["run.1.nox.mean"])) == "AVERAGE(run.1.nox.readings)"
    ledger.apply(average, "both.mean", {"series": ["run.1.nox.mean", "run.1.nox.at_reference"]})
    assert sheet_formula(ledger.trace(ledger["both.mean"])) == "AVERAGE(run.1.nox.mean,run.1.nox.at_reference)"
    with pytest.raises(LedgerError, match="not computed"):
        ledger.trace(ledger["run.1.o2.mean"])


def test_an_entry_says_what_it_is() -> None:
    ledger = filled()
    series, number = ledger["run.1.nox.readings"], ledger["run.1.o2.mean"]
    assert series.is_series
    assert not number.is_series
    assert not number.is_indicator
    assert isinstance(number.name, Name)
    assert (series.name.key, series.name.series) == ("run.1.nox.readings", True)


def test_the_unit_system_sets_the_printed_constants() -> None:
    @equation("t", ("°R", "K"), {"t": ("°F", "°C")}, _CITE)
    def absolute(*, t: Value, zero: Value = constant(460.0, ("°R", "K"), si=273.0)) -> Value:
        """An absolute temperature."""
        return t + zero

    metric = Ledger(System.SI)
    metric.enter("t.stack", 20.0, "°C", HERE)
    assert metric.apply(absolute, "t.absolute", {"t": "t.stack"}).value == 293.0
    assert metric["t.absolute"].unit == "K"
    us = Ledger(System.US)
    us.enter("t.stack", 20.0, "°C", HERE)
    with pytest.raises(LedgerError, match="must be in °F"):
        us.apply(absolute, "t.absolute", {"t": "t.stack"})


@pytest.mark.parametrize(
    ("text", "segment"),
    [
        ("Run 1", "run_1"),
        (" NOx-A ", "nox_a"),
        ("1", "1"),
        ("", "x"),
        ("é", "e"),
        ("№ Ж", "no_u436"),
        ("a.b", "a_b"),
        ("__", "x"),
    ],
)
def test_slugs(text: str, segment: str) -> None:
    assert slug(text) == segment


def test_entries_without_equation_cross_to_another_process() -> None:
    entry = filled()["run.1.o2.mean"]
    assert pickle.loads(pickle.dumps(entry)) == entry


def test_plain_numbers_of_other_libraries_are_entered_as_floats() -> None:
    ledger = Ledger()
    for number, value in enumerate((np.float64(1.5), np.int64(2), 3, True)):
        entry: Entry = ledger.enter(f"x.n{number}", value, "1", HERE)
        assert type(entry.value) is float
    assert ledger.enter("x.array", np.array([1, 2]), "1", HERE).value == (1.0, 2.0)
    assert ledger.apply(doubled, "x.doubled", {"x": "x.n1"}).value == 4.0
