"""What the command line and other programs call: read, assess, write.

read      a field workbook or a JSON record becomes a `Record`, or problems that name each cell
assess    the record becomes an `Outcome`: ledger, criteria, balance, averages, comparisons
report    read, assess and write JSON, workbook and PDF, in this order
"""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING

from reporter.assess.pipeline import assess
from reporter.errors import UnreadableError
from reporter.intake import ReadResult, read
from reporter.outcome import Outcome
from reporter.problems import Problem
from reporter.version import VERSION

if TYPE_CHECKING:
    from reporter.output.renderer import PageRenderer

__all__ = [
    "ReadResult",
    "Report",
    "assess",
    "issue_time",
    "problems_of",
    "read",
    "read_input",
    "report",
    "report_files",
]


@dataclass(frozen=True, slots=True)
class Report:
    """What was written for one input: paths in the order written, and the outcome they show."""

    name: str
    files: tuple[Path, ...]
    outcome: Outcome


def read_input(path: str | Path, mapping: str | Path | None = None) -> ReadResult:
    """Read a field workbook, a record in JSON, or a folder of one test with its logger files.

    `mapping` reads the logger files of a folder, in place of the mappings that stand there.
    """
    if Path(path).is_dir():
        from reporter.intake.foreign.folder import read_folder

        return read_folder(path, mapping)
    return read(path)


def name_of(path: Path) -> str:
    """The name that the results of an input get: of a file without its ending, of a folder as it is."""
    return path.resolve().name if path.is_dir() else path.stem


def problems_of(path: str | Path) -> tuple[Problem, ...]:
    """All problems of an input: those of reading it and, where it can be read, those of its assessment."""
    found = read_input(path)
    if found.record is None:
        return found.problems
    return assess(found.record).after(found.problems).problems


def opened(path: str | Path, mapping: str | Path | None = None) -> Outcome:
    """Read and assess an input.

    Raises
    ------
    UnreadableError
        The input cannot be read; the error carries every problem.
    """
    return assessed(path, read_input(path, mapping))


def assessed(path: str | Path, found: ReadResult) -> Outcome:
    """Assess what was read of an input (`UnreadableError` where it cannot be read)."""
    if found.record is None:
        raise UnreadableError(f"{Path(path).name} cannot be read", found.problems)
    return assess(found.record).after(found.problems)


def issue_time(given: str | None = None) -> datetime:
    """The issue time: as given (ISO 8601), else SOURCE_DATE_EPOCH, else now; in UTC, whole seconds.

    Raises
    ------
    ValueError
        The text is not a date and time, or SOURCE_DATE_EPOCH no count of seconds; the message says which.
    """
    epoch = os.environ.get("SOURCE_DATE_EPOCH")
    try:
        if given is not None:
            moment = datetime.fromisoformat(given)
            return (moment if moment.tzinfo is not None else moment.replace(tzinfo=UTC)).astimezone(UTC)
        if epoch is not None:
            return datetime.fromtimestamp(int(epoch), UTC)
    except (ValueError, OverflowError, OSError):
        if given is not None:
            raise ValueError(f"{given!r} is not an ISO date and time") from None
        raise ValueError(f"SOURCE_DATE_EPOCH {epoch!r} is not a count of seconds") from None
    return datetime.now(UTC).replace(microsecond=0)


def report_files(
    outcome: Outcome,
    issued: datetime,
    *,
    folder: Path | None = None,
    templates: Path | None = None,
    minute_data: bool = False,
    renderer: PageRenderer | None = None,
) -> dict[str, bytes]:
    """The three result files in memory, by suffix: ``.json``, ``.xlsx``, ``.pdf``, in this order.

    Parameters
    ----------
    outcome
        The assessed test.
    issued
        Issue time, printed and used for every date inside the files.
    folder
        Where the documents of the Attachments sheet lie.
    templates
        A firm's folder that overlays the shipped templates.
    minute_data
        Print the minute readings too.
    renderer
        Lays the pages out; in this process where none is given.
    """
    from reporter.output.pdf import PdfOptions, enclosures, pages_of
    from reporter.output.phrases import load_phrases
    from reporter.output.renderer import Renderer

    stem = Path(outcome.record.source.name).stem
    own = ".results.json" if outcome.record.source.name.lower().endswith(".json") else ".json"
    names = f"{stem}{own}", f"{stem}.results.xlsx"
    options = PdfOptions(templates=templates, folder=folder, minute_data=minute_data)
    with _collector_paused(at_end=renderer is None):
        desk = Renderer() if renderer is None else renderer
        desk.lay_out(pages_of(outcome, names, issued=issued, version=VERSION, options=options), templates)
        from reporter.output.data import to_json  # loaded while another process lays the pages out
        from reporter.output.workbook import write_workbook

        phrases = load_phrases(templates)
        data = to_json(outcome, issued, VERSION)
        workbook = write_workbook(outcome, issued=issued, version=VERSION, phrases=phrases)
        pdf = desk.finish(enclosures(outcome, dict(zip(names, (data, workbook), strict=True)), phrases))
    return {".json": data, ".xlsx": workbook, ".pdf": pdf}


@contextmanager
def _collector_paused(*, at_end: bool) -> Iterator[None]:
    """No garbage collection while a document is made: a fifth of the time for nothing found.

    It is made up for at the end where the boxes of the document were laid out here.
    """
    import gc

    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()
            if at_end:
                gc.collect()


def report(
    path: str | Path,
    out: str | Path,
    *,
    issued: datetime | None = None,
    templates: str | Path | None = None,
    minute_data: bool = False,
    mapping: str | Path | None = None,
    renderer: PageRenderer | None = None,
) -> Report:
    """Read, assess and write NAME.json, NAME.xlsx and NAME.pdf into a folder.

    All three are made before the first is written; they appear together, each whole, or none does.

    Raises
    ------
    UnreadableError
        The input cannot be read.
    OutputError
        A file cannot be written, or would overwrite the input.
    """
    from reporter.errors import OutputError
    from reporter.output.files import write_all

    source, target = Path(path), Path(out)
    folder = source if source.is_dir() else source.parent
    places = {suffix: target / f"{name_of(source)}{suffix}" for suffix in (".json", ".xlsx", ".pdf")}
    existing = [place for place in places.values() if place.exists()]
    inputs = [file for file in source.iterdir() if file.is_file()] if source.is_dir() else [source]
    if any(file.exists() and place.samefile(file) for place in existing for file in inputs):
        raise OutputError("the results would overwrite the input; choose another folder", source.name)
    outcome = opened(source, mapping)
    files = report_files(
        outcome,
        issued or issue_time(),
        folder=folder,
        templates=None if templates is None else Path(templates),
        minute_data=minute_data,
        renderer=renderer,
    )
    write_all({places[suffix]: content for suffix, content in files.items()})
    return Report(name_of(source), tuple(places[suffix] for suffix in files), outcome)
