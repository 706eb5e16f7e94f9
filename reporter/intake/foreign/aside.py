"""Why a column whose header names a gas may be no reading: a statistic, a rate, a multiple, a reference."""

from __future__ import annotations

import re
from collections.abc import Sequence
from functools import lru_cache

from reporter.intake.foreign.tables import Table, blank
from reporter.intake.foreign.words import (
    folded,
    gases_in,
    other_words,
    parted,
    statistic_in,
    units_in,
    without_correction,
)
from reporter.intake.table import Raw, clean

_RATE = re.compile(
    r"(?<![a-z])(?:(?:lbs?|kg|g|mg|tons?|t) ?/ ?(?:h|hr|hour|s|sec|min|d|day|yr|year|a)"
    r"|(?:lbs?|kg|g|mg|ng) ?/ ?(?:mm ?btu|gj|mj|j|mwh|kwh))(?![a-z0-9])"
)
_MULTIPLE = re.compile(
    r"(?<![\w.])[x×*·]\s*10+\b|(?<![\w.])10\s*\^|(?<![\w.])1\s*/\s*10+\b|(?<![\w.,\-–])10+\s*(?:ppm|ppb|mg)"
    r"|(?<![\w.,\-–])0[.,]0*1\s*(?:ppm|ppb|mg|%|vol)",
    re.IGNORECASE,
)
_REFERENCE = re.compile(
    r"\b(?:o2|02|oxygen) ?(?:ref|reference|bezug)\b|\b(?:ref|reference|bezugs?) ?(?:o2|02|oxygen|sauerstoff)\b"
)
_OUTPUT = re.compile(r"\d\s*(?:-|–|\.\.\.?|to|bis|a)\s*\d+\s*(mA|mV|V|VDC)\b")


@lru_cache(4096)
def rate_in(header: str) -> str:
    """The unit of a mass rate or of an emission factor that a header names in place of a concentration; else empty."""
    match = None if units_in(header) else _RATE.search(parted(header).replace("_", " ").casefold())
    return match[0] if match else ""


@lru_cache(4096)
def multiple_in(header: str) -> str:
    """The multiple of a unit that a header names, such as ``x10`` or ``0.1 %``; else empty."""
    match = _MULTIPLE.search(clean(header))
    return match[0] if match else ""


def reference_oxygen(header: str, filled: Sequence[Raw]) -> bool:
    """Whether a column repeats the reference oxygen of a correction: named so, and the same in every row."""
    return len(filled) == 1 and _REFERENCE.search(folded(header)) is not None


def output_in_titles(table: Table) -> str:
    """The range of an analyzer's output, such as 4-20 mA, that a line above a table names; else empty."""
    for row in table.page.rows[: table.header_rows[0]]:
        for cell in row:
            if isinstance(cell, str) and not blank(cell) and (match := _OUTPUT.search(cell)):
                return match[0]
    return ""


def rivals(table: Table, column: int, gas: str) -> set[str]:
    """The statistics that the other columns of a gas name, empty for a plain one; corrected ones do not count."""
    return {
        statistic_in(header)
        for other, header in zip(table.columns, table.headers, strict=True)
        if other != column
        and gases_in(header) == (gas,)
        and not other_words(header)
        and not rate_in(header)
        and not without_correction(folded(header))[2]
    }
