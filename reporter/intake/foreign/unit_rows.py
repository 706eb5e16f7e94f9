"""A row of text among the readings that names other units than those the columns are read in."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reporter.intake.foreign.mapping import MappedColumn
from reporter.intake.foreign.tables import Table, at, blank
from reporter.intake.foreign.words import folded, gases_in, units_in
from reporter.intake.table import clean

#: A number with its unit, as in a remark on a cylinder: it says nothing of a column.
_AMOUNT = re.compile(r"\d(?:[\d.,]*\d)?\s*(?:%|ppm\w*|ppb\w*|mg\S*|vol\S*)", re.IGNORECASE)
_UNIT_WORDS = re.compile(r"\b(?:units?|einheit(?:en)?|unidad(?:es)?|unites?|unita|jednostk[ai])\b")


def other_units(table: Table, row: int, columns: Sequence[MappedColumn]) -> str:
    """What a row of text says of units that are not those of the mapping, in words; empty where it says nothing.

    Parameters
    ----------
    table
        The table.
    row
        A row that holds no readings.
    columns
        The columns of the mapping, one for each of the table.
    """
    used = {column.unit for column in columns if column.use == "reading"}
    for column, mapped in zip(table.columns, columns, strict=True):
        cell = at(table.page.rows[row], column)
        if not isinstance(cell, str) or blank(cell):
            continue
        text = _AMOUNT.sub(" ", clean(cell))
        units = {unit.unit for unit in units_in(text)}
        if mapped.use == "reading" and len(text.split()) <= 3 and units and mapped.unit not in units:
            return f"{clean(cell)[:60]!r} in the column of {mapped.channel}, which is read in {mapped.unit}"
        if units - used and (_UNIT_WORDS.search(folded(text)) or any(map(gases_in, text.split()))):
            return f"{clean(cell)[:60]!r}, while the columns are read in {', '.join(sorted(used))}"
    return ""
