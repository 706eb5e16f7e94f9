"""The one bibliography: feeds citations in code, the report's reference list and the tests."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache

from reporter.resources import table_text


@dataclass(frozen=True, slots=True)
class Reference:
    """One document: short name, title, edition, and what was confirmed of it."""

    id: str
    short: str
    title: str
    edition: str
    note: str = ""


@cache
def bibliography() -> dict[str, Reference]:
    """All references by id."""
    rows = tomllib.loads(table_text("references.toml"))
    return {key: Reference(id=key, **row) for key, row in rows.items()}


def short_name(document: str) -> str:
    """The short name of a document, for a citation in a table."""
    return bibliography()[document].short
