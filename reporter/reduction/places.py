"""Where readings stand: the cells of some rows of a channel, in the file each of them came from."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reporter.logged import Counts
from reporter.problems import Place
from reporter.reduction.book import Book


def readings_place(book: Book) -> Place:
    """The file and sheet the readings came from: the field workbook's, or a logger's file of the folder."""
    place = book.record.readings.place
    if place.file and place.file != book.record.source.name:
        return Place(place.file, place.sheet)
    return Place(book.record.source.name, place.sheet or "Readings")


def cells_of(book: Book, channel: str, where: Counts) -> Place:
    """The cells of the readings of a channel at some positions; of several files, each with its own."""
    readings = book.record.readings
    column = readings.column(channel)
    rows, whole = column.rows[where], readings_place(book)
    if not column.sources or not len(where):
        letter = readings.columns[readings.index(channel)]
        return Place(whole.file, whole.sheet, cell_ranges(letter, rows, whole.file), channel)
    source = np.zeros(len(where), dtype=np.int64) if column.source is None else column.source[where]
    firsts = np.unique(source, return_index=True)[1] if source.any() else [0] * min(len(source), 1)
    parts = [(column.sources[source[at]], rows[source == source[at]]) for at in sorted(firsts)]
    if len(parts) == 1:
        place = parts[0][0]
        return Place(place.file, place.sheet, cell_ranges(place.cell, rows, place.file), channel)
    several = len({place.file for place, _ in parts}) > 1
    cells = [
        f"{cell_ranges(place.cell, own, place.file)} of {(place.file if several else '') or place.sheet}"
        for place, own in parts
    ]
    return Place(", ".join(dict.fromkeys(place.file for place, _ in parts)), "", "; ".join(cells), channel)


def cell_ranges(letter: str, rows: Sequence[int] | Counts, file: str) -> str:
    """The cells of some rows of a column as ranges, e.g. ``B149:B175;B179:B211``; JSON pointers in a JSON record."""
    numbers = np.asarray(rows, dtype=np.int64)
    starts = np.flatnonzero(np.diff(numbers, prepend=numbers[:1] - 2) != 1)
    ends = np.append(starts[1:], len(numbers)) - 1
    parts = zip(numbers[starts].tolist(), numbers[ends].tolist(), strict=True) if len(numbers) else ()
    if file.lower().endswith(".json"):
        return ";".join(f"/{first}/{letter} to /{last}/{letter}" for first, last in parts)
    return ";".join(f"{letter}{a}" if a == b else f"{letter}{a}:{letter}{b}" for a, b in parts) or letter
