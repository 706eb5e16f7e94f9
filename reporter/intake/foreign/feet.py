"""Rows of averages, totals and the like: whether each number is the statistic of its column that its label claims."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from statistics import fmean

from reporter.intake.foreign.numbers import NumberStyle, hundredfold, number
from reporter.intake.foreign.tables import Table, at
from reporter.intake.foreign.words import statistic_of
from reporter.intake.table import Raw, clean, plain_number

_STATISTICS: dict[str, Callable[[Sequence[float]], float]] = {"mean": fmean, "sum": sum, "highest": max, "lowest": min}
#: A stored number is as near to its statistic; a typed one stands within one of its last digit.
NEAR = 1e-6
#: Rows of one table that are held against the whole column and not only against the rows since the one before.
WHOLE = 20


class Feet:
    """The rows at the foot of one table, as they come; each may sum up its whole column or the part since the last."""

    def __init__(self, table: Table, readings: Sequence[int]) -> None:
        self.table, self.readings = table, readings
        self.part = 0
        self.checked = 0

    def differs(self, row: int, kept: Sequence[int], label: str) -> str:
        """What of a row is not the statistic that its label names, in words; empty where it is, or names none."""
        rows, self.part = list(kept[self.part :]), len(kept)
        name = statistic_of(label)
        if name not in _STATISTICS or not kept:
            return ""
        said = self._against(row, rows, name) if rows else "?"
        if said and self.checked < WHOLE:
            self.checked += 1
            said = self._against(row, kept, name)
        return "" if said == "?" else said

    def _against(self, row: int, rows: Sequence[int], name: str) -> str:
        """The first number that is not the statistic of these rows, with that statistic."""
        words: list[str] = []
        for style in (NumberStyle("."), NumberStyle(",")):
            found, compared = "", 0
            for column in self.readings:
                cell = at(self.table.page.rows[row], column)
                value = self._number(row, column, style)
                own = self._numbers(rows, column, style)
                if value is None or not own:
                    continue
                compared += 1
                truth = _STATISTICS[name](own)
                if abs(value - truth) > _slack(cell, value):
                    header = self.table.headers[self.table.columns.index(column)]
                    found = f"{plain_number(value)} under {header!r} is not the {name} of the readings, {truth:.6g}"
                    break
            if compared and not found:
                return ""
            words += [found] if found else []
        return next(iter(words), "")

    def _numbers(self, rows: Sequence[int], column: int, style: NumberStyle) -> list[float]:
        """The numbers of a column in some rows; each different cell is read once."""
        cells = [cell for cell in self.table.page.columns([column], rows)[0] if not isinstance(cell, bool)]
        if any(own == column for _, own in self.table.page.percent):
            return [v for row in rows if (v := self._number(row, column, style)) is not None]
        known = {cell: number(cell, style) for cell in set(cells)}
        return [v for cell in cells if (v := known[cell]) is not None]

    def _number(self, row: int, column: int, style: NumberStyle) -> float | None:
        value = number(at(self.table.page.rows[row], column), style)
        return hundredfold(value) if value is not None and (row, column) in self.table.page.percent else value


def _slack(cell: Raw, value: float) -> float:
    """How far a number may stand from its statistic: one of its last digit, where it is typed."""
    if not isinstance(cell, str):
        return NEAR * max(1.0, abs(value))
    part = re.search(r"[.,](\d+)\s*(?:[^\d\s].*)?$", clean(cell))
    return 1.01 * float(10.0 ** -(len(part[1]) if part else 0))
