"""Calibrations, Criteria, Limits, Problems, About: what was entered and found, numbers live by name."""

from __future__ import annotations

import platform
from collections.abc import Sequence
from dataclasses import fields
from datetime import date
from enum import Enum
from importlib.metadata import version as installed

from reporter.ledger import Ledger
from reporter.outcome import Check, Outcome
from reporter.output.finding_words import finding_words
from reporter.output.numbers import capital, runs_text, shortest, unit_text
from reporter.output.phrases import Phrases
from reporter.output.workbook_book import Column, Sheet
from reporter.output.workbook_home import number_format
from reporter.output.workbook_summary import quoted
from reporter.output.workbook_words import columns, words
from reporter.problems import Grade
from reporter.record import Given, Limit
from reporter.units import ReadUnit

_ORDER = (Grade.UNREADABLE, Grade.BLOCKS, Grade.NOTE)
_GRADES = {Grade.UNREADABLE: "unreadable", Grade.BLOCKS: "blocks", Grade.NOTE: "note"}
_PACKAGES = ("numpy", "openpyxl", "xlsxwriter")


def write_calibrations(sheet: Sheet, outcome: Outcome) -> None:
    """Every calibration reading as it was used."""
    table = columns("calibrations")
    sheet.title(words("calibrations")["title"], words("calibrations")["note"])
    sheet.head(table, freeze=2)
    first = sheet.row
    for point in sorted(outcome.calibration_points, key=lambda point: (point.time, point.channel)):
        sheet.moment(0, point.time)
        sheet.texts({1: point.channel, 2: point.route, 3: point.level}, table)
        _live(sheet, outcome.ledger, 4, point.reading)
        _live(sheet, outcome.ledger, 5, point.certified)
        unit = unit_text(outcome.ledger[point.reading].unit)
        sheet.texts({6: unit, 7: point.cylinder, 8: point.used_as.replace("_", " "), 9: point.reading}, table)
        sheet.next()
    sheet.rules(first, len(table))


def _live(sheet: Sheet, ledger: Ledger, column: int, key: str) -> None:
    if key:
        sheet.live(column, key, ledger[key].value, number_format(ledger[key]))


def write_criteria(sheet: Sheet, outcome: Outcome, phrases: Phrases) -> None:
    """Every criterion with the numbers it compares and its live answer."""
    table = columns("criteria")
    sheet.title(words("criteria")["title"], words("criteria")["note"])
    sheet.head(table, freeze=1)
    first = sheet.row
    for check in outcome.checks:
        _criterion(sheet, outcome, check, phrases, table)
        sheet.next()
    sheet.rules(first, len(table))
    if sheet.row > first:
        sheet.made.autofilter(first - 1, 0, sheet.row - 1, len(table) - 1)


def _criterion(sheet: Sheet, outcome: Outcome, check: Check, phrases: Phrases, table: Sequence[Column]) -> None:
    ledger = outcome.ledger
    names = [run.run.run.value for run in outcome.runs if run.key in check.runs]
    met, not_met = phrases("criterion.met"), phrases("criterion.not_met")
    sheet.texts([check.title, check.gas, ", ".join(names)], table)
    for column, key in ((3, check.value), (6, check.bound), (7, check.difference), (8, check.alternative)):
        _live(sheet, ledger, column, key)
    units = {4: check.value, 9: check.difference}
    sheet.texts({at: unit_text(ledger[key].unit) if key else "" for at, key in units.items()}, table)
    sheet.texts({5: check.relation, 11: check.citation.text()}, table)
    sheet.live(10, f"IF({check.key}=1,{quoted(met)},{quoted(not_met)})", met if check.met else not_met, "", "strong")
    if check.consequence:
        sheet.text(12, check.consequence, "wrap")
        formula = f'IF({check.key}=1,"",{quoted(check.consequence)})'
        sheet.live(12, formula, "" if check.met else check.consequence, "", "wrap")


def write_limits(sheet: Sheet, limits: Sequence[Limit]) -> None:
    """Each limit as entered: one column for each, one row for each field that any of them has."""
    said = words("limits")
    sheet.title(said["title"], said["note"])
    heads = [Column("", said["field_width"], "strong")]
    heads += [Column(limit.limit_id.value, said["value_width"], "input_text") for limit in limits]
    sheet.head(heads, freeze=1)
    first = sheet.row
    for name in (field.name for field in fields(Limit) if field.name not in {"place", "limit_id"}):
        texts = [as_entered(getattr(limit, name)) for limit in limits]
        if any(texts):
            sheet.texts([name.replace("_", " ").capitalize(), *texts], heads)
            sheet.next()
    sheet.rules(first, len(heads))


def as_entered(given: Given[object] | None) -> str:
    """A field as a person entered it: the text that stood there, else the value, with its unit."""
    if given is None:
        return ""
    value = given.value
    if isinstance(value, ReadUnit):
        return given.text or value.unit
    if isinstance(value, Enum):
        return given.text or str(value.value)
    if isinstance(value, date):
        return value.isoformat()
    text = given.text or (shortest(value, 12) if isinstance(value, float) else str(value))
    unit = unit_text(given.unit.unit) if given.unit is not None else ""
    return f"{text} {unit}".strip()


def write_problems(sheet: Sheet, outcome: Outcome, phrases: Phrases) -> None:
    """Everything found, gravest first; then what was assumed, and what the balance says."""
    said, table = words("problems"), columns("problems")
    sheet.title(said["title"], said["note"])
    sheet.head(table, freeze=1)
    first = sheet.row
    if not outcome.problems:
        sheet.text(0, said["none"])
        sheet.next()
    for grade in _ORDER:
        for found in (problem for problem in outcome.problems if problem.grade is grade):
            texts = [phrases(f"grade.{_GRADES[grade]}"), found.title, found.place.text(), found.found]
            sheet.texts([*texts, found.expected, found.remedy, found.code], table)
            sheet.next()
    sheet.rules(first, len(table))
    _lines(sheet, said["prepared"], outcome.record.prepared, len(table))
    _lines(sheet, said["stated"], outcome.stated, len(table))
    findings = []
    for keys, text in finding_words(outcome.findings, phrases):
        runs = capital(runs_text([outcome.run(key).run.run.value for key in keys]))
        findings.append(f"{said['finding_runs'].format(runs=runs)}{text}" if keys else text)
    _lines(sheet, said["findings"], findings, len(table))


def _lines(sheet: Sheet, title: str, lines: Sequence[str], width: int) -> None:
    if not lines:
        return
    sheet.section(title, width)
    for line in lines:
        sheet.text(0, line)
        sheet.next()


def write_about(sheet: Sheet, outcome: Outcome, version: str, phrases: Phrases) -> None:
    """How to read the workbook, what it was made from and by, and the statements."""
    said = words("about")
    sheet.title(said["title"])
    sheet.widths([Column("", said["width"])])
    lines_of_inputs = [
        said["input_line"].format(name=one.name, size=one.size, sha256=one.sha256) for one in outcome.record.inputs
    ]
    packages = ", ".join(f"{name} {installed(name)}" for name in _PACKAGES)
    versions = f"fluebook {version}, Python {platform.python_version()}, {packages}"
    statements = ("limits", "no_decision", "review", "items", "representative", "methods")
    for title, lines in (
        (said["reading"], said["how"]),
        (said["input"], lines_of_inputs),
        (said["versions"], [versions]),
        (said["issued"], [sheet.book.issued.isoformat(timespec="seconds")]),
        (said["statements"], [phrases(f"statements.{name}") for name in statements]),
    ):
        sheet.section(title, 1)
        for text in lines:
            sheet.text(0, text, "wrap")
            sheet.next()
