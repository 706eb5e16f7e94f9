"""The home of every number: one cell on Inputs or Derivations, or a range of the readings, named by its key."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from reporter.errors import LedgerError
from reporter.ledger import Entry, FromCells, FromEquation, FromTable, Ledger, Stated
from reporter.output.numbers import unit_text
from reporter.output.workbook_book import Book, Column, Sheet
from reporter.output.workbook_words import columns, words
from reporter.quantities import Quantity, label_of, quantity_of
from reporter.typeset import sheet_formula, text_formula

_INPUT_VALUE, _VALUE = 2, 3


def number_format(entry: Entry) -> str:
    """The number format of an entry: its own decimals, else those of its quantity, else its significant digits."""
    if entry.is_indicator:
        return "0"
    decimals = entry.decimals
    quantity = known_quantity(entry.key)
    if decimals is None and quantity is not None:
        decimals = quantity.decimals
    if decimals is None or isinstance(entry.value, tuple):
        decimals = _significant(entry.value, quantity.significant if quantity is not None else 6)
    if decimals > 8:
        return "0.0000E+00"
    return "0." + "0" * decimals if decimals > 0 else "0"


def known_quantity(key: str) -> Quantity | None:
    """The quantity of a key, or None where the table has none."""
    try:
        return quantity_of(key)[0]
    except LedgerError:
        return None


def _significant(value: Any, digits: int) -> int:
    size = abs(max(value, key=abs) if isinstance(value, tuple) else value)
    return digits - 1 - math.floor(math.log10(size)) if size > 0.0 else digits - 1


def label(entry: Entry) -> str:
    """The entry's label in words."""
    if entry.label:
        return entry.label
    return label_of(entry.key) if known_quantity(entry.key) is not None else ""


def source_text(entry: Entry) -> str:
    """Where an entry that is not computed comes from."""
    match entry.origin:
        case FromCells(place=place):
            return place.text()
        case FromTable(citation=citation, row=row):
            return f"{citation.text()}: {row}" if row else citation.text()
        case Stated(reason=reason, citation=citation):
            return f"{reason} ({citation.text()})" if citation is not None else reason
    return ""


@dataclass
class Roots:
    """The leaves each entry rests on, gathered along the ledger; a leaf's text is its place."""

    ledger: Ledger
    _known: dict[str, dict[str, None]] = field(default_factory=dict)

    def of(self, entry: Entry) -> dict[str, None]:
        """Keys of the leaves, in order; every entry before it must have been asked for."""
        if isinstance(entry.origin, FromEquation):
            found: dict[str, None] = {}
            inputs = entry.origin.keys()
            for key in inputs:
                found |= self._known[key]
        else:
            found = {entry.key: None}
        self._known[entry.key] = found
        return found

    def text(self, entry: Entry) -> str:
        """The source places of an entry, each once."""
        places = (source_text(self.ledger[key]) for key in self.of(entry))
        return "; ".join(dict.fromkeys(place for place in places if place))


def write_inputs(book: Book, sheet: Sheet, ledger: Ledger) -> None:
    """Write every number that is not computed: single ones as named input cells, series with their range."""
    table = columns("inputs")
    said = words("inputs")
    sheet.title(said["title"], said["note"])
    sheet.head(table, freeze=1)
    sheet.row -= 1
    groups: Sequence[tuple[str, type[Any], str]] = (
        (said["entered"], FromCells, "input"),
        (said["published"], FromTable, "given"),
        (said["stated"], Stated, "given"),
    )
    for title, origin, style in groups:
        entries = [entry for entry in ledger if isinstance(entry.origin, origin)]
        if entries:
            sheet.section(title, len(table))
        for entry in entries:
            _input_row(book, sheet, entry, style, table)
            sheet.row += 1


def _input_row(book: Book, sheet: Sheet, entry: Entry, style: str, table: Sequence[Column]) -> None:
    written = entry.origin.text if isinstance(entry.origin, FromCells) else ""
    texts = {
        0: entry.key,
        1: label(entry),
        3: unit_text(entry.unit),
        4: entry.basis.text(),
        5: source_text(entry),
        6: written,
        7: entry.note,
    }
    sheet.texts(texts, table)
    if isinstance(entry.value, tuple):
        cells = book.cells_of(entry.key)
        shown = words("inputs")["readings"].format(count=len(entry.value), cells=cells.replace("$", ""))
        sheet.text(_INPUT_VALUE, shown, "wrap")
        return
    sheet.number(_INPUT_VALUE, entry.value, _input_format(entry), style)
    book.define(entry.key, sheet.here(_INPUT_VALUE))


def _input_format(entry: Entry) -> str:
    """As many decimals as were entered, at least those of the quantity."""
    shown = number_format(entry)
    digits = repr(entry.value).partition(".")[2]
    if "E" in shown or "e" in digits or digits == "0":
        return shown
    return "0." + "0" * max(len(digits), len(shown.partition(".")[2])) if len(digits) <= 8 else "General"


def write_derivations(book: Book, sheet: Sheet, ledger: Ledger) -> None:
    """Write one row for every entry; the value of a computed one is its live formula and its home."""
    table = columns("derivations")
    said = words("derivations")
    sheet.title(said["title"], said["note"])
    sheet.made.set_paper(8 if book.metric_paper else 3)
    first = sheet.row
    sheet.head(table, freeze=1)
    roots = Roots(ledger)
    for entry in ledger:
        sheet.texts({0: entry.key, 1: label(entry), 2: entry.symbol, 4: unit_text(entry.unit)}, table)
        sheet.texts({5: entry.basis.text(), 11: roots.text(entry), 13: entry.note}, table)
        if isinstance(entry.origin, FromEquation):
            sheet.texts(_computed(ledger, entry, entry.origin), table)
            sheet.live(_VALUE, sheet_formula(ledger.trace(entry)), entry.value, number_format(entry))
            book.define(entry.key, sheet.here(_VALUE))
        else:
            sheet.texts(dict.fromkeys((6, 7, 8, 9, 10, 12), ""), table)
            _not_computed(sheet, entry)
        sheet.row += 1
    sheet.made.autofilter(first, 0, sheet.row - 1, len(table) - 1)


def _computed(ledger: Ledger, entry: Entry, origin: FromEquation) -> dict[int, str]:
    equation, tree = origin.equation, ledger.trace(entry)
    return {
        6: equation.summary,
        7: f"{equation.symbol} = {text_formula(tree)}",
        8: equation.citation.text(),
        9: sheet_formula(tree),
        10: ", ".join(origin.keys()),
        12: "yes" if equation.difference else "",
    }


def _not_computed(sheet: Sheet, entry: Entry) -> None:
    if isinstance(entry.value, tuple):
        sheet.live(_VALUE, f"COUNT({entry.key})", len(entry.value), '0" readings"')
    else:
        sheet.live(_VALUE, entry.key, entry.value, _input_format(entry))
