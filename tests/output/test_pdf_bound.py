"""Documents bound into the report: pages, pictures, stamps, and files that cannot be bound."""

from __future__ import annotations

import hashlib
import io
from collections.abc import Callable
from pathlib import Path

import pikepdf
import pytest
from pypdf import PdfReader, PdfWriter
from pypdf.generic import ArrayObject, DecodedStreamObject, DictionaryObject, FloatObject, NameObject

from reporter.outcome import Outcome
from reporter.output.binding import page_count
from reporter.output.view.documents import kind_of, letter_of
from reporter.problems import Place
from reporter.record import Attachment, Given
from tests.output.conftest import SAMPLES
from tests.output.test_pdf import pages_of

_PNG = bytes.fromhex(
    "89504e470d0a1a0a0000000d49484452000000010000000108060000001f15c4890000000d49444154789c6360606060000000050001"
    "5ef3b0aa0000000049454e44ae426082"
)


def numbers(*values: float) -> ArrayObject:
    return ArrayObject([FloatObject(value) for value in values])


def document(words: str, *, turned: int = 0, stamp: str = "") -> bytes:
    """A one-page PDF with a line of text, turned, with a stamp that has an appearance of its own."""
    writer = PdfWriter()
    page = writer.add_blank_page(300, 200)
    font = DictionaryObject(
        {
            NameObject("/Type"): NameObject("/Font"),
            NameObject("/Subtype"): NameObject("/Type1"),
            NameObject("/BaseFont"): NameObject("/Helvetica"),
        }
    )
    fonts = DictionaryObject({NameObject("/F1"): writer._add_object(font)})
    resources = DictionaryObject({NameObject("/Font"): fonts})
    page[NameObject("/Resources")] = resources
    page[NameObject("/Contents")] = writer._add_object(drawn(f"BT /F1 12 Tf 20 150 Td ({words}) Tj ET"))
    if stamp:
        look = drawn(f"BT /F1 12 Tf 2 4 Td ({stamp}) Tj ET")
        look.update(
            {
                NameObject("/Type"): NameObject("/XObject"),
                NameObject("/Subtype"): NameObject("/Form"),
                NameObject("/BBox"): numbers(0, 0, 100, 20),
                NameObject("/Resources"): resources,
            }
        )
        note = DictionaryObject(
            {
                NameObject("/Type"): NameObject("/Annot"),
                NameObject("/Subtype"): NameObject("/Stamp"),
                NameObject("/Rect"): numbers(20, 20, 120, 40),
                NameObject("/AP"): DictionaryObject({NameObject("/N"): writer._add_object(look)}),
            }
        )
        page[NameObject("/Annots")] = ArrayObject([writer._add_object(note)])
    if turned:
        page.rotate(turned)
    return written(writer)


def drawn(operators: str) -> DecodedStreamObject:
    stream = DecodedStreamObject()
    stream.set_data(operators.encode())
    return stream


def written(writer: PdfWriter) -> bytes:
    stream = io.BytesIO()
    writer.write(stream)
    return stream.getvalue()


def bound(outcome: Outcome, changed: Callable[..., Outcome], *files: str) -> Outcome:
    rows = tuple(Attachment(Place(), Given(name), Given("certificate")) for name in files)
    return changed(outcome, attachments=rows)


def test_the_samples_documents_are_bound_in_paged_and_hashed(boiler: Outcome, boiler_pdf: bytes) -> None:
    pages = pages_of(boiler_pdf)
    text = " ".join("".join(pages).split())
    for attachment in boiler.record.attachments:
        content = (SAMPLES / attachment.file.value).read_bytes()
        assert hashlib.sha256(content).hexdigest() in text.replace(" ", "")
        first = PdfReader(io.BytesIO(content)).pages[0].extract_text().split("\n")[0]
        assert any(first in page and "page 1 of" in page for page in pages)


@pytest.fixture(scope="module")
def pages(
    thin: Outcome,
    changed: Callable[..., Outcome],
    render: Callable[..., bytes],
    tmp_path_factory: pytest.TempPathFactory,
) -> list[str]:
    """The last pages of a report with one document of each sort."""
    folder = tmp_path_factory.mktemp("documents")
    (folder / "upright.pdf").write_bytes(document("Upright words", stamp="Stamped by hand"))
    (folder / "turned.pdf").write_bytes(document("Turned words", turned=90))
    (folder / "picture.png").write_bytes(_PNG)
    (folder / "broken.pdf").write_bytes(b"%PDF-1.7 nothing more")
    (folder / "sheet.docx").write_bytes(b"PK text")
    secret = PdfWriter(clone_from=io.BytesIO(document("Secret words")))
    secret.encrypt("key")
    (folder / "secret.pdf").write_bytes(written(secret))
    names = ("upright.pdf", "turned.pdf", "picture.png", "broken.pdf", "sheet.docx", "secret.pdf", "../up.pdf")
    content = render(bound(thin, changed, *names), folder=folder)
    return pages_of(content)


def test_a_page_is_drawn_below_the_line_that_names_it_with_its_stamps(pages: list[str]) -> None:
    page = next(text for text in pages if "Upright words" in text)
    assert "Stamped by hand" in page
    assert "upright.pdf" in page
    assert "Page" in page


def test_a_turned_page_is_turned_back_for_reading(pages: list[str]) -> None:
    assert any("Turned words" in text and "turned.pdf" in text for text in pages)


def test_what_cannot_be_bound_is_listed_with_its_reason(pages: list[str]) -> None:
    text = " ".join(" ".join(pages).split())
    assert "Secret words" not in text
    assert text.count("could not be read as a PDF or a picture") == 2
    assert "no PDF and no picture" in text
    assert "not beside the field workbook" in text


def test_foreign_pages_are_pictures_of_the_report_marked_as_artifacts(boiler_pdf: bytes) -> None:
    with pikepdf.open(io.BytesIO(boiler_pdf)) as pdf:
        last = pdf.pages[-1]
        last.contents_coalesce()
        stream = last.Contents.read_bytes()
        assert stream.startswith(b"q")
        name = stream[stream.rindex(b"/Bound") :].split()[0].decode()
        form = last.Resources.XObject[name]
        assert form.Subtype == "/Form"
        assert b"/Artifact BMC" in stream
        # Tags, language and attachments of the report are still there.
        assert pdf.Root.MarkInfo.Marked
        assert len(pdf.Root.AF) == 3


@pytest.mark.parametrize(("turn", "corner"), [(0, (0, 0)), (90, (0, 300)), (180, (300, 200)), (270, (200, 0))])
def test_a_turn_brings_the_box_to_the_origin(turn: int, corner: tuple[float, float]) -> None:
    """A clockwise turn as /Rotate asks (ISO 32000): the box of 300 by 200 lands with its corner at the origin."""
    from reporter.output.binding import _turned

    a, b, c, d, e, f = _turned(turn, 10, 20, 300, 200)
    points = [(10, 20), (310, 20), (10, 220), (310, 220)]
    placed = [(a * x + c * y + e, b * x + d * y + f) for x, y in points]
    assert min(x for x, _ in placed) == pytest.approx(0)
    assert min(y for _, y in placed) == pytest.approx(0)
    assert placed[0] == pytest.approx(corner)


def test_kinds_are_told_by_content_and_letters_go_on() -> None:
    assert [kind_of(b"%PDF-1.4"), kind_of(_PNG), kind_of(b"\xff\xd8\xff\xe0"), kind_of(b"PK")] == [
        "pdf",
        "png",
        "jpg",
        "",
    ]
    assert [letter_of(at) for at in (0, 25, 26, 27)] == ["A", "Z", "AA", "AB"]


def test_pages_of_a_document_that_cannot_be_read_are_none(tmp_path: Path) -> None:
    assert page_count(document("words")) == 1
    assert page_count(b"%PDF-1.7 nothing more") == 0
