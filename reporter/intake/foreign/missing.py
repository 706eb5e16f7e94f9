"""What a file without a table of readings does hold, in words that say what to change in the export."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reporter.intake.foreign.grid import Grid, Page, letters
from reporter.intake.foreign.tables import MOST_TABLES, Table, blank, find_headers, is_numberlike, is_timelike
from reporter.intake.foreign.words import gases_in, time_part
from reporter.intake.table import Raw, clean, show

#: Rows looked at, and texts shown.
_LOOKED, _SHOWN = 200, 3


def what_is_there(grid: Grid, tables: Sequence[Table]) -> str:
    """What stands in place of a table of readings.

    Parameters
    ----------
    grid
        The file.
    tables
        Its headers that name a gas, whose rows have no time that can be read.
    """
    if tables:
        return "; ".join(_untimed(table) for table in tables)
    for page in grid.pages:
        if len(find_headers(page)) > MOST_TABLES:
            return f"more than {MOST_TABLES:,} headers in one table of rows"
        if words := _long(page) or _unnamed(page) or _unparted(page):
            return words
    return "no header that names a gas above rows with times"


def _untimed(table: Table) -> str:
    """What stands where the times of a table should be."""
    column = next((c for c, h in zip(table.columns, table.headers, strict=True) if time_part(h)), table.columns[0])
    rows = table.page.rows[table.first : table.last]
    cells = [row[column] for row in rows if column < len(row) and not blank(row[column])]
    if not cells:
        return f"{table.words()}; no column of times"
    cell = " ".join(show(cells[0]).split())[:60]
    why = f"{cell!r} in {table.page.address(table.first, column)} is no date or time"
    if set(cell) == {"#"}:
        why += ": the column was too narrow when the file was saved; widen it and save again"
    elif re.fullmatch(r"1\d{9}(?:\d{3})?", cell):
        why += ": seconds since 1970; export date and time"
    elif is_numberlike(cells[0]):
        why += ": a count from the start; export date and time"
    return f"{table.words()}; {why}"


def _texts(page: Page, row: int) -> list[str]:
    return [" ".join(clean(cell).split()) for cell in page.rows[row] if isinstance(cell, str) and not blank(cell)]


def _timed(cells: Sequence[Raw]) -> bool:
    return any(is_timelike(cell) for cell in cells) and any(is_numberlike(cell) for cell in cells)


def _long(page: Page) -> str:
    """That channels stand below each other in one column, a row for each."""
    for column in range(max((len(row) for row in page.rows[:_LOOKED]), default=0)):
        rows = [number for number, row in enumerate(page.rows[:_LOOKED]) if _timed(row) and column < len(row)]
        names = dict.fromkeys(show(page.rows[number][column]) for number in rows)
        if len(names) < len(rows) / 2 and len({gas for name in names for gas in gases_in(name)}) > 1:
            shown = ", ".join(repr(name) for name in list(names)[:_SHOWN])
            return (
                f"a row for each channel and time, with the channel in column {letters(column)} ({shown}): export the "
                f"file with one row for each time and a column for each channel"
            )
    return ""


def _unnamed(page: Page) -> str:
    """That rows with times and numbers stand below headers that name no gas."""
    first = next((number for number, row in enumerate(page.rows[:_LOOKED]) if _timed(row)), None)
    if first is None or len(page.rows[first]) < 2:
        return ""
    above = [_texts(page, row) for row in range(first)]
    headers = next((texts for texts in reversed(above) if texts), [])
    named = next((text for texts in above for text in texts if gases_in(text)), "")
    shown = ", ".join(map(repr, headers[:8])) or "no header"
    title = f", though a line above says {named!r}" if named else ""
    return f"times and numbers from row {page.number(first)} on below {shown}, of which none names a gas{title}"


def _unparted(page: Page) -> str:
    """That each row is one cell: no delimiter parts it."""
    first = next((row for row in page.rows[:_LOOKED] if len(row) == 1 and is_timelike(row[0])), None)
    if first is None:
        return ""
    found = f"rows in one cell, such as {show(first[0])[:60]!r}"
    return f"{found}: export the file with commas, semicolons or tabs between cells"
