"""A look at a file nobody has described: tables, times, columns, numbers and words, with evidence and questions."""

from __future__ import annotations

from collections.abc import Mapping as Answers
from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path

from reporter.collecting import without_collecting
from reporter.errors import RecordError
from reporter.intake.foreign import bulk
from reporter.intake.foreign.columns import Columns, Lane, mapped
from reporter.intake.foreign.grid import Grid, letters, read_grid
from reporter.intake.foreign.mapping import MappedColumn, Mapping
from reporter.intake.foreign.missing import what_is_there
from reporter.intake.foreign.model import Desk, Option, Question
from reporter.intake.foreign.numbers import NumberStyle, style_of
from reporter.intake.foreign.process import is_plant_log, process_columns
from reporter.intake.foreign.sort import sort_rows
from reporter.intake.foreign.tables import Table, at, find_tables, is_timelike, timed_rows
from reporter.intake.foreign.timebase import TimeBase, time_base, time_columns
from reporter.intake.foreign.times import TimeStyle
from reporter.intake.foreign.wording import words_of
from reporter.intake.foreign.words import units_in
from reporter.problems import Problem, problem

#: Columns left out that are named.
NAMED = 6


@dataclass(frozen=True, slots=True)
class Look:
    """What a look found: the grid, its tables, evidence in words, open questions, and what keeps it from being read.

    `mapping` is the reading so far; it is whole only where no question is open and no problem was found.
    """

    grid: Grid
    tables: tuple[Table, ...] = ()
    questions: tuple[Question, ...] = ()
    evidence: tuple[str, ...] = ()
    problems: tuple[Problem, ...] = ()
    mapping: Mapping | None = None
    answers: Answers[str, str] = field(default_factory=dict)


def look(path: str | Path, answers: Answers[str, str] | None = None) -> Look:
    """Look at a file.

    Parameters
    ----------
    path
        Any text table or workbook.
    answers
        Answers to questions of an earlier look, by key.

    Returns
    -------
    Look
        Nothing is raised for what is in the file.
    """
    return look_at_grid(read_grid(path), answers or {})


@without_collecting()
def look_at_grid(grid: Grid, answers: Answers[str, str]) -> Look:
    """The same for a grid already read."""
    desk = Desk(answers, grid.source.name)
    if not grid.pages:
        return Look(grid, problems=grid.problems, answers=answers)
    if grid.kind == "text":
        named = {"\t": "tab", ";": "semicolon", ",": "comma", "|": "bar"}[grid.delimiter]
        desk.say(f"text in {grid.encoding}, cells parted by {named}")
    tables = tuple(table for table in find_tables(grid) if table.last > table.first)
    candidates = [table for table in tables if time_columns(table)]
    if candidates:
        candidates = [table for table in tables if table in candidates or timed_rows(table)]
    if not candidates:
        place = grid.place(grid.pages[0], 0, 0)
        found = what_is_there(grid, tables)
        return Look(
            grid, tables, problems=(*grid.problems, problem("no-readings-table", place, found)), answers=answers
        )
    chosen, hidden = _chosen(candidates, desk)
    mapping = _mapping(grid, chosen, hidden, desk) if chosen else None
    return Look(grid, tables, tuple(desk.open), tuple(desk.evidence), grid.problems, mapping, answers)


def mapping_of(found: Look, answers: Answers[str, str] | None = None, *, name: str = "") -> Mapping:
    """The mapping of a look and the answers to its questions.

    Raises
    ------
    RecordError
        A question is open, or the file cannot be read.
    """
    if answers:
        found = look_at_grid(found.grid, {**found.answers, **answers})
    if found.questions:
        raise RecordError(f"open questions: {', '.join(q.key for q in found.questions)}", found.grid.source.name)
    if found.mapping is None:
        said = "; ".join(p.title for p in found.problems) or "no table of readings"
        raise RecordError(said, found.grid.source.name)
    own = found.mapping
    return Mapping(name or own.name, own.kind, own.columns, own.time, own.numbers, own.words, own.hidden, own.version)


def _chosen(candidates: Sequence[Table], desk: Desk) -> tuple[list[Table], str]:
    """The tables of one shape that hold the readings, and what to do with hidden sheets."""
    shapes: dict[tuple[str, ...], list[Table]] = {}
    for table in candidates:
        shapes.setdefault(table.signature, []).append(table)
    groups = list(shapes.values())
    if len(groups) > 1:
        options = [Option(str(n), group[0].words()) for n, group in enumerate(groups, start=1)]
        answer = desk.ask(
            "table",
            "Which table holds the readings? If several do, export each as a file of its own",
            f"{len(groups)} tables of different shape",
            options,
        )
        if not answer:
            return [], ""
        groups = [groups[int(answer) - 1]]
    group = groups[0]
    secret = [table for table in group if table.page.hidden]
    hidden = "read"
    if secret and len(secret) < len(group):
        found = ", ".join(sorted({table.page.sheet for table in secret}))
        options = [Option("read"), Option("leave out")]
        hidden = desk.ask("hidden-sheets", "Are the hidden sheets part of the readings?", found, options)
        group = [table for table in group if not table.page.hidden or hidden == "read"]
    for table in candidates:
        if table not in group:
            desk.say(f"left aside: {table.words()}")
    for table in group:
        desk.say(f"readings: {table.words()}")
        if table.page.hidden:
            desk.say(f"sheet {table.page.sheet!r} is hidden; it is read")
        if hid := sum(1 for row in table.page.hidden_rows if table.first <= row < table.last):
            desk.say(f"{hid} hidden rows of sheet {table.page.sheet!r} are read")
        if own := [letters(column) for column in table.columns if column in table.page.hidden_columns]:
            desk.say(f"hidden columns of sheet {table.page.sheet!r} are read like the others: {', '.join(own)}")
        for text in table.page.comment_words():
            desk.say(text)
    return group, hidden


def _mapping(grid: Grid, tables: Sequence[Table], hidden: str, desk: Desk) -> Mapping | None:
    table = tables[0]
    of_plant = is_plant_log(table, desk)
    base = None if of_plant is None else time_base(grid, tables, desk, of_plant=of_plant)
    if base is None:
        return None
    if of_plant:
        return _of_plant(grid, tables, base, hidden=hidden, desk=desk)
    rows, columns = _data_rows(tables, base), []
    reader = Columns(grid, table, rows[0], desk)
    lanes, ignored = reader.lanes(base.columns)
    lanes = [_extended(lane, tables, rows, table) for lane in lanes]
    _say_rows(rows, desk)
    numbers = _numbers(lanes, desk)
    lanes, corrected = reader.uncorrected(lanes, numbers)
    ignored |= corrected
    lanes = [reader.with_basis(reader.with_units(lane, numbers)) for lane in lanes]
    words = words_of(lanes, numbers, desk, grid)
    left: dict[str, list[str]] = {}
    if not lanes:
        return None
    for column, header in zip(table.columns, table.headers, strict=True):
        lane = next((one for one in lanes if one.column == column), None)
        if column in base.columns:
            columns.append(MappedColumn(header, "time"))
        elif lane is not None:
            columns.append(mapped(lane, lanes))
        else:
            columns.append(MappedColumn(header, "ignore", why=ignored.get(column, "")))
            left.setdefault(ignored.get(column, "") or "asked about", []).append(f"{letters(column)} ({header!r})")
    _say_left_out(left, desk)
    style = TimeStyle(base.order, base.stamp, base.zone, base.day, base.written)
    return Mapping(Path(grid.source.name).stem, grid.kind, tuple(columns), style, numbers, words, hidden)


def _say_left_out(left: Answers[str, Sequence[str]], desk: Desk) -> None:
    """Say which columns are left out, by the reason; of many with one reason the first ones."""
    for why, names in left.items():
        more = f" and {len(names) - NAMED} more" if len(names) > NAMED else ""
        desk.say(f"column{'s' if len(names) > 1 else ''} {', '.join(names[:NAMED])}{more}: left out, {why}")


def _of_plant(grid: Grid, tables: Sequence[Table], base: TimeBase, *, hidden: str, desk: Desk) -> Mapping:
    """The mapping of a plant's own log."""
    table, rows = tables[0], _data_rows(tables, base)
    _say_rows(rows, desk)
    columns = process_columns(grid, tables, base.columns, desk)
    own = [column for column, mapped in zip(table.columns, columns, strict=True) if mapped.use == "process"]
    texts = [c for row in rows[0] for column in own if isinstance(c := at(table.page.rows[row], column), str)]
    numbers = style_of(texts, (), desk)
    style = TimeStyle(base.order, base.stamp, base.zone, base.day, base.written)
    return Mapping(Path(grid.source.name).stem, grid.kind, columns, style, numbers, (), hidden)


def _data_rows(tables: Sequence[Table], base: TimeBase) -> list[list[int]]:
    """The rows of readings of each table, as far as the order of the dates is known."""
    found = []
    for table in tables:
        times = [table.columns[tables[0].columns.index(column)] for column in base.columns]
        others = [column for column in table.columns if column not in times]
        if base.order:
            known = bulk.rows_known(table, times, others, base.order)
            rest = [s.row for s in sort_rows(table, times, others, base.order, known=known) if s.stamps]
            found.append(sorted([*known, *rest]))
        else:
            rows = range(table.first, table.last)
            cells = table.page.rows
            found.append([r for r in rows if any(is_timelike(cells[r][c]) for c in times if c < len(cells[r]))])
    return found


def _extended(lane: Lane, tables: Sequence[Table], rows: Sequence[Sequence[int]], first: Table) -> Lane:
    """A lane with the cells of the further tables of its shape."""
    cells = list(lane.cells)
    position = first.columns.index(lane.column)
    for table, own in zip(tables[1:], rows[1:], strict=True):
        column = table.columns[position]
        cells += [table.page.rows[r][column] if column < len(table.page.rows[r]) else None for r in own]
    return Lane(
        lane.column, lane.header, tuple(cells), lane.gas, lane.unit, lane.basis, lane.correction, lane.corrected
    )


def _say_rows(rows: Sequence[Sequence[int]], desk: Desk) -> None:
    desk.say(f"{sum(map(len, rows))} rows of readings")


def _numbers(lanes: Sequence[Lane], desk: Desk) -> NumberStyle:
    texts = [cell for lane in lanes for cell in lane.cells if isinstance(cell, str)]
    shares = [lane for lane in lanes if [unit.unit for unit in units_in(lane.header)] == ["%"]]
    percents = [cell for lane in shares for cell in lane.cells if isinstance(cell, str)]
    return style_of(texts, percents, desk)
