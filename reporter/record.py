"""The record of one test as data: frozen, typed, each value with the place it was read from.

Field names are the column names of the field workbook (`tables/field_sheets.toml`) in lower case with
underscores.  Values are kept as entered, in the unit they were entered in; conversion happens where the
ledger takes them up, so that each conversion is an entry of its own.  A value that was not given is None.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from datetime import date, datetime
from enum import Enum
from typing import Generic, TypeVar

from reporter.equation import System
from reporter.errors import RecordError
from reporter.ledger import slug
from reporter.logged import LoggedColumn, LoggedRows, Moments
from reporter.logged import Reading as Reading
from reporter.logged import ReadingKind as ReadingKind
from reporter.logged import ReadingRow as ReadingRow
from reporter.problems import Place
from reporter.units import ReadUnit

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Given(Generic[T]):
    """A value someone entered: value, place, the text that stood there, and its unit if it has one."""

    value: T
    place: Place = field(default_factory=Place)
    text: str = ""
    unit: ReadUnit | None = None


Text = Given[str]
Real = Given[float]
Moment = Given[datetime]


def text_of(given: Text | None, otherwise: str = "") -> str:
    """The text of an optional field."""
    return otherwise if given is None else given.value


class MoistureBasis(Enum):
    """Moisture basis of a channel or a limit."""

    DRY = "dry"
    WET = "wet"


class SamplingSystem(Enum):
    """How the sample reaches the analyzer."""

    EXTRACTIVE = "extractive"
    DILUTION = "dilution"
    IN_SITU = "in situ"


class Route(Enum):
    """Where a calibration gas is injected."""

    DIRECT = "direct"
    SYSTEM = "system"


class Level(Enum):
    """Level of a calibration gas."""

    ZERO = "zero"
    LOW = "low"
    MID = "mid"
    HIGH = "high"
    NO2 = "NO2"


class When(Enum):
    """When a calibration reading was taken, where the time alone does not decide."""

    INITIAL = "initial"
    BEFORE = "before"
    AFTER = "after"


@dataclass(frozen=True, slots=True)
class Readings:
    """The logged series: channel names, their columns' letters, and rows in time order.

    `rows` may be given as plain rows; they are kept by column (`reporter.logged`).  `made` says what the rows are where
    they were not logged so, e.g. ``means over 1 min``.
    """

    channels: tuple[str, ...]
    columns: tuple[str, ...]
    rows: Sequence[ReadingRow]
    place: Place = field(default_factory=Place)
    made: str = ""

    def __post_init__(self) -> None:
        if not isinstance(self.rows, LoggedRows):
            object.__setattr__(self, "rows", LoggedRows.of(self.rows, len(self.channels)))

    def index(self, channel: str) -> int:
        """The column index of a channel."""
        return self.channels.index(channel)

    @property
    def logged(self) -> LoggedRows:
        """The rows as they are kept: by column."""
        assert isinstance(self.rows, LoggedRows)
        return self.rows

    @property
    def times(self) -> Moments:
        """The time stamps, ascending."""
        return self.logged.times

    def column(self, channel: str) -> LoggedColumn:
        """The readings of a channel as arrays."""
        return self.logged.columns[self.index(channel)]

    def place_of(self, index: int, at: int) -> Place:
        """The cell of a reading: the column of an index, the row at a position."""
        column = self.logged.columns[index]
        source = self.sources(index)[0 if column.source is None else int(column.source[at])]
        return Place(source.file, source.sheet, f"{source.cell}{int(column.rows[at])}", self.channels[index])

    def sources(self, index: int) -> tuple[Place, ...]:
        """Where the readings of the column of an index stand: file, sheet, and the letter of its column."""
        letter = self.columns[index] if self.columns else ""
        return self.logged.columns[index].sources or (Place(self.place.file, self.place.sheet, letter),)


@dataclass(frozen=True, slots=True)
class ExtraItem:
    """A row of Test or Location that has no meaning to the program: kept and printed."""

    item: str
    entry: str
    note: str
    place: Place


@dataclass(frozen=True, slots=True)
class Test:
    """Identity of the test."""

    facility: Text
    unit_tested: Text
    authority: Text
    testing_firm: Text
    test_lead: Text
    test_date: Given[date]
    time_zone: Text
    facility_address: Text | None = None
    stack: Text | None = None
    control_equipment: Text | None = None
    capacity: Text | None = None
    permit_number: Text | None = None
    client: Text | None = None
    team: Text | None = None
    observers: Text | None = None
    reviewer: Text | None = None
    last_test_day: Given[date] | None = None
    purpose: Text | None = None
    protocol_reference: Text | None = None
    approvals: Text | None = None
    reading_stamp: Text | None = None
    logging_interval: Real | None = None
    unit_system: Text | None = None
    report_number: Text | None = None
    revision: Text | None = None
    status: Text | None = None
    clock_note: Text | None = None
    not_detected_counted_as: Text | None = None
    synthetic: Text | None = None
    extra: tuple[ExtraItem, ...] = ()

    __test__ = False


@dataclass(frozen=True, slots=True)
class Location:
    """Duct and sampling plane."""

    duct_shape: Text | None = None
    diameter: Real | None = None
    width: Real | None = None
    depth: Real | None = None
    disturbance_upstream: Real | None = None
    disturbance_downstream: Real | None = None
    ports: Text | None = None
    elevation: Real | None = None
    barometer_height: Real | None = None
    pitot_factor: Real | None = None
    extra: tuple[ExtraItem, ...] = ()


@dataclass(frozen=True, slots=True)
class FuelRow:
    """A fuel burned; an analysis is by weight."""

    place: Place
    fuel: Text
    factor_source: Text
    share_of_heat_input: Real | None = None
    carbon: Real | None = None
    hydrogen: Real | None = None
    nitrogen: Real | None = None
    sulfur: Real | None = None
    oxygen: Real | None = None
    water: Real | None = None
    ash: Real | None = None
    gross_heating_value: Real | None = None
    analysis_basis: Text | None = None
    laboratory: Text | None = None
    sample: Text | None = None


@dataclass(frozen=True, slots=True)
class FuelComponent:
    """One component of a gas fuel."""

    place: Place
    fuel: Text
    component: Text
    mole_fraction: Real


@dataclass(frozen=True, slots=True)
class FuelUse:
    """Fuel burned in a run."""

    place: Place
    run: Text
    fuel: Text
    meter_start: Real | None = None
    meter_end: Real | None = None
    rate: Real | None = None
    meter_factor: Real | None = None
    base_temperature: Real | None = None
    base_pressure: Real | None = None
    heating_value: Real | None = None
    heating_value_kind: Text | None = None


@dataclass(frozen=True, slots=True)
class Channel:
    """One analyzer channel; `gas` is a key of the gas table, `unit` of the readings."""

    place: Place
    channel: Text
    gas: Text
    unit: Given[ReadUnit]
    moisture_basis: Given[MoistureBasis]
    calibration_span: Real | None = None
    method: Text | None = None
    system: Given[SamplingSystem] | None = None
    dilution_factor: Real | None = None
    analyzer: Text | None = None
    serial_number: Text | None = None
    standard_uncertainty: Real | None = None
    detection_limit: Real | None = None
    response_time_up: Real | None = None
    response_time_down: Real | None = None

    @property
    def key(self) -> str:
        """The channel's segment of ledger keys."""
        return slug(self.channel.value)


@dataclass(frozen=True, slots=True)
class Cylinder:
    """One gas of one calibration cylinder."""

    place: Place
    cylinder: Text
    gas: Text
    certified_value: Real
    unit: Given[ReadUnit] | None = None
    kind: Text | None = None
    uncertainty: Real | None = None
    expires: Given[date] | None = None
    producer: Text | None = None
    assay_date: Given[date] | None = None
    balance_gas: Text | None = None
    pressure: Real | None = None
    certificate_number: Text | None = None


@dataclass(frozen=True, slots=True)
class Calibration:
    """One reading of a calibration gas."""

    place: Place
    time: Moment
    channel: Text
    route: Given[Route]
    level: Given[Level]
    reading: Real
    cylinder: Text | None = None
    certified_value: Real | None = None
    run: Text | None = None
    when: Given[When] | None = None


@dataclass(frozen=True, slots=True)
class Run:
    """One run."""

    place: Place
    run: Text
    start: Moment
    end: Moment
    group: Text | None = None
    load: Real | None = None
    load_unit: Text | None = None
    load_basis: Real | None = None
    output: Real | None = None
    output_kind: Text | None = None
    heat_input: Real | None = None
    heat_input_source: Text | None = None
    moisture: Real | None = None
    moisture_source: Text | None = None
    ambient_moisture: Real | None = None
    ambient_temperature: Real | None = None
    relative_humidity: Real | None = None
    stack_flow: Real | None = None
    flow_basis: Text | None = None
    flow_standard_temperature: Real | None = None
    flow_standard_pressure: Real | None = None
    stack_temperature: Real | None = None
    static_pressure: Real | None = None
    barometric_pressure: Real | None = None
    installed_monitor_mean: Real | None = None
    excluded_because: Text | None = None
    approval_reference: Text | None = None

    @property
    def key(self) -> str:
        """The run's segment of ledger keys, e.g. ``1``."""
        return slug(self.run.value)


@dataclass(frozen=True, slots=True)
class Point:
    """A sampling point visited (kept and printed)."""

    place: Place
    run: Text
    point: Text
    distance: Real | None = None
    from_time: Moment | None = None
    until: Moment | None = None


@dataclass(frozen=True, slots=True)
class MoistureTrain:
    """One condenser train of a run (Method 4)."""

    place: Place
    run: Text
    meter_volume_start: Real | None = None
    meter_volume_end: Real | None = None
    meter_factor: Real | None = None
    meter_temperature: Real | None = None
    meter_pressure: Real | None = None
    water_collected: Real | None = None
    silica_gel_gain: Real | None = None


@dataclass(frozen=True, slots=True)
class TraverseReading:
    """One pitot reading (kept and printed)."""

    place: Place
    run: Text
    point: Text
    velocity_pressure: Real
    stack_temperature: Real | None = None
    null_angle: Real | None = None


@dataclass(frozen=True, slots=True)
class ParticulateTrain:
    """One filter train of a run (kept and printed)."""

    place: Place
    run: Text
    nozzle_diameter: Real | None = None
    sampling_time: Real | None = None
    mass_collected: Real | None = None
    blank: Real | None = None
    leak_rate_before: Real | None = None
    leak_rate_after: Real | None = None
    meter_volume_start: Real | None = None
    meter_volume_end: Real | None = None
    meter_factor: Real | None = None
    meter_temperature: Real | None = None
    meter_pressure: Real | None = None
    water_collected: Real | None = None
    silica_gel_gain: Real | None = None


@dataclass(frozen=True, slots=True)
class DilutionCheck:
    """One level of a gas divider check (kept and printed)."""

    place: Place
    level: Text
    predicted: Real | None = None
    injection_1: Real | None = None
    injection_2: Real | None = None
    injection_3: Real | None = None


@dataclass(frozen=True, slots=True)
class Analysis:
    """One laboratory or bag result (kept and printed)."""

    place: Place
    run: Text
    gas: Text
    value: Real
    unit: Given[ReadUnit] | None = None
    moisture_basis: Given[MoistureBasis] | None = None
    method: Text | None = None
    sample: Text | None = None
    flag: Text | None = None


@dataclass(frozen=True, slots=True)
class ProcessLog:
    """Logged process readings: column names with units and letters, rows of (time, values) with their numbers."""

    columns: tuple[str, ...] = ()
    units: tuple[ReadUnit | None, ...] = ()
    times: tuple[datetime, ...] = ()
    values: tuple[tuple[float | str | None, ...], ...] = ()
    place: Place = field(default_factory=Place)
    letters: tuple[str, ...] = ()
    rows: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class Limit:
    """One limit as the user entered it from the permit or rule."""

    place: Place
    limit_id: Text
    pollutant: Text
    limit: Real
    unit: Given[ReadUnit]
    relation: Text | None = None
    applies_when: Text | None = None
    moisture_basis: Given[MoistureBasis] | None = None
    diluent: Text | None = None
    reference_oxygen: Real | None = None
    reference_carbon_dioxide: Real | None = None
    oxygen_constant: Real | None = None
    standard_temperature: Real | None = None
    standard_pressure: Real | None = None
    expressed_as: Text | None = None
    factor_table: Text | None = None
    mass_rate_route: Text | None = None
    averaging: Text | None = None
    runs_required: Real | None = None
    minimum_run_length: Real | None = None
    decision_rule: Text | None = None
    rounding: Text | None = None
    authority: Text | None = None
    citation: Text | None = None
    in_force_from: Given[date] | None = None
    in_force_until: Given[date] | None = None
    entered_by: Text | None = None
    entered_on: Given[date] | None = None

    @property
    def key(self) -> str:
        """The limit's segment of ledger keys."""
        return slug(self.limit_id.value)


@dataclass(frozen=True, slots=True)
class Event:
    """Something that happened."""

    place: Place
    time: Moment
    what: Text
    until: Moment | None = None
    run: Text | None = None
    readings_excluded: Given[bool] | None = None
    reason: Text | None = None


@dataclass(frozen=True, slots=True)
class Attachment:
    """A document that belongs to the report; `file` is a path relative to the field workbook."""

    place: Place
    file: Text
    what: Text
    content_line: Text | None = None


@dataclass(frozen=True, slots=True)
class SourceFile:
    """An input file: base name, SHA-256, size in bytes and its bytes."""

    name: str
    sha256: str
    size: int
    content: bytes = field(default=b"", repr=False)


@dataclass(frozen=True, slots=True)
class SheetCopy:
    """A sheet as it was read, for the report's appendix: header texts and rows of cell texts."""

    sheet: str
    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    hidden: bool = False


@dataclass(frozen=True, slots=True)
class Record:
    """The whole test as entered; `source` is the field workbook or JSON record, `sources` all files of a folder.

    `prepared` says what was done to readings and process log before they stood here: averages, clocks, units.
    """

    test: Test
    channels: tuple[Channel, ...]
    readings: Readings
    runs: tuple[Run, ...]
    location: Location = field(default_factory=Location)
    fuels: tuple[FuelRow, ...] = ()
    fuel_gas: tuple[FuelComponent, ...] = ()
    fuel_use: tuple[FuelUse, ...] = ()
    cylinders: tuple[Cylinder, ...] = ()
    calibrations: tuple[Calibration, ...] = ()
    points: tuple[Point, ...] = ()
    moisture: tuple[MoistureTrain, ...] = ()
    traverse: tuple[TraverseReading, ...] = ()
    particulate: tuple[ParticulateTrain, ...] = ()
    dilution_check: tuple[DilutionCheck, ...] = ()
    analyses: tuple[Analysis, ...] = ()
    process: ProcessLog = field(default_factory=ProcessLog)
    limits: tuple[Limit, ...] = ()
    events: tuple[Event, ...] = ()
    attachments: tuple[Attachment, ...] = ()
    source: SourceFile = field(default_factory=lambda: SourceFile("", "", 0))
    sheets: tuple[SheetCopy, ...] = ()
    sources: tuple[SourceFile, ...] = ()
    prepared: tuple[str, ...] = ()

    @property
    def inputs(self) -> tuple[SourceFile, ...]:
        """Every file the test was read from: the field workbook, and the loggers' files of a folder."""
        return self.sources or (self.source,)

    @property
    def system(self) -> System:
        """The unit system of the test (US unless entered otherwise)."""
        return System(text_of(self.test.unit_system, "US"))

    def channel(self, name: str) -> Channel:
        """The channel of that name (`RecordError` if there is none)."""
        for channel in self.channels:
            if channel.channel.value == name:
                return channel
        raise RecordError(f"no channel is named {name!r}")

    def cylinder(self, name: str, gas: str) -> Cylinder | None:
        """The certificate of a gas in a cylinder."""
        for cylinder in self.cylinders:
            if cylinder.cylinder.value == name and cylinder.gas.value == gas:
                return cylinder
        return None
