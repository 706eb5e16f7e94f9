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


def _match(parts: list[str]) -> tuple[Quantity, int, list[str]]:
    """The longest tail or middle of a key that is in the table, where it starts, and what follows it."""
    known = table()
    for start in range(len(parts)):
        for stop in range(len(parts), start, -1):
            name = ".".join(parts[start:stop])
            if name in known:
                return known[name], start, parts[stop:]
            plain, numbered, number = name.rpartition("_")
            if numbered and number.isdigit() and plain in known:
                return known[plain], start, [number, *parts[stop:]]
    raise LedgerError(f"{'.'.join(parts)!r} names no quantity of the table")


#: How many leading segments of a key name what it is about, not what it is.
_NAMES = {
    "run": 2, "average": 1, "comparison": 2, "limit": 2, "calibration": 2, "channel": 2, "criterion": 2,
    "cylinder": 2, "fuel": 2, "gas": 2, "component": 2, "element": 2, "air": 2,
}  # fmt: skip
#: Segments that group keys and say nothing to a reader.
_SILENT = {"combustion", "fuel_use", "component"}


def _split(key: str) -> tuple[Quantity, list[str], list[str]]:
    """The quantity of a key, the segments between its name and the quantity, and the variants after it.

    A row that begins with the first segment of the key (``comparison.count``) wins.
    """
    parts = key.split(".")
    named = min(_NAMES.get(parts[0], 1), len(parts) - 1)
    rest = parts[named:]
    for stop in range(len(rest), 0, -1):
        own = table().get(".".join([parts[0], *rest[:stop]]))
        if own is not None:
            return own, [], rest[stop:]
    found, start, variants = _match(rest)
    return found, rest[:start], variants


@cache
def quantity_of(key: str) -> tuple[Quantity, tuple[str, ...]]:
    """The quantity of a key and the variant segments after it (`LedgerError` if the table has none)."""
    found, _, variants = _split(key)
    return found, tuple(variants)


@cache
def label_of(key: str) -> str:
    """The label of a key in words, e.g. ``NOx, corrected for bias and drift, run 1``."""
    found, between, variants = _split(key)
    parts = key.split(".")
    about = [_subject(segment) for segment in between if segment not in _SILENT]
    if parts[0] == "run" and between[:2] == ["combustion", "fuel"]:
        about = ["fuels burned together"]
    before, after = _named(parts)
    return ", ".join(part for part in (before, *about, found.label, _variants(tuple(variants)), after) if part)


def _named(parts: list[str]) -> tuple[str, str]:
    """What a key is about, in words before and after its quantity."""
    name = parts[1] if len(parts) > 2 else ""
    match parts[0]:
        case "run":
            return "", f"run {parts[1]}"
        case "average":
            return "", "average of runs"
        case "comparison" | "limit":
            return f"limit {parts[1]}", ""
        case "cylinder" | "component":
            return f"{parts[0]} {parts[1]}", ""
        case "air":
            return f"dry air ({parts[1]})", ""
        case "element":
            return f"element {name}" if name else "atomic weight", ""
    return _subject(name) if name else "", ""


def _subject(segment: str) -> str:
    """A gas by its label, another name with its spaces."""
    from reporter.gases import find_gas

    found = find_gas(segment)
    return found.label if found is not None else segment.replace("_", " ")


def _variants(segments: tuple[str, ...]) -> str:
    words = table()
    shown = []
    for segment in segments:
        if segment in words:
            shown.append(words[segment].label)
        elif segment.startswith(("limit_", "for_limit_")):
            shown.append(f"for limit {segment.removeprefix('for_').removeprefix('limit_')}")
        elif segment.startswith("group_"):
            shown.append(f"group {segment[6:].replace('_', ' ')}")
        else:
            shown.append(_gases(segment) or segment.replace("_", " "))
    return ", ".join(shown)


def _gases(segment: str) -> str:
    """Gases joined in one segment (``nox_o2``), by their labels; empty where it is no list of gases."""
    from reporter.gases import find_gas

    found = [find_gas(name) for name in segment.split("_")]
    return ", ".join(gas.label for gas in found if gas is not None) if all(found) else ""
