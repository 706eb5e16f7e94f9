"""Is one column the other, corrected to a reference oxygen?  The ratio of the two tells."""

from __future__ import annotations

from collections.abc import Sequence
from statistics import median
from typing import Protocol

from reporter.intake.foreign.numbers import NumberStyle, number
from reporter.intake.table import Raw

#: Oxygen of air as corrections count it, and reference oxygens in use [%].
_AIR = (20.9, 21.0)
_REFERENCES = (0.0, 3.0, 5.0, 6.0, 7.0, 10.0, 11.0, 13.0, 15.0, 16.0)
#: How near the ratio of the columns stands to that of the correction, and over how much it must differ from one.
_NEAR, _APART = 0.01, 0.02
_LEAST = 4


class Column(Protocol):
    """A column of cells whose header may say a reference."""

    @property
    def cells(self) -> tuple[Raw, ...]:
        """The cells, row by row."""

    @property
    def correction(self) -> float | None:
        """The reference oxygen of the header [%]."""


def corrected_words(column: Column, raw: Column, oxygen: Column, style: NumberStyle) -> str:
    """That a column is another corrected to a reference oxygen, in words; empty where the numbers do not say so."""
    rows = [
        (c, r, o)
        for cells in zip(column.cells, raw.cells, oxygen.cells, strict=True)
        if None not in (triple := tuple(number(cell, style) for cell in cells))
        for c, r, o in [triple]
        if c and r and o is not None and r > 0.0 and 0.0 <= o < 19.0
    ]
    if len(rows) < _LEAST:
        return ""
    references = _REFERENCES if column.correction is None else (column.correction,)
    error, reference, air = min((_error(rows, ref, air), ref, air) for ref in references for air in _AIR)
    if error > _NEAR or median(abs(c / r - 1.0) for c, r, _ in rows) < _APART:
        return ""
    return (
        f"the ratio to the other column is ({air:g} - {reference:g}) / ({air:g} - O2) "
        f"in {len(rows)} rows: corrected to {reference:g} % oxygen"
    )


def _error(rows: Sequence[tuple[float, float, float]], reference: float, air: float) -> float:
    """The middle relative difference of the ratio of the columns from that of the correction."""
    return median(abs(c / r * (air - o) / (air - reference) - 1.0) for c, r, o in rows)
