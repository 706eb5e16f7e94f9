"""The content checklist: what a report of this kind is asked to hold, and where it stands in this one."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from typing import Any

from reporter.output.view.cover import is_draft
from reporter.output.view.desk import Desk
from reporter.output.view.model import BoundDocument, CheckGroup, CheckRow
from reporter.record import Record
from reporter.resources import templates_folder


def checklist(desk: Desk, documents: tuple[BoundDocument, ...]) -> tuple[CheckGroup, ...]:
    """All lines of `templates/checklist.toml`, each with the place where it stands or what is missing."""
    tables = tomllib.loads((templates_folder() / "checklist.toml").read_text(encoding="utf-8"))
    return tuple(
        CheckGroup(group["title"], tuple(_line(desk, row, documents) for row in group["rows"]))
        for group in tables["group"]
    )


def _line(desk: Desk, row: Mapping[str, Any], documents: tuple[BoundDocument, ...]) -> CheckRow:
    """One line: a bound document wins, then the section; else it is missing or does not apply."""
    number, text = str(row["number"]), str(row["text"])
    record = desk.outcome.record
    bound = [document for document in documents if _bears(desk, document, row)]
    if bound:
        return CheckRow(number, text, bound[0].anchor, "" if bound[0].pages else bound[0].remark)
    if "applies" in row and not any(_present(record, name) for name in row["applies"]):
        return CheckRow(number, text, "", desk.words("checklist.not_applicable"))
    needs = row.get("needs", ())
    section = row.get("section", "")
    if section and all(_present(record, name) for name in needs):
        remark = desk.words("checklist.signed") if row.get("signed") and not is_draft(desk) else ""
        return CheckRow(number, text, f"section-{section}" if section != "cover" else "cover", remark)
    if is_draft(desk):
        lacking = [_field_words(name) for name in needs if not _present(record, name)]
        words = desk.words("checklist.missing")
        return CheckRow(number, text, "", f"{words}: {', '.join(lacking)}" if lacking else words)
    return CheckRow(number, text, "", desk.words("checklist.separate"))


def _bears(desk: Desk, document: BoundDocument, row: Mapping[str, Any]) -> bool:
    """Whether a document was listed for this line: by the line's number, or by words of it."""
    for attachment in desk.outcome.record.attachments:
        if attachment.file.value != document.file:
            continue
        line = attachment.content_line.value.strip().lower() if attachment.content_line is not None else ""
        if line == str(row["number"]) or (line and line == str(row["text"]).lower()):
            return True
        if not line and attachment.what.value.strip().lower() in row.get("documents", ()):
            return True
    return False


def _present(record: Record, name: str) -> bool:
    """Whether a field is filled: ``test.client``, ``runs.load`` (in every run), ``cylinders`` (any row)."""
    table, _, rest = name.partition(".")
    value = getattr(record, table)
    if not rest:
        return bool(getattr(value, "times", value))
    if isinstance(value, tuple):
        return bool(value) and all(getattr(row, rest) is not None for row in value)
    return getattr(value, rest) is not None


def _field_words(name: str) -> str:
    table, _, rest = name.partition(".")
    return f"{rest.replace('_', ' ')} ({table})" if rest else f"sheet {table.replace('_', ' ').capitalize()}"
