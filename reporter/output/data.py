"""The results as JSON: every entry of the ledger, and what was found, in full precision.

The form is published as a JSON Schema (`reporter.output.results_schema`).  Everything stands in the order
of the computation; keys are those of the ledger; equal outcomes give equal bytes.
"""

from __future__ import annotations

import json
import platform
from collections.abc import Iterable, Mapping
from datetime import datetime
from importlib.metadata import version as installed
from typing import Any

from reporter.equation import Equation, System, unit_in
from reporter.errors import LedgerError
from reporter.ledger import Entry, FromCells, FromEquation, FromTable, Ledger, Stated
from reporter.outcome import Outcome
from reporter.output.data_rows import (
    as_entered,
    calibration_row,
    check_row,
    citation_row,
    comparison_row,
    run_row,
)
from reporter.output.results_schema import SCHEMA_ID
from reporter.quantities import label_of
from reporter.typeset import text_formula

#: The packages whose version can change a number or a byte of the outputs.
_PACKAGES = ("numpy", "openpyxl", "jinja2", "weasyprint", "xlsxwriter", "pypdf")


def to_json(outcome: Outcome, issued: datetime, version: str) -> bytes:
    """The results file of a test.

    Parameters
    ----------
    outcome
        The assessed test.
    issued
        Time of issue, printed as given (to the second).
    version
        Version of this program.

    Returns
    -------
    bytes
        JSON in ASCII, one item of a section per line, with a newline at the end.
    """
    record = outcome.record
    document: dict[str, Any] = {
        "fluebook": {"version": version, "schema": SCHEMA_ID},
        "issued": issued.isoformat(timespec="seconds"),
        "unit_system": record.system.value,
        "inputs": [{"name": s.name, "sha256": s.sha256, "size": s.size} for s in record.inputs],
        "versions": {"python": platform.python_version(), **{name: installed(name) for name in _PACKAGES}},
        "test": as_entered(record.test),
        "extra": [
            {"item": row.item, "entry": row.entry, "note": row.note}
            for row in (*record.test.extra, *record.location.extra)
        ],
        "attachments": [as_entered(attachment) for attachment in record.attachments],
        "prepared": list(record.prepared),
        "stated": list(outcome.stated),
        "runs": [run_row(run) for run in outcome.runs],
        "averages": list(outcome.averages),
        "comparisons": [comparison_row(comparison) for comparison in outcome.comparisons],
        "checks": [check_row(check) for check in outcome.checks],
        "findings": [
            {"run": finding.run or None, "words": finding.words, "keys": list(finding.keys)}
            for finding in outcome.findings
        ],
        "calibrations": [calibration_row(point) for point in outcome.calibration_points],
        "problems": [problem.as_dict() for problem in outcome.problems],
        **_numbers(outcome.ledger),
    }
    return (_text(document) + "\n").encode("ascii")


def _numbers(ledger: Ledger) -> dict[str, Any]:
    """The equations used, each once, and all entries, which refer to them by name."""
    names: dict[Any, str] = {}
    equations: dict[str, Any] = {}
    entries: dict[str, Any] = {}
    for entry in ledger:
        if isinstance(entry.origin, FromEquation):
            equation = entry.origin.equation
            if equation.body not in names:
                name = _free(equation.name, equations)
                names[equation.body] = name
                equations[name] = _equation(equation, ledger.system)
        entries[entry.key] = _entry(entry, names)
    return {"equations": equations, "entries": entries}


def _free(name: str, taken: Mapping[str, Any]) -> str:
    """The name, numbered where another equation has it."""
    count = 2
    free = name
    while free in taken:
        free, count = f"{name}_{count}", count + 1
    return free


def _equation(equation: Equation[Any], system: System) -> dict[str, Any]:
    printed = equation.in_system(system)
    constants = {
        name: {
            "value": parameter.constant.value(system),
            "unit": unit_in(parameter.constant.unit, system),
            "symbol": parameter.symbol,
            "citation": citation_row(parameter.constant.citation),
        }
        for name, parameter in printed.parameters.items()
        if parameter.constant is not None
    }
    return {
        "summary": printed.summary,
        "symbol": printed.symbol,
        "formula": text_formula(printed.symbols()),
        "symbols": {name: parameter.symbol for name, parameter in printed.parameters.items()},
        "constants": constants,
        "indicator": printed.indicator,
        "difference": printed.difference,
        "citation": citation_row(printed.citation),
    }


def _entry(entry: Entry, names: Mapping[Any, str]) -> dict[str, Any]:
    return {
        "label": entry.label or _label(entry.key),
        "symbol": entry.symbol or None,
        "value": entry.value,
        "unit": entry.unit,
        "basis": entry.basis.as_dict(),
        "origin": _origin(entry, names),
        "note": entry.note or None,
    }


def _label(key: str) -> str:
    """The label of a key in words; the key itself where the quantity table has none."""
    try:
        return label_of(key)
    except LedgerError:
        return key


def _origin(entry: Entry, names: Mapping[Any, str]) -> dict[str, Any]:
    match entry.origin:
        case FromCells(place=place, text=text):
            return {"kind": "cells", "place": place.as_dict(), "text": text}
        case FromTable(citation=citation, row=row):
            return {"kind": "table", "citation": citation_row(citation), "row": row or None}
        case Stated(reason=reason, citation=stated):
            return {"kind": "stated", "reason": reason, "citation": citation_row(stated)}
        case FromEquation(equation=equation, inputs=inputs):
            given = {name: list(keys) if isinstance(keys, tuple) else keys for name, keys in inputs}
            return {"kind": "equation", "equation": names[equation.body], "inputs": given}


def _text(document: Mapping[str, Any]) -> str:
    """JSON text: each section on a line, or each of its items where it has several."""
    sections = (f"{json.dumps(name)}: {_section(value)}" for name, value in document.items())
    return "{\n" + ",\n".join(sections) + "\n}"


def _section(value: Any) -> str:
    if isinstance(value, dict) and value:
        return _block("{", (f"{json.dumps(name)}: {_compact(item)}" for name, item in value.items()), "}")
    if isinstance(value, list) and value:
        return _block("[", map(_compact, value), "]")
    return _compact(value)


def _block(opening: str, items: Iterable[str], closing: str) -> str:
    return f"{opening}\n " + ",\n ".join(items) + f"\n{closing}"


def _compact(value: Any) -> str:
    return json.dumps(value, allow_nan=False, separators=(", ", ": "))
