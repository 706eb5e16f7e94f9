"""The JSON Schema of the results file, published with the package."""

from __future__ import annotations

import json
from typing import Any

from reporter.resources import table_text

#: Names the form of the results file; a change that breaks a reader gets another number.
SCHEMA_ID = "urn:fluebook:results:1"


def results_schema() -> dict[str, Any]:
    """The schema (draft 2020-12) of what `reporter.output.data.to_json` writes."""
    schema: dict[str, Any] = json.loads(table_text("results_schema.json"))
    return schema
