"""The results file: full precision, its schema, and that every key in it leads somewhere."""

from __future__ import annotations

import copy
import json
from collections.abc import Callable, Iterator
from dataclasses import replace
from datetime import UTC, datetime
from functools import cache
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from reporter.assess.pipeline import assess
from reporter.basis import NO_BASIS
from reporter.equation import Citation, equation
from reporter.intake import read
from reporter.ledger import _CELL, KEY, FromCells, Ledger, Stated
from reporter.outcome import Outcome
from reporter.output.data import to_json
from reporter.output.results_schema import SCHEMA_ID, results_schema
from reporter.problems import Place, problem

SAMPLES = sorted((Path(__file__).parents[2] / "sample_inputs" / "valid").glob("*.xlsx"))
ISSUED = datetime(2026, 4, 20, 12, 30, 15, tzinfo=UTC)
VALIDATOR = jsonschema.Draft202012Validator(results_schema())


@cache
def outcome_of(name: str) -> Outcome:
    found = read(next(path for path in SAMPLES if path.stem == name))
    assert found.record is not None
    return assess(found.record)


@cache
def text_of(name: str) -> bytes:
    return to_json(outcome_of(name), ISSUED, "9.8.7")


def document(name: str = "gas_boiler_us") -> Any:
    return json.loads(text_of(name))


def short() -> Any:
    """A document with few entries and rows, quick to validate many times."""
    found = copy.deepcopy(document())
    found["entries"] = {key: found["entries"][key] for key in ("run.1.nox.readings", "run.1.nox.mean")}
    for section in ("checks", "comparisons", "problems", "runs"):
        found[section] = found[section][:1]
    return found


every_sample = pytest.mark.parametrize("name", [path.stem for path in SAMPLES])


@every_sample
def test_the_file_is_as_its_schema_says(name: str) -> None:
    assert [error.message for error in VALIDATOR.iter_errors(document(name))] == []


@every_sample
def test_every_entry_is_there_in_order_and_in_full(name: str) -> None:
    entries = document(name)["entries"]
    ledger = outcome_of(name).ledger
    assert list(entries) == [entry.key for entry in ledger]
    for entry in ledger:
        value = entries[entry.key]["value"]
        assert (tuple(value) if isinstance(value, list) else value) == entry.value
        assert entries[entry.key]["unit"] == entry.unit
        assert entries[entry.key]["basis"] == entry.basis.as_dict()


@every_sample
def test_every_key_leads_to_an_entry_and_every_equation_is_there(name: str) -> None:
    found = document(name)
    entries, equations = found["entries"], found["equations"]
    computed = [e["origin"] for e in entries.values() if e["origin"]["kind"] == "equation"]
    assert {origin["equation"] for origin in computed} == set(equations)
    for origin in computed:
        about = equations[origin["equation"]]
        assert set(about["symbols"]) - set(about["constants"]) <= set(origin["inputs"])
    assert sorted(set(mentioned(found)) - set(entries)) == []


def mentioned(found: Any) -> Iterator[str]:
    """Every ledger key the document refers to."""
    yield from found["averages"]
    for entry in found["entries"].values():
        for keys in entry["origin"].get("inputs", {}).values():
            yield from (keys,) if isinstance(keys, str) else keys
    rows = [(found["checks"], ("key", "value", "bound", "difference", "alternative")),
            (found["calibrations"], ("reading", "certified")),
            (found["comparisons"], ("value", "rounded", "limit_key", "margin", "met", "count", "required",
                                    "with_excluded", "cross"))]  # fmt: skip
    for section, names in rows:
        for row in section:
            yield from (row[name] for name in names if row[name] is not None)
    for comparison in found["comparisons"]:
        for run in comparison["runs"]:
            yield from (run[name] for name in ("value", "counts") if run[name] is not None)
    for finding in found["findings"]:
        yield from finding["keys"]
    for run in found["runs"]:
        for gas in run["gases"]:
            yield from (gas["valid"],) if gas["valid"] else ()
            if gas["series"]:
                yield gas["series"]["key"]
                assert len(gas["series"]["times"]) == len(found["entries"][gas["series"]["key"]]["value"])


def test_all_kinds_of_origin_occur() -> None:
    kinds = {entry["origin"]["kind"] for entry in document()["entries"].values()}
    assert kinds == {"cells", "table", "stated", "equation"}


def test_a_result_can_be_computed_again_from_the_file_alone() -> None:
    # 40 CFR part 60, appendix A-4, Method 7E, Eq. 7E-5b: (C_Avg - C_O) C_MA / (C_M - C_O) for a zero gas of 0.
    found = document()
    entry = found["entries"]["run.1.nox.corrected"]
    inputs = {name: found["entries"][key]["value"] for name, key in entry["origin"]["inputs"].items()}
    symbols = found["equations"][entry["origin"]["equation"]]["symbols"]
    by_symbol = {symbols[name]: value for name, value in inputs.items()}
    oa = by_symbol.get("C_OA", 0.0)
    slope = (by_symbol["C_MA"] - oa) / (by_symbol["C_M"] - by_symbol["C_O"])
    expected = (by_symbol["C_Avg"] - by_symbol["C_M"]) * slope + by_symbol["C_MA"]
    assert entry["value"] == pytest.approx(expected, rel=1e-12)


def test_head_of_the_file() -> None:
    found = document()
    source = outcome_of("gas_boiler_us").record.source
    assert found["fluebook"] == {"version": "9.8.7", "schema": SCHEMA_ID}
    assert found["issued"] == "2026-04-20T12:30:15+00:00"
    assert found["inputs"] == [{"name": "gas_boiler_us.xlsx", "sha256": source.sha256, "size": source.size}]
    assert found["unit_system"] == "US"
    assert found["test"]["logging_interval"] == {"value": 1.0, "unit": "min"}
    assert found["test"]["test_date"] == "2026-04-14"
    assert {"python", "numpy", "weasyprint", "xlsxwriter"} <= set(found["versions"])


def test_a_run_made_invalid_says_so() -> None:
    runs = {run["key"]: run for run in document("bias_invalid_run")["runs"]}
    results = {result.key: result for result in outcome_of("bias_invalid_run").runs}
    assert {run["state"] for run in runs.values()} == {"valid", "invalid"}
    for key, run in runs.items():
        assert run["reasons"] == list(results[key].reasons)
        assert bool(run["reasons"]) == (run["state"] == "invalid")


def test_equal_outcomes_give_equal_bytes() -> None:
    name = "gas_boiler_us"
    again = read(next(path for path in SAMPLES if path.stem == name)).record
    assert again is not None
    assert to_json(assess(again), ISSUED, "9.8.7") == text_of(name)


def test_the_bytes_are_ascii_lines() -> None:
    content = text_of("wood_boiler_si")
    assert content.isascii()
    assert content.endswith(b"}\n")
    assert b"\r" not in content
    assert max(map(len, content.splitlines())) < 40_000


# ---- on a small outcome -------------------------------------------------------------------------------


def doubled(*, value: Any) -> Any:
    """Twice the value."""
    return value * 2


def tripled(*, value: Any) -> Any:
    """Three times the value."""
    return value * 3


def small() -> Outcome:
    ledger = Ledger()
    place = Place("a.xlsx", "Runs", "B5", "Load")
    ledger.enter("run.1.load", 0.1 + 0.2, "%", FromCells(place, '30 "%"\n<b>°</b>'), label='Load </script> "x"')
    ledger.enter("run.1.readings", [1 / 3, -0.0, 1e-300, 5e22], "ppm", Stated("invented"), label="x")
    cite = Citation("m7e", "12", "Eq. 1")
    for number, body in enumerate((doubled, tripled)):
        body.__name__ = "same_name"
        eq = equation("y", "%", {"value": "%"}, cite)(body)
        ledger.apply(eq, f"run.1.result_{number}", {"value": "run.1.load"}, label="y")
    base = outcome_of("gas_boiler_us")
    trouble = (problem("bad-json", place, 'found "it" \\ <i>'),)
    return Outcome(base.record, ledger, (), (), (), trouble)


def test_numbers_survive_to_the_last_bit() -> None:
    entries = json.loads(to_json(small(), ISSUED, "1"))["entries"]
    assert entries["run.1.load"]["value"] == 0.30000000000000004
    assert entries["run.1.readings"]["value"] == [1 / 3, -0.0, 1e-300, 5e22]
    assert entries["run.1.load"]["basis"] == NO_BASIS.as_dict()


def test_text_stays_text() -> None:
    found = json.loads(to_json(small(), ISSUED, "1"))
    entry = found["entries"]["run.1.load"]
    assert entry["label"] == 'Load </script> "x"'
    assert entry["origin"] == {
        "kind": "cells",
        "place": {"file": "a.xlsx", "sheet": "Runs", "cell": "B5", "field": "Load"},
        "text": '30 "%"\n<b>°</b>',
    }
    assert found["problems"][0]["found"] == 'found "it" \\ <i>'


def test_two_equations_of_one_name_stay_apart() -> None:
    found = json.loads(to_json(small(), ISSUED, "1"))
    names = [found["entries"][f"run.1.result_{n}"]["origin"]["equation"] for n in (0, 1)]
    assert names == ["same_name", "same_name_2"]
    assert [found["equations"][name]["summary"] for name in names] == ["Twice the value", "Three times the value"]


def test_a_small_outcome_is_as_the_schema_says() -> None:
    VALIDATOR.validate(json.loads(to_json(small(), ISSUED, "1")))


def test_the_issue_time_is_the_only_other_input() -> None:
    later = replace(small())
    assert to_json(later, ISSUED, "1") == to_json(small(), ISSUED, "1")
    assert to_json(later, ISSUED.replace(second=16), "1") != to_json(later, ISSUED, "1")


# ---- the schema ---------------------------------------------------------------------------------------


def test_the_schema_is_a_schema() -> None:
    schema = results_schema()
    jsonschema.Draft202012Validator.check_schema(schema)
    assert schema["$id"] == SCHEMA_ID
    assert schema["properties"]["fluebook"]["properties"]["schema"]["const"] == SCHEMA_ID


def test_the_grammar_of_keys_is_that_of_the_ledger() -> None:
    key = results_schema()["$defs"]["key"]
    assert key["pattern"] == f"^{KEY.pattern}$"
    assert key["not"]["pattern"] == f"^({_CELL.pattern})$"


@pytest.mark.parametrize(
    "key", ["Run.1.nox.mean", "run..nox", "run.1.nox.", ".run", "run 1", "1.run", "run.1.nox-mean", "ab12", "a" * 201]
)
def test_the_schema_refuses_what_is_no_key(key: str) -> None:
    found = short()
    found["entries"][key] = found["entries"]["run.1.nox.mean"]
    assert not VALIDATOR.is_valid(found)


def broken(path: tuple[str | int, ...], value: Any) -> Callable[[Any], None]:
    def change(found: Any) -> None:
        for step in path[:-1]:
            found = found[step]
        if value is DELETE:
            del found[path[-1]]
        else:
            found[path[-1]] = value

    return change


DELETE = object()
_MEAN = ("entries", "run.1.nox.mean")


@pytest.mark.parametrize(
    "change",
    [
        broken((*_MEAN, "unit"), DELETE),
        broken((*_MEAN, "value"), "23.4"),
        broken((*_MEAN, "value"), None),
        broken((*_MEAN, "label"), ""),
        broken((*_MEAN, "basis", "moisture"), "damp"),
        broken((*_MEAN, "origin", "kind"), "guess"),
        broken((*_MEAN, "origin", "inputs"), {"readings": "Run 1"}),
        broken((*_MEAN, "more"), 1),
        broken(("runs", 0, "state"), "failed"),
        broken(("runs", 0, "start"), "9 o'clock"),
        broken(("comparisons", 0, "is_met"), "yes"),
        broken(("comparisons", 0, "value"), "not a key"),
        broken(("checks", 0, "citation"), None),
        broken(("problems", 0, "grade"), "error"),
        broken(("inputs", 0, "sha256"), "abc"),
        broken(("issued",), "yesterday"),
        broken(("fluebook", "schema"), "urn:fluebook:results:0"),
        broken(("test", "facility"), DELETE),
        broken(("more",), {}),
        broken(("entries",), DELETE),
    ],
)
def test_the_schema_refuses_another_form(change: Callable[[Any], None]) -> None:
    found = short()
    assert VALIDATOR.is_valid(found)
    change(found)
    assert not VALIDATOR.is_valid(found)
