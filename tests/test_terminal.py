"""The terminal's text: everything found is said, within the width, in the fixed words."""

from __future__ import annotations

import re
from dataclasses import replace
from functools import cache
from pathlib import Path

import pytest

from reporter.assess.pipeline import assess
from reporter.intake import read, read_bytes
from reporter.outcome import Finding, Outcome, RunState
from reporter.output.numbers import counted, shown
from reporter.problems import Place, problem
from reporter.terminal import overview, problems_text, summary
from reporter.terminal_brief import brief
from reporter.terminal_text import WIDTH, encodable, paragraph, table

SAMPLES = sorted((Path(__file__).parents[1] / "sample_inputs" / "valid").glob("*.xlsx"))
NAMES = [path.stem for path in SAMPLES]


@cache
def outcome_of(name: str) -> Outcome:
    found = read(next(path for path in SAMPLES if path.stem == name))
    assert found.record is not None
    return assess(found.record)


def flat(text: str) -> str:
    """The text on one line, so that wrapping does not matter."""
    return re.sub(r"\s+", " ", text)


@pytest.mark.parametrize("name", NAMES)
def test_no_line_is_too_long_and_none_ends_in_space(name: str) -> None:
    lines = summary(outcome_of(name)).split("\n")
    assert max(len(line) for line in lines) <= WIDTH
    assert [line for line in lines if line != line.rstrip()] == []


@pytest.mark.parametrize("name", NAMES)
def test_only_the_fixed_words_stand_to_a_limit(name: str) -> None:
    text = summary(outcome_of(name)).lower()
    assert re.findall(r"\b(pass(?:ed|es)?|fail(?:ed|s|ure)?|(?:non-?)?complian\w+|violat\w+|verdict)\b", text) == []


@pytest.mark.parametrize("name", NAMES)
def test_every_run_limit_and_problem_is_there(name: str) -> None:
    outcome = outcome_of(name)
    text = flat(summary(outcome))
    for result in outcome.runs:
        assert f" {result.run.run.value} {result.run.start.value:%H:%M} to {result.run.end.value:%H:%M}" in text
    for comparison in outcome.comparisons:
        assert f" {comparison.limit.limit_id.value}: " in text
    for found in outcome.problems:
        assert found.title in text
        name, _, of_run = found.found.partition(", run ")
        assert flat(counted(of_run or name)) in text
        assert flat(found.remedy) in text


def test_the_numbers_are_those_of_the_ledger() -> None:
    outcome = outcome_of("gas_boiler_us")
    text = flat(summary(outcome))
    nox = [shown(outcome.ledger[f"run.{run}.nox.corrected"]) for run in (1, 2, 3)]
    assert f"NOx, ppm, dry {' '.join(nox)} {shown(outcome.ledger['average.nox.corrected'])}" in text
    conc = next(c for c in outcome.comparisons if c.key == "comparison.nox_conc")
    rounded, value = outcome.ledger[conc.rounded].value, outcome.ledger[conc.value]
    said = f"{rounded:.0f} (half up to 0 decimals, those of the limit), unrounded {shown(value)}; run 1 "
    assert f"NOX-CONC: NOx at most 30 ppm, dry, at 3 % O2 (k = 20.9) at or below the limit as entered {said}" in text


def test_a_run_that_does_not_count_is_named_with_its_paragraph_and_bracketed() -> None:
    outcome = outcome_of("bias_invalid_run")
    text = flat(summary(outcome))
    assert "is invalid under Method 7E, § 13.2 unless the authority agrees: NOx: bias" in text
    bracketed = re.search(r"NOx, ppm, dry +(\S+) +(\S+) +(\S+) +(\S+)", text)
    assert bracketed is not None
    assert [cell.startswith("(") for cell in bracketed.groups()] == [False, True, False, False]
    assert "(run 2 " in text
    assert "System bias, upscale gas, after run 2 is not met (Method 7E, § 13.2): −" in text
    assert "In brackets: does not count in an average." in text


def test_nothing_is_said_to_be_withheld_where_a_run_merely_does_not_count() -> None:
    """The invalid run of this sample leaves every limit compared; a missing citation withholds a comparison."""
    outcome = outcome_of("bias_invalid_run")
    assert all(comparison.compared for comparison in outcome.comparisons)
    for text in (flat(summary(outcome)), flat(brief(outcome))):
        assert "withheld" not in text.lower()
    assert "Runs that do not count (1)" in summary(outcome)
    assert "run not counted: a run is invalid unless the authority agrees. NOx, run 2: bias" in flat(brief(outcome))
    limits = tuple(replace(limit, citation=None) for limit in outcome.record.limits[:1])
    without = assess(replace(outcome.record, limits=limits))
    assert "Results withheld (1)" in summary(without)
    assert "result withheld: the limit names no authority" in flat(brief(without))


def test_what_is_the_same_of_several_channels_is_said_once() -> None:
    text = flat(summary(outcome_of("gas_boiler_us")))
    said = "NOx, CO, O2, CO2, run 2: 10:52 to 10:54, 3 minutes of 63; the mean rests on 60 readings"
    assert text.count(said) == 1
    assert text.count("10:52 to 10:54") == 1


def test_an_unrounded_number_has_six_digits() -> None:
    assert "316.039 (not rounded)" in flat(summary(outcome_of("wood_boiler_si")))


def changed() -> Outcome:
    """The boiler with a run excluded, a limit above, one not compared and a finding."""
    outcome = outcome_of("gas_boiler_us")
    first, second, third = outcome.comparisons
    run = replace(outcome.runs[1], state=RunState.EXCLUDED, reasons=("soot blowing",))
    comparisons = (
        replace(first, is_met=False),
        replace(second, is_met=None, reason="2 valid run(s) of 3 required"),
        third,
    )
    return replace(
        outcome,
        runs=(outcome.runs[0], run, outcome.runs[2]),
        comparisons=comparisons,
        findings=(Finding("3", "readings imply fuel-rich combustion: tell the operator"),),
        checks=(),
    )


def test_excluded_above_and_not_compared_have_their_own_words() -> None:
    text = flat(summary(changed()))
    assert "klb/h is excluded by the user: soot blowing" in text
    assert "(k = 20.9) above the limit as entered" in text
    assert "NO2 not compared: 2 valid run(s) of 3 required" in text
    assert "Run 3: readings imply fuel-rich combustion: tell the operator" in text
    assert "No quality criteria were applied" in text


def test_problems_stand_by_grade_and_like_ones_are_printed_once() -> None:
    place = Place("a.xlsx", "Runs", "A5", "Start")
    text = problems_text(
        [
            problem("coverage-low", place, "NOx, 3 minutes"),
            problem("run-invalid", place, "run 2"),
            problem("coverage-low", place, "CO, 3 minutes"),
            problem("truncated"),
        ]
    )
    heads = re.findall(r"^\S.*$", text, re.MULTILINE)
    assert heads == ["Cannot be read (1)", "Results withheld (1)", "Notes (2)"]
    assert text.count("Minutes of a run have no valid reading") == 1
    assert text.index("NOx, 3 minutes") < text.index("CO, 3 minutes")
    assert "  a.xlsx, Runs!A5 (Start): Minutes of a run" in text
    assert text.count("    To do:    ") == 3


def test_what_cannot_be_read_is_listed_and_control_characters_do_not_reach_the_terminal() -> None:
    found = read_bytes("no\x1b[31mbook.xlsx", b"not a workbook")
    assert found.record is None
    text = problems_text(found.problems)
    assert text.startswith(f"Cannot be read ({len(found.problems)})\n")
    assert "\x1b" not in text
    assert "\x1b" not in overview([("a\x1b[2J.xlsx", "cannot be read", (1, 0))])
    assert "\u202e" not in paragraph("abc\u202edef")


def test_no_problems_print_nothing() -> None:
    assert problems_text(()) == ""


def test_the_overview_has_a_line_for_each_input() -> None:
    rows = [("a.xlsx", "written; nothing is withheld", (0, 12)), ("long_name.xlsx", "cannot be read", (3, 0))]
    lines = overview(rows).split("\n")
    assert lines[0] == "2 inputs"
    assert lines[1].split() == ["Input", "State", "Withheld", "Notes"]
    assert lines[2].startswith("  a.xlsx          written; nothing is withheld")
    assert len(lines) == 4
    assert {len(line) for line in lines[1:]} == {len(lines[1])}


def test_a_long_cell_is_wrapped_in_its_own_column() -> None:
    lines = table(["Name", "Words", "N"], [["a", "word " * 40, "1"], ["b", "", "22"]], numbers={2}, wrapped=1)
    rows = lines.split("\n")
    assert max(map(len, rows)) <= WIDTH
    assert rows[1].startswith("  a     word word")
    assert rows[1].endswith("   1")
    assert rows[2].startswith("        word")
    assert rows[-1].endswith("  22")


def test_a_paragraph_keeps_joined_words_together() -> None:
    text = paragraph("x" * 92 + " run\u00a01\u00a024.00")
    assert text.split("\n")[1] == "    run 1 24.00"


@pytest.mark.parametrize(
    ("encoding", "expected"),
    [
        ("utf-8", "−6.2 ppm, 10\u202f000 m³, § 13.2, O₂ ≤ 5"),
        ("ascii", "-6.2 ppm, 10 000 m3, section 13.2, O2 <= 5"),
        ("cp437", "-6.2 ppm, 10 000 m3, section 13.2, O2 <= 5"),
    ],
)
def test_a_poor_encoding_gets_plain_characters(encoding: str, expected: str) -> None:
    assert encodable("−6.2 ppm, 10\u202f000 m³, § 13.2, O₂ ≤ 5", encoding) == expected


def test_what_no_table_holds_is_replaced() -> None:
    assert encodable("Ωmega", "ascii") == "?mega"
    for name in NAMES:
        assert "?" not in encodable(summary(outcome_of(name)), "ascii")
