"""One test as a folder: the field workbook for what is fixed, logger files and plant logs, mappings to read them."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from reporter.collecting import without_collecting
from reporter.errors import RecordError
from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.corrections import Correction, corrections
from reporter.intake.foreign.grid import Grid, read_grid
from reporter.intake.foreign.join import join, zone_words
from reporter.intake.foreign.mapping import ENDING, Mapping, differences, differences_of, load
from reporter.intake.foreign.process_log import ProcessFile, process_of, read_process_file
from reporter.intake.foreign.tables import Table, find_tables
from reporter.intake.foreign.titles import strange_folder, strangers
from reporter.intake.guard import names_may_be_read
from reporter.intake.jsonrecord import looks_like_json
from reporter.intake.read import ReadResult, read
from reporter.intake.rows import Filled, RowReader
from reporter.intake.sheets import find_sheet
from reporter.intake.workbook import sheet_parts
from reporter.paths import attachment_path
from reporter.problems import Grade, Place, Problem, problem
from reporter.record import Given, ProcessLog, Readings, SourceFile
from reporter.synthetic import MARK, is_marked

#: Name of the optional list of files, and the endings of what is taken for a logger file without it.
MANIFEST = "folder.toml"
LOGGERS = (".csv", ".tsv", ".tab", ".txt", ".dat", ".asc", ".prn", ".log", ".xls", ".xlsx", ".xlsm")
#: Sheets that only the field workbook has.
_FIXED = ("test", "channels", "runs")


@dataclass(slots=True)
class _Inputs:
    """The files of a folder by what they are, and the corrections of their clocks by file."""

    workbook: Path
    loggers: tuple[Path, ...]
    mappings: tuple[Path, ...]
    clocks: dict[str, Correction] = field(default_factory=dict)
    others: tuple[str, ...] = ()


@dataclass(slots=True)
class _Files:
    """The logger files and plant logs of a test: read when the field workbook's channels are known."""

    grids: Sequence[Grid]
    mappings: Sequence[Mapping]
    clocks: dict[str, Correction]
    folder: str = ""
    problems: list[Problem] = field(default_factory=list)
    understood: list[str] = field(default_factory=list)
    done: list[str] = field(default_factory=list)
    logs: list[ProcessFile] = field(default_factory=list)
    chosen: list[tuple[Grid, Mapping, Sequence[Table]]] = field(init=False)

    def __post_init__(self) -> None:
        self.chosen = []
        for grid in self.grids:
            tables = find_tables(grid)
            fitting = [m for m in self.mappings if grid.pages and not differences_of(m, grid, tables)]
            if len(fitting) == 1 or len(self.mappings) == 1:
                self.chosen.append((grid, fitting[0] if fitting else self.mappings[0], tables))
            elif not grid.pages:
                self.problems += grid.problems
            else:
                self.problems.append(_no_mapping(grid, self.mappings, fitting))

    @property
    def has_readings(self) -> bool:
        """Whether a file of the folder holds readings, as far as that is known."""
        known = any(mapping.has("reading") for _, mapping, _ in self.chosen)
        return known or len(self.chosen) < len(self.grids)

    def readings(self, channels: Sequence[Filled], reader: RowReader, test: dict[str, Any]) -> Readings | None:
        """The readings of all logger files, by the channels of the field workbook; None where something stops."""
        made = []
        serials = [text for channel in channels if (text := channel.text("serial_number"))]
        titles = [title for mapping in self.mappings for title in mapping.titles]
        self.problems += strange_folder(self.folder, test, titles)
        for grid, mapping, tables in self.chosen:
            if mapping.has("reading"):
                found = apply_to_grid(grid, mapping, day=reader.day, tables=tables)
                self.problems += [*found.problems, *strangers(grid, tables, test, mapping.titles, serials)]
                self.understood += [f"{found.report.file}: {line}" for line in found.report.lines()]
                made.append(replace(found, readings=self.corrected(grid.source.name, found.readings)))
        if self._stops():
            return None
        _mark(self.grids, test)
        joined = join(made, channels, test)
        self.problems += joined.problems
        self.done += joined.done
        return None if self._stops() else joined.readings

    def corrected(self, file: str, readings: Readings) -> Readings:
        """Readings by the corrected clock of their file."""
        correction = self.clocks.get(file)
        if correction is None:
            return readings
        self.done.append(correction.words())
        return correction.of_readings(readings)

    def process(self, own: ProcessLog, reader: RowReader, test: dict[str, Any]) -> ProcessLog:
        """The process log of the sheet Process and of the plant logs of the folder."""
        for grid, mapping, tables in self.chosen:
            if mapping.has("process"):
                found = read_process_file(grid, mapping, day=reader.day)
                self.problems += found.problems
                self.problems += [] if mapping.has("reading") else strangers(grid, tables, test, mapping.titles)
                if found.log.times and (words := zone_words(mapping.time.zone, found.log.times[0], test)):
                    self.problems.append(problem("mapping-against-channels", Place(found.name), words))
                self.understood += [f"{found.name}: {line}" for line in found.lines]
                correction = self.clocks.get(found.name)
                if correction is not None:
                    self.done += [] if mapping.has("reading") else [correction.words()]
                    found = replace(found, log=correction.of_process(found.log))
                self.logs.append(found)
        log, problems = process_of(own, self.logs)
        self.problems += problems
        return log

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


@without_collecting()
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
    if not inputs.loggers and not inputs.clocks:
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
    beside = _Files([read_grid(file) for file in inputs.loggers], mappings, inputs.clocks, folder.resolve().name)
    result = read(inputs.workbook, series=beside)
    record = result.record
    if any(p.grade is Grade.UNREADABLE for p in beside.problems):
        record = None
    if record is not None:
        manifest = [folder / MANIFEST] if inputs.clocks else []
        sources = [record.source, *(grid.source for grid in beside.grids), *map(_source, (*files, *manifest))]
        record = replace(record, sources=tuple(sources), prepared=tuple(beside.done))
    grades = list(Grade)
    everything = sorted((*result.problems, *beside.problems), key=lambda p: grades.index(p.grade))
    others = (f"not read: {', '.join(inputs.others)}",) if inputs.others else ()
    return ReadResult(record, tuple(everything), (*beside.understood, *beside.done, *others))


def _source(file: Path) -> SourceFile:
    content = file.read_bytes()
    return SourceFile(file.name, hashlib.sha256(content).hexdigest(), len(content), content)


# ---- which file is what ---------------------------------------------------------------------------------


def _inputs(folder: Path) -> _Inputs | Problem:
    """The files of a folder, by its list of files or by what they hold, with the corrections of its clocks."""
    place = Place(folder.resolve().name)
    try:
        listed = (folder / MANIFEST).is_file()
        data = tomllib.loads((folder / MANIFEST).read_text(encoding="utf-8")) if listed else {}
        clocks = corrections(data)
        made = _listed(folder, data) if set(data) - {"clock"} else _found(folder, place)
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as error:
        return problem("folder-inputs", place, str(error))
    except ValueError as error:
        expected = "file, add_seconds (a number within a day) and said_by in each [[clock]], each file once"
        return problem("folder-inputs", Place(MANIFEST), str(error), expected=expected)
    if isinstance(made, Problem):
        return made
    known = {made.workbook.name, *(file.name for file in made.loggers)}
    for file in clocks:
        if file not in known:
            expected = f"a file of the test: {', '.join(sorted(known))}"
            return problem("folder-inputs", Place(MANIFEST), f"[[clock]]: file = {file!r}", expected=expected)
    return replace(made, clocks=clocks)


def _found(folder: Path, place: Place) -> _Inputs | Problem:
    """The files of a folder by what they hold."""
    files = sorted(f for f in folder.iterdir() if f.is_file() and not f.name.startswith(("~$", ".")))
    mappings = tuple(f for f in files if f.name.endswith(ENDING))
    fixed = [f for f in files if f.suffix.lower() in (".json", ".xlsx", ".xlsm") and _is_record(f)]
    if len(fixed) != 1:
        names = ", ".join(f.name for f in fixed) or "none"
        return problem("folder-inputs", place, f"field workbooks or records: {names}")
    loggers = tuple(f for f in files if f.suffix.lower() in LOGGERS and f not in fixed)
    others = [f.name for f in files if f not in (*loggers, fixed[0]) and f.suffix.lower() != ".toml"]
    return _Inputs(fixed[0], loggers, mappings, others=tuple(others))


def _listed(folder: Path, data: dict[str, Any]) -> _Inputs | Problem:
    """The files that the list of the folder names."""
    place = Place(MANIFEST)
    names = {"workbook": [data.get("workbook")], "readings": data.get("readings", []), "mappings": data.get("mappings")}
    unknown = sorted(set(data) - set(names) - {"clock"})
    if unknown:
        expected = "workbook, readings, mappings, [[clock]]"
        return problem("folder-inputs", place, f"the entry {unknown[0]!r}", expected=expected)
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
    if not names_may_be_read(content):
        return False
    try:
        names = sheet_parts(content).values()
    except Exception:  # a damaged file is no field workbook; reading it says why
        return False
    known = {spec.attr for name in names if (spec := find_sheet(name)) is not None}
    return all(attr in known for attr in _FIXED)
