"""The same record as JSON: an object of sheets; Test and Location objects of items, the others lists of rows.

    {"Test": {"Facility": "...", "Logging interval [s]": 60},
     "Channels": [{"Channel": "NOx", "Gas": "NOx", "Unit": "ppm", "Moisture basis": "dry"}],
     "Readings": [{"Time": "2026-04-14T08:01", "NOx": 24.1}]}

Dates and times are texts, year first.  An item may be ``{"Entry": ..., "Note": ...}``.  Places are JSON
pointers (RFC 6901).  The schema is `reporter.intake.schema.input_schema`.
"""

from __future__ import annotations

import json
from collections import Counter
from collections.abc import Mapping
from typing import Any

from reporter.intake.gather import Gathered
from reporter.intake.sheets import ITEM_COLUMNS, Kind, Sheet, find_sheet
from reporter.intake.table import Cell, HeaderCell, Raw, Row, SheetTable, split_header, too_large, whole_text
from reporter.intake.workbook import raw, unknown_sheet

#: Larger texts are refused: a test of one day is well under a megabyte.
MAX_BYTES = 20 << 20
#: Caps on the values, and on the objects and lists, of a text.
MAX_VALUES, MAX_NESTS = 1_200_000, 300_000


def looks_like_json(content: bytes) -> bool:
    """Whether the bytes begin like a JSON object or list."""
    return content[:4096].removeprefix(b"\xef\xbb\xbf").lstrip()[:1] in (b"{", b"[")


def read_json(content: bytes, gathered: Gathered) -> tuple[SheetTable, ...]:
    """All known sheets of a JSON record as tables; problems go to `gathered`."""
    if len(content) > MAX_BYTES:
        gathered.add("bad-json", gathered.place(), f"{len(content) >> 20} MB of text")
        return ()
    if content.count(b",") > MAX_VALUES or content.count(b"{") + content.count(b"[") > MAX_NESTS:
        gathered.add("bad-json", gathered.place(), "far more values than a test has")
        return ()
    try:
        data = json.loads(content.decode("utf-8-sig"), object_pairs_hook=_object, parse_constant=_no_constant)
    except (ValueError, RecursionError) as error:
        gathered.add("bad-json", gathered.place(), str(error) or type(error).__name__)
        return ()
    if not isinstance(data, dict):
        gathered.add("bad-json", gathered.place(), "a list")
        return ()
    tables = []
    for name, value in data.items():
        spec = find_sheet(name)
        if spec is None:
            unknown_sheet(gathered, name, list(data))
            continue
        table = _table(spec, name, value, gathered)
        if table is not None:
            tables.append(table)
    return tuple(tables)


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    made = {whole_text(name): whole_text(value) if isinstance(value, str) else value for name, value in pairs}
    if len(made) != len(pairs):
        twice = next(name for name, times in Counter(name for name, _ in pairs).items() if times > 1)
        raise ValueError(f"the name {twice!r} stands twice in one object")
    return made


def _no_constant(name: str) -> float:
    raise ValueError(f"{name} is no number")


def _table(spec: Sheet, name: str, value: Any, gathered: Gathered) -> SheetTable | None:
    if spec.kind is Kind.ITEMS and isinstance(value, dict):
        return _items(spec, name, value, gathered)
    if spec.kind is Kind.ITEMS or not isinstance(value, list) or any(not isinstance(r, dict) for r in value):
        wanted = "an object of items" if spec.kind is Kind.ITEMS else "a list of objects, one for each row"
        gathered.add("bad-json", gathered.place(name, pointer(name)), type(value).__name__, expected=wanted)
        return None
    keys = list(dict.fromkeys(key for row in value for key in row))
    if large := too_large(len(value), len(keys)):
        gathered.add("bad-json", gathered.place(name, pointer(name)), large, expected="rows of the same few names")
        return None
    header = tuple(HeaderCell(pointer(name, 0, key), key, key, *split_header(key)) for key in keys)
    rows = tuple(
        Row(i, tuple(_cell(pointer(name, i, key), row.get(key), gathered, name) for key in keys))
        for i, row in enumerate(value)
    )
    return SheetTable(spec, name, header, tuple(r for r in rows if not r.blank), header_found=bool(keys))


def _items(spec: Sheet, name: str, items: Mapping[str, Any], gathered: Gathered) -> SheetTable:
    header = tuple(HeaderCell(pointer(name), text, text, text) for text in ITEM_COLUMNS)
    rows = []
    for i, (item, value) in enumerate(items.items()):
        at, entry, note = pointer(name, item), value, None
        if isinstance(value, dict) and set(value) <= set(ITEM_COLUMNS[1:]):
            entry, note = value.get("Entry"), value.get("Note")
        cells = (Cell(at, item), _cell(at, entry, gathered, name), _cell(at, note, gathered, name))
        rows.append(Row(i, cells))
    return SheetTable(spec, name, header, tuple(rows))


def _cell(at: str, value: Any, gathered: Gathered, sheet: str) -> Cell:
    if isinstance(value, (dict, list)):
        gathered.add("bad-json", gathered.place(sheet, at), type(value).__name__, expected="one value")
        return Cell(at, None)
    plain: Raw = raw(value)
    return Cell(at, plain)


def pointer(*steps: str | int) -> str:
    """A JSON pointer, e.g. ``/Runs/0/Start``."""
    return "".join("/" + str(step).replace("~", "~0").replace("/", "~1") for step in steps)
