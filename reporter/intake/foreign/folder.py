"""One test as a folder: the field workbook for what is fixed, logger files for the readings, mappings to read them."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from reporter.errors import RecordError
from reporter.intake.foreign.apply import ForeignReadings, apply_to_grid
from reporter.intake.foreign.grid import Grid, read_grid
from reporter.intake.foreign.join import join
from reporter.intake.foreign.mapping import ENDING, Mapping, differences, load
from reporter.intake.foreign.tables import find_tables
from reporter.intake.foreign.titles import strangers
from reporter.intake.guard import look_at
from reporter.intake.jsonrecord import looks_like_json
from reporter.intake.read import ReadResult, read
from reporter.intake.rows import Filled, RowReader
from reporter.intake.sheets import find_sheet
from reporter.intake.workbook import sheet_parts
from reporter.paths import attachment_path
from reporter.problems import Grade, Place, Problem, problem
from reporter.record import Given, Readings, SourceFile
from reporter.synthetic import MARK, is_marked

#: Name of the optional list of files, and the endings of what is taken for a logger file without it.
MANIFEST = "folder.toml"
LOGGERS = (".csv", ".tsv", ".txt", ".xlsx", ".xlsm")
#: Sheets that only the field workbook has.
_FIXED = ("test", "channels", "runs")


@dataclass(slots=True)
class _Inputs:
    """The files of a folder by what they are."""

    workbook: Path
    loggers: tuple[Path, ...]
    mappings: tuple[Path, ...]


@dataclass(slots=True)
class _Loggers:
    """The logger files of a test: read when the field workbook's channels are known."""

    grids: Sequence[Grid]
    mappings: Sequence[Mapping]
    problems: list[Problem] = field(default_factory=list)
    read: list[ForeignReadings] = field(default_factory=list)

    def __call__(self, channels: Sequence[Filled], reader: RowReader, test: dict[str, Any]) -> Readings | None:
        """The readings of all logger files, by the channels of the field workbook; None where something stops."""
        for grid in self.grids:
            fitting = [m for m in self.mappings if grid.pages and not differences(m, grid)]
            if len(fitting) == 1 or len(self.mappings) == 1:
                mapping = fitting[0] if fitting else self.mappings[0]
                found = apply_to_grid(grid, mapping, day=reader.day)
                self.read.append(found)
                self.problems += [*found.problems, *strangers(grid, find_tables(grid), test, mapping.titles)]
            elif not grid.pages:
                self.problems += grid.problems
            else:
                self.problems.append(_no_mapping(grid, self.mappings, fitting))
        if self._stops():
            return None
        _mark(self.grids, test)
        joined, problems = join(self.read, channels, test)
        self.problems += problems
        return None if self._stops() else joined

    def _stops(self) -> bool:
        return any(p.grade is Grade.UNREADABLE for p in self.problems)


def _mark(grids: Sequence[Grid], test: dict[str, Any]) -> None:
    """Say on the sheet Test that readings are those of a rehearsal, where a logger file bears its mark."""
    entered = test.get("synthetic")
    if entered is not None and str(entered.value).casefold().startswith("yes"):
        return
    for grid in grids:
        if is_marked(grid.source.content):
            said = f"yes, {MARK}, as the file {grid.source.name} says"
            test["synthetic"] = Given(said, Place(grid.source.name), said)
            return


def _no_mapping(grid: Grid, mappings: Sequence[Mapping], fitting: Sequence[Mapping]) -> Problem:
    if len(fitting) > 1:
        found = f"the mappings {', '.join(repr(m.name) for m in fitting)} both fit"
    else:
        said = [f"{m.name!r}: {'; '.join(differences(m, grid))}" for m in mappings]
        found = " / ".join(said) or "no mapping in the folder"
    return problem("mapping-missing", Place(grid.source.name), found)


def read_folder(path: str | Path, mapping: str | Path | None = None) -> ReadResult:
    """Read a folder as one test.

    Parameters
    ----------
    path
        A folder with one field workbook or JSON record, logger files, and mappings (``*.map.toml``); the file
        ``folder.toml`` may name them.
    mapping
        A mapping that wins over those of the folder.

    Returns
    -------
    ReadResult
        The record with every input among its sources, and what was understood of each logger file.
    """
    folder = Path(path)
    inputs = _inputs(folder)
    if isinstance(inputs, Problem):
        return ReadResult(None, (inputs,))
    if not inputs.loggers:
        return read(inputs.workbook)
    mappings, problems = [], []
    files = inputs.mappings if mapping is None else (Path(mapping),)
    for file in files:
        try:
            mappings.append(load(file))
        except RecordError as error:
            problems.append(problem("mapping-unreadable", Place(file.name), error.message))
    if problems:
        return ReadResult(None, tuple(problems))
    loggers = _Loggers([read_grid(file) for file in inputs.loggers], mappings)
    result = read(inputs.workbook, series=loggers)
    understood = tuple(f"{found.report.file}: {line}" for found in loggers.read for line in found.report.lines())
    record = result.record
    if record is not None:
        sources = [record.source, *(grid.source for grid in loggers.grids), *map(_source, files)]
        record = replace(record, sources=tuple(sources))
    grades = list(Grade)
    everything = sorted((*result.problems, *loggers.problems), key=lambda p: grades.index(p.grade))
    return ReadResult(record, tuple(everything), understood)


def _source(file: Path) -> SourceFile:
    content = file.read_bytes()
    return SourceFile(file.name, hashlib.sha256(content).hexdigest(), len(content), content)


# ---- which file is what ---------------------------------------------------------------------------------


def _inputs(folder: Path) -> _Inputs | Problem:
    """The files of a folder, by its list of files or by what they hold."""
    place = Place(folder.resolve().name)
    try:
        if (folder / MANIFEST).is_file():
            return _listed(folder, tomllib.loads((folder / MANIFEST).read_text(encoding="utf-8")))
        files = sorted(f for f in folder.iterdir() if f.is_file() and not f.name.startswith(("~$", ".")))
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as error:
        return problem("folder-inputs", place, str(error))
    mappings = tuple(f for f in files if f.name.endswith(ENDING))
    fixed = [f for f in files if f.suffix.lower() in (".json", ".xlsx", ".xlsm") and _is_record(f)]
    if len(fixed) != 1:
        names = ", ".join(f.name for f in fixed) or "none"
        return problem("folder-inputs", place, f"field workbooks or records: {names}")
    loggers = tuple(f for f in files if f.suffix.lower() in LOGGERS and f not in fixed)
    return _Inputs(fixed[0], loggers, mappings)


def _listed(folder: Path, data: dict[str, Any]) -> _Inputs | Problem:
    """The files that the list of the folder names."""
    place = Place(MANIFEST)
    names = {"workbook": [data.get("workbook")], "readings": data.get("readings", []), "mappings": data.get("mappings")}
    unknown = sorted(set(data) - set(names))
    if unknown:
        return problem("folder-inputs", place, f"the entry {unknown[0]!r}", expected="workbook, readings, mappings")
    if names["mappings"] is None:
        names["mappings"] = sorted(f.name for f in folder.iterdir() if f.name.endswith(ENDING))
    found: dict[str, list[Path]] = {}
    for kind, wanted in names.items():
        for name in wanted if isinstance(wanted, list) else [wanted]:
            file = attachment_path(folder, name) if isinstance(name, str) else None
            if file is None:
                return problem(
                    "folder-inputs", place, f"{kind} = {name!r}", expected="the name of a file in the folder"
                )
            found.setdefault(kind, []).append(file)
    return _Inputs(found["workbook"][0], tuple(found.get("readings", ())), tuple(found.get("mappings", ())))


def _is_record(file: Path) -> bool:
    """Whether a file is a field workbook or a record in JSON, by its content."""
    content = file.read_bytes()
    if file.suffix.lower() == ".json":
        return looks_like_json(content)
    if look_at(content).stops:
        return False
    try:
        names = sheet_parts(content).values()
    except Exception:  # a damaged file is no field workbook; reading it says why
        return False
    known = {spec.attr for name in names if (spec := find_sheet(name)) is not None}
    return all(attr in known for attr in _FIXED)
