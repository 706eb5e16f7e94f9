"""One input, one task: what it prints and its exit code, whatever goes wrong inside."""

from __future__ import annotations

import traceback
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

from reporter.cli import OK, UNREADABLE, UNWRITTEN, WITHHELD
from reporter.errors import OutputError, UnreadableError
from reporter.outcome import Bearing, Outcome
from reporter.problems import Grade, Problem

if TYPE_CHECKING:
    from reporter.output.renderer import PageRenderer


@dataclass(frozen=True, slots=True)
class Task:
    """The end of one task: text for the terminal, exit code, counts for the overview."""

    name: str
    text: str
    code: int
    words: str
    withheld: int = 0
    notes: int = 0


@dataclass(frozen=True, slots=True)
class ReportOptions:
    """How a report is made: a firm's templates, the logged readings too, the mapping of logger files, what lays
    the pages out."""

    templates: Path | None = None
    minute_data: bool = False
    mapping: Path | None = None
    renderer: PageRenderer | None = None


def check_input(path: Path, mapping: Path | None = None) -> Task:
    """Read and assess an input and say what was found."""
    from reporter.api import assessed, read_input
    from reporter.terminal import summary

    understood: Sequence[str] = ()
    try:
        found = read_input(path, mapping)
        understood = found.understood
        outcome = assessed(path, found)
        return _assessed(path, outcome, _understood(understood) + summary(outcome), "assessed")
    except UnreadableError as error:
        return _unreadable(path, error.problems, _understood(understood))
    except Exception as error:  # a fault of the program must not stop the other inputs
        return _stopped(path, error)


def _understood(lines: Sequence[str]) -> str:
    """What was understood of logger files, before what was found."""
    from reporter.terminal_text import paragraph, section

    return section("Logger files as understood", [paragraph(line) for line in lines]) + "\n\n" if lines else ""


def report_input(path: Path, out: Path, issued: datetime, options: ReportOptions) -> Task:
    """Write the three files of an input and say in a few lines what was found."""
    from reporter.api import report
    from reporter.terminal_brief import brief

    try:
        made = report(
            path,
            out,
            issued=issued,
            templates=options.templates,
            minute_data=options.minute_data,
            mapping=options.mapping,
            renderer=options.renderer,
        )
        files = ", ".join(file.name for file in made.files)
        return _assessed(path, made.outcome, f"{brief(made.outcome)}\n  Written: {files}", "written")
    except UnreadableError as error:
        return _unreadable(path, error.problems)
    except OutputError as error:
        return Task(path.name, f"{path.name}: {error}", UNWRITTEN, "not written")
    except Exception as error:  # a fault of the program must not stop the other inputs
        return _stopped(path, error)


#: What the overview says of an input, by the strongest bearing of its problems on its results.
_BEARINGS = {
    Bearing.WITHHELD: "a result is withheld",
    Bearing.NOT_COUNTED: "a run is not counted",
    Bearing.BEARS: "a problem bears on a result",
}


def _assessed(path: Path, outcome: Outcome, text: str, done: str) -> Task:
    bearings = [outcome.bearing(problem) for problem in outcome.problems]
    strongest = next((words for bearing, words in _BEARINGS.items() if bearing in bearings), "nothing is withheld")
    code = WITHHELD if any(bearing in _BEARINGS for bearing in bearings) else OK
    withheld, notes = bearings.count(Bearing.WITHHELD), bearings.count(Bearing.NOTE)
    return Task(path.name, text, code, f"{done}; {strongest}", withheld, notes)


def _unreadable(path: Path, problems: Sequence[Problem], before: str = "") -> Task:
    from reporter.terminal import problems_text

    count = _count(problems, Grade.UNREADABLE)
    head = f"{path.name} cannot be read: {count} problem(s)\n"
    return Task(path.name, before + head + problems_text(problems), UNREADABLE, "cannot be read", count)


def _stopped(path: Path, error: Exception) -> Task:
    """An input that met a fault of the program: what it was, and where, in one line that can be sent on."""
    steps = traceback.extract_tb(error.__traceback__)
    where = ", ".join(f"{Path(step.filename).name} line {step.lineno}" for step in steps[-2:])
    text = f"{path.name}: stopped by an error of the program\n  {type(error).__name__}: {error} ({where})"
    return Task(path.name, text, UNREADABLE, "stopped by an error")


def _count(problems: Sequence[Problem], grade: Grade) -> int:
    return sum(1 for problem in problems if problem.grade is grade)


def overview_of(tasks: Sequence[Task]) -> str:
    """The short overview that closes a run of several inputs."""
    from reporter.terminal import overview

    return overview([(task.name, task.words, (task.withheld, task.notes)) for task in tasks])
