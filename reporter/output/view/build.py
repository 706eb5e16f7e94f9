"""The view of a test: everything the report shows, sorted, rounded and worded once."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import datetime

from reporter.equation import System
from reporter.outcome import Outcome
from reporter.output.numbers import FIGURE_SPACE
from reporter.output.phrases import Phrases, load_phrases
from reporter.output.view.calibrations import calibrations
from reporter.output.view.checklist import checklist
from reporter.output.view.closing import cautions, references, statements
from reporter.output.view.combustion import combustion
from reporter.output.view.cover import cover, mark, report_number, revision, signatures
from reporter.output.view.criteria import criteria
from reporter.output.view.desk import Desk
from reporter.output.view.documents import Document, documents
from reporter.output.view.inputs import inputs
from reporter.output.view.limits import limits
from reporter.output.view.model import Block, View
from reporter.output.view.quality import quality
from reporter.output.view.register import register
from reporter.output.view.runs import runs
from reporter.output.view.sample import sample, sample_lead, sample_run
from reporter.output.view.source import location, process
from reporter.output.view.traces import traces
from reporter.synthetic import stamped

__all__ = ["Document", "View", "build_view"]

_HASH_SHOWN = 12
#: With so many pages of documents and readings, a page number may have three digits; rows of readings on a page.
_MANY_PAGES, _ROWS_A_PAGE = 40, 50


def build_view(
    outcome: Outcome,
    issued_at: datetime,
    version: str,
    *,
    phrases: Phrases | None = None,
    files: Mapping[str, Document] | None = None,
    attached: tuple[str, ...] = (),
    minute_data: bool = False,
) -> View:
    """Make the view of an outcome.

    Parameters
    ----------
    outcome
        The assessed test.
    issued_at, version
        Issue time and program version, as printed.
    phrases
        Fixed phrases; the shipped ones where none are given.
    files
        Documents of the Attachments sheet by the name they have there.
    attached
        Names of the files attached to the report.
    minute_data
        Print the readings too.
    """
    desk = Desk(outcome, issued_at, version, phrases or load_phrases())
    bound = documents(desk, files or {})
    compared, assured = limits(desk), quality(desk)
    sections = _sections(desk, minute_data=minute_data)
    run = sample_run(desk)
    calculation = sample(desk, run)
    rows = register(desk)
    test = outcome.record.test
    more = sum(one.pages for one in bound) + len(outcome.record.readings.rows) // _ROWS_A_PAGE * minute_data
    return View(
        title=stamped(outcome.record, f"{desk.words('title.report')}, {test.unit_tested.value}, {test.facility.value}"),
        language="en",
        page="Letter" if outcome.record.system is System.US else "A4",
        draft_mark=mark(desk),
        report_number=report_number(desk),
        revision=revision(desk),
        input_hash=outcome.record.source.sha256[:_HASH_SHOWN],
        firm=test.testing_firm.value,
        headings=desk.headings(),
        cover=cover(desk),
        limits=compared,
        quality=assured,
        sections=sections,
        sample_lead=sample_lead(desk, run),
        sample=calculation,
        register=rows,
        documents=bound,
        checklist=checklist(desk, bound),
        signatures=signatures(desk),
        cautions=cautions(desk),
        statements=statements(desk, attached),
        places=dict(desk.places),
        page_room=FIGURE_SPACE * (2 if more < _MANY_PAGES else 3),
    )


def _sections(desk: Desk, *, minute_data: bool) -> dict[str, tuple[Block, ...]]:
    """The sections that are made of blocks, by name."""
    return {
        "process": process(desk),
        "location": location(desk),
        "runs": runs(desk),
        "combustion": combustion(desk),
        "traces": traces(desk),
        "criteria": criteria(desk),
        "calibrations": calibrations(desk),
        "inputs": inputs(desk, minute_data=minute_data),
        "references": references(desk),
    }
