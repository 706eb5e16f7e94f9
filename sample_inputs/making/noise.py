"""Repeatable noise: built on ``random.Random.random`` alone, whose sequence Python guarantees."""

from __future__ import annotations

import math
import random
from collections.abc import Sequence
from itertools import pairwise


class Noise:
    """Random numbers of one sample, the same on every machine."""

    def __init__(self, seed: int) -> None:
        self._random = random.Random(seed)

    def normal(self) -> float:
        """A number of mean 0 and standard deviation 1 (sum of twelve uniform numbers)."""
        return sum(self._random.random() for _ in range(12)) - 6.0

    def wander(self, length: int, memory: float = 0.8) -> list[float]:
        """A minute series of standard deviation 1 in which each minute remembers the one before."""
        fresh = math.sqrt(1 - memory**2)
        series = [self.normal()]
        while len(series) < length:
            series.append(memory * series[-1] + fresh * self.normal())
        return series

    def swing(self, length: int, periods: Sequence[float] = (47.0, 19.0)) -> list[float]:
        """A slow oscillation between about -1 and 1, as a load controller gives."""
        phases = [self._random.random() * 2 * math.pi for _ in periods]
        weights = [1.0 / (i + 1) for i in range(len(periods))]
        waves = list(zip(weights, periods, phases, strict=True))
        return [sum(w * math.sin(2 * math.pi * t / p + f) for w, p, f in waves) / sum(weights) for t in range(length)]


def interpolate(knots: Sequence[tuple[float, float]], at: float) -> float:
    """Straight lines between (minute, value) points, level outside them."""
    if at <= knots[0][0]:
        return knots[0][1]
    for (t0, v0), (t1, v1) in pairwise(knots):
        if at <= t1:
            return v0 + (v1 - v0) * (at - t0) / (t1 - t0)
    return knots[-1][1]
