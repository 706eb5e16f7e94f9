"""Tables of the view: numbers aligned at the point, texts, groups of rows."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise
from typing import TypeVar

from reporter.output.view.model import AnyCell, Cell, Column, Row, Shown, Table

T = TypeVar("T")

#: Runs beside each other in one table.
ACROSS = 5


def side_by_side(runs: Sequence[T]) -> list[Sequence[T]]:
    """Runs in groups that stand in one table each: as few as five across allow, evenly filled."""
    count = -(-len(runs) // ACROSS)
    if count <= 1:
        return [runs]
    size, more = divmod(len(runs), count)
    starts = [at * size + min(at, more) for at in range(count + 1)]
    return [runs[start:end] for start, end in pairwise(starts)]


def aligned(made: Table) -> Table:
    """The table with each number padded to the most decimals of its column."""
    most = [0] * len(made.columns)
    for row in made.rows:
        for index, cell in enumerate(row.cells):
            if isinstance(cell, Shown):
                most[index] = max(most[index], cell.decimals)
    rows = tuple(replace(row, cells=_padded(row.cells, most)) for row in made.rows)
    return replace(made, rows=rows)


def _padded(cells: Sequence[AnyCell], most: Sequence[int]) -> tuple[AnyCell, ...]:
    return tuple(
        replace(cell, pad=_pad(cell, most[index])) if isinstance(cell, Shown) else cell
        for index, cell in enumerate(cells)
    )


def _pad(cell: Shown, most: int) -> str:
    """The class that makes up for missing decimals, and for a closing bracket (``k``)."""
    bracket = "k" if cell.text.endswith("]") else ""
    if cell.decimals == most:
        return "kp0" if bracket else ""
    return f"{bracket}{'p' if cell.decimals else 'q'}{most - cell.decimals}"


def simple_table(titles: Sequence[str], rows: Sequence[Sequence[str]], widths: Sequence[float]) -> Table:
    """A table of texts."""
    columns = tuple(Column(title, width=width) for title, width in zip(titles, widths, strict=True))
    return Table(columns, tuple(Row(tuple(row)) for row in rows))


def filled(made: Table) -> Table:
    """A table of texts without the columns in which nothing stands."""
    kept = [at for at in range(len(made.columns)) if any(row.cells[at] for row in made.rows)]
    rows = tuple(replace(row, cells=tuple(row.cells[at] for at in kept)) for row in made.rows)
    return replace(made, columns=tuple(made.columns[at] for at in kept), rows=rows)


def group_row(text: str, span: int) -> Row:
    """A row that names the group of rows below it."""
    return Row((Cell(text, strong=True, span=span),), style="group")
