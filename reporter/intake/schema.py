"""The JSON Schema of a record given as JSON, derived from the field sheets."""

from __future__ import annotations

import re
from typing import Any

from reporter.intake.sheets import Column, Kind, Sheet, Type, sheets

DIALECT = "https://json-schema.org/draft/2020-12/schema"
#: A key may carry its unit in brackets, as a header does.
UNIT_PATTERN = r"( ?[\[(][^\[\]()]+[\])])?$"


def input_schema() -> dict[str, Any]:
    """The schema (draft 2020-12) of the input: one property for each sheet of the field workbook."""
    return {
        "$schema": DIALECT,
        "title": "Field record of one stack test",
        "description": (
            "The field workbook as JSON. A key may carry its unit in brackets, as a header does: "
            "'Stack temperature [°F]'. Dates are written year-month-day, times with their date "
            "(2026-04-14T09:30) or alone, then of the test date."
        ),
        "type": "object",
        "required": [sheet.name for sheet in sheets() if sheet.required],
        "properties": {sheet.name: _sheet(sheet) for sheet in sheets()},
        "additionalProperties": False,
    }


def _sheet(sheet: Sheet) -> dict[str, Any]:
    described = {"title": sheet.title, "description": sheet.note}
    if sheet.kind is Kind.ITEMS:
        return {**described, **_row(sheet, others=_any_value(), items=True)}
    others = _any_value() if sheet.kind in (Kind.READINGS, Kind.PROCESS) else False
    least = {"minItems": 1} if sheet.required else {}
    return {**described, "type": "array", **least, "items": _row(sheet, others=others)}


def _row(sheet: Sheet, *, others: Any, items: bool = False) -> dict[str, Any]:
    """An object with the columns of a sheet; a required column of numbers may carry its unit in its key."""
    plain: dict[str, Any] = {}
    patterns: dict[str, Any] = {}
    required, one_of = [], []
    for column in sheet.columns:
        value = _value(column)
        entry = {"anyOf": [value, _with_note(value)]} if items else value
        if column.type is Type.NUMBER:
            pattern = "^" + re.escape(column.name).replace("\\ ", " ") + UNIT_PATTERN
            patterns[pattern] = entry
            if column.required:
                one_of.append(pattern)
        else:
            plain[column.name] = entry
            if column.required:
                required.append(column.name)
    made: dict[str, Any] = {"type": "object", "required": required, "properties": plain}
    if patterns:
        made["patternProperties"] = patterns
    if one_of:
        made["allOf"] = [{"not": {"propertyNames": {"not": {"pattern": pattern}}}} for pattern in one_of]
    made["additionalProperties"] = {"anyOf": [others, _with_note(others)]} if items else others
    return made


def _with_note(value: Any) -> dict[str, Any]:
    return {
        "type": "object",
        "required": ["Entry"],
        "properties": {"Entry": value, "Note": {"type": ["string", "null"]}},
        "additionalProperties": False,
    }


def _any_value() -> dict[str, Any]:
    return {"type": ["string", "number", "boolean", "null"]}


def _value(column: Column) -> dict[str, Any]:
    """The schema of one value; what is not required may be null."""
    kinds: list[str] = ["number", "string"] if column.type is Type.TEXT else ["string"]
    made: dict[str, Any] = {"description": column.note}
    if column.type is Type.NUMBER:
        kinds = ["number"]
        if column.us == column.si and column.dimensions and column.us != "%":
            made["description"] += f" In {column.us} unless the key names a unit."
        elif column.us:
            made["description"] += f" In {column.us} (US) or {column.si} (SI) unless the key names a unit."
    elif column.type is Type.BOOL:
        kinds = ["boolean", "string"]
    elif column.type is Type.DATE:
        made["format"] = "date"
    if column.choices and column.type is not Type.BOOL:
        made["enum"] = [*column.choices, *(() if column.required else (None,))]
        return made
    made["type"] = kinds if column.required and len(kinds) > 1 else kinds[0] if column.required else [*kinds, "null"]
    return made
