"""One clean truth of twelve minutes, written in many shapes: what files hold, and what must come of each."""

from __future__ import annotations

import io
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import datetime, timedelta
from typing import Any

import openpyxl

START = datetime(2026, 4, 20, 9, 55)
O2 = (4.1, 4.25, 4.0, 3.9, 4.05, 4.4, 5.15, 5.0, 4.85, 4.7, 4.6, 4.5)
NOX = (24.1, 24.3, 23.95, 24.0, 24.6, 25.1, 26.2, 25.95, 25.4, 25.0, 24.7, 24.4)
CO = (3.2, 3.0, 2.85, 1234.5, 3.1, 3.45, 4.0, 3.9, 3.6, 3.3, 3.25, 3.05)
TRUTH = [(START + timedelta(minutes=k), NOX[k], CO[k], O2[k]) for k in range(12)]
HEADERS = ("Time", "NOx [ppm dry]", "CO [ppm dry]", "O2 [% dry]")
END = {"stamp": "interval end"}


@dataclass(frozen=True)
class Shape:
    """A file and what must come of it: the truth with these answers; without them, these questions."""

    content: bytes
    name: str = "logger.csv"
    answers: Mapping[str, str] = field(default_factory=lambda: END)
    problem: str = ""
    gaps: Sequence[int] = ()
    notes: frozenset[str] = frozenset()


def number(value: float, decimal: str = ".", group: str = "") -> str:
    """A number with its marks."""
    whole, _, part = f"{value:,.2f}".partition(".")
    return whole.replace(",", group) + decimal + part


def text(
    *,
    delimiter: str = ",",
    headers: Sequence[Sequence[str]] = (HEADERS,),
    clock: Callable[[datetime], str] = lambda t: f"{t:%Y-%m-%d %H:%M:%S}",
    show: Callable[[float], str] = number,
    above: Sequence[str] = (),
    below: Sequence[str] = (),
    order: Sequence[int] = range(12),
) -> str:
    """The truth as a text table; a clock with the delimiter inside gives two columns."""
    lines = [*above, *(delimiter.join(row) for row in headers)]
    for k in order:
        moment, *values = TRUTH[k]
        lines.append(delimiter.join([clock(moment), *map(show, values)]))
    return "\n".join([*lines, *below]) + "\n"


def csv(encoding: str = "utf-8", name: str = "logger.csv", answers: Mapping[str, str] = END, **how: Any) -> Shape:
    """A text shape that gives the truth."""
    return Shape(text(**how).encode(encoding), name, answers)


def book(fill: Callable[[Any], None], answers: Mapping[str, str] = END, **how: Any) -> Shape:
    """A workbook shape."""
    made = openpyxl.Workbook()
    fill(made)
    buffer = io.BytesIO()
    made.save(buffer)
    return Shape(buffer.getvalue(), "logger.xlsx", answers, **how)


def rows_on(sheet: Any, headers: Sequence[Any] = HEADERS, top: int = 0, rows: Sequence[Any] = TRUTH) -> None:
    """Header and rows appended to a sheet below `top` lines."""
    for k in range(top):
        sheet.append([f"title line {k + 1}"])
    sheet.append(list(headers))
    for row in rows:
        sheet.append(list(row))
