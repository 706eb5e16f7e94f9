"""Source and process, sampling location and methods: what was entered about them."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.ledger import slug
from reporter.methods.criteria import method_family
from reporter.output.numbers import formulas, moment, shortest, unit_text
from reporter.output.view.desk import Desk, entered, gas_name, said
from reporter.output.view.model import Block, Column, Item, Row, Table
from reporter.output.view.operation import operation, run_columns
from reporter.output.view.plane import plane_words, with_diameters
from reporter.output.view.standing import DAGGER, cited_documents, dagger
from reporter.output.view.tabular import aligned, filled, side_by_side, simple_table
from reporter.record import Channel, FuelRow, Point, Run
from reporter.references import bibliography


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
    blocks = [Block(facts=facts), operation(desk)]
    if desk.outcome.record.fuels:
        blocks.append(_fuels(desk))
    if desk.outcome.record.process.times:
        blocks.append(_process_log(desk))
    return tuple(blocks)


def _with_note(entry: str, note: str) -> str:
    return f"{entry} ({note})" if note else entry


def _fuels(desk: Desk) -> Block:
    titles = ("Fuel", "F factors", "Analysis", "Laboratory", "Sample")
    rows = [
        (row.fuel.value, _factors(desk, row), _analysis(row), said(row.laboratory), said(row.sample))
        for row in desk.outcome.record.fuels
    ]
    tables = [filled(simple_table(titles, rows, (1.3, 3.6, 3.6, 1.8, 2)))]
    if desk.outcome.record.fuel_use:
        tables.append(_fuel_use(desk))
    components = [
        f"{part.component.value} {shortest(part.mole_fraction.value, 6)} %" for part in desk.outcome.record.fuel_gas
    ]
    notes = [formulas(f"Composition of the gas by mole: {', '.join(components)}.")] if components else []
    if any(DAGGER in cell for row in rows for cell in row):
        notes.append(desk.words("criterion.recalled"))
    return Block(title="Fuel", tables=tuple(tables), notes=tuple(notes))


def _factors(desk: Desk, row: FuelRow) -> str:
    """The F factors of a fuel: value, where it is from, with a dagger where it is recalled."""
    stem = f"fuel.{slug(row.fuel.value)}"
    by_source: dict[str, list[str]] = {}
    for name, symbol in (("fd", "Fd"), ("fw", "Fw"), ("fc", "Fc")):
        entry = desk.outcome.ledger.get(f"{stem}.{name}")
        if entry is not None:
            desk.show(entry.key)
            text = f"{symbol} {shortest(float(entry.value), 6)}{dagger(desk, (entry.key,))} {unit_text(entry.unit)}"
            by_source.setdefault(desk.factor_words(entry), []).append(text)
    parts = [f"{', '.join(texts)} ({source})" for source, texts in by_source.items()]
    return "; ".join(parts) or row.factor_source.value


def _fuel_use(desk: Desk) -> Table:
    """Fuel metered in each run, with the heating value, its kind and the conditions of the meter."""
    rows = []
    for use in desk.outcome.record.fuel_use:
        metered = " to ".join(entered(value, "") for value in (use.meter_start, use.meter_end) if value is not None)
        heat = f"{entered(use.heating_value, desk.missing)} {said(use.heating_value_kind)}".strip()
        base = ", ".join(part for part in (entered(use.base_temperature, ""), entered(use.base_pressure, "")) if part)
        rows.append((use.run.value, use.fuel.value, metered or entered(use.rate, desk.missing), heat, base))
    titles = ("Run", "Fuel", "Meter, or rate", "Heating value", "Meter at")
    return filled(simple_table(titles, rows, (0.7, 1.6, 3.4, 2.2, 2)))


def _analysis(row: FuelRow) -> str:
    names = ("carbon", "hydrogen", "nitrogen", "sulfur", "oxygen", "water", "ash", "gross_heating_value")
    parts = [
        f"{name.replace('_', ' ')} {entered(value, '')}" for name in names if (value := getattr(row, name)) is not None
    ]
    basis = f" ({row.analysis_basis.value})" if row.analysis_basis is not None else ""
    return ", ".join(parts) + basis if parts else ""


def _process_log(desk: Desk) -> Block:
    """Means of the process log over each run, where the ledger holds them; else where the log is printed."""
    groups = side_by_side([run.run for run in desk.outcome.runs])
    tables = [made for runs in groups if (made := _process_means(desk, runs)) is not None]
    if not tables:
        return Block(notes=(desk.words("lead.process_log", inputs=desk.section_number("inputs")),))
    return Block(tables=tuple(tables))


def _process_means(desk: Desk, runs: Sequence[Run]) -> Table | None:
    ledger = desk.outcome.ledger
    names = dict.fromkeys(entry.key.split(".")[3] for run in runs for entry in ledger.under(f"run.{run.key}.process"))
    if not names:
        return None
    columns = (Column("Process log, mean over the run", width=3), Column("Unit", width=1.4), *run_columns(runs))
    rows = []
    for name in names:
        entries = [ledger.get(f"run.{run.key}.process.{name}") for run in runs]
        found = next(entry for entry in entries if entry is not None)
        label = formulas(found.label.partition(", mean of")[0] or name.replace("_", " "))
        rows.append(Row((label, unit_text(found.unit), *desk.row(entries))))
    return aligned(Table(columns, tuple(rows)))


def location(desk: Desk) -> tuple[Block, ...]:
    """Sampling plane, methods with editions, channels, points."""
    place = desk.outcome.record.location
    equivalent = "location.equivalent_diameter"
    rows = (
        ("Duct", said(place.duct_shape)),
        ("Diameter", entered(place.diameter, "")),
        ("Width", entered(place.width, "")),
        ("Depth", entered(place.depth, "")),
        ("Equivalent diameter", desk.number_text(equivalent) if equivalent in desk.outcome.ledger else ""),
        ("Disturbance upstream", with_diameters(desk, "upstream", entered(place.disturbance_upstream, ""))),
        ("Disturbance downstream", with_diameters(desk, "downstream", entered(place.disturbance_downstream, ""))),
        ("Ports", said(place.ports)),
        ("Elevation", entered(place.elevation, "")),
        ("Barometer height", entered(place.barometer_height, "")),
        ("Pitot factor", entered(place.pitot_factor, "")),
    )
    facts = [Item(label, text) for label, text in rows if text]
    facts += [Item(extra.item, _with_note(extra.entry, extra.note)) for extra in place.extra]
    notes = plane_words(desk) if facts else (desk.words("lead.no_location"),)
    blocks = [Block(facts=tuple(facts), notes=notes), _methods(desk), _channels(desk)]
    if desk.outcome.record.points:
        blocks.append(_points(desk))
    return tuple(blocks)


def _methods(desk: Desk) -> Block:
    """Every method and rule of measurement this test cites, with what it serves, document and edition."""
    documents = {reference.short: reference for reference in bibliography().values()}
    serves: dict[str, dict[str, None]] = {}
    for channel in desk.outcome.record.channels:
        name = said(channel.method, desk.words("missing.text"))
        family = method_family(name)
        serves.setdefault(f"Method {family}" if family else name, {})[gas_name(channel.gas.value)] = None
    known = desk.phrases.all("method")
    cited = cited_documents(desk)
    for reference in bibliography().values():
        if reference.id in cited and reference.id in known and reference.short not in serves:
            serves[reference.short] = {known[reference.id]: None}
    rows = []
    for name, what in serves.items():
        found = documents.get(name)
        edition = f"{found.title}; {found.edition}" if found is not None else desk.words("missing.no_document")
        rows.append((name, formulas(", ".join(what)), edition))
    table = simple_table(("Method", "For", "Document and edition"), rows, (1.25, 2, 7.8))
    return Block(title="Methods", tables=(table,), notes=tuple(_entered_results(desk)))


def _entered_results(desk: Desk) -> list[str]:
    """What rests on a number entered as a result, whose own readings are not in this report."""
    record = desk.outcome.record
    words = []
    if any(run.stack_flow is not None for run in record.runs) and not record.traverse:
        words.append(desk.words("lead.flow_entered"))
    if any(run.moisture is not None for run in record.runs) and not record.moisture:
        sources = ", ".join(dict.fromkeys(said(run.moisture_source) for run in record.runs if run.moisture_source))
        words.append(desk.words("lead.moisture_entered", source=sources or desk.words("missing.text")))
    return words


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
    at = f", {'–'.join(times)}" if times else ""
    distance = f" at {entered(point.distance, '')}" if point.distance is not None else ""
    return f"{point.point.value}{distance}{at}"
