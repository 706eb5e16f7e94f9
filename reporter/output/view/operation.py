"""Operating conditions of each run as they were entered, with their sources."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from reporter.ledger import Entry, FromCells
from reporter.output.numbers import capital, decimals_in, fixed, formulas, shortest, unit_text
from reporter.output.view.desk import Desk, entered, fuel_words, said
from reporter.output.view.model import AnyCell, Block, Column, Row, Shown, Table
from reporter.output.view.tabular import aligned, side_by_side
from reporter.record import Run

#: Keys of a run's operating conditions, printed where the ledger has them, with the field of the run's sheet.
_OPERATION = (
    ("load", "load"),
    ("load.permitted", ""),
    ("load.share", ""),
    ("output", "output"),
    ("heat_input", "heat_input"),
    ("flow.entered", "stack_flow"),
    ("stack_temperature", "stack_temperature"),
    ("barometric_pressure", "barometric_pressure"),
    ("static_pressure", "static_pressure"),
    ("ambient.temperature", "ambient_temperature"),
    ("ambient.relative_humidity", "relative_humidity"),
    ("moisture.ambient", ""),
    ("installed_monitor", "installed_monitor_mean"),
)
#: Conditions that no computation needs are printed from the record.
_RECORDED = {
    "load": "Load",
    "output": "Output",
    "heat_input": "Heat input",
    "stack_flow": "Stack flow",
    "stack_temperature": "Stack temperature",
    "static_pressure": "Static pressure",
    "barometric_pressure": "Barometric pressure",
    "ambient_temperature": "Ambient temperature",
    "relative_humidity": "Relative humidity",
    "installed_monitor_mean": "Installed monitor, mean of the run",
}


def operation(desk: Desk) -> Block:
    """Conditions of each run as they were entered, with the unit once per row."""
    groups = side_by_side([run.run for run in desk.outcome.runs])
    return Block(tables=tuple(_conditions(desk, runs) for runs in groups))


def _conditions(desk: Desk, runs: Sequence[Run]) -> Table:
    columns = (Column("Operating conditions", width=3.4), Column("Unit", width=1), *run_columns(runs))
    rows: list[Row] = []
    for name, field in _OPERATION:
        entries = [_as_entered(desk, f"run.{run.key}.{name}") for run in runs]
        found = next((entry for entry in entries if entry is not None), None)
        if found is not None:
            unit = unit_text(found.unit) or (said(runs[0].load_unit) if name.startswith("load") else "")
            if not unit and name.startswith("moisture"):
                unit = "fraction"
            label = capital(formulas(desk.quantity_label(f"run.{runs[0].key}.{name}")))
            rows.append(Row((f"{label}{_source_words(field, runs)}", unit, *_entered_row(desk, entries))))
        elif field and any(getattr(run, field) is not None for run in runs):
            texts = [entered(getattr(run, field), desk.missing) for run in runs]
            rows.append(Row((f"{_RECORDED[field]}{_source_words(field, runs)}", "", *texts)))
    rows.append(Row(("Fuel", "", *(fuel_words(desk.outcome.record, run) or desk.missing for run in runs))))
    return aligned(Table(columns, tuple(rows)))


def _as_entered(desk: Desk, key: str) -> Entry | None:
    """The entry of a key in the unit in which it was entered."""
    ledger = desk.outcome.ledger
    return ledger.get(f"{key}.as_entered") or ledger.get(key)


def _entered_row(desk: Desk, entries: Sequence[Entry | None]) -> list[AnyCell]:
    """Numbers of a row; those read from a cell with the decimals they were entered with, the most of the row."""
    cells = desk.row(entries)
    read = [one for one in entries if one is not None and isinstance(one.origin, FromCells)]
    if not read or len(read) < sum(one is not None for one in entries):
        return cells
    decimals = max(decimals_in(shortest(float(one.value), 10)) for one in read)
    return [
        replace(cell, text=fixed(float(desk.outcome.ledger[cell.key].value), decimals), decimals=decimals)
        if isinstance(cell, Shown)
        else cell
        for cell in cells
    ]


def _source_words(field: str, runs: Sequence[Run]) -> str:
    """Where an entered heat input or flow comes from, and on which basis a flow was entered."""
    if field == "heat_input":
        return _of_runs([said(run.heat_input_source) for run in runs])
    if field == "stack_flow":
        return _of_runs([_flow_basis(run) for run in runs])
    return ""


def _flow_basis(run: Run) -> str:
    at = (entered(run.flow_standard_temperature, ""), entered(run.flow_standard_pressure, ""))
    return ", ".join(part for part in (said(run.flow_basis), *at) if part)


def _of_runs(texts: Sequence[str]) -> str:
    words = "; ".join(dict.fromkeys(text for text in texts if text))
    return f" ({words})" if words else ""


def run_columns(runs: Sequence[Run]) -> tuple[Column, ...]:
    """A column of numbers for each run."""
    return tuple(Column(f"Run {run.run.value}", number=True) for run in runs)
