"""Documents of the Attachments sheet: read from the folder of the field workbook, hashed, paged, lettered."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass

from reporter.output.view.desk import Desk
from reporter.output.view.model import BoundDocument

_PICTURES = {b"\x89PNG\r\n\x1a\n": "png", b"\xff\xd8\xff": "jpg"}
_PDF = b"%PDF-"


@dataclass(frozen=True, slots=True)
class Document:
    """A file to bind in: its bytes, and its pages where it can be read (one for a picture, else 0)."""

    content: bytes
    pages: int


def kind_of(content: bytes) -> str:
    """``pdf``, ``png``, ``jpg``, or nothing for a file that cannot be bound in; by content, not by name."""
    if content.startswith(_PDF):
        return "pdf"
    return next((kind for start, kind in _PICTURES.items() if content.startswith(start)), "")


def documents(desk: Desk, files: Mapping[str, Document]) -> tuple[BoundDocument, ...]:
    """The documents in the order of the sheet, each with its letter; `files` by the name on the sheet."""
    return tuple(
        _bound(desk, letter_of(at), attachment.file.value, attachment.what.value, files.get(attachment.file.value))
        for at, attachment in enumerate(desk.outcome.record.attachments)
    )


def letter_of(at: int) -> str:
    """``A`` to ``Z``, then ``AA`` and so on."""
    letters = ""
    at += 1
    while at:
        at, rest = divmod(at - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters


def _bound(desk: Desk, letter: str, file: str, what: str, found: Document | None) -> BoundDocument:
    anchor = f"document-{letter}"
    if found is None:
        return BoundDocument(anchor, letter, file, what, "", 0, "", desk.words("missing.file"))
    digest = hashlib.sha256(found.content).hexdigest()
    kind = kind_of(found.content)
    if kind in _PICTURES.values() and found.pages:
        return BoundDocument(anchor, letter, file, what, digest, 1, f"bound/{letter}.{kind}", "")
    if kind == "pdf" and found.pages:
        return BoundDocument(anchor, letter, file, what, digest, found.pages, "", "")
    remark = desk.words("missing.unreadable" if kind else "missing.other_kind")
    return BoundDocument(anchor, letter, file, what, digest, 0, "", remark)


def certificate_cylinders(desk: Desk) -> tuple[str, ...]:
    """Cylinders that have a certificate to bind in: all but those that hold zero gas alone."""
    rows = desk.outcome.record.cylinders
    return tuple(dict.fromkeys(row.cylinder.value for row in rows if row.certified_value.value != 0.0))
