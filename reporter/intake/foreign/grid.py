"""Any text table or workbook as a grid of raw cells with their places; never an exception for what is in a file."""

from __future__ import annotations

import codecs
import csv
import hashlib
import io
import warnings
from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, cast

from reporter.intake.corner import MAX_COLUMN, MAX_ROW
from reporter.intake.foreign.lines import MAX_CELL, PlainRows, plain_rows
from reporter.intake.foreign.quick import SheetRows, is_long, quick_sheets, too_large
from reporter.intake.guard import MAX_CELLS as MAX_CELLS_OF_FORM
from reporter.intake.guard import Look, look_at
from reporter.intake.table import Raw
from reporter.intake.workbook import ranges, raw, sheet_parts
from reporter.problems import Place, Problem, problem
from reporter.record import SourceFile

#: A larger file is not read into memory.
MAX_FILE = 100 << 20
#: A text file with more cells is not read.
MAX_CELLS = 4_000_000
#: A workbook with more cells is not read.
MAX_LOGGED = 2_000_000
#: Lines and bytes that decide about delimiter and encoding.
SAMPLE_LINES, SAMPLE_BYTES = 400, 65_536
#: A text file with a longer line, in bytes, is no table.
MAX_LINE = 2 << 20
#: Delimiters, those first that seldom stand inside a cell.
DELIMITERS = ("\t", ";", "|", ",")
#: Control characters that no text table holds.
_CONTROLS = bytes([*range(9), *range(14, 26), 28, 29, 30, 31, 127])
_MARKS = (
    (codecs.BOM_UTF8, "utf-8-sig"),
    (codecs.BOM_UTF32_LE, "utf-32"),
    (codecs.BOM_UTF16_LE, "utf-16"),
    (codecs.BOM_UTF16_BE, "utf-16"),
)


@dataclass(frozen=True, slots=True)
class Page:
    """One sheet, or the whole of a text file: rows of raw cells from row 1, and what is special about some.

    `sheet` is empty for a text file; `lines` gives the line of each row there.  Positions count from 0.
    """

    sheet: str
    rows: Sequence[Sequence[Raw]]
    lines: Sequence[int] = ()
    hidden: bool = False
    hidden_rows: frozenset[int] = frozenset()
    percent: frozenset[tuple[int, int]] = frozenset()
    uncalculated: frozenset[tuple[int, int]] = frozenset()
    merged: tuple[tuple[int, int, int, int], ...] = ()
    hidden_columns: frozenset[int] = frozenset()
    comments: tuple[tuple[int, int, str], ...] = ()

    def hidden_words(self) -> str:
        """The hidden rows and columns that hold something, in words; empty where none is hidden."""
        rows = f"rows {ranges(self.number(row) for row in self.hidden_rows)}" if self.hidden_rows else ""
        columns = f"columns {', '.join(letters(column) for column in sorted(self.hidden_columns))}"
        return ", ".join(part for part in (rows, columns if self.hidden_columns else "") if part)

    def comment_words(self) -> tuple[str, ...]:
        """The comments at cells, each with its cell."""
        return tuple(f"comment at {self.address(row, column)}: {text}" for row, column, text in self.comments)

    def number(self, row: int) -> int:
        """The line or row number people see."""
        return self.lines[row] if self.lines else row + 1

    def columns(self, columns: Sequence[int], rows: Sequence[int]) -> list[list[Raw]]:
        """The cells of some columns in some rows, None where a row is short."""
        if isinstance(self.rows, (PlainRows, SheetRows)):
            return cast(list[list[Raw]], self.rows.columns(columns, rows))
        cells = [self.rows[row] for row in rows]
        return [[row[column] if column < len(row) else None for row in cells] for column in columns]

    def widths(self, first: int, last: int) -> list[int]:
        """The number of cells of each of the rows from `first` to before `last`."""
        own = self.rows.widths if isinstance(self.rows, (PlainRows, SheetRows)) else list(map(len, self.rows))
        return own[first:last]

    def wordy(self) -> list[int]:
        """The rows that may hold a header, by a quick look before a thorough one."""
        return self.rows.wordy() if isinstance(self.rows, (PlainRows, SheetRows)) else list(filled_rows(self))

    @property
    def end(self) -> int:
        """One past the last row that holds anything."""
        own = self.rows
        return own.end if isinstance(own, (PlainRows, SheetRows)) else max(filled_rows(self), default=-1) + 1

    def address(self, row: int, column: int) -> str:
        """A cell as people name it: column letter and row or line, e.g. ``C12``."""
        return f"{letters(column)}{self.number(row)}"


@dataclass(frozen=True, slots=True)
class Grid:
    """A file as pages of raw cells, with what was found out on the way; problems where it cannot be read."""

    source: SourceFile
    kind: str
    pages: tuple[Page, ...] = ()
    encoding: str = ""
    delimiter: str = ""
    epoch_1904: bool = False
    cut_off: bool = False
    problems: tuple[Problem, ...] = field(default=())

    def place(self, page: Page, row: int, column: int, name: str = "") -> Place:
        """The place of a cell."""
        return Place(self.source.name, page.sheet, page.address(row, column), name)


def letters(column: int) -> str:
    """A for position 0, AA for 26."""
    text, column = "", column + 1
    while column:
        column, rest = divmod(column - 1, 26)
        text = chr(65 + rest) + text
    return text


def read_grid(path: str | Path) -> Grid:
    """The grid of a file; what cannot be opened has problems and no pages."""
    file = Path(path)
    try:
        if file.exists() and not file.is_file():
            return _refused(SourceFile(file.name, "", 0), "not-a-workbook", "a folder, a device or a pipe")
        with file.open("rb") as stream:
            content = stream.read(MAX_FILE + 1)
    except (OSError, ValueError) as error:
        return _refused(SourceFile(file.name, "", 0), "not-a-workbook", getattr(error, "strerror", "") or str(error))
    return grid_of(file.name, content)


def grid_of(name: str, content: bytes) -> Grid:
    """The grid of the bytes of a file; `name` is the base name that places say."""
    source = SourceFile(name, hashlib.sha256(content).hexdigest(), len(content), content)
    if len(content) > MAX_FILE:
        return _refused(source, "zip-bomb", f"a file of more than {MAX_FILE >> 20} MB")
    if not content.strip():
        return _refused(source, "no-readings-table", "an empty file")
    if content.startswith((b"PK", b"\xd0\xcf\x11\xe0")):
        return _workbook(source)
    return _text(source)


def _refused(source: SourceFile, code: str, found: str, sheet: str = "", cell: str = "") -> Grid:
    return Grid(source, "unread", problems=(problem(code, Place(source.name, sheet, cell), found),))


# ---- text -----------------------------------------------------------------------------------------------


def decoded(content: bytes) -> tuple[str, str]:
    """The text of a file and the encoding it was read in: mark, UTF-8, UTF-16, else the likeliest of old code pages."""
    for mark, name in _MARKS:
        if content.startswith(mark):
            return content.decode(name, "replace"), name
    start = content[:SAMPLE_BYTES]
    nothing = start.count(0)
    if nothing > len(start) // 4:
        name = "utf-16-le" if start[1::2].count(0) >= start[::2].count(0) else "utf-16-be"
        return content.decode(name, "replace"), name
    try:
        return content.decode("utf-8"), "utf-8"
    except UnicodeDecodeError:
        pass
    if len(start) - len(start.translate(None, _CONTROLS)) > len(start) // 100:
        return "\x00", ""  # no text in any old code page
    from charset_normalizer import from_bytes

    best = from_bytes(start, cp_isolation=["cp1252", "cp1250", "mac_roman", "cp850"]).best()
    name = best.encoding if best is not None else "cp1252"
    return content.decode(name, "replace"), name


def _text(source: SourceFile) -> Grid:
    if _long_line(source.content):
        return _refused(source, "zip-bomb", f"a line of more than {MAX_LINE >> 20} MB")
    first = source.content[: 4 * SAMPLE_BYTES]
    if len(first) < source.size:
        first = first[: first.rfind(b"\n") + 1] or first
    start, _ = decoded(first)
    if "\x00" in start:
        return _refused(source, "not-a-workbook", "a file of bytes that are no text")
    delimiter = delimiter_of(start)
    if source.content.count(delimiter.encode()) + source.content.count(b"\n") > MAX_CELLS:
        return _refused(source, "zip-bomb", f"more than {MAX_CELLS:,} cells")
    text, encoding = decoded(source.content)
    if "\x00" in text:
        return _refused(source, "not-a-workbook", "a file of bytes that are no text")
    cut = not text.endswith(("\n", "\r"))
    plain = plain_rows(text, delimiter)
    if plain is not None and max(plain.widths, default=0) <= MAX_COLUMN and sum(plain.widths) <= MAX_CELLS:
        page = Page("", plain, range(1, len(plain) + 1))
        return Grid(source, "text", (page,), encoding, delimiter, cut_off=cut)
    rows: list[tuple[Raw, ...]] = []
    lines: list[int] = []
    cells = 0
    try:
        reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter)
        before = 0
        for row in reader:
            cells += len(row)
            if len(row) > MAX_COLUMN or cells > MAX_CELLS:
                found = f"more than {MAX_COLUMN} columns or {MAX_CELLS:,} cells"
                return _refused(source, "zip-bomb", found, cell=f"A{before + 1}")
            if max(map(len, row), default=0) > MAX_CELL:
                found = f"a cell of more than {MAX_CELL:,} characters"
                return _refused(source, "zip-bomb", found, cell=f"A{before + 1}")
            rows.append(tuple(row))
            lines.append(before + 1)
            before = reader.line_num
    except csv.Error as error:
        return _refused(source, "truncated", str(error))
    page = Page("", tuple(rows), tuple(lines))
    return Grid(source, "text", (page,), encoding, delimiter, cut_off=cut)


def _long_line(content: bytes) -> bool:
    """Whether so many bytes stand together without the end of a line."""
    return any(
        content.find(b"\n", start, start + MAX_LINE) < 0 and content.find(b"\r", start, start + MAX_LINE) < 0
        for start in range(0, len(content) - MAX_LINE, MAX_LINE)
    )


def delimiter_of(text: str) -> str:
    """The delimiter that gives most lines the same number of cells, at least two."""
    sample = [line for line in text[: 4 * SAMPLE_BYTES].splitlines()[:SAMPLE_LINES] if line.strip()]
    scores = {mark: _alike(sample, mark) for mark in DELIMITERS}
    most = max(scores.values(), default=0)
    return next((mark for mark in DELIMITERS if most and scores[mark] >= 0.9 * most), ",")


def _alike(sample: Sequence[str], mark: str) -> int:
    try:
        counts = Counter(len(row) for row in csv.reader(sample, delimiter=mark) if len(row) > 1)
    except csv.Error:
        return 0
    return max(counts.values(), default=0)


# ---- workbooks ------------------------------------------------------------------------------------------


def _workbook(source: SourceFile) -> Grid:
    seen = look_at(source.content, MAX_LOGGED)
    if seen.stops:
        return _refused(source, seen.findings[0].code, seen.findings[0].found, cell=seen.findings[0].cell)
    notes = (problem("macro-enabled", Place(source.name)),) if seen.macros else ()
    if is_long(seen):
        if found := too_large(source.content, seen):
            return _refused(source, "zip-bomb", found)
        return _long_workbook(source, seen, notes)
    if seen.counts[b"c"] > MAX_CELLS_OF_FORM:
        return _refused(source, "zip-bomb", f"more than {MAX_CELLS_OF_FORM:,} cells written in an unusual way")
    import openpyxl

    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            book = openpyxl.load_workbook(io.BytesIO(source.content), data_only=True, keep_links=False)
            parts = {name: part for part, name in sheet_parts(source.content).items()} if seen.uncalculated else {}
            if far := _far_cell(book.worksheets):
                return _refused(source, "far-cell", "", *far)
            pages = tuple(_page(sheet, parts.get(sheet.title, ""), seen) for sheet in book.worksheets)
            late = book.epoch.year == 1904
    except Exception as error:  # whatever the library raises on a damaged file means one thing
        return _refused(source, "truncated", f"{type(error).__name__} while reading the workbook")
    return Grid(source, "workbook", pages, epoch_1904=late, problems=notes)


def _long_workbook(source: SourceFile, seen: Look, notes: tuple[Problem, ...]) -> Grid:
    try:
        sheets, late = quick_sheets(source.content, seen, sheet_parts(source.content))
    except (KeyboardInterrupt, SystemExit):
        raise
    except BaseException as error:  # whatever the library raises on a damaged file, its own panic too, means one thing
        return _refused(source, "truncated", f"{type(error).__name__} while reading the workbook")
    pages = tuple(
        Page(s.title, s.rows, (), s.hidden, s.hidden_rows, s.percent, s.uncalculated, s.merged) for s in sheets
    )
    return Grid(source, "workbook", pages, epoch_1904=late, problems=notes)


def _far_cell(sheets: Sequence[Any]) -> tuple[str, str] | None:
    """The sheet and address of a cell beyond the last allowed row or column, wherever its address came from."""
    for sheet in sheets:
        row, column = max((r for r, _ in sheet._cells), default=1), max((c for _, c in sheet._cells), default=1)
        if row > MAX_ROW or column > MAX_COLUMN:
            return sheet.title, f"{letters(column - 1)}{row}"
    return None


def _page(sheet: Any, part: str, seen: Look) -> Page:
    never = seen.uncalculated.get(part, frozenset())
    percent, uncalculated = set(), set()
    width = max((column for _, column in sheet._cells), default=0)
    filled: dict[int, list[Raw]] = {}
    for (row, column), cell in sheet._cells.items():
        if cell.value is None:
            if never and cell.coordinate in never:
                uncalculated.add((row - 1, column - 1))
            continue
        filled.setdefault(row - 1, [None] * width)[column - 1] = raw(cell.value)
        if type(cell.value) in (int, float) and cell.has_style and "%" in cell.number_format:
            percent.add((row - 1, column - 1))
    merged = [(r.min_row - 1, r.min_col - 1, r.max_row - 1, r.max_col - 1) for r in sheet.merged_cells.ranges]
    rows = tuple(tuple(filled.get(row, ())) for row in range(max(filled, default=-1) + 1))
    hidden = frozenset(n - 1 for n, dimension in sheet.row_dimensions.items() if dimension.hidden)
    return Page(
        sheet.title, rows, (), sheet.sheet_state != "visible", hidden & filled.keys(),
        frozenset(percent), frozenset(uncalculated), tuple(merged), _hidden_columns(sheet, width), _comments(sheet),
    )  # fmt: skip


def _hidden_columns(sheet: Any, width: int) -> frozenset[int]:
    """Positions of the hidden columns among those that hold something; one entry may stand for several."""
    spans = [(d.min or d.index, d.max or d.index) for d in sheet.column_dimensions.values() if d.hidden]
    numbers = [(first, last) for first, last in spans if isinstance(first, int) and isinstance(last, int)]
    return frozenset(n - 1 for first, last in numbers for n in range(first, min(last, width) + 1))


def _comments(sheet: Any) -> tuple[tuple[int, int, str], ...]:
    cells = (cell for _, cell in sorted(sheet._cells.items()) if cell.comment is not None)
    return tuple((c.row - 1, c.column - 1, " ".join(str(c.comment.text).split())[:200]) for c in cells)


def filled_rows(page: Page) -> Iterator[int]:
    """Positions of the rows that hold anything."""
    if isinstance(page.rows, (PlainRows, SheetRows)):
        yield from page.rows.filled()
        return
    for number, row in enumerate(page.rows):
        if any(cell is not None and (not isinstance(cell, str) or cell.strip()) for cell in row):
            yield number
