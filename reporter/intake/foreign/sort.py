"""Which rows below a header are readings, and why the others are not."""

from __future__ import annotations

import re
from bisect import bisect_left
from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import isclose
from statistics import fmean

from reporter.intake.foreign.feet import Feet
from reporter.intake.foreign.numbers import NumberStyle, number
from reporter.intake.foreign.tables import Table, at, blank, is_numberlike, is_timelike
from reporter.intake.foreign.times import Stamp, read_stamp
from reporter.intake.foreign.words import is_foot
from reporter.intake.sheets import reading_words
from reporter.intake.table import Raw, clean, show

#: How near to a statistic of its column a number at the foot stands.
NEAR = 5e-3
#: Code of a row whose cells stand in the wrong columns.
OUT = "row-out-of-line"


@dataclass(frozen=True, slots=True)
class Sorted:
    """One row: its position, its stamps where it is a row of readings, else why not.

    `fault` is the code of a problem where the row holds numbers that cannot be placed: that is never left out quietly.
    `note` is the code of a note where a row at the foot is not what its label says.
    """

    row: int
    stamps: tuple[Stamp, ...] = ()
    why: str = ""
    fault: str = ""
    note: str = ""


def sort_rows(
    table: Table,
    times: Sequence[int],
    readings: Sequence[int],
    order: str,
    *,
    cut_off: bool = False,
    known: Sequence[int] = (),
) -> Iterator[Sorted]:
    """Every filled row of a table, sorted; `times` and `readings` are columns of the page.

    `known` are rows of readings already, ascending: they are not given again.
    """
    width = table.columns[-1] + 1
    usual, feet = usual_length(table), Feet(table, readings)
    late: list[int] = []
    kept: list[int] = []
    taken = 0
    final = len(table.page.rows) - 1
    for row in sorted(set(range(table.first, table.last)).difference(known)):
        before = bisect_left(known, row, taken)
        kept += known[taken:before]
        taken = before
        cells = table.page.rows[row]
        own = [at(cells, column) for column in table.columns]
        if all(blank(cell) for cell in own) and not any((row, c) in table.page.uncalculated for c in table.columns):
            continue
        if cut_off and row == final and (len(cells) < width or _shorter(table, kept)) and not _foot(own):
            yield Sorted(row, why="the file ends inside this row")
            continue
        if swallowed := _swallowed(own):
            yield Sorted(
                row, why=f"one cell over {swallowed} lines with times: a quotation mark is not closed", fault=OUT
            )
            continue
        stamps = [read_stamp(at(cells, column), order) for column in times]
        if all(stamp is not None for stamp in stamps) and not _foot(own):
            if _text_row([at(cells, column) for column in readings]):
                yield Sorted(row, why=f"a row of text: {_first_text(own, times, table)}")
            elif usual and (words := _out_of_line(cells, usual)):
                yield Sorted(row, why=words, fault=OUT)
            else:
                kept.append(row)
                yield Sorted(row, tuple(stamp for stamp in stamps if stamp is not None))
        elif _foot(own):
            differs = feet.differs(row, kept, _label(own))
            why = f"an average or total, by its first word: {_label(own)}"
            yield Sorted(row, why=f"{why}; {differs}" if differs else why, note="foot-differs" if differs else "")
        elif not any(is_numberlike(at(cells, c)) or _word(at(cells, c)) for c in readings):
            yield Sorted(row, why=f"a row of text: {_label(own)}")
        else:
            late.append(row)
    kept += known[taken:]
    for row in late:
        if row > max(kept, default=-1) and _is_statistic(table, row, kept, readings):
            yield Sorted(row, why="each number is a statistic of its column")
        else:
            yield Sorted(row, why="numbers without a time that can be read", fault="not-a-time")


def _swallowed(cells: Sequence[Raw]) -> int:
    """The lines of a cell that holds further rows of the file; 0 where none does."""
    for cell in cells:
        if isinstance(cell, str) and "\n" in cell and any(is_timelike(line[:32]) for line in cell.splitlines()[1:]):
            return len(cell.splitlines())
    return 0


def _shorter(table: Table, kept: Sequence[int]) -> bool:
    """Whether the last cell of the file has fewer decimals than it has in every other row, or is alone."""
    tails = []
    for row in (*kept, len(table.page.rows) - 1):
        cells = table.page.rows[row]
        text = clean(cells[-1]) if cells and isinstance(cells[-1], str) else ""
        tails.append(len(re.split(r"[.,]", text)[-1]) if re.search(r"\d[.,]\d*$", text) else 0)
    return tails[-1] < min(tails[:-1], default=1_000)


def usual_length(table: Table) -> int:
    """The number of cells of most rows of a text table; 0 for a workbook, where no cell can shift."""
    page = table.page
    if not page.lines:
        return 0
    counts = Counter(width for width in page.widths(table.first, table.last) if width > 1)
    if len(counts) > 1:
        rows = page.rows[table.first : table.last]
        counts = Counter(len(cells) for cells in rows if len(cells) > 1 and not _foot(cells))
    return counts.most_common(1)[0][0] if counts else 0


def _out_of_line(cells: Sequence[Raw], usual: int) -> str:
    """Why a row of readings is not in line with the others: a delimiter is missing or too many; else nothing."""
    filled = max((number for number, cell in enumerate(cells, start=1) if not blank(cell)), default=0)
    if len(cells) < usual or filled > usual:
        return f"{max(filled, len(cells))} cells, {usual} in most rows"
    return ""


def _foot(cells: Sequence[Raw]) -> bool:
    first = next((cell for cell in cells if not blank(cell)), None)
    return isinstance(first, str) and not first[:1].isdigit() and any(map(str.isalpha, first)) and is_foot(first)


def _label(cells: Sequence[Raw]) -> str:
    return " ".join(show(next((cell for cell in cells if not blank(cell)), "")).split())[:60]


def _word(cell: Raw) -> bool:
    return isinstance(cell, str) and clean(cell).casefold() in reading_words()


def _text_row(cells: Sequence[Raw]) -> bool:
    """Whether the reading cells hold one text that is no reading, and nothing else."""
    filled = [cell for cell in cells if not blank(cell)]
    if not filled or any(not isinstance(cell, str) or is_numberlike(cell) or _word(cell) for cell in filled):
        return False
    text = show(filled[0])
    return len(filled) == 1 and len(cells) > 1 and any(mark.isalpha() for mark in text) and " " in text


def _first_text(cells: Sequence[Raw], times: Sequence[int], table: Table) -> str:
    texts = [
        show(cell)
        for column, cell in zip(table.columns, cells, strict=True)
        if column not in times and isinstance(cell, str) and not blank(cell)
    ]
    return texts[0][:60] if texts else ""


def _is_statistic(table: Table, row: int, kept: Sequence[int], readings: Sequence[int]) -> bool:
    """Whether every number of a row is mean, sum, lowest or highest of its column, whatever the decimal mark."""
    for style in (NumberStyle("."), NumberStyle(",")):
        hits, numbers = 0, 0
        for column in readings:
            value = number(at(table.page.rows[row], column), style)
            if value is None:
                continue
            numbers += 1
            cells = [cell for cell in table.page.columns([column], kept)[0] if not isinstance(cell, bool)]
            each = {cell: number(cell, style) for cell in set(cells)}
            values = [v for cell in cells if (v := each[cell]) is not None]
            if len(values) > 1:
                known = (fmean(values), sum(values), min(values), max(values))
                hits += any(isclose(value, k, rel_tol=NEAR, abs_tol=0.06) for k in known)
        if numbers and hits == numbers:
            return True
    return False
