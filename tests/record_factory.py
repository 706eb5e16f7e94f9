"""Small records made in Python: four channels, perfect calibrations, constant readings, three runs of 30 minutes.

Every part is a plain function that takes what differs; `assessed` runs the whole computation.  Readings are
stamped at the end of each minute.  The clock of every record is 14 March 2025.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from datetime import date, datetime, timedelta
from typing import Any

from reporter.assess.pipeline import assess
from reporter.outcome import Comparison, Outcome
from reporter.problems import Place
from reporter.record import (
    Calibration,
    Channel,
    Cylinder,
    Event,
    FuelComponent,
    FuelRow,
    FuelUse,
    Given,
    Level,
    Limit,
    MoistureBasis,
    MoistureTrain,
    Reading,
    ReadingKind,
    ReadingRow,
    Readings,
    Record,
    Route,
    Run,
    SamplingSystem,
    SourceFile,
    Test,
    When,
)
from reporter.units import read_unit

DAY = date(2025, 3, 14)
#: Where every number of a record made in Python is said to stand.
HERE = Place("made.xlsx", "Made", "A1")
RUNS = (("1", "08:00", "08:30"), ("2", "09:00", "09:30"), ("3", "10:00", "10:30"))
#: Times of the system checks: the inner ones close one run and open the next.
CHECKS = ("07:50", "08:40", "09:40", "10:40")
#: Unit, span and constant reading of each channel.
CHANNELS = {
    "NOx": ("ppm", 100.0, 40.0),
    "CO": ("ppm", 50.0, 10.0),
    "O2": ("%", 20.0, 5.0),
    "CO2": ("%", 20.0, 9.0),
}
Value = float | str | Callable[[datetime], float]


def at(clock: str) -> datetime:
    """A time of the test day, ``08:00`` or ``08:00:30``."""
    return datetime.fromisoformat(f"{DAY}T{clock}")


def text(value: str) -> Given[str]:
    return Given(value, HERE, value)


def number(value: float, unit: str = "", place: Place | None = None) -> Given[float]:
    """A number as entered, with its unit as people write it."""
    return Given(value, place or HERE, f"{value:g}", read_unit(unit) if unit else None)


def moment(clock: str) -> Given[datetime]:
    return Given(at(clock), HERE, clock)


def channel(name: str, *, unit: str = "", wet: bool = False, gas: str = "", **more: Any) -> Channel:
    """A channel; `more` are further fields as plain values (numbers without a unit are in the channel's)."""
    usual = CHANNELS.get(name, ("ppm", 100.0, 40.0))[0]
    basis = MoistureBasis.WET if wet else MoistureBasis.DRY
    fields = {key: _field(key, value) for key, value in more.items()}
    fields.setdefault("response_time_up", number(30.0))
    return Channel(
        Place(sheet="Channels", cell=name),
        text(name),
        text(gas or name.lower()),
        Given(read_unit(unit or usual), HERE),
        Given(basis),
        **fields,
    )


def _field(key: str, value: Any) -> Any:
    if isinstance(value, (str, bool)) and key == "system":
        return Given(SamplingSystem(value))
    if value is None or isinstance(value, Given):
        return value
    return text(value) if isinstance(value, str) else Given(value, HERE, f"{value}")


def cylinder(name: str, gas: str, certified: float, unit: str, **more: Any) -> Cylinder:
    fields = {"kind": "protocol", "expires": date(2026, 1, 1)} | more
    return Cylinder(
        Place(sheet="Cylinders", cell=name),
        text(name),
        text(gas),
        number(certified),
        Given(read_unit(unit)),
        **{key: _field(key, value) for key, value in fields.items()},
    )


def calibration(
    clock: str, name: str, route: str, level: str, reading: float, *, bottle: str | None = "", **more: Any
) -> Calibration:
    """One reading of a calibration gas; its cylinder is ``<channel>-<level>`` unless named (None: no cylinder)."""
    fields = {key: _field(key, value) for key, value in more.items()}
    if "when" in more:
        fields["when"] = Given(When(more["when"]))
    if bottle is not None:
        fields["cylinder"] = text(bottle or f"{name}-{level}")
    return Calibration(
        Place(sheet="Calibrations", cell=f"{clock} {name} {level}"),
        moment(clock),
        text(name),
        Given(Route(route)),
        Given(Level(level)),
        number(reading),
        **fields,
    )


def cylinders(names: Sequence[str] = tuple(CHANNELS)) -> tuple[Cylinder, ...]:
    """Zero, mid and high gas of each channel: 0, 50 and 100 % of its span."""
    made: list[Cylinder] = []
    for name in names:
        unit, span, _ = CHANNELS[name]
        made.append(cylinder(f"{name}-zero", name.lower(), 0.0, unit, kind="zero", expires=None))
        made += [
            cylinder(f"{name}-{level}", name.lower(), span * part, unit, uncertainty=number(1.0, "%"))
            for level, part in (("mid", 0.5), ("high", 1.0))
        ]
    return tuple(made)


def calibrations(names: Sequence[str] = tuple(CHANNELS)) -> tuple[Calibration, ...]:
    """A direct set at 07:00 and a zero and a mid check at each of `CHECKS`, every reading the certified value."""
    made: list[Calibration] = []
    for name in names:
        span = CHANNELS[name][1]
        made += [
            calibration(f"07:0{place}", name, "direct", level, span * part)
            for place, (level, part) in enumerate((("zero", 0.0), ("mid", 0.5), ("high", 1.0)))
        ]
        for clock in CHECKS:
            made.append(calibration(clock, name, "system", "zero", 0.0))
            made.append(calibration(_later(clock, 2), name, "system", "mid", span * 0.5))
    return tuple(made)


def _later(clock: str, minutes: int) -> str:
    return f"{at(clock) + timedelta(minutes=minutes):%H:%M}"


def readings(
    values: Mapping[str, Value] | None = None,
    *,
    start: str = "07:56",
    stop: str = "10:34",
    step: float = 60.0,
    marked: bool = True,
) -> Readings:
    """A row each `step` seconds; a value is a number, a word of the Readings sheet, or a function of the time.

    Where it is `marked`, the log says CAL around each of `CHECKS`.
    """
    chosen: dict[str, Value] = {name: row[2] for name, row in CHANNELS.items()} if values is None else dict(values)
    rows: list[ReadingRow] = []
    time = at(start)
    while time <= at(stop):
        cells = tuple(
            reading("CAL") if marked and _checking(time) else _reading(value, time) for value in chosen.values()
        )
        rows.append(ReadingRow(time, len(rows) + 2, cells))
        time += timedelta(seconds=step)
    letters = tuple("BCDEFGHIJ"[: len(chosen)])
    return Readings(tuple(chosen), letters, tuple(rows), Place(sheet="Readings"))


def _checking(time: datetime) -> bool:
    return any(at(clock) - timedelta(minutes=4) < time <= at(_later(clock, 3)) for clock in CHECKS)


def _reading(value: Value, time: datetime) -> Reading:
    return reading(value(time)) if callable(value) else reading(value)


def reading(value: float | str) -> Reading:
    """A cell of the Readings sheet: a number, ND, <x, OVER, >x, CAL, ERR or nothing."""
    if not isinstance(value, str):
        return Reading(ReadingKind.NUMBER, float(value), f"{value:g}")
    kinds = {
        "": ReadingKind.BLANK,
        "ND": ReadingKind.NOT_DETECTED,
        "OVER": ReadingKind.OVER,
        "CAL": ReadingKind.CALIBRATION,
        "ERR": ReadingKind.ERROR,
    }
    if value in kinds:
        return Reading(kinds[value], None, value)
    kind = ReadingKind.BELOW if value[0] == "<" else ReadingKind.OVER
    return Reading(kind, float(value[1:]), value)


def in_run(values: Sequence[float], start: Sequence[str] = ("08:00", "09:00", "10:00")) -> Callable[[datetime], float]:
    """A function of time that gives one value in each run (the last run's after it)."""

    def value(time: datetime) -> float:
        begun = sum(at(clock) < time for clock in start)
        return values[max(begun, 1) - 1]

    return value


def run(name: str, start: str, end: str, **more: Any) -> Run:
    fields = {key: _field(key, value) for key, value in more.items()}
    return Run(Place(sheet="Runs", cell=name), text(name), moment(start), moment(end), **fields)


def runs(**more: Any) -> tuple[Run, ...]:
    """The three runs, each with the same further fields."""
    return tuple(run(*row, **more) for row in RUNS)


def fuel(name: str = "natural gas", source: str = "published", **more: Any) -> FuelRow:
    return FuelRow(Place(sheet="Fuel"), text(name), text(source), **{k: _field(k, v) for k, v in more.items()})


def component(name: str, formula: str, percent: float) -> FuelComponent:
    return FuelComponent(Place(sheet="Fuel gas"), text(name), text(formula), number(percent, "%"))


def fuel_use(run_name: str, name: str = "natural gas", **more: Any) -> FuelUse:
    fields = {k: _field(k, v) for k, v in more.items()}
    return FuelUse(Place(sheet="Fuel use"), text(run_name), text(name), **fields)


def train(run_name: str, **more: Any) -> MoistureTrain:
    fields = {k: _field(k, v) for k, v in more.items()}
    return MoistureTrain(Place(sheet="Moisture", cell=run_name), text(run_name), **fields)


def event(clock: str, what: str, *, until: str = "", excluded: bool = False, **more: Any) -> Event:
    fields = {k: _field(k, v) for k, v in more.items()}
    if until:
        fields["until"] = moment(until)
    return Event(
        Place(sheet="Events", cell=clock), moment(clock), text(what), readings_excluded=Given(excluded), **fields
    )


def limit(name: str = "L1", pollutant: str = "NOx", value: float = 50.0, unit: str = "ppm", **more: Any) -> Limit:
    """A limit with authority, citation and date; dry unless `wet` or `moisture_basis` says otherwise."""
    written = more.pop("written", f"{value:g}")
    fields = {
        "relation": "at most",
        "moisture_basis": Given(MoistureBasis.WET if more.pop("wet", False) else MoistureBasis.DRY),
        "authority": "Invented Air Office",
        "citation": "Permit 1, condition 2",
        "in_force_from": date(2020, 1, 1),
    } | more
    return Limit(
        Place(sheet="Limits", cell=name),
        text(name),
        text(pollutant),
        Given(value, text=written),
        Given(read_unit(unit)),
        **{key: _field(key, value) for key, value in fields.items()},
    )


def identity(**more: Any) -> Test:
    fields = {"reading_stamp": "interval end", "logging_interval": number(1.0, "min")} | more
    return Test(
        facility=text("Invented Works"),
        unit_tested=text("Boiler 1"),
        authority=text("Invented Air Office"),
        testing_firm=text("Invented Testing"),
        test_lead=text("A. Nobody"),
        test_date=Given(DAY),
        time_zone=text("UTC"),
        **{key: _field(key, value) for key, value in fields.items()},
    )


def record(**parts: Any) -> Record:
    """The whole record; parts given replace the usual ones."""
    usual: dict[str, Any] = {
        "test": identity(),
        "channels": tuple(channel(name) for name in CHANNELS),
        "readings": readings(),
        "runs": runs(),
        "cylinders": cylinders(),
        "calibrations": calibrations(),
        "source": SourceFile("made.xlsx", "0" * 64, 1),
    }
    return Record(**(usual | parts))


def recalibrated(made: Record, clock: str, name: str, reading_value: float, level: str = "") -> Record:
    """The record with another reading of the calibration at a time (of a level, where two share a time)."""
    changed = tuple(
        replace(row, reading=number(reading_value))
        if row.time.value == at(clock) and row.channel.value == name and level in ("", row.level.value.value)
        else row
        for row in made.calibrations
    )
    assert changed != made.calibrations, "no such calibration, or the same reading"
    return replace(made, calibrations=changed)


def without_calibrations(made: Record, name: str, *clocks: str) -> Record:
    """The record without some calibration readings of a channel."""
    times = {at(clock) for clock in clocks}
    kept = tuple(r for r in made.calibrations if r.channel.value != name or r.time.value not in times)
    return replace(made, calibrations=kept)


def added(made: Record, *rows: Calibration) -> Record:
    """The record with further calibration readings."""
    return replace(made, calibrations=made.calibrations + rows)


def rerun(made: Record, name: str, **more: Any) -> Record:
    """The record with other fields in one run."""
    fields = {key: _field(key, value) for key, value in more.items()}
    return replace(made, runs=tuple(replace(r, **fields) if r.run.value == name else r for r in made.runs))


def assessed(**parts: Any) -> Outcome:
    """The outcome of a record of these parts."""
    return assess(record(**parts))


def value(outcome: Outcome, key: str) -> float:
    """The number of a ledger key."""
    return float(outcome.ledger[key].value)


def codes(outcome: Outcome) -> list[str]:
    """Codes of all problems, each as often as it was found."""
    return [problem.code for problem in outcome.problems]


def said(outcome: Outcome, words: str) -> bool:
    """Whether the report states a sentence with these words."""
    return any(words in sentence for sentence in outcome.stated)


def comparison(outcome: Outcome, name: str = "l1") -> Comparison:
    """The comparison of a limit by its key."""
    return next(c for c in outcome.comparisons if c.key == f"comparison.{name}")


def is_valid(outcome: Outcome, run_name: str, segment: str = "nox") -> bool:
    """Whether a gas of a run is valid."""
    found = outcome.run(run_name).gas(segment)
    assert found is not None
    assert found.is_valid == (outcome.ledger[found.valid].value == 1.0)
    return found.is_valid
