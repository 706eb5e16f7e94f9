"""The report as a PDF: the pages to lay out, the files to enclose, the documents to bind in.

Dates inside the file are the issue time, so that equal input gives equal bytes.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from reporter.outcome import Outcome
from reporter.output.phrases import Phrases, load_phrases
from reporter.output.renderer import Enclosure, Pages, Renderer
from reporter.output.view.build import Document, build_view
from reporter.output.view.documents import kind_of
from reporter.paths import attachment_path

#: Largest document bound in [bytes], and picture [pixels].
_LARGEST = 100_000_000
_MOST_PIXELS = 60_000_000


@dataclass(frozen=True, slots=True)
class PdfOptions:
    """A firm's template folder; the folder of the documents to bind in; whether readings are printed."""

    templates: Path | None = None
    folder: Path | None = None
    minute_data: bool = False


def render_pdf(
    outcome: Outcome,
    *,
    issued: datetime,
    version: str,
    enclosed: Mapping[str, bytes] | None = None,
    options: PdfOptions | None = None,
) -> bytes:
    """The report of a test as PDF bytes (variant PDF/A-3u, tagged), made in this process.

    Parameters
    ----------
    outcome
        The assessed test.
    issued, version
        Issue time and program version, printed.
    enclosed
        Result files to attach, by name; the field workbook is attached too.
    options
        Templates, documents, minute readings.

    Raises
    ------
    OutputError
        A template, phrase, picture or document cannot be used.
    """
    chosen, results = options or PdfOptions(), enclosed or {}
    renderer = Renderer()
    renderer.lay_out(
        pages_of(outcome, tuple(results), issued=issued, version=version, options=chosen), chosen.templates
    )
    return renderer.finish(enclosures(outcome, results, load_phrases(chosen.templates)))


def pages_of(outcome: Outcome, results: Sequence[str], *, issued: datetime, version: str, options: PdfOptions) -> Pages:
    """What is to be laid out; `results` are the names of the result files that will be attached."""
    phrases = load_phrases(options.templates)
    documents = {
        item.file.value: document
        for item in outcome.record.attachments
        if (document := _document(options.folder, item.file.value)) is not None
    }
    view = build_view(
        outcome,
        issued,
        version,
        phrases=phrases,
        files=documents,
        attached=(*(one.name for one in outcome.record.inputs if one.content), *results),
        minute_data=options.minute_data,
    )
    return Pages(
        view,
        phrases,
        issued,
        {one.picture: documents[one.file].content for one in view.documents if one.picture},
        {
            one.anchor: (documents[one.file].content, one.pages)
            for one in view.documents
            if one.pages and not one.picture
        },
    )


def enclosures(outcome: Outcome, results: Mapping[str, bytes], phrases: Phrases) -> tuple[Enclosure, ...]:
    """The files attached: every input, then the result files by name."""
    inputs = [one for one in outcome.record.inputs if one.content]
    return (
        *(Enclosure(one.name, one.content, "Source", phrases("files.source")) for one in inputs),
        *(Enclosure(name, content, "Data", phrases("files.data")) for name, content in results.items()),
    )


def _document(folder: Path | None, name: str) -> Document | None:
    """A file of the Attachments sheet, only from below the folder of the field workbook."""
    if folder is None:
        return None
    path = attachment_path(folder, name)
    if path is None or path.stat().st_size > _LARGEST:
        return None
    content = path.read_bytes()
    kind = kind_of(content)
    if kind != "pdf":
        return Document(content, 1 if kind and _sound_picture(content) else 0)
    from reporter.output.binding import page_count

    return Document(content, page_count(content))


def _sound_picture(content: bytes) -> bool:
    """Whether a picture can be read whole and is not larger than a page could show."""
    from io import BytesIO

    from PIL import Image

    try:
        with Image.open(BytesIO(content)) as picture:
            if picture.width * picture.height > _MOST_PIXELS:
                return False
            picture.load()
    except Exception:  # whatever a damaged picture does to its reader
        return False
    return True
