"""Cover: which test, which source, which document."""

from __future__ import annotations

from reporter.output.numbers import day
from reporter.output.view.desk import Desk, said
from reporter.output.view.model import Cover, Item, Signature
from reporter.record import Test
from reporter.synthetic import STAMP, is_synthetic, stamped


def cover(desk: Desk) -> Cover:
    """Identity of the test and of this report."""
    test = desk.outcome.record.test
    missing = desk.words("missing.text")
    return Cover(
        firm=test.testing_firm.value,
        title=desk.words("title.report"),
        unit=test.unit_tested.value,
        facility=test.facility.value,
        address=said(test.facility_address),
        days=test_days(test),
        items=_items(desk, test, missing),
        statements=tuple(desk.words(f"statements.{name}") for name in ("limits", "no_decision", "review")),
    )


def _items(desk: Desk, test: Test, missing: str) -> tuple[Item, ...]:
    rows = (
        (STAMP.capitalize(), said(test.synthetic) if is_synthetic(desk.outcome.record) else ""),
        ("Stack", said(test.stack)),
        ("Permit", said(test.permit_number, missing)),
        ("Authority", test.authority.value),
        ("Purpose", said(test.purpose, missing)),
        ("Protocol", said(test.protocol_reference, missing)),
        ("Approvals", said(test.approvals)),
        ("Client", said(test.client)),
        ("Testing firm", test.testing_firm.value),
        ("Test lead", test.test_lead.value),
        ("Team", said(test.team)),
        ("Observers", said(test.observers)),
        ("Reviewer", said(test.reviewer)),
        ("Times", f"{test.time_zone.value}{_clock(test)}"),
        ("Report number", report_number(desk)),
        ("Revision and status", f"{revision(desk)}, {status(desk)}"),
        ("Issued", issued(desk)),
        *(("Input", f"{one.name}, SHA-256 {one.sha256}") for one in desk.outcome.record.inputs),
    )
    return tuple(Item(label, text) for label, text in rows if text)


def _clock(test: Test) -> str:
    return f". {test.clock_note.value}" if test.clock_note is not None else ""


def test_days(test: Test) -> str:
    """The first test day, and the last where the test took more than one."""
    first = day(test.test_date.value)
    last = test.last_test_day
    return first if last is None or last.value == test.test_date.value else f"{first} to {day(last.value)}"


test_days.__test__ = False  # type: ignore[attr-defined]


def report_number(desk: Desk) -> str:
    """The report's number, or that it has none."""
    return said(desk.outcome.record.test.report_number, desk.words("status.no_number"))


def revision(desk: Desk) -> str:
    """Which revision this is."""
    return desk.words("status.revision", revision=said(desk.outcome.record.test.revision, "0"))


def is_draft(desk: Desk) -> bool:
    """Whether the report is a draft: unless its status was entered as final."""
    return said(desk.outcome.record.test.status, "draft") != "final"


def mark(desk: Desk) -> str:
    """What stands on every page: that the report is a draft, that the test is synthetic; nothing for neither."""
    return stamped(desk.outcome.record, desk.words("status.draft_mark") if is_draft(desk) else "")


def status(desk: Desk) -> str:
    """Draft or final, in words."""
    return desk.words("status.draft" if is_draft(desk) else "status.final")


def issued(desk: Desk) -> str:
    """The issue time."""
    return desk.issued.strftime("%Y-%m-%d %H:%M %Z").strip()


def signatures(desk: Desk) -> tuple[Signature, ...]:
    """Who certifies what."""
    test = desk.outcome.record.test
    people = (
        ("test_lead", f"{test.test_lead.value}, {test.testing_firm.value}"),
        ("laboratory", ""),
        ("owner", said(test.client)),
        ("reviewer", said(test.reviewer)),
    )
    return tuple(
        Signature(desk.words(f"certification.{who}_role"), name, desk.words(f"certification.{who}"))
        for who, name in people
    )
