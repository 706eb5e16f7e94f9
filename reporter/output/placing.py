"""Placing of names beside points, so that they cover neither points nor each other."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import hypot

from reporter.output.svg import Point

# Where the near edge of a name may stand from its point: rings [pt] of directions, the best liked first.
_RINGS = (7.0, 16.0, 26.0, 38.0, 52.0)
_DIRECTIONS = ((0.8, -0.6), (0.8, 0.6), (-0.8, -0.6), (-0.8, 0.6), (0.3, -0.95), (0.3, 0.95), (-0.3, -0.95),
               (-0.3, 0.95), (1.0, -0.2), (-1.0, -0.2))  # fmt: skip


@dataclass(frozen=True, slots=True)
class Box:
    """An area of the paper [pt]."""

    left: float
    top: float
    right: float
    bottom: float

    def shared(self, other: Box) -> float:
        """The area two boxes have in common."""
        if self.right <= other.left or other.right <= self.left:
            return 0.0
        if self.bottom <= other.top or other.bottom <= self.top:
            return 0.0
        width = min(self.right, other.right) - max(self.left, other.left)
        return width * (min(self.bottom, other.bottom) - max(self.top, other.top))

    def distance(self, point: Point) -> float:
        """From a point to the nearest point of the box."""
        x, y = point
        return hypot(max(self.left - x, 0.0, x - self.right), max(self.top - y, 0.0, y - self.bottom))


@dataclass(frozen=True, slots=True)
class Placed:
    """Where a name stands: its area, its baseline, and where a line from its point meets it."""

    box: Box
    baseline: float
    joint: Point


def place_label(
    point: Point, size: tuple[float, float], *, taken: Sequence[Box], others: Sequence[Point], frame: Box
) -> Placed:
    """The nearest place that covers least and is nearer to its own point than to the others.

    Parameters
    ----------
    point, size
        The point, and width and height of the name [pt].
    taken
        What should not be covered.
    others
        All points, this one included.
    frame
        Where the name must lie.
    """
    whole = size[0] * size[1]

    def cost(place: Placed) -> float:
        hidden = sum(place.box.shared(box) for box in taken)
        outside = whole - place.box.shared(frame)
        own = place.box.distance(point)
        confused = sum(1 for other in others if other != point and place.box.distance(other) < own)
        return round(20 * hidden + 10 * max(outside, 0.0) + 8 * confused + 0.2 * own, 3)

    return min((_place(point, size, ring, way) for ring in _RINGS for way in _DIRECTIONS), key=cost)


def _place(point: Point, size: tuple[float, float], ring: float, way: Point) -> Placed:
    width, height = size
    x, y = point[0] + ring * way[0], point[1] + ring * way[1]
    left = x + 1 if way[0] > 0 else x - width - 1
    top = y - height / 2
    return Placed(Box(left, top, left + width, top + height), top + height - 0.5, (x, y))
