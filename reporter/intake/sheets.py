"""The field sheets as typed data, from `tables/field_sheets.toml`: sheets, columns, words.

One description feeds the blank form, the reader, the JSON Schema and the documentation.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from enum import Enum
from functools import cache
from typing import Any, TypeVar

from reporter.equation import System
from reporter.resources import table_text

_T = TypeVar("_T")


class Kind(Enum):
    """What a row of a sheet is."""

    ITEMS = "items"
    TABLE = "table"
    READINGS = "readings"
    PROCESS = "process"


class Type(Enum):
    """What a cell of a column holds."""

    TEXT = "text"
    NUMBER = "number"
    DATE = "date"
    DATETIME = "datetime"
    CHOICE = "choice"
    BOOL = "bool"
    UNIT = "unit"
    GAS = "gas"


#: Stands for "every dimension of the unit table" in a column's dimensions.
ANY = "any"
#: How much alike two names are, and how long, before one is taken for a slip in writing the other.
LIKENESS, SHORTEST = 0.85, 4
#: The columns of a sheet of items.
ITEM_COLUMNS = ("Item", "Entry", "Note")


@dataclass(frozen=True, slots=True)
class Column:
    """One column, or one item of a sheet of items; see the head of the data file for the meaning of fields."""

    name: str
    attr: str
    type: Type
    required: bool
    note: str
    dimensions: tuple[str, ...]
    us: str
    si: str
    unit_from: str
    choices: tuple[str, ...]
    enum: str
    suggest: str
    synonyms: tuple[str, ...]
    refers: str
    also: tuple[str, ...]
    minimum: float | None
    maximum: float | None
    fraction_below: float | None

    def default_unit(self, system: System) -> str:
        """The unit where the header names none; empty where the column has none of its own."""
        return self.us if system is System.US else self.si

    @property
    def names(self) -> tuple[str, ...]:
        """All ways to write the name, folded."""
        return tuple(fold(name) for name in (self.name, *self.synonyms))


@dataclass(frozen=True, slots=True)
class Sheet:
    """One sheet of the field workbook."""

    name: str
    attr: str
    kind: Kind
    required: bool
    title: str
    note: str
    synonyms: tuple[str, ...]
    unique: tuple[str, ...]
    counts_when: tuple[str, ...]
    empty_rows: int
    columns: tuple[Column, ...]

    def column(self, name: str) -> Column:
        """The column of that name (KeyError if there is none)."""
        for column in self.columns:
            if column.name == name:
                return column
        raise KeyError(name)

    def find(self, text: str) -> Column | None:
        """The column a header text names, by name or synonym."""
        return _column_index(self.name).get(fold(text))

    def near(self, text: str) -> Column | None:
        """The column a text nearly names: a slip of the pen, or a plural."""
        return nearest(text, _column_index(self.name))


def nearest(text: str, index: Mapping[str, _T]) -> _T | None:
    """What of an index of folded names a text nearly names; None where it is short, or like none of them."""
    wanted = fold(text)
    close = get_close_matches(wanted, index, 1, LIKENESS) if len(wanted) >= SHORTEST else []
    return index[close[0]] if close and len(close[0]) >= SHORTEST else None


@cache
def _column_index(name: str) -> dict[str, Column]:
    columns = sheet(name).columns
    index = {fold(column.name): column for column in columns}
    for column in columns:
        for name in column.names:
            index.setdefault(name, column)
    return index


_GAP = re.compile(r"[\s_\-]+")


def fold(text: str) -> str:
    """A name for comparison: lower case, one blank for any gap, no mark at the end."""
    return _GAP.sub(" ", text.casefold()).strip(" .:*")


@cache
def _data() -> dict[str, Any]:
    return tomllib.loads(table_text("field_sheets.toml"))


@cache
def sheets() -> tuple[Sheet, ...]:
    """All sheets in the order of the field workbook."""
    return tuple(_sheet(row) for row in _data()["sheet"])


@cache
def sheet(name: str) -> Sheet:
    """The sheet of that name (KeyError if there is none)."""
    for found in sheets():
        if found.name == name:
            return found
    raise KeyError(name)


def find_sheet(text: str) -> Sheet | None:
    """The sheet a tab's name stands for, by name or synonym."""
    return _sheet_index().get(fold(text))


def near_sheet(text: str) -> Sheet | None:
    """The sheet a tab's name nearly names."""
    return nearest(text, _sheet_index())


@cache
def _sheet_index() -> dict[str, Sheet]:
    index = {fold(found.name): found for found in sheets()}
    for found in sheets():
        for name in found.synonyms:
            index.setdefault(fold(name), found)
    return index


def _sheet(row: dict[str, Any]) -> Sheet:
    return Sheet(
        name=row["name"],
        attr=row["attr"],
        kind=Kind(row["kind"]),
        required=row.get("required", False),
        title=row["title"],
        note=row.get("note", ""),
        synonyms=tuple(row.get("synonyms", ())),
        unique=tuple(row.get("unique", ())),
        counts_when=tuple(row.get("counts_when", ())),
        empty_rows=row.get("empty_rows", 0),
        columns=tuple(_column(column) for column in row["columns"]),
    )


def _column(row: dict[str, Any]) -> Column:
    dimension = row.get("dimension", ())
    return Column(
        name=row["name"],
        attr=row.get("attr", row["name"].lower().replace(" ", "_")),
        type=Type(row["type"]),
        required=row.get("required", False),
        note=row["note"],
        dimensions=(dimension,) if isinstance(dimension, str) else tuple(dimension),
        us=row.get("us", ""),
        si=row.get("si", ""),
        unit_from=row.get("unit_from", ""),
        choices=tuple(row.get("choices", ())),
        enum=row.get("enum", ""),
        suggest=row.get("suggest", ""),
        synonyms=tuple(row.get("synonyms", ())),
        refers=row.get("refers", ""),
        also=tuple(row.get("also", ())),
        minimum=row.get("minimum"),
        maximum=row.get("maximum"),
        fraction_below=row.get("fraction_below"),
    )


@cache
def choice_words() -> dict[str, tuple[str, ...]]:
    """Further ways to write a choice, folded."""
    return {choice: tuple(fold(w) for w in words) for choice, words in _data()["choice_words"].items()}


@cache
def reading_words() -> dict[str, str]:
    """What a word in a cell of the readings means: folded word to the name of the kind."""
    return {word: kind for kind, words in _data()["reading_words"].items() for word in words}


@cache
def sentinels() -> frozenset[float]:
    """Numbers that loggers write for a missing value."""
    return frozenset(float(value) for value in _data()["sentinels"]["values"])


@cache
def footer_words() -> frozenset[str]:
    """First words of a row at the foot of a table that is not data."""
    return frozenset(_data()["footer_words"]["words"])


@cache
def months() -> dict[str, int]:
    """Month names and their abbreviations to the number of the month."""
    return {name: number for number, names in enumerate(_data()["months"]["names"], start=1) for name in names}


def suggestions(name: str) -> tuple[str, ...]:
    """What the blank form offers in a column where other text is allowed too."""
    return tuple(_data()["suggestions"][name])


def process_columns(system: System) -> tuple[str, ...]:
    """Headers of the columns the blank form prints on the sheet Process."""
    return tuple(_data()["process_columns"][system.value])
