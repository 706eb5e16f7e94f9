"""Tables of readings in a grid: title blocks left aside, one to four header rows joined, tables side by side parted."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta

from reporter.intake.foreign.grid import Grid, Page
from reporter.intake.foreign.process_words import process_in
from reporter.intake.foreign.words import gases_in, statistic_in, time_part, units_in
from reporter.intake.table import Raw, clean, show

#: A header has at most so many rows, and two of its words in one row.
HEADER_ROWS = 4
#: Headers of one sheet, at the most: a log whose header stands on each printed page has hundreds.
MOST_TABLES = 2_000
_TIMELIKE = re.compile(
    r"\d{1,4}[-/.]\d{1,2}[-/.]\d{1,4}|\d{1,2}:\d{2}|\d{1,2}[\s.\-]*[^\W\d_]{3,9}\.?[\s.\-,]*\d{2,4}"
    r"|[^\W\d_]{3,9}\.?\s+\d{1,2},?\s+\d{4}|^(?:19|20)\d{10}(?:\d\d)?$"
)
#: Oxygen as a header sometimes spells it, which looks like a number.
_OXYGEN = ("02", "0 2")
_NUMBER = re.compile(r"^[<>]?\s*+[+\-−]?(?:[.,'’ ]*+\d)++[.,'’ ]*+(?:[eE][+\-]?\d+)?\s*%?$")


@dataclass(frozen=True, slots=True)
class Table:
    """One table of readings: its page, header rows, columns and rows of data (ends not included).

    `headers` holds a text for each column of `columns`: its header cells from top to bottom, joined.
    """

    page: Page
    header_rows: tuple[int, ...]
    columns: tuple[int, ...]
    headers: tuple[str, ...]
    first: int
    last: int

    @property
    def signature(self) -> tuple[str, ...]:
        """The headers for comparison with those of another table."""
        return tuple(" ".join(text.split()).casefold() for text in self.headers)

    def words(self) -> str:
        """The table in a few words."""
        where = f"sheet {self.page.sheet!r}, " if self.page.sheet else ""
        hidden = " (hidden)" if self.page.hidden else ""
        lines = (
            f"{self.page.number(self.header_rows[0])} to {self.page.number(max(self.last - 1, self.header_rows[0]))}"
        )
        named = [text for text in self.headers if text]
        return f"{where}rows {lines}{hidden}: {', '.join(named[:12])}{', ...' if len(named) > 12 else ''}"


def is_timelike(value: Raw) -> bool:
    """Whether a cell looks like a date or a time."""
    if isinstance(value, (datetime, date, time, timedelta)):
        return True
    return isinstance(value, str) and _TIMELIKE.search(clean(value)) is not None


def timed_rows(table: Table) -> bool:
    """Whether most rows of a table hold a date or a time, in whatever column."""
    rows = [row for row in table.page.rows[table.first : table.last] if any(not blank(cell) for cell in row)]
    timed = sum(1 for row in rows if any(is_timelike(at(row, column)) for column in table.columns))
    return bool(rows) and 2 * timed > len(rows)


def is_numberlike(value: Raw) -> bool:
    """Whether a cell is a number, or a text that looks like one."""
    if isinstance(value, float):
        return True
    return isinstance(value, str) and _NUMBER.match(clean(value)) is not None


def blank(value: Raw) -> bool:
    """Whether nothing stands in a cell."""
    if isinstance(value, str):
        return not value or not (value[0].isalnum() or clean(value))
    return value is None


def at(row: Sequence[Raw], column: int) -> Raw:
    """The cell of a row, nothing where the row is short."""
    return row[column] if column < len(row) else None


def find_tables(grid: Grid) -> tuple[Table, ...]:
    """Every table of readings: a header that names a gas, and rows below it; of a plant's log where there is none.

    A sheet with more headers than `MOST_TABLES` is no log, and has no table.
    """
    found = tuple(table for page in grid.pages for table in _of_page(page, _is_header))
    return found or tuple(table for page in grid.pages for table in _of_page(page, _is_process_header))


def _of_page(page: Page, is_header: Callable[[Sequence[str]], bool]) -> list[Table]:
    blocks = find_headers(page, is_header)
    tables: list[Table] = []
    if len(blocks) <= MOST_TABLES:
        for number, block in enumerate(blocks):
            last = blocks[number + 1][0] if number + 1 < len(blocks) else page.end
            tables += _side_by_side(page, block, last)
    return tables


def find_headers(page: Page, is_header: Callable[[Sequence[str]], bool] | None = None) -> list[tuple[int, ...]]:
    """The rows of each header of a page (that names a gas, where not said otherwise); at most one too many."""
    known = is_header or _is_header
    blocks: list[tuple[int, ...]] = []
    taken: set[int] = set()
    for row in page.wordy():
        if row not in taken and _perhaps_header(page.rows[row]) and known(_texts(page, row)):
            block = _block(page, row)
            taken.update(block)
            blocks.append(block)
            if len(blocks) > MOST_TABLES:
                break
    return blocks


def _texts(page: Page, row: int) -> list[str]:
    """The texts of a row, those of merged cells in each cell they cover; empty for what is no text."""
    cells = page.rows[row] if row < len(page.rows) else ()
    texts = [" ".join(clean(cell).split()) if isinstance(cell, str) else "" for cell in cells]
    for top, left, bottom, right in page.merged:
        if top <= row <= bottom:
            value = at(page.rows[top], left)
            if isinstance(value, str):
                texts += [""] * (right + 1 - len(texts))
                texts[left : right + 1] = [" ".join(clean(value).split())] * (right + 1 - left)
    return texts


def _perhaps_header(cells: Sequence[Raw]) -> bool:
    """Whether two cells of a row are texts that are neither numbers nor times: a quick look before a thorough one."""
    words = 0
    for cell in cells:
        if not isinstance(cell, str):
            continue
        words += cell.strip() in _OXYGEN or (any(map(str.isalpha, cell)) and not _TIMELIKE.search(cell))
        if words > 1:
            return True
    return False


def _is_header(texts: Sequence[str]) -> bool:
    """Whether a row names a gas and, in another cell, a time or another gas."""
    short = [text for text in texts if text and len(text) <= 80 and not _TIMELIKE.search(text)]
    short = [text for text in short if text in _OXYGEN or not _NUMBER.match(text)]
    gases = [text for text in short if gases_in(text)]
    times = [text for text in short if time_part(text)]
    return len(set(gases)) + len(times) >= 2 and bool(gases) and len(short) >= 2


def _is_process_header(texts: Sequence[str]) -> bool:
    """Whether a row names a time and, in another cell, a quantity of the plant's."""
    short = [text for text in texts if text and len(text) <= 80 and not _TIMELIKE.search(text)]
    times = [text for text in short if time_part(text)]
    return bool(times) and any(process_in(text) for text in short if text not in times)


def _block(page: Page, row: int) -> tuple[int, ...]:
    """The header rows around the row found: groups above, names and units below."""
    width = sum(1 for text in _texts(page, row) if text)
    rows = [row]
    above = row - 1
    while above >= 0 and len(rows) < HEADER_ROWS and _words_only(page, above, max(2, (width + 1) // 2)):
        rows.insert(0, above)
        above -= 1
    below = row + 1
    while below < len(page.rows) and len(rows) < HEADER_ROWS and _below(page, below):
        rows.append(below)
        below += 1
    return tuple(rows)


def _words_only(page: Page, row: int, least: int) -> bool:
    texts = _texts(page, row)
    cells = page.rows[row]
    if any(is_timelike(cell) or (is_numberlike(cell) and not gases_in(show(cell))) for cell in cells):
        return False
    return sum(1 for text in texts if text) >= least


def _below(page: Page, row: int) -> bool:
    """Whether a row below the header still belongs to it: units, or further words in several cells."""
    texts = [text for text in _texts(page, row) if text]
    if not texts or not _words_only(page, row, 1):
        return False
    units = sum(1 for text in texts if units_in(text))
    merged = any(top < row <= bottom for top, _, bottom, _ in page.merged)
    words = sum(1 for text in texts if units_in(text) or gases_in(text) or time_part(text) or len(text) <= 12)
    return units >= 1 or (merged and words >= 1) or (len(texts) >= 2 and words >= 2 and not _reading_words(texts))


def _reading_words(texts: Sequence[str]) -> bool:
    from reporter.intake.sheets import reading_words

    return any(text.casefold() in reading_words() for text in texts)


def _side_by_side(page: Page, block: tuple[int, ...], last: int) -> list[Table]:
    """The tables of one header block, parted at columns in which nothing stands."""
    first = block[-1] + 1
    width = max(page.widths(block[0], last), default=0)
    width = max(width, *(len(_texts(page, row)) for row in block))
    used = [
        column
        for column in range(width)
        if any(column < len(texts) and texts[column] for texts in (_texts(page, row) for row in block))
        or any(not blank(at(page.rows[row], column)) for row in range(first, last))
    ]
    groups: list[list[int]] = []
    for column in used:
        if groups and column == groups[-1][-1] + 1:
            groups[-1].append(column)
        else:
            groups.append([column])
    with_time = [group for group in groups if any(time_part(_joined(page, block, c)) for c in group)]
    if len(with_time) < 2:
        groups = [used]
    return [_table(page, block, tuple(group), (first, last)) for group in groups if group]


def _joined(page: Page, block: tuple[int, ...], column: int) -> str:
    """The header of one column: its texts from top to bottom, each once.

    A group's name, such as that of a gas, stands above the first of its columns alone: one that heads a statistic of it
    (Min, Avg, Max) has it too.
    """
    parts: list[str] = []
    every = [_texts(page, row) for row in block]
    for number, texts in enumerate(every):
        text = texts[column] if column < len(texts) else ""
        below = (own[column] for own in every[number + 1 :] if column < len(own) and own[column])
        if not text and (under := next(below, "")) and statistic_in(under) and not gases_in(under):
            text = next((group for group in reversed(texts[:column]) if group), "")
        if text and text not in parts:
            parts.append(text)
    return " | ".join(parts)


def _table(page: Page, block: tuple[int, ...], columns: tuple[int, ...], span: tuple[int, int]) -> Table:
    headers = tuple(_joined(page, block, column) for column in columns)
    return Table(page, block, columns, headers, span[0], span[1])
