"""The report as a PDF: pages from the templates, files attached, documents bound in.

Nothing is fetched: the renderer reads the template folders, the font package and the documents given, and
refuses every other address.  Dates inside the file are the issue time, so that equal input gives equal bytes.
"""

from __future__ import annotations

import mimetypes
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Any

from reporter.errors import OutputError
from reporter.outcome import Outcome
from reporter.output.linking import add_links, settle
from reporter.output.packing import pack
from reporter.output.pages import elements_text, page_text, style_text, well_formed
from reporter.output.phrases import Phrases, load_phrases
from reporter.output.view import Document, View, build_view
from reporter.output.view.documents import kind_of
from reporter.paths import attachment_path
from reporter.resources import templates_folder

_BASE = "https://templates.invalid/"
#: Largest document bound in [bytes], and picture [pixels].
_LARGEST = 100_000_000
_MOST_PIXELS = 60_000_000
_VARIANT = "pdf/a-3u"
_SHELL = "<html><head><title></title></head><body></body></html>"


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
    """The report of a test as PDF bytes (variant PDF/A-3u, tagged).

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
    chosen = options or PdfOptions()
    phrases = load_phrases(chosen.templates)
    attached = _attached(outcome, enclosed or {}, phrases)
    documents = {
        item.file.value: document
        for item in outcome.record.attachments
        if (document := _document(chosen.folder, item.file.value)) is not None
    }
    view = build_view(
        outcome,
        issued,
        version,
        phrases=phrases,
        files=documents,
        attached=tuple(name for name, *_ in attached),
        minute_data=chosen.minute_data,
    )
    text = page_text(view, phrases, issued, chosen.templates)
    fetch = _fetcher(view, documents, chosen.templates)
    return _rendered(text, style_text(chosen.templates), fetch, _Extras(view, documents, attached, issued))


@dataclass(frozen=True, slots=True)
class _Extras:
    """What goes into the file beside the pages."""

    view: View
    documents: Mapping[str, Document]
    attached: tuple[tuple[str, bytes, str, str], ...]
    issued: datetime


def _attached(
    outcome: Outcome, enclosed: Mapping[str, bytes], phrases: Phrases
) -> tuple[tuple[str, bytes, str, str], ...]:
    """Name, content, relationship and description of each attached file."""
    files = [(one.name, one.content, "Source", phrases("files.source")) for one in outcome.record.inputs if one.content]
    files += [(name, content, "Data", phrases("files.data")) for name, content in enclosed.items()]
    return tuple(files)


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


def _fetcher(view: View, documents: Mapping[str, Document], overlay: Path | None) -> Callable[[str], Any]:
    """What the renderer may read: template folders, fonts, pictures bound in."""
    pictures = {one.picture: documents[one.file].content for one in view.documents if one.picture}

    def read(url: str) -> bytes:
        if not url.startswith(_BASE):
            raise OutputError("the templates ask for a file outside their folder", url[:120])
        name = url.removeprefix(_BASE)
        if name in pictures:
            return pictures[name]
        if name.startswith("fonts/"):
            return _font(name.removeprefix("fonts/"))
        return _template_file(name, overlay)

    return read


def _template_file(name: str, overlay: Path | None) -> bytes:
    for folder in (overlay, templates_folder()):
        if folder is not None:
            path = (folder / name).resolve()
            if path.is_relative_to(folder.resolve()) and path.is_file():
                return path.read_bytes()
    raise OutputError("the templates ask for a file that is not in their folder", name[:120])


def _font(name: str) -> bytes:
    import font_source_sans_pro

    path = Path(font_source_sans_pro.font_directory) / Path(name).name
    if not path.is_file():
        raise OutputError("the style sheet asks for a font that is not in the font package", name[:120])
    return path.read_bytes()


def _rendered(text: str, style: str, read: Callable[[str], bytes], extras: _Extras) -> bytes:
    from cssselect2 import ElementWrapper
    from weasyprint import CSS, HTML, Attachment
    from weasyprint.text.fonts import FontConfiguration
    from weasyprint.urls import FatalURLFetchingError, URLFetcher, URLFetcherResponse

    class TemplatesOnly(URLFetcher):  # type: ignore[misc]
        def fetch(self, url: str, headers: Any = None) -> Any:
            kind = mimetypes.guess_type(url)[0] or "application/octet-stream"
            return URLFetcherResponse(url, read(url), {"Content-Type": kind})

    class Report(HTML):  # type: ignore[misc]
        def __init__(self) -> None:
            super().__init__(string=text if root is None else _SHELL, base_url=_BASE, url_fetcher=fetcher)
            if root is not None:
                self.wrapper_element = ElementWrapper.from_html_root(root)
                self.etree_element = root

        def _ua_stylesheets(self, forms: bool = False) -> list[Any]:
            """The few rules the templates need; the usual ones style six pseudo-elements of every element."""
            return [CSS(string=elements_text(), base_url=_BASE, url_fetcher=fetcher)]

    root = well_formed(text)
    fetcher = TemplatesOnly(fail_on_errors=True)
    fonts = FontConfiguration()
    attachments = [
        Attachment(
            string=content,
            name=name,
            description=description,
            relationship=relationship,
            created=extras.issued,
            modified=extras.issued,
        )
        for name, content, relationship, description in extras.attached
    ]
    try:
        sheet = CSS(string=style, base_url=_BASE, url_fetcher=fetcher, font_config=fonts)
        document = Report().render(stylesheets=[sheet], font_config=fonts, pdf_variant=_VARIANT, pdf_tags=True)
        cells = settle(document, extras.view.places)

        def finish(document: Any, pdf: Any) -> None:
            add_links(document, pdf, cells)
            _bind(document, pdf, extras)
            if "AF" in pdf.catalog:  # the writer lists each attached file twice
                pdf.catalog["AF"][:] = dict.fromkeys(pdf.catalog["AF"])
            pack(pdf)

        return bytes(document.write_pdf(finisher=finish, pdf_variant=_VARIANT, pdf_tags=True, attachments=attachments))
    except FatalURLFetchingError as error:
        cause = error.__cause__
        raise OutputError(str(cause or error), getattr(cause, "place", "")) from None


def _bind(document: Any, pdf: Any, extras: _Extras) -> None:
    """Place the pages of the PDF documents that are bound in."""
    bound = [one for one in extras.view.documents if one.pages and not one.picture]
    if bound:
        from reporter.output.binding import bind

        contents = {one.anchor: (extras.documents[one.file].content, one.pages) for one in bound}
        bind(document, pdf, contents)
