"""What a look at an unknown file gives: questions with their options, and pieces of evidence."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from fnmatch import fnmatchcase

from reporter.problems import Place


@dataclass(frozen=True, slots=True)
class Option:
    """One answer to a question and what it would mean."""

    answer: str
    meaning: str = ""


@dataclass(frozen=True, slots=True)
class Question:
    """One thing that can be read two ways: a key, what is asked, what was found, the answers, the place."""

    key: str
    asks: str
    found: str
    options: tuple[Option, ...]
    place: Place = field(default_factory=Place)

    @property
    def answers(self) -> tuple[str, ...]:
        """The answers that are taken."""
        return tuple(option.answer for option in self.options)

    def text(self) -> str:
        """The question in one paragraph."""
        said = "; ".join(f"{o.answer!r}: {o.meaning}" if o.meaning else repr(o.answer) for o in self.options)
        where = self.place.text()
        return f"{self.key}: {self.asks} Found{f' in {where}' if where else ''}: {self.found}. Answers: {said}"


def together(questions: Sequence[Question]) -> tuple[Question, ...]:
    """Questions with those that ask the same of several columns as one, whose key answers them all.

    ``column.B.basis`` and ``column.C.basis`` become ``column.*.basis``; each may still be answered under its own key.
    """
    made: dict[str, list[Question]] = {}
    for question in questions:
        parts = question.key.split(".")
        alike = len(parts) == 3 and parts[0] == "column" and parts[2] in ("basis", "signal")
        made.setdefault(f"column.*.{parts[2]}" if alike else question.key, []).append(question)
    return tuple(
        same[0] if len(same) == 1 else replace(same[0], key=key, found=_likewise(same))
        for key, same in made.items()
        for same in ([same] if len({q.answers for q in same}) == 1 else [[q] for q in same])
    )


def _likewise(same: Sequence[Question]) -> str:
    columns = ", ".join(question.key.split(".")[1] for question in same[1:])
    return f"{same[0].found}; likewise column{'s' if len(same) > 2 else ''} {columns}"


class Desk:
    """Takes questions, looks for their answers, and keeps the evidence and what stays open.

    An answer may stand under the key itself or under a pattern such as ``column.*.basis``.
    """

    def __init__(self, answers: Mapping[str, str], file: str) -> None:
        self.answers = {key: value.strip() for key, value in answers.items() if value.strip()}
        self.file = file
        self.open: list[Question] = []
        self.evidence: list[str] = []

    def say(self, words: str) -> None:
        """Keep a piece of evidence."""
        self.evidence.append(words)

    def ask(self, key: str, asks: str, found: str, options: Sequence[Option], place: Place | None = None) -> str:
        """The answer to a question; empty where it is open, or where the answer is none of the options."""
        given = self.answers.get(key) or next(
            (value for pattern, value in self.answers.items() if fnmatchcase(key, pattern)), ""
        )
        chosen = next((o for o in options if o.answer.casefold() == given.casefold()), None)
        if chosen is not None:
            self.say(f"{key}: {chosen.answer}, as answered")
            return chosen.answer
        if given:
            found = f"{found}; the answer {given!r} is none of these"
        if all(question.key != key for question in self.open):
            self.open.append(Question(key, asks, found, tuple(options), place or Place(self.file)))
        return ""
