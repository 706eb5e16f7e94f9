"""What the lines above a table and the name of a folder say of unit, facility and analyzers, against the test."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from itertools import pairwise
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


def strangers(
    grid: Grid, tables: Sequence[Table], test: dict[str, Any], known: Sequence[str], serials: Sequence[str] = ()
) -> list[Problem]:
    """The titles of a file that name another unit, facility or analyzer than the field workbook.

    Parameters
    ----------
    grid, tables
        The file and its tables; only what stands above the first table of a sheet is a title.
    test
        The items of the sheet Test.
    known
        Titles that the mapping says are of this test.
    serials
        The serial numbers of the sheet Channels.
    """
    found = []
    own = {folded(text) for text in known}
    for page in grid.pages:
        first = min((table.header_rows[0] for table in tables if table.page is page), default=0)
        for kind, text, place in _titles(grid, page, first):
            if kind == "serial":
                if serials and not {folded(text), _joined(text)} & {*own, *map(_joined, serials)}:
                    expected = f"{', '.join(dict.fromkeys(serials))}, as on the sheet Channels"
                    found.append(problem("file-of-another-test", place, f"analyzer {text!r}", expected=expected))
                continue
            names = [given.value for item in _ITEMS[kind] if (given := test.get(item)) is not None]
            if names and folded(text) not in own and not any(_alike(text, name) for name in names):
                expected = f"{names[0]}, as on the sheet Test"
                found.append(problem("file-of-another-test", place, f"{kind} {text!r}", expected=expected))
    return found


def strange_folder(name: str, test: dict[str, Any], known: Sequence[str]) -> list[Problem]:
    """That a folder is named by another unit than that of the sheet Test, as in ``boiler_7``; a date is no number."""
    names = [given.value for item in _ITEMS["unit"] if (given := test.get(item)) is not None]
    words = re.findall(r"[a-z]+|\d+", folded(name))
    titles = [f"{label} {number}" for label, number in pairwise(words) if title_kind(label) == "unit"]
    strange = [title for title in titles if re.search(r" \d{1,3}$", title)]
    own = {folded(text) for text in known}
    if not names or not strange or any(title in own or _alike(title, own_) for title in strange for own_ in names):
        return []
    expected = f"{names[0]}, as on the sheet Test"
    return [problem("file-of-another-test", Place(name), f"a folder named {strange[0]!r}", expected=expected)]


def _joined(text: str) -> str:
    """A serial number without blanks and marks."""
    return "".join(mark for mark in folded(text) if mark.isalnum())


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
