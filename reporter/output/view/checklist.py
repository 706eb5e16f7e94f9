"""The content checklist: what a report of this kind is asked to hold, and where it stands in this one."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from reporter.output.view.cover import is_draft
from reporter.output.view.desk import Desk
from reporter.output.view.model import BoundDocument, CheckGroup, CheckRow
from reporter.output.view.presence import count_of, is_there
from reporter.resources import templates_folder


@dataclass(frozen=True, slots=True)
class _Part:
    """One thing a line asks for: its name, where it stands (nothing: nowhere), and what the place lacks."""

    name: str
    anchors: tuple[str, ...]
    lacks: str = ""


def checklist(desk: Desk, documents: tuple[BoundDocument, ...]) -> tuple[CheckGroup, ...]:
    """All lines of `templates/checklist.toml`, each with the place where it stands or what is missing."""
    tables = tomllib.loads((templates_folder() / "checklist.toml").read_text(encoding="utf-8"))
    return tuple(
        CheckGroup(group["title"], tuple(_line(desk, row, documents) for row in group["rows"]))
        for group in tables["group"]
    )


def _line(desk: Desk, row: Mapping[str, Any], documents: tuple[BoundDocument, ...]) -> CheckRow:
    """One line: the pages of what is there, and in words what is not."""
    number, text = str(row["number"]), str(row["text"])
    if not _applies(desk, row):
        return CheckRow(number, text, (), desk.words("checklist.not_applicable"))
    asked = [part for part in row.get("parts", (row,)) if _applies(desk, part)]
    parts = [_part(desk, part, number, text, documents) for part in asked]
    listed = tuple(one.anchor for one in documents if one.sha256 and _line_of(desk, one) in {number, text.lower()})
    there = [part for part in parts if part.anchors]
    found = {*(at for part in there for at in part.anchors), *listed}
    order = ("cover", *(heading.anchor for heading in desk.headings().values()), *(one.anchor for one in documents))
    anchors = tuple(anchor for anchor in order if anchor in found)
    open_ = [part for part in parts if not part.anchors and not (listed and not there)]
    words = []
    if there and (open_ or any(part.lacks for part in there)):
        names = ", ".join(f"{part.name}{part.lacks}" for part in there)
        words.append(desk.words("checklist.in_part", parts=names))
    if open_:
        phrase = desk.words("checklist.missing" if is_draft(desk) else "checklist.separate")
        names = ", ".join(part.name for part in open_)
        words.append(f"{phrase}: {names}" if len(parts) > 1 else phrase)
    if row.get("signed") and not is_draft(desk):
        words.append(desk.words("checklist.signed"))
    return CheckRow(number, text, anchors, "; ".join(words))


def _applies(desk: Desk, row: Mapping[str, Any]) -> bool:
    return "applies" not in row or any(is_there(desk, name) for name in row["applies"])


def _part(desk: Desk, part: Mapping[str, Any], number: str, text: str, documents: Sequence[BoundDocument]) -> _Part:
    """Where one thing stands: in a section that has it, in documents bound in for it, or nowhere."""
    name = str(part["text"])
    anchors: list[str] = []
    if "section" in part and all(is_there(desk, need) for need in part.get("needs", ())):
        anchors.append("cover" if part["section"] == "cover" else f"section-{part['section']}")
    bound = [one for one in documents if one.sha256 and _bears(desk, one, part, {number, text.lower()})]
    lacks = ""
    if "each" in part and bound and len(bound) < (asked := count_of(desk, part["each"])):
        lacks = desk.words("checklist.some", count=len(bound), asked=asked)
    return _Part(name, (*anchors, *(one.anchor for one in bound[:1])), lacks)


def _bears(desk: Desk, document: BoundDocument, part: Mapping[str, Any], line: set[str]) -> bool:
    """Whether a document holds what a part asks for: by its kind, unless it names another line."""
    named = _line_of(desk, document)
    return (not named or named in line) and document.what.strip().lower() in part.get("documents", ())


def _line_of(desk: Desk, document: BoundDocument) -> str:
    """The line of this list a document was entered for, in lower case; nothing where none was named."""
    for attachment in desk.outcome.record.attachments:
        if attachment.file.value == document.file and attachment.content_line is not None:
            return attachment.content_line.value.strip().lower()
    return ""
