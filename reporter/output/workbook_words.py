"""Titles, notes and columns of the results workbook's sheets, from `tables/workbook.toml`."""

from __future__ import annotations

import tomllib
from functools import cache
from typing import Any

from reporter.output.workbook_book import Column
from reporter.resources import table_text


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(table_text("workbook.toml"))


def words(sheet: str) -> dict[str, Any]:
    """Everything that is written on a sheet and is not data."""
    return dict(_table()[sheet])


def columns(sheet: str, part: str = "columns") -> tuple[Column, ...]:
    """The columns of a sheet's table."""
    return tuple(Column(**row) for row in words(sheet)[part])
