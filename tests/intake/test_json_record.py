"""The same record as JSON: schema, pointers as places, and the same values as from the workbook."""

from __future__ import annotations

import dataclasses
import json
import time
from typing import Any

import jsonschema
import pytest
from field_book import SAMPLES, tiny

from reporter.intake import read, read_bytes
from reporter.intake.gather import Gathered
from reporter.intake.guard import look_at
from reporter.intake.jsonrecord import pointer
from reporter.intake.schema import input_schema
from reporter.intake.sheets import Kind
from reporter.intake.table import Cell, SheetTable, show
from reporter.intake.workbook import read_workbook
from reporter.logged import LoggedRows
from reporter.problems import Place
from reporter.record import Given

SCHEMA = input_schema()
CHECK = jsonschema.Draft202012Validator(SCHEMA, format_checker=jsonschema.FormatChecker())


def as_json(tables: tuple[SheetTable, ...]) -> dict[str, Any]:
    """Sheet tables as the JSON a user would write."""

    def value(cell: Cell) -> Any:
        if isinstance(cell.value, (float, bool)):
            return cell.value
        text = show(cell.value) or None
        is_date = text is not None and text.endswith(" 00:00")
        return text.removesuffix(" 00:00") if is_date and text is not None else text

    made: dict[str, Any] = {}
    for table in tables:
        if table.spec.kind is Kind.ITEMS:
            made[table.spec.name] = {
                row.cells[0].text: {"Entry": value(row.cells[1]), "Note": value(row.cells[2])} for row in table.rows
            }
        else:
            made[table.spec.name] = [
                {h.text: value(c) for h, c in zip(table.header, row.cells, strict=True) if not c.blank}
                for row in table.rows
            ]
    return made


def sample_as_json(name: str) -> dict[str, Any]:
    content = (SAMPLES / f"{name}.xlsx").read_bytes()
    return as_json(read_workbook(content, look_at(content), Gathered(name)))


def values_only(thing: Any) -> Any:
    """A record without its places and texts."""
    if isinstance(thing, Given):
        return values_only(thing.value), thing.unit
    if isinstance(thing, Place):
        return None
    if dataclasses.is_dataclass(thing) and not isinstance(thing, type):
        left_out = {"place", "source", "sheets", "row", "columns", "text"}
        left_out |= {"letters", "rows"} if type(thing).__name__ == "ProcessLog" else set()
        return {
            f.name: values_only(getattr(thing, f.name)) for f in dataclasses.fields(thing) if f.name not in left_out
        }
    if isinstance(thing, (tuple, LoggedRows)):
        return tuple(values_only(part) for part in thing)
    return thing


def test_the_schema_is_a_schema() -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMA)
    assert SCHEMA["required"] == ["Test", "Channels", "Readings", "Runs"]


@pytest.mark.parametrize("name", sorted(path.stem for path in SAMPLES.glob("*.xlsx")))
def test_a_sample_as_json_fits_the_schema_and_gives_the_same_record(name: str) -> None:
    data = sample_as_json(name)
    assert [error.message for error in CHECK.iter_errors(data)] == []
    record = read_bytes(f"{name}.json", json.dumps(data).encode()).record
    assert record is not None
    expected = read(SAMPLES / f"{name}.xlsx").record
    assert expected is not None
    assert values_only(record) == values_only(expected)


@pytest.mark.parametrize(
    ("sheet", "change"),
    [
        ("Test", {"Facility": None}),
        ("Test", {"Status": "perhaps"}),
        ("Test", {"Test date": "14 April 2026"}),
        ("Channels", [{"Channel": "NOx", "Gas": "NOx", "Unit": "ppm"}]),
        ("Cylinders", [{"Cylinder": "EX-1", "Gas": "NOx"}]),
        ("Cylinders", [{"Cylinder": "EX-1", "Gas": "NOx", "Certified value": "50"}]),
        ("Runs", [{"Run": "1", "Start": "9:00", "End": "10:00", "Mood": "good"}]),
        ("Runs", []),
        ("Lunch", []),
    ],
)
def test_the_schema_refuses(sheet: str, change: Any) -> None:
    data = sample_as_json("gas_boiler_us")
    data[sheet] = {**data[sheet], **change} if isinstance(change, dict) else change
    assert not CHECK.is_valid(data)


def test_the_schema_takes_units_in_keys() -> None:
    data = sample_as_json("gas_boiler_us")
    data["Cylinders"] = [{"Cylinder": "EX-1", "Gas": "NOx", "Certified value [ppm]": 50.2}]
    assert CHECK.is_valid(data)


def plain() -> dict[str, Any]:
    sheets = tiny()
    made: dict[str, Any] = {"Test": {row[0]: show(row[1]).removesuffix(" 00:00") for row in sheets["Test"][1:]}}
    for name in ("Channels", "Readings", "Runs"):
        header, *rows = sheets[name]
        made[name] = [
            {h: v if isinstance(v, (int, float)) else show(v) for h, v in zip(header, row, strict=True)} for row in rows
        ]
    return made


def problems(data: Any) -> list[tuple[str, str]]:
    content = data if isinstance(data, bytes) else json.dumps(data).encode()
    return [(p.code, p.place.cell) for p in read_bytes("record.json", content).problems]


def test_places_are_json_pointers() -> None:
    data = plain()
    assert problems(data) == []
    data["Runs"][1]["End"] = "8:00"
    data["Channels"][0]["Gas"] = "phlogiston"
    data["Test"]["Facility"] = None
    assert set(problems(data)) == {
        ("missing-entry", "/Test/Facility"),
        ("unknown-gas", "/Channels/0/Gas"),
        ("reversed-run", "/Runs/1/End"),
    }


def test_pointers_escape_what_they_must() -> None:
    """RFC 6901, section 3: ``~`` becomes ``~0`` and ``/`` becomes ``~1``."""
    assert pointer("Runs", 0, "Heat input [MMBtu/h]") == "/Runs/0/Heat input [MMBtu~1h]"
    assert pointer("m~n") == "/m~0n"


@pytest.mark.parametrize(
    "content",
    [
        b"{",
        b"[]",
        b'{"Test": {"Facility": "a", "Facility": "b"}}',
        b'{"Runs": [{"Load": NaN}]}',
        b'{"Runs": [{"Load": Infinity}]}',
        b'{"Runs": [{"Load": ' + b"9" * 5000 + b"}]}",
        b"{" + b'"a":{' * 100_000,
        b'{"Test": "\xff"}',
        b'{"Runs": {"Run": 1}}',
        b'{"Test": []}',
        b'{"Runs": [1]}',
        b'{"Runs": [{"Load": [1]}]}',
    ],
)
def test_json_that_cannot_be_read(content: bytes) -> None:
    assert "bad-json" in {code for code, _ in problems(content)}


def test_a_huge_number_is_no_traceback() -> None:
    data = plain()
    data["Runs"][0]["Load"] = 10**400
    assert problems(data) == [("text-for-number", "/Runs/0/Load")]
    data["Runs"][0]["Load"] = 1
    data["Channels"][0]["Unit"] = "mg/m3"
    data["Readings"][0]["NOx"] = 1e308
    assert problems(data) == [("out-of-range", "/Readings/0/NOx")]
    assert problems(json.dumps(data).replace("1e+308", "1e999").encode()) == [("text-for-number", "/Readings/0/NOx")]


@pytest.mark.parametrize(
    "content",
    [
        b'{"Test": {' + b",".join(b'"k%d": 1' % n for n in range(300_000)) + b', "z": 1, "z": 2}}',
        b'{"Readings": [' + b",".join(b'{"k%d": 1}' % n for n in range(50_000)) + b"]}",
        b'{"Readings": [' + b",".join([b"{}"] * 400_000) + b"]}",
        b'{"Test": {"Facility": "' + b"," * 1_300_000 + b'"}}',
    ],
)
def test_json_made_to_take_time_and_memory_is_refused_at_once(content: bytes) -> None:
    start = time.process_time()
    assert "bad-json" in {code for code, _ in problems(content)}
    assert time.process_time() - start < 1.0


def test_halves_of_characters_become_question_marks() -> None:
    data = plain()
    data["Test"]["Facility"] = "Alder\ud800 Creek"
    record = read_bytes("record.json", json.dumps(data).encode()).record
    assert record is not None
    assert record.test.facility.value == "Alder? Creek"


def test_texts_have_an_end() -> None:
    data = plain()
    data["Test"]["Purpose"] = "x" * 32_768
    assert problems(data) == [("out-of-range", "/Test/Purpose")]
    data["Test"]["Purpose"] = ""
    data["Events"] = [{"Time": "9:00", "What": "x" * 30_000} for _ in range(40)]
    assert problems(data) == [("zip-bomb", "")]
