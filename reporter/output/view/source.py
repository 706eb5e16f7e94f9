"""Source and process, sampling location and methods: what was entered about them."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.ledger import Entry
from reporter.methods.criteria import method_family
from reporter.output.numbers import formulas, moment, shortest, unit_text
from reporter.output.view.desk import Desk, aligned, entered, filled, fuel_words, gas_name, said, simple_table
from reporter.output.view.model import AnyCell, Block, Column, Item, Row, Table
from reporter.record import Channel, FuelRow, Point, Run
from reporter.references import bibliography

#: Keys of a run's operating conditions, printed where the ledger has them.
_OPERATION = (
    "load", "load.share", "output", "heat_input", "flow.entered", "stack_temperature", "barometric_pressure",
    "static_pressure", "moisture.ambient",
)  # fmt: skip
#: Conditions that no computation needs are printed from the record.
_RECORDED = (
    ("load", "Load"),
    ("output", "Output"),
    ("heat_input", "Heat input"),
    ("stack_flow", "Stack flow"),
    ("stack_temperature", "Stack temperature"),
    ("static_pressure", "Static pressure"),
    ("barometric_pressure", "Barometric pressure"),
    ("ambient_temperature", "Ambient temperature"),
    ("relative_humidity", "Relative humidity"),
    ("installed_monitor_mean", "Installed monitor, mean of the run"),
)


def process(desk: Desk) -> tuple[Block, ...]:
    """Source, fuel, operating conditions per run, process log averaged over each run."""
    test = desk.outcome.record.test
    missing = desk.words("missing.text")
    facts = (
        Item("Source", test.unit_tested.value),
        Item("Capacity", said(test.capacity, missing)),
        Item("Control equipment", said(test.control_equipment, missing)),
        *(Item(extra.item, _with_note(extra.entry, extra.note)) for extra in test.extra),
    )
    blocks = [Block(facts=facts), _operation(desk)]
    if desk.outcome.record.fuels:
        blocks.append(_fuels(desk))
    if desk.outcome.record.process.times:
        blocks.append(_process_log(desk))
    return tuple(blocks)


def _with_note(entry: str, note: str) -> str:
    return f"{entry} ({note})" if note else entry


def _operation(desk: Desk) -> Block:
    """Conditions of each run, with the unit once per row."""
    runs = [run.run for run in desk.outcome.runs]
    columns = (Column("Operating conditions", width=3), Column("Unit", width=1.4), *_run_columns(runs))
    rows: list[Row] = []
    done: set[str] = set()
    for name in _OPERATION:
        entries = [desk.outcome.ledger.get(f"run.{run.key}.{name}") for run in runs]
        found = next((entry for entry in entries if entry is not None), None)
        if found is None:
            continue
        done.add(name.split(".")[0].replace("flow", "stack_flow"))
        unit = unit_text(found.unit) or (said(runs[0].load_unit) if name == "load" else "")
        label = _capital(formulas(desk.quantity_label(found.key)))
        rows.append(Row((label, unit, *(_shown(desk, entry) for entry in entries))))
    for name, label in _RECORDED:
        values = [getattr(run, name) for run in runs]
        if name not in done and any(value is not None for value in values):
            texts = [entered(value, desk.missing) for value in values]
            rows.append(Row((label, "", *texts)))
    rows.append(Row(("Fuel", "", *(fuel_words(desk.outcome.record, run) or desk.missing for run in runs))))
    return Block(tables=(aligned(Table(columns, tuple(rows))),))


def _shown(desk: Desk, entry: Entry | None) -> AnyCell:
    return desk.missing if entry is None else desk.shown(entry)


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _run_columns(runs: Sequence[Run]) -> tuple[Column, ...]:
    return tuple(Column(f"Run {run.run.value}", number=True) for run in runs)


def _fuels(desk: Desk) -> Block:
    rows = [
        (row.fuel.value, row.factor_source.value, _analysis(row), said(row.laboratory), said(row.sample))
        for row in desk.outcome.record.fuels
    ]
    table = filled(
        simple_table(("Fuel", "F factors from", "Analysis", "Laboratory", "Sample"), rows, (2, 1.4, 5, 2, 1.6))
    )
    components = [
        f"{part.component.value} {shortest(part.mole_fraction.value, 6)} %" for part in desk.outcome.record.fuel_gas
    ]
    notes = (formulas(f"Composition of the gas by mole: {', '.join(components)}."),) if components else ()
    return Block(title="Fuel", tables=(table,), notes=notes)


def _analysis(row: FuelRow) -> str:
    names = ("carbon", "hydrogen", "nitrogen", "sulfur", "oxygen", "water", "ash", "gross_heating_value")
    parts = [
        f"{name.replace('_', ' ')} {entered(value, '')}" for name in names if (value := getattr(row, name)) is not None
    ]
    basis = f" ({row.analysis_basis.value})" if row.analysis_basis is not None else ""
    return ", ".join(parts) + basis if parts else ""


def _process_log(desk: Desk) -> Block:
    """Means of the process log over each run, where the ledger holds them; else where the log is printed."""
    runs = [run.run for run in desk.outcome.runs]
    ledger = desk.outcome.ledger
    names = dict.fromkeys(entry.key.split(".")[3] for run in runs for entry in ledger.under(f"run.{run.key}.process"))
    if not names:
        return Block(notes=(desk.words("lead.process_log", inputs=desk.section_number("inputs")),))
    columns = (Column("Process log, mean over the run", width=3), Column("Unit", width=1.4), *_run_columns(runs))
    rows = []
    for name in names:
        entries = [ledger.get(f"run.{run.key}.process.{name}") for run in runs]
        found = next(entry for entry in entries if entry is not None)
        label = formulas(found.label.partition(", mean of")[0] or name.replace("_", " "))
        rows.append(Row((label, unit_text(found.unit), *(_shown(desk, entry) for entry in entries))))
    return Block(tables=(aligned(Table(columns, tuple(rows))),))


def location(desk: Desk) -> tuple[Block, ...]:
    """Sampling plane, methods with editions, channels, points."""
    place = desk.outcome.record.location
    rows = (
        ("Duct", said(place.duct_shape)),
        ("Diameter", entered(place.diameter, "")),
        ("Width", entered(place.width, "")),
        ("Depth", entered(place.depth, "")),
        ("Disturbance upstream", entered(place.disturbance_upstream, "")),
        ("Disturbance downstream", entered(place.disturbance_downstream, "")),
        ("Ports", said(place.ports)),
        ("Elevation", entered(place.elevation, "")),
        ("Barometer height", entered(place.barometer_height, "")),
        ("Pitot factor", entered(place.pitot_factor, "")),
    )
    facts = [Item(label, text) for label, text in rows if text]
    facts += [Item(extra.item, _with_note(extra.entry, extra.note)) for extra in place.extra]
    notes = () if facts else (desk.words("lead.no_location"),)
    blocks = [Block(facts=tuple(facts), notes=notes), _methods(desk), _channels(desk)]
    if desk.outcome.record.points:
        blocks.append(_points(desk))
    return tuple(blocks)


def _methods(desk: Desk) -> Block:
    """The methods named for the channels, each with the document and edition that is followed."""
    documents = {reference.short: reference for reference in bibliography().values()}
    by_method: dict[str, list[str]] = {}
    for channel in desk.outcome.record.channels:
        name = said(channel.method, desk.words("missing.text"))
        by_method.setdefault(name, []).append(gas_name(channel.gas.value))
    rows = []
    for name, gases in by_method.items():
        found = documents.get(f"Method {method_family(name)}")
        edition = f"{found.title}; {found.edition}" if found is not None else desk.words("missing.no_document")
        rows.append((name, ", ".join(dict.fromkeys(gases)), edition))
    return Block(title="Methods", tables=(simple_table(("Method", "For", "Document and edition"), rows, (1, 1.6, 7)),))


def _channels(desk: Desk) -> Block:
    titles = ("Channel", "Gas, unit, basis", "System", "Analyzer", "Serial number", "Response up / down")
    rows = [_channel(desk, channel) for channel in desk.outcome.record.channels]
    test = desk.outcome.record.test
    logger = ", ".join(
        part
        for part in (
            f"logging interval {entered(test.logging_interval, '')}" if test.logging_interval is not None else "",
            f"time stamp at {test.reading_stamp.value}" if test.reading_stamp is not None else "",
        )
        if part
    )
    notes = (f"Logger: {logger}.",) if logger else ()
    table = simple_table(titles, rows, (1.1, 2, 1.4, 2.6, 1.6, 1.7))
    return Block(title="Measuring channels", tables=(table,), notes=notes)


def _channel(desk: Desk, channel: Channel) -> tuple[str, ...]:
    unit = unit_text(channel.unit.value.unit)
    basis = f"{gas_name(channel.gas.value)}, {unit}, {channel.moisture_basis.value.value}"
    system = channel.system.value.value if channel.system is not None else desk.missing
    times = [entered(time, desk.missing) for time in (channel.response_time_up, channel.response_time_down)]
    return (
        formulas(channel.channel.value),
        basis,
        system,
        said(channel.analyzer, desk.missing),
        said(channel.serial_number, desk.missing),
        " / ".join(times),
    )


def _points(desk: Desk) -> Block:
    by_run: dict[str, list[Point]] = {}
    for point in desk.outcome.record.points:
        by_run.setdefault(point.run.value, []).append(point)
    rows = [(run, "; ".join(_point(point) for point in points)) for run, points in by_run.items()]
    return Block(title="Sampling points", tables=(simple_table(("Run", "Points visited"), rows, (1, 8)),))


def _point(point: Point) -> str:
    times = [moment(time.value) for time in (point.from_time, point.until) if time is not None]
    at = f" {'–'.join(times)}" if times else ""
    distance = f" at {entered(point.distance, '')}" if point.distance is not None else ""
    return f"{point.point.value}{distance}{at}"
