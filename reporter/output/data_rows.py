"""What was found, as plain rows for the results file; numbers stand in the entries their keys name."""

from __future__ import annotations

from dataclasses import fields
from datetime import date
from enum import Enum
from typing import Any

from reporter.equation import Citation
from reporter.outcome import (
    CalibrationPoint,
    Check,
    Comparison,
    Exclusion,
    GasResult,
    RunResult,
    Series,
)
from reporter.record import Given
from reporter.units import ReadUnit


def citation_row(citation: Citation | None) -> dict[str, Any] | None:
    """A citation with its text."""
    if citation is None:
        return None
    return {
        "document": citation.document,
        "section": citation.section or None,
        "number": citation.number or None,
        "text": citation.text(),
    }


def run_row(result: RunResult) -> dict[str, Any]:
    """One run with its gases and what was left out of them."""
    run = result.run
    return {
        "key": result.key,
        "name": run.run.value,
        "start": run.start.value.isoformat(),
        "end": run.end.value.isoformat(),
        "state": result.state.value,
        "reasons": list(result.reasons),
        "as_entered": as_entered(run),
        "gases": [_gas(gas) for gas in result.gases],
        "exclusions": [_exclusion(exclusion) for exclusion in result.exclusions],
    }


def _gas(result: GasResult) -> dict[str, Any]:
    return {
        "gas": result.gas,
        "segment": result.segment,
        "channel": result.channel.channel.value,
        "pollutant": result.pollutant,
        "is_valid": result.is_valid,
        "valid": result.valid or None,
        "reasons": list(result.reasons),
        "series": None if result.series is None else _series(result.series),
    }


def _series(series: Series) -> dict[str, Any]:
    left_out = [
        {"time": time.isoformat(), "text": reading.text, "kind": reading.kind.value, "reason": reason}
        for time, reading, reason in series.left_out
    ]
    return {
        "key": series.key,
        "interval_seconds": series.interval.total_seconds(),
        "first_row": series.first_row,
        "last_row": series.last_row,
        "times": [time.isoformat() for time, _ in series.used],
        "left_out": left_out,
        "missing_minutes": [time.isoformat() for time in series.missing_minutes],
    }


def _exclusion(exclusion: Exclusion) -> dict[str, Any]:
    return {
        "start": exclusion.start.isoformat(),
        "end": exclusion.end.isoformat(),
        "reason": exclusion.reason,
        "count": exclusion.count,
    }


def calibration_row(point: CalibrationPoint) -> dict[str, Any]:
    """One calibration reading as it was used."""
    return {
        "time": point.time.isoformat(),
        "channel": point.channel,
        "route": point.route,
        "level": point.level,
        "reading": point.reading or None,
        "certified": point.certified or None,
        "cylinder": point.cylinder or None,
        "used_as": point.used_as or None,
    }


def check_row(check: Check) -> dict[str, Any]:
    """One criterion as it was applied."""
    return {
        "key": check.key,
        "title": check.title,
        "gas": check.gas or None,
        "runs": list(check.runs),
        "met": check.met,
        "value": check.value or None,
        "relation": check.relation,
        "bound": check.bound or None,
        "difference": check.difference or None,
        "alternative": check.alternative or None,
        "decides_validity": check.decides_validity,
        "consequence": check.consequence or None,
        "citation": citation_row(check.citation),
    }


def comparison_row(comparison: Comparison) -> dict[str, Any]:
    """One limit beside what was measured."""
    keys = ("value", "rounded", "limit_key", "margin", "met", "count", "required", "with_excluded", "cross")
    return {
        "key": comparison.key,
        "limit": as_entered(comparison.limit),
        "quantity": comparison.quantity or None,
        "compared": comparison.compared,
        "is_met": comparison.is_met,
        "reason": comparison.reason or None,
        "rounding": comparison.rounding_words or None,
        "runs": [
            {"run": run, "value": value or None, "counts": counts or None} for run, value, counts in comparison.runs
        ],
        **{name: getattr(comparison, name) or None for name in keys},
        "cross_words": comparison.cross_words or None,
        "notes": list(comparison.notes),
    }


def as_entered(row: Any) -> dict[str, Any]:
    """What was entered in a row of the input, by field; a number with its unit, fields left empty missing."""
    entered: dict[str, Any] = {}
    for field in fields(row):
        value = getattr(row, field.name)
        if isinstance(value, Given):
            entered[field.name] = _given(value)
    return entered


def _given(given: Given[Any]) -> Any:
    value = _plain(given.value)
    return {"value": value, "unit": given.unit.unit} if isinstance(value, float) and given.unit else value


def _plain(value: Any) -> Any:
    match value:
        case ReadUnit():
            return value.unit
        case Enum():
            return value.value
        case date():
            return value.isoformat()
    return value
