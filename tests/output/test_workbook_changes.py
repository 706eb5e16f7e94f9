"""A changed input in the workbook changes the sheets as Python says: values, criteria, states, wording."""

from __future__ import annotations

from collections.abc import Callable
from io import BytesIO
from typing import Any

import openpyxl
import pytest

from reporter.ledger import FromEquation
from reporter.outcome import Comparison, Outcome
from tests.output.test_workbook import content_of, homes, outcome_of, wrong_entries
from tests.spreadsheet import need_office, recalculated

#: Key of an input cell and its new number, or (position, number) for one reading of a range, None to take it out.
Change = dict[str, float | tuple[int, float | None]]


def input_of(outcome: Outcome, title: str, gas: str, argument: str) -> str:
    """The input an applied criterion's value was computed from."""
    check = next(check for check in outcome.checks if check.title == title and check.gas == gas)
    origin = outcome.ledger[check.value].origin
    assert isinstance(origin, FromEquation)
    key = dict(origin.inputs)[argument]
    assert isinstance(key, str)
    return key


def bias_after_run_3(outcome: Outcome) -> Change:
    key = input_of(outcome, "System bias, upscale gas, after run 3", "NOx", "system")
    return {key: outcome.ledger[key].value + 6.0}


def zero_gas_after_run_2(outcome: Outcome) -> Change:
    key = input_of(outcome, "System bias, zero or low-level gas, after run 2", "O2", "system")
    return {key: outcome.ledger[key].value + 3.0}


def one_reading(outcome: Outcome) -> Change:
    return {"run.2.nox.readings": (7, 61.5)}


def reading_far_above_span(outcome: Outcome) -> Change:
    return {"run.1.nox.readings": (0, 25_000.0)}


def one_reading_taken_out(outcome: Outcome) -> Change:
    return {"run.1.nox.readings": (7, None)}


def certificate(outcome: Outcome) -> Change:
    key = input_of(outcome, "System bias, upscale gas, after run 3", "NOx", "direct")
    return {key: outcome.ledger[key].value - 0.4}


def lower_limit(outcome: Outcome) -> Change:
    made = outcome.comparisons[0]
    return {made.limit_key: outcome.ledger[made.rounded].value * 0.9}


def limit_on_the_result(outcome: Outcome) -> Change:
    made = outcome.comparisons[0]
    return {made.limit_key: outcome.ledger[made.rounded].value}


CASES: dict[str, Callable[[Outcome], Change]] = {
    case.__name__: case
    for case in (
        bias_after_run_3,
        zero_gas_after_run_2,
        one_reading,
        reading_far_above_span,
        one_reading_taken_out,
        certificate,
        lower_limit,
        limit_on_the_result,
    )
}
NAMES = [f"gas_boiler_us.{case}" for case in CASES]
NAMES += ["wood_boiler_si.one_reading", "wood_boiler_si.zero_gas_after_run_2", "bias_invalid_run.bias_after_run_3"]


def edited(sample: str, changed: Change) -> bytes:
    """The workbook with some input cells changed as a person would."""
    book = openpyxl.load_workbook(BytesIO(content_of(sample)))
    named = homes(book)
    for key, value in changed.items():
        sheet, cells = named[key]
        if isinstance(value, tuple):
            filled = [cell for row in book[sheet][cells] for cell in row if cell.value is not None]
            filled[value[0]].value = value[1]
        else:
            assert book[sheet][cells].data_type == "n", key
            book[sheet][cells].value = value
    buffer = BytesIO()
    book.save(buffer)
    return buffer.getvalue()


def leaves(outcome: Outcome, changed: Change) -> dict[str, Any]:
    """The changed inputs for a replay."""
    made: dict[str, Any] = {}
    for key, value in changed.items():
        if isinstance(value, tuple):
            series = list(outcome.ledger[key].value)
            series[value[0] : value[0] + 1] = [] if value[1] is None else [value[1]]
            made[key] = tuple(series)
        else:
            made[key] = value
    return made


@pytest.fixture(scope="module")
def books(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """Every case, edited and recalculated."""
    need_office()
    files = {}
    for name in NAMES:
        sample, _, case = name.partition(".")
        files[name] = edited(sample, CASES[case](outcome_of(sample)))
    files["none"] = edited("gas_boiler_us", not_one_valid_run(outcome_of("gas_boiler_us")))
    return recalculated(files, tmp_path_factory.mktemp("changed"))


def words_of(comparison: Comparison, values: dict[str, Any]) -> str:
    """How a comparison that was made is worded for these values."""
    count, required = values[comparison.count], values[comparison.required]
    if count < required:
        return f"not compared: {count:.0f} valid run(s) of {required:.0f} required"
    relation = comparison.limit.relation
    below = relation is not None and relation.value == "less than"
    if below:
        return f"{'' if values[comparison.met] else 'not '}below the limit as entered"
    return f"{'at or below' if values[comparison.met] else 'above'} the limit as entered"


def results(book: Any) -> list[Any]:
    """The row of results of the summary."""
    row = next(row for row in book["Summary"].iter_rows(values_only=True) if row[0] == "Result")
    return [value for value in row[1:] if value]


def states(book: Any) -> dict[str, Any]:
    """The state of each run on the summary."""
    rows = list(book["Summary"].iter_rows(values_only=True))
    start = next(number for number, row in enumerate(rows) if row[:2] == ("Run", "Start"))
    return {str(row[0]): row[3] for row in rows[start + 1 :] if row[0]}


@pytest.mark.libreoffice
@pytest.mark.parametrize("name", NAMES)
def test_a_changed_input_changes_the_sheets_as_python_says(name: str, books: dict[str, Any]) -> None:
    sample, _, case = name.partition(".")
    outcome, book = outcome_of(sample), books[name]
    changed = CASES[case](outcome)
    values = outcome.ledger.replay(leaves(outcome, changed))
    assert any(values[entry.key] != entry.value for entry in outcome.ledger if entry.key not in changed)
    assert not wrong_entries(book, outcome, values)
    assert results(book) == [words_of(made, values) for made in outcome.comparisons]
    answers = [row[10] for row in book["Criteria"].iter_rows(min_row=5, values_only=True) if row[0]]
    assert answers == ["is met" if values[check.key] == 1.0 else "is not met" for check in outcome.checks]
    for run in outcome.runs:
        valid = all(values[gas.valid] == 1.0 for gas in run.gases)
        assert states(book)[run.run.run.value] == ("valid" if valid else "invalid unless the authority agrees")


@pytest.mark.libreoffice
def test_cases_change_what_they_are_meant_to(books: dict[str, Any]) -> None:
    few = "not compared: 2 valid run(s) of 3 required"
    assert results(books["gas_boiler_us.bias_after_run_3"])[0] == few
    assert states(books["gas_boiler_us.bias_after_run_3"])["3"] == "invalid unless the authority agrees"
    assert results(books["gas_boiler_us.reading_far_above_span"])[0] == few
    # 59 minutes with a valid reading, where the limit asks for 60
    assert results(books["gas_boiler_us.one_reading_taken_out"])[0] == few
    assert results(books["gas_boiler_us.one_reading"])[0] == "at or below the limit as entered"
    assert results(books["gas_boiler_us.lower_limit"])[0] == "above the limit as entered"
    assert results(books["gas_boiler_us.limit_on_the_result"])[0] == "at or below the limit as entered"
    assert results(books["gas_boiler_us.zero_gas_after_run_2"])[0] == "not compared: 1 valid run(s) of 3 required"
    # run 4 follows a bias that is not met, with no new three-point set
    assert results(books["bias_invalid_run.bias_after_run_3"])[0] == "not compared: 1 valid run(s) of 3 required"


def not_one_valid_run(outcome: Outcome) -> Change:
    """A high-level gas read wrong at the start: the three-point set is not accepted, and nothing stands on it."""
    check = next(
        check
        for check in outcome.checks
        if check.title.startswith("Analyzer calibration error, high") and check.gas == "NOx"
    )
    origin = outcome.ledger[check.value].origin
    assert isinstance(origin, FromEquation)
    key = dict(origin.inputs)["direct"]
    assert isinstance(key, str)
    return {key: outcome.ledger[key].value * 1.2}


@pytest.mark.libreoffice
def test_without_a_valid_run_nothing_is_compared(books: dict[str, Any]) -> None:
    outcome, book = outcome_of("gas_boiler_us"), books["none"]
    made = outcome.comparisons[0]
    assert outcome.ledger.replay(leaves(outcome, not_one_valid_run(outcome)), only=[made.count])[made.count] == 0.0
    assert results(book)[0] == "not compared: no valid run has this result"
    rows = {row[0]: row[1] for row in book["Summary"].iter_rows(values_only=True) if row[0]}
    assert [rows[title] for title in ("Average, unrounded", "Average, rounded", "Margin")] == ["–"] * 3
    assert [rows[f"Run {n}"] for n in (1, 2, 3)] == ["not counted"] * 3
