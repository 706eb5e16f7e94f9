"""A mapping: how one shape of file is read, as a short TOML that a person can read and edit."""

from __future__ import annotations

import hashlib
import json
import tomllib
from collections.abc import Sequence
from dataclasses import dataclass, field
from difflib import SequenceMatcher
from pathlib import Path
from typing import Any

from reporter.errors import RecordError, UnitError
from reporter.gases import all_gases
from reporter.intake.foreign.grid import Grid
from reporter.intake.foreign.numbers import NumberStyle
from reporter.intake.foreign.tables import Table, find_tables
from reporter.intake.foreign.times import TimeStyle, zone_of
from reporter.record import ReadingKind
from reporter.units import read_unit

#: Version of the form of a mapping.
FORM = 1
#: Ending of the file names of mappings.
ENDING = ".map.toml"
#: Basis and stamp that are those of the field workbook.
AS_ENTERED = "as the field workbook says"
#: Stamp of a plant's own log that is the moment of its values.
MOMENT = "moment"
_STAMPS = ("interval start", "interval end", AS_ENTERED, MOMENT)
_ORDERS = ("year first", "day first", "month first", "serial 1900", "serial 1904")
_BASES = ("dry", "wet", AS_ENTERED)
_USES = ("time", "reading", "process", "ignore")


@dataclass(frozen=True, slots=True)
class MappedColumn:
    """One column: its header, its use (``time``, ``reading``, ``process``, ``ignore``), and what it is.

    `channel` is the name of a channel, or of a column of the sheet Process; gas and basis are those of a reading.
    """

    header: str
    use: str
    channel: str = ""
    gas: str = ""
    unit: str = ""
    basis: str = ""
    why: str = ""


@dataclass(frozen=True, slots=True)
class Mapping:
    """How the files of one shape are read.

    `words` are texts of cells with their meaning, `titles` names of the unit or facility that mean those of the test.
    """

    name: str
    kind: str
    columns: tuple[MappedColumn, ...]
    time: TimeStyle = field(default_factory=TimeStyle)
    numbers: NumberStyle = field(default_factory=NumberStyle)
    words: tuple[tuple[str, str], ...] = ()
    hidden: str = "read"
    version: int = 1
    titles: tuple[str, ...] = ()

    @property
    def signature(self) -> tuple[str, ...]:
        """The headers for comparison with those of a table."""
        return tuple(" ".join(column.header.split()).casefold() for column in self.columns)

    @property
    def fingerprint(self) -> str:
        """Twelve characters that stand for the shape: kind of file and headers in their order."""
        return hashlib.sha256("\x1f".join((self.kind, *self.signature)).encode()).hexdigest()[:12]

    def has(self, use: str) -> bool:
        """Whether a column has this use."""
        return any(column.use == use for column in self.columns)

    def fits(self, table: Table) -> bool:
        """Whether a table has the headers of this mapping, in their order."""
        return table.signature == self.signature


def dump(mapping: Mapping) -> str:
    """The mapping as TOML."""
    time, numbers = mapping.time, mapping.numbers
    lines = [
        "# How fluebook reads the files of one logger. Edit it as you would a note; raise the version when you do.",
        f"form = {FORM}",
        f"name = {_quoted(mapping.name)}",
        f"version = {mapping.version}",
        f"kind = {_quoted(mapping.kind)}",
        f"shape = {_quoted(mapping.fingerprint)}  # follows from kind and headers",
        f"hidden_sheets = {_quoted(mapping.hidden)}",
        *([f"titles = [{', '.join(map(_quoted, mapping.titles))}]"] if mapping.titles else []),
        "",
        "[numbers]",
        f"decimal_mark = {_quoted(numbers.decimal)}",
        f"other_mark_groups_thousands = {str(numbers.grouped).lower()}",
        "",
        "[time]",
        f"order = {_quoted(time.order)}",
        f"stamp = {_quoted(time.stamp)}",
        *([f"written_in_zone = {_quoted(time.written)}"] if time.written else []),
        *([f"convert_to_zone = {_quoted(time.zone)}"] if time.zone else []),
        *([f"day = {_quoted(time.day)}"] if time.day else []),
        "",
        "[words]",
        *(f"{_quoted(word)} = {_quoted(meaning)}" for word, meaning in mapping.words),
    ]
    for column in mapping.columns:
        lines += ["", "[[column]]", f"header = {_quoted(column.header)}", f"use = {_quoted(column.use)}"]
        for name in ("channel", "gas", "unit", "basis", "why"):
            if value := getattr(column, name):
                lines.append(f"{name} = {_quoted(value)}")
    return "\n".join(lines) + "\n"


def _quoted(text: str) -> str:
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")


def save(mapping: Mapping, path: str | Path) -> None:
    """Write a mapping (OSError where that cannot be done)."""
    Path(path).write_text(dump(mapping), encoding="utf-8")


def load(path: str | Path) -> Mapping:
    """Read a mapping.

    Raises
    ------
    RecordError
        The file cannot be read, or holds what no mapping can.
    """
    file = Path(path)
    try:
        return parse(tomllib.loads(file.read_text(encoding="utf-8")))
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as error:
        raise RecordError(f"the mapping cannot be read: {error}", file.name) from None
    except (KeyError, TypeError, AttributeError, ValueError) as error:
        raise RecordError(f"the mapping lacks or misstates {error}", file.name) from None


def parse(data: dict[str, Any]) -> Mapping:
    """A mapping from its data (KeyError, TypeError or ValueError where it holds what none can)."""
    if data.get("form") != FORM:
        raise ValueError(f"form: {data.get('form')!r} is not {FORM}")
    time, numbers = data["time"], data["numbers"]
    style = TimeStyle(
        _one_of("order", time["order"], _ORDERS),
        _one_of("stamp", time["stamp"], _STAMPS),
        str(time.get("convert_to_zone", "")),
        _one_of("day", time.get("day", ""), ("", "test date")),
        str(time.get("written_in_zone", "")),
    )
    if style.zone:
        zone_of(style.zone)
    if style.written and zone_of(style.written).utcoffset(None) is None:
        raise ValueError("written_in_zone: hours from UTC, such as UTC-06:00")
    columns = tuple(_column(row) for row in data["column"])
    names = [(column.use, column.channel) for column in columns if column.use in ("reading", "process")]
    if not names or len(set(names)) != len(names):
        raise ValueError("column: no reading and no process column, or two of one name")
    if style.stamp == MOMENT and any(use == "reading" for use, _ in names):
        raise ValueError(f"stamp: {MOMENT!r} where readings of a gas stand")
    if sum(1 for column in columns if column.use == "time") not in (1, 2):
        raise ValueError("column: one or two columns of use 'time'")
    return Mapping(
        str(data["name"]),
        _one_of("kind", data["kind"], ("text", "workbook")),
        columns,
        style,
        NumberStyle(_one_of("decimal_mark", numbers["decimal_mark"], (".", ",")),
                    bool(numbers.get("other_mark_groups_thousands", False))),
        tuple((str(word), str(meaning)) for word, meaning in data.get("words", {}).items()),
        _one_of("hidden_sheets", data.get("hidden_sheets", "read"), ("read", "leave out")),
        int(data.get("version", 1)),
        tuple(str(title) for title in data.get("titles", ())),
    )  # fmt: skip


def _column(row: dict[str, Any]) -> MappedColumn:
    use = _one_of("use", row["use"], _USES)
    column = MappedColumn(
        row["header"], use, *(str(row.get(k, "")) for k in ("channel", "gas", "unit", "basis", "why"))
    )
    if use == "process" and not column.channel:
        raise ValueError("channel")
    if use == "reading":
        _one_of("gas", column.gas, [gas.key for gas in all_gases()])
        _one_of("basis", column.basis, _BASES)
        if not column.channel:
            raise ValueError("channel")
    if use == "reading" or (use == "process" and column.unit):
        try:
            if read_unit(column.unit).unit != column.unit:
                raise ValueError(f"unit: {column.unit!r}")
        except UnitError as error:
            raise ValueError(str(error)) from None
    return column


def _one_of(name: str, value: str, allowed: Sequence[str]) -> str:
    if value not in allowed:
        raise ValueError(f"{name}: {value!r} is none of {', '.join(map(repr, allowed))}")
    return value


def meaning_of(word: str) -> ReadingKind | None:
    """The kind a meaning names; None where it is a number."""
    return next((kind for kind in ReadingKind if kind.value == word), None)


def differences(mapping: Mapping, grid: Grid) -> tuple[str, ...]:
    """What of the shape of a file differs from that of the mapping, in words; empty where a table fits."""
    return differences_of(mapping, grid, find_tables(grid))


def differences_of(mapping: Mapping, grid: Grid, tables: Sequence[Table]) -> tuple[str, ...]:
    """The same for the tables already found in the file."""
    said = [] if grid.kind == mapping.kind else [f"the file is a {grid.kind}, the mapping is for a {mapping.kind}"]
    if any(mapping.fits(table) for table in tables):
        return tuple(said)
    if not tables:
        return (*said, "no table of readings was found")
    nearest = max(tables, key=lambda t: SequenceMatcher(None, t.signature, mapping.signature, autojunk=False).ratio())
    old, new = mapping.signature, nearest.signature
    missing = [column.header for column, text in zip(mapping.columns, old, strict=True) if text not in new]
    added = [header for header, text in zip(nearest.headers, new, strict=True) if text not in old]
    said += [f"no column {header!r}" for header in missing] + [f"a new column {header!r}" for header in added]
    if not missing and not added:
        said.append("the columns stand in another order, or one stands twice")
    return tuple(said)
