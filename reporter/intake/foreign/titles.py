"""What the lines above a table say of the unit and the facility, held against the field workbook."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from typing import Any

from reporter.intake.foreign.grid import Grid, Page
from reporter.intake.foreign.tables import Table, at, blank
from reporter.intake.foreign.words import folded, title_kind, units_in
from reporter.intake.table import clean, show
from reporter.problems import Place, Problem, problem

#: Items of the sheet Test that a kind of title names.
_ITEMS = {"unit": ("unit_tested", "stack"), "facility": ("facility", "client", "facility_address")}
#: A word that tells two names apart has so many letters.
_TELLING = 3


def strangers(grid: Grid, tables: Sequence[Table], test: dict[str, Any], known: Sequence[str]) -> list[Problem]:
    """The titles of a file that name another unit or facility than the sheet Test.

    Parameters
    ----------
    grid, tables
        The file and its tables; only what stands above the first table of a sheet is a title.
    test
        The items of the sheet Test.
    known
        Titles that the mapping says are of this test.
    """
    found = []
    own = {folded(text) for text in known}
    for page in grid.pages:
        first = min((table.header_rows[0] for table in tables if table.page is page), default=0)
        for kind, text, place in _titles(grid, page, first):
            names = [given.value for item in _ITEMS[kind] if (given := test.get(item)) is not None]
            if names and folded(text) not in own and not any(_alike(text, name) for name in names):
                expected = f"{names[0]}, as on the sheet Test"
                found.append(problem("file-of-another-test", place, f"{kind} {text!r}", expected=expected))
    return found


def _titles(grid: Grid, page: Page, end: int) -> Iterator[tuple[str, str, Place]]:
    """Kind, text and place of each title: a label and its text in one cell, or in two beside each other."""
    for row in range(end):
        cells = page.rows[row] if row < len(page.rows) else ()
        filled = [n for n, cell in enumerate(cells) if not blank(cell)]
        for number, column in enumerate(filled):
            cell = at(cells, column)
            if not isinstance(cell, str):
                continue
            label, mark, text = (part.strip() for part in clean(cell).partition(":"))
            if not text and number + 1 < len(filled):
                beside = at(cells, filled[number + 1])
                text = show(beside)
            kind = title_kind(label)
            if kind and text and (mark or number == 0) and not units_in(text):
                yield kind, text, grid.place(page, row, column)


def _alike(one: str, two: str) -> bool:
    """Whether two names may be those of one thing: by their numbers where both have some, else by a word of both."""
    first, second = (set(re.findall(r"\d+|[a-z]+", folded(text))) for text in (one, two))
    numbers = [{word.lstrip("0") or "0" for word in words if word.isdigit()} for words in (first, second)]
    if all(numbers):
        return bool(numbers[0] & numbers[1])
    if any(numbers):
        return True
    telling = [{word for word in words if len(word) >= _TELLING} for words in (first, second)]
    return not all(telling) or bool(telling[0] & telling[1])
