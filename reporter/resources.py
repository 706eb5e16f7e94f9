"""Where the package's data files and templates lie, in a checkout and in an installed wheel."""

from __future__ import annotations

from functools import cache
from pathlib import Path

PACKAGE = Path(__file__).resolve().parent


@cache
def table_text(name: str) -> str:
    """The text of a data file of `reporter/tables`."""
    return (PACKAGE / "tables" / name).read_text(encoding="utf-8")


@cache
def templates_folder() -> Path:
    """The shipped templates: inside the package when installed, beside it in a checkout."""
    inside = PACKAGE / "templates"
    return inside if inside.is_dir() else PACKAGE.parent / "templates"
