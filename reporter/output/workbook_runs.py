"""Runs: a matrix of quantities by runs with the averages, all live by name."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reporter.gases import find_gas
from reporter.ledger import Entry, Ledger
from reporter.outcome import Outcome, RunResult
from reporter.output.numbers import unit_text
from reporter.output.workbook_book import Column, Sheet
from reporter.output.workbook_home import known_quantity, label, number_format
from reporter.output.workbook_words import columns, words
from reporter.quantities import quantity_of

_FIRST_RUN = 3


def write_runs(sheet: Sheet, outcome: Outcome) -> None:
    """One row for each quantity, gas by gas; a number of a channel that is not valid in a run is struck out."""
    said, runs = words("runs"), outcome.runs
    table = list(columns("runs", "left"))
    table += [Column(f"Run {run.run.run.value}", said["run_width"], "number") for run in runs]
    table.append(Column(**said["average"]))
    sheet.title(said["title"], said["note"])
    sheet.head(table, freeze=1)
    rows = _matrix(outcome.ledger, runs)
    for subject in sorted(dict.fromkeys(_subject(name) for name in rows), key=lambda subject: subject == ""):
        sheet.section(subject or said["others"], len(table), "group")
        first = sheet.row
        for name, entries in rows.items():
            if _subject(name) == subject:
                _row(sheet, outcome, name, entries, table)
        _strike(sheet, runs, first, subject)
        sheet.rules(first, len(table))


def _subject(name: str) -> str:
    """The gas or other subject of a row, as it is printed; empty for the run itself."""
    segment, _, rest = name.partition(".")
    if not rest or known_quantity(f"x.{segment}") is not None:
        return ""
    found = find_gas(segment)
    return found.label if found is not None else segment.replace("_", " ").capitalize()


def _row(sheet: Sheet, outcome: Outcome, name: str, entries: Mapping[str, Entry], table: Sequence[Column]) -> None:
    shown = next(iter(entries.values()))
    sheet.texts([_row_label(shown, name), unit_text(shown.unit), shown.basis.text()], table)
    for column, run in enumerate(outcome.runs, _FIRST_RUN):
        entry = entries.get(run.key)
        if entry is not None:
            sheet.live(column, entry.key, entry.value, number_format(entry))
    average = outcome.ledger.get(f"average.{name}")
    if average is not None:
        sheet.live(_FIRST_RUN + len(outcome.runs), average.key, average.value, number_format(average))
    sheet.next()


def _strike(sheet: Sheet, runs: Sequence[RunResult], first: int, subject: str) -> None:
    """Strike out the numbers of a gas in the runs in which its channel is not valid, as the indicator says."""
    for column, run in enumerate(runs, _FIRST_RUN):
        for gas in (gas for gas in run.gases if _subject(f"{gas.segment}.mean") == subject):
            sheet.strike(first, column, f"{gas.valid}<>1")


def _row_label(entry: Entry, name: str) -> str:
    """The label without the gas, which stands above, and without the run, which is the column."""
    parts = [part for part in label(entry).split(", ") if not part.startswith("run ")]
    if len(parts) > 1 and parts[0] == _subject(name):
        parts = parts[1:]
    text = ", ".join(parts) or name
    return text[:1].upper() + text[1:]


def _matrix(ledger: Ledger, runs: Sequence[RunResult]) -> Mapping[str, dict[str, Entry]]:
    """Entries by the key after ``run.<run>.`` and by run, in the order of the ledger."""
    found: dict[str, dict[str, Entry]] = {}
    for run in runs:
        prefix = f"run.{run.key}."
        for entry in ledger.under(prefix.rstrip(".")):
            if not entry.is_series and _is_shown(entry.key):
                found.setdefault(entry.key.removeprefix(prefix), {})[run.key] = entry
    return found


def _is_shown(key: str) -> bool:
    """Whether the quantity is one of the table of runs, as it is or in one of the variants shown."""
    said = words("runs")
    if known_quantity(key) is None:
        return False
    quantity, variants = quantity_of(key)
    shown = all(name in said["variants"] or name.startswith("limit_") for name in variants)
    return shown and quantity.segment in said["quantities"]
