"""The day of a rehearsal: when which gas flows to the analyzers, and when the runs are.

Times are whole minutes after midnight.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import pairwise

from reporter.errors import RecordError
from reporter.gases import Gas
from reporter.rehearse.order import Order, settings

#: Cylinders: zero gas, then high and mid of the pollutants and of the diluents, then the converter gas.
ZERO, NO2 = "SYN-0", "SYN-5"
POLLUTANTS = {"high": "SYN-1", "mid": "SYN-2"}
DILUENTS = {"high": "SYN-3", "mid": "SYN-4"}
#: Levels of the gases that flow, by gas label.
Levels = Mapping[str, tuple[str, ...]]


@dataclass(frozen=True, slots=True)
class Injection:
    """One calibration gas from `start` to `end`, direct or through the system, read at its end."""

    start: int
    end: int
    cylinder: str
    level: str
    route: str
    gases: tuple[Gas, ...]


@dataclass(frozen=True, slots=True)
class RunTime:
    """One run: its number from 1, start and end."""

    number: int
    start: int
    end: int


@dataclass(frozen=True, slots=True)
class Timetable:
    """The whole day: log from `start` to `end`, probe on the stack from `on_stack` to `off_stack`."""

    start: int
    end: int
    on_stack: int
    off_stack: int
    injections: tuple[Injection, ...]
    runs: tuple[RunTime, ...]

    def injection_at(self, minute: int) -> Injection | None:
        """The calibration gas that flows in the minute that begins then."""
        return next((one for one in self.injections if one.start <= minute < one.end), None)

    def checks_around(self, run: RunTime) -> tuple[list[Injection], list[Injection]]:
        """The system injections of the check before a run, and of the one after it."""
        system = [one for one in self.injections if one.route == "system"]
        ends = [0, *(other.end for other in self.runs)]
        before = [one for one in system if ends[run.number - 1] <= one.start < run.start]
        later = [other.start for other in self.runs if other.start > run.start]
        after = [one for one in system if run.end <= one.start < (later[0] if later else self.end)]
        return before, after


def cylinder_of(gas: Gas, level: str) -> str:
    """The cylinder that holds a level of a gas."""
    if level == "zero":
        return ZERO
    return (DILUENTS if gas.is_diluent else POLLUTANTS)[level]


def timetable(order: Order, upscale: dict[str, str]) -> Timetable:
    """Lay out the day; `upscale` is the level of the system checks, ``mid`` or ``high``, by gas label.

    Raises
    ------
    RecordError
        The day does not hold the runs.
    """
    day = settings()["day"]
    now = day["start"] + day["settle"]
    direct = _steps(order, {gas.label: ("high", "mid") for gas in order.measured}, "direct", now)
    if any(gas.key == "nox" for gas in order.measured):
        nox = tuple(gas for gas in order.measured if gas.key == "nox")
        last = direct[-1].end
        direct.append(Injection(last, last + day["gas_minutes"], NO2, "NO2", "direct", nox))
    levels = {label: (level,) for label, level in upscale.items()}
    injections = [*direct, *_steps(order, levels, "system", direct[-1].end + day["settle"])]
    on_stack, runs = injections[-1].end, []
    for number in range(1, order.runs + 1):
        start = _next(injections[-1].end + day["purge"], order.grid)
        runs.append(RunTime(number, start, start + order.run_minutes))
        injections += _steps(order, levels, "system", runs[-1].end + day["pause"])
    off_stack = injections[-1].end
    end = _next(off_stack + day["tail"], order.grid)
    if end - day["start"] > day["longest"]:
        raise RecordError(
            f"{order.runs} runs of {order.run_minutes} min with their calibrations take "
            f"{(end - day['start']) / 60:.1f} h; one day holds {day['longest'] / 60:.0f} h"
        )
    return Timetable(day["start"], end, on_stack, off_stack, tuple(injections), tuple(runs))


def _next(minute: int, grid: int) -> int:
    return -(-minute // grid) * grid


def _steps(order: Order, levels: Levels, route: str, start: int) -> list[Injection]:
    """Zero gas on all channels, then each cylinder on the channels whose gas it holds."""
    wanted: list[tuple[str, str]] = [(ZERO, "zero"), *_cylinders(order, levels)]
    edges = pairwise(range(start, start + len(wanted) * settings()["day"]["gas_minutes"] + 1, _minutes()))
    made = []
    for (begin, end), (cylinder, level) in zip(edges, wanted, strict=True):
        gases = tuple(
            gas
            for gas in order.measured
            if level == "zero" or (level in levels[gas.label] and cylinder_of(gas, level) == cylinder)
        )
        made.append(Injection(begin, end, cylinder, level, route, gases))
    return made


def _minutes() -> int:
    return int(settings()["day"]["gas_minutes"])


def _cylinders(order: Order, levels: Levels) -> Iterator[tuple[str, str]]:
    for family in (POLLUTANTS, DILUENTS):
        for level, cylinder in family.items():
            if any(level in levels[gas.label] and cylinder_of(gas, level) == cylinder for gas in order.measured):
                yield cylinder, level
