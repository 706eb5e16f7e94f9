"""The synthetic analyzers: adjustment, drift, sampling system, response time, noise; cylinders and what they hold.

An analyzer is adjusted at its high gas as certified, so an error of that certificate is in every reading.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from reporter.gases import Gas, gas
from reporter.rehearse.order import Fault, Order, settings
from reporter.rehearse.stack import Stack
from reporter.rehearse.timetable import NO2, ZERO, Injection, cylinder_of

#: Time constants of the 95 % response time.
RESPONSE = 3.0
_EITHER_WAY = ("gain", "zero", "gain_per_hour", "zero_per_hour", "system_zero")


@dataclass(frozen=True, slots=True)
class CylinderGas:
    """One gas of a cylinder: certified, and what it really holds [% or ppm], certificate's uncertainty [%]."""

    cylinder: str
    gas: Gas
    certified: float
    content: float
    uncertainty: float


@dataclass(frozen=True, slots=True)
class Analyzer:
    """One channel: gas, span [% or ppm], decimals stored; errors as fractions, noise and zeros in its unit."""

    gas: Gas
    span: float
    decimals: int
    gain: float
    zero: float
    gain_per_hour: float
    zero_per_hour: float
    system_gain: float
    system_zero: float
    noise: float
    check_noise: float
    seconds: float
    converter: float

    def shown(self, value: float, hours: float, *, system: bool) -> float:
        """What it settles at for a value, `hours` after the start of the log, without noise and faults."""
        at_inlet = value * (1 + self.system_gain) + self.system_zero if system else value
        return at_inlet * (self.gain + self.gain_per_hour * hours) + self.zero + self.zero_per_hour * hours


def high_gases(order: Order, stack: Mapping[str, float]) -> dict[str, float]:
    """Certified value of the high gas of each channel [% or ppm], from what the stack is expected to show."""
    rule, found = settings()["cylinder"], {}
    for one in order.measured:
        odd = 1 + rule["odd"] / 100 * order.random(f"high/{one.label}").random()
        value = max(rule["least"][one.label], rule["high"] * stack[one.label]) * odd
        found[one.label] = _three_digits(min(value, rule["most_oxygen"]) if one.key == "o2" else value)
    return found


def upscale_levels(high: Mapping[str, float], stack: Mapping[str, float]) -> dict[str, str]:
    """The level of the system checks of each channel: mid or high, whichever is closer to the emissions."""
    mid = settings()["cylinder"]["mid"]
    return {
        label: "mid" if abs(stack[label] - mid * value) <= abs(stack[label] - value) else "high"
        for label, value in high.items()
    }


def cylinders(order: Order, high: Mapping[str, float]) -> tuple[CylinderGas, ...]:
    """All cylinders; contents differ from certificates within their uncertainty, or by the fault."""
    rule = settings()["cylinder"]
    found = [CylinderGas(ZERO, one, 0.0, 0.0, 0.0) for one in order.measured]
    for level, part in (("high", 1.0), ("mid", rule["mid"])):
        for one in order.measured:
            found.append(_filled(order, cylinder_of(one, level), one, _three_digits(part * high[one.label])))
    if "NOx" in high:
        found.append(_filled(order, NO2, gas("no2"), _three_digits(rule["no2"] * high["NOx"])))
    return tuple(found)


def _filled(order: Order, cylinder: str, one: Gas, certified: float) -> CylinderGas:
    uncertainty = float(settings()["cylinder"]["uncertainty"][one.label])
    error = uncertainty / 100 * _either_way(order, f"certificate/{cylinder}/{one.label}")
    if order.has(Fault.WRONG_CYLINDER) and cylinder == wrong_cylinder(order):
        error += settings()["fault"]["wrong-cylinder"]["share"] / 100
    return CylinderGas(cylinder, one, certified, certified * (1 + error), uncertainty)


def wrong_cylinder(order: Order) -> str:
    """The cylinder whose certificate may be wrong: the mid-level one of the diluents."""
    return cylinder_of(next(one for one in order.measured if one.is_diluent), "mid")


def drifting_gas(order: Order) -> Gas:
    """The gas whose analyzer may drift: the first pollutant."""
    return next(one for one in order.measured if not one.is_diluent)


def analyzers(order: Order, held: tuple[CylinderGas, ...]) -> tuple[Analyzer, ...]:
    """One analyzer for each gas, drawn within the ranges of the table."""
    high = {one.gas.label: one for one in held if one.cylinder == cylinder_of(one.gas, "high")}
    return tuple(_drawn(order, high[one.label]) for one in order.measured)


def _drawn(order: Order, high: CylinderGas) -> Analyzer:
    rule, span = settings()["analyzer"], high.certified
    numbers = order.random(f"analyzer/{high.gas.label}")
    drawn = {name: rule[name] / 100 * numbers.uniform(-1, 1) for name in _EITHER_WAY}
    return Analyzer(
        gas=high.gas,
        span=span,
        decimals=1 if span >= 150 else 2,
        gain=(1 + drawn["gain"]) * high.certified / high.content,
        zero=drawn["zero"] * span,
        gain_per_hour=drawn["gain_per_hour"],
        zero_per_hour=drawn["zero_per_hour"] * span,
        system_gain=numbers.uniform(*rule["system_gain"]) / 100,
        system_zero=drawn["system_zero"] * span,
        noise=rule["noise"] * span / 100,
        check_noise=rule["check_noise"] * span / 100,
        seconds=numbers.uniform(*rule["seconds"]),
        converter=numbers.uniform(*rule["converter"]) / 100,
    )


class Logger:
    """What the analyzers make of the gas that flows to them over the day."""

    def __init__(self, order: Order, stack: Stack, held: tuple[CylinderGas, ...], made: tuple[Analyzer, ...]) -> None:
        self.order, self.stack, self.day, self.analyzers = order, stack, stack.day, made
        self._contents = {(one.cylinder, one.gas.label): one.content for one in held}

    def fed(self, one: Analyzer, minute: int) -> float:
        """The gas at the inlet of a channel in a minute."""
        injection, label = self.day.injection_at(minute), one.gas.label
        if injection is not None and injection.cylinder == NO2:
            return self._contents[NO2, "NO2"] * one.converter if one.gas.key == "nox" else 0.0
        if injection is not None:
            return self._contents.get((injection.cylinder, label), 0.0)
        air = float(settings()["analyzer"]["air"].get(label, 0.0))
        if not self.day.on_stack <= minute < self.day.off_stack:
            return air
        flue = self.stack.at(minute)
        is_wet = label in self.order.wet or self.order.has(Fault.WET_CALLED_DRY)
        value = flue.wet(label) if is_wet else flue.dry[label]
        share = self._leak(minute)
        return value * (1 - share) + air * share

    def _leak(self, minute: int) -> float:
        """Share of ambient air in the sample."""
        run = self.day.runs[self.order.faulty_run - 1]
        if not self.order.has(Fault.AIR_LEAK) or not run.start <= minute < run.end:
            return 0.0
        return float(settings()["fault"]["air-leak"]["share"]) / 100

    def _drifted(self, one: Analyzer, minutes: float) -> float:
        """What a drifting analyzer adds, by time after midnight [min]: a straight line from the start of the run."""
        if not self.order.has(Fault.DRIFTING_ANALYZER) or one.gas != drifting_gas(self.order):
            return 0.0
        run = self.day.runs[self.order.faulty_run - 1]
        closed = self.day.checks_around(run)[1][0].end
        share = settings()["fault"]["drifting-analyzer"]["share"] / 100
        return float(max(0.0, (minutes - run.start) / (closed - run.start)) * share * one.span)

    def settled(self, one: Analyzer, minute: int, at: float) -> float:
        """What a channel would settle at for the gas of a minute, at a time after midnight [min]."""
        injection = self.day.injection_at(minute)
        system = injection is None or injection.route == "system"
        shown = one.shown(self.fed(one, minute), (at - self.day.start) / 60, system=system)
        return shown + self._drifted(one, at)

    def series(self, one: Analyzer) -> list[float]:
        """The logged intervals of a channel: a first-order response, averaged over each interval, with noise."""
        numbers = self.order.random(f"noise/{one.gas.label}")
        interval = self.order.interval
        step = math.gcd(interval, settings()["analyzer"]["step"])
        noise = one.noise * math.sqrt(60 / interval)
        start, total = self.day.start, (self.day.end - self.day.start) * 60
        value, logged, gathered = self.settled(one, start, start), [], 0.0
        for second in range(0, total, step):
            minute = start + second // 60
            target = self.settled(one, minute, start + second / 60)
            kept = math.exp(-step / self._seconds(one, minute))
            gathered += value + (target - value) * (1 + (1 - kept) / math.log(kept))
            value = target + (value - target) * kept
            if (second + step) % interval == 0:
                logged.append(_stored(gathered * step / interval + noise * numbers.gauss(0, 1), one.decimals))
                gathered = 0.0
        return logged

    def _seconds(self, one: Analyzer, minute: int) -> float:
        injection = self.day.injection_at(minute)
        direct = injection is not None and injection.route == "direct"
        return one.seconds * (settings()["analyzer"]["direct_share"] if direct else 1.0)

    def reading(self, one: Analyzer, injection: Injection) -> float:
        """What was written down at the end of a calibration gas."""
        before = self.settled(one, injection.start - 1, injection.start)
        target = self.settled(one, injection.start, injection.end)
        seconds = (injection.end - injection.start) * 60
        value = target + (before - target) * math.exp(-seconds / self._seconds(one, injection.start))
        numbers = self.order.random(f"check/{one.gas.label}/{injection.start}")
        return _stored(value + one.check_noise * numbers.gauss(0, 1), one.decimals)


def _either_way(order: Order, purpose: str) -> float:
    return order.random(purpose).uniform(-1, 1)


def _stored(value: float, decimals: int) -> float:
    return round(value, decimals) + 0.0


def _three_digits(value: float) -> float:
    return float(f"{value:.3g}")
