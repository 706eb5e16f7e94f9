"""References, statements, cautions."""

from __future__ import annotations

from reporter.output.numbers import capital, formulas
from reporter.output.view.cover import report_number
from reporter.output.view.desk import Desk, said
from reporter.output.view.model import Block, Column, Row, Table
from reporter.output.view.standing import cited_documents
from reporter.references import Reference, bibliography

#: The edition of what has none: a definition, a law of nature, a practice.
_NO_EDITION = "general"


def references(desk: Desk) -> tuple[Block, ...]:
    """The documents that entries and criteria of this test cite, with their editions."""
    cited = cited_documents(desk)
    rows = [
        Row((reference.short, formulas(". ".join(part for part in _parts(reference) if part))))
        for reference in bibliography().values()
        if reference.id in cited
    ]
    columns = (Column("Cited as", width=1.3), Column("Document, edition", width=7))
    return (Block(text=(desk.words("lead.references"),), tables=(Table(columns, tuple(rows)),)),)


def _parts(reference: Reference) -> tuple[str, str, str]:
    """Title, edition where there is one, and what was confirmed of it."""
    edition = "" if reference.edition == _NO_EDITION else capital(reference.edition)
    return reference.title, edition, reference.note.rstrip(".")


def statements(desk: Desk, attached: tuple[str, ...]) -> tuple[str, ...]:
    """The statements of every report; what is attached to this one."""
    names = ("limits", "no_decision", "review", "items", "copy", "corrections", "representative", "rounding", "methods")
    made = [desk.words(f"statements.{name}") for name in names]
    made.append(desk.words("statements.computed", version=desk.version))
    if attached:
        made.append(desk.words("statements.attached", names=", ".join(attached)))
    if said(desk.outcome.record.test.revision, "0") not in {"0", ""}:
        made.append(desk.words("status.supplement", number=report_number(desk)))
    return tuple(made)


def cautions(desk: Desk) -> tuple[str, ...]:
    """The usual cautions for work at a stack."""
    return tuple(words for name, words in desk.phrases.all("cautions").items() if name != "title")
