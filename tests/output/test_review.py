"""What a reviewer of a report would object to: bounds worded wrongly, numbers that do not give their result."""

from __future__ import annotations

from collections.abc import Callable
from datetime import UTC, datetime
from functools import cache

import pytest

from reporter.outcome import Outcome
from reporter.output.numbers import runs_text
from reporter.output.view.build import View, build_view
from reporter.output.view.model import Block, Cell
from reporter.output.view.sample import number_text
from reporter.rehearse import Fault
from reporter.terminal import summary
from tests.rehearse.rehearsals import faulty

ISSUED = datetime(2026, 1, 1, tzinfo=UTC)
CO2 = "Carbon dioxide against that expected of the fuel"


@cache
def _wet() -> tuple[Outcome, View]:
    """CO2 read some 2 % below the line of the fuel (1.17 times less), so that one criterion of each kind is missed."""
    _, outcome = faulty(Fault.WET_CALLED_DRY)
    return outcome, build_view(outcome, ISSUED, "0.1.0")


def _block(view: View, title: str) -> Block:
    return next(block for block in view.sections["criteria"] if block.title == title)


def _texts(block: Block) -> list[str]:
    return [cell.text for row in block.tables[0].rows for cell in row.cells if isinstance(cell, Cell)]


def test_a_difference_below_zero_is_held_against_a_bound_on_both_sides() -> None:
    """-1.96 % is "at most 0.39 %": the criterion is on the magnitude, and its words say so."""
    outcome, view = _wet()
    block = _block(view, CO2)
    words = block.text[0].replace("\u00a0", " ")
    assert words.startswith("Within ±0.39 % (JCGM 100, § 5.1.2). Value: [%] Δ = C_1 − C_2. The bound is ")
    assert all("at most" not in text for text in _texts(block))
    assert all("is not met" in text and "\t−1.9" in text for text in _texts(block))
    assert [line for line in view.quality.not_met if line.startswith("CO₂") and "within ±0.39" in line]
    assert " where within ±0.3" in " ".join(summary(outcome).split())


def test_both_ends_of_a_range_are_named_where_one_is_missed() -> None:
    """A fuel factor of 2.18 is above 1.836 and above 1.600 (Method 3B, Table 3B-1): the same value, two answers."""
    texts = [text.partition("\t")[0] for text in _texts(_block(_wet()[1], "Fuel factor"))]
    ends = [f"{end} end of the range expected, {runs_text([run])}" for end in ("lower", "upper") for run in "123"]
    assert sorted(texts) == ends


def test_a_criterion_of_no_gas_stands_under_no_gas() -> None:
    table = _wet()[1].quality.table
    assert table is not None
    rows = {row.cells[0]: row.cells[2:] for row in table.rows}
    assert rows["Fuel factor"] == (Cell("stack gas as a whole: is not met†", strong=True, span=4),)
    assert len(rows["Drift"]) == 4


def test_moisture_has_its_unit_and_its_bound_is_explained() -> None:
    words = _block(_wet()[1], "Moisture less that expected of combustion").text[0]
    assert "(common practice, 1 % H₂O)" in words
    assert "[fraction by volume]" in words
    assert "The lower end is 1 % H₂O" in words


def test_readings_below_zero_name_their_channel() -> None:
    problem = next(one for one in _wet()[1].quality.problems if "below zero" in one.title)
    assert problem.found.startswith("NOx, 14 readings, the lowest −0.08; CO, 20 readings")


@pytest.mark.parametrize(
    ("number", "printed"),
    [(1_536_874.0, "1536874"), (5_367_829.3, "5367829.3"), (54_574.0, "54574"), (22.43183333, "22.4318"), (0.0, "0")],
)
def test_numbers_put_in_are_exact_enough_for_their_difference(number: float, printed: str) -> None:
    assert number_text(number).replace("\u202f", "") == printed


def test_the_difference_of_two_meter_readings_is_that_of_the_printed_numbers(boiler: Outcome) -> None:
    """The boiler's meter ran from 1 482 300 to 1 536 874 ft3 in an hour: 54 574 ft3/h, not 54 570."""
    view = build_view(boiler, ISSUED, "0.1.0")
    steps = [step for chapter in view.sample for step in chapter.steps]
    step = next(step for step in steps if step.result.key == "run.1.fuel_use.natural_gas.rate")
    value = eval(step.numbers.replace("·", "*").replace("−", "-").replace("\u202f", ""), {"__builtins__": {}})
    assert value == pytest.approx(54_574.0, abs=1e-6)


def test_pages_of_the_checklist_are_in_the_order_of_the_report(
    boiler: Outcome, changed: Callable[..., Outcome]
) -> None:
    for outcome in (boiler, changed(boiler, limits=())):
        view = build_view(outcome, ISSUED, "0.1.0")
        order = ["cover", *(heading.anchor for heading in view.headings.values())]
        for group in view.checklist:
            for row in group.rows:
                at = [order.index(anchor) if anchor in order else len(order) for anchor in row.anchors]
                assert at == sorted(at), row.text
