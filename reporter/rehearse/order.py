"""What is asked of a rehearsal: fuel, gases, runs, profile, fault, seed; and the table it is made from."""

from __future__ import annotations

import math
import tomllib
from dataclasses import dataclass
from enum import Enum
from functools import cache
from random import Random
from typing import Any

from reporter.combustion.fuel import Fuel
from reporter.combustion.fuel_entries import amounts
from reporter.combustion.parse import fuel_from_text
from reporter.equation import System
from reporter.errors import RecordError
from reporter.gases import Gas, find_gas
from reporter.resources import table_text
from reporter.synthetic import MARK

#: The gases a rehearsal knows.
KNOWN = ("NOx", "CO", "SO2", "O2", "CO2")
#: Logging intervals [s] that fit the minute, and those of whole minutes that fit the hour.
INTERVALS = (1, 2, 3, 4, 5, 6, 10, 12, 15, 20, 30, 60, 120, 180, 240, 300, 600, 900)
MOST_RUNS, LONGEST_RUN, SHORTEST_RUN = 9, 480, 15
#: Dry oxygen [%] a rehearsal may be asked for.
OXYGEN = (1.0, 18.0)


class Profile(Enum):
    """How the load goes over the day."""

    STEADY = "steady"
    RAMP = "ramp"
    SWING = "swing"


class Fault(Enum):
    """The one thing that may be wrong."""

    AIR_LEAK = "air-leak"
    DRIFTING_ANALYZER = "drifting-analyzer"
    WRONG_CYLINDER = "wrong-cylinder"
    WET_CALLED_DRY = "wet-called-dry"
    WRONG_FUEL = "wrong-fuel"
    CLOCK_SHIFT = "clock-shift"


@cache
def settings() -> dict[str, Any]:
    """The table of what a rehearsal is made of."""
    return tomllib.loads(table_text("rehearse.toml"))


@dataclass(frozen=True, slots=True)
class Order:
    """A rehearsal as ordered.

    `fuel` is a published name or a composition; `gases` are labels; `run_minutes` [min], `oxygen` [% dry],
    `interval` [s].  `wet` are the labels of gases read on wet gas; `stamp` is ``interval start`` or ``interval end``,
    `zone` what the sheet Test says of the clock: both are the shape's of a firm's logger.  The same order gives
    the same bytes.

    Raises
    ------
    RecordError
        An entry is unknown, out of range, or does not go with another.
    """

    fuel: str = "natural gas"
    gases: tuple[str, ...] = ("NOx", "CO", "O2", "CO2")
    runs: int = 3
    run_minutes: int = 60
    system: System = System.US
    oxygen: float = 4.0
    profile: Profile = Profile.STEADY
    interval: int = 60
    fault: Fault | None = None
    seed: int = 1
    wet: tuple[str, ...] = ()
    stamp: str = "interval start"
    zone: str = "UTC"

    def __post_init__(self) -> None:
        heated(self.entered_fuel)
        if not any(gas.is_diluent for gas in self.measured):
            raise RecordError("a rehearsal needs O2 or CO2 among its gases")
        if all(gas.is_diluent for gas in self.measured):
            raise RecordError("a rehearsal needs a pollutant among its gases: NOx, CO or SO2")
        if self.wet and self.has(Fault.WET_CALLED_DRY):
            raise RecordError("channels that are called wet cannot be wet called dry")
        _within("the number of runs", self.runs, 1, MOST_RUNS)
        _within("the length of a run in minutes", self.run_minutes, SHORTEST_RUN, LONGEST_RUN)
        _within("the oxygen in percent", self.oxygen, *OXYGEN)
        if self.interval not in INTERVALS:
            raise RecordError(f"an interval of {self.interval} s was asked for; one of {INTERVALS} is expected")
        if self.run_minutes * 60 % self.interval:
            raise RecordError(f"a run of {self.run_minutes} min does not hold a whole number of {self.interval} s")

    @property
    def measured(self) -> tuple[Gas, ...]:
        """The gases, in the order named."""
        found: list[Gas] = []
        for name in self.gases:
            gas = find_gas(name)
            if gas is None or gas.label not in KNOWN:
                raise RecordError(f"the gas {name!r} is not one a rehearsal knows: {', '.join(KNOWN)}")
            if gas in found:
                raise RecordError(f"the gas {name!r} is named twice")
            found.append(gas)
        return tuple(found)

    @property
    def entered_fuel(self) -> Fuel:
        """The fuel as the workbook declares it."""
        return fuel_from_text(self.fuel)

    @property
    def faulty_run(self) -> int:
        """The number of the run that a fault of one run is put into: the middle one."""
        return self.runs // 2 + 1

    def random(self, purpose: str) -> Random:
        """Random numbers for one purpose, the same for the same seed whatever else is drawn."""
        return Random(f"{self.seed}/{purpose}")

    def has(self, fault: Fault) -> bool:
        """Whether this fault was asked for."""
        return self.fault is fault

    @property
    def mark(self) -> str:
        """The entry of the item Synthetic."""
        return f"yes, {MARK}, seed {self.seed}"

    @property
    def grid(self) -> int:
        """Runs start at a multiple of so many minutes, so that logged intervals fit them."""
        return math.lcm(int(settings()["day"]["grid"]), max(1, self.interval // 60))


def heated(fuel: Fuel) -> Fuel:
    """The fuel, if its heating value is known.

    Raises
    ------
    RecordError
        It is not.
    """
    if amounts(fuel).gross_heating_value is None:
        raise RecordError(f"{fuel.name}: a rehearsal needs the gross heating value, for example HHV 45.0 MJ/kg")
    return fuel


def _within(what: str, value: float, least: float, most: float) -> None:
    if not least <= value <= most:
        raise RecordError(f"{what} is {value:g}; it must be from {least:g} to {most:g}")
