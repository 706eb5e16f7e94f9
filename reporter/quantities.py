"""The quantity table: what the last segments of a ledger key mean, and how they are shown.

`tables/quantities.toml` has one row per quantity: label, symbol, decimals shown.  Headings, rounding for
display, the JSON Schema and the documentation read it; nothing else names a quantity.
"""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache

from reporter.errors import LedgerError
from reporter.resources import table_text


@dataclass(frozen=True, slots=True)
class Quantity:
    """One row of the table; `decimals` may differ for ppm and percent, `significant` replaces them."""

    segment: str
    label: str
    symbol: str = ""
    decimals: int | None = None
    significant: int = 4


@cache
def table() -> dict[str, Quantity]:
    """All quantities by key segment, or by several segments joined by dots."""
    rows = tomllib.loads(table_text("quantities.toml"))
    return {name: Quantity(segment=name, **row) for name, row in rows.items()}


def _match(parts: list[str]) -> tuple[Quantity, list[str]]:
    """The longest tail or middle of a key that is in the table, and what follows it."""
    known = table()
    for start in range(len(parts)):
        for stop in range(len(parts), start, -1):
            name = ".".join(parts[start:stop])
            if name in known:
                return known[name], parts[stop:]
    raise LedgerError(f"{'.'.join(parts)!r} names no quantity of the table")


@cache
def quantity_of(key: str) -> tuple[Quantity, tuple[str, ...]]:
    """The quantity of a key and the variant segments after it (`LedgerError` if the table has none)."""
    parts = key.split(".")
    found, variants = _match(parts[1:] if len(parts) > 1 else parts)
    return found, tuple(variants)


@cache
def label_of(key: str) -> str:
    """The label of a key in words, e.g. ``NOx, corrected for bias and drift, run 1``."""
    from reporter.gases import find_gas

    found, variants = quantity_of(key)
    parts = key.split(".")
    about: list[str] = []
    if parts[0] == "run":
        subject = find_gas(parts[2])
        about = [subject.label if subject else "", found.label, _variants(variants), f"run {parts[1]}"]
    elif parts[0] == "average":
        subject = find_gas(parts[1])
        about = [subject.label if subject else "", found.label, _variants(variants), "average of runs"]
    elif parts[0] == "comparison":
        about = [f"limit {parts[1]}", found.label, _variants(variants)]
    elif parts[0] in {"calibration", "channel"} and len(parts) > 2:
        subject = find_gas(parts[1])
        about = [subject.label if subject else parts[1], found.label, _variants(variants)]
    else:
        about = [found.label, _variants(variants)]
    return ", ".join(part for part in about if part)


def _variants(segments: tuple[str, ...]) -> str:
    words = table()
    shown = []
    for segment in segments:
        if segment in words:
            shown.append(words[segment].label)
        elif segment.startswith("limit_"):
            shown.append(f"for limit {segment[6:]}")
        else:
            shown.append(segment.replace("_", " "))
    return ", ".join(shown)
