"""A plant's own log: recognised or asked about, and its columns as a mapping has them."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.intake.foreign.grid import Grid, letters
from reporter.intake.foreign.mapping import MappedColumn
from reporter.intake.foreign.model import Desk, Option
from reporter.intake.foreign.process_words import process_in, quantities, split_name
from reporter.intake.foreign.tables import Table, at, blank, is_numberlike
from reporter.intake.foreign.words import gases_in

#: So many columns of a load beside gases, and the log may be the plant's.
SEVERAL = 2
#: Columns that a question names.
NAMED = 4


def is_plant_log(table: Table, desk: Desk) -> bool | None:
    """Whether a table is the plant's log; None while that is asked.

    A table without a gas is; one with gases and several columns of a load may be, and is asked about.
    """
    if not any(gases_in(header) for header in table.headers):
        return True
    loads = [h for h in table.headers if (key := process_in(h)) and quantities()[key].get("load")]
    if len(loads) < SEVERAL:
        return False
    options = (
        Option("analyzers", "its gases are the readings of the test; other columns are left out"),
        Option("plant", "the plant's own log: every column goes to the sheet Process, no gas of it is a reading"),
    )
    asks = "Is this the log of the test's analyzers, or the plant's own?"
    more = f" and {len(loads) - NAMED} more" if len(loads) > NAMED else ""
    answer = desk.ask("whose-log", asks, f"gases beside {', '.join(map(repr, loads[:NAMED]))}{more}", options)
    return None if not answer else answer == "plant"


def process_columns(grid: Grid, tables: Sequence[Table], times: Sequence[int], desk: Desk) -> tuple[MappedColumn, ...]:
    """The columns of a plant's log as a mapping has them; what has no unit, or no known name, is asked about."""
    table, made = tables[0], []
    taken: set[str] = set()
    for column, header in zip(table.columns, table.headers, strict=True):
        if column in times:
            made.append(MappedColumn(header, "time"))
            continue
        cells = [c for row in table.page.rows[table.first : table.last] if not blank(c := at(row, column))]
        if not any(is_numberlike(cell) for cell in cells):
            why = "words only" if cells else "nothing stands in it"
            made.append(MappedColumn(header, "ignore", why=why))
            desk.say(f"column {letters(column)} ({header!r}): left out, {why}")
            continue
        name, unit = split_name(header)
        name = name if name and name not in taken else f"{name} {letters(column)}".strip()
        taken.add(name)
        made.append(_column(grid, table, column, MappedColumn(header, "process", name, unit=unit), desk))
    return tuple(made)


def _column(grid: Grid, table: Table, column: int, found: MappedColumn, desk: Desk) -> MappedColumn:
    """One column with its unit: of its header, else asked; a column nobody knows may be left out."""
    key = process_in(found.header)
    named = f"column {letters(column)} ({found.header!r})"
    if found.unit:
        desk.say(f"{named}: process, {found.channel} in {found.unit}, by its header")
        return found
    units = quantities()[key]["units"] if key else []
    options = [Option(unit) for unit in units]
    options += [Option("no unit", "kept as a plain number"), Option("ignore", "leave the column out")]
    place = grid.place(table.page, table.header_rows[0], column)
    asks = "In which unit is this process quantity?" if key else "What is this column of the plant's log?"
    what = f"no unit in {found.header!r}"
    answer = desk.ask(f"column.{letters(column)}.process", asks, what, options, place)
    if answer == "ignore":
        return MappedColumn(found.header, "ignore", why="as answered")
    return MappedColumn(found.header, "process", found.channel, unit="" if answer == "no unit" else answer)
