"""Problems as values: what is wrong with an input, where, and what to do about it.

The catalogue `tables/problem_codes.toml` holds one row per code: its grade, title, what is expected and
the remedy.  Code adds the place and what was found.  Grades: see `Grade`.
"""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from enum import Enum
from functools import cache
from typing import Any

from reporter.resources import table_text


class Grade(Enum):
    """How much a problem stops."""

    UNREADABLE = "unreadable"
    BLOCKS = "blocks a result"
    NOTE = "note"


@dataclass(frozen=True, slots=True)
class Place:
    """Where a thing stands in the input: file, sheet, cell or range, and the column's name."""

    file: str = ""
    sheet: str = ""
    cell: str = ""
    field: str = ""

    def text(self) -> str:
        """The place in one line, e.g. ``boiler.xlsx, Runs!C5 (End)``."""
        where = f"{self.sheet}!{self.cell}" if self.sheet and self.cell else self.sheet or self.cell
        parts = ", ".join(part for part in (self.file, where) if part)
        return f"{parts} ({self.field})" if self.field else parts

    def as_dict(self) -> dict[str, str]:
        """The place as plain data, for JSON."""
        return {"file": self.file, "sheet": self.sheet, "cell": self.cell, "field": self.field}


@dataclass(frozen=True, slots=True)
class Code:
    """One row of the catalogue of problems."""

    name: str
    grade: Grade
    title: str
    expected: str
    remedy: str


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing wrong: code, grade, place, what was found, what was expected, what to do."""

    code: str
    grade: Grade
    place: Place
    title: str
    found: str
    expected: str
    remedy: str
    concerns: tuple[str, ...] = ()

    def text(self) -> str:
        """The problem in one paragraph of plain text."""
        where = self.place.text()
        head = f"{where}: {self.title}" if where else self.title
        found = f" Found: {self.found}." if self.found else ""
        return f"{head}.{found} Expected: {self.expected}. To do: {self.remedy}. [{self.code}]"

    def as_dict(self) -> dict[str, Any]:
        """The problem as plain data, for JSON."""
        return {
            "code": self.code,
            "grade": self.grade.value,
            "title": self.title,
            **self.place.as_dict(),
            "found": self.found,
            "expected": self.expected,
            "remedy": self.remedy,
            "concerns": list(self.concerns),
        }


@cache
def catalogue() -> dict[str, Code]:
    """All codes by name."""
    rows = tomllib.loads(table_text("problem_codes.toml"))
    return {
        name: Code(name, Grade(row["grade"]), row["title"], row["expected"], row["remedy"])
        for name, row in rows.items()
    }


def problem(
    code: str,
    place: Place | None = None,
    found: str = "",
    *,
    expected: str = "",
    remedy: str = "",
    concerns: tuple[str, ...] = (),
) -> Problem:
    """A problem of the catalogue at a place; `expected` and `remedy` replace the catalogue's words.

    `concerns` holds ledger keys, or prefixes of keys, of the results it touches.
    """
    row = catalogue()[code]
    return Problem(
        code=code,
        grade=row.grade,
        place=place or Place(),
        title=row.title,
        found=found,
        expected=expected or row.expected,
        remedy=remedy or row.remedy,
        concerns=concerns,
    )
