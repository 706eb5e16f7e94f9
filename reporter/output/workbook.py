"""The results workbook: every result a live formula back to the raw readings, by names that are ledger keys.

Each number has one home cell (Inputs, Derivations, or a range on Readings); all other sheets refer to it by
name.  The value the program computed is stored beside each formula.  Same outcome, issue time and version:
same bytes.
"""

from __future__ import annotations

from datetime import datetime

from reporter.equation import System
from reporter.outcome import Outcome
from reporter.output.phrases import Phrases, load_phrases
from reporter.output.workbook_book import Book
from reporter.output.workbook_home import write_derivations, write_inputs
from reporter.output.workbook_readings import other_series, write_other_series, write_readings
from reporter.output.workbook_record import (
    write_about,
    write_calibrations,
    write_criteria,
    write_limits,
    write_problems,
)
from reporter.output.workbook_runs import write_runs
from reporter.output.workbook_summary import write_summary
from reporter.output.workbook_words import words
from reporter.record import text_of
from reporter.synthetic import stamped


def write_workbook(outcome: Outcome, *, issued: datetime, version: str, phrases: Phrases | None = None) -> bytes:
    """The results workbook of a test.

    Parameters
    ----------
    outcome
        The assessed test.
    issued
        Issue time; the only date in the file's properties.
    version
        Version of this program.
    phrases
        The fixed phrases; the shipped ones where absent.

    Returns
    -------
    bytes
        The file.

    Raises
    ------
    OutputError
        A key cannot name a cell, or a formula is too long for one.
    """
    spoken = phrases or load_phrases()
    record = outcome.record
    book = Book(issued, _report_name(outcome, spoken), record.system is System.SI)
    further = other_series(outcome)
    names = [name for name in _SHEETS if further or name != "series"]
    pages = {name: book.sheet(words(name)["title"], wide=name in _WIDE) for name in names}
    write_readings(book, pages["readings"], outcome)
    if further:
        write_other_series(book, pages["series"], further)
    write_inputs(book, pages["inputs"], outcome.ledger)
    write_derivations(book, pages["derivations"], outcome.ledger)
    write_summary(pages["summary"], outcome, spoken)
    write_runs(pages["runs"], outcome)
    write_calibrations(pages["calibrations"], outcome)
    write_criteria(pages["criteria"], outcome, spoken)
    write_limits(pages["limits"], record.limits)
    write_problems(pages["problems"], outcome, spoken)
    write_about(pages["about"], outcome, version, spoken)
    return book.close()


_SHEETS = (
    "summary", "runs", "readings", "series", "calibrations", "criteria", "limits", "derivations", "inputs",
    "problems", "about",
)  # fmt: skip
#: Sheets printed on the larger paper.
_WIDE = frozenset({"series", "derivations"})


def _report_name(outcome: Outcome, phrases: Phrases) -> str:
    test = outcome.record.test
    number = text_of(test.report_number) or phrases("status.no_number")
    status = text_of(test.status, "draft")
    name = f"{number}, {phrases(f'status.{status}')}, {test.facility.value}, {test.unit_tested.value}"
    return stamped(outcome.record, name)
