"""The rows of a text whose cells are parted by a delimiter alone: split when they are asked for."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from typing import overload

import numpy as np

from reporter.logged import Counts

#: A letter that is no T between date and time.
_LETTER = re.compile(r"(?!(?<=\d)T\d)[^\W\d_]")
_ZEROES = ("02", "0 2")
#: Bytes of a cell that are looked at as one number.
_WORD = 8
#: A text file with a longer cell, in characters, is no table.
MAX_CELL = 4_000


class PlainRows(Sequence[tuple[str, ...]]):
    """The rows of a text without quotation marks: what the csv module gives, a row at a time or by column.

    Parameters
    ----------
    lines
        The lines of the text, without their ends.
    delimiter
        What parts the cells of a line.
    """

    __slots__ = ("_widths", "delimiter", "lines")

    def __init__(self, lines: Sequence[str], delimiter: str) -> None:
        self.lines, self.delimiter = lines, delimiter
        self._widths: list[int] | None = None

    def __len__(self) -> int:
        return len(self.lines)

    @overload
    def __getitem__(self, index: int) -> tuple[str, ...]: ...
    @overload
    def __getitem__(self, index: slice) -> Sequence[tuple[str, ...]]: ...
    def __getitem__(self, index: int | slice) -> tuple[str, ...] | Sequence[tuple[str, ...]]:
        if isinstance(index, slice):
            return PlainRows(self.lines[index], self.delimiter)
        line = self.lines[index]
        return tuple(line.split(self.delimiter)) if line else ()

    def __iter__(self) -> Iterator[tuple[str, ...]]:
        mark = self.delimiter
        return (tuple(line.split(mark)) if line else () for line in self.lines)

    @property
    def widths(self) -> list[int]:
        """The number of cells of each row."""
        if self._widths is None:
            self._widths = [line.count(self.delimiter) + 1 if line else 0 for line in self.lines]
        return self._widths

    def filled(self) -> Iterator[int]:
        """Positions of the rows that hold more than delimiters and blanks."""
        return (number for number, line in enumerate(self.lines) if line.replace(self.delimiter, "").strip())

    def wordy(self) -> list[int]:
        """Positions of the rows with a letter, or the digits that may stand for O2: a header holds either."""
        mark = self.delimiter
        zero, found = f"{mark}02{mark}", []
        for number, line in enumerate(self.lines):
            if line.isascii() and line.lower() == line.upper() and (mark == "\t" or "\t" not in line):
                if zero in f"{mark}{line.replace(' ', '')}{mark}":
                    found.append(number)
            elif _LETTER.search(line) or any(cell.strip() in _ZEROES for cell in line.split(mark)):
                found.append(number)
        return found

    @property
    def end(self) -> int:
        """One past the last row that holds more than delimiters and blanks."""
        rows = range(len(self.lines), 0, -1)
        return next((row for row in rows if self.lines[row - 1].replace(self.delimiter, "").strip()), 0)

    def columns(self, columns: Sequence[int], rows: Sequence[int]) -> list[list[str | None]]:
        """The cells of some columns in some rows, None where a row is short."""
        lines = self.lines if len(rows) == len(self.lines) else [self.lines[row] for row in rows]
        widths = {self.widths[row] for row in rows}
        if len(columns) == 1 and columns[0] < min(widths, default=0):
            most = columns[0] + 1
            return [[line.split(self.delimiter, most)[columns[0]] for line in lines]]
        if len(widths) == 1 and (width := widths.pop()):
            cells: list[str | None] = [*self.delimiter.join(lines).split(self.delimiter)]
            return [cells[c::width] if c < width else [None] * len(rows) for c in columns]
        split = [self[row] for row in rows]
        return [[cells[c] if c < len(cells) else None for cells in split] for c in columns]

    def coded(self, columns: Sequence[int], rows: Sequence[int]) -> list[tuple[list[str], Counts]] | None:
        """The different cells of some columns, and for each row the position of its own among them.

        None where a row has another number of cells, or a cell is longer than eight plain characters.
        """
        widths = {self.widths[row] for row in rows}
        text = "\n".join([self.lines[row] for row in rows]) + "\n"
        if len(widths) != 1 or not text.isascii():
            return None
        width = widths.pop()
        if max(columns, default=0) >= width:
            return None
        data = text.encode() + bytes(_WORD)
        marks = np.frombuffer(data, dtype=np.uint8)[: len(text)]
        ends = np.flatnonzero((marks == ord(self.delimiter)) | (marks == ord("\n"))).reshape(len(rows), width)
        starts = np.append(0, ends.ravel()[:-1] + 1).reshape(len(rows), width)
        words = np.ndarray((len(text),), dtype="<u8", buffer=data, strides=(1,))
        found = []
        for column in columns:
            lengths = ends[:, column] - starts[:, column]
            if lengths.max() > _WORD:
                return None
            rest = (8 * (_WORD - lengths)).astype(np.uint64)
            own = np.where(lengths == 0, np.uint64(0), words[starts[:, column]] << rest >> rest)
            each, codes = np.unique(own, return_inverse=True)
            found.append(([word.to_bytes(_WORD, "little").rstrip(b"\0").decode() for word in each.tolist()], codes))
        return found


def plain_rows(text: str, delimiter: str) -> PlainRows | None:
    """The rows of a text; None where only the csv module can tell them: quotation marks, or a very long cell."""
    if '"' in text:
        return None
    if "\r" in text:
        text = text.replace("\r\n", "\n").replace("\r", "\n")
    lines = text.split("\n")
    if not lines[-1]:
        lines.pop()
    if max(map(len, lines), default=0) > MAX_CELL and any(
        max(map(len, line.split(delimiter))) > MAX_CELL for line in lines if len(line) > MAX_CELL
    ):
        return None
    return PlainRows(lines, delimiter)
