"""Problems are gathered while a file is read, so that all of them are reported together."""

from __future__ import annotations

from collections import Counter

from reporter.problems import Grade, Place, Problem, problem

#: How many problems of one kind in one column are listed before they are only counted.
LISTED = 5


class Gathered:
    """The problems of one file, in the order they were met.

    Problems of one code in one column beyond the fifth are counted and said in the last one listed.
    """

    def __init__(self, file: str) -> None:
        self.file = file
        self._problems: list[Problem] = []
        self._count: Counter[tuple[str, str, str]] = Counter()

    def place(self, sheet: str = "", cell: str = "", field: str = "") -> Place:
        """A place in this file."""
        return Place(self.file, sheet, cell, field)

    def add(self, code: str, place: Place, found: str = "", *, expected: str = "", remedy: str = "") -> None:
        """Note a problem of the catalogue."""
        key = (code, place.sheet, place.field)
        self._count[key] += 1
        if self._count[key] <= LISTED:
            self._problems.append(problem(code, place, found, expected=expected, remedy=remedy))

    def has(self, code: str) -> bool:
        """Whether a problem of this code was gathered."""
        return any(p.code == code for p in self._problems)

    @property
    def unreadable(self) -> bool:
        """Whether any problem gathered so far makes the file unreadable."""
        return any(p.grade is Grade.UNREADABLE for p in self._problems)

    def all(self) -> tuple[Problem, ...]:
        """All problems, the grave ones first."""
        last = {(p.code, p.place.sheet, p.place.field): i for i, p in enumerate(self._problems)}
        said = []
        for i, p in enumerate(self._problems):
            key = (p.code, p.place.sheet, p.place.field)
            more = self._count[key] - LISTED
            if more > 0 and last[key] == i:
                found = f"{p.found}; and {more} more like it in this column"
                p = problem(p.code, p.place, found, expected=p.expected, remedy=p.remedy)
            said.append(p)
        order = list(Grade)
        return tuple(sorted(said, key=lambda p: order.index(p.grade)))
