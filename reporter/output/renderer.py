"""The renderer: pages laid out and painted as a PDF of the variant PDF/A-3u, tagged.

It takes plain data, so that it can stand in a process of its own (`renderer_process.py`).  Nothing is fetched: it
reads the template folders, the font package and the pictures given, and refuses every other address.
"""

from __future__ import annotations

import mimetypes
from collections.abc import Callable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path
from typing import Any, Protocol

from reporter.errors import OutputError
from reporter.output.linking import CellLinks, add_links, settle
from reporter.output.packing import pack
from reporter.output.pages import elements_text, load_templates, page_text, style_text, well_formed
from reporter.output.phrases import Phrases
from reporter.output.view.model import View
from reporter.resources import templates_folder

_BASE = "https://templates.invalid/"
_VARIANT = "pdf/a-3u"
_SHELL = "<html><head><title></title></head><body></body></html>"
#: One line in every face of the style sheet: what is slow the first time is then done.
_FIRST = "<html><head><title>-</title></head><body><p>0 <b>0</b></p></body></html>"


@dataclass(frozen=True, slots=True)
class Enclosure:
    """A file attached to the PDF, with its relationship (PDF/A-3) and description."""

    name: str
    content: bytes
    relationship: str
    description: str


@dataclass(frozen=True, slots=True)
class Pages:
    """All that is laid out: the view and the fixed phrases, pictures by name, and the PDF documents bound in
    (content and number of pages) by anchor."""

    view: View
    phrases: Phrases
    issued: datetime
    pictures: Mapping[str, bytes] = field(default_factory=dict)
    bound: Mapping[str, tuple[bytes, int]] = field(default_factory=dict)


class PageRenderer(Protocol):
    """Lays pages out, then gives the PDF with the files enclosed; between the two, others can work."""

    def lay_out(self, pages: Pages, overlay: Path | None) -> None:
        """Begin with the pages; `overlay` is a firm's template folder."""

    def finish(self, enclosed: Sequence[Enclosure]) -> bytes:
        """The PDF (`OutputError` where a template, phrase, picture or document cannot be used)."""


class Renderer:
    """The renderer in this process.  Style sheets and fonts are read once and serve every document."""

    def __init__(self) -> None:
        self._styles: dict[Path | None, _Style] = {}
        self._pages: Pages | None = None
        self._document: Any = None
        self._links: CellLinks = []

    def warm_up(self) -> None:
        """Load the renderer, the fonts and the templates."""
        load_templates()
        self._laid_out(_FIRST, {}, None).write_pdf(pdf_variant=_VARIANT, pdf_tags=True)

    def lay_out(self, pages: Pages, overlay: Path | None) -> None:
        """Lay the pages out."""
        text = page_text(pages.view, pages.phrases, pages.issued, overlay)
        self._document = self._laid_out(text, pages.pictures, overlay)
        self._links = settle(self._document, pages.view.places)
        self._pages = pages

    def _laid_out(self, text: str, pictures: Mapping[str, bytes], overlay: Path | None) -> Any:
        with _said_plainly():
            style = self._styles.get(overlay)
            if style is None:
                style = self._styles[overlay] = _Style(overlay)
            return style.lay_out(text, pictures)

    def finish(self, enclosed: Sequence[Enclosure]) -> bytes:
        """Paint the pages."""
        from weasyprint import Attachment

        assert self._pages is not None
        pages, document, links = self._pages, self._document, self._links
        self._pages = self._document = None
        attachments = [
            Attachment(
                string=one.content,
                name=one.name,
                description=one.description,
                relationship=one.relationship,
                created=pages.issued,
                modified=pages.issued,
            )
            for one in enclosed
        ]

        def last(document: Any, pdf: Any) -> None:
            add_links(document, pdf, links)
            if pages.bound:
                from reporter.output.binding import bind

                bind(document, pdf, pages.bound)
            if "AF" in pdf.catalog:  # the writer lists each attached file twice
                pdf.catalog["AF"][:] = dict.fromkeys(pdf.catalog["AF"])
            pack(pdf)

        with _said_plainly():
            made = document.write_pdf(finisher=last, pdf_variant=_VARIANT, pdf_tags=True, attachments=attachments)
        return bytes(made)


def _reader(pictures: Mapping[str, bytes], overlay: Path | None) -> Callable[[str], bytes]:
    """What the renderer may read: template folders, fonts, pictures bound in."""

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


@contextmanager
def _said_plainly() -> Iterator[None]:
    """What the renderer says of an address it was refused, as the error that refused it."""
    from weasyprint.urls import FatalURLFetchingError

    try:
        yield
    except FatalURLFetchingError as error:
        cause = error.__cause__
        raise OutputError(str(cause or error), getattr(cause, "place", "")) from None


def _fetcher(pictures: Mapping[str, bytes], overlay: Path | None) -> Any:
    from weasyprint.urls import URLFetcher, URLFetcherResponse

    read = _reader(pictures, overlay)

    class TemplatesOnly(URLFetcher):  # type: ignore[misc]
        def fetch(self, url: str, headers: Any = None) -> Any:
            kind = mimetypes.guess_type(url)[0] or "application/octet-stream"
            return URLFetcherResponse(url, read(url), {"Content-Type": kind})

    return TemplatesOnly(fail_on_errors=True)


class _Style:
    """The style sheets of a template folder and the fonts they name, read once."""

    def __init__(self, overlay: Path | None) -> None:
        from weasyprint import CSS
        from weasyprint.text.fonts import FontConfiguration

        fetcher = _fetcher({}, overlay)
        self._overlay = overlay
        self._fonts = FontConfiguration()
        self._sheet = CSS(string=style_text(overlay), base_url=_BASE, url_fetcher=fetcher, font_config=self._fonts)
        self._elements = CSS(string=elements_text(), base_url=_BASE, url_fetcher=fetcher)

    def lay_out(self, text: str, pictures: Mapping[str, bytes]) -> Any:
        """The laid-out pages of an HTML text."""
        from cssselect2 import ElementWrapper
        from weasyprint import HTML

        root, elements = well_formed(text), self._elements
        fetcher = _fetcher(pictures, self._overlay)

        class Report(HTML):  # type: ignore[misc]
            def __init__(self) -> None:
                super().__init__(string=text if root is None else _SHELL, base_url=_BASE, url_fetcher=fetcher)
                if root is not None:
                    self.wrapper_element = ElementWrapper.from_html_root(root)
                    self.etree_element = root

            def _ua_stylesheets(self, forms: bool = False) -> list[Any]:
                """The few rules the templates need; the usual ones style six pseudo-elements of every element."""
                return [elements]

        return Report().render(stylesheets=[self._sheet], font_config=self._fonts, pdf_variant=_VARIANT, pdf_tags=True)
