"""A file sent again, held against the one before: rows by their content, and each cell that changed."""

from __future__ import annotations

import hashlib
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass

from reporter.intake.foreign.grid import Grid, Page, filled_rows
from reporter.intake.table import show

#: Changes of one kind that are said one by one.
LISTED = 20


@dataclass(frozen=True, slots=True)
class Row:
    """A row of a page: its position, the texts of its cells, and a hash that stands for them."""

    position: int
    cells: tuple[str, ...]
    digest: bytes

    @property
    def name(self) -> str:
        """What a row is found again by: its first cell that is not empty, usually the time."""
        return next((cell for cell in self.cells if cell), "")


@dataclass(frozen=True, slots=True)
class Difference:
    """What changed from one file to the next: cells (place, old, new), new rows, rows that are gone, rows alike."""

    cells: tuple[tuple[str, str, str], ...] = ()
    added: tuple[str, ...] = ()
    gone: tuple[str, ...] = ()
    alike: int = 0
    same_bytes: bool = False

    def lines(self) -> tuple[str, ...]:
        """The difference in lines of plain text."""
        if self.same_bytes:
            return ("the same file, byte for byte",)
        counts = f"{self.alike} rows alike, {len(self.cells)} cells changed, "
        lines = [f"{counts}{len(self.added)} rows new, {len(self.gone)} rows gone"]
        changed = [f"{place}: {old!r} before, {new!r} now" for place, old, new in self.cells]
        for said in (changed, [f"new: {row}" for row in self.added], [f"gone: {row}" for row in self.gone]):
            lines += said[:LISTED]
            lines += [f"and {len(said) - LISTED} more"] if len(said) > LISTED else []
        return tuple(lines)


def difference(old: Grid, new: Grid) -> Difference:
    """What changed from an old to a new file; sheets are held against those of their name."""
    if old.source.sha256 == new.source.sha256:
        return Difference(same_bytes=True)
    cells: list[tuple[str, str, str]] = []
    added: list[str] = []
    gone: list[str] = []
    alike = 0
    before = {page.sheet: page for page in old.pages}
    now = {page.sheet: page for page in new.pages}
    for sheet in dict.fromkeys([*before, *now]):
        one, two = (pages.get(sheet, Page(sheet, ())) for pages in (before, now))
        left, right = _rows(one), _rows(two)
        common = Counter(row.digest for row in left) & Counter(row.digest for row in right)
        alike += common.total()
        left, right = _rest(left, common), _rest(right, common)
        pairs = list(_pairs(left, right))
        paired = [{row.position for row in rows} for rows in zip(*pairs, strict=True)] or [set(), set()]
        cells += [change for old_row, new_row in pairs for change in _cells(two, old_row, new_row)]
        gone += [_named(one, row) for row in left if row.position not in paired[0]]
        added += [_named(two, row) for row in right if row.position not in paired[1]]
    return Difference(tuple(cells), tuple(added), tuple(gone), alike)


def _rows(page: Page) -> list[Row]:
    rows = []
    for position in filled_rows(page):
        cells = tuple(show(cell) for cell in page.rows[position])
        while cells and not cells[-1]:
            cells = cells[:-1]
        rows.append(Row(position, cells, hashlib.sha256("\x1f".join(cells).encode("utf-8", "replace")).digest()))
    return rows


def _rest(rows: list[Row], common: Counter[bytes]) -> list[Row]:
    """The rows that the other file does not hold as well, as often as it does not."""
    taken, rest = Counter[bytes](), []
    for row in rows:
        taken[row.digest] += 1
        if taken[row.digest] > common[row.digest]:
            rest.append(row)
    return rest


def _pairs(old: list[Row], new: list[Row]) -> Iterator[tuple[Row, Row]]:
    """Rows of one name; of the others, those that stand in the same order and have most cells in common."""
    names: dict[str, list[Row]] = {}
    for row in new:
        names.setdefault(row.name, []).append(row)
    rest_old = []
    paired: set[int] = set()
    for row in old:
        if names.get(row.name):
            other = names[row.name].pop(0)
            paired.add(other.position)
            yield row, other
        else:
            rest_old.append(row)
    rest_new = [row for row in new if row.position not in paired]
    if len(rest_old) == len(rest_new):
        yield from ((a, b) for a, b in zip(rest_old, rest_new, strict=True) if _akin(a, b))


def _akin(one: Row, two: Row) -> bool:
    """Whether more than half of the cells of two rows are the same."""
    same = sum(1 for a, b in zip(one.cells, two.cells, strict=False) if a == b)
    return 2 * same > max(len(one.cells), len(two.cells))


def _cells(page: Page, old: Row, new: Row) -> Iterator[tuple[str, str, str]]:
    """Each cell of a row that changed: its place in the new file, the old and the new text."""
    for column in range(max(len(old.cells), len(new.cells))):
        before, now = (row.cells[column] if column < len(row.cells) else "" for row in (old, new))
        if before != now:
            address = page.address(new.position, column)
            yield f"{page.sheet}!{address}" if page.sheet else address, before, now


def _named(page: Page, row: Row) -> str:
    where = f"{page.sheet}, row {page.number(row.position)}" if page.sheet else f"line {page.number(row.position)}"
    return f"{where}: {', '.join(row.cells)[:80]}"
