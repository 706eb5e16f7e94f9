"""Every error of the package, drawn once.

    FluebookError
    ├── UnreadableError      the input, or a needed part of it, cannot be read (carries all problems)
    ├── UnitError            a unit is unknown, or of the wrong dimension
    ├── BasisError           moisture, oxygen, standard condition or expressed-as do not fit
    ├── EquationError        an equation gave no finite real number
    ├── LedgerError          a key is taken, unknown or ill-formed, or an input has the wrong unit
    ├── RecordError          the record contradicts itself
    └── OutputError          a file could not be written

Faults of the input are values (`reporter.problems.Problem`), gathered and reported together; an error is
raised only where the caller can do nothing else.  Every error survives pickling, so that it can cross
from a worker process.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from reporter.problems import Problem


class FluebookError(Exception):
    """Base of all errors; `place` says where the cause stands, when known."""

    def __init__(self, message: str, place: str = "") -> None:
        super().__init__(message, place)
        self.message = message
        self.place = place

    def __str__(self) -> str:
        return f"{self.message} ({self.place})" if self.place else self.message


class UnreadableError(FluebookError):
    """No output is possible for this input; `problems` lists every reason found."""

    def __init__(self, message: str, problems: Sequence[Problem] = (), place: str = "") -> None:
        super().__init__(message, place)
        self.problems = tuple(problems)
        self.args = (message, self.problems, place)


class UnitError(FluebookError):
    """A unit is not known, or not of the dimension that is needed."""


class BasisError(FluebookError):
    """Two bases were mixed, or a needed basis is unknown."""


class EquationError(FluebookError):
    """An equation has no finite real result for these inputs."""


class LedgerError(FluebookError):
    """A ledger key is refused, or an entry does not fit the equation it is given to."""


class RecordError(FluebookError):
    """The record contradicts itself."""


class OutputError(FluebookError):
    """A result file could not be written."""
