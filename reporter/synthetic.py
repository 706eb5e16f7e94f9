"""Tests that were made and not measured: how one is known, and that it stays a draft that says so.

The item Synthetic of the sheet Test says it.  A rehearsal also bears its mark in the texts of the test, its fuels,
cylinders, limits and events, so that taking the one row away does not make a real test of it.  A logger file of a
rehearsal bears the mark above and below its table, and makes a synthetic test of whatever workbook it lies beside.
"""

from __future__ import annotations

import zipfile
import zlib
from collections.abc import Iterator
from dataclasses import fields, replace
from io import BytesIO
from typing import Any

from reporter.record import Given, Record, text_of

#: Words that stand in the texts of every rehearsal.
MARK = "made by fluebook rehearse"
#: What every page and every summary of a synthetic test says; no phrase of a firm takes its place.
STAMP = "SYNTHETIC"
_NO = "no"
_ENCODINGS = ("utf-8", "utf-16-le", "utf-16-be")
#: The parts of a workbook that hold its texts and its properties.
_PARTS = ("xl/sharedStrings.xml", "docProps/core.xml")


def is_synthetic(record: Record) -> bool:
    """Whether the readings were made: by the item Synthetic (any entry but no), or by the mark of a rehearsal."""
    said = text_of(record.test.synthetic).casefold().split()
    return bool(said and said[0].strip(",.;") != _NO) or any(MARK in text for text in _texts(record))


def is_marked(content: bytes) -> bool:
    """Whether the bytes of a file hold the mark of a rehearsal: a text in a usual encoding, or a workbook's texts."""
    if not content.startswith(b"PK"):
        return any(MARK.encode(encoding) in content for encoding in _ENCODINGS)
    try:
        with zipfile.ZipFile(BytesIO(content)) as parts:
            return any(MARK.encode() in parts.read(name) for name in _PARTS if name in parts.namelist())
    except (zipfile.BadZipFile, OSError, RuntimeError, EOFError, zlib.error):
        return False


def stamped(record: Record, text: str) -> str:
    """A text that says so where the test is synthetic."""
    return ", ".join(part for part in (STAMP, text) if part) if is_synthetic(record) else text


def as_draft(record: Record) -> Record:
    """The record of a synthetic test with status draft and the item Synthetic; any other record as it is."""
    if not is_synthetic(record):
        return record
    said = record.test.synthetic
    if said is None:
        said = Given(f"yes, {MARK}, as its texts say", record.test.facility.place)
    elif not said.value.casefold().startswith("yes"):
        said = replace(said, value=f"yes, entered as: {said.value}")
    return replace(record, test=replace(record.test, synthetic=said, status=Given("draft")))


def _texts(record: Record) -> Iterator[str]:
    """The texts a rehearsal marks."""
    rows: tuple[Any, ...] = (record.test, *record.fuels, *record.cylinders, *record.limits, *record.events)
    for row in rows:
        for field in fields(row):
            given = getattr(row, field.name)
            if isinstance(given, Given) and isinstance(given.value, str):
                yield given.value
