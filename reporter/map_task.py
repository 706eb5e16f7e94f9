"""What `fluebook map` does: look at a logger's file, say how it reads it and why, ask, and save the mapping."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from reporter.cli import OK, UNREADABLE, UNWRITTEN, USAGE, WITHHELD
from reporter.errors import RecordError
from reporter.intake.foreign.answers import questions_toml, read_answers
from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.grid import read_grid
from reporter.intake.foreign.look import Look, look, mapping_of
from reporter.intake.foreign.mapping import ENDING, Mapping
from reporter.intake.foreign.mapping import save as save_mapping
from reporter.intake.foreign.model import Question, together
from reporter.intake.foreign.process_log import read_process_file
from reporter.intake.foreign.resent import difference
from reporter.intake.series_notes import notes_of_file
from reporter.problems import Grade, Problem
from reporter.tasks import Task
from reporter.terminal import problems_text
from reporter.terminal_text import paragraph, section


def map_file(
    file: Path,
    name: str = "",
    *,
    save: Path | None = None,
    questions: Path | None = None,
    answers: Path | None = None,
    against: Path | None = None,
) -> Task:
    """Look at a file and say what it is.

    Parameters
    ----------
    file
        The logger's file.
    name
        Name of the mapping; the name of the file where it is empty.
    save, questions
        Where the mapping, and where the open questions are written.
    answers
        A file of questions with its answers filled in.
    against
        The file as it was sent before: what changed is said first.

    Returns
    -------
    Task
        Code 0 where no question is open, 1 where one is, 2 where the answers cannot be read, 3 where the file
        cannot be read, 4 where a file cannot be written.
    """
    try:
        given = read_answers(answers) if answers is not None else {}
    except RecordError as error:
        return Task(file.name, f"fluebook: {error}", USAGE, "not looked at")
    found = look(file, given)
    if against is not None and not (before := read_grid(against)).pages:
        text = f"{against.name} cannot be read\n{problems_text(before.problems)}"
        return Task(file.name, text, UNREADABLE, "cannot be read", len(before.problems))
    if found.mapping is None and not found.questions:
        text = f"{file.name} cannot be mapped\n{problems_text(found.problems)}"
        return Task(file.name, text, UNREADABLE, "cannot be read", len(found.problems))
    try:
        return _said(found, name, save, (file, answers, questions), _changes(found, against))
    except OSError as error:
        return Task(file.name, f"fluebook: {error.filename}: {error.strerror}", UNWRITTEN, "not written")


def _changes(found: Look, against: Path | None) -> str:
    """What changed since a file was sent before; nothing where none is given."""
    if against is None:
        return ""
    lines = difference(read_grid(against), found.grid).lines()
    return section(f"Against {against.name}", [paragraph(line) for line in lines])


def _said(
    found: Look, name: str, save: Path | None, asking: tuple[Path, Path | None, Path | None], changes: str
) -> Task:
    file, questions = found.grid.source, asking[2]
    parts = [part for part in (file.name, changes) if part]
    parts.append(section("As read", [paragraph(line) for line in found.evidence]))
    if found.questions:
        asked = together(found.questions)
        parts.append(section("Questions", [_asked(question) for question in asked]))
        parts.append(_to_answer(*asking))
        if questions is not None:
            questions.write_text(questions_toml(file.name, asked, found.answers), encoding="utf-8")
        return Task(file.name, "\n\n".join(parts), WITHHELD, "questions are open", len(asked))
    mapping = mapping_of(found, name=name)
    lines, problems = _by_mapping(found, mapping)
    parts.append(section("By this mapping", [paragraph(line) for line in lines]))
    shown = [p for p in problems if not (p.code == "not-a-time" and mapping.time.day)]
    if shown:
        parts.append(problems_text(shown))
    if save is not None:
        save_mapping(mapping, save)
        parts.append(f"Written: {save.name} (shape {mapping.fingerprint})")
    stops = any(p.grade is Grade.UNREADABLE for p in shown)
    return Task(file.name, "\n\n".join(parts), UNREADABLE if stops else OK, "mapped")


def _to_answer(file: Path, answers: Path | None, questions: Path | None) -> str:
    """The commands that answer the questions about a file; answers given before are kept."""
    sheet = Path("answers.toml") if questions is None else questions
    if questions is not None:
        ask = f"Written: {sheet.name}"
    else:
        before = "" if answers is None else f" --answers {answers}"
        sheet = sheet if answers is None else answers
        ask = f"To answer:\n  fluebook map {file}{before} --questions {sheet}"
    then = f"fluebook map {file} --answers {sheet} --save {file.with_suffix(ENDING)}"
    return f"{ask}\nFill that file in, then:\n  {then}"


def _by_mapping(found: Look, mapping: Mapping) -> tuple[Sequence[str], Sequence[Problem]]:
    """What the file gives by the mapping: in words, and the problems."""
    lines: list[str] = []
    problems: list[Problem] = []
    if mapping.has("reading"):
        made = apply_to_grid(found.grid, mapping)
        lines += made.report.lines()
        problems += [*made.problems, *notes_of_file(made)]
    if mapping.has("process"):
        log = read_process_file(found.grid, mapping)
        lines += log.lines
        problems += log.problems
    return lines, problems


def _asked(question: Question) -> str:
    where = question.place.text()
    lines: Sequence[str] = [
        paragraph(f"{question.key}: {question.asks}"),
        paragraph(f"Found:    {f'{where}: ' if where else ''}{question.found}", indent=4, hang=14),
        *(
            paragraph(f"Answer:   {option.answer}{f' ({option.meaning})' if option.meaning else ''}", indent=4, hang=14)
            for option in question.options
        ),
    ]
    return "\n".join(lines)
