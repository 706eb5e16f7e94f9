"""A file to a record: the one way in.  Bad input gives problems, never an exception."""

from __future__ import annotations

import errno
import hashlib
from dataclasses import dataclass
from pathlib import Path

from reporter.intake.build import Series, build
from reporter.intake.gather import Gathered
from reporter.intake.guard import Finding, Look, look_at
from reporter.intake.jsonrecord import looks_like_json, read_json
from reporter.intake.sheets import Kind, find_sheet
from reporter.intake.table import SheetTable, whole_text
from reporter.intake.workbook import read_workbook, sheet_parts
from reporter.paths import attachment_path
from reporter.problems import Problem
from reporter.record import Record, SourceFile

#: A larger file is not read into memory.
MAX_FILE = 100 << 20
#: A sheet of a form with more rows is not opened; only the series are longer.
MAX_FORM_ROWS = 20_000
#: Why a file cannot be opened, in words.
_WHY = {
    errno.ENOENT: "no file of this name",
    errno.EISDIR: "a folder",
    errno.EACCES: "a file that may not be read",
    errno.ENOTDIR: "a path that leads through a file",
    errno.ENAMETOOLONG: "a name that is too long",
}


@dataclass(frozen=True, slots=True)
class ReadResult:
    """What reading gave: record (None where unreadable), every problem, what was understood of logger files."""

    record: Record | None
    problems: tuple[Problem, ...]
    understood: tuple[str, ...] = ()


def read(path: str | Path, series: Series | None = None) -> ReadResult:
    """Read a field workbook or a JSON record from a file.

    Parameters
    ----------
    path
        A field workbook (.xlsx) or a record in JSON; what it is, is judged by its content.
    series
        Gives the readings where they stand in other files.

    Returns
    -------
    ReadResult
        Problems are values; nothing is raised for bad input.
    """
    file = Path(path)
    name = whole_text(file.name)
    gathered = Gathered(name)
    try:
        if file.exists() and not file.is_file():
            raise ValueError  # a device or a pipe may never end
        too_large = file.is_file() and file.stat().st_size > MAX_FILE
        with file.open("rb") as stream:
            content = b"" if too_large else stream.read(MAX_FILE + 1)
        if too_large or len(content) > MAX_FILE:
            gathered.add("zip-bomb", gathered.place(), f"a file of more than {MAX_FILE >> 20} MB")
            return ReadResult(None, gathered.all())
    except (OSError, ValueError) as error:
        words = _WHY.get(getattr(error, "errno", 0), "") or getattr(error, "strerror", "")
        found = words or "a file that cannot be opened"
        remedy = "look at the name and the folder, and whether the file may be read"
        gathered.add("not-a-workbook", gathered.place(), found, expected="a file that can be opened", remedy=remedy)
        return ReadResult(None, gathered.all())
    return _read(name, content, gathered, folder=file.parent, series=series)


def read_bytes(name: str, content: bytes) -> ReadResult:
    """Read a field workbook or a JSON record from its bytes; `name` is the base name that places say."""
    return _read(name, content, Gathered(name))


def _read(
    name: str, content: bytes, gathered: Gathered, *, folder: Path | None = None, series: Series | None = None
) -> ReadResult:
    source = SourceFile(name, hashlib.sha256(content).hexdigest(), len(content), content)
    tables = read_json(content, gathered) if looks_like_json(content) else _workbook(content, gathered)
    if not tables and gathered.unreadable:
        return ReadResult(None, gathered.all())
    record = build(tables, gathered, source, series)
    if record is not None and folder is not None:
        _look_for_attachments(record, folder, gathered)
    if record is None:
        return ReadResult(None, gathered.all())
    from reporter.intake.series_notes import notes_of_record

    return ReadResult(record, (*gathered.all(), *notes_of_record(record)))


def _workbook(content: bytes, gathered: Gathered) -> tuple[SheetTable, ...]:
    look = look_at(content)
    if look.macros:
        gathered.add("macro-enabled", gathered.place())
    if look.stops:
        for finding in look.findings:
            sheet = _sheet_of(finding, content)
            gathered.add(finding.code, gathered.place(sheet, finding.cell), finding.found)
        return ()
    if _long_forms(content, look, gathered):
        return ()
    return read_workbook(content, look, gathered)


def _long_forms(content: bytes, look: Look, gathered: Gathered) -> bool:
    """Whether a sheet that is no series has more rows than a person enters; it is then not opened."""
    long = {part: scan.all_rows for part, scan in look.scans.items() if scan.all_rows > MAX_FORM_ROWS}
    if not long:
        return False
    try:
        names = sheet_parts(content)
    except Exception:  # a damaged file is said when it is read
        return False
    for part, rows in long.items():
        spec = find_sheet(names.get(part, ""))
        if spec is not None and spec.kind in (Kind.ITEMS, Kind.TABLE):
            found, expected = f"{rows:,} rows", f"at most {MAX_FORM_ROWS:,} rows on a sheet that is no series"
            gathered.add("zip-bomb", gathered.place(names[part]), found, expected=expected)
    return gathered.unreadable


def _sheet_of(finding: Finding, content: bytes) -> str:
    """The name of the sheet a finding stands in, as far as the file says it."""
    if finding.code != "far-cell":
        return ""
    try:
        return sheet_parts(content).get(finding.sheet_part, "")
    except Exception:  # a hostile file may break anything; the finding itself stands
        return ""


def _look_for_attachments(record: Record, folder: Path, gathered: Gathered) -> None:
    for attachment in record.attachments:
        name = attachment.file.value
        if attachment_path(folder, name) is None:
            gathered.add("attachment-missing", attachment.file.place, name)
