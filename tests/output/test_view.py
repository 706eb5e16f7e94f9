"""The view: sorted, rounded and worded once; every number leads to a derivation."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from dataclasses import fields, is_dataclass, replace
from datetime import date
from typing import Any

import pytest

from reporter.ledger import FromEquation
from reporter.outcome import Outcome
from reporter.output.phrases import load_phrases
from reporter.output.view.build import Document, View, build_view
from reporter.output.view.desk import Desk
from reporter.output.view.model import CheckRow, Shown, Source
from reporter.output.view.register import pattern
from reporter.output.view.standing import is_recalled as recalled
from reporter.record import Given, ProcessLog
from tests.output.conftest import ISSUED
from tests.output.test_phrases import FORBIDDEN


def view_of(outcome: Outcome, **options: Any) -> View:
    return build_view(outcome, ISSUED, "0.1.0", **options)


def texts(value: object) -> Iterator[str]:
    """Every text of a view, wherever it stands; pictures are not read."""
    if isinstance(value, str):
        if not value.startswith("<svg"):
            yield value
    elif isinstance(value, dict):
        for part in value.values():
            yield from texts(part)
    elif isinstance(value, (tuple, list)):
        for part in value:
            yield from texts(part)
    elif is_dataclass(value):
        for one in fields(value):
            yield from texts(getattr(value, one.name))


def shown_in(value: object) -> Iterator[Shown]:
    """Every printed number of a view that stands in a cell."""
    if isinstance(value, Shown):
        yield value
    elif isinstance(value, dict):
        for part in value.values():
            yield from shown_in(part)
    elif isinstance(value, (tuple, list)):
        for part in value:
            yield from shown_in(part)
    elif is_dataclass(value):
        for one in fields(value):
            yield from shown_in(getattr(value, one.name))


def limit_cells(view: View, name: str) -> list[str]:
    """The texts of the row of a limit in the table of limits: label, runs, average, rounded, limit, margin."""
    assert view.limits.table is not None
    rows = view.limits.table.rows
    at = next(i for i, row in enumerate(rows) if getattr(row.cells[0], "text", "").startswith(f"{name}:"))
    return [cell if isinstance(cell, str) else cell.text for cell in rows[at + 1].cells]


def test_every_printed_number_has_a_derivation_row(boiler: Outcome, wood: Outcome) -> None:
    for outcome in (boiler, wood):
        view = view_of(outcome)
        numbers = [cell for cell in shown_in(view) if not outcome.ledger[cell.key].is_indicator]
        assert len(numbers) > 200
        assert [cell.key for cell in numbers if cell.key not in view.places] == []


def test_from_each_derivation_row_to_each_of_its_inputs(boiler: Outcome) -> None:
    view = view_of(boiler)
    rows = [row for group in view.register.groups for row in group.rows]
    sources: list[Source] = [source for row in rows for source in row.inputs]
    open_ends = [source for source in sources if not source.key and not source.where]
    assert open_ends == []
    keys = {source.key for source in sources if source.key} - {"section-criteria"}
    assert keys <= set(view.places)


def test_each_derivation_row_lists_the_inputs_of_its_equation(boiler: Outcome) -> None:
    view = view_of(boiler)
    for group in view.register.groups:
        for row in group.rows:
            origin = boiler.ledger[row.anchor].origin
            assert isinstance(origin, FromEquation)
            assert group.citation == origin.equation.citation.text()
            assert [source.symbol for source in row.inputs] == [
                origin.equation.parameters[name].symbol for name, _ in origin.inputs
            ]


def test_entries_of_one_row_differ_by_run_or_reading_alone(boiler: Outcome) -> None:
    view = view_of(boiler)
    names = {row.anchor: row.name for group in view.register.groups for row in group.rows}
    for key, anchor in view.places.items():
        origin = boiler.ledger[key].origin
        carried = isinstance(origin, FromEquation) and origin.equation.name == "carried"
        if anchor in names and not carried:
            assert pattern(key) == names[anchor]
    assert pattern("run.3.nox.corrected") == "run.*.nox.corrected"
    assert pattern("calibration.nox.system_12.bias") == "calibration.nox.system_*.bias"


def test_the_sample_calculation_reaches_each_limit_in_computable_order(boiler: Outcome) -> None:
    view = view_of(boiler)
    steps = [step for chapter in view.sample for step in chapter.steps]
    assert [step.number for step in steps] == list(range(1, len(steps) + 1))
    reached = {step.result.key for step in steps}
    for comparison in boiler.comparisons:
        assert comparison.runs[0][1] in reached
    for step in steps:
        earlier = [source.key for source in step.sources if source.key.startswith("step-")]
        assert all(int(key.removeprefix("step-")) < step.number for key in earlier)


def test_the_sample_calculation_covers_one_whole_run(boiler: Outcome, wood: Outcome) -> None:
    """What reviewers ask of a sample calculation: every formula of one run, through to the comparison."""
    for outcome in (boiler, wood):
        steps = {step.result.key: step for chapter in view_of(outcome).sample for step in chapter.steps}
        for gas in outcome.runs[0].gases:
            for name in ("direct_1.error", "direct_3.error", "system_1.bias", "system_4.bias"):
                assert f"calibration.{gas.segment}.{name}" in steps
            for name in ("mean", "zero", "upscale", "corrected", "drift.zero", "drift.upscale"):
                assert f"run.1.{gas.segment}.{name}" in steps
        for comparison in outcome.comparisons:
            assert {comparison.value, comparison.rounded, comparison.margin, comparison.met} - steps.keys() <= {
                comparison.rounded if "not rounded" in comparison.rounding_words else ""
            }
            if comparison.cross:
                assert f"run.1.{comparison.quantity}.route_difference" in steps
        # Half up and half even are two equations that read alike; the rule's words stand beside each.
        equations = [step.line for step in steps.values() if step.line and not step.line.startswith("rounded")]
        assert len(equations) == len(set(equations))
        assert not any(key.startswith("run.2.") for key in steps)
    steps = {step.result.key: step for chapter in view_of(boiler).sample for step in chapter.steps}
    assert {"run.1.moisture.meter_volume_standard", "run.1.moisture.measured", "run.1.heat_input.metered"} <= set(steps)


def test_every_method_that_is_followed_is_listed_with_its_edition(boiler: Outcome) -> None:
    view = view_of(boiler)
    block = next(block for block in view.sections["location"] if block.title == "Methods")
    listed = {row.cells[0] for row in block.tables[0].rows}
    assert listed == {
        "Method 7E", "Method 10", "Method 3A", "Method 1", "Method 2", "Method 3", "Method 3B", "Method 4", "Method 19",
        "40 CFR 60.8",
    }  # fmt: skip
    cited = {row.cells[0] for row in view.sections["references"][0].tables[0].rows}
    assert listed <= cited
    assert any("velocity traverse" in note for note in block.notes)


def test_entered_numbers_are_printed_as_entered_with_their_source(boiler: Outcome, wood: Outcome) -> None:
    def rows(outcome: Outcome) -> dict[str, list[str]]:
        table = view_of(outcome).sections["process"][1].tables[0]
        cells = [[cell if isinstance(cell, str) else cell.text for cell in row.cells] for row in table.rows]
        return {row[0]: row[1:] for row in cells}

    boiler_rows, wood_rows = rows(boiler), rows(wood)
    assert boiler_rows["Heat input (gas meter and heating value)"][:2] == ["MMBtu/h", "55.67"]
    flow = "Stack flow as entered (dry standard, 68 °F, 29.92 inHg)"
    assert boiler_rows[flow][:2] == ["ft³/min", "10\u202f319"]
    assert wood_rows["Static pressure"][:2] == ["Pa", "−85"]
    assert wood_rows["Load"][:2] == ["MW", "4.71"]


def test_the_sample_calculation_puts_in_the_numbers_it_names(boiler: Outcome) -> None:
    view = view_of(boiler)
    step = next(step for chapter in view.sample for step in chapter.steps if step.result.key == "run.1.nox.corrected")
    numbers = [source.value for source in step.sources]
    assert all(number in step.numbers for number in numbers)
    assert step.citation == "Method 7E, § 12.6, Eq. 7E-5b"
    assert 'class="frac"' in step.formula
    # The printed equation with the printed numbers gives the printed result to its digits.
    value = eval(step.numbers.replace("·", "*").replace("−", "-"), {"__builtins__": {}})
    assert value == pytest.approx(float(step.result.text), rel=1e-5)


def test_the_limit_table_shows_unrounded_rounded_limit_and_margin(boiler: Outcome) -> None:
    comparison = boiler.comparisons[0]
    ledger = boiler.ledger
    view = view_of(boiler)
    name = comparison.limit.limit_id.value
    cells = limit_cells(view, name)
    average = float(cells[-4])
    assert average == pytest.approx(ledger[comparison.value].value, rel=1e-5)
    assert float(cells[-3]) == ledger[comparison.rounded].value
    assert float(cells[-2]) == ledger[comparison.limit_key].value
    # The margin is of the unrounded average, with two decimals more than the limit (30 ppm).
    assert cells[-1] == f"{ledger[comparison.limit_key].value - ledger[comparison.value].value:.2f}"
    assert view.limits.limits[0].relation_words == "at or below the limit as entered"


def test_above_a_limit_is_worded_as_fixed(boiler: Outcome, changed: Callable[..., Outcome]) -> None:
    low = tuple(replace(x, limit=replace(x.limit, value=x.limit.value / 10)) for x in boiler.record.limits)
    view = view_of(changed(boiler, limits=low))
    assert {limit.relation_words for limit in view.limits.limits} == {"above the limit as entered"}
    assert limit_cells(view, boiler.record.limits[0].limit_id.value)[-1].startswith("−")


def test_a_limit_without_citation_is_not_compared_and_has_no_margin(
    boiler: Outcome, changed: Callable[..., Outcome]
) -> None:
    bare = tuple(replace(x, citation=None) for x in boiler.record.limits)
    view = view_of(changed(boiler, limits=bare))
    assert all(limit.relation_words.startswith("not compared: ") for limit in view.limits.limits)
    assert limit_cells(view, bare[0].limit_id.value)[-1] == "–"


def test_an_excluded_run_is_told_from_an_invalid_one(boiler: Outcome, changed: Callable[..., Outcome]) -> None:
    runs = tuple(
        replace(run, excluded_because=Given("the fan tripped")) if at == 1 else run
        for at, run in enumerate(boiler.record.runs)
    )
    view = view_of(changed(boiler, runs=runs))
    assert any("is excluded by the user: the fan tripped" in words for words in view.quality.runs)
    assert not any("is invalid" in words for words in view.quality.runs)


def test_an_invalid_run_names_its_paragraph(boiler: Outcome, changed: Callable[..., Outcome]) -> None:
    """A bias of a quarter of the span is not met: Method 7E § 13.2 makes the run invalid."""
    calibrations = tuple(
        replace(row, reading=replace(row.reading, value=row.reading.value + 12.5))
        if row.channel.value == "NOx" and row.route.value.value == "system" and row.time.value.hour == 13
        else row
        for row in boiler.record.calibrations
    )
    outcome = changed(boiler, calibrations=calibrations)
    assert not outcome.run("3").gas("nox").is_valid
    view = view_of(outcome)
    words = " ".join(view.quality.runs)
    assert "is invalid under Method 7E, § 13.2 unless the authority agrees" in words
    assert "Run 3" in words


def test_what_is_missing_stays_a_dash(boiler: Outcome, changed: Callable[..., Outcome]) -> None:
    outcome = changed(boiler, calibrations=())
    view = view_of(outcome)
    assert limit_cells(view, boiler.record.limits[0].limit_id.value)[1:] == ["–"] * 7


def test_the_checklist_of_a_draft_says_what_is_missing_and_of_a_final_where_else(
    boiler: Outcome, changed: Callable[..., Outcome]
) -> None:
    def words(view: View, number: str) -> str:
        return next(row.words for group in view.checklist for row in group.rows if row.number == number)

    test = replace(boiler.record.test, approvals=None, status=Given("draft"))
    draft = view_of(changed(boiler, test=test))
    assert words(draft, "12") == "missing: deviations or that there were none, approvals"
    assert words(draft, "32") == "in part: points visited; missing: test, result and decision"
    assert words(draft, "13") == "missing"
    final = replace(test, status=Given("final"))
    view = view_of(changed(boiler, test=final))
    assert words(view, "32") == "in part: points visited; under separate cover: test, result and decision"
    assert words(view, "13") == "under separate cover"
    assert words(view, "41") == "not part of this test"
    assert view.draft_mark == ""


def test_a_line_of_the_checklist_has_a_page_only_where_its_content_stands(
    boiler: Outcome, changed: Callable[..., Outcome]
) -> None:
    def line(view: View, number: str) -> CheckRow:
        return next(row for group in view.checklist for row in group.rows if row.number == number)

    files = {"attachments/certificate_EX-101.pdf": Document(b"%PDF-1.4", 1)}
    view = view_of(boiler, files=files)
    certificates = line(view, "45")
    assert "certificates bound in (1 of 5)" in certificates.words
    assert certificates.anchors == ("section-calibrations", "document-A")
    bare = changed(boiler, process=ProcessLog(), fuel_use=(), points=())
    for number in ("17", "25", "53"):
        assert line(view, number).anchors
        assert line(view_of(bare), number).anchors == ()
    assert line(view_of(bare), "26").anchors == ()


def test_a_recalled_bound_has_a_dagger_and_a_footnote(boiler: Outcome) -> None:
    """criteria.toml: Method 7E was read, the use of its limits by Methods 10 and 3A is recalled."""
    table = view_of(boiler).quality.table
    assert table is not None
    assert [cell.text for cell in table.rows[0].cells[2:]] == ["is met", "is met†", "is met†", "is met†"]
    assert "† recalled" in table.note
    assert recalled(Desk(boiler, ISSUED, "0.1.0", load_phrases()), "fuel.natural_gas.fuel_factor.lowest")


def test_criteria_held_and_not_applied_are_named_with_the_reason(boiler: Outcome) -> None:
    words = view_of(boiler).quality.not_applied
    assert any(line.startswith("Interference response (Method 7E, § 13.4), NOx, CO, O₂, CO₂: ") for line in words)
    assert any("§ 8.1.2" in line for line in words)


def test_an_average_of_some_runs_says_which(invalid: Outcome) -> None:
    view = view_of(invalid)
    table = next(t for block in view.sections["runs"] for t in block.tables if t.columns[-1].title == "Average")
    assert table.columns[-1].unit == "runs\u00a01,\u00a03,\u00a04"
    labels = {getattr(row.cells[0], "text", row.cells[0]): row for row in table.rows}
    assert any(label.endswith("average of all runs") for label in labels)  # oxygen is valid in run 2
    run_2 = [row.cells[3].text for row in table.rows if len(row.cells) > 3 and isinstance(row.cells[3], Shown)]
    assert any(text.startswith("[") for text in run_2)
    limit = view.limits.limits[0]
    averaging = next(fact.text for fact in limit.facts if fact.label == "Averaging")
    assert "3 of 3 required (runs 1, 3, 4)" in averaging.replace("\u00a0", " ")
    assert [problem.grade for problem in view.quality.problems] == ["Run not counted", "Note"]


def test_a_limit_says_route_factor_and_table(boiler: Outcome) -> None:
    facts = {fact.label: fact.text for fact in view_of(boiler).limits.limits[2].facts}
    assert "mass rate from heat input; Method 19, § 12.2.1, Eq. 19-1; F factor 8710 dscf/MMBtu of" in facts["Basis"]
    assert "Table 19-2 (natural gas); gross heat; by analogy with Method 19" in facts["Basis"]
    assert facts["Cross-check"].startswith("0.9959\u00a0lb/h from flow; ")


def test_the_checklist_has_the_union_of_published_lines(boiler: Outcome) -> None:
    rows = [row for group in view_of(boiler).checklist for row in group.rows]
    assert [row.number for row in rows] == [str(number) for number in range(1, 60)]


def test_the_page_follows_the_unit_system(boiler: Outcome, wood: Outcome) -> None:
    assert (view_of(boiler).page, view_of(wood).page) == ("Letter", "A4")


def test_two_test_days_stand_on_the_cover(boiler: Outcome, changed: Callable[..., Outcome]) -> None:
    test = replace(boiler.record.test, last_test_day=Given(date(2026, 4, 15)))
    assert view_of(changed(boiler, test=test)).cover.days == "2026-04-14 to 2026-04-15"


def test_minute_readings_are_printed_on_request_only(boiler: Outcome) -> None:
    def lines(view: View) -> int:
        return sum(len(block.lines) for block in view.sections["inputs"] if block.title == "Readings")

    assert lines(view_of(boiler)) == 0
    assert lines(view_of(boiler, minute_data=True)) == len(boiler.record.readings.rows) + 1


@pytest.mark.parametrize(
    "sheets",
    [
        {"limits": ()},
        {"cylinders": ()},
        {"fuels": (), "fuel_use": (), "fuel_gas": ()},
        {"limits": (), "cylinders": (), "calibrations": (), "events": (), "attachments": (), "sheets": ()},
    ],
    ids=["no limits", "no cylinders", "no fuel", "bare"],
)
def test_a_thin_record_still_makes_a_view_without_loose_ends(
    boiler: Outcome, changed: Callable[..., Outcome], sheets: dict[str, Any]
) -> None:
    outcome = changed(boiler, **sheets)
    view = view_of(outcome)
    numbers = [cell for cell in shown_in(view) if not outcome.ledger[cell.key].is_indicator]
    assert [cell.key for cell in numbers if cell.key not in view.places] == []


def test_no_text_of_the_report_uses_a_forbidden_word(boiler: Outcome, wood: Outcome) -> None:
    for outcome in (boiler, wood):
        assert [text for text in texts(view_of(outcome)) if FORBIDDEN.search(text)] == []


def test_the_same_outcome_gives_the_same_view(boiler: Outcome) -> None:
    assert view_of(boiler) == view_of(boiler)


def test_numbers_of_a_column_align_at_the_point(boiler: Outcome) -> None:
    for block in view_of(boiler).sections["runs"]:
        for table in block.tables:
            for column in range(len(table.columns)):
                cells = [row.cells[column] for row in table.rows if column < len(row.cells)]
                numbers = [cell for cell in cells if isinstance(cell, Shown)]
                behind = {cell.decimals + int(re.sub(r"\D", "", cell.pad) or 0) for cell in numbers}
                assert len(behind) <= 1
