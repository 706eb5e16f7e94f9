"""The working book of a reduction: ledger, problems, checks and stated assumptions while they grow."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from reporter.basis import NO_BASIS, Basis
from reporter.conversions import convert_entry
from reporter.equation import Citation, Equation, System
from reporter.errors import EquationError
from reporter.gases import Gas, find_gas, gas
from reporter.ledger import Entry, FromCells, FromTable, Given, Ledger, Stated
from reporter.outcome import CalibrationPoint, Check, Finding
from reporter.problems import Place, Problem, problem
from reporter.record import Channel, Real, Record, Run


@dataclass
class Book:
    """What the stages of a reduction share."""

    record: Record
    ledger: Ledger
    problems: list[Problem] = field(default_factory=list)
    known: set[Problem] = field(default_factory=set)
    checks: list[Check] = field(default_factory=list)
    stated: list[str] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)
    points: list[CalibrationPoint] = field(default_factory=list)

    @property
    def system(self) -> System:
        """Unit system of the test."""
        return self.ledger.system

    def unit(self, us: str, si: str) -> str:
        """The one of two units that belongs to the test's unit system."""
        return us if self.system is System.US else si

    def given(
        self,
        key: str,
        value: Real,
        unit: str,
        *,
        basis: Basis = NO_BASIS,
        note: str = "",
        decimals: int | None = None,
    ) -> Entry:
        """Enter a number from the input in `unit`; where it was entered in another unit, the number as
        entered and the conversion are two entries."""
        found = self.ledger.get(key)
        if found is not None:
            return found
        origin = FromCells(value.place, value.text)
        entered = value.unit.unit if value.unit is not None else unit
        if entered == unit:
            return self.ledger.enter(key, value.value, unit, origin, basis=basis, note=note, decimals=decimals)
        raw = self.ledger.enter(f"{key}.as_entered", value.value, entered, origin, basis=basis)
        return convert_entry(self.ledger, key, raw, unit)

    def given_duration(self, run: Run) -> Entry:
        """The length of a run in minutes."""
        key = f"run.{run.key}.duration"
        found = self.ledger.get(key)
        if found is not None:
            return found
        minutes = (run.end.value - run.start.value).total_seconds() / 60.0
        words = f"{run.start.text} to {run.end.text}"
        return self.ledger.enter(key, minutes, "min", FromCells(_both(run), words))

    def table(self, key: str, value: float, unit: str, citation: Citation, *, row: str = "") -> Entry:
        """Enter a number from a published table, once."""
        found = self.ledger.get(key)
        return found or self.ledger.enter(key, value, unit, FromTable(citation, row))

    def state(self, key: str, value: float, unit: str, reason: str, *, basis: Basis = NO_BASIS) -> Entry:
        """Enter a number that rests on a stated rule, once; the report says so."""
        found = self.ledger.get(key)
        if found is not None:
            return found
        return self.ledger.enter(key, value, unit, Stated(reason), basis=basis)

    def apply(self, eq: Equation[Any], key: str, inputs: Mapping[str, Given], **more: Any) -> Entry:
        """Compute and record; the entry there already is given back."""
        found = self.ledger.get(key)
        return found or self.ledger.apply(eq, key, inputs, **more)

    def attempt(self, eq: Equation[Any], key: str, inputs: Mapping[str, Given], **more: Any) -> Entry | None:
        """As `apply`, but None where the equation has no finite value; the report then says why."""
        try:
            return self.apply(eq, key, inputs, **more)
        except EquationError as error:
            self.say(f"{key} has no value: {error.message}")
            return None

    def trouble(
        self,
        code: str,
        place: Place | None = None,
        found: str = "",
        *,
        expected: str = "",
        remedy: str = "",
        concerns: tuple[str, ...] = (),
    ) -> Problem:
        """Note a problem, once."""
        made = problem(code, place, found, expected=expected, remedy=remedy, concerns=concerns)
        if made not in self.known:
            self.known.add(made)
            self.problems.append(made)
        return made

    def say(self, sentence: str) -> None:
        """Note an assumption the report must state, once."""
        if sentence not in self.stated:
            self.stated.append(sentence)

    def file_place(self) -> Place:
        """The input as a whole."""
        return Place(file=self.record.source.name)


def _both(run: Run) -> Place:
    """Start and end of a run as one place."""
    start, end = run.start.place, run.end.place
    cells = f"{start.cell}, {end.cell}" if end.cell and end.cell != start.cell else start.cell
    return Place(start.file, start.sheet, cells, f"{start.field}, {end.field}")


@dataclass(frozen=True, slots=True)
class Lane:
    """One channel of the record with what the reduction calls it: gas, key segment, unit of its readings."""

    channel: Channel
    gas: Gas
    segment: str

    @property
    def unit(self) -> str:
        """Unit of the readings."""
        return self.channel.unit.value.unit

    @property
    def name(self) -> str:
        """Name of the channel on the sheets."""
        return self.channel.channel.value

    def key(self, run: Run, quantity: str) -> str:
        """A ledger key of this channel in a run."""
        return f"run.{run.key}.{self.segment}.{quantity}"


def lanes(record: Record) -> tuple[Lane, ...]:
    """The channels with their key segments: the gas for the first channel of a gas, else the channel's name."""
    taken: set[str] = set()
    made: list[Lane] = []
    for channel in record.channels:
        measured = gas(channel.gas.value)
        segment = measured.key
        if segment in taken:
            segment = channel.key if find_gas(channel.channel.value) is None else f"{measured.key}_{channel.key}"
        while segment in taken:
            segment += "_2"
        taken.add(segment)
        made.append(Lane(channel, measured, segment))
    return tuple(made)


def runs_in_order(record: Record) -> tuple[Run, ...]:
    """The runs by start."""
    return tuple(sorted(record.runs, key=lambda run: run.start.value))
