"""Header rows: found by their words, and each header matched with its column and unit."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from reporter.errors import UnitError
from reporter.intake.cells import unit_of
from reporter.intake.dates import Fault
from reporter.intake.gather import Gathered
from reporter.intake.sheets import ANY, ITEM_COLUMNS, Column, Kind, Sheet, Type, fold
from reporter.intake.table import Cell, HeaderCell, Row, SheetTable, clean, split_header
from reporter.units import ReadUnit, read_unit

#: The header row stands within so many rows of the top.
HEADER_WITHIN = 60


@dataclass(frozen=True, slots=True)
class Matched:
    """A column of a sheet and where it was found: position in the header, header cell, its unit if any."""

    column: Column
    position: int
    header: HeaderCell
    unit: ReadUnit | None


def score(spec: Sheet, texts: Sequence[str]) -> int:
    """How well a row of texts serves as the header row of a sheet; 0 where it cannot."""
    if spec.kind is Kind.ITEMS:
        folded = [fold(text) for text in texts]
        return 2 if all(fold(name) in folded for name in ITEM_COLUMNS[:2]) else 0
    if spec.kind is not Kind.TABLE:
        times = [text for text in texts if spec.find(split_header(text)[0]) is spec.columns[0]]
        return len(texts) if times and len(texts) > 1 else 0
    hits = sum(1 for text in texts if text and match_name(spec, text) is not None)
    return hits if hits >= min(2, len(spec.columns)) else 0


def match_name(spec: Sheet, text: str) -> tuple[Column, str] | None:
    """The column a header names and the text of its unit: in brackets, after a comma, or as last words."""
    name, unit = split_header(text)
    column = spec.find(name)
    if column is not None:
        return column, unit
    column = spec.find(text)
    if column is not None or unit:
        return None if column is None else (column, "")
    words = name.replace(",", " ").split()
    for last in range(1, min(3, len(words) - 1) + 1):
        column = spec.find(" ".join(words[:-last]))
        tail = " ".join(words[-last:])
        if column is not None and known_unit(tail):
            return column, tail
    return None


def known_unit(text: str) -> bool:
    """Whether a text is a unit."""
    try:
        read_unit(text)
    except UnitError:
        return False
    return bool(text.strip())


def unit_row(header: Sequence[HeaderCell], cells: Sequence[Cell]) -> tuple[HeaderCell, ...] | None:
    """The header with the units of the row below it, if that row holds units and nothing else."""
    texts = [clean(cell.value) if isinstance(cell.value, str) else None for cell in cells]
    filled = [text for text, cell in zip(texts, cells, strict=True) if not cell.blank]
    if len(filled) < 2 or any(text is None or not known_unit(text.strip("[]()")) for text in filled):
        return None
    return tuple(
        HeaderCell(h.cell, h.column, h.text, h.name, h.unit or (text or "").strip("[]()"))
        for h, text in zip(header, texts, strict=True)
    )


def match_columns(table: SheetTable, gathered: Gathered) -> tuple[Matched, ...]:
    """The columns of a table sheet, with problems for missing, repeated and unknown ones."""
    found: dict[str, Matched] = {}
    unread: set[str] = set()
    for position, header in enumerate(table.header):
        place = gathered.place(table.sheet, header.cell, header.text)
        named = match_name(table.spec, header.text)
        if named is None:
            read = table.spec.kind is Kind.TABLE and _has_values(table, position)
            if read and not misspelt(gathered, table, header, header.text):
                gathered.add("unknown-column", place, header.text or "values without a header")
            continue
        column, unit_text = named
        if column.attr in found:
            other = found[column.attr].header
            gathered.add("repeated-column", place, f"{other.text!r} ({other.cell}) and {header.text!r}")
            continue
        unit = header_unit(column, header.unit or unit_text, place_of=(gathered, table, header))
        found[column.attr] = Matched(column, position, header, None if isinstance(unit, Fault) else unit)
        if isinstance(unit, Fault):
            unread.add(column.attr)
    for column in table.spec.columns:
        if column.required and column.attr not in found:
            names = ", ".join(h.text for h in table.header if h.text)
            place = gathered.place(table.sheet, table.header[0].cell if table.header else "", column.name)
            gathered.add("missing-column", place, f"the columns {names}", expected=f"a column {column.name!r}")
    return tuple(m for attr, m in found.items() if attr not in unread)


def misspelt(gathered: Gathered, table: SheetTable, cell: Cell | HeaderCell, text: str) -> bool:
    """Whether a text is nearly the name of a column, or an item, that the sheet lacks; then it is a problem."""
    near = table.spec.near(split_header(text)[0])
    if near is None or any(named is not None and named[0] is near for named in _named(table)):
        return False
    place = gathered.place(table.sheet, cell.cell, near.name)
    gathered.add("misspelt-name", place, text, expected=f"{near.name!r}, or a name less like it")
    return True


def _named(table: SheetTable) -> Iterator[tuple[Column, str] | None]:
    """What the headers, or the items, of a table name."""
    if table.spec.kind is not Kind.ITEMS:
        yield from (match_name(table.spec, header.text) for header in table.header)
        return
    at = next((i for i, header in enumerate(table.header) if fold(header.text) == fold(ITEM_COLUMNS[0])), 0)
    yield from (match_name(table.spec, row.cells[at].text) for row in table.rows)


def header_unit(
    column: Column, text: str, *, place_of: tuple[Gathered, SheetTable, HeaderCell]
) -> ReadUnit | Fault | None:
    """The unit of a header; None where it names none; a fault, which is gathered, where it cannot be read."""
    if not text or column.type is not Type.NUMBER:
        return None
    read = unit_of(text, column)
    if not isinstance(read, Fault):
        return read
    if ANY in column.dimensions:
        return None
    gathered, table, header = place_of
    gathered.add(read.code, gathered.place(table.sheet, header.cell, column.name), read.found, expected=read.expected)
    return read


def _has_values(table: SheetTable, position: int) -> bool:
    return any(not row.cells[position].blank for row in table.rows)


def is_footer(row: Row, words: frozenset[str]) -> bool:
    """Whether the first filled cell of a row says that it is a total, an average or the like."""
    for cell in row.cells:
        if not cell.blank:
            return isinstance(cell.value, str) and fold(cell.value) in words
    return False


def split_footers(rows: Sequence[Row], words: frozenset[str]) -> tuple[tuple[Row, ...], tuple[Row, ...]]:
    """Rows of data and rows at the foot: totals, averages, and single remarks below an empty row.

    Only what has no data below it can be a foot, so that a row of data is never taken for one.
    """
    end = len(rows)
    foot: list[Row] = []
    while end:
        row = rows[end - 1]
        if row.blank or is_footer(row, words) or _is_remark(rows, end - 1):
            end -= 1
            if not row.blank:
                foot.insert(0, row)
        else:
            break
    return tuple(row for row in rows[:end] if not row.blank), tuple(foot)


def _is_remark(rows: Sequence[Row], index: int) -> bool:
    filled = [cell for cell in rows[index].cells if not cell.blank]
    if len(filled) != 1 or not isinstance(filled[0].value, str) or index == 0:
        return False
    gap = rows[index].number - rows[index - 1].number > 1 or rows[index - 1].blank
    return gap and len(rows[index].cells) > 1
