"""Results of each run: every step of each gas that a reader looks for, with the average of runs."""

from __future__ import annotations

import tomllib
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cache

from reporter.gases import find_gas
from reporter.ledger import Entry
from reporter.minutes import minutes_text
from reporter.outcome import RunResult, RunState
from reporter.output.numbers import FRACTION, day, formulas, period, unit_text
from reporter.output.view.desk import Desk, channel_name, gas_name, said
from reporter.output.view.model import AnyCell, Block, Cell, Column, Row, Shown, Table
from reporter.output.view.tabular import aligned, group_row, side_by_side
from reporter.resources import templates_folder


@dataclass(frozen=True, slots=True)
class Layout:
    """Which quantities stand in which table, in order (`templates/layout.toml`)."""

    gas: tuple[str, ...]
    run: tuple[str, ...]
    combustion: tuple[str, ...]
    balance: tuple[tuple[str, tuple[str, ...]], ...]


@cache
def layout() -> Layout:
    """The order of the rows."""
    tables = tomllib.loads((templates_folder() / "layout.toml").read_text(encoding="utf-8"))
    return Layout(
        gas=tuple(tables["runs"]["gas"]),
        run=tuple(tables["runs"]["run"]),
        combustion=tuple(tables["combustion"]["rows"]),
        balance=tuple((row["label"], tuple(row["keys"])) for row in tables["combustion"]["balance"]),
    )


def runs(desk: Desk) -> tuple[Block, ...]:
    """Times and states, then every gas and the run as a whole; the averages stand in the last of many tables."""
    groups = side_by_side(desk.outcome.runs)
    tables = [_results(desk, some, averages=some is groups[-1]) for some in groups]
    return (_times(desk), *(Block(tables=made) for made in tables))


def _results(desk: Desk, some: Sequence[RunResult], *, averages: bool) -> tuple[Table, ...]:
    """One table: the rows of each gas under its name, then those of the run as a whole."""
    rows: list[Row] = []
    columns = len(some) + 2 + averages
    for segment in dict.fromkeys(gas.segment for run in some for gas in run.gases):
        mine = _gas_rows(desk, some, segment, averages)
        if mine:
            rows += [group_row(_gas_words(desk, some, segment), columns), *mine]
    tails = _tails(desk, [f"run.{run.key}" for run in _shown_for(desk, some, averages)], layout().run)
    if tails:
        rows.append(group_row(_stack_words(desk), columns))
        rows += [_row(desk, some, tail, averages) for tail in tails]
    return _tables(desk, some, rows, averages)


def _stack_words(desk: Desk) -> str:
    """The heading of the run's own rows, with how its moisture was had."""
    sources = dict.fromkeys(said(run.run.moisture_source) for run in desk.outcome.runs)
    words = ", ".join(source for source in sources if source)
    return f"Stack gas, flow, heat input{f'; moisture by: {words}' if words else ''}"


def _times(desk: Desk) -> Block:
    columns = (
        Column("Run", width=1), Column("Day", width=1.2), Column("From, until", width=1.4),
        Column("Length", "min", 1, number=True), Column("Valid readings", width=2.4), Column("State", width=4),
    )  # fmt: skip
    rows = []
    for result in desk.outcome.runs:
        run = result.run
        start, end = run.start.value, run.end.value
        rows.append(
            Row(
                (
                    run.run.value,
                    day(start),
                    period(start, end),
                    desk.show(f"run.{run.key}.duration"),
                    _readings(desk, result),
                    _state(desk, result),
                )
            )
        )
    return Block(tables=(aligned(Table(columns, tuple(rows))),))


def _readings(desk: Desk, result: RunResult) -> AnyCell:
    """The number of valid readings: once where all gases have the same, else for each."""
    keys = {
        gas.segment: f"run.{result.key}.{gas.segment}.count"
        for gas in result.gases
        if f"run.{result.key}.{gas.segment}.count" in desk.outcome.ledger
    }
    texts = {segment: desk.number_text(key) for segment, key in keys.items()}
    if not texts:
        return desk.missing
    if len(set(texts.values())) == 1:
        return Cell(f"of each gas: {next(iter(texts.values()))}", to=next(iter(keys.values())))
    return ", ".join(f"{gas_name(segment)} {text}" for segment, text in texts.items())


def _state(desk: Desk, result: RunResult) -> str:
    missing, whole = result.gaps
    if result.state is RunState.VALID and missing:
        return desk.words("run.valid_with_gaps", missing=missing, whole=whole)
    name = {RunState.VALID: "valid", RunState.INVALID: "invalid", RunState.EXCLUDED: "excluded"}[result.state]
    reasons = formulas("; ".join(result.reasons))
    words = desk.words(f"run.{name}")
    return f"{words}: {reasons}" if reasons else words


def _gas_rows(desk: Desk, some: Sequence[RunResult], segment: str, averages: bool) -> list[Row]:
    """A row per quantity of one gas; what repeats the row before it (a dry channel's dry value) is left out."""
    whole = _shown_for(desk, some, averages)
    tails = _tails(desk, [f"run.{run.key}.{segment}" for run in whole], layout().gas)
    keys = [f"{segment}.{tail}" for tail in tails]
    return [_row(desk, some, tail, averages) for tail in keys if not _is_carried(desk, whole, tail)]


def _shown_for(desk: Desk, some: Sequence[RunResult], averages: bool) -> Sequence[RunResult]:
    """The runs whose rows a table has: its own, and all where the averages of all stand beside them."""
    return desk.outcome.runs if averages else some


def _is_carried(desk: Desk, some: Sequence[RunResult], tail: str) -> bool:
    """Whether a quantity is another one of the same run under a second name."""
    keys = [key for run in some if (key := f"run.{run.key}.{tail}") in desk.outcome.ledger]
    return all(desk.source_of(key) != key for key in keys)


def _gas_words(desk: Desk, some: Sequence[RunResult], segment: str) -> str:
    """The gas, its channel where that has another name, and the runs in which it is not valid."""
    results = [(run, one) for run in some if (one := run.gas(segment)) is not None]
    words = channel_name(results[0][1].channel)
    bad = [run.run.run.value for run, one in results if not one.is_valid]
    return f"{words}: {desk.words('run.not_valid_in', runs=', '.join(bad))}" if bad else words


def rows_table(desk: Desk, some: Sequence[RunResult], order: Sequence[str]) -> tuple[Table, ...]:
    """Tables of the quantities of runs named in an order, with averages in the last; none where the ledger has none."""
    made: list[Table] = []
    groups = side_by_side(some)
    for runs_of in groups:
        averages = runs_of is groups[-1]
        tails = _tails(desk, [f"run.{run.key}" for run in _shown_for(desk, runs_of, averages)], order)
        made += _tables(desk, runs_of, [_row(desk, runs_of, tail, averages) for tail in tails], averages)
    return tuple(made)


def _tables(desk: Desk, some: Sequence[RunResult], rows: Sequence[Row], averages: bool) -> tuple[Table, ...]:
    if not rows:
        return ()
    columns = [Column("", width=4.6), Column("Unit and basis", width=2.4)]
    columns += [Column(f"Run {run.run.run.value}", number=True) for run in some]
    if averages:
        columns.append(Column("Average", _usual_words(desk), width=1.15, number=True))
    held = any(isinstance(cell, Shown) and cell.text.startswith("[") for row in rows for cell in row.cells)
    return (aligned(Table(tuple(columns), tuple(rows), note=desk.words("lead.held") if held else "")),)


def usual_runs(desk: Desk) -> tuple[str, ...]:
    """The runs that most averages hold, by key."""
    counted = Counter(desk.averaged(key) for key in desk.outcome.averages)
    return counted.most_common(1)[0][0] if counted else ()


def _usual_words(desk: Desk) -> str:
    """Which runs the averages hold, where it is not all of them."""
    usual = usual_runs(desk)
    return desk.run_names(usual) if usual and len(usual) < len(desk.outcome.runs) else ""


def _tails(desk: Desk, stems: Sequence[str], order: Sequence[str]) -> list[str]:
    """The keys below some stems that have a row, without the stem, in the order of the layout."""
    found: dict[str, None] = {}
    for stem in stems:
        for key in desk.keys_under(stem):
            found[key[len(stem) + 1 :]] = None
    tails: list[str] = []
    for name in order:
        tails += [tail for tail in found if tail == name or _is_variant(tail, name, order)]
    return list(dict.fromkeys(tails))


def _is_variant(tail: str, name: str, order: Sequence[str]) -> bool:
    """Whether a key is a variant of a row that asks for its variants by a star."""
    if not name.endswith(".*"):
        return False
    stem = name[:-2]
    return tail == stem or (tail.startswith(f"{stem}.") and tail not in order)


def _row(desk: Desk, some: Sequence[RunResult], tail: str, averages: bool) -> Row:
    entries = [desk.outcome.ledger.get(f"run.{run.key}.{tail}") for run in some]
    everywhere = (desk.outcome.ledger.get(f"run.{run.key}.{tail}") for run in desk.outcome.runs)
    found = next(entry for entry in (*entries, *everywhere) if entry is not None)
    average = desk.outcome.ledger.get(f"average.{tail}")
    held = desk.averaged(f"average.{tail}")
    numbers = desk.row([*entries, average] if averages else entries)
    cells: list[AnyCell] = [_label(desk, found, held), unit_and_basis(found)]
    cells += [
        cell if _counts(desk, run, tail, held) else _bracketed(cell) for run, cell in zip(some, numbers, strict=False)
    ]
    if averages:
        cells.append(numbers[-1] if average is not None else "")
    return Row(tuple(cells))


def _counts(desk: Desk, run: RunResult, tail: str, held: Sequence[str]) -> bool:
    """Whether a run's number counts: as its average holds it, else as its gas and the run are valid."""
    if held:
        return run.key in held
    gas = run.gas(tail.split(".")[0])
    return run.state is not RunState.EXCLUDED and (gas is None or gas.is_valid)


def _bracketed(cell: AnyCell) -> AnyCell:
    return replace(cell, text=f"[{cell.text}]") if isinstance(cell, Shown) else cell


def _label(desk: Desk, entry: Entry, held: Sequence[str]) -> str:
    """The quantity, by which route, whether by analogy, and the runs of its average where others hold more."""
    route = entry.note if entry.note.startswith("from ") else ""
    words = [desk.quantity_label(entry.key), route, _analogy(desk, entry)]
    usual = usual_runs(desk)
    if held and usual and held != usual:
        runs = desk.run_names(held) if len(held) < len(desk.outcome.runs) else desk.words("run.all")
        words.append(desk.words("run.average_of", runs=runs))
    text = formulas(", ".join(word for word in words if word))
    return text[:1].upper() + text[1:]


def _analogy(desk: Desk, entry: Entry) -> str:
    """That a rate of Method 19 is by analogy: the rate by heat input itself, or a mass rate that rests on it."""
    parts = entry.key.split(".")
    gas = find_gas(parts[2]) if len(parts) > 3 else None
    if gas is None or not gas.by_analogy:
        return ""
    rests = parts[3] == "emission_rate" or (parts[3] == "mass_rate" and entry.note == "from heat input")
    return desk.words("limit.by_analogy") if rests else ""


def unit_and_basis(entry: Entry) -> str:
    """Unit and basis of an entry in one text; a fraction by volume says so."""
    unit = unit_text(entry.unit)
    if not unit and "moisture" in entry.key:
        unit = FRACTION
    basis = entry.basis.text().replace("k = ", "k\u00a0=\u00a0")
    return formulas(", ".join(part for part in (unit, basis) if part))


def left_out(desk: Desk, numbers: Mapping[str, str]) -> tuple[Block, ...]:
    """Periods left out of the means, numbered as in the picture, and clock minutes without a valid reading."""
    rows = [
        Row((numbers[period(one.start, one.end)], f"Run {run.run.run.value}", period(one.start, one.end), one.reason))
        for run in desk.outcome.runs
        for one in run.exclusions
    ]
    blocks = []
    if rows:
        columns = (
            Column("No.", width=0.6),
            Column("Run", width=1),
            Column("Period", width=1.6),
            Column("Reason", width=6),
        )
        blocks.append(Block(title=desk.words("lead.left_out"), tables=(Table(columns, tuple(rows)),)))
    lines = list(_missing_minutes(desk))
    words = lines or [desk.words("lead.no_missing_minutes")]
    blocks.append(Block(title=desk.words("lead.missing_minutes"), notes=tuple(words)))
    return tuple(blocks)


def _missing_minutes(desk: Desk) -> Sequence[str]:
    lines = []
    for run in desk.outcome.runs:
        by_times: dict[str, list[str]] = {}
        for gas in run.gases:
            if gas.series is not None and gas.series.missing_minutes:
                times = f"{minutes_text(gas.series.missing_minutes)} of {gas.series.minutes}"
                by_times.setdefault(times, []).append(gas_name(gas.gas))
        lines += [f"Run {run.run.run.value}, {', '.join(names)}: {times}" for times, names in by_times.items()]
    return lines
