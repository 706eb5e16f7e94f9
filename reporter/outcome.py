"""What the computation hands to the outputs: the record, the ledger, and what was found, as frozen values.

Numbers stand in the ledger alone; everything here refers to them by key.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime, timedelta
from enum import Enum

from reporter.equation import Citation
from reporter.ledger import Ledger
from reporter.problems import Grade, Problem
from reporter.record import Channel, Limit, Reading, Record, Run
from reporter.said_once import said_once


class RunState(Enum):
    """Whether a run's results count: invalid (a criterion) and excluded (the user) are different things."""

    VALID = "valid"
    INVALID = "invalid"
    EXCLUDED = "excluded by the user"


class Bearing(Enum):
    """What a problem does to the results; the value names its words in the phrase file."""

    UNREADABLE = "unreadable"
    WITHHELD = "withheld"
    NOT_COUNTED = "not_counted"
    BEARS = "blocks"
    NOTE = "note"


@dataclass(frozen=True, slots=True)
class Check:
    """One criterion as it was applied.

    `key` is the indicator entry (1 is met); `value`, `bound`, `difference`, `alternative` are keys of the
    entries compared (empty where the criterion has none).  `runs` are the runs it bears on, by key segment.
    """

    key: str
    title: str
    gas: str
    runs: tuple[str, ...]
    value: str
    bound: str
    citation: Citation
    met: bool
    consequence: str = ""
    difference: str = ""
    alternative: str = ""
    relation: str = "at most"
    decides_validity: bool = False


@dataclass(frozen=True, slots=True)
class Exclusion:
    """Readings of a run left out of its mean, and why."""

    run: str
    start: datetime
    end: datetime
    reason: str
    count: int


@dataclass(frozen=True, slots=True)
class Series:
    """The readings of one channel that a run's mean rests on, and what was left out.

    `first_row` and `last_row` are the sheet rows of the window; `used` the (time, value) pairs in the mean;
    `left_out` the others with their reading; `missing_minutes` each clock minute without a valid reading, of
    the `minutes` the run touches.
    """

    key: str
    channel: str
    used: Sequence[tuple[datetime, float]]
    left_out: tuple[tuple[datetime, Reading, str], ...]
    missing_minutes: tuple[datetime, ...]
    minutes: int
    interval: timedelta
    first_row: int
    last_row: int


@dataclass(frozen=True, slots=True)
class CalibrationPoint:
    """One calibration reading as it was used: ledger keys of reading and certified value."""

    time: datetime
    channel: str
    route: str
    level: str
    reading: str
    certified: str
    cylinder: str
    used_as: str


@dataclass(frozen=True, slots=True)
class GasResult:
    """One gas in one run.  `segment` is the gas part of its ledger keys, so that keys are
    ``run.<run>.<segment>.<quantity>``; `valid` is the key of its validity indicator."""

    gas: str
    segment: str
    channel: Channel
    run: str
    is_valid: bool
    valid: str
    reasons: tuple[str, ...]
    series: Series | None
    pollutant: bool


@dataclass(frozen=True, slots=True)
class RunResult:
    """One run: its state, why, and its gases."""

    run: Run
    key: str
    state: RunState
    reasons: tuple[str, ...]
    gases: tuple[GasResult, ...]
    exclusions: tuple[Exclusion, ...]

    @property
    def gaps(self) -> tuple[int, int]:
        """How many clock minutes lack a valid reading of a gas, and how many the run has."""
        series = [gas.series for gas in self.gases if gas.series is not None]
        missing = {minute for one in series for minute in one.missing_minutes}
        return len(missing), max((one.minutes for one in series), default=0)

    def gas(self, segment: str) -> GasResult | None:
        """The result of a gas, by key segment."""
        return next((gas for gas in self.gases if gas.segment == segment), None)


@dataclass(frozen=True, slots=True)
class Comparison:
    """One limit beside what was measured.

    Keys: `runs` the value of each run (run key segment, entry key, key of the indicator that it counts);
    `value` the unrounded average, `rounded` the compared number, `limit_key`, `margin`, `met` (1: within the
    relation as entered).  `reason` says why no comparison was made; then the keys that could not be made are
    empty.  `cross` is the key of the second route's average, where there is one.
    """

    limit: Limit
    key: str
    quantity: str
    runs: tuple[tuple[str, str, str], ...]
    value: str = ""
    rounded: str = ""
    limit_key: str = ""
    margin: str = ""
    met: str = ""
    count: str = ""
    required: str = ""
    is_met: bool | None = None
    reason: str = ""
    rounding_words: str = ""
    with_excluded: str = ""
    cross: str = ""
    cross_words: str = ""
    notes: tuple[str, ...] = ()

    @property
    def compared(self) -> bool:
        """Whether a comparison was made."""
        return self.is_met is not None


@dataclass(frozen=True, slots=True)
class Finding:
    """What the combustion balance says of a run (by key segment; empty for all runs), in words, with its keys.

    A finding worded by a phrase names it, with what its braces hold, so that a firm's own wording can replace it.
    """

    run: str
    words: str
    keys: tuple[str, ...] = ()
    phrase: str = ""
    values: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class Outcome:
    """Everything about one test."""

    record: Record
    ledger: Ledger
    runs: tuple[RunResult, ...]
    checks: tuple[Check, ...]
    comparisons: tuple[Comparison, ...]
    problems: tuple[Problem, ...]
    findings: tuple[Finding, ...] = ()
    calibration_points: tuple[CalibrationPoint, ...] = ()
    averages: tuple[str, ...] = ()
    stated: tuple[str, ...] = field(default=())

    def after(self, problems: tuple[Problem, ...]) -> Outcome:
        """The same outcome with the problems of reading the input before its own."""
        return replace(self, problems=said_once(self.record, problems, self.problems))

    def run(self, key: str) -> RunResult:
        """The run of a key segment."""
        return next(run for run in self.runs if run.key == key)

    def bearing(self, problem: Problem) -> Bearing:
        """What a problem of this outcome does: a result is said to be withheld only where it is."""
        if problem.grade is not Grade.BLOCKS:
            return Bearing.NOTE if problem.grade is Grade.NOTE else Bearing.UNREADABLE
        made = {one.key: one.compared for one in self.comparisons}
        if any(not made.get(key, True) for key in problem.concerns):
            return Bearing.WITHHELD
        if problem.concerns and not any(key in made or key in self.ledger for key in problem.concerns):
            return Bearing.WITHHELD
        invalid = tuple(f"run.{run.key}.{gas.segment}." for run in self.runs for gas in run.gases if not gas.is_valid)
        if any(key.startswith(invalid) for key in problem.concerns):
            return Bearing.NOT_COUNTED
        return Bearing.BEARS

    @property
    def worst(self) -> Grade | None:
        """The gravest grade among the problems."""
        order = (Grade.UNREADABLE, Grade.BLOCKS, Grade.NOTE)
        return next((grade for grade in order if any(p.grade is grade for p in self.problems)), None)
