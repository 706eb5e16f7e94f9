"""The cells of a sheet's XML in passing: how many there are, how far out they stand, which hold an error value.

Bytes are looked at as an array, for a sheet may hold millions of cells; a cell that is not written as spreadsheet
programs write them (``<c r="B7"``) is left to a thorough look.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

import numpy as np

#: Bytes added to a piece so that what follows a cell's tag can be looked at.
_PAD = bytes(16)
_LESS, _C, _SPACE, _R, _EQUALS, _QUOTE = b'<c r="'
_A, _Z, _ZERO, _NINE, _O = b"AZ09o"
#: Digits of a row number looked at; the eighth is beyond any sheet.
_DIGITS = 8
_ENDS = np.frombuffer(b" \t\r\n>/", dtype=np.uint8)
_ERROR = re.compile(
    rb"<c\s[^<>]*?\br=\"([A-Z]+\d+)\"[^<>]*?\bt=\"e\"[^<>]*>\s*(?:<f\b[^<>]*(?:/>|>[^<]*</f>)\s*)?<v>([^<]*)</v>"
)
_HIDDEN = re.compile(rb"<row\s(?=[^<>]*\bhidden=\"(?:1|true)\")[^<>]*?\br=\"(\d+)\"")


@dataclass(slots=True)
class CellScan:
    """What has been seen of one part: the last row and column, error cells with their texts, hidden rows.

    `odd` says that cells were written in another way than the usual: `last_row` and the rest are not to be trusted.
    `cells` and `rows` were in the last piece alone, and `starts` are the first letters of its elements; `all_rows`
    are those of the part.
    """

    last_row: int = 0
    last_column: int = 0
    errors: dict[str, str] = field(default_factory=dict)
    hidden: set[int] = field(default_factory=set)
    odd: bool = False
    cells: int = 0
    rows: int = 0
    all_rows: int = 0
    starts: frozenset[str] = frozenset()

    def see(self, piece: bytes) -> bool:
        """Take note of the cells of a piece; whether all of it is written in the usual way."""
        if b'"e"' in piece:
            self.errors |= {a.decode(): v.decode("utf-8", "replace") for a, v in _ERROR.findall(piece)}
        if b"hidden=" in piece:
            self.hidden |= {int(number) for number in _HIDDEN.findall(piece) if len(number) < _DIGITS}
        usual = self._corner(np.frombuffer(piece + _PAD, dtype=np.uint8))
        self.odd |= not usual
        return usual

    def _corner(self, data: np.ndarray[tuple[int], np.dtype[np.uint8]]) -> bool:
        tags = np.flatnonzero(data[: -len(_PAD)] == _LESS)
        letters = data[tags + 1]
        self.starts = frozenset(chr(letter) for letter in np.flatnonzero(np.bincount(letters, minlength=256)))
        self.rows = int(np.count_nonzero(data[tags[letters == _R] + 2] == _O))
        self.all_rows += self.rows
        tags = tags[letters == _C]
        usual = data[tags + 2] == _SPACE
        for step, byte in ((3, _R), (4, _EQUALS), (5, _QUOTE)):
            usual &= data[tags + step] == byte
        self.cells = int(np.count_nonzero(np.isin(data[tags + 2], _ENDS)))
        if self.cells != np.count_nonzero(usual):
            return False
        at = tags[usual] + 6
        if not len(at):
            return True
        first, second = data[at], data[at + 1]
        two = (second >= _A) & (second <= _Z)
        column = np.where(two, (first.astype(np.int32) - 64) * 26 + second - 64, first.astype(np.int32) - 64)
        at = at + 1 + two
        row = np.zeros(len(at), dtype=np.int32)
        alive = np.ones(len(at), dtype=bool)
        for step in range(_DIGITS):
            digit = data[at + step]
            alive &= (digit >= _ZERO) & (digit <= _NINE)
            if not alive.any():
                break
            row = np.where(alive, row * 10 + digit - _ZERO, row)
        known = (first >= _A) & (first <= _Z) & (row > 0) & ~alive
        self.last_row = max(self.last_row, int(row.max()))
        self.last_column = max(self.last_column, int(column.max()))
        return bool(known.all())
