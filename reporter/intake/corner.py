"""How far out the cells of a sheet may stand, and cells that stand further, however their addresses are written."""

from __future__ import annotations

import re

from reporter.intake.cellscan import CellScan

#: Caps on the cells of one sheet: outermost column and row.
MAX_COLUMN = 512
MAX_ROW = 1_048_576

#: A prefix of an element, and its attributes up to the end of the tag.
PREFIX = rb"(?:[^\s<>/:!?]+:)?"
ATTRIBUTES = rb"((?:[^\"'<>]|\"[^\"]*\"|'[^']*')*+)"
_SIMPLE = rb"(?:(?:[A-Ra-r]?[A-Za-z]|[Ss][A-Ra-r])?\d{1,6})"
_PERHAPS_FAR = re.compile(rb"\br\s*=\s*(?:\"(?!" + _SIMPLE + rb"\")|'(?!" + _SIMPLE + rb"'))")
_PLACED = re.compile(rb"<" + PREFIX + rb"(?:c|(row))\s" + ATTRIBUTES + rb">")
_GIVEN = re.compile(rb"\br\s*=\s*(?:\"([^\"]*)\"|'([^']*)')")
_WHERE = re.compile(r"([A-Z]{0,3})(\d{1,7})")
_ROW_START = re.compile(rb"<" + PREFIX + rb"row[\s>/]")
_CELL_START = re.compile(rb"<" + PREFIX + rb"c[\s>/]")


def far_cell(piece: bytes, scan: CellScan, *, usual: bool) -> str:
    """The address of a cell outside the allowed corner; empty if there is none."""
    within = scan.last_column <= MAX_COLUMN and scan.last_row <= MAX_ROW
    if (usual and within) or _PERHAPS_FAR.search(piece) is None:
        return ""
    for match in _PLACED.finditer(piece):
        for one, other in _GIVEN.findall(match[2]):
            address = (one or other).decode("ascii", "replace").upper()
            place = _WHERE.fullmatch(address)
            if place is None or column_number(place[1]) > MAX_COLUMN or int(place[2]) > MAX_ROW:
                return str(address[:40])
    return ""


def crowded_row(piece: bytes) -> bool:
    """Whether a row has more cells than columns are allowed: cells without an address stand one beside the other."""
    return any(
        sum(1 for _ in _CELL_START.finditer(row)) > MAX_COLUMN
        for row in _ROW_START.split(piece)
        if row.count(b"c") > MAX_COLUMN
    )


def column_number(letters: str) -> int:
    """1 for A, 27 for AA."""
    number = 0
    for letter in letters:
        number = number * 26 + ord(letter) - 64
    return number
