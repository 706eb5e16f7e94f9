"""The cells of a sheet's XML in passing: how many there are, how far out they stand, which hold an error value.

Bytes are looked at as an array, for a sheet may hold millions of cells; a cell that is not written as spreadsheet
programs write them (``<c r="B7"``) is left to a thorough look.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

import numpy as np

from reporter.logged import Counts

Bytes = np.ndarray[tuple[int], np.dtype[np.uint8]]

#: Bytes added to a piece so that what follows a cell's tag can be looked at.
_PAD = bytes(80)
_LESS, _C, _SPACE, _R, _EQUALS, _QUOTE = b'<c r="'
_A, _Z, _ZERO, _NINE, _O = b"AZ09o"
_S, _I = b"si"
_SLASH, _GREATER = b"/>"
#: Digits of a row number looked at; the eighth is beyond any sheet.
_DIGITS = 8
_ENDS = np.frombuffer(b" \t\r\n>/", dtype=np.uint8)
#: What may stand in the tag of a cell behind its address; how long it is, and of how many kinds in one piece.
_TAIL = re.compile(rb'(?: (?:[a-qs-z]|cm|vm|ph)="(?:\d{1,5}|n|b|e|str|inlineStr|d|s)")*')
_TAIL_BYTES, _TAILS = 32, 256
#: What readers make different things of: text that is not as it stands, values that are two.
_CHANGED = re.compile(rb"&(?!(?:amp|lt|gt|quot|apos);)")
_ERROR = re.compile(
    rb"<c\s[^<>]{0,99}?\br=\"([A-Z]{1,3}\d{1,7})\"[^<>]{0,99}?\bt=\"e\"[^<>]{0,99}>\s*"
    rb"(?:<f\b[^<>]*(?:/>|>[^<]*</f>)\s*)?<v>([^<]*)</v>"
)
_HIDDEN = re.compile(rb"<row\s(?=[^<>]*\bhidden=\"(?:1|true)\")[^<>]*?\br=\"(\d+)\"")


@dataclass(slots=True)
class CellScan:
    """What has been seen of one part: the last row and column, error cells with their texts, hidden rows.

    `odd` says that cells were written in another way than the usual: `last_row` and the rest are not to be trusted.
    `cells` and `rows` were in the last piece alone, and `starts` are the first letters of its elements; `all_rows`
    are those of the part.  `longest` is the most bytes between two shared texts.
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
    longest: int = 0

    def see(self, piece: bytes) -> bool:
        """Take note of the cells of a piece; whether all of it is written in the usual way."""
        if b'"e"' in piece:
            self.errors |= {a.decode(): v.decode("utf-8", "replace") for a, v in _ERROR.findall(piece)}
        if b"hidden=" in piece:
            self.hidden |= {int(number) for number in _HIDDEN.findall(piece) if len(number) < _DIGITS}
        usual = self._corner(np.frombuffer(piece + _PAD, dtype=np.uint8)) and not self._changed(piece)
        self.odd |= not usual
        return usual

    def _changed(self, piece: bytes) -> bool:
        """Whether a piece holds what is no plain text of cells: comments, instructions, character references."""
        if not self.cells and b"<si" not in piece:
            return False
        if "!" in self.starts or ("?" in self.starts and piece.rfind(b"<?") > 4) or b"</v><v" in piece:
            return True
        return b"&" in piece and _CHANGED.search(piece) is not None

    def _corner(self, data: Bytes) -> bool:
        tags = np.flatnonzero(data[: -len(_PAD)] == _LESS)
        letters = data[tags + 1]
        self.starts = frozenset(chr(letter) for letter in np.flatnonzero(np.bincount(letters, minlength=256)))
        self.rows = int(np.count_nonzero(data[tags[letters == _R] + 2] == _O))
        self.all_rows += self.rows
        texts = tags[(letters == _S) & (data[tags + 2] == _I)]
        if len(texts):
            self.longest = max(self.longest, int(np.diff(texts, append=len(data)).max()))
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
        ends = at.copy()
        for step in range(_DIGITS):
            digit = data[at + step]
            alive &= (digit >= _ZERO) & (digit <= _NINE)
            if not alive.any():
                break
            row = np.where(alive, row * 10 + digit - _ZERO, row)
            ends += alive
        known = (first >= _A) & (first <= _Z) & (row > 0) & ~alive
        self.last_row = max(self.last_row, int(row.max()))
        self.last_column = max(self.last_column, int(column.max()))
        return bool(known.all()) and bool((data[ends] == _QUOTE).all()) and _plain_tails(data, ends + 1)


def _plain_tails(data: Bytes, at: Counts) -> bool:
    """Whether tags hold nothing from `at` on, where their addresses end, but a style and a type.

    Eight bytes are looked at as one number, and each different one once, for the cells of a sheet are of few kinds.
    """
    words = np.ndarray((len(data) - 7,), dtype="<u8", buffer=data, strides=(1,))
    waiting, kinds = [(at, b"")], 0
    while waiting:
        places, before = waiting.pop()
        closed = (data[places] == _GREATER) | ((data[places] == _SLASH) & (data[places + 1] == _GREATER))
        if closed.any() and not _TAIL.fullmatch(before):
            return False
        places = places[~closed]
        own = words[places]
        while len(places):
            same = own == own[0]
            tail, mark, _ = (before + own[0].tobytes()).partition(b">")
            kinds += 1
            if kinds > _TAILS or (mark and not _TAIL.fullmatch(tail.removesuffix(b"/"))):
                return False
            if not mark:
                if len(tail) >= _TAIL_BYTES:
                    return False
                waiting.append((places[same] + 8, tail))
            places, own = places[~same], own[~same]
    return True
