"""The home of every number: one cell on Inputs or Derivations, or a range of the readings, named by its key."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from typing import Any

from reporter.errors import LedgerError
from reporter.ledger import Entry, FromCells, FromEquation, FromTable, Ledger, Stated
from reporter.output.numbers import SIGNIFICANT, unit_text
from reporter.output.workbook_book import Book, Column, Sheet
from reporter.output.workbook_words import columns, words
from reporter.quantities import Quantity, label_of, quantity_of
from reporter.typeset import sheet_formula, text_formula

_INPUT_VALUE, _VALUE = 2, 3
_MOST_DECIMALS = 8


def fixed_format(decimals: int) -> str:
    """The number format of a count of decimals."""
    return "0." + "0" * decimals if decimals > 0 else "0"


def significant_format(value: float, digits: int) -> str:
    """The number format that shows a value with a count of significant digits."""
    decimals = digits - 1 - math.floor(math.log10(abs(value))) if value else digits - 1
    return "0.0000E+00" if decimals > _MOST_DECIMALS else fixed_format(decimals)


def number_format(entry: Entry) -> str:
    """The number format of an entry: its own decimals, else those of its quantity, else significant digits."""
    quantity = known_quantity(entry.key)
    decimals = entry.decimals
    if decimals is None and quantity is not None:
        decimals = quantity.decimals
    if entry.is_indicator:
        decimals = 0
    if decimals is not None:
        return fixed_format(decimals)
    return significant_format(entry.value, quantity.significant if quantity is not None else SIGNIFICANT)


def known_quantity(key: str) -> Quantity | None:
    """The quantity of a key, or None where the table has none."""
    try:
        return quantity_of(key)[0]
    except LedgerError:
        return None


def label(entry: Entry) -> str:
    """The entry's label in words."""
    if entry.label:
        return entry.label
    return label_of(entry.key) if known_quantity(entry.key) is not None else ""


def source_text(entry: Entry) -> str:
    """Where an entry that is not computed comes from; the input's name stands on the About sheet."""
    match entry.origin:
        case FromCells(place=place):
            return replace(place, file="").text()
        case FromTable(citation=citation, row=row):
            return f"{citation.text()}: {row}" if row else citation.text()
        case Stated(reason=reason, citation=citation):
            return f"{reason} ({citation.text()})" if citation is not None else reason
    return ""


@dataclass
class Roots:
    """The leaves each entry rests on, gathered along the ledger."""

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
        """Cells of the input, sheet by sheet, e.g. ``Calibrations!E17, E21; Cylinders!C8``; then other sources."""
        cells: dict[str, dict[str, None]] = {}
        others: dict[str, None] = {}
        for key in self.of(entry):
            origin = self.ledger[key].origin
            if isinstance(origin, FromCells):
                cells.setdefault(origin.place.sheet, {})[origin.place.cell or origin.place.field] = None
            elif isinstance(origin, FromTable):
                others[origin.citation.text()] = None
            elif isinstance(origin, Stated):
                others[origin.reason] = None
        groups = [f"{sheet}!{', '.join(places)}" if sheet else ", ".join(places) for sheet, places in cells.items()]
        return "; ".join([*groups, *others])


def write_inputs(book: Book, sheet: Sheet, ledger: Ledger) -> None:
    """Write every number that is not computed: single ones as named input cells, series with their range."""
    table, said = columns("inputs"), words("inputs")
    sheet.title(said["title"], said["note"])
    sheet.head(table, freeze=1)
    groups: Sequence[tuple[str, type[Any], str]] = (
        (said["entered"], FromCells, "input"),
        (said["published"], FromTable, "given"),
        (said["stated"], Stated, "given"),
    )
    for title, origin, style in groups:
        entries = [entry for entry in ledger if isinstance(entry.origin, origin)]
        if not entries:
            continue
        sheet.section(title, len(table), "group")
        first = sheet.row
        for entry in entries:
            _input_row(book, sheet, entry, style, table)
            sheet.next()
        sheet.rules(first, len(table))


def _input_row(book: Book, sheet: Sheet, entry: Entry, style: str, table: Sequence[Column]) -> None:
    written = entry.origin.text if isinstance(entry.origin, FromCells) else ""
    unit, basis = unit_text(entry.unit), entry.basis.text()
    texts = {3: unit, 4: basis, 5: source_text(entry), 6: written, 7: entry.note}
    sheet.texts({0: entry.key, 1: label(entry), **texts}, table)
    if isinstance(entry.value, tuple):
        cells = book.cells_of(entry.key).replace("$", "")
        sheet.text(_INPUT_VALUE, words("inputs")["readings"].format(cells=cells), "wrap")
        return
    sheet.number(_INPUT_VALUE, entry.value, "General", style)
    book.define(entry.key, sheet.here(_INPUT_VALUE))


def write_derivations(book: Book, sheet: Sheet, ledger: Ledger) -> None:
    """Write one row for every entry; the value of a computed one is its live formula and its home."""
    table, said = columns("derivations"), words("derivations")
    sheet.title(said["title"], said["note"])
    sheet.head(table, freeze=1)
    first = sheet.row
    roots = Roots(ledger)
    for entry in ledger:
        texts = {0: entry.key, 1: label(entry), 2: entry.symbol, 4: unit_text(entry.unit)}
        sheet.texts({**texts, 5: entry.basis.text(), 11: roots.text(entry), 13: entry.note}, table)
        if isinstance(entry.origin, FromEquation):
            _computed(book, sheet, ledger, entry, table)
        elif isinstance(entry.value, tuple):
            sheet.live(_VALUE, f"COUNT({entry.key})", len(entry.value), '0" values"')
        else:
            sheet.live(_VALUE, entry.key, entry.value, "General")
        sheet.next()
    sheet.rules(first, len(table))
    sheet.made.autofilter(first - 1, 0, sheet.row - 1, len(table) - 1)


def _computed(book: Book, sheet: Sheet, ledger: Ledger, entry: Entry, table: Sequence[Column]) -> None:
    assert isinstance(entry.origin, FromEquation)
    equation, tree = entry.origin.equation, ledger.trace(entry)
    formula = sheet_formula(tree)
    texts = {
        6: equation.summary,
        7: f"{equation.symbol} = {text_formula(tree)}",
        8: equation.citation.text(),
        9: formula,
        10: ", ".join(entry.origin.keys()),
        12: "yes" if equation.difference else "",
    }
    sheet.texts(texts, table)
    sheet.live(_VALUE, formula, entry.value, number_format(entry))
    book.define(entry.key, sheet.here(_VALUE))
